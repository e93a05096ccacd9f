//! Targets, apparatus files and verdicts: from a flux on paper to settings.
//!
//! [`check_flux`] judges a proposed wavelength; [`Apparatus`] is the laboratory
//! as a file; a [`LightReport`] tells what its light does to the atoms.

pub mod apparatus;
pub mod cautions;
pub mod check;
pub mod error;
pub mod files;
pub mod links;
pub mod verdict;

pub use apparatus::Apparatus;
pub use check::{CheckOptions, FluxCheck, check_flux};
pub use error::Error;
pub use links::{Legs, LightReport};

/// The README's Rust example, run as a documentation test.
#[cfg(doctest)]
#[doc = include_str!("../../../README.md")]
struct Readme;
