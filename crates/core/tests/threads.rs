//! Public types may be sent to and shared between threads.

use fluxloom_core::atom::{DataSource, Number};
use fluxloom_core::fault::Fault;
use fluxloom_core::flux::Solution;
use fluxloom_core::lattice::{Bands, LinkOverlaps, Wannier};
use fluxloom_core::{Atom, Beam, Error, Flux, Fraction, Lattice, RamanPair, Sense};

fn shared<T: Send + Sync>() -> usize {
    std::mem::size_of::<T>()
}

#[test]
fn public_types_cross_threads() {
    let sizes = [
        shared::<Atom>(),
        shared::<Number>(),
        shared::<DataSource>(),
        shared::<Lattice>(),
        shared::<Bands>(),
        shared::<Wannier>(),
        shared::<LinkOverlaps>(),
        shared::<RamanPair>(),
        shared::<Beam>(),
        shared::<Solution>(),
        shared::<Flux>(),
        shared::<Fraction>(),
        shared::<Sense>(),
        shared::<Fault>(),
        shared::<Error>(),
    ];
    assert!(sizes.iter().all(|size| *size > 0));
}
