//! The report on what light does, as a value that can be written down.

use std::borrow::Cow;

use fluxloom_core::atom::State;
use fluxloom_core::{Document, limits};
use serde::{Deserialize, Serialize};

use super::table;
use crate::cautions::Caution;

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
#[serde(try_from = "RawReport")]
pub struct LightReport {
    /// Depth that the stated power makes, in lattice recoils; none without the
    /// light of the lattice.
    pub depth_from_power_er: Option<f64>,
    /// Depth as stated: the one that is used.
    pub depth_er: f64,
    /// Its standard error, stated or common practice.
    pub depth_standard_error_er: Option<f64>,
    /// Which of depth error and field noise are common practice, not stated.
    pub assumed: Vec<String>,
    /// The bias field, if it is stated; else all is computed without a field.
    pub field_gauss: Option<f64>,
    /// Rms of the field, all its parts together, stated or common practice.
    pub field_rms_gauss: f64,
    /// Links between legs that follow each other.
    pub links: Vec<Link>,
    /// Scattering of each leg.
    pub scattering_per_s: Vec<LegScattering>,
    /// What was left out, and why.
    pub remarks: Vec<String>,
    /// Numbers of the atom behind all this that no source confirms.
    pub unconfirmed_data: Vec<String>,
    /// Wavelengths of beams to which lines that the table does not have are near.
    pub beyond_lines_nm: Vec<f64>,
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct RawReport {
    depth_from_power_er: Option<f64>,
    depth_er: f64,
    depth_standard_error_er: Option<f64>,
    assumed: Vec<String>,
    field_gauss: Option<f64>,
    field_rms_gauss: f64,
    links: Vec<Link>,
    scattering_per_s: Vec<LegScattering>,
    remarks: Vec<String>,
    unconfirmed_data: Vec<String>,
    beyond_lines_nm: Vec<f64>,
}

impl TryFrom<RawReport> for LightReport {
    type Error = String;

    fn try_from(raw: RawReport) -> Result<Self, String> {
        let sizes = [
            Some(raw.depth_er),
            raw.depth_from_power_er,
            raw.depth_standard_error_er,
            raw.field_gauss,
            Some(raw.field_rms_gauss),
        ];
        let of_links = raw.links.iter().flat_map(|link| [link.rabi_hz, link.effective_rabi_hz]);
        let rates =
            raw.scattering_per_s.iter().flat_map(|leg| [leg.raman_beams, leg.lattice_beams]);
        let of_legs = rates.flatten().flat_map(|rate| [Some(rate.total), Some(rate.changing)]);
        if sizes.into_iter().chain(of_links).chain(of_legs).flatten().any(|size| size < 0.0) {
            return Err("depths, fields, couplings and rates are not negative".to_owned());
        }
        Ok(Self {
            depth_from_power_er: raw.depth_from_power_er,
            depth_er: raw.depth_er,
            depth_standard_error_er: raw.depth_standard_error_er,
            assumed: raw.assumed,
            field_gauss: raw.field_gauss,
            field_rms_gauss: raw.field_rms_gauss,
            links: raw.links,
            scattering_per_s: raw.scattering_per_s,
            remarks: raw.remarks,
            unconfirmed_data: raw.unconfirmed_data,
            beyond_lines_nm: raw.beyond_lines_nm,
        })
    }
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
        let mut cautions = Vec::new();
        let mut add = |code: &'static str, text: String| {
            cautions.push(Caution { code: Cow::Borrowed(code), text });
        };
        let weak: Vec<String> = self
            .links
            .iter()
            .filter(|link| link.forbidden)
            .map(|link| format!("{} -> {}", link.from, link.to))
            .collect();
        if !weak.is_empty() {
            add(
                "caution.link_forbidden",
                format!(
                    "links too weak to be used with these beams and this field: {}; the rule and \
                     what would drive them better stand beside each",
                    weak.join(", ")
                ),
            );
        }
        if !self.beyond_lines_nm.is_empty() {
            let beams: Vec<String> =
                self.beyond_lines_nm.iter().map(|nm| limits::plain(*nm)).collect();
            add(
                "caution.unlisted_lines",
                format!(
                    "light at {} nm is near or beyond lines of the atom that the table does not \
                     have: depth, couplings and scattering in it mean little",
                    beams.join(" and ")
                ),
            );
        }
        if !self.unconfirmed_data.is_empty() {
            add(
                "caution.unconfirmed_data",
                format!(
                    "levels, couplings, depth and scattering rest on numbers of the atomic table \
                     that no source confirms: {}; compare them with your own",
                    self.unconfirmed_data.join(", ")
                ),
            );
        }
        cautions
    }
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
