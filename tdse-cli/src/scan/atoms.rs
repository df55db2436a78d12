//! Atoms on grids, computed once for all points that share them.

use std::collections::HashMap;
use std::sync::{Arc, Mutex, OnceLock, PoisonError};

use tdse_core::simulate::Atom;
use tdse_core::stationary::{NoContinuum, RoundStates, ScatteringStates, StationaryError};

use super::prepare::Job;

type Slot<T, E> = Arc<OnceLock<Result<Arc<T>, E>>>;
type Slots<T, E> = Mutex<HashMap<String, Slot<T, E>>>;

/// Atoms by potential, grid and number of states, and their scattering states; safe to share between threads, which wait for one another.
#[derive(Debug, Default)]
pub struct Atoms {
    on_grids: Slots<Atom, StationaryError>,
    continua: Slots<ScatteringStates, NoContinuum>,
    round: Slots<RoundStates, StationaryError>,
}

impl Atoms {
    /// None yet.
    pub fn new() -> Self {
        Self::default()
    }

    /// The atom of a job.
    ///
    /// # Errors
    /// As [`Atom::new`].
    pub fn get(&self, job: &Job) -> Result<Arc<Atom>, StationaryError> {
        let (potential, grid, states) = (&job.problem.potential, &job.numerics.grid, job.states());
        // Debug output spells every number with all its digits.
        let key = format!("{potential:?} {grid:?} {states} {:?}", job.labels);
        let make = || match grid.dimensions() {
            1 => Atom::new(potential, grid, states),
            _ => Atom::on_plane(potential, grid, &job.labels),
        };
        slot(&self.on_grids, key).get_or_init(|| make().map(Arc::new)).clone()
    }

    /// Its scattering states.
    ///
    /// # Errors
    /// As [`ScatteringStates::new`].
    pub fn continuum(&self, job: &Job) -> Result<Arc<ScatteringStates>, NoContinuum> {
        let (potential, axis) = (&job.problem.potential, job.numerics.grid.x);
        let make = || ScatteringStates::new(potential, axis);
        slot(&self.continua, format!("{potential:?} {axis:?}")).get_or_init(|| make().map(Arc::new)).clone()
    }

    /// Every bound state it has in two dimensions.
    ///
    /// # Errors
    /// As [`RoundStates::in_box`].
    pub fn round(&self, job: &Job) -> Result<Arc<RoundStates>, StationaryError> {
        let (potential, grid) = (&job.problem.potential, &job.numerics.grid);
        let make = || RoundStates::in_box(potential, grid);
        slot(&self.round, format!("{potential:?} {grid:?}")).get_or_init(|| make().map(Arc::new)).clone()
    }
}

/// The slot of a key, made where there is none.
fn slot<T, E>(slots: &Slots<T, E>, key: String) -> Slot<T, E> {
    // A thread that panicked while it held the lock left the map as it was.
    let mut slots = slots.lock().unwrap_or_else(PoisonError::into_inner);
    slots.entry(key).or_default().clone()
}
