//! The one table of allowed ranges: errors, file reader, documentation and
//! tests all read it from here.

use crate::error::Error;

/// The allowed range of one named quantity.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Limit {
    /// Public name with its unit suffix, as the user types it.
    pub field: &'static str,
    /// Stable error code of a value outside the range.
    pub code: &'static str,
    /// Smallest allowed value.
    pub low: f64,
    /// Largest allowed value.
    pub high: f64,
    /// Whether `low` itself is refused.
    pub low_open: bool,
    /// What to do about a refused value.
    pub remedy: &'static str,
}

impl Limit {
    /// Whether `value` is finite and inside the range.
    #[must_use]
    pub fn contains(&self, value: f64) -> bool {
        let above = if self.low_open { value > self.low } else { value >= self.low };
        value.is_finite() && above && value <= self.high
    }

    /// `value` itself, or [`Error::OutOfRange`] naming this limit's field.
    ///
    /// # Errors
    /// [`Error::OutOfRange`] for NaN, infinities and values outside the range.
    pub fn check(&self, value: f64) -> Result<f64, Error> {
        self.check_as(value, self.field)
    }

    /// As [`Limit::check`], with the name of the field as the caller knows it.
    ///
    /// # Errors
    /// [`Error::OutOfRange`] for NaN, infinities and values outside the range.
    pub fn check_as(&self, value: f64, field: &str) -> Result<f64, Error> {
        if self.contains(value) {
            return Ok(value);
        }
        Err(Error::OutOfRange { limit: *self, field: field.to_owned(), value })
    }

    /// `value` as a count, or the error of a fraction or of a number outside the range.
    ///
    /// # Errors
    /// [`Error::OutOfRange`], [`Error::NotWhole`].
    pub fn check_count(&self, value: f64, field: &str) -> Result<i64, Error> {
        self.check_as(value, field)?;
        if value != value.trunc() {
            return Err(Error::NotWhole { limit: *self, field: field.to_owned(), value });
        }
        // Every count limit lies far inside the whole numbers that doubles hold.
        #[allow(clippy::cast_possible_truncation)]
        Ok(value as i64)
    }

    /// The range in words: `0 < depth_er <= 1000`.
    #[must_use]
    pub fn range_text(&self, field: &str) -> String {
        let sign = if self.low_open { "<" } else { "<=" };
        format!("{} {sign} {field} <= {}", plain(self.low), plain(self.high))
    }

    /// A guess at what went wrong, from the size of the value; empty if none.
    #[must_use]
    pub fn hint(&self, value: f64) -> String {
        if !value.is_finite() {
            return "it is not a finite number".to_owned();
        }
        // Wavelengths only: elsewhere a number cannot betray its unit.
        if self.code != WAVELENGTH_NM.code {
            return String::new();
        }
        for (factor, unit) in [(1e9, "metres"), (1e3, "micrometres"), (0.1, "angstroms")] {
            let converted = value * factor;
            if self.contains(converted) {
                let converted = plain((converted * 1e6).round() / 1e6);
                return format!("it looks like {unit}: in nanometres it is {converted}");
            }
        }
        String::new()
    }
}

/// A number as a person writes it: no exponent between 1e-4 and 1e7.
#[must_use]
pub fn plain(value: f64) -> String {
    let size = value.abs();
    if value == 0.0 || (1e-4..1e7).contains(&size) {
        format!("{value}")
    } else {
        format!("{value:e}")
    }
}

const fn closed(
    field: &'static str,
    code: &'static str,
    range: (f64, f64),
    remedy: &'static str,
) -> Limit {
    Limit { field, code, low: range.0, high: range.1, low_open: false, remedy }
}

const fn open(
    field: &'static str,
    code: &'static str,
    range: (f64, f64),
    remedy: &'static str,
) -> Limit {
    Limit { field, code, low: range.0, high: range.1, low_open: true, remedy }
}

/// Vacuum wavelength of any light.
pub const WAVELENGTH_NM: Limit = closed(
    "wavelength_nm",
    "light.wavelength_out_of_range",
    (100.0, 20_000.0),
    "give the vacuum wavelength in nanometres",
);
/// Lattice depth in lattice recoils.
pub const DEPTH_ER: Limit = open(
    "depth_er",
    "lattice.depth_out_of_range",
    (0.0, 1000.0),
    "give the peak-to-peak depth in lattice recoil energies",
);
/// Full crossing angle of the two lattice beams.
pub const LATTICE_ANGLE_DEG: Limit = open(
    "angle_deg",
    "lattice.angle_out_of_range",
    (0.0, 180.0),
    "give the full angle between the two lattice beams; 180 is a retro-reflected beam",
);
/// Full crossing angle of the two Raman beams.
pub const RAMAN_ANGLE_DEG: Limit = closed(
    "angle_deg",
    "raman.angle_out_of_range",
    (0.0, 180.0),
    "give the full angle between the two Raman beams; 0 is co-propagating, 180 counter-propagating",
);
/// Angle between the momentum transfer and the lattice axis.
pub const TILT_DEG: Limit = closed(
    "tilt_deg",
    "raman.tilt_out_of_range",
    (-180.0, 180.0),
    "give the angle between the Raman momentum transfer and the lattice axis",
);
/// Site spacing of the lattice.
pub const SPACING_NM: Limit = closed(
    "spacing_nm",
    "lattice.spacing_out_of_range",
    (50.0, 1e9),
    "give the distance between neighbouring sites in nanometres",
);
/// Number of lattice sites the atoms cover.
pub const SITES: Limit = closed(
    "sites",
    "check.sites_out_of_range",
    (2.0, 1e6),
    "give the number of lattice sites the atoms cover, as a whole number",
);
/// Number of legs of a ribbon or tube.
pub const LEGS: Limit = closed(
    "legs",
    "check.legs_out_of_range",
    (1.0, 64.0),
    "give the number of internal states that are coupled, as a whole number",
);
/// Denominator of a rational flux.
pub const DENOMINATOR: Limit = closed(
    "denominator",
    "flux.denominator_out_of_range",
    (1.0, 1e6),
    "write the flux as p/q with a smaller q, or as a decimal number",
);
/// Numerical value of a flux in flux quanta.
pub const FLUX: Limit = closed(
    "flux",
    "flux.out_of_range",
    (-1e9, 1e9),
    "give the flux in flux quanta per plaquette, such as 3/8 or 0.375",
);
/// Flux phase error over the cloud that is still accepted.
pub const PHASE_BUDGET_RAD: Limit = open(
    "phase_budget_rad",
    "check.phase_budget_out_of_range",
    (0.0, 1e6),
    "give the flux phase error that may accumulate over the sites, in radians",
);
/// Kick in units of k_L = pi/spacing.
pub const KICK: Limit = closed(
    "kick",
    "lattice.kick_out_of_range",
    (-1e9, 1e9),
    "give the kick in units of k_L = pi/spacing",
);
/// Quasimomentum in units of k_L.
pub const QUASIMOMENTUM: Limit = closed(
    "quasimomentum",
    "lattice.quasimomentum_out_of_range",
    (-1e6, 1e6),
    "give the quasimomentum in units of k_L = pi/spacing; the first zone is -1..1",
);
/// Index of a band, lowest 0.
pub const BAND: Limit = closed(
    "band",
    "lattice.band_out_of_range",
    (0.0, 31.0),
    "bands are counted from 0, the lowest",
);
/// Number of bands asked for at once.
pub const BAND_COUNT: Limit =
    closed("count", "lattice.count_out_of_range", (1.0, 32.0), "ask for 1 to 32 bands");
/// Number of quasimomenta of a band structure.
pub const POINTS: Limit = closed(
    "points",
    "lattice.points_out_of_range",
    (2.0, 1e6),
    "ask for at least the two zone edges",
);
/// Distance in sites of a hop.
pub const REACH: Limit = closed(
    "reach",
    "lattice.reach_out_of_range",
    (-1000.0, 1000.0),
    "give the distance of the hop in whole sites",
);
/// Sites over which a Wannier function is tabulated.
pub const WANNIER_SITES: Limit = closed(
    "sites",
    "lattice.wannier_sites_out_of_range",
    (1.0, 1000.0),
    "give the number of sites to tabulate the function over",
);
/// Grid points per site of a tabulated Wannier function.
pub const POINTS_PER_SITE: Limit = closed(
    "points_per_site",
    "lattice.points_per_site_out_of_range",
    (2.0, 4096.0),
    "give the number of grid points per site",
);
/// Oscillation frequency of a trap.
pub const TRAP_HZ: Limit = closed(
    "trap_hz",
    "lattice.trap_out_of_range",
    (0.0, 1e6),
    "give the oscillation frequency along the lattice in hertz",
);
/// Acceleration along the lattice.
pub const ACCELERATION_M_PER_S2: Limit = closed(
    "acceleration_m_per_s2",
    "lattice.acceleration_out_of_range",
    (-1e6, 1e6),
    "give the acceleration along the lattice axis in m/s^2; gravity along it is 9.81",
);
/// Any duration.
pub const TIME_S: Limit =
    closed("duration_s", "time.out_of_range", (0.0, 1e4), "give the time in seconds");
/// Magnetic field strength.
pub const FIELD_GAUSS: Limit = closed(
    "magnitude_gauss",
    "field.magnitude_out_of_range",
    (0.0, 2000.0),
    "give the field in gauss",
);
/// Optical power of a beam.
pub const POWER_MW: Limit =
    closed("power_mw", "beam.power_out_of_range", (0.0, 1e6), "give the power in milliwatts");
/// 1/e^2 intensity radius of a beam.
pub const WAIST_UM: Limit = closed(
    "waist_um",
    "beam.waist_out_of_range",
    (0.5, 1e5),
    "give the 1/e^2 intensity radius in micrometres",
);
/// Place of a beam's focus along each laboratory axis.
pub const FOCUS_UM: Limit = closed(
    "focus_um",
    "beam.focus_out_of_range",
    (-1e8, 1e8),
    "give the place of the focus in micrometres from the origin of the laboratory axes",
);
/// A point of the laboratory, along each axis.
pub const POSITION_UM: Limit = closed(
    "at_um",
    "beam.position_out_of_range",
    (-1e8, 1e8),
    "give the point in micrometres from the origin of the laboratory axes",
);
/// Power of a reflected beam over that of the incoming one.
pub const POWER_FRACTION: Limit = closed(
    "power_fraction",
    "beam.power_fraction_out_of_range",
    (0.0, 1.0),
    "give a fraction, not per cent: 0.99 is ninety-nine per cent",
);
/// Angle of the long axis of a polarisation from the plane of the beams.
pub const POLARISATION_DEG: Limit = closed(
    "polarisation_deg",
    "polarisation.angle_out_of_range",
    (-180.0, 180.0),
    "give the angle from the plane of the beams: 0 in the plane, 90 along its normal",
);
/// Ellipticity angle of a polarisation.
pub const ELLIPTICITY_DEG: Limit = closed(
    "ellipticity_deg",
    "polarisation.ellipticity_out_of_range",
    (-45.0, 45.0),
    "0 is linear, +-45 circular; turn the long axis instead of going beyond",
);

/// Number of threads for long work.
pub const THREADS: Limit = closed(
    "threads",
    "threads.out_of_range",
    (1.0, 1024.0),
    "give the number of threads to work with",
);
/// Memory that one answer may take.
pub const MEMORY_BYTES: Limit = closed(
    "limit_bytes",
    "memory.limit_out_of_range",
    (1.0, 1e15),
    "give the number of bytes that one answer may take",
);

/// Circularity of light along the field.
pub const CIRCULARITY: Limit = closed(
    "circularity",
    "light.circularity_out_of_range",
    (-1.0, 1.0),
    "give V of light along the field: 1 is sigma+, -1 sigma-, 0 linear",
);
/// Number of wavelengths of a curve.
pub const CURVE_POINTS: Limit = closed(
    "points",
    "light.points_out_of_range",
    (2.0, 1e6),
    "ask for at least the two ends of the range",
);
/// Amplitude of an oscillating magnetic field.
pub const AMPLITUDE_GAUSS: Limit = closed(
    "amplitude_gauss",
    "radio.amplitude_out_of_range",
    (0.0, 1000.0),
    "give the peak amplitude of the oscillating field in gauss",
);
/// Every limit, for the documentation and for tests that walk the table.
pub const ALL: [Limit; 35] = [
    WAVELENGTH_NM,
    DEPTH_ER,
    LATTICE_ANGLE_DEG,
    RAMAN_ANGLE_DEG,
    TILT_DEG,
    SPACING_NM,
    SITES,
    LEGS,
    DENOMINATOR,
    FLUX,
    PHASE_BUDGET_RAD,
    KICK,
    QUASIMOMENTUM,
    BAND,
    BAND_COUNT,
    POINTS,
    REACH,
    WANNIER_SITES,
    POINTS_PER_SITE,
    TRAP_HZ,
    ACCELERATION_M_PER_S2,
    TIME_S,
    FIELD_GAUSS,
    POWER_MW,
    WAIST_UM,
    FOCUS_UM,
    POSITION_UM,
    POWER_FRACTION,
    POLARISATION_DEG,
    ELLIPTICITY_DEG,
    CIRCULARITY,
    CURVE_POINTS,
    AMPLITUDE_GAUSS,
    THREADS,
    MEMORY_BYTES,
];
