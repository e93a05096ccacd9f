//! Allowed ranges of numbers that only the apparatus file knows. The ones that
//! physics shares are in [`fluxloom_core::limits`].

use fluxloom_core::limits::Limit;

const CODE: &str = "file.value_out_of_range";

/// A range with both ends allowed.
const fn closed(field: &'static str, low: f64, high: f64, remedy: &'static str) -> Limit {
    Limit { field, code: CODE, low, high, low_open: false, remedy }
}

/// A range whose lower end is refused.
const fn above(field: &'static str, low: f64, high: f64, remedy: &'static str) -> Limit {
    Limit { field, code: CODE, low, high, low_open: true, remedy }
}

pub(super) const ATOM_COUNT: Limit =
    closed("count", 1.0, 1e12, "give the number of atoms, a whole number");
pub(super) const TEMPERATURE_NK: Limit =
    closed("temperature_nk", 0.0, 1e9, "give the temperature in nanokelvin");
pub(super) const SIZE_UM: Limit = above("length_um", 0.0, 1e6, "give the size in micrometres");
pub(super) const FRACTION: Limit =
    closed("fraction", 0.0, 1.0, "give a fraction, not per cent: 0.01 is one per cent");
pub(super) const EFFICIENCY: Limit =
    above("efficiency", 0.0, 1.0, "give a fraction, not per cent: 0.9 is ninety per cent");
pub(super) const FREQUENCY_HZ: Limit =
    closed("frequency_hz", 0.0, 1e12, "give the frequency in hertz, not in rad/s");
pub(super) const CARRIER_HZ: Limit =
    above("frequency_hz", 0.0, 1e12, "give the frequency in hertz, not in rad/s");
pub(super) const ANGLE_DEG: Limit =
    closed("polarisation_deg", -180.0, 180.0, "give the angle in degrees");
pub(super) const ELLIPTICITY_DEG: Limit = closed(
    "ellipticity_deg",
    -45.0,
    45.0,
    "0 is linear, +-45 circular; turn polarisation_deg instead of going beyond",
);
pub(super) const PHASE_NOISE_RAD: Limit =
    closed("phase_noise_rms_rad", 0.0, 1e3, "give the rms phase in radians");
pub(super) const PHASE_DENSITY: Limit = closed(
    "phase_noise_white_rad2_per_hz",
    0.0,
    1.0,
    "give the one-sided power density of the phase in rad^2/Hz",
);
pub(super) const FIELD_NOISE_GAUSS: Limit =
    closed("noise_rms_gauss", 0.0, 2000.0, "give the rms field in gauss: 1 mG is 1e-3");
pub(super) const NOISE_PPM: Limit =
    closed("noise_ppm", 0.0, 1e6, "give the rms in parts per million of the field");
pub(super) const RATE: Limit =
    above("slew", 0.0, 1e12, "give the fastest change per second, a positive number");
pub(super) const GRADIENT: Limit =
    closed("gradient_gauss_per_cm", -1e6, 1e6, "give the gradient in gauss per centimetre");
pub(super) const ORDER: Limit =
    closed("order", -10.0, 10.0, "give the diffraction order, a whole number with its sign, not 0");
pub(super) const PASSES: Limit =
    closed("passes", 1.0, 16.0, "give how often the light passes the modulator, 1 or 2 as a rule");
pub(super) const TONES: Limit =
    closed("max_tones", 1.0, 1024.0, "give the most tones at once, a whole number");
pub(super) const BITS: Limit =
    closed("bits", 1.0, 64.0, "give the number of bits of the word, a whole number");
pub(super) const STEP_S: Limit = above("time_step_s", 0.0, 1e4, "give the time step in seconds");
pub(super) const DURATION_S: Limit =
    above("max_duration_s", 0.0, 1e4, "give the longest duration in seconds");
pub(super) const FULL_SCALE_MW: Limit =
    above("full_scale_mw", 0.0, 1e6, "give the value at the largest word, in milliwatts");
pub(super) const FULL_SCALE_GAUSS: Limit =
    above("full_scale_gauss", 0.0, 2000.0, "give the value at the largest word, in gauss");
pub(super) const OPTICAL_DEPTH: Limit =
    above("max_optical_depth", 0.0, 100.0, "give the largest optical depth the camera can tell");
pub(super) const ATOMS_RMS: Limit =
    closed("count_noise_per_pixel", 0.0, 1e9, "give the rms number of atoms");
pub(super) const SCATTERING_LENGTH_BOHR: Limit =
    closed("scattering_length_bohr", -1e6, 1e6, "give the length in Bohr radii");
pub(super) const STANDARD_ERROR: Limit = closed(
    "standard_error",
    0.0,
    1e12,
    "give one standard deviation in the unit of the value, not negative",
);
