//! What would drive a coupling better that its beams drive too weakly: other
//! polarisations, another direction of the field, a state half-way, or a magnetic
//! field that oscillates. Only what can be used is offered, with its size.

use super::bias::Bias;
use super::coupling::{FORBIDDEN, ROUNDING};
use super::polarisation::{self, Helicity};
use super::{Beam, RamanPair};
use crate::Atom;
use crate::atom::State;
use crate::error::Error;

impl RamanPair {
    /// Size of a coupling that can be used; none if it is forbidden.
    fn usable_hz(
        &self,
        atom: &Atom,
        states: (State, State),
        bias: &Bias,
    ) -> Result<Option<f64>, Error> {
        let size = self.rabi_hz(atom, states, bias)?.norm();
        let relative = self.yardstick(atom, bias)?.of(size);
        Ok((relative >= FORBIDDEN).then_some(size))
    }

    /// What would drive a coupling that cannot be used, each with its size.
    pub(super) fn alternatives(
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
        if found.is_empty() {
            found.push(format!("a chain of {step} links with |Delta m| = 1"));
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
        let mut best = (2.0 * here, None);
        for (name1, one) in usual(&absorb, bias)? {
            for (name2, two) in usual(&emit, bias)? {
                let other = Self::from_beams(one, two)?;
                // What differs by rounding is not better.
                if let Some(size) = other.usable_hz(atom, states, bias)?
                    && size > best.0 * (1.0 + ROUNDING)
                {
                    best = (size, Some(format!("absorb {name1}, emit {name2}")));
                }
            }
        }
        let (size, names) = best;
        Ok(names.map(|names| {
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
            let turned = Bias { field_direction, ..*bias };
            if let Some(size) = self.usable_hz(atom, states, &turned)?
                && size > best.0 * (1.0 + ROUNDING)
            {
                best = (size, Some(name));
            }
        }
        let (size, name) = best;
        Ok(name
            .map(|name| format!("a field along {name} with these polarisations: {}", hertz(size))))
    }

    /// States half-way between which both couplings can be used, with them, Hz.
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
        for middle in &atom.manifold().states {
            if middle.twice_m() == twice_m
                && let Some(first) = self.usable_hz(atom, (a, *middle), bias)?
                && let Some(second) = self.usable_hz(atom, (*middle, b), bias)?
            {
                found.push((*middle, first, second));
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

fn hertz(size: f64) -> String {
    if size >= 1e3 { format!("{:.3} kHz", size * 1e-3) } else { format!("{size:.3} Hz") }
}
