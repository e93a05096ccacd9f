//! The light that links internal states: its geometry, and its beams if they
//! are known.
//!
//! A two-photon link absorbs from one beam and emits into the other, and kicks
//! the atom by k_absorb - k_emit; a single-photon (clock) link absorbs only.
//! What the beams couple is in [`super::two_photon`].

use serde::{Deserialize, Serialize};

use super::Beam;
use crate::degrees::{cos_deg, sin_deg};
use crate::documents::Document;
use crate::error::Error;
use crate::limits;
use crate::vector::{self, dot};

/// Two beams of one wavelength crossing at a full angle.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Crossing {
    /// Vacuum wavelength of both beams.
    pub wavelength_nm: f64,
    /// Full angle between the beams: 0 co-propagating, 180 counter-propagating.
    pub angle_deg: f64,
    /// Angle between the difference of the wave vectors and the lattice axis.
    pub tilt_deg: f64,
}

/// Beams given by their directions; only the directions of the vectors count.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Directions {
    /// Direction of the beam that a photon is absorbed from.
    pub absorb: [f64; 3],
    /// Its vacuum wavelength.
    pub absorb_wavelength_nm: f64,
    /// Direction of the beam that a photon is emitted into; none for a single-photon link.
    pub emit: Option<[f64; 3]>,
    /// Its vacuum wavelength; if not given, that of the other beam.
    pub emit_wavelength_nm: Option<f64>,
}

/// The light of one link: where photons are absorbed from and emitted into.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
#[serde(try_from = "RawPair", into = "RawPair")]
pub struct RamanPair {
    form: Form,
    /// Absorbed, emitted, for roles that are not swapped.
    beams: Option<[Beam; 2]>,
    swapped: bool,
}

#[derive(Debug, Clone, Copy, PartialEq)]
enum Form {
    Crossing(Crossing),
    Directions(Directions),
}

impl Document for RamanPair {
    const FORMAT: &'static str = "fluxloom-raman-pair";
}

#[derive(Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
struct RawPair {
    #[serde(skip_serializing_if = "Option::is_none", default)]
    wavelength_nm: Option<f64>,
    #[serde(skip_serializing_if = "Option::is_none", default)]
    angle_deg: Option<f64>,
    #[serde(skip_serializing_if = "Option::is_none", default)]
    tilt_deg: Option<f64>,
    #[serde(skip_serializing_if = "Option::is_none", default)]
    absorb: Option<[f64; 3]>,
    #[serde(skip_serializing_if = "Option::is_none", default)]
    absorb_wavelength_nm: Option<f64>,
    #[serde(skip_serializing_if = "Option::is_none", default)]
    emit: Option<[f64; 3]>,
    #[serde(skip_serializing_if = "Option::is_none", default)]
    emit_wavelength_nm: Option<f64>,
    #[serde(skip_serializing_if = "Option::is_none", default)]
    absorb_beam: Option<Beam>,
    #[serde(skip_serializing_if = "Option::is_none", default)]
    emit_beam: Option<Beam>,
    swapped: bool,
}

impl TryFrom<RawPair> for RamanPair {
    type Error = Error;

    fn try_from(raw: RawPair) -> Result<Self, Error> {
        let geometry = match raw {
            RawPair {
                wavelength_nm: Some(wavelength_nm),
                angle_deg: Some(angle_deg),
                tilt_deg: Some(tilt_deg),
                absorb: None,
                absorb_wavelength_nm: None,
                emit: None,
                emit_wavelength_nm: None,
                ..
            } => Some(Self::crossing(Crossing { wavelength_nm, angle_deg, tilt_deg })?),
            RawPair {
                absorb: Some(absorb),
                absorb_wavelength_nm: Some(absorb_wavelength_nm),
                emit,
                emit_wavelength_nm,
                wavelength_nm: None,
                angle_deg: None,
                tilt_deg: None,
                ..
            } => Some(Self::from_directions(Directions {
                absorb,
                absorb_wavelength_nm,
                emit,
                emit_wavelength_nm,
            })?),
            RawPair {
                wavelength_nm: None,
                angle_deg: None,
                tilt_deg: None,
                absorb: None,
                absorb_wavelength_nm: None,
                emit: None,
                emit_wavelength_nm: None,
                ..
            } => None,
            _ => return Err(mixed_forms()),
        };
        let pair = match (geometry, raw.absorb_beam, raw.emit_beam) {
            (Some(geometry), None, None) => geometry,
            (Some(geometry), Some(absorb), Some(emit)) => geometry.with_beams(absorb, emit)?,
            (None, Some(absorb), Some(emit)) => Self::from_beams(absorb, emit)?,
            _ => return Err(mixed_forms()),
        };
        Ok(Self { swapped: raw.swapped, ..pair })
    }
}

fn mixed_forms() -> Error {
    Error::Contradiction {
        code: "raman.mixed_forms",
        message: "a Raman pair is wavelength_nm, angle_deg and tilt_deg, or absorb and \
                  absorb_wavelength_nm with emit and emit_wavelength_nm, or absorb_beam and \
                  emit_beam"
            .to_owned(),
    }
}

impl From<RamanPair> for RawPair {
    fn from(pair: RamanPair) -> Self {
        // What follows from the beams is not written twice.
        let crossing = pair.as_crossing();
        let directions = pair.as_directions().filter(|_| pair.beams.is_none());
        Self {
            wavelength_nm: crossing.map(|c| c.wavelength_nm),
            angle_deg: crossing.map(|c| c.angle_deg),
            tilt_deg: crossing.map(|c| c.tilt_deg),
            absorb: directions.map(|d| d.absorb),
            absorb_wavelength_nm: directions.map(|d| d.absorb_wavelength_nm),
            emit: directions.and_then(|d| d.emit),
            emit_wavelength_nm: directions.and_then(|d| d.emit_wavelength_nm),
            absorb_beam: pair.beams.map(|[absorb, _]| absorb),
            emit_beam: pair.beams.map(|[_, emit]| emit),
            swapped: pair.swapped,
        }
    }
}

/// Wavelengths closer than this part come from one laser and are tuned together.
const ONE_LASER: f64 = 1e-4;

/// Beams that are to fit a crossing angle may miss it by this, in degrees.
const SAME_ANGLE_DEG: f64 = 1e-6;

impl RamanPair {
    /// Two beams of one wavelength, by their crossing angle.
    ///
    /// # Errors
    /// [`Error::OutOfRange`] for wavelength, angle or tilt.
    pub fn crossing(crossing: Crossing) -> Result<Self, Error> {
        limits::WAVELENGTH_NM.check(crossing.wavelength_nm)?;
        limits::RAMAN_ANGLE_DEG.check(crossing.angle_deg)?;
        limits::TILT_DEG.check(crossing.tilt_deg)?;
        Ok(Self { form: Form::Crossing(crossing), beams: None, swapped: false })
    }

    /// Beams by their directions; without `emit` a single-photon link.
    ///
    /// # Errors
    /// [`Error::OutOfRange`] for a wavelength, [`Error::NoDirection`] for a
    /// vector, [`Error::Contradiction`] for a wavelength of a beam that is not there.
    pub fn from_directions(directions: Directions) -> Result<Self, Error> {
        vector::unit(directions.absorb, "absorb")?;
        limits::WAVELENGTH_NM.check_as(directions.absorb_wavelength_nm, "absorb_wavelength_nm")?;
        if let Some(emit) = directions.emit {
            vector::unit(emit, "emit")?;
        }
        if let Some(wavelength_nm) = directions.emit_wavelength_nm {
            limits::WAVELENGTH_NM.check_as(wavelength_nm, "emit_wavelength_nm")?;
            if directions.emit.is_none() {
                return Err(Error::Contradiction {
                    code: "raman.no_emit_direction",
                    message: format!(
                        "emit_wavelength_nm = {wavelength_nm} is given without emit: give the \
                         direction of that beam, or leave both out for a single-photon link"
                    ),
                });
            }
        }
        Ok(Self { form: Form::Directions(directions), beams: None, swapped: false })
    }

    /// Two beams with all that is known of them: the form that has couplings.
    ///
    /// # Errors
    /// None for beams that exist.
    pub fn from_beams(absorb: Beam, emit: Beam) -> Result<Self, Error> {
        let (first, second) = (absorb.wavelength_nm(), emit.wavelength_nm());
        let geometry = Self::from_directions(Directions {
            absorb: absorb.unit_direction(),
            absorb_wavelength_nm: first,
            emit: Some(emit.unit_direction()),
            emit_wavelength_nm: (first != second).then_some(second),
        })?;
        Ok(Self { beams: Some([absorb, emit]), ..geometry })
    }

    /// This pair, given by its crossing angle, with the beams that cross so.
    ///
    /// # Errors
    /// [`Error::Contradiction`] (`raman.beams_do_not_fit`) for beams of another
    /// wavelength or angle, or a pair that was given by directions.
    pub fn with_beams(&self, absorb: Beam, emit: Beam) -> Result<Self, Error> {
        let Some(crossing) = self.as_crossing() else {
            return Err(Error::Contradiction {
                code: "raman.beams_do_not_fit",
                message: "this pair was given by directions: build it from its beams instead"
                    .to_owned(),
            });
        };
        let (one, two) = (absorb.unit_direction(), emit.unit_direction());
        let across = vector::cross(one, two);
        let angle_deg = dot(across, across).sqrt().atan2(dot(one, two)).to_degrees();
        if (angle_deg - crossing.angle_deg).abs() > SAME_ANGLE_DEG
            || absorb.wavelength_nm() != crossing.wavelength_nm
            || emit.wavelength_nm() != crossing.wavelength_nm
        {
            return Err(Error::Contradiction {
                code: "raman.beams_do_not_fit",
                message: format!(
                    "beams of {} and {} nm crossing at {angle_deg} deg are not a pair of {} nm \
                     at {} deg: build the pair from its beams instead",
                    absorb.wavelength_nm(),
                    emit.wavelength_nm(),
                    crossing.wavelength_nm,
                    crossing.angle_deg
                ),
            });
        }
        Ok(Self { beams: Some([absorb, emit]), ..*self })
    }

    /// The beams in the roles they play: absorbed, emitted.
    ///
    /// # Errors
    /// [`Error::NoBeams`] for a pair that was given by its geometry.
    pub fn beams(&self) -> Result<[Beam; 2], Error> {
        let [absorb, emit] = self.beams.ok_or(Error::NoBeams)?;
        Ok(if self.swapped { [emit, absorb] } else { [absorb, emit] })
    }

    /// The beams as given, whatever their roles.
    #[must_use]
    pub fn given_beams(&self) -> Option<[Beam; 2]> {
        self.beams
    }

    /// Whether the pair carries beams.
    #[must_use]
    pub fn has_beams(&self) -> bool {
        self.beams.is_some()
    }

    /// Whether both colours are so close that one laser makes them.
    #[must_use]
    pub fn is_one_laser(&self) -> bool {
        match self.form {
            Form::Crossing(_) => true,
            Form::Directions(Directions { absorb_wavelength_nm, emit_wavelength_nm, .. }) => {
                emit_wavelength_nm.is_none_or(|emit_nm| {
                    let apart = (emit_nm - absorb_wavelength_nm).abs();
                    self.beams.is_some() && apart < ONE_LASER * absorb_wavelength_nm
                })
            }
        }
    }

    /// The same beams with the roles of absorption and emission exchanged: the
    /// flux changes its sign, exactly.
    #[must_use]
    pub fn swapped(&self) -> Self {
        Self { swapped: !self.swapped, ..*self }
    }

    /// Whether the roles are exchanged with respect to the numbers given.
    #[must_use]
    pub fn roles_swapped(&self) -> bool {
        self.swapped
    }

    /// The crossing angle form, if the pair was given so.
    #[must_use]
    pub fn as_crossing(&self) -> Option<Crossing> {
        match self.form {
            Form::Crossing(crossing) => Some(crossing),
            Form::Directions(_) => None,
        }
    }

    /// The form by directions, if the pair was given so.
    #[must_use]
    pub fn as_directions(&self) -> Option<Directions> {
        match self.form {
            Form::Crossing(_) => None,
            Form::Directions(directions) => Some(directions),
        }
    }

    /// Wavelength of the light: that of the absorbed beam where there are two.
    /// A second beam with a wavelength of its own stays when this one is tuned.
    #[must_use]
    pub fn leading_wavelength_nm(&self) -> f64 {
        match self.form {
            Form::Crossing(crossing) => crossing.wavelength_nm,
            Form::Directions(directions) => directions.absorb_wavelength_nm,
        }
    }

    /// The kick along a unit vector over 2 pi, in wave numbers per nanometre, in
    /// two parts: what goes as 1/[`RamanPair::leading_wavelength_nm`], and what
    /// stays when that is tuned (a second beam with a wavelength of its own).
    pub(crate) fn wavenumbers_along(&self, axis: [f64; 3]) -> (f64, f64) {
        let (tuned, held) = match self.form {
            Form::Crossing(Crossing { wavelength_nm, angle_deg, tilt_deg }) => {
                (2.0 * sin_deg(0.5 * angle_deg) * cos_deg(tilt_deg) / wavelength_nm, 0.0)
            }
            Form::Directions(directions) => {
                let along = |vector: [f64; 3], wavelength_nm: f64| {
                    vector::unit(vector, "direction").map_or(0.0, |unit| dot(unit, axis))
                        / wavelength_nm
                };
                let absorb_nm = directions.absorb_wavelength_nm;
                let absorbed = along(directions.absorb, absorb_nm);
                match (directions.emit, directions.emit_wavelength_nm) {
                    (None, _) => (absorbed, 0.0),
                    (Some(emit), None) => (absorbed - along(emit, absorb_nm), 0.0),
                    (Some(emit), Some(emit_nm)) if self.is_one_laser() => {
                        (absorbed - along(emit, emit_nm), 0.0)
                    }
                    (Some(emit), Some(emit_nm)) => (absorbed, -along(emit, emit_nm)),
                }
            }
        };
        if self.swapped { (-tuned, -held) } else { (tuned, held) }
    }

    /// The same beams crossing at another angle; none for beams given by directions
    /// or an angle outside 0..180.
    #[must_use]
    pub fn with_angle_deg(&self, angle_deg: f64) -> Option<Self> {
        let crossing = Crossing { angle_deg, ..self.as_crossing()? };
        Self::crossing(crossing).ok().map(|pair| Self { swapped: self.swapped, ..pair })
    }
}
