//! Hyperfine states |F, m> of the ground manifold, as people write them: `"9/2,-7/2"`.
//!
//! F and m are kept in halves, so that they are whole numbers and compare exactly.

use std::fmt;
use std::str::FromStr;

use serde::{Deserialize, Serialize};

use crate::error::Error;
use crate::limits::plain;

/// F and m of any atom stay far below this.
const LARGEST: i32 = 1000;

/// One state |F, m>.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash, Serialize, Deserialize)]
#[serde(try_from = "(f64, f64)", into = "(f64, f64)")]
pub struct State {
    twice_f: i32,
    twice_m: i32,
}

impl State {
    /// The state (F, m), written as a pair as in |F, m>.
    ///
    /// # Errors
    /// [`Error::BadState`] for numbers that are not multiples of one half, for
    /// a negative F, |m| > F, or a whole F with a half-integer m.
    pub fn from_pair((f, m): (f64, f64)) -> Result<Self, Error> {
        let shown = || format!("({}, {})", plain(f), plain(m));
        match (halves(f), halves(m)) {
            (Some(twice_f), Some(twice_m)) => Self::from_halves(twice_f, twice_m)
                .map_err(|why| Error::BadState { text: shown(), why }),
            _ => Err(Error::BadState { text: shown(), why: NOT_HALVES }),
        }
    }

    /// A state whose numbers are known to fit.
    pub(crate) const fn known(twice_f: i32, twice_m: i32) -> Self {
        Self { twice_f, twice_m }
    }

    fn from_halves(twice_f: i32, twice_m: i32) -> Result<Self, &'static str> {
        if twice_f < 0 {
            return Err("has a negative F");
        }
        if twice_m.abs() > twice_f {
            return Err("has |m| larger than F");
        }
        if (twice_f - twice_m) % 2 != 0 {
            return Err("mixes a whole with a half-integer number");
        }
        Ok(Self { twice_f, twice_m })
    }

    /// Reads `"F,m"`, or says what is wrong with the text in words that follow
    /// it in a sentence.
    ///
    /// # Errors
    /// The words.
    pub fn read(text: &str) -> Result<Self, &'static str> {
        let (f, m) = text.split_once(',').ok_or(SHAPE)?;
        let (twice_f, twice_m) = (written(f).ok_or(SHAPE)?, written(m).ok_or(SHAPE)?);
        Self::from_halves(twice_f, twice_m)
    }

    /// F.
    #[must_use]
    pub fn f(self) -> f64 {
        f64::from(self.twice_f) / 2.0
    }

    /// m.
    #[must_use]
    pub fn m(self) -> f64 {
        f64::from(self.twice_m) / 2.0
    }

    /// Twice F.
    #[must_use]
    pub fn twice_f(self) -> i32 {
        self.twice_f
    }

    /// Twice m.
    #[must_use]
    pub fn twice_m(self) -> i32 {
        self.twice_m
    }
}

const SHAPE: &str = "is not of the form \"F,m\" with whole or half-integer numbers";
const NOT_HALVES: &str = "is not a pair of whole or half-integer numbers";

/// Twice a number, if that is whole.
fn halves(x: f64) -> Option<i32> {
    let twice = 2.0 * x;
    if !twice.is_finite() || twice.fract() != 0.0 || twice.abs() > f64::from(2 * LARGEST) {
        return None;
    }
    // Whole and small: exact.
    #[allow(clippy::cast_possible_truncation)]
    Some(twice as i32)
}

/// Twice a number written as `4`, `-7/2` or `4.5`.
fn written(text: &str) -> Option<i32> {
    let text = text.trim();
    match text.split_once('/') {
        Some((top, "2")) => top.parse().ok().filter(|top: &i32| top.abs() <= LARGEST),
        Some(_) => None,
        None => {
            let plain = text.bytes().all(|b| b.is_ascii_digit() || b"+-.".contains(&b));
            halves(text.parse().ok().filter(|_| plain)?)
        }
    }
}

impl FromStr for State {
    type Err = Error;

    fn from_str(text: &str) -> Result<Self, Error> {
        Self::read(text).map_err(|why| {
            let short: String = text.chars().take(40).collect();
            Error::BadState { text: format!("{short:?}"), why }
        })
    }
}

impl TryFrom<(f64, f64)> for State {
    type Error = Error;

    fn try_from(pair: (f64, f64)) -> Result<Self, Error> {
        Self::from_pair(pair)
    }
}

impl From<State> for (f64, f64) {
    fn from(state: State) -> Self {
        (state.f(), state.m())
    }
}

impl fmt::Display for State {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(f, "{},{}", halves_text(self.twice_f), halves_text(self.twice_m))
    }
}

/// Half of a whole number as people write it: `4`, `-7/2`.
#[must_use]
pub fn halves_text(twice: i32) -> String {
    if twice % 2 == 0 { format!("{}", twice / 2) } else { format!("{twice}/2") }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn states_are_read_and_written() {
        for (text, twice) in
            [("9/2,-7/2", (9, -7)), (" 2, -1 ", (4, -2)), ("4.5,-3.5", (9, -7)), ("0,0", (0, 0))]
        {
            let state: State = text.parse().unwrap();
            assert_eq!((state.twice_f(), state.twice_m()), twice, "{text}");
            assert_eq!(State::from_pair((state.f(), state.m())).unwrap(), state);
            assert_eq!(state.to_string().parse::<State>().unwrap(), state);
        }
        assert_eq!("9/2,-7/2".parse::<State>().unwrap().to_string(), "9/2,-7/2");
    }

    #[test]
    fn nonsense_is_refused() {
        for text in [
            "",
            "9/2",
            "9/2;1/2",
            "9/3,1/3",
            "9/2,11/2",
            "-1,0",
            "2,1/2",
            "1,1,1",
            "a,b",
            "inf,0",
            "1e1,0",
            "99999999999,1",
        ] {
            assert!(text.parse::<State>().is_err(), "{text}");
        }
        for pair in [(f64::NAN, 0.0), (f64::INFINITY, 0.0), (1.25, 0.25), (1.0, 2.0), (1e9, 0.0)] {
            assert!(State::from_pair(pair).is_err(), "{pair:?}");
        }
    }
}
