//! Pairs of hyperfine states as a file writes them: `"9/2,-9/2 9/2,-7/2"`.

use fluxloom_core::atom::State;

/// Reads two states "F,m F,m".
///
/// # Errors
/// What is wrong with the text, in words that follow it in a sentence.
pub fn read_pair(text: &str) -> Result<[State; 2], &'static str> {
    let mut words = text.split_whitespace();
    match (words.next(), words.next(), words.next()) {
        (Some(one), Some(two), None) => Ok([State::read(one)?, State::read(two)?]),
        _ => Err("is not a pair of states \"F,m F,m\""),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_pair_is_two_states() {
        let [one, two] = read_pair("9/2,-9/2 9/2,-7/2").unwrap();
        assert_eq!((one.twice_m(), two.twice_m()), (-9, -7));
        for text in ["", "9/2,-9/2", "1,0 1,0 1,0", "9/2,-9/2 9/2"] {
            assert!(read_pair(text).is_err(), "{text}");
        }
    }
}
