//! Polarisabilities and tune-outs of an atom.

use fluxloom_core::control::{allow_numbers, go_on};
use fluxloom_core::light::{Polarisability, TuneOut};
use fluxloom_core::limits;
use fluxloom_core::{Atom, Document};
use pyo3::prelude::*;
use pyo3::types::PyTuple;
use serde::{Deserialize, Serialize};

use crate::atom::{PyAtom, rests_on};
use crate::convert::{Numbers, number, numbers, pair, shaped};
use crate::documents::document;
use crate::enter;
use crate::state::{flag, uncertain, warn_light};

/// The three polarisabilities for one wavelength or an array of them.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(try_from = "RawTable", into = "RawTable")]
pub struct Table {
    atom: Atom,
    shape: Vec<usize>,
    rows: Vec<Polarisability>,
}

#[derive(Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
struct RawTable {
    atom: Atom,
    shape: Vec<usize>,
    scalar: Vec<f64>,
    vector: Vec<f64>,
    tensor: Vec<f64>,
}

impl Document for Table {
    const FORMAT: &'static str = "fluxloom-polarisabilities";
}

impl From<Table> for RawTable {
    fn from(table: Table) -> Self {
        let column = |part: fn(&Polarisability) -> f64| table.rows.iter().map(part).collect();
        Self {
            scalar: column(|row| row.scalar),
            vector: column(|row| row.vector),
            tensor: column(|row| row.tensor),
            shape: table.shape,
            atom: table.atom,
        }
    }
}

impl TryFrom<RawTable> for Table {
    type Error = String;

    fn try_from(raw: RawTable) -> Result<Self, String> {
        let size = raw.shape.iter().try_fold(1_usize, |size, length| size.checked_mul(*length));
        let lengths = [raw.scalar.len(), raw.vector.len(), raw.tensor.len()];
        if lengths.iter().any(|length| Some(*length) != size) {
            return Err(format!("columns of {lengths:?} numbers do not fill {:?}", raw.shape));
        }
        let columns = raw.scalar.into_iter().zip(raw.vector).zip(raw.tensor);
        let rows = columns
            .map(|((scalar, vector), tensor)| Polarisability { scalar, vector, tensor })
            .collect();
        Ok(Self { atom: raw.atom, shape: raw.shape, rows })
    }
}

/// Polarisabilities of one F, in atomic units: numbers for one wavelength,
/// arrays for an array of them.
#[pyclass(frozen, eq, module = "fluxloom", name = "Polarisability")]
#[derive(PartialEq)]
pub struct PyPolarisability {
    pub inner: Table,
}

document!(PyPolarisability);
rests_on!(PyPolarisability);

#[pymethods]
impl PyPolarisability {
    /// The scalar polarisability.
    #[getter]
    fn scalar<'py>(&self, py: Python<'py>) -> PyResult<Bound<'py, PyAny>> {
        self.column(py, |row| row.scalar)
    }

    /// The vector polarisability.
    #[getter]
    fn vector<'py>(&self, py: Python<'py>) -> PyResult<Bound<'py, PyAny>> {
        self.column(py, |row| row.vector)
    }

    /// The tensor polarisability.
    #[getter]
    fn tensor<'py>(&self, py: Python<'py>) -> PyResult<Bound<'py, PyAny>> {
        self.column(py, |row| row.tensor)
    }

    fn __repr__(&self) -> String {
        match (self.inner.shape.is_empty(), self.inner.rows.first()) {
            (true, Some(Polarisability { scalar, vector, tensor })) => format!(
                "<Polarisability scalar {scalar:.6}, vector {vector:.6}, tensor {tensor:.6} a.u.>"
            ),
            _ => format!("<Polarisability of shape {:?}, a.u.>", self.inner.shape),
        }
    }
}

impl PyPolarisability {
    fn one(atom: &Atom, alpha: Polarisability) -> Self {
        Self { inner: Table { atom: atom.clone(), shape: Vec::new(), rows: vec![alpha] } }
    }

    fn column<'py>(
        &self,
        py: Python<'py>,
        part: fn(&Polarisability) -> f64,
    ) -> PyResult<Bound<'py, PyAny>> {
        shaped(py, &self.inner.shape, self.inner.rows.iter().map(part).collect())
    }
}

fn tune_out(
    f: &Bound<'_, PyAny>,
    m: Option<&Bound<'_, PyAny>>,
    circularity: Option<&Bound<'_, PyAny>>,
) -> PyResult<TuneOut> {
    Ok(TuneOut {
        f: number(f, "f")?,
        m: m.map(|value| number(value, "m")).transpose()?,
        circularity: circularity.map_or(Ok(0.0), |value| number(value, "circularity"))?,
    })
}

#[pymethods]
impl PyAtom {
    /// Scalar, vector and tensor polarisability of the level F, in atomic units.
    ///
    /// Excited hyperfine structure is kept; the rest of the spectrum is added to
    /// the scalar part where the table knows it.
    ///
    /// Parameters
    /// ----------
    /// wavelength_nm : float or array
    ///     Vacuum wavelengths.
    /// f : float
    ///     Total angular momentum F.
    /// uncertainty : bool
    ///     Also the standard errors that follow from the atomic data.
    ///
    /// Raises
    /// ------
    /// InputError
    ///     ``light.on_resonance`` within 100 linewidths of a line, where the
    ///     perturbative result means nothing; ``state.unknown``, listing the F
    ///     that exist.
    ///
    /// Examples
    /// --------
    /// >>> import fluxloom as fl
    /// >>> alpha = fl.Atom("40K").polarisability_au(1064.0, 4.5)
    /// >>> round(alpha.scalar, 1)
    /// 599.5
    #[pyo3(signature = (wavelength_nm, f, *, uncertainty=None), text_signature = "($self, wavelength_nm, f, *, uncertainty=False)")]
    fn polarisability_au<'py>(
        &self,
        wavelength_nm: &Bound<'py, PyAny>,
        f: &Bound<'py, PyAny>,
        uncertainty: Option<&Bound<'py, PyAny>>,
    ) -> PyResult<Bound<'py, PyAny>> {
        let py = f.py();
        let found = numbers(wavelength_nm, "wavelength_nm")?;
        found.check(py, &limits::WAVELENGTH_NM, "wavelength_nm")?;
        let Numbers { shape, values } = found;
        let f = number(f, "f")?;
        let atom = &self.inner;
        if !flag(uncertainty, "uncertainty")? {
            let rows = enter::long(py, |control| {
                allow_numbers(&[values.len()], 48)?;
                let mut rows = Vec::with_capacity(values.len());
                for part in values.chunks(4096) {
                    go_on(control)?;
                    rows.extend(atom.polarisabilities_au(part, f)?);
                }
                Ok::<_, fluxloom_core::Error>(rows)
            })?;
            warn_light(py, self, values.iter().copied())?;
            let found = PyPolarisability { inner: Table { atom: atom.clone(), shape, rows } };
            return Ok(Bound::new(py, found)?.into_any());
        }
        let found = enter::long(py, |control| {
            let one = |nm: &f64| {
                go_on(control)?;
                atom.polarisability_with_error(*nm, f)
            };
            values.iter().map(one).collect::<Result<Vec<_>, _>>()
        })?;
        warn_light(py, self, values.iter().copied())?;
        let rows = found.iter().map(|one| one.value).collect();
        let value =
            PyPolarisability { inner: Table { atom: atom.clone(), shape: shape.clone(), rows } };
        let rows = found.iter().map(|one| one.standard_error).collect();
        let error = PyPolarisability { inner: Table { atom: atom.clone(), shape, rows } };
        uncertain(
            py,
            Bound::new(py, value)?.into_any(),
            Bound::new(py, error)?.into_any(),
            atom.unconfirmed_in_light(),
        )
    }

    /// Polarisabilities of the level F in a field that does not oscillate.
    fn static_polarisability_au(&self, f: &Bound<'_, PyAny>) -> PyResult<PyPolarisability> {
        let py = f.py();
        let f = number(f, "f")?;
        let found = enter::short(py, || self.inner.static_polarisability_au(f))?;
        warn_light(py, self, [])?;
        Ok(PyPolarisability::one(&self.inner, found))
    }

    /// The one wavelength within a range at which a polarisability vanishes.
    ///
    /// Parameters
    /// ----------
    /// range_nm : (float, float)
    ///     Vacuum wavelengths to look between.
    /// f : float
    ///     Total angular momentum F.
    /// m : float, optional
    ///     Its component along the field; without it the scalar polarisability.
    /// circularity : float
    ///     V in [-1, 1] of light along the field, 1 for sigma+; needs m.
    /// uncertainty : bool
    ///     Also the standard error that follows from the atomic data.
    ///
    /// Raises
    /// ------
    /// InputError
    ///     ``light.no_tune_out`` or ``light.several_tune_outs``, listing them.
    ///
    /// Examples
    /// --------
    /// >>> import fluxloom as fl
    /// >>> round(fl.Atom("87Rb").tune_out_nm((785.0, 794.0), f=2), 4)
    /// 790.0324
    #[pyo3(signature = (range_nm, *, f, m=None, circularity=None, uncertainty=None), text_signature = "($self, range_nm, *, f, m=None, circularity=0.0, uncertainty=False)")]
    fn tune_out_nm<'py>(
        &self,
        range_nm: &Bound<'py, PyAny>,
        f: &Bound<'py, PyAny>,
        m: Option<&Bound<'py, PyAny>>,
        circularity: Option<&Bound<'py, PyAny>>,
        uncertainty: Option<&Bound<'py, PyAny>>,
    ) -> PyResult<Bound<'py, PyAny>> {
        let py = f.py();
        let (range_nm, what) = (pair(range_nm, "range_nm")?, tune_out(f, m, circularity)?);
        if flag(uncertainty, "uncertainty")? {
            let found = enter::long(py, |_| self.inner.tune_out_with_error(range_nm, &what))?;
            warn_light(py, self, [found.value])?;
            let value = found.value.into_pyobject(py)?.into_any();
            let error = found.standard_error.into_pyobject(py)?.into_any();
            return uncertain(py, value, error, self.inner.unconfirmed_in_light());
        }
        let found = enter::long(py, |_| self.inner.tune_out_nm(range_nm, &what))?;
        warn_light(py, self, [found])?;
        Ok(found.into_pyobject(py)?.into_any())
    }

    /// Every wavelength within a range at which a polarisability vanishes: a
    /// tuple, ascending, perhaps empty. Arguments as of ``tune_out_nm``.
    #[pyo3(signature = (range_nm, *, f, m=None, circularity=None), text_signature = "($self, range_nm, *, f, m=None, circularity=0.0)")]
    fn tune_outs_nm<'py>(
        &self,
        range_nm: &Bound<'py, PyAny>,
        f: &Bound<'py, PyAny>,
        m: Option<&Bound<'py, PyAny>>,
        circularity: Option<&Bound<'py, PyAny>>,
    ) -> PyResult<Bound<'py, PyTuple>> {
        let py = f.py();
        let (range_nm, what) = (pair(range_nm, "range_nm")?, tune_out(f, m, circularity)?);
        let found = enter::long(py, |_| self.inner.tune_outs_nm(range_nm, &what))?;
        warn_light(py, self, found.iter().copied())?;
        PyTuple::new(py, found)
    }
}
