//! Polarisation vectors: linear, circular, elliptical, and from angles as read
//! on the bench.
//!
//! The field is E(t) = Re(E u exp(-i w t)) with a complex unit vector u across
//! the direction k of propagation,
//!
//! ```text
//! u = cos(chi) e1 + i sin(chi) e2,   e2 = k x e1,   -i (u* x u).k = sin(2 chi),
//! ```
//!
//! e1 along the long axis of the ellipse and |tan(chi)| the ratio of its axes,
//! chi in [-45, 45] degrees. At chi = +45 the helicity is +1: the angular
//! momentum points along k, and for k = z the light is sigma+ about z. The
//! common phase of u is free; it is fixed here by e1 being real.
//!
//! Source: the convention of Born and Wolf, Principles of Optics, section 1.4,
//! for the ellipticity angle (from memory); sense of rotation from the sign of
//! the frequency above.

use num_complex::Complex64;

use crate::degrees::{cos_deg, sin_deg};
use crate::error::{Error, vector_text};
use crate::limits;
use crate::vector::{self, cross, dot};

/// Sine of the angle by which a vector may lean out of the transverse plane,
/// and at which another is told from the direction itself.
const TRANSVERSE: f64 = 1e-6;

/// Which way circular light turns about its own direction.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Helicity {
    /// +1: angular momentum along the direction, chi = +45 degrees.
    Plus,
    /// -1: angular momentum against the direction, chi = -45 degrees.
    Minus,
}

impl Helicity {
    /// The helicity of +1 or -1.
    ///
    /// # Errors
    /// [`Error::Contradiction`] for any other number.
    pub fn from_number(helicity: f64) -> Result<Self, Error> {
        if helicity == 1.0 {
            Ok(Self::Plus)
        } else if helicity == -1.0 {
            Ok(Self::Minus)
        } else {
            Err(Error::Contradiction {
                code: "polarisation.bad_helicity",
                message: format!(
                    "helicity = {} is neither 1 nor -1: give 1 for angular momentum along \
                     direction, -1 for the opposite; between the two the light is elliptical",
                    limits::plain(helicity)
                ),
            })
        }
    }
}

/// Angles of a polarisation as they are read from mounts on the bench.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Bench {
    /// Angle of the long axis from the plane of the beams: 0 in the plane, 90
    /// along its normal; at +-180 the vector of 0 with the other sign.
    pub polarisation_deg: f64,
    /// chi: 0 linear, +-45 circular.
    pub ellipticity_deg: f64,
}

/// Linear light along the part of `along` that lies across `direction`.
///
/// # Errors
/// [`Error::NoDirection`] for a vector, [`Error::Contradiction`] if `along` is
/// parallel to `direction`.
pub fn linear(direction: [f64; 3], along: [f64; 3]) -> Result<[Complex64; 3], Error> {
    let (first, _) = axes(direction, along, "along")?;
    Ok(first.map(|x| Complex64::new(x + 0.0, 0.0)))
}

/// Circular light of one helicity. Its first axis is the laboratory's x across
/// `direction`, or y where the direction's unit vector has |x| above 0.9: for
/// directions z and y it is x, for x it is y.
///
/// # Errors
/// [`Error::NoDirection`].
pub fn circular(direction: [f64; 3], helicity: Helicity) -> Result<[Complex64; 3], Error> {
    let [x, ..] = vector::unit(direction, "direction")?;
    let along = if x.abs() > 0.9 { [0.0, 1.0, 0.0] } else { [1.0, 0.0, 0.0] };
    let ellipticity_deg = match helicity {
        Helicity::Plus => 45.0,
        Helicity::Minus => -45.0,
    };
    elliptical(direction, along, ellipticity_deg)
}

/// Elliptical light, the long axis along the part of `along` that lies across
/// `direction`; the sign of the ellipticity is that of the helicity.
///
/// # Errors
/// As [`linear`], and [`Error::OutOfRange`] for the ellipticity.
pub fn elliptical(
    direction: [f64; 3],
    along: [f64; 3],
    ellipticity_deg: f64,
) -> Result<[Complex64; 3], Error> {
    limits::ELLIPTICITY_DEG.check(ellipticity_deg)?;
    let (first, second) = axes(direction, along, "along")?;
    Ok(ellipse(first, second, ellipticity_deg))
}

/// The polarisation of a beam in (or near) a plane, from angles as read on the
/// bench: long axis cos(p) (`plane_normal` x `direction`) + sin(p) `plane_normal`,
/// the normal taken across `direction`. It stays transverse when the beam turns.
///
/// # Errors
/// [`Error::NoDirection`] for a vector, [`Error::Contradiction`] if
/// `plane_normal` is parallel to `direction`, [`Error::OutOfRange`] for an angle.
pub fn from_bench(
    direction: [f64; 3],
    plane_normal: [f64; 3],
    bench: Bench,
) -> Result<[Complex64; 3], Error> {
    limits::POLARISATION_DEG.check(bench.polarisation_deg)?;
    limits::ELLIPTICITY_DEG.check(bench.ellipticity_deg)?;
    let (normal, beyond) = axes(direction, plane_normal, "plane_normal")?;
    // In the plane lies normal x k = -beyond; (in the plane, normal, k) is right-handed.
    let (sin, cos) = (sin_deg(bench.polarisation_deg), cos_deg(bench.polarisation_deg));
    let long = combined([sin, -cos], [normal, beyond]);
    let short = combined([cos, sin], [normal, beyond]);
    Ok(ellipse(long, short, bench.ellipticity_deg))
}

/// e1 and e2: `along` taken across the direction, and direction x e1.
fn axes(direction: [f64; 3], along: [f64; 3], field: &str) -> Result<([f64; 3], [f64; 3]), Error> {
    let k = vector::unit(direction, "direction")?;
    let turned = cross(k, vector::unit(along, field)?);
    // Its length is the sine of the angle between the two.
    if dot(turned, turned).sqrt() <= TRANSVERSE {
        return Err(Error::Contradiction {
            code: "polarisation.parallel",
            message: format!(
                "{field} = {} is parallel to direction = {}: light has no field along its own \
                 direction, so give a vector across it",
                vector_text(along.map(Complex64::from)),
                vector_text(direction.map(Complex64::from))
            ),
        });
    }
    let second = vector::unit(turned, field)?;
    Ok((cross(second, k), second))
}

fn combined(weights: [f64; 2], vectors: [[f64; 3]; 2]) -> [f64; 3] {
    let [[ax, ay, az], [bx, by, bz]] = vectors;
    let [a, b] = weights;
    [a * ax + b * bx, a * ay + b * by, a * az + b * bz]
}

/// cos(chi) first + i sin(chi) second.
fn ellipse(first: [f64; 3], second: [f64; 3], ellipticity_deg: f64) -> [Complex64; 3] {
    let (sin, cos) = (sin_deg(ellipticity_deg), cos_deg(ellipticity_deg));
    let [ax, ay, az] = first;
    let [bx, by, bz] = second;
    // Adding zero takes the sign from zeros, which print oddly with one.
    [(ax, bx), (ay, by), (az, bz)].map(|(a, b)| Complex64::new(cos * a + 0.0, sin * b + 0.0))
}

/// The unit vector along a polarisation, its part along `direction` (a unit
/// vector) removed, which must be small.
///
/// # Errors
/// [`Error::NoPolarisation`], [`Error::NotTransverse`].
pub(super) fn transverse(
    vector: [Complex64; 3],
    direction: [f64; 3],
    field: &str,
) -> Result<[Complex64; 3], Error> {
    let Some(unit) = unit(vector) else {
        return Err(Error::NoPolarisation { field: field.to_owned(), vector });
    };
    let [ux, uy, uz] = unit;
    let [kx, ky, kz] = direction;
    let along = ux * kx + uy * ky + uz * kz;
    let flat = [ux - along * kx, uy - along * ky, uz - along * kz];
    let lean = along.norm();
    let length = flat.iter().map(Complex64::norm_sqr).sum::<f64>().sqrt();
    if lean <= TRANSVERSE {
        return Ok(flat.map(|x| x / length));
    }
    Err(Error::NotTransverse {
        field: field.to_owned(),
        lean_deg: lean.atan2(length).to_degrees(),
        nearest: (length > TRANSVERSE).then(|| flat.map(|x| x / length)),
    })
}

/// The vector over its length; none if that is zero or not finite.
fn unit(vector: [Complex64; 3]) -> Option<[Complex64; 3]> {
    // Scaling first keeps the squares of tiny and huge components in range.
    let largest = vector.iter().fold(0.0_f64, |size, x| size.max(x.re.abs()).max(x.im.abs()));
    if vector.iter().any(|x| !x.is_finite()) || largest == 0.0 {
        return None;
    }
    let scaled = vector.map(|x| Complex64::new(x.re / largest, x.im / largest));
    let length = scaled.iter().map(Complex64::norm_sqr).sum::<f64>().sqrt();
    Some(scaled.map(|x| x / length))
}

#[cfg(test)]
mod tests {
    use super::*;

    fn c(re: f64, im: f64) -> Complex64 {
        Complex64::new(re, im)
    }

    #[test]
    fn small_leans_are_taken_out_and_length_does_not_matter() {
        let z = [0.0, 0.0, 1.0];
        for scale in [5e-324, 1e-200, 1.0, 1e300] {
            let [x, y, along] =
                transverse([c(0.0, scale), c(0.0, 0.0), c(0.0, 0.9e-6 * scale)], z, "u").unwrap();
            assert_eq!((x, y, along), (c(0.0, 1.0), c(0.0, 0.0), c(0.0, 0.0)));
        }
        let lean = transverse([c(1.0, 0.0), c(0.0, 0.0), c(0.0, 1.1e-6)], z, "u").unwrap_err();
        assert!(matches!(lean, Error::NotTransverse { nearest: Some(_), .. }));
        let along = transverse([c(0.0, 0.0), c(0.0, 0.0), c(0.0, 2.0)], z, "u").unwrap_err();
        assert!(matches!(along, Error::NotTransverse { nearest: None, lean_deg: 90.0, .. }));
    }
}
