//! The ways from one ground level to another by excited levels, and what light
//! makes of them: one number per tensor rank.
//!
//! For the optical frequency nu and the mean energy of the two states, each
//! excited hyperfine level at nu_e adds its strength of rank K times
//!
//! ```text
//! 1/(nu_e - mean - nu) + (-1)^K/(nu_e - mean + nu)
//! ```
//!
//! Light within 100 linewidths of a level is refused. Atomic units of
//! polarisability.

use std::borrow::Borrow;

use super::products::ByRank;
use crate::atom::{LineStructure, Structure, halves_text};
use crate::constants::{HARTREE_J, PLANCK_J_S, SPEED_OF_LIGHT_M_PER_S};
use crate::error::{Error, RESONANCE_LINEWIDTHS};

/// Hartree energy over h, Hz.
const HARTREE_HZ: f64 = HARTREE_J / PLANCK_J_S;

/// Vacuum wavelength of a frequency, nm.
pub(crate) fn wavelength_nm(frequency_hz: f64) -> f64 {
    SPEED_OF_LIGHT_M_PER_S / frequency_hz * 1e9
}

/// Zero-field energy of a ground level, Hz.
pub(crate) fn energy_hz(structure: &Structure, level: usize) -> f64 {
    let twice_f = structure.manifold().twice_f.get(level);
    twice_f.map_or(0.0, |twice_f| structure.ground_hz(*twice_f))
}

/// One way from a ground level to another, by one excited hyperfine level.
#[derive(Debug, Clone, Copy, Default)]
struct Way {
    /// Twice F' of the excited level.
    twice_f: i32,
    /// From the centre of the line, Hz.
    shift_hz: f64,
    /// By rank, a.u. of polarisability times Hz.
    strengths: ByRank<f64>,
}

/// Hyperfine levels of one excited state: at most 2J'+1 with J' up to 3/2.
const MOST_WAYS: usize = 4;

/// The ways from one ground level to another by the levels of one line: what does
/// not depend on the light.
#[derive(Debug, Clone, Copy)]
pub(crate) struct LineWays<'a> {
    line: &'a LineStructure,
    /// Centre of the line from the mean energy of the states, Hz.
    centre_hz: f64,
    /// Nearer than this to a level nothing is computed, Hz.
    window_hz: f64,
    /// Strengths of all ways together.
    sums: ByRank<f64>,
    /// Largest shift of a way, Hz.
    widest_hz: f64,
    ways: [Way; MOST_WAYS],
    /// How many of them there are.
    count: usize,
}

impl LineWays<'_> {
    fn ways(&self) -> &[Way] {
        self.ways.get(..self.count).unwrap_or_default()
    }

    /// Frequencies of the single ways, Hz.
    fn frequencies_hz(&self) -> impl Iterator<Item = f64> + '_ {
        self.ways().iter().map(|way| self.centre_hz + way.shift_hz)
    }
}

/// All ways from one ground level to another, with the mean energy of the states that
/// the light acts on.
pub(crate) fn line_ways(
    structure: &Structure,
    (to, from): (usize, usize),
    mean_hz: f64,
) -> impl Iterator<Item = LineWays<'_>> {
    let lines = structure.lines.iter().zip(&structure.dipoles.lines);
    lines.map(move |(line, dipoles)| {
        let strength = line.dipole_au * line.dipole_au * HARTREE_HZ;
        let mut ways = [Way::default(); MOST_WAYS];
        let (mut widest_hz, mut count) = (0.0_f64, 0);
        let weighted = dipoles.levels.iter().map(|level| (level, level.recoupled(to, from)));
        let allowed = weighted.filter(|(_, weights)| *weights != [0.0; 3]);
        for (way, (level, weights)) in ways.iter_mut().zip(allowed) {
            let shift_hz = line.hyperfine.shift_hz(level.twice_f);
            widest_hz = widest_hz.max(shift_hz.abs());
            let strengths = weights.map(|weight| strength * weight);
            *way = Way { twice_f: level.twice_f, shift_hz, strengths };
            count += 1;
        }
        LineWays {
            line,
            centre_hz: line.frequency_hz - mean_hz,
            window_hz: RESONANCE_LINEWIDTHS * line.linewidth_hz,
            sums: dipoles.sums(to, from).map(|weight| strength * weight),
            widest_hz,
            ways,
            count,
        }
    })
}

/// Reduced elements by rank from one ground level to another, for the optical
/// frequency `frequency_hz`, atomic units.
pub(crate) fn reduced(
    structure: &Structure,
    to: usize,
    from: usize,
    frequency_hz: f64,
) -> Result<ByRank<f64>, Error> {
    let mean_hz = 0.5 * (energy_hz(structure, to) + energy_hz(structure, from));
    reduced_about(structure, (to, from), mean_hz, frequency_hz)
}

/// As [`reduced`], with the mean energy of the states that the light acts on.
pub(crate) fn reduced_about(
    structure: &Structure,
    levels: (usize, usize),
    mean_hz: f64,
    frequency_hz: f64,
) -> Result<ByRank<f64>, Error> {
    reduced_by(structure, line_ways(structure, levels, mean_hz), frequency_hz)
}

/// Light farther from a line than this many of its hyperfine shifts sees its centre
/// first, and the shifts as a correction.
const FAR: f64 = 8.0;

/// As [`reduced`] by way of lines that are known already.
///
/// Far from a line the parts of its levels nearly cancel in the tensor part of an
/// alkali. There the sum of all strengths is taken at the centre, where it is
/// exactly zero if the spins say so, and only differences are summed:
/// `1/(x-d) - 1/x = d/(x(x-d))`.
pub(crate) fn reduced_by<'a>(
    structure: &Structure,
    lines: impl IntoIterator<Item: Borrow<LineWays<'a>>>,
    frequency_hz: f64,
) -> Result<ByRank<f64>, Error> {
    let mut sums = [0.0; 3];
    for line in lines {
        let line: &LineWays<'_> = line.borrow();
        let from_centre = frequency_hz - line.centre_hz;
        let above = line.centre_hz + frequency_hz;
        let is_far = from_centre.abs() > FAR * line.widest_hz;
        if is_far {
            add(&mut sums, line.sums, (-1.0 / from_centre, 1.0 / above));
        }
        for way in line.ways() {
            let shift = way.shift_hz;
            let detuning = from_centre - shift;
            if detuning.abs() < line.window_hz {
                let place = (line.centre_hz + shift, detuning);
                return Err(on_resonance(structure, line.line, way.twice_f, place));
            }
            let terms = if is_far {
                (-shift / (from_centre * detuning), -shift / (above * (above + shift)))
            } else {
                (-1.0 / detuning, 1.0 / (above + shift))
            };
            add(&mut sums, way.strengths, terms);
        }
    }
    Ok(sums)
}

/// Adds strengths times the near and the far term, whose sign changes with rank 1.
fn add(sums: &mut ByRank<f64>, strengths: ByRank<f64>, (near, far): (f64, f64)) {
    let [scalar, vector, tensor] = sums;
    let [zero, one, two] = strengths;
    *scalar += zero * (near + far);
    *vector += one * (near - far);
    *tensor += two * (near + far);
}

fn on_resonance(
    structure: &Structure,
    line: &LineStructure,
    twice_f: i32,
    (transition_hz, detuning_hz): (f64, f64),
) -> Error {
    let window_hz = RESONANCE_LINEWIDTHS * line.linewidth_hz;
    Error::OnResonance {
        wavelength_nm: wavelength_nm(transition_hz + detuning_hz),
        line: format!(
            "the {} line of {} to F' = {} at {:.6} nm",
            line.name,
            structure.name,
            halves_text(twice_f),
            wavelength_nm(transition_hz)
        ),
        detuning_hz,
        window_hz,
        outside_nm: (
            wavelength_nm(transition_hz + window_hz),
            wavelength_nm(transition_hz - window_hz),
        ),
    }
}

/// Distance of light from the nearest line that a ground level absorbs on, Hz.
pub(crate) fn nearest_line_hz(structure: &Structure, level: usize, frequency_hz: f64) -> f64 {
    let mut nearest = f64::INFINITY;
    for line in line_ways(structure, (level, level), energy_hz(structure, level)) {
        for centre_hz in line.frequencies_hz() {
            nearest = nearest.min((frequency_hz - centre_hz).abs());
        }
    }
    nearest
}

/// The refused windows for light from one ground level to another, Hz, ascending;
/// lines count from the mean of both.
pub(crate) fn windows(structure: &Structure, to: usize, from: usize) -> Vec<(f64, f64)> {
    let mean_hz = 0.5 * (energy_hz(structure, to) + energy_hz(structure, from));
    let mut windows: Vec<(f64, f64)> = Vec::new();
    for line in line_ways(structure, (to, from), mean_hz) {
        // A little wider than what is refused, so that rounding cannot matter.
        let half = line.window_hz * (1.0 + 1e-6) + 1.0;
        windows.extend(line.frequencies_hz().map(|centre| (centre - half, centre + half)));
    }
    windows.sort_by(|a, b| a.0.total_cmp(&b.0));
    windows
}
