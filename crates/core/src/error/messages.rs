//! Longer messages: what was asked, what was found, what is allowed, what to do.

use num_complex::Complex64;

use super::{Error, RESONANCE_LINEWIDTHS};
use crate::limits::{Limit, plain};

pub(super) fn resonance_message(error: &Error) -> String {
    let Error::OnResonance { wavelength_nm, line, detuning_hz, window_hz, outside_nm } = error
    else {
        return String::new();
    };
    let (below, above) = outside_nm;
    // Nine decimals hide the rounding of a wavelength that was a frequency.
    format!(
        "light at {} nm is {} from {line}, nearer than {RESONANCE_LINEWIDTHS} \
         linewidths ({}): shifts and couplings far from resonance mean nothing there; go below \
         {below:.6} nm or above {above:.6} nm",
        plain((wavelength_nm * 1e9).round() / 1e9),
        megahertz(detuning_hz.abs()),
        megahertz(*window_hz)
    )
}

fn megahertz(hz: f64) -> String {
    format!("{:.4} MHz", hz * 1e-6)
}

pub(super) fn tune_out_message(error: &Error) -> String {
    let Error::TuneOutCount { range_nm: (low, high), found_nm, what, nearest_nm } = error else {
        return String::new();
    };
    let list =
        |values: &[f64]| values.iter().map(|nm| format!("{nm:.6}")).collect::<Vec<_>>().join(", ");
    if !found_nm.is_empty() {
        return format!(
            "{what} has {} tune-outs in range_nm = ({}, {}): {} nm; narrow the range to one of \
             them, or ask tune_outs_nm for all",
            found_nm.len(),
            plain(*low),
            plain(*high),
            list(found_nm)
        );
    }
    let elsewhere = if nearest_nm.is_empty() {
        "and none near it".to_owned()
    } else {
        format!("the nearest are at {} nm", list(nearest_nm))
    };
    format!(
        "{what} has no tune-out in range_nm = ({}, {}): {elsewhere}; widen or move the range",
        plain(*low),
        plain(*high)
    )
}

pub(super) fn did_you_mean(name: Option<&str>) -> String {
    name.map_or_else(String::new, |name| format!(" (did you mean \"{name}\"?)"))
}

/// Four digits, enough to find what went wrong.
pub(super) fn rounded(value: f64) -> f64 {
    format!("{value:.3e}").parse().unwrap_or(value)
}

pub(super) fn nearest_text(nearest: Option<[Complex64; 3]>) -> String {
    nearest.map_or_else(
        || "it lies along direction, so give a vector across it".to_owned(),
        |vector| {
            // Digits beyond those that the check itself looks at would only be noise.
            let short = |x: f64| (x * 1e9).round() / 1e9;
            let vector = vector.map(|x| Complex64::new(short(x.re), short(x.im)));
            format!("the nearest vector across direction is {}", vector_text(vector))
        },
    )
}

/// A complex vector as a person writes it, and as Python reads it: `[1, 0.5j, 0]`.
pub(crate) fn vector_text(vector: [Complex64; 3]) -> String {
    // Adding zero takes the sign from zeros.
    let part = |x: f64| plain(x + 0.0);
    let [x, y, z] = vector.map(|Complex64 { re, im }| {
        if im == 0.0 {
            part(re)
        } else if re == 0.0 {
            format!("{}j", part(im))
        } else {
            let sign = if im < 0.0 { '-' } else { '+' };
            format!("{}{sign}{}j", part(re), part(im.abs()))
        }
    });
    format!("[{x}, {y}, {z}]")
}

pub(super) fn range_message(limit: &Limit, field: &str, value: f64) -> String {
    let hint = limit.hint(value);
    let hint = if hint.is_empty() { String::new() } else { format!(", {hint}") };
    format!(
        "{field} = {} is outside {}{hint}; {}",
        plain(value),
        limit.range_text(field),
        limit.remedy
    )
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn complex_vectors_read_like_vectors() {
        let c = Complex64::new;
        let vector = [c(1.0, -0.0), c(-0.0, 0.5), c(0.25, -1e-9)];
        assert_eq!(vector_text(vector), "[1, 0.5j, 0.25-1e-9j]");
        assert_eq!(vector_text([c(f64::NAN, 0.0), c(0.0, 0.0), c(-2.0, 3.0)]), "[NaN, 0, -2+3j]");
    }
}
