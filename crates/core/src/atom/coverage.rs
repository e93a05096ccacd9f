//! How far the listed lines of an isotope reach.
//!
//! The residual polarisability stands for all other lines as a constant, which
//! it is only far to the red of them. Below, the first lines from the ground
//! state that the table does not have, towards short wavelengths.
//!
//! Source: from memory; good to a nanometre, which is all that a warning needs.

use super::Atom;

/// Symbol and vacuum wavelength of the next line, nm: 3P of lithium, 4P of
/// sodium, 5P of potassium, 6P of rubidium, 7P of caesium (their redder
/// components), 5s6p 1P1 of strontium, the J = 1 line of ytterbium's open f shell.
const NEXT_LINES_NM: [(&str, f64); 7] = [
    ("Li", 323.4),
    ("Na", 330.4),
    ("K", 404.8),
    ("Rb", 421.7),
    ("Cs", 459.4),
    ("Sr", 293.3),
    ("Yb", 346.5),
];

/// Light bluer than this multiple of the next line's wavelength feels it.
const MARGIN: f64 = 1.1;

impl Atom {
    /// The next line towards short wavelengths that the table does not have, nm.
    #[must_use]
    pub fn next_unlisted_line_nm(&self) -> Option<f64> {
        let symbol = self.isotope.symbol;
        NEXT_LINES_NM.iter().find(|(known, _)| *known == symbol).map(|(_, nm)| *nm)
    }

    /// Whether light is so blue that lines which the table does not have matter.
    #[must_use]
    pub fn is_beyond_lines(&self, wavelength_nm: f64) -> bool {
        self.next_unlisted_line_nm().is_some_and(|nm| wavelength_nm < MARGIN * nm)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_isotope_has_a_next_line_beyond_its_own() {
        for name in Atom::available() {
            let atom = Atom::new(name).unwrap();
            let next = atom.next_unlisted_line_nm().unwrap();
            for line in atom.lines() {
                assert!(line.wavelength_nm.value > MARGIN * next, "{name}");
                assert!(!atom.is_beyond_lines(line.wavelength_nm.value));
            }
            assert!(atom.is_beyond_lines(next));
        }
    }
}
