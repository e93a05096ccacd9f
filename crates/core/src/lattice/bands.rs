//! The band structure of one lattice: energies over the zone, widths and gaps.

use ndarray::Array2;
use serde::{Deserialize, Serialize};

use crate::control::{self, Control};
use crate::documents::Document;
use crate::error::Error;
use crate::lattice::batch::solve;
use crate::lattice::bloch::index;
use crate::lattice::geometry::Lattice;
use crate::lattice::tunnelling::Hop;
use crate::limits;
use fluxloom_kernel::bands::{Cutoff, ENERGY_TRUNCATION_ER, band_energies, cutoff};

/// How much of the band structure is wanted.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct BandsInput {
    /// Number of bands from the lowest.
    pub count: usize,
    /// Number of quasimomenta over the zone -1..1, edges included.
    pub points: usize,
}

impl Default for BandsInput {
    fn default() -> Self {
        Self { count: 4, points: 101 }
    }
}

/// Energies of the lowest bands over the zone.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(try_from = "RawBands", into = "RawBands")]
pub struct Bands {
    lattice: Lattice,
    input: BandsInput,
    quasimomenta: Vec<f64>,
    energies_er: Array2<f64>,
    error_er: f64,
}

/// Below this width the tunnelling series is more accurate than the band edges.
const FLAT_ER: f64 = 1e-5;

impl Document for Bands {
    const FORMAT: &'static str = "fluxloom-bands";
}

#[derive(Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
struct RawBands {
    lattice: Lattice,
    quasimomenta: Vec<f64>,
    energies_er: Vec<Vec<f64>>,
    error_er: f64,
}

impl TryFrom<RawBands> for Bands {
    type Error = Error;

    fn try_from(raw: RawBands) -> Result<Self, Error> {
        let input = BandsInput { count: raw.energies_er.len(), points: raw.quasimomenta.len() };
        check_input(input)?;
        let flat: Vec<f64> = raw.energies_er.iter().flatten().copied().collect();
        let energies_er =
            Array2::from_shape_vec((input.count, input.points), flat).map_err(|_| {
                Error::Contradiction {
                    code: "file.wrong_shape",
                    message: "energies_er must hold one row per band and one number per \
                              quasimomentum; the document was damaged, compute the bands again"
                        .to_owned(),
                }
            })?;
        let RawBands { lattice, quasimomenta, error_er, .. } = raw;
        Ok(Self { lattice, input, quasimomenta, energies_er, error_er })
    }
}

impl From<Bands> for RawBands {
    fn from(bands: Bands) -> Self {
        Self {
            energies_er: bands.energies_er.rows().into_iter().map(|row| row.to_vec()).collect(),
            lattice: bands.lattice,
            quasimomenta: bands.quasimomenta,
            error_er: bands.error_er,
        }
    }
}

fn check_input(input: BandsInput) -> Result<(), Error> {
    limits::BAND_COUNT.check(index(input.count))?;
    limits::POINTS.check(index(input.points))?;
    control::allow_numbers(&[input.count, input.points], 16)
}

/// The numbers that `numpy.linspace(-1, 1, points)` gives, bit for bit.
fn zone_edges_included(points: usize) -> Vec<f64> {
    let step = 2.0 / index(points - 1);
    let mut quasimomenta: Vec<f64> = (0..points).map(|k| index(k) * step - 1.0).collect();
    if let Some(last) = quasimomenta.last_mut() {
        *last = 1.0;
    }
    quasimomenta
}

impl Lattice {
    /// Lowest energies, `[quasimomentum][band]` in one row, in lattice recoils.
    pub(super) fn energies_er(&self, quasimomenta: &[f64], count: usize) -> Vec<f64> {
        let mut energies = vec![0.0; quasimomenta.len() * count];
        band_energies(self.depth_er(), quasimomenta, count, self.cutoff(count), &mut energies);
        energies
    }

    fn cutoff(&self, count: usize) -> Cutoff {
        cutoff(self.depth_er(), count, ENERGY_TRUNCATION_ER)
    }

    /// The lowest bands over the zone.
    ///
    /// # Errors
    /// [`Error::OutOfRange`] for count or points, [`Error::MemoryOverLimit`],
    /// [`Error::Cancelled`].
    pub fn bands(&self, input: BandsInput, control: &dyn Control) -> Result<Bands, Error> {
        check_input(input)?;
        let quasimomenta = zone_edges_included(input.points);
        let mut energies = control::zeros(input.points * input.count)?;
        solve(self.depth_er(), &quasimomenta, input.count, &mut energies, control)?;
        let energies_er = Array2::from_shape_fn((input.count, input.points), |(band, point)| {
            energies.get(point * input.count + band).copied().unwrap_or_default()
        });
        let error_er = self.cutoff(input.count).error_er();
        Ok(Bands { lattice: self.clone(), input, quasimomenta, energies_er, error_er })
    }
}

impl Bands {
    /// The lattice whose bands these are.
    #[must_use]
    pub fn lattice(&self) -> &Lattice {
        &self.lattice
    }

    /// Quasimomenta in k_L, from -1 to 1 with both edges.
    #[must_use]
    pub fn quasimomenta(&self) -> &[f64] {
        &self.quasimomenta
    }

    /// Energies in lattice recoils, `[band, point]`.
    #[must_use]
    pub fn energies_er(&self) -> &Array2<f64> {
        &self.energies_er
    }

    /// Proven bound of the error of every energy: truncation and rounding.
    #[must_use]
    pub fn error_er(&self) -> f64 {
        self.error_er
    }

    fn check_band(&self, band: usize, field: &str) -> Result<(), Error> {
        let limit = limits::Limit { high: index(self.input.count - 1), ..limits::BAND };
        limit.check_as(index(band), field).map(|_| ())
    }

    /// Width of a band, from its exact edges at q = 0 and q = 1.
    ///
    /// # Errors
    /// [`Error::OutOfRange`] for a band that was not computed.
    pub fn width_er(&self, band: usize) -> Result<f64, Error> {
        self.check_band(band, "band")?;
        let edges = self.lattice.energies_er(&[0.0, 1.0], band + 1);
        let at = |k: usize| edges.get(k).copied().unwrap_or_default();
        let width = (at(2 * band + 1) - at(band)).abs();
        if width > FLAT_ER {
            return Ok(width);
        }
        // The difference of edges has lost its digits; E(1) - E(0) = 4 (t_1 + t_3 + ...) has not.
        let mut sum = 0.0;
        for reach in [1, 3, 5] {
            sum += self.lattice.tunnelling_er(Hop { reach, band })?;
        }
        Ok((4.0 * sum).abs())
    }

    /// Gap between band `lower` and the next: at a quasimomentum, or the
    /// smallest over the zone (at q = 1 above even bands, q = 0 above odd ones).
    ///
    /// # Errors
    /// [`Error::OutOfRange`] for a band that was not computed, or for the
    /// quasimomentum.
    pub fn gap_er(&self, lower: usize, quasimomentum: Option<f64>) -> Result<f64, Error> {
        self.check_band(lower, "lower")?;
        let here = match quasimomentum {
            Some(q) => limits::QUASIMOMENTUM.check(q)?,
            None if lower.is_multiple_of(2) => 1.0,
            None => 0.0,
        };
        let energies = self.lattice.energies_er(&[here], lower + 2);
        let at = |k: usize| energies.get(k).copied().unwrap_or_default();
        Ok(at(lower + 1) - at(lower))
    }
}
