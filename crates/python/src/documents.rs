//! What every class that can be written down has in common: JSON, files,
//! pickles, and replacing single arguments.

use std::path::{Path, PathBuf};

use fluxloom_core::fault::Fault;
use fluxloom_plan::Error;
use fluxloom_plan::files::{read_text, write_atomically};
use pyo3::exceptions::PyTypeError;
use pyo3::prelude::*;
use pyo3::types::{PyDict, PyList};
use serde::Serialize;
use serde::de::DeserializeOwned;

use crate::errors::raise;

/// The JSON text of a value.
pub fn to_json<T: Serialize>(value: &T) -> PyResult<String> {
    serde_json::to_string(value).map_err(|error| PyTypeError::new_err(error.to_string()))
}

/// A value from its JSON text; what is wrong with the text becomes an `InputError`.
pub fn from_json<T: DeserializeOwned>(py: Python<'_>, text: &str) -> PyResult<T> {
    read(text, None).map_err(|error| raise(py, &error))
}

fn read<T: DeserializeOwned>(text: &str, file: Option<&Path>) -> Result<T, Error> {
    serde_json::from_str(text).map_err(|error| {
        Error::Faults(vec![Fault {
            code: "file.not_valid".to_owned(),
            file: file.map(fluxloom_plan::files::name_of),
            line: Some(error.line()),
            path: String::new(),
            message: format!("this document cannot be read: {error}"),
            did_you_mean: None,
        }])
    })
}

/// Writes a value to a file, which appears whole or not at all.
pub fn save<T: Serialize>(py: Python<'_>, value: &T, path: &Path) -> PyResult<()> {
    let text = to_json(value)? + "\n";
    py.detach(|| write_atomically(path, &text)).map_err(|error| raise(py, &error))
}

/// Reads a value from a file.
pub fn load<T: DeserializeOwned + Send>(py: Python<'_>, path: &Path) -> PyResult<T> {
    py.detach(|| read(&read_text(path)?, Some(path))).map_err(|error| raise(py, &error))
}

/// A file's path from a text or anything with `__fspath__`.
pub fn path(value: &Bound<'_, PyAny>) -> PyResult<PathBuf> {
    value.extract().map_err(|_| crate::errors::wrong_type("path", value, "a file name or a path"))
}

/// The object built again with some of its arguments changed.
pub fn replace<'py>(
    object: &Bound<'py, PyAny>,
    constructor: &Bound<'py, PyAny>,
    names: &[&str],
    changes: Option<&Bound<'py, PyDict>>,
) -> PyResult<Bound<'py, PyAny>> {
    let arguments = PyDict::new(object.py());
    for name in names {
        arguments.set_item(name, object.getattr(*name)?)?;
    }
    if let Some(changes) = changes {
        for (name, value) in changes {
            if !arguments.contains(&name)? {
                let known = PyList::new(object.py(), names)?;
                return Err(PyTypeError::new_err(format!(
                    "replace() knows no argument {name}; it has {known}"
                )));
            }
            arguments.set_item(name, value)?;
        }
    }
    constructor.call((), Some(&arguments))
}

/// Adds `to_json`, `from_json`, `save`, `load` and pickling to a class whose
/// `inner` is serialisable.
macro_rules! document {
    ($class:ident) => {
        #[pymethods]
        impl $class {
            fn to_json(&self) -> PyResult<String> {
                $crate::documents::to_json(&self.inner)
            }

            #[staticmethod]
            fn from_json(py: Python<'_>, text: &str) -> PyResult<Self> {
                Ok(Self { inner: $crate::documents::from_json(py, text)? })
            }

            fn save(&self, py: Python<'_>, path: &Bound<'_, PyAny>) -> PyResult<()> {
                $crate::documents::save(py, &self.inner, &$crate::documents::path(path)?)
            }

            #[staticmethod]
            fn load(py: Python<'_>, path: &Bound<'_, PyAny>) -> PyResult<Self> {
                Ok(Self { inner: $crate::documents::load(py, &$crate::documents::path(path)?)? })
            }

            fn __reduce__<'py>(slf: &Bound<'py, Self>) -> PyResult<(Bound<'py, PyAny>, (String,))> {
                let text = $crate::documents::to_json(&slf.get().inner)?;
                Ok((slf.get_type().getattr("from_json")?, (text,)))
            }
        }
    };
}
pub(crate) use document;
