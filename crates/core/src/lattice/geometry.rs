//! A lattice made by two beams crossing at any full angle.
//!
//! Spacing a = lambda/(2 sin(A/2)), 180 degrees being a retro-reflected beam;
//! recoil E_R/h = h/(8 m a^2), that of a photon only at 180 degrees.

use serde::{Deserialize, Serialize};

use crate::atom::Atom;
use crate::constants::PLANCK_J_S;
use crate::degrees::sin_deg;
use crate::documents::Document;
use crate::error::Error;
use crate::limits;
use crate::vector;

/// What a lattice is made from; see [`LatticeInput::RETRO`] for the defaults.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct LatticeInput {
    /// Vacuum wavelength of both beams.
    pub wavelength_nm: f64,
    /// Peak-to-peak depth in lattice recoils.
    pub depth_er: f64,
    /// Full angle between the beams.
    pub angle_deg: f64,
    /// Direction of the lattice; only its direction counts.
    pub axis: [f64; 3],
}

impl LatticeInput {
    /// A retro-reflected beam along x. Wavelength and depth have no default:
    /// left out, they are refused.
    pub const RETRO: Self = Self {
        wavelength_nm: f64::NAN,
        depth_er: f64::NAN,
        angle_deg: 180.0,
        axis: [1.0, 0.0, 0.0],
    };
}

/// A one-dimensional optical lattice of two beams.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(try_from = "RawLattice", into = "RawLattice")]
pub struct Lattice {
    wavelength_nm: f64,
    depth_er: f64,
    angle_deg: f64,
    axis: [f64; 3],
    direction: [f64; 3],
}

impl Document for Lattice {
    const FORMAT: &'static str = "fluxloom-lattice";
}

#[derive(Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
struct RawLattice {
    wavelength_nm: f64,
    depth_er: f64,
    angle_deg: f64,
    axis: [f64; 3],
}

impl TryFrom<RawLattice> for Lattice {
    type Error = Error;

    fn try_from(raw: RawLattice) -> Result<Self, Error> {
        let RawLattice { wavelength_nm, depth_er, angle_deg, axis } = raw;
        Self::new(LatticeInput { wavelength_nm, depth_er, angle_deg, axis })
    }
}

impl From<Lattice> for RawLattice {
    fn from(lattice: Lattice) -> Self {
        let Lattice { wavelength_nm, depth_er, angle_deg, axis, .. } = lattice;
        Self { wavelength_nm, depth_er, angle_deg, axis }
    }
}

impl Lattice {
    /// A lattice from its beams.
    ///
    /// # Errors
    /// [`Error::OutOfRange`] for a wavelength, depth or angle outside its
    /// range (an angle of 0 makes no lattice), [`Error::NoDirection`] for the axis.
    pub fn new(input: LatticeInput) -> Result<Self, Error> {
        let LatticeInput { wavelength_nm, depth_er, angle_deg, axis } = input;
        limits::WAVELENGTH_NM.check(wavelength_nm)?;
        limits::DEPTH_ER.check(depth_er)?;
        limits::LATTICE_ANGLE_DEG.check(angle_deg)?;
        let direction = vector::unit(axis, "axis")?;
        let lattice = Self { wavelength_nm, depth_er, angle_deg, axis, direction };
        limits::SPACING_NM.check(lattice.spacing_nm())?;
        Ok(lattice)
    }

    /// Vacuum wavelength of the beams.
    #[must_use]
    pub fn wavelength_nm(&self) -> f64 {
        self.wavelength_nm
    }

    /// Peak-to-peak depth s in lattice recoils.
    #[must_use]
    pub fn depth_er(&self) -> f64 {
        self.depth_er
    }

    /// Full angle between the beams.
    #[must_use]
    pub fn angle_deg(&self) -> f64 {
        self.angle_deg
    }

    /// Direction of the lattice as it was given.
    #[must_use]
    pub fn axis(&self) -> [f64; 3] {
        self.axis
    }

    /// Unit vector along the lattice.
    #[must_use]
    pub fn direction(&self) -> [f64; 3] {
        self.direction
    }

    /// Distance a between neighbouring sites, lambda/(2 sin(A/2)).
    #[must_use]
    pub fn spacing_nm(&self) -> f64 {
        0.5 * self.wavelength_nm / sin_deg(0.5 * self.angle_deg)
    }

    fn spacing_m(&self) -> f64 {
        1e-9 * self.spacing_nm()
    }

    /// Lattice recoil E_R/h = h/(8 m a^2).
    #[must_use]
    pub fn recoil_hz(&self, atom: &Atom) -> f64 {
        PLANCK_J_S / (8.0 * atom.mass_kg() * self.spacing_m().powi(2))
    }

    /// Peak-to-peak depth over h.
    #[must_use]
    pub fn depth_hz(&self, atom: &Atom) -> f64 {
        self.depth_er * self.recoil_hz(atom)
    }

    /// Curvature c of a harmonic trap over the sites, m omega^2 a^2/h: the trap
    /// adds c (n - n0)^2/2 to site n. `trap_hz` is omega/2pi.
    ///
    /// # Errors
    /// [`Error::OutOfRange`] for the trap frequency.
    pub fn trap_curvature_hz(&self, atom: &Atom, trap_hz: f64) -> Result<f64, Error> {
        let omega = std::f64::consts::TAU * limits::TRAP_HZ.check(trap_hz)?;
        Ok(atom.mass_kg() * (omega * self.spacing_m()).powi(2) / PLANCK_J_S)
    }

    /// Energy step from site to site under a uniform acceleration along the
    /// lattice, m g a/h; positive for a positive acceleration.
    ///
    /// # Errors
    /// [`Error::OutOfRange`] for the acceleration.
    pub fn tilt_hz(&self, atom: &Atom, acceleration_m_per_s2: f64) -> Result<f64, Error> {
        limits::ACCELERATION_M_PER_S2.check(acceleration_m_per_s2)?;
        Ok(atom.mass_kg() * acceleration_m_per_s2 * self.spacing_m() / PLANCK_J_S)
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use fluxloom_testkit::assert_near;

    fn retro(wavelength_nm: f64) -> Lattice {
        Lattice::new(LatticeInput { wavelength_nm, depth_er: 6.0, ..LatticeInput::RETRO }).unwrap()
    }

    #[test]
    fn recoil_and_tilt_of_potassium() {
        // source: computed independently of this project from CODATA 2022 and AME2020.
        let atom = Atom::new("40K").unwrap();
        assert_near(retro(1064.0).recoil_hz(&atom), 4409.86, 0.005, "40K, 1064 nm");
        assert_near(retro(1064.0).tilt_hz(&atom, 9.80665).unwrap(), 523.0, 0.5, "gravity");
        let rubidium = Atom::new("87Rb").unwrap();
        assert_near(retro(1064.0).tilt_hz(&rubidium, 9.80665).unwrap(), 1136.0, 1.0, "gravity");
    }

    #[test]
    fn crossing_beams_stretch_the_lattice() {
        let input = LatticeInput {
            wavelength_nm: 1064.0,
            depth_er: 6.0,
            angle_deg: 60.0,
            ..LatticeInput::RETRO
        };
        assert_near(Lattice::new(input).unwrap().spacing_nm(), 1064.0, 1e-9, "60 degrees");
        assert_eq!(retro(1064.0).spacing_nm(), 532.0);
    }

    #[test]
    fn missing_and_impossible_numbers_are_refused() {
        for input in [
            LatticeInput::RETRO,
            LatticeInput { wavelength_nm: 1064.0, ..LatticeInput::RETRO },
            LatticeInput { wavelength_nm: 1064.0, depth_er: 0.0, ..LatticeInput::RETRO },
            LatticeInput {
                wavelength_nm: 1064.0,
                depth_er: 6.0,
                angle_deg: 0.0,
                ..LatticeInput::RETRO
            },
            LatticeInput {
                wavelength_nm: 1064.0,
                depth_er: 6.0,
                axis: [0.0; 3],
                ..LatticeInput::RETRO
            },
        ] {
            assert!(Lattice::new(input).is_err(), "{input:?}");
        }
        let metres = LatticeInput { wavelength_nm: 1064e-9, depth_er: 6.0, ..LatticeInput::RETRO };
        let message = Lattice::new(metres).unwrap_err().to_string();
        assert!(message.contains("looks like metres: in nanometres it is 1064"), "{message}");
    }
}
