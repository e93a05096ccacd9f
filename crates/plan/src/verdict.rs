//! The verdict of a check in one sentence, and its table of numbers for a terminal.

use std::fmt::Write as _;

use crate::check::FluxCheck;

/// A length or angle with as many digits as its tolerance deserves.
fn to_tolerance(value: f64, tolerance: f64) -> String {
    // Three digits beyond the first of the tolerance, so that rounding never uses it up.
    let digits = (2.0 - tolerance.abs().log10().floor()).clamp(0.0, 9.0);
    #[allow(clippy::cast_possible_truncation, clippy::cast_sign_loss)]
    let digits = digits as usize;
    trim(&format!("{value:.digits$}"))
}

/// A tolerance with two significant digits, which never come out as zero.
fn two_digits(tolerance: f64) -> String {
    if tolerance == 0.0 {
        return "0".to_owned();
    }
    let place = tolerance.abs().log10().floor();
    if !(-5.0..=7.0).contains(&place) {
        return format!("{tolerance:.1e}");
    }
    #[allow(clippy::cast_possible_truncation, clippy::cast_sign_loss)]
    let decimals = (1.0 - place).max(0.0) as usize;
    format!("{tolerance:.decimals$}")
}

fn trim(text: &str) -> String {
    if text.contains('.') {
        text.trim_end_matches('0').trim_end_matches('.').to_owned()
    } else {
        text.to_owned()
    }
}

/// A phase in radians with three digits.
fn rad(value: f64) -> String {
    let size = value.abs();
    if size != 0.0 && !(1e-3..1e4).contains(&size) {
        return format!("{value:.1e} rad");
    }
    let decimals = if size < 1.0 {
        3
    } else if size < 100.0 {
        2
    } else {
        0
    };
    format!("{value:.decimals$} rad")
}

/// Two phases with so many digits that they do not look the same unless they are.
fn apart(error: f64, budget: f64) -> (String, String) {
    let texts = (rad(error), rad(budget));
    if texts.0 != texts.1 || error == budget {
        return texts;
    }
    (format!("{error} rad"), format!("{budget} rad"))
}

/// The verdict in one sentence.
#[must_use]
pub fn sentence(check: &FluxCheck) -> String {
    let sites = check.sites;
    let (error, budget) = apart(check.phase_error_rad.abs(), check.phase_budget_rad);
    let mut text = format!(
        "{} {}: flux {:.6} is off by {} over {sites} sites, budget {}",
        if check.meets_target { "Meets" } else { "Misses" },
        check.target,
        check.flux,
        error,
        budget
    );
    if !check.meets_target {
        text.push_str(&remedy(check));
    }
    if let fluxloom_core::Flux::Fraction(fraction) = check.target
        && fraction.denominator() > i64::from(sites)
    {
        let _ = write!(
            text,
            "; on {sites} sites a flux with denominator {} cannot be told from an irrational one",
            fraction.denominator()
        );
    }
    if let (Some(loop_flux), Some(mismatch), Some(physical)) =
        (check.loop_flux, check.closure_mismatch, check.loop_phase_is_physical)
    {
        let effect = if physical { "acts on" } else { "averages out over" };
        let _ = write!(
            text,
            "; the loop carries {loop_flux:.6} with a closure mismatch of {mismatch:.6}, \
             its phase {effect} the cloud"
        );
    }
    text.push('.');
    text
}

fn remedy(check: &FluxCheck) -> String {
    let today_nm = check.raman.leading_wavelength_nm();
    let two_colours = !check.raman.is_one_laser();
    let tune = if two_colours { "tune the absorbed beam" } else { "tune" };
    let wavelength = check
        .exact_wavelength_nm
        .zip(check.wavelength_tolerance_nm)
        .map(|(value, tolerance)| format!("{tune} to {} nm", to_tolerance(value, tolerance)));
    let angle = check
        .exact_angle_deg
        .zip(check.angle_tolerance_deg)
        .map(|(value, tolerance)| format!("cross at {} deg", to_tolerance(value, tolerance)));
    match (wavelength, angle) {
        (Some(wavelength), Some(angle)) => {
            format!("; {wavelength} instead of {today_nm} nm, or {angle}")
        }
        (Some(wavelength), None) => format!("; {wavelength} instead of {today_nm} nm"),
        (None, Some(angle)) => format!("; {angle}"),
        (None, None) => "; no wavelength or angle of this geometry reaches it".to_owned(),
    }
}

/// The numbers of a check as aligned lines for a terminal.
#[must_use]
pub fn table(check: &FluxCheck) -> String {
    let mut rows: Vec<(&str, String)> = Vec::new();
    rows.push(("flux", format!("{:.9}   folded {:.9}", check.flux, check.folded)));
    let sense = i8::from(check.sense);
    let sign = if check.error < 0.0 { '-' } else { '+' };
    rows.push((
        "target",
        format!(
            "flux = {} {} {} {sign} {:.3e}",
            check.branch,
            if sense > 0 { '+' } else { '-' },
            check.target,
            check.error.abs()
        ),
    ));
    rows.push((
        "phase error",
        format!(
            "{} over {} sites, budget {}",
            rad(check.phase_error_rad),
            check.sites,
            rad(check.phase_budget_rad)
        ),
    ));
    if let Some((value, tolerance)) = check.exact_wavelength_nm.zip(check.wavelength_tolerance_nm) {
        rows.push((
            "exact wavelength",
            format!("{} +- {} nm", to_tolerance(value, tolerance), two_digits(tolerance)),
        ));
    }
    if let Some((value, tolerance)) = check.exact_angle_deg.zip(check.angle_tolerance_deg) {
        rows.push((
            "exact angle",
            format!("{} +- {} deg", to_tolerance(value, tolerance), two_digits(tolerance)),
        ));
    }
    let nearest: Vec<String> = check
        .nearest
        .iter()
        .map(|near| format!("{} ({})", near.fraction, rad(near.phase_error_rad)))
        .collect();
    rows.push(("nearest", nearest.join(", ")));
    rows.push(("kick overlap", format!("{:.6}", check.kick_overlap)));
    if let Some(ratio) = check.diagonal_ratio {
        rows.push(("diagonal ratio", format!("{ratio:.6}")));
    }
    if let (Some(loop_flux), Some(mismatch), Some(overlap)) =
        (check.loop_flux, check.closure_mismatch, check.closure_overlap)
    {
        let closure = format!("flux {loop_flux:.6}, mismatch {mismatch:.6}, overlap {overlap:.4}");
        rows.push(("loop", closure));
    }
    let mut text = String::new();
    for (name, value) in rows {
        let _ = writeln!(text, "  {name:<17} {value}");
    }
    text
}
