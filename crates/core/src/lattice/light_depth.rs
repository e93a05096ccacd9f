//! The depth of a lattice from the beams that make it, and the power for a depth.
//!
//! Two beams of one frequency interfere: the shift of a state along the lattice is
//! U_11 + U_22 + 2 Re(U_12 exp(i(k1-k2).r)), so that it goes up and down by
//!
//! ```text
//! s = 4 |U_12| / E_R,   U_12 = -(1/4) E1 E2* <v(u2*, u1)>,
//! ```
//!
//! whatever the powers and polarisations (orthogonal ones make no scalar
//! lattice). E_R/h = h/(8 m a^2) with the spacing a = lambda/(2 sin(A/2)). One
//! beam alone stands for one that is retro-reflected without loss.

use num_complex::Complex64;

use crate::Atom;
use crate::atom::{Levels, State};
use crate::constants::PLANCK_J_S;
use crate::error::Error;
use crate::light::response::{HZ_PER_AU_INTENSITY, Operator};
use crate::light::scattering::Scattering;
use crate::light::shift::Illumination;
use crate::light::{Beam, Bias};
use crate::limits::{DEPTH_ER, POWER_MW};
use crate::vector::dot;

/// Colours that differ by more than this part make a lattice that runs away.
const ONE_COLOUR: f64 = 1e-12;

/// The two beams of a lattice.
fn two(beams: &[Beam]) -> Result<[Beam; 2], Error> {
    let [first, second] = match beams {
        [one] => [*one, one.reflected(1.0)?],
        [one, two] => [*one, *two],
        other => {
            return Err(Error::Contradiction {
                code: "lattice.not_two_beams",
                message: format!(
                    "a lattice is made by two beams, or by one that is retro-reflected, not by {}",
                    other.len()
                ),
            });
        }
    };
    let (one_nm, two_nm) = (first.wavelength_nm(), second.wavelength_nm());
    if (one_nm - two_nm).abs() > ONE_COLOUR * one_nm {
        return Err(Error::Contradiction {
            code: "lattice.two_wavelengths",
            message: format!(
                "lattice beams of {one_nm} and {two_nm} nm: their pattern runs away at the \
                 difference of their frequencies; give both one wavelength"
            ),
        });
    }
    Ok([first, second])
}

/// Lattice recoil over h of the pattern of two beams, Hz.
fn recoil_hz(atom: &Atom, [first, second]: &[Beam; 2]) -> Result<f64, Error> {
    let (one, two) = (first.unit_direction(), second.unit_direction());
    // |k1 - k2|/k = 2 sin(A/2)
    let difference = [0, 1, 2].map(|k: usize| {
        one.get(k).copied().unwrap_or_default() - two.get(k).copied().unwrap_or_default()
    });
    let length = dot(difference, difference).sqrt();
    if length < 1e-9 {
        return Err(Error::Contradiction {
            code: "lattice.parallel_beams",
            message: "both lattice beams have one direction: they make no pattern; let them cross"
                .to_owned(),
        });
    }
    let spacing_m = first.wavelength_nm() * 1e-9 / length;
    Ok(PLANCK_J_S / (8.0 * atom.mass_kg() * spacing_m * spacing_m))
}

/// Shift over h of the interference term, complex, Hz.
fn interference_hz(
    atom: &Atom,
    beams: &[Beam; 2],
    state: State,
    bias: &Bias,
) -> Result<Complex64, Error> {
    let (place, lights) = atom.lit(beams, state, bias)?;
    let [Illumination { frequency_hz, amplitude: one }, Illumination { amplitude: two, .. }] =
        lights.as_slice()
    else {
        return Ok(Complex64::ZERO);
    };
    let structure = atom.structure();
    let levels = Levels::new(&structure, bias.field_gauss);
    let mut operator = Operator::two_photon(&structure, (*two, *one), *frequency_hz);
    let ranks = operator.between(levels.parts(place), levels.parts(place))?;
    Ok(ranks.iter().sum::<Complex64>() * -HZ_PER_AU_INTENSITY)
}

/// Depth of the lattice that a state sees in two beams, in lattice recoils of
/// their pattern, peak to peak; atoms at the origin of the laboratory.
///
/// # Errors
/// [`Error::Contradiction`] for more or fewer than two beams (one counts as
/// retro-reflected), two wavelengths or parallel beams; otherwise as
/// [`Atom::light_shift_hz`].
pub fn lattice_depth_er(
    atom: &Atom,
    beams: &[Beam],
    state: State,
    bias: &Bias,
) -> Result<f64, Error> {
    let beams = two(beams)?;
    let recoil = recoil_hz(atom, &beams)?;
    Ok(4.0 * interference_hz(atom, &beams, state, bias)?.norm() / recoil)
}

/// Power of the first beam, mW, at which a state sees a lattice of `depth_er`;
/// the other beam keeps its ratio to the first. Beams without any power count
/// as equally strong.
///
/// # Errors
/// As [`lattice_depth_er`]; [`Error::OutOfRange`] for the depth;
/// [`Error::NoLattice`] if no power makes one, [`Error::PowerOutOfReach`] if it
/// takes more than a beam may have.
pub fn lattice_power_mw(
    atom: &Atom,
    beams: &[Beam],
    depth_er: f64,
    (state, bias): (State, &Bias),
) -> Result<f64, Error> {
    DEPTH_ER.check(depth_er)?;
    let [mut first, mut second] = two(beams)?;
    if first.power_mw() == 0.0 && second.power_mw() == 0.0 {
        (first, second) = (first.with_power_mw(1.0)?, second.with_power_mw(1.0)?);
    }
    let today = lattice_depth_er(atom, &[first, second], state, bias)?;
    // Both powers grow together, so the depth goes as either.
    let factor = depth_er / today;
    let power_mw = first.power_mw() * factor;
    if today > 0.0 && power_mw.is_finite() {
        let larger_mw = factor * first.power_mw().max(second.power_mw());
        if larger_mw <= POWER_MW.high {
            return Ok(power_mw);
        }
        return Err(Error::PowerOutOfReach {
            state: state.to_string(),
            depth_er,
            power_mw: larger_mw,
            most_mw: POWER_MW.high,
        });
    }
    Err(Error::NoLattice { state: state.to_string(), wavelength_nm: first.wavelength_nm() })
}

/// Scattering of atoms that sit on the sites of a lattice: where the shift is
/// lowest, the amplitudes of both beams add up to the light the atoms see. The
/// width of the atoms on their site is not looked at. The heating is that of both
/// beams by themselves: the gradient of the field heats where its strength does
/// not, and in a standing wave the sum is the same everywhere (Gordon, Ashkin,
/// Phys. Rev. A 21, 1606 (1980); from memory).
///
/// # Errors
/// As [`lattice_depth_er`].
pub fn lattice_scattering_per_s(
    atom: &Atom,
    beams: &[Beam],
    state: State,
    bias: &Bias,
) -> Result<Scattering, Error> {
    let beams = two(beams)?;
    let term = interference_hz(atom, &beams, state, bias)?;
    // The phase that makes the interference term negative.
    let phase = if term.norm() > 0.0 { -term.conj() / term.norm() } else { Complex64::ONE };
    let (place, lights) = atom.lit(&beams, state, bias)?;
    let mut sum = [Complex64::ZERO; 3];
    let mut frequency_hz = 0.0;
    for (light, factor) in lights.iter().zip([phase, Complex64::ONE]) {
        frequency_hz = light.frequency_hz;
        for (total, part) in sum.iter_mut().zip(light.amplitude) {
            *total += part * factor;
        }
    }
    let on_site = Illumination { frequency_hz, amplitude: sum };
    let heating_hz_per_s = atom.scattering_of(place, &lights, bias.field_gauss)?.heating_hz_per_s;
    let found = atom.scattering_of(place, &[on_site], bias.field_gauss)?;
    Ok(Scattering { heating_hz_per_s, ..found })
}
