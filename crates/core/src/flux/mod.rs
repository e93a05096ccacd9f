//! The flux that a Raman link writes into a lattice, and its inverse.
//!
//! ```
//! use fluxloom_core::control::Unwatched;
//! use fluxloom_core::flux::{WavelengthSearch, raman_wavelengths};
//! use fluxloom_core::{Lattice, LatticeInput};
//!
//! let input = LatticeInput { wavelength_nm: 1064.0, depth_er: 6.0, ..LatticeInput::RETRO };
//! let lattice = Lattice::new(input)?;
//! let search = WavelengthSearch { range_nm: (766.0, 775.0), angle_deg: 180.0, tilt_deg: 0.0 };
//! let found = raman_wavelengths("3/8".parse()?, &lattice, search, &Unwatched)?;
//! // 1 + 3/8 = 1064 nm/773.818 nm for counter-propagating beams.
//! assert!((found[0].wavelength_nm - 773.818).abs() < 1e-3);
//! # Ok::<(), fluxloom_core::Error>(())
//! ```

mod closure;
mod coupled;
mod formula;
mod inverse;

pub use closure::{closure_mismatch, closure_overlap, loop_flux};
pub use formula::{FluxInput, decompose, flux, fold};
pub use inverse::{
    AngleSearch, Solution, WavelengthSearch, angle_for, nearest_hits, raman_angles,
    raman_wavelengths,
};
