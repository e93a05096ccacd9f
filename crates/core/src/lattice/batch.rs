//! Band energies for many depths and quasimomenta at once.
//!
//! Each energy is an analytic function of the depth: its branch points lie at
//! complex depths, where gaps close. On a half-octave s..sqrt(2) s Chebyshev
//! interpolation through sixteen depths therefore converges fast for every
//! quasimomentum, near-degenerate points included (measured: below 4e-12 E_R
//! for four bands at every depth), and a thousand depths cost hardly more than
//! the nodes. The last coefficients are looked at: a half-octave that has not
//! converged, and one with few depths, is solved depth by depth. Node energies
//! come from Sturm bisection (`fluxloom_kernel::bands`).
//!
//! Reference: L. N. Trefethen, Approximation Theory and Approximation Practice
//! (SIAM 2013), theorem 8.2 (convergence) and eq. 5.13 (barycentric formula);
//! from memory.
//!
//! The depths of a half-octave share one set of nodes and rows are summed in a fixed
//! order, so the answer does not depend on the number of threads.

use std::collections::BTreeMap;

use ndarray::Array3;

use crate::control::{self, Control};
use crate::error::Error;
use crate::lattice::bloch::index;
use crate::limits;
use fluxloom_kernel::bands::{ENERGY_TRUNCATION_ER, band_energies, cutoff};
use fluxloom_kernel::combine::combine_rows;

/// Interpolation depths per half-octave.
const NODES: usize = 16;

/// With fewer depths in a half-octave than this, each is solved by itself.
const WORTH_INTERPOLATING: usize = 2 * NODES;

/// Largest last Chebyshev coefficient of a converged half-octave, in lattice recoils.
const CONVERGED_ER: f64 = 1e-11;

/// Rows that make one task for a thread.
const ROWS_PER_TASK: usize = 64;

/// Quasimomenta handled between two looks at the control: a few milliseconds.
const POINTS_PER_STEP: usize = 4096;

/// Depths and quasimomenta to combine, and how many bands from the lowest.
#[derive(Debug, Clone, Copy)]
pub struct BandGrid<'a> {
    /// Depths in lattice recoils.
    pub depths_er: &'a [f64],
    /// Quasimomenta in k_L; any real numbers.
    pub quasimomenta: &'a [f64],
    /// Number of bands.
    pub count: usize,
}

/// The lowest energies of every depth at every quasimomentum, in lattice
/// recoils: `[depth, quasimomentum, band]`, good to 1e-10 E_R and better. Digits
/// beyond that depend on how many depths are asked for together.
///
/// # Errors
/// [`Error::OutOfRange`] naming the first bad depth or quasimomentum by its
/// place, [`Error::MemoryOverLimit`], [`Error::Cancelled`].
pub fn band_energies_er(grid: BandGrid<'_>, control: &dyn Control) -> Result<Array3<f64>, Error> {
    let BandGrid { depths_er, quasimomenta, count } = grid;
    limits::BAND_COUNT.check(index(count))?;
    check_each(depths_er, limits::DEPTH_ER, "depths_er")?;
    check_each(quasimomenta, limits::QUASIMOMENTUM, "quasimomenta")?;
    control::allow_numbers(&[depths_er.len(), quasimomenta.len(), count], 8)?;
    let shape = (depths_er.len(), quasimomenta.len(), count);
    let width = quasimomenta.len() * count;
    if width == 0 || depths_er.is_empty() {
        return Ok(Array3::zeros(shape));
    }
    let mut energies = control::zeros(depths_er.len() * width)?;
    let halves = HalfOctaves::prepare(&grid, control)?;
    let task = |(chunk, rows): (usize, &mut [f64])| -> Result<(), Error> {
        control::go_on(control)?;
        control.progress(chunk * ROWS_PER_TASK, depths_er.len());
        let depths = depths_er.iter().skip(chunk * ROWS_PER_TASK);
        for (depth, row) in depths.zip(rows.chunks_mut(width)) {
            halves.row(*depth, &grid, row, control)?;
        }
        Ok(())
    };
    for_each_chunk(&mut energies, width * ROWS_PER_TASK, task)?;
    control.progress(depths_er.len(), depths_er.len());
    // The shape fits by construction.
    Ok(Array3::from_shape_vec(shape, energies).unwrap_or_default())
}

fn check_each(values: &[f64], limit: limits::Limit, field: &str) -> Result<(), Error> {
    match values.iter().position(|value| !limit.contains(*value)) {
        Some(place) => {
            let value = values.get(place).copied().unwrap_or_default();
            limit.check_as(value, &format!("{field}[{place}]")).map(|_| ())
        }
        None => Ok(()),
    }
}

/// Hands chunks of `rows` with their numbers to a task, on all threads there are.
#[cfg(feature = "rayon")]
pub(super) fn for_each_chunk<F>(rows: &mut [f64], size: usize, task: F) -> Result<(), Error>
where
    F: Fn((usize, &mut [f64])) -> Result<(), Error> + Send + Sync,
{
    use rayon::prelude::*;
    rows.par_chunks_mut(size).enumerate().try_for_each(task)
}

/// Hands chunks of `rows` with their numbers to a task, one after the other.
#[cfg(not(feature = "rayon"))]
pub(super) fn for_each_chunk<F>(rows: &mut [f64], size: usize, task: F) -> Result<(), Error>
where
    F: Fn((usize, &mut [f64])) -> Result<(), Error> + Send + Sync,
{
    rows.chunks_mut(size).enumerate().try_for_each(task)
}

/// Node energies of the half-octaves worth interpolating in.
struct HalfOctaves {
    nodes: BTreeMap<i32, Vec<f64>>,
}

/// The half-octave 2^(k/2) <= s < 2^((k+1)/2) that a depth belongs to.
#[allow(clippy::cast_possible_truncation)]
fn half_octave_of(depth_er: f64) -> i32 {
    (2.0 * depth_er.log2()).floor() as i32
}

/// Centre and half-width of a half-octave.
fn span(half_octave: i32) -> (f64, f64) {
    let low = (0.5 * f64::from(half_octave)).exp2();
    let high = low * std::f64::consts::SQRT_2;
    (0.5 * (low + high), 0.5 * (high - low))
}

/// Chebyshev point j of the first kind on -1..1.
fn chebyshev_point(j: usize) -> f64 {
    (std::f64::consts::PI * (index(j) + 0.5) / index(NODES)).cos()
}

fn node_depth(half_octave: i32, j: usize) -> f64 {
    let (centre, half_width) = span(half_octave);
    centre + half_width * chebyshev_point(j)
}

/// Energies of one depth, `[quasimomentum][band]`, looking at the control now and then.
pub(super) fn solve(
    depth_er: f64,
    quasimomenta: &[f64],
    count: usize,
    row: &mut [f64],
    control: &dyn Control,
) -> Result<(), Error> {
    let kept = cutoff(depth_er, count, ENERGY_TRUNCATION_ER);
    let points = quasimomenta.chunks(POINTS_PER_STEP);
    for (points, energies) in points.zip(row.chunks_mut(POINTS_PER_STEP * count)) {
        control::go_on(control)?;
        band_energies(depth_er, points, count, kept, energies);
    }
    Ok(())
}

impl HalfOctaves {
    fn prepare(grid: &BandGrid<'_>, control: &dyn Control) -> Result<Self, Error> {
        let mut members: BTreeMap<i32, usize> = BTreeMap::new();
        for depth in grid.depths_er {
            *members.entry(half_octave_of(*depth)).or_default() += 1;
        }
        let worth: Vec<i32> = members
            .into_iter()
            .filter(|(_, members)| *members >= WORTH_INTERPOLATING)
            .map(|(half_octave, _)| half_octave)
            .collect();
        let width = grid.quasimomenta.len() * grid.count;
        control::allow_numbers(&[worth.len(), NODES, width], 8)?;
        let mut table = control::zeros(worth.len() * NODES * width)?;
        for_each_chunk(&mut table, width, |(place, row)| {
            control::go_on(control)?;
            if let Some(half_octave) = worth.get(place / NODES) {
                let depth = node_depth(*half_octave, place % NODES);
                solve(depth, grid.quasimomenta, grid.count, row, control)?;
            }
            Ok(())
        })?;
        let nodes = worth
            .into_iter()
            .zip(table.chunks(NODES * width))
            .filter(|(_, rows)| converged(rows, width))
            .map(|(half_octave, rows)| (half_octave, rows.to_vec()))
            .collect();
        Ok(Self { nodes })
    }

    fn row(
        &self,
        depth_er: f64,
        grid: &BandGrid<'_>,
        row: &mut [f64],
        control: &dyn Control,
    ) -> Result<(), Error> {
        let half_octave = half_octave_of(depth_er);
        match self.nodes.get(&half_octave) {
            Some(nodes) => {
                combine_rows(&weights(half_octave, depth_er), nodes, row);
                // Rounding must not turn touching bands around.
                for energies in row.chunks_mut(grid.count) {
                    let mut below = f64::NEG_INFINITY;
                    for energy in energies {
                        *energy = energy.max(below);
                        below = *energy;
                    }
                }
                Ok(())
            }
            None => solve(depth_er, grid.quasimomenta, grid.count, row, control),
        }
    }
}

/// Normalised barycentric weights of a depth among the nodes of its half-octave.
fn weights(half_octave: i32, depth_er: f64) -> [f64; NODES] {
    let (centre, half_width) = span(half_octave);
    let x = (depth_er - centre) / half_width;
    let mut weights = [0.0; NODES];
    for (j, weight) in weights.iter_mut().enumerate() {
        let distance = x - chebyshev_point(j);
        if distance == 0.0 {
            let mut only = [0.0; NODES];
            if let Some(slot) = only.get_mut(j) {
                *slot = 1.0;
            }
            return only;
        }
        let sine = (std::f64::consts::PI * (index(j) + 0.5) / index(NODES)).sin();
        *weight = if j % 2 == 0 { sine } else { -sine } / distance;
    }
    let sum: f64 = weights.iter().sum();
    weights.map(|weight| weight / sum)
}

/// Whether the last two Chebyshev coefficients of every column have died away.
fn converged(rows: &[f64], width: usize) -> bool {
    [NODES - 1, NODES - 2].iter().all(|order| {
        let mut wave = [0.0; NODES];
        for (j, value) in wave.iter_mut().enumerate() {
            let angle = std::f64::consts::PI * (index(j) + 0.5) / index(NODES);
            *value = 2.0 / index(NODES) * (angle * index(*order)).cos();
        }
        let mut coefficients = vec![0.0; width];
        combine_rows(&wave, rows, &mut coefficients);
        coefficients.iter().all(|c| c.abs() <= CONVERGED_ER)
    })
}
