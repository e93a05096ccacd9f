//! Flux as a person writes it, and the fractions next to a measured one.
//!
//! A flux is in flux quanta per plaquette, a fraction p/q or a real number.
//! Neighbouring fractions come from the Farey sequence (G. H. Hardy, E. M.
//! Wright, An Introduction to the Theory of Numbers, ch. III; from memory).

use serde::{Deserialize, Serialize};

use crate::error::Error;
use crate::limits;

/// A fraction in lowest terms, denominator positive.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash, Serialize, Deserialize)]
#[serde(try_from = "String", into = "String")]
pub struct Fraction {
    numerator: i64,
    denominator: i64,
}

impl Fraction {
    /// p/q in lowest terms.
    ///
    /// # Errors
    /// [`Error::BadFlux`] (`flux.zero_denominator`), [`Error::OutOfRange`] for a
    /// denominator beyond 10^6 or negative, or a size beyond 10^9.
    pub fn new(numerator: i64, denominator: i64) -> Result<Self, Error> {
        if denominator == 0 {
            return Err(Error::BadFlux {
                text: format!("{numerator}/0"),
                why: "has a denominator of zero",
                code: "flux.zero_denominator",
            });
        }
        let divisor = divisor(numerator.unsigned_abs(), denominator.unsigned_abs());
        // A divisor of 2^63 occurs only for i64::MIN twice, and is then refused below.
        let divisor = i64::try_from(divisor).unwrap_or(1);
        let reduced = Self { numerator: numerator / divisor, denominator: denominator / divisor };
        limits::DENOMINATOR.check(float(reduced.denominator))?;
        limits::FLUX.check(reduced.value())?;
        Ok(reduced)
    }

    /// The number above the line.
    #[must_use]
    pub fn numerator(self) -> i64 {
        self.numerator
    }

    /// The number below the line, at least 1.
    #[must_use]
    pub fn denominator(self) -> i64 {
        self.denominator
    }

    /// The nearest double.
    #[must_use]
    pub fn value(self) -> f64 {
        float(self.numerator) / float(self.denominator)
    }

    /// `x` minus this fraction, without the rounding of the fraction itself.
    #[must_use]
    pub fn below(self, x: f64) -> f64 {
        x.mul_add(float(self.denominator), -float(self.numerator)) / float(self.denominator)
    }
}

#[allow(clippy::cast_precision_loss)]
fn float(n: i64) -> f64 {
    n as f64
}

fn divisor(a: u64, b: u64) -> u64 {
    if b == 0 { a } else { divisor(b, a % b) }
}

impl std::fmt::Display for Fraction {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        if self.denominator == 1 {
            write!(f, "{}", self.numerator)
        } else {
            write!(f, "{}/{}", self.numerator, self.denominator)
        }
    }
}

impl From<Fraction> for String {
    fn from(fraction: Fraction) -> Self {
        fraction.to_string()
    }
}

impl TryFrom<String> for Fraction {
    type Error = Error;

    fn try_from(text: String) -> Result<Self, Error> {
        match text.parse()? {
            Flux::Fraction(fraction) => Ok(fraction),
            Flux::Number(_) => Err(not_a_flux(&text)),
        }
    }
}

/// A flux in flux quanta: a fraction, or a real number.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
#[serde(untagged, try_from = "RawFlux", into = "RawFlux")]
pub enum Flux {
    /// p/q.
    Fraction(Fraction),
    /// Any real number.
    Number(f64),
}

#[derive(Serialize, Deserialize)]
#[serde(untagged)]
enum RawFlux {
    Number(f64),
    Text(String),
}

impl TryFrom<RawFlux> for Flux {
    type Error = Error;

    fn try_from(raw: RawFlux) -> Result<Self, Error> {
        match raw {
            RawFlux::Number(value) => Self::number(value),
            RawFlux::Text(text) => text.parse(),
        }
    }
}

impl From<Flux> for RawFlux {
    fn from(flux: Flux) -> Self {
        match flux {
            Flux::Number(value) => Self::Number(value),
            Flux::Fraction(fraction) => Self::Text(fraction.to_string()),
        }
    }
}

fn not_a_flux(text: &str) -> Error {
    Error::BadFlux { text: text.to_owned(), why: "is not a fraction", code: "flux.not_a_fraction" }
}

impl std::str::FromStr for Flux {
    type Err = Error;

    fn from_str(text: &str) -> Result<Self, Error> {
        if let Some((above, below)) = text.split_once('/') {
            let whole = |part: &str| part.trim().parse::<i64>().map_err(|_| not_a_flux(text));
            return Ok(Self::Fraction(Fraction::new(whole(above)?, whole(below)?)?));
        }
        if let Ok(whole) = text.trim().parse::<i64>() {
            return Ok(Self::Fraction(Fraction::new(whole, 1)?));
        }
        Self::number(text.trim().parse().map_err(|_| not_a_flux(text))?)
    }
}

impl std::fmt::Display for Flux {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        match self {
            Self::Fraction(fraction) => write!(f, "{fraction}"),
            Self::Number(value) => write!(f, "{value}"),
        }
    }
}

impl From<Fraction> for Flux {
    fn from(fraction: Fraction) -> Self {
        Self::Fraction(fraction)
    }
}

impl Flux {
    /// A flux given as a real number.
    ///
    /// # Errors
    /// [`Error::OutOfRange`] for NaN, infinities and sizes beyond 10^9.
    pub fn number(value: f64) -> Result<Self, Error> {
        Ok(Self::Number(limits::FLUX.check(value)?))
    }

    /// The nearest double.
    #[must_use]
    pub fn value(self) -> f64 {
        match self {
            Self::Fraction(fraction) => fraction.value(),
            Self::Number(value) => value,
        }
    }

    /// branch + sense x this flux.
    #[must_use]
    pub fn reached(self, branch: f64, sense: Sense) -> f64 {
        match self {
            Self::Fraction(f) => {
                // One rounding instead of two.
                (branch * float(f.denominator) + sense.sign() * float(f.numerator))
                    / float(f.denominator)
            }
            Self::Number(value) => branch + sense.sign() * value,
        }
    }

    /// Whether the flux and its opposite are the same on a lattice: a multiple of 1/2.
    #[must_use]
    pub fn is_its_own_opposite(self) -> bool {
        let doubled = 2.0 * self.value();
        doubled == doubled.round()
    }
}

/// Which way round a flux is met: with the beams in the roles given, or swapped.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize)]
#[serde(try_from = "i8", into = "i8")]
pub enum Sense {
    /// +1: as asked.
    Same,
    /// -1: what swapping the beams' roles gives.
    Opposite,
}

impl Sense {
    /// +1 or -1.
    #[must_use]
    pub fn sign(self) -> f64 {
        f64::from(i8::from(self))
    }
}

impl From<Sense> for i8 {
    fn from(sense: Sense) -> Self {
        match sense {
            Sense::Same => 1,
            Sense::Opposite => -1,
        }
    }
}

impl TryFrom<i8> for Sense {
    type Error = Error;

    fn try_from(sign: i8) -> Result<Self, Error> {
        match sign {
            1 => Ok(Self::Same),
            -1 => Ok(Self::Opposite),
            other => Err(Error::Contradiction {
                code: "flux.bad_sense",
                message: format!("sense = {other} means nothing: it is 1 or -1"),
            }),
        }
    }
}

/// The fractions with denominators up to `most_denominator` nearest to `x`,
/// nearest first, at most `count` of them; of two at one distance the simpler
/// comes first.
///
/// # Errors
/// [`Error::OutOfRange`] for `x` or the denominator.
pub fn nearest_fractions(
    x: f64,
    most_denominator: i64,
    count: usize,
) -> Result<Vec<Fraction>, Error> {
    limits::FLUX.check(x)?;
    limits::DENOMINATOR.check(float(most_denominator))?;
    let floor = x.floor();
    #[allow(clippy::cast_possible_truncation)]
    let whole = floor as i64;
    // Neighbours of the part in 0..1; adding the whole part keeps them in lowest terms.
    let (mut left, mut right) = farey_neighbours(x - floor, most_denominator);
    let next = |a: (i64, i64), b: (i64, i64)| {
        let k = (most_denominator + a.1) / b.1;
        (k * b.0 - a.0, k * b.1 - a.1)
    };
    let mut candidates = Vec::with_capacity(2 * count + 2);
    let (mut below, mut above) = (right, left);
    for _ in 0..count {
        candidates.extend([left, right]);
        // Each term follows from the two before it; leftwards by mirror symmetry.
        (below, left) = (left, next(below, left));
        (above, right) = (right, next(above, right));
    }
    let mut fractions: Vec<Fraction> = candidates
        .into_iter()
        .map(|(p, q)| Fraction { numerator: p + whole * q, denominator: q })
        .collect();
    let key = |f: &Fraction| f.below(x).abs();
    fractions.sort_by(|a, b| key(a).total_cmp(&key(b)).then(a.denominator.cmp(&b.denominator)));
    fractions.dedup();
    fractions.truncate(count);
    Ok(fractions)
}

/// Consecutive Farey fractions (p, q) with the first <= y < the second, 0 <= y < 1.
fn farey_neighbours(y: f64, most: i64) -> ((i64, i64), (i64, i64)) {
    let (mut low, mut high) = ((0_i64, 1_i64), (1_i64, 1_i64));
    let below = |(p, q): (i64, i64)| y.mul_add(float(q), -float(p)) >= 0.0;
    // Runs of steps to one side are taken at once by doubling, so that 1/10^6 is quick.
    while low.1 + high.1 <= most {
        let mut step = 1;
        let to_right = below((low.0 + high.0, low.1 + high.1));
        loop {
            let (p, q) = if to_right {
                (low.0 + step * high.0, low.1 + step * high.1)
            } else {
                (high.0 + step * low.0, high.1 + step * low.1)
            };
            if q > most || below((p, q)) != to_right {
                break;
            }
            if to_right {
                low = (p, q);
            } else {
                high = (p, q);
            }
            step *= 2;
        }
    }
    (low, high)
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    #[test]
    fn texts_that_are_fluxes() {
        for (text, value) in [
            ("3/8", 0.375),
            (" -1 / 3 ", -1.0 / 3.0),
            ("0.375", 0.375),
            ("2", 2.0),
            ("6/16", 0.375),
        ] {
            assert_eq!(text.parse::<Flux>().unwrap().value(), value, "{text}");
        }
        assert_eq!("6/16".parse::<Flux>().unwrap().to_string(), "3/8");
    }

    #[test]
    fn texts_that_are_not() {
        for (text, code) in [
            ("3/0", "flux.zero_denominator"),
            ("", "flux.not_a_fraction"),
            ("3/8/2", "flux.not_a_fraction"),
            ("three eighths", "flux.not_a_fraction"),
            ("1/1000003", "flux.denominator_out_of_range"),
            ("1/-3", "flux.denominator_out_of_range"),
            ("nan", "flux.out_of_range"),
            ("inf", "flux.out_of_range"),
            ("99999999999999999999/3", "flux.not_a_fraction"),
        ] {
            assert_eq!(text.parse::<Flux>().unwrap_err().code(), code, "{text}");
        }
        assert!(Fraction::new(i64::MIN, i64::MIN).is_err());
    }

    #[test]
    fn neighbours_of_known_numbers() {
        let show = |x, most| {
            let found = nearest_fractions(x, most, 3).unwrap();
            found.iter().map(ToString::to_string).collect::<Vec<_>>()
        };
        assert_eq!(show(0.375, 8), ["3/8", "2/5", "1/3"]);
        // Convergents of pi, classical.
        assert_eq!(show(std::f64::consts::PI, 200)[0], "355/113");
        assert_eq!(show(0.5, 1), ["0", "1", "-1"]);
        assert_eq!(show(1e-7, 1_000_000)[0], "0");
    }

    proptest! {
        #[test]
        fn nothing_nearer_is_missed(x in -2.0..2.0_f64, most in 1..60_i64) {
            let found = nearest_fractions(x, most, 5).unwrap();
            let worst = found.last().unwrap().below(x).abs();
            for q in 1..=most {
                for p in -3 * q..=3 * q {
                    let other = Fraction::new(p, q).unwrap();
                    if other.below(x).abs() < worst {
                        prop_assert!(found.contains(&other), "{} missed for {}", other, x);
                    }
                }
            }
        }
    }
}
