//! Levels of the ground manifold in a magnetic field.
//!
//! ```text
//! H/h = A I.J + (mu_B/h) B (g_J J_z + g_I I_z)
//! ```
//!
//! on |F, m> with Condon-Shortley phases in the order J x I -> F; energies from
//! the centre of gravity, positive upwards. m is conserved, so that for J = 1/2
//! the matrix falls into blocks of two, F = I+1/2 and I-1/2, with the element
//! between them `mu_B B (g_J - g_I) <F m|J_z|F' m>`. An eigenstate carries the
//! label of the zero-field state it goes over into, and overlaps with it
//! positively. For J = 0 there is the nuclear Zeeman energy alone.
//!
//! Sums are carried in double-double arithmetic, so that energies are right to
//! their last bit and splittings do not lose digits to the gigahertz between
//! the hyperfine levels.
//!
//! Source: Breit, Rabi, Phys. Rev. 38, 2082 (1931), is the closed form of the
//! eigenvalues and what the tests compare with.

use serde::{Deserialize, Serialize};
use twofloat::TwoFloat;

use super::state::State;
use super::structure::Structure;
use super::{Atom, Manifold};
use crate::angular::wigner_3j;
use crate::constants::{BOHR_MAGNETON_J_PER_T, GAUSS_PER_TESLA, PLANCK_J_S};
use crate::documents::Document;
use crate::error::Error;
use crate::limits::FIELD_GAUSS;

/// A state of the field: its energy and slopes, and what it is made of.
#[derive(Debug, Clone, PartialEq)]
struct Level {
    /// Energy over h in two parts, Hz.
    energy_hz: TwoFloat,
    moment_hz_per_gauss: f64,
    curvature_hz_per_gauss2: f64,
    /// Places and amplitudes of the zero-field states; the second is empty for
    /// a state that stands alone.
    parts: [(usize, f64); 2],
}

/// All levels of a set of atomic numbers at one field, in the order of the states.
#[derive(Debug, Clone, PartialEq)]
pub(crate) struct Levels {
    levels: Vec<Level>,
}

impl Levels {
    /// The levels at a field that has been checked.
    pub fn new(structure: &Structure, field_gauss: f64) -> Self {
        let manifold = structure.manifold();
        let places = 0..manifold.states.len();
        let levels = places.map(|place| level(structure, manifold, place, field_gauss)).collect();
        Self { levels }
    }

    /// Slope of the energy of one state at a checked field, Hz/G.
    pub fn moment_hz_per_gauss(structure: &Structure, place: usize, field_gauss: f64) -> f64 {
        level(structure, structure.manifold(), place, field_gauss).moment_hz_per_gauss
    }

    /// Places and amplitudes of the zero-field states in the state at a place.
    pub fn parts(&self, place: usize) -> impl Iterator<Item = (usize, f64)> + Clone {
        let parts = self.levels.get(place).map_or([(place, 1.0), (place, 0.0)], |one| one.parts);
        parts.into_iter().filter(|(_, amplitude)| *amplitude != 0.0)
    }

    /// Energy over h of the state at a place, Hz.
    pub fn energy_hz(&self, place: usize) -> f64 {
        self.levels.get(place).map_or(0.0, |level| level.energy_hz.into())
    }
}

/// The levels of an atom at one field.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(try_from = "RawLevels", into = "RawLevels")]
pub struct GroundLevels {
    atom: Atom,
    field_gauss: f64,
    levels: Levels,
}

#[derive(Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
struct RawLevels {
    atom: Atom,
    field_gauss: f64,
}

impl TryFrom<RawLevels> for GroundLevels {
    type Error = Error;

    fn try_from(raw: RawLevels) -> Result<Self, Error> {
        raw.atom.ground_levels(raw.field_gauss)
    }
}

impl From<GroundLevels> for RawLevels {
    fn from(levels: GroundLevels) -> Self {
        Self { atom: levels.atom, field_gauss: levels.field_gauss }
    }
}

impl Document for GroundLevels {
    const FORMAT: &'static str = "fluxloom-ground-levels";
}

impl Atom {
    /// The levels of the ground manifold at a magnetic field.
    ///
    /// # Errors
    /// [`Error::OutOfRange`] for a field outside 0..2000 G.
    pub fn ground_levels(&self, field_gauss: f64) -> Result<GroundLevels, Error> {
        FIELD_GAUSS.check_as(field_gauss, "field_gauss")?;
        let levels = Levels::new(&self.structure(), field_gauss);
        Ok(GroundLevels { atom: self.clone(), field_gauss, levels })
    }
}

impl GroundLevels {
    /// The atom.
    #[must_use]
    pub fn atom(&self) -> &Atom {
        &self.atom
    }

    /// The field, G.
    #[must_use]
    pub fn field_gauss(&self) -> f64 {
        self.field_gauss
    }

    /// The states: largest F first, m ascending.
    #[must_use]
    pub fn states(&self) -> &'static [State] {
        &self.atom.manifold().states
    }

    /// Energies over h from the centre of gravity, in the order of the states, Hz.
    #[must_use]
    pub fn energies_hz(&self) -> Vec<f64> {
        self.levels.levels.iter().map(|level| level.energy_hz.into()).collect()
    }

    /// Energy over h of a state, Hz.
    ///
    /// # Errors
    /// [`Error::NoSuchState`].
    pub fn energy_hz(&self, state: State) -> Result<f64, Error> {
        Ok(self.level(state)?.energy_hz.into())
    }

    /// E(b) - E(a) over h, Hz: positive if b lies higher.
    ///
    /// # Errors
    /// [`Error::NoSuchState`].
    pub fn splitting_hz(&self, a: State, b: State) -> Result<f64, Error> {
        Ok((self.level(b)?.energy_hz - self.level(a)?.energy_hz).into())
    }

    /// Slope of the energy with the field, dE/dB/h: positive for a state that
    /// is driven towards weak fields. (The magnetic moment along the field is
    /// minus this.)
    ///
    /// # Errors
    /// [`Error::NoSuchState`].
    pub fn moment_hz_per_gauss(&self, state: State) -> Result<f64, Error> {
        Ok(self.level(state)?.moment_hz_per_gauss)
    }

    /// Second derivative of the energy, d2E/dB2/h: twice a quadratic shift.
    ///
    /// # Errors
    /// [`Error::NoSuchState`].
    pub fn curvature_hz_per_gauss2(&self, state: State) -> Result<f64, Error> {
        Ok(self.level(state)?.curvature_hz_per_gauss2)
    }

    /// Amplitudes of the zero-field states |F, m> in a state of the field, in
    /// the order of the states; real, of unit length.
    ///
    /// # Errors
    /// [`Error::NoSuchState`].
    pub fn vector(&self, state: State) -> Result<Vec<f64>, Error> {
        let mut vector = vec![0.0; self.states().len()];
        for (place, amplitude) in self.level(state)?.parts {
            if let Some(slot) = vector.get_mut(place) {
                *slot += amplitude;
            }
        }
        Ok(vector)
    }

    fn level(&self, state: State) -> Result<&Level, Error> {
        let manifold = self.atom.manifold();
        let place = manifold.find(self.atom.name(), state)?;
        self.levels
            .levels
            .get(place)
            .ok_or_else(|| manifold.foreign(self.atom.name(), &state.to_string()))
    }
}

/// Bohr magneton over h, Hz/G.
fn magneton_hz_per_gauss() -> TwoFloat {
    TwoFloat::from(BOHR_MAGNETON_J_PER_T) / PLANCK_J_S / GAUSS_PER_TESLA
}

/// The level that goes over into the state at `place`.
fn level(structure: &Structure, manifold: &Manifold, place: usize, field_gauss: f64) -> Level {
    let Some(state) = manifold.states.get(place) else {
        return Level {
            energy_hz: TwoFloat::from(0.0),
            moment_hz_per_gauss: 0.0,
            curvature_hz_per_gauss2: 0.0,
            parts: [(place, 1.0), (place, 0.0)],
        };
    };
    let magneton = magneton_hz_per_gauss();
    let own = Diagonal::new(structure, *state, magneton);
    let partner = manifold
        .twice_f
        .iter()
        .filter(|f| **f != state.twice_f())
        .find_map(|f| manifold.index_of(State::known(*f, state.twice_m())));
    let Some(partner) = partner else {
        return Level {
            energy_hz: own.at_rest + own.slope * field_gauss,
            moment_hz_per_gauss: own.slope.into(),
            curvature_hz_per_gauss2: 0.0,
            parts: [(place, 1.0), (place, 0.0)],
        };
    };
    let other = State::known(2 * structure.manifold().twice_i - state.twice_f(), state.twice_m());
    let theirs = Diagonal::new(structure, other, magneton);
    let link = magneton
        * (TwoFloat::from(structure.g_j) - structure.g_i)
        * electron_element(manifold, *state);
    pair(&own, &theirs, link, field_gauss, (place, partner))
}

/// A diagonal element of the matrix: its value at zero field and its slope.
struct Diagonal {
    at_rest: TwoFloat,
    slope: TwoFloat,
}

impl Diagonal {
    fn new(structure: &Structure, state: State, magneton: TwoFloat) -> Self {
        let Structure { hyperfine, g_j, g_i, .. } = structure;
        let (i, f) = (hyperfine.twice_i, state.twice_f());
        let m = TwoFloat::from(f64::from(state.twice_m())) / 2.0;
        if hyperfine.twice_j == 0 {
            return Self { at_rest: TwoFloat::from(0.0), slope: magneton * (m * *g_i) };
        }
        // J = 1/2: A K/2 is A I/2 for F = I+1/2 and -A (I+1)/2 for F = I-1/2;
        // <J_z> is +-m/(2I+1).
        let above = f > i;
        let quarter = if above { i } else { -(i + 2) };
        let share = m / f64::from(if above { i + 1 } else { -(i + 1) });
        let factor = share * (TwoFloat::from(*g_j) - *g_i) + m * *g_i;
        Self {
            at_rest: TwoFloat::new_mul(hyperfine.a_hz, f64::from(quarter)) / 4.0,
            slope: magneton * factor,
        }
    }
}

/// `<F m|J_z|F' m>` between the two levels of J = 1/2:
/// sqrt((I+1/2)^2 - m^2)/(2I+1) with the sign of the phase convention.
fn electron_element(manifold: &Manifold, state: State) -> TwoFloat {
    let twice_m = state.twice_m();
    let whole = manifold.twice_i + 1;
    let size =
        TwoFloat::from(f64::from(whole * whole - twice_m * twice_m)).sqrt() / f64::from(2 * whole);
    let spins = [manifold.twice_j, manifold.twice_i].map(i32::unsigned_abs);
    // Clebsch-Gordan coefficients but for a factor that both levels share.
    let of = |twice_f: i32, up: i32| {
        let [j, i] = spins;
        wigner_3j([j, i, twice_f.unsigned_abs()], [up, twice_m - up, -twice_m])
            * f64::from(twice_f + 1).sqrt()
    };
    let (f, g) = (manifold.twice_i + 1, manifold.twice_i - 1);
    let sign: f64 = [1, -1].into_iter().map(|up| f64::from(up) * of(f, up) * of(g, up)).sum();
    if sign < 0.0 { -size } else { size }
}

/// The level of a block of two that goes over into the first of `places`.
fn pair(
    own: &Diagonal,
    partner: &Diagonal,
    link: TwoFloat,
    field_gauss: f64,
    places: (usize, usize),
) -> Level {
    // E = mean +- root; the level that lies higher at rest keeps the upper sign.
    // Without a hyperfine splitting F = I+1/2 counts as the higher one.
    let at_rest = own.at_rest - partner.at_rest;
    let lower = if at_rest == 0.0 { places.0 > places.1 } else { at_rest < 0.0 };
    let sign = if lower { -1.0 } else { 1.0 };
    let half_slope = (own.slope - partner.slope) / 2.0;
    let gap = at_rest / 2.0 + half_slope * field_gauss;
    let coupling = link * field_gauss;
    let root = (gap * gap + coupling * coupling).sqrt();
    let mean =
        (own.at_rest + partner.at_rest) / 2.0 + (own.slope + partner.slope) / 2.0 * field_gauss;
    let steepness = if root.hi() > 0.0 {
        (gap * half_slope + coupling * link) / root
    } else {
        TwoFloat::from(0.0)
    };
    let bend = if root.hi() > 0.0 {
        (half_slope * half_slope + link * link - steepness * steepness) / root
    } else {
        TwoFloat::from(0.0)
    };
    // Half the angle keeps the cosine, the overlap with the parent, positive.
    let turn = 0.5 * (sign * f64::from(coupling)).atan2(sign * f64::from(gap));
    Level {
        energy_hz: mean + root * sign,
        moment_hz_per_gauss: ((own.slope + partner.slope) / 2.0 + steepness * sign).into(),
        curvature_hz_per_gauss2: (bend * sign).into(),
        parts: [(places.0, turn.cos()), (places.1, turn.sin())],
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn state(text: &str) -> State {
        text.parse().unwrap()
    }

    #[test]
    fn published_shifts_and_splittings() {
        let levels = Atom::new("87Rb").unwrap().ground_levels(1.0).unwrap();
        // source: Steck, Rubidium 87 D Line Data (from memory): 575.15 Hz/G^2
        let rest = Atom::new("87Rb").unwrap().ground_levels(0.0).unwrap();
        let clock =
            |levels: &GroundLevels| levels.splitting_hz(state("1,0"), state("2,0")).unwrap();
        assert!((clock(&levels) - clock(&rest) - 575.15).abs() < 0.01);
        let potassium = Atom::new("40K").unwrap();
        // source: derived from the same inputs, numpy and mpmath, no publication
        for (field, expected) in [(19.7, 5_912_118.8), (50.0, 14_191_481.6)] {
            let levels = potassium.ground_levels(field).unwrap();
            let found = levels.splitting_hz(state("9/2,-9/2"), state("9/2,-7/2")).unwrap();
            assert!((found - expected).abs() < 0.06, "{found}");
        }
    }

    #[test]
    fn slopes_are_derivatives() {
        for name in Atom::available() {
            let atom = Atom::new(name).unwrap();
            let at = |field: f64| atom.ground_levels(field).unwrap();
            let (low, mid, high) = (at(99.0), at(100.0), at(101.0));
            for s in mid.states() {
                let rise = high.splitting_hz(*s, *s).unwrap()
                    + (high.energy_hz(*s).unwrap() - low.energy_hz(*s).unwrap()) / 2.0;
                let moment = mid.moment_hz_per_gauss(*s).unwrap();
                assert!((rise - moment).abs() < 1e-4 * (1.0 + moment.abs()), "{name} {s}");
                let bend = (high.moment_hz_per_gauss(*s).unwrap()
                    - low.moment_hz_per_gauss(*s).unwrap())
                    / 2.0;
                let curvature = mid.curvature_hz_per_gauss2(*s).unwrap();
                assert!((bend - curvature).abs() < 1e-3 * (1e-3 + curvature.abs()), "{name} {s}");
            }
        }
    }

    #[test]
    fn states_stay_orthogonal_and_near_their_parents() {
        for name in Atom::available() {
            let atom = Atom::new(name).unwrap();
            for field in [0.0, 1.0, 300.0, 2000.0] {
                let levels = atom.ground_levels(field).unwrap();
                let vectors: Vec<Vec<f64>> =
                    levels.states().iter().map(|s| levels.vector(*s).unwrap()).collect();
                for (a, one) in vectors.iter().enumerate() {
                    assert!(one[a] > 0.0);
                    for (b, two) in vectors.iter().enumerate() {
                        let overlap: f64 = one.iter().zip(two).map(|(x, y)| x * y).sum();
                        let expected = if a == b { 1.0 } else { 0.0 };
                        assert!((overlap - expected).abs() < 1e-14, "{name} {field}");
                    }
                }
            }
        }
    }
}
