//! Scattering of light by atoms in a state, by final state.
//!
//! Kramers-Heisenberg: the dipole p = v E that the light draws out of a -> f,
//! both terms and the residual polarisability included, radiates a photon of
//! nu + (E_a - E_f)/h into every direction and polarisation:
//!
//! ```text
//! rate(a -> f) = w_s^3 |p_fa|^2 / (12 pi eps0 hbar c^3)
//! ```
//!
//! f = a is Rayleigh scattering, which keeps the state; the rest is Raman
//! scattering, which changes it. Every photon absorbed and emitted heats by one
//! recoil energy each, on the average over directions and in all three of them.
//!
//! Sources: Loudon, The Quantum Theory of Light, 3rd ed., sec. 8.7 (from
//! memory); Gordon, Ashkin, Phys. Rev. A 21, 1606 (1980), for the heating (from
//! memory).

use num_complex::Complex64;
use serde::{Deserialize, Serialize};

use super::Beam;
use super::bias::Bias;
use super::response::{Operator, POLARISABILITY_UNIT_SI};
use super::shift::{Illumination, excited_zeeman};
use super::ways::wavelength_nm;
use crate::Atom;
use crate::atom::{Levels, State, Structure, Uncertain, standard_errors_of_all};
use crate::constants::{REDUCED_PLANCK_J_S, SPEED_OF_LIGHT_M_PER_S, VACUUM_PERMITTIVITY_F_PER_M};
use crate::documents::Document;
use crate::error::Error;

/// Scattering rates of one state.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(try_from = "RawScattering")]
pub struct Scattering {
    /// The atom, whose numbers stand behind the result.
    pub atom: Atom,
    /// The state the atoms are in.
    pub from: State,
    /// Photons per second.
    pub total: f64,
    /// Photons per second that leave the state as it is.
    pub rayleigh: f64,
    /// Photons per second that change the state.
    pub raman: f64,
    /// Photons per second by final state, in the order of the states.
    pub to: Vec<(State, f64)>,
    /// Growth of the mean energy over h, Hz/s: two recoils a photon.
    pub heating_hz_per_s: f64,
}

impl Document for Scattering {
    const FORMAT: &'static str = "fluxloom-scattering";
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct RawScattering {
    atom: Atom,
    from: State,
    total: f64,
    rayleigh: f64,
    raman: f64,
    to: Vec<(State, f64)>,
    heating_hz_per_s: f64,
}

impl TryFrom<RawScattering> for Scattering {
    type Error = Error;

    fn try_from(raw: RawScattering) -> Result<Self, Error> {
        let manifold = raw.atom.manifold();
        manifold.find(raw.atom.name(), raw.from)?;
        let states: Vec<State> = raw.to.iter().map(|(state, _)| *state).collect();
        let sums = [raw.total, raw.rayleigh, raw.raman, raw.heating_hz_per_s];
        let rates = raw.to.iter().map(|(_, rate)| *rate).chain(sums);
        if states != manifold.states || rates.into_iter().any(|rate| rate < 0.0) {
            return Err(Error::Contradiction {
                code: "scattering.not_rates",
                message: format!(
                    "the rates are not one for each state of {} in order, none negative",
                    raw.atom.name()
                ),
            });
        }
        Ok(Self {
            atom: raw.atom,
            from: raw.from,
            total: raw.total,
            rayleigh: raw.rayleigh,
            raman: raw.raman,
            to: raw.to,
            heating_hz_per_s: raw.heating_hz_per_s,
        })
    }
}

impl Scattering {
    fn new(atom: &Atom, place: usize, rates: &[Rates]) -> Self {
        let states = &atom.manifold().states;
        let mut to = vec![0.0; states.len()];
        let mut heating_hz_per_s = 0.0;
        for one in rates {
            for (sum, rate) in to.iter_mut().zip(&one.to) {
                *sum += rate;
            }
            let recoil = atom.recoil_hz(wavelength_nm(one.frequency_hz)).unwrap_or_default();
            heating_hz_per_s += 2.0 * recoil * one.to.iter().sum::<f64>();
        }
        let total = to.iter().sum();
        let rayleigh = to.get(place).copied().unwrap_or_default();
        let from = states.get(place).copied().unwrap_or(State::known(0, 0));
        let raman = to.iter().enumerate().filter(|(f, _)| *f != place).map(|(_, rate)| rate).sum();
        let to = states.iter().copied().zip(to).collect();
        Self { atom: atom.clone(), from, total, rayleigh, raman, to, heating_hz_per_s }
    }
}

/// Rates of one kind of light, in the order of the states.
pub(crate) struct Rates {
    frequency_hz: f64,
    to: Vec<f64>,
}

/// Rates out of the state at a place.
pub(crate) fn rates(
    structure: &Structure,
    levels: &Levels,
    place: usize,
    light: &Illumination,
) -> Result<Rates, Error> {
    let count = structure.manifold().states.len();
    let mut to = vec![0.0; count];
    let emitted =
        |axis: usize| [0, 1, 2].map(|k| if k == axis { Complex64::ONE } else { Complex64::ZERO });
    // |E|^2 = 2 I/(eps0 c); the amplitude carries the root of I.
    let field = 2.0 / (VACUUM_PERMITTIVITY_F_PER_M * SPEED_OF_LIGHT_M_PER_S);
    let dipole = POLARISABILITY_UNIT_SI * POLARISABILITY_UNIT_SI * field;
    let radiation = dipole
        / (12.0
            * std::f64::consts::PI
            * VACUUM_PERMITTIVITY_F_PER_M
            * REDUCED_PLANCK_J_S
            * SPEED_OF_LIGHT_M_PER_S.powi(3));
    let mut operator =
        Operator::scattering(structure, (emitted(0), light.amplitude), light.frequency_hz);
    for axis in 0..3 {
        operator = operator.turned((emitted(axis), light.amplitude));
        for (f, rate) in to.iter_mut().enumerate() {
            let nu = light.frequency_hz + levels.energy_hz(place) - levels.energy_hz(f);
            if nu <= 0.0 {
                continue;
            }
            let omega = 2.0 * std::f64::consts::PI * nu;
            let ranks = operator.between(levels.parts(f), levels.parts(place))?;
            let element: Complex64 = ranks.iter().sum();
            *rate += radiation * omega.powi(3) * element.norm_sqr();
        }
    }
    Ok(Rates { frequency_hz: light.frequency_hz, to })
}

impl Atom {
    /// Scattering of a state in beams that do not interfere; atoms at the
    /// origin of the laboratory. Without a field the state is quantised along
    /// `bias.field_direction`.
    ///
    /// # Errors
    /// As [`Atom::light_shift_hz`].
    pub fn scattering_per_s(
        &self,
        beams: &[Beam],
        state: State,
        bias: &Bias,
    ) -> Result<Scattering, Error> {
        let (place, lights) = self.lit(beams, state, bias)?;
        self.scattering_of(place, &lights, bias.field_gauss)
    }

    pub(crate) fn scattering_of(
        &self,
        place: usize,
        lights: &[Illumination],
        field_gauss: f64,
    ) -> Result<Scattering, Error> {
        let structure = self.structure();
        let levels = Levels::new(&structure, field_gauss);
        let rates: Vec<Rates> = lights
            .iter()
            .map(|light| rates(&structure, &levels, place, light))
            .collect::<Result<_, _>>()?;
        Ok(Scattering::new(self, place, &rates))
    }

    /// The rates with their standard errors, from the atomic data and from the
    /// neglected Zeeman shift of the excited states.
    ///
    /// # Errors
    /// As [`Atom::scattering_per_s`].
    pub fn scattering_with_error(
        &self,
        beams: &[Beam],
        state: State,
        bias: &Bias,
    ) -> Result<Uncertain<Scattering>, Error> {
        let value = self.scattering_per_s(beams, state, bias)?;
        let (place, lights) = self.lit(beams, state, bias)?;
        let mut errors = value.clone();
        let structure = self.structure();
        let neglected = lights
            .iter()
            .map(|light| {
                let main = std::iter::once(place);
                2.0 * excited_zeeman(&structure, main, light.frequency_hz, bias.field_gauss)
            })
            .fold(0.0, f64::max);
        // The sums are correlated with their parts, so they stand beside them.
        let found = standard_errors_of_all(self, |structure| {
            let levels = Levels::new(structure, bias.field_gauss);
            let mut to = vec![0.0; value.to.len()];
            for light in &lights {
                let one = rates(structure, &levels, place, light)?;
                to.iter_mut().zip(one.to).for_each(|(sum, rate)| *sum += rate);
            }
            let total: f64 = to.iter().sum();
            let kept = to.get(place).copied().unwrap_or_default();
            Ok([total, kept, total - kept].into_iter().chain(to).collect())
        })?;
        let (sums, parts) = found.split_at(found.len().min(3));
        let [total, rayleigh, raman] = sums else {
            return Ok(Uncertain { value, standard_error: errors });
        };
        let by_state = value.to.iter().zip(parts);
        errors.to =
            by_state.map(|((state, rate), part)| (*state, part.hypot(neglected * rate))).collect();
        errors.total = total.hypot(neglected * value.total);
        errors.rayleigh = rayleigh.hypot(neglected * value.rayleigh);
        errors.raman = raman.hypot(neglected * value.raman);
        errors.heating_hz_per_s = if value.total > 0.0 {
            value.heating_hz_per_s * errors.total / value.total
        } else {
            0.0
        };
        Ok(Uncertain { value, standard_error: errors })
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::light::{BeamInput, polarisation};

    fn rubidium_in_infrared(residual: bool, f: f64) -> (f64, f64) {
        let direction = [1.0, 0.0, 0.0];
        let beam = Beam::new(BeamInput {
            wavelength_nm: 1064.0,
            power_mw: 100.0,
            waist_um: [100.0; 2],
            direction,
            polarisation: polarisation::linear(direction, [0.0, 0.0, 1.0]).unwrap(),
            waist_axis: None,
            focus_um: [0.0; 3],
        })
        .unwrap();
        let mut atom = Atom::new("87Rb").unwrap();
        if !residual {
            atom = atom.with_data(&[("residual_polarisability_au", 0.0)], "none").unwrap();
        }
        let state = State::from_pair((f, 0.0)).unwrap();
        let bias = Bias::default();
        (
            atom.light_shift_hz(&[beam], state, &bias).unwrap(),
            atom.scattering_per_s(&[beam], state, &bias).unwrap().total,
        )
    }

    #[test]
    fn a_trap_at_1064_nm() {
        // source: derived independently with numpy and mpmath, no publication:
        // 87Rb, 100 mW, waist 100 um, 1064 nm: with the residual -20.537 kHz (F = 1),
        // 3.617e-3 /s; two-level sum -20.219 kHz, 3.506e-3 /s
        let (shift, rate) = rubidium_in_infrared(true, 1.0);
        assert!((shift + 20_537.0).abs() < 1.0, "{shift}");
        assert!((rate - 3.617e-3).abs() < 1e-6, "{rate}");
        let (shift, rate) = rubidium_in_infrared(false, 1.0);
        assert!((shift + 20_219.0).abs() < 5.0, "{shift}");
        assert!((rate - 3.506e-3).abs() < 2e-5, "{rate}");
    }
}
