//! Couplings of atoms that a lattice holds: what the kick leaves of them.
//!
//! The Rabi frequency of free atoms is multiplied by the overlap O_0 of the kick
//! with the Wannier function of the lowest band. What of the kick runs across
//! the lattice is not looked at here.

use crate::Atom;
use crate::atom::State;
use crate::error::Error;
use crate::lattice::Lattice;
use crate::light::{Bias, Coupling, RamanPair};

impl RamanPair {
    /// The coupling b <- a explained; with a lattice, what is left of it for the
    /// atoms in its lowest band.
    ///
    /// # Errors
    /// As [`RamanPair::rabi_hz`], and [`Error::NotLocalised`] for a lattice too
    /// shallow to hold the atoms.
    pub fn coupling(
        &self,
        atom: &Atom,
        states: (State, State),
        bias: &Bias,
        lattice: Option<&Lattice>,
    ) -> Result<Coupling, Error> {
        let free = self.free_coupling(atom, states, bias)?;
        let Some(lattice) = lattice else { return Ok(free) };
        let kick = self.kick(lattice);
        let overlap = lattice.link_overlaps(kick)?.on_site;
        Ok(Coupling { kick: Some(kick), effective_rabi_hz: free.rabi_hz * overlap, ..free })
    }
}
