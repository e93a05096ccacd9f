//! The verdict on a proposed Raman wavelength: does it write the target flux?
//!
//! The flux is written as branch + sense x target + error. Over N sites the
//! error turns the phase by 2 pi error (N - 1); the target is met when that
//! stays within the phase budget. Whoever misses it is told the nearest
//! wavelength and the nearest crossing angle that hit, and how well each must
//! be held.

use fluxloom_core::flux::{
    closure_mismatch, closure_overlap, decompose, fold, loop_flux, nearest_hits,
};
use fluxloom_core::lattice::LinkOverlaps;
use fluxloom_core::limits;
use fluxloom_core::rational::{Flux, Fraction, Sense, nearest_fractions};
use fluxloom_core::{Document, Error, Lattice, RamanPair};
use serde::de::Error as _;
use serde::{Deserialize, Deserializer, Serialize, Serializer};

use crate::verdict;

/// How the flux is judged. `sites` has no default: left at 0 it is refused.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct CheckOptions {
    /// Number of sites the atoms cover.
    pub sites: u32,
    /// Number of legs; needed for a tube.
    pub legs: Option<u32>,
    /// Whether the last leg couples back to the first (a tube).
    pub closed: bool,
    /// Flux phase error over the sites that is accepted.
    pub phase_budget_rad: f64,
}

impl Default for CheckOptions {
    fn default() -> Self {
        Self { sites: 0, legs: None, closed: false, phase_budget_rad: 0.5 }
    }
}

/// A simple fraction next to the flux, and the phase error if it were the target.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct NearFraction {
    /// The fraction.
    pub fraction: Fraction,
    /// Signed phase by which the folded flux runs away from it over the sites.
    pub phase_error_rad: f64,
}

/// Smallest closure overlap at which the loop phase still acts.
pub const PHYSICAL_OVERLAP: f64 = 0.5;

/// The verdict on one Raman pair, one lattice and one target.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(remote = "Self", deny_unknown_fields)]
pub struct FluxCheck {
    /// Whether the phase error stays within the budget.
    pub meets_target: bool,
    /// The verdict in one sentence.
    pub verdict: String,
    /// The lattice that was judged.
    pub lattice: Lattice,
    /// The Raman pair that was judged.
    pub raman: RamanPair,
    /// The flux that was wanted.
    pub target: Flux,
    /// Number of sites the atoms cover.
    pub sites: u32,
    /// Number of legs, if it was given.
    pub legs: Option<u32>,
    /// Whether the last leg couples back to the first (a tube).
    pub closed: bool,
    /// Flux phase error over the sites that is accepted.
    pub phase_budget_rad: f64,
    /// Flux per plaquette, signed and unfolded.
    pub flux: f64,
    /// The flux folded into (-1/2, 1/2].
    pub folded: f64,
    /// flux = branch + sense x target + error.
    pub branch: i64,
    /// Which way round the target is met.
    pub sense: Sense,
    /// Signed flux error.
    pub error: f64,
    /// Signed phase error over the sites, 2 pi error (sites - 1).
    pub phase_error_rad: f64,
    /// Fractions next to the folded flux with denominators up to the number of
    /// sites, nearest first, at most five.
    pub nearest: Vec<NearFraction>,
    /// Nearest wavelength that hits; for beams of two wavelengths that of the
    /// absorbed one, the other held.
    pub exact_wavelength_nm: Option<f64>,
    /// Half-width about it within which the budget is kept.
    pub wavelength_tolerance_nm: Option<f64>,
    /// Nearest crossing angle that hits; none for beams given by directions.
    pub exact_angle_deg: Option<f64>,
    /// Half-width about it within which the budget is kept.
    pub angle_tolerance_deg: Option<f64>,
    /// O_0 of the kick: multiplies every Raman coupling.
    pub kick_overlap: f64,
    /// |O_1/O_0|, the weight of diagonal links; none where O_0 vanishes.
    pub diagonal_ratio: Option<f64>,
    /// Tube only: flux round the loop of legs, every link, the closing one
    /// included, carrying the same flux in the same sense.
    pub loop_flux: Option<f64>,
    /// Tube only: distance mu of the loop flux from the nearest integer, 0 to 1/2.
    pub closure_mismatch: Option<f64>,
    /// Tube only: |sin(pi N mu)/(N sin(pi mu))| over N sites.
    pub closure_overlap: Option<f64>,
    /// Tube only: whether the loop phase acts on this cloud (overlap at least 1/2).
    pub loop_phase_is_physical: Option<bool>,
}

impl Document for FluxCheck {
    const FORMAT: &'static str = "fluxloom-check";
}

impl Document for NearFraction {
    const FORMAT: &'static str = "fluxloom-near-fraction";
}

impl Serialize for FluxCheck {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        Self::serialize(self, serializer)
    }
}

impl<'de> Deserialize<'de> for FluxCheck {
    fn deserialize<D: Deserializer<'de>>(deserializer: D) -> Result<Self, D::Error> {
        // The derived reader, and then what the check itself would have refused.
        let check = Self::deserialize(deserializer)?;
        check_options(check.options()).map_err(D::Error::custom)?;
        Ok(check)
    }
}

impl FluxCheck {
    /// How the flux was judged.
    #[must_use]
    pub fn options(&self) -> CheckOptions {
        let &Self { sites, legs, closed, phase_budget_rad, .. } = self;
        CheckOptions { sites, legs, closed, phase_budget_rad }
    }
}

fn phase_rad(error: f64, sites: u32) -> f64 {
    std::f64::consts::TAU * error * (f64::from(sites) - 1.0)
}

/// Number of fractions shown.
const NEAREST: usize = 5;

/// Judges a Raman pair on a lattice against a target flux.
///
/// # Errors
/// [`Error::OutOfRange`] for sites, legs or budget, [`Error::Contradiction`]
/// (`check.closed_needs_legs`) for a tube without its number of legs,
/// [`Error::NotLocalised`] for a lattice too shallow for sites to mean anything.
pub fn check_flux(
    lattice: &Lattice,
    raman: &RamanPair,
    target: Flux,
    options: CheckOptions,
) -> Result<FluxCheck, Error> {
    check_options(options)?;
    let flux = limits::FLUX.check(raman.flux(lattice))?;
    let folded = fold(flux);
    let (branch, sense, error) = decompose(flux, target);
    let phase_error_rad = phase_rad(error, options.sites);
    let nearest = nearest_fractions(folded, i64::from(options.sites), NEAREST)?
        .into_iter()
        .map(|fraction| NearFraction {
            fraction,
            phase_error_rad: phase_rad(fraction.below(folded), options.sites),
        })
        .collect();
    let flux_tolerance = options.phase_budget_rad / phase_rad(1.0, options.sites);
    let wavelength = remedy::wavelength(raman, lattice, target, flux_tolerance);
    let angle = remedy::angle(raman, lattice, flux, target, flux_tolerance);
    let LinkOverlaps { on_site, diagonal_ratio } = lattice.link_overlaps(raman.kick(lattice))?;
    let loop_flux =
        options.legs.filter(|_| options.closed).map(|legs| loop_flux(&vec![flux; legs as usize]));
    let mismatch = loop_flux.map(closure_mismatch);
    let overlap = mismatch.map(|mismatch| closure_overlap(mismatch, options.sites));
    #[allow(clippy::cast_possible_truncation)]
    let branch = branch as i64;
    let mut check = FluxCheck {
        meets_target: phase_error_rad.abs() <= options.phase_budget_rad,
        verdict: String::new(),
        lattice: lattice.clone(),
        raman: *raman,
        target,
        sites: options.sites,
        legs: options.legs,
        closed: options.closed,
        phase_budget_rad: options.phase_budget_rad,
        flux,
        folded,
        branch,
        sense,
        error,
        phase_error_rad,
        nearest,
        exact_wavelength_nm: wavelength.map(|found| found.value),
        wavelength_tolerance_nm: wavelength.map(|found| found.tolerance),
        exact_angle_deg: angle.map(|found| found.value),
        angle_tolerance_deg: angle.map(|found| found.tolerance),
        kick_overlap: on_site,
        diagonal_ratio,
        loop_flux,
        closure_mismatch: mismatch,
        closure_overlap: overlap,
        loop_phase_is_physical: overlap.map(|overlap| overlap >= PHYSICAL_OVERLAP),
    };
    check.verdict = verdict::sentence(&check);
    Ok(check)
}

fn check_options(options: CheckOptions) -> Result<(), Error> {
    limits::SITES.check(f64::from(options.sites))?;
    limits::PHASE_BUDGET_RAD.check(options.phase_budget_rad)?;
    if let Some(legs) = options.legs {
        limits::LEGS.check(f64::from(legs))?;
    }
    if options.closed && options.legs.is_none_or(|legs| legs < 2) {
        return Err(Error::Contradiction {
            code: "check.closed_needs_legs",
            message: format!(
                "closed = true with legs = {}: a tube needs at least 2 legs, give legs",
                options.legs.map_or_else(|| "none".to_owned(), |legs| legs.to_string())
            ),
        });
    }
    Ok(())
}

/// The nearest settings that hit the target, and how well they must be held.
mod remedy {
    use super::{Flux, Lattice, RamanPair, limits, nearest_hits};
    use fluxloom_core::flux::angle_for;

    /// A setting that hits, and the half-width about it that keeps the budget.
    #[derive(Debug, Clone, Copy)]
    pub(super) struct Hit {
        pub value: f64,
        pub tolerance: f64,
    }

    fn nearest(candidates: impl Iterator<Item = (f64, f64)>, today: f64) -> Option<(f64, f64)> {
        candidates.min_by(|(a, _), (b, _)| (a - today).abs().total_cmp(&(b - today).abs()))
    }

    /// The tuned part of the flux goes as 1/wavelength. The smaller of the two
    /// sides is the tolerance, so that it holds on both.
    pub(super) fn wavelength(
        raman: &RamanPair,
        lattice: &Lattice,
        target: Flux,
        flux_tolerance: f64,
    ) -> Option<Hit> {
        let today = raman.leading_wavelength_nm();
        let (tuned, held) = raman.flux_parts(lattice);
        if tuned == 0.0 {
            return None;
        }
        let candidates = nearest_hits(tuned + held, target)
            .into_iter()
            .map(|wanted| (today * tuned / (wanted - held), wanted - held))
            .filter(|(value, _)| limits::WAVELENGTH_NM.contains(*value));
        let (value, wanted) = nearest(candidates, today)?;
        let tolerance = value * flux_tolerance / (wanted.abs() + flux_tolerance);
        Some(Hit { value, tolerance })
    }

    /// The flux goes as sin(angle/2); at 180 degrees it turns back, so that only
    /// one side can leave the budget there.
    pub(super) fn angle(
        raman: &RamanPair,
        lattice: &Lattice,
        flux: f64,
        target: Flux,
        flux_tolerance: f64,
    ) -> Option<Hit> {
        let crossing = raman.as_crossing()?;
        let widest = raman.with_angle_deg(180.0)?.flux(lattice);
        if widest == 0.0 {
            return None;
        }
        let candidates = nearest_hits(flux, target)
            .into_iter()
            .filter_map(|wanted| Some((angle_for(wanted / widest)?, wanted)))
            .filter(|(value, _)| *value >= 0.0);
        let (value, wanted) = nearest(candidates, crossing.angle_deg)?;
        // A side that no angle from 0 to 180 reaches cannot be left on.
        let side = |by: f64| {
            angle_for((wanted + by) / widest)
                .filter(|end| *end >= 0.0)
                .map_or(f64::INFINITY, |end| (end - value).abs())
        };
        let tolerance = side(flux_tolerance).min(side(-flux_tolerance));
        // A budget that no angle exhausts leaves the whole range.
        Some(Hit { value, tolerance: tolerance.min(180.0) })
    }
}
