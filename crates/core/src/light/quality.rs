//! Coupling over scattering against wavelength, and where it is best.
//!
//! The figure is Omega/rate with Omega = 2 pi |rabi_hz| and the rate that of the
//! photons which both beams scatter from a and b together, halved: a superposition
//! of equal parts. It does not depend on the power if both beams change together.
//! Both beams are tuned together, keeping the difference of their frequencies.

use serde::{Deserialize, Serialize};

use super::bias::Bias;
use super::response::wavelength_nm;
use super::tune_out::windows;
use super::{Beam, RamanPair};
use crate::Atom;
use crate::atom::State;
use crate::control::{self, Control};
use crate::documents::Document;
use crate::error::Error;
use crate::limits::{POINTS, WAVELENGTH_NM};

/// Coupling and scattering over a range of wavelengths.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Quality {
    /// The atom, whose numbers stand behind the result.
    pub atom: Atom,
    /// Vacuum wavelengths of the absorbed beam, ascending; those too near to a
    /// line are left out.
    pub wavelengths_nm: Vec<f64>,
    /// Sizes of the Rabi frequency over 2 pi, Hz.
    pub rabi_hz: Vec<f64>,
    /// Photons per second.
    pub scattering_per_s: Vec<f64>,
    /// 2 pi x coupling over scattering.
    pub ratio: Vec<f64>,
    /// The wavelength with the largest ratio, also between the points.
    pub best_wavelength_nm: f64,
    /// The ratio there.
    pub best_ratio: f64,
    /// Ranges about the lines in which nothing was computed, nm.
    pub excluded_nm: Vec<(f64, f64)>,
}

impl Document for Quality {
    const FORMAT: &'static str = "fluxloom-coupling-quality";
}

/// Steps of the golden-section search for the best wavelength.
const REFINEMENTS: u32 = 60;

impl RamanPair {
    /// Coupling, scattering and their ratio for b <- a over a range of wavelengths.
    ///
    /// # Errors
    /// As [`RamanPair::rabi_hz`]; [`Error::OutOfRange`] and [`Error::EmptyRange`]
    /// for range and points; [`Error::Contradiction`] (`light.all_excluded`) if
    /// the whole range is too near to lines; [`Error::Cancelled`].
    pub fn quality(
        &self,
        atom: &Atom,
        states: (State, State),
        bias: &Bias,
        (range_nm, points): ((f64, f64), usize),
        control: &dyn Control,
    ) -> Result<Quality, Error> {
        let (low, high) = range_nm;
        WAVELENGTH_NM.check_as(low, "range_nm[0]")?;
        WAVELENGTH_NM.check_as(high, "range_nm[1]")?;
        if low >= high {
            return Err(Error::EmptyRange { field: "range_nm".into(), low, high });
        }
        #[allow(clippy::cast_precision_loss)]
        let intervals = points as f64 - 1.0;
        POINTS.check_as(intervals + 1.0, "points")?;
        control::allow_numbers(&[points], 4 * 8)?;
        // What is wrong with the question is said before the lines are looked at.
        self.beams()?;
        for state in [states.0, states.1] {
            atom.manifold().find(atom.name(), state)?;
        }
        let excluded_nm = excluded(atom, range_nm);
        let mut quality = Quality {
            atom: atom.clone(),
            wavelengths_nm: Vec::new(),
            rabi_hz: Vec::new(),
            scattering_per_s: Vec::new(),
            ratio: Vec::new(),
            best_wavelength_nm: low,
            best_ratio: 0.0,
            excluded_nm,
        };
        for k in 0..points {
            #[allow(clippy::cast_precision_loss)]
            let nm = (low + (high - low) * (k as f64 / intervals)).clamp(low, high);
            if k % 64 == 0 {
                control::go_on(control)?;
                control.progress(k, points);
            }
            if quality.excluded_nm.iter().any(|(from, to)| nm > *from && nm < *to) {
                continue;
            }
            let (rabi_hz, rate) = match self.at(atom, states, bias, nm) {
                // Two lines' windows may leave a sliver between them.
                Err(Error::OnResonance { .. }) => continue,
                other => other?,
            };
            quality.wavelengths_nm.push(nm);
            quality.rabi_hz.push(rabi_hz);
            quality.scattering_per_s.push(rate);
            quality.ratio.push(ratio(rabi_hz, rate));
        }
        control.progress(points, points);
        self.refine(atom, states, bias, &mut quality)?;
        Ok(quality)
    }

    fn refine(
        &self,
        atom: &Atom,
        states: (State, State),
        bias: &Bias,
        quality: &mut Quality,
    ) -> Result<(), Error> {
        let best = quality.ratio.iter().enumerate().max_by(|x, y| x.1.total_cmp(y.1));
        let Some((place, _)) = best else {
            return Err(Error::Contradiction {
                code: "light.all_excluded",
                message: "every point of range_nm is nearer than 100 linewidths to a line: widen \
                          or move the range"
                    .to_owned(),
            });
        };
        let nm = |place: usize| quality.wavelengths_nm.get(place).copied();
        let here = nm(place).unwrap_or_default();
        let mut left = place.checked_sub(1).and_then(nm).unwrap_or(here);
        let mut right = nm(place + 1).unwrap_or(here);
        // A neighbour across a line bounds nothing.
        for (from, to) in &quality.excluded_nm {
            if *from >= left && *to <= here {
                left = here;
            }
            if *from >= here && *to <= right {
                right = here;
            }
        }
        let value = |nm: f64| -> f64 {
            self.at(atom, states, bias, nm).map_or(0.0, |(rabi_hz, rate)| ratio(rabi_hz, rate))
        };
        let golden = 0.5 * (5.0_f64.sqrt() - 1.0);
        for _ in 0..REFINEMENTS {
            let (one, two) = (right - golden * (right - left), left + golden * (right - left));
            if value(one) > value(two) { right = two } else { left = one }
        }
        let middle = 0.5 * (left + right);
        let (at_middle, at_point) = (value(middle), value(here));
        (quality.best_wavelength_nm, quality.best_ratio) =
            if at_middle > at_point { (middle, at_middle) } else { (here, at_point) };
        Ok(())
    }

    /// Size of the coupling and scattering rate with both beams tuned.
    fn at(
        &self,
        atom: &Atom,
        (a, b): (State, State),
        bias: &Bias,
        nm: f64,
    ) -> Result<(f64, f64), Error> {
        let [absorb, emit] = self.beams()?;
        let apart_hz = emit.frequency_hz() - absorb.frequency_hz();
        let absorb = absorb.with_wavelength_nm(nm)?;
        let emit = if apart_hz == 0.0 {
            emit.with_wavelength_nm(nm)?
        } else {
            emit.with_wavelength_nm(wavelength_nm(absorb.frequency_hz() + apart_hz))?
        };
        let beams: [Beam; 2] = [absorb, emit];
        let rabi_hz = Self::from_beams(absorb, emit)?.rabi_hz(atom, (a, b), bias)?.norm();
        let of =
            |state| -> Result<f64, Error> { Ok(atom.scattering_per_s(&beams, state, bias)?.total) };
        Ok((rabi_hz, 0.5 * (of(a)? + of(b)?)))
    }
}

/// Omega over the rate; 0 where nothing is scattered, as nothing is coupled there.
fn ratio(rabi_hz: f64, rate: f64) -> f64 {
    if rate > 0.0 { 2.0 * std::f64::consts::PI * rabi_hz / rate } else { 0.0 }
}

/// The refused ranges within a range, merged, nm ascending.
fn excluded(atom: &Atom, (low, high): (f64, f64)) -> Vec<(f64, f64)> {
    let structure = atom.structure();
    let mut all: Vec<(f64, f64)> = Vec::new();
    for level in 0..structure.manifold().twice_f.len() {
        for (from, to) in windows(&structure, level) {
            all.push((wavelength_nm(to), wavelength_nm(from)));
        }
    }
    all.sort_by(|x, y| x.0.total_cmp(&y.0));
    let mut merged: Vec<(f64, f64)> = Vec::new();
    for (from, to) in all {
        match merged.last_mut() {
            Some(last) if from <= last.1 => last.1 = last.1.max(to),
            _ => merged.push((from, to)),
        }
    }
    merged.retain(|(from, to)| *to > low && *from < high);
    merged
}
