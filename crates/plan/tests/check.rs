//! Verdicts against published fluxes, closed forms and the scenario's own numbers.

#![allow(clippy::unwrap_used)]

use fluxloom_core::{Crossing, Directions, Document, Flux, Lattice, LatticeInput, RamanPair};
use fluxloom_plan::{CheckOptions, FluxCheck, check_flux};
use fluxloom_testkit::assert_near;
use proptest::prelude::*;

fn lattice(wavelength_nm: f64) -> Lattice {
    Lattice::new(LatticeInput { wavelength_nm, depth_er: 6.0, ..LatticeInput::RETRO }).unwrap()
}

fn crossing(wavelength_nm: f64, angle_deg: f64) -> RamanPair {
    RamanPair::crossing(Crossing { wavelength_nm, angle_deg, tilt_deg: 0.0 }).unwrap()
}

fn flux(text: &str) -> Flux {
    text.parse().unwrap()
}

fn over(sites: u32) -> CheckOptions {
    CheckOptions { sites, ..CheckOptions::default() }
}

fn demo(angle_deg: f64) -> FluxCheck {
    check_flux(&lattice(1064.0), &crossing(769.0, angle_deg), flux("3/8"), over(60)).unwrap()
}

#[test]
fn the_demo_meets_its_target_at_its_angle_only() {
    let met = demo(31.451);
    assert!(met.meets_target, "{}", met.verdict);
    let missed = demo(180.0);
    assert!(!missed.meets_target);
    // 2 pi 59 (1064/769 - 11/8).
    assert_near(missed.phase_error_rad, 3.1937, 1e-4, "phase error");
    assert_near(missed.exact_wavelength_nm.unwrap(), 1064.0 / 1.375, 1e-9, "8/11 of 1064 nm");
    assert!(missed.verdict.contains("tune to 773.818 nm instead of 769 nm"), "{}", missed.verdict);
    assert_eq!((missed.branch, i8::from(missed.sense)), (1, 1));
}

#[test]
fn published_fluxes() {
    // source: Kolkowitz et al., Nature 542, 66 (2017) (from memory): 87Sr clock
    // coupling, 813.4274 and 698.4457 nm, phase per plaquette 1.1646 pi, about 7 pi/6.
    let clock = RamanPair::from_directions(Directions {
        absorb: [1.0, 0.0, 0.0],
        absorb_wavelength_nm: 698.4457,
        emit: None,
        emit_wavelength_nm: None,
    })
    .unwrap();
    assert_near(2.0 * clock.flux(&lattice(813.4274)), 1.1646, 0.5e-4, "phase over pi");
    // source: Mancini et al., Science 349, 1510 (2015) (from memory): 173Yb,
    // 759 and 556 nm; 0.37 pi needs Delta k = 0.27104 k_R along the lattice.
    let angle_deg = 2.0 * (0.271_04_f64 / 2.0).asin().to_degrees();
    let phase = 2.0 * crossing(556.0, angle_deg).flux(&lattice(759.0));
    assert_near(phase, 0.37, 1e-5, "phase over pi");
    // source: Han, Kang, Shin, PRL 122, 065303 (2019); Kang, Han, Shin, NJP 22,
    // 013023 (2020): 173Yb, 532 nm lattice (from memory) and 556 nm; the phases
    // pi/3, pi/2, 2pi/3 need cos th1 - cos th2 = 0.348371, 0.522556, 0.696742
    // (computed independently of this project).
    for (phase, difference) in [(1.0 / 3.0, 0.348_371), (0.5, 0.522_556), (2.0 / 3.0, 0.696_742)] {
        let first = 0.9_f64;
        let second = first - difference;
        let pair = RamanPair::from_directions(Directions {
            absorb: [first, (1.0 - first * first).sqrt(), 0.0],
            absorb_wavelength_nm: 556.0,
            emit: Some([second, 0.0, (1.0 - second * second).sqrt()]),
            emit_wavelength_nm: None,
        })
        .unwrap();
        assert_near(2.0 * pair.flux(&lattice(532.0)), phase, 1e-6, "phase over pi");
    }
}

#[test]
fn tubes_report_how_they_close() {
    let tube = CheckOptions { legs: Some(3), closed: true, ..over(60) };
    let check = check_flux(&lattice(1064.0), &crossing(769.0, 31.451), flux("3/8"), tube).unwrap();
    assert_near(check.closure_mismatch.unwrap(), 0.125, 1e-4, "three times 3/8");
    assert_eq!(check.loop_phase_is_physical, Some(false));
    let ribbon = demo(31.451);
    assert_eq!((ribbon.closure_mismatch, ribbon.loop_phase_is_physical), (None, None));
    let without = CheckOptions { closed: true, ..over(60) };
    let error = check_flux(&lattice(1064.0), &crossing(769.0, 30.0), flux("1/3"), without);
    assert_eq!(error.unwrap_err().code(), "check.closed_needs_legs");
}

#[test]
fn advice_for_two_colours_hits_when_followed() {
    let pair = |absorb_wavelength_nm| {
        RamanPair::from_directions(Directions {
            absorb: [1.0, 0.3, 0.0],
            absorb_wavelength_nm,
            emit: Some([-0.2, 1.0, 0.4]),
            emit_wavelength_nm: Some(1000.0),
        })
        .unwrap()
    };
    let before = check_flux(&lattice(1064.0), &pair(769.0), flux("3/8"), over(60)).unwrap();
    assert!(before.verdict.contains("tune the absorbed beam to"), "{}", before.verdict);
    let exact = before.exact_wavelength_nm.unwrap();
    let within = before.wavelength_tolerance_nm.unwrap();
    let after = check_flux(&lattice(1064.0), &pair(exact), flux("3/8"), over(60)).unwrap();
    assert_near(after.error, 0.0, 1e-12, "the advice");
    for side in [-0.999, 0.999] {
        let near = pair(exact + side * within);
        assert!(check_flux(&lattice(1064.0), &near, flux("3/8"), over(60)).unwrap().meets_target);
    }
}

#[test]
fn co_propagating_beams_write_no_flux() {
    let check = check_flux(&lattice(1064.0), &crossing(769.0, 0.0), flux("3/8"), over(60)).unwrap();
    assert_eq!((check.flux, check.folded, i8::from(check.sense)), (0.0, 0.0, 1));
    assert_eq!(check.exact_wavelength_nm, None);
    assert_near(check.exact_angle_deg.unwrap(), 31.451, 1e-3, "angle");
    assert_near(check.kick_overlap, 1.0, 1e-14, "no kick");
    assert!(!check.meets_target);
}

#[test]
fn fine_print_of_the_verdict() {
    let many = check_flux(&lattice(1064.0), &crossing(769.0, 31.451), flux("37/97"), over(60));
    assert!(many.unwrap().verdict.contains("cannot be told from an irrational one"));
    let error = check_flux(&lattice(1064.0), &crossing(769.0, 31.451), flux("3/8"), over(1));
    let message = error.unwrap_err().to_string();
    assert!(message.starts_with("sites = 1 is outside 2 <= sites <= 1000000"), "{message}");
    assert!(check_flux(&lattice(1064.0), &crossing(769.0, 1.0), flux("1/3"), over(0)).is_err());
}

#[test]
fn documents_come_back_exactly() {
    let tube = CheckOptions { legs: Some(3), closed: true, ..over(47) };
    let check =
        check_flux(&lattice(1064.0), &crossing(768.97, 31.4), Flux::Number(0.3701), tube).unwrap();
    let text = check.to_json().unwrap();
    assert_eq!(FluxCheck::from_json(&text).unwrap(), check);
    let damaged = text.replace("\"sense\":", "\"sens\":");
    assert!(FluxCheck::from_json(&damaged).is_err());
    let tube_without_legs = text.replace("\"legs\":3", "\"legs\":null");
    assert!(FluxCheck::from_json(&tube_without_legs).is_err());
}

proptest! {
    #[test]
    fn the_exact_settings_hit_and_the_tolerances_hold(
        wavelength_nm in 400.0..1600.0_f64,
        angle_deg in 0.5..180.0_f64,
        numerator in 0..13_i64,
        denominator in 1..13_i64,
        sites in 2..400_u32,
    ) {
        let target = Flux::Fraction(fluxloom_core::Fraction::new(numerator, denominator).unwrap());
        let judge = |wavelength_nm: f64, angle_deg: f64| {
            let pair = crossing(wavelength_nm, angle_deg);
            check_flux(&lattice(1064.0), &pair, target, over(sites)).unwrap()
        };
        let check = judge(wavelength_nm, angle_deg);
        let sum = check.branch as f64 + f64::from(i8::from(check.sense)) * target.value();
        prop_assert!((sum + check.error - check.flux).abs() < 1e-12);
        if let (Some(exact), Some(within)) = (check.exact_wavelength_nm, check.wavelength_tolerance_nm) {
            prop_assert!(judge(exact, angle_deg).error.abs() < 1e-12);
            for side in [-0.999, 0.999] {
                let nearby = exact + side * within;
                if (100.0..=20000.0).contains(&nearby) {
                    prop_assert!(judge(nearby, angle_deg).meets_target);
                }
            }
        }
        if let (Some(exact), Some(within)) = (check.exact_angle_deg, check.angle_tolerance_deg) {
            prop_assert!(judge(wavelength_nm, exact).error.abs() < 1e-12);
            for side in [-0.999, 0.999] {
                let nearby = exact + side * within;
                if (0.0..=180.0).contains(&nearby) {
                    prop_assert!(judge(wavelength_nm, nearby).meets_target, "{} {}", exact, within);
                }
            }
        }
    }

    #[test]
    fn swapping_the_beams_reverses_the_sense(
        wavelength_nm in 400.0..1600.0_f64,
        angle_deg in 0.5..180.0_f64,
        denominator in 3..40_i64,
    ) {
        let pair = crossing(wavelength_nm, angle_deg);
        let lattice = lattice(1064.0);
        prop_assert_eq!(pair.swapped().flux(&lattice), -pair.flux(&lattice));
        prop_assert_eq!(pair.swapped().swapped(), pair);
        let target = Flux::Fraction(fluxloom_core::Fraction::new(1, denominator).unwrap());
        let one = check_flux(&lattice, &pair, target, over(30)).unwrap();
        let other = check_flux(&lattice, &pair.swapped(), target, over(30)).unwrap();
        prop_assert!((one.error + other.error).abs() < 1e-12 || one.error.abs() > 0.2);
        if one.error.abs() < 0.1 / denominator as f64 {
            prop_assert_eq!(i8::from(one.sense), -i8::from(other.sense));
        }
    }
}

#[test]
fn public_types_cross_threads() {
    fn shared<T: Send + Sync>() -> usize {
        std::mem::size_of::<T>()
    }
    let sizes = [
        shared::<FluxCheck>(),
        shared::<fluxloom_plan::Apparatus>(),
        shared::<fluxloom_plan::Error>(),
    ];
    assert!(sizes.iter().all(|size| *size > 0));
}
