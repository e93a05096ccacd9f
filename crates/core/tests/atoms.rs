//! The atomic table from outside: what it holds, and what it agrees with.

// Tests may fail loudly.
#![allow(clippy::unwrap_used, clippy::expect_used, clippy::panic)]

use std::collections::BTreeMap;
use std::f64::consts::PI;

use fluxloom_core::atom::{DataStatus, Line, Statistics, bibliography, source_meaning};
use fluxloom_core::constants::{
    BOHR_RADIUS_M, ELEMENTARY_CHARGE_C, REDUCED_PLANCK_J_S, SPEED_OF_LIGHT_M_PER_S,
    VACUUM_PERMITTIVITY_F_PER_M,
};
use fluxloom_core::{Atom, Error};
use fluxloom_testkit::{assert_near, reference};
use proptest::prelude::*;

fn atom(name: &str) -> Atom {
    Atom::new(name).unwrap()
}

fn all() -> impl Iterator<Item = Atom> {
    Atom::available().into_iter().map(atom)
}

fn value(atom: &Atom, name: &str) -> f64 {
    atom.number(name).unwrap().value
}

#[test]
fn nothing_of_the_table_is_missing() {
    let names = [
        "6Li", "7Li", "23Na", "39K", "40K", "41K", "85Rb", "87Rb", "87Sr", "133Cs", "171Yb",
        "173Yb",
    ];
    assert_eq!(Atom::available(), names);
    let mut counts = BTreeMap::new();
    for row in all().flat_map(|atom| atom.sources()) {
        *counts.entry(row.status.as_str()).or_insert(0) += 1;
        assert!(!row.source.is_empty(), "{row:?}");
        assert!(row.value.is_finite() && row.uncertainty.is_none_or(|size| size >= 0.0), "{row:?}");
    }
    let expected = BTreeMap::from([
        ("verified", 58),
        ("consistency-checked", 53),
        ("from memory, unverified", 97),
    ]);
    assert_eq!(counts, expected);
    assert_eq!(counts.values().sum::<i32>(), 208);
}

#[test]
fn values_are_the_nearest_doubles_to_the_digits_of_the_sources() {
    // Each literal is the decimal of the collected data with its point moved.
    let rb = atom("87Rb");
    for (name, expected) in [
        ("hyperfine_a_hz", 3_417_341_305.452_145),
        ("D1.frequency_hz", 377_107_463_380_000.0),
        ("D1.lifetime_s", 27.641_395_380_042_31e-9),
        ("D1.linewidth_hz", 5_757_850.0),
        ("D2.frequency_hz", 384_230_484_468_500.0),
        ("D2.dipole_au", 5.978_642_945_876_617),
    ] {
        assert_eq!(value(&rb, name).to_bits(), f64::to_bits(expected), "{name}");
    }
    assert_eq!(rb.number("D1.frequency_hz").unwrap().uncertainty, Some(11_000.0));
    assert_eq!(rb.number("D1.lifetime_s").unwrap().uncertainty, None);
    assert_eq!(value(&atom("173Yb"), "1S0-1P1.hyperfine_b_hz"), 602e6);
}

#[test]
fn names_of_sources_are_units_and_lines() {
    let sources = atom("40K").sources();
    let names: Vec<&str> = sources.iter().map(|row| row.name.as_str()).collect();
    assert_eq!(&names[..3], ["mass_u", "nuclear_spin", "hyperfine_a_hz"]);
    assert_eq!(names.len(), 6 + 6 + 7);
    let dipole = sources.iter().find(|row| row.name == "D1.dipole_au").unwrap();
    assert_eq!((dipole.unit.as_ref(), dipole.status), ("a.u.", DataStatus::Verified));
    assert!(bibliography().count() > 30);
    assert!(source_meaning("STECK").unwrap().contains("Steck"));
    assert!(atom("87Sr").note().unwrap().contains("88Sr"));
}

#[test]
fn spins_manifolds_and_statistics() {
    let k = atom("40K");
    assert_eq!((k.nuclear_spin(), k.ground_spin()), (4.0, 0.5));
    assert_eq!(k.manifolds(), [4.5, 3.5]);
    assert_eq!(atom("6Li").manifolds(), [1.5, 0.5]);
    assert_eq!(atom("133Cs").manifolds(), [4.0, 3.0]);
    assert_eq!(atom("87Sr").manifolds(), [4.5]);
    assert_eq!(atom("171Yb").manifolds(), [0.5]);
    let fermions = ["6Li", "40K", "87Sr", "171Yb", "173Yb"];
    for atom in all() {
        let expected =
            if fermions.contains(&atom.name()) { Statistics::Fermion } else { Statistics::Boson };
        assert_eq!(atom.statistics(), expected, "{atom:?}");
        // Spin and statistics: the total spin of a fermion is half-integer.
        let half_integer = atom.manifolds().iter().all(|f| f.fract() == 0.5);
        assert_eq!(half_integer, atom.statistics() == Statistics::Fermion, "{atom:?}");
    }
    assert_eq!(Statistics::Fermion.as_str(), "fermion");
}

#[test]
fn recoil() {
    let rb = atom("87Rb");
    // source: Steck, Rubidium 87 D Line Data (from memory)
    assert_near(rb.recoil_hz(780.241_209_686).unwrap(), 3770.97, 0.005, "87Rb D2 recoil, Hz");
    let speed = rb.recoil_m_per_s(780.241_209_686).unwrap();
    assert_near(speed, 5.88454e-3, 5e-9, "87Rb D2 recoil, m/s");
    // source: computed independently of the project
    assert_near(rb.recoil_hz(1064.0).unwrap(), 2027.81, 0.005, "87Rb 1064 nm, Hz");
    assert_near(atom("40K").recoil_hz(1064.0).unwrap(), 4409.86, 0.005, "40K 1064 nm, Hz");
}

#[test]
fn recoil_refuses_wavelengths_in_the_wrong_unit() {
    let k = atom("40K");
    for wavelength_nm in [0.0, -1064.0, 1064e-9, 1.064, 1e6, f64::NAN, f64::INFINITY] {
        let error = k.recoil_hz(wavelength_nm).unwrap_err();
        assert_eq!(error.code(), "light.wavelength_out_of_range");
        assert_eq!(k.recoil_m_per_s(wavelength_nm).unwrap_err().code(), error.code());
    }
}

#[test]
fn masses_agree_with_a_periodic_table() {
    let file = reference("masses.json");
    let masses = file["isotopes"].as_object().unwrap();
    assert_eq!(masses.len(), Atom::available().len());
    for atom in all() {
        let expected = masses[atom.name()]["mass_u"].as_f64().unwrap();
        let mass = &atom.ground().mass_u;
        assert_near(mass.value, expected, mass.uncertainty.unwrap(), atom.name());
        assert_eq!(masses[atom.name()]["uncertainty_u"].as_f64(), mass.uncertainty);
    }
}

#[test]
fn wavelengths_belong_to_frequencies() {
    for atom in all() {
        for line in atom.lines() {
            let expected = SPEED_OF_LIGHT_M_PER_S / line.frequency_hz.value * 1e9;
            let name = format!("{} {} wavelength, nm", atom.name(), line.name);
            assert_near(line.wavelength_nm.value, expected, 1e-12 * expected, &name);
        }
    }
}

#[test]
fn linewidths_lifetimes_and_dipoles_belong_together() {
    let mut lines = 0;
    for atom in all() {
        for line in atom.lines() {
            let name = format!("{} {}", atom.name(), line.name);
            // A = omega^3 d^2/(3 pi eps0 hbar c^3 (2J'+1)), d in the symmetric convention.
            let omega = 2.0 * PI * line.frequency_hz.value;
            let dipole = line.dipole_au.value * ELEMENTARY_CHARGE_C * BOHR_RADIUS_M;
            let rate = omega.powi(3) * dipole.powi(2)
                / (3.0
                    * PI
                    * VACUUM_PERMITTIVITY_F_PER_M
                    * REDUCED_PLANCK_J_S
                    * SPEED_OF_LIGHT_M_PER_S.powi(3)
                    * (2.0 * line.excited_spin + 1.0));
            // The table gives 6Li the dipole element of 7Li, and its linewidth:
            // the isotope shift between them is 7e-5.
            let allowed = if atom.name() == "6Li" { 1e-4 } else { 1e-5 };
            let linewidth = line.linewidth_hz.value;
            assert_near(rate / (2.0 * PI) / linewidth, 1.0, allowed, &name);
            assert_near(line.lifetime_s.value * 2.0 * PI * linewidth, 1.0, allowed, &name);
            lines += 1;
        }
    }
    assert_eq!(lines, 24);
}

#[test]
fn lifetimes_agree_with_the_sources_named_beside_them() {
    // source: Patterson et al., arXiv:1410.7364; Oates et al., PRL 76, 2866 (1996)
    assert_near(value(&atom("133Cs"), "D2.lifetime_s"), 30.462e-9, 1e-15, "Cs 6P3/2, s");
    assert_near(value(&atom("23Na"), "D2.lifetime_s"), 16.237e-9, 35e-12, "Na 3P3/2, s");
    // source: as the table has it, Yasuda 2006: 5.263(4) ns (from memory)
    assert_near(value(&atom("87Sr"), "1S0-1P1.lifetime_s"), 5.263e-9, 4e-12, "Sr 1P1, s");
}

#[test]
fn unknown_atoms_come_with_a_suggestion() {
    for name in ["K40", "K-40", "k40", "40k", "potassium-40", " 40K", "40K "] {
        let error = Atom::new(name).unwrap_err();
        assert_eq!(error.code(), "atom.unknown");
        let Error::UnknownAtom { suggestion, .. } = &error else { panic!("{error:?}") };
        assert_eq!(suggestion.as_deref(), Some("40K"), "{name}");
    }
    assert_eq!(
        Atom::new("K40").unwrap_err().to_string(),
        "atom \"K40\" is not in the table (did you mean \"40K\"?): known are \
         6Li, 7Li, 23Na, 39K, 40K, 41K, 85Rb, 87Rb, 87Sr, 133Cs, 171Yb, 173Yb"
    );
}

#[test]
fn unknown_numbers_come_with_a_suggestion() {
    let k = atom("40K");
    for (name, expected) in [
        ("D1.dipole", "D1.dipole_au"),
        ("d1.dipole_au", "D1.dipole_au"),
        ("mass_kg", "mass_u"),
        ("D2.wavelenght_nm", "D2.wavelength_nm"),
        ("residual_polarizability_au", "residual_polarisability_au"),
    ] {
        for error in [k.number(name).unwrap_err(), k.with_data(&[(name, 1.0)], "us").unwrap_err()] {
            assert_eq!(error.code(), "atom.unknown_data");
            let Error::UnknownData { suggestion, .. } = &error else { panic!("{error:?}") };
            assert_eq!(suggestion.as_deref(), Some(expected));
        }
    }
    // A J = 0 ground state has neither.
    for name in ["g_j", "hyperfine_a_hz"] {
        assert_eq!(
            atom("87Sr").with_data(&[(name, 1.0)], "us").unwrap_err().code(),
            "atom.unknown_data"
        );
    }
}

#[test]
fn atoms_cross_threads() {
    fn check<T: Send + Sync + 'static>() {}
    check::<Atom>();
    check::<Line>();
}

proptest! {
    #[test]
    fn no_text_brings_it_down(name in "\\PC{0,60}", key in "\\PC{0,60}", value: f64) {
        let _ = Atom::new(&name);
        let _ = atom("40K").number(&key);
        let _ = atom("40K").with_data(&[(key, value)], &name);
    }
}
