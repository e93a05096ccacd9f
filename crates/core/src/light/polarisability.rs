//! Polarisabilities of the ground levels: scalar, vector and tensor.
//!
//! V = -(1/4)|E|^2 { a_s - i a_v (u* x u).F/(2F)
//!     + a_t [3((u*.F)(u.F) + (u.F)(u*.F)) - 2F(F+1)(u*.u)] / (2F(2F-1)) }
//!
//! in light E(t) = Re(E u exp(-i w t)); atomic units. Excited hyperfine
//! structure is kept; the polarisability beyond the listed lines is added to
//! the scalar part where the table knows it. Light nearer than 100 linewidths to
//! a line is refused.
//!
//! Source: Le Kien, Schneeweiss, Rauschenbeutel, Eur. Phys. J. D 67, 92 (2013)
//! (from memory).

use serde::{Deserialize, Serialize};

use super::ways::{LineWays, energy_hz, line_ways, reduced, reduced_by};
use crate::atom::{Structure, Uncertain, standard_errors};
use crate::constants::SPEED_OF_LIGHT_M_PER_S;
use crate::documents::Document;
use crate::error::Error;
use crate::limits::WAVELENGTH_NM;
use crate::{Atom, atom};

/// The three polarisabilities of one F, atomic units.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Polarisability {
    /// Scalar.
    pub scalar: f64,
    /// Vector.
    pub vector: f64,
    /// Tensor.
    pub tensor: f64,
}

impl Document for Polarisability {
    const FORMAT: &'static str = "fluxloom-polarisability";
}

impl Polarisability {
    fn from_ranks(twice_f: i32, [zero, one, two]: [f64; 3], residual_au: f64) -> Self {
        let f = f64::from(twice_f) / 2.0;
        let width = 2.0 * f + 1.0;
        // The factors take the reduced elements to the operators F and F F; they
        // vanish or diverge where a level is too small to have the part.
        let vector = if twice_f >= 1 { (2.0 * f / ((f + 1.0) * width)).sqrt() * one } else { 0.0 };
        let tensor = if twice_f >= 2 {
            (2.0 * f * (2.0 * f - 1.0) / (3.0 * (f + 1.0) * width * (2.0 * f + 3.0))).sqrt() * two
        } else {
            0.0
        };
        Self { scalar: -zero / (3.0 * width).sqrt() + residual_au, vector, tensor }
    }

    fn parts(self) -> [f64; 3] {
        [self.scalar, self.vector, self.tensor]
    }

    /// What light along the field, of circularity V, sees of a state m of the
    /// level F: `a_s + V a_v m/(2F) - a_t (3m^2 - F(F+1))/(2F(2F-1))`.
    #[must_use]
    pub fn along_field(&self, state: atom::State, circularity: f64) -> f64 {
        let (f, m) = (state.f(), state.m());
        let vector = if f > 0.0 { circularity * self.vector * m / (2.0 * f) } else { 0.0 };
        let tensor = if f > 0.5 {
            self.tensor * (3.0 * m * m - f * (f + 1.0)) / (2.0 * f * (2.0 * f - 1.0))
        } else {
            0.0
        };
        self.scalar + vector - tensor
    }
}

/// Of the level at a place, for an optical frequency.
pub(crate) fn polarisability(
    structure: &Structure,
    level: usize,
    frequency_hz: f64,
) -> Result<Polarisability, Error> {
    let twice_f = structure.manifold().twice_f.get(level).copied().unwrap_or_default();
    let ranks = reduced(structure, level, level, frequency_hz)?;
    Ok(Polarisability::from_ranks(twice_f, ranks, structure.residual_au))
}

/// Frequency of a checked wavelength, Hz.
pub(crate) fn frequency_of(wavelength_nm: f64) -> Result<f64, Error> {
    Ok(SPEED_OF_LIGHT_M_PER_S / (WAVELENGTH_NM.check(wavelength_nm)? * 1e-9))
}

impl Atom {
    /// The polarisabilities of the level F at a vacuum wavelength.
    ///
    /// # Errors
    /// [`Error::OutOfRange`] for the wavelength, [`Error::NoSuchState`] for F,
    /// [`Error::OnResonance`] within 100 linewidths of a line.
    pub fn polarisability_au(&self, wavelength_nm: f64, f: f64) -> Result<Polarisability, Error> {
        let level = self.manifold().find_level(self.name(), f)?;
        polarisability(&self.structure(), level, frequency_of(wavelength_nm)?)
    }

    /// As [`Atom::polarisability_au`] for many wavelengths; an error names none
    /// of the others.
    ///
    /// # Errors
    /// As [`Atom::polarisability_au`].
    pub fn polarisabilities_au(
        &self,
        wavelengths_nm: &[f64],
        f: f64,
    ) -> Result<Vec<Polarisability>, Error> {
        let level = self.manifold().find_level(self.name(), f)?;
        let structure = self.structure();
        let twice_f = structure.manifold().twice_f.get(level).copied().unwrap_or_default();
        let at_rest = energy_hz(&structure, level);
        let known: Vec<LineWays<'_>> = line_ways(&structure, (level, level), at_rest).collect();
        let one = |nm: &f64| {
            let ranks = reduced_by(&structure, &known, frequency_of(*nm)?)?;
            Ok(Polarisability::from_ranks(twice_f, ranks, structure.residual_au))
        };
        wavelengths_nm.iter().map(one).collect()
    }

    /// The polarisabilities with their standard errors from the atomic data.
    ///
    /// # Errors
    /// As [`Atom::polarisability_au`].
    pub fn polarisability_with_error(
        &self,
        wavelength_nm: f64,
        f: f64,
    ) -> Result<Uncertain<Polarisability>, Error> {
        let value = self.polarisability_au(wavelength_nm, f)?;
        let level = self.manifold().find_level(self.name(), f)?;
        let frequency_hz = frequency_of(wavelength_nm)?;
        let errors = standard_errors(self, |structure| {
            Ok(polarisability(structure, level, frequency_hz)?.parts())
        })?;
        let [scalar, vector, tensor] = errors;
        Ok(Uncertain { value, standard_error: Polarisability { scalar, vector, tensor } })
    }

    /// The polarisabilities of the level F in a field that does not oscillate;
    /// its vector part is zero.
    ///
    /// # Errors
    /// [`Error::NoSuchState`] for F.
    pub fn static_polarisability_au(&self, f: f64) -> Result<Polarisability, Error> {
        let level = self.manifold().find_level(self.name(), f)?;
        polarisability(&self.structure(), level, 0.0)
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::light::response::Operator;
    use num_complex::Complex64;

    #[test]
    fn static_values_are_the_measured_ones() {
        // source: Gregoire et al., PRA 92, 052513 (2015): Rb 320.10(60), K 290.00(50),
        // Cs 401.20(70); Na 162.7(8) (from memory). Allowed: 0.5 %.
        let cases = [
            ("87Rb", 2.0, 320.10),
            ("40K", 4.5, 290.00),
            ("133Cs", 3.0, 401.20),
            ("23Na", 2.0, 162.7),
        ];
        for (name, f, expected) in cases {
            let found = Atom::new(name).unwrap().static_polarisability_au(f).unwrap();
            assert!((found.scalar / expected - 1.0).abs() < 5e-3, "{name}: {}", found.scalar);
            assert_eq!(found.vector, 0.0);
        }
    }

    #[test]
    fn the_operator_is_what_the_polarisabilities_say() {
        // Diagonal elements for sigma+ and pi light, from the closed form of the light shift.
        let third = Complex64::new(std::f64::consts::FRAC_1_SQRT_2, 0.0);
        let sigma = [third, Complex64::i() * third, Complex64::ZERO];
        let pi = [Complex64::ZERO, Complex64::ZERO, Complex64::ONE];
        for name in Atom::available() {
            let atom = Atom::new(name).unwrap();
            let structure = atom.structure();
            let frequency = SPEED_OF_LIGHT_M_PER_S / 1064e-9;
            for (place, state) in structure.manifold().states.iter().enumerate() {
                let alpha = atom.polarisability_au(1064.0, state.f()).unwrap();
                let (f, m) = (state.f(), state.m());
                let tensor = |scale: f64| {
                    if f <= 0.5 {
                        0.0
                    } else {
                        alpha.tensor * scale * (3.0 * m * m - f * (f + 1.0)) / (f * (2.0 * f - 1.0))
                    }
                };
                for (light, expected) in
                    [(sigma, alpha.along_field(*state, 1.0)), (pi, alpha.scalar + tensor(1.0))]
                {
                    let mut operator = Operator::two_photon(&structure, (light, light), frequency);
                    let found: Complex64 = operator.at_rest(place, place).unwrap().iter().sum();
                    assert!((found.re - expected).abs() < 1e-10 * expected.abs(), "{name} {state}");
                    assert!(found.im.abs() < 1e-10);
                }
            }
        }
    }
}
