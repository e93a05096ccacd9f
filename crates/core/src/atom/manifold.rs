//! The states of the ground manifold and the hyperfine energies of a level.
//!
//! A level with electronic spin J and nuclear spin I splits into F = I+J, ...,
//! |I-J|. With K = F(F+1) - I(I+1) - J(J+1), relative to the centre of gravity,
//!
//! ```text
//! E/h = A K/2 + B [3/2 K(K+1) - 2 I(I+1) J(J+1)] / [2I(2I-1) 2J(2J-1)]
//! ```
//!
//! Source: Arimondo, Inguscio, Violino, Rev. Mod. Phys. 49, 31 (1977); from memory.

use super::state::{State, halves_text};
use crate::error::Error;
use crate::limits::plain;

/// The states |F, m> of a ground level with J = 0 or 1/2: largest F first, m ascending.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Manifold {
    /// Twice the nuclear spin.
    pub twice_i: i32,
    /// Twice the electronic spin.
    pub twice_j: i32,
    /// Twice F of each hyperfine level, largest first.
    pub twice_f: Vec<i32>,
    /// All states.
    pub states: Vec<State>,
    first: Vec<usize>,
}

impl Manifold {
    /// The manifold of two spins, given as twice their size.
    #[must_use]
    pub fn new(twice_i: i32, twice_j: i32) -> Self {
        let twice_f: Vec<i32> = total_spins(twice_i, twice_j).collect();
        let mut states = Vec::new();
        let mut first = Vec::new();
        for &f in &twice_f {
            first.push(states.len());
            states.extend((-f..=f).step_by(2).map(|m| State::known(f, m)));
        }
        Self { twice_i, twice_j, twice_f, states, first }
    }

    /// Place of F among the hyperfine levels.
    #[must_use]
    pub fn level_of(&self, twice_f: i32) -> Option<usize> {
        self.twice_f.iter().position(|f| *f == twice_f)
    }

    /// Place of a state among the states.
    #[must_use]
    pub fn index_of(&self, state: State) -> Option<usize> {
        let level = self.level_of(state.twice_f())?;
        if state.twice_m().abs() > state.twice_f() {
            return None;
        }
        let step = usize::try_from((state.twice_m() + state.twice_f()) / 2).ok()?;
        Some(self.first.get(level)? + step)
    }

    /// The places of the states of a hyperfine level.
    #[must_use]
    pub fn range_of(&self, level: usize) -> std::ops::Range<usize> {
        let end = self.first.get(level + 1).copied().unwrap_or(self.states.len());
        self.first.get(level).copied().unwrap_or(end)..end
    }

    /// Place of a state, or the error of an atom that does not have it.
    ///
    /// # Errors
    /// [`Error::NoSuchState`] listing the F that exist.
    pub fn find(&self, atom: &str, state: State) -> Result<usize, Error> {
        self.index_of(state).ok_or_else(|| self.foreign(atom, &state.to_string()))
    }

    /// Place of F, or the error of an atom that does not have it.
    ///
    /// # Errors
    /// [`Error::NoSuchState`] listing the F that exist.
    pub fn find_level(&self, atom: &str, f: f64) -> Result<usize, Error> {
        let found = self.twice_f.iter().position(|twice| f64::from(*twice) == 2.0 * f);
        found.ok_or_else(|| self.foreign(atom, &format!("F = {}", plain(f))))
    }

    /// The error of a state or F that the atom does not have.
    pub(super) fn foreign(&self, atom: &str, state: &str) -> Error {
        let known: Vec<String> = self.twice_f.iter().map(|f| halves_text(*f)).collect();
        Error::NoSuchState {
            atom: atom.to_owned(),
            state: state.to_owned(),
            known: known.join(" and "),
        }
    }
}

/// Twice the total spins of two spins, largest first.
pub fn total_spins(twice_a: i32, twice_b: i32) -> impl Iterator<Item = i32> {
    let lowest = (twice_a - twice_b).abs();
    (lowest..=twice_a + twice_b).rev().step_by(2)
}

/// A level's hyperfine constants, Hz, and spins.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Hyperfine {
    /// Twice the nuclear spin.
    pub twice_i: i32,
    /// Twice the electronic spin.
    pub twice_j: i32,
    /// Magnetic dipole constant.
    pub a_hz: f64,
    /// Electric quadrupole constant.
    pub b_hz: f64,
}

impl Hyperfine {
    /// Energy over h of the level F, from the centre of gravity, Hz.
    #[must_use]
    pub fn shift_hz(&self, twice_f: i32) -> f64 {
        // j(j+1) from twice j.
        let square = |twice: i32| f64::from(twice * (twice + 2)) / 4.0;
        let (i, j) = (square(self.twice_i), square(self.twice_j));
        let k = square(twice_f) - i - j;
        let dipole = 0.5 * self.a_hz * k;
        if self.twice_i < 2 || self.twice_j < 2 {
            return dipole;
        }
        let spins =
            f64::from(self.twice_i * (self.twice_i - 1) * self.twice_j * (self.twice_j - 1));
        dipole + self.b_hz * (1.5 * k * (k + 1.0) - 2.0 * i * j) / spins
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn states_are_in_order_and_found() {
        let manifold = Manifold::new(8, 1);
        assert_eq!(manifold.twice_f, [9, 7]);
        assert_eq!(manifold.states.len(), 18);
        for (place, state) in manifold.states.iter().enumerate() {
            assert_eq!(manifold.index_of(*state), Some(place));
        }
        assert_eq!(manifold.range_of(1), 10..18);
        assert!(manifold.find("40K", State::known(5, 1)).is_err());
        assert_eq!(manifold.index_of(State::known(7, 9)), None);
        assert_eq!(Manifold::new(9, 0).twice_f, [9]);
    }

    #[test]
    fn the_centre_of_gravity_stays() {
        let level = Hyperfine { twice_i: 8, twice_j: 3, a_hz: -7.585e6, b_hz: -3.445e6 };
        let weighted: f64 = total_spins(8, 3).map(|f| f64::from(f + 1) * level.shift_hz(f)).sum();
        assert!(weighted.abs() < 1e-6, "{weighted}");
        // source: interval rule, E(F) - E(F-1) = A F + B 3/2 F (F^2 - I(I+1) - J(J+1) + 1/2)
        // / (I(2I-1) J(2J-1)) (Arimondo 1977, from memory)
        let step = level.shift_hz(11) - level.shift_hz(9);
        let f = 5.5;
        let rule = level.a_hz * f
            + level.b_hz * 1.5 * f * (f * f - 20.0 - 3.75 + 0.5) / (4.0 * 7.0 * 1.5 * 2.0);
        assert!((step / rule - 1.0).abs() < 1e-14, "{step} {rule}");
    }
}
