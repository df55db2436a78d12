//! What is found of an atom before any grid: the tuned softening and the facts that numerics are chosen from. Computed
//! once for all points of a scan that share them.

use std::collections::HashMap;

use tdse_core::choose::AtomFacts;
use tdse_core::potential::Potential;
use tdse_core::problem::PlaneLabel;
use tdse_core::stationary::{
    Level, Softenable, StationaryError, lowest_plane_levels, tune_plane_softening, tune_softening,
};

use crate::config::request::{AtomPotential, AtomRequest};

/// Atoms found so far.
#[derive(Debug, Default)]
pub struct Facts {
    tuned: HashMap<String, Result<f64, StationaryError>>,
    atoms: HashMap<String, Result<AtomFacts, StationaryError>>,
    levels: HashMap<String, Result<Vec<(PlaneLabel, Level)>, StationaryError>>,
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
        let (state, labels) = (atom.tuned_state(), &atom.labels);
        let key = format!("{family:?} {state} {labels:?} {target:?}");
        let tune = || match atom.dimensions {
            1 => tune_softening(&family, state, -target),
            _ => tune_plane_softening(&family, labels, -target),
        };
        self.tuned.entry(key).or_insert_with(tune).clone().map(Some)
    }

    /// Facts of the atom with this potential.
    ///
    /// # Errors
    /// [`StationaryError::NoSuchState`] where the initial state is not bound.
    pub fn of(&mut self, potential: &Potential, atom: &AtomRequest) -> Result<AtomFacts, StationaryError> {
        let key = format!("{potential:?} {:?} {:?}", atom.initial, atom.labels);
        let find = || match atom.dimensions {
            1 => AtomFacts::new(potential, &atom.initial),
            _ => AtomFacts::on_plane(potential, &atom.labels),
        };
        self.atoms.entry(key).or_insert_with(find).clone()
    }

    /// The lowest levels of an atom of two dimensions; see [`lowest_plane_levels`].
    ///
    /// # Errors
    /// Where one does not converge.
    pub fn levels(
        &mut self,
        potential: &Potential,
        count: usize,
    ) -> Result<Vec<(PlaneLabel, Level)>, StationaryError> {
        let key = format!("{potential:?} {count}");
        self.levels.entry(key).or_insert_with(|| lowest_plane_levels(potential, count)).clone()
    }
}
