//! `Lattice`: the geometry and everything that follows from the depth.

use fluxloom_core::Lattice;
use fluxloom_core::lattice::{BandsInput, Hop, LatticeInput, Transfer, WannierInput};
use fluxloom_core::limits;
use pyo3::prelude::*;
use pyo3::types::PyDict;

use crate::atom::PyAtom;
use crate::bands::{PyBands, PyWannier};
use crate::convert::{Numbers, count, number, numbers, shaped, size, vector};
use crate::documents::{self, document};
use crate::enter;
use crate::errors::raise_core;

/// A one-dimensional optical lattice of two beams.
///
/// Parameters
/// ----------
/// wavelength_nm : float
///     Vacuum wavelength of both beams, 100 to 20000 nm.
/// depth_er : float
///     Peak-to-peak depth in lattice recoils, above 0 up to 1000.
/// angle_deg : float
///     Full angle between the beams, above 0 up to 180 (retro-reflected).
/// axis : three floats
///     Direction of the lattice; only the direction counts.
///
/// Raises
/// ------
/// InputError
///     For a number outside its range or an axis without direction.
///
/// Examples
/// --------
/// >>> import fluxloom as fl
/// >>> lattice = fl.Lattice(wavelength_nm=1064.0, depth_er=6.0)
/// >>> lattice.spacing_nm
/// 532.0
/// >>> round(lattice.tunnelling_er(), 6)
/// 0.050773
#[pyclass(frozen, eq, module = "fluxloom", name = "Lattice")]
#[derive(PartialEq)]
pub struct PyLattice {
    pub inner: Lattice,
}

document!(PyLattice);

/// The index of a band; the lowest unless given.
pub fn band(value: Option<&Bound<'_, PyAny>>, field: &str) -> PyResult<usize> {
    value.map_or(Ok(0), |value| size(value, &limits::BAND, field))
}

fn reach(value: Option<&Bound<'_, PyAny>>, default: i32) -> PyResult<i32> {
    let Some(value) = value else { return Ok(default) };
    let found = count(value, &limits::REACH, "reach")?;
    i32::try_from(found).map_err(|_| crate::errors::wrong_type("reach", value, "a count"))
}

#[pymethods]
impl PyLattice {
    #[new]
    #[pyo3(signature = (*, wavelength_nm, depth_er, angle_deg=None, axis=None), text_signature = "(*, wavelength_nm, depth_er, angle_deg=180.0, axis=(1, 0, 0))")]
    fn new(
        py: Python<'_>,
        wavelength_nm: &Bound<'_, PyAny>,
        depth_er: &Bound<'_, PyAny>,
        angle_deg: Option<&Bound<'_, PyAny>>,
        axis: Option<&Bound<'_, PyAny>>,
    ) -> PyResult<Self> {
        let mut input = LatticeInput {
            wavelength_nm: number(wavelength_nm, "wavelength_nm")?,
            depth_er: number(depth_er, "depth_er")?,
            ..LatticeInput::RETRO
        };
        if let Some(angle_deg) = angle_deg {
            input.angle_deg = number(angle_deg, "angle_deg")?;
        }
        if let Some(axis) = axis {
            input.axis = vector(axis, "axis")?;
        }
        Ok(Self { inner: Lattice::new(input).map_err(|error| raise_core(py, error))? })
    }

    /// Vacuum wavelength of the beams.
    #[getter]
    fn wavelength_nm(&self) -> f64 {
        self.inner.wavelength_nm()
    }

    /// Peak-to-peak depth in lattice recoils.
    #[getter]
    fn depth_er(&self) -> f64 {
        self.inner.depth_er()
    }

    /// Full angle between the beams.
    #[getter]
    fn angle_deg(&self) -> f64 {
        self.inner.angle_deg()
    }

    /// Direction of the lattice as given.
    #[getter]
    fn axis(&self) -> (f64, f64, f64) {
        self.inner.axis().into()
    }

    /// Distance between neighbouring sites, wavelength/(2 sin(angle/2)).
    #[getter]
    fn spacing_nm(&self) -> f64 {
        self.inner.spacing_nm()
    }

    /// The same lattice with some arguments changed.
    #[pyo3(signature = (**changes))]
    fn replace<'py>(
        slf: &Bound<'py, Self>,
        changes: Option<&Bound<'py, PyDict>>,
    ) -> PyResult<Bound<'py, PyAny>> {
        let names = ["wavelength_nm", "depth_er", "angle_deg", "axis"];
        documents::replace(slf, slf.get_type().as_any(), &names, changes)
    }

    /// Lattice recoil over h, h/(8 m a^2), in hertz.
    fn recoil_hz(&self, atom: &PyAtom) -> f64 {
        self.inner.recoil_hz(&atom.inner)
    }

    /// Peak-to-peak depth over h, in hertz.
    fn depth_hz(&self, atom: &PyAtom) -> f64 {
        self.inner.depth_hz(&atom.inner)
    }

    /// Tunnelling t_r over ``reach`` sites in lattice recoils, from the exact band.
    ///
    /// The Hamiltonian contains -t; the sign is kept (lowest band: t_1 > 0,
    /// t_2 < 0; odd bands: t_1 < 0). ``reach=0`` gives minus the band's mean. Hops
    /// beyond the nearest are good to 1e-16 of the nearest.
    #[pyo3(signature = (*, reach=None, band=None), text_signature = "($self, *, reach=1, band=0)")]
    fn tunnelling_er(
        &self,
        py: Python<'_>,
        reach: Option<&Bound<'_, PyAny>>,
        band: Option<&Bound<'_, PyAny>>,
    ) -> PyResult<f64> {
        let hop = Hop { reach: self::reach(reach, 1)?, band: self::band(band, "band")? };
        enter::short(py, || self.inner.tunnelling_er(hop))
    }

    /// Tunnelling t_r/h over ``reach`` sites in hertz; see ``tunnelling_er``.
    #[pyo3(signature = (atom, *, reach=None, band=None), text_signature = "($self, atom, *, reach=1, band=0)")]
    fn tunnelling_hz(
        &self,
        py: Python<'_>,
        atom: &PyAtom,
        reach: Option<&Bound<'_, PyAny>>,
        band: Option<&Bound<'_, PyAny>>,
    ) -> PyResult<f64> {
        let hop = Hop { reach: self::reach(reach, 1)?, band: self::band(band, "band")? };
        enter::short(py, || self.inner.tunnelling_hz(&atom.inner, hop))
    }

    /// The lowest bands over the zone, quasimomenta ``linspace(-1, 1, points)`` in k_L.
    #[pyo3(signature = (*, count=None, points=None), text_signature = "($self, *, count=4, points=101)")]
    fn bands(
        &self,
        py: Python<'_>,
        count: Option<&Bound<'_, PyAny>>,
        points: Option<&Bound<'_, PyAny>>,
    ) -> PyResult<PyBands> {
        let mut input = BandsInput::default();
        if let Some(value) = count {
            input.count = size(value, &limits::BAND_COUNT, "count")?;
        }
        if let Some(value) = points {
            input.points = size(value, &limits::POINTS, "points")?;
        }
        Ok(PyBands { inner: enter::long(py, |control| self.inner.bands(input, control))? })
    }

    /// Effective mass over the atom's mass at q = 0, 2/E''(0); negative where
    /// the band is curved downwards.
    #[pyo3(signature = (*, band=None), text_signature = "($self, *, band=0)")]
    fn effective_mass(&self, py: Python<'_>, band: Option<&Bound<'_, PyAny>>) -> PyResult<f64> {
        let band = self::band(band, "band")?;
        enter::short(py, || self.inner.effective_mass(band))
    }

    /// Integral of w^4 over the Wannier function w, in units of k_L = pi/a.
    #[pyo3(signature = (*, band=None), text_signature = "($self, *, band=0)")]
    fn onsite_integral(&self, py: Python<'_>, band: Option<&Bound<'_, PyAny>>) -> PyResult<f64> {
        let band = self::band(band, "band")?;
        enter::long(py, |control| self.inner.onsite_integral(band, control))
    }

    /// The Wannier function of a band on a grid of ``sites * points_per_site + 1``
    /// points centred on its site: real, even in even bands, odd with a positive
    /// slope in odd bands.
    ///
    /// Raises
    /// ------
    /// NumericalError
    ///     ``lattice.not_localised`` where the band all but touches a neighbour, so
    ///     that its functions spread over more than 262144 sites.
    #[pyo3(signature = (*, band=None, points_per_site=None, sites=None), text_signature = "($self, *, band=0, points_per_site=64, sites=8)")]
    fn wannier(
        &self,
        py: Python<'_>,
        band: Option<&Bound<'_, PyAny>>,
        points_per_site: Option<&Bound<'_, PyAny>>,
        sites: Option<&Bound<'_, PyAny>>,
    ) -> PyResult<PyWannier> {
        let mut input = WannierInput { band: self::band(band, "band")?, ..WannierInput::default() };
        if let Some(value) = points_per_site {
            input.points_per_site = size(value, &limits::POINTS_PER_SITE, "points_per_site")?;
        }
        if let Some(value) = sites {
            input.sites = size(value, &limits::WANNIER_SITES, "sites")?;
        }
        Ok(PyWannier { inner: enter::long(py, |control| self.inner.wannier(input, control))? })
    }

    /// O_d: what a kick (in k_L; a number or an array) leaves between Wannier functions.
    ///
    /// <w_d| exp(i kick k_L x) |w_0> = exp(i pi kick d/2) O_d within a band,
    /// d = ``reach``. Between bands (``reach=0`` only) the element itself for
    /// bands of equal parity, its imaginary part otherwise.
    #[pyo3(signature = (kick, *, reach=None, band=None, to_band=None), text_signature = "($self, kick, *, reach=0, band=0, to_band=0)")]
    fn kick_overlap<'py>(
        &self,
        py: Python<'py>,
        kick: &Bound<'py, PyAny>,
        reach: Option<&Bound<'py, PyAny>>,
        band: Option<&Bound<'py, PyAny>>,
        to_band: Option<&Bound<'py, PyAny>>,
    ) -> PyResult<Bound<'py, PyAny>> {
        let band = self::band(band, "band")?;
        let transfer = Transfer {
            reach: self::reach(reach, 0)?,
            band,
            to_band: self::band(to_band, "to_band")?,
        };
        let kicks = numbers(kick, "kick")?;
        kicks.check(py, &limits::KICK, "kick")?;
        let Numbers { shape, values } = kicks;
        let found = if let [kick] = values.as_slice() {
            vec![enter::short(py, || self.inner.kick_overlap(*kick, transfer))?]
        } else {
            enter::long(py, |control| self.inner.kick_overlaps_of(&values, transfer, control))?
        };
        shaped(py, &shape, found)
    }

    /// Curvature of a harmonic trap over the sites, m (2 pi trap_hz)^2 a^2/h, in hertz.
    #[pyo3(signature = (atom, *, trap_hz))]
    fn trap_curvature_hz(&self, atom: &PyAtom, trap_hz: &Bound<'_, PyAny>) -> PyResult<f64> {
        let py = trap_hz.py();
        let trap_hz = number(trap_hz, "trap_hz")?;
        self.inner.trap_curvature_hz(&atom.inner, trap_hz).map_err(|error| raise_core(py, error))
    }

    /// Energy step from site to site under an acceleration along the lattice, m g a/h, in hertz.
    #[pyo3(signature = (atom, *, acceleration_m_per_s2))]
    fn tilt_hz(&self, atom: &PyAtom, acceleration_m_per_s2: &Bound<'_, PyAny>) -> PyResult<f64> {
        let py = acceleration_m_per_s2.py();
        let acceleration = number(acceleration_m_per_s2, "acceleration_m_per_s2")?;
        self.inner.tilt_hz(&atom.inner, acceleration).map_err(|error| raise_core(py, error))
    }

    fn __repr__(&self) -> String {
        let lattice = &self.inner;
        let [x, y, z] = lattice.axis();
        format!(
            "Lattice(wavelength_nm={:?}, depth_er={:?}, angle_deg={:?}, axis=({x:?}, {y:?}, {z:?}))",
            lattice.wavelength_nm(),
            lattice.depth_er(),
            lattice.angle_deg()
        )
    }
}
