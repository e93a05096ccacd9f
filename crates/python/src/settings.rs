//! Settings of an apparatus between Python's values and trees of ours.

use fluxloom_core::fault::Fault;
use fluxloom_plan::Error;
use fluxloom_plan::files::{Data, Entry, Node};
use pyo3::prelude::*;
use pyo3::types::{PyBool, PyDict, PyFloat, PyInt, PyList, PyMapping, PyString, PyTuple};
use serde_json::Value;

use crate::convert::{number, pairs};
use crate::errors::{raise, wrong_type};

/// No apparatus nests deeper than this; it stops a dict that contains itself.
pub const DEEPEST: usize = 16;

/// A Python value as a node of a settings tree. NaN and infinities are kept, so
/// that they are reported with their place among all other faults.
pub fn node(value: &Bound<'_, PyAny>, path: &str, depth: usize) -> PyResult<Node> {
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

/// A setting as a value of Python.
pub fn python_value<'py>(py: Python<'py>, value: &Value) -> PyResult<Bound<'py, PyAny>> {
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
