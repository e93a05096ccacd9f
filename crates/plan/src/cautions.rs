//! What in a laboratory of these settings can hurt someone, or mislead.
//!
//! Cautions name the hazard and the settings it comes from, and leave the rules
//! to those who make them: the local ones and the laser safety officer. They
//! inform; they classify nothing.
//!
//! Class limits for continuous light: class 3B above 5 mW (visible), class 4
//! above 500 mW (IEC 60825-1; from memory).

use std::borrow::Cow;

use fluxloom_core::Document;
use fluxloom_core::limits::plain;
use serde::{Deserialize, Serialize};

use crate::apparatus::Apparatus;
use crate::apparatus::keys::{self, Found, Key, Kind};
use crate::error::Error;
use crate::files::path;

/// A hazard, or a setting to think about, in words.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Caution {
    /// Stable code.
    pub code: Cow<'static, str>,
    /// What, from which settings, and whom to ask.
    pub text: String,
}

impl Document for Caution {
    const FORMAT: &'static str = "fluxloom-caution";
}

/// Power above which a beam is taken for class 3B or 4.
const STRONG_MW: f64 = 5.0;

/// Wavelengths that the eye sees.
const VISIBLE_NM: (f64, f64) = (400.0, 700.0);

/// Field above which the currents that make it deserve a word.
const STRONG_FIELD_GAUSS: f64 = 10.0;

impl Apparatus {
    /// Settings that stand outside their own ranges or do not quite agree, and
    /// hazards of the settings of today and of the powers the beams can be
    /// driven to.
    ///
    /// # Errors
    /// None for an apparatus that was read.
    pub fn cautions(&self) -> Result<Vec<Caution>, Error> {
        let mut cautions = self.outside_ranges()?;
        cautions.extend(self.depth_disagrees());
        cautions.extend(self.strong_beams()?);
        cautions.extend(self.strong_field());
        Ok(cautions)
    }

    fn outside_ranges(&self) -> Result<Vec<Caution>, Error> {
        let mut cautions = Vec::new();
        for range_path in self.paths() {
            let keys = path::split(&range_path);
            let Some(Found::Setting(Key { kind: Kind::Range(_, Some(today)), .. })) =
                keys::find(&keys)
            else {
                continue;
            };
            let Some((low, high)) = self.range(&range_path)? else { continue };
            let parent = range_path.rsplit_once('.').map_or("", |(parent, _)| parent);
            let here = path::join(parent, today);
            let Ok(value) = self.number(&here) else { continue };
            if value < low || value > high {
                cautions.push(Caution {
                    code: Cow::Borrowed("caution.outside_range"),
                    text: format!(
                        "{here} = {} stands outside {range_path} = [{}, {}]: it is judged as it \
                         stands, but the planner will not choose it",
                        plain(value),
                        plain(low),
                        plain(high)
                    ),
                });
            }
        }
        Ok(cautions)
    }

    fn depth_disagrees(&self) -> Option<Caution> {
        let text = self.agreement()?.caution()?;
        Some(Caution { code: Cow::Borrowed("caution.depth_disagrees"), text })
    }

    fn strong_beams(&self) -> Result<Option<Caution>, Error> {
        let (mut strong, mut invisible) = (Vec::new(), false);
        for beam in self.names("beams") {
            let power = |key: &str| self.number(&format!("beams.{beam}.{key}")).ok();
            let most = [power("power_mw"), power("max_power_mw")];
            let most = most.into_iter().flatten().fold(0.0, f64::max);
            let laser = self.text(&format!("beams.{beam}.laser"))?;
            let wavelength_nm = self.number(&format!("lasers.{laser}.wavelength_nm"))?;
            if most > STRONG_MW {
                strong.push(format!("{beam} (up to {most} mW at {wavelength_nm} nm)"));
                invisible |= wavelength_nm < VISIBLE_NM.0 || wavelength_nm > VISIBLE_NM.1;
            }
        }
        if strong.is_empty() {
            return Ok(None);
        }
        let unseen = if invisible { "; light that the eye does not see among them" } else { "" };
        Ok(Some(Caution {
            code: Cow::Borrowed("caution.laser"),
            text: format!(
                "beams in the range of class 3B or 4: {}{unseen}. Eyewear, enclosures and \
                 interlocks follow your local rules and your laser safety officer, not this program",
                strong.join(", ")
            ),
        }))
    }

    fn strong_field(&self) -> Option<Caution> {
        let field = |path: &str| self.number(path).ok();
        let range = self.range("field.range_gauss").ok().flatten().map(|(_, high)| high);
        let most =
            [field("field.magnitude_gauss"), range].into_iter().flatten().fold(0.0, f64::max);
        (most > STRONG_FIELD_GAUSS).then(|| Caution {
            code: Cow::Borrowed("caution.magnet"),
            text: format!(
                "a bias field of up to {most} G takes coil currents that can burn, and that strike \
                 an arc when broken: cooling, interlocks and covers follow your local rules"
            ),
        })
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn apparatus(power_mw: f64, wavelength_nm: f64) -> Apparatus {
        Apparatus::from_toml(&format!(
            "format = \"fluxloom-apparatus\"\nversion = 1\n[cloud]\natom = \"40K\"\n\
             [lasers.one]\nwavelength_nm = {wavelength_nm:?}\n\
             [beams.one]\nlaser = \"one\"\npower_mw = {power_mw:?}\n\
             [lattice]\nbeams = [\"one\"]\ndepth_er = 6.0\n"
        ))
        .unwrap()
    }

    #[test]
    fn strong_and_invisible_beams_are_named() {
        let cautions = apparatus(54.6, 1064.0).cautions().unwrap();
        assert_eq!(cautions[0].code, "caution.laser");
        assert!(cautions[0].text.contains("one (up to 54.6 mW at 1064 nm)"));
        assert!(cautions[0].text.contains("does not see"));
        assert!(cautions[0].text.contains("laser safety officer"));
        assert!(!apparatus(54.6, 532.0).cautions().unwrap()[0].text.contains("does not see"));
        assert!(apparatus(1.0, 532.0).cautions().unwrap().is_empty());
    }

    #[test]
    fn a_setting_outside_its_range_is_mentioned() {
        let text = apparatus(1.0, 532.0).to_toml();
        let text =
            text.replace("wavelength_nm = 532.0", "wavelength_nm = 532.0\nrange_nm = [600, 700]");
        let cautions = Apparatus::from_toml(&text).unwrap().cautions().unwrap();
        assert_eq!(cautions[0].code, "caution.outside_range");
        assert!(cautions[0].text.starts_with("lasers.one.wavelength_nm = 532 stands outside"));
    }
}
