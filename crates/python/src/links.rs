//! `LightReport`: what the light of an apparatus does to its atoms.

use fluxloom_plan::LightReport;
use fluxloom_plan::links::{LegScattering, Link, Rate};
use pyo3::prelude::*;
use pyo3::types::PyTuple;

use crate::apparatus::PyCaution;
use crate::documents::document;
use crate::state::python_state;

/// What the light of an apparatus does to its atoms, made by ``Apparatus.links``.
///
/// The depth that the power makes, a ``LinkReport`` for each pair of legs that
/// follow each other, and a ``LegReport`` for each leg. What could not be computed
/// is None, and ``remarks`` say why.
#[pyclass(frozen, eq, module = "fluxloom", name = "LightReport")]
#[derive(PartialEq)]
pub struct PyLightReport {
    pub inner: LightReport,
}

document!(PyLightReport);

#[pymethods]
impl PyLightReport {
    /// Depth that the stated power makes, in lattice recoils, or None.
    #[getter]
    fn depth_from_power_er(&self) -> Option<f64> {
        self.inner.depth_from_power_er
    }

    /// Depth as stated: the one that is used.
    #[getter]
    fn depth_er(&self) -> f64 {
        self.inner.depth_er
    }

    /// Standard error of the stated depth: stated itself, or common practice.
    #[getter]
    fn depth_standard_error_er(&self) -> Option<f64> {
        self.inner.depth_standard_error_er
    }

    /// The bias field, or None: then all is computed without a field.
    #[getter]
    fn field_gauss(&self) -> Option<f64> {
        self.inner.field_gauss
    }

    /// Rms of the bias field: noise, mains, drift and the part in proportion to
    /// the field, stated or common practice, added in squares.
    #[getter]
    fn field_rms_gauss(&self) -> f64 {
        self.inner.field_rms_gauss
    }

    /// Links between legs that follow each other.
    #[getter]
    fn links<'py>(&self, py: Python<'py>) -> PyResult<Bound<'py, PyTuple>> {
        let links = self.inner.links.iter().map(|inner| PyLinkReport { inner: inner.clone() });
        PyTuple::new(py, links.collect::<Vec<_>>())
    }

    /// Scattering of each leg.
    #[getter]
    fn scattering_per_s<'py>(&self, py: Python<'py>) -> PyResult<Bound<'py, PyTuple>> {
        let legs = &self.inner.scattering_per_s;
        let legs = legs.iter().map(|inner| PyLegReport { inner: inner.clone() });
        PyTuple::new(py, legs.collect::<Vec<_>>())
    }

    /// What was left out, and why.
    #[getter]
    fn remarks<'py>(&self, py: Python<'py>) -> PyResult<Bound<'py, PyTuple>> {
        PyTuple::new(py, &self.inner.remarks)
    }

    /// Wavelengths of beams to which lines that the table does not have are near.
    #[getter]
    fn beyond_lines_nm<'py>(&self, py: Python<'py>) -> PyResult<Bound<'py, PyTuple>> {
        PyTuple::new(py, &self.inner.beyond_lines_nm)
    }

    /// Paths of numbers that the report rests on by common practice, because the
    /// file does not state them.
    #[getter]
    fn assumed<'py>(&self, py: Python<'py>) -> PyResult<Bound<'py, PyTuple>> {
        PyTuple::new(py, &self.inner.assumed)
    }

    /// Numbers of the atom behind all this that no source confirms.
    #[getter]
    fn unconfirmed_data<'py>(&self, py: Python<'py>) -> PyResult<Bound<'py, PyTuple>> {
        PyTuple::new(py, &self.inner.unconfirmed_data)
    }

    /// What to think about before these numbers are used.
    #[getter]
    fn cautions<'py>(&self, py: Python<'py>) -> PyResult<Bound<'py, PyTuple>> {
        let cautions = self.inner.cautions().into_iter().map(|inner| PyCaution { inner });
        PyTuple::new(py, cautions.collect::<Vec<_>>())
    }

    /// The numbers as aligned lines of text, each with its units.
    fn table(&self) -> String {
        self.inner.table()
    }

    fn __repr__(&self) -> String {
        format!("<LightReport of {} links>", self.inner.links.len())
    }
}

/// A link between two legs.
#[pyclass(frozen, eq, module = "fluxloom", name = "LinkReport")]
#[derive(PartialEq)]
pub struct PyLinkReport {
    inner: Link,
}

document!(PyLinkReport);

#[pymethods]
impl PyLinkReport {
    /// The leg it starts from.
    #[getter]
    fn a<'py>(&self, py: Python<'py>) -> PyResult<Bound<'py, PyAny>> {
        python_state(py, self.inner.from)
    }

    /// The leg it leads to.
    #[getter]
    fn b<'py>(&self, py: Python<'py>) -> PyResult<Bound<'py, PyAny>> {
        python_state(py, self.inner.to)
    }

    /// Energy of the second state above the first over h, in the bias field.
    #[getter]
    fn splitting_hz(&self) -> f64 {
        self.inner.splitting_hz
    }

    /// Size of the Rabi frequency of free atoms, of both Raman beams with all
    /// their power and one tone each; None without their light.
    #[getter]
    fn rabi_hz(&self) -> Option<f64> {
        self.inner.rabi_hz
    }

    /// The same of atoms in the lattice.
    #[getter]
    fn effective_rabi_hz(&self) -> Option<f64> {
        self.inner.effective_rabi_hz
    }

    /// Whether the coupling is too weak to be used.
    #[getter]
    fn forbidden(&self) -> bool {
        self.inner.forbidden
    }

    /// Which part of the light drives it, and how well; or None.
    #[getter]
    fn rule(&self) -> Option<&str> {
        self.inner.rule.as_deref()
    }

    /// For a coupling that cannot be used: what would drive it better.
    #[getter]
    fn alternatives<'py>(&self, py: Python<'py>) -> PyResult<Bound<'py, PyTuple>> {
        PyTuple::new(py, &self.inner.alternatives)
    }

    /// Change of the splitting with the field.
    #[getter]
    fn field_hz_per_gauss(&self) -> f64 {
        self.inner.field_hz_per_gauss
    }

    /// Rms of the splitting that the noise of the field makes.
    #[getter]
    fn field_rms_hz(&self) -> f64 {
        self.inner.field_rms_hz
    }

    fn __repr__(&self) -> String {
        format!("<LinkReport {} -> {}>", self.inner.from, self.inner.to)
    }
}

/// Light that a leg scatters.
#[pyclass(frozen, eq, module = "fluxloom", name = "LegReport")]
#[derive(PartialEq)]
pub struct PyLegReport {
    inner: LegScattering,
}

document!(PyLegReport);

#[pymethods]
impl PyLegReport {
    /// The leg.
    #[getter]
    fn state<'py>(&self, py: Python<'py>) -> PyResult<Bound<'py, PyAny>> {
        python_state(py, self.inner.state)
    }

    /// Photons of both Raman beams, or None without their light.
    #[getter]
    fn raman_beams_per_s(&self) -> Option<f64> {
        self.inner.raman_beams.map(|Rate { total, .. }| total)
    }

    /// Those of them that change the state.
    #[getter]
    fn raman_beams_changing_per_s(&self) -> Option<f64> {
        self.inner.raman_beams.map(|Rate { changing, .. }| changing)
    }

    /// Photons of the lattice on its sites, or None without its light.
    #[getter]
    fn lattice_beams_per_s(&self) -> Option<f64> {
        self.inner.lattice_beams.map(|Rate { total, .. }| total)
    }

    /// Those of them that change the state.
    #[getter]
    fn lattice_beams_changing_per_s(&self) -> Option<f64> {
        self.inner.lattice_beams.map(|Rate { changing, .. }| changing)
    }

    fn __repr__(&self) -> String {
        format!("<LegReport {}>", self.inner.state)
    }
}
