//! What beams do to an atom: light shifts, scattering, lattices.

use fluxloom_core::lattice;
use fluxloom_core::light::Scattering;
use pyo3::prelude::*;
use pyo3::types::PyDict;

use crate::atom::{PyAtom, rests_on};
use crate::convert::number;
use crate::documents::document;
use crate::enter;
use crate::state::{
    atom, beams, bias, flag, pair, python_state, state, uncertain, warn_light, wavelengths,
};

/// Photons per second that a state scatters.
#[pyclass(frozen, eq, module = "fluxloom", name = "Scattering")]
#[derive(PartialEq)]
pub struct PyScattering {
    pub inner: Scattering,
}

document!(PyScattering);
rests_on!(PyScattering);

#[pymethods]
impl PyScattering {
    /// The state that scatters.
    #[getter]
    fn state<'py>(&self, py: Python<'py>) -> PyResult<Bound<'py, PyAny>> {
        python_state(py, self.inner.from)
    }

    /// All photons.
    #[getter]
    fn total(&self) -> f64 {
        self.inner.total
    }

    /// Photons that leave the state as it is.
    #[getter]
    fn rayleigh(&self) -> f64 {
        self.inner.rayleigh
    }

    /// Photons that change the state.
    #[getter]
    fn raman(&self) -> f64 {
        self.inner.raman
    }

    /// Photons by final state, a mapping in the order of the atom's states that
    /// cannot be changed.
    #[getter]
    fn to<'py>(&self, py: Python<'py>) -> PyResult<Bound<'py, PyAny>> {
        let rates = PyDict::new(py);
        for (state, rate) in &self.inner.to {
            rates.set_item(python_state(py, *state)?, *rate)?;
        }
        py.import("types")?.getattr("MappingProxyType")?.call1((rates,))
    }

    /// Growth of the mean energy over h: two recoils a photon.
    #[getter]
    fn heating_hz_per_s(&self) -> f64 {
        self.inner.heating_hz_per_s
    }

    fn __float__(&self) -> f64 {
        self.inner.total
    }

    fn _repr_html_<'py>(slf: &Bound<'py, Self>) -> PyResult<Bound<'py, PyAny>> {
        slf.py().import("fluxloom.tables")?.getattr("scattering_html")?.call1((slf,))
    }

    fn __repr__(&self) -> String {
        let Scattering { from, total, rayleigh, raman, .. } = &self.inner;
        format!(
            "<Scattering of {from}: {total:.6e} /s, Rayleigh {rayleigh:.3e}, Raman {raman:.3e}>"
        )
    }
}

#[pymethods]
impl PyAtom {
    /// Light shift of a state over h, in hertz; negative is down.
    ///
    /// First order in the light, on the eigenstates of the field; beams do not
    /// interfere with each other. The atoms are at the origin of the laboratory.
    ///
    /// Parameters
    /// ----------
    /// beams : Beam, RamanPair or list of Beam
    /// f, m : float
    ///     The state; without a field it is quantised along ``field_direction``.
    /// field_gauss : float
    ///     The bias field.
    /// field_direction : three floats
    ///     Its direction.
    /// uncertainty : bool
    ///     Also the standard error: from the atomic data, and from the Zeeman shift
    ///     of the excited states, which is neglected.
    ///
    /// Examples
    /// --------
    /// >>> import fluxloom as fl
    /// >>> trap = fl.Beam(wavelength_nm=1064.0, power_mw=100.0, waist_um=100.0,
    /// ...                direction=(1, 0, 0), polarisation=(0, 0, 1))
    /// >>> round(fl.Atom("87Rb").light_shift_hz(trap, 1, 0))
    /// -20537
    #[pyo3(signature = (beams, f, m, *, field_gauss=None, field_direction=None, uncertainty=None), text_signature = "($self, beams, f, m, *, field_gauss=0.0, field_direction=(0, 0, 1), uncertainty=False)")]
    fn light_shift_hz<'py>(
        &self,
        beams: &Bound<'py, PyAny>,
        f: &Bound<'py, PyAny>,
        m: &Bound<'py, PyAny>,
        field_gauss: Option<&Bound<'py, PyAny>>,
        field_direction: Option<&Bound<'py, PyAny>>,
        uncertainty: Option<&Bound<'py, PyAny>>,
    ) -> PyResult<Bound<'py, PyAny>> {
        let py = f.py();
        let (lights, state) = (self::beams(beams)?, pair((f, m), "")?);
        let bias = bias(field_gauss, field_direction)?;
        if flag(uncertainty, "uncertainty")? {
            let found =
                enter::long(py, |_| self.inner.light_shift_with_error(&lights, state, &bias))?;
            warn_light(py, self, wavelengths(&lights))?;
            let value = found.value.into_pyobject(py)?.into_any();
            let error = found.standard_error.into_pyobject(py)?.into_any();
            return uncertain(py, value, error, self.inner.unconfirmed_in_light());
        }
        let found = enter::short(py, || self.inner.light_shift_hz(&lights, state, &bias))?;
        warn_light(py, self, wavelengths(&lights))?;
        Ok(found.into_pyobject(py)?.into_any())
    }

    /// What the light adds to the splitting E(b) - E(a) over h, in hertz.
    #[pyo3(signature = (beams, a, b, *, field_gauss=None, field_direction=None), text_signature = "($self, beams, a, b, *, field_gauss=0.0, field_direction=(0, 0, 1))")]
    fn differential_shift_hz(
        &self,
        beams: &Bound<'_, PyAny>,
        a: &Bound<'_, PyAny>,
        b: &Bound<'_, PyAny>,
        field_gauss: Option<&Bound<'_, PyAny>>,
        field_direction: Option<&Bound<'_, PyAny>>,
    ) -> PyResult<f64> {
        let py = a.py();
        let lights = self::beams(beams)?;
        let states = (state(a, "a")?, state(b, "b")?);
        let bias = bias(field_gauss, field_direction)?;
        let found = enter::short(py, || self.inner.differential_shift_hz(&lights, states, &bias))?;
        warn_light(py, self, wavelengths(&lights))?;
        Ok(found)
    }

    /// Photons per second that a state scatters, by final state
    /// (Kramers-Heisenberg). Arguments as of ``light_shift_hz``.
    ///
    /// Examples
    /// --------
    /// >>> import fluxloom as fl
    /// >>> trap = fl.Beam(wavelength_nm=1064.0, power_mw=100.0, waist_um=100.0,
    /// ...                direction=(1, 0, 0), polarisation=(0, 0, 1))
    /// >>> rates = fl.Atom("87Rb").scattering_per_s(trap, 1, 0)
    /// >>> round(rates.total, 6)
    /// 0.003617
    #[pyo3(signature = (beams, f, m, *, field_gauss=None, field_direction=None, uncertainty=None), text_signature = "($self, beams, f, m, *, field_gauss=0.0, field_direction=(0, 0, 1), uncertainty=False)")]
    fn scattering_per_s<'py>(
        &self,
        beams: &Bound<'py, PyAny>,
        f: &Bound<'py, PyAny>,
        m: &Bound<'py, PyAny>,
        field_gauss: Option<&Bound<'py, PyAny>>,
        field_direction: Option<&Bound<'py, PyAny>>,
        uncertainty: Option<&Bound<'py, PyAny>>,
    ) -> PyResult<Bound<'py, PyAny>> {
        let py = f.py();
        let (lights, state) = (self::beams(beams)?, pair((f, m), "")?);
        let bias = bias(field_gauss, field_direction)?;
        let python = |inner| Ok::<_, PyErr>(Bound::new(py, PyScattering { inner })?.into_any());
        if flag(uncertainty, "uncertainty")? {
            let found =
                enter::long(py, |_| self.inner.scattering_with_error(&lights, state, &bias))?;
            warn_light(py, self, wavelengths(&lights))?;
            let names = self.inner.unconfirmed_in_light();
            return uncertain(py, python(found.value)?, python(found.standard_error)?, names);
        }
        let found = enter::short(py, || self.inner.scattering_per_s(&lights, state, &bias))?;
        warn_light(py, self, wavelengths(&lights))?;
        python(found)
    }
}

/// Depth of the lattice that a state sees in two beams, in recoils of their own
/// pattern, peak to peak.
///
/// Parameters
/// ----------
/// atom : Atom
/// beams : two Beam, or one
///     One alone stands for a beam that is retro-reflected without loss.
/// state : state
///     ``(F, m)`` or ``"F,m"``.
/// field_gauss : float
///     The bias field.
/// field_direction : three floats
///     Its direction.
///
/// Examples
/// --------
/// >>> import fluxloom as fl
/// >>> beam = fl.Beam(wavelength_nm=1064.0, power_mw=54.6, waist_um=120.0,
/// ...                direction=(1, 0, 0), polarisation=(0, 0, 1))
/// >>> beams = [beam, beam.reflected(0.95)]
/// >>> depth = fl.lattice_depth_er(fl.Atom("40K"), beams, state="9/2,-9/2")
/// >>> round(depth, 1)
/// 6.0
#[pyfunction]
#[pyo3(signature = (atom, beams, *, state, field_gauss=None, field_direction=None), text_signature = "(atom, beams, *, state, field_gauss=0.0, field_direction=(0, 0, 1))")]
pub fn lattice_depth_er(
    py: Python<'_>,
    atom: &Bound<'_, PyAny>,
    beams: &Bound<'_, PyAny>,
    state: &Bound<'_, PyAny>,
    field_gauss: Option<&Bound<'_, PyAny>>,
    field_direction: Option<&Bound<'_, PyAny>>,
) -> PyResult<f64> {
    let atom = self::atom(atom)?;
    let (lights, seen) = (self::beams(beams)?, self::state(state, "state")?);
    let bias = bias(field_gauss, field_direction)?;
    let found = enter::short(py, || lattice::lattice_depth_er(&atom.inner, &lights, seen, &bias))?;
    warn_light(py, atom, wavelengths(&lights))?;
    Ok(found)
}

/// Power of the first beam, in milliwatts, at which a state sees a lattice of
/// ``depth_er``; the other beam keeps its ratio to the first. Arguments as of
/// ``lattice_depth_er``.
///
/// Examples
/// --------
/// >>> import fluxloom as fl
/// >>> beam = fl.Beam(wavelength_nm=1064.0, power_mw=1.0, waist_um=120.0,
/// ...                direction=(1, 0, 0), polarisation=(0, 0, 1))
/// >>> beams = [beam, beam.reflected(0.95)]
/// >>> power = fl.lattice_power_mw(fl.Atom("40K"), beams, depth_er=6.0, state="9/2,-9/2")
/// >>> round(power, 1)
/// 54.6
#[pyfunction]
#[pyo3(signature = (atom, beams, *, depth_er, state, field_gauss=None, field_direction=None), text_signature = "(atom, beams, *, depth_er, state, field_gauss=0.0, field_direction=(0, 0, 1))")]
pub fn lattice_power_mw(
    py: Python<'_>,
    atom: &Bound<'_, PyAny>,
    beams: &Bound<'_, PyAny>,
    depth_er: &Bound<'_, PyAny>,
    state: &Bound<'_, PyAny>,
    field_gauss: Option<&Bound<'_, PyAny>>,
    field_direction: Option<&Bound<'_, PyAny>>,
) -> PyResult<f64> {
    let atom = self::atom(atom)?;
    let (lights, seen) = (self::beams(beams)?, self::state(state, "state")?);
    let depth_er = number(depth_er, "depth_er")?;
    let bias = bias(field_gauss, field_direction)?;
    let found = enter::short(py, || {
        lattice::lattice_power_mw(&atom.inner, &lights, depth_er, (seen, &bias))
    })?;
    warn_light(py, atom, wavelengths(&lights))?;
    Ok(found)
}

/// What atoms on the sites of a lattice scatter of its light: there both beams add
/// up, or cancel. Arguments as of ``lattice_depth_er``.
///
/// Examples
/// --------
/// >>> import fluxloom as fl
/// >>> beam = fl.Beam(wavelength_nm=1064.0, power_mw=54.6, waist_um=120.0,
/// ...                direction=(1, 0, 0), polarisation=(0, 0, 1))
/// >>> rates = fl.lattice_scattering_per_s(fl.Atom("40K"), beam, state="9/2,-9/2")
/// >>> 0.004 < rates.total < 0.005
/// True
#[pyfunction]
#[pyo3(signature = (atom, beams, *, state, field_gauss=None, field_direction=None), text_signature = "(atom, beams, *, state, field_gauss=0.0, field_direction=(0, 0, 1))")]
pub fn lattice_scattering_per_s(
    py: Python<'_>,
    atom: &Bound<'_, PyAny>,
    beams: &Bound<'_, PyAny>,
    state: &Bound<'_, PyAny>,
    field_gauss: Option<&Bound<'_, PyAny>>,
    field_direction: Option<&Bound<'_, PyAny>>,
) -> PyResult<PyScattering> {
    let atom = self::atom(atom)?;
    let (lights, seen) = (self::beams(beams)?, self::state(state, "state")?);
    let bias = bias(field_gauss, field_direction)?;
    let inner =
        enter::short(py, || lattice::lattice_scattering_per_s(&atom.inner, &lights, seen, &bias))?;
    warn_light(py, atom, wavelengths(&lights))?;
    Ok(PyScattering { inner })
}
