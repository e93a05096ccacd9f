//! Angular momentum: 3j and 6j symbols from exact sums, and spin matrices.
//!
//! Angular momenta are given as twice their value, so that halves are whole
//! numbers. Phases follow Condon and Shortley.

mod binomial;
mod spin;
mod wigner;

pub use spin::SpinMatrices;
pub use wigner::{clebsch_gordan, wigner_3j, wigner_6j};
