//! Coupling over scattering against wavelength, and where it is best.
//!
//! The figure is Omega/rate with Omega = 2 pi |rabi_hz| and the rate that of the
//! photons which both beams scatter from a and b together, halved: a superposition
//! of equal parts. It does not depend on the power if both beams change together.
//! Both beams are tuned together, keeping the difference of their frequencies.

use serde::{Deserialize, Serialize};

use super::bias::Bias;
use super::ways::{wavelength_nm, windows};
use super::{Beam, RamanPair};
use crate::Atom;
use crate::atom::State;
use crate::control::{self, Control};
use crate::documents::Document;
use crate::error::Error;
use crate::limits::{CURVE_POINTS, WAVELENGTH_NM};

/// Coupling and scattering over a range of wavelengths.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(try_from = "RawQuality")]
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
    /// The wavelength with the largest ratio: every maximum of the points is
    /// refined between them.
    pub best_wavelength_nm: f64,
    /// The ratio there.
    pub best_ratio: f64,
    /// Ranges about the lines in which nothing was computed, nm.
    pub excluded_nm: Vec<(f64, f64)>,
}

impl Document for Quality {
    const FORMAT: &'static str = "fluxloom-coupling-quality";
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct RawQuality {
    atom: Atom,
    wavelengths_nm: Vec<f64>,
    rabi_hz: Vec<f64>,
    scattering_per_s: Vec<f64>,
    ratio: Vec<f64>,
    best_wavelength_nm: f64,
    best_ratio: f64,
    excluded_nm: Vec<(f64, f64)>,
}

impl TryFrom<RawQuality> for Quality {
    type Error = String;

    fn try_from(raw: RawQuality) -> Result<Self, String> {
        let count = raw.wavelengths_nm.len();
        let columns = [&raw.rabi_hz, &raw.scattering_per_s, &raw.ratio];
        if count == 0 || columns.iter().any(|column| column.len() != count) {
            return Err(format!("columns of a curve over {count} wavelengths differ in length"));
        }
        let negative = |column: &&Vec<f64>| column.iter().any(|value| *value < 0.0);
        if columns.iter().any(negative) || raw.best_ratio < 0.0 {
            return Err("couplings and rates are not negative".to_owned());
        }
        if !raw.wavelengths_nm.iter().all(|nm| WAVELENGTH_NM.contains(*nm))
            || !raw.wavelengths_nm.is_sorted()
        {
            return Err("wavelengths of a curve ascend within 100 to 20000 nm".to_owned());
        }
        Ok(Self {
            atom: raw.atom,
            wavelengths_nm: raw.wavelengths_nm,
            rabi_hz: raw.rabi_hz,
            scattering_per_s: raw.scattering_per_s,
            ratio: raw.ratio,
            best_wavelength_nm: raw.best_wavelength_nm,
            best_ratio: raw.best_ratio,
            excluded_nm: raw.excluded_nm,
        })
    }
}

/// Steps of the golden-section search for a maximum.
const REFINEMENTS: u32 = 60;

/// Maxima of the points that are refined, the highest first.
const MAXIMA: usize = 16;

/// The question, once checked.
struct Curve<'a> {
    pair: &'a RamanPair,
    atom: &'a Atom,
    states: (State, State),
    bias: &'a Bias,
    excluded_nm: Vec<(f64, f64)>,
}

impl RamanPair {
    /// Coupling, scattering and their ratio for b <- a over a range of wavelengths.
    ///
    /// # Errors
    /// As [`RamanPair::rabi_hz`]; [`Error::OutOfRange`] and [`Error::EmptyRange`]
    /// for range and points; [`Error::Contradiction`] (`light.all_excluded`) if
    /// the whole range is too near to lines, (`light.no_coupling`) if the beams
    /// couple a and b nowhere in it; [`Error::Cancelled`].
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
        CURVE_POINTS.check(intervals + 1.0)?;
        control::allow_numbers(&[points], 4 * 8)?;
        let excluded_nm = self.excluded(atom, states, range_nm)?;
        let curve = Curve { pair: self, atom, states, bias, excluded_nm };
        let mut quality = Quality {
            atom: atom.clone(),
            wavelengths_nm: Vec::new(),
            rabi_hz: Vec::new(),
            scattering_per_s: Vec::new(),
            ratio: Vec::new(),
            best_wavelength_nm: low,
            best_ratio: 0.0,
            excluded_nm: curve.excluded_nm.clone(),
        };
        for k in 0..points {
            #[allow(clippy::cast_precision_loss)]
            let nm = (low + (high - low) * (k as f64 / intervals)).clamp(low, high);
            if k % 64 == 0 {
                control::go_on(control)?;
                control.progress(k, points);
            }
            let Some((rabi_hz, rate)) = curve.at(nm)? else { continue };
            quality.wavelengths_nm.push(nm);
            quality.rabi_hz.push(rabi_hz);
            quality.scattering_per_s.push(rate);
            quality.ratio.push(ratio(rabi_hz, rate));
        }
        control.progress(points, points);
        if quality.ratio.is_empty() {
            return Err(Error::Contradiction {
                code: "light.all_excluded",
                message: "every point of range_nm is nearer than 100 linewidths to a line: widen \
                          or move the range"
                    .to_owned(),
            });
        }
        curve.refine(&mut quality)?;
        if quality.best_ratio == 0.0 {
            return Err(Error::Contradiction {
                code: "light.no_coupling",
                message: format!(
                    "these beams do not couple {} and {} anywhere in range_nm: give both power, \
                     and see coupling() for the rule behind it",
                    states.0, states.1
                ),
            });
        }
        Ok(quality)
    }

    /// The refused ranges within a range for both states and both beams, merged,
    /// nm of the absorbed beam, ascending.
    fn excluded(
        &self,
        atom: &Atom,
        (a, b): (State, State),
        (low, high): (f64, f64),
    ) -> Result<Vec<(f64, f64)>, Error> {
        let apart_hz = self.apart_hz()?;
        let structure = atom.structure();
        let manifold = structure.manifold();
        let level = |state: State| -> Result<usize, Error> {
            manifold.find(atom.name(), state)?;
            manifold.find_level(atom.name(), state.f())
        };
        let (from, to) = (level(a)?, level(b)?);
        let mut all: Vec<(f64, f64)> = Vec::new();
        for (one, two, offsets) in [
            (from, from, [0.0, apart_hz]),
            (to, to, [0.0, apart_hz]),
            // The coupling goes by the mean of both beams.
            (to, from, [0.5 * apart_hz; 2]),
        ] {
            for (start, end) in windows(&structure, one, two) {
                for offset in offsets {
                    all.push((wavelength_nm(end - offset), wavelength_nm(start - offset)));
                }
            }
        }
        all.sort_by(|x, y| x.0.total_cmp(&y.0));
        let mut merged: Vec<(f64, f64)> = Vec::new();
        for (start, end) in all {
            match merged.last_mut() {
                Some(last) if start <= last.1 => last.1 = last.1.max(end),
                _ => merged.push((start, end)),
            }
        }
        merged.retain(|(start, end)| *end > low && *start < high);
        Ok(merged)
    }

    /// Frequency of the emitted beam less that of the absorbed one, Hz.
    fn apart_hz(&self) -> Result<f64, Error> {
        let [absorb, emit] = self.beams()?;
        if absorb.wavelength_nm() == emit.wavelength_nm() {
            return Ok(0.0);
        }
        Ok(emit.frequency_hz() - absorb.frequency_hz())
    }
}

impl Curve<'_> {
    /// Size of the coupling and scattering rate with both beams tuned; none where
    /// light is refused.
    fn at(&self, nm: f64) -> Result<Option<(f64, f64)>, Error> {
        if self.excluded_nm.iter().any(|(start, end)| nm > *start && nm < *end) {
            return Ok(None);
        }
        match self.computed(nm) {
            Ok(found) => Ok(Some(found)),
            // A strong admixture of the other level stands near its line.
            Err(Error::OnResonance { .. }) => Ok(None),
            Err(other) => Err(other),
        }
    }

    fn computed(&self, nm: f64) -> Result<(f64, f64), Error> {
        let [absorb, emit] = self.pair.beams()?;
        let apart_hz = self.pair.apart_hz()?;
        let absorb = absorb.with_wavelength_nm(nm)?;
        let emit_nm =
            if apart_hz == 0.0 { nm } else { wavelength_nm(absorb.frequency_hz() + apart_hz) };
        let emit = emit.with_wavelength_nm(emit_nm)?;
        let beams: [Beam; 2] = [absorb, emit];
        let pair = RamanPair::from_beams(absorb, emit)?;
        let rabi_hz = pair.rabi_hz(self.atom, self.states, self.bias)?.norm();
        let of = |state| -> Result<f64, Error> {
            Ok(self.atom.scattering_per_s(&beams, state, self.bias)?.total)
        };
        Ok((rabi_hz, 0.5 * (of(self.states.0)? + of(self.states.1)?)))
    }

    fn refine(&self, quality: &mut Quality) -> Result<(), Error> {
        let ratios = &quality.ratio;
        let at = |place: Option<usize>| place.and_then(|place| ratios.get(place)).copied();
        let mut maxima: Vec<(usize, f64)> = Vec::new();
        for (place, value) in ratios.iter().enumerate() {
            let left = at(place.checked_sub(1)).unwrap_or(f64::NEG_INFINITY);
            let right = at(place.checked_add(1)).unwrap_or(f64::NEG_INFINITY);
            if *value >= left && *value >= right {
                maxima.push((place, *value));
            }
        }
        maxima.sort_by(|x, y| y.1.total_cmp(&x.1));
        let mut best = (quality.best_wavelength_nm, f64::NEG_INFINITY);
        for (place, value) in maxima.into_iter().take(MAXIMA) {
            let found = self.climb(&quality.wavelengths_nm, place, value)?;
            if found.1 > best.1 {
                best = found;
            }
        }
        (quality.best_wavelength_nm, quality.best_ratio) = best;
        Ok(())
    }

    /// The maximum about a point that is the highest among its neighbours.
    fn climb(&self, points: &[f64], place: usize, value: f64) -> Result<(f64, f64), Error> {
        let nm = |place: Option<usize>| place.and_then(|place| points.get(place)).copied();
        let here = nm(Some(place)).unwrap_or_default();
        let mut left = nm(place.checked_sub(1)).unwrap_or(here);
        let mut right = nm(place.checked_add(1)).unwrap_or(here);
        // A neighbour across a line bounds nothing.
        for (start, end) in &self.excluded_nm {
            if *start >= left && *end <= here {
                left = here;
            }
            if *start >= here && *end <= right {
                right = here;
            }
        }
        let height = |nm: f64| -> Result<f64, Error> {
            Ok(self.at(nm)?.map_or(0.0, |(rabi_hz, rate)| ratio(rabi_hz, rate)))
        };
        let golden = 0.5 * (5.0_f64.sqrt() - 1.0);
        for _ in 0..REFINEMENTS {
            let (one, two) = (right - golden * (right - left), left + golden * (right - left));
            if height(one)? > height(two)? { right = two } else { left = one }
        }
        let middle = 0.5 * (left + right);
        let top = height(middle)?;
        Ok(if top > value { (middle, top) } else { (here, value) })
    }
}

/// Omega over the rate; 0 where nothing is scattered, as nothing is coupled there.
fn ratio(rabi_hz: f64, rate: f64) -> f64 {
    if rate > 0.0 { 2.0 * std::f64::consts::PI * rabi_hz / rate } else { 0.0 }
}
