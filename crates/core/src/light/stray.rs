//! What the beams of a pair couple besides the link they are meant for.
//!
//! A beam that carries both tones absorbs and emits by itself, without a kick;
//! the pair used the other way round kicks the other way; and light reflected
//! straight back, by a window or a fibre end, makes links with kicks of their own.
//! Half a per cent of reflected power is 7 % in amplitude.

use num_complex::Complex64;
use serde::{Deserialize, Serialize};

use super::bias::Bias;
use super::{Beam, RamanPair};
use crate::Atom;
use crate::atom::State;
use crate::documents::Document;
use crate::error::Error;
use crate::limits::POWER_FRACTION;

/// A coupling that nobody asked for.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(try_from = "RawStray")]
pub struct StrayCoupling {
    /// The atom, whose numbers stand behind the result.
    pub atom: Atom,
    /// Where the photon is absorbed from: `absorb`, `emit`, or one of them reflected.
    pub absorb: String,
    /// Where it is emitted into.
    pub emit: String,
    /// Complex Rabi frequency of b <- a over 2 pi, Hz, if both beams carried the
    /// two tones with all their power: it scales with the root of the fractions.
    pub rabi_hz: Complex64,
    /// The two beams, whose flux and kick in a lattice can be asked.
    pub pair: RamanPair,
}

impl Document for StrayCoupling {
    const FORMAT: &'static str = "fluxloom-stray-coupling";
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct RawStray {
    atom: Atom,
    absorb: String,
    emit: String,
    rabi_hz: Complex64,
    pair: RamanPair,
}

impl TryFrom<RawStray> for StrayCoupling {
    type Error = Error;

    fn try_from(raw: RawStray) -> Result<Self, Error> {
        raw.pair.beams()?;
        let RawStray { atom, absorb, emit, rabi_hz, pair } = raw;
        Ok(Self { atom, absorb, emit, rabi_hz, pair })
    }
}

impl RamanPair {
    /// Every other way in which the beams and their reflections drive b <- a,
    /// strongest first. `reflection` is the power that comes straight back.
    ///
    /// # Errors
    /// As [`RamanPair::rabi_hz`]; [`Error::OutOfRange`] for the reflection.
    pub fn stray_couplings(
        &self,
        atom: &Atom,
        states: (State, State),
        bias: &Bias,
        reflection: f64,
    ) -> Result<Vec<StrayCoupling>, Error> {
        POWER_FRACTION.check_as(reflection, "reflection")?;
        let [absorb, emit] = self.beams()?;
        let straight = [("absorb", absorb), ("emit", emit)];
        let reflected = [
            ("absorb, reflected", absorb.reflected(reflection)?),
            ("emit, reflected", emit.reflected(reflection)?),
        ];
        // Two reflections in one process are weaker by another factor; left out.
        let mut ways: Vec<[(&str, Beam); 2]> = Vec::new();
        for one in straight {
            for two in straight {
                if (one.0, two.0) != ("absorb", "emit") {
                    ways.push([one, two]);
                }
            }
            for two in reflected {
                ways.push([one, two]);
                ways.push([two, one]);
            }
        }
        let mut found = Vec::with_capacity(ways.len());
        for [one, two] in ways {
            let pair = Self::from_beams(one.1, two.1)?;
            let rabi_hz = pair.rabi_hz(atom, states, bias)?;
            found.push(StrayCoupling {
                atom: atom.clone(),
                absorb: one.0.to_owned(),
                emit: two.0.to_owned(),
                rabi_hz,
                pair,
            });
        }
        found.sort_by(|x, y| y.rabi_hz.norm().total_cmp(&x.rabi_hz.norm()));
        Ok(found)
    }
}
