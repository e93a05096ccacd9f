//! Fundamental constants: CODATA 2022 recommended values.
//!
//! Source: CODATA 2022, as carried by `scipy.constants` 1.17 (compared digit
//! by digit in `tests/test_constants.py`). SI units throughout.

/// Planck constant, J s (exact).
pub const PLANCK_J_S: f64 = 6.626_070_15e-34;
/// Reduced Planck constant h/2pi, J s.
pub const REDUCED_PLANCK_J_S: f64 = PLANCK_J_S / (2.0 * std::f64::consts::PI);
/// Speed of light in vacuum, m/s (exact).
pub const SPEED_OF_LIGHT_M_PER_S: f64 = 299_792_458.0;
/// Elementary charge, C (exact).
pub const ELEMENTARY_CHARGE_C: f64 = 1.602_176_634e-19;
/// Boltzmann constant, J/K (exact).
pub const BOLTZMANN_J_PER_K: f64 = 1.380_649e-23;
/// Atomic mass constant, kg; relative uncertainty 3.1e-10.
pub const ATOMIC_MASS_KG: f64 = 1.660_539_068_92e-27;
/// Electron mass, kg; relative uncertainty 3.1e-10.
pub const ELECTRON_MASS_KG: f64 = 9.109_383_713_9e-31;
/// Bohr radius, m; relative uncertainty 1.6e-10.
pub const BOHR_RADIUS_M: f64 = 5.291_772_105_44e-11;
/// Vacuum electric permittivity, F/m; relative uncertainty 1.6e-10.
pub const VACUUM_PERMITTIVITY_F_PER_M: f64 = 8.854_187_818_8e-12;
/// Hartree energy, J; relative uncertainty 1.1e-12.
pub const HARTREE_J: f64 = 4.359_744_722_206_0e-18;
/// Gauss in a tesla (exact).
pub const GAUSS_PER_TESLA: f64 = 1e4;
/// Bohr magneton, J/T; relative uncertainty 3.1e-10.
pub const BOHR_MAGNETON_J_PER_T: f64 = 9.274_010_065_7e-24;

/// Every constant with its SI unit, for tables and comparisons.
pub const ALL: [(&str, f64, &str); 11] = [
    ("planck", PLANCK_J_S, "J s"),
    ("reduced_planck", REDUCED_PLANCK_J_S, "J s"),
    ("speed_of_light", SPEED_OF_LIGHT_M_PER_S, "m/s"),
    ("elementary_charge", ELEMENTARY_CHARGE_C, "C"),
    ("boltzmann", BOLTZMANN_J_PER_K, "J/K"),
    ("atomic_mass", ATOMIC_MASS_KG, "kg"),
    ("electron_mass", ELECTRON_MASS_KG, "kg"),
    ("bohr_radius", BOHR_RADIUS_M, "m"),
    ("vacuum_permittivity", VACUUM_PERMITTIVITY_F_PER_M, "F/m"),
    ("hartree", HARTREE_J, "J"),
    ("bohr_magneton", BOHR_MAGNETON_J_PER_T, "J/T"),
];
