//! Sine and cosine of angles in degrees, exact at multiples of 90.

/// sin of an angle in degrees.
#[must_use]
pub fn sin_deg(angle_deg: f64) -> f64 {
    let turn = angle_deg % 360.0;
    // Small angles keep their digits.
    if turn.abs() < 45.0 { turn.to_radians().sin() } else { cos_deg(turn - 90.0) }
}

/// cos of an angle in degrees.
#[must_use]
pub fn cos_deg(angle_deg: f64) -> f64 {
    let turn = (angle_deg % 360.0).abs();
    // Around the zeros the sine of the small remainder keeps its digits.
    if (45.0..135.0).contains(&turn) {
        return (90.0 - turn).to_radians().sin();
    }
    if (225.0..315.0).contains(&turn) {
        return (turn - 270.0).to_radians().sin();
    }
    turn.to_radians().cos()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn right_angles_are_exact_and_others_agree_with_radians() {
        assert_eq!(cos_deg(90.0), 0.0);
        assert_eq!(cos_deg(-270.0), 0.0);
        assert_eq!(sin_deg(90.0), 1.0);
        assert_eq!(sin_deg(180.0), 0.0);
        assert_eq!(sin_deg(1e-9), 1e-9_f64.to_radians());
        assert_eq!(cos_deg(180.0), -1.0);
        for k in -720..720 {
            let angle = f64::from(k) * 0.77;
            assert!((cos_deg(angle) - angle.to_radians().cos()).abs() < 4e-15, "{angle}");
            assert!((sin_deg(angle) - angle.to_radians().sin()).abs() < 4e-15, "{angle}");
        }
    }
}
