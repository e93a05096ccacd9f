//! Fields at which a splitting does not move to first order.
//!
//! Zeros of dE_b/dB - dE_a/dB: found between neighbouring points of a grid that
//! is fine against every field on which the hyperfine structure changes, also
//! where two zeros lie between two points.

use super::state::State;
use super::{Atom, Levels};
use crate::error::Error;
use crate::limits::FIELD_GAUSS;

/// Intervals of the grid.
const INTERVALS: u32 = 4096;

/// Slopes below this, in Hz/G, are zero but for rounding.
const FLAT_HZ_PER_GAUSS: f64 = 1e-8;

/// Widths of an interval that a zero is confined to, in units of its field.
const WIDTH: f64 = 1e-15;

impl Atom {
    /// The fields in `range_gauss` where the splitting of two states is
    /// first-order insensitive, ascending; none if there is none.
    ///
    /// # Errors
    /// [`Error::NoSuchState`]; [`Error::Contradiction`] (`atom.same_state`);
    /// [`Error::OutOfRange`] and [`Error::EmptyRange`] for the range.
    pub fn insensitive_fields_gauss(
        &self,
        a: State,
        b: State,
        range_gauss: (f64, f64),
    ) -> Result<Vec<f64>, Error> {
        let (low, high) = range_gauss;
        FIELD_GAUSS.check_as(low, "range_gauss[0]")?;
        FIELD_GAUSS.check_as(high, "range_gauss[1]")?;
        if low >= high {
            return Err(Error::EmptyRange { field: "range_gauss".into(), low, high });
        }
        if a == b {
            return Err(Error::Contradiction {
                code: "atom.same_state",
                message: format!("both states are {a}: a splitting takes two different states"),
            });
        }
        let manifold = self.manifold();
        let (from, to) = (manifold.find(self.name(), a)?, manifold.find(self.name(), b)?);
        let structure = self.structure();
        let slope = |field: f64| {
            let of = |place| Levels::moment_hz_per_gauss(&structure, place, field.clamp(low, high));
            of(to) - of(from)
        };
        let step = (high - low) / f64::from(INTERVALS);
        let grid: Vec<f64> = (0..=INTERVALS).map(|k| low + f64::from(k) * step).collect();
        let slopes: Vec<f64> = grid.iter().map(|field| slope(*field)).collect();
        // Equal slopes everywhere: two states of one nuclear moment. Nothing to find.
        if slopes.iter().all(|s| s.abs() <= FLAT_HZ_PER_GAUSS) {
            return Ok(Vec::new());
        }
        let mut found: Vec<f64> = Vec::new();
        let mut keep = |field: f64| {
            let near = |known: &f64| (known - field).abs() <= 1e-9 * (1.0 + field);
            if !found.iter().any(near) {
                found.push(field);
            }
        };
        for (fields, values) in grid.windows(2).zip(slopes.windows(2)) {
            let (&[left, right], &[first, second]) = (fields, values) else { continue };
            if first.abs() <= FLAT_HZ_PER_GAUSS {
                keep(left);
            } else if second.abs() <= FLAT_HZ_PER_GAUSS {
                keep(right);
            } else if first.signum() != second.signum() {
                keep(bisect((left, first), right, slope));
            }
        }
        for (fields, values) in grid.windows(3).zip(slopes.windows(3)) {
            let (&[left, _, right], &[first, middle, last]) = (fields, values) else { continue };
            let dips = middle.abs() < first.abs() && middle.abs() <= last.abs();
            if !dips || first.signum() != last.signum() || first.signum() != middle.signum() {
                continue;
            }
            // A dip towards zero between grid points may hide two zeros.
            let bottom = lowest(left, right, |field| slope(field) * first.signum());
            if slope(bottom).signum() != first.signum() {
                keep(bisect((left, first), bottom, slope));
                keep(bisect((right, last), bottom, slope));
            }
        }
        found.sort_by(f64::total_cmp);
        Ok(found)
    }
}

/// The zero between a point with its value and another of the opposite sign.
fn bisect(from: (f64, f64), to: f64, f: impl Fn(f64) -> f64) -> f64 {
    let ((mut same, sign), mut other) = ((from.0, from.1.signum()), to);
    while (other - same).abs() > WIDTH * (1.0 + same.abs()) {
        let middle = 0.5 * (same + other);
        if middle == same || middle == other {
            break;
        }
        if f(middle).signum() == sign { same = middle } else { other = middle }
    }
    0.5 * (same + other)
}

/// Where a function with one dip is lowest (golden section).
fn lowest(mut left: f64, mut right: f64, f: impl Fn(f64) -> f64) -> f64 {
    let golden = 0.5 * (5.0_f64.sqrt() - 1.0);
    for _ in 0..60 {
        let (one, two) = (right - golden * (right - left), left + golden * (right - left));
        if f(one) < f(two) { right = two } else { left = one }
    }
    0.5 * (left + right)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn fields(atom: &str, a: &str, b: &str, range: (f64, f64)) -> Vec<f64> {
        let atom = Atom::new(atom).unwrap();
        atom.insensitive_fields_gauss(a.parse().unwrap(), b.parse().unwrap(), range).unwrap()
    }

    #[test]
    fn known_fields_are_found() {
        // source: 87Rb |1,-1> to |2,1>, 3.228917(3) G (Harber et al., Phys. Rev. A 66,
        // 053616 (2002); from memory)
        let found = fields("87Rb", "1,-1", "2,1", (0.0, 100.0));
        assert_eq!(found.len(), 1);
        assert!((found[0] - 3.228_917).abs() < 1e-4, "{found:?}");
        // The clock transition at no field at all.
        assert_eq!(fields("87Rb", "1,0", "2,0", (0.0, 100.0)), [0.0]);
        assert!(fields("87Rb", "2,2", "1,1", (0.0, 2000.0)).is_empty());
        assert!(fields("87Sr", "9/2,1/2", "9/2,3/2", (0.0, 2000.0)).is_empty());
    }
}
