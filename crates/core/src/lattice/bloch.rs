//! Bloch states of one band, with fixed signs.
//!
//! The state at quasimomentum q is sum_p A(p) exp(i p k_L x), p = q + 2n. The
//! energy comes from the kernel's bisection; the amplitudes from a twisted
//! factorisation of H - E (B. N. Parlett, I. S. Dhillon, Linear Algebra Appl.
//! 267, 247 (1997); from memory), which gives small components with small
//! relative error, as tunnelling in deep lattices needs.
//!
//! Signs: sum A is positive in even bands (so is the state on the site), sum p A
//! in odd bands (so is the slope there), with a factor -i understood
//! in odd bands. Bands of this potential have these parities about the site at
//! both zone edges (W. Kohn, Phys. Rev. 115, 809 (1959); from memory), so the
//! Wannier functions built from these states are real and maximally localised.

use fluxloom_kernel::bands::{STATE_TRUNCATION_ER, band_energies, cutoff, fold_quasimomentum};

use crate::error::Error;

/// The widest spread of a Wannier function, in sites, that is still worked with.
pub(super) const MOST_SITES: usize = 262_144;

/// One Bloch state: amplitudes at momenta `first_momentum + 2k`, in k_L.
#[derive(Debug, Clone)]
pub(super) struct BlochState {
    pub first_momentum: f64,
    pub amplitudes: Vec<f64>,
}

impl BlochState {
    /// Pairs of momentum and amplitude.
    pub fn terms(&self) -> impl Iterator<Item = (f64, f64)> {
        let first = self.first_momentum;
        self.amplitudes.iter().enumerate().map(move |(k, a)| (first + 2.0 * index(k), *a))
    }

    /// The amplitude at a momentum of this state's comb; 0 outside the kept range.
    pub fn amplitude_at(&self, momentum: f64) -> f64 {
        let position = (0.5 * (momentum - self.first_momentum)).round();
        if position < 0.0 || position >= index(self.amplitudes.len()) {
            return 0.0;
        }
        #[allow(clippy::cast_possible_truncation, clippy::cast_sign_loss)]
        self.amplitudes.get(position as usize).copied().unwrap_or(0.0)
    }
}

#[allow(clippy::cast_precision_loss)]
pub(super) fn index(k: usize) -> f64 {
    k as f64
}

/// The states of `band` at the given quasimomenta (any real numbers, in k_L).
pub(super) fn bloch_states(depth_er: f64, band: usize, quasimomenta: &[f64]) -> Vec<BlochState> {
    let count = band + 1;
    let kept = cutoff(depth_er, count, STATE_TRUNCATION_ER);
    let mut energies = vec![0.0; quasimomenta.len() * count];
    band_energies(depth_er, quasimomenta, count, kept, &mut energies);
    let rows = 2 * kept.modes + 2;
    quasimomenta
        .iter()
        .zip(energies.chunks(count))
        .map(|(q, energies)| {
            let folded = fold_quasimomentum(*q);
            let first_momentum = folded - index(rows);
            let energy = energies.get(band).copied().unwrap_or_default();
            let mut amplitudes = tridiagonal_state(depth_er, first_momentum, rows, energy);
            fix_sign(&mut amplitudes, first_momentum, band);
            // Mirror the folded state when q stands in the left half of its zone.
            if 0.5 * q - (0.5 * q).round() < 0.0 {
                amplitudes.reverse();
                if band % 2 == 1 {
                    amplitudes.iter_mut().for_each(|a| *a = -*a);
                }
                let last = first_momentum + 2.0 * index(rows - 1);
                return BlochState { first_momentum: -last, amplitudes };
            }
            BlochState { first_momentum, amplitudes }
        })
        .collect()
}

/// The normalised eigenvector of the plane-wave Hamiltonian next to `energy`.
fn tridiagonal_state(depth_er: f64, first: f64, rows: usize, energy: f64) -> Vec<f64> {
    let off = -0.25 * depth_er;
    let diagonal: Vec<f64> =
        (0..rows).map(|k| (first + 2.0 * index(k)).powi(2) + 0.5 * depth_er).collect();
    let mut energy = energy;
    let mut state = Vec::new();
    // The second pass uses the Rayleigh correction of the first, which takes the
    // rounding of the bisection out of the energy.
    for _ in 0..2 {
        let (vector, correction) = twisted(&diagonal, off, energy);
        energy += correction;
        state = vector;
    }
    state
}

/// One twisted factorisation: the normalised vector and the correction of the energy.
fn twisted(diagonal: &[f64], off: f64, energy: f64) -> (Vec<f64>, f64) {
    let tiny = f64::MIN_POSITIVE.sqrt();
    let away = |pivot: f64| if pivot.abs() < tiny { tiny } else { pivot };
    let sweep = |rows: &mut dyn Iterator<Item = f64>| -> Vec<f64> {
        let mut pivots: Vec<f64> = Vec::with_capacity(diagonal.len());
        for d in rows {
            let before = pivots.last().map_or(0.0, |pivot| off * off / pivot);
            pivots.push(away(d - energy - before));
        }
        pivots
    };
    let down = sweep(&mut diagonal.iter().copied());
    let mut up = sweep(&mut diagonal.iter().rev().copied());
    up.reverse();
    let gamma = |((a, b), d): ((&f64, &f64), &f64)| a + b - (d - energy);
    let (twist, gamma) = down
        .iter()
        .zip(&up)
        .zip(diagonal)
        .map(gamma)
        .enumerate()
        .min_by(|(_, a), (_, b)| a.abs().total_cmp(&b.abs()))
        .unwrap_or((0, 0.0));
    let mut vector = vec![0.0; diagonal.len()];
    let (left, right) = vector.split_at_mut(twist);
    let mut value = 1.0;
    for (slot, pivot) in left.iter_mut().zip(&down).rev() {
        value *= -off / pivot;
        *slot = value;
    }
    value = 1.0;
    for (k, (slot, pivot)) in right.iter_mut().zip(up.iter().skip(twist)).enumerate() {
        if k > 0 {
            value *= -off / pivot;
        }
        *slot = value;
    }
    let square: f64 = vector.iter().map(|v| v * v).sum();
    let length = square.sqrt();
    vector.iter_mut().for_each(|v| *v /= length);
    (vector, gamma / square)
}

fn fix_sign(amplitudes: &mut [f64], first_momentum: f64, band: usize) {
    let sum: f64 = amplitudes
        .iter()
        .enumerate()
        .map(
            |(k, a)| {
                if band.is_multiple_of(2) { *a } else { a * (first_momentum + 2.0 * index(k)) }
            },
        )
        .sum();
    if sum < 0.0 {
        amplitudes.iter_mut().for_each(|a| *a = -*a);
    }
}

/// Number of quasimomenta with which sums over the zone have converged to
/// rounding, for hops up to `reach` sites.
///
/// The integrands are periodic and analytic in a strip about the real axis;
/// the nearest branch points belong to the gaps above and below the band, at a
/// distance gap/(4 edge) for free bands crossing at `edge` k_L. An equidistant
/// sum of N points then errs by exp(-pi N distance).
pub(super) fn zone_points(depth_er: f64, band: usize, reach: usize) -> Result<usize, Error> {
    let mut strip = branch_distance(depth_er, band);
    if band > 0 {
        strip = strip.min(branch_distance(depth_er, band - 1));
    }
    let wanted = 24.0 + 14.0 / strip.max(1e-300);
    if wanted > index(MOST_SITES) {
        return Err(Error::NotLocalised { band, depth_er, most_sites: MOST_SITES });
    }
    #[allow(clippy::cast_possible_truncation, clippy::cast_sign_loss)]
    let points = wanted.ceil() as usize + 2 * reach;
    Ok(points + points % 2)
}

/// Distance in k_L of the branch point between bands `lower` and `lower + 1` from
/// the real axis. They meet at q = 1 for even `lower`, at q = 0 for odd.
pub(super) fn branch_distance(depth_er: f64, lower: usize) -> f64 {
    let count = lower + 2;
    let kept = cutoff(depth_er, count, fluxloom_kernel::bands::ENERGY_TRUNCATION_ER);
    let edge = if lower.is_multiple_of(2) { 1.0 } else { 0.0 };
    let mut energies = vec![0.0; count];
    band_energies(depth_er, &[edge], count, kept, &mut energies);
    let at = |band: usize| energies.get(band).copied().unwrap_or_default();
    (at(lower + 1) - at(lower)).max(0.0) / (4.0 * index(lower + 1))
}

/// `points` equidistant quasimomenta over one zone, shifted by a fraction of
/// their distance so that the zone's centre and edge, where bands may nearly
/// touch, are passed by.
pub(super) fn zone(points: usize, fraction: f64) -> Vec<f64> {
    (0..points).map(|j| -1.0 + 2.0 * (index(j) + fraction) / index(points)).collect()
}
