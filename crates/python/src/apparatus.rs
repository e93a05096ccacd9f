//! `Apparatus`: the laboratory as a file.

use fluxloom_core::limits;
use fluxloom_plan::apparatus::Measured;
use fluxloom_plan::cautions::Caution;
use fluxloom_plan::{Apparatus, Legs};
use pyo3::prelude::*;
use pyo3::types::{PyBool, PyDict, PyIterator, PyMapping, PyTuple};

use crate::atom::PyAtom;
use crate::beam::PyBeam;
use crate::check::{Judging, PyFluxCheck};
use crate::convert::{flux, pairs, small_count};
use crate::documents::{self, document};
use crate::enter;
use crate::errors::{raise, wrong_type};
use crate::lattice::PyLattice;
use crate::links::PyLightReport;
use crate::raman::PyRamanPair;
use crate::settings::{DEEPEST, node, python_value};

/// The laboratory as it stands: lasers, beams, lattice, field, hardware.
///
/// Read from a file with ``Apparatus.load``, from a text with ``from_toml`` or
/// from nested dicts with ``from_dict``; all faults are reported at once, each
/// with its place. A setting is read by its path.
///
/// Examples
/// --------
/// >>> import fluxloom as fl
/// >>> bay = fl.Apparatus.load("notebooks-examples/tern_bay.toml")
/// >>> bay["lasers.raman.wavelength_nm"]
/// 769.0
/// >>> bay.check("3/8").meets_target
/// True
#[pyclass(frozen, eq, module = "fluxloom", name = "Apparatus")]
#[derive(PartialEq)]
pub struct PyApparatus {
    inner: Apparatus,
}

#[pymethods]
impl PyApparatus {
    /// Reads a file: TOML, or JSON if its name ends in ``.json``.
    #[staticmethod]
    fn load(py: Python<'_>, path: &Bound<'_, PyAny>) -> PyResult<Self> {
        let path = documents::path(path)?;
        Ok(Self { inner: enter::short(py, || Apparatus::load(&path))? })
    }

    /// Reads a TOML text.
    #[staticmethod]
    fn from_toml(py: Python<'_>, text: &str) -> PyResult<Self> {
        Ok(Self { inner: enter::short(py, || Apparatus::from_toml(text))? })
    }

    /// Reads nested dicts, as ``to_dict`` gives them.
    #[staticmethod]
    fn from_dict(settings: &Bound<'_, PyAny>) -> PyResult<Self> {
        if settings.cast::<PyMapping>().is_err() {
            return Err(wrong_type("settings", settings, "a dict"));
        }
        let tree = node(settings, "settings", DEEPEST)?;
        Ok(Self { inner: enter::short(settings.py(), || Apparatus::from_tree(tree))? })
    }

    /// Reads a JSON text.
    #[staticmethod]
    fn from_json(py: Python<'_>, text: &str) -> PyResult<Self> {
        Ok(Self { inner: enter::short(py, || Apparatus::from_json(text))? })
    }

    /// The settings as nested dicts, as written; dates are texts.
    fn to_dict<'py>(&self, py: Python<'py>) -> PyResult<Bound<'py, PyAny>> {
        python_value(py, &self.inner.to_value())
    }

    /// The settings as a JSON text.
    fn to_json(&self) -> String {
        self.inner.to_json()
    }

    /// The settings as a TOML text, with the comments and the order of the file.
    fn to_toml(&self) -> String {
        self.inner.to_toml()
    }

    /// Writes a file (TOML with comments, or JSON for ``.json``), which appears
    /// whole or not at all.
    fn save(&self, py: Python<'_>, path: &Bound<'_, PyAny>) -> PyResult<()> {
        let path = documents::path(path)?;
        enter::short(py, || self.inner.save(&path))
    }

    /// The value of a setting by its path, or its documented default.
    fn __getitem__<'py>(&self, path: &Bound<'py, PyAny>) -> PyResult<Bound<'py, PyAny>> {
        let py = path.py();
        let path: String = path.extract().map_err(|_| wrong_type("path", path, "a text"))?;
        python_value(py, &self.inner.get(&path).map_err(|error| raise(py, &error))?)
    }

    // Without it Python would look for settings by number.
    fn __contains__(&self, path: &Bound<'_, PyAny>) -> bool {
        path.extract::<String>().is_ok_and(|path| self.inner.get(&path).is_ok())
    }

    fn __iter__<'py>(&self, py: Python<'py>) -> PyResult<Bound<'py, PyIterator>> {
        PyTuple::new(py, self.inner.paths())?.try_iter()
    }

    /// A number with its uncertainty, its data file and the day it was measured.
    fn measured(&self, py: Python<'_>, path: &str) -> PyResult<PyMeasured> {
        Ok(PyMeasured { inner: self.inner.measured(path).map_err(|error| raise(py, &error))? })
    }

    /// The same apparatus with other values, by path; all faults at once.
    ///
    /// Depth and power of the lattice move together, and the power follows what
    /// else changes the depth it makes; ``changes`` says what moved.
    fn replace(&self, changes: &Bound<'_, PyAny>) -> PyResult<Self> {
        let py = changes.py();
        let mut wanted = Vec::new();
        for (path, value) in pairs(changes, "changes")? {
            let path: String =
                path.extract().map_err(|_| wrong_type("a path in changes", &path, "a text"))?;
            let value = node(&value, &path, DEEPEST)?;
            wanted.push((path, value));
        }
        Ok(Self { inner: enter::short(py, || self.inner.replace_nodes(&wanted))? })
    }

    /// What the last ``replace`` moved besides what was asked.
    #[getter]
    fn changes<'py>(&self, py: Python<'py>) -> PyResult<Bound<'py, PyTuple>> {
        PyTuple::new(py, self.inner.changes())
    }

    /// Settings that the file leaves to their documented defaults: path to
    /// value and reason.
    fn defaults<'py>(&self, py: Python<'py>) -> PyResult<Bound<'py, PyDict>> {
        let table = PyDict::new(py);
        for (path, value, reason) in self.inner.defaults() {
            table.set_item(path, (python_value(py, &value)?, reason))?;
        }
        Ok(table)
    }

    /// What in this laboratory can hurt someone, each with ``.code`` and ``.text``.
    #[getter]
    fn cautions<'py>(&self, py: Python<'py>) -> PyResult<Bound<'py, PyTuple>> {
        let cautions = self.inner.cautions().map_err(|error| raise(py, &error))?;
        PyTuple::new(py, cautions.into_iter().map(|inner| PyCaution { inner }).collect::<Vec<_>>())
    }

    /// The atom of the cloud.
    fn atom(&self, py: Python<'_>) -> PyResult<PyAtom> {
        Ok(PyAtom { inner: self.inner.atom().map_err(|error| raise(py, &error))? })
    }

    /// The lattice as it stands today.
    fn lattice(&self, py: Python<'_>) -> PyResult<PyLattice> {
        Ok(PyLattice { inner: self.inner.lattice().map_err(|error| raise(py, &error))? })
    }

    /// A beam of the file as light, focused on the atoms.
    ///
    /// Its direction is that of its place in ``raman.beams`` or ``lattice.beams``;
    /// ``polarisation_deg`` counts from the plane of that pair. Of two radii the
    /// first lies in the plane, the second along its normal.
    ///
    /// Parameters
    /// ----------
    /// name : str
    ///     Its name in ``[beams]``.
    ///
    /// Returns
    /// -------
    /// Beam
    ///
    /// Raises
    /// ------
    /// InputError
    ///     For a name that is not there (``apparatus.unknown_beam``), a beam of no
    ///     pair (``apparatus.beam_without_direction``), or one that does not state
    ///     power, waist or polarisation (``apparatus.not_stated``).
    ///
    /// Examples
    /// --------
    /// >>> import fluxloom as fl
    /// >>> bay = fl.Apparatus.load("notebooks-examples/tern_bay.toml")
    /// >>> beam = bay.beam("raman_a")
    /// >>> beam.wavelength_nm, beam.power_mw
    /// (769.0, 0.44)
    fn beam(&self, py: Python<'_>, name: &str) -> PyResult<PyBeam> {
        Ok(PyBeam { inner: self.inner.beam(name).map_err(|error| raise(py, &error))? })
    }

    /// The two beams of the lattice: those that cross, or one and its reflection.
    fn lattice_beams(&self, py: Python<'_>) -> PyResult<(PyBeam, PyBeam)> {
        let [first, second] = self.inner.lattice_beams().map_err(|error| raise(py, &error))?;
        Ok((PyBeam { inner: first }, PyBeam { inner: second }))
    }

    /// The Raman beams as they stand today, with their light if both state power,
    /// waist and polarisation.
    fn raman_pair(&self, py: Python<'_>) -> PyResult<PyRamanPair> {
        Ok(PyRamanPair { inner: self.inner.raman_pair().map_err(|error| raise(py, &error))? })
    }

    /// Direction of the bias field, as stated.
    #[getter]
    fn field_direction(&self) -> (f64, f64, f64) {
        self.inner.field_direction().into()
    }

    /// Judges today's settings against a target flux; see ``check_flux``.
    ///
    /// Without ``sites`` the cloud's length decides: the whole sites it covers, at least 2.
    #[pyo3(signature = (flux, *, sites=None, legs=None, closed=None, phase_budget_rad=None), text_signature = "($self, flux, *, sites=None, legs=None, closed=False, phase_budget_rad=0.5)")]
    fn check(
        &self,
        py: Python<'_>,
        flux: &Bound<'_, PyAny>,
        sites: Option<&Bound<'_, PyAny>>,
        legs: Option<&Bound<'_, PyAny>>,
        closed: Option<&Bound<'_, PyAny>>,
        phase_budget_rad: Option<&Bound<'_, PyAny>>,
    ) -> PyResult<PyFluxCheck> {
        let open = PyBool::new(py, false).to_owned().into_any();
        let judging = Judging { sites, legs, closed: closed.unwrap_or(&open), phase_budget_rad };
        let options = judging.options()?;
        let target = self::flux(flux, "flux")?;
        Ok(PyFluxCheck { inner: enter::short(py, || self.inner.check(target, options))? })
    }

    /// What today's light does to the atoms: depth from power, couplings between
    /// legs, scattering.
    ///
    /// Parameters
    /// ----------
    /// legs : int, optional
    ///     How many states, from ``cloud.start`` on within its F: upwards in m from
    ///     the lower half, downwards from the upper one. Up to 4 without it.
    /// closed : bool
    ///     Whether the last leg couples back to the first.
    ///
    /// Returns
    /// -------
    /// LightReport or None
    ///     None if neither the lattice nor the Raman beams state power, waist and
    ///     polarisation.
    ///
    /// Examples
    /// --------
    /// >>> import fluxloom as fl
    /// >>> bay = fl.Apparatus.load("notebooks-examples/tern_bay.toml")
    /// >>> report = bay.links(legs=3)
    /// >>> round(report.depth_from_power_er, 1)
    /// 6.0
    /// >>> [link.b.m for link in report.links]
    /// [-3.5, -2.5]
    #[pyo3(signature = (*, legs=None, closed=None), text_signature = "($self, *, legs=None, closed=False)")]
    fn links(
        &self,
        py: Python<'_>,
        legs: Option<&Bound<'_, PyAny>>,
        closed: Option<&Bound<'_, PyAny>>,
    ) -> PyResult<Option<PyLightReport>> {
        let wanted = Legs {
            count: legs.map(|value| small_count(value, &limits::LEGS, "legs")).transpose()?,
            closed: match closed {
                Some(value) => {
                    value.extract().map_err(|_| wrong_type("closed", value, "True or False"))?
                }
                None => false,
            },
        };
        let report = enter::short(py, || self.inner.links(wanted))?;
        Ok(report.map(|inner| PyLightReport { inner }))
    }

    fn __reduce__<'py>(slf: &Bound<'py, Self>) -> PyResult<(Bound<'py, PyAny>, (String,))> {
        Ok((slf.get_type().getattr("from_toml")?, (slf.get().inner.to_toml(),)))
    }

    fn __repr__(&self) -> String {
        let name = self.inner.text("name").unwrap_or_default();
        format!("<Apparatus {name:?}>")
    }
}

/// A number of the apparatus with what is known about it.
#[pyclass(frozen, eq, module = "fluxloom", name = "Measured")]
#[derive(PartialEq)]
pub struct PyMeasured {
    inner: Measured,
}

document!(PyMeasured);

#[pymethods]
impl PyMeasured {
    /// The value.
    #[getter]
    fn value(&self) -> f64 {
        self.inner.value
    }

    /// Its standard error, or None.
    #[getter]
    fn standard_error(&self) -> Option<f64> {
        self.inner.standard_error
    }

    /// The data file it was fitted from, or None.
    #[getter]
    fn data(&self) -> Option<&str> {
        self.inner.data.as_deref()
    }

    /// The day it was measured, as in the file, or None.
    #[getter]
    fn measured(&self) -> Option<&str> {
        self.inner.measured.as_deref()
    }

    fn __repr__(&self) -> String {
        let spread =
            self.inner.standard_error.map_or_else(String::new, |error| format!(" +- {error:?}"));
        format!("<Measured {:?}{spread}>", self.inner.value)
    }
}

/// A hazard in words; ``str(caution)`` is the text.
#[pyclass(frozen, eq, module = "fluxloom", name = "Caution")]
#[derive(PartialEq)]
pub struct PyCaution {
    pub inner: Caution,
}

document!(PyCaution);

#[pymethods]
impl PyCaution {
    /// Stable code.
    #[getter]
    fn code(&self) -> &str {
        &self.inner.code
    }

    /// What, from which settings, and whom to ask.
    #[getter]
    fn text(&self) -> &str {
        &self.inner.text
    }

    fn __str__(&self) -> &str {
        &self.inner.text
    }

    fn __repr__(&self) -> String {
        format!("<Caution {}>", self.inner.code)
    }
}
