//! The settings of today as physics: atom, lattice, Raman beams, and the verdict on a flux.

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
    pub(super) fn wavelength_of_beam_nm(&self, beam: &str) -> Result<f64, Error> {
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
    /// Where both state power, waist and polarisation the pair carries their light.
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
        let seats = self.seats("raman")?;
        let ([absorb, emit], [first, second]) = (beams.as_slice(), seats.as_slice()) else {
            // The reader saw to it that there are two.
            return Err(refused("apparatus.no_raman_beams", "raman.beams takes two".to_owned()));
        };
        let absorb_nm = self.wavelength_of_beam_nm(absorb)?;
        let emit_nm = self.wavelength_of_beam_nm(emit)?;
        let lit = if self.has_light("raman") {
            Some((self.lit(absorb, *first)?, self.lit(emit, *second)?))
        } else {
            None
        };
        if absorb_nm == emit_nm {
            let angle_deg = self.number("raman.angle_deg")?;
            let tilt_deg = self.number("raman.tilt_deg")?;
            let crossing = Crossing { wavelength_nm: absorb_nm, angle_deg, tilt_deg };
            let pair = RamanPair::crossing(crossing)?;
            return Ok(match lit {
                Some((absorb, emit)) => pair.with_beams(absorb, emit)?,
                None => pair,
            });
        }
        if let Some((absorb, emit)) = lit {
            return Ok(RamanPair::from_beams(absorb, emit)?);
        }
        Ok(RamanPair::from_directions(Directions {
            absorb: first.direction,
            absorb_wavelength_nm: absorb_nm,
            emit: Some(second.direction),
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
