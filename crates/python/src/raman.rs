//! `RamanPair` and the `Solution` of an inverse problem.

use fluxloom_core::flux::Solution;
use fluxloom_core::{Beam, Crossing, Directions, RamanPair};
use pyo3::prelude::*;
use pyo3::types::PyDict;

use crate::beam::PyBeam;
use crate::convert::{number, vector};
use crate::documents::{self, document};
use crate::errors::{raise_core, wrong_type};
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

    /// Two beams with all that is known of them: the form that has couplings.
    ///
    /// Parameters
    /// ----------
    /// absorb, emit : Beam
    ///     The beams that photons are absorbed from and emitted into.
    ///
    /// Examples
    /// --------
    /// >>> import fluxloom as fl
    /// >>> def beam(direction, polarisation):
    /// ...     return fl.Beam(wavelength_nm=769.0, power_mw=0.5, waist_um=200.0,
    /// ...                    direction=direction, polarisation=polarisation)
    /// >>> pair = fl.RamanPair.from_beams(absorb=beam((0, 1, 0), (0, 0, 1)),
    /// ...                                emit=beam((1, 0, 0), (0, 1, 0)))
    /// >>> round(pair.flux(fl.Lattice(wavelength_nm=1064.0, depth_er=6.0)), 4)
    /// -0.6918
    #[staticmethod]
    #[pyo3(signature = (*, absorb, emit))]
    fn from_beams(
        py: Python<'_>,
        absorb: &Bound<'_, PyAny>,
        emit: &Bound<'_, PyAny>,
    ) -> PyResult<Self> {
        let inner = RamanPair::from_beams(beam(absorb, "absorb")?, beam(emit, "emit")?);
        Ok(Self { inner: inner.map_err(|error| raise_core(py, error))? })
    }

    /// This pair, given by its crossing angle, with the beams that cross so.
    #[pyo3(signature = (*, absorb, emit))]
    fn with_beams(
        &self,
        py: Python<'_>,
        absorb: &Bound<'_, PyAny>,
        emit: &Bound<'_, PyAny>,
    ) -> PyResult<Self> {
        let inner = self.inner.with_beams(beam(absorb, "absorb")?, beam(emit, "emit")?);
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

    /// Direction of the absorbed beam, or the beam of a pair built from beams; None
    /// for a pair given by its angle.
    #[getter]
    fn absorb<'py>(&self, py: Python<'py>) -> PyResult<Option<Bound<'py, PyAny>>> {
        self.role(py, 0)
    }

    /// Wavelength of the absorbed beam; None for a pair given by its angle.
    #[getter]
    fn absorb_wavelength_nm(&self) -> Option<f64> {
        self.inner.as_directions().map(|directions| directions.absorb_wavelength_nm)
    }

    /// Direction of the emitted beam, if there is one, or the beam of a pair built
    /// from beams.
    #[getter]
    fn emit<'py>(&self, py: Python<'py>) -> PyResult<Option<Bound<'py, PyAny>>> {
        self.role(py, 1)
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

    /// The beams in the roles they play, absorbed and emitted; a pair given by its
    /// geometry has none (``raman.no_beams``).
    #[getter]
    fn beams(&self, py: Python<'_>) -> PyResult<(PyBeam, PyBeam)> {
        let [absorb, emit] = self.inner.beams().map_err(|error| raise_core(py, error))?;
        Ok((PyBeam { inner: absorb }, PyBeam { inner: emit }))
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

    /// The same pair with some arguments changed. One that was given by its angle
    /// loses its beams: they no longer cross so.
    #[pyo3(signature = (**changes))]
    fn replace<'py>(
        slf: &Bound<'py, Self>,
        changes: Option<&Bound<'py, PyDict>>,
    ) -> PyResult<Bound<'py, PyAny>> {
        let class = slf.get_type().into_any();
        let pair = if slf.get().inner.as_crossing().is_some() {
            documents::replace(slf, &class, &["wavelength_nm", "angle_deg", "tilt_deg"], changes)?
        } else if slf.get().inner.has_beams() {
            let names = ["absorb", "emit"];
            documents::replace(slf, &class.getattr("from_beams")?, &names, changes)?
        } else {
            let names = ["absorb", "absorb_wavelength_nm", "emit", "emit_wavelength_nm"];
            documents::replace(slf, &class.getattr("from_directions")?, &names, changes)?
        };
        if slf.get().inner.roles_swapped() { pair.call_method0("swapped") } else { Ok(pair) }
    }

    fn __repr__(&self) -> String {
        let inner = &self.inner;
        let beams = inner.given_beams().map(|[absorb, emit]| {
            let text = |inner| PyBeam { inner }.text();
            format!("absorb={}, emit={}", text(absorb), text(emit))
        });
        let form = match (inner.as_crossing(), inner.as_directions(), beams) {
            (Some(crossing), _, beams) => {
                let Crossing { wavelength_nm, angle_deg, tilt_deg } = crossing;
                let light = beams.map_or_else(String::new, |b| format!(".with_beams({b})"));
                format!(
                    "RamanPair(wavelength_nm={wavelength_nm:?}, angle_deg={angle_deg:?}, \
                     tilt_deg={tilt_deg:?}){light}"
                )
            }
            (None, _, Some(beams)) => format!("RamanPair.from_beams({beams})"),
            (None, directions, None) => directions.map_or_else(String::new, directions_text),
        };
        if self.inner.roles_swapped() { form + ".swapped()" } else { form }
    }
}

impl PyRamanPair {
    /// What was given for the absorbed (0) or emitted (1) beam.
    fn role<'py>(&self, py: Python<'py>, place: usize) -> PyResult<Option<Bound<'py, PyAny>>> {
        let Some(directions) = self.inner.as_directions() else { return Ok(None) };
        if let Some(beams) = self.inner.given_beams() {
            let given = beams.get(place).copied();
            return given.map(|inner| Ok(Bound::new(py, PyBeam { inner })?.into_any())).transpose();
        }
        let direction = if place == 0 { Some(directions.absorb) } else { directions.emit };
        let tuple = |[x, y, z]: [f64; 3]| Ok((x, y, z).into_pyobject(py)?.into_any());
        direction.map(tuple).transpose()
    }
}

fn beam(value: &Bound<'_, PyAny>, field: &str) -> PyResult<Beam> {
    let found = value.cast::<PyBeam>().map_err(|_| wrong_type(field, value, "a Beam"))?;
    Ok(found.get().inner)
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
