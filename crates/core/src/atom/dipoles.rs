//! What the spins alone say about the optical lines of an isotope.
//!
//! Symmetric 3j convention: `<F m|T^K_q|F' m'> = (-1)^(F-m) (F K F'; -m q m')
//! <F||T^K||F'>`. Hyperfine reduction of a dipole element:
//!
//! ```text
//! <F||d||F'> = (-1)^(J+I+F'+1) sqrt((2F+1)(2F'+1)) {J F I; F' J' 1} <J||d||J'>
//! ```
//!
//! Two dipoles through one excited level, recoupled to rank K:
//!
//! ```text
//! <Fb||[d P d]^K||Fa> = (-1)^(K+Fb+Fa) sqrt(2K+1) {1 1 K; Fa Fb F'} <Fb||d||F'> <F'||d||Fa>
//! ```
//!
//! Source: Edmonds, Angular Momentum in Quantum Mechanics, eqs. 5.4.1, 7.1.1,
//! 7.1.7; reduced elements as in Le Kien, Schneeweiss, Rauschenbeutel,
//! Eur. Phys. J. D 67, 92 (2013) (from memory).

use super::manifold::{Manifold, total_spins};
use crate::angular::{wigner_3j, wigner_6j};

/// Scalar, vector and tensor.
pub const RANKS: usize = 3;

/// The excited levels of one line and how they couple ground levels.
#[derive(Debug, Clone, PartialEq)]
pub(crate) struct LineDipoles {
    /// Twice J' of the excited state.
    pub twice_j: i32,
    pub levels: Vec<LevelDipoles>,
    /// Reduced two-dipole elements by rank, summed over the levels: what is left
    /// of them without excited hyperfine structure, at [to, from].
    sums: Vec<[f64; RANKS]>,
    ground_levels: usize,
}

impl LineDipoles {
    /// Scalar, vector and tensor parts of all levels together; zero exactly
    /// where the spins make them cancel.
    pub fn sums(&self, to: usize, from: usize) -> [f64; RANKS] {
        self.sums.get(to * self.ground_levels + from).copied().unwrap_or_default()
    }
}

/// Sums below this part of their terms are zero but for rounding.
const CANCELLED: f64 = 1e-12;

/// One excited hyperfine level.
#[derive(Debug, Clone, PartialEq)]
pub(crate) struct LevelDipoles {
    /// Twice F'.
    pub twice_f: i32,
    /// Reduced two-dipole elements by rank, in units of `|<J||d||J'>|^2`, at
    /// [to, from] of the ground levels.
    recoupled: Vec<[f64; RANKS]>,
    ground_levels: usize,
}

impl LevelDipoles {
    /// Scalar, vector and tensor parts between two ground levels.
    pub fn recoupled(&self, to: usize, from: usize) -> [f64; RANKS] {
        self.recoupled.get(to * self.ground_levels + from).copied().unwrap_or_default()
    }
}

/// The lines of an isotope without their strengths.
#[derive(Debug, Clone, PartialEq)]
pub(crate) struct Dipoles {
    pub manifold: Manifold,
    pub lines: Vec<LineDipoles>,
    /// `(-1)^(K+Q) (-1)^(Fb-mb) (Fb K Fa; -mb Q ma)` by rank K, at [to, from] of
    /// the states; Q = mb - ma.
    angular: Vec<[f64; RANKS]>,
}

impl Dipoles {
    /// From twice the spins I, J, and J' of every line.
    pub fn new(twice_i: i32, twice_j: i32, excited: &[i32]) -> Self {
        let manifold = Manifold::new(twice_i, twice_j);
        let lines = excited.iter().map(|twice_excited| line(&manifold, *twice_excited)).collect();
        let states = &manifold.states;
        let angular = states
            .iter()
            .flat_map(|to| {
                states.iter().map(|from| {
                    let (fb, mb) = (to.twice_f(), to.twice_m());
                    let (fa, ma) = (from.twice_f(), from.twice_m());
                    let q = mb - ma;
                    let mut parts = [0.0; RANKS];
                    for (twice_k, part) in [0, 2, 4].into_iter().zip(&mut parts) {
                        let symbol =
                            wigner_3j([fb, twice_k, fa].map(i32::unsigned_abs), [-mb, q, ma]);
                        *part = sign((twice_k + q + fb - mb) / 2) * symbol;
                    }
                    parts
                })
            })
            .collect();
        Self { manifold, lines, angular }
    }

    /// The angular factors between two states by rank.
    pub fn angular(&self, to: usize, from: usize) -> [f64; RANKS] {
        self.angular.get(to * self.manifold.states.len() + from).copied().unwrap_or_default()
    }
}

fn line(manifold: &Manifold, twice_j: i32) -> LineDipoles {
    let levels = total_spins(manifold.twice_i, twice_j).map(|twice_f| {
        let grounds = &manifold.twice_f;
        let recoupled = grounds
            .iter()
            .flat_map(|fb| {
                grounds.iter().map(move |fa| {
                    let down = reduced(manifold, *fb, twice_j, twice_f);
                    // <F'||d||F> = (-1)^(F'-F) <F||d||F'>: d is Hermitian.
                    let up = sign((twice_f - fa) / 2) * reduced(manifold, *fa, twice_j, twice_f);
                    let mut parts = [0.0; RANKS];
                    for (twice_k, part) in [0_i32, 2, 4].into_iter().zip(&mut parts) {
                        let symbol =
                            wigner_6j([2, 2, twice_k, *fa, *fb, twice_f].map(i32::unsigned_abs));
                        *part = sign((twice_k + fb + fa) / 2)
                            * f64::from(twice_k + 1).sqrt()
                            * symbol
                            * down
                            * up;
                    }
                    parts
                })
            })
            .collect();
        LevelDipoles { twice_f, recoupled, ground_levels: grounds.len() }
    });
    let levels: Vec<LevelDipoles> = levels.collect();
    let ground_levels = manifold.twice_f.len();
    let mut sums = vec![[0.0; RANKS]; ground_levels * ground_levels];
    for (place, sum) in sums.iter_mut().enumerate() {
        let terms = levels.iter().filter_map(|level| level.recoupled.get(place));
        let mut sizes = [0.0; RANKS];
        for term in terms {
            for ((total, size), part) in sum.iter_mut().zip(&mut sizes).zip(term) {
                *total += part;
                *size += part.abs();
            }
        }
        for (total, size) in sum.iter_mut().zip(sizes) {
            if total.abs() < CANCELLED * size {
                *total = 0.0;
            }
        }
    }
    LineDipoles { twice_j, levels, sums, ground_levels }
}

/// `<F||d||F'>` over `<J||d||J'>`.
fn reduced(manifold: &Manifold, twice_f: i32, twice_excited_j: i32, twice_excited_f: i32) -> f64 {
    let (i, j) = (manifold.twice_i, manifold.twice_j);
    let symbol =
        wigner_6j([j, twice_f, i, twice_excited_f, twice_excited_j, 2].map(i32::unsigned_abs));
    let size = f64::from((twice_f + 1) * (twice_excited_f + 1)).sqrt();
    sign((j + i + twice_excited_f + 2) / 2) * size * symbol
}

/// `(-1)^n`.
fn sign(n: i32) -> f64 {
    if n.rem_euclid(2) == 0 { 1.0 } else { -1.0 }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_hyperfine_elements_share_out_the_line() {
        // source: completeness, sum over F' of <F||d||F'>^2 = (2F+1)/(2J+1) <J||d||J'>^2
        // (follows from the orthogonality of 6j symbols, Edmonds 6.2.9)
        for (i, j, excited) in [(3, 1, 1), (3, 1, 3), (8, 1, 3), (7, 1, 3), (9, 0, 2), (1, 0, 2)] {
            let manifold = Manifold::new(i, j);
            for f in &manifold.twice_f {
                let sum: f64 = total_spins(i, excited)
                    .map(|upper| reduced(&manifold, *f, excited, upper).powi(2))
                    .sum();
                let expected = f64::from(f + 1) / f64::from(j + 1);
                assert!((sum - expected).abs() < 1e-14, "{i} {j} {excited} {f}: {sum}");
            }
        }
    }
}
