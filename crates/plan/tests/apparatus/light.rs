//! The beams of a file as light: where they go, and depth against power.

use fluxloom_core::light::polarisation::{Bench, from_bench};
use fluxloom_core::vector::{cross, dot, unit};
use fluxloom_core::{Beam, RamanPair};
use fluxloom_plan::apparatus::{Apparatus, Origin};
use serde_json::json;

use crate::{BAY, SMALL, bay, bay_with, change, faults};

const X: [f64; 3] = [1.0, 0.0, 0.0];
const Z: [f64; 3] = [0.0, 0.0, 1.0];

fn difference(one: &Beam, two: &Beam) -> [f64; 3] {
    let (a, b) = (one.unit_direction(), two.unit_direction());
    [a[0] - b[0], a[1] - b[1], a[2] - b[2]]
}

fn close(a: [f64; 3], b: [f64; 3]) {
    assert!((0..3).all(|k| (a[k] - b[k]).abs() < 1e-12), "{a:?} {b:?}");
}

fn degrees_between(a: [f64; 3], b: [f64; 3]) -> f64 {
    let turned = cross(a, b);
    dot(turned, turned).sqrt().atan2(dot(a, b)).to_degrees()
}

/// Two lattice beams that cross.
fn crossing() -> String {
    bay_with("beams = [\"lattice\"]", "beams = [\"lattice\", \"second\"]").replace(
        "[beams.raman_a]",
        "[beams.second]\nlaser = \"lattice\"\npower_mw = 54.6\nwaist_um = 120.0\n\
         polarisation_deg = 90.0\n[beams.raman_a]",
    )
}

#[test]
fn raman_beams_cross_about_the_lattice() {
    for (angle, tilt) in
        [(31.451_f64, 0.0_f64), (180.0, 0.0), (60.0, 3.0), (90.0, -5.0), (5.0, 20.0)]
    {
        for normal in [json!([0, 0, 1]), json!([0, 1, 0]), json!([0, 1, -2]), json!([0.01, 0, 1])] {
            let moved = [
                ("raman.angle_deg", json!(angle)),
                ("raman.tilt_deg", json!(tilt)),
                ("raman.plane_normal", normal),
            ];
            let ap = change(&bay(), &moved).unwrap();
            let (a, b) = (ap.beam("raman_a").unwrap(), ap.beam("raman_b").unwrap());
            let kick = difference(&a, &b);
            assert!((degrees_between(a.unit_direction(), b.unit_direction()) - angle).abs() < 1e-9);
            assert!((degrees_between(kick, X) - tilt.abs()).abs() < 1e-6);
            for beam in [a, b] {
                // The light is across the beam: Beam::new refused it otherwise.
                let along = beam.polarisation()[0] * beam.direction()[0]
                    + beam.polarisation()[1] * beam.direction()[1]
                    + beam.polarisation()[2] * beam.direction()[2];
                assert!(along.norm() < 1e-15, "{along}");
                assert_eq!(beam.wavelength_nm(), 769.0);
            }
            // raman_a stands on the plane (90 deg), raman_b lies in it.
            let flat = b.unit_polarisation().map(|x| x.re);
            let plane = unit(cross(a.unit_direction(), b.unit_direction()), "n");
            if angle < 180.0 {
                assert!(dot(flat, plane.unwrap()).abs() < 1e-9);
            }
            let pair = ap.raman_pair().unwrap();
            assert_eq!(pair.beams().unwrap(), [a, b]);
            let crossing = pair.as_crossing().unwrap();
            assert_eq!((crossing.angle_deg, crossing.tilt_deg), (angle, tilt));
            // The light changes nothing of the flux.
            let bare = RamanPair::crossing(crossing).unwrap();
            let lattice = ap.lattice().unwrap();
            assert_eq!(pair.flux(&lattice).to_bits(), bare.flux(&lattice).to_bits());
            let by_beams = RamanPair::from_beams(a, b).unwrap().flux(&lattice);
            assert!((by_beams - bare.flux(&lattice)).abs() < 1e-14, "{angle} {tilt}");
        }
    }
}

#[test]
fn polarisation_is_that_of_the_bench() {
    let text = bay_with(
        "polarisation_deg = 90.0\npolarisation_range_deg",
        "polarisation_deg = 30.0\nellipticity_deg = 10.0\npolarisation_range_deg",
    );
    let beam = Apparatus::from_toml(&text).unwrap().beam("raman_a").unwrap();
    let bench = Bench { polarisation_deg: 30.0, ellipticity_deg: 10.0 };
    assert_eq!(beam.polarisation(), from_bench(beam.direction(), Z, bench).unwrap());
}

#[test]
fn a_lattice_beam_goes_along_the_axis_and_comes_back() {
    let [beam, back] = bay().lattice_beams().unwrap();
    assert_eq!(beam, bay().beam("lattice").unwrap());
    close(beam.unit_direction(), X);
    close(difference(&beam, &back), [2.0, 0.0, 0.0]);
    assert_eq!((beam.power_mw(), beam.waist_um()), (54.6, [120.0; 2]));
    assert!((back.power_mw() - 0.95 * 54.6).abs() < 1e-12);
    close(back.unit_polarisation().map(|x| x.re), Z);
    // Without a stated fraction nothing is lost.
    let text = bay_with("return_fraction = 0.95 ", "# ");
    let ap = Apparatus::from_toml(&text).unwrap();
    assert_eq!(ap.lattice_beams().unwrap()[1].power_mw(), 54.6);
    assert!(ap.defaults().iter().any(|(path, value, why)| {
        path == "beams.lattice.return_fraction" && *value == json!(1.0) && why.contains("loss")
    }));
    // A beam that is not sent back has no such default.
    assert_eq!(ap.origin("beams.raman_a.return_fraction").unwrap(), Origin::NotStated);
}

#[test]
fn crossing_lattice_beams_are_symmetric_about_the_axis() {
    let text = crossing().replace("angle_deg = 180.0", "angle_deg = 60.0");
    let text = text.replace("depth_er = { value = 6.0", "depth_er = { value = 24.6");
    let ap = Apparatus::from_toml(&text).unwrap();
    let [one, two] = ap.lattice_beams().unwrap();
    close(difference(&one, &two), [1.0, 0.0, 0.0]);
    assert_eq!((one, two), (ap.beam("lattice").unwrap(), ap.beam("second").unwrap()));
    close(cross(one.unit_direction(), two.unit_direction()), [0.0, 0.0, 0.75_f64.sqrt()]);
}

#[test]
fn two_waists_lie_in_the_plane_and_along_its_normal() {
    let text = bay_with("waist_um = 120.0 ", "waist_um = [100.0, 144.0] ");
    let beam = Apparatus::from_toml(&text).unwrap().beam("lattice").unwrap();
    assert_eq!(beam.waist_um(), [100.0, 144.0]);
    let axis = unit(beam.waist_axis().unwrap(), "axis").unwrap();
    close([axis[0].abs(), axis[1].abs(), axis[2].abs()], [0.0, 1.0, 0.0]);
    let at = |place| beam.intensity_w_per_m2(place).unwrap() / beam.peak_intensity_w_per_m2();
    let e2 = (-2.0_f64).exp();
    assert!(
        (at([0.0, 100.0, 0.0]) - e2).abs() < 1e-12 && (at([0.0, 0.0, 144.0]) - e2).abs() < 1e-12
    );
}

#[test]
fn the_bias_is_that_of_the_file() {
    let bias = bay().bias();
    assert_eq!((bias.field_gauss, bias.field_direction), (30.0, [0.0, 0.0, 1.0]));
    assert_eq!(Apparatus::from_toml(SMALL).unwrap().bias().field_gauss, 0.0);
}

#[test]
fn beams_that_say_too_little_are_told_when_they_are_asked_for() {
    let asked = |text: &str, beam: &str| {
        let list = Apparatus::from_toml(text).unwrap().beam(beam).unwrap_err().faults();
        assert_eq!(list.len(), 1);
        (list[0].code.clone(), list[0].path.clone(), list[0].clone())
    };
    let (code, path, fault) = asked(BAY, "ramen_a");
    assert_eq!((&*code, &*path), ("apparatus.unknown_beam", "beams.ramen_a"));
    assert_eq!(fault.did_you_mean.as_deref(), Some("raman_a"));
    assert!(fault.message.contains("lattice, raman_a, raman_b"), "{}", fault.message);
    let spare = format!("{BAY}\n[beams.spare]\nlaser = \"raman\"\n");
    assert_eq!(asked(&spare, "spare").0, "apparatus.beam_without_direction");
    let twice =
        bay_with("beams = [\"raman_a\", \"raman_b\"]", "beams = [\"raman_a\", \"lattice\"]");
    assert_eq!(asked(&twice, "lattice").0, "apparatus.beam_in_two_pairs");
    let text = SMALL.replace("laser = \"lattice\"\n", "laser = \"lattice\"\npower_mw = 3\n");
    let (code, path, fault) = asked(&text, "lattice");
    assert_eq!((&*code, &*path), ("apparatus.not_stated", "beams.lattice.waist_um"));
    assert!(fault.message.contains("no waist_um, no polarisation_deg"), "{}", fault.message);
    assert!(fault.message.contains("waist_um = 120.0"), "{}", fault.message);
    let ap = Apparatus::from_toml(&text).unwrap();
    assert_eq!(ap.lattice_beams().unwrap_err().code(), "apparatus.not_stated");
    assert_eq!(ap.depth_from_power_er().unwrap_err().code(), "apparatus.not_stated");
}

#[test]
fn a_pair_without_light_stays_geometry() {
    let text = BAY.replace("waist_um = 200.0\npolarisation_deg = 0.0", "polarisation_deg = 0.0");
    assert_ne!(text, BAY);
    let pair = Apparatus::from_toml(&text).unwrap().raman_pair().unwrap();
    assert!(!pair.has_beams());
    assert_eq!(pair.as_crossing().unwrap().angle_deg, 31.451);
}

#[test]
fn two_colours_make_a_pair_from_its_beams() {
    let text = format!("{BAY}\n[lasers.other]\nwavelength_nm = 780.0\n")
        .replace("[beams.raman_b]\nlaser = \"raman\"", "[beams.raman_b]\nlaser = \"other\"");
    let ap = Apparatus::from_toml(&text).unwrap();
    let pair = ap.raman_pair().unwrap();
    let [absorb, emit] = pair.beams().unwrap();
    assert_eq!((absorb.wavelength_nm(), emit.wavelength_nm()), (769.0, 780.0));
    let dark = Apparatus::from_toml(&text.replace("power_mw = 0.2\n", "")).unwrap();
    let bare = dark.raman_pair().unwrap();
    assert!(!bare.has_beams());
    let lattice = ap.lattice().unwrap();
    assert!((bare.flux(&lattice) - pair.flux(&lattice)).abs() < 1e-14);
}

#[test]
fn tern_bay_agrees_with_itself() {
    assert!(!bay().cautions().unwrap().iter().any(|c| c.code == "caution.depth_disagrees"));
    assert!((bay().depth_from_power_er().unwrap() - 6.0).abs() < 0.06);
    assert_eq!(bay().depth_state().unwrap().to_string(), "9/2,-9/2");
    let text = bay_with("start = \"9/2,-9/2\"", "# ");
    assert_eq!(Apparatus::from_toml(&text).unwrap().depth_state().unwrap().to_string(), "9/2,-9/2");
}

/// Tern Bay with another power of its lattice beam.
fn with_power(power: &str) -> String {
    bay_with("power_mw = 54.6", &format!("power_mw = {power}"))
}

#[test]
fn depth_and_power_that_differ_are_told_or_refused() {
    // 6.0 +- 0.06 against 54.6 mW in proportion: 1.7, and 3.3 standard errors.
    let caution = |text: &str| {
        let list = Apparatus::from_toml(text).unwrap().cautions().unwrap();
        list.into_iter().find(|c| c.code == "caution.depth_disagrees").map(|c| c.text)
    };
    let told = caution(&with_power("55.6")).unwrap();
    for part in
        ["lattice.depth_er = 6,", "beams.lattice.power_mw = 55.6", "6.106", "stated depth is used"]
    {
        assert!(told.contains(part), "{told}");
    }
    let text = with_power("56.5");
    let list = faults(&text);
    assert_eq!(list.len(), 1, "{list:?}");
    assert_eq!((&*list[0].code, &*list[0].path), ("apparatus.depth_disagrees", "lattice.depth_er"));
    let line = 1 + text.lines().position(|line| line.starts_with("depth_er")).unwrap();
    assert_eq!(list[0].line, Some(line));
    for part in [
        "lattice.depth_er = 6,",
        "power_mw = 56.5 makes 6.205",
        "power_mw = 54.62",
        "would give the stated depth",
    ] {
        assert!(list[0].message.contains(part), "{}", list[0].message);
    }
    // Knowing either less well mends it; the waist counts twice.
    let vague = text.replace("standard_error = 0.06 }   #", "standard_error = 0.1 }   #");
    assert!(caution(&vague).is_some());
    assert!(caution(&with_power("{ value = 56.5, standard_error = 2.0 }")).is_none());
    let waist =
        text.replace("waist_um = 120.0 ", "waist_um = { value = 120.0, standard_error = 2.0 } ");
    assert!(caution(&waist).is_none());
    // Without its own standard error a depth is known to 5 %.
    let plain = text.replace("{ value = 6.0, standard_error = 0.06 }", "6.0");
    assert!(caution(&plain).is_none());
    // Dark, and crossed polarisations.
    assert!(faults(&with_power("0.0"))[0].message.contains("beams.lattice.power_mw = 54.62"));
    let crossed = crossing().replace(
        "polarisation_deg = 90.0\n[beams.raman_a]",
        "polarisation_deg = 0.0\n[beams.raman_a]",
    );
    let list = faults(&crossed.replace("angle_deg = 180.0", "angle_deg = 170.0"));
    assert!(list[0].message.contains("no power of these beams"), "{}", list[0].message);
}

#[test]
fn a_faulty_setting_is_not_told_twice() {
    for (old, new) in [
        ("power_mw = 54.6", "power_mw = -1"),
        ("waist_um = 120.0 ", "waist_um = \"60\" "),
        ("ellipticity_deg = 0.0 ", "elipticity_deg = 45.0 "),
        ("return_fraction = 0.95", "return_fracton = 0.1"),
        ("wavelength_nm = 1064.0", "wavelength_nm = 1e-6"),
        ("\"40K\"", "\"40L\""),
    ] {
        let list = faults(&bay_with(old, new));
        assert_eq!(list.len(), 1, "{list:?}");
    }
    // Another fault elsewhere hides nothing.
    let text = with_power("60.0").replace("name = ", "nmae = ");
    assert_eq!(faults(&text).len(), 2);
}

#[test]
fn power_follows_what_else_changes_the_depth() {
    let ratio =
        |ap: &Apparatus| ap.depth_from_power_er().unwrap() / ap.number("lattice.depth_er").unwrap();
    let folder = tempfile::tempdir().unwrap();
    for (path, value, power) in [
        ("beams.lattice.waist_um", json!(60.0), Some(13.65)),
        ("beams.lattice.waist_um", json!([60.0, 240.0]), Some(54.6)),
        ("beams.lattice.return_fraction", json!(0.2375), Some(109.2)),
        ("lasers.lattice.wavelength_nm", json!(1053.0), None),
        (
            "beams.lattice",
            json!({"laser": "lattice", "power_mw": 54.6, "waist_um": 60.0,
            "polarisation_deg": 90.0, "return_fraction": 0.95}),
            Some(13.65),
        ),
    ] {
        let ap = change(&bay(), &[(path, value)]).unwrap();
        assert!((ratio(&ap) / ratio(&bay()) - 1.0).abs() < 1e-12, "{path}");
        assert_eq!(
            ap.measured("lattice.depth_er").unwrap(),
            bay().measured("lattice.depth_er").unwrap()
        );
        if let Some(power) = power {
            let found = ap.number("beams.lattice.power_mw").unwrap();
            assert!((found - power).abs() < 1e-9, "{path} {found}");
        }
        let moved = ap.number("beams.lattice.power_mw").unwrap() != 54.6;
        assert_eq!(ap.changes().len(), usize::from(moved), "{:?}", ap.changes());
        let file = folder.path().join("bay.toml");
        ap.save(&file).unwrap();
        assert_eq!(Apparatus::load(&file).unwrap(), ap);
        assert!(ap.to_toml().contains("# at beams.lattice.power_mw"));
    }
    let ap = change(&bay(), &[("beams.lattice.waist_um", json!(60.0))]).unwrap();
    assert_eq!(
        ap.changes(),
        [
            "beams.lattice.waist_um changed: beams.lattice.power_mw moves so that lattice.depth_er = 6 \
          stands, 54.6 -> 13.65"
        ]
    );
    // Together with the depth, the power follows both.
    let both = [("beams.lattice.waist_um", json!(60.0)), ("lattice.depth_er", json!(12.0))];
    let ap = change(&bay(), &both).unwrap();
    assert!((ap.number("beams.lattice.power_mw").unwrap() - 27.3).abs() < 1e-9);
    assert_eq!(
        ap.changes(),
        [
            "lattice.depth_er 6 -> 12, beams.lattice.waist_um changed: beams.lattice.power_mw moves, \
             54.6 -> 27.3"
        ]
    );
    // With the power given, the depth follows.
    for power in [54.6, 27.3] {
        let both =
            [("beams.lattice.waist_um", json!(60.0)), ("beams.lattice.power_mw", json!(power))];
        let ap = change(&bay(), &both).unwrap();
        assert!((ap.number("lattice.depth_er").unwrap() - 24.0 * power / 54.6).abs() < 1e-9);
        assert_eq!(ap.number("beams.lattice.power_mw").unwrap(), power);
    }
    // Both given are judged.
    let all = [
        ("beams.lattice.waist_um", json!(60.0)),
        ("beams.lattice.power_mw", json!(20.0)),
        ("lattice.depth_er", json!(6.0)),
    ];
    assert_eq!(change(&bay(), &all).unwrap_err().code(), "apparatus.depth_disagrees");
}

#[test]
fn what_hardly_matters_moves_nothing() {
    for (path, value) in [
        ("cloud.start", json!("9/2,-1/2")),
        ("field.magnitude_gauss", json!(100.0)),
        ("field.direction", json!([1, 1, 0])),
        ("beams.raman_a.waist_um", json!(50.0)),
        ("raman.angle_deg", json!(30.0)),
        ("lattice.plane_normal", json!([0, 1, 0])),
    ] {
        let ap = change(&bay(), &[(path, value)]).unwrap();
        assert_eq!(ap.number("beams.lattice.power_mw").unwrap(), 54.6, "{path}");
        assert!(ap.changes().is_empty(), "{path} {:?}", ap.changes());
    }
    // Without a waist nothing is known, as ever.
    let text = bay_with("waist_um = 120.0 ", "# ");
    let ap = Apparatus::from_toml(&text).unwrap();
    let ap = change(&ap, &[("lasers.lattice.wavelength_nm", json!(1053.0))]).unwrap();
    assert_eq!(ap.number("beams.lattice.power_mw").unwrap(), 54.6);
    // A colour in which the lattice takes more power than there is.
    let far = change(&bay(), &[("lasers.lattice.wavelength_nm", json!(300.0))]).unwrap_err();
    assert_eq!(far.code(), "file.above_maximum");
    let message = far.faults().remove(0).message;
    assert!(message.starts_with("lasers.lattice.wavelength_nm changed"), "{message}");
    // One that no power can be computed for is left alone, and its depth is used.
    let near = change(&bay(), &[("lasers.lattice.wavelength_nm", json!(770.1083))]).unwrap();
    assert!(near.changes().is_empty() && near.depth_from_power_er().is_err());
}

#[test]
fn other_beams_of_the_lattice_keep_the_ratio() {
    let text = format!(
        "{BAY}\n[beams.wide]\nlaser = \"lattice\"\npower_mw = 1.0\nwaist_um = 240.0\n\
         polarisation_deg = 90.0\nreturn_fraction = 0.95\n"
    );
    let ap = Apparatus::from_toml(&text).unwrap();
    let ap = change(&ap, &[("lattice.beams", json!(["wide"]))]).unwrap();
    assert!((ap.number("beams.wide.power_mw").unwrap() - 218.4).abs() < 1e-9);
    assert_eq!(ap.changes().len(), 1, "{:?}", ap.changes());
}
