//! The one-dimensional optical lattice: geometry, bands, tunnelling, Wannier
//! functions and kick overlaps.
//!
//! V(x) = s E_R sin^2(pi x/a), sites at x = n a, depth s > 0 peak to peak.
//! Energies are in lattice recoils E_R = h^2/(8 m a^2) (`_er`), quasimomenta
//! and kicks in k_L = pi/a.

mod bands;
mod batch;
mod bloch;
mod geometry;
mod overlap;
mod tunnelling;
mod wannier;

pub use bands::{Bands, BandsInput};
pub use batch::{BandGrid, band_energies_er};
pub use geometry::{Lattice, LatticeInput};
pub use overlap::{LinkOverlaps, Transfer};
pub use tunnelling::Hop;
pub use wannier::{Wannier, WannierInput};
