//! Three-vectors of which only the direction counts.

use crate::error::Error;

/// The unit vector along `vector`.
///
/// # Errors
/// [`Error::NoDirection`] if a component is not finite or all are zero.
pub fn unit(vector: [f64; 3], field: &str) -> Result<[f64; 3], Error> {
    // Scaling first keeps the squares of tiny and huge components in range.
    let largest = vector.iter().fold(0.0_f64, |size, x| size.max(x.abs()));
    if vector.iter().any(|x| !x.is_finite()) || largest == 0.0 {
        return Err(Error::NoDirection { field: field.to_owned(), vector });
    }
    let scaled = vector.map(|x| x / largest);
    let length = dot(scaled, scaled).sqrt();
    Ok(scaled.map(|x| x / length))
}

/// The scalar product.
#[must_use]
pub fn dot(a: [f64; 3], b: [f64; 3]) -> f64 {
    a[0] * b[0] + a[1] * b[1] + a[2] * b[2]
}

/// The vector product.
#[must_use]
pub fn cross(a: [f64; 3], b: [f64; 3]) -> [f64; 3] {
    [a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0]]
}
