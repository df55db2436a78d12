//! Atoms on grids, computed once for all points that share them.

use std::collections::HashMap;
use std::sync::{Arc, Mutex, OnceLock};

use tdse_core::simulate::Atom;
use tdse_core::stationary::StationaryError;

use super::prepare::Job;

type Slot = Arc<OnceLock<Result<Arc<Atom>, StationaryError>>>;

/// Atoms by potential, grid and number of states; safe to share between threads, which wait for one another.
#[derive(Debug, Default)]
pub struct Atoms {
    slots: Mutex<HashMap<String, Slot>>,
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
        let states = job.states();
        // Debug output spells every number with all its digits.
        let key = format!("{:?} {:?} {states}", job.problem.potential, job.numerics.grid);
        let slot = match self.slots.lock() {
            Ok(mut slots) => slots.entry(key).or_default().clone(),
            // A thread that panicked while it held the lock left the map as it was.
            Err(poisoned) => poisoned.into_inner().entry(key).or_default().clone(),
        };
        let make = || Atom::new(&job.problem.potential, &job.numerics.grid, states).map(Arc::new);
        slot.get_or_init(make).clone()
    }
}
