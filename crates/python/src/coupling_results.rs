//! Results of asking a Raman pair what it couples.

use fluxloom_core::light::{Coupling, Quality, StrayCoupling};
use numpy::Complex64;
use pyo3::prelude::*;
use pyo3::types::PyTuple;

use crate::atom::rests_on;
use crate::convert::shaped;
use crate::documents::document;
use crate::raman::PyRamanPair;
use crate::state::python_state;

/// A two-photon coupling b <- a with its explanation.
#[pyclass(frozen, eq, module = "fluxloom", name = "Coupling")]
#[derive(PartialEq)]
pub struct PyCoupling {
    pub inner: Coupling,
}

document!(PyCoupling);
rests_on!(PyCoupling);

#[pymethods]
impl PyCoupling {
    /// The state a.
    #[getter]
    fn a<'py>(&self, py: Python<'py>) -> PyResult<Bound<'py, PyAny>> {
        python_state(py, self.inner.from)
    }

    /// The state b.
    #[getter]
    fn b<'py>(&self, py: Python<'py>) -> PyResult<Bound<'py, PyAny>> {
        python_state(py, self.inner.to)
    }

    /// Complex Rabi frequency of free atoms over 2 pi.
    #[getter]
    fn rabi_hz(&self) -> Complex64 {
        self.inner.rabi_hz
    }

    /// The same for atoms in the lattice, the overlap of the kick included;
    /// without a lattice that of free atoms.
    #[getter]
    fn effective_rabi_hz(&self) -> Complex64 {
        self.inner.effective_rabi_hz
    }

    /// Kick along the lattice in k_L; None without a lattice.
    #[getter]
    fn kick(&self) -> Option<f64> {
        self.inner.kick
    }

    /// ``rabi_hz`` by tensor rank: scalar, vector, tensor; they add up to it.
    #[getter]
    fn ranks(&self) -> PyRanks {
        PyRanks { parts: self.inner.ranks }
    }

    /// Size over that of the largest coupling with abs(Delta m) <= 1 which the
    /// same beams make.
    #[getter]
    fn relative(&self) -> f64 {
        self.inner.relative
    }

    /// Whether the coupling is too weak to be used: below 1e-2 of the largest.
    #[getter]
    fn forbidden(&self) -> bool {
        self.inner.is_forbidden()
    }

    /// Which part of the light drives the coupling, in a sentence.
    #[getter]
    fn rule(&self) -> &str {
        &self.inner.rule
    }

    /// For a coupling too weak to be used: what would drive it better.
    #[getter]
    fn alternatives<'py>(&self, py: Python<'py>) -> PyResult<Bound<'py, PyTuple>> {
        PyTuple::new(py, &self.inner.alternatives)
    }

    fn _repr_html_<'py>(slf: &Bound<'py, Self>) -> PyResult<Bound<'py, PyAny>> {
        slf.py().import("fluxloom.tables")?.getattr("coupling_html")?.call1((slf,))
    }

    fn __repr__(&self) -> String {
        let Coupling { from, to, rabi_hz, effective_rabi_hz, .. } = &self.inner;
        let size = rabi_hz.norm();
        let lattice = if self.inner.kick.is_some() {
            format!(", {:.6} Hz in the lattice", effective_rabi_hz.norm())
        } else {
            String::new()
        };
        let weak = if self.inner.is_forbidden() { ", too weak to be used" } else { "" };
        format!("<Coupling {from} -> {to}: {size:.6} Hz{lattice}{weak}>")
    }
}

/// The parts of a coupling by tensor rank, over 2 pi in hertz.
#[pyclass(frozen, eq, module = "fluxloom", name = "Ranks")]
#[derive(PartialEq)]
pub struct PyRanks {
    parts: [Complex64; 3],
}

#[pymethods]
impl PyRanks {
    /// Rank 0.
    #[getter]
    fn scalar(&self) -> Complex64 {
        self.parts[0]
    }

    /// Rank 1.
    #[getter]
    fn vector(&self) -> Complex64 {
        self.parts[1]
    }

    /// Rank 2.
    #[getter]
    fn tensor(&self) -> Complex64 {
        self.parts[2]
    }

    fn __len__(&self) -> usize {
        self.parts.len()
    }

    fn __getitem__(&self, rank: usize) -> PyResult<Complex64> {
        let part = self.parts.get(rank).copied();
        part.ok_or_else(|| pyo3::exceptions::PyIndexError::new_err("ranks are 0, 1 and 2"))
    }

    fn __iter__<'py>(&self, py: Python<'py>) -> PyResult<Bound<'py, pyo3::types::PyIterator>> {
        PyTuple::new(py, self.parts)?.try_iter()
    }

    #[new]
    fn new(scalar: Complex64, vector: Complex64, tensor: Complex64) -> Self {
        Self { parts: [scalar, vector, tensor] }
    }

    fn __reduce__<'py>(
        slf: &Bound<'py, Self>,
    ) -> PyResult<(Bound<'py, PyAny>, (Complex64, Complex64, Complex64))> {
        let [scalar, vector, tensor] = slf.get().parts;
        Ok((slf.get_type().into_any(), (scalar, vector, tensor)))
    }

    fn __repr__(&self) -> String {
        let [scalar, vector, tensor] = self.parts.map(|part| part.norm());
        format!("<Ranks of sizes {scalar:.6}, {vector:.6}, {tensor:.6} Hz>")
    }
}

/// A coupling that nobody asked for: by one beam alone, by the pair backwards,
/// or by reflected light.
#[pyclass(frozen, eq, module = "fluxloom", name = "StrayCoupling")]
#[derive(PartialEq)]
pub struct PyStrayCoupling {
    pub inner: StrayCoupling,
}

document!(PyStrayCoupling);
rests_on!(PyStrayCoupling);

#[pymethods]
impl PyStrayCoupling {
    /// Where the photon is absorbed from: ``"absorb"``, ``"emit"``, or one of
    /// them, reflected.
    #[getter]
    fn absorb(&self) -> &str {
        &self.inner.absorb
    }

    /// Where it is emitted into.
    #[getter]
    fn emit(&self) -> &str {
        &self.inner.emit
    }

    /// Complex Rabi frequency over 2 pi, if both beams carried the tones with all
    /// their power: it goes with the root of the fractions.
    #[getter]
    fn rabi_hz(&self) -> Complex64 {
        self.inner.rabi_hz
    }

    /// The two beams as a pair, whose flux and kick can be asked.
    #[getter]
    fn pair(&self) -> PyRamanPair {
        PyRamanPair { inner: self.inner.pair }
    }

    fn __repr__(&self) -> String {
        let StrayCoupling { absorb, emit, rabi_hz, .. } = &self.inner;
        format!("<StrayCoupling {absorb} -> {emit}: {:.6} Hz>", rabi_hz.norm())
    }
}

/// Coupling over scattering against wavelength.
#[pyclass(frozen, eq, module = "fluxloom", name = "Quality")]
#[derive(PartialEq)]
pub struct PyQuality {
    pub inner: Quality,
}

document!(PyQuality);
rests_on!(PyQuality);

#[pymethods]
impl PyQuality {
    /// Vacuum wavelengths, ascending; those too near to a line are left out.
    #[getter]
    fn wavelengths_nm<'py>(&self, py: Python<'py>) -> PyResult<Bound<'py, PyAny>> {
        column(py, &self.inner.wavelengths_nm)
    }

    /// Sizes of the Rabi frequency over 2 pi.
    #[getter]
    fn rabi_hz<'py>(&self, py: Python<'py>) -> PyResult<Bound<'py, PyAny>> {
        column(py, &self.inner.rabi_hz)
    }

    /// Photons per second from both beams, the mean of both states.
    #[getter]
    fn scattering_per_s<'py>(&self, py: Python<'py>) -> PyResult<Bound<'py, PyAny>> {
        column(py, &self.inner.scattering_per_s)
    }

    /// Omega/scattering, with Omega = 2 pi rabi_hz.
    #[getter]
    fn ratio<'py>(&self, py: Python<'py>) -> PyResult<Bound<'py, PyAny>> {
        column(py, &self.inner.ratio)
    }

    /// Where the ratio is largest, also between the points.
    #[getter]
    fn best_wavelength_nm(&self) -> f64 {
        self.inner.best_wavelength_nm
    }

    /// The largest ratio.
    #[getter]
    fn best_ratio(&self) -> f64 {
        self.inner.best_ratio
    }

    /// Ranges about the lines in which nothing was computed.
    #[getter]
    fn excluded_nm<'py>(&self, py: Python<'py>) -> PyResult<Bound<'py, PyTuple>> {
        PyTuple::new(py, &self.inner.excluded_nm)
    }

    /// Draws coupling over scattering against wavelength; returns the axes.
    #[pyo3(signature = (ax=None))]
    fn plot<'py>(
        slf: &Bound<'py, Self>,
        ax: Option<&Bound<'py, PyAny>>,
    ) -> PyResult<Bound<'py, PyAny>> {
        slf.py().import("fluxloom.light_plots")?.getattr("plot_quality")?.call1((slf, ax))
    }

    /// The curves as a pandas DataFrame, one row per wavelength.
    fn to_pandas<'py>(slf: &Bound<'py, Self>) -> PyResult<Bound<'py, PyAny>> {
        slf.py().import("fluxloom.tables")?.getattr("quality_to_pandas")?.call1((slf,))
    }

    fn __repr__(&self) -> String {
        format!(
            "<Quality at {} wavelengths: best {:.0} at {:.4} nm>",
            self.inner.wavelengths_nm.len(),
            self.inner.best_ratio,
            self.inner.best_wavelength_nm
        )
    }
}

fn column<'py>(py: Python<'py>, values: &[f64]) -> PyResult<Bound<'py, PyAny>> {
    shaped(py, &[values.len()], values.to_vec())
}
