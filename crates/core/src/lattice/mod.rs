//! The one-dimensional optical lattice: geometry, bands, tunnelling, Wannier
//! functions and kick overlaps.
//!
//! V(x) = s E_R sin^2(pi x/a), sites at x = n a, depth s > 0 peak to peak.
//! Energies are in lattice recoils E_R = h^2/(8 m a^2) (`_er`), quasimomenta
//! and kicks in k_L = pi/a.
//!
//! ```
//! use fluxloom_core::lattice::{Hop, Transfer};
//! use fluxloom_core::{Atom, Lattice, LatticeInput};
//!
//! let input = LatticeInput { wavelength_nm: 1064.0, depth_er: 10.0, ..LatticeInput::RETRO };
//! let lattice = Lattice::new(input)?;
//! let tunnelling_er = lattice.tunnelling_er(Hop::NEAREST)?;
//! assert!((tunnelling_er - 0.019_182_452).abs() < 1e-9);
//! // A kick of 4/3 k_L leaves 84 % of a Raman coupling.
//! let overlap = lattice.kick_overlap(4.0 / 3.0, Transfer::ON_SITE)?;
//! assert!((overlap - 0.8405).abs() < 1e-4);
//! println!("recoil {} Hz", lattice.recoil_hz(&Atom::new("40K")?));
//! # Ok::<(), fluxloom_core::Error>(())
//! ```

mod bands;
mod batch;
mod bloch;
mod geometry;
mod light_depth;
mod overlap;
mod tunnelling;
mod wannier;

pub use bands::{Bands, BandsInput};
pub use batch::{BandGrid, band_energies_er};
pub use geometry::{Lattice, LatticeInput};
pub use light_depth::{lattice_depth_er, lattice_power_mw, lattice_scattering_per_s};
pub use overlap::{LinkOverlaps, Transfer};
pub use tunnelling::Hop;
pub use wannier::{Wannier, WannierInput};
