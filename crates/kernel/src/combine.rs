//! Weighted sums of rows: `out[i] = sum_j weight[j] rows[j][i]`.
//!
//! The inner loop of interpolation over many columns at once. Terms are added
//! in the order of the rows, so the sum does not depend on the CPU level.

use crate::cpu::{dispatch, level};

/// Columns that are summed together, so that the sums stay in registers.
const COLUMNS: usize = 32;

/// Writes the weighted sum of the rows of `rows` (length `weights.len() * out.len()`).
///
/// # Panics
/// If the lengths do not fit.
pub fn combine_rows(weights: &[f64], rows: &[f64], out: &mut [f64]) {
    assert_eq!(rows.len(), weights.len() * out.len(), "one row of out's length per weight");
    combine(level(), weights, rows, out);
}

dispatch! {
    fn combine(weights: &[f64], rows: &[f64], out: &mut [f64]) = combine_columns
}

#[inline(always)]
fn combine_columns(weights: &[f64], rows: &[f64], out: &mut [f64]) {
    let width = out.len();
    let mut start = 0;
    while start + COLUMNS <= width {
        let mut sums = [0.0; COLUMNS];
        for (weight, row) in weights.iter().zip(rows.chunks_exact(width)) {
            for (sum, value) in sums.iter_mut().zip(&row[start..start + COLUMNS]) {
                *sum += weight * value;
            }
        }
        out[start..start + COLUMNS].copy_from_slice(&sums);
        start += COLUMNS;
    }
    for column in start..width {
        let mut sum = 0.0;
        for (weight, row) in weights.iter().zip(rows.chunks_exact(width)) {
            sum += weight * row[column];
        }
        out[column] = sum;
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::cpu::Level;

    #[test]
    fn sums_rows_and_agrees_over_levels() {
        let width = 77;
        let rows: Vec<f64> = (0..3 * width).map(|k| (k as f64).sin()).collect();
        let weights = [0.5, -2.0, 0.25];
        let mut out = vec![0.0; width];
        combine_rows(&weights, &rows, &mut out);
        let mut portable = vec![0.0; width];
        combine(Level::Baseline, &weights, &rows, &mut portable);
        assert_eq!(out, portable);
        let expected = 0.5 * rows[5] - 2.0 * rows[width + 5] + 0.25 * rows[2 * width + 5];
        assert!((out[5] - expected).abs() < 1e-15);
    }
}
