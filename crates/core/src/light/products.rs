//! Products of two polarisations by tensor rank.
//!
//! `[x (x) y]^K_q = sum <1 q1 1 q2|K q> x_q1 y_q2` with spherical components
//! `A_(+-1) = -+(A_x +- i A_y)/sqrt 2`, `A_0 = A_z`; rank 1 is `(i/sqrt 2) x cross y`.
//!
//! Source: Edmonds, Angular Momentum in Quantum Mechanics, sec. 5.1 (from memory).

use num_complex::Complex64;

/// Scalar, vector and tensor part.
pub(crate) type ByRank<T> = [T; 3];

/// Spherical components of a vector: `[-1, 0, +1]`, `A_(+-1) = -+(A_x +- i A_y)/sqrt 2`.
fn spherical([x, y, z]: [Complex64; 3]) -> [Complex64; 3] {
    let half = std::f64::consts::FRAC_1_SQRT_2;
    let iy = Complex64::i() * y;
    [(x - iy) * half, z, -(x + iy) * half]
}

/// The products of two vectors by rank: `[x (x) y]^K_q`.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Products {
    scalar: Complex64,
    vector: [Complex64; 3],
    tensor: [Complex64; 5],
}

impl Products {
    /// Of the emitted (already conjugated) and the absorbed polarisation, in the axes of the field.
    pub fn new(emitted_conjugate: [Complex64; 3], absorbed: [Complex64; 3]) -> Self {
        let [xm, x0, xp] = spherical(emitted_conjugate);
        let [ym, y0, yp] = spherical(absorbed);
        let half = std::f64::consts::FRAC_1_SQRT_2;
        Self {
            scalar: (xp * ym - x0 * y0 + xm * yp) / 3.0_f64.sqrt(),
            vector: [
                (x0 * ym - xm * y0) * half,
                (xp * ym - xm * yp) * half,
                (xp * y0 - x0 * yp) * half,
            ],
            tensor: [
                xm * ym,
                (xm * y0 + x0 * ym) * half,
                (xp * ym + x0 * y0 * 2.0 + xm * yp) / 6.0_f64.sqrt(),
                (xp * y0 + x0 * yp) * half,
                xp * yp,
            ],
        }
    }

    /// The component -q of each rank.
    pub fn opposite(&self, q: i32) -> ByRank<Complex64> {
        let pick = |list: &[Complex64], largest: i32| {
            usize::try_from(largest - q).ok().and_then(|place| list.get(place)).copied()
        };
        [
            if q == 0 { self.scalar } else { Complex64::ZERO },
            pick(&self.vector, 1).unwrap_or_default(),
            pick(&self.tensor, 2).unwrap_or_default(),
        ]
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn products_of_vectors_are_products_of_vectors() {
        let x = [Complex64::new(0.3, -0.2), Complex64::new(0.1, 0.7), Complex64::new(-0.4, 0.5)];
        let y = [Complex64::new(-0.6, 0.1), Complex64::new(0.2, 0.2), Complex64::new(0.9, -0.3)];
        let products = Products::new(x, y);
        let dot: Complex64 = x.iter().zip(&y).map(|(a, b)| a * b).sum();
        assert!((products.scalar + dot / 3.0_f64.sqrt()).norm() < 1e-15);
        // [x (x) y]^1_0 = (i/sqrt 2)(x cross y)_z (Edmonds, from memory)
        let cross_z = x[0] * y[1] - x[1] * y[0];
        let expected = Complex64::i() * cross_z * std::f64::consts::FRAC_1_SQRT_2;
        assert!((products.vector[1] - expected).norm() < 1e-15);
        // Norms add up to that of the dyad.
        let total: f64 = products.scalar.norm_sqr()
            + products.vector.iter().map(Complex64::norm_sqr).sum::<f64>()
            + products.tensor.iter().map(Complex64::norm_sqr).sum::<f64>();
        let sizes: f64 = x.iter().map(Complex64::norm_sqr).sum::<f64>()
            * y.iter().map(Complex64::norm_sqr).sum::<f64>();
        assert!((total - sizes).abs() < 1e-14);
    }
}
