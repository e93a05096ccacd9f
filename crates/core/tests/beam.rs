//! Laser beams against closed forms; refusals; documents.

#![allow(clippy::unwrap_used)]

use fluxloom_core::light::polarisation::{self, Helicity};
use fluxloom_core::vector::{cross, unit};
use fluxloom_core::{Beam, BeamInput, Document, Error};
use fluxloom_testkit::assert_near;
use num_complex::Complex64;
use proptest::prelude::*;

type Vector = [f64; 3];
type Field = [Complex64; 3];

const X: Vector = [1.0, 0.0, 0.0];
const Z: Vector = [0.0, 0.0, 1.0];

fn real(vector: Vector) -> Field {
    vector.map(Complex64::from)
}

/// u* . v.
fn product(u: Field, v: Field) -> Complex64 {
    u.iter().zip(&v).map(|(a, b)| a.conj() * b).sum()
}

/// -i (u* x u).k.
fn helicity(u: Field, direction: Vector) -> f64 {
    let [x, y, z] = u;
    let turned =
        [y.conj() * z - z.conj() * y, z.conj() * x - x.conj() * z, x.conj() * y - y.conj() * x];
    let k = unit(direction, "direction").unwrap();
    (-Complex64::I * product(real(k), turned)).re
}

fn round(waist_um: f64) -> BeamInput {
    BeamInput {
        wavelength_nm: 1064.0,
        power_mw: 100.0,
        waist_um: [waist_um; 2],
        direction: X,
        polarisation: real(Z),
        ..BeamInput::CENTRED
    }
}

/// A beam with everything that can be odd about one.
fn odd() -> BeamInput {
    let direction = [0.3, -1.2, 2.0];
    BeamInput {
        wavelength_nm: 780.3,
        power_mw: 12.5,
        waist_um: [35.0, 90.0],
        direction,
        polarisation: polarisation::elliptical(direction, [1.0, 1.0, 0.2], -17.0).unwrap(),
        waist_axis: Some(cross(direction, [0.4, 0.1, -1.0])),
        focus_um: [120.0, -40.0, 7.5],
    }
}

// Intensity.

#[test]
fn figures_of_a_beam() {
    let beam = Beam::new(round(100.0)).unwrap();
    // Closed forms: 2 P/(pi w^2) and pi w^2/lambda.
    assert_near(beam.peak_intensity_w_per_m2(), 0.2e8 / std::f64::consts::PI, 1e-8, "peak");
    assert_near(beam.rayleigh_range_um()[1], 29_526.246_744_264_97, 1e-8, "Rayleigh range");
    // source: Steck, Rubidium 87 D Line Data (from memory): D2 line.
    let probe = beam.with_wavelength_nm(780.241_209_686).unwrap();
    assert_near(probe.frequency_hz(), 384.230_484_468_5e12, 3e4, "frequency");
    assert_eq!(beam.with_power_mw(7.0).unwrap().power_mw(), 7.0);
    assert_eq!(Beam::new(BeamInput { power_mw: 7.0, ..round(100.0) }), beam.with_power_mw(7.0));
}

#[test]
fn radii_grow_by_the_root_of_two_over_a_rayleigh_range() {
    let beam = Beam::new(BeamInput { waist_axis: Some(Z), waist_um: [40.0, 70.0], ..round(1.0) });
    let beam = beam.unwrap();
    let peak = beam.peak_intensity_w_per_m2();
    for (place, range_um) in beam.rayleigh_range_um().into_iter().enumerate() {
        let other = beam.rayleigh_range_um()[1 - place];
        let expected = peak / (2.0 * (1.0 + (range_um / other).powi(2))).sqrt();
        let on_axis = beam.intensity_w_per_m2([-range_um, 0.0, 0.0]).unwrap();
        assert_near(on_axis, expected, 1e-9 * peak, "on the axis");
        let radius_um = beam.waist_um()[place] * 2.0_f64.sqrt();
        let across = if place == 0 { [0.0, 0.0, radius_um] } else { [0.0, radius_um, 0.0] };
        let at_um = [range_um, across[1], across[2]];
        let off_axis = beam.intensity_w_per_m2(at_um).unwrap();
        assert_near(off_axis, expected * (-2.0_f64).exp(), 1e-9 * peak, "at the radius");
    }
}

#[test]
fn the_power_passes_through_every_plane_across_the_beam() {
    // Quadrature by the trapezium rule, which for a Gaussian converges at once.
    let beam = Beam::new(odd()).unwrap();
    let k = beam.unit_direction();
    let first = unit(cross([1.0, 0.3, 0.2], k), "").unwrap();
    let second = cross(k, first);
    for distance_um in [0.0, -4000.0, 25_000.0] {
        let reach = 8.0 * 90.0_f64.hypot(distance_um * 0.7803 / (std::f64::consts::PI * 35.0));
        let steps = 400;
        let step = 2.0 * reach / f64::from(steps);
        let mut power_mw = 0.0;
        for a in 0..=steps {
            for b in 0..=steps {
                let [s, t] = [a, b].map(|n| f64::from(n) * step - reach);
                let at_um = [0, 1, 2].map(|n| {
                    beam.focus_um()[n] + distance_um * k[n] + s * first[n] + t * second[n]
                });
                power_mw += beam.intensity_w_per_m2(at_um).unwrap() * step * step * 1e-9;
            }
        }
        assert_near(power_mw, beam.power_mw(), 1e-9, "power");
    }
}

#[test]
fn waists_of_unknown_direction_are_asked_for_off_the_axis_only() {
    let input = BeamInput { waist_axis: None, ..odd() };
    let (blind, seeing) = (Beam::new(input).unwrap(), Beam::new(odd()).unwrap());
    for distance in [0.0, 3.0, -1e4, 3e7] {
        let at_um = [0, 1, 2].map(|n| input.focus_um[n] + distance * input.direction[n]);
        let found = blind.intensity_w_per_m2(at_um).unwrap();
        let expected = seeing.intensity_w_per_m2(at_um).unwrap();
        assert_near(found, expected, 1e-12 * expected, "on the axis");
    }
    let error = blind.intensity_w_per_m2([120.0, -40.0, 8.0]).unwrap_err();
    assert_eq!(error.code(), "beam.no_waist_axis");
    assert_eq!(
        error.to_string(),
        "at_um = [120, -40, 8] is off the axis of a beam with waist_um = [35, 90], and the \
         intensity there depends on which way the waists lie: give waist_axis, the direction of \
         the first"
    );
    // A round beam has no such question, and an axis given changes nothing.
    let round_beam = Beam::new(round(50.0)).unwrap();
    let turned = Beam::new(BeamInput { waist_axis: Some([0.0, 0.3, 1.0]), ..round(50.0) }).unwrap();
    for at_um in [[0.0, 20.0, 0.0], [1e4, -5.0, 33.0]] {
        let found = round_beam.intensity_w_per_m2(at_um);
        assert_eq!(found, turned.intensity_w_per_m2(at_um));
    }
}

#[test]
fn mirrors_send_the_light_straight_back() {
    let beam = Beam::new(BeamInput {
        direction: Z,
        polarisation: polarisation::circular(Z, Helicity::Plus).unwrap(),
        ..odd()
    });
    // The odd waist axis does not lie across z.
    assert_eq!(beam.unwrap_err().code(), "beam.not_transverse");
    let beam = Beam::new(BeamInput {
        polarisation: polarisation::circular(odd().direction, Helicity::Plus).unwrap(),
        ..odd()
    })
    .unwrap();
    let back = beam.reflected(0.25).unwrap();
    assert_eq!(back.direction(), odd().direction.map(|x| -x));
    assert_eq!(back.power_mw(), 0.25 * 12.5);
    assert_eq!(back.polarisation(), beam.polarisation());
    assert_near(helicity(back.unit_polarisation(), back.direction()), -1.0, 1e-15, "helicity");
    assert_eq!(back.reflected(1.0).unwrap().direction(), beam.direction());
    for at_um in [[0.0; 3], [130.0, -20.0, 900.0]] {
        let (there, here) =
            (back.intensity_w_per_m2(at_um).unwrap(), beam.intensity_w_per_m2(at_um).unwrap());
        assert_near(there, 0.25 * here, 1e-12 * here, "intensity");
    }
    assert_eq!(beam.reflected(0.0).unwrap().intensity_w_per_m2([0.0; 3]), Ok(0.0));
    let error = beam.reflected(99.0).unwrap_err();
    assert_eq!(error.code(), "beam.power_fraction_out_of_range");
}

// Refusals.

#[test]
fn beams_that_cannot_be() {
    let good = round(50.0);
    let slanted = [0.2.into(), 0.0.into(), Complex64::I];
    for (input, code, message) in [
        (BeamInput { wavelength_nm: 1.064, ..good }, "light.wavelength_out_of_range", "in nano"),
        (BeamInput { power_mw: -1.0, ..good }, "beam.power_out_of_range", "power_mw = -1 is out"),
        (BeamInput { waist_um: [0.4; 2], ..good }, "beam.waist_out_of_range", "waist_um = 0.4 is"),
        (
            BeamInput { waist_um: [50.0, 0.4], ..good },
            "beam.waist_out_of_range",
            "waist_um[1] = 0.4 is outside 0.5 <= waist_um[1] <= 100000;",
        ),
        (BeamInput { direction: [0.0; 3], ..good }, "geometry.no_direction", "direction = ["),
        (
            BeamInput { polarisation: [Complex64::ZERO; 3], ..good },
            "geometry.no_direction",
            "polarisation = [0, 0, 0] has no direction: give three finite numbers, real or complex",
        ),
        (
            BeamInput {
                polarisation: [0.0.into(), Complex64::new(1.0, f64::NAN), Complex64::I],
                ..good
            },
            "geometry.no_direction",
            "polarisation = [0, 1+NaNj, 1j] has no direction",
        ),
        (
            BeamInput { polarisation: slanted, ..good },
            "beam.not_transverse",
            "polarisation leans 11.31 degrees out of the plane across direction, where it \
             must lie: the nearest vector across direction is [0, 0, 1j]",
        ),
        (
            BeamInput { polarisation: real(X), ..good },
            "beam.not_transverse",
            "polarisation leans 90 degrees out of the plane across direction, where it \
             must lie: it lies along direction, so give a vector across it",
        ),
        (
            BeamInput { waist_axis: Some([-1.0, 1.0, 0.0]), ..good },
            "beam.not_transverse",
            "waist_axis leans 45 degrees out of the plane across direction, where it \
             must lie: the nearest vector across direction is [0, 1, 0]",
        ),
        (BeamInput { waist_axis: Some([0.0; 3]), ..good }, "geometry.no_direction", "waist_axis ="),
        (
            BeamInput { focus_um: [0.0, f64::INFINITY, 0.0], ..good },
            "beam.focus_out_of_range",
            "focus_um[1] = inf is outside",
        ),
        (BeamInput::CENTRED, "light.wavelength_out_of_range", "wavelength_nm = NaN"),
    ] {
        let error = Beam::new(input).unwrap_err();
        assert_eq!(error.code(), code, "{error}");
        assert!(error.to_string().contains(message), "{error}");
    }
    let error = Beam::new(good).unwrap().intensity_w_per_m2([0.0, 0.0, 2e8]).unwrap_err();
    assert_eq!(error.code(), "beam.position_out_of_range");
}

#[test]
fn leaning_by_a_millionth_is_let_pass_and_taken_out() {
    let leaning = |lean: f64| {
        Beam::new(BeamInput { polarisation: real([2.0 * lean, 0.0, -2.0]), ..round(50.0) })
    };
    let beam = leaning(0.99e-6).unwrap();
    assert_eq!(beam.polarisation(), real([1.98e-6, 0.0, -2.0]));
    assert_eq!(beam.unit_polarisation(), real([0.0, 0.0, -1.0]));
    assert!(leaning(1.01e-6).is_err());
}

// Random beams.

prop_compose! {
    fn vectors()(x in -1.0..1.0_f64, y in -1.0..1.0_f64, z in -1.0..1.0_f64,
                 scale in -12..12_i32) -> Vector {
        [x, y, z].map(|part| part * 10.0_f64.powi(scale))
    }
}

prop_compose! {
    fn beams()(wavelength_nm in 100.0..20_000.0_f64, power_mw in 0.0..1e6_f64,
               first in 0.5..1e5_f64, second in 0.5..1e5_f64, direction in vectors(),
               along in vectors(), chi in -45.0..=45.0_f64, axis in proptest::option::of(vectors()),
               focus_um in proptest::array::uniform3(-1e8..1e8_f64))
              -> Result<Beam, Error> {
        let polarisation = polarisation::elliptical(direction, along, chi)?;
        Beam::new(BeamInput {
            wavelength_nm, power_mw, waist_um: [first, second], direction, polarisation,
            waist_axis: axis.map(|axis| cross(direction, axis)), focus_um,
        })
    }
}

proptest! {
    #[test]
    fn documents_keep_every_bit(beam in beams()) {
        let Ok(beam) = beam else { return Ok(()) };
        let text = beam.to_json().unwrap();
        let again = Beam::from_json(&text).unwrap();
        prop_assert_eq!(again, beam);
        prop_assert_eq!(again.to_json().unwrap(), text);
    }
}

#[test]
fn documents_hold_the_arguments_and_nothing_else() {
    let text = Beam::new(round(50.0)).unwrap().to_json().unwrap();
    assert_eq!(
        text,
        "{\"format\":\"fluxloom-beam\",\"version\":1,\"wavelength_nm\":1064.0,\"power_mw\":100.0,\
         \"waist_um\":[50.0,50.0],\"direction\":[1.0,0.0,0.0],\
         \"polarisation\":[[0.0,0.0],[0.0,0.0],[1.0,0.0]],\"focus_um\":[0.0,0.0,0.0]}"
    );
    for (from, to) in [("[1.0,0.0]]", "[0.0,0.0]]"), ("50.0,", "0.1,"), ("power", "pwr")] {
        let fault = Beam::from_json(&text.replacen(from, to, 1)).unwrap_err();
        assert_eq!(fault.code, "file.not_valid", "{fault}");
    }
}
