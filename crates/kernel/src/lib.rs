//! Hot loops of Fluxloom on plain slices.
//!
//! Nothing here knows atoms, files or units beyond what a loop needs. Every
//! loop is written once as safe code and compiled for several CPU levels;
//! [`cpu::level`] picks one at run time, so that one portable wheel is fast
//! everywhere. This is the only crate of the workspace where `unsafe` may
//! stand: it guards the calls of functions compiled for a CPU level.
//!
//! No loop uses fused multiply-add, so every CPU level gives the same bits.

pub mod bands;
pub mod combine;
pub mod cpu;
