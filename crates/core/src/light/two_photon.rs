//! Two-photon couplings between ground states by a pair of beams.
//!
//! ```text
//! H/h = (rabi_hz/2) exp(i[(k1-k2).r - (w1-w2) t]) |b><a| + h.c.
//! rabi_hz = 2 V12/h,   V12 = -(1/4) E1 E2* v_ba
//! ```
//!
//! 1 the beam that is absorbed, 2 the one that is emitted into; v as in
//! [`super::response`]; E from the intensities at the origin of the laboratory,
//! the phases of the beams there being zero. States are those of the bias field
//! with positive overlap with their zero-field parents; their phases are fixed by
//! the axes of the field (see [`Bias`]). Swapping the beams gives the conjugate
//! of the coupling backwards.

use ndarray::Array2;
use num_complex::Complex64;

use super::RamanPair;
use super::bias::Bias;
use super::products::ByRank;
use super::response::{HZ_PER_AU_INTENSITY, Operator};
use super::shift::{Illumination, excited_zeeman};
use crate::Atom;
use crate::atom::{Levels, State, Structure, standard_errors};
use crate::error::Error;

/// Both beams as the atoms see them.
#[derive(Debug, Clone, Copy)]
struct Pair {
    absorb: Illumination,
    emit: Illumination,
}

impl Pair {
    fn new(pair: &RamanPair, bias: &Bias) -> Result<Self, Error> {
        let [absorb, emit] = pair.beams()?;
        let axes = bias.axes()?;
        Ok(Self {
            absorb: Illumination::of(&absorb, &axes)?,
            emit: Illumination::of(&emit, &axes)?,
        })
    }

    fn mean_hz(&self) -> f64 {
        0.5 * (self.absorb.frequency_hz + self.emit.frequency_hz)
    }

    fn operator<'a>(&self, structure: &'a Structure) -> Operator<'a> {
        let polarisations = (self.emit.amplitude, self.absorb.amplitude);
        Operator::two_photon(structure, polarisations, self.mean_hz())
    }

    fn by_rank(
        &self,
        structure: &Structure,
        (from, to): (usize, usize),
        field_gauss: f64,
    ) -> Result<ByRank<Complex64>, Error> {
        let levels = Levels::new(structure, field_gauss);
        let ranks = self.operator(structure).between(levels.parts(to), levels.parts(from))?;
        Ok(ranks.map(|part| part * (-2.0 * HZ_PER_AU_INTENSITY)))
    }
}

impl RamanPair {
    /// Complex Rabi frequency of b <- a over 2 pi, Hz.
    ///
    /// # Errors
    /// [`Error::NoBeams`], [`Error::NoSuchState`], [`Error::OnResonance`],
    /// [`Error::OutOfRange`] and [`Error::NoDirection`] for the field, and those
    /// of [`super::Beam::intensity_w_per_m2`].
    pub fn rabi_hz(
        &self,
        atom: &Atom,
        states: (State, State),
        bias: &Bias,
    ) -> Result<Complex64, Error> {
        Ok(self.rabi_by_rank_hz(atom, states, bias)?.iter().sum())
    }

    /// The Rabi frequency in its scalar, vector and tensor parts, Hz.
    ///
    /// # Errors
    /// As [`RamanPair::rabi_hz`].
    pub fn rabi_by_rank_hz(
        &self,
        atom: &Atom,
        states: (State, State),
        bias: &Bias,
    ) -> Result<[Complex64; 3], Error> {
        let light = Pair::new(self, bias)?;
        light.by_rank(&atom.structure(), places(atom, states)?, bias.field_gauss)
    }

    /// The Rabi frequency, and the standard error of its size from the atomic
    /// data and from the neglected Zeeman shift of the excited states, Hz.
    ///
    /// # Errors
    /// As [`RamanPair::rabi_hz`].
    pub fn rabi_with_error_hz(
        &self,
        atom: &Atom,
        states: (State, State),
        bias: &Bias,
    ) -> Result<(Complex64, f64), Error> {
        let value = self.rabi_hz(atom, states, bias)?;
        let light = Pair::new(self, bias)?;
        let places = places(atom, states)?;
        let errors = standard_errors(atom, |structure| {
            let sum: Complex64 = light.by_rank(structure, places, bias.field_gauss)?.iter().sum();
            Ok([sum.re, sum.im])
        })?;
        let [re, im] = errors;
        let main = [places.0, places.1].into_iter();
        let neglected = excited_zeeman(&atom.structure(), main, light.mean_hz(), bias.field_gauss);
        Ok((value, re.hypot(im).hypot(neglected * value.norm())))
    }

    /// Rabi frequencies between all states of the ground manifold, Hz: element
    /// `[b, a]` is b <- a, in the order of the atom's states. The diagonal holds
    /// twice the light shifts that go with the kick.
    ///
    /// # Errors
    /// As [`RamanPair::rabi_hz`].
    pub fn rabi_matrix_hz(&self, atom: &Atom, bias: &Bias) -> Result<Array2<Complex64>, Error> {
        let count = atom.manifold().states.len();
        let mut matrix = Array2::zeros((count, count));
        self.each_rabi_hz(atom, bias, |places, found| {
            if let Some(element) = matrix.get_mut(places) {
                *element = found?;
            }
            Ok(())
        })?;
        Ok(matrix)
    }

    /// Hands every Rabi frequency, or why there is none, to `take` with the places
    /// of b and a.
    pub(super) fn each_rabi_hz(
        &self,
        atom: &Atom,
        bias: &Bias,
        mut take: impl FnMut((usize, usize), Result<Complex64, Error>) -> Result<(), Error>,
    ) -> Result<(), Error> {
        let light = Pair::new(self, bias)?;
        let structure = atom.structure();
        let levels = Levels::new(&structure, bias.field_gauss);
        let mut operator = light.operator(&structure);
        let count = structure.manifold().states.len();
        for to in 0..count {
            for from in 0..count {
                let ranks = operator.between(levels.parts(to), levels.parts(from));
                let total = ranks.map(|ranks| ranks.iter().sum::<Complex64>());
                take((to, from), total.map(|sum| sum * (-2.0 * HZ_PER_AU_INTENSITY)))?;
            }
        }
        Ok(())
    }

    /// This pair with the tones that drive b <- a on resonance: their frequencies
    /// differ by the splitting, about the mean of today's, as well as wavelengths
    /// can say it (some 10 mHz); light shifts are not included. What differs by
    /// gigahertz differs in its wave vectors, and so does the kick.
    ///
    /// # Errors
    /// As [`RamanPair::rabi_hz`].
    pub fn on_resonance(
        &self,
        atom: &Atom,
        (a, b): (State, State),
        bias: &Bias,
    ) -> Result<Self, Error> {
        let [absorb, emit] = self.beams()?;
        let splitting_hz = atom.ground_levels(bias.field_gauss)?.splitting_hz(a, b)?;
        let mean_hz = 0.5 * (absorb.frequency_hz() + emit.frequency_hz());
        let tuned = |beam: &super::Beam, by_hz: f64| {
            beam.with_wavelength_nm(super::ways::wavelength_nm(mean_hz + by_hz))
        };
        Self::from_beams(tuned(&absorb, 0.5 * splitting_hz)?, tuned(&emit, -0.5 * splitting_hz)?)
    }
}

/// Places of a and b.
fn places(atom: &Atom, (a, b): (State, State)) -> Result<(usize, usize), Error> {
    let manifold = atom.manifold();
    Ok((manifold.find(atom.name(), a)?, manifold.find(atom.name(), b)?))
}
