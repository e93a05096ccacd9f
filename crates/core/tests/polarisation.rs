//! Polarisation vectors: conventions, angles of the bench, refusals.

#![allow(clippy::unwrap_used)]

use fluxloom_core::Error;
use fluxloom_core::light::polarisation::{self, Bench, Helicity};
use fluxloom_core::vector::{cross, dot, unit};
use fluxloom_testkit::assert_near;
use num_complex::Complex64;
use proptest::prelude::*;

type Vector = [f64; 3];
type Field = [Complex64; 3];

const X: Vector = [1.0, 0.0, 0.0];
const Y: Vector = [0.0, 1.0, 0.0];
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

fn assert_same(found: Field, expected: Field) {
    for (a, b) in found.iter().zip(&expected) {
        assert!((a - b).norm() < 1e-15, "{found:?} is not {expected:?}");
    }
}

#[test]
fn sigma_plus_about_z_is_what_the_convention_says() {
    // source: the agreed convention, -i(u* x u)_z = +1 for sigma+ about z.
    let half = 0.5_f64.sqrt();
    let plus = polarisation::circular(Z, Helicity::Plus).unwrap();
    assert_same(plus, [half.into(), Complex64::new(0.0, half), 0.0.into()]);
    assert_near(helicity(plus, Z), 1.0, 1e-15, "helicity");
    let minus = polarisation::circular([0.0, 0.0, 7.0], Helicity::Minus).unwrap();
    assert_same(minus, plus.map(|x| x.conj()));
    // Against z, angular momentum along the direction is sigma- about z.
    let down = polarisation::circular([0.0, 0.0, -1.0], Helicity::Plus).unwrap();
    assert_near(helicity(down, Z), -1.0, 1e-15, "about z");
}

#[test]
fn the_field_of_positive_helicity_turns_like_a_right_hand_about_the_direction() {
    // Closed form: Re(u exp(-i w t)) = (cos wt, sin wt, 0)/sqrt(2).
    let u = polarisation::circular(Z, Helicity::Plus).unwrap();
    for step in 0..8 {
        let phase = f64::from(step) * 0.7;
        let turn = Complex64::from_polar(1.0, -phase);
        let field = u.map(|x| (x * turn).re * 2.0_f64.sqrt());
        for (found, expected) in field.into_iter().zip([phase.cos(), phase.sin(), 0.0]) {
            assert_near(found, expected, 1e-15, "field");
        }
    }
}

#[test]
fn the_first_axis_of_circular_light_is_as_documented() {
    for (direction, first, second) in
        [(Z, X, Y), (Y, X, [0.0, 0.0, -1.0]), (X, Y, Z), ([-1.0, 0.0, 0.0], Y, [0.0, 0.0, -1.0])]
    {
        let u = polarisation::circular(direction, Helicity::Plus).unwrap();
        assert_same(u.map(|x| x * 2.0_f64.sqrt()), {
            let [a, b] = [real(first), real(second).map(|x| x * Complex64::I)];
            [0, 1, 2].map(|k| a[k] + b[k])
        });
    }
}

#[test]
fn linear_light_is_the_part_across_the_direction() {
    let u = polarisation::linear([0.0, 0.0, 2.0], [3.0, 0.0, 5.0]).unwrap();
    assert_eq!(u, real(X));
    let u = polarisation::linear([1.0, 1.0, 0.0], [1.0, 0.0, 0.0]).unwrap();
    let half = 0.5_f64.sqrt();
    assert_same(u, real([half, -half, 0.0]));
}

#[test]
fn bench_angles_count_from_the_plane() {
    let bench = |direction, polarisation_deg, ellipticity_deg| {
        let bench = Bench { polarisation_deg, ellipticity_deg };
        polarisation::from_bench(direction, Z, bench).unwrap()
    };
    // z x x = y lies in the plane; 90 is along the normal.
    assert_same(bench(X, 0.0, 0.0), real(Y));
    assert_same(bench(X, 90.0, 0.0), real(Z));
    assert_same(bench(X, 180.0, 0.0), real([0.0, -1.0, 0.0]));
    assert_same(bench(X, -30.0, 0.0), real([0.0, 0.75_f64.sqrt(), -0.5]));
    assert_same(bench([0.0, -2.0, 0.0], 0.0, 0.0), real(X));
    for degrees in [-170.0, -20.0, 0.0, 33.0, 90.0] {
        assert_near(helicity(bench(X, degrees, 45.0), X), 1.0, 1e-15, "circular");
        let tipped = [1.0, 0.4, 0.3];
        let u = bench(tipped, degrees, -12.0);
        assert_near(helicity(u, tipped), (-24.0_f64).to_radians().sin(), 1e-15, "elliptical");
        assert!(product(real(tipped), u).norm() < 1e-15);
        // The long axis is that of the linear light of the same angle.
        let long = product(bench(tipped, degrees, 0.0), u);
        assert!((long - 12.0_f64.to_radians().cos()).norm() < 1e-15, "{long}");
    }
}

#[test]
fn polarisations_that_are_none() {
    let refused = |outcome: Result<Field, Error>, code, message: &str| {
        let error = outcome.unwrap_err();
        assert_eq!(error.code(), code);
        assert_eq!(error.to_string(), message);
    };
    refused(
        polarisation::linear([0.0, 0.0, 2.0], [1e-7, 0.0, -1.0]),
        "polarisation.parallel",
        "along = [1e-7, 0, -1] is parallel to direction = [0, 0, 2]: light has no field along its \
         own direction, so give a vector across it",
    );
    let bench = Bench { polarisation_deg: 0.0, ellipticity_deg: 0.0 };
    refused(
        polarisation::from_bench(Z, Z, bench),
        "polarisation.parallel",
        "plane_normal = [0, 0, 1] is parallel to direction = [0, 0, 1]: light has no field along \
         its own direction, so give a vector across it",
    );
    refused(
        polarisation::elliptical(Z, X, 45.5),
        "polarisation.ellipticity_out_of_range",
        "ellipticity_deg = 45.5 is outside -45 <= ellipticity_deg <= 45; 0 is linear, +-45 \
         circular; turn the long axis instead of going beyond",
    );
    refused(
        polarisation::from_bench(X, Z, Bench { polarisation_deg: 181.0, ..bench }),
        "polarisation.angle_out_of_range",
        "polarisation_deg = 181 is outside -180 <= polarisation_deg <= 180; give the angle from \
         the plane of the beams: 0 in the plane, 90 along its normal",
    );
    assert_eq!(polarisation::linear([0.0; 3], X).unwrap_err().code(), "geometry.no_direction");
    assert_eq!(
        polarisation::linear(X, [f64::NAN, 0.0, 0.0]).unwrap_err().to_string(),
        "along = [NaN, 0, 0] has no direction: give three finite numbers that are not all zero"
    );
    for number in [0.0, 0.5, f64::NAN, -2.0] {
        let error = Helicity::from_number(number).unwrap_err();
        assert_eq!(error.code(), "polarisation.bad_helicity");
    }
    assert_eq!(Helicity::from_number(-1.0), Ok(Helicity::Minus));
}

prop_compose! {
    fn vectors()(x in -1.0..1.0_f64, y in -1.0..1.0_f64, z in -1.0..1.0_f64,
                 scale in -12..12_i32) -> Vector {
        [x, y, z].map(|part| part * 10.0_f64.powi(scale))
    }
}

proptest! {
    #[test]
    fn polarisations_have_unit_length_lie_across_and_turn_as_asked(
        direction in vectors(), along in vectors(), chi in -45.0..=45.0_f64,
    ) {
        let Ok(u) = polarisation::elliptical(direction, along, chi) else { return Ok(()) };
        let k = unit(direction, "").unwrap();
        prop_assert!((product(u, u).re - 1.0).abs() < 2e-15);
        prop_assert!(product(real(k), u).norm() < 2e-15);
        prop_assert!((helicity(u, k) - (2.0 * chi).to_radians().sin()).abs() < 4e-15);
        // The long axis lies in the plane of direction and along, on the side of along.
        let long = u.map(|x| x.re);
        let along = unit(along, "").unwrap();
        prop_assert!(dot(cross(k, along), long).abs() < 1e-15);
        prop_assert!(dot(along, long) >= 0.0);
    }
}
