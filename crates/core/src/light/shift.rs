//! Light shifts of the ground states.
//!
//! To first order in the light, on the eigenstates of the bias field:
//! V/h = -(1/4)|E|^2 `<v>`/h for each beam, v from [`super::response`]; beams of
//! different frequencies do not interfere and add up. The field has to win over
//! the part of the light that would turn the states. Negative is down.

use num_complex::Complex64;

use super::Beam;
use super::bias::{Axes, Bias};
use super::response::{HZ_PER_AU_INTENSITY, Operator};
use super::ways::nearest_line_hz;
use crate::Atom;
use crate::atom::{Levels, State, Structure, Uncertain, standard_errors};
use crate::error::Error;

/// Light at the atoms: its frequency and its amplitude, a vector of length
/// sqrt(intensity) in the axes of the field. Coherent light adds amplitudes.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Illumination {
    pub frequency_hz: f64,
    /// Square root of W/m^2.
    pub amplitude: [Complex64; 3],
}

impl Illumination {
    /// A beam as the atoms at the origin of the laboratory see it.
    pub fn of(beam: &Beam, axes: &Axes) -> Result<Self, Error> {
        let root = beam.intensity_w_per_m2([0.0; 3])?.sqrt();
        Ok(Self {
            frequency_hz: beam.frequency_hz(),
            amplitude: axes.components(beam.unit_polarisation()).map(|part| part * root),
        })
    }
}

/// Zeeman shifts of the excited states grow about so with the field, Hz/G
/// (common practice). They are neglected, and enter standard errors.
const EXCITED_ZEEMAN_HZ_PER_GAUSS: f64 = 1.4e6;

/// Relative size of what is neglected with the excited Zeeman shift, for light
/// on states that are made of the zero-field states at `places`.
pub(crate) fn excited_zeeman(
    structure: &Structure,
    places: impl Iterator<Item = usize>,
    frequency_hz: f64,
    field_gauss: f64,
) -> f64 {
    if field_gauss == 0.0 {
        return 0.0;
    }
    let manifold = structure.manifold();
    let levels =
        places.filter_map(|place| manifold.level_of(manifold.states.get(place)?.twice_f()));
    let nearest = levels
        .map(|level| nearest_line_hz(structure, level, frequency_hz))
        .fold(f64::INFINITY, f64::min);
    EXCITED_ZEEMAN_HZ_PER_GAUSS * field_gauss / nearest.max(EXCITED_ZEEMAN_HZ_PER_GAUSS)
}

/// Shift of the state at a place, Hz.
pub(crate) fn shift_hz(
    structure: &Structure,
    levels: &Levels,
    place: usize,
    light: &Illumination,
) -> Result<f64, Error> {
    let mut operator =
        Operator::two_photon(structure, (light.amplitude, light.amplitude), light.frequency_hz);
    let ranks = operator.between(levels.parts(place), levels.parts(place))?;
    Ok(-HZ_PER_AU_INTENSITY * ranks.iter().map(|part| part.re).sum::<f64>())
}

impl Atom {
    /// Light shift of a state in beams that do not interfere, over h, Hz; atoms
    /// at the origin of the laboratory. Without a field the state is quantised
    /// along `bias.field_direction`.
    ///
    /// # Errors
    /// [`Error::NoSuchState`], [`Error::OnResonance`], [`Error::OutOfRange`] and
    /// [`Error::NoDirection`] for the field, and those of
    /// [`Beam::intensity_w_per_m2`].
    pub fn light_shift_hz(&self, beams: &[Beam], state: State, bias: &Bias) -> Result<f64, Error> {
        let (place, lights) = self.lit(beams, state, bias)?;
        let structure = self.structure();
        let levels = Levels::new(&structure, bias.field_gauss);
        sum(&structure, &levels, place, &lights)
    }

    /// The shift with its standard error: from the atomic data, and from the
    /// neglected Zeeman shift of the excited states.
    ///
    /// # Errors
    /// As [`Atom::light_shift_hz`].
    pub fn light_shift_with_error(
        &self,
        beams: &[Beam],
        state: State,
        bias: &Bias,
    ) -> Result<Uncertain<f64>, Error> {
        let value = self.light_shift_hz(beams, state, bias)?;
        let (place, lights) = self.lit(beams, state, bias)?;
        let [from_data] = standard_errors(self, |structure| {
            let levels = Levels::new(structure, bias.field_gauss);
            Ok([sum(structure, &levels, place, &lights)?])
        })?;
        let structure = self.structure();
        let levels = Levels::new(&structure, bias.field_gauss);
        let mut neglected = 0.0;
        for light in &lights {
            let one = shift_hz(&structure, &levels, place, light)?;
            let main = std::iter::once(place);
            let part = excited_zeeman(&structure, main, light.frequency_hz, bias.field_gauss);
            neglected += (one * part).abs();
        }
        Ok(Uncertain { value, standard_error: from_data.hypot(neglected) })
    }

    /// The shift of b minus that of a, Hz: what the light adds to the splitting.
    ///
    /// # Errors
    /// As [`Atom::light_shift_hz`].
    pub fn differential_shift_hz(
        &self,
        beams: &[Beam],
        (a, b): (State, State),
        bias: &Bias,
    ) -> Result<f64, Error> {
        Ok(self.light_shift_hz(beams, b, bias)? - self.light_shift_hz(beams, a, bias)?)
    }

    /// The place of a state, and the light as it sees it.
    pub(crate) fn lit(
        &self,
        beams: &[Beam],
        state: State,
        bias: &Bias,
    ) -> Result<(usize, Vec<Illumination>), Error> {
        let place = self.manifold().find(self.name(), state)?;
        let axes = bias.axes()?;
        let lights = beams.iter().map(|beam| Illumination::of(beam, &axes));
        Ok((place, lights.collect::<Result<_, _>>()?))
    }
}

fn sum(
    structure: &Structure,
    levels: &Levels,
    place: usize,
    lights: &[Illumination],
) -> Result<f64, Error> {
    lights.iter().map(|light| shift_hz(structure, levels, place, light)).sum()
}
