//! `Apparatus`: the laboratory as a file.

use fluxloom_core::fault::Fault;
use fluxloom_plan::apparatus::Measured;
use fluxloom_plan::cautions::Caution;
use fluxloom_plan::files::{Data, Entry, Node};
use fluxloom_plan::{Apparatus, Error};
use pyo3::prelude::*;
use pyo3::types::{
    PyBool, PyDict, PyFloat, PyInt, PyIterator, PyList, PyMapping, PyString, PyTuple,
};
use serde_json::Value;

use crate::atom::PyAtom;
use crate::check::{Judging, PyFluxCheck};
use crate::convert::{flux, number, pairs};
use crate::documents::{self, document};
use crate::enter;
use crate::errors::{raise, wrong_type};
use crate::lattice::PyLattice;
use crate::raman::PyRamanPair;

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
    /// Depth and power of the lattice move together; ``changes`` says what moved.
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

    /// The Raman beams as they stand today.
    fn raman_pair(&self, py: Python<'_>) -> PyResult<PyRamanPair> {
        Ok(PyRamanPair { inner: self.inner.raman_pair().map_err(|error| raise(py, &error))? })
    }

    /// Direction of the bias field.
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
    inner: Caution,
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

/// No apparatus nests deeper than this; it stops a dict that contains itself.
const DEEPEST: usize = 16;

/// A Python value as a node of a settings tree. NaN and infinities are kept, so
/// that they are reported with their place among all other faults.
fn node(value: &Bound<'_, PyAny>, path: &str, depth: usize) -> PyResult<Node> {
    if depth == 0 {
        let fault = Fault {
            code: "file.too_deep".to_owned(),
            file: None,
            line: None,
            path: path.to_owned(),
            message: format!(
                "tables are nested more than {DEEPEST} deep: does one contain itself?"
            ),
            did_you_mean: None,
        };
        return Err(raise(value.py(), &Error::Faults(vec![fault])));
    }
    let data = if let Ok(flag) = value.cast::<PyBool>() {
        Data::Flag(flag.is_true())
    } else if let Ok(text) = value.cast::<PyString>() {
        Data::Text(text.to_str()?.to_owned())
    } else if value.is_none() {
        Data::Null
    } else if value.is_instance_of::<PyInt>() {
        match value.extract() {
            Ok(whole) => Data::Whole(whole),
            Err(_) => Data::Number(number(value, path)?),
        }
    } else if let Ok(exact) = value.cast::<PyFloat>() {
        Data::Number(exact.value())
    } else if value.cast::<PyMapping>().is_ok() {
        let mut entries = Vec::new();
        for (key, item) in pairs(value, path)? {
            let key: String = key
                .extract()
                .map_err(|_| wrong_type(&format!("a key of {path}"), &key, "a text"))?;
            let node = node(&item, &format!("{path}.{key}"), depth - 1)?;
            entries.push(Entry { key, node });
        }
        Data::Table(entries)
    } else if value.is_instance_of::<PyList>() || value.is_instance_of::<PyTuple>() {
        let mut items = Vec::new();
        for item in value.try_iter()? {
            items.push(node(&item?, path, depth - 1)?);
        }
        Data::List(items)
    } else if let Some(iso) = value.getattr_opt("isoformat")? {
        Data::Date(iso.call0()?.extract()?)
    } else if let Some(items) = value.getattr_opt("tolist")? {
        // numpy arrays and numbers become lists and numbers of Python.
        return node(&items.call0()?, path, depth - 1);
    } else {
        Data::Number(number(value, path)?)
    };
    Ok(Node::new(data))
}

fn python_value<'py>(py: Python<'py>, value: &Value) -> PyResult<Bound<'py, PyAny>> {
    Ok(match value {
        Value::Null => py.None().into_bound(py),
        Value::Bool(flag) => PyBool::new(py, *flag).to_owned().into_any(),
        Value::Number(number) => match number.as_i64() {
            Some(whole) => whole.into_pyobject(py)?.into_any(),
            None => PyFloat::new(py, number.as_f64().unwrap_or(f64::NAN)).into_any(),
        },
        Value::String(text) => PyString::new(py, text).into_any(),
        Value::Array(items) => {
            let items: PyResult<Vec<_>> = items.iter().map(|item| python_value(py, item)).collect();
            PyList::new(py, items?)?.into_any()
        }
        Value::Object(table) => {
            let dict = PyDict::new(py);
            for (key, item) in table {
                dict.set_item(key, python_value(py, item)?)?;
            }
            dict.into_any()
        }
    })
}
