//! Everything that can be wrong with a file, with its place and what to do.

use fluxloom_core::error::Kind as Family;
use fluxloom_plan::apparatus::Apparatus;
use fluxloom_plan::files;
use serde::Deserialize;

use crate::{BAY, SMALL, bay_with, faults};

/// A line of Tern Bay, what it becomes, and the one fault that follows.
#[derive(Deserialize)]
struct Single {
    line: String,
    becomes: String,
    code: String,
    path: String,
    message_holds: String,
}

fn line_of(text: &str, part: &str) -> usize {
    1 + text.lines().position(|line| line.contains(part)).unwrap()
}

#[test]
fn each_fault_stands_alone_and_says_what_to_do() {
    let rows: Vec<Single> = serde_json::from_str(include_str!("single_faults.json")).unwrap();
    for Single { line, becomes: new, code, path, message_holds } in &rows {
        let text = bay_with(line, new);
        let list = faults(&text);
        assert_eq!(list.len(), 1, "{new:?} gives {list:#?}");
        let fault = &list[0];
        assert_eq!((&fault.code, &fault.path), (code, path), "{new:?}");
        assert!(fault.message.contains(message_holds.as_str()), "{new:?}: {}", fault.message);
        assert_eq!(fault.file.as_deref(), Some("bay.toml"));
        assert!(fault.line.is_some(), "{new:?} has no line");
    }
}

#[test]
fn lines_are_those_of_the_file() {
    for (old, new) in [
        ("power_mw = 0.44 ", "power_mw = -1 "),
        ("atom = \"40K\"", "atom = \"40L\""),
        ("waist_um = 120.0 ", "waste_um = 120.0 "),
        ("[radio.antenna]", "[radoi.antenna]"),
        ("wavelength_nm = 769.0", "wavelength_nm = 769,0"),
    ] {
        let text = bay_with(old, new);
        assert_eq!(faults(&text)[0].line, Some(line_of(&text, new)), "{new}");
    }
    // A missing key is reported at its table.
    let text = bay_with("atom = \"40K\"", "");
    assert_eq!(faults(&text)[0].line, Some(line_of(&text, "[cloud]")));
    // In a list over several lines each end has its own.
    let text = bay_with("range_nm = [766.0, 775.0]", "range_nm = [\n766.0,\n775e-9]");
    assert_eq!(faults(&text)[0].line, Some(line_of(&text, "775e-9")));
}

#[test]
fn all_faults_come_at_once_in_the_order_of_lines() {
    let mut text = BAY.to_owned();
    for (old, new) in [
        ("name = ", "nmae = "),
        ("temperature_nk = 60.0", "temperature_nk = \"60\""),
        ("wavelength_nm = 1064.0", "wavelength_nm = 1064e-9"),
        ("linewidth_hz = 1.0e5", "linewidth_hz = 1,0"),
        ("max_power_mw = 800.0", "max_power_mw = 8.0"),
        ("beams = [\"lattice\"]", "beams = [\"latice\"]"),
        ("mains_locked = true", "mains_locked = 1"),
        ("bits = 16\nfull_scale_mw", "bits = 65\nfull_scale_mw"),
    ] {
        assert_eq!(text.matches(old).count(), 1, "{old}");
        text = text.replace(old, new);
    }
    let error = Apparatus::from_toml_named(&text, "bay.toml").unwrap_err();
    let list = error.faults();
    let codes: Vec<(&str, &str)> =
        list.iter().map(|f| (f.code.as_str(), f.path.as_str())).collect();
    assert_eq!(
        codes,
        [
            ("file.unknown_key", "nmae"),
            ("file.wrong_type", "cloud.temperature_nk"),
            ("light.wavelength_out_of_range", "lasers.lattice.wavelength_nm"),
            ("file.syntax", "lasers.raman.linewidth_hz"),
            ("file.above_maximum", "beams.lattice.power_mw"),
            ("file.unknown_name", "lattice.beams"),
            ("file.wrong_type", "field.mains_locked"),
            ("file.value_out_of_range", "channels.lattice_power.bits"),
        ]
    );
    assert!(list.windows(2).all(|pair| pair[0].line < pair[1].line));
    assert_eq!(list[0].did_you_mean.as_deref(), Some("name"));
    assert_eq!(list[5].did_you_mean.as_deref(), Some("lattice"));
    assert_eq!(error.kind(), Family::Input);
    let told = error.to_string();
    assert!(told.starts_with("8 faults:"), "{told}");
    assert!(told.contains("bay.toml:"), "{told}");
}

#[test]
fn planes_must_hold_the_lattice_axis() {
    let text = bay_with("axis = [1.0, 0.0, 0.0]", "axis = [0.0, 0.0, 1.0]");
    let list = faults(&text);
    let paths: Vec<&str> = list.iter().map(|f| f.path.as_str()).collect();
    assert_eq!(paths, ["lattice.plane_normal", "raman.plane_normal"]);
    assert!(list.iter().all(|f| f.code == "file.not_perpendicular"));
}

#[test]
fn a_value_where_a_table_belongs_is_one_fault() {
    let list = faults(&SMALL.replace("[cloud]\natom = \"40K\"", "cloud = 3"));
    assert_eq!(list.len(), 1);
    assert_eq!((list[0].code.as_str(), list[0].line), ("file.not_a_table", Some(3)));
}

#[test]
fn an_empty_file_lacks_the_essentials() {
    let list = faults("");
    let paths: Vec<&str> = list.iter().map(|f| f.path.as_str()).collect();
    assert_eq!(paths, ["format", "version", "cloud.atom", "lattice.beams", "lattice.depth_er"]);
    let codes: Vec<&str> = list.iter().map(|f| f.code.as_str()).collect();
    let missing = "file.missing_key";
    assert_eq!(codes, ["file.format", "file.version", missing, missing, missing]);
}

#[test]
fn text_that_is_not_toml_is_a_fault_with_a_line() {
    let list = faults(&bay_with("[radio.antenna]", "[radio.antenna"));
    assert_eq!((list.len(), list[0].code.as_str()), (1, "file.syntax"));
    assert_eq!(list[0].line, Some(line_of(BAY, "[radio.antenna]")));
    let list = faults(&bay_with("[radio.antenna]", "[beams.raman_a]"));
    assert_eq!(list[0].code, "file.duplicate_key");
    let first = format!("first on line {}", line_of(BAY, "[beams.raman_a]"));
    assert!(list[0].message.contains(&first), "{}", list[0].message);
    let list = faults(&bay_with("beams = [\"lattice\"]", "beams = [\"lattice\""));
    assert_eq!((list.len(), list[0].code.as_str()), (1, "file.syntax"));
    let big = format!("{BAY}#{}", "x".repeat(files::MOST_BYTES));
    assert_eq!(faults(&big)[0].code, "file.too_large");
}

/// The faults of a file with seven different ones.
const SEVEN: [(&str, &str, &str, &str); 7] = [
    ("name = ", "nmae = ", "file.unknown_key", "nmae"),
    ("temperature_nk = 60.0", "temperature_nk = \"60\"", "file.wrong_type", "cloud.temperature_nk"),
    ("linewidth_hz = 1.0e5", "linewidth_hz = 1,0", "file.syntax", "lasers.raman.linewidth_hz"),
    ("max_power_mw = 800.0", "max_power_mw = 8", "file.above_maximum", "beams.lattice.power_mw"),
    ("beams = [\"lattice\"]", "beams = [\"latice\"]", "file.unknown_name", "lattice.beams"),
    ("mains_locked = true", "mains_locked = 1", "file.wrong_type", "field.mains_locked"),
    (
        "centre_hz = 80.0e6",
        "centre_mhz = 80.0",
        "file.unknown_key",
        "modulators.raman_a.centre_mhz",
    ),
];

#[test]
fn no_line_hides_the_faults_of_others() {
    let mut seven = BAY.to_owned();
    for (old, new, ..) in SEVEN {
        assert!(seven.contains(old), "{old}");
        seven = seven.replacen(old, new, 1);
    }
    let expected: Vec<(&str, &str)> = SEVEN.iter().map(|(.., code, path)| (*code, *path)).collect();
    for (line, code, path) in [
        ("bits 16", "file.syntax", "channels.bias.bits"),
        ("[cloud]\natom = \"41K\"", "file.duplicate_key", "cloud"),
        ("[[cloud]]", "file.duplicate_key", "cloud"),
        ("bits = [1, 2", "file.syntax", "channels.bias.bits"),
        ("bits = { value = 1", "file.syntax", "channels.bias.bits"),
        ("bits = \"\"\"x", "file.syntax", "channels.bias.bits"),
        ("]", "file.syntax", ""),
        ("[timing", "file.syntax", "timing"),
    ] {
        let text = seven.replace("bits = 16\nfull_scale_gauss", "full_scale_gauss");
        let list = faults(&text.replace("\n[timing]", &format!("{line}\n[timing]")));
        let mut found: Vec<(&str, &str)> =
            list.iter().map(|f| (f.code.as_str(), f.path.as_str())).collect();
        let index = found.iter().position(|pair| *pair == (code, path));
        found.remove(index.unwrap_or_else(|| panic!("{line:?}: {found:?}")));
        // A second header of a table that was broken open is told as well.
        found.retain(|pair| *pair != ("file.duplicate_key", "timing"));
        assert_eq!(found, expected, "{line:?}");
    }
}

#[test]
fn of_half_a_file_nothing_is_missing() {
    // Fifty broken lines end the reading; what stands above is judged.
    let mut text = "nmae = \"x\"\n[beams.a]\nlaser = \"raman\"\npower_mw = -1\n".to_owned();
    text.push_str(&"x = 1 2\n".repeat(60));
    let list = faults(&text);
    let codes: Vec<&str> =
        list.iter().map(|f| f.code.as_str()).filter(|code| *code != "file.syntax").collect();
    assert_eq!(codes, ["file.unknown_key", "beam.power_out_of_range"]);
    assert!(list.iter().any(|f| f.message.contains("what follows was not read")));
}

#[test]
fn a_name_in_a_circle_is_reported_once_from_anywhere() {
    let circles = |tail: &str, main: &str| {
        let list = faults(&(bay_with("[synthesisers.main]", main) + tail));
        assert!(list.iter().all(|f| f.code == "file.circular_reference"), "{list:?}");
        list.into_iter().map(|f| (f.path, f.message)).collect::<Vec<_>>()
    };
    let tail = "\n[synthesisers.a]\nreference = \"b\"\n[synthesisers.b]\nreference = ";
    // a -> b -> b
    let found = circles(&format!("{tail}\"b\"\n"), "[synthesisers.main]");
    assert_eq!((found.len(), found[0].0.as_str()), (1, "synthesisers.b.reference"));
    // microwave -> main -> a -> b -> main
    let found = circles(&format!("{tail}\"main\"\n"), "[synthesisers.main]\nreference = \"a\"");
    assert_eq!((found.len(), found[0].0.as_str()), (1, "synthesisers.main.reference"));
    assert!(found[0].1.contains("main -> a -> b -> main"), "{}", found[0].1);
    // Two circles are two.
    let found = circles(&format!("{tail}\"b\"\n"), "[synthesisers.main]\nreference = \"main\"");
    assert_eq!(found.len(), 2);
}

#[test]
fn two_beams_need_their_angle() {
    let text = bay_with("beams = [\"lattice\"]", "beams = [\"lattice\", \"second\"]")
        + "\n[beams.second]\nlaser = \"lattice\"\n";
    assert!(Apparatus::from_toml(&text).is_ok());
    let without = text.replace("\nangle_deg = 180.0", "");
    let list = faults(&without);
    assert_eq!(list.len(), 1, "{list:?}");
    assert_eq!((&*list[0].code, &*list[0].path), ("file.missing_key", "lattice.angle_deg"));
    assert_eq!(list[0].line, Some(line_of(&without, "[lattice]")));
    let misspelt = text.replace("\nangle_deg = 180.0", "\nangel_deg = 90");
    assert_eq!(faults(&misspelt).len(), 1);
}

#[test]
fn a_value_where_names_are_defined_is_one_fault() {
    let (before, rest) = BAY.split_once("[lasers.lattice]").unwrap();
    let (_, after) = rest.split_once("[beams.lattice]").unwrap();
    let text =
        format!("{before}[beams.lattice]{after}").replace("\nname = ", "\nlasers = 5\nname = ");
    let list = faults(&text);
    assert_eq!((list.len(), list[0].code.as_str()), (1, "file.not_a_table"));
    assert!(list[0].message.contains("is a table, but the number 5 was found"));
    let list = faults(&BAY.replacen("laser = \"raman\"", "laser = [\"a\", \"b\"]", 1));
    assert_eq!((list.len(), list[0].code.as_str()), (1, "file.wrong_type"));
}

#[test]
fn isotopes_in_other_orders_are_suggested() {
    for name in ["Rb87", "rb-87", "87rb"] {
        let list = faults(&bay_with("\"40K\"", &format!("\"{name}\"")));
        let atom = list.iter().find(|fault| fault.code == "atom.unknown").unwrap();
        assert_eq!(atom.did_you_mean.as_deref(), Some("87Rb"), "{name}");
    }
}

#[test]
fn an_order_of_zero_shifts_nothing() {
    let list = faults(&BAY.replacen("order = 1", "order = 0", 1));
    assert_eq!((list.len(), list[0].code.as_str()), (1, "file.value_out_of_range"));
    assert!(list[0].message.contains("not 0"), "{}", list[0].message);
    assert!(Apparatus::from_toml(&BAY.replacen("order = 1", "order = -1", 1)).is_ok());
    assert_eq!(faults(&BAY.replacen("order = 1", "order = 1.5", 1))[0].code, "file.not_whole");
}

#[test]
fn messages_stay_short() {
    let long = "x".repeat(800_000);
    for text in [
        format!("{BAY}{long} = 1\n"),
        format!("{BAY}[beams.{long}]\npower = 1\n"),
        format!("{BAY}[beams.{long}]\nlaser = \"ramen\"\n"),
        bay_with("\"40K\"", &format!("\"{long}\"")),
        bay_with("drives = \"field.magnitude_gauss\"", &format!("drives = \"{long}\"")),
    ] {
        for fault in faults(&text) {
            assert!(fault.to_string().len() < 1000, "{}", fault.to_string().len());
        }
    }
}

#[test]
fn thousands_of_names_take_no_time() {
    // With each name compared to each other one this would take minutes.
    let mut text = BAY.to_owned();
    for index in 0..15_000 {
        text.push_str(&format!("[lasers.name{index}]\nwavelength_nm = 800\n"));
    }
    for index in 0..3000 {
        text.push_str(&format!("[beams.b{index}]\nlaser = \"nmae{index}\"\n"));
    }
    let list = faults(&text);
    assert_eq!(list.len(), 1001);
    assert!(list.iter().all(|fault| fault.message.len() < 2000));
}

#[test]
fn a_file_that_is_no_apparatus_does_not_flood() {
    let mut text = String::new();
    for line in 0..5000 {
        text.push_str(&format!("key{line} = 1\n"));
    }
    let list = faults(&text);
    assert_eq!(list.len(), 1001);
    assert_eq!(list[1000].code, "file.too_many_faults");
}
