//! Light: laser beams, their polarisation, and the geometry of Raman beams.

mod beam;
mod bias;
mod coupling;
pub(crate) mod polarisability;
pub mod polarisation;
mod quality;
mod radio;
mod raman;
pub(crate) mod response;
pub(crate) mod scattering;
pub(crate) mod shift;
mod stray;
mod tune_out;
mod two_photon;

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
