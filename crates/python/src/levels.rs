//! Levels in a magnetic field, and couplings by an oscillating one.

use fluxloom_core::atom::GroundLevels;
use fluxloom_core::light::{self, Radio};
use numpy::Complex64;
use pyo3::prelude::*;
use pyo3::types::PyTuple;

use crate::atom::{PyAtom, PySourceTable};
use crate::convert::{number, pair as range, shaped, vector};
use crate::documents::document;
use crate::enter;
use crate::state::{atom, bias, pair, python_state, state, warn_unconfirmed};

/// The levels of an atom's ground manifold at one magnetic field.
///
/// Energies over h count from the centre of gravity of the hyperfine levels and
/// are right to their last bit. States are those of the field; each carries the
/// label of the zero-field state that it goes over into.
///
/// Examples
/// --------
/// >>> import fluxloom as fl
/// >>> levels = fl.Atom("133Cs").ground_levels(0.0)
/// >>> levels.splitting_hz((3, 0), (4, 0))
/// 9192631770.0
#[pyclass(frozen, eq, module = "fluxloom", name = "GroundLevels")]
#[derive(PartialEq)]
pub struct PyGroundLevels {
    pub inner: GroundLevels,
}

document!(PyGroundLevels);

#[pymethods]
impl PyGroundLevels {
    /// The atom.
    #[getter]
    fn atom(&self) -> PyAtom {
        PyAtom { inner: self.inner.atom().clone() }
    }

    /// The numbers behind the result.
    #[getter]
    fn sources(&self) -> PySourceTable {
        self.atom().sources()
    }

    /// The field.
    #[getter]
    fn field_gauss(&self) -> f64 {
        self.inner.field_gauss()
    }

    /// The states: largest F first, m ascending.
    #[getter]
    fn states<'py>(&self, py: Python<'py>) -> PyResult<Bound<'py, PyTuple>> {
        let states: PyResult<Vec<_>> =
            self.inner.states().iter().map(|state| python_state(py, *state)).collect();
        PyTuple::new(py, states?)
    }

    /// F of each state, ``[state]``.
    #[getter]
    fn f<'py>(&self, py: Python<'py>) -> PyResult<Bound<'py, PyAny>> {
        self.column(py, self.inner.states().iter().map(|state| state.f()).collect())
    }

    /// m of each state, ``[state]``.
    #[getter]
    fn m<'py>(&self, py: Python<'py>) -> PyResult<Bound<'py, PyAny>> {
        self.column(py, self.inner.states().iter().map(|state| state.m()).collect())
    }

    /// Energies over h, ``[state]``.
    #[getter]
    fn energies_hz<'py>(&self, py: Python<'py>) -> PyResult<Bound<'py, PyAny>> {
        self.column(py, self.inner.energies_hz())
    }

    /// Energy over h of the state F, m.
    fn energy_hz(&self, f: &Bound<'_, PyAny>, m: &Bound<'_, PyAny>) -> PyResult<f64> {
        let state = pair((f, m), "")?;
        enter::short(f.py(), || self.inner.energy_hz(state))
    }

    /// E(b) - E(a) over h: positive if b lies higher.
    fn splitting_hz(&self, a: &Bound<'_, PyAny>, b: &Bound<'_, PyAny>) -> PyResult<f64> {
        let (one, two) = (state(a, "a")?, state(b, "b")?);
        enter::short(a.py(), || self.inner.splitting_hz(one, two))
    }

    /// Slope of the energy, dE/dB over h: positive if the state rises with the
    /// field (its magnetic moment along the field is minus this).
    fn moment_hz_per_gauss(&self, f: &Bound<'_, PyAny>, m: &Bound<'_, PyAny>) -> PyResult<f64> {
        let state = pair((f, m), "")?;
        enter::short(f.py(), || self.inner.moment_hz_per_gauss(state))
    }

    /// Second derivative of the energy, d2E/dB2 over h: twice a quadratic shift.
    fn curvature_hz_per_gauss2(&self, f: &Bound<'_, PyAny>, m: &Bound<'_, PyAny>) -> PyResult<f64> {
        let state = pair((f, m), "")?;
        enter::short(f.py(), || self.inner.curvature_hz_per_gauss2(state))
    }

    /// What the state is made of: real amplitudes of the zero-field states in
    /// the order of ``states``, of unit length, positive at its own place.
    fn vector<'py>(
        &self,
        f: &Bound<'py, PyAny>,
        m: &Bound<'py, PyAny>,
    ) -> PyResult<Bound<'py, PyAny>> {
        let state = pair((f, m), "")?;
        self.column(f.py(), enter::short(f.py(), || self.inner.vector(state))?)
    }

    /// The levels as a pandas DataFrame, one row per state.
    fn to_pandas<'py>(slf: &Bound<'py, Self>) -> PyResult<Bound<'py, PyAny>> {
        slf.py().import("fluxloom.tables")?.getattr("levels_to_pandas")?.call1((slf,))
    }

    fn _repr_html_<'py>(slf: &Bound<'py, Self>) -> PyResult<Bound<'py, PyAny>> {
        slf.py().import("fluxloom.tables")?.getattr("levels_html")?.call1((slf,))
    }

    fn __repr__(&self) -> String {
        format!(
            "<GroundLevels of {} at {} G: {} states>",
            self.inner.atom().name(),
            self.inner.field_gauss(),
            self.inner.states().len()
        )
    }
}

impl PyGroundLevels {
    fn column<'py>(&self, py: Python<'py>, values: Vec<f64>) -> PyResult<Bound<'py, PyAny>> {
        shaped(py, &[values.len()], values)
    }
}

#[pymethods]
impl PyAtom {
    /// The levels of the ground manifold at a field of 0 to 2000 G.
    fn ground_levels(&self, field_gauss: &Bound<'_, PyAny>) -> PyResult<PyGroundLevels> {
        let py = field_gauss.py();
        let field_gauss = number(field_gauss, "field_gauss")?;
        let inner = enter::short(py, || self.inner.ground_levels(field_gauss))?;
        warn_unconfirmed(py, self, &self.inner.unconfirmed_in_fields())?;
        Ok(PyGroundLevels { inner })
    }

    /// Fields within a range at which the splitting of two states does not move
    /// to first order: a tuple, ascending, perhaps empty.
    ///
    /// Examples
    /// --------
    /// >>> import fluxloom as fl
    /// >>> rubidium = fl.Atom("87Rb")
    /// >>> [round(b, 4) for b in rubidium.insensitive_fields_gauss((1, -1), (2, 1), range_gauss=(0, 9))]
    /// [3.2289]
    #[pyo3(signature = (a, b, *, range_gauss))]
    fn insensitive_fields_gauss<'py>(
        &self,
        a: &Bound<'py, PyAny>,
        b: &Bound<'py, PyAny>,
        range_gauss: &Bound<'py, PyAny>,
    ) -> PyResult<Bound<'py, PyTuple>> {
        let py = a.py();
        let (one, two) = (state(a, "a")?, state(b, "b")?);
        let limits = range(range_gauss, "range_gauss")?;
        let found = enter::long(py, |_| self.inner.insensitive_fields_gauss(one, two, limits))?;
        warn_unconfirmed(py, self, &self.inner.unconfirmed_in_fields())?;
        PyTuple::new(py, found)
    }
}

/// Complex Rabi frequency of b <- a over 2 pi by an oscillating magnetic field on
/// resonance, in hertz.
///
/// Parameters
/// ----------
/// atom : Atom
/// a, b : state
///     ``(F, m)`` or ``"F,m"``.
/// amplitude_gauss : float
///     Peak amplitude of B1 cos(w t).
/// direction : three floats
///     Direction of B1 in the laboratory.
/// field_gauss : float
///     The bias field, and ``field_direction``.
///
/// Examples
/// --------
/// >>> import fluxloom as fl
/// >>> rubidium = fl.Atom("87Rb")
/// >>> rabi = fl.radio_rabi_hz(rubidium, (1, 0), (2, 0), amplitude_gauss=0.01,
/// ...                         direction=(0, 0, 1), field_gauss=0.0)
/// >>> round(abs(rabi))
/// 14020
#[pyfunction]
#[pyo3(signature = (atom, a, b, *, amplitude_gauss, direction, field_gauss, field_direction=None), text_signature = "(atom, a, b, *, amplitude_gauss, direction, field_gauss, field_direction=(0, 0, 1))")]
pub fn radio_rabi_hz(
    py: Python<'_>,
    atom: &Bound<'_, PyAny>,
    a: &Bound<'_, PyAny>,
    b: &Bound<'_, PyAny>,
    amplitude_gauss: &Bound<'_, PyAny>,
    direction: &Bound<'_, PyAny>,
    field_gauss: &Bound<'_, PyAny>,
    field_direction: Option<&Bound<'_, PyAny>>,
) -> PyResult<Complex64> {
    let atom = self::atom(atom)?;
    let states = (state(a, "a")?, state(b, "b")?);
    let radio = Radio {
        amplitude_gauss: number(amplitude_gauss, "amplitude_gauss")?,
        direction: vector(direction, "direction")?,
    };
    let bias = bias(Some(field_gauss), field_direction)?;
    let rabi = enter::short(py, || light::radio_rabi_hz(&atom.inner, states, &radio, &bias))?;
    warn_unconfirmed(py, atom, &atom.inner.unconfirmed_in_fields())?;
    Ok(rabi)
}
