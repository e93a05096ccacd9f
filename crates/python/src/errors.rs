//! Errors of the Rust crates as Python exceptions.
//!
//! The exception classes have several bases, so they are defined in Python
//! (`fluxloom.exceptions`) and looked up once.

use std::io::ErrorKind;

use fluxloom_core::error::{Detail, Kind};
use fluxloom_core::fault::Fault;
use fluxloom_plan::Error;
use pyo3::exceptions::{PyKeyboardInterrupt, PyOSError, PyTypeError};
use pyo3::prelude::*;
use pyo3::sync::PyOnceLock;
use pyo3::types::{PyDict, PyTuple};

static INPUT: PyOnceLock<Py<PyAny>> = PyOnceLock::new();
static INFEASIBLE: PyOnceLock<Py<PyAny>> = PyOnceLock::new();
static NUMERICAL: PyOnceLock<Py<PyAny>> = PyOnceLock::new();
static FAULT: PyOnceLock<Py<PyAny>> = PyOnceLock::new();

fn class<'py>(
    py: Python<'py>,
    cell: &'static PyOnceLock<Py<PyAny>>,
    name: &str,
) -> PyResult<&'py Bound<'py, PyAny>> {
    let found = cell.get_or_try_init(py, || {
        Ok::<_, PyErr>(py.import("fluxloom.exceptions")?.getattr(name)?.unbind())
    })?;
    Ok(found.bind(py))
}

/// The Python exception of an error.
pub fn raise(py: Python<'_>, error: &Error) -> PyErr {
    build(py, error).unwrap_or_else(|problem| problem)
}

/// The Python exception of an error of the physics crate.
pub fn raise_core(py: Python<'_>, error: fluxloom_core::Error) -> PyErr {
    raise(py, &Error::Core(error))
}

fn build(py: Python<'_>, error: &Error) -> PyResult<PyErr> {
    let (cell, name) = match error.kind() {
        Kind::Input => (&INPUT, "InputError"),
        Kind::Infeasible => (&INFEASIBLE, "InfeasibleError"),
        Kind::Numerical => (&NUMERICAL, "NumericalError"),
        Kind::Cancelled => return Ok(PyKeyboardInterrupt::new_err("stopped")),
        Kind::System => return Ok(system(error)),
    };
    let details = PyDict::new(py);
    for (name, detail) in error.details() {
        match detail {
            Detail::Number(value) => details.set_item(name, value)?,
            Detail::Text(text) => details.set_item(name, text)?,
        }
    }
    let faults =
        error.faults().iter().map(|fault| python_fault(py, fault)).collect::<PyResult<Vec<_>>>()?;
    let faults = PyTuple::new(py, faults)?;
    let message = error.to_string();
    let exception = class(py, cell, name)?.call1((message, error.code(), details, faults))?;
    Ok(PyErr::from_value(exception))
}

fn python_fault<'py>(py: Python<'py>, fault: &Fault) -> PyResult<Bound<'py, PyAny>> {
    let Fault { code, file, line, path, message, did_you_mean } = fault;
    class(py, &FAULT, "Fault")?.call1((
        code,
        message,
        file.as_deref(),
        *line,
        path,
        did_you_mean.as_deref(),
    ))
}

/// What the operating system said, as the subclass of `OSError` that fits, with the file's name.
fn system(error: &Error) -> PyErr {
    let Error::System { path, source } = error else {
        return PyOSError::new_err(error.to_string());
    };
    let name = path.display().to_string();
    let text = source.to_string();
    let text = text.split(" (os error").next().unwrap_or_default().to_owned();
    // Python picks the subclass of OSError by the number.
    match source.raw_os_error().or_else(|| number_of(source.kind())) {
        Some(number) => PyOSError::new_err((number, text, name)),
        None => PyOSError::new_err(format!("{name}: {text}")),
    }
}

/// The error number of a kind, where a library has wrapped the system's own
/// error (POSIX numbers; Windows' C library has the same).
fn number_of(kind: ErrorKind) -> Option<i32> {
    match kind {
        ErrorKind::NotFound => Some(2),
        ErrorKind::PermissionDenied => Some(13),
        ErrorKind::AlreadyExists => Some(17),
        ErrorKind::NotADirectory => Some(20),
        ErrorKind::IsADirectory => Some(21),
        ErrorKind::StorageFull => Some(28),
        ErrorKind::ReadOnlyFilesystem => Some(30),
        _ => None,
    }
}

/// The error of an argument of the wrong type: what it is and what is wanted.
pub fn wrong_type(field: &str, found: &Bound<'_, PyAny>, wanted: &str) -> PyErr {
    let kind = found.get_type().name().map_or_else(|_| "?".to_owned(), |name| name.to_string());
    PyTypeError::new_err(format!("{field} must be {wanted}, not {kind}"))
}
