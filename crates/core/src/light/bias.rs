//! The magnetic bias field: its strength, its direction, and the axes it gives
//! the atoms.
//!
//! States |F, m> are quantised along the field. The axes x', y', z' of the field
//! are the laboratory's, turned by the smallest rotation that takes z into the
//! field; for a field along -z by half a turn about x. They fix the phases of
//! couplings; round a closed loop of couplings the choice drops out.

use num_complex::Complex64;

use crate::error::Error;
use crate::limits::FIELD_GAUSS;
use crate::vector;

/// A bias field; the default is no field, with states quantised along z.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Bias {
    /// Strength, G.
    pub field_gauss: f64,
    /// Direction; only the direction of the vector counts.
    pub field_direction: [f64; 3],
}

impl Default for Bias {
    fn default() -> Self {
        Self { field_gauss: 0.0, field_direction: [0.0, 0.0, 1.0] }
    }
}

impl Bias {
    /// A field along z.
    #[must_use]
    pub fn along_z(field_gauss: f64) -> Self {
        Self { field_gauss, ..Self::default() }
    }

    /// The axes of the field after its numbers were checked.
    pub(crate) fn axes(&self) -> Result<Axes, Error> {
        FIELD_GAUSS.check_as(self.field_gauss, "field_gauss")?;
        let [nx, ny, nz] = vector::unit(self.field_direction, "field_direction")?;
        let across = nx * nx + ny * ny;
        if across < 1e-30 && nz < 0.0 {
            return Ok(Axes([[1.0, 0.0, 0.0], [0.0, -1.0, 0.0], [0.0, 0.0, -1.0]]));
        }
        // 1/(1+nz), without the cancellation near -z.
        let factor = if nz > 0.0 { 1.0 / (1.0 + nz) } else { (1.0 - nz) / across };
        Ok(Axes([
            [1.0 - nx * nx * factor, -nx * ny * factor, -nx],
            [-nx * ny * factor, 1.0 - ny * ny * factor, -ny],
            [nx, ny, nz],
        ]))
    }
}

/// The three axes of the field in laboratory coordinates.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Axes([[f64; 3]; 3]);

impl Axes {
    /// Components of a complex laboratory vector along the axes.
    pub fn components(&self, vector: [Complex64; 3]) -> [Complex64; 3] {
        let [x, y, z] = vector;
        self.0.map(|[a, b, c]| x * a + y * b + z * c)
    }

    /// Components of a real laboratory vector along the axes.
    pub fn real_components(&self, vector: [f64; 3]) -> [f64; 3] {
        self.0.map(|axis| vector::dot(axis, vector))
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::vector::{cross, dot};

    #[test]
    fn the_axes_are_right_handed_and_end_in_the_field() {
        for direction in [
            [0.0, 0.0, 1.0],
            [0.0, 0.0, -2.0],
            [1.0, -2.0, 0.5],
            [1e-9, 0.0, -1.0],
            [1e-12, -1e-11, -1.0],
            [0.0, 3.0, 0.0],
        ] {
            let bias = Bias { field_gauss: 1.0, field_direction: direction };
            let Axes([x, y, z]) = bias.axes().unwrap();
            let unit = vector::unit(direction, "d").unwrap();
            for k in 0..3 {
                assert!((z[k] - unit[k]).abs() < 1e-15);
                assert!((cross(x, y)[k] - z[k]).abs() < 1e-14, "{direction:?}");
            }
            for (a, b, expected) in [(x, x, 1.0), (y, y, 1.0), (x, y, 0.0), (x, z, 0.0)] {
                assert!((dot(a, b) - expected).abs() < 1e-14, "{direction:?}");
            }
        }
    }
}
