//! `Atom` and the table of where its numbers come from.

use fluxloom_core::Atom;
use fluxloom_core::atom::DataSource;
use fluxloom_core::limits;
use pyo3::prelude::*;
use pyo3::types::{PyInt, PyIterator, PyString, PyTuple};

use crate::convert::{Numbers, number, numbers, pairs, shaped};
use crate::documents::document;
use crate::errors::{raise_core, wrong_type};

/// An isotope with its embedded data.
///
/// Parameters
/// ----------
/// name : str
///     Such as ``"40K"``; see ``Atom.available()``.
///
/// Raises
/// ------
/// InputError
///     ``atom.unknown``, with the name that was probably meant.
///
/// Examples
/// --------
/// >>> import fluxloom as fl
/// >>> potassium = fl.Atom("40K")
/// >>> potassium.manifolds
/// (4.5, 3.5)
/// >>> round(potassium.recoil_hz(1064.0), 2)
/// 4409.86
#[pyclass(frozen, eq, module = "fluxloom", name = "Atom")]
#[derive(PartialEq)]
pub struct PyAtom {
    pub inner: Atom,
}

document!(PyAtom);

#[pymethods]
impl PyAtom {
    #[new]
    fn new(name: &Bound<'_, PyAny>) -> PyResult<Self> {
        let py = name.py();
        let text: String = name.extract().map_err(|_| wrong_type("name", name, "a text"))?;
        Ok(Self { inner: Atom::new(&text).map_err(|error| raise_core(py, error))? })
    }

    /// Names of all isotopes of the table, by mass number.
    #[staticmethod]
    fn available(py: Python<'_>) -> PyResult<Bound<'_, PyTuple>> {
        PyTuple::new(py, Atom::available())
    }

    /// Name of the isotope.
    #[getter]
    fn name(&self) -> &'static str {
        self.inner.name()
    }

    /// Mass in kilograms (AME2020).
    #[getter]
    fn mass_kg(&self) -> f64 {
        self.inner.mass_kg()
    }

    /// Nuclear spin I.
    #[getter]
    fn nuclear_spin(&self) -> f64 {
        self.inner.nuclear_spin()
    }

    /// ``"boson"`` or ``"fermion"``.
    #[getter]
    fn statistics(&self) -> &'static str {
        self.inner.statistics().as_str()
    }

    /// Total angular momenta F of the ground manifold, largest first.
    #[getter]
    fn manifolds<'py>(&self, py: Python<'py>) -> PyResult<Bound<'py, PyTuple>> {
        PyTuple::new(py, self.inner.manifolds())
    }

    /// Recoil energy of one photon over h, h/(2 m lambda^2), in hertz.
    ///
    /// Takes a wavelength or an array of wavelengths in nanometres.
    fn recoil_hz<'py>(&self, wavelength_nm: &Bound<'py, PyAny>) -> PyResult<Bound<'py, PyAny>> {
        self.each(wavelength_nm, |nm| self.inner.recoil_hz(nm))
    }

    /// Recoil velocity of one photon, h/(m lambda), in metres per second.
    ///
    /// Takes a wavelength or an array of wavelengths in nanometres.
    fn recoil_m_per_s<'py>(
        &self,
        wavelength_nm: &Bound<'py, PyAny>,
    ) -> PyResult<Bound<'py, PyAny>> {
        self.each(wavelength_nm, |nm| self.inner.recoil_m_per_s(nm))
    }

    /// Every number behind this atom, with uncertainty, unit, status and source.
    pub fn sources(&self) -> PySourceTable {
        PySourceTable { atom: self.inner.clone(), rows: self.inner.sources() }
    }

    /// Measured ratios of line strengths, d_over^2/d_under^2, with which one of two
    /// dipole elements of the table was obtained: they join the uncertainties of
    /// both, and a tune-out owes most of its accuracy to them.
    fn strength_ratios<'py>(&self, py: Python<'py>) -> PyResult<Bound<'py, PyTuple>> {
        let rows = self.inner.strength_ratios();
        PyTuple::new(py, rows.into_iter().map(|inner| PyDataSource { inner }))
    }

    /// The same atom with own numbers; what follows from them follows.
    ///
    /// Parameters
    /// ----------
    /// numbers : dict
    ///     Values by their name in ``sources()``, such as ``{"D1.dipole_au": 4.1075}``.
    /// source : str
    ///     Where the numbers come from; shows in every result's sources.
    #[pyo3(signature = (numbers, *, source))]
    fn with_data(&self, numbers: &Bound<'_, PyAny>, source: &str) -> PyResult<Self> {
        let mut changes = Vec::new();
        for (key, value) in pairs(numbers, "numbers")? {
            let key: String =
                key.extract().map_err(|_| wrong_type("a name in numbers", &key, "a text"))?;
            let value = number(&value, &key)?;
            changes.push((key, value));
        }
        let inner = self.inner.with_data(&changes, source);
        Ok(Self { inner: inner.map_err(|error| raise_core(numbers.py(), error))? })
    }

    fn __repr__(&self, py: Python<'_>) -> PyResult<String> {
        let mut text = format!("Atom({:?})", self.inner.name());
        for (key, value, source) in self.inner.own_data() {
            // Python's own spelling of a text; Rust escapes differently.
            let source = PyString::new(py, source).repr()?;
            text += &format!(".with_data({{{key:?}: {value:?}}}, source={source})");
        }
        Ok(text)
    }
}

impl PyAtom {
    fn each<'py>(
        &self,
        values: &Bound<'py, PyAny>,
        quantity: impl Fn(f64) -> Result<f64, fluxloom_core::Error>,
    ) -> PyResult<Bound<'py, PyAny>> {
        let py = values.py();
        let found = numbers(values, "wavelength_nm")?;
        found.check(py, &limits::WAVELENGTH_NM, "wavelength_nm")?;
        let Numbers { shape, values } = found;
        let found: Result<Vec<f64>, _> = values.into_iter().map(quantity).collect();
        shaped(py, &shape, found.map_err(|error| raise_core(py, error))?)
    }
}

/// One number of the atomic table.
#[pyclass(frozen, eq, module = "fluxloom", name = "DataSource")]
#[derive(PartialEq, Clone)]
pub struct PyDataSource {
    inner: DataSource,
}

document!(PyDataSource);

#[pymethods]
impl PyDataSource {
    /// Name of the number, such as ``D1.dipole_au``.
    #[getter]
    fn name(&self) -> &str {
        &self.inner.name
    }

    /// Its value.
    #[getter]
    fn value(&self) -> f64 {
        self.inner.value
    }

    /// Its standard uncertainty, or None.
    #[getter]
    fn uncertainty(&self) -> Option<f64> {
        self.inner.uncertainty
    }

    /// Its unit.
    #[getter]
    fn unit(&self) -> &str {
        &self.inner.unit
    }

    /// How far it has been confirmed.
    #[getter]
    fn status(&self) -> &'static str {
        self.inner.status.as_str()
    }

    /// Where it comes from.
    #[getter]
    fn source(&self) -> &str {
        &self.inner.source
    }

    fn __repr__(&self) -> String {
        let DataSource { name, value, uncertainty, unit, status, source } = &self.inner;
        let spread = uncertainty.map_or_else(String::new, |u| format!(" +- {u:?}"));
        format!("<{name} = {value:?}{spread} {unit}, {}: {source}>", status.as_str())
    }
}

/// The numbers of an atom: a sequence of rows with name, value, uncertainty,
/// unit, status and source.
#[pyclass(frozen, eq, module = "fluxloom", name = "SourceTable", sequence)]
#[derive(PartialEq)]
pub struct PySourceTable {
    atom: Atom,
    rows: Vec<DataSource>,
}

#[pymethods]
impl PySourceTable {
    /// The atom whose numbers these are.
    #[getter]
    fn atom(&self) -> PyAtom {
        PyAtom { inner: self.atom.clone() }
    }

    // The table follows from the atom, so the atom is what is pickled.
    fn __reduce__<'py>(
        slf: &Bound<'py, Self>,
    ) -> PyResult<(Bound<'py, PyAny>, (Bound<'py, PyAny>,))> {
        let ask = slf.py().import("operator")?.getattr("methodcaller")?.call1(("sources",))?;
        Ok((ask, (slf.getattr("atom")?,)))
    }

    fn __len__(&self) -> usize {
        self.rows.len()
    }

    fn __getitem__(&self, index: &Bound<'_, PyAny>) -> PyResult<PyDataSource> {
        // Too large for a place is simply out of range.
        let asked: isize = match index.extract() {
            Ok(asked) => asked,
            Err(_) if index.is_instance_of::<PyInt>() => isize::MAX,
            Err(_) => return Err(wrong_type("index", index, "a whole number")),
        };
        let length = self.rows.len().cast_signed();
        let place = if asked < 0 { asked.saturating_add(length) } else { asked };
        usize::try_from(place)
            .ok()
            .and_then(|place| self.rows.get(place))
            .map(|row| PyDataSource { inner: row.clone() })
            .ok_or_else(|| pyo3::exceptions::PyIndexError::new_err("row out of range"))
    }

    fn __iter__<'py>(&self, py: Python<'py>) -> PyResult<Bound<'py, PyIterator>> {
        let rows = self.rows.iter().map(|row| PyDataSource { inner: row.clone() });
        PyTuple::new(py, rows.collect::<Vec<_>>())?.try_iter()
    }

    /// The table as a pandas DataFrame, one row per number.
    fn to_pandas<'py>(slf: &Bound<'py, Self>) -> PyResult<Bound<'py, PyAny>> {
        crate::display(slf.py(), "sources_to_pandas")?.call1((slf,))
    }

    fn _repr_html_<'py>(slf: &Bound<'py, Self>) -> PyResult<Bound<'py, PyAny>> {
        crate::display(slf.py(), "sources_html")?.call1((slf,))
    }

    fn __repr__(&self) -> String {
        format!("<SourceTable of {} numbers>", self.rows.len())
    }
}

/// Adds the atom and the numbers behind it to a result whose `inner` has an atom.
macro_rules! rests_on {
    ($class:ident) => {
        #[pymethods]
        impl $class {
            /// The atom.
            #[getter]
            fn atom(&self) -> $crate::atom::PyAtom {
                $crate::atom::PyAtom { inner: self.inner.atom.clone() }
            }

            /// The numbers behind the result.
            #[getter]
            fn sources(&self) -> $crate::atom::PySourceTable {
                self.atom().sources()
            }
        }
    };
}
pub(crate) use rests_on;
