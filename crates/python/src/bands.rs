//! `Bands` and `Wannier` functions of a lattice.

use fluxloom_core::lattice::{Bands, Wannier};
use fluxloom_core::limits;
use numpy::{IntoPyArray, PyArrayMethods};
use pyo3::prelude::*;

use crate::convert::{number, read_only, shaped, size};
use crate::documents::document;
use crate::enter;
use crate::lattice::{PyLattice, band};

/// The lowest bands of a lattice over the zone.
#[pyclass(frozen, eq, module = "fluxloom", name = "Bands")]
#[derive(PartialEq)]
pub struct PyBands {
    pub inner: Bands,
}

document!(PyBands);

#[pymethods]
impl PyBands {
    /// The lattice whose bands these are.
    #[getter]
    fn lattice(&self) -> PyLattice {
        PyLattice { inner: self.inner.lattice().clone() }
    }

    /// Quasimomenta in k_L = pi/a, ``[point]``.
    #[getter]
    fn quasimomenta<'py>(&self, py: Python<'py>) -> PyResult<Bound<'py, PyAny>> {
        let values = self.inner.quasimomenta().to_vec();
        shaped(py, &[values.len()], values)
    }

    /// Energies in lattice recoils, ``[band, point]``.
    #[getter]
    fn energies_er<'py>(&self, py: Python<'py>) -> Bound<'py, PyAny> {
        let array = self.inner.energies_er().clone().into_pyarray(py);
        read_only(array.to_dyn().clone()).into_any()
    }

    /// Names of the axes of ``energies_er``.
    #[getter]
    fn dims(&self) -> (&str, &str) {
        ("band", "quasimomentum")
    }

    /// Proven bound of the error of every energy, in lattice recoils.
    #[getter]
    fn error_er(&self) -> f64 {
        self.inner.error_er()
    }

    /// Width of a band in lattice recoils.
    fn width_er(&self, py: Python<'_>, band: &Bound<'_, PyAny>) -> PyResult<f64> {
        let band = size(band, &limits::BAND, "band")?;
        enter::short(py, || self.inner.width_er(band))
    }

    /// Gap between band ``lower`` and the next, in lattice recoils: the smallest
    /// over the zone, or that at a quasimomentum.
    #[pyo3(signature = (lower=None, quasimomentum=None), text_signature = "($self, lower=0, quasimomentum=None)")]
    fn gap_er(
        &self,
        py: Python<'_>,
        lower: Option<&Bound<'_, PyAny>>,
        quasimomentum: Option<&Bound<'_, PyAny>>,
    ) -> PyResult<f64> {
        let lower = band(lower, "lower")?;
        let quasimomentum =
            quasimomentum.map(|value| number(value, "quasimomentum")).transpose()?;
        enter::short(py, || self.inner.gap_er(lower, quasimomentum))
    }

    /// Draws the bands with the tunnelling beside them; returns the axes.
    #[pyo3(signature = (ax=None))]
    fn plot<'py>(
        slf: &Bound<'py, Self>,
        ax: Option<&Bound<'py, PyAny>>,
    ) -> PyResult<Bound<'py, PyAny>> {
        slf.py().import("fluxloom.plots")?.getattr("bands")?.call1((slf, ax))
    }

    /// The energies as an ``xarray.DataArray`` with named axes and units.
    fn to_xarray<'py>(slf: &Bound<'py, Self>) -> PyResult<Bound<'py, PyAny>> {
        crate::display(slf.py(), "bands_to_xarray")?.call1((slf,))
    }

    fn _repr_html_<'py>(slf: &Bound<'py, Self>) -> PyResult<Bound<'py, PyAny>> {
        crate::display(slf.py(), "bands_html")?.call1((slf,))
    }

    fn __repr__(&self) -> String {
        let (bands, points) = self.inner.energies_er().dim();
        format!(
            "<Bands of {bands} bands at {points} quasimomenta, depth {} E_R>",
            self.inner.lattice().depth_er()
        )
    }
}

/// A Wannier function on a grid.
#[pyclass(frozen, eq, module = "fluxloom", name = "Wannier")]
#[derive(PartialEq)]
pub struct PyWannier {
    pub inner: Wannier,
}

document!(PyWannier);

#[pymethods]
impl PyWannier {
    /// Band, counted from 0.
    #[getter]
    fn band(&self) -> usize {
        self.inner.band
    }

    /// Positions from the centre of the site.
    #[getter]
    fn x_nm<'py>(&self, py: Python<'py>) -> PyResult<Bound<'py, PyAny>> {
        shaped(py, &[self.inner.x_nm.len()], self.inner.x_nm.clone())
    }

    /// Values per square root of a nanometre: ``amplitude**2`` over ``x_nm`` integrates to 1.
    #[getter]
    fn amplitude<'py>(&self, py: Python<'py>) -> PyResult<Bound<'py, PyAny>> {
        shaped(py, &[self.inner.amplitude.len()], self.inner.amplitude.clone())
    }

    /// Draws the function; returns the axes.
    #[pyo3(signature = (ax=None))]
    fn plot<'py>(
        slf: &Bound<'py, Self>,
        ax: Option<&Bound<'py, PyAny>>,
    ) -> PyResult<Bound<'py, PyAny>> {
        slf.py().import("fluxloom.plots")?.getattr("wannier")?.call1((slf, ax))
    }

    fn __repr__(&self) -> String {
        format!(
            "<Wannier function of band {} at {} points>",
            self.inner.band,
            self.inner.x_nm.len()
        )
    }
}
