//! States, magnetic fields and beams as arguments; warnings about data.

use std::ffi::CString;

use fluxloom_core::atom::State;
use fluxloom_core::light::{Beam, Bias};
use pyo3::exceptions::PyTypeError;
use pyo3::prelude::*;
use pyo3::sync::PyOnceLock;
use pyo3::types::PyString;

use crate::atom::PyAtom;
use crate::beam::PyBeam;
use crate::convert::{items, number, vector};
use crate::errors::{raise_core, wrong_type};
use crate::raman::PyRamanPair;

static STATE: PyOnceLock<Py<PyAny>> = PyOnceLock::new();
static UNCERTAIN: PyOnceLock<Py<PyAny>> = PyOnceLock::new();
static WARNING: PyOnceLock<Py<PyAny>> = PyOnceLock::new();

fn class<'py>(
    py: Python<'py>,
    cell: &'static PyOnceLock<Py<PyAny>>,
    (module, name): (&str, &str),
) -> PyResult<&'py Bound<'py, PyAny>> {
    let found =
        cell.get_or_try_init(py, || Ok::<_, PyErr>(py.import(module)?.getattr(name)?.unbind()))?;
    Ok(found.bind(py))
}

/// An atom, or the error that says how to get one.
pub fn atom<'a>(value: &'a Bound<'_, PyAny>) -> PyResult<&'a PyAtom> {
    let found = value.cast::<PyAtom>();
    Ok(found.map_err(|_| wrong_type("atom", value, "an Atom such as fl.Atom(\"40K\")"))?.get())
}

/// True or False; not given is False.
pub fn flag(value: Option<&Bound<'_, PyAny>>, field: &str) -> PyResult<bool> {
    value.map_or(Ok(false), |value| {
        value.extract().map_err(|_| wrong_type(field, value, "True or False"))
    })
}

/// Wavelengths of beams.
pub fn wavelengths(beams: &[Beam]) -> impl Iterator<Item = f64> {
    beams.iter().map(Beam::wavelength_nm)
}

/// A state: `"9/2,-7/2"` or a pair of numbers.
pub fn state(value: &Bound<'_, PyAny>, field: &str) -> PyResult<State> {
    const WANTED: &str = "a state such as \"9/2,-7/2\" or (4.5, -3.5)";
    let py = value.py();
    if let Ok(text) = value.cast::<PyString>() {
        return text.to_str()?.parse().map_err(|error| raise_core(py, error));
    }
    match items(value, field, WANTED)?.as_slice() {
        [f, m] => pair((f, m), field),
        _ => Err(wrong_type(field, value, WANTED)),
    }
}

/// A state from F and m given apart.
pub fn pair((f, m): (&Bound<'_, PyAny>, &Bound<'_, PyAny>), field: &str) -> PyResult<State> {
    let named = |name: &str| if field.is_empty() { name.to_owned() } else { field.to_owned() };
    let (f_value, m_value) = (number(f, &named("f"))?, number(m, &named("m"))?);
    State::from_pair((f_value, m_value)).map_err(|error| raise_core(f.py(), error))
}

/// A `fluxloom.State`.
pub fn python_state(py: Python<'_>, state: State) -> PyResult<Bound<'_, PyAny>> {
    class(py, &STATE, ("fluxloom.results", "State"))?.call1((state.f(), state.m()))
}

/// A bias field; what is not given is no field, along z.
pub fn bias(
    field_gauss: Option<&Bound<'_, PyAny>>,
    field_direction: Option<&Bound<'_, PyAny>>,
) -> PyResult<Bias> {
    let mut bias = Bias::default();
    if let Some(value) = field_gauss {
        bias.field_gauss = number(value, "field_gauss")?;
    }
    if let Some(value) = field_direction {
        bias.field_direction = vector(value, "field_direction")?;
    }
    Ok(bias)
}

/// One beam, those of a pair, or several.
pub fn beams(value: &Bound<'_, PyAny>) -> PyResult<Vec<Beam>> {
    if let Ok(one) = value.cast::<PyBeam>() {
        return Ok(vec![one.get().inner]);
    }
    if let Ok(pair) = value.cast::<PyRamanPair>() {
        let beams = pair.get().inner.beams().map_err(|error| raise_core(value.py(), error))?;
        return Ok(beams.to_vec());
    }
    let wanted = "a Beam, a RamanPair with beams, or a list of Beam";
    let mut beams = Vec::new();
    for item in items(value, "beams", wanted)? {
        let beam =
            item.cast::<PyBeam>().map_err(|_| wrong_type("each of beams", &item, "a Beam"))?;
        beams.push(beam.get().inner);
    }
    if beams.is_empty() {
        return Err(PyTypeError::new_err(format!("beams must be {wanted}, not empty")));
    }
    Ok(beams)
}

/// A `fluxloom.Uncertain`.
pub fn uncertain<'py>(
    py: Python<'py>,
    value: Bound<'py, PyAny>,
    standard_error: Bound<'py, PyAny>,
    unconfirmed: Vec<String>,
) -> PyResult<Bound<'py, PyAny>> {
    let names = pyo3::types::PyTuple::new(py, unconfirmed)?;
    class(py, &UNCERTAIN, ("fluxloom.results", "Uncertain"))?.call1((value, standard_error, names))
}

/// Warns that a result rests on numbers that no source confirms.
pub fn warn_unconfirmed(py: Python<'_>, atom: &PyAtom, names: &[String]) -> PyResult<()> {
    let mut about = Vec::new();
    if !names.is_empty() {
        about.push(format!("numbers that no source confirms ({})", names.join(", ")));
    }
    warn(py, atom, about)
}

/// As [`warn_unconfirmed`] for light of some wavelengths: a missing residual
/// polarisability counts, and lines that the table does not have.
pub fn warn_light(
    py: Python<'_>,
    atom: &PyAtom,
    wavelengths_nm: impl IntoIterator<Item = f64>,
) -> PyResult<()> {
    let names = atom.inner.unconfirmed_in_light();
    let mut about = Vec::new();
    if !names.is_empty() {
        about.push(format!("numbers that no source confirms ({})", names.join(", ")));
    }
    if !atom.inner.has_residual() {
        about.push("its listed lines alone, without the polarisability of all others".to_owned());
    }
    let bluest = wavelengths_nm.into_iter().fold(f64::INFINITY, f64::min);
    if let (true, Some(nm)) =
        (atom.inner.is_beyond_lines(bluest), atom.inner.next_unlisted_line_nm())
    {
        about.push(format!(
            "a table that ends before its next line at {nm} nm, to which light at {bluest:.1} nm \
             is near or beyond"
        ));
    }
    warn(py, atom, about)
}

fn warn(py: Python<'_>, atom: &PyAtom, about: Vec<String>) -> PyResult<()> {
    if about.is_empty() {
        return Ok(());
    }
    let text = format!(
        "{}: this rests on {}; see sources(), or give your own with with_data()",
        atom.inner.name(),
        about.join(" and on ")
    );
    let category = class(py, &WARNING, ("fluxloom.exceptions", "FluxloomWarning"))?;
    // Names of the table hold no zero byte.
    let text = CString::new(text).unwrap_or_default();
    PyErr::warn(py, category, &text, 1)
}
