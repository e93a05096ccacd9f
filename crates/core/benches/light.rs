//! How fast light comes: polarisabilities at 10^5 wavelengths, all couplings of a
//! ground manifold, its levels in a field, and the scattering of one state.
//!
//! The comparison with numpy in one run is `make bench-peers`.

use std::hint::black_box;

use criterion::{Criterion, criterion_group, criterion_main};
use fluxloom_core::atom::State;
use fluxloom_core::light::{Bias, polarisation};
use fluxloom_core::{Atom, Beam, BeamInput, Error, RamanPair};

/// Isotope, its larger F, and a wavelength between its lines.
const ISOTOPES: [(&str, f64, f64); 3] =
    [("87Rb", 2.0, 790.03), ("40K", 4.5, 769.0), ("133Cs", 4.0, 880.2)];

/// Two beams that cross at right angles, one polarised along z and one across:
/// every rank takes part, and every element with |Delta m| <= 2 is there.
fn pair(wavelength_nm: f64) -> Result<RamanPair, Error> {
    let beam = |direction, along| {
        Beam::new(BeamInput {
            wavelength_nm,
            power_mw: 1.0,
            waist_um: [200.0; 2],
            direction,
            polarisation: polarisation::linear(direction, along)?,
            waist_axis: None,
            focus_um: [0.0; 3],
        })
    };
    RamanPair::from_beams(
        beam([1.0, 0.0, 0.0], [0.0, 1.0, 2.0])?,
        beam([0.0, 1.0, 0.0], [1.0, 0.0, 0.3])?,
    )
}

fn polarisabilities(criterion: &mut Criterion) -> Result<(), Error> {
    let wavelengths: Vec<f64> = (0..100_000).map(|k| 900.0 + 0.002 * f64::from(k)).collect();
    let mut group = criterion.benchmark_group("polarisabilities at 1e5 wavelengths");
    group.sample_size(20);
    for (name, f, _) in ISOTOPES {
        let atom = Atom::new(name)?;
        // A refusal would be fast.
        atom.polarisabilities_au(&wavelengths, f)?;
        group.bench_function(name, |bencher| {
            bencher.iter(|| atom.polarisabilities_au(black_box(&wavelengths), f));
        });
    }
    group.finish();
    Ok(())
}

fn couplings(criterion: &mut Criterion) -> Result<(), Error> {
    let mut group = criterion.benchmark_group("all couplings of one pair");
    for (name, _, wavelength_nm) in ISOTOPES {
        let (atom, pair) = (Atom::new(name)?, pair(wavelength_nm)?);
        for field_gauss in [0.0, 30.0] {
            let bias = Bias::along_z(field_gauss);
            pair.rabi_matrix_hz(&atom, &bias)?;
            group.bench_function(format!("{name}, {field_gauss} G"), |bencher| {
                bencher.iter(|| pair.rabi_matrix_hz(black_box(&atom), &bias));
            });
        }
    }
    group.finish();
    Ok(())
}

fn levels(criterion: &mut Criterion) -> Result<(), Error> {
    let mut group = criterion.benchmark_group("levels at 30 G");
    for (name, ..) in ISOTOPES {
        let atom = Atom::new(name)?;
        group.bench_function(name, |bencher| bencher.iter(|| black_box(&atom).ground_levels(30.0)));
    }
    group.finish();
    Ok(())
}

fn scattering(criterion: &mut Criterion) -> Result<(), Error> {
    let mut group = criterion.benchmark_group("scattering of one state in two beams");
    for (name, f, wavelength_nm) in ISOTOPES {
        let (atom, beams) = (Atom::new(name)?, pair(wavelength_nm)?.beams()?);
        let (state, bias) = (State::from_pair((f, f - 1.0))?, Bias::along_z(30.0));
        atom.scattering_per_s(&beams, state, &bias)?;
        group.bench_function(name, |bencher| {
            bencher.iter(|| black_box(&atom).scattering_per_s(&beams, state, &bias));
        });
    }
    group.finish();
    Ok(())
}

fn light(criterion: &mut Criterion) {
    for work in [polarisabilities, couplings, levels, scattering] {
        if let Err(refusal) = work(criterion) {
            eprintln!("cannot be measured: {refusal}");
            std::process::exit(1);
        }
    }
}

criterion_group!(benches, light);
criterion_main!(benches);
