//! `FluxCheck`, the verdict on a wavelength.

use fluxloom_core::limits;
use fluxloom_plan::check::NearFraction;
use fluxloom_plan::{CheckOptions, FluxCheck, check_flux as check};
use pyo3::prelude::*;
use pyo3::types::PyTuple;

use crate::convert::{flux, number, python_flux, python_fraction, small_count};
use crate::documents::document;
use crate::enter;
use crate::errors::wrong_type;
use crate::lattice::PyLattice;
use crate::raman::PyRamanPair;

/// The verdict on one Raman pair, one lattice and one target flux.
///
/// flux = branch + sense * target + error; over N sites the error turns the
/// phase by 2 pi error (N - 1), and the target is met when that stays within
/// the phase budget.
#[pyclass(frozen, eq, module = "fluxloom", name = "FluxCheck")]
#[derive(PartialEq)]
pub struct PyFluxCheck {
    pub inner: FluxCheck,
}

document!(PyFluxCheck);

#[pymethods]
impl PyFluxCheck {
    /// Whether |phase_error_rad| <= phase_budget_rad.
    #[getter]
    fn meets_target(&self) -> bool {
        self.inner.meets_target
    }

    /// The verdict in one sentence.
    #[getter]
    fn verdict(&self) -> &str {
        &self.inner.verdict
    }

    /// The lattice that was judged.
    #[getter]
    fn lattice(&self) -> PyLattice {
        PyLattice { inner: self.inner.lattice.clone() }
    }

    /// The Raman pair that was judged.
    #[getter]
    fn raman(&self) -> PyRamanPair {
        PyRamanPair { inner: self.inner.raman }
    }

    /// The flux that was wanted: a Fraction or a float.
    #[getter]
    fn target<'py>(&self, py: Python<'py>) -> PyResult<Bound<'py, PyAny>> {
        python_flux(py, self.inner.target)
    }

    /// Number of sites.
    #[getter]
    fn sites(&self) -> u32 {
        self.inner.sites
    }

    /// Number of legs, or None.
    #[getter]
    fn legs(&self) -> Option<u32> {
        self.inner.legs
    }

    /// Whether the legs close into a tube.
    #[getter]
    fn closed(&self) -> bool {
        self.inner.closed
    }

    /// Flux phase error over the sites that is accepted.
    #[getter]
    fn phase_budget_rad(&self) -> f64 {
        self.inner.phase_budget_rad
    }

    /// Flux per plaquette, signed and unfolded.
    #[getter]
    fn flux(&self) -> f64 {
        self.inner.flux
    }

    /// The flux folded into (-1/2, 1/2].
    #[getter]
    fn folded(&self) -> f64 {
        self.inner.folded
    }

    /// The integer part of flux = branch + sense * target + error.
    #[getter]
    fn branch(&self) -> i64 {
        self.inner.branch
    }

    /// +1, or -1 for swapped roles; a tie is +1.
    #[getter]
    fn sense(&self) -> i8 {
        self.inner.sense.into()
    }

    /// Signed flux error.
    #[getter]
    fn error(&self) -> f64 {
        self.inner.error
    }

    /// Signed phase error over the sites, 2 pi error (sites - 1).
    #[getter]
    fn phase_error_rad(&self) -> f64 {
        self.inner.phase_error_rad
    }

    /// Up to five fractions next to the folded flux, nearest first, with
    /// denominators up to the number of sites.
    #[getter]
    fn nearest<'py>(&self, py: Python<'py>) -> PyResult<Bound<'py, PyTuple>> {
        let near = self.inner.nearest.iter().map(|near| PyNearFraction { inner: *near });
        PyTuple::new(py, near.collect::<Vec<_>>())
    }

    /// Nearest wavelength that hits, or None; for beams of two wavelengths that
    /// of the absorbed one, the other held.
    #[getter]
    fn exact_wavelength_nm(&self) -> Option<f64> {
        self.inner.exact_wavelength_nm
    }

    /// Half-width about it within which the budget is kept, or None.
    #[getter]
    fn wavelength_tolerance_nm(&self) -> Option<f64> {
        self.inner.wavelength_tolerance_nm
    }

    /// Nearest crossing angle that hits, or None.
    #[getter]
    fn exact_angle_deg(&self) -> Option<f64> {
        self.inner.exact_angle_deg
    }

    /// Half-width about it within which the budget is kept, or None.
    #[getter]
    fn angle_tolerance_deg(&self) -> Option<f64> {
        self.inner.angle_tolerance_deg
    }

    /// O_0 of the kick: multiplies every Raman coupling.
    #[getter]
    fn kick_overlap(&self) -> f64 {
        self.inner.kick_overlap
    }

    /// |O_1/O_0|, the weight of diagonal links; None where O_0 vanishes.
    #[getter]
    fn diagonal_ratio(&self) -> Option<f64> {
        self.inner.diagonal_ratio
    }

    /// Tube only: flux round the loop of legs, all links alike.
    #[getter]
    fn loop_flux(&self) -> Option<f64> {
        self.inner.loop_flux
    }

    /// Tube only: distance mu of the loop flux from the nearest integer.
    #[getter]
    fn closure_mismatch(&self) -> Option<f64> {
        self.inner.closure_mismatch
    }

    /// Tube only: |sin(pi N mu)/(N sin(pi mu))|.
    #[getter]
    fn closure_overlap(&self) -> Option<f64> {
        self.inner.closure_overlap
    }

    /// Tube only: whether the loop phase acts on this cloud (overlap >= 0.5).
    #[getter]
    fn loop_phase_is_physical(&self) -> Option<bool> {
        self.inner.loop_phase_is_physical
    }

    /// The numbers of the check as aligned lines of text.
    fn table(&self) -> String {
        fluxloom_plan::verdict::table(&self.inner)
    }

    /// Draws the flux against the wavelength with the target's branches and
    /// tolerance band; returns the axes.
    #[pyo3(signature = (ax=None))]
    fn plot<'py>(
        slf: &Bound<'py, Self>,
        ax: Option<&Bound<'py, PyAny>>,
    ) -> PyResult<Bound<'py, PyAny>> {
        slf.py().import("fluxloom.plots")?.getattr("flux_check")?.call1((slf, ax))
    }

    fn _repr_html_<'py>(slf: &Bound<'py, Self>) -> PyResult<Bound<'py, PyAny>> {
        crate::display(slf.py(), "check_html")?.call1((slf,))
    }

    fn __repr__(&self) -> String {
        format!("<FluxCheck {}>", self.inner.verdict)
    }
}

/// A fraction next to a flux.
#[pyclass(frozen, eq, module = "fluxloom", name = "NearFraction")]
#[derive(PartialEq)]
pub struct PyNearFraction {
    inner: NearFraction,
}

document!(PyNearFraction);

#[pymethods]
impl PyNearFraction {
    /// The fraction, as a ``fractions.Fraction``.
    #[getter]
    fn fraction<'py>(&self, py: Python<'py>) -> PyResult<Bound<'py, PyAny>> {
        python_fraction(py, self.inner.fraction)
    }

    /// Signed phase by which the flux runs away from it over the sites.
    #[getter]
    fn phase_error_rad(&self) -> f64 {
        self.inner.phase_error_rad
    }

    fn __repr__(&self) -> String {
        format!("<{}, off by {:.3} rad>", self.inner.fraction, self.inner.phase_error_rad)
    }
}

/// How a check was asked for, as far as Python's arguments go.
pub struct Judging<'a, 'py> {
    pub sites: Option<&'a Bound<'py, PyAny>>,
    pub legs: Option<&'a Bound<'py, PyAny>>,
    pub closed: &'a Bound<'py, PyAny>,
    pub phase_budget_rad: Option<&'a Bound<'py, PyAny>>,
}

impl Judging<'_, '_> {
    /// The options; sites stay 0 where none were given.
    pub fn options(&self) -> PyResult<CheckOptions> {
        let mut options = CheckOptions::default();
        if let Some(sites) = self.sites {
            options.sites = small_count(sites, &limits::SITES, "sites")?;
        }
        if let Some(legs) = self.legs {
            options.legs = Some(small_count(legs, &limits::LEGS, "legs")?);
        }
        options.closed = self
            .closed
            .extract()
            .map_err(|_| wrong_type("closed", self.closed, "True or False"))?;
        if let Some(budget) = self.phase_budget_rad {
            options.phase_budget_rad = number(budget, "phase_budget_rad")?;
        }
        Ok(options)
    }
}

/// Judges a Raman pair on a lattice against a target flux.
///
/// Parameters
/// ----------
/// lattice : Lattice
/// raman : RamanPair
/// target : str, (int, int), Fraction or float
///     Flux in flux quanta per plaquette, such as ``"3/8"``.
/// sites : int
///     Number of sites the atoms cover, 2 to 10^6.
/// legs : int, optional
///     Number of legs; needed for a tube.
/// closed : bool
///     Whether the last leg couples back to the first; every link, the closing
///     one included, is taken to carry the same flux in the same sense.
/// phase_budget_rad : float
///     Flux phase error over the sites that is accepted.
///
/// Returns
/// -------
/// FluxCheck
///
/// Examples
/// --------
/// >>> import fluxloom as fl
/// >>> lattice = fl.Lattice(wavelength_nm=1064.0, depth_er=6.0)
/// >>> raman = fl.RamanPair(wavelength_nm=769.0)
/// >>> check = fl.check_flux(lattice, raman, "3/8", sites=60)
/// >>> check.meets_target, round(check.phase_error_rad, 2)
/// (False, 3.19)
/// >>> round(check.exact_wavelength_nm, 3)
/// 773.818
#[pyfunction]
#[pyo3(signature = (lattice, raman, target, *, sites, legs=None, closed=None, phase_budget_rad=None), text_signature = "(lattice, raman, target, *, sites, legs=None, closed=False, phase_budget_rad=0.5)")]
pub fn check_flux(
    py: Python<'_>,
    lattice: &PyLattice,
    raman: &PyRamanPair,
    target: &Bound<'_, PyAny>,
    sites: &Bound<'_, PyAny>,
    legs: Option<&Bound<'_, PyAny>>,
    closed: Option<&Bound<'_, PyAny>>,
    phase_budget_rad: Option<&Bound<'_, PyAny>>,
) -> PyResult<PyFluxCheck> {
    let open = pyo3::types::PyBool::new(py, false).to_owned().into_any();
    let judging =
        Judging { sites: Some(sites), legs, closed: closed.unwrap_or(&open), phase_budget_rad };
    let options = judging.options()?;
    let target = flux(target, "target")?;
    let inner = enter::short(py, || check(&lattice.inner, &raman.inner, target, options))?;
    Ok(PyFluxCheck { inner })
}
