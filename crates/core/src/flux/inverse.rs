//! Wavelengths and angles that reach a target flux, over all branches and senses.

use serde::{Deserialize, Serialize};

use crate::control::Control;
use crate::degrees::{cos_deg, sin_deg};
use crate::documents::Document;
use crate::error::Error;
use crate::flux::formula::{FluxInput, flux};
use crate::lattice::{Lattice, Transfer};
use crate::limits;
use crate::rational::{Flux, Sense};

/// Most solutions returned at once.
const MOST: usize = 10_000;

/// Relative room for rounding at the ends of a range.
const EDGE: f64 = 1e-12;

/// One setting that reaches the target.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
#[serde(try_from = "RawSolution")]
pub struct Solution {
    /// Raman vacuum wavelength.
    pub wavelength_nm: f64,
    /// Full crossing angle.
    pub angle_deg: f64,
    /// Angle between momentum transfer and lattice.
    pub tilt_deg: f64,
    /// Unfolded flux at this setting: branch + sense x target.
    pub flux: f64,
    /// The integer part.
    pub branch: i64,
    /// Which way round.
    pub sense: Sense,
    /// O_0 of the kick: what is left of the Raman coupling.
    pub kick_overlap: f64,
}

impl Document for Solution {
    const FORMAT: &'static str = "fluxloom-solution";
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct RawSolution {
    wavelength_nm: f64,
    angle_deg: f64,
    tilt_deg: f64,
    flux: f64,
    branch: i64,
    sense: Sense,
    kick_overlap: f64,
}

impl TryFrom<RawSolution> for Solution {
    type Error = Error;

    fn try_from(raw: RawSolution) -> Result<Self, Error> {
        let RawSolution { wavelength_nm, angle_deg, tilt_deg, flux, branch, sense, kick_overlap } =
            raw;
        limits::WAVELENGTH_NM.check(wavelength_nm)?;
        limits::RAMAN_ANGLE_DEG.check(angle_deg)?;
        limits::TILT_DEG.check(tilt_deg)?;
        limits::FLUX.check(flux)?;
        Ok(Self { wavelength_nm, angle_deg, tilt_deg, flux, branch, sense, kick_overlap })
    }
}

/// Where to look for wavelengths.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct WavelengthSearch {
    /// Shortest and longest wavelength.
    pub range_nm: (f64, f64),
    /// Full crossing angle.
    pub angle_deg: f64,
    /// Angle between momentum transfer and lattice.
    pub tilt_deg: f64,
}

/// Where to look for angles.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct AngleSearch {
    /// Smallest and largest full crossing angle.
    pub range_deg: (f64, f64),
    /// Raman vacuum wavelength.
    pub wavelength_nm: f64,
    /// Angle between momentum transfer and lattice.
    pub tilt_deg: f64,
}

fn check_range(range: (f64, f64), limit: limits::Limit, field: &str) -> Result<(), Error> {
    limit.check_as(range.0, &format!("{field}[0]"))?;
    limit.check_as(range.1, &format!("{field}[1]"))?;
    if range.0 < range.1 {
        return Ok(());
    }
    Err(Error::EmptyRange { field: field.to_owned(), low: range.0, high: range.1 })
}

/// The senses that give different fluxes.
fn senses(target: Flux) -> &'static [Sense] {
    if target.is_its_own_opposite() { &[Sense::Same] } else { &[Sense::Same, Sense::Opposite] }
}

/// Every (branch, sense) whose flux lies in `low..=high`.
fn hits(
    target: Flux,
    (low, high): (f64, f64),
    named: (&str, (f64, f64)),
) -> Result<Vec<(i64, Sense)>, Error> {
    let (low, high) = (low - EDGE * low.abs(), high + EDGE * high.abs());
    let count = (high - low + 1.0) * 2.0;
    #[allow(clippy::cast_precision_loss)]
    if count > MOST as f64 {
        return Err(Error::TooManySolutions {
            field: named.0.to_owned(),
            low: named.1.0,
            high: named.1.1,
            count: count.round(),
            most: MOST,
        });
    }
    let mut found = Vec::new();
    for sense in senses(target) {
        let offset = sense.sign() * target.value();
        #[allow(clippy::cast_possible_truncation)]
        let (first, last) = ((low - offset).floor() as i64, (high - offset).ceil() as i64);
        for branch in first..=last {
            let value = reached(target, branch, *sense);
            if value >= low && value <= high {
                found.push((branch, *sense));
            }
        }
    }
    Ok(found)
}

#[allow(clippy::cast_precision_loss)]
fn reached(target: Flux, branch: i64, sense: Sense) -> f64 {
    target.reached(branch as f64, sense)
}

/// A solution before its flux and overlap are worked out.
struct Setting {
    wavelength_nm: f64,
    angle_deg: f64,
    branch: i64,
    sense: Sense,
}

/// The settings with their fluxes and overlaps, the largest overlap first.
fn finish(
    lattice: &Lattice,
    tilt_deg: f64,
    settings: &[Setting],
    control: &dyn Control,
) -> Result<Vec<Solution>, Error> {
    let spacing_nm = lattice.spacing_nm();
    let fluxes: Vec<f64> = settings
        .iter()
        .map(|&Setting { wavelength_nm, angle_deg, .. }| {
            flux(FluxInput { spacing_nm, wavelength_nm, angle_deg, tilt_deg })
        })
        .collect::<Result<_, _>>()?;
    let kicks: Vec<f64> = fluxes.iter().map(|flux| 2.0 * flux).collect();
    let overlaps = lattice.kick_overlaps_of(&kicks, Transfer::ON_SITE, control)?;
    let mut solutions: Vec<Solution> = settings
        .iter()
        .zip(fluxes.into_iter().zip(overlaps))
        .map(|(setting, (flux, kick_overlap))| {
            let &Setting { wavelength_nm, angle_deg, branch, sense } = setting;
            Solution { wavelength_nm, angle_deg, tilt_deg, flux, branch, sense, kick_overlap }
        })
        .collect();
    solutions.sort_by(|a, b| {
        b.kick_overlap
            .total_cmp(&a.kick_overlap)
            .then(a.flux.abs().total_cmp(&b.flux.abs()))
            .then(a.branch.cmp(&b.branch))
    });
    Ok(solutions)
}

/// All wavelengths in a range at which crossing beams reach the target, the
/// largest kick overlap first.
///
/// # Errors
/// [`Error::OutOfRange`], [`Error::EmptyRange`], [`Error::TooManySolutions`];
/// [`Error::Contradiction`] (`flux.nothing_to_solve`) where the flux is 0 at
/// every wavelength and that is what was asked; [`Error::Cancelled`].
pub fn raman_wavelengths(
    target: Flux,
    lattice: &Lattice,
    search: WavelengthSearch,
    control: &dyn Control,
) -> Result<Vec<Solution>, Error> {
    let WavelengthSearch { range_nm, angle_deg, tilt_deg } = search;
    check_range(range_nm, limits::WAVELENGTH_NM, "range_nm")?;
    limits::RAMAN_ANGLE_DEG.check(angle_deg)?;
    limits::TILT_DEG.check(tilt_deg)?;
    let reach_nm = 2.0 * lattice.spacing_nm() * sin_deg(0.5 * angle_deg) * cos_deg(tilt_deg);
    if reach_nm == 0.0 {
        return no_lever(target, "wavelength", angle_deg, tilt_deg);
    }
    let ends = (reach_nm / range_nm.0, reach_nm / range_nm.1);
    let span = (ends.0.min(ends.1), ends.0.max(ends.1));
    let settings: Vec<Setting> = hits(target, span, ("range_nm", range_nm))?
        .into_iter()
        .filter(|(branch, sense)| reached(target, *branch, *sense) != 0.0)
        .map(|(branch, sense)| {
            let wavelength_nm = reach_nm / reached(target, branch, sense);
            let wavelength_nm = wavelength_nm.clamp(range_nm.0, range_nm.1);
            Setting { wavelength_nm, angle_deg, branch, sense }
        })
        .collect();
    finish(lattice, tilt_deg, &settings, control)
}

/// All crossing angles in a range at which beams of one wavelength reach the
/// target, the largest kick overlap first.
///
/// # Errors
/// As [`raman_wavelengths`].
pub fn raman_angles(
    target: Flux,
    lattice: &Lattice,
    search: AngleSearch,
    control: &dyn Control,
) -> Result<Vec<Solution>, Error> {
    let AngleSearch { range_deg, wavelength_nm, tilt_deg } = search;
    check_range(range_deg, limits::RAMAN_ANGLE_DEG, "range_deg")?;
    limits::WAVELENGTH_NM.check(wavelength_nm)?;
    limits::TILT_DEG.check(tilt_deg)?;
    let most = 2.0 * lattice.spacing_nm() / wavelength_nm * cos_deg(tilt_deg);
    if most == 0.0 {
        return no_lever(target, "angle", range_deg.1, tilt_deg);
    }
    let ends = (most * sin_deg(0.5 * range_deg.0), most * sin_deg(0.5 * range_deg.1));
    let span = (ends.0.min(ends.1), ends.0.max(ends.1));
    let settings: Vec<Setting> = hits(target, span, ("range_deg", range_deg))?
        .into_iter()
        .map(|(branch, sense)| {
            let angle_deg = angle_for(reached(target, branch, sense) / most).unwrap_or(180.0);
            let angle_deg = angle_deg.clamp(range_deg.0, range_deg.1);
            Setting { wavelength_nm, angle_deg, branch, sense }
        })
        .collect();
    finish(lattice, tilt_deg, &settings, control)
}

fn no_lever(
    target: Flux,
    what: &str,
    angle_deg: f64,
    tilt_deg: f64,
) -> Result<Vec<Solution>, Error> {
    if target.value() == target.value().round() {
        return Err(Error::Contradiction {
            code: "flux.nothing_to_solve",
            message: format!(
                "at angle_deg = {angle_deg} and tilt_deg = {tilt_deg} the flux is 0 at every \
                 {what}, which is what {target} asks: any {what} will do"
            ),
        });
    }
    Ok(Vec::new())
}

/// The full angle whose half has this sine; none beyond 1.
#[must_use]
pub fn angle_for(sine: f64) -> Option<f64> {
    if sine.abs() > 1.0 + EDGE {
        return None;
    }
    Some(2.0 * sine.clamp(-1.0, 1.0).asin().to_degrees())
}

/// The unfolded fluxes branch + sense x target next to `flux` on both sides.
#[must_use]
pub fn nearest_hits(flux: f64, target: Flux) -> Vec<f64> {
    let mut found = Vec::new();
    for sense in senses(target) {
        let branch = (flux - sense.sign() * target.value()).floor();
        // One further out on each side, for a caller that cannot use the nearest.
        for step in [-1.0, 0.0, 1.0, 2.0] {
            found.push(target.reached(branch + step, *sense));
        }
    }
    found
}
