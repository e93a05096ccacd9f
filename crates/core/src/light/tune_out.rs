//! Tune-outs: wavelengths at which a polarisability vanishes.
//!
//! Lines cut the range into pieces in which the polarisability is smooth; in
//! each, sign changes between the points of a grid that is fine near the lines
//! are narrowed down. Zeros within 100 linewidths of a line mean nothing and
//! are not looked for.

use super::polarisability::{Polarisability, frequency_of, polarisability};
use super::ways::{wavelength_nm, windows};
use crate::Atom;
use crate::atom::{State, Structure, Uncertain, halves_text, standard_errors};
use crate::error::Error;
use crate::limits::{CIRCULARITY, WAVELENGTH_NM};

/// What is to vanish.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct TuneOut {
    /// F.
    pub f: f64,
    /// m along the field; `None` for the scalar polarisability.
    pub m: Option<f64>,
    /// V in [-1, 1] of light along the field; needs m unless it is 0.
    pub circularity: f64,
}

impl TuneOut {
    /// The zero of the scalar polarisability of F.
    #[must_use]
    pub fn scalar(f: f64) -> Self {
        Self { f, m: None, circularity: 0.0 }
    }

    fn of(&self, alpha: &Polarisability, state: Option<State>) -> f64 {
        state.map_or(alpha.scalar, |state| alpha.along_field(state, self.circularity))
    }
}

/// Grid intervals of a piece; they shrink towards both ends.
const INTERVALS: u32 = 400;

/// Ends of a piece are approached to this part of its width.
const NEAREST: f64 = 1e-7;

impl Atom {
    /// The one tune-out in a range of vacuum wavelengths, nm.
    ///
    /// # Errors
    /// [`Error::TuneOutCount`] if there is none or more than one, listing them;
    /// otherwise as [`Atom::tune_outs_nm`].
    pub fn tune_out_nm(&self, range_nm: (f64, f64), what: &TuneOut) -> Result<f64, Error> {
        let found_nm = self.tune_outs_nm(range_nm, what)?;
        if let [only] = found_nm.as_slice() {
            return Ok(*only);
        }
        let (level, state) = self.asked(what)?;
        let what_text = match (state, self.manifold().twice_f.get(level)) {
            (Some(state), _) => format!("{} in {state}", self.name()),
            (None, Some(twice_f)) => format!("{} in F = {}", self.name(), halves_text(*twice_f)),
            (None, None) => self.name().to_owned(),
        };
        let nearest_nm = if found_nm.is_empty() { self.nearest(range_nm, what)? } else { vec![] };
        Err(Error::TuneOutCount { range_nm, found_nm, what: what_text, nearest_nm })
    }

    /// The tune-out with its standard error from the atomic data.
    ///
    /// # Errors
    /// As [`Atom::tune_out_nm`].
    pub fn tune_out_with_error(
        &self,
        range_nm: (f64, f64),
        what: &TuneOut,
    ) -> Result<Uncertain<f64>, Error> {
        let value = self.tune_out_nm(range_nm, what)?;
        let (level, state) = self.asked(what)?;
        let frequency_hz = frequency_of(value)?;
        let at = |structure: &Structure, frequency_hz: f64| -> Result<f64, Error> {
            Ok(what.of(&polarisability(structure, level, frequency_hz)?, state))
        };
        let [height] = standard_errors(self, |structure| Ok([at(structure, frequency_hz)?]))?;
        // The zero moves by the error of the height over the slope.
        let step = 1e-7 * frequency_hz;
        let structure = self.structure();
        let slope = (at(&structure, frequency_hz + step)? - at(&structure, frequency_hz - step)?)
            / (2.0 * step);
        Ok(Uncertain { value, standard_error: value * (height / slope).abs() / frequency_hz })
    }

    /// Every tune-out in a range of vacuum wavelengths, nm, ascending.
    ///
    /// # Errors
    /// [`Error::OutOfRange`] and [`Error::EmptyRange`] for the range,
    /// [`Error::NoSuchState`]; [`Error::Contradiction`]
    /// (`light.circularity_without_m`) for a circularity without m.
    pub fn tune_outs_nm(&self, range_nm: (f64, f64), what: &TuneOut) -> Result<Vec<f64>, Error> {
        let (low, high) = range_nm;
        WAVELENGTH_NM.check_as(low, "range_nm[0]")?;
        WAVELENGTH_NM.check_as(high, "range_nm[1]")?;
        if low >= high {
            return Err(Error::EmptyRange { field: "range_nm".into(), low, high });
        }
        let (level, state) = self.asked(what)?;
        let structure = self.structure();
        let alpha = |frequency_hz: f64| -> Result<f64, Error> {
            Ok(what.of(&polarisability(&structure, level, frequency_hz)?, state))
        };
        let mut found = Vec::new();
        for (from, to) in pieces(&structure, level, (frequency_of(high)?, frequency_of(low)?)) {
            zeros(&alpha, (from, to), &mut found)?;
        }
        let mut found: Vec<f64> = found.into_iter().map(wavelength_nm).collect();
        found.sort_by(f64::total_cmp);
        // Rounding at the ends must not put a zero outside its range.
        Ok(found.into_iter().map(|nm| nm.clamp(low, high)).collect())
    }

    fn asked(&self, what: &TuneOut) -> Result<(usize, Option<State>), Error> {
        let level = self.manifold().find_level(self.name(), what.f)?;
        CIRCULARITY.check(what.circularity)?;
        let Some(m) = what.m else {
            if what.circularity != 0.0 {
                return Err(Error::Contradiction {
                    code: "light.circularity_without_m",
                    message: format!(
                        "circularity = {} without m: the shift of circular light depends on m; \
                         give m, or circularity 0 for the scalar tune-out",
                        what.circularity
                    ),
                });
            }
            return Ok((level, None));
        };
        let state = State::from_pair((what.f, m))?;
        self.manifold().find(self.name(), state)?;
        Ok((level, Some(state)))
    }

    /// The nearest tune-outs on both sides of a range.
    fn nearest(&self, (low, high): (f64, f64), what: &TuneOut) -> Result<Vec<f64>, Error> {
        let mut near = Vec::new();
        if low > WAVELENGTH_NM.low {
            near.extend(self.tune_outs_nm((WAVELENGTH_NM.low, low), what)?.last().copied());
        }
        if high < WAVELENGTH_NM.high {
            near.extend(self.tune_outs_nm((high, WAVELENGTH_NM.high), what)?.first().copied());
        }
        Ok(near)
    }
}

/// The parts of a range of frequencies that keep clear of the lines of a level.
fn pieces(structure: &Structure, level: usize, (low, high): (f64, f64)) -> Vec<(f64, f64)> {
    let windows = windows(structure, level, level);
    let mut pieces = Vec::new();
    let mut from = low;
    for (start, end) in windows.into_iter().filter(|(start, _)| *start < high) {
        if start > from {
            pieces.push((from, start));
        }
        from = from.max(end);
    }
    if from < high {
        pieces.push((from, high));
    }
    pieces.retain(|(from, to)| from < to);
    pieces
}

fn zeros(
    alpha: &impl Fn(f64) -> Result<f64, Error>,
    (from, to): (f64, f64),
    found: &mut Vec<f64>,
) -> Result<(), Error> {
    // Points from both ends, at distances that grow by a constant factor.
    let width = to - from;
    let half = INTERVALS / 2;
    let factor = (0.5 / NEAREST).powf(1.0 / f64::from(half));
    let mut points = vec![from];
    let distances: Vec<f64> =
        (0..=half).map(|k| NEAREST * width * factor.powf(f64::from(k))).collect();
    points.extend(distances.iter().map(|d| from + d));
    points.extend(distances.iter().rev().skip(1).map(|d| to - d));
    points.push(to);
    let mut last: Option<(f64, f64)> = None;
    for point in points {
        let value = alpha(point)?;
        if value == 0.0 {
            found.push(point);
        } else if let Some((before, earlier)) = last
            && earlier != 0.0
            && earlier.signum() != value.signum()
        {
            found.push(bisect(alpha, (before, earlier), point)?);
        }
        last = Some((point, value));
    }
    Ok(())
}

fn bisect(
    alpha: &impl Fn(f64) -> Result<f64, Error>,
    (mut same, value): (f64, f64),
    mut other: f64,
) -> Result<f64, Error> {
    loop {
        let middle = 0.5 * (same + other);
        if middle == same || middle == other {
            return Ok(middle);
        }
        if alpha(middle)?.signum() == value.signum() { same = middle } else { other = middle }
    }
}
