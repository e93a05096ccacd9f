//! The Python extension module: conversions and documentation, nothing else.
//!
//! Everything here can be done from Rust with `fluxloom-core` and
//! `fluxloom-plan`.

// PyO3's signatures ask for more arguments than a Rust caller would like.
#![allow(clippy::too_many_arguments)]

mod apparatus;
mod atom;
mod bands;
mod beam;
mod check;
mod convert;
mod coupling;
mod coupling_results;
mod documents;
mod enter;
mod errors;
mod functions;
mod lattice;
mod levels;
mod light;
mod links;
mod polarisability;
mod raman;
mod settings;
mod state;

use pyo3::prelude::*;

/// A function of `fluxloom.displays`, where tables and pictures for people are made.
fn display<'py>(py: Python<'py>, name: &str) -> PyResult<Bound<'py, PyAny>> {
    py.import("fluxloom.displays")?.getattr(name)
}

/// Sets the number of threads that work is spread over, 1 to 1024.
///
/// Without it the environment variable ``RAYON_NUM_THREADS`` decides, or there
/// is one thread per core. Answers do not depend on it.
#[pyfunction]
fn set_threads(threads: &Bound<'_, PyAny>) -> PyResult<()> {
    enter::set_threads(convert::size(threads, &fluxloom_core::limits::THREADS, "threads")?)
}

/// Sets the memory that one answer may take, in bytes; None returns to the
/// default, half of what is free.
#[pyfunction]
fn set_memory_limit_bytes(limit_bytes: Option<&Bound<'_, PyAny>>) -> PyResult<()> {
    let limit_bytes = limit_bytes
        .map(|value| convert::size(value, &fluxloom_core::limits::MEMORY_BYTES, "limit_bytes"))
        .transpose()?;
    fluxloom_core::control::set_memory_limit_bytes(limit_bytes.map(|n| n as u64));
    Ok(())
}

/// Version, CPU level and number of threads of the compiled part.
#[pyfunction]
fn build_info() -> PyResult<(&'static str, &'static str, usize)> {
    Ok((env!("CARGO_PKG_VERSION"), fluxloom_kernel::bands::level_name(), enter::threads()?))
}

/// The fundamental constants in use (CODATA 2022): name, value, unit.
#[pyfunction]
fn constants() -> Vec<(&'static str, f64, &'static str)> {
    fluxloom_core::constants::ALL.to_vec()
}

/// The allowed ranges: field, code, low, high, whether low itself is refused, remedy.
#[pyfunction]
fn limits() -> Vec<(&'static str, &'static str, f64, f64, bool, &'static str)> {
    fluxloom_core::limits::ALL
        .iter()
        .map(|limit| (limit.field, limit.code, limit.low, limit.high, limit.low_open, limit.remedy))
        .collect()
}

/// The compiled part of Fluxloom.
#[pymodule]
mod _core {
    #[pymodule_export]
    use super::apparatus::{PyApparatus, PyCaution, PyMeasured};
    #[pymodule_export]
    use super::atom::{PyAtom, PyDataSource, PySourceTable};
    #[pymodule_export]
    use super::bands::{PyBands, PyWannier};
    #[pymodule_export]
    use super::beam::{
        PyBeam, circular_polarisation, elliptical_polarisation, linear_polarisation,
    };
    #[pymodule_export]
    use super::check::{PyFluxCheck, PyNearFraction, check_flux};
    #[pymodule_export]
    use super::coupling_results::{PyCoupling, PyQuality, PyRanks, PyStrayCoupling};
    #[pymodule_export]
    use super::functions::{
        band_energies_er, flux_of_arrays, fold, raman_angles, raman_wavelengths,
    };
    #[pymodule_export]
    use super::lattice::PyLattice;
    #[pymodule_export]
    use super::levels::{PyGroundLevels, radio_rabi_hz};
    #[pymodule_export]
    use super::light::{
        PyScattering, lattice_depth_er, lattice_power_mw, lattice_scattering_per_s,
    };
    #[pymodule_export]
    use super::links::{PyLegReport, PyLightReport, PyLinkReport};
    #[pymodule_export]
    use super::polarisability::PyPolarisability;
    #[pymodule_export]
    use super::raman::{PyRamanPair, PySolution};
    #[pymodule_export]
    use super::{build_info, constants, limits, set_memory_limit_bytes, set_threads};
}
