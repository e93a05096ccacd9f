//! Wannier functions on a grid, and what follows from them on one site.
//!
//! w(x) = (1/N) sum_q sum_p A_q(p) cos(p k_L x) in even bands, sin in odd ones,
//! with the signs of the Bloch states: real, maximally localised, even about
//! the site in even bands, odd with w'(0) > 0 in odd bands.

use serde::{Deserialize, Serialize};

use crate::control::{self, Control};
use crate::documents::Document;
use crate::error::Error;
use crate::lattice::batch::for_each_chunk;
use crate::lattice::bloch::{BlochState, bloch_states, index, zone, zone_points};
use crate::lattice::geometry::Lattice;
use crate::lattice::tunnelling::check_band;
use crate::limits;

/// The grid of a tabulated Wannier function.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct WannierInput {
    /// Band, counted from 0.
    pub band: usize,
    /// Grid points per site.
    pub points_per_site: usize,
    /// Sites covered, centred on the function's own.
    pub sites: usize,
}

impl Default for WannierInput {
    fn default() -> Self {
        Self { band: 0, points_per_site: 64, sites: 8 }
    }
}

/// A Wannier function on a symmetric grid.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(try_from = "RawWannier")]
pub struct Wannier {
    /// Band, counted from 0.
    pub band: usize,
    /// Positions from the centre of the site; `sites * points_per_site + 1` of them.
    pub x_nm: Vec<f64>,
    /// w(x), real, per square root of a nanometre: amplitude^2 over `x_nm` integrates to 1.
    pub amplitude: Vec<f64>,
}

impl Document for Wannier {
    const FORMAT: &'static str = "fluxloom-wannier";
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct RawWannier {
    band: usize,
    x_nm: Vec<f64>,
    amplitude: Vec<f64>,
}

impl TryFrom<RawWannier> for Wannier {
    type Error = Error;

    fn try_from(raw: RawWannier) -> Result<Self, Error> {
        let RawWannier { band, x_nm, amplitude } = raw;
        check_band(band, "band")?;
        if x_nm.len() != amplitude.len() || x_nm.is_empty() {
            return Err(Error::Contradiction {
                code: "file.wrong_shape",
                message: format!(
                    "x_nm holds {} numbers and amplitude {}: they must hold as many, at least one",
                    x_nm.len(),
                    amplitude.len()
                ),
            });
        }
        Ok(Self { band, x_nm, amplitude })
    }
}

/// Positions handled between two looks at the control.
const POSITIONS_PER_TASK: usize = 64;

/// Values at positions in units of the spacing, normalised over one spacing.
fn tabulate(
    states: &[BlochState],
    band: usize,
    positions: &[f64],
    control: &dyn Control,
) -> Result<Vec<f64>, Error> {
    let weight = 1.0 / index(states.len());
    let wave = if band.is_multiple_of(2) { f64::cos } else { f64::sin };
    let mut values = control::zeros(positions.len())?;
    for_each_chunk(&mut values, POSITIONS_PER_TASK, |(task, values)| {
        control::go_on(control)?;
        for (value, x) in values.iter_mut().zip(positions.iter().skip(task * POSITIONS_PER_TASK)) {
            let phase = std::f64::consts::PI * x;
            let at = |state: &BlochState| -> f64 {
                state.terms().map(|(p, a)| a * wave(p * phase)).sum()
            };
            *value = weight * states.iter().map(at).sum::<f64>();
        }
        Ok(())
    })?;
    Ok(values)
}

impl Lattice {
    /// The Wannier function of a band.
    ///
    /// # Errors
    /// [`Error::OutOfRange`] for band or grid, [`Error::NotLocalised`],
    /// [`Error::MemoryOverLimit`], [`Error::Cancelled`].
    pub fn wannier(&self, input: WannierInput, control: &dyn Control) -> Result<Wannier, Error> {
        let WannierInput { band, points_per_site, sites } = input;
        check_band(band, "band")?;
        limits::POINTS_PER_SITE.check(index(points_per_site))?;
        limits::WANNIER_SITES.check(index(sites))?;
        control::allow_numbers(&[points_per_site, sites], 16)?;
        let count = points_per_site * sites;
        let positions: Vec<f64> =
            (0..=count).map(|k| (index(k) - 0.5 * index(count)) / index(points_per_site)).collect();
        let points = zone_points(self.depth_er(), band, sites)?;
        let states = bloch_states(self.depth_er(), band, &zone(points, 0.5));
        let spacing_nm = self.spacing_nm();
        let amplitude = tabulate(&states, band, &positions, control)?
            .into_iter()
            .map(|w| w / spacing_nm.sqrt())
            .collect();
        Ok(Wannier { band, x_nm: positions.iter().map(|x| x * spacing_nm).collect(), amplitude })
    }

    /// The integral of w^4 in units of k_L = pi/a: what turns an interaction
    /// strength into an on-site energy.
    ///
    /// w^4 holds no wave beyond four times the largest kept momentum, so a sum
    /// on a grid finer than that is exact; the range grows until the function
    /// has decayed to rounding.
    ///
    /// # Errors
    /// [`Error::OutOfRange`] for the band, [`Error::NotLocalised`], [`Error::Cancelled`].
    pub fn onsite_integral(&self, band: usize, control: &dyn Control) -> Result<f64, Error> {
        check_band(band, "band")?;
        let points = zone_points(self.depth_er(), band, 0)?;
        let states = bloch_states(self.depth_er(), band, &zone(points, 0.5));
        let rows = states.first().map_or(0, |state| state.amplitudes.len());
        // Momenta up to `rows` k_L each, four of them, need 2 x 4 rows/2 points a site.
        let per_site = 4 * rows + 8;
        let mut integral = 0.0;
        for site in 0..points / 2 {
            let positions: Vec<f64> =
                (0..per_site).map(|k| index(site) + (index(k) + 0.5) / index(per_site)).collect();
            let values = tabulate(&states, band, &positions, control)?;
            let fourth: f64 = values.iter().map(|w| w.powi(4)).sum();
            integral += 2.0 * fourth / index(per_site);
            if fourth <= 1e-17 * integral * index(per_site) {
                break;
            }
        }
        Ok(integral / std::f64::consts::PI)
    }
}
