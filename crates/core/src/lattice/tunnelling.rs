//! Tunnelling to any reach, and the effective mass, from the exact band.
//!
//! E(q) = -t_0 - 2 sum_r t_r cos(pi r q), so t_r = (1/(pi r)) x the integral over
//! 0..1 of E'(q) sin(pi r q). The slope is taken from the probability current
//! on the barrier top, E'(q) = 2 Re-amplitude x slope there: both are small in
//! deep lattices and keep their relative accuracy, where differences of
//! energies would lose it. The sign is kept: lowest band t_1 > 0, t_2 < 0; odd
//! bands t_1 < 0.

use crate::atom::Atom;
use crate::error::Error;
use crate::lattice::bloch::{BlochState, bloch_states, index, zone, zone_points};
use crate::lattice::geometry::Lattice;
use crate::limits;

/// Which hop: how far, in which band.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Hop {
    /// Distance in sites; 0 gives minus the mean energy of the band.
    pub reach: i32,
    /// Band, counted from 0.
    pub band: usize,
}

impl Hop {
    /// To the neighbouring site in the lowest band.
    pub const NEAREST: Self = Self { reach: 1, band: 0 };
}

/// A band index within its limit.
pub(super) fn check_band(band: usize, field: &str) -> Result<usize, Error> {
    limits::BAND.check_as(index(band), field)?;
    Ok(band)
}

/// E'(q) in lattice recoils per k_L, from the current on the barrier top x = a/2.
fn slope(state: &BlochState) -> f64 {
    let (mut value, mut derivative, mut sign) = (0.0, 0.0, 1.0);
    for (momentum, amplitude) in state.terms() {
        value += sign * amplitude;
        derivative += sign * momentum * amplitude;
        sign = -sign;
    }
    2.0 * value * derivative
}

impl Lattice {
    /// Tunnelling t_r in lattice recoils; the Hamiltonian contains -t_r.
    ///
    /// # Errors
    /// [`Error::OutOfRange`] for reach or band, [`Error::NotLocalised`] if the
    /// band is next to free motion.
    pub fn tunnelling_er(&self, hop: Hop) -> Result<f64, Error> {
        let Hop { reach, band } = hop;
        limits::REACH.check(f64::from(reach))?;
        check_band(band, "band")?;
        let distance = f64::from(reach.abs());
        let points = zone_points(self.depth_er(), band, reach.unsigned_abs() as usize)?;
        let quasimomenta = zone(points, 0.5);
        if reach == 0 {
            let energies = self.energies_er(&quasimomenta, band + 1);
            let sum: f64 = energies.iter().skip(band).step_by(band + 1).sum();
            return Ok(-sum / index(points));
        }
        let states = bloch_states(self.depth_er(), band, &quasimomenta);
        let turn = std::f64::consts::PI * distance;
        let sum: f64 = quasimomenta
            .iter()
            .zip(&states)
            .map(|(q, state)| slope(state) * (turn * q).sin())
            .sum();
        Ok(sum / (turn * index(points)))
    }

    /// Tunnelling t_r/h.
    ///
    /// # Errors
    /// As [`Lattice::tunnelling_er`].
    pub fn tunnelling_hz(&self, atom: &Atom, hop: Hop) -> Result<f64, Error> {
        Ok(self.tunnelling_er(hop)? * self.recoil_hz(atom))
    }

    /// Effective mass over the atom's mass at q = 0: 2/E''(0) with E in lattice
    /// recoils and q in k_L. Negative where the band is curved downwards (odd bands).
    ///
    /// The derivative at q = 0 of the trigonometric interpolant of E'(q)
    /// through equidistant points (standard spectral differentiation).
    ///
    /// # Errors
    /// As [`Lattice::tunnelling_er`].
    pub fn effective_mass(&self, band: usize) -> Result<f64, Error> {
        check_band(band, "band")?;
        let points = zone_points(self.depth_er(), band, 0)?;
        let quasimomenta = zone(points, 0.5);
        let states = bloch_states(self.depth_er(), band, &quasimomenta);
        let half = std::f64::consts::FRAC_PI_2;
        let curvature: f64 = quasimomenta
            .iter()
            .zip(&states)
            .map(|(q, state)| {
                slope(state) * (half * index(points) * q).sin() / (half * q).sin().powi(2)
            })
            .sum::<f64>()
            * half
            / index(points);
        Ok(2.0 / curvature)
    }
}
