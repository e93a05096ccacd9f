//! `RamanPair` and the `Solution` of an inverse problem.

use fluxloom_core::flux::Solution;
use fluxloom_core::{Crossing, Directions, RamanPair};
use pyo3::prelude::*;
use pyo3::types::PyDict;

use crate::convert::{number, vector};
use crate::documents::{self, document};
use crate::errors::raise_core;
use crate::lattice::PyLattice;

/// The light of one Raman link: two beams of one wavelength crossing at an angle.
///
/// Parameters
/// ----------
/// wavelength_nm : float
///     Vacuum wavelength of both beams, 100 to 20000 nm.
/// angle_deg : float
///     Full angle between the beams: 0 co-propagating, 180 counter-propagating.
/// tilt_deg : float
///     Angle between the difference of the wave vectors and the lattice axis,
///     whatever the direction of that axis.
///
/// Examples
/// --------
/// >>> import fluxloom as fl
/// >>> lattice = fl.Lattice(wavelength_nm=1064.0, depth_er=6.0)
/// >>> pair = fl.RamanPair(wavelength_nm=769.0, angle_deg=31.451)
/// >>> round(pair.flux(lattice), 6)
/// 0.375
/// >>> pair.swapped().flux(lattice) == -pair.flux(lattice)
/// True
#[pyclass(frozen, eq, module = "fluxloom", name = "RamanPair")]
#[derive(PartialEq)]
pub struct PyRamanPair {
    pub inner: RamanPair,
}

document!(PyRamanPair);

#[pymethods]
impl PyRamanPair {
    #[new]
    #[pyo3(signature = (*, wavelength_nm, angle_deg=None, tilt_deg=None), text_signature = "(*, wavelength_nm, angle_deg=180.0, tilt_deg=0.0)")]
    fn new(
        py: Python<'_>,
        wavelength_nm: &Bound<'_, PyAny>,
        angle_deg: Option<&Bound<'_, PyAny>>,
        tilt_deg: Option<&Bound<'_, PyAny>>,
    ) -> PyResult<Self> {
        let crossing = Crossing {
            wavelength_nm: number(wavelength_nm, "wavelength_nm")?,
            angle_deg: angle_deg.map_or(Ok(180.0), |value| number(value, "angle_deg"))?,
            tilt_deg: tilt_deg.map_or(Ok(0.0), |value| number(value, "tilt_deg"))?,
        };
        Ok(Self { inner: RamanPair::crossing(crossing).map_err(|error| raise_core(py, error))? })
    }

    /// Beams by their directions, each with its wavelength.
    ///
    /// Parameters
    /// ----------
    /// absorb, emit : three floats
    ///     Directions of the beams that photons are absorbed from and emitted
    ///     into; without ``emit`` a single-photon (clock) link.
    /// absorb_wavelength_nm, emit_wavelength_nm : float
    ///     Vacuum wavelengths; without the second both beams have the first.
    #[staticmethod]
    #[pyo3(signature = (*, absorb, absorb_wavelength_nm, emit=None, emit_wavelength_nm=None))]
    fn from_directions(
        py: Python<'_>,
        absorb: &Bound<'_, PyAny>,
        absorb_wavelength_nm: &Bound<'_, PyAny>,
        emit: Option<&Bound<'_, PyAny>>,
        emit_wavelength_nm: Option<&Bound<'_, PyAny>>,
    ) -> PyResult<Self> {
        let directions = Directions {
            absorb: vector(absorb, "absorb")?,
            absorb_wavelength_nm: number(absorb_wavelength_nm, "absorb_wavelength_nm")?,
            emit: emit.map(|value| vector(value, "emit")).transpose()?,
            emit_wavelength_nm: emit_wavelength_nm
                .map(|value| number(value, "emit_wavelength_nm"))
                .transpose()?,
        };
        let inner = RamanPair::from_directions(directions);
        Ok(Self { inner: inner.map_err(|error| raise_core(py, error))? })
    }

    /// Vacuum wavelength; None for a pair given by directions.
    #[getter]
    fn wavelength_nm(&self) -> Option<f64> {
        self.inner.as_crossing().map(|crossing| crossing.wavelength_nm)
    }

    /// Full crossing angle; None for a pair given by directions.
    #[getter]
    fn angle_deg(&self) -> Option<f64> {
        self.inner.as_crossing().map(|crossing| crossing.angle_deg)
    }

    /// Angle between momentum transfer and lattice; None for a pair given by directions.
    #[getter]
    fn tilt_deg(&self) -> Option<f64> {
        self.inner.as_crossing().map(|crossing| crossing.tilt_deg)
    }

    /// Direction of the absorbed beam; None for a pair given by its angle.
    #[getter]
    fn absorb(&self) -> Option<(f64, f64, f64)> {
        self.inner.as_directions().map(|directions| directions.absorb.into())
    }

    /// Wavelength of the absorbed beam; None for a pair given by its angle.
    #[getter]
    fn absorb_wavelength_nm(&self) -> Option<f64> {
        self.inner.as_directions().map(|directions| directions.absorb_wavelength_nm)
    }

    /// Direction of the emitted beam, if there is one.
    #[getter]
    fn emit(&self) -> Option<(f64, f64, f64)> {
        self.inner.as_directions().and_then(|directions| directions.emit).map(Into::into)
    }

    /// Wavelength of the emitted beam, if it was given.
    #[getter]
    fn emit_wavelength_nm(&self) -> Option<f64> {
        self.inner.as_directions().and_then(|directions| directions.emit_wavelength_nm)
    }

    /// Whether absorption and emission are exchanged with respect to the arguments.
    #[getter]
    fn roles_swapped(&self) -> bool {
        self.inner.roles_swapped()
    }

    /// The beams of the pair: a pair given by its geometry has none.
    #[getter]
    fn beams(&self, py: Python<'_>) -> PyResult<Py<PyAny>> {
        Err(raise_core(py, fluxloom_core::Error::NoBeams))
    }

    /// Flux per plaquette on a lattice, signed and unfolded, in flux quanta.
    fn flux(&self, lattice: &PyLattice) -> f64 {
        self.inner.flux(&lattice.inner)
    }

    /// Momentum kick along the lattice in k_L: twice the flux.
    fn kick(&self, lattice: &PyLattice) -> f64 {
        self.inner.kick(&lattice.inner)
    }

    /// The same beams with their roles exchanged: the flux changes its sign, exactly.
    fn swapped(&self) -> Self {
        Self { inner: self.inner.swapped() }
    }

    /// The same pair with some arguments changed.
    #[pyo3(signature = (**changes))]
    fn replace<'py>(
        slf: &Bound<'py, Self>,
        changes: Option<&Bound<'py, PyDict>>,
    ) -> PyResult<Bound<'py, PyAny>> {
        let class = slf.get_type().into_any();
        let pair = if slf.get().inner.as_crossing().is_some() {
            documents::replace(slf, &class, &["wavelength_nm", "angle_deg", "tilt_deg"], changes)?
        } else {
            let names = ["absorb", "absorb_wavelength_nm", "emit", "emit_wavelength_nm"];
            documents::replace(slf, &class.getattr("from_directions")?, &names, changes)?
        };
        if slf.get().inner.roles_swapped() { pair.call_method0("swapped") } else { Ok(pair) }
    }

    fn __repr__(&self) -> String {
        let form = self.inner.as_crossing().map_or_else(
            || self.inner.as_directions().map_or_else(String::new, directions_text),
            |Crossing { wavelength_nm, angle_deg, tilt_deg }| {
                format!(
                    "RamanPair(wavelength_nm={wavelength_nm:?}, angle_deg={angle_deg:?}, \
                     tilt_deg={tilt_deg:?})"
                )
            },
        );
        if self.inner.roles_swapped() { form + ".swapped()" } else { form }
    }
}

fn directions_text(directions: Directions) -> String {
    let [x, y, z] = directions.absorb;
    let mut text = format!(
        "RamanPair.from_directions(absorb=({x:?}, {y:?}, {z:?}), absorb_wavelength_nm={:?}",
        directions.absorb_wavelength_nm
    );
    if let Some([x, y, z]) = directions.emit {
        text += &format!(", emit=({x:?}, {y:?}, {z:?})");
    }
    if let Some(wavelength_nm) = directions.emit_wavelength_nm {
        text += &format!(", emit_wavelength_nm={wavelength_nm:?}");
    }
    text + ")"
}

/// One setting that reaches a target flux.
#[pyclass(frozen, eq, module = "fluxloom", name = "Solution")]
#[derive(PartialEq)]
pub struct PySolution {
    pub inner: Solution,
}

document!(PySolution);

#[pymethods]
impl PySolution {
    /// Raman vacuum wavelength.
    #[getter]
    fn wavelength_nm(&self) -> f64 {
        self.inner.wavelength_nm
    }

    /// Full crossing angle.
    #[getter]
    fn angle_deg(&self) -> f64 {
        self.inner.angle_deg
    }

    /// Angle between momentum transfer and lattice.
    #[getter]
    fn tilt_deg(&self) -> f64 {
        self.inner.tilt_deg
    }

    /// Unfolded flux, branch + sense * target.
    #[getter]
    fn flux(&self) -> f64 {
        self.inner.flux
    }

    /// The integer part.
    #[getter]
    fn branch(&self) -> i64 {
        self.inner.branch
    }

    /// +1, or -1 for swapped roles.
    #[getter]
    fn sense(&self) -> i8 {
        self.inner.sense.into()
    }

    /// O_0 of the kick: what is left of the Raman coupling.
    #[getter]
    fn kick_overlap(&self) -> f64 {
        self.inner.kick_overlap
    }

    fn __repr__(&self) -> String {
        let s = &self.inner;
        format!(
            "<Solution {} nm at {} deg: flux {:.6} = {} {} target, kick overlap {:.4}>",
            s.wavelength_nm,
            s.angle_deg,
            s.flux,
            s.branch,
            if i8::from(s.sense) > 0 { '+' } else { '-' },
            s.kick_overlap
        )
    }
}
