//! The response of ground states to two light fields, by tensor rank.
//!
//! For light that is absorbed with polarisation u1 and emitted with u2, the
//! optical frequency nu being the mean of both,
//!
//! ```text
//! v_ba = sum_e [ <b|d.u2*|e><e|d.u1|a> / h(nu_e - (nu_a+nu_b)/2 - nu)
//!              + <b|d.u1|e><e|d.u2*|a> / h(nu_e - (nu_a+nu_b)/2 + nu) ]
//!        + residual (u2*.u1) delta_ba
//! ```
//!
//! in atomic units of polarisability, with zero-field hyperfine energies. The
//! sum over the sublevels of each excited level is done once and for all by
//! recoupling (`atom::dipoles`); what depends on the light are one number per
//! rank and pair of ground levels, and the products of the polarisations.
//!
//! The excited Zeeman shift is neglected; its size joins the standard errors.
//!
//! Source: Le Kien, Schneeweiss, Rauschenbeutel, Eur. Phys. J. D 67, 92 (2013)
//! (from memory).

use num_complex::Complex64;

use super::products::{ByRank, Products};
use super::ways::{energy_hz, reduced_about};
use crate::atom::Structure;
use crate::constants::{
    BOHR_RADIUS_M, ELEMENTARY_CHARGE_C, HARTREE_J, PLANCK_J_S, SPEED_OF_LIGHT_M_PER_S,
    VACUUM_PERMITTIVITY_F_PER_M,
};
use crate::error::Error;

/// Atomic unit of polarisability, C^2 m^2/J.
pub(crate) const POLARISABILITY_UNIT_SI: f64 =
    ELEMENTARY_CHARGE_C * ELEMENTARY_CHARGE_C * BOHR_RADIUS_M * BOHR_RADIUS_M / HARTREE_J;

/// -V/h in Hz of 1 a.u. in light of 1 W/m^2: |E|^2/4 = I/(2 eps0 c).
pub(crate) const HZ_PER_AU_INTENSITY: f64 = POLARISABILITY_UNIT_SI
    / (2.0 * VACUUM_PERMITTIVITY_F_PER_M * SPEED_OF_LIGHT_M_PER_S * PLANCK_J_S);

/// The operator v between zero-field states, by rank.
pub(crate) struct Operator<'a> {
    structure: &'a Structure,
    products: Products,
    /// u2*.u1, for the residual polarisability.
    overlap: Complex64,
    frequency_hz: f64,
    /// Whether the emitted photon is free (scattering): then the frequency given
    /// is the absorbed one.
    scattering: bool,
    known: [Option<ByRank<f64>>; 4],
}

impl<'a> Operator<'a> {
    /// For polarisations in the axes of the field and the mean optical frequency.
    pub fn two_photon(
        structure: &'a Structure,
        (emitted, absorbed): ([Complex64; 3], [Complex64; 3]),
        frequency_hz: f64,
    ) -> Self {
        let conjugate = emitted.map(|component| component.conj());
        let overlap = conjugate.iter().zip(&absorbed).map(|(x, y)| x * y).sum();
        let products = Products::new(conjugate, absorbed);
        Self { structure, products, overlap, frequency_hz, scattering: false, known: [None; 4] }
    }

    /// For scattering into a free photon: its frequency makes up the difference
    /// of the levels.
    pub fn scattering(
        structure: &'a Structure,
        polarisations: ([Complex64; 3], [Complex64; 3]),
        frequency_hz: f64,
    ) -> Self {
        Self { scattering: true, ..Self::two_photon(structure, polarisations, frequency_hz) }
    }

    /// The same levels and light with other polarisations.
    pub fn turned(&self, (emitted, absorbed): ([Complex64; 3], [Complex64; 3])) -> Self {
        let other = Self::two_photon(self.structure, (emitted, absorbed), self.frequency_hz);
        Self { scattering: self.scattering, known: self.known, ..other }
    }

    fn reduced(&mut self, to: usize, from: usize) -> Result<ByRank<f64>, Error> {
        let slot = 2 * to + from;
        if let Some(Some(known)) = self.known.get(slot) {
            return Ok(*known);
        }
        let found = self.reduced_as((to, from), (to, from))?;
        if let Some(place) = self.known.get_mut(slot) {
            *place = Some(found);
        }
        Ok(found)
    }

    /// The reduced elements between two levels with the energies of two others.
    fn reduced_as(
        &self,
        (to, from): (usize, usize),
        energies: (usize, usize),
    ) -> Result<ByRank<f64>, Error> {
        let to_hz = energy_hz(self.structure, energies.0);
        let from_hz = energy_hz(self.structure, energies.1);
        // A free photon makes up the difference of the levels.
        let apart = if self.scattering { 0.5 * (from_hz - to_hz) } else { 0.0 };
        let mean = 0.5 * (to_hz + from_hz);
        reduced_about(self.structure, (to, from), mean, self.frequency_hz + apart)
    }

    /// `v_ba` between zero-field states at two places, by rank, atomic units.
    pub fn at_rest(&mut self, to: usize, from: usize) -> Result<ByRank<Complex64>, Error> {
        let levels = self.levels(to, from);
        let reduced = match levels {
            Some((to, from)) => self.reduced(to, from)?,
            None => return Ok(Default::default()),
        };
        Ok(self.element((to, from), reduced))
    }

    /// The ground levels of two places, if anything connects them.
    fn levels(&self, to: usize, from: usize) -> Option<(usize, usize)> {
        let manifold = self.structure.manifold();
        let level = |place: usize| manifold.level_of(manifold.states.get(place)?.twice_f());
        let connected = to == from || self.structure.dipoles.angular(to, from) != [0.0; 3];
        if connected { Some((level(to)?, level(from)?)) } else { None }
    }

    fn element(&self, (to, from): (usize, usize), reduced: ByRank<f64>) -> ByRank<Complex64> {
        let states = &self.structure.manifold().states;
        let (Some(b), Some(a)) = (states.get(to), states.get(from)) else {
            return Default::default();
        };
        let angular = self.structure.dipoles.angular(to, from);
        let products = self.products.opposite((b.twice_m() - a.twice_m()) / 2);
        let mut ranks = [Complex64::ZERO; 3];
        for (((rank, product), weight), size) in
            ranks.iter_mut().zip(products).zip(angular).zip(reduced)
        {
            *rank = product * (weight * size);
        }
        if to == from
            && let Some(scalar) = ranks.first_mut()
        {
            *scalar += self.overlap * self.structure.residual_au;
        }
        ranks
    }

    /// `v_ba` between states of the field, each given by its zero-field parts.
    pub fn between(
        &mut self,
        to: impl Iterator<Item = (usize, f64)> + Clone,
        from: impl Iterator<Item = (usize, f64)> + Clone,
    ) -> Result<ByRank<Complex64>, Error> {
        let main = |parts: &mut dyn Iterator<Item = (usize, f64)>| {
            parts.max_by(|x, y| x.1.abs().total_cmp(&y.1.abs())).map_or(0, |(place, _)| place)
        };
        let mains = (main(&mut to.clone()), main(&mut from.clone()));
        let mut sum = [Complex64::ZERO; 3];
        for (b, amplitude_b) in to {
            for (a, amplitude_a) in from.clone() {
                let weight = amplitude_b * amplitude_a;
                let part = match self.at_rest(b, a) {
                    // A small admixture has the energy of its state, not of the
                    // level it comes from: it is not on that level's line.
                    Err(Error::OnResonance { .. })
                        if (b, a) != mains && weight.abs() < SMALL_ADMIXTURE =>
                    {
                        self.admixed((b, a), mains)?
                    }
                    other => other?,
                };
                for (total, one) in sum.iter_mut().zip(part) {
                    *total += one * weight;
                }
            }
        }
        Ok(sum)
    }

    /// An element of a small admixture, with the energies of the states' main parts.
    fn admixed(
        &self,
        places: (usize, usize),
        mains: (usize, usize),
    ) -> Result<ByRank<Complex64>, Error> {
        let manifold = self.structure.manifold();
        let level = |place: usize| {
            let state = manifold.states.get(place);
            state.and_then(|state| manifold.level_of(state.twice_f())).unwrap_or_default()
        };
        let levels = (level(places.0), level(places.1));
        let reduced = self.reduced_as(levels, (level(mains.0), level(mains.1)))?;
        Ok(self.element(places, reduced))
    }
}

/// Products of amplitudes below this count as small admixtures by the field.
const SMALL_ADMIXTURE: f64 = 0.1;

#[cfg(test)]
mod tests {
    use super::*;
    use crate::Atom;

    fn real(x: f64, y: f64, z: f64) -> [Complex64; 3] {
        [x, y, z].map(|part| Complex64::new(part, 0.0))
    }

    #[test]
    fn the_unit_of_a_shift() {
        // source: derived independently with numpy and mpmath, no publication:
        // V12/h = -4.687124980647e-02 Hz per a.u. at 1 W/cm^2
        assert!((HZ_PER_AU_INTENSITY * 1e4 - 4.687_124_980_647e-2).abs() < 1e-13);
    }

    #[test]
    fn two_elements_of_rubidium() {
        // source: derived independently with numpy and mpmath, no publication:
        // 87Rb F = 1, 790.03 nm, u1 = z, u2 = x, field along z
        let structure = Atom::new("87Rb").unwrap().structure();
        let frequency = SPEED_OF_LIGHT_M_PER_S / 790.03e-9;
        let light = (real(1.0, 0.0, 0.0), real(0.0, 0.0, 1.0));
        let mut operator = Operator::two_photon(&structure, light, frequency);
        let manifold = structure.manifold();
        let place = |text: &str| manifold.index_of(text.parse().unwrap()).unwrap();
        let mut between = |b: &str, a: &str| -> Complex64 {
            operator.at_rest(place(b), place(a)).unwrap().into_iter().sum()
        };
        let up = between("1,0", "1,-1");
        let down = between("1,-1", "1,0");
        assert!((up.re + 4_405.449_713).abs() < 1e-5, "{up}");
        assert!((down.re - 4_404.959_022).abs() < 1e-5, "{down}");
        assert!(up.im.abs() + down.im.abs() < 1e-9);
    }
}
