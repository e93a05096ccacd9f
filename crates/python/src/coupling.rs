//! What the beams of a Raman pair couple.

use fluxloom_core::light::{Coupling, Quality, StrayCoupling};
use fluxloom_core::limits;
use numpy::{Complex64, IntoPyArray, PyArrayMethods};
use pyo3::prelude::*;
use pyo3::types::{PyComplex, PyTuple};

use crate::atom::{PyAtom, PySourceTable};
use crate::convert::{number, pair as range, shaped, size};
use crate::documents::document;
use crate::enter;
use crate::lattice::PyLattice;
use crate::raman::PyRamanPair;
use crate::state::{bias, python_state, state, uncertain, warn_light};

/// A two-photon coupling b <- a with its explanation.
#[pyclass(frozen, eq, module = "fluxloom", name = "Coupling")]
#[derive(PartialEq)]
pub struct PyCoupling {
    pub inner: Coupling,
}

document!(PyCoupling);

#[pymethods]
impl PyCoupling {
    /// The atom.
    #[getter]
    fn atom(&self) -> PyAtom {
        PyAtom { inner: self.inner.atom.clone() }
    }

    /// The numbers behind the result.
    #[getter]
    fn sources(&self) -> PySourceTable {
        self.atom().sources()
    }

    /// The state a.
    #[getter]
    fn a<'py>(&self, py: Python<'py>) -> PyResult<Bound<'py, PyAny>> {
        python_state(py, self.inner.from)
    }

    /// The state b.
    #[getter]
    fn b<'py>(&self, py: Python<'py>) -> PyResult<Bound<'py, PyAny>> {
        python_state(py, self.inner.to)
    }

    /// Complex Rabi frequency of free atoms over 2 pi.
    #[getter]
    fn rabi_hz(&self) -> Complex64 {
        self.inner.rabi_hz
    }

    /// The same for atoms in the lattice, the overlap of the kick included;
    /// without a lattice that of free atoms.
    #[getter]
    fn effective_rabi_hz(&self) -> Complex64 {
        self.inner.effective_rabi_hz
    }

    /// Kick along the lattice in k_L; None without a lattice.
    #[getter]
    fn kick(&self) -> Option<f64> {
        self.inner.kick
    }

    /// ``rabi_hz`` by tensor rank: scalar, vector, tensor; they add up to it.
    #[getter]
    fn ranks(&self) -> PyRanks {
        PyRanks { parts: self.inner.ranks }
    }

    /// Size over that of the largest coupling with abs(Delta m) <= 1 which the
    /// same beams make.
    #[getter]
    fn relative(&self) -> f64 {
        self.inner.relative
    }

    /// Whether the coupling is too weak to be used: below 1e-2 of the largest.
    #[getter]
    fn forbidden(&self) -> bool {
        self.inner.is_forbidden()
    }

    /// Which part of the light drives the coupling, in a sentence.
    #[getter]
    fn rule(&self) -> &str {
        &self.inner.rule
    }

    /// For a coupling too weak to be used: what would drive it better.
    #[getter]
    fn alternatives<'py>(&self, py: Python<'py>) -> PyResult<Bound<'py, PyTuple>> {
        PyTuple::new(py, &self.inner.alternatives)
    }

    fn __repr__(&self) -> String {
        let Coupling { from, to, rabi_hz, effective_rabi_hz, .. } = &self.inner;
        let size = rabi_hz.norm();
        let lattice = if self.inner.kick.is_some() {
            format!(", {:.6} Hz in the lattice", effective_rabi_hz.norm())
        } else {
            String::new()
        };
        let weak = if self.inner.is_forbidden() { ", too weak to be used" } else { "" };
        format!("<Coupling {from} -> {to}: {size:.6} Hz{lattice}{weak}>")
    }
}

/// The parts of a coupling by tensor rank, over 2 pi in hertz.
#[pyclass(frozen, eq, module = "fluxloom", name = "Ranks")]
#[derive(PartialEq)]
pub struct PyRanks {
    parts: [Complex64; 3],
}

#[pymethods]
impl PyRanks {
    /// Rank 0.
    #[getter]
    fn scalar(&self) -> Complex64 {
        self.parts[0]
    }

    /// Rank 1.
    #[getter]
    fn vector(&self) -> Complex64 {
        self.parts[1]
    }

    /// Rank 2.
    #[getter]
    fn tensor(&self) -> Complex64 {
        self.parts[2]
    }

    fn __len__(&self) -> usize {
        self.parts.len()
    }

    fn __getitem__(&self, rank: usize) -> PyResult<Complex64> {
        let part = self.parts.get(rank).copied();
        part.ok_or_else(|| pyo3::exceptions::PyIndexError::new_err("ranks are 0, 1 and 2"))
    }

    fn __iter__<'py>(&self, py: Python<'py>) -> PyResult<Bound<'py, pyo3::types::PyIterator>> {
        PyTuple::new(py, self.parts)?.try_iter()
    }

    #[new]
    fn new(scalar: Complex64, vector: Complex64, tensor: Complex64) -> Self {
        Self { parts: [scalar, vector, tensor] }
    }

    fn __reduce__<'py>(
        slf: &Bound<'py, Self>,
    ) -> PyResult<(Bound<'py, PyAny>, (Complex64, Complex64, Complex64))> {
        let [scalar, vector, tensor] = slf.get().parts;
        Ok((slf.get_type().into_any(), (scalar, vector, tensor)))
    }

    fn __repr__(&self) -> String {
        let [scalar, vector, tensor] = self.parts.map(|part| part.norm());
        format!("<Ranks of sizes {scalar:.6}, {vector:.6}, {tensor:.6} Hz>")
    }
}

/// A coupling that nobody asked for: by one beam alone, by the pair backwards,
/// or by reflected light.
#[pyclass(frozen, eq, module = "fluxloom", name = "StrayCoupling")]
#[derive(PartialEq)]
pub struct PyStrayCoupling {
    pub inner: StrayCoupling,
}

document!(PyStrayCoupling);

#[pymethods]
impl PyStrayCoupling {
    /// The atom.
    #[getter]
    fn atom(&self) -> PyAtom {
        PyAtom { inner: self.inner.atom.clone() }
    }

    /// The numbers behind the result.
    #[getter]
    fn sources(&self) -> PySourceTable {
        self.atom().sources()
    }

    /// Where the photon is absorbed from: ``"absorb"``, ``"emit"``, or one of
    /// them, reflected.
    #[getter]
    fn absorb(&self) -> &str {
        &self.inner.absorb
    }

    /// Where it is emitted into.
    #[getter]
    fn emit(&self) -> &str {
        &self.inner.emit
    }

    /// Complex Rabi frequency over 2 pi, if both beams carried the tones with all
    /// their power: it goes with the root of the fractions.
    #[getter]
    fn rabi_hz(&self) -> Complex64 {
        self.inner.rabi_hz
    }

    /// The two beams as a pair, whose flux and kick can be asked.
    #[getter]
    fn pair(&self) -> PyRamanPair {
        PyRamanPair { inner: self.inner.pair }
    }

    fn __repr__(&self) -> String {
        let StrayCoupling { absorb, emit, rabi_hz, .. } = &self.inner;
        format!("<StrayCoupling {absorb} -> {emit}: {:.6} Hz>", rabi_hz.norm())
    }
}

/// Coupling over scattering against wavelength.
#[pyclass(frozen, eq, module = "fluxloom", name = "Quality")]
#[derive(PartialEq)]
pub struct PyQuality {
    pub inner: Quality,
}

document!(PyQuality);

#[pymethods]
impl PyQuality {
    /// The atom.
    #[getter]
    fn atom(&self) -> PyAtom {
        PyAtom { inner: self.inner.atom.clone() }
    }

    /// The numbers behind the result.
    #[getter]
    fn sources(&self) -> PySourceTable {
        self.atom().sources()
    }

    /// Vacuum wavelengths, ascending; those too near to a line are left out.
    #[getter]
    fn wavelengths_nm<'py>(&self, py: Python<'py>) -> PyResult<Bound<'py, PyAny>> {
        column(py, &self.inner.wavelengths_nm)
    }

    /// Sizes of the Rabi frequency over 2 pi.
    #[getter]
    fn rabi_hz<'py>(&self, py: Python<'py>) -> PyResult<Bound<'py, PyAny>> {
        column(py, &self.inner.rabi_hz)
    }

    /// Photons per second from both beams, the mean of both states.
    #[getter]
    fn scattering_per_s<'py>(&self, py: Python<'py>) -> PyResult<Bound<'py, PyAny>> {
        column(py, &self.inner.scattering_per_s)
    }

    /// Omega/scattering, with Omega = 2 pi rabi_hz.
    #[getter]
    fn ratio<'py>(&self, py: Python<'py>) -> PyResult<Bound<'py, PyAny>> {
        column(py, &self.inner.ratio)
    }

    /// Where the ratio is largest, also between the points.
    #[getter]
    fn best_wavelength_nm(&self) -> f64 {
        self.inner.best_wavelength_nm
    }

    /// The largest ratio.
    #[getter]
    fn best_ratio(&self) -> f64 {
        self.inner.best_ratio
    }

    /// Ranges about the lines in which nothing was computed.
    #[getter]
    fn excluded_nm<'py>(&self, py: Python<'py>) -> PyResult<Bound<'py, PyTuple>> {
        PyTuple::new(py, &self.inner.excluded_nm)
    }

    /// Draws coupling over scattering against wavelength; returns the axes.
    #[pyo3(signature = (ax=None))]
    fn plot<'py>(
        slf: &Bound<'py, Self>,
        ax: Option<&Bound<'py, PyAny>>,
    ) -> PyResult<Bound<'py, PyAny>> {
        slf.py().import("fluxloom.light_plots")?.getattr("plot_quality")?.call1((slf, ax))
    }

    /// The curves as a pandas DataFrame, one row per wavelength.
    fn to_pandas<'py>(slf: &Bound<'py, Self>) -> PyResult<Bound<'py, PyAny>> {
        slf.py().import("fluxloom.tables")?.getattr("quality_to_pandas")?.call1((slf,))
    }

    fn __repr__(&self) -> String {
        format!(
            "<Quality at {} wavelengths: best {:.0} at {:.4} nm>",
            self.inner.wavelengths_nm.len(),
            self.inner.best_ratio,
            self.inner.best_wavelength_nm
        )
    }
}

fn column<'py>(py: Python<'py>, values: &[f64]) -> PyResult<Bound<'py, PyAny>> {
    shaped(py, &[values.len()], values.to_vec())
}

/// The power that a window or fibre end sends straight back if nothing is said.
const REFLECTION: f64 = 0.005;

/// Points of a map over wavelengths if nothing is said.
const POINTS: usize = 1001;

#[pymethods]
impl PyRamanPair {
    /// Complex Rabi frequency of b <- a over 2 pi, in hertz, for atoms at the
    /// origin of the laboratory.
    ///
    /// H/h contains (rabi_hz/2) exp(i[(k1-k2).r - (w1-w2) t]) \|b><a\|, 1 the beam
    /// that is absorbed. States are those of the field; their phases follow its
    /// axes, and drop out round a closed loop of couplings.
    ///
    /// Parameters
    /// ----------
    /// atom : Atom
    /// a, b : state
    ///     ``(F, m)`` or ``"F,m"``, any two of the ground manifold.
    /// field_gauss : float
    ///     The bias field.
    /// field_direction : three floats
    ///     Its direction.
    /// uncertainty : bool
    ///     Also the standard error of the size.
    ///
    /// Raises
    /// ------
    /// InputError
    ///     ``raman.no_beams`` for a pair given by its geometry;
    ///     ``light.on_resonance``; ``state.unknown``.
    ///
    /// Examples
    /// --------
    /// >>> import fluxloom as fl
    /// >>> def beam(direction, polarisation):
    /// ...     return fl.Beam(wavelength_nm=769.0, power_mw=0.5, waist_um=200.0,
    /// ...                    direction=direction, polarisation=polarisation)
    /// >>> pair = fl.RamanPair.from_beams(absorb=beam((0, 1, 0), (0, 0, 1)),
    /// ...                                emit=beam((1, 0, 0), (0, 1, 0)))
    /// >>> rabi = pair.rabi_hz(fl.Atom("40K"), "9/2,-9/2", "9/2,-7/2", field_gauss=30.0)
    /// >>> round(abs(rabi))
    /// 1147
    #[pyo3(signature = (atom, a, b, *, field_gauss, field_direction=None, uncertainty=false), text_signature = "($self, atom, a, b, *, field_gauss, field_direction=(0, 0, 1), uncertainty=False)")]
    fn rabi_hz<'py>(
        &self,
        atom: &Bound<'py, PyAtom>,
        a: &Bound<'py, PyAny>,
        b: &Bound<'py, PyAny>,
        field_gauss: &Bound<'py, PyAny>,
        field_direction: Option<&Bound<'py, PyAny>>,
        uncertainty: bool,
    ) -> PyResult<Bound<'py, PyAny>> {
        let (py, atom) = (atom.py(), atom.get());
        let states = (state(a, "a")?, state(b, "b")?);
        let bias = bias(Some(field_gauss), field_direction)?;
        let (pair, of) = (&self.inner, &atom.inner);
        let complex = |value: Complex64| PyComplex::from_doubles(py, value.re, value.im).into_any();
        if uncertainty {
            let (value, error) = enter::long(py, |_| pair.rabi_with_error_hz(of, states, &bias))?;
            warn_light(py, atom)?;
            let error = error.into_pyobject(py)?.into_any();
            return uncertain(py, complex(value), error, of.unconfirmed_in_light());
        }
        let value = enter::short(py, || pair.rabi_hz(of, states, &bias))?;
        warn_light(py, atom)?;
        Ok(complex(value))
    }

    /// Rabi frequencies between all states of the ground manifold, ``[b, a]`` for
    /// b <- a, in the order of ``atom.ground_levels(...).states``. The diagonal
    /// holds twice the light shifts that go with the kick.
    #[pyo3(signature = (atom, *, field_gauss, field_direction=None), text_signature = "($self, atom, *, field_gauss, field_direction=(0, 0, 1))")]
    fn rabi_matrix_hz<'py>(
        &self,
        atom: &Bound<'py, PyAtom>,
        field_gauss: &Bound<'py, PyAny>,
        field_direction: Option<&Bound<'py, PyAny>>,
    ) -> PyResult<Bound<'py, PyAny>> {
        let (py, atom) = (atom.py(), atom.get());
        let bias = bias(Some(field_gauss), field_direction)?;
        let matrix = enter::short(py, || self.inner.rabi_matrix_hz(&atom.inner, &bias))?;
        warn_light(py, atom)?;
        let array = matrix.into_pyarray(py);
        drop(array.readwrite().make_nonwriteable());
        Ok(array.into_any())
    }

    /// The coupling b <- a with its parts by tensor rank, the rule behind it, and
    /// alternatives if it is too weak; with a lattice, what the kick leaves of it.
    ///
    /// Examples
    /// --------
    /// >>> import fluxloom as fl
    /// >>> def beam(direction, polarisation):
    /// ...     return fl.Beam(wavelength_nm=769.0, power_mw=0.5, waist_um=200.0,
    /// ...                    direction=direction, polarisation=polarisation)
    /// >>> pair = fl.RamanPair.from_beams(absorb=beam((0, 1, 0), (0, 0, 1)),
    /// ...                                emit=beam((1, 0, 0), (0, 1, 0)))
    /// >>> link = pair.coupling(fl.Atom("40K"), "9/2,-9/2", "9/2,-5/2", field_gauss=30.0)
    /// >>> link.forbidden
    /// True
    #[pyo3(signature = (atom, a, b, *, field_gauss, field_direction=None, lattice=None, uncertainty=false), text_signature = "($self, atom, a, b, *, field_gauss, field_direction=(0, 0, 1), lattice=None, uncertainty=False)")]
    fn coupling<'py>(
        &self,
        atom: &Bound<'py, PyAtom>,
        a: &Bound<'py, PyAny>,
        b: &Bound<'py, PyAny>,
        field_gauss: &Bound<'py, PyAny>,
        field_direction: Option<&Bound<'py, PyAny>>,
        lattice: Option<&PyLattice>,
        uncertainty: bool,
    ) -> PyResult<Bound<'py, PyAny>> {
        let (py, atom) = (atom.py(), atom.get());
        let states = (state(a, "a")?, state(b, "b")?);
        let bias = bias(Some(field_gauss), field_direction)?;
        let lattice = lattice.map(|lattice| &lattice.inner);
        let (pair, of) = (&self.inner, &atom.inner);
        let inner = enter::long(py, |_| pair.coupling(of, states, &bias, lattice))?;
        if !uncertainty {
            warn_light(py, atom)?;
            return Ok(Bound::new(py, PyCoupling { inner })?.into_any());
        }
        let (value, error) = enter::long(py, |_| pair.rabi_with_error_hz(of, states, &bias))?;
        warn_light(py, atom)?;
        // The overlap of the kick owes nothing to the atomic data.
        let part =
            if value.norm() > 0.0 { inner.effective_rabi_hz.norm() / value.norm() } else { 1.0 };
        let errors = py.import("fluxloom.results")?.getattr("CouplingError")?;
        let errors = errors.call1((error, error * part))?;
        let coupling = Bound::new(py, PyCoupling { inner })?.into_any();
        uncertain(py, coupling, errors, of.unconfirmed_in_light())
    }

    /// Every other way in which these beams and their reflections drive b <- a,
    /// strongest first. ``reflection`` is the part of the power that comes
    /// straight back.
    #[pyo3(signature = (atom, a, b, *, field_gauss, field_direction=None, reflection=None), text_signature = "($self, atom, a, b, *, field_gauss, field_direction=(0, 0, 1), reflection=0.005)")]
    fn stray_couplings<'py>(
        &self,
        atom: &Bound<'py, PyAtom>,
        a: &Bound<'py, PyAny>,
        b: &Bound<'py, PyAny>,
        field_gauss: &Bound<'py, PyAny>,
        field_direction: Option<&Bound<'py, PyAny>>,
        reflection: Option<&Bound<'py, PyAny>>,
    ) -> PyResult<Bound<'py, PyTuple>> {
        let (py, atom) = (atom.py(), atom.get());
        let states = (state(a, "a")?, state(b, "b")?);
        let bias = bias(Some(field_gauss), field_direction)?;
        let reflection = reflection.map_or(Ok(REFLECTION), |value| number(value, "reflection"))?;
        let (pair, of) = (&self.inner, &atom.inner);
        let found = enter::long(py, |_| pair.stray_couplings(of, states, &bias, reflection))?;
        warn_light(py, atom)?;
        PyTuple::new(py, found.into_iter().map(|inner| PyStrayCoupling { inner }))
    }

    /// Coupling, scattering and their ratio over a range of wavelengths, both beams
    /// tuned together; wavelengths within 100 linewidths of a line are left out.
    ///
    /// Examples
    /// --------
    /// >>> import fluxloom as fl
    /// >>> def beam(direction, polarisation):
    /// ...     return fl.Beam(wavelength_nm=769.0, power_mw=0.5, waist_um=200.0,
    /// ...                    direction=direction, polarisation=polarisation)
    /// >>> pair = fl.RamanPair.from_beams(absorb=beam((0, 1, 0), (0, 0, 1)),
    /// ...                                emit=beam((1, 0, 0), (0, 1, 0)))
    /// >>> curve = pair.quality(fl.Atom("40K"), "9/2,-9/2", "9/2,-7/2",
    /// ...                      range_nm=(767.0, 770.0), points=301, field_gauss=30.0)
    /// >>> 767 < curve.best_wavelength_nm < 770
    /// True
    #[pyo3(signature = (atom, a, b, *, range_nm, field_gauss, points=None, field_direction=None), text_signature = "($self, atom, a, b, *, range_nm, field_gauss, points=1001, field_direction=(0, 0, 1))")]
    fn quality<'py>(
        &self,
        atom: &Bound<'py, PyAtom>,
        a: &Bound<'py, PyAny>,
        b: &Bound<'py, PyAny>,
        range_nm: &Bound<'py, PyAny>,
        field_gauss: &Bound<'py, PyAny>,
        points: Option<&Bound<'py, PyAny>>,
        field_direction: Option<&Bound<'py, PyAny>>,
    ) -> PyResult<PyQuality> {
        let (py, atom) = (atom.py(), atom.get());
        let states = (state(a, "a")?, state(b, "b")?);
        let bias = bias(Some(field_gauss), field_direction)?;
        let range_nm = range(range_nm, "range_nm")?;
        let points = points.map_or(Ok(POINTS), |value| size(value, &limits::POINTS, "points"))?;
        let (pair, of) = (&self.inner, &atom.inner);
        let inner = enter::long(py, |control| {
            pair.quality(of, states, &bias, (range_nm, points), control)
        })?;
        warn_light(py, atom)?;
        Ok(PyQuality { inner })
    }

    /// The pair with the tones that drive b <- a on resonance: their frequencies
    /// differ by the splitting, about the mean of today's. Tones gigahertz apart
    /// differ in their wave vectors, and so in kick and flux.
    #[pyo3(signature = (atom, a, b, *, field_gauss, field_direction=None), text_signature = "($self, atom, a, b, *, field_gauss, field_direction=(0, 0, 1))")]
    fn on_resonance(
        &self,
        atom: &Bound<'_, PyAtom>,
        a: &Bound<'_, PyAny>,
        b: &Bound<'_, PyAny>,
        field_gauss: &Bound<'_, PyAny>,
        field_direction: Option<&Bound<'_, PyAny>>,
    ) -> PyResult<Self> {
        let (py, atom) = (atom.py(), atom.get());
        let states = (state(a, "a")?, state(b, "b")?);
        let bias = bias(Some(field_gauss), field_direction)?;
        let inner = enter::short(py, || self.inner.on_resonance(&atom.inner, states, &bias))?;
        Ok(Self { inner })
    }
}
