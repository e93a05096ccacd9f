//! Matrices of the angular momentum operators of one j, in units of hbar.
//!
//! ```text
//! <m|J_z|m> = m,   <m+1|J_+|m> = sqrt((j-m)(j+m+1)),   J_- = J_+^dagger,
//! J_x = (J_+ + J_-)/2,   J_y = (J_+ - J_-)/(2i)
//! ```
//!
//! Row and column i belong to m = i - j: m ascends from -j to j. Elements of
//! J_+ are real and positive (Condon and Shortley), so that J_x and J_z are
//! real and J_y is imaginary. Source: Edmonds, Angular Momentum in Quantum
//! Mechanics, sect. 2.3 (from memory).

use ndarray::{Array1, Array2};
use num_complex::Complex64;

/// J_x, J_y, J_z and the ladder operators of one j.
///
/// ```
/// use fluxloom_core::angular::SpinMatrices;
/// let spin = SpinMatrices::new(1);
/// // <1/2|J_x|-1/2> = 1/2; m ascends.
/// assert_eq!(spin.x[[1, 0]].re, 0.5);
/// assert_eq!(spin.z[[0, 0]].re, -0.5);
/// ```
#[derive(Debug, Clone, PartialEq)]
pub struct SpinMatrices {
    /// J_x.
    pub x: Array2<Complex64>,
    /// J_y.
    pub y: Array2<Complex64>,
    /// J_z, diagonal.
    pub z: Array2<Complex64>,
    /// J_+ = J_x + i J_y.
    pub raising: Array2<Complex64>,
    /// J_- = J_x - i J_y.
    pub lowering: Array2<Complex64>,
}

impl SpinMatrices {
    /// From twice j. Five matrices of (2j+1)^2 elements are stored; whether that
    /// fits into memory is not looked at.
    #[must_use]
    pub fn new(twice_j: u32) -> Self {
        let j = 0.5 * f64::from(twice_j);
        let z = Array1::from_iter((0..=twice_j).map(|i| Complex64::from(f64::from(i) - j)));
        // Above the state i: (j-m)(j+m+1) with j+m = i.
        let above: Vec<f64> =
            (0..=twice_j).map(|i| (f64::from(twice_j - i) * (f64::from(i) + 1.0)).sqrt()).collect();
        let raising = Array2::from_shape_fn((z.len(), z.len()), |(to, from)| {
            let next = above.get(from).filter(|_| to == from + 1);
            Complex64::from(next.copied().unwrap_or_default())
        });
        let lowering = raising.t().to_owned();
        Self {
            x: (&raising + &lowering) * Complex64::from(0.5),
            y: (&raising - &lowering) * Complex64::new(0.0, -0.5),
            z: Array2::from_diag(&z),
            raising,
            lowering,
        }
    }

    /// The operator v.J = v_x J_x + v_y J_y + v_z J_z; nothing is conjugated.
    /// Hermitian for real v.
    #[must_use]
    pub fn along(&self, vector: [Complex64; 3]) -> Array2<Complex64> {
        let [x, y, z] = vector;
        &self.x * x + &self.y * y + &self.z * z
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    const I: Complex64 = Complex64::new(0.0, 1.0);

    fn largest(matrix: &Array2<Complex64>) -> f64 {
        matrix.iter().fold(0.0, |size, element| element.norm().max(size))
    }

    fn commutator(a: &Array2<Complex64>, b: &Array2<Complex64>) -> Array2<Complex64> {
        a.dot(b) - b.dot(a)
    }

    fn dagger(matrix: &Array2<Complex64>) -> Array2<Complex64> {
        matrix.t().mapv(|element| element.conj())
    }

    #[test]
    fn pauli_matrices_and_spin_one() {
        // source: textbook matrices of spin 1/2 and 1 (common practice), m ascending.
        let half = SpinMatrices::new(1);
        let c = |re: f64, im: f64| Complex64::new(re, im);
        assert_eq!(half.x, ndarray::array![[c(0.0, 0.0), c(0.5, 0.0)], [c(0.5, 0.0), c(0.0, 0.0)]]);
        assert_eq!(
            half.y,
            ndarray::array![[c(0.0, 0.0), c(0.0, 0.5)], [c(0.0, -0.5), c(0.0, 0.0)]]
        );
        let one = SpinMatrices::new(2);
        let root = 0.5_f64.sqrt();
        for (to, from) in [(0, 1), (1, 2), (1, 0), (2, 1)] {
            assert!((one.x[[to, from]].re - root).abs() < 1e-15);
        }
        assert_eq!(SpinMatrices::new(0).along([c(1.0, 0.0); 3]), Array2::zeros((1, 1)));
    }

    #[test]
    fn algebra_of_angular_momentum() {
        for twice_j in 0..=24 {
            let spin = SpinMatrices::new(twice_j);
            let j = 0.5 * f64::from(twice_j);
            let allowed = 1e-14 * (1.0 + j * j);
            let SpinMatrices { x, y, z, raising, lowering } = &spin;
            for (a, b, c) in [(x, y, z), (y, z, x), (z, x, y)] {
                assert!(
                    largest(&(commutator(a, b) - c * I)) < allowed,
                    "[J_a, J_b], 2j = {twice_j}"
                );
                assert_eq!(*a, dagger(a));
            }
            assert!(largest(&(commutator(z, raising) - raising)) < allowed);
            assert!(largest(&(commutator(raising, lowering) - z * Complex64::from(2.0))) < allowed);
            let square = x.dot(x) + y.dot(y) + z.dot(z);
            let expected = Array2::from_diag_elem(square.nrows(), Complex64::from(j * (j + 1.0)));
            assert!(largest(&(square - expected)) < allowed, "J^2, 2j = {twice_j}");
            assert_eq!(*raising, x + &(y * I));
            assert_eq!(*lowering, dagger(raising));
        }
    }

    #[test]
    fn elements_follow_from_3j_symbols() {
        // Wigner-Eckart theorem with <j||J||j> = sqrt(j(j+1)(2j+1)) (Edmonds 5.4.3,
        // from memory), J_+1 = -J_+/sqrt(2).
        for twice_j in 1_u32..=11 {
            let spin = SpinMatrices::new(twice_j);
            let j = 0.5 * f64::from(twice_j);
            let reduced = (j * (j + 1.0) * (2.0 * j + 1.0)).sqrt();
            let whole = i32::try_from(twice_j).unwrap();
            for (to, m_to) in (-whole..=whole).step_by(2).enumerate() {
                for (from, m) in (-whole..=whole).step_by(2).enumerate() {
                    let sign = if ((whole - m_to) / 2) % 2 == 0 { 1.0 } else { -1.0 };
                    let element = |twice_q| {
                        let triad = [twice_j, 2, twice_j];
                        sign * reduced * crate::angular::wigner_3j(triad, [-m_to, twice_q, m])
                    };
                    assert!((spin.z[[to, from]].re - element(0)).abs() < 1e-13);
                    let raised = -2.0_f64.sqrt() * element(2);
                    assert!((spin.raising[[to, from]].re - raised).abs() < 1e-13);
                }
            }
        }
    }

    proptest! {
        #[test]
        fn along_any_axis_the_square_is_that_of_z(
            twice_j in 0_u32..9,
            angles in (0.0..3.2_f64, 0.0..6.3_f64),
        ) {
            let (polar, azimuth) = angles;
            let axis = [
                polar.sin() * azimuth.cos(),
                polar.sin() * azimuth.sin(),
                polar.cos(),
            ];
            let spin = SpinMatrices::new(twice_j);
            let turned = spin.along(axis.map(Complex64::from));
            prop_assert!(largest(&(&turned - &dagger(&turned))) < 1e-14);
            let trace = |matrix: &Array2<Complex64>| matrix.dot(matrix).diag().sum().re;
            prop_assert!((trace(&turned) - trace(&spin.z)).abs() < 1e-12);
        }
    }
}
