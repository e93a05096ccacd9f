//! How fast the bands come: 10^4 depths x 51 quasimomenta x 4 bands, and one lattice.
//!
//! The comparison with numpy in one run is `make bench-peers`.

use std::hint::black_box;

use criterion::{Criterion, criterion_group, criterion_main};
use fluxloom_core::control::Unwatched;
use fluxloom_core::lattice::{BandGrid, Hop, Transfer, band_energies_er};
use fluxloom_core::{Lattice, LatticeInput};

fn bands(criterion: &mut Criterion) {
    let depths: Vec<f64> = (0..10_000).map(|k| 0.02 + 39.98 * f64::from(k) / 9999.0).collect();
    let quasimomenta: Vec<f64> = (0..51).map(|k| -1.0 + 0.04 * f64::from(k)).collect();
    let mut group = criterion.benchmark_group("bands");
    group.sample_size(20);
    group.bench_function("ten thousand depths", |bencher| {
        bencher.iter(|| {
            let grid = BandGrid { depths_er: &depths, quasimomenta: &quasimomenta, count: 4 };
            band_energies_er(black_box(grid), &Unwatched)
        });
    });
    group.bench_function("one depth", |bencher| {
        bencher.iter(|| {
            let grid = BandGrid { depths_er: &[6.0], quasimomenta: &quasimomenta, count: 4 };
            band_energies_er(black_box(grid), &Unwatched)
        });
    });
    group.finish();
}

fn single_lattice(criterion: &mut Criterion) {
    let input = LatticeInput { wavelength_nm: 1064.0, depth_er: 6.0, ..LatticeInput::RETRO };
    let Ok(lattice) = Lattice::new(input) else { return };
    criterion.bench_function("tunnelling", |bencher| {
        bencher.iter(|| black_box(&lattice).tunnelling_er(Hop::NEAREST));
    });
    criterion.bench_function("kick overlap", |bencher| {
        bencher.iter(|| black_box(&lattice).kick_overlap(black_box(0.75), Transfer::ON_SITE));
    });
}

criterion_group!(benches, bands, single_lattice);
criterion_main!(benches);
