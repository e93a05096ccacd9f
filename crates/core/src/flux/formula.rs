//! Flux from geometry, its folding, and its place next to a target.
//!
//! Phi = (Delta k . e_lattice) a/(2 pi), signed and unfolded, in flux quanta;
//! for beams of one wavelength crossing at the full angle A, tilted by T,
//! Phi = (2 a/lambda) sin(A/2) cos(T). The kick is 2 Phi in units of k_L.
//! Only Phi modulo 1 matters to the lowest tight-binding band.

use crate::degrees::{cos_deg, sin_deg};
use crate::error::Error;
use crate::lattice::Lattice;
use crate::light::RamanPair;
use crate::limits;
use crate::rational::{Flux, Sense};

/// Plain numbers for [`flux`], for maps over wavelengths and angles.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct FluxInput {
    /// Distance between sites.
    pub spacing_nm: f64,
    /// Raman vacuum wavelength.
    pub wavelength_nm: f64,
    /// Full crossing angle.
    pub angle_deg: f64,
    /// Angle between momentum transfer and lattice.
    pub tilt_deg: f64,
}

/// The unfolded flux of crossing beams, in flux quanta.
///
/// # Errors
/// [`Error::OutOfRange`] naming the field.
pub fn flux(input: FluxInput) -> Result<f64, Error> {
    limits::SPACING_NM.check(input.spacing_nm)?;
    limits::WAVELENGTH_NM.check(input.wavelength_nm)?;
    limits::RAMAN_ANGLE_DEG.check(input.angle_deg)?;
    limits::TILT_DEG.check(input.tilt_deg)?;
    let geometry = sin_deg(0.5 * input.angle_deg) * cos_deg(input.tilt_deg);
    Ok(2.0 * input.spacing_nm / input.wavelength_nm * geometry)
}

impl RamanPair {
    /// Flux per plaquette on a lattice: signed, unfolded, in flux quanta.
    #[must_use]
    pub fn flux(&self, lattice: &Lattice) -> f64 {
        let (tuned, held) = self.flux_parts(lattice);
        tuned + held
    }

    /// The flux in two parts: what goes as 1/wavelength when the light is tuned,
    /// and what a second beam with a wavelength of its own holds.
    #[must_use]
    pub fn flux_parts(&self, lattice: &Lattice) -> (f64, f64) {
        let (tuned, held) = self.wavenumbers_along(lattice.direction());
        (tuned * lattice.spacing_nm(), held * lattice.spacing_nm())
    }

    /// Momentum kick along the lattice in units of k_L: twice the flux.
    #[must_use]
    pub fn kick(&self, lattice: &Lattice) -> f64 {
        2.0 * self.flux(lattice)
    }
}

/// A flux folded into (-1/2, 1/2].
#[must_use]
pub fn fold(x: f64) -> f64 {
    let folded = x - x.round();
    // round() sends halves away from zero, so a half of either sign may come out as -1/2.
    if folded <= -0.5 { folded + 1.0 } else { folded }
}

/// Differences of errors below this do not decide between the senses.
const SAME_ERROR: f64 = 1e-12;

/// Branch, sense and error with flux = branch + sense x target + error, the
/// error being as small as it can be; a tie has sense +1.
#[must_use]
pub fn decompose(flux: f64, target: Flux) -> (f64, Sense, f64) {
    let try_sense = |sense: Sense| {
        let branch = (flux - sense.sign() * target.value()).round();
        (branch, sense, flux - target.reached(branch, sense))
    };
    let same = try_sense(Sense::Same);
    let opposite = try_sense(Sense::Opposite);
    if target.is_its_own_opposite() || opposite.2.abs() + SAME_ERROR >= same.2.abs() {
        same
    } else {
        opposite
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    #[test]
    fn folding_at_the_edges() {
        for (x, folded) in
            [(0.5, 0.5), (-0.5, 0.5), (1.5, 0.5), (-1.5, 0.5), (0.0, 0.0), (1.375, 0.375)]
        {
            assert_eq!(fold(x), folded, "{x}");
        }
    }

    #[test]
    fn senses_and_ties() {
        let target: Flux = "3/8".parse().unwrap();
        assert_eq!(decompose(1.375, target), (1.0, Sense::Same, 0.0));
        assert_eq!(decompose(0.625, target), (1.0, Sense::Opposite, 0.0));
        assert_eq!(decompose(0.0, target).1, Sense::Same);
        assert_eq!(decompose(0.51, "1/2".parse().unwrap()).1, Sense::Same);
        assert_eq!(decompose(-0.02, "0".parse().unwrap()).1, Sense::Same);
    }

    proptest! {
        #[test]
        fn folding_keeps_the_class(x in -1e3..1e3_f64) {
            let folded = fold(x);
            prop_assert!(folded > -0.5 && folded <= 0.5);
            prop_assert!(((x - folded) - (x - folded).round()).abs() < 1e-12);
        }

        #[test]
        fn the_parts_add_up(x in -50.0..50.0_f64, p in -20..20_i64, q in 1..30_i64) {
            let target = Flux::Fraction(crate::rational::Fraction::new(p, q).unwrap());
            let (branch, sense, error) = decompose(x, target);
            prop_assert!((branch + sense.sign() * target.value() + error - x).abs() < 1e-12);
            let least = fold(x - target.value()).abs().min(fold(x + target.value()).abs());
            prop_assert!((error.abs() - least).abs() < 2e-12);
        }
    }
}
