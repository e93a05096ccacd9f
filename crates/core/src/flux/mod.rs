//! The flux that a Raman link writes into a lattice, and its inverse.

mod closure;
mod formula;
mod inverse;

pub use closure::{closure_mismatch, closure_overlap, loop_flux};
pub use formula::{FluxInput, decompose, flux, fold};
pub use inverse::{
    AngleSearch, Solution, WavelengthSearch, angle_for, nearest_hits, raman_angles,
    raman_wavelengths,
};
