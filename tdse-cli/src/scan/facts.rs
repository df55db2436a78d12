//! What is found of an atom before any grid: the tuned softening and the facts that numerics are chosen from. Computed
//! once for all points of a scan that share them.

use std::collections::HashMap;

use tdse_core::choose::AtomFacts;
use tdse_core::potential::Potential;
use tdse_core::stationary::{Softenable, StationaryError, tune_softening};

use crate::config::request::{AtomPotential, AtomRequest};

/// Atoms found so far.
#[derive(Debug, Default)]
pub struct Facts {
    tuned: HashMap<String, Result<f64, StationaryError>>,
    atoms: HashMap<String, Result<AtomFacts, StationaryError>>,
}

impl Facts {
    /// None yet.
    pub fn new() -> Self {
        Self::default()
    }

    /// Softening that gives the atom its ionization energy, bohr; `None` where nothing is to be tuned.
    ///
    /// # Errors
    /// [`StationaryError::OutOfReach`] where no softening does.
    pub fn softening(&mut self, atom: &AtomRequest) -> Result<Option<f64>, StationaryError> {
        let (Some(target), AtomPotential::Softened { charge, screening_length, .. }) =
            (atom.potential.target_energy(), &atom.potential)
        else {
            return Ok(None);
        };
        let family = match *screening_length {
            None => Softenable::SoftCoulomb { charge: *charge },
            Some(screening_length) => Softenable::Screened { charge: *charge, screening_length },
        };
        let state = atom.tuned_state();
        let key = format!("{family:?} {state} {target:?}");
        self.tuned.entry(key).or_insert_with(|| tune_softening(&family, state, -target)).clone().map(Some)
    }

    /// Facts of the atom with this potential.
    ///
    /// # Errors
    /// [`StationaryError::NoSuchState`] where the initial state is not bound.
    pub fn of(&mut self, potential: &Potential, atom: &AtomRequest) -> Result<AtomFacts, StationaryError> {
        let key = format!("{potential:?} {:?}", atom.initial);
        self.atoms.entry(key).or_insert_with(|| AtomFacts::new(potential, &atom.initial)).clone()
    }
}
