//! Inverse problems of the flux: what they find is what the formula gives.

#![allow(clippy::unwrap_used)]

use fluxloom_core::control::Unwatched;
use fluxloom_core::flux::{
    AngleSearch, FluxInput, WavelengthSearch, flux, raman_angles, raman_wavelengths,
};
use fluxloom_core::{Flux, Fraction, Lattice, LatticeInput};
use fluxloom_testkit::assert_near;
use proptest::prelude::*;

fn lattice() -> Lattice {
    Lattice::new(LatticeInput { wavelength_nm: 1064.0, depth_er: 6.0, ..LatticeInput::RETRO })
        .unwrap()
}

fn search(range_nm: (f64, f64), angle_deg: f64) -> WavelengthSearch {
    WavelengthSearch { range_nm, angle_deg, tilt_deg: 0.0 }
}

#[test]
fn counter_propagating_wavelengths_for_three_eighths() {
    // Closed form: 1064 nm/(branch + sense 3/8).
    let found = raman_wavelengths(
        "3/8".parse().unwrap(),
        &lattice(),
        search((400.0, 1800.0), 180.0),
        &Unwatched,
    )
    .unwrap();
    let wavelengths: Vec<f64> = found.iter().map(|s| s.wavelength_nm).collect();
    let expected = [0.625, 1.375, 1.625, 2.375, 2.625].map(|flux| 1064.0 / flux);
    assert_eq!(wavelengths.len(), expected.len());
    for (found, expected) in wavelengths.iter().zip(expected) {
        assert_near(*found, expected, 1e-9, "wavelength");
    }
    assert!(found.windows(2).all(|pair| pair[0].kick_overlap >= pair[1].kick_overlap));
}

#[test]
fn angles_for_three_eighths() {
    let input = AngleSearch { range_deg: (0.0, 180.0), wavelength_nm: 769.0, tilt_deg: 0.0 };
    let found = raman_angles("3/8".parse().unwrap(), &lattice(), input, &Unwatched).unwrap();
    assert_eq!(found.len(), 3);
    assert_near(found[0].angle_deg, 31.451, 5e-4, "smallest kick first");
}

#[test]
fn a_half_has_one_sense_and_no_lever_is_said() {
    let half = raman_wavelengths(
        "1/2".parse().unwrap(),
        &lattice(),
        search((500.0, 3000.0), 180.0),
        &Unwatched,
    );
    assert_eq!(half.unwrap().len(), 2);
    let none = raman_wavelengths(
        "1/3".parse().unwrap(),
        &lattice(),
        search((500.0, 900.0), 0.0),
        &Unwatched,
    );
    assert!(none.unwrap().is_empty());
    let any = raman_wavelengths(
        "1".parse().unwrap(),
        &lattice(),
        search((500.0, 900.0), 0.0),
        &Unwatched,
    );
    assert_eq!(any.unwrap_err().code(), "flux.nothing_to_solve");
    let empty = raman_wavelengths(
        "1/3".parse().unwrap(),
        &lattice(),
        search((900.0, 500.0), 180.0),
        &Unwatched,
    );
    assert_eq!(empty.unwrap_err().code(), "range.empty");
    let wide = Lattice::new(LatticeInput {
        wavelength_nm: 20_000.0,
        depth_er: 6.0,
        angle_deg: 0.01,
        ..LatticeInput::RETRO
    })
    .unwrap();
    let many = raman_wavelengths(
        "1/3".parse().unwrap(),
        &wide,
        search((100.0, 20_000.0), 180.0),
        &Unwatched,
    );
    assert_eq!(many.unwrap_err().code(), "flux.too_many_solutions");
}

proptest! {
    #[test]
    fn what_is_found_is_what_the_formula_gives(
        numerator in -7..8_i64,
        denominator in 1..17_i64,
        angle_deg in 1.0..180.0_f64,
        tilt_deg in -80.0..80.0_f64,
    ) {
        let target = Flux::Fraction(Fraction::new(numerator, denominator).unwrap());
        let lattice = lattice();
        let input = WavelengthSearch { range_nm: (300.0, 2000.0), angle_deg, tilt_deg };
        for s in raman_wavelengths(target, &lattice, input, &Unwatched).unwrap() {
            let again = flux(FluxInput {
                spacing_nm: lattice.spacing_nm(),
                wavelength_nm: s.wavelength_nm,
                angle_deg: s.angle_deg,
                tilt_deg: s.tilt_deg,
            })
            .unwrap();
            prop_assert!((again - s.flux).abs() < 1e-12);
            prop_assert!((target.reached(s.branch as f64, s.sense) - s.flux).abs() < 1e-11);
        }
    }
}
