//! Numbers of the user's own in place of the table's: they show bit for bit,
//! what follows from them moves along, and what no atom has is refused.

// Tests may fail loudly.
#![allow(clippy::unwrap_used, clippy::expect_used, clippy::panic)]

use std::f64::consts::PI;

use fluxloom_core::Atom;
use fluxloom_core::atom::{DataStatus, Line};
use fluxloom_core::constants::SPEED_OF_LIGHT_M_PER_S;
use fluxloom_testkit::assert_near;
use proptest::prelude::*;

fn atom(name: &str) -> Atom {
    Atom::new(name).unwrap()
}

fn value(atom: &Atom, name: &str) -> f64 {
    atom.number(name).unwrap().value
}

fn line<'a>(atom: &'a Atom, name: &str) -> &'a Line {
    atom.lines().iter().find(|line| line.name == name).unwrap()
}

#[test]
fn own_numbers_take_the_place_of_the_tables() {
    let k = atom("40K");
    let own = k.with_data(&[("D1.dipole_au", 4.1075), ("mass_u", 39.964)], " our own ").unwrap();
    assert_eq!(k, atom("40K"), "the original stays as it was");
    assert_ne!(own, k);
    assert_eq!(own.number("D1.dipole_au").unwrap().value, 4.1075);
    let row = own.sources().into_iter().find(|row| row.name == "D1.dipole_au").unwrap();
    assert_eq!((row.value, row.uncertainty), (4.1075, None));
    assert_eq!((row.status, row.source.as_str()), (DataStatus::Own, "our own"));
    let ratio = own.mass_kg() / k.mass_kg();
    assert_near(ratio, 39.964 / 39.963_998_165, 1e-15, "ratio of masses");
    assert_eq!(own.sources().len(), k.sources().len());
    assert_eq!(line(&own, "D2"), line(&k, "D2"), "another line is not touched");
}

#[test]
fn what_follows_from_a_dipole_moves_with_it() {
    let k = atom("40K");
    let old = line(&k, "D1").clone();
    let own = k.with_data(&[("D1.dipole_au", 2.0 * old.dipole_au.value)], "us").unwrap();
    let new = line(&own, "D1");
    assert_near(new.linewidth_hz.value / old.linewidth_hz.value, 4.0, 1e-14, "linewidth");
    assert_near(new.lifetime_s.value * 2.0 * PI * new.linewidth_hz.value, 1.0, 1e-15, "lifetime");
    assert_eq!(new.linewidth_hz.source, "follows from D1.dipole_au supplied by the user");
    assert_eq!(new.lifetime_s.status, DataStatus::Own);
    assert_eq!(new.frequency_hz, old.frequency_hz);

    for given in [("D1.linewidth_hz", 6.1e6), ("D1.lifetime_s", 26e-9)] {
        let own = k.with_data(&[given], "us").unwrap();
        let new = line(&own, "D1");
        let linewidth = new.linewidth_hz.value;
        assert_near(new.lifetime_s.value * 2.0 * PI * linewidth, 1.0, 1e-15, "lifetime");
        let strength = (new.dipole_au.value / old.dipole_au.value).powi(2);
        assert_near(linewidth / old.linewidth_hz.value / strength, 1.0, 1e-14, "dipole");
    }
}

#[test]
fn what_follows_from_a_frequency_moves_with_it() {
    let k = atom("40K");
    let old = line(&k, "D2").clone();
    let own = k.with_data(&[("D2.frequency_hz", 1.1 * old.frequency_hz.value)], "us").unwrap();
    let new = line(&own, "D2");
    let (nu, lambda) = (new.frequency_hz.value, new.wavelength_nm.value);
    assert_near(nu * lambda * 1e-9 / SPEED_OF_LIGHT_M_PER_S, 1.0, 1e-15, "wavelength");
    assert_eq!(new.dipole_au, old.dipole_au, "the dipole element stays");
    let growth = new.linewidth_hz.value / old.linewidth_hz.value;
    assert_near(growth, 1.331, 1e-13, "linewidth grows with the cube");
    assert_eq!(new.wavelength_nm.source, "follows from D2.frequency_hz supplied by the user");

    let own = k.with_data(&[("D2.wavelength_nm", 766.5)], "us").unwrap();
    let new = line(&own, "D2");
    assert_eq!(new.wavelength_nm.value, 766.5);
    let nu = new.frequency_hz.value;
    assert_near(nu * 766.5e-9 / SPEED_OF_LIGHT_M_PER_S, 1.0, 1e-15, "frequency");

    // A linewidth of the user's stays where it was put, and the dipole element gives way.
    let own = own.with_data(&[("D2.linewidth_hz", 6e6)], "us").unwrap();
    assert_eq!(line(&own, "D2").linewidth_hz.value, 6e6);
    assert_eq!(
        line(&own, "D2").dipole_au.source,
        "follows from D2.linewidth_hz and D2.wavelength_nm supplied by the user"
    );
}

#[test]
fn giving_a_number_its_own_value_moves_nothing() {
    for atom in Atom::available().into_iter().map(atom) {
        for row in atom.sources() {
            let name = row.name;
            // The table derives lifetimes from dipole elements and those from
            // linewidths, with rounding and isotope shifts between (at most 7e-5).
            let allowed = if name.ends_with("lifetime_s") { 1e-4 } else { 1e-12 };
            let Ok(own) = atom.with_data(&[(name.as_str(), row.value)], "the same") else {
                assert_eq!(name, "nuclear_spin");
                continue;
            };
            for new in own.sources() {
                let old = value(&atom, &new.name);
                let allowed = if new.name.ends_with("lifetime_s") { 1e-4 } else { allowed };
                assert_near(new.value, old, allowed * old.abs(), &new.name);
            }
        }
    }
}

#[test]
fn calls_compose_and_order_does_not_matter() {
    let k = atom("40K");
    let one = k.with_data(&[("D1.dipole_au", 4.2)], "us").unwrap();
    let both = one.with_data(&[("D1.frequency_hz", 3.9e14)], "them").unwrap();
    let other = k.with_data(&[("D1.frequency_hz", 3.9e14)], "them").unwrap();
    let other = other.with_data(&[("D1.dipole_au", 4.2)], "us").unwrap();
    assert_eq!(both, other);
    assert_eq!(both.sources(), other.sources());
    assert_eq!(both.number("D1.dipole_au").unwrap().source, "us");

    // The latest of one group counts.
    let last = both.with_data(&[("D1.lifetime_s", 27e-9)], "later").unwrap();
    assert_eq!(last.number("D1.lifetime_s").unwrap().value, 27e-9);
    assert_eq!(last.own_data().count(), 2);
    assert_eq!(k.with_data::<&str>(&[], "nothing new").unwrap(), k);
}

#[test]
fn a_residual_polarisability_can_be_added() {
    let sr = atom("87Sr");
    let name = "residual_polarisability_au";
    assert_eq!(sr.number(name).unwrap_err().code(), "atom.unknown_data");
    let own = sr.with_data(&[(name, 5.5)], "us").unwrap();
    assert_eq!(own.ground().residual_polarisability_au.as_ref().unwrap().value, 5.5);
    assert_eq!(own.sources().len(), sr.sources().len() + 1);
}

#[test]
fn what_no_atom_has_is_refused() {
    let k = atom("40K");
    let positive =
        ["mass_u", "D1.frequency_hz", "D1.linewidth_hz", "D2.lifetime_s", "D2.dipole_au"];
    let any = ["g_j", "g_i", "hyperfine_a_hz", "D2.hyperfine_b_hz", "residual_polarisability_au"];
    for name in positive.into_iter().chain(any) {
        for value in [f64::NAN, f64::INFINITY, f64::NEG_INFINITY, f64::MAX] {
            let error = k.with_data(&[(name, value)], "us").unwrap_err();
            assert_eq!(error.code(), "atom.bad_data", "{name} = {value}");
        }
    }
    for name in positive {
        for value in [0.0, -1.0, f64::MIN_POSITIVE] {
            assert_eq!(k.with_data(&[(name, value)], "us").unwrap_err().code(), "atom.bad_data");
        }
    }
    for value in [0.0, 7.7e-7, -770.0, f64::NAN] {
        let error = k.with_data(&[("D1.wavelength_nm", value)], "us").unwrap_err();
        assert_eq!(error.code(), "light.wavelength_out_of_range");
        assert!(error.to_string().starts_with("D1.wavelength_nm = "), "{error}");
    }
    for name in ["nuclear_spin", "ground_spin", "D1.excited_spin"] {
        let error = k.with_data(&[(name, 0.5)], "us").unwrap_err();
        assert_eq!(error.code(), "atom.bad_data");
        assert!(error.to_string().contains("defines the isotope"), "{error}");
    }
    for source in ["", "  \n"] {
        let error = k.with_data(&[("g_j", 2.0)], source).unwrap_err();
        assert_eq!(error.code(), "atom.no_source");
        assert!(k.with_data::<&str>(&[], source).is_err());
    }
}

#[test]
fn two_of_one_group_are_refused() {
    let k = atom("40K");
    for (one, other) in [
        (("D1.linewidth_hz", 6e6), ("D1.dipole_au", 4.1)),
        (("D1.lifetime_s", 26e-9), ("D1.linewidth_hz", 6e6)),
        (("D2.frequency_hz", 3.9e14), ("D2.wavelength_nm", 766.7)),
        (("mass_u", 40.0), ("mass_u", 40.0)),
    ] {
        let error = k.with_data(&[one, other], "us").unwrap_err();
        assert_eq!(error.code(), "atom.bad_data", "{error}");
    }
    let error = k.with_data(&[("D1.linewidth_hz", 6e6), ("D1.dipole_au", 4.1)], "us").unwrap_err();
    assert_eq!(
        error.to_string(),
        "40K: D1.dipole_au = 4.1 cannot be used: D1.linewidth_hz is given too; \
         give one of them, the others follow from it"
    );
    // Of two lines they are not one group.
    assert!(k.with_data(&[("D1.linewidth_hz", 6e6), ("D2.dipole_au", 5.8)], "us").is_ok());
}

proptest! {
    #[test]
    fn own_values_show_bit_for_bit_and_survive_writing(
        name in prop::sample::select(vec!["6Li", "40K", "87Rb", "173Yb"]),
        pick in 0_usize..2,
        dipole_au in 1e-6..100.0_f64,
        g_i in -1.0..1.0_f64,
        frequency_hz in 2e13..2e15_f64,
        mass_u in 1.0..300.0_f64,
    ) {
        let plain = atom(name);
        let line = plain.lines()[pick].name;
        let changes = [
            (format!("{line}.dipole_au"), dipole_au),
            ("g_i".to_owned(), g_i),
            (format!("{line}.frequency_hz"), frequency_hz),
            ("mass_u".to_owned(), mass_u),
        ];
        let own = plain.with_data(&changes, "drawn").unwrap();
        let sources = own.sources();
        for (key, value) in &changes {
            let row = sources.iter().find(|row| &row.name == key).unwrap();
            prop_assert_eq!(row.value.to_bits(), value.to_bits());
            prop_assert_eq!(row.status, DataStatus::Own);
        }
        prop_assert!(sources.iter().all(|row| row.value.is_finite()));
        let read: Atom = serde_json::from_str(&serde_json::to_string(&own).unwrap()).unwrap();
        prop_assert_eq!(read.sources(), sources);
        prop_assert_eq!(read, own);
    }
}
