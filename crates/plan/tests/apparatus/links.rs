//! What the light of an apparatus does to its atoms.

use fluxloom_core::Document;
use fluxloom_plan::apparatus::Apparatus;
use fluxloom_plan::{Legs, LightReport};
use serde_json::json;

use crate::{BAY, SMALL, bay, bay_with, change};

fn report(ap: &Apparatus, count: Option<u32>) -> LightReport {
    ap.links(Legs { count, closed: false }).unwrap().unwrap()
}

#[test]
fn tern_bay_couples_its_legs() {
    let found = report(&bay(), None);
    assert_eq!((found.links.len(), found.scattering_per_s.len()), (3, 4));
    assert!(found.remarks.is_empty(), "{:?}", found.remarks);
    let link = &found.links[0];
    assert_eq!(
        (link.from.to_string(), link.to.to_string()),
        ("9/2,-9/2".into(), "9/2,-7/2".into())
    );
    let levels = bay().atom().unwrap().ground_levels(30.0).unwrap();
    assert_eq!(link.splitting_hz, levels.splitting_hz(link.from, link.to).unwrap());
    assert!(!link.forbidden && link.alternatives.is_empty());
    let overlap = bay().check("3/8".parse().unwrap(), Default::default()).unwrap().kick_overlap;
    let kept = link.effective_rabi_hz.unwrap() / link.rabi_hz.unwrap();
    assert!((kept - overlap).abs() < 1e-12);
    // 20, 10 and 30 uG, and 0.5 ppm of 30 G: independent parts add in squares.
    let rms =
        (20e-6_f64.powi(2) + 10e-6_f64.powi(2) + 30e-6_f64.powi(2) + 15e-6_f64.powi(2)).sqrt();
    assert!((found.field_rms_gauss - rms).abs() < 1e-18);
    assert_eq!(link.field_rms_hz, link.field_hz_per_gauss.abs() * found.field_rms_gauss);
    for leg in &found.scattering_per_s {
        let (raman, lattice) = (leg.raman_beams.unwrap(), leg.lattice_beams.unwrap());
        assert!(raman.total > raman.changing && raman.changing > 0.5 * raman.total);
        assert!(lattice.total > 0.0 && lattice.changing < 1e-3 * lattice.total);
    }
    assert_eq!(found.depth_er, 6.0);
    assert_eq!(found.depth_from_power_er, Some(bay().depth_from_power_er().unwrap()));
    let codes: Vec<_> = found.cautions().into_iter().map(|c| c.code.into_owned()).collect();
    assert_eq!(codes, ["caution.unconfirmed_data"]);
    assert_eq!(LightReport::from_json(&found.to_json().unwrap()).unwrap(), found);
}

#[test]
fn every_line_has_its_units() {
    let table = report(&bay(), Some(2)).table();
    let lines: Vec<&str> = table.lines().collect();
    assert_eq!(lines.len(), 6, "{table}");
    assert!(lines[0].starts_with("  depth from power  5.997 E_R, stated 6.000 +- 0.060 E_R"));
    assert!(lines[1].contains("30 G, noise 40.31 uG rms"));
    assert!(
        lines[3].starts_with("  9/2,-9/2 -> 9/2,-7/2   splitting 8.831737 MHz   coupling "),
        "{table}"
    );
    assert!(lines[3].ends_with("278.0 Hz/mG   11.21 Hz rms"), "{table}");
    assert!(lines[4].contains("/s of Raman light") && lines[4].contains("/s of lattice light"));
}

#[test]
fn a_link_that_cannot_be_driven_says_why() {
    let tube = bay().links(Legs { count: Some(3), closed: true }).unwrap().unwrap();
    let closing = &tube.links[2];
    assert_eq!(
        (closing.from.to_string(), closing.to.to_string()),
        ("9/2,-5/2".into(), "9/2,-9/2".into())
    );
    assert!(closing.forbidden);
    assert!(closing.rule.as_ref().unwrap().contains("Delta m = -2"));
    assert!(tube.table().contains("    instead: two links by way of 9/2,-7/2"));
    // Parallel polarisations drive nothing within an F.
    let ap = change(&bay(), &[("beams.raman_b.polarisation_deg", json!(90.0))]).unwrap();
    assert!(report(&ap, None).links.iter().all(|link| link.forbidden));
}

#[test]
fn too_many_legs_are_told() {
    let found = report(&bay(), Some(12));
    assert_eq!(found.scattering_per_s.len(), 10);
    assert!(found.remarks[0].contains("12 legs asked for"), "{:?}", found.remarks);
    assert_eq!(
        bay().links(Legs { count: Some(65), closed: false }).unwrap_err().code(),
        "check.legs_out_of_range"
    );
}

#[test]
fn what_is_not_stated_is_left_out_and_told() {
    let ap = Apparatus::from_toml(&bay_with("start = \"9/2,-9/2\"", "# ")).unwrap();
    let found = report(&ap, None);
    assert!(found.links.is_empty() && found.depth_from_power_er.is_some());
    assert!(found.remarks[0].contains("cloud.start is not stated"));
    // Without the light of one kind the other stays.
    let dark = BAY.replace("power_mw = 0.2\n", "");
    let found = report(&Apparatus::from_toml(&dark).unwrap(), None);
    assert!(found.links[0].rabi_hz.is_none() && found.links[0].splitting_hz > 8e6);
    assert!(found.scattering_per_s[0].raman_beams.is_none());
    assert!(found.scattering_per_s[0].lattice_beams.is_some());
    assert!(found.remarks[0].contains("beams.raman_b states no power_mw"), "{:?}", found.remarks);
    assert!(found.table().contains("no coupling"));
    let dark = Apparatus::from_toml(&bay_with("waist_um = 120.0 ", "# ")).unwrap();
    let found = report(&dark, None);
    assert!(found.depth_from_power_er.is_none() && found.links[0].rabi_hz.is_some());
    assert!(found.remarks[0].contains("beams.lattice states no waist_um"), "{:?}", found.remarks);
    // Without a field the levels are those at rest.
    let text = bay_with("magnitude_gauss = 30.0\nrange_gauss = [2.0, 210.0]\n", "");
    let ap = Apparatus::from_toml(&text).unwrap();
    let found = report(&ap, None);
    assert!(found.remarks[0].contains("field.magnitude_gauss is not stated"));
    assert_eq!((found.field_gauss, found.links[0].splitting_hz), (None, 0.0));
    // Without any light there is nothing to tell.
    assert_eq!(Apparatus::from_toml(SMALL).unwrap().links(Legs::default()).unwrap(), None);
}

#[test]
fn light_on_a_resonance_is_a_remark() {
    // On the D1 line.
    let ap = change(&bay(), &[("lasers.raman.wavelength_nm", json!(770.1083))]).unwrap();
    let found = report(&ap, None);
    assert!(found.links.iter().all(|link| link.rabi_hz.is_none() && link.splitting_hz > 8e6));
    assert!(found.scattering_per_s.iter().all(|leg| leg.raman_beams.is_none()));
    assert_eq!(found.remarks.len(), 2, "{:?}", found.remarks);
    assert!(found.remarks[0].starts_with("couplings left out: light at 770.1083 nm"));
    let ap = change(&bay(), &[("lasers.lattice.wavelength_nm", json!(770.1083))]).unwrap();
    let found = report(&ap, None);
    assert!(found.depth_from_power_er.is_none() && found.links[0].rabi_hz.is_some());
}
