//! One coupling explained: how strong, by which part of the light, by which
//! rule it is weak, and what would make it stronger.
//!
//! With C = u2* x u1, the vector part drives Delta m = 0 (between different F)
//! by the component of C along the field and Delta m = +-1 by its components
//! across it; |Delta m| = 2 comes from the tensor part alone; two photons do no
//! more. Numbers come from the computed operator, never from the rule. What
//! would drive a weak coupling better is in [`super::alternatives`].

use num_complex::Complex64;
use serde::{Deserialize, Serialize};

use super::RamanPair;
use super::bias::Bias;
use super::products::Products;
use crate::Atom;
use crate::atom::{State, halves_text};
use crate::documents::Document;
use crate::error::Error;

/// Couplings below this part of the largest |Delta m| <= 1 coupling of the same
/// beams cannot be used.
pub const FORBIDDEN: f64 = 1e-2;

/// Couplings below this part of the largest one are zero but for rounding.
pub(super) const ROUNDING: f64 = 1e-9;

/// A coupling b <- a with its explanation.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(try_from = "RawCoupling")]
pub struct Coupling {
    /// The atom, whose numbers stand behind the result.
    pub atom: Atom,
    /// The state a.
    pub from: State,
    /// The state b.
    pub to: State,
    /// Complex Rabi frequency over 2 pi, Hz.
    pub rabi_hz: Complex64,
    /// Its scalar, vector and tensor parts, Hz.
    pub ranks: [Complex64; 3],
    /// Size over that of the largest coupling with |Delta m| <= 1 that the same
    /// beams make between two states; where they make none, over that of the
    /// largest of all.
    pub relative: f64,
    /// Which part of the light drives it, and whether it can be used.
    pub rule: String,
    /// For a coupling that cannot be used: what would drive it better.
    pub alternatives: Vec<String>,
    /// Kick along the lattice in k_L, if a lattice was given.
    pub kick: Option<f64>,
    /// The Rabi frequency of atoms in the lattice: times the overlap of the kick.
    pub effective_rabi_hz: Complex64,
}

impl Document for Coupling {
    const FORMAT: &'static str = "fluxloom-coupling";
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct RawCoupling {
    atom: Atom,
    from: State,
    to: State,
    rabi_hz: Complex64,
    ranks: [Complex64; 3],
    relative: f64,
    rule: String,
    alternatives: Vec<String>,
    kick: Option<f64>,
    effective_rabi_hz: Complex64,
}

impl TryFrom<RawCoupling> for Coupling {
    type Error = Error;

    fn try_from(raw: RawCoupling) -> Result<Self, Error> {
        for state in [raw.from, raw.to] {
            raw.atom.manifold().find(raw.atom.name(), state)?;
        }
        if raw.relative < 0.0 {
            return Err(Error::Contradiction {
                code: "coupling.negative_size",
                message: format!("relative = {} is a ratio of sizes, not negative", raw.relative),
            });
        }
        Ok(Self {
            atom: raw.atom,
            from: raw.from,
            to: raw.to,
            rabi_hz: raw.rabi_hz,
            ranks: raw.ranks,
            relative: raw.relative,
            rule: raw.rule,
            alternatives: raw.alternatives,
            kick: raw.kick,
            effective_rabi_hz: raw.effective_rabi_hz,
        })
    }
}

impl Coupling {
    /// Whether the coupling is too weak to be used. A state with itself is not
    /// coupled, so nothing is forbidden.
    #[must_use]
    pub fn is_forbidden(&self) -> bool {
        self.from != self.to && self.relative < FORBIDDEN
    }
}

/// What a coupling is measured by.
pub(super) struct Yardstick {
    /// Size of the largest coupling, Hz.
    largest_hz: f64,
    /// Whether that has |Delta m| <= 1.
    is_usual: bool,
}

impl Yardstick {
    pub(super) fn of(&self, size_hz: f64) -> f64 {
        if self.largest_hz > 0.0 { size_hz / self.largest_hz } else { 0.0 }
    }
}

impl RamanPair {
    /// The coupling b <- a explained, for atoms that no lattice holds.
    ///
    /// # Errors
    /// As [`RamanPair::rabi_hz`].
    pub fn free_coupling(
        &self,
        atom: &Atom,
        (a, b): (State, State),
        bias: &Bias,
    ) -> Result<Coupling, Error> {
        let ranks = self.rabi_by_rank_hz(atom, (a, b), bias)?;
        let rabi_hz: Complex64 = ranks.iter().sum();
        let yardstick = self.yardstick(atom, bias)?;
        let mut coupling = Coupling {
            atom: atom.clone(),
            from: a,
            to: b,
            rabi_hz,
            ranks,
            relative: yardstick.of(rabi_hz.norm()),
            rule: String::new(),
            alternatives: Vec::new(),
            kick: None,
            effective_rabi_hz: rabi_hz,
        };
        if let Some(dark) = self.dark_beam()? {
            coupling.rule =
                format!("the {dark} beam has no power at the atoms: nothing is coupled");
            return Ok(coupling);
        }
        coupling.rule = self.rule(&coupling, bias, &yardstick)?;
        if coupling.is_forbidden() {
            coupling.alternatives = self.alternatives(atom, (a, b), bias)?;
        }
        Ok(coupling)
    }

    /// A beam without intensity at the atoms, by its role.
    fn dark_beam(&self) -> Result<Option<&'static str>, Error> {
        let [absorb, emit] = self.beams()?;
        for (role, beam) in [("absorbed", absorb), ("emitted", emit)] {
            if beam.intensity_w_per_m2([0.0; 3])? == 0.0 {
                return Ok(Some(role));
            }
        }
        Ok(None)
    }

    /// The largest coupling between two states with |Delta m| <= 1, or, where these
    /// beams make none, of all.
    pub(super) fn yardstick(&self, atom: &Atom, bias: &Bias) -> Result<Yardstick, Error> {
        let states = &atom.manifold().states;
        let (mut usual, mut all) = (0.0_f64, 0.0_f64);
        self.each_rabi_hz(atom, bias, |(to, from), found| {
            let size = match found {
                Ok(rabi_hz) => rabi_hz.norm(),
                // Light on a line of states that were not asked about.
                Err(Error::OnResonance { .. }) => return Ok(()),
                Err(other) => return Err(other),
            };
            if let (Some(b), Some(a)) = (states.get(to), states.get(from))
                && to != from
            {
                all = all.max(size);
                if (b.twice_m() - a.twice_m()).abs() <= 2 {
                    usual = usual.max(size);
                }
            }
            Ok(())
        })?;
        let is_usual = usual > ROUNDING * all;
        Ok(Yardstick { largest_hz: if is_usual { usual } else { all }, is_usual })
    }

    fn rule(
        &self,
        coupling: &Coupling,
        bias: &Bias,
        yardstick: &Yardstick,
    ) -> Result<String, Error> {
        let (a, b) = (coupling.from, coupling.to);
        let step = (b.twice_m() - a.twice_m()) / 2;
        if a == b {
            return Ok(format!("{a} to itself: a light shift that goes with the kick"));
        }
        let levels = if a.twice_f() == b.twice_f() {
            format!("within F = {}", halves_text(a.twice_f()))
        } else {
            format!("F = {} to F = {}", halves_text(a.twice_f()), halves_text(b.twice_f()))
        };
        let component = self.vector_component(bias, step)?;
        let mut rule = match step.abs() {
            0 => format!(
                "Delta m = 0, {levels}: the vector part drives it by the component of u2* x u1 \
                 along the field, {component:.3} here (1 at most)"
            ),
            1 => format!(
                "Delta m = {step:+}, {levels}: the vector part drives it by the component of \
                 u2* x u1 across the field that goes with {step:+}, {component:.3} here (1 at most)"
            ),
            2 => format!(
                "Delta m = {step:+}, {levels}: only the tensor part drives it, which far from the \
                 excited hyperfine structure is small"
            ),
            _ => return Ok(format!("Delta m = {step:+}: two photons change m by 2 at most")),
        };
        let total: f64 = coupling.ranks.iter().map(|part| part.norm()).sum();
        // The shares of what is zero but for rounding say nothing.
        if coupling.relative > ROUNDING {
            let [scalar, vector, tensor] = coupling.ranks.map(|part| percent(part.norm() / total));
            rule += &format!("; scalar {scalar}, vector {vector}, tensor {tensor}");
        }
        let size = if coupling.relative <= ROUNDING {
            "0".to_owned()
        } else {
            format!("{:.2e}", coupling.relative)
        };
        let usual = if yardstick.is_usual { " with |Delta m| <= 1" } else { "" };
        let verdict = if coupling.is_forbidden() { ": too weak to be used" } else { "" };
        Ok(rule + &format!("; {size} of the largest coupling of these beams{usual}{verdict}"))
    }

    /// Size of the component of u2* x u1 that changes m by `step` (0 or +-1).
    fn vector_component(&self, bias: &Bias, step: i32) -> Result<f64, Error> {
        let [absorb, emit] = self.beams()?;
        let axes = bias.axes()?;
        let absorbed = axes.components(absorb.unit_polarisation());
        let emitted = axes.components(emit.unit_polarisation()).map(|part| part.conj());
        let [_, vector, _] = Products::new(emitted, absorbed).opposite(step);
        // The product of rank 1 is (i/sqrt 2) u2* x u1.
        Ok(std::f64::consts::SQRT_2 * vector.norm())
    }
}

fn percent(part: f64) -> String {
    if part >= 1e-3 || part == 0.0 {
        format!("{:.1} %", 100.0 * part)
    } else {
        format!("{:.1e}", part)
    }
}
