//! A report on light as aligned lines, each with its units.

use std::fmt::Write as _;

use super::report::{LightReport, Link, Rate};

/// All lines of a report.
pub(super) fn lines(report: &LightReport) -> String {
    let mut text = String::new();
    let mut head = |name: &str, value: &str| {
        let _ = writeln!(text, "  {name:<17} {value}");
    };
    let practice = |path: &str| {
        let assumed = report.assumed.iter().any(|found| found == path);
        if assumed { " (common practice)" } else { "" }
    };
    if let Some(made_er) = report.depth_from_power_er {
        let practice = practice("lattice.depth_er.standard_error");
        let stated = report.depth_standard_error_er.map_or_else(
            || format!("{}", report.depth_er),
            |error| {
                let error = digits(error, 2);
                // Both to the same place.
                let decimals = error.split_once('.').map_or(0, |(_, behind)| behind.len());
                format!("{:.decimals$} +- {error}", report.depth_er)
            },
        );
        head("depth from power", &format!("{made_er:.3} E_R, stated {stated} E_R{practice}"));
    }
    if !report.links.is_empty() {
        let at = report.field_gauss.map_or_else(|| "none".to_owned(), |field| format!("{field} G"));
        let noise = scaled(report.field_rms_gauss, &GAUSS);
        head("field", &format!("{at}, noise {noise} rms{}", practice("field.noise_rms_gauss")));
    }
    if report.links.iter().any(|link| link.rabi_hz.is_some()) {
        head("couplings", "of both Raman beams with all their power, one tone each");
    }
    let rows: Vec<Vec<String>> = report.links.iter().map(link).collect();
    for (line, link) in aligned(&rows, &[1, 3, 4]).into_iter().zip(&report.links) {
        let _ = writeln!(text, "  {line}");
        if link.forbidden {
            if let Some(rule) = &link.rule {
                let _ = writeln!(text, "    {rule}");
            }
            for other in &link.alternatives {
                let _ = writeln!(text, "    instead: {other}");
            }
        }
    }
    let rows: Vec<Vec<String>> = report
        .scattering_per_s
        .iter()
        .filter(|leg| leg.raman_beams.or(leg.lattice_beams).is_some())
        .map(|leg| {
            let mut row = vec![format!("{} scatters", leg.state)];
            row.extend(leg.raman_beams.map(|rate| scattering("Raman light", rate)));
            row.extend(leg.lattice_beams.map(|rate| scattering("lattice light", rate)));
            row
        })
        .collect();
    for line in aligned(&rows, &[]) {
        let _ = writeln!(text, "  {line}");
    }
    for remark in &report.remarks {
        let _ = writeln!(text, "  {remark}");
    }
    text
}

fn link(link: &Link) -> Vec<String> {
    let coupling = match (link.rabi_hz, link.effective_rabi_hz) {
        (Some(free), Some(held)) => {
            format!("coupling {}, in the lattice {}", scaled(free, &HERTZ), scaled(held, &HERTZ))
        }
        _ => "no coupling".to_owned(),
    };
    let slope = link.field_hz_per_gauss;
    let slope = if slope.abs() < 1e3 {
        format!("{} Hz/G", digits(slope, 4))
    } else {
        format!("{} Hz/mG", digits(slope * 1e-3, 4))
    };
    vec![
        format!("{} -> {}", link.from, link.to),
        splitting(link.splitting_hz),
        coupling,
        slope,
        format!("{} rms", scaled(link.field_rms_hz, &HERTZ)),
    ]
}

/// To a hertz, or to a millihertz where it is small.
fn splitting(hz: f64) -> String {
    if hz.abs() < 1e6 {
        format!("splitting {hz:.3} Hz")
    } else {
        format!("splitting {:.6} MHz", hz * 1e-6)
    }
}

fn scattering(light: &str, rate: Rate) -> String {
    format!(
        "{} /s of {light}, {} /s change the state",
        digits(rate.total, 3),
        digits(rate.changing, 3)
    )
}

/// Prefixed units, the smallest first.
type Units = [(f64, &'static str)];
const HERTZ: [(f64, &str); 4] = [(1e-3, "mHz"), (1.0, "Hz"), (1e3, "kHz"), (1e6, "MHz")];
const GAUSS: [(f64, &str); 3] = [(1e-6, "uG"), (1e-3, "mG"), (1.0, "G")];

/// A number with four digits in the unit that suits its size.
fn scaled(value: f64, units: &Units) -> String {
    // Nothing at all is nothing in the plain unit.
    let size = if value == 0.0 { 1.0 } else { value.abs() };
    let fits = |(factor, _): &&(f64, &str)| size >= *factor;
    let (factor, unit) =
        units.iter().rev().find(fits).or(units.first()).copied().unwrap_or((1.0, ""));
    format!("{} {unit}", digits(value / factor, 4))
}

/// A number with so many significant digits, with an exponent only if it is tiny or huge.
fn digits(value: f64, count: u8) -> String {
    let size = value.abs();
    let behind = usize::from(count.saturating_sub(1));
    if size == 0.0 {
        return "0".to_owned();
    }
    if !(1e-4..1e6).contains(&size) {
        return format!("{value:.behind$e}");
    }
    // Rounding first: 999.96 has its first digit where 1000 has it.
    let rounded: f64 = format!("{value:.behind$e}").parse().unwrap_or(value);
    let place = rounded.abs().log10().floor();
    #[allow(clippy::cast_possible_truncation, clippy::cast_sign_loss)]
    let decimals = (f64::from(count) - 1.0 - place).max(0.0) as usize;
    format!("{rounded:.decimals$}")
}

/// Rows as lines, each column as wide as its widest cell; the ones of `right` end
/// together, all others begin together.
fn aligned(rows: &[Vec<String>], right: &[usize]) -> Vec<String> {
    let columns = rows.iter().map(Vec::len).max().unwrap_or(0);
    let widths: Vec<usize> = (0..columns)
        .map(|column| rows.iter().filter_map(|row| row.get(column)).map(String::len).max())
        .map(Option::unwrap_or_default)
        .collect();
    rows.iter()
        .map(|row| {
            let cells: Vec<String> = row
                .iter()
                .zip(&widths)
                .enumerate()
                .map(|(column, (cell, width))| {
                    if right.contains(&column) {
                        format!("{cell:>width$}")
                    } else {
                        format!("{cell:<width$}")
                    }
                })
                .collect();
            cells.join("   ").trim_end().to_owned()
        })
        .collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn numbers_keep_their_digits_and_find_their_unit() {
        assert_eq!(scaled(1234.56, &HERTZ), "1.235 kHz");
        assert_eq!(scaled(0.0123, &HERTZ), "12.30 mHz");
        assert_eq!(scaled(0.0, &HERTZ), "0 Hz");
        assert_eq!(scaled(4.0311e-5, &GAUSS), "40.31 uG");
        assert_eq!(splitting(-5555.1234), "splitting -5555.123 Hz");
        assert_eq!(digits(999.96, 4), "1000");
        assert_eq!(digits(-0.06, 2), "-0.060");
        assert_eq!(digits(1.23e-9, 3), "1.23e-9");
    }

    #[test]
    fn columns_line_up() {
        let rows = [vec!["a".to_owned(), "bcd".to_owned()], vec!["abc".to_owned(), "b".to_owned()]];
        assert_eq!(aligned(&rows, &[]), ["a     bcd", "abc   b"]);
        assert_eq!(aligned(&rows, &[1]), ["a     bcd", "abc     b"]);
    }
}
