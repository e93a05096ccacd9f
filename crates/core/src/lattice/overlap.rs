//! What a momentum kick does to Wannier functions.
//!
//! <w_d| exp(i kappa k_L x) |w_0> = exp(i kappa pi d/2) O_d within a band, O_d
//! real: O_0 multiplies every Raman coupling, O_1 makes diagonal links. Between
//! bands (on one site) the element is real for bands of equal parity and i
//! times a real number for bands of different parity; that real number is
//! returned. Sums over the Brillouin zone converge exponentially.

use crate::control::{self, Control};
use crate::error::Error;
use crate::lattice::batch::for_each_chunk;
use crate::lattice::bloch::{bloch_states, index, zone, zone_points};
use crate::lattice::geometry::Lattice;
use crate::lattice::tunnelling::check_band;
use crate::limits;

/// Between which Wannier functions the kick acts.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub struct Transfer {
    /// Distance in sites of the final function.
    pub reach: i32,
    /// Initial band.
    pub band: usize,
    /// Final band.
    pub to_band: usize,
}

impl Transfer {
    /// Within the lowest band, on one site.
    pub const ON_SITE: Self = Self { reach: 0, band: 0, to_band: 0 };
}

/// What a kick leaves of a Raman link and of its unwanted diagonal companion.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct LinkOverlaps {
    /// O_0.
    pub on_site: f64,
    /// |O_1/O_0|; none where O_0 vanishes to rounding.
    pub diagonal_ratio: Option<f64>,
}

/// Overlaps below this are rounding.
const VANISHING: f64 = 1e-12;

impl Lattice {
    /// O_0 and |O_1/O_0| of the lowest band in one pass.
    ///
    /// # Errors
    /// As [`Lattice::kick_overlap`].
    pub fn link_overlaps(&self, kick: f64) -> Result<LinkOverlaps, Error> {
        let overlaps = self.kick_overlaps(kick, (0, 0), &[0, 1])?;
        let at = |reach: usize| overlaps.get(reach).copied().unwrap_or_default();
        let (on_site, diagonal) = (at(0), at(1));
        let diagonal_ratio = (on_site.abs() > VANISHING).then(|| (diagonal / on_site).abs());
        Ok(LinkOverlaps { on_site, diagonal_ratio })
    }

    /// O_d of a kick in units of k_L; kick = 2 x unfolded flux.
    ///
    /// # Errors
    /// [`Error::OutOfRange`] for kick, reach or bands; [`Error::Contradiction`]
    /// (`lattice.reach_between_bands`) for a hop between different bands, which
    /// has no single real number; [`Error::NotLocalised`].
    pub fn kick_overlap(&self, kick: f64, transfer: Transfer) -> Result<f64, Error> {
        let Transfer { reach, band, to_band } = transfer;
        if band != to_band && reach != 0 {
            return Err(Error::Contradiction {
                code: "lattice.reach_between_bands",
                message: format!(
                    "reach = {reach} with band = {band} and to_band = {to_band}: between different \
                     bands only reach = 0 gives a real number; take reach = 0 or one band"
                ),
            });
        }
        let overlaps = self.kick_overlaps(kick, (band, to_band), &[reach])?;
        Ok(overlaps.first().copied().unwrap_or_default())
    }

    /// O_d of many kicks, in their order; each as [`Lattice::kick_overlap`] gives it.
    ///
    /// # Errors
    /// As [`Lattice::kick_overlap`], and [`Error::Cancelled`].
    pub fn kick_overlaps_of(
        &self,
        kicks: &[f64],
        transfer: Transfer,
        control: &dyn Control,
    ) -> Result<Vec<f64>, Error> {
        control::allow_numbers(&[kicks.len()], 16)?;
        let mut overlaps = control::zeros(kicks.len())?;
        for_each_chunk(&mut overlaps, 1, |(place, overlap)| {
            control::go_on(control)?;
            if let (Some(kick), [overlap]) = (kicks.get(place), overlap) {
                *overlap = self.kick_overlap(*kick, transfer)?;
            }
            Ok(())
        })?;
        Ok(overlaps)
    }

    /// O_d for several reaches at once, for one pass over the zone.
    fn kick_overlaps(
        &self,
        kick: f64,
        bands: (usize, usize),
        reaches: &[i32],
    ) -> Result<Vec<f64>, Error> {
        limits::KICK.check(kick)?;
        let (band, to_band) = (check_band(bands.0, "band")?, check_band(bands.1, "to_band")?);
        let mut points = 0;
        for reach in reaches {
            limits::REACH.check(f64::from(*reach))?;
            for band in [band, to_band] {
                let needed = zone_points(self.depth_er(), band, reach.unsigned_abs() as usize)?;
                points = points.max(needed);
            }
        }
        let centres = zone(points, clear_fraction(kick, points));
        let shifted = |by: f64| centres.iter().map(|x| x + by).collect::<Vec<f64>>();
        let initial = bloch_states(self.depth_er(), band, &shifted(-0.5 * kick));
        let final_ = bloch_states(self.depth_er(), to_band, &shifted(0.5 * kick));
        let elements: Vec<f64> = initial
            .iter()
            .zip(&final_)
            .map(|(from, to)| from.terms().map(|(p, a)| a * to.amplitude_at(p + kick)).sum())
            .collect();
        // The factor -i of odd bands: <odd|..|even> is i times the sum, <even|..|odd> -i times.
        let sign = if band % 2 == 1 && to_band % 2 == 0 { -1.0 } else { 1.0 };
        Ok(reaches
            .iter()
            .map(|reach| {
                let turn = std::f64::consts::PI * f64::from(*reach);
                let sum: f64 =
                    centres.iter().zip(&elements).map(|(x, m)| (turn * x).cos() * m).sum();
                sign * sum / index(points)
            })
            .collect())
    }
}

/// The shift of the grid, in its own steps, that keeps both sets of quasimomenta
/// (centres minus and plus half the kick) farthest from the zone's centre and edge.
fn clear_fraction(kick: f64, points: usize) -> f64 {
    let step = 2.0 / index(points);
    let half = 0.5 * kick / step;
    let clearance = |fraction: f64| {
        let off = |position: f64| (position - position.round()).abs();
        off(fraction - half).min(off(fraction + half))
    };
    (0..16)
        .map(|k| (f64::from(k) + 0.5) / 16.0)
        .max_by(|a, b| clearance(*a).total_cmp(&clearance(*b)))
        .unwrap_or(0.5)
}
