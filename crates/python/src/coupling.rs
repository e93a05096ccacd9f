//! What the beams of a Raman pair couple.

use fluxloom_core::limits;
use numpy::{Complex64, IntoPyArray, PyArrayMethods};
use pyo3::prelude::*;
use pyo3::types::{PyComplex, PyTuple};

use crate::convert::{number, pair as range, size};
use crate::coupling_results::{PyCoupling, PyQuality, PyStrayCoupling};
use crate::enter;
use crate::lattice::PyLattice;
use crate::raman::PyRamanPair;
use crate::state::{atom, bias, flag, state, uncertain, warn_light};

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
    #[pyo3(signature = (atom, a, b, *, field_gauss, field_direction=None, uncertainty=None), text_signature = "($self, atom, a, b, *, field_gauss, field_direction=(0, 0, 1), uncertainty=False)")]
    fn rabi_hz<'py>(
        &self,
        atom: &Bound<'py, PyAny>,
        a: &Bound<'py, PyAny>,
        b: &Bound<'py, PyAny>,
        field_gauss: &Bound<'py, PyAny>,
        field_direction: Option<&Bound<'py, PyAny>>,
        uncertainty: Option<&Bound<'py, PyAny>>,
    ) -> PyResult<Bound<'py, PyAny>> {
        let (py, atom) = (atom.py(), self::atom(atom)?);
        let states = (state(a, "a")?, state(b, "b")?);
        let bias = bias(Some(field_gauss), field_direction)?;
        let (pair, of) = (&self.inner, &atom.inner);
        let complex = |value: Complex64| PyComplex::from_doubles(py, value.re, value.im).into_any();
        if flag(uncertainty, "uncertainty")? {
            let (value, error) = enter::long(py, |_| pair.rabi_with_error_hz(of, states, &bias))?;
            warn_light(py, atom, self.wavelengths())?;
            let error = error.into_pyobject(py)?.into_any();
            return uncertain(py, complex(value), error, of.unconfirmed_in_light());
        }
        let value = enter::short(py, || pair.rabi_hz(of, states, &bias))?;
        warn_light(py, atom, self.wavelengths())?;
        Ok(complex(value))
    }

    /// Rabi frequencies between all states of the ground manifold, ``[b, a]`` for
    /// b <- a, in the order of ``atom.ground_levels(...).states``. The diagonal
    /// holds twice the light shifts that go with the kick.
    #[pyo3(signature = (atom, *, field_gauss, field_direction=None), text_signature = "($self, atom, *, field_gauss, field_direction=(0, 0, 1))")]
    fn rabi_matrix_hz<'py>(
        &self,
        atom: &Bound<'py, PyAny>,
        field_gauss: &Bound<'py, PyAny>,
        field_direction: Option<&Bound<'py, PyAny>>,
    ) -> PyResult<Bound<'py, PyAny>> {
        let (py, atom) = (atom.py(), self::atom(atom)?);
        let bias = bias(Some(field_gauss), field_direction)?;
        let matrix = enter::short(py, || self.inner.rabi_matrix_hz(&atom.inner, &bias))?;
        warn_light(py, atom, self.wavelengths())?;
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
    #[pyo3(signature = (atom, a, b, *, field_gauss, field_direction=None, lattice=None, uncertainty=None), text_signature = "($self, atom, a, b, *, field_gauss, field_direction=(0, 0, 1), lattice=None, uncertainty=False)")]
    fn coupling<'py>(
        &self,
        atom: &Bound<'py, PyAny>,
        a: &Bound<'py, PyAny>,
        b: &Bound<'py, PyAny>,
        field_gauss: &Bound<'py, PyAny>,
        field_direction: Option<&Bound<'py, PyAny>>,
        lattice: Option<&PyLattice>,
        uncertainty: Option<&Bound<'py, PyAny>>,
    ) -> PyResult<Bound<'py, PyAny>> {
        let (py, atom) = (atom.py(), self::atom(atom)?);
        let states = (state(a, "a")?, state(b, "b")?);
        let bias = bias(Some(field_gauss), field_direction)?;
        let lattice = lattice.map(|lattice| &lattice.inner);
        let (pair, of) = (&self.inner, &atom.inner);
        let inner = enter::long(py, |_| pair.coupling(of, states, &bias, lattice))?;
        if !flag(uncertainty, "uncertainty")? {
            warn_light(py, atom, self.wavelengths())?;
            return Ok(Bound::new(py, PyCoupling { inner })?.into_any());
        }
        let (value, error) = enter::long(py, |_| pair.rabi_with_error_hz(of, states, &bias))?;
        warn_light(py, atom, self.wavelengths())?;
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
        atom: &Bound<'py, PyAny>,
        a: &Bound<'py, PyAny>,
        b: &Bound<'py, PyAny>,
        field_gauss: &Bound<'py, PyAny>,
        field_direction: Option<&Bound<'py, PyAny>>,
        reflection: Option<&Bound<'py, PyAny>>,
    ) -> PyResult<Bound<'py, PyTuple>> {
        let (py, atom) = (atom.py(), self::atom(atom)?);
        let states = (state(a, "a")?, state(b, "b")?);
        let bias = bias(Some(field_gauss), field_direction)?;
        let reflection = reflection.map_or(Ok(REFLECTION), |value| number(value, "reflection"))?;
        let (pair, of) = (&self.inner, &atom.inner);
        let found = enter::long(py, |_| pair.stray_couplings(of, states, &bias, reflection))?;
        warn_light(py, atom, self.wavelengths())?;
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
        atom: &Bound<'py, PyAny>,
        a: &Bound<'py, PyAny>,
        b: &Bound<'py, PyAny>,
        range_nm: &Bound<'py, PyAny>,
        field_gauss: &Bound<'py, PyAny>,
        points: Option<&Bound<'py, PyAny>>,
        field_direction: Option<&Bound<'py, PyAny>>,
    ) -> PyResult<PyQuality> {
        let (py, atom) = (atom.py(), self::atom(atom)?);
        let states = (state(a, "a")?, state(b, "b")?);
        let bias = bias(Some(field_gauss), field_direction)?;
        let range_nm = range(range_nm, "range_nm")?;
        let points =
            points.map_or(Ok(POINTS), |value| size(value, &limits::CURVE_POINTS, "points"))?;
        let (pair, of) = (&self.inner, &atom.inner);
        let inner = enter::long(py, |control| {
            pair.quality(of, states, &bias, (range_nm, points), control)
        })?;
        warn_light(py, atom, self.wavelengths())?;
        Ok(PyQuality { inner })
    }

    /// The pair with the tones that drive b <- a on resonance: their frequencies
    /// differ by the splitting, about the mean of today's. Tones gigahertz apart
    /// differ in their wave vectors, and so in kick and flux.
    #[pyo3(signature = (atom, a, b, *, field_gauss, field_direction=None), text_signature = "($self, atom, a, b, *, field_gauss, field_direction=(0, 0, 1))")]
    fn on_resonance(
        &self,
        atom: &Bound<'_, PyAny>,
        a: &Bound<'_, PyAny>,
        b: &Bound<'_, PyAny>,
        field_gauss: &Bound<'_, PyAny>,
        field_direction: Option<&Bound<'_, PyAny>>,
    ) -> PyResult<Self> {
        let (py, atom) = (atom.py(), self::atom(atom)?);
        let states = (state(a, "a")?, state(b, "b")?);
        let bias = bias(Some(field_gauss), field_direction)?;
        let inner = enter::short(py, || self.inner.on_resonance(&atom.inner, states, &bias))?;
        Ok(Self { inner })
    }
}

impl PyRamanPair {
    /// Wavelengths of the beams, if there are any.
    fn wavelengths(&self) -> Vec<f64> {
        let beams = self.inner.given_beams().map(Vec::from).unwrap_or_default();
        beams.iter().map(fluxloom_core::Beam::wavelength_nm).collect()
    }
}
