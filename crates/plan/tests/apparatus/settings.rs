//! What a file says about a setting, and what stands in where it is silent.

use fluxloom_plan::apparatus::keys::{self, Kind};
use fluxloom_plan::apparatus::{Apparatus, Origin};
use serde_json::{Value, json};

use crate::{SMALL, bay, bay_path, bay_with, faults};

#[test]
fn tern_bay_has_no_fault() {
    let ap = Apparatus::load(&bay_path()).unwrap();
    assert_eq!(ap, bay());
    assert_eq!(format!("{ap:?}"), "Apparatus(\"Tern Bay (invented)\", 40K)");
    assert_eq!(ap.number("lasers.raman.wavelength_nm").unwrap(), 769.0);
    assert_eq!(ap.number("lattice.depth_er").unwrap(), 6.0);
    assert_eq!(ap.field_direction(), [0.0, 0.0, 1.0]);
    assert_eq!(ap.names("beams"), ["lattice", "raman_a", "raman_b"]);
    assert!(ap.changes().is_empty());
}

#[test]
fn every_key_of_the_table_stands_in_tern_bay() {
    // A file with every key known has no unknown-key fault; this is the other direction.
    let value = bay().to_value();
    for key in keys::all() {
        let mut found = vec![&value];
        for word in key.pattern.split('.') {
            found = found
                .into_iter()
                .filter_map(Value::as_object)
                .flat_map(|map| map.iter().filter(|(k, _)| word == "*" || *k == word))
                .map(|(_, value)| value)
                .collect();
        }
        assert!(!found.is_empty(), "{} does not stand in the example", key.pattern);
    }
}

#[test]
fn the_table_is_in_order() {
    let mut seen = std::collections::BTreeSet::new();
    for key in keys::all() {
        assert!(seen.insert(key.pattern), "{} twice", key.pattern);
        assert!(!key.about.is_empty());
        // A range must have the setting it is the range of beside it.
        if let Kind::Range(_, Some(today)) = key.kind {
            assert!(keys::rows(key.table()).any(|row| row.name() == today), "{}", key.pattern);
        }
    }
}

#[test]
fn a_small_file_is_an_apparatus() {
    let ap = Apparatus::from_toml(SMALL).unwrap();
    assert_eq!(ap.get("lasers.lattice.wavelength_nm").unwrap(), json!(1064.0));
    assert_eq!(ap.get("lattice.angle_deg").unwrap(), json!(180.0));
    assert_eq!(ap.vector("lattice.axis").unwrap(), [1.0, 0.0, 0.0]);
    assert_eq!(ap.vector("frame.down").unwrap(), [0.0, 0.0, -1.0]);
    assert!(matches!(ap.origin("field.noise_rms_gauss").unwrap(), Origin::Default(why)
        if why.contains("ordinary laboratory")));
    assert_eq!(ap.number("field.noise_rms_gauss").unwrap(), 1e-3);
    let code = |path: &str| ap.get(path).unwrap_err().code().to_owned();
    // No Raman pair, no tilt of it; no number invented for a trap.
    assert_eq!(code("raman.tilt_deg"), "apparatus.not_stated");
    assert_eq!(code("trap.along_hz"), "apparatus.not_stated");
    assert_eq!(ap.origin("trap.along_hz").unwrap(), Origin::NotStated);
    assert_eq!(ap.range("lasers.lattice.range_nm").unwrap(), None);
    assert!(ap.defaults().iter().any(|(path, value, why)| path == "lattice.angle_deg"
        && *value == json!(180.0)
        && why.contains("retro")));
}

#[test]
fn settings_come_in_their_kinds() {
    let ap = bay();
    assert_eq!(ap.get("cloud.count").unwrap(), json!(20000));
    assert_eq!(ap.count("cloud.count").unwrap(), 20000);
    assert_eq!(ap.get("lattice.depth_er").unwrap(), json!(6.0));
    assert_eq!(ap.get("lattice.depth_er.standard_error").unwrap(), json!(0.06));
    assert_eq!(ap.get("field.magnitude_gauss.value").unwrap(), json!(30.0));
    assert_eq!(ap.get("trap").unwrap(), json!({"along_hz": 24.0, "across_hz": 180.0}));
    assert_eq!(ap.text("cloud.atom").unwrap(), "40K");
    assert_eq!(ap.state("cloud.start").unwrap().to_string(), "9/2,-9/2");
    assert!(ap.flag("raman.phase_repeats").unwrap());
    assert_eq!(ap.range("lasers.raman.range_nm").unwrap(), Some((766.0, 775.0)));
    assert_eq!(ap.one_or_two("beams.lattice.waist_um").unwrap(), [120.0, 120.0]);
    assert_eq!(ap.list("raman.beams").unwrap(), ["raman_a", "raman_b"]);
    let length = "interaction.scattering_length_bohr.\"9/2,-9/2 9/2,-7/2\"";
    assert_eq!(ap.number(length).unwrap(), 170.0);
    assert_eq!(ap.number("interaction.scattering_length_bohr.9/2,-9/2 9/2,-7/2").unwrap(), 170.0);
    assert_eq!(ap.text("lattice.depth_er").unwrap_err().code(), "apparatus.wrong_kind");
    assert_eq!(ap.number("cloud.atom").unwrap_err().code(), "apparatus.wrong_kind");
}

#[test]
fn a_measured_number_keeps_its_provenance() {
    let text = bay_with(
        "magnitude_gauss = 30.0",
        "magnitude_gauss = { value = 30, standard_error = 4e-4, data = \"field.csv\", measured = 2026-11-30 }",
    );
    let ap = Apparatus::from_toml(&text).unwrap();
    let field = ap.measured("field.magnitude_gauss").unwrap();
    assert_eq!((field.value, field.standard_error), (30.0, Some(4e-4)));
    assert_eq!(field.data.as_deref(), Some("field.csv"));
    assert_eq!(field.measured.as_deref(), Some("2026-11-30"));
    let bare = ap.measured("trap.along_hz").unwrap();
    assert_eq!((bare.value, bare.standard_error, bare.data), (24.0, None, None));
}

#[test]
fn uncertainties_that_are_not_stated_come_from_common_practice() {
    let ap = Apparatus::from_toml(SMALL).unwrap();
    let (error, origin) = ap.standard_error("lattice.depth_er").unwrap().unwrap();
    assert!((error - 0.3).abs() < 1e-12);
    assert!(matches!(origin, Origin::Default(why) if why.contains("5 %")));
    let stated = bay().standard_error("lattice.depth_er").unwrap();
    assert_eq!(stated, Some((0.06, Origin::Stated)));
    assert_eq!(bay().standard_error("trap.along_hz").unwrap(), None);
}

#[test]
fn an_unknown_path_has_a_suggestion() {
    for (path, meant) in [
        ("lasers.ramen.wavelength_nm", "lasers.raman.wavelength_nm"),
        ("lasers.raman.wavelenght_nm", "lasers.raman.wavelength_nm"),
        ("latice", "lattice"),
        ("field.magnitude", "field.magnitude_gauss"),
    ] {
        let fault = bay().get(path).unwrap_err().faults().remove(0);
        assert_eq!(fault.code, "apparatus.unknown_path");
        assert_eq!(fault.did_you_mean.as_deref(), Some(meant), "{path}");
        assert_eq!(fault.path, path);
    }
    for path in [
        "",
        ".",
        "lattice.depth_er.sigma",
        "cloud.atom.value",
        "lasers.*.range_nm",
        "\"",
        "a.b.c.d",
    ] {
        assert_eq!(bay().get(path).unwrap_err().code(), "apparatus.unknown_path", "{path:?}");
    }
}

#[test]
fn whole_numbers_of_any_size_are_numbers() {
    let ap =
        Apparatus::from_toml(&SMALL.replace("1064", "1064\nlinewidth_hz = 9007199254")).unwrap();
    assert_eq!(ap.number("lasers.lattice.linewidth_hz").unwrap(), 9_007_199_254.0);
    let text = SMALL.replace("depth_er = 6", "depth_er = 9223372036854775807");
    assert_eq!(faults(&text)[0].code, "lattice.depth_out_of_range");
}

#[test]
fn equality_is_of_values() {
    let ap = Apparatus::from_toml(SMALL).unwrap();
    let other = SMALL.replace("depth_er = 6", "depth_er = 6.0  # so").replace("1064", "1.064e3");
    assert_eq!(Apparatus::from_toml(&other).unwrap(), ap);
    assert_ne!(Apparatus::from_toml(&SMALL.replace("= 6", "= 7")).unwrap(), ap);
    let measured = SMALL.replace("= 6", "= { value = 6 }");
    assert_ne!(Apparatus::from_toml(&measured).unwrap(), ap);
}

#[test]
fn two_radii_are_not_one_number() {
    let text =
        bay_with("waist_um = 120.0 ", "waist_um = { value = [100, 144], standard_error = 1 } ");
    let ap = Apparatus::from_toml(&text).unwrap();
    for path in ["beams.lattice.waist_um", "beams.lattice.waist_um.value"] {
        let fault = ap.measured(path).unwrap_err().faults().remove(0);
        assert_eq!(fault.code, "apparatus.wrong_kind");
        assert!(fault.message.contains("one_or_two"), "{}", fault.message);
        assert_eq!(ap.one_or_two(path).unwrap(), [100.0, 144.0]);
    }
}
