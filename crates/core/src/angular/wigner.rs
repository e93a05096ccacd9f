//! 3j and 6j symbols from Racah's sums over whole numbers.
//!
//! With a = j1+j2-j3, b = j1-j2+j3, c = -j1+j2+j3 and J = j1+j2+j3,
//!
//! ```text
//! (j1 j2 j3; m1 m2 m3) = (-1)^(j1-j2-m3) S sqrt(N)
//! S = sum_k (-1)^k C(a, k) C(b, j1-m1-k) C(c, j2+m2-k)
//! N = C(2j1, a) C(2j3, c) / [(J+1) C(J, 2j2) C(2j1, j1+m1) C(2j2, j2+m2) C(2j3, j3+m3)]
//!
//! {j1 j2 j3; j4 j5 j6} = S sqrt(D(123) / (D(156) D(426) D(453)))
//! S = sum_t (-1)^t C(t+1, J+1) C(a, t-j4-j5-j3) C(b, t-j4-j2-j6) C(c, t-j1-j5-j6)
//! D(123) = (J+1) C(J, 2j1) C(2j1, a)
//! ```
//!
//! S is exact, so that the sum may cancel to any degree, or to zero, without
//! losing digits; the factors of the root are whole numbers too, each rounded
//! once. The relative error stays below 1e-15.
//!
//! Range: every symbol with all j up to 20 is exact. In the 3j sum all terms
//! together are below 2^J <= 2^60. The 6j symbol is first turned so that J is
//! the largest of the four triad sums; the sum then runs over at most J/3 + 1
//! values of t, and all terms together are below C(4J/3+1, J/3) 2^J < 2^123 for
//! J <= 60. Larger ones are computed as long as every number on the way fits
//! into 128 bits (all 3j symbols with j up to 40); where one does not the
//! result is NaN, never a wrong number.
//!
//! Phases are those of Condon and Shortley. Source: Racah, Phys. Rev. 62, 438
//! (1942); as sums of binomial coefficients: Wei, Comput. Phys. Commun. 120, 222
//! (1999) (from memory; rederived from Racah's form).

use super::binomial::binomial;

/// The 3j symbol (j1 j2 j3; m1 m2 m3) from twice its arguments.
///
/// Zero where a selection rule is broken: the triangle, |m| > j, m and j not
/// both whole or both half, m1 + m2 + m3 not 0. NaN beyond the range of the
/// whole numbers: never for j up to 40.
///
/// ```
/// use fluxloom_core::angular::wigner_3j;
/// // (1/2 1 1/2; 1/2 0 -1/2) = 1/sqrt(6).
/// let symbol = wigner_3j([1, 2, 1], [1, 0, -1]);
/// assert!((symbol - 1.0 / 6.0_f64.sqrt()).abs() < 1e-15);
/// ```
#[must_use]
pub fn wigner_3j(twice_j: [u32; 3], twice_m: [i32; 3]) -> f64 {
    three_j(twice_j.map(i64::from), twice_m.map(i64::from))
}

/// The 6j symbol {j1 j2 j3; j4 j5 j6} from twice its arguments.
///
/// Zero where one of the triads (123), (156), (426), (453) breaks the triangle
/// rule. NaN beyond the range of the whole numbers: never for j up to 20.
///
/// ```
/// use fluxloom_core::angular::wigner_6j;
/// // {1/2 1/2 1; 1/2 1/2 1} = 1/6.
/// assert!((wigner_6j([1, 1, 2, 1, 1, 2]) - 1.0 / 6.0).abs() < 1e-15);
/// ```
#[must_use]
pub fn wigner_6j(twice_j: [u32; 6]) -> f64 {
    let [j1, j2, j3, j4, j5, j6] = twice_j.map(i64::from);
    // The same symbol with each triad in turn as the upper row.
    let turned = [
        [j1, j2, j3, j4, j5, j6],
        [j1, j5, j6, j4, j2, j3],
        [j4, j2, j6, j1, j5, j3],
        [j4, j5, j3, j1, j2, j6],
    ];
    let [Some(one), Some(two), Some(three), Some(four)] =
        turned.map(|[upper @ .., _, _, _]| Triad::new(upper))
    else {
        return 0.0;
    };
    let mut triads = [(one, 0_usize), (two, 1), (three, 2), (four, 3)];
    triads.sort_by_key(|(triad, _)| -triad.sum);
    let [(largest, place), others @ ..] = triads;
    let lower = turned.get(place).map_or([0; 3], |[_, _, _, lower @ ..]| *lower);
    six_j(&largest, lower, others.map(|(triad, _)| triad)).unwrap_or(f64::NAN)
}

/// The coefficient `<j1 m1 j2 m2|j m>`, real, from twice \[j1, j2, j\] and
/// twice \[m1, m2, m\]:
///
/// ```text
/// <j1 m1 j2 m2|j m> = (-1)^(j1-j2+m) sqrt(2j+1) (j1 j2 j; m1 m2 -m)
/// ```
///
/// Zero and NaN as for [`wigner_3j`].
#[must_use]
pub fn clebsch_gordan(twice_j: [u32; 3], twice_m: [i32; 3]) -> f64 {
    let [j1, j2, j] = twice_j.map(i64::from);
    let [m1, m2, m] = twice_m.map(i64::from);
    let phase = float(alternate((j1 - j2 + m) / 2, 1));
    let symbol = three_j([j1, j2, j], [m1, m2, -m]);
    if symbol == 0.0 { 0.0 } else { phase * float(i128::from(j + 1)).sqrt() * symbol }
}

fn three_j(twice_j: [i64; 3], twice_m: [i64; 3]) -> f64 {
    let mut projections = twice_j.iter().zip(&twice_m);
    if twice_m.iter().sum::<i64>() != 0 || !projections.all(|(j, m)| m.abs() <= *j && even(j + m)) {
        return 0.0;
    }
    Triad::new(twice_j).map_or(0.0, |triad| three_j_sum(&triad, twice_m).unwrap_or(f64::NAN))
}

/// The 3j symbol of arguments that obey the selection rules.
fn three_j_sum(triad: &Triad, twice_m: [i64; 3]) -> Option<f64> {
    let [j1, j2, j3] = triad.twice_j;
    let [m1, m2, m3] = twice_m;
    let [a, b, c] = triad.excess;
    let (down1, up2) = ((j1 - m1) / 2, (j2 + m2) / 2);
    let first = 0.max(down1 - b).max(up2 - c);
    let last = a.min(down1).min(up2);
    let mut sum = 0_i128;
    for k in first..=last {
        let term = product([binomial(a, k)?, binomial(b, down1 - k)?, binomial(c, up2 - k)?])?;
        sum = sum.checked_add(alternate(k, term))?;
    }
    let above = float(binomial(j1, a)?) * float(binomial(j3, c)?);
    let below = float(i128::from(triad.sum + 1))
        * float(binomial(triad.sum, j2)?)
        * float(binomial(j1, down1)?)
        * float(binomial(j2, up2)?)
        * float(binomial(j3, (j3 + m3) / 2)?);
    // The phase goes to the whole number, so that a sum of 0 is not turned into -0.
    Some(float(alternate((j1 - j2 - m3) / 2, sum)) * (above / below).sqrt())
}

/// The 6j symbol with the triad of largest sum as its upper row, the lower row,
/// and the other triads in any order.
fn six_j(upper: &Triad, twice_lower: [i64; 3], others: [Triad; 3]) -> Option<f64> {
    let [j1, j2, j3] = upper.twice_j;
    let [j4, j5, j6] = twice_lower;
    let [a, b, c] = upper.excess;
    let [sum156, sum426, sum453] =
        [[j1, j5, j6], [j4, j2, j6], [j4, j5, j3]].map(|triad| triad.iter().sum::<i64>() / 2);
    // No lower bound but J: it is the largest of the triad sums.
    let last = (a + sum453).min(b + sum426).min(c + sum156);
    let mut sum = 0_i128;
    for t in upper.sum..=last {
        let term = product([
            binomial(a, t - sum453)?,
            binomial(b, t - sum426)?,
            binomial(c, t - sum156)?,
            binomial(t + 1, upper.sum + 1)?,
        ])?;
        sum = sum.checked_add(alternate(t, term))?;
    }
    let [second, third, fourth] = others;
    let below =
        float(second.multinomial()?) * float(third.multinomial()?) * float(fourth.multinomial()?);
    Some(float(sum) * (float(upper.multinomial()?) / below).sqrt())
}

/// Three angular momenta that can be coupled to zero.
#[derive(Debug, Clone, Copy)]
struct Triad {
    /// 2j1, 2j2, 2j3.
    twice_j: [i64; 3],
    /// j1 + j2 + j3.
    sum: i64,
    /// a, b, c: the sum less twice j3, j2, j1.
    excess: [i64; 3],
}

impl Triad {
    fn new(twice_j: [i64; 3]) -> Option<Self> {
        let [j1, j2, j3] = twice_j;
        let twice_sum = j1 + j2 + j3;
        let sum = twice_sum / 2;
        let excess = [sum - j3, sum - j2, sum - j1];
        let fits = even(twice_sum) && excess.iter().all(|side| *side >= 0);
        fits.then_some(Self { twice_j, sum, excess })
    }

    /// (J+1) C(J, 2j1) C(2j1, a) = (J+1)!/(a! b! c!).
    fn multinomial(&self) -> Option<i128> {
        let ([j1, ..], [a, ..]) = (self.twice_j, self.excess);
        product([i128::from(self.sum + 1), binomial(self.sum, j1)?, binomial(j1, a)?])
    }
}

fn product<const N: usize>(numbers: [i128; N]) -> Option<i128> {
    numbers.into_iter().try_fold(1, i128::checked_mul)
}

fn even(n: i64) -> bool {
    n % 2 == 0
}

/// (-1)^n times a number.
fn alternate(n: i64, number: i128) -> i128 {
    if even(n) { number } else { -number }
}

/// The nearest double: the one rounding of a whole number.
#[allow(clippy::cast_precision_loss)]
fn float(n: i128) -> f64 {
    n as f64
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Twice m from -j to j.
    fn projections(twice_j: u32) -> impl Iterator<Item = i32> {
        let limit = i32::try_from(twice_j).unwrap();
        (-limit..=limit).step_by(2)
    }

    /// Twice the j that couple with two others, all parities right.
    fn couplings(j1: u32, j2: u32) -> impl Iterator<Item = u32> {
        (j1.abs_diff(j2)..=j1 + j2).step_by(2)
    }

    fn minus_one_to(twice_n: u32) -> f64 {
        assert!(twice_n.is_multiple_of(2));
        if twice_n.is_multiple_of(4) { 1.0 } else { -1.0 }
    }

    #[test]
    fn broken_selection_rules_give_zero() {
        let cases = [
            ([2, 2, 6], [0, 0, 0]),
            ([2, 6, 2], [0, 0, 0]),
            ([6, 2, 2], [0, 0, 0]),
            ([1, 1, 1], [1, -1, 0]),
            ([1, 2, 2], [1, 0, -1]),
            ([2, 2, 2], [4, -2, -2]),
            ([2, 2, 2], [1, -1, 0]),
            ([2, 2, 2], [2, 0, 0]),
            ([1, 1, 2], [0, 0, 0]),
            ([u32::MAX, 0, 0], [i32::MIN, i32::MIN, i32::MIN]),
            ([u32::MAX; 3], [i32::MAX; 3]),
        ];
        for (twice_j, twice_m) in cases {
            assert_eq!(wigner_3j(twice_j, twice_m), 0.0, "{twice_j:?} {twice_m:?}");
        }
        // An odd sum J of three whole ones with m = 0: the terms cancel exactly.
        assert_eq!(wigner_3j([2, 2, 2], [0; 3]), 0.0);
        assert_eq!(wigner_3j([40, 40, 38], [0; 3]), 0.0);
        for broken in [[2, 2, 6, 2, 2, 2], [2, 2, 2, 2, 2, 6], [1, 1, 2, 2, 2, 2], [1; 6]] {
            assert_eq!(wigner_6j(broken), 0.0, "{broken:?}");
        }
        assert_eq!(wigner_6j([u32::MAX; 6]), 0.0);
    }

    #[test]
    fn closed_forms() {
        // source: Edmonds, Angular Momentum in Quantum Mechanics, eqs. 3.7.9 and
        // 6.3.2 (from memory): (j j 0; m -m 0) and {a b c; 0 c b}.
        for twice_j in 0..=60_u32 {
            let size = 1.0 / (f64::from(twice_j) + 1.0).sqrt();
            for m in projections(twice_j).step_by(3) {
                let phase = minus_one_to(twice_j.checked_add_signed(-m).unwrap());
                let found = wigner_3j([twice_j, twice_j, 0], [m, -m, 0]);
                assert!((found - phase * size).abs() < 4e-16, "{twice_j} {m}");
            }
        }
        for (b, c) in [(1, 1), (3, 4), (11, 9), (40, 39), (40, 40)] {
            for a in couplings(b, c).filter(|a| *a <= 40) {
                let size = 1.0 / ((f64::from(b) + 1.0) * (f64::from(c) + 1.0)).sqrt();
                let expected = minus_one_to(a + b + c) * size;
                assert!((wigner_6j([a, b, c, 0, c, b]) - expected).abs() < 4e-16, "{a} {b} {c}");
            }
        }
    }

    #[test]
    fn coupled_states_are_orthonormal() {
        for (j1, j2) in [(1, 1), (7, 2), (9, 2), (8, 3), (11, 11), (20, 17), (40, 20)] {
            for (j, other) in couplings(j1, j2).flat_map(|j| [(j, j), (j, j + 2)]) {
                for m in projections(j).step_by(2) {
                    let sum: f64 = projections(j1)
                        .map(|m1| {
                            let twice_m = [m1, m - m1, m];
                            clebsch_gordan([j1, j2, j], twice_m)
                                * clebsch_gordan([j1, j2, other], twice_m)
                        })
                        .sum();
                    let expected = if j == other { 1.0 } else { 0.0 };
                    assert!((sum - expected).abs() < 4e-15, "{j1} {j2} {j} {other} {m}: {sum}");
                }
            }
        }
    }

    #[test]
    fn stretched_states_have_positive_coefficients() {
        // The convention of Condon and Shortley: <j1 j1 j2 j-j1|j j> > 0.
        for (j1, j2) in [(1, 1), (2, 1), (1, 2), (7, 3), (3, 7), (8, 11)] {
            for j in couplings(j1, j2) {
                let (m1, m) = (i32::try_from(j1).unwrap(), i32::try_from(j).unwrap());
                assert!(clebsch_gordan([j1, j2, j], [m1, m - m1, m]) > 0.0, "{j1} {j2} {j}");
            }
        }
        let singlet = clebsch_gordan([1, 1, 0], [-1, 1, 0]);
        assert!((singlet + 0.5_f64.sqrt()).abs() < 2e-16, "{singlet}");
    }

    #[test]
    fn recouplings_are_orthonormal() {
        // source: Edmonds, eqs. 6.2.9 and 6.2.11 (from memory):
        // sum_x (2x+1)(2p+1) {a b x; c d p} {a b x; c d q} = delta_pq,
        // sum_x (-1)^(p+q+x) (2x+1) {a b x; c d p} {c d x; b a q} = {c a q; d b p}.
        for [a, b, c, d] in [[1, 1, 1, 1], [2, 3, 2, 3], [9, 7, 2, 4], [8, 11, 3, 4], [20; 4]] {
            let shared = |(a, b), (c, d)| {
                couplings(a, b).filter(move |j| couplings(c, d).any(|same| same == *j))
            };
            let weight = |x| f64::from(x) + 1.0;
            for p in shared((a, d), (b, c)) {
                let first = |x| weight(x) * wigner_6j([a, b, x, c, d, p]);
                for q in shared((a, d), (b, c)) {
                    let sum: f64 =
                        couplings(a, b).map(|x| first(x) * wigner_6j([a, b, x, c, d, q])).sum();
                    let expected = if p == q { 1.0 / weight(p) } else { 0.0 };
                    assert!((sum - expected).abs() < 2e-15, "{a} {b} {c} {d} {p} {q}: {sum}");
                }
                for q in shared((a, c), (b, d)) {
                    let second = |x| minus_one_to(p + q + x) * wigner_6j([c, d, x, b, a, q]);
                    let sum: f64 = couplings(a, b).map(|x| first(x) * second(x)).sum();
                    let expected = wigner_6j([c, a, q, d, b, p]);
                    assert!((sum - expected).abs() < 2e-15, "{a} {b} {c} {d} {p} {q}: {sum}");
                }
            }
        }
    }

    #[test]
    fn every_symbol_up_to_twenty_is_a_number() {
        // The hardest cases of the bound in the module's text.
        for j in [38, 39, 40_u32] {
            for other in (0..=40_u32).step_by(2) {
                for lower in 0..=40 {
                    for six in [[j, j, other, lower, lower, other], [j, j, other, lower, lower, 40]]
                    {
                        assert!(wigner_6j(six).is_finite(), "{six:?}");
                    }
                }
            }
        }
        assert!(wigner_3j([80, 80, 80], [0, 0, 0]).is_finite());
        assert!(wigner_3j([80, 79, 79], [-2, 1, 1]).is_finite());
    }

    #[test]
    fn beyond_the_range_there_is_no_number() {
        assert!(wigner_3j([400, 400, 400], [0; 3]).is_nan());
        assert!(wigner_6j([400; 6]).is_nan());
        assert!(wigner_3j([u32::MAX - 1; 3], [0; 3]).is_nan());
        assert!(wigner_6j([u32::MAX - 1; 6]).is_nan());
        assert!(clebsch_gordan([u32::MAX - 1; 3], [0, i32::MIN, i32::MIN]).is_nan());
    }
}
