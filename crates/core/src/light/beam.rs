//! A Gaussian laser beam: where it goes, how strong it is, how it is polarised.
//!
//! With r measured from the focus, z = r.k along the beam and x1, x2 across it
//! along its two waists,
//!
//! ```text
//! I = 2 P/(pi w1(z) w2(z)) exp(-2 x1^2/w1(z)^2 - 2 x2^2/w2(z)^2),
//! w(z) = w sqrt(1 + (z/z_R)^2),   z_R = pi w^2/lambda,
//! ```
//!
//! P the power, w the 1/e^2 intensity radius at the focus. Paraxial: good while
//! w is well above lambda/pi. Both waists lie at the same place along the beam.
//! Source: Siegman, Lasers, chapter 17 (from memory).

use std::f64::consts::PI;

use num_complex::Complex64;
use serde::{Deserialize, Serialize};

use super::polarisation;
use crate::constants::SPEED_OF_LIGHT_M_PER_S;
use crate::documents::Document;
use crate::error::Error;
use crate::limits;
use crate::vector::{self, cross, dot};

/// What a beam is made from; see [`BeamInput::CENTRED`] for the defaults.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct BeamInput {
    /// Vacuum wavelength.
    pub wavelength_nm: f64,
    /// Power of all the light in the beam.
    pub power_mw: f64,
    /// The two 1/e^2 intensity radii at the focus; equal for a round beam.
    pub waist_um: [f64; 2],
    /// Where the light goes; only the direction counts.
    pub direction: [f64; 3],
    /// The complex vector u of the field Re(E u exp(-i w t)), across the
    /// direction; its length does not count. See [`polarisation`].
    pub polarisation: [Complex64; 3],
    /// Direction of the first waist, across the beam; needed off the axis of a
    /// beam that is not round.
    pub waist_axis: Option<[f64; 3]>,
    /// Where the waists are.
    pub focus_um: [f64; 3],
}

impl BeamInput {
    /// Focused on the origin, no axis of the waists. All else has no default:
    /// left out, it is refused.
    pub const CENTRED: Self = Self {
        wavelength_nm: f64::NAN,
        power_mw: f64::NAN,
        waist_um: [f64::NAN; 2],
        direction: [0.0; 3],
        polarisation: [Complex64::new(0.0, 0.0); 3],
        waist_axis: None,
        focus_um: [0.0; 3],
    };
}

/// A Gaussian laser beam.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
#[serde(try_from = "RawBeam", into = "RawBeam")]
pub struct Beam {
    input: BeamInput,
    direction: [f64; 3],
    polarisation: [Complex64; 3],
    waist_axis: Option<[f64; 3]>,
}

impl Document for Beam {
    const FORMAT: &'static str = "fluxloom-beam";
}

#[derive(Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
struct RawBeam {
    wavelength_nm: f64,
    power_mw: f64,
    waist_um: [f64; 2],
    direction: [f64; 3],
    polarisation: [Complex64; 3],
    #[serde(skip_serializing_if = "Option::is_none", default)]
    waist_axis: Option<[f64; 3]>,
    focus_um: [f64; 3],
}

impl TryFrom<RawBeam> for Beam {
    type Error = Error;

    fn try_from(raw: RawBeam) -> Result<Self, Error> {
        Self::new(BeamInput {
            wavelength_nm: raw.wavelength_nm,
            power_mw: raw.power_mw,
            waist_um: raw.waist_um,
            direction: raw.direction,
            polarisation: raw.polarisation,
            waist_axis: raw.waist_axis,
            focus_um: raw.focus_um,
        })
    }
}

impl From<Beam> for RawBeam {
    fn from(Beam { input, .. }: Beam) -> Self {
        Self {
            wavelength_nm: input.wavelength_nm,
            power_mw: input.power_mw,
            waist_um: input.waist_um,
            direction: input.direction,
            polarisation: input.polarisation,
            waist_axis: input.waist_axis,
            focus_um: input.focus_um,
        }
    }
}

/// A point counts as on the axis of a beam up to this part of its radius there:
/// the intensity differs by less than the last digit.
const ON_AXIS: f64 = 1e-9;

impl Beam {
    /// A beam.
    ///
    /// # Errors
    /// [`Error::OutOfRange`] for a number, [`Error::NoDirection`] or
    /// [`Error::NoPolarisation`] for a vector without direction,
    /// [`Error::NotTransverse`] for a polarisation or an axis of the waists that
    /// leans out of the plane across the beam by more than 1e-6.
    pub fn new(input: BeamInput) -> Result<Self, Error> {
        limits::WAVELENGTH_NM.check(input.wavelength_nm)?;
        limits::POWER_MW.check(input.power_mw)?;
        let [first, second] = input.waist_um;
        // By their bits, so that NaN for both is one fault, too.
        if first.to_bits() == second.to_bits() {
            limits::WAIST_UM.check(first)?;
        } else {
            limits::WAIST_UM.check_as(first, "waist_um[0]")?;
            limits::WAIST_UM.check_as(second, "waist_um[1]")?;
        }
        let direction = vector::unit(input.direction, "direction")?;
        let polarisation = polarisation::transverse(input.polarisation, direction, "polarisation")?;
        let waist_axis = input.waist_axis.map(|axis| across(axis, direction)).transpose()?;
        check_place(&limits::FOCUS_UM, input.focus_um)?;
        Ok(Self { input, direction, polarisation, waist_axis })
    }

    /// Vacuum wavelength.
    #[must_use]
    pub fn wavelength_nm(&self) -> f64 {
        self.input.wavelength_nm
    }

    /// Power of all the light in the beam.
    #[must_use]
    pub fn power_mw(&self) -> f64 {
        self.input.power_mw
    }

    /// The two 1/e^2 intensity radii at the focus.
    #[must_use]
    pub fn waist_um(&self) -> [f64; 2] {
        self.input.waist_um
    }

    /// Where the light goes, as given.
    #[must_use]
    pub fn direction(&self) -> [f64; 3] {
        self.input.direction
    }

    /// The polarisation as given.
    #[must_use]
    pub fn polarisation(&self) -> [Complex64; 3] {
        self.input.polarisation
    }

    /// Direction of the first waist, as given.
    #[must_use]
    pub fn waist_axis(&self) -> Option<[f64; 3]> {
        self.input.waist_axis
    }

    /// Where the waists are.
    #[must_use]
    pub fn focus_um(&self) -> [f64; 3] {
        self.input.focus_um
    }

    /// Unit vector along the beam.
    #[must_use]
    pub fn unit_direction(&self) -> [f64; 3] {
        self.direction
    }

    /// Polarisation of unit length, its small part along the beam removed.
    #[must_use]
    pub fn unit_polarisation(&self) -> [Complex64; 3] {
        self.polarisation
    }

    /// Frequency of the light, c/lambda.
    #[must_use]
    pub fn frequency_hz(&self) -> f64 {
        SPEED_OF_LIGHT_M_PER_S * 1e9 / self.input.wavelength_nm
    }

    /// Rayleigh ranges pi w^2/lambda of the two waists.
    #[must_use]
    pub fn rayleigh_range_um(&self) -> [f64; 2] {
        let wavelength_um = self.input.wavelength_nm * 1e-3;
        self.input.waist_um.map(|waist_um| PI * waist_um * waist_um / wavelength_um)
    }

    /// Intensity at the focus, 2 P/(pi w1 w2).
    #[must_use]
    pub fn peak_intensity_w_per_m2(&self) -> f64 {
        self.on_axis_w_per_m2(self.input.waist_um)
    }

    /// Intensity at a point of the laboratory.
    ///
    /// # Errors
    /// [`Error::OutOfRange`] for the point; [`Error::Contradiction`] with code
    /// `beam.no_waist_axis` off the axis of a beam that is not round and whose
    /// waists were given without their direction.
    pub fn intensity_w_per_m2(&self, at_um: [f64; 3]) -> Result<f64, Error> {
        check_place(&limits::POSITION_UM, at_um)?;
        let [x, y, z] = at_um;
        let [fx, fy, fz] = self.input.focus_um;
        let place = [x - fx, y - fy, z - fz];
        let radii = self.radii_um(dot(place, self.direction));
        let [across, up] = self.offsets_um(place, radii).ok_or_else(|| {
            let [first, second] = self.input.waist_um.map(limits::plain);
            let [x, y, z] = at_um.map(limits::plain);
            Error::Contradiction {
                code: "beam.no_waist_axis",
                message: format!(
                    "at_um = [{x}, {y}, {z}] is off the axis of a beam with waist_um = \
                     [{first}, {second}], and the intensity there depends on which way the \
                     waists lie: give waist_axis, the direction of the first"
                ),
            }
        })?;
        let [first, second] = radii;
        let exponent = (across / first).powi(2) + (up / second).powi(2);
        Ok(self.on_axis_w_per_m2(radii) * (-2.0 * exponent).exp())
    }

    /// 2 P/(pi w1 w2) for radii in micrometres.
    fn on_axis_w_per_m2(&self, [first, second]: [f64; 2]) -> f64 {
        // Milliwatts over square micrometres are 1e9 watts over square metres.
        2e9 * self.input.power_mw / (PI * first * second)
    }

    /// The radii at a distance from the focus along the beam.
    fn radii_um(&self, distance_um: f64) -> [f64; 2] {
        let [first, second] = self.input.waist_um;
        let [near, far] = self.rayleigh_range_um();
        [first * 1.0_f64.hypot(distance_um / near), second * 1.0_f64.hypot(distance_um / far)]
    }

    /// Distances from the axis along the two waists; none where they are needed
    /// and not known.
    fn offsets_um(&self, place_um: [f64; 3], radii_um: [f64; 2]) -> Option<[f64; 2]> {
        let [first, second] = self.input.waist_um;
        match self.waist_axis {
            Some(axis) if first != second => {
                Some([dot(place_um, axis), dot(place_um, cross(self.direction, axis))])
            }
            _ => {
                let turned = cross(self.direction, place_um);
                let off_um = dot(turned, turned).sqrt();
                let [first_um, second_um] = radii_um;
                if first == second {
                    Some([off_um, 0.0])
                } else if off_um <= ON_AXIS * first_um.min(second_um) {
                    Some([0.0, 0.0])
                } else {
                    None
                }
            }
        }
    }

    /// The same beam with another power.
    ///
    /// # Errors
    /// [`Error::OutOfRange`].
    pub fn with_power_mw(&self, power_mw: f64) -> Result<Self, Error> {
        Self::new(BeamInput { power_mw, ..self.input })
    }

    /// The same beam with another wavelength.
    ///
    /// # Errors
    /// [`Error::OutOfRange`].
    pub fn with_wavelength_nm(&self, wavelength_nm: f64) -> Result<Self, Error> {
        Self::new(BeamInput { wavelength_nm, ..self.input })
    }

    /// The same beam with another polarisation.
    ///
    /// # Errors
    /// As [`Beam::new`] for the polarisation.
    pub fn with_polarisation(&self, polarisation: [Complex64; 3]) -> Result<Self, Error> {
        Self::new(BeamInput { polarisation, ..self.input })
    }

    /// The beam that a plane mirror at normal incidence beyond the atoms sends
    /// straight back, with a fraction of the power (1 for a perfect mirror).
    ///
    /// The polarisation vector in the laboratory stays as it is, so that the
    /// helicity, which is counted about the direction, changes its sign: sigma+
    /// about a fixed axis stays sigma+. Waists and focus stay: the mirror is
    /// taken to image the beam onto itself. The optical phase is not kept.
    ///
    /// # Errors
    /// [`Error::OutOfRange`] for the fraction.
    pub fn reflected(&self, power_fraction: f64) -> Result<Self, Error> {
        limits::POWER_FRACTION.check(power_fraction)?;
        Self::new(BeamInput {
            power_mw: self.input.power_mw * power_fraction,
            // A difference, so that a zero stays a zero without a sign.
            direction: self.input.direction.map(|x| 0.0 - x),
            ..self.input
        })
    }
}

/// The unit vector along the first waist, which must lie across the beam.
fn across(axis: [f64; 3], direction: [f64; 3]) -> Result<[f64; 3], Error> {
    vector::unit(axis, "waist_axis")?;
    let unit = polarisation::transverse(axis.map(Complex64::from), direction, "waist_axis")?;
    Ok(unit.map(|x| x.re))
}

fn check_place(limit: &limits::Limit, place_um: [f64; 3]) -> Result<(), Error> {
    for (number, value) in place_um.into_iter().enumerate() {
        limit.check_as(value, &format!("{}[{number}]", limit.field))?;
    }
    Ok(())
}
