//! Light and what it does to atoms: beams, polarisabilities, light shifts,
//! two-photon couplings, scattering; and couplings by an oscillating field.
//!
//! E(t) = Re(E u exp(-i w t)), I = eps0 c |E|^2/2. Atoms are at the origin of the
//! laboratory; their states are quantised along the bias field ([`Bias`]). Light
//! shifts and couplings are first order in the intensity, and refused within 100
//! linewidths of a line. A *Rabi frequency* `rabi_hz` is Omega/2pi; the matrix
//! element is half of it.
//!
//! ```
//! use fluxloom_core::light::{Bias, polarisation};
//! use fluxloom_core::{Atom, Beam, BeamInput, RamanPair};
//!
//! let beam = |direction, along| {
//!     Beam::new(BeamInput {
//!         wavelength_nm: 769.0,
//!         power_mw: 0.5,
//!         waist_um: [200.0; 2],
//!         direction,
//!         polarisation: polarisation::linear(direction, along)?,
//!         ..BeamInput::CENTRED
//!     })
//! };
//! let absorb = beam([0.0, 1.0, 0.0], [0.0, 0.0, 1.0])?;
//! let emit = beam([1.0, 0.0, 0.0], [0.0, 1.0, 0.0])?;
//! let pair = RamanPair::from_beams(absorb, emit)?;
//! let atom = Atom::new("40K")?;
//! let link = ("9/2,-9/2".parse()?, "9/2,-7/2".parse()?);
//! let rabi_hz = pair.rabi_hz(&atom, link, &Bias::along_z(30.0))?;
//! assert!((rabi_hz.norm() - 1146.85).abs() < 0.01);
//! # Ok::<(), fluxloom_core::Error>(())
//! ```

mod alternatives;
mod beam;
mod bias;
mod coupling;
pub(crate) mod polarisability;
pub mod polarisation;
mod products;
mod quality;
mod radio;
mod raman;
pub(crate) mod response;
pub(crate) mod scattering;
pub(crate) mod shift;
mod stray;
mod tune_out;
mod two_photon;
mod ways;

pub use beam::{Beam, BeamInput};
pub use bias::Bias;
pub use coupling::{Coupling, FORBIDDEN};
pub use polarisability::Polarisability;
pub use quality::Quality;
pub use radio::{Radio, radio_rabi_hz};
pub use raman::{Crossing, Directions, RamanPair};
pub use scattering::Scattering;
pub use stray::StrayCoupling;
pub use tune_out::TuneOut;
