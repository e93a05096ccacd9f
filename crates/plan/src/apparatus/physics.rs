//! The settings of today as physics: atom, lattice, Raman beams, and the verdict on a flux.

use fluxloom_core::degrees::{cos_deg, sin_deg};
use fluxloom_core::vector::{cross, unit};
use fluxloom_core::{Atom, Crossing, Directions, Flux, Lattice, LatticeInput, RamanPair, limits};

use crate::apparatus::{Apparatus, Origin};
use crate::check::{CheckOptions, FluxCheck, check_flux};
use crate::error::Error;

fn refused(code: &'static str, message: String) -> Error {
    Error::Core(fluxloom_core::Error::Contradiction { code, message })
}

impl Apparatus {
    /// The atom of the cloud.
    ///
    /// # Errors
    /// None for an apparatus that was read; the name was looked up then.
    pub fn atom(&self) -> Result<Atom, Error> {
        Ok(Atom::new(&self.text("cloud.atom")?)?)
    }

    /// Vacuum wavelength of the laser that feeds a beam.
    fn wavelength_of_beam_nm(&self, beam: &str) -> Result<f64, Error> {
        let laser = self.text(&format!("beams.{beam}.laser"))?;
        self.number(&format!("lasers.{laser}.wavelength_nm"))
    }

    /// The lattice as it stands today.
    ///
    /// # Errors
    /// None for an apparatus that was read, but for a spacing out of range.
    pub fn lattice(&self) -> Result<Lattice, Error> {
        // The reader made sure that two beams have one wavelength.
        let beams = self.list("lattice.beams")?;
        let beam = beams.first().map(String::as_str).unwrap_or_default();
        Ok(Lattice::new(LatticeInput {
            wavelength_nm: self.wavelength_of_beam_nm(beam)?,
            depth_er: self.number("lattice.depth_er")?,
            angle_deg: self.number("lattice.angle_deg")?,
            axis: self.vector("lattice.axis")?,
        })?)
    }

    /// The Raman beams as they stand today: by their crossing angle if both
    /// have one wavelength, by their directions in the plane of the pair otherwise.
    ///
    /// # Errors
    /// [`fluxloom_core::Error::Contradiction`] (`apparatus.no_raman_beams`) if
    /// the file has no Raman beams.
    pub fn raman_pair(&self) -> Result<RamanPair, Error> {
        if self.names("raman").is_empty() {
            return Err(refused(
                "apparatus.no_raman_beams",
                "this apparatus has no [raman] table: add raman.beams and raman.angle_deg"
                    .to_owned(),
            ));
        }
        let beams = self.list("raman.beams")?;
        let wavelengths: Vec<f64> =
            beams.iter().map(|beam| self.wavelength_of_beam_nm(beam)).collect::<Result<_, _>>()?;
        let angle_deg = self.number("raman.angle_deg")?;
        let tilt_deg = self.number("raman.tilt_deg")?;
        let (absorb_nm, emit_nm) = match wavelengths.as_slice() {
            [absorb_nm, emit_nm] => (*absorb_nm, *emit_nm),
            other => (other.first().copied().unwrap_or(f64::NAN), f64::NAN),
        };
        if absorb_nm == emit_nm {
            let crossing = Crossing { wavelength_nm: absorb_nm, angle_deg, tilt_deg };
            return Ok(RamanPair::crossing(crossing)?);
        }
        let along = unit(self.vector("lattice.axis")?, "lattice.axis")?;
        let normal = unit(self.vector("raman.plane_normal")?, "raman.plane_normal")?;
        let across = cross(normal, along);
        let mix = |a: f64, b: f64| {
            let [x, y, z] = [0, 1, 2].map(|k: usize| {
                let part = |v: [f64; 3]| v.get(k).copied().unwrap_or_default();
                a * part(along) + b * part(across)
            });
            [x, y, z]
        };
        // The difference of the directions lies at the tilt from the lattice, their
        // sum at right angles to it.
        let (sine, cosine) = (sin_deg(0.5 * angle_deg), cos_deg(0.5 * angle_deg));
        let (turn_sine, turn_cosine) = (sin_deg(tilt_deg), cos_deg(tilt_deg));
        let direction = |sign: f64| {
            mix(
                sign * sine * turn_cosine - cosine * turn_sine,
                sign * sine * turn_sine + cosine * turn_cosine,
            )
        };
        Ok(RamanPair::from_directions(Directions {
            absorb: direction(1.0),
            absorb_wavelength_nm: absorb_nm,
            emit: Some(direction(-1.0)),
            emit_wavelength_nm: Some(emit_nm),
        })?)
    }

    /// The whole sites that the cloud covers along the lattice, at least 2.
    ///
    /// # Errors
    /// [`fluxloom_core::Error::Contradiction`] (`apparatus.no_cloud_length`) if
    /// the file does not tell, [`fluxloom_core::Error::OutOfRange`] for a cloud
    /// over too many sites.
    pub fn sites(&self) -> Result<u32, Error> {
        if self.origin("cloud.length_um")? == Origin::NotStated {
            return Err(refused(
                "apparatus.no_cloud_length",
                "cloud.length_um is not stated: state it, or give the number of sites".to_owned(),
            ));
        }
        let spacings = 1e3 * self.number("cloud.length_um")? / self.lattice()?.spacing_nm();
        // A length of exactly so many spacings must not lose one to rounding.
        let whole = (spacings * (1.0 + 1e-12)).floor().max(limits::SITES.low);
        limits::SITES.check_as(whole, "sites")?;
        #[allow(clippy::cast_possible_truncation, clippy::cast_sign_loss)]
        Ok(whole as u32)
    }

    /// Judges today's settings against a target flux. Where `options.sites` is
    /// 0, the cloud's length decides.
    ///
    /// # Errors
    /// As [`check_flux`], [`Apparatus::raman_pair`] and [`Apparatus::sites`].
    pub fn check(&self, target: Flux, options: CheckOptions) -> Result<FluxCheck, Error> {
        let sites = if options.sites == 0 { self.sites()? } else { options.sites };
        let (lattice, raman) = (self.lattice()?, self.raman_pair()?);
        Ok(check_flux(&lattice, &raman, target, CheckOptions { sites, ..options })?)
    }
}
