//! Physics and numbers for synthetic magnetic flux in Raman-coupled optical
//! lattices: no files, no hardware, no Python.
//!
//! Each room uses only rooms that stand before it: [`constants`], [`angular`],
//! [`rational`], [`atom`], [`light`], [`lattice`], [`flux`].

pub mod angular;
pub mod atom;
pub mod constants;
pub mod control;
pub mod degrees;
pub mod documents;
pub mod error;
pub mod fault;
pub mod flux;
pub mod lattice;
pub mod light;
pub mod limits;
pub mod rational;
pub mod vector;

pub use atom::Atom;
pub use documents::Document;
pub use error::Error;
pub use lattice::{Lattice, LatticeInput};
pub use light::{Beam, BeamInput, Crossing, Directions, RamanPair};
pub use rational::{Flux, Fraction, Sense};
