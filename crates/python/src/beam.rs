//! `Beam`, and the polarisation vectors it takes.

use fluxloom_core::light::polarisation::{self, Helicity};
use fluxloom_core::{Beam, BeamInput, control::go_on, limits};
use numpy::{Complex64, IntoPyArray, PyArrayMethods};
use pyo3::exceptions::PyTypeError;
use pyo3::prelude::*;
use pyo3::types::{PyComplex, PyDict, PyList, PyTuple};

use crate::convert::{Numbers, dtype_kind, items, number, numbers, pair, shaped, vector};
use crate::documents::{self, document};
use crate::enter;
use crate::errors::{raise_core, wrong_type};

/// A Gaussian laser beam.
///
/// Parameters
/// ----------
/// wavelength_nm : float
///     Vacuum wavelength, 100 to 20000 nm.
/// power_mw : float
///     Power of all the light in the beam, 0 to 1e6 mW.
/// waist_um : float or (float, float)
///     1/e^2 intensity radius at the focus, 0.5 to 1e5 um, or the two radii of
///     an ellipse. Two equal radii read as one.
/// direction : three floats
///     Where the light goes; only the direction counts.
/// polarisation : three numbers, real or complex
///     The vector u of the field Re(E u exp(-i w t)), see
///     ``fluxloom.polarisation``. It must lie across the direction to 1e-6; its
///     length does not count.
/// waist_axis : three floats, optional
///     Direction of the first radius, across the beam. Needed only where two
///     different radii are asked for an intensity off the axis.
/// focus_um : three floats
///     Where the focus is.
///
/// Raises
/// ------
/// InputError
///     For a number outside its range, a vector without direction
///     (``geometry.no_direction``), or a polarisation or axis that leans along
///     the beam (``beam.not_transverse``).
///
/// Examples
/// --------
/// >>> import fluxloom as fl
/// >>> z = (0, 0, 1)
/// >>> beam = fl.Beam(
/// ...     wavelength_nm=1064.0,
/// ...     power_mw=100.0,
/// ...     waist_um=100.0,
/// ...     direction=z,
/// ...     polarisation=fl.polarisation.circular(z, +1),
/// ... )
/// >>> round(beam.intensity_w_per_m2())
/// 6366198
/// >>> round(beam.intensity_w_per_m2((100.0, 0.0, 0.0)) / beam.intensity_w_per_m2(), 6)
/// 0.135335
#[pyclass(frozen, eq, module = "fluxloom", name = "Beam")]
#[derive(PartialEq)]
pub struct PyBeam {
    pub inner: Beam,
}

document!(PyBeam);

#[pymethods]
impl PyBeam {
    #[new]
    #[pyo3(signature = (*, wavelength_nm, power_mw, waist_um, direction, polarisation, waist_axis=None, focus_um=None), text_signature = "(*, wavelength_nm, power_mw, waist_um, direction, polarisation, waist_axis=None, focus_um=(0, 0, 0))")]
    fn new(
        py: Python<'_>,
        wavelength_nm: &Bound<'_, PyAny>,
        power_mw: &Bound<'_, PyAny>,
        waist_um: &Bound<'_, PyAny>,
        direction: &Bound<'_, PyAny>,
        polarisation: &Bound<'_, PyAny>,
        waist_axis: Option<&Bound<'_, PyAny>>,
        focus_um: Option<&Bound<'_, PyAny>>,
    ) -> PyResult<Self> {
        let mut input = BeamInput {
            wavelength_nm: number(wavelength_nm, "wavelength_nm")?,
            power_mw: number(power_mw, "power_mw")?,
            waist_um: one_or_two(waist_um, "waist_um")?,
            direction: vector(direction, "direction")?,
            polarisation: complex_vector(polarisation, "polarisation")?,
            waist_axis: waist_axis.map(|value| vector(value, "waist_axis")).transpose()?,
            ..BeamInput::CENTRED
        };
        if let Some(focus_um) = focus_um {
            input.focus_um = vector(focus_um, "focus_um")?;
        }
        Ok(Self { inner: Beam::new(input).map_err(|error| raise_core(py, error))? })
    }

    /// Vacuum wavelength.
    #[getter]
    fn wavelength_nm(&self) -> f64 {
        self.inner.wavelength_nm()
    }

    /// Power of all the light in the beam.
    #[getter]
    fn power_mw(&self) -> f64 {
        self.inner.power_mw()
    }

    /// 1/e^2 intensity radius at the focus, or the two of an ellipse.
    #[getter]
    fn waist_um<'py>(&self, py: Python<'py>) -> PyResult<Bound<'py, PyAny>> {
        let [first, second] = self.inner.waist_um();
        if first == second {
            Ok(first.into_pyobject(py)?.into_any())
        } else {
            Ok((first, second).into_pyobject(py)?.into_any())
        }
    }

    /// Where the light goes, as given.
    #[getter]
    fn direction(&self) -> (f64, f64, f64) {
        self.inner.direction().into()
    }

    /// The polarisation as given, three complex numbers.
    #[getter]
    fn polarisation<'py>(&self, py: Python<'py>) -> PyResult<Bound<'py, PyTuple>> {
        let parts = self.inner.polarisation();
        PyTuple::new(py, parts.map(|part| PyComplex::from_doubles(py, part.re, part.im)))
    }

    /// Direction of the first radius, if it was given.
    #[getter]
    fn waist_axis(&self) -> Option<(f64, f64, f64)> {
        self.inner.waist_axis().map(Into::into)
    }

    /// Where the focus is.
    #[getter]
    fn focus_um(&self) -> (f64, f64, f64) {
        self.inner.focus_um().into()
    }

    /// Intensity at a point, or at points ``[..., 3]``, of the laboratory.
    ///
    /// I = 2 P/(pi w1 w2) exp(-2 x1^2/w1^2 - 2 x2^2/w2^2) with radii
    /// w(z) = w sqrt(1 + (z/z_R)^2), z_R = pi w^2/wavelength, z from the focus.
    ///
    /// Raises
    /// ------
    /// InputError
    ///     ``beam.no_waist_axis`` off the axis of a beam with two different
    ///     radii and no ``waist_axis``.
    #[pyo3(signature = (at_um=None), text_signature = "($self, at_um=(0, 0, 0))")]
    fn intensity_w_per_m2<'py>(
        &self,
        py: Python<'py>,
        at_um: Option<&Bound<'py, PyAny>>,
    ) -> PyResult<Bound<'py, PyAny>> {
        let found = at_um.map_or_else(
            || Ok(Numbers { shape: vec![3], values: vec![0.0; 3] }),
            |value| points(value, "at_um"),
        )?;
        let Some((3, outer)) = found.shape.split_last() else {
            let shape = PyTuple::new(py, &found.shape)?.repr()?;
            return Err(PyTypeError::new_err(format!(
                "at_um must be three numbers or an array of shape (..., 3), not of shape {shape}"
            )));
        };
        found.check(py, &limits::POSITION_UM, "at_um")?;
        let (places, _) = found.values.as_chunks::<3>();
        let each = |at_um: &[f64; 3]| self.inner.intensity_w_per_m2(*at_um);
        if let [at_um] = places {
            let value = each(at_um).map_err(|error| raise_core(py, error))?;
            return shaped(py, outer, vec![value]);
        }
        let values = enter::long(py, |control| {
            let mut values = Vec::with_capacity(places.len());
            for batch in places.chunks(65_536) {
                go_on(control)?;
                for at_um in batch {
                    values.push(each(at_um)?);
                }
            }
            Ok::<_, fluxloom_core::Error>(values)
        })?;
        shaped(py, outer, values)
    }

    /// The beam that a plane mirror beyond the atoms sends straight back, with a
    /// fraction of the power (1 for a perfect mirror).
    ///
    /// The polarisation vector in the laboratory stays, so that the helicity,
    /// which is counted about the direction, changes its sign; waists and focus
    /// stay, as if the mirror imaged the beam onto itself.
    fn reflected(&self, power_fraction: &Bound<'_, PyAny>) -> PyResult<Self> {
        let fraction = number(power_fraction, "power_fraction")?;
        let inner = self.inner.reflected(fraction);
        Ok(Self { inner: inner.map_err(|error| raise_core(power_fraction.py(), error))? })
    }

    /// The same beam with some arguments changed.
    #[pyo3(signature = (**changes))]
    fn replace<'py>(
        slf: &Bound<'py, Self>,
        changes: Option<&Bound<'py, PyDict>>,
    ) -> PyResult<Bound<'py, PyAny>> {
        let names = [
            "wavelength_nm",
            "power_mw",
            "waist_um",
            "direction",
            "polarisation",
            "waist_axis",
            "focus_um",
        ];
        documents::replace(slf, slf.get_type().as_any(), &names, changes)
    }

    fn __repr__(&self) -> String {
        self.text()
    }
}

impl PyBeam {
    /// The call that makes the beam.
    pub fn text(&self) -> String {
        let triple = |[x, y, z]: [f64; 3]| format!("({x:?}, {y:?}, {z:?})");
        let beam = &self.inner;
        let [first, second] = beam.waist_um();
        let waist =
            if first == second { format!("{first:?}") } else { format!("({first:?}, {second:?})") };
        let [ux, uy, uz] = beam.polarisation().map(complex_text);
        format!(
            "Beam(wavelength_nm={:?}, power_mw={:?}, waist_um={waist}, direction={}, \
             polarisation=({ux}, {uy}, {uz}), waist_axis={}, focus_um={})",
            beam.wavelength_nm(),
            beam.power_mw(),
            triple(beam.direction()),
            beam.waist_axis().map_or_else(|| "None".to_owned(), triple),
            triple(beam.focus_um())
        )
    }
}

/// A complex number in Python's words, such that reading it gives back every bit:
/// sums of the usual form lose the sign of a zero.
fn complex_text(Complex64 { re, im }: Complex64) -> String {
    let is_zero = |x: f64| x == 0.0 && x.is_sign_positive();
    if is_zero(im) {
        format!("{re:?}")
    } else if is_zero(re) && im.is_sign_positive() {
        format!("{im:?}j")
    } else {
        format!("complex({re:?}, {im:?})")
    }
}

/// A number, or two of them.
fn one_or_two(value: &Bound<'_, PyAny>, field: &str) -> PyResult<[f64; 2]> {
    if let Ok(both) = number(value, field) {
        return Ok([both; 2]);
    }
    pair(value, field)
        .map(Into::into)
        .map_err(|_| wrong_type(field, value, "a number or two numbers (w1, w2)"))
}

/// One point, or an array of them. Each number of a single point is looked at by
/// itself: an array of (True, 0, 0) would hide that one is no number.
fn points(value: &Bound<'_, PyAny>, field: &str) -> PyResult<Numbers> {
    if (value.is_instance_of::<PyTuple>() || value.is_instance_of::<PyList>())
        && value.len()? == 3
        && items(value, field, "")?.iter().all(|item| item.len().is_err())
    {
        return Ok(Numbers { shape: vec![3], values: vector(value, field)?.to_vec() });
    }
    numbers(value, field)
}

/// A real or complex number: a Python or numpy number, a 0-d array.
fn complex_number(value: &Bound<'_, PyAny>, field: &str) -> PyResult<Complex64> {
    let exact = |value: &Bound<'_, PyComplex>| Complex64::new(value.real(), value.imag());
    if let Ok(value) = value.cast::<PyComplex>() {
        return Ok(exact(value));
    }
    // Among numpy's scalars truth values, too, know how to be complex.
    let is_complex = dtype_kind(value)?.is_some_and(|kind| kind == "c")
        && value.getattr("ndim")?.extract::<usize>()? == 0;
    if is_complex {
        return Ok(exact(value.call_method0("__complex__")?.cast::<PyComplex>()?));
    }
    number(value, field).map(Complex64::from).map_err(|_| wrong_type(field, value, A_NUMBER))
}

const A_NUMBER: &str = "three numbers, real or complex";

/// Three real or complex numbers.
fn complex_vector(value: &Bound<'_, PyAny>, field: &str) -> PyResult<[Complex64; 3]> {
    match items(value, field, A_NUMBER)?.as_slice() {
        [x, y, z] => {
            Ok([complex_number(x, field)?, complex_number(y, field)?, complex_number(z, field)?])
        }
        other => {
            Err(PyTypeError::new_err(format!("{field} must be {A_NUMBER}, not {}", other.len())))
        }
    }
}

/// A vector as a read-only array.
fn array<'py>(
    py: Python<'py>,
    found: Result<[Complex64; 3], fluxloom_core::Error>,
) -> PyResult<Bound<'py, PyAny>> {
    let found = found.map_err(|error| raise_core(py, error))?;
    let array = found.to_vec().into_pyarray(py);
    drop(array.readwrite().make_nonwriteable());
    Ok(array.into_any())
}

/// Linear light along the part of ``along`` across ``direction``; see
/// ``fluxloom.polarisation``.
#[pyfunction]
pub fn linear_polarisation<'py>(
    py: Python<'py>,
    direction: &Bound<'py, PyAny>,
    along: &Bound<'py, PyAny>,
) -> PyResult<Bound<'py, PyAny>> {
    array(py, polarisation::linear(vector(direction, "direction")?, vector(along, "along")?))
}

/// Circular light of helicity +1 or -1; see ``fluxloom.polarisation``.
#[pyfunction]
pub fn circular_polarisation<'py>(
    py: Python<'py>,
    direction: &Bound<'py, PyAny>,
    helicity: &Bound<'py, PyAny>,
) -> PyResult<Bound<'py, PyAny>> {
    let direction = vector(direction, "direction")?;
    let helicity = Helicity::from_number(number(helicity, "helicity")?);
    array(py, helicity.and_then(|helicity| polarisation::circular(direction, helicity)))
}

/// Elliptical light; see ``fluxloom.polarisation``.
#[pyfunction]
pub fn elliptical_polarisation<'py>(
    py: Python<'py>,
    direction: &Bound<'py, PyAny>,
    along: &Bound<'py, PyAny>,
    ellipticity_deg: &Bound<'py, PyAny>,
) -> PyResult<Bound<'py, PyAny>> {
    let (direction, along) = (vector(direction, "direction")?, vector(along, "along")?);
    let ellipticity_deg = number(ellipticity_deg, "ellipticity_deg")?;
    array(py, polarisation::elliptical(direction, along, ellipticity_deg))
}
