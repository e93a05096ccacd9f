//! Functions of plain numbers and arrays: fluxes, band energies, inverse problems.

use fluxloom_core::control::{allow_numbers, go_on};
use fluxloom_core::flux::{
    AngleSearch, FluxInput, Solution, WavelengthSearch, flux as flux_of, fold as fold_of,
    raman_angles as angles, raman_wavelengths as wavelengths,
};
use fluxloom_core::lattice::{BandGrid, band_energies_er as energies};
use fluxloom_core::limits::{self, Limit};
use numpy::IntoPyArray;
use pyo3::prelude::*;
use pyo3::types::PyTuple;

use crate::convert::{Numbers, flux, list, number, numbers, pair, read_only, shaped, size};
use crate::enter;
use crate::lattice::PyLattice;
use crate::raman::PySolution;

/// A flux folded into (-1/2, 1/2]; a number or an array.
///
/// Examples
/// --------
/// >>> import fluxloom as fl
/// >>> fl.fold(1.375), fl.fold(-0.5)
/// (0.375, 0.5)
#[pyfunction]
pub fn fold<'py>(x: &Bound<'py, PyAny>) -> PyResult<Bound<'py, PyAny>> {
    let found = numbers(x, "x")?;
    found.check(x.py(), &limits::FLUX, "x")?;
    shaped(x.py(), &found.shape, found.values.into_iter().map(fold_of).collect())
}

/// The flux of crossing beams for arrays of settings that have been broadcast
/// against each other; see ``fluxloom.flux``.
#[pyfunction]
pub fn flux_of_arrays<'py>(
    py: Python<'py>,
    spacing_nm: &Bound<'py, PyAny>,
    wavelength_nm: &Bound<'py, PyAny>,
    angle_deg: &Bound<'py, PyAny>,
    tilt_deg: &Bound<'py, PyAny>,
) -> PyResult<Bound<'py, PyAny>> {
    let within = |value: &Bound<'py, PyAny>, limit: &Limit| -> PyResult<Numbers> {
        let found = numbers(value, limit.field)?;
        found.check(py, limit, limit.field)?;
        Ok(found)
    };
    let Numbers { shape, values: spacings } = within(spacing_nm, &limits::SPACING_NM)?;
    let wavelengths = within(wavelength_nm, &limits::WAVELENGTH_NM)?.values;
    let angles = within(angle_deg, &limits::RAMAN_ANGLE_DEG)?.values;
    let tilts = within(tilt_deg, &limits::TILT_DEG)?.values;
    let fluxes = enter::long(py, |control| {
        allow_numbers(&[spacings.len()], 8)?;
        let mut fluxes = Vec::with_capacity(spacings.len());
        let settings = spacings.iter().zip(&wavelengths).zip(angles.iter().zip(&tilts));
        for (place, ((spacing_nm, wavelength_nm), (angle_deg, tilt_deg))) in settings.enumerate() {
            if place % 65_536 == 0 {
                go_on(control)?;
            }
            fluxes.push(flux_of(FluxInput {
                spacing_nm: *spacing_nm,
                wavelength_nm: *wavelength_nm,
                angle_deg: *angle_deg,
                tilt_deg: *tilt_deg,
            })?);
        }
        Ok::<_, fluxloom_core::Error>(fluxes)
    })?;
    shaped(py, &shape, fluxes)
}

/// Energies of the lowest bands for many depths and quasimomenta at once.
///
/// Parameters
/// ----------
/// depths_er : float or 1-d array
///     Depths in lattice recoils.
/// quasimomenta : float or 1-d array
///     Quasimomenta in k_L = pi/a.
/// count : int
///     Number of bands, 1 to 32.
///
/// Returns
/// -------
/// ndarray
///     Energies in lattice recoils, ``[depth, quasimomentum, band]``, good to
///     1e-10 and better.
///
/// Examples
/// --------
/// >>> import fluxloom as fl
/// >>> fl.band_energies_er([3.0, 10.0], [0.0, 1.0], count=2).shape
/// (2, 2, 2)
#[pyfunction]
#[pyo3(signature = (depths_er, quasimomenta, *, count=None), text_signature = "(depths_er, quasimomenta, *, count=4)")]
pub fn band_energies_er<'py>(
    py: Python<'py>,
    depths_er: &Bound<'py, PyAny>,
    quasimomenta: &Bound<'py, PyAny>,
    count: Option<&Bound<'py, PyAny>>,
) -> PyResult<Bound<'py, PyAny>> {
    let depths = list(depths_er, "depths_er")?;
    let quasimomenta = list(quasimomenta, "quasimomenta")?;
    let count = count.map_or(Ok(4), |value| size(value, &limits::BAND_COUNT, "count"))?;
    let grid = BandGrid { depths_er: &depths, quasimomenta: &quasimomenta, count };
    let found = enter::long(py, |control| energies(grid, control))?;
    Ok(read_only(found.into_dyn().into_pyarray(py)).into_any())
}

fn solutions(py: Python<'_>, found: Vec<Solution>) -> PyResult<Bound<'_, PyTuple>> {
    PyTuple::new(py, found.into_iter().map(|inner| PySolution { inner }).collect::<Vec<_>>())
}

/// All Raman wavelengths in a range that reach a target flux, over all branches
/// and senses, the largest kick overlap first.
///
/// Parameters
/// ----------
/// target : str, (int, int), Fraction or float
/// lattice : Lattice
/// range_nm : (float, float)
///     Shortest and longest wavelength.
/// angle_deg, tilt_deg : float
///     Crossing angle of the beams, and tilt of their difference.
///
/// Returns
/// -------
/// tuple of Solution
///
/// Examples
/// --------
/// >>> import fluxloom as fl
/// >>> lattice = fl.Lattice(wavelength_nm=1064.0, depth_er=6.0)
/// >>> found = fl.raman_wavelengths("3/8", lattice, range_nm=(766, 775))
/// >>> [round(s.wavelength_nm, 3) for s in found]
/// [773.818]
#[pyfunction]
#[pyo3(signature = (target, lattice, *, range_nm, angle_deg=None, tilt_deg=None), text_signature = "(target, lattice, *, range_nm, angle_deg=180.0, tilt_deg=0.0)")]
pub fn raman_wavelengths<'py>(
    py: Python<'py>,
    target: &Bound<'py, PyAny>,
    lattice: &PyLattice,
    range_nm: &Bound<'py, PyAny>,
    angle_deg: Option<&Bound<'py, PyAny>>,
    tilt_deg: Option<&Bound<'py, PyAny>>,
) -> PyResult<Bound<'py, PyTuple>> {
    let target = flux(target, "target")?;
    let search = WavelengthSearch {
        range_nm: pair(range_nm, "range_nm")?,
        angle_deg: angle_deg.map_or(Ok(180.0), |value| number(value, "angle_deg"))?,
        tilt_deg: tilt_deg.map_or(Ok(0.0), |value| number(value, "tilt_deg"))?,
    };
    solutions(py, enter::long(py, |control| wavelengths(target, &lattice.inner, search, control))?)
}

/// All crossing angles in a range at which beams of one wavelength reach a
/// target flux, over all branches and senses, the largest kick overlap first.
///
/// Parameters
/// ----------
/// target : str, (int, int), Fraction or float
/// lattice : Lattice
/// wavelength_nm : float
/// tilt_deg : float
/// range_deg : (float, float)
///
/// Returns
/// -------
/// tuple of Solution
///
/// Examples
/// --------
/// >>> import fluxloom as fl
/// >>> lattice = fl.Lattice(wavelength_nm=1064.0, depth_er=6.0)
/// >>> found = fl.raman_angles("3/8", lattice, wavelength_nm=769.0)
/// >>> [round(s.angle_deg, 2) for s in found]
/// [31.45, 53.71, 167.21]
#[pyfunction]
#[pyo3(signature = (target, lattice, *, wavelength_nm, tilt_deg=None, range_deg=None), text_signature = "(target, lattice, *, wavelength_nm, tilt_deg=0.0, range_deg=(0, 180))")]
pub fn raman_angles<'py>(
    py: Python<'py>,
    target: &Bound<'py, PyAny>,
    lattice: &PyLattice,
    wavelength_nm: &Bound<'py, PyAny>,
    tilt_deg: Option<&Bound<'py, PyAny>>,
    range_deg: Option<&Bound<'py, PyAny>>,
) -> PyResult<Bound<'py, PyTuple>> {
    let target = flux(target, "target")?;
    let search = AngleSearch {
        range_deg: range_deg.map_or(Ok((0.0, 180.0)), |value| pair(value, "range_deg"))?,
        wavelength_nm: number(wavelength_nm, "wavelength_nm")?,
        tilt_deg: tilt_deg.map_or(Ok(0.0), |value| number(value, "tilt_deg"))?,
    };
    solutions(py, enter::long(py, |control| angles(target, &lattice.inner, search, control))?)
}
