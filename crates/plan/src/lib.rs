//! Targets, apparatus files and verdicts: from a flux on paper to settings.
//!
//! [`check_flux`] judges a proposed wavelength; [`Apparatus`] is the laboratory
//! as a file.

pub mod apparatus;
pub mod cautions;
pub mod check;
pub mod error;
pub mod files;
pub mod verdict;

pub use apparatus::Apparatus;
pub use check::{CheckOptions, FluxCheck, check_flux};
pub use error::Error;

/// The README's Rust example, run as a documentation test.
#[cfg(doctest)]
#[doc = include_str!("../../../README.md")]
struct Readme;
