//! Wannier functions on a grid, and what follows from them on one site.
//!
//! w(x) = (1/N) sum_q sum_p A_q(p) cos(p k_L x) in even bands, sin in odd ones,
//! with the signs of the Bloch states: real, maximally localised, even about
//! the site in even bands, odd with w'(0) > 0 in odd bands.

use std::sync::Arc;

use rustfft::num_complex::Complex;
use rustfft::{Fft, FftPlannerScalar};
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

/// The states of a band around a ring of as many sites as there are quasimomenta.
struct Ring {
    states: Vec<BlochState>,
    is_even: bool,
    transform: Arc<dyn Fft<f64>>,
}

impl Ring {
    fn new(depth_er: f64, band: usize, reach: usize) -> Result<Self, Error> {
        let points = zone_points(depth_er, band, reach)?;
        let states = bloch_states(depth_er, band, &zone(points, 0.5));
        let transform = FftPlannerScalar::new().plan_fft_inverse(points);
        Ok(Self { states, is_even: band.is_multiple_of(2), transform })
    }

    /// Values at `fraction` of a spacing beyond every site 0, 1, ... of the ring,
    /// normalised over one spacing.
    ///
    /// A state's waves all turn by the same factor from site to site, so that
    /// its sum over waves is needed once, and the sum over states, at
    /// quasimomenta -1 + (2j+1)/N, is a discrete Fourier transform.
    fn values(&self, fraction: f64) -> Vec<f64> {
        let phase = std::f64::consts::PI * fraction;
        let turn = Complex::cis(2.0 * phase);
        let mut waves: Vec<Complex<f64>> = self
            .states
            .iter()
            .map(|state| {
                let mut wave = Complex::cis(state.first_momentum * phase);
                let mut sum = Complex::new(0.0, 0.0);
                for amplitude in &state.amplitudes {
                    sum += wave * amplitude;
                    wave *= turn;
                }
                sum
            })
            .collect();
        self.transform.process(&mut waves);
        let count = index(self.states.len());
        waves
            .into_iter()
            .enumerate()
            .map(|(site, sum)| {
                // exp(i pi m (-1 + 1/N)) is what the transform leaves out.
                let value =
                    sum * Complex::cis(std::f64::consts::PI * index(site) * (1.0 / count - 1.0));
                (if self.is_even { value.re } else { value.im }) / count
            })
            .collect()
    }
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
        let ring = Ring::new(self.depth_er(), band, sites)?;
        // Grid points a whole number of sites apart share their place within a site:
        // one task each, which fills a column of the table [place][site].
        let mut table = control::zeros(points_per_site * (sites + 1))?;
        let position = |k: usize| (index(k) - 0.5 * index(count)) / index(points_per_site);
        for_each_chunk(&mut table, sites + 1, |(place, column)| {
            control::go_on(control)?;
            let start = position(place);
            let values = ring.values(start - start.floor());
            let length = index(values.len());
            for (site, slot) in column.iter_mut().enumerate() {
                let wanted = start.floor() + index(site);
                // Once round the ring the sign changes: the quasimomenta stand half a
                // step off the zone's edge.
                let sign = if wanted < 0.0 { -1.0 } else { 1.0 };
                #[allow(clippy::cast_possible_truncation, clippy::cast_sign_loss)]
                let value = values.get(wanted.rem_euclid(length) as usize);
                *slot = sign * value.copied().unwrap_or_default();
            }
            Ok(())
        })?;
        let spacing_nm = self.spacing_nm();
        let at = |k: usize| {
            let slot = (k % points_per_site) * (sites + 1) + k / points_per_site;
            table.get(slot).copied().unwrap_or_default() / spacing_nm.sqrt()
        };
        Ok(Wannier {
            band,
            x_nm: (0..=count).map(|k| position(k) * spacing_nm).collect(),
            amplitude: (0..=count).map(at).collect(),
        })
    }

    /// The integral of w^4 in units of k_L = pi/a: what turns an interaction
    /// strength into an on-site energy.
    ///
    /// w^4 holds no wave beyond four times the largest kept momentum, so a sum on
    /// a grid finer than that, round the whole ring, is exact to rounding.
    ///
    /// # Errors
    /// [`Error::OutOfRange`] for the band, [`Error::NotLocalised`], [`Error::Cancelled`].
    pub fn onsite_integral(&self, band: usize, control: &dyn Control) -> Result<f64, Error> {
        check_band(band, "band")?;
        let ring = Ring::new(self.depth_er(), band, 0)?;
        let rows = ring.states.first().map_or(0, |state| state.amplitudes.len());
        // Momenta up to `rows` k_L each, four of them, need 2 x 4 rows/2 points a site.
        let mut sums = control::zeros(4 * rows + 8)?;
        let places = index(sums.len());
        for_each_chunk(&mut sums, 1, |(place, sum)| {
            control::go_on(control)?;
            let fourth = ring.values((index(place) + 0.5) / places);
            sum.fill(fourth.iter().map(|w| w.powi(4)).sum());
            Ok(())
        })?;
        Ok(sums.iter().sum::<f64>() / (places * std::f64::consts::PI))
    }
}
