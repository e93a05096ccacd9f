//! Energies of the ground levels in closed form, by another way than
//! [`super::GroundLevels`].
//!
//! For J = 1/2, with `D = A (I + 1/2)` and `x = (g_J - g_I) mu_B B/D`,
//!
//! ```text
//! E(F = I +- 1/2, m) = -D/(2(2I+1)) + g_I mu_B m B +- (D/2) sqrt(1 + 4 m x/(2I+1) + x^2)
//! ```
//!
//! and 1 +- x for the root where |m| = I + 1/2, which may change its sign. D
//! carries the sign of A.
//!
//! Source: Breit, Rabi, Phys. Rev. 38, 2082 (1931), in the form of Arimondo,
//! Inguscio, Violino, Rev. Mod. Phys. 49, 31 (1977) (from memory).

use super::Atom;
use super::state::State;
use crate::constants::{BOHR_MAGNETON_J_PER_T, GAUSS_PER_TESLA, PLANCK_J_S};
use crate::error::Error;
use crate::limits::FIELD_GAUSS;

impl Atom {
    /// Energy over h of a ground state from the centre of gravity, Hz, in closed
    /// form and plain double arithmetic: a check on [`Atom::ground_levels`].
    ///
    /// # Errors
    /// [`Error::NoSuchState`]; [`Error::OutOfRange`] for a field outside 0..2000 G.
    pub fn breit_rabi_hz(&self, state: State, field_gauss: f64) -> Result<f64, Error> {
        FIELD_GAUSS.check_as(field_gauss, "field_gauss")?;
        self.manifold().find(self.name(), state)?;
        let structure = self.structure();
        let (m, i) = (state.m(), self.nuclear_spin());
        let magneton = BOHR_MAGNETON_J_PER_T / PLANCK_J_S / GAUSS_PER_TESLA;
        let nuclear = structure.g_i * magneton * m * field_gauss;
        if self.ground_spin() == 0.0 {
            return Ok(nuclear);
        }
        let width = 2.0 * i + 1.0;
        let spread = structure.hyperfine.a_hz * (i + 0.5);
        let x = (structure.g_j - structure.g_i) * magneton * field_gauss / spread;
        let upper = state.f() > i;
        let root = if 2.0 * m.abs() == width {
            1.0 + x * m.signum()
        } else {
            (1.0 + 4.0 * m * x / width + x * x).sqrt()
        };
        let sign = if upper { 1.0 } else { -1.0 };
        Ok(-spread / (2.0 * width) + nuclear + sign * 0.5 * spread * root)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_matrix_agrees_with_the_closed_form() {
        // source: Breit, Rabi 1931. Both are sums of gigahertz; the closed form
        // rounds its own terms, a few units in the last place.
        for name in Atom::available() {
            let atom = Atom::new(name).unwrap();
            for field in [0.0, 1e-3, 0.5, 3.0, 30.0, 100.0, 357.0, 1000.0, 2000.0] {
                let levels = atom.ground_levels(field).unwrap();
                for state in levels.states() {
                    let matrix = levels.energy_hz(*state).unwrap();
                    let closed = atom.breit_rabi_hz(*state, field).unwrap();
                    let allowed = 1e-6_f64.max(2.0 * f64::EPSILON * 1e10);
                    assert!((matrix - closed).abs() <= allowed, "{name} {state} at {field} G");
                }
            }
        }
    }
}
