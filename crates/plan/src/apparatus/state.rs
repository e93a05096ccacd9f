//! Hyperfine states as a file writes them: `"9/2,-9/2"`, F before m.

/// F and m in halves, so that they are whole numbers.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub struct Halves {
    /// Twice F.
    pub f: i32,
    /// Twice m.
    pub m: i32,
}

impl Halves {
    /// F and m as numbers.
    #[must_use]
    pub fn numbers(self) -> (f64, f64) {
        (f64::from(self.f) / 2.0, f64::from(self.m) / 2.0)
    }
}

/// Reads "F,m".
///
/// # Errors
/// What is wrong with the text, in words that follow it in a sentence.
pub fn read_state(text: &str) -> Result<Halves, &'static str> {
    const SHAPE: &str = "is not of the form \"F,m\" with whole or half-integer numbers";
    let (f, m) = text.split_once(',').ok_or(SHAPE)?;
    let f = halves(f).ok_or(SHAPE)?;
    let m = halves(m).ok_or(SHAPE)?;
    if f < 0 {
        return Err("has a negative F");
    }
    if m.abs() > f {
        return Err("has |m| larger than F");
    }
    if (f - m) % 2 != 0 {
        return Err("mixes a whole with a half-integer number");
    }
    Ok(Halves { f, m })
}

/// Reads two states "F,m F,m".
///
/// # Errors
/// As [`read_state`].
pub fn read_pair(text: &str) -> Result<[Halves; 2], &'static str> {
    let mut words = text.split_whitespace();
    match (words.next(), words.next(), words.next()) {
        (Some(one), Some(two), None) => Ok([read_state(one)?, read_state(two)?]),
        _ => Err("is not a pair of states \"F,m F,m\""),
    }
}

/// The sizes of F and m of any atom stay far below this.
const MOST: i32 = 1000;

fn halves(text: &str) -> Option<i32> {
    let text = text.trim();
    let (top, scale) = match text.split_once('/') {
        Some((top, "2")) => (top, 1),
        Some(_) => return None,
        None => (text, 2),
    };
    let top: i32 = top.parse().ok()?;
    (top.abs() <= MOST).then_some(top * scale)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn states_are_read_in_halves() {
        assert_eq!(read_state("9/2,-7/2"), Ok(Halves { f: 9, m: -7 }));
        assert_eq!(read_state(" 2, -1 "), Ok(Halves { f: 4, m: -2 }));
        assert_eq!(read_state("9/2,-7/2").map(Halves::numbers), Ok((4.5, -3.5)));
        assert!(read_pair("9/2,-9/2 9/2,-7/2").is_ok());
    }

    #[test]
    fn nonsense_is_refused() {
        for text in ["", "9/2", "9/2;1/2", "9/3,1/3", "9/2,11/2", "-1,0", "2,1/2", "1,1,1", "a,b"] {
            assert!(read_state(text).is_err(), "{text}");
        }
        assert!(read_state("99999999999,1").is_err());
        assert!(read_pair("9/2,-9/2").is_err());
        assert!(read_pair("1,0 1,0 1,0").is_err());
    }
}
