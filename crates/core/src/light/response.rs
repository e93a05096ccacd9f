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

use crate::atom::Structure;
use crate::constants::{
    BOHR_RADIUS_M, ELEMENTARY_CHARGE_C, HARTREE_J, PLANCK_J_S, SPEED_OF_LIGHT_M_PER_S,
    VACUUM_PERMITTIVITY_F_PER_M,
};
use crate::error::{Error, RESONANCE_LINEWIDTHS};

/// Hartree energy over h, Hz.
const HARTREE_HZ: f64 = HARTREE_J / PLANCK_J_S;

/// Atomic unit of polarisability, C^2 m^2/J.
pub(crate) const POLARISABILITY_UNIT_SI: f64 =
    ELEMENTARY_CHARGE_C * ELEMENTARY_CHARGE_C * BOHR_RADIUS_M * BOHR_RADIUS_M / HARTREE_J;

/// -V/h in Hz of 1 a.u. in light of 1 W/m^2: |E|^2/4 = I/(2 eps0 c).
pub(crate) const HZ_PER_AU_INTENSITY: f64 = POLARISABILITY_UNIT_SI
    / (2.0 * VACUUM_PERMITTIVITY_F_PER_M * SPEED_OF_LIGHT_M_PER_S * PLANCK_J_S);

/// Scalar, vector and tensor part.
pub(crate) type ByRank<T> = [T; 3];

/// Vacuum wavelength of a frequency, nm.
pub(crate) fn wavelength_nm(frequency_hz: f64) -> f64 {
    SPEED_OF_LIGHT_M_PER_S / frequency_hz * 1e9
}

/// Reduced elements by rank from one ground level to another, for the optical
/// frequency `frequency_hz`, atomic units.
pub(crate) fn reduced(
    structure: &Structure,
    to: usize,
    from: usize,
    frequency_hz: f64,
) -> Result<ByRank<f64>, Error> {
    let manifold = structure.manifold();
    let energy = |level: usize| {
        manifold.twice_f.get(level).map_or(0.0, |twice_f| structure.ground_hz(*twice_f))
    };
    let mean = 0.5 * (energy(to) + energy(from));
    let mut sums = [0.0; 3];
    for (line, dipoles) in structure.lines.iter().zip(&structure.dipoles.lines) {
        let strength = line.dipole_au * line.dipole_au * HARTREE_HZ;
        for level in &dipoles.levels {
            let weights = level.recoupled(to, from);
            if weights == [0.0; 3] {
                continue;
            }
            let transition = line.frequency_hz + line.hyperfine.shift_hz(level.twice_f) - mean;
            let detuning = frequency_hz - transition;
            let window = RESONANCE_LINEWIDTHS * line.linewidth_hz;
            if detuning.abs() < window {
                return Err(on_resonance(structure, line, level.twice_f, (transition, detuning)));
            }
            let (near, far) = (-1.0 / detuning, 1.0 / (transition + frequency_hz));
            let [scalar, vector, tensor] = &mut sums;
            let [w0, w1, w2] = weights;
            *scalar += strength * w0 * (near + far);
            *vector += strength * w1 * (near - far);
            *tensor += strength * w2 * (near + far);
        }
    }
    Ok(sums)
}

fn on_resonance(
    structure: &Structure,
    line: &crate::atom::LineStructure,
    twice_f: i32,
    (transition_hz, detuning_hz): (f64, f64),
) -> Error {
    let window_hz = RESONANCE_LINEWIDTHS * line.linewidth_hz;
    Error::OnResonance {
        wavelength_nm: wavelength_nm(transition_hz + detuning_hz),
        line: format!(
            "the {} line of {} to F' = {} at {:.6} nm",
            line.name,
            structure.name,
            crate::atom::halves_text(twice_f),
            wavelength_nm(transition_hz)
        ),
        detuning_hz,
        window_hz,
        outside_nm: (
            wavelength_nm(transition_hz + window_hz),
            wavelength_nm(transition_hz - window_hz),
        ),
    }
}

/// Distance of light from the nearest line that a ground level absorbs on, Hz.
pub(crate) fn nearest_line_hz(structure: &Structure, level: usize, frequency_hz: f64) -> f64 {
    let twice_f = structure.manifold().twice_f.get(level).copied().unwrap_or_default();
    let ground = structure.ground_hz(twice_f);
    let mut nearest = f64::INFINITY;
    for (line, dipoles) in structure.lines.iter().zip(&structure.dipoles.lines) {
        for excited in &dipoles.levels {
            if excited.recoupled(level, level) != [0.0; 3] {
                let transition =
                    line.frequency_hz + line.hyperfine.shift_hz(excited.twice_f) - ground;
                nearest = nearest.min((frequency_hz - transition).abs());
            }
        }
    }
    nearest
}

/// Spherical components of a vector: `[-1, 0, +1]`, `A_(+-1) = -+(A_x +- i A_y)/sqrt 2`.
fn spherical([x, y, z]: [Complex64; 3]) -> [Complex64; 3] {
    let half = std::f64::consts::FRAC_1_SQRT_2;
    let iy = Complex64::i() * y;
    [(x - iy) * half, z, -(x + iy) * half]
}

/// The products of two vectors by rank: `[x (x) y]^K_q`.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Products {
    scalar: Complex64,
    vector: [Complex64; 3],
    tensor: [Complex64; 5],
}

impl Products {
    /// Of the emitted (already conjugated) and the absorbed polarisation, in the axes of the field.
    pub fn new(emitted_conjugate: [Complex64; 3], absorbed: [Complex64; 3]) -> Self {
        let [xm, x0, xp] = spherical(emitted_conjugate);
        let [ym, y0, yp] = spherical(absorbed);
        let half = std::f64::consts::FRAC_1_SQRT_2;
        Self {
            scalar: (xp * ym - x0 * y0 + xm * yp) / 3.0_f64.sqrt(),
            vector: [
                (x0 * ym - xm * y0) * half,
                (xp * ym - xm * yp) * half,
                (xp * y0 - x0 * yp) * half,
            ],
            tensor: [
                xm * ym,
                (xm * y0 + x0 * ym) * half,
                (xp * ym + x0 * y0 * 2.0 + xm * yp) / 6.0_f64.sqrt(),
                (xp * y0 + x0 * yp) * half,
                xp * yp,
            ],
        }
    }

    /// The component -q of each rank.
    pub fn opposite(&self, q: i32) -> ByRank<Complex64> {
        let pick = |list: &[Complex64], largest: i32| {
            usize::try_from(largest - q).ok().and_then(|place| list.get(place)).copied()
        };
        [
            if q == 0 { self.scalar } else { Complex64::ZERO },
            pick(&self.vector, 1).unwrap_or_default(),
            pick(&self.tensor, 2).unwrap_or_default(),
        ]
    }
}

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
        let mut frequency_hz = self.frequency_hz;
        if self.scattering {
            let energy = |level: usize| {
                let twice_f = self.structure.manifold().twice_f.get(level);
                twice_f.map_or(0.0, |twice_f| self.structure.ground_hz(*twice_f))
            };
            frequency_hz += 0.5 * (energy(from) - energy(to));
        }
        let found = reduced(self.structure, to, from, frequency_hz)?;
        if let Some(place) = self.known.get_mut(slot) {
            *place = Some(found);
        }
        Ok(found)
    }

    /// `v_ba` between zero-field states at two places, by rank, atomic units.
    pub fn at_rest(&mut self, to: usize, from: usize) -> Result<ByRank<Complex64>, Error> {
        let manifold = self.structure.manifold();
        let (Some(b), Some(a)) = (manifold.states.get(to), manifold.states.get(from)) else {
            return Ok(Default::default());
        };
        let (Some(level_b), Some(level_a)) =
            (manifold.level_of(b.twice_f()), manifold.level_of(a.twice_f()))
        else {
            return Ok(Default::default());
        };
        let angular = self.structure.dipoles.angular(to, from);
        if to != from && angular == [0.0; 3] {
            return Ok(Default::default());
        }
        let reduced = self.reduced(level_b, level_a)?;
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
        Ok(ranks)
    }

    /// `v_ba` between states of the field, each given by its zero-field parts.
    pub fn between(
        &mut self,
        to: impl Iterator<Item = (usize, f64)>,
        from: impl Iterator<Item = (usize, f64)> + Clone,
    ) -> Result<ByRank<Complex64>, Error> {
        let mut sum = [Complex64::ZERO; 3];
        for (b, amplitude_b) in to {
            for (a, amplitude_a) in from.clone() {
                let part = self.at_rest(b, a)?;
                for (total, one) in sum.iter_mut().zip(part) {
                    *total += one * (amplitude_b * amplitude_a);
                }
            }
        }
        Ok(sum)
    }
}

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

    #[test]
    fn products_of_vectors_are_products_of_vectors() {
        let x = [Complex64::new(0.3, -0.2), Complex64::new(0.1, 0.7), Complex64::new(-0.4, 0.5)];
        let y = [Complex64::new(-0.6, 0.1), Complex64::new(0.2, 0.2), Complex64::new(0.9, -0.3)];
        let products = Products::new(x, y);
        let dot: Complex64 = x.iter().zip(&y).map(|(a, b)| a * b).sum();
        assert!((products.scalar + dot / 3.0_f64.sqrt()).norm() < 1e-15);
        // [x (x) y]^1_0 = (i/sqrt 2)(x cross y)_z (Edmonds, from memory)
        let cross_z = x[0] * y[1] - x[1] * y[0];
        let expected = Complex64::i() * cross_z * std::f64::consts::FRAC_1_SQRT_2;
        assert!((products.vector[1] - expected).norm() < 1e-15);
        // Norms add up to that of the dyad.
        let total: f64 = products.scalar.norm_sqr()
            + products.vector.iter().map(Complex64::norm_sqr).sum::<f64>()
            + products.tensor.iter().map(Complex64::norm_sqr).sum::<f64>();
        let sizes: f64 = x.iter().map(Complex64::norm_sqr).sum::<f64>()
            * y.iter().map(Complex64::norm_sqr).sum::<f64>();
        assert!((total - sizes).abs() < 1e-14);
    }
}
