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
    assert!(list.iter().all(|f| f.code == "file.missing_key"));
}

#[test]
fn text_that_is_not_toml_is_a_fault_with_a_line() {
    let list = faults(&bay_with("[radio.antenna]", "[radio.antenna"));
    assert_eq!((list.len(), list[0].code.as_str()), (1, "file.syntax"));
    assert_eq!(list[0].line, Some(line_of(BAY, "[radio.antenna]")));
    assert!(list[0].message.contains("what follows was not read"), "{}", list[0].message);
    let list = faults(&bay_with("[radio.antenna]", "[beams.raman_a]"));
    assert_eq!((list.len(), list[0].code.as_str()), (1, "file.duplicate_key"));
    let list = faults(&bay_with("beams = [\"lattice\"]", "beams = [\"lattice\""));
    assert_eq!((list.len(), list[0].code.as_str()), (1, "file.syntax"));
    let big = format!("{BAY}#{}", "x".repeat(files::MOST_BYTES));
    assert_eq!(faults(&big)[0].code, "file.too_large");
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
