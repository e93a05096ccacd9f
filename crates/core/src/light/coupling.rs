//! One coupling explained: how strong, by which part of the light, by which
//! rule it is weak, and what would make it stronger.
//!
//! With C = u2* x u1, the vector part drives Delta m = 0 (between different F)
//! by the component of C along the field and Delta m = +-1 by the part across
//! it; |Delta m| = 2 comes from the tensor part alone; two photons do no more.
//! Numbers come from the computed operator, never from the rule.

use num_complex::Complex64;
use serde::{Deserialize, Serialize};

use super::bias::Bias;
use super::polarisation::{self, Helicity};
use super::{Beam, RamanPair};
use crate::Atom;
use crate::atom::{State, halves_text};
use crate::documents::Document;
use crate::error::Error;

/// Couplings below this part of the largest |Delta m| <= 1 coupling of the same
/// beams cannot be used.
pub const FORBIDDEN: f64 = 1e-2;

/// A coupling b <- a with its explanation.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Coupling {
    /// The atom, whose numbers stand behind the result.
    pub atom: Atom,
    /// The state a.
    pub from: State,
    /// The state b.
    pub to: State,
    /// Complex Rabi frequency over 2 pi, Hz.
    pub rabi_hz: Complex64,
    /// Its scalar, vector and tensor parts, Hz.
    pub ranks: [Complex64; 3],
    /// Size over that of the largest coupling with |Delta m| <= 1 that the same
    /// beams make between any two states.
    pub relative: f64,
    /// Which part of the light drives it, and whether it can be used.
    pub rule: String,
    /// For a coupling that cannot be used: what would drive it better.
    pub alternatives: Vec<String>,
    /// Kick along the lattice in k_L, if a lattice was given.
    pub kick: Option<f64>,
    /// The Rabi frequency of atoms in the lattice: times the overlap of the kick.
    pub effective_rabi_hz: Complex64,
}

impl Document for Coupling {
    const FORMAT: &'static str = "fluxloom-coupling";
}

impl Coupling {
    /// Whether the coupling is too weak to be used.
    #[must_use]
    pub fn is_forbidden(&self) -> bool {
        self.relative < FORBIDDEN
    }
}

impl RamanPair {
    /// The coupling b <- a explained, for atoms that no lattice holds.
    ///
    /// # Errors
    /// As [`RamanPair::rabi_hz`].
    pub fn free_coupling(
        &self,
        atom: &Atom,
        (a, b): (State, State),
        bias: &Bias,
    ) -> Result<Coupling, Error> {
        let ranks = self.rabi_by_rank_hz(atom, (a, b), bias)?;
        let rabi_hz: Complex64 = ranks.iter().sum();
        let largest = self.largest_hz(atom, bias)?;
        let relative = if largest > 0.0 { rabi_hz.norm() / largest } else { 0.0 };
        let mut coupling = Coupling {
            atom: atom.clone(),
            from: a,
            to: b,
            rabi_hz,
            ranks,
            relative,
            rule: self.rule(atom, (a, b), bias, (&ranks, relative))?,
            alternatives: Vec::new(),
            kick: None,
            effective_rabi_hz: rabi_hz,
        };
        if coupling.is_forbidden() && a != b {
            coupling.alternatives = self.alternatives(atom, (a, b), bias)?;
        }
        Ok(coupling)
    }

    /// Size of the largest coupling between two states with |Delta m| <= 1.
    fn largest_hz(&self, atom: &Atom, bias: &Bias) -> Result<f64, Error> {
        let matrix = self.rabi_matrix_hz(atom, bias)?;
        let states = &atom.manifold().states;
        let mut largest = 0.0_f64;
        for ((to, from), element) in matrix.indexed_iter() {
            if let (Some(b), Some(a)) = (states.get(to), states.get(from))
                && to != from
                && (b.twice_m() - a.twice_m()).abs() <= 2
            {
                largest = largest.max(element.norm());
            }
        }
        Ok(largest)
    }

    fn rule(
        &self,
        atom: &Atom,
        (a, b): (State, State),
        bias: &Bias,
        (ranks, relative): (&[Complex64; 3], f64),
    ) -> Result<String, Error> {
        let (along, across) = self.vector_parts(bias)?;
        let step = (b.twice_m() - a.twice_m()) / 2;
        let levels = if a.twice_f() == b.twice_f() {
            format!("within F = {}", halves_text(a.twice_f()))
        } else {
            format!("F = {} to F = {}", halves_text(a.twice_f()), halves_text(b.twice_f()))
        };
        let mut rule = match step.abs() {
            0 if a == b => format!("{a} to itself: a light shift that goes with the kick"),
            0 => format!(
                "Delta m = 0, {levels}: the vector part drives it by the component of u2* x u1 \
                 along the field, {along:.3} here (1 at most)"
            ),
            1 => format!(
                "Delta m = {step:+}, {levels}: the vector part drives it by the part of u2* x u1 \
                 across the field, {across:.3} here (1 at most)"
            ),
            2 => format!(
                "Delta m = {step:+}, {levels}: only the tensor part drives it, which far from the \
                 excited hyperfine structure is small{}",
                if atom.ground_spin() > 0.0 { "" } else { " unless the line is narrow and near" }
            ),
            _ => format!("Delta m = {step:+}: two photons change m by 2 at most"),
        };
        let total: f64 = ranks.iter().map(|part| part.norm()).sum();
        if total > 0.0 && a != b {
            let [_, vector, tensor] = ranks.map(|part| part.norm() / total);
            rule += &format!("; vector {}, tensor {}", percent(vector), percent(tensor));
        }
        if a != b {
            let verdict = if relative < FORBIDDEN {
                " of the largest coupling of these beams with |Delta m| <= 1: too weak to be used"
            } else {
                " of the largest coupling of these beams with |Delta m| <= 1"
            };
            let size = if relative == 0.0 { "0".to_owned() } else { format!("{relative:.2e}") };
            rule += &format!("; {size}{verdict}");
        }
        Ok(rule)
    }

    /// Sizes of u2* x u1 along and across the field.
    fn vector_parts(&self, bias: &Bias) -> Result<(f64, f64), Error> {
        let [absorb, emit] = self.beams()?;
        let axes = bias.axes()?;
        let [x1, y1, z1] = axes.components(absorb.unit_polarisation());
        let [x2, y2, z2] = axes.components(emit.unit_polarisation()).map(|part| part.conj());
        let across = (y2 * z1 - z2 * y1).norm().hypot((z2 * x1 - x2 * z1).norm());
        Ok(((x2 * y1 - y2 * x1).norm(), across))
    }

    fn alternatives(
        &self,
        atom: &Atom,
        (a, b): (State, State),
        bias: &Bias,
    ) -> Result<Vec<String>, Error> {
        let mut found = Vec::new();
        let here = self.rabi_hz(atom, (a, b), bias)?.norm();
        let step = (b.twice_m() - a.twice_m()).abs() / 2;
        if step <= 1 {
            found.extend(self.other_polarisations(atom, (a, b), bias, here)?);
            found.extend(self.other_field(atom, (a, b), bias, here)?);
            found.push(
                "an oscillating magnetic field at the splitting (radio_rabi_hz): a link without \
                 kick, so without flux"
                    .to_owned(),
            );
            return Ok(found);
        }
        for (middle, first, second) in self.two_steps(atom, (a, b), bias)? {
            found.push(format!(
                "two links by way of {middle}: {} and {} with these beams",
                hertz(first),
                hertz(second)
            ));
        }
        if step > 2 {
            found.push(format!("a chain of {} links with |Delta m| = 1", step));
        }
        Ok(found)
    }

    /// The best of the usual polarisations, if it is better than today's.
    fn other_polarisations(
        &self,
        atom: &Atom,
        states: (State, State),
        bias: &Bias,
        here: f64,
    ) -> Result<Option<String>, Error> {
        let [absorb, emit] = self.beams()?;
        let mut best = (here, None);
        for (name1, one) in usual(&absorb, bias)? {
            for (name2, two) in usual(&emit, bias)? {
                let size = Self::from_beams(one, two)?.rabi_hz(atom, states, bias)?.norm();
                // What differs by rounding is not better.
                if size > best.0 * (1.0 + 1e-9) {
                    best = (size, Some(format!("absorb {name1}, emit {name2}")));
                }
            }
        }
        let (size, names) = best;
        Ok(names.filter(|_| size > 2.0 * here).map(|names| {
            format!("other polarisations: {names} gives {} in this field", hertz(size))
        }))
    }

    /// The best of the laboratory's axes for the field, if it is better than today's.
    fn other_field(
        &self,
        atom: &Atom,
        states: (State, State),
        bias: &Bias,
        here: f64,
    ) -> Result<Option<String>, Error> {
        let mut best = (2.0 * here, None);
        for (name, field_direction) in
            [("x", [1.0, 0.0, 0.0]), ("y", [0.0, 1.0, 0.0]), ("z", [0.0, 0.0, 1.0])]
        {
            let size = self.rabi_hz(atom, states, &Bias { field_direction, ..*bias })?.norm();
            if size > best.0 * (1.0 + 1e-9) {
                best = (size, Some(name));
            }
        }
        let (size, name) = best;
        Ok(name
            .map(|name| format!("a field along {name} with these polarisations: {}", hertz(size))))
    }

    /// States half-way, with both couplings, Hz.
    fn two_steps(
        &self,
        atom: &Atom,
        (a, b): (State, State),
        bias: &Bias,
    ) -> Result<Vec<(State, f64, f64)>, Error> {
        let mut found = Vec::new();
        if (b.twice_m() - a.twice_m()).abs() != 4 {
            return Ok(found);
        }
        let twice_m = (a.twice_m() + b.twice_m()) / 2;
        for state in &atom.manifold().states {
            if state.twice_m() == twice_m {
                let first = self.rabi_hz(atom, (a, *state), bias)?.norm();
                let second = self.rabi_hz(atom, (*state, b), bias)?.norm();
                found.push((*state, first, second));
            }
        }
        found.sort_by(|x, y| y.1.min(y.2).total_cmp(&x.1.min(x.2)));
        found.truncate(2);
        Ok(found)
    }
}

/// A beam with the polarisations that are easily made, with their names.
fn usual(beam: &Beam, bias: &Bias) -> Result<Vec<(&'static str, Beam)>, Error> {
    let direction = beam.unit_direction();
    let field = crate::vector::unit(bias.field_direction, "field_direction")?;
    let across = crate::vector::cross(direction, field);
    let mut all = Vec::new();
    // Along the field there is no preferred transverse direction: any will do.
    if let Ok(upright) = polarisation::linear(direction, field) {
        all.push(("linear in the plane of beam and field", beam.with_polarisation(upright)?));
        if let Ok(flat) = polarisation::linear(direction, across) {
            all.push(("linear across the field", beam.with_polarisation(flat)?));
        }
    }
    for (name, helicity) in
        [("circular, helicity +1", Helicity::Plus), ("circular, helicity -1", Helicity::Minus)]
    {
        all.push((name, beam.with_polarisation(polarisation::circular(direction, helicity)?)?));
    }
    Ok(all)
}

fn percent(part: f64) -> String {
    if part >= 1e-3 || part == 0.0 {
        format!("{:.1} %", 100.0 * part)
    } else {
        format!("{:.1e}", part)
    }
}

fn hertz(size: f64) -> String {
    if size >= 1e3 { format!("{:.3} kHz", size * 1e-3) } else { format!("{size:.3} Hz") }
}
