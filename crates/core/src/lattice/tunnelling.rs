//! Tunnelling to any reach, and the effective mass, from the exact band.
//!
//! E(q) = -t_0 - 2 sum_r t_r cos(pi r q), so t_r = (1/(pi r)) x the integral over
//! 0..1 of E'(q) sin(pi r q). The slope is taken from the probability current
//! on the barrier top, E'(q) = 2 x amplitude x slope there: both are small in
//! deep lattices, so that the nearest hop keeps its relative accuracy where
//! differences of energies would lose it (5e-4 at s = 1000, where t_1 is 1e-25);
//! farther hops are good to 1e-16 of the nearest. The sign is kept: lowest band
//! t_1 > 0, t_2 < 0; odd bands t_1 < 0.
//!
//! Where bands nearly touch, an equidistant sum over the zone would need more
//! points than anyone wants; the integral is then taken by double-exponential
//! quadrature, whose points crowd at the zone's centre and edge (H. Takahasi,
//! M. Mori, Publ. RIMS 9, 721 (1974); from memory).

use crate::atom::Atom;
use crate::error::Error;
use crate::lattice::bloch::{BlochState, bloch_states, branch_distance, index, zone, zone_points};
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
    /// [`Error::OutOfRange`] for reach or band.
    pub fn tunnelling_er(&self, hop: Hop) -> Result<f64, Error> {
        let Hop { reach, band } = hop;
        limits::REACH.check(f64::from(reach))?;
        check_band(band, "band")?;
        let sites = reach.unsigned_abs() as usize;
        let grid = match zone_points(self.depth_er(), band, sites) {
            Ok(points) if points <= MOST_EQUIDISTANT => {
                zone(points, 0.5).into_iter().map(|q| (q, 1.0 / index(points))).collect()
            }
            _ => crowded_half_zone(CROWDED_POINTS + 32 * sites),
        };
        let quasimomenta: Vec<f64> = grid.iter().map(|(q, _)| *q).collect();
        let weights = grid.iter().map(|(_, weight)| *weight);
        if reach == 0 {
            let energies = self.energies_er(&quasimomenta, band + 1);
            let energies = energies.iter().skip(band).step_by(band + 1);
            return Ok(-weights.zip(energies).map(|(weight, energy)| weight * energy).sum::<f64>());
        }
        let states = bloch_states(self.depth_er(), band, &quasimomenta);
        let turn = std::f64::consts::PI * f64::from(reach.abs());
        let terms =
            quasimomenta.iter().zip(&states).map(|(q, state)| slope(state) * (turn * q).sin());
        Ok(weights.zip(terms).map(|(weight, term)| weight * term).sum::<f64>() / turn)
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
    /// E''(0) is the limit of E'(q)/q, extrapolated from three small q well inside
    /// the distance of the nearest branch point.
    ///
    /// # Errors
    /// [`Error::OutOfRange`] for the band.
    pub fn effective_mass(&self, band: usize) -> Result<f64, Error> {
        check_band(band, "band")?;
        // The neighbour that band `band` meets at q = 0: below even bands, above odd ones.
        let strip = match band {
            0 => 1.0,
            even if even.is_multiple_of(2) => branch_distance(self.depth_er(), even - 1),
            odd => branch_distance(self.depth_er(), odd),
        };
        let step = 1e-3 * strip.min(1.0);
        let quasimomenta = [step, 2.0 * step, 4.0 * step];
        let states = bloch_states(self.depth_er(), band, &quasimomenta);
        let ratios: Vec<f64> =
            states.iter().zip(quasimomenta).map(|(state, q)| slope(state) / q).collect();
        let at = |k: usize| ratios.get(k).copied().unwrap_or(f64::NAN);
        // Richardson extrapolation in q^2: removes the terms in q^2 and q^4.
        let (near, far) = ((4.0 * at(0) - at(1)) / 3.0, (4.0 * at(1) - at(2)) / 3.0);
        Ok(2.0 / ((16.0 * near - far) / 15.0))
    }
}

/// Beyond so many equidistant points the crowded grid is cheaper.
const MOST_EQUIDISTANT: usize = 2048;

/// Points of the crowded grid; more for far hops, which oscillate.
const CROWDED_POINTS: usize = 320;

/// Pairs of quasimomentum and weight over 0..1, crowded at both ends: the
/// double-exponential map q = (1 + tanh(pi/2 sinh u))/2 on equidistant u.
fn crowded_half_zone(points: usize) -> Vec<(f64, f64)> {
    // Where the map's slope has fallen to rounding.
    const WIDEST: f64 = 3.2;
    let step = 2.0 * WIDEST / index(points);
    (0..=points)
        .map(|k| {
            let u = -WIDEST + step * index(k);
            let inner = std::f64::consts::FRAC_PI_2 * u.sinh();
            let weight = step * 0.5 * std::f64::consts::FRAC_PI_2 * u.cosh() / inner.cosh().powi(2);
            (0.5 * (1.0 + inner.tanh()), weight)
        })
        .collect()
}
