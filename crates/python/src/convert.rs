//! Python values in and out: numbers, counts, fluxes, vectors, arrays.
//!
//! True is not a number; 60.0 is a count and 60.5 is not; a text is never read
//! as a number. Arrays come in as anything `numpy.asarray` takes and leave
//! read-only.

use fluxloom_core::control::allow_numbers;
use fluxloom_core::limits::{self, Limit};
use fluxloom_core::rational::{Flux, Fraction};
use numpy::{IntoPyArray, PyArrayDyn, PyArrayMethods, PyReadonlyArrayDyn, ndarray::ArrayD};
use pyo3::exceptions::PyTypeError;
use pyo3::prelude::*;
use pyo3::types::{PyBool, PyBytes, PyFloat, PyInt, PyMapping, PyString, PyTuple};

use crate::errors::{raise_core, wrong_type};

/// A real number: a Python or numpy number, a 0-d array, a Fraction.
pub fn number(value: &Bound<'_, PyAny>, field: &str) -> PyResult<f64> {
    if let Ok(exact) = value.cast::<PyFloat>() {
        return Ok(exact.value());
    }
    let is_real = match dtype_kind(value)? {
        Some(kind) => REAL_KINDS.contains(&kind.as_str()),
        None => !value.is_instance_of::<PyBool>() && !value.is_instance_of::<PyString>(),
    };
    if !is_real || value.is_none() {
        return Err(wrong_type(field, value, "a number"));
    }
    if value.is_instance_of::<PyInt>() {
        // Too large for a double is infinite here, and refused by every limit.
        let infinite = if value.lt(0)? { f64::NEG_INFINITY } else { f64::INFINITY };
        return Ok(value.extract().unwrap_or(infinite));
    }
    value.extract().map_err(|_| wrong_type(field, value, "a number"))
}

/// Kinds of numpy's numbers that are real: whole, unsigned, floating.
const REAL_KINDS: [&str; 3] = ["i", "u", "f"];

/// The letter for the kind of numpy's numbers and arrays; none for anything else.
pub fn dtype_kind(value: &Bound<'_, PyAny>) -> PyResult<Option<String>> {
    let Some(dtype) = value.getattr_opt("dtype")? else { return Ok(None) };
    match dtype.getattr_opt("kind")? {
        Some(kind) => Ok(kind.extract().ok()),
        None => Ok(None),
    }
}

/// Python's and numpy's truth values.
fn is_truth(value: &Bound<'_, PyAny>) -> PyResult<bool> {
    Ok(value.is_instance_of::<PyBool>() || dtype_kind(value)?.as_deref() == Some("b"))
}

/// A count within a limit.
pub fn count(value: &Bound<'_, PyAny>, limit: &Limit, field: &str) -> PyResult<i64> {
    let found = number(value, field).map_err(|_| wrong_type(field, value, "a whole number"))?;
    limit.check_count(found, field).map_err(|error| raise_core(value.py(), error))
}

/// A count within a limit, as an index or length.
pub fn size(value: &Bound<'_, PyAny>, limit: &Limit, field: &str) -> PyResult<usize> {
    let found = count(value, limit, field)?;
    usize::try_from(found).map_err(|_| wrong_type(field, value, "a count"))
}

/// A count within a limit, as a `u32`.
pub fn small_count(value: &Bound<'_, PyAny>, limit: &Limit, field: &str) -> PyResult<u32> {
    let found = count(value, limit, field)?;
    u32::try_from(found).map_err(|_| wrong_type(field, value, "a count"))
}

/// A flux: `"3/8"`, `(3, 8)`, a `Fraction` or a number.
pub fn flux(value: &Bound<'_, PyAny>, field: &str) -> PyResult<Flux> {
    let py = value.py();
    let wanted = "a number, a text such as \"3/8\", a pair (3, 8) or a Fraction";
    let out_of_range = |part: f64, limit: Limit| {
        limit.check_count(part, limit.field).map_err(|error| raise_core(py, error))
    };
    let fraction = |above: &Bound<'_, PyAny>, below: &Bound<'_, PyAny>| -> PyResult<Flux> {
        let parts = (number(above, field)?, number(below, field)?);
        let whole = Limit { field: "numerator", ..limits::FLUX };
        let above = out_of_range(parts.0, Limit { low: -9e15, high: 9e15, ..whole })?;
        // Zero is let through to the fraction itself, which has a better word for it.
        let below = if parts.1 == 0.0 { 0 } else { out_of_range(parts.1, limits::DENOMINATOR)? };
        Fraction::new(above, below).map(Flux::Fraction).map_err(|error| raise_core(py, error))
    };
    if let Ok(text) = value.cast::<PyString>() {
        return text.to_str()?.parse().map_err(|error| raise_core(py, error));
    }
    if let Ok(pair) = value.cast::<PyTuple>() {
        return match (pair.len(), pair.get_item(0), pair.get_item(1)) {
            (2, Ok(above), Ok(below)) => fraction(&above, &below),
            _ => Err(wrong_type(field, value, wanted)),
        };
    }
    if !value.is_instance_of::<PyFloat>()
        && let (Some(above), Some(below)) =
            (value.getattr_opt("numerator")?, value.getattr_opt("denominator")?)
        && !is_truth(value)?
        && !above.is_callable()
    {
        return fraction(&above, &below);
    }
    let found = number(value, field).map_err(|_| wrong_type(field, value, wanted))?;
    Flux::number(found).map_err(|error| raise_core(py, error))
}

/// A flux as Python has it: a `fractions.Fraction` or a float.
pub fn python_flux(py: Python<'_>, flux: Flux) -> PyResult<Bound<'_, PyAny>> {
    match flux {
        Flux::Fraction(fraction) => python_fraction(py, fraction),
        Flux::Number(value) => Ok(PyFloat::new(py, value).into_any()),
    }
}

/// A `fractions.Fraction`.
pub fn python_fraction(py: Python<'_>, fraction: Fraction) -> PyResult<Bound<'_, PyAny>> {
    py.import("fractions")?
        .getattr("Fraction")?
        .call1((fraction.numerator(), fraction.denominator()))
}

/// The items of a sequence; a text is none, and bytes are no numbers.
pub fn items<'py>(
    value: &Bound<'py, PyAny>,
    field: &str,
    wanted: &str,
) -> PyResult<Vec<Bound<'py, PyAny>>> {
    if value.is_instance_of::<PyString>() || value.is_instance_of::<PyBytes>() {
        return Err(wrong_type(field, value, wanted));
    }
    value.try_iter().and_then(Iterator::collect).map_err(|_| wrong_type(field, value, wanted))
}

/// Three numbers.
pub fn vector(value: &Bound<'_, PyAny>, field: &str) -> PyResult<[f64; 3]> {
    match items(value, field, "three numbers")?.as_slice() {
        [x, y, z] => Ok([number(x, field)?, number(y, field)?, number(z, field)?]),
        other => {
            Err(PyTypeError::new_err(format!("{field} must be three numbers, not {}", other.len())))
        }
    }
}

/// A pair of numbers, such as a range.
pub fn pair(value: &Bound<'_, PyAny>, field: &str) -> PyResult<(f64, f64)> {
    let wanted = "two numbers (low, high)";
    match items(value, field, wanted)?.as_slice() {
        [low, high] => Ok((number(low, field)?, number(high, field)?)),
        _ => Err(wrong_type(field, value, wanted)),
    }
}

/// The entries of a dict or anything like it.
pub fn pairs<'py>(
    value: &Bound<'py, PyAny>,
    field: &str,
) -> PyResult<Vec<(Bound<'py, PyAny>, Bound<'py, PyAny>)>> {
    let mapping = value.cast::<PyMapping>().map_err(|_| wrong_type(field, value, "a dict"))?;
    mapping.items()?.iter().map(|item| item.extract()).collect()
}

/// Numbers of any shape.
pub struct Numbers {
    /// Empty for a single number.
    pub shape: Vec<usize>,
    /// In C order.
    pub values: Vec<f64>,
}

impl Numbers {
    /// Checks every number against a limit; an error names the first bad one by its place.
    pub fn check(&self, py: Python<'_>, limit: &Limit, field: &str) -> PyResult<()> {
        let Some(place) = self.values.iter().position(|value| !limit.contains(*value)) else {
            return Ok(());
        };
        let mut index = Vec::with_capacity(self.shape.len());
        let mut rest = place;
        for length in self.shape.iter().rev() {
            index.push((rest % length).to_string());
            rest /= length;
        }
        index.reverse();
        let name = if index.is_empty() {
            field.to_owned()
        } else {
            format!("{field}[{}]", index.join(", "))
        };
        let value = self.values.get(place).copied().unwrap_or_default();
        limit.check_as(value, &name).map(|_| ()).map_err(|error| raise_core(py, error))
    }
}

/// What one number of an argument takes: itself, its fellows and its answer.
const BYTES_PER_NUMBER: usize = 40;

/// A single number or anything that `numpy.asarray` makes a real array of.
pub fn numbers(value: &Bound<'_, PyAny>, field: &str) -> PyResult<Numbers> {
    if value.is_instance_of::<PyFloat>() || value.is_instance_of::<PyInt>() {
        return Ok(Numbers { shape: Vec::new(), values: vec![number(value, field)?] });
    }
    let py = value.py();
    let wanted = "a number or an array of numbers";
    let numpy = py.import("numpy")?;
    let array =
        numpy.call_method1("asarray", (value,)).map_err(|_| wrong_type(field, value, wanted))?;
    let kind = dtype_kind(&array)?.unwrap_or_default();
    if kind == "O" {
        // Fractions and the like: each by itself, so that None is not read as NaN.
        let shape = array.getattr("shape")?.extract()?;
        let items: Vec<Bound<'_, PyAny>> =
            array.call_method0("ravel")?.call_method0("tolist")?.extract()?;
        let values = items
            .iter()
            .map(|item| number(item, field).map_err(|_| wrong_type(field, item, wanted)))
            .collect::<PyResult<_>>()?;
        return Ok(Numbers { shape, values });
    }
    // Truth values, texts, complex numbers and dates are not silently made real.
    if !REAL_KINDS.contains(&kind.as_str()) {
        return Err(wrong_type(field, value, wanted));
    }
    // Before anything is copied: a broadcast view may stand for far more than there is.
    let size: usize = array.getattr("size")?.extract()?;
    allow_numbers(&[size], BYTES_PER_NUMBER).map_err(|error| raise_core(py, error))?;
    let real = numpy
        .call_method1("asarray", (array, "float64"))
        .map_err(|_| wrong_type(field, value, wanted))?;
    let view: PyReadonlyArrayDyn<'_, f64> = real.extract()?;
    let view = view.as_array();
    Ok(Numbers { shape: view.shape().to_vec(), values: view.iter().copied().collect() })
}

/// One-dimensional numbers.
pub fn list(value: &Bound<'_, PyAny>, field: &str) -> PyResult<Vec<f64>> {
    let found = numbers(value, field)?;
    if found.shape.len() > 1 {
        return Err(PyTypeError::new_err(format!(
            "{field} must be a number or a one-dimensional array, not one of {} dimensions",
            found.shape.len()
        )));
    }
    Ok(found.values)
}

/// Values of a shape as a float, for no shape, or as a read-only array.
pub fn shaped<'py>(
    py: Python<'py>,
    shape: &[usize],
    values: Vec<f64>,
) -> PyResult<Bound<'py, PyAny>> {
    if let (true, Some(value)) = (shape.is_empty(), values.first()) {
        return Ok(PyFloat::new(py, *value).into_any());
    }
    let array = ArrayD::from_shape_vec(shape.to_vec(), values)
        .map_err(|error| PyTypeError::new_err(error.to_string()))?;
    Ok(read_only(array.into_pyarray(py)).into_any())
}

/// The same array, no longer writable: results do not change under their owner's hands.
pub fn read_only(array: Bound<'_, PyArrayDyn<f64>>) -> Bound<'_, PyArrayDyn<f64>> {
    drop(array.readwrite().make_nonwriteable());
    array
}
