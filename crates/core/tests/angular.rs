//! 3j and 6j symbols against an independent library, and their symmetries.

#![allow(clippy::unwrap_used)]

use fluxloom_core::angular::{clebsch_gordan, wigner_3j, wigner_6j};
use fluxloom_testkit::assert_near;
use proptest::prelude::*;
use serde_json::Value;

/// Twice angular momenta or projections, and the value that follows them.
fn rows<const N: usize>(table: &Value) -> Vec<([i32; N], f64)> {
    let row = |row: &Value| {
        let (value, numbers) = row.as_array().unwrap().split_last().unwrap();
        let whole = |number: &Value| i32::try_from(number.as_i64().unwrap()).unwrap();
        let numbers: Vec<i32> = numbers.iter().map(whole).collect();
        (numbers.try_into().unwrap(), value.as_f64().unwrap())
    };
    table.as_array().unwrap().iter().map(row).collect()
}

#[track_caller]
fn assert_same(found: f64, expected: f64, what: &str) {
    assert_near(found, expected, 2e-15_f64.min(1e-14 * expected.abs()), what);
}

/// (-1)^n from twice n.
fn sign(twice_n: u32) -> f64 {
    assert!(twice_n.is_multiple_of(2));
    if twice_n.is_multiple_of(4) { 1.0 } else { -1.0 }
}

const ORDERS: [[usize; 3]; 6] = [[0, 1, 2], [1, 2, 0], [2, 0, 1], [1, 0, 2], [0, 2, 1], [2, 1, 0]];

#[test]
fn three_j_symbols_against_an_independent_library() {
    // source: tests/reference/wigner.json, made by sympy; the script stands beside it.
    let reference = fluxloom_testkit::reference("wigner.json");
    let rows = rows::<5>(&reference["rows_3j"]);
    assert!(rows.len() > 3000);
    for ([j1, j2, j3, m1, m2], expected) in rows {
        let twice_j = [j1, j2, j3].map(i32::unsigned_abs);
        let twice_m = [m1, m2, -m1 - m2];
        let what = format!("2j = {twice_j:?}, 2m = {twice_m:?}");
        assert_same(wigner_3j(twice_j, twice_m), expected, &what);
        let odd = sign(twice_j.iter().sum());
        for (place, order) in ORDERS.iter().enumerate() {
            let turned = if place < 3 { expected } else { odd * expected };
            let (j, m) = (order.map(|k| twice_j[k]), order.map(|k| twice_m[k]));
            assert_same(wigner_3j(j, m), turned, &what);
            assert_same(wigner_3j(j, m.map(|m| -m)), odd * turned, &what);
        }
    }
}

#[test]
fn six_j_symbols_against_an_independent_library() {
    // source: tests/reference/wigner.json, made by sympy; the script stands beside it.
    // Each row stands for the up to 24 arrangements of equal value.
    let reference = fluxloom_testkit::reference("wigner.json");
    let rows = rows::<6>(&reference["rows_6j"]);
    assert!(rows.len() > 3000);
    for (twice_j, expected) in rows {
        let twice_j = twice_j.map(i32::unsigned_abs);
        for order in ORDERS {
            let (upper, lower) = (order.map(|k| twice_j[k]), order.map(|k| twice_j[k + 3]));
            for straight in
                [[true; 3], [true, false, false], [false, true, false], [false, false, true]]
            {
                let mut arranged = [0; 6];
                for k in 0..3 {
                    let pair =
                        if straight[k] { (upper[k], lower[k]) } else { (lower[k], upper[k]) };
                    (arranged[k], arranged[k + 3]) = pair;
                }
                assert_same(wigner_6j(arranged), expected, &format!("{{{arranged:?}}}"));
            }
        }
    }
}

#[test]
fn a_table_of_coefficients() {
    // source: Review of Particle Physics, table of Clebsch-Gordan coefficients
    // (from memory): 1 x 1/2, 3/2 x 1 and 2 x 1; signed squares.
    let table = [
        ([2, 1, 3], [2, -1, 1], 1.0 / 3.0),
        ([2, 1, 1], [2, -1, 1], 2.0 / 3.0),
        ([2, 1, 1], [0, 1, 1], -1.0 / 3.0),
        ([3, 2, 3], [3, 0, 3], 3.0 / 5.0),
        ([3, 2, 3], [1, 2, 3], -2.0 / 5.0),
        ([3, 2, 1], [3, -2, 1], 1.0 / 2.0),
        ([3, 2, 1], [1, 0, 1], -1.0 / 3.0),
        ([4, 2, 2], [4, -2, 2], 3.0 / 5.0),
        ([4, 2, 2], [2, 0, 2], -3.0 / 10.0),
        ([4, 2, 4], [2, 0, 2], 1.0 / 6.0),
    ];
    for (twice_j, twice_m, signed_square) in table {
        let expected = f64::abs(signed_square).sqrt().copysign(signed_square);
        let found = clebsch_gordan(twice_j, twice_m);
        assert_near(found, expected, 3e-16, &format!("{twice_j:?} {twice_m:?}"));
    }
}

/// Twice j1, j2, j3 that couple, j1 and j2 up to a limit.
fn triads(limit: u32) -> impl Strategy<Value = [u32; 3]> {
    (0..=limit, 0..=limit, any::<prop::sample::Index>()).prop_map(|(j1, j2, pick)| {
        let thirds: Vec<u32> = (j1.abs_diff(j2)..=j1 + j2).step_by(2).collect();
        [j1, j2, *pick.get(&thirds)]
    })
}

proptest! {
    #[test]
    fn three_j_symbols_are_orthonormal(twice_j in triads(40)) {
        let [j1, j2, j3] = twice_j;
        let limits = [j1, j2, j3].map(|j| i32::try_from(j).unwrap());
        let projections = |limit: i32| (-limit..=limit).step_by(2);
        let sum: f64 = projections(limits[0])
            .flat_map(|m1| projections(limits[1]).map(move |m2| [m1, m2, -m1 - m2]))
            .map(|twice_m| wigner_3j(twice_j, twice_m).powi(2))
            .sum();
        prop_assert!((sum - 1.0).abs() < 4e-15, "{sum}");
    }

    #[test]
    fn no_arguments_bring_it_down(
        twice_j in prop::array::uniform6(prop_oneof![0_u32..200, any::<u32>()]),
        twice_m in prop::array::uniform2(prop_oneof![-200_i32..200, any::<i32>()]),
    ) {
        let [j1, j2, j3, ..] = twice_j;
        let [m1, m2] = twice_m;
        let bounded = |symbol: f64| symbol.is_nan() || symbol.abs() <= 1.0 + 1e-15;
        let third = m1.wrapping_add(m2).wrapping_neg();
        prop_assert!(bounded(wigner_3j([j1, j2, j3], [m1, m2, third])));
        prop_assert!(bounded(wigner_6j(twice_j)));
    }
}
