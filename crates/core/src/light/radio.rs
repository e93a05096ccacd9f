//! Couplings of ground states by an oscillating magnetic field.
//!
//! The field B1 cos(w t) acts on the electron and the nucleus,
//! `H_1 = mu_B B1.(g_J J + g_I I) cos(w t)`; near resonance half of it counts, so
//! that the Rabi frequency is `<b| mu_B B1.(g_J J + g_I I) |a>/h`. It kicks the
//! atoms by nothing: a link made so has no flux.
//!
//! Source: common practice.

use num_complex::Complex64;

use super::bias::Bias;
use crate::Atom;
use crate::angular::wigner_3j;
use crate::atom::{Levels, Manifold, State, Structure};
use crate::constants::{BOHR_MAGNETON_J_PER_T, GAUSS_PER_TESLA, PLANCK_J_S};
use crate::error::Error;
use crate::limits::AMPLITUDE_GAUSS;
use crate::vector;

/// An oscillating magnetic field of linear polarisation.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Radio {
    /// Peak amplitude, G.
    pub amplitude_gauss: f64,
    /// Direction in the laboratory; only the direction of the vector counts.
    pub direction: [f64; 3],
}

/// Complex Rabi frequency of b <- a over 2 pi, Hz, for an oscillating field on
/// resonance. Its phase is that of the states (see [`Bias`]).
///
/// # Errors
/// [`Error::NoSuchState`], [`Error::OutOfRange`], [`Error::NoDirection`].
pub fn radio_rabi_hz(
    atom: &Atom,
    (a, b): (State, State),
    radio: &Radio,
    bias: &Bias,
) -> Result<Complex64, Error> {
    let manifold = atom.manifold();
    let from = manifold.find(atom.name(), a)?;
    let to = manifold.find(atom.name(), b)?;
    AMPLITUDE_GAUSS.check(radio.amplitude_gauss)?;
    let unit = vector::unit(radio.direction, "direction")?;
    let axes = bias.axes()?;
    let field = axes.real_components(unit).map(|part| part * radio.amplitude_gauss);
    let structure = atom.structure();
    let levels = Levels::new(&structure, bias.field_gauss);
    let mut sum = Complex64::ZERO;
    for (b, amplitude_b) in levels.parts(to) {
        for (a, amplitude_a) in levels.parts(from) {
            sum += element(&structure, (b, a), field) * (amplitude_b * amplitude_a);
        }
    }
    Ok(sum * (BOHR_MAGNETON_J_PER_T / PLANCK_J_S / GAUSS_PER_TESLA))
}

/// `<b| B1.(g_J J + g_I I) |a>` between zero-field states, in units of the field.
fn element(structure: &Structure, (to, from): (usize, usize), [x, y, z]: [f64; 3]) -> Complex64 {
    let manifold = structure.manifold();
    let (Some(b), Some(a)) = (manifold.states.get(to), manifold.states.get(from)) else {
        return Complex64::ZERO;
    };
    let (electron, nucleus) = match b.twice_m() - a.twice_m() {
        0 => (spin(manifold, *b, *a, Spin::Electron, 0), spin(manifold, *b, *a, Spin::Nucleus, 0)),
        2 => (spin(manifold, *b, *a, Spin::Electron, 1), spin(manifold, *b, *a, Spin::Nucleus, 1)),
        -2 => {
            (spin(manifold, *b, *a, Spin::Electron, -1), spin(manifold, *b, *a, Spin::Nucleus, -1))
        }
        _ => return Complex64::ZERO,
    };
    let moment = structure.g_j * electron + structure.g_i * nucleus;
    // B.J = B_z J_z + (B_- J_+ + B_+ J_-)/2 with B_+- = B_x +- i B_y.
    match b.twice_m() - a.twice_m() {
        0 => Complex64::new(z * moment, 0.0),
        2 => Complex64::new(x, -y) * (0.5 * moment),
        _ => Complex64::new(x, y) * (0.5 * moment),
    }
}

#[derive(Clone, Copy, PartialEq)]
enum Spin {
    Electron,
    Nucleus,
}

/// `<b|S_z|a>`, `<b|S_+|a>` or `<b|S_-|a>` for `step` 0, 1, -1, with S the
/// electronic or the nuclear spin, from the states of separate spins.
fn spin(manifold: &Manifold, b: State, a: State, which: Spin, step: i32) -> f64 {
    let twice_j = manifold.twice_j;
    let mut sum = 0.0;
    for m_j in (-twice_j..=twice_j).step_by(2) {
        let m_i = a.twice_m() - m_j;
        let (size, at) = match which {
            Spin::Electron => (twice_j, m_j),
            Spin::Nucleus => (manifold.twice_i, m_i),
        };
        let strength = if step == 0 {
            f64::from(at) / 2.0
        } else {
            // sqrt(s(s+1) - m(m+1)) from twice the numbers
            let moved = at + 2 * step;
            f64::from(size * (size + 2) - at * moved).max(0.0).sqrt() / 2.0
        };
        let (to_j, to_i) = match which {
            Spin::Electron => (m_j + 2 * step, m_i),
            Spin::Nucleus => (m_j, m_i + 2 * step),
        };
        sum += strength * amplitude(manifold, b, (to_j, to_i)) * amplitude(manifold, a, (m_j, m_i));
    }
    sum
}

/// `<J m_J I m_I|F m>`; zero for numbers that are none.
fn amplitude(manifold: &Manifold, state: State, (m_j, m_i): (i32, i32)) -> f64 {
    let (j, i) = (manifold.twice_j, manifold.twice_i);
    if m_j.abs() > j || m_i.abs() > i || m_j + m_i != state.twice_m() {
        return 0.0;
    }
    let symbol =
        wigner_3j([j, i, state.twice_f()].map(i32::unsigned_abs), [m_j, m_i, -state.twice_m()]);
    let sign = if ((j - i + state.twice_m()) / 2).rem_euclid(2) == 0 { 1.0 } else { -1.0 };
    sign * f64::from(state.twice_f() + 1).sqrt() * symbol
}

#[cfg(test)]
mod tests {
    use super::*;

    fn rabi(atom: &str, states: (&str, &str), direction: [f64; 3], field: f64) -> Complex64 {
        let atom = Atom::new(atom).unwrap();
        let states = (states.0.parse().unwrap(), states.1.parse().unwrap());
        let radio = Radio { amplitude_gauss: 0.01, direction };
        radio_rabi_hz(&atom, states, &radio, &Bias::along_z(field)).unwrap()
    }

    const MAGNETON_HZ: f64 = BOHR_MAGNETON_J_PER_T / PLANCK_J_S / GAUSS_PER_TESLA;

    #[test]
    fn closed_forms() {
        let structure = Atom::new("87Rb").unwrap().structure();
        let (g_j, g_i) = (structure.g_j, structure.g_i);
        // source: closed form, <2 0|g_J J_z + g_I I_z|1 0> = (g_J - g_I)/2 for I = 3/2
        let clock = rabi("87Rb", ("1,0", "2,0"), [0.0, 0.0, 1.0], 0.0);
        let expected = 0.5 * (g_j - g_i) * 0.01 * MAGNETON_HZ;
        assert!((clock.norm() / expected - 1.0).abs() < 1e-14, "{clock}");
        // Within F = 2 the moments add up to g_F F: g_F (F_x)/..., <2 2|F_x|2 1> = 1.
        let g_f = g_j / 4.0 + 3.0 * g_i / 4.0;
        let step = rabi("87Rb", ("2,1", "2,2"), [1.0, 0.0, 0.0], 0.0);
        assert!((step.re / (g_f * 0.01 * MAGNETON_HZ) - 1.0).abs() < 1e-14, "{step}");
        // A bare nuclear spin: <1/2|I_x|-1/2> = 1/2.
        let yb = Atom::new("171Yb").unwrap().structure();
        let flip = rabi("171Yb", ("1/2,-1/2", "1/2,1/2"), [1.0, 0.0, 0.0], 5.0);
        assert!((flip.re / (0.5 * yb.g_i * 0.01 * MAGNETON_HZ) - 1.0).abs() < 1e-14, "{flip}");
    }

    #[test]
    fn the_way_back_is_the_conjugate() {
        let there = rabi("40K", ("9/2,-1/2", "7/2,1/2"), [0.3, -0.7, 0.2], 150.0);
        let back = rabi("40K", ("7/2,1/2", "9/2,-1/2"), [0.3, -0.7, 0.2], 150.0);
        assert!((there - back.conj()).norm() < 1e-10 * there.norm());
        assert_eq!(rabi("40K", ("9/2,-5/2", "9/2,-1/2"), [1.0, 1.0, 1.0], 1.0).norm(), 0.0);
    }
}
