//! What the light of an apparatus does to its atoms: the depth that the power
//! makes, the couplings between legs that follow each other, and the light they
//! scatter.
//!
//! Couplings are those of both Raman beams with all their power, one tone each; in
//! the lattice they are multiplied by the overlap of the kick. Splittings are those
//! of the bias field, without light. The noise of the field moves a link by the
//! difference of the slopes of its states, and its parts are independent:
//!
//! ```text
//! rms^2 = noise^2 + mains^2 + drift^2 + (ppm 1e-6 B)^2
//! ```
//!
//! What cannot be computed (light on a resonance, say) is left out and said in a
//! remark; nothing else suffers from it.

mod chain;
mod table;

use std::borrow::Cow;

use fluxloom_core::atom::{GroundLevels, State};
use fluxloom_core::lattice::lattice_scattering_per_s;
use fluxloom_core::light::{Beam, Bias, Scattering};
use fluxloom_core::{Atom, Document, Lattice, RamanPair, limits};
use serde::{Deserialize, Serialize};

use crate::apparatus::{Apparatus, Origin};
use crate::cautions::Caution;
use crate::error::Error;
use chain::Chain;

/// Which states are looked at.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq)]
pub struct Legs {
    /// How many; without it up to [`MOST`].
    pub count: Option<u32>,
    /// Whether the last one couples back to the first (a tube).
    pub closed: bool,
}

/// Legs that are looked at where no number is asked for.
pub const MOST: u32 = 4;

/// A link between two legs.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Link {
    /// The leg it starts from.
    #[serde(with = "as_text")]
    pub from: State,
    /// The leg it leads to.
    #[serde(with = "as_text")]
    pub to: State,
    /// Energy of the second state above the first over h, in the bias field.
    pub splitting_hz: f64,
    /// Size of the Rabi frequency over 2 pi of free atoms; none without Raman light.
    pub rabi_hz: Option<f64>,
    /// The same of atoms in the lattice.
    pub effective_rabi_hz: Option<f64>,
    /// Whether the coupling is too weak to be used.
    pub forbidden: bool,
    /// Which part of the light drives it, and how well.
    pub rule: Option<String>,
    /// For a coupling that cannot be used: what would drive it better.
    pub alternatives: Vec<String>,
    /// Change of the splitting with the field.
    pub field_hz_per_gauss: f64,
    /// Rms of the splitting that the noise of the field makes.
    pub field_rms_hz: f64,
}

/// Photons that an atom in a state scatters in one kind of light.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Rate {
    /// All of them, per second.
    pub total: f64,
    /// Those that change the state, per second.
    pub changing: f64,
}

/// Scattering of a leg.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct LegScattering {
    /// The leg.
    #[serde(with = "as_text")]
    pub state: State,
    /// In both Raman beams; none without their light.
    pub raman_beams: Option<Rate>,
    /// In the light of the lattice, on its sites; none without it.
    pub lattice_beams: Option<Rate>,
}

/// What the light of an apparatus does.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct LightReport {
    /// Depth that the stated power makes, in lattice recoils; none without the
    /// light of the lattice.
    pub depth_from_power_er: Option<f64>,
    /// Depth as stated: the one that is used.
    pub depth_er: f64,
    /// Its standard error, stated or common practice.
    pub depth_standard_error_er: Option<f64>,
    /// The bias field, if it is stated; else all is computed without a field.
    pub field_gauss: Option<f64>,
    /// Rms of the field, all its stated parts together.
    pub field_rms_gauss: f64,
    /// Links between legs that follow each other.
    pub links: Vec<Link>,
    /// Scattering of each leg.
    pub scattering_per_s: Vec<LegScattering>,
    /// What was left out, and why.
    pub remarks: Vec<String>,
    /// Numbers of the atom behind all this that no source confirms.
    pub unconfirmed_data: Vec<String>,
}

impl Document for LightReport {
    const FORMAT: &'static str = "fluxloom-light-report";
}

impl Document for Link {
    const FORMAT: &'static str = "fluxloom-link";
}

impl Document for LegScattering {
    const FORMAT: &'static str = "fluxloom-leg-scattering";
}

impl LightReport {
    /// The numbers as aligned lines for a terminal.
    #[must_use]
    pub fn table(&self) -> String {
        table::lines(self)
    }

    /// What to think about before these numbers are used.
    #[must_use]
    pub fn cautions(&self) -> Vec<Caution> {
        if self.unconfirmed_data.is_empty() {
            return Vec::new();
        }
        vec![Caution {
            code: Cow::Borrowed("caution.unconfirmed_data"),
            text: format!(
                "levels, couplings, depth and scattering rest on numbers of the atomic table that \
                 no source confirms: {}; compare them with your own",
                self.unconfirmed_data.join(", ")
            ),
        }]
    }
}

/// Everything that a report is made from.
struct Bench {
    atom: Atom,
    lattice: Lattice,
    bias: Bias,
    /// Raman pair and lattice beams, as far as they state their light.
    raman: Option<RamanPair>,
    lattice_beams: Option<[Beam; 2]>,
}

impl Apparatus {
    /// What the light of today does; none if neither the lattice nor the Raman
    /// beams state power, waist and polarisation. The legs are `cloud.start` and
    /// the states of its F that follow it: upwards in m from the lower half,
    /// downwards from the upper one.
    ///
    /// # Errors
    /// [`fluxloom_core::Error::OutOfRange`] for the number of legs; none else for
    /// an apparatus that was read.
    pub fn links(&self, legs: Legs) -> Result<Option<LightReport>, Error> {
        if let Some(count) = legs.count {
            limits::LEGS.check(f64::from(count)).map_err(Error::Core)?;
        }
        if !self.has_light("raman") && !self.has_light("lattice") {
            return Ok(None);
        }
        let mut remarks = Vec::new();
        let bench = self.bench(&mut remarks)?;
        let depth = bench.lattice_beams.map(|_| self.depth_from_power_er()).and_then(|found| {
            found.map_err(|error| remarks.push(left_out("depth from power", &error))).ok()
        });
        let field_gauss = self.number("field.magnitude_gauss").ok();
        if field_gauss.is_none() {
            remarks.push(
                "field.magnitude_gauss is not stated: levels and couplings are those without a \
                 field"
                    .to_owned(),
            );
        }
        let mut report = LightReport {
            depth_from_power_er: depth,
            depth_er: self.number("lattice.depth_er")?,
            depth_standard_error_er: self.standard_error("lattice.depth_er")?.map(|(size, _)| size),
            field_gauss,
            field_rms_gauss: self.field_rms_gauss(),
            links: Vec::new(),
            scattering_per_s: Vec::new(),
            remarks,
            unconfirmed_data: unconfirmed(&bench.atom),
        };
        if self.origin("cloud.start")? == Origin::NotStated {
            report.remarks.push(
                "cloud.start is not stated, so that links and scattering are left out: state \
                 where the legs begin, as \"F,m\""
                    .to_owned(),
            );
            return Ok(Some(report));
        }
        let chain = Chain::from(&bench.atom, self.state("cloud.start")?, legs);
        report.remarks.extend(chain.remark);
        bench.fill(&chain.legs, &chain.links, &mut report)?;
        Ok(Some(report))
    }

    /// Rms of the bias field, all its parts together.
    fn field_rms_gauss(&self) -> f64 {
        let part = |key: &str| self.number(&format!("field.{key}")).unwrap_or(0.0);
        let in_proportion = part("noise_ppm") * 1e-6 * part("magnitude_gauss");
        [part("noise_rms_gauss"), part("mains_rms_gauss"), part("drift_rms_gauss"), in_proportion]
            .into_iter()
            .fold(0.0, f64::hypot)
    }

    fn bench(&self, remarks: &mut Vec<String>) -> Result<Bench, Error> {
        let mut left_out = |what: &str, error: &Error| remarks.push(left_out(what, error));
        let lattice_beams = self
            .lattice_beams()
            .map_err(|error| left_out("depth from power and scattering in the lattice", &error))
            .ok();
        let raman = if self.pair_is_stated() {
            let lit = self.lit_raman_pair();
            lit.map_err(|error| left_out("couplings and scattering of Raman beams", &error)).ok()
        } else {
            None
        };
        Ok(Bench {
            atom: self.atom()?,
            lattice: self.lattice()?,
            bias: self.bias(),
            raman,
            lattice_beams,
        })
    }

    fn pair_is_stated(&self) -> bool {
        !self.names("raman").is_empty()
    }

    /// The Raman pair with its light, or what is missing.
    fn lit_raman_pair(&self) -> Result<RamanPair, Error> {
        for beam in self.list("raman.beams")? {
            self.beam(&beam)?;
        }
        self.raman_pair()
    }
}

impl Bench {
    fn fill(
        &self,
        legs: &[State],
        links: &[(State, State)],
        report: &mut LightReport,
    ) -> Result<(), Error> {
        let levels = self.atom.ground_levels(self.bias.field_gauss)?;
        for states in links {
            let link = self.link(*states, &levels, report)?;
            report.links.push(link);
        }
        for state in legs {
            let mut rate = |what: &str, found: Option<Result<Scattering, fluxloom_core::Error>>| {
                let rate = found?.map_err(|error| {
                    report.remarks.push(left_out(&format!("scattering {what}"), &error.into()));
                });
                rate.ok().map(|rate| Rate { total: rate.total, changing: rate.raman })
            };
            let raman_beams = rate(
                "of Raman beams",
                self.raman
                    .map(|pair| self.atom.scattering_per_s(&pair.beams()?, *state, &self.bias)),
            );
            let lattice_beams = rate(
                "in the lattice",
                self.lattice_beams
                    .map(|beams| lattice_scattering_per_s(&self.atom, &beams, *state, &self.bias)),
            );
            report.scattering_per_s.push(LegScattering {
                state: *state,
                raman_beams,
                lattice_beams,
            });
        }
        // One reason for several legs is told once.
        let mut told = std::collections::BTreeSet::new();
        report.remarks.retain(|remark| told.insert(remark.clone()));
        Ok(())
    }

    fn link(
        &self,
        (from, to): (State, State),
        levels: &GroundLevels,
        report: &mut LightReport,
    ) -> Result<Link, Error> {
        let slope = levels.moment_hz_per_gauss(to)? - levels.moment_hz_per_gauss(from)?;
        let coupling = self
            .raman
            .map(|pair| pair.coupling(&self.atom, (from, to), &self.bias, Some(&self.lattice)))
            .and_then(|found| {
                found
                    .map_err(|error| report.remarks.push(left_out("couplings", &error.into())))
                    .ok()
            });
        Ok(Link {
            from,
            to,
            splitting_hz: levels.splitting_hz(from, to)?,
            rabi_hz: coupling.as_ref().map(|found| found.rabi_hz.norm()),
            effective_rabi_hz: coupling.as_ref().map(|found| found.effective_rabi_hz.norm()),
            forbidden: coupling.as_ref().is_some_and(fluxloom_core::light::Coupling::is_forbidden),
            rule: coupling.as_ref().map(|found| found.rule.clone()),
            alternatives: coupling.map(|found| found.alternatives).unwrap_or_default(),
            field_hz_per_gauss: slope,
            field_rms_hz: slope.abs() * report.field_rms_gauss,
        })
    }
}

/// Why something was left out.
fn left_out(what: &str, error: &Error) -> String {
    format!("{what} left out: {error}")
}

/// Numbers behind levels and light that no source confirms, each once.
fn unconfirmed(atom: &Atom) -> Vec<String> {
    let mut names = atom.unconfirmed_in_light();
    for name in atom.unconfirmed_in_fields() {
        if !names.contains(&name) {
            names.push(name);
        }
    }
    if !atom.has_residual() {
        names.push("residual_polarisability_au (missing)".to_owned());
    }
    names
}

/// States in documents as people write them.
mod as_text {
    use fluxloom_core::atom::State;
    use serde::de::Error as _;
    use serde::{Deserialize, Deserializer, Serializer};

    pub(super) fn serialize<S: Serializer>(
        state: &State,
        serializer: S,
    ) -> Result<S::Ok, S::Error> {
        serializer.collect_str(state)
    }

    pub(super) fn deserialize<'de, D: Deserializer<'de>>(
        deserializer: D,
    ) -> Result<State, D::Error> {
        let text = String::deserialize(deserializer)?;
        text.parse().map_err(D::Error::custom)
    }
}
