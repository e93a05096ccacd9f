//! Changing settings: comments stay, and depth and power move together.

use fluxloom_plan::apparatus::{Apparatus, Origin};
use serde_json::json;

use crate::{SMALL, bay, bay_with, change};

#[test]
fn a_change_keeps_comments_and_order() {
    let ap = change(
        &bay(),
        &[
            ("lasers.raman.wavelength_nm", json!(770.5)),
            ("field.noise_rms_gauss", json!(2e-6)),
            ("lattice.axis", json!([2, 0, 0])),
            ("detection.method", json!("fluorescence")),
        ],
    )
    .unwrap();
    let text = bay_with("wavelength_nm = 769.0 ", "wavelength_nm = 770.5 ")
        .replace("noise_rms_gauss = 20e-6 ", "noise_rms_gauss = 2e-6 ")
        .replace("axis = [1.0, 0.0, 0.0]", "axis = [2, 0, 0]")
        .replace("\"absorption\"", "\"fluorescence\"");
    assert_eq!(ap.to_toml(), text);
    assert_eq!(Apparatus::from_toml(&text).unwrap(), ap);
    assert!(ap.changes().is_empty());
}

#[test]
fn keys_that_were_not_stated_can_be_set() {
    let ap = Apparatus::from_toml(SMALL).unwrap();
    let ap = change(
        &ap,
        &[
            ("trap.along_hz", json!(30.0)),
            ("lasers.lattice.linewidth_hz", json!(5000.0)),
            ("lattice.depth_er.standard_error", json!(0.1)),
            ("name", json!("small")),
        ],
    )
    .unwrap();
    assert_eq!(ap.number("trap.along_hz").unwrap(), 30.0);
    assert_eq!(ap.measured("lattice.depth_er").unwrap().standard_error, Some(0.1));
    assert!(ap.to_toml().contains("wavelength_nm = 1064\nlinewidth_hz = 5000.0\n"));
    assert!(ap.to_toml().contains("depth_er = { value = 6, standard_error = 0.1 }"));
    assert!(ap.to_toml().contains("\n[trap]\nalong_hz = 30.0\n"), "{}", ap.to_toml());
    assert_eq!(Apparatus::from_toml(&ap.to_toml()).unwrap(), ap);
    // And keys inside tables that are written on one line.
    let inline = SMALL.replace("[cloud]\natom = \"40K\"", "cloud = { atom = \"40K\" }");
    let ap = change(&Apparatus::from_toml(&inline).unwrap(), &[("cloud.count", json!(7))]).unwrap();
    assert!(ap.to_toml().contains("cloud = { atom = \"40K\", count = 7 }"), "{}", ap.to_toml());
}

#[test]
fn whole_tables_can_be_set() {
    let beam = json!({"laser": "raman", "power_mw": 3, "waist_um": [100, 50]});
    let ap = change(&bay(), &[("beams.raman_c", beam)]).unwrap();
    assert_eq!(ap.names("beams"), ["lattice", "raman_a", "raman_b", "raman_c"]);
    assert_eq!(ap.one_or_two("beams.raman_c.waist_um").unwrap(), [100.0, 50.0]);
    assert_eq!(Apparatus::from_toml(&ap.to_toml()).unwrap(), ap);
    let pairs = json!({"9/2,-9/2 9/2,-5/2": 168});
    let ap = change(&ap, &[("interaction.scattering_length_bohr", pairs)]).unwrap();
    assert_eq!(
        ap.number("interaction.scattering_length_bohr.\"9/2,-9/2 9/2,-5/2\"").unwrap(),
        168.0
    );
    // A leaf in a table that does not exist is a slip rather than a new table.
    let fault =
        change(&ap, &[("beams.raman_x.power_mw", json!(1))]).unwrap_err().faults().remove(0);
    assert_eq!(fault.code, "apparatus.unknown_path");
    assert!(fault.did_you_mean.is_some_and(|path| path.starts_with("beams.raman_")));
}

#[test]
fn a_plain_number_drops_the_old_uncertainty() {
    let ap = change(&bay(), &[("raman.angle_deg", json!(32.0))]).unwrap();
    let angle = ap.measured("raman.angle_deg").unwrap();
    assert_eq!((angle.value, angle.standard_error), (32.0, None));
    assert_eq!(
        ap.to_toml(),
        bay_with("angle_deg = { value = 31.451, standard_error = 0.006 }", "angle_deg = 32.0")
    );
    let table =
        json!({"value": 32.0, "standard_error": 0.01, "data": "a.csv", "measured": "2026-12-01"});
    let ap = change(&bay(), &[("raman.angle_deg", table)]).unwrap();
    assert_eq!(ap.measured("raman.angle_deg").unwrap().measured.as_deref(), Some("2026-12-01"));
    assert!(ap.to_toml().contains("measured = 2026-12-01"));
    // A measured table with a header of its own gives way as well.
    let text = SMALL.replace("depth_er = 6\n", "") + "# how deep\n[lattice.depth_er]\nvalue = 6\n";
    let ap =
        change(&Apparatus::from_toml(&text).unwrap(), &[("lattice.depth_er", json!(7))]).unwrap();
    assert_eq!(ap.number("lattice.depth_er").unwrap(), 7.0);
    assert!(ap.to_toml().contains("# how deep\ndepth_er = 7"), "{}", ap.to_toml());
}

#[test]
fn all_faults_of_a_change_come_at_once() {
    let list = change(
        &bay(),
        &[
            ("lasers.ramen.wavelength_nm", json!(770.0)),
            ("trap.along_hz", json!(null)),
            ("cloud.count", json!(true)),
            ("field.magnitude_gauss", json!(5000.0)),
            ("raman", json!({"beams": ["raman_a", "raman_b"]})),
            ("raman.tilt_deg", json!(0.1)),
            ("cloud.start", json!("1,0")),
        ],
    )
    .unwrap_err()
    .faults();
    let mut codes: Vec<(&str, &str)> =
        list.iter().map(|f| (f.code.as_str(), f.path.as_str())).collect();
    codes.sort_unstable();
    assert_eq!(
        codes,
        [
            ("apparatus.overlapping_changes", "raman.tilt_deg"),
            ("apparatus.unknown_path", "lasers.ramen.wavelength_nm"),
            ("field.magnitude_out_of_range", "field.magnitude_gauss"),
            ("file.bad_state", "cloud.start"),
            ("file.missing_key", "raman.angle_deg"),
            ("file.null", "trap.along_hz"),
            ("file.wrong_type", "cloud.count"),
        ]
    );
    assert!(list.iter().all(|f| f.line.is_none() && f.file.is_none()));
    let twice = [("cloud.count", json!(1)), ("cloud.count", json!(2))];
    assert_eq!(change(&bay(), &twice).unwrap_err().code(), "apparatus.overlapping_changes");
}

#[test]
fn power_follows_depth() {
    let ap = change(&bay(), &[("lattice.depth_er", json!(9))]).unwrap();
    assert_eq!(ap.number("beams.lattice.power_mw").unwrap(), 81.9);
    assert_eq!(
        ap.changes(),
        ["lattice.depth_er 6 -> 9: beams.lattice.power_mw moves in proportion, 54.6 -> 81.9"]
    );
    // The next change starts afresh.
    assert!(change(&ap, &[("trap.along_hz", json!(1))]).unwrap().changes().is_empty());
    // Both given, or the same depth again: nothing moves.
    let both = [("lattice.depth_er", json!(9)), ("beams.lattice.power_mw", json!(80))];
    let ap = change(&bay(), &both).unwrap();
    assert_eq!(ap.number("beams.lattice.power_mw").unwrap(), 80.0);
    assert!(ap.changes().is_empty());
    let ap = change(&bay(), &[("lattice.depth_er", json!(6))]).unwrap();
    assert_eq!(ap.number("beams.lattice.power_mw").unwrap(), 54.6);
    // Nothing stated, nothing moved.
    let ap =
        change(&Apparatus::from_toml(SMALL).unwrap(), &[("lattice.depth_er", json!(9))]).unwrap();
    assert_eq!(ap.origin("beams.lattice.power_mw").unwrap(), Origin::NotStated);
}

#[test]
fn depth_follows_power() {
    let ap = change(&bay(), &[("beams.lattice.power_mw", json!(109.2))]).unwrap();
    let depth = ap.measured("lattice.depth_er").unwrap();
    assert_eq!((depth.value, depth.standard_error), (12.0, Some(0.12)));
    assert_eq!(
        ap.changes(),
        ["beams.lattice.power_mw 54.6 -> 109.2: lattice.depth_er moves in proportion, 6 -> 12"]
    );
    assert!(ap.to_toml().contains("# at beams.lattice.power_mw"));
    // A new uncertainty of the depth is not a new depth.
    let changes =
        [("beams.lattice.power_mw", json!(27.3)), ("lattice.depth_er.standard_error", json!(0.02))];
    let ap = change(&bay(), &changes).unwrap();
    assert_eq!(ap.number("lattice.depth_er").unwrap(), 3.0);
    // Power of other beams has nothing to do with it.
    assert!(change(&bay(), &[("beams.raman_a.power_mw", json!(1))]).unwrap().changes().is_empty());
}

#[test]
fn two_crossing_beams_go_as_the_root() {
    let text = SMALL
        .replace("[beams.lattice]\n", "[beams.lattice]\npower_mw = 100\n")
        .replace(
            "[lattice]\n",
            "[beams.second]\nlaser = \"lattice\"\npower_mw = 25\n[lattice]\nangle_deg = 90\n",
        )
        .replace("[\"lattice\"]", "[\"lattice\", \"second\"]");
    let ap = Apparatus::from_toml(&text).unwrap();
    let moved = change(&ap, &[("beams.second.power_mw", json!(100))]).unwrap();
    assert_eq!(moved.number("lattice.depth_er").unwrap(), 12.0);
    assert!(moved.changes()[0].contains("root of the product"), "{:?}", moved.changes());
    let moved = change(&ap, &[("lattice.depth_er", json!(3))]).unwrap();
    assert_eq!(moved.number("beams.lattice.power_mw").unwrap(), 50.0);
    assert_eq!(moved.number("beams.second.power_mw").unwrap(), 12.5);
    assert_eq!(moved.changes().len(), 2);
}

/// Two beams that cross.
fn crossing() -> Apparatus {
    let text = SMALL
        .replace("[beams.lattice]\n", "[beams.lattice]\npower_mw = 100\n")
        .replace(
            "[lattice]\n",
            "[beams.second]\nlaser = \"lattice\"\npower_mw = 25\n[lattice]\nangle_deg = 90\n",
        )
        .replace("[\"lattice\"]", "[\"lattice\", \"second\"]");
    Apparatus::from_toml(&text).unwrap()
}

#[test]
fn the_order_of_two_beams_makes_no_difference() {
    let swapped = ("lattice.beams", json!(["second", "lattice"]));
    let ap = change(&crossing(), &[swapped.clone(), ("lattice.depth_er", json!(3))]).unwrap();
    assert_eq!(ap.number("beams.lattice.power_mw").unwrap(), 50.0);
    assert_eq!(ap.changes().len(), 2);
    let ap =
        change(&crossing(), &[swapped.clone(), ("beams.second.power_mw", json!(100))]).unwrap();
    assert_eq!(ap.number("lattice.depth_er").unwrap(), 12.0);
    assert!(change(&crossing(), &[swapped]).unwrap().changes().is_empty());
}

#[test]
fn with_other_beams_nothing_moves_and_that_is_said() {
    let one = ("lattice.beams", json!(["second"]));
    let retro = ("lattice.angle_deg", json!(180));
    let told = |more: &[(&str, serde_json::Value)]| {
        let changes = [&[one.clone(), retro.clone()], more].concat();
        let ap = change(&crossing(), &changes).unwrap();
        assert!(ap.changes().len() < 2);
        ap.changes().first().cloned().unwrap_or_default()
    };
    assert!(told(&[]).contains("lattice.depth_er = 6 stays"));
    assert!(
        told(&[("lattice.depth_er", json!(9))]).contains("beams.second.power_mw = 25 stays"),
        "{}",
        told(&[("lattice.depth_er", json!(9))])
    );
    assert!(told(&[("beams.second.power_mw", json!(9))]).contains("lattice.depth_er = 6 stays"));
    let both = [("lattice.depth_er", json!(9)), ("beams.second.power_mw", json!(9))];
    assert_eq!(told(&both), "");
}

#[test]
fn a_whole_table_keeps_what_stays_the_same() {
    // The table as it is, as a program has it: nothing is written differently.
    let mut lattice = bay().get("lasers.lattice").unwrap();
    let ap = change(&bay(), &[("lasers.lattice", lattice.clone())]).unwrap();
    assert_eq!(ap.to_toml(), crate::BAY);
    assert_eq!(
        change(&bay(), &[("lasers.lattice.linewidth_hz", json!(5000))]).unwrap().to_toml(),
        crate::BAY
    );
    lattice["wavelength_nm"] = json!(1053.0);
    lattice.as_object_mut().unwrap().shift_remove("drift_rms_hz");
    let ap = change(&bay(), &[("lasers.lattice", lattice)]).unwrap();
    // The power follows the wavelength, and nothing else does.
    let power_mw = ap.number("beams.lattice.power_mw").unwrap();
    let expected = bay_with("wavelength_nm = 1064.0", "wavelength_nm = 1053.0")
        .replace("drift_rms_hz = 2.0e6\n", "")
        .replace("power_mw = 54.6", &format!("power_mw = {power_mw:?}"));
    assert_eq!(ap.to_toml(), expected);
    // So does a last line without an end.
    let open = Apparatus::from_toml(SMALL.trim_end()).unwrap();
    let same = change(&open, &[("cloud", open.get("cloud").unwrap())]).unwrap();
    assert_eq!(same.to_toml(), SMALL.trim_end());
    // Tables of tables, and a measured number with a new uncertainty.
    let mut beams = bay().get("beams").unwrap();
    beams["raman_b"]["power_mw"] = json!(0.3);
    beams["raman_c"] = json!({"laser": "raman"});
    let ap = change(&bay(), &[("beams", beams)]).unwrap();
    let text = ap.to_toml();
    assert!(text.contains("power_mw = 0.44                    # total of its tones"), "{text}");
    assert!(text.contains("\n[beams.raman_c]\nlaser = \"raman\"\n"), "{text}");
    assert_eq!(ap.number("beams.raman_b.power_mw").unwrap(), 0.3);
    let ap = change(&bay(), &[("lattice.depth_er", json!({"value": 6.0, "standard_error": 0.1}))])
        .unwrap();
    let expected =
        bay_with("value = 6.0, standard_error = 0.06 }", "value = 6.0, standard_error = 0.1 }");
    assert_eq!(ap.to_toml(), expected);
    // The whole apparatus, table by table.
    let value = bay().to_value();
    for (key, table) in value.as_object().unwrap() {
        let same = change(&bay(), &[(key.as_str(), table.clone())]).unwrap();
        assert_eq!(same.to_toml(), crate::BAY, "{key}");
    }
}

#[test]
fn messages_about_changes_speak_of_what_the_user_typed() {
    let told = |path: &str, value: serde_json::Value| {
        let list = change(&bay(), &[(path, value)]).unwrap_err().faults();
        assert_eq!(list.len(), 1, "{list:?}");
        assert!(!list[0].message.contains("quotes") && !list[0].message.contains("null"));
        list[0].message.clone()
    };
    let wavelength = "lasers.raman.wavelength_nm";
    for (value, part) in [
        (json!("769"), "the text \"769\" was found: give the number itself"),
        (json!("769,5"), "write 769.5"),
        (json!("770."), "write 770.0"),
        (json!(".77e3"), "write 0.77e3"),
        (json!("769 nm"), "the unit, which is in the key: 769"),
        (json!("abc"), "takes a number but the text \"abc\" was found"),
        (json!(null), "is given no value"),
    ] {
        assert!(told(wavelength, value).contains(part), "{part}");
    }
    assert!(told("field.mains_locked", json!("True")).contains("takes true or false"));
    assert!(told("beams.lattice.laser", json!(1)).contains("the number 1 was found"));
    assert!(told("cloud.start", json!(1)).contains("takes a state"));
    assert!(told("trap", json!(1)).contains("give a table"));
}

#[test]
fn a_missing_table_is_named() {
    let fault = |path: &str| change(&bay(), &[(path, json!(1))]).unwrap_err().faults().remove(0);
    let ramen = fault("lasers.ramen.wavelength_nm");
    assert_eq!(ramen.did_you_mean.as_deref(), Some("lasers.raman.wavelength_nm"));
    for part in
        ["there is no [lasers.ramen]", "lattice, raman", "give the whole table lasers.ramen"]
    {
        assert!(ramen.message.contains(part), "{}", ramen.message);
    }
    assert!(!fault("lasers.raman.colour").message.contains("there is no"));
}

#[test]
fn a_value_and_its_uncertainty_go_into_one_table() {
    let depth = ("lattice.depth_er", json!(6.5));
    let error = ("lattice.depth_er.standard_error", json!(0.1));
    for changes in [[depth.clone(), error.clone()], [error, depth]] {
        let fault = change(&bay(), &changes).unwrap_err().faults().remove(0);
        assert_eq!(fault.code, "apparatus.overlapping_changes");
        let table = "lattice.depth_er = { value = 6.5, standard_error = 0.1 }";
        assert!(fault.message.contains(table), "{}", fault.message);
    }
}

#[test]
fn a_move_beyond_a_limit_names_both_settings() {
    let fault = change(&bay(), &[("lattice.depth_er", json!(90))]).unwrap_err().faults().remove(0);
    assert_eq!(fault.code, "file.above_maximum");
    for part in ["lattice.depth_er 6 -> 90", "beams.lattice.power_mw", "max_power_mw = 800"] {
        assert!(fault.message.contains(part), "{}", fault.message);
    }
    let dark = change(&bay(), &[("beams.lattice.power_mw", json!(0))]).unwrap_err().faults();
    assert_eq!((dark.len(), dark[0].code.as_str()), (1, "lattice.depth_out_of_range"));
    assert!(dark[0].message.contains("beams.lattice.power_mw 54.6 -> 0"), "{}", dark[0].message);
}

#[test]
fn apparatus_may_cross_threads() {
    fn check<T: Send + Sync + Clone + PartialEq + std::fmt::Debug>() {}
    check::<Apparatus>();
}
