//! Public types may be sent to and shared between threads.

use fluxloom_core::angular::SpinMatrices;
use fluxloom_core::atom::{
    DataSource, GroundLevels, Manifold, Number, State, Structure, Uncertain,
};
use fluxloom_core::fault::Fault;
use fluxloom_core::flux::Solution;
use fluxloom_core::lattice::{Bands, LinkOverlaps, Wannier};
use fluxloom_core::light::{
    Bias, Coupling, Polarisability, Quality, Radio, Scattering, StrayCoupling, TuneOut,
};
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
        shared::<State>(),
        shared::<Manifold>(),
        shared::<Structure>(),
        shared::<GroundLevels>(),
        shared::<Uncertain<f64>>(),
        shared::<SpinMatrices>(),
        shared::<Bias>(),
        shared::<Radio>(),
        shared::<TuneOut>(),
        shared::<Polarisability>(),
        shared::<Coupling>(),
        shared::<StrayCoupling>(),
        shared::<Scattering>(),
        shared::<Quality>(),
    ];
    assert!(sizes.iter().all(|size| *size > 0));
}
