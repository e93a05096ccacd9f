//! How long one verdict takes.

use std::hint::black_box;

use criterion::{Criterion, criterion_group, criterion_main};
use fluxloom_core::{Crossing, Lattice, LatticeInput, RamanPair};
use fluxloom_plan::{CheckOptions, check_flux};

fn check(criterion: &mut Criterion) {
    let input = LatticeInput { wavelength_nm: 1064.0, depth_er: 6.0, ..LatticeInput::RETRO };
    let pair = Crossing { wavelength_nm: 769.0, angle_deg: 31.451, tilt_deg: 0.0 };
    let (Ok(lattice), Ok(raman), Ok(target)) =
        (Lattice::new(input), RamanPair::crossing(pair), "3/8".parse())
    else {
        return;
    };
    let options = CheckOptions { sites: 60, ..CheckOptions::default() };
    criterion.bench_function("check_flux", |bencher| {
        bencher.iter(|| check_flux(black_box(&lattice), black_box(&raman), target, options));
    });
}

criterion_group!(benches, check);
criterion_main!(benches);
