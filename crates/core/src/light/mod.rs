//! Light: for now the geometry of Raman beams.

mod raman;

pub use raman::{Crossing, Directions, RamanPair};
