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
mod report;
mod table;

use fluxloom_core::atom::{GroundLevels, State};
use fluxloom_core::lattice::lattice_scattering_per_s;
use fluxloom_core::light::{Beam, Bias, Scattering};
use fluxloom_core::{Atom, Lattice, RamanPair, limits};

use crate::apparatus::{Apparatus, Origin};
use crate::error::Error;
use chain::Chain;
pub use report::{LegScattering, LightReport, Link, Rate};

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
            assumed: self.assumed()?,
            field_gauss,
            field_rms_gauss: self.field_rms_gauss(),
            links: Vec::new(),
            scattering_per_s: Vec::new(),
            remarks,
            unconfirmed_data: unconfirmed(&bench.atom),
            beyond_lines_nm: bench.beyond_lines_nm(),
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

    /// Paths of numbers that the report rests on and the file does not state.
    fn assumed(&self) -> Result<Vec<String>, Error> {
        let mut assumed = Vec::new();
        if self.number("lattice.depth_er.standard_error").is_err() {
            assumed.push("lattice.depth_er.standard_error".to_owned());
        }
        if self.origin("field.noise_rms_gauss")? != Origin::Stated {
            assumed.push("field.noise_rms_gauss".to_owned());
        }
        Ok(assumed)
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

/// Tones of one laser are moved apart by modulators as far as this (common practice).
const TONES_REACH_HZ: f64 = 20e9;

impl Bench {
    /// Wavelengths of beams that feel lines which the table does not have.
    fn beyond_lines_nm(&self) -> Vec<f64> {
        let raman = self.raman.and_then(|pair| pair.given_beams());
        let beams = [self.lattice_beams, raman].into_iter().flatten().flatten();
        let mut found: Vec<f64> = Vec::new();
        for nm in beams.map(|beam| beam.wavelength_nm()) {
            if self.atom.is_beyond_lines(nm) && !found.contains(&nm) {
                found.push(nm);
            }
        }
        found
    }

    /// Why the Raman beams cannot drive a link, whatever their strength.
    fn too_far_apart(&self, splitting_hz: f64) -> Option<String> {
        let [absorb, emit] = self.raman?.given_beams()?;
        let apart_hz = absorb.frequency_hz() - emit.frequency_hz();
        let missing_hz = (apart_hz.abs() - splitting_hz.abs()).abs();
        (missing_hz > TONES_REACH_HZ).then(|| {
            format!(
                "couplings left out: the Raman beams differ by {:.1} GHz, which no modulator \
                 takes to the splittings of the links: no two photons of theirs make up a link",
                apart_hz.abs() * 1e-9
            )
        })
    }

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
        let splitting_hz = levels.splitting_hz(from, to)?;
        let too_far = self.too_far_apart(splitting_hz);
        report.remarks.extend(too_far.clone());
        let coupling = self
            .raman
            .filter(|_| too_far.is_none())
            .map(|pair| pair.coupling(&self.atom, (from, to), &self.bias, Some(&self.lattice)))
            .and_then(|found| {
                found
                    .map_err(|error| report.remarks.push(left_out("couplings", &error.into())))
                    .ok()
            });
        Ok(Link {
            from,
            to,
            splitting_hz,
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
