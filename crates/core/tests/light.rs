//! Atoms in light against published values.
#![allow(clippy::unwrap_used)]

use fluxloom_core::Atom;
use fluxloom_core::light::TuneOut;

fn tune_out(atom: &str, range_nm: (f64, f64), what: TuneOut) -> f64 {
    Atom::new(atom).unwrap().tune_out_nm(range_nm, &what).unwrap()
}

fn at(f: f64, m: f64, circularity: f64) -> TuneOut {
    TuneOut { f, m: Some(m), circularity }
}

#[test]
fn published_tune_outs() {
    // source: Leonard et al., PRA 92, 052501 (2015); not independent of the ratio used
    let found = tune_out("87Rb", (785.0, 794.0), TuneOut::scalar(2.0));
    assert!((found - 790.032_388).abs() < 3.2e-5, "{found}");
    // source: Schmidt et al., PRA 93, 022507 (2016): 790.01858(23); allowed 1 pm
    let found = tune_out("87Rb", (785.0, 794.0), at(1.0, 0.0, 0.0));
    assert!((found - 790.018_58).abs() < 1e-3, "{found}");
    // source: Fallon et al., arXiv:2201.10435: 785.1522(3), V m < 0; allowed 2 pm
    let found = tune_out("87Rb", (783.0, 794.0), at(2.0, -2.0, 0.9931));
    assert!((found - 785.1522).abs() < 2e-3, "{found}");
    // source: Holmgren et al. 2012 (from memory): 768.9712(15)
    let found = tune_out("39K", (768.0, 769.9), TuneOut::scalar(2.0));
    assert!((found - 768.9712).abs() < 1.5e-3, "{found}");
    // source: Ratkata et al., PRA 104, 052813 (2021): F = 3, m = 3, 880.21790(40)(8)
    let found = tune_out("133Cs", (860.0, 890.0), at(3.0, 3.0, 0.0));
    assert!((found - 880.217_90).abs() < 4e-4, "{found}");
}

#[test]
fn lithium_lies_between_its_lines() {
    // source: Copenhaver et al., arXiv:1904.08974: 3310.1(4.9) MHz from F = 2 -> 2P1/2 F' = 2
    let atom = Atom::new("7Li").unwrap();
    let found = tune_out("7Li", (670.962, 670.976), TuneOut::scalar(2.0));
    let structure = atom.structure();
    let line = structure.lines.iter().find(|line| line.name == "D1").unwrap();
    let resonance = line.frequency_hz + line.hyperfine.shift_hz(4) - structure.ground_hz(4);
    let from_line = fluxloom_core::constants::SPEED_OF_LIGHT_M_PER_S / (found * 1e-9) - resonance;
    assert!((from_line * 1e-6 - 3310.1).abs() < 4.9, "{from_line}");
}

#[test]
fn errors_of_tune_outs_come_from_the_ratio() {
    let atom = Atom::new("87Rb").unwrap();
    let found = atom.tune_out_with_error((785.0, 794.0), &TuneOut::scalar(2.0)).unwrap();
    // The ratio 1.99221(3) alone is 26 fm; independent elements would give 500 fm.
    assert!(found.standard_error > 1e-5 && found.standard_error < 2e-4, "{found:?}");
}
