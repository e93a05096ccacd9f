//! Standard errors that results inherit from the atomic data.
//!
//! To first order: every number of the table with an uncertainty is moved up and
//! down by a small part of it, everything is computed anew, and the differences,
//! scaled to the whole uncertainty, are added in squares. (Moving by the whole
//! could take a line across the light; so an error may come out larger than its
//! value, which then is not known at all.) Numbers without an uncertainty, and
//! numbers of the user's own, count as exact.
//!
//! Numbers are taken as independent, but for lines whose strengths the table
//! joins by a measured ratio R = d_over^2/d_under^2: then d_over moves both
//! elements, and R moves d_under alone, because that is how the element of
//! `under` was obtained. A dipole element of the user's own undoes the link.

use super::structure::{LineStructure, Structure};
use super::{Atom, Number};
use crate::error::Error;

/// A result with its standard error.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Uncertain<T> {
    /// The result.
    pub value: T,
    /// Its standard error, in the unit and shape of the value.
    pub standard_error: T,
}

/// A way in which the data may be wrong: moves them by so many standard errors.
type Move<'a> = Box<dyn Fn(&mut Structure, f64) + 'a>;

/// The part of an uncertainty by which a number is moved.
const STEP: f64 = 1e-2;

/// Standard errors of the numbers that `compute` returns, always as many.
///
/// # Errors
/// Those of `compute`, but for a line that was moved too near to the light: then
/// the step away from it decides alone.
pub fn standard_errors<const N: usize>(
    atom: &Atom,
    compute: impl Fn(&Structure) -> Result<[f64; N], Error>,
) -> Result<[f64; N], Error> {
    let found = standard_errors_of_all(atom, |structure| Ok(compute(structure)?.to_vec()))?;
    Ok(std::array::from_fn(|place| found.get(place).copied().unwrap_or_default()))
}

/// As [`standard_errors`], for numbers that are counted only when computed.
///
/// # Errors
/// As [`standard_errors`].
pub fn standard_errors_of_all(
    atom: &Atom,
    compute: impl Fn(&Structure) -> Result<Vec<f64>, Error>,
) -> Result<Vec<f64>, Error> {
    let structure = atom.structure();
    let here = compute(&structure)?;
    let mut squares = vec![0.0; here.len()];
    for shift in moves(atom) {
        let at = |sign: f64| -> Result<Option<Vec<f64>>, Error> {
            let mut moved = structure.clone();
            shift(&mut moved, sign * STEP);
            match compute(&moved) {
                Ok(values) => Ok(Some(values)),
                Err(Error::OnResonance { .. }) => Ok(None),
                Err(other) => Err(other),
            }
        };
        let (up, down, steps) = match (at(1.0)?, at(-1.0)?) {
            (Some(up), Some(down)) => (up, down, 2.0),
            (Some(up), None) => (up, here.clone(), 1.0),
            (None, Some(down)) => (here.clone(), down, 1.0),
            (None, None) => continue,
        };
        for ((square, up), down) in squares.iter_mut().zip(up).zip(down) {
            let change = (up - down) / (steps * STEP);
            *square += change * change;
        }
    }
    Ok(squares.into_iter().map(f64::sqrt).collect())
}

fn moves(atom: &Atom) -> Vec<Move<'_>> {
    let mut moves: Vec<Move<'_>> = Vec::new();
    let ground = &atom.ground;
    if let Some(size) = ground.hyperfine_a_hz.as_ref().and_then(size) {
        moves.push(Box::new(move |s, sign| s.hyperfine.a_hz += sign * size));
    }
    if let Some(size) = ground.g_j.as_ref().and_then(size) {
        moves.push(Box::new(move |s, sign| s.g_j += sign * size));
    }
    if let Some(size) = size(&ground.g_i) {
        moves.push(Box::new(move |s, sign| s.g_i += sign * size));
    }
    if let Some(size) = ground.residual_polarisability_au.as_ref().and_then(size) {
        moves.push(Box::new(move |s, sign| s.residual_au += sign * size));
    }
    let ratios = atom.joined_lines();
    for (place, line) in atom.lines.iter().enumerate() {
        let mut push = |number: Option<&Number>, change: fn(&mut LineStructure, f64)| {
            if let Some(size) = number.and_then(size) {
                moves.push(Box::new(move |s, sign| {
                    if let Some(line) = s.lines.get_mut(place) {
                        change(line, sign * size);
                    }
                }));
            }
        };
        push(Some(&line.frequency_hz), |line, by| line.frequency_hz += by);
        push(line.hyperfine_a_hz.as_ref(), |line, by| line.hyperfine.a_hz += by);
        push(line.hyperfine_b_hz.as_ref(), |line, by| line.hyperfine.b_hz += by);
        if !ratios.iter().any(|ratio| ratio.over == place || ratio.under == place) {
            push(Some(&line.dipole_au), |line, by| line.dipole_au += by);
        }
    }
    for ratio in ratios {
        let relative = |number: &Number| size(number).map(|size| size / number.value);
        if let Some(part) = atom.lines.get(ratio.over).and_then(|line| relative(&line.dipole_au)) {
            moves.push(Box::new(move |s, sign| {
                scale(s, ratio.over, 1.0 + sign * part);
                scale(s, ratio.under, 1.0 + sign * part);
            }));
        }
        if let Some(part) = relative(&ratio.number) {
            // d_under = d_over/sqrt(R)
            moves.push(Box::new(move |s, sign| scale(s, ratio.under, 1.0 - 0.5 * sign * part)));
        }
    }
    moves
}

fn scale(structure: &mut Structure, place: usize, factor: f64) {
    if let Some(line) = structure.lines.get_mut(place) {
        line.dipole_au *= factor;
    }
}

fn size(number: &Number) -> Option<f64> {
    number.uncertainty.filter(|size| *size > 0.0)
}

/// Two lines whose strengths are joined by a measured ratio.
struct JoinedLines {
    over: usize,
    under: usize,
    number: Number,
}

impl Atom {
    fn joined_lines(&self) -> Vec<JoinedLines> {
        let place = |name: &str| {
            let found = self.lines.iter().position(|line| line.name == name)?;
            let own = self.lines.get(found)?.dipole_au.status == super::DataStatus::Own;
            (!own).then_some(found)
        };
        let rows = self.isotope.row.strength_ratios.iter();
        rows.filter_map(|row| {
            Some(JoinedLines {
                over: place(&row.over)?,
                under: place(&row.under)?,
                number: Number::tabulated(&row.strength_ratio),
            })
        })
        .collect()
    }
}
