//! Lowest energies of V(x) = s sin^2(pi x/a) by plane waves and Sturm bisection.
//!
//! In units of the lattice recoil and of k_L = pi/a the Hamiltonian at
//! quasimomentum q is tridiagonal: (q+2n)^2 + s/2 on the diagonal, -s/4 beside
//! it. The energy of band b lies between the free energy e_b(q) and e_b(q) + s
//! (Weyl, 0 <= V <= s); the number of eigenvalues below x is the number of sign
//! changes in the leading minors of H - x (Sturm), so bisection keeps a proof
//! at every step and has no trouble with near-degenerate pairs. All pairs
//! (quasimomentum, band) run in lockstep, sixteen at a time.
//!
//! Reference: J. W. Demmel, Applied Numerical Linear Algebra (SIAM 1997),
//! section 5.3.4 (bisection and its backward stability); from memory.
//!
//! Cost: about 50 bisections x (2 modes + 2) rows for each value.

use crate::cpu::{Level, dispatch, level};

/// Values that run in lockstep: four AVX2 registers, so that the additions of
/// one hide the latency of the others.
const LANES: usize = 16;

/// Truncation error accepted for energies, in lattice recoils.
pub const ENERGY_TRUNCATION_ER: f64 = 1e-13;

/// Truncation error accepted where the states are used: an energy errs in the
/// second order of what the state lacks, so this leaves states good to 1e-15.
pub const STATE_TRUNCATION_ER: f64 = 1e-30;

/// How many plane waves to keep, and what that costs in accuracy.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Cutoff {
    /// Plane waves n = -modes-1 ..= modes are kept, for q folded into 0..1.
    pub modes: usize,
    /// Proven bound of the truncation error of each of the energies.
    pub truncation_er: f64,
    /// Bound of the error of finite arithmetic: what backward stability of the
    /// Sturm count leaves, and the width of the last bracket.
    pub rounding_er: f64,
}

impl Cutoff {
    /// Bound of the whole error of an energy, in lattice recoils.
    #[must_use]
    pub fn error_er(&self) -> f64 {
        self.truncation_er + self.rounding_er
    }
}

/// The smallest cutoff whose proven truncation error is at most `allowed_er`
/// for each of the lowest `count` bands (`depth` and the error in lattice recoils).
///
/// Proof. Split the infinite matrix into the kept block T, the rest R >= mu,
/// and the two corner elements o = s/4 between them. For E < mu the Schur
/// complement lowers the corner diagonal of T by at most delta = o^2/(mu - E),
/// hence the exact energy E_b lies at most
/// delta x sum over the lowest b+1 states of |v_corner|^2 below that of T. From
/// the outermost row inwards |v_k| <= |v_{k-1}| o/(d_k - E - o) as soon as
/// d_k - E > 2 o, which bounds the corner components by a product. E is bounded
/// by (b+1)^2 + s.
#[must_use]
pub fn cutoff(depth: f64, count: usize, allowed_er: f64) -> Cutoff {
    let bands = count as f64;
    let off = 0.25 * depth;
    let highest = bands * bands + depth;
    // Conservative for both ends of the kept range: |q + 2n| >= 2k for the k-th row outwards.
    let diagonal = |k: usize| (2.0 * k as f64).powi(2) + 0.5 * depth;
    let mut modes = count.div_ceil(2);
    let mut corner = 1.0_f64;
    loop {
        let denominator = diagonal(modes) - highest - off;
        if denominator > off {
            corner *= (off / denominator).powi(2);
            // The rest R is at least its own diagonal less its two neighbours.
            let mu = diagonal(modes + 1) - 2.0 * off;
            let truncation_er = 2.0 * bands * corner * off * off / (mu - highest);
            if truncation_er <= allowed_er {
                let size = diagonal(modes + 1) + 2.0 * off;
                return Cutoff { modes, truncation_er, rounding_er: 8.0 * f64::EPSILON * size };
            }
        }
        modes += 1;
    }
}

/// A quasimomentum folded into 0..1, where its energies are the same.
#[must_use]
pub fn fold_quasimomentum(quasimomentum: f64) -> f64 {
    (quasimomentum - 2.0 * (0.5 * quasimomentum).round()).abs()
}

/// The energy of free band `band` at a quasimomentum folded into 0..1.
#[must_use]
pub fn free_energy(band: usize, folded: f64) -> f64 {
    let momentum =
        if band.is_multiple_of(2) { band as f64 + folded } else { band as f64 + 1.0 - folded };
    momentum * momentum
}

/// Writes the lowest `count` energies at every quasimomentum (any real number,
/// in k_L) into `energies[quasimomentum][band]`, in lattice recoils.
///
/// The accuracy is `cutoff.error_er()`, for the cutoff of this depth and count.
/// Each energy depends on its own arguments only, not on the company it is
/// computed in.
///
/// # Panics
/// If `energies` does not hold `quasimomenta.len() * count` numbers.
pub fn band_energies(
    depth: f64,
    quasimomenta: &[f64],
    count: usize,
    cutoff: Cutoff,
    energies: &mut [f64],
) {
    assert_eq!(energies.len(), quasimomenta.len() * count, "one energy per point and band");
    let rows = 2 * cutoff.modes + 2;
    let mut block = Block::new(rows, depth);
    let level = level();
    for (start, chunk) in energies.chunks_mut(LANES).enumerate() {
        for lane in 0..LANES {
            // Unfilled lanes repeat the last value; their result is dropped.
            let value = (start * LANES + lane).min(quasimomenta.len() * count - 1);
            block.fill(lane, fold_quasimomentum(quasimomenta[value / count]), value % count);
        }
        bisect(level, &mut block);
        for (energy, (low, high)) in chunk.iter_mut().zip(block.low.iter().zip(&block.high)) {
            *energy = 0.5 * (low + high) * block.scale;
        }
    }
}

/// The state of one lockstep bisection. All numbers are divided by `scale`, the
/// largest diagonal element, so that no minor can overflow.
struct Block {
    scale: f64,
    depth: f64,
    off_squared: f64,
    steps: usize,
    diagonal: Vec<[f64; LANES]>,
    band: [u64; LANES],
    low: [f64; LANES],
    high: [f64; LANES],
}

impl Block {
    fn new(rows: usize, depth: f64) -> Self {
        let scale = (rows as f64).powi(2) + depth;
        // Below this floor the coupling is lost in rounding; it keeps a vanishing
        // minor from silencing all that follow.
        let off_squared = (0.25 * depth / scale).powi(2).max(1e-34);
        let width = depth / scale + 4.0 * f64::EPSILON;
        let steps = (width / (0.5 * f64::EPSILON)).log2().ceil().max(1.0) as usize;
        Self {
            scale,
            depth,
            off_squared,
            steps,
            diagonal: vec![[0.0; LANES]; rows],
            band: [0; LANES],
            low: [0.0; LANES],
            high: [0.0; LANES],
        }
    }

    fn fill(&mut self, lane: usize, folded: f64, band: usize) {
        let first = -(self.diagonal.len() as f64);
        for (row, diagonal) in self.diagonal.iter_mut().enumerate() {
            let momentum = folded + first + 2.0 * row as f64;
            diagonal[lane] = (momentum * momentum + 0.5 * self.depth) / self.scale;
        }
        let free = free_energy(band, folded) / self.scale;
        self.band[lane] = band as u64;
        self.low[lane] = free - 2.0 * f64::EPSILON;
        self.high[lane] = free + self.depth / self.scale + 2.0 * f64::EPSILON;
    }
}

dispatch! {
    /// Bisects every lane down to its last bits.
    fn bisect(block: &mut Block) = bisect_lanes
}

#[inline(always)]
fn bisect_lanes(block: &mut Block) {
    let off_squared = block.off_squared;
    let (mut low, mut high, band) = (block.low, block.high, block.band);
    for _ in 0..block.steps {
        let mut middle = [0.0; LANES];
        for lane in 0..LANES {
            middle[lane] = 0.5 * (low[lane] + high[lane]);
        }
        let mut before = [0.0; LANES];
        let mut minor = [1.0; LANES];
        let mut below = [0_u64; LANES];
        for diagonal in &block.diagonal {
            // Whole arrays step by step: the form that compilers turn into vectors.
            let mut next = [0.0; LANES];
            for lane in 0..LANES {
                next[lane] =
                    (diagonal[lane] - middle[lane]) * minor[lane] - off_squared * before[lane];
            }
            for lane in 0..LANES {
                // Wrapping, because an overflow check would keep this out of vectors.
                let changed = (next[lane].to_bits() ^ minor[lane].to_bits()) >> 63;
                below[lane] = below[lane].wrapping_add(changed);
            }
            before = minor;
            minor = next;
        }
        for lane in 0..LANES {
            let above = below[lane] > band[lane];
            high[lane] = if above { middle[lane] } else { high[lane] };
            low[lane] = if above { low[lane] } else { middle[lane] };
        }
    }
    block.low = low;
    block.high = high;
}

/// The level that the loops run at, by name.
#[must_use]
pub fn level_name() -> &'static str {
    Level::name(level())
}

#[cfg(test)]
mod tests {
    use super::*;

    fn energies(depth: f64, quasimomenta: &[f64], count: usize) -> Vec<f64> {
        let mut out = vec![0.0; quasimomenta.len() * count];
        band_energies(
            depth,
            quasimomenta,
            count,
            cutoff(depth, count, ENERGY_TRUNCATION_ER),
            &mut out,
        );
        out
    }

    #[test]
    fn free_motion_at_vanishing_depth() {
        let quasimomenta = [0.0, 0.3, -0.3, 0.999, 1.0, -1.0, 2.3];
        for (q, found) in quasimomenta.iter().zip(energies(1e-12, &quasimomenta, 5).chunks(5)) {
            for (band, energy) in found.iter().enumerate() {
                let expected = free_energy(band, fold_quasimomentum(*q));
                assert!((energy - expected).abs() < 2e-12, "{q} {band} {energy} {expected}");
            }
        }
    }

    #[test]
    fn deep_wells_are_harmonic_with_the_known_corrections() {
        // Large-parameter expansion of the Mathieu characteristic values, DLMF 28.8.1 (from memory),
        // with h = sqrt(s)/2: E = (2b+1) sqrt(s) - ((2b+1)^2 + 1)/8 - ...
        let depth = 900.0_f64;
        for (band, energy) in energies(depth, &[0.4], 3).iter().enumerate() {
            let k = 2.0 * band as f64 + 1.0;
            let h = 0.5 * depth.sqrt();
            let expected = 2.0 * h * k
                - (k * k + 1.0) / 8.0
                - (k.powi(3) + 3.0 * k) / (128.0 * h)
                - (5.0 * k.powi(4) + 34.0 * k * k + 9.0) / (4096.0 * h * h)
                - (33.0 * k.powi(5) + 410.0 * k.powi(3) + 405.0 * k) / (131_072.0 * h.powi(3));
            // The next term of the series is 3.5e-5 for band 2.
            assert!((energy - expected).abs() < 5e-5, "{band} {energy} {expected}");
        }
    }

    #[test]
    fn a_larger_cutoff_changes_nothing_beyond_the_stated_error() {
        for depth in [1e-6, 0.02, 1.0, 7.3, 40.0, 300.0, 1000.0] {
            for count in [1, 4, 9, 32] {
                let kept = cutoff(depth, count, ENERGY_TRUNCATION_ER);
                let more = Cutoff { modes: kept.modes + 12, ..kept };
                let points = [0.0, 1e-7, 0.37, 0.5, 1.0 - 1e-9, 1.0];
                let mut wide = vec![0.0; points.len() * count];
                band_energies(depth, &points, count, more, &mut wide);
                for (a, b) in energies(depth, &points, count).iter().zip(&wide) {
                    let size = (2.0 * (more.modes + 1) as f64).powi(2) + depth;
                    let allowed = kept.error_er() + 8.0 * f64::EPSILON * size;
                    assert!((a - b).abs() <= allowed, "{depth} {count} {a} {b}");
                }
            }
        }
    }

    #[test]
    fn company_does_not_matter() {
        let many: Vec<f64> = (0..101).map(|k| -1.0 + 0.02 * f64::from(k)).collect();
        let together = energies(6.0, &many, 4);
        for (q, row) in many.iter().zip(together.chunks(4)) {
            assert_eq!(row, energies(6.0, &[*q], 4));
        }
    }

    #[test]
    fn every_level_gives_the_same_bits() {
        let fill = |block: &mut Block| {
            for lane in 0..LANES {
                block.fill(lane, lane as f64 / LANES as f64, lane % 4);
            }
        };
        let kept = cutoff(11.0, 4, ENERGY_TRUNCATION_ER);
        let mut portable = Block::new(2 * kept.modes + 2, 11.0);
        fill(&mut portable);
        let mut native = Block::new(2 * kept.modes + 2, 11.0);
        fill(&mut native);
        bisect(Level::Baseline, &mut portable);
        bisect(level(), &mut native);
        assert_eq!(portable.low, native.low);
        assert_eq!(portable.high, native.high);
    }
}
