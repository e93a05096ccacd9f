//! What every class that can be written down has in common: JSON, files,
//! pickles, and replacing single arguments.

use std::path::{Path, PathBuf};

use fluxloom_core::Document;
use fluxloom_plan::Error;
use fluxloom_plan::files::{load_document, save_document};
use pyo3::exceptions::PyTypeError;
use pyo3::prelude::*;
use pyo3::types::{PyDict, PyList};

use crate::enter;
use crate::errors::raise;

/// The JSON text of a value.
pub fn to_json<T: Document>(py: Python<'_>, value: &T) -> PyResult<String> {
    value.to_json().map_err(|fault| raise(py, &Error::Faults(vec![*fault])))
}

/// A value from its JSON text; what is wrong with the text becomes an `InputError`.
pub fn from_json<T: Document + Send>(py: Python<'_>, text: &str) -> PyResult<T> {
    enter::short(py, || T::from_json(text).map_err(|fault| Error::Faults(vec![*fault])))
}

/// Writes a value to a file, which appears whole or not at all.
pub fn save<T: Document + Sync>(py: Python<'_>, value: &T, path: &Path) -> PyResult<()> {
    enter::short(py, || save_document(value, path))
}

/// Reads a value from a file.
pub fn load<T: Document + Send>(py: Python<'_>, path: &Path) -> PyResult<T> {
    enter::short(py, || load_document(path))
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
            /// The object as a JSON text.
            fn to_json(&self, py: Python<'_>) -> PyResult<String> {
                $crate::documents::to_json(py, &self.inner)
            }

            /// The object of a JSON text; numbers come back bit for bit.
            #[staticmethod]
            fn from_json(py: Python<'_>, text: &str) -> PyResult<Self> {
                Ok(Self { inner: $crate::documents::from_json(py, text)? })
            }

            /// Writes the JSON text to a file, which appears whole or not at all.
            fn save(&self, py: Python<'_>, path: &Bound<'_, PyAny>) -> PyResult<()> {
                $crate::documents::save(py, &self.inner, &$crate::documents::path(path)?)
            }

            /// Reads the object from a file that ``save`` wrote.
            #[staticmethod]
            fn load(py: Python<'_>, path: &Bound<'_, PyAny>) -> PyResult<Self> {
                Ok(Self { inner: $crate::documents::load(py, &$crate::documents::path(path)?)? })
            }

            fn __reduce__<'py>(slf: &Bound<'py, Self>) -> PyResult<(Bound<'py, PyAny>, (String,))> {
                let text = $crate::documents::to_json(slf.py(), &slf.get().inner)?;
                Ok((slf.get_type().getattr("from_json")?, (text,)))
            }
        }
    };
}
pub(crate) use document;
