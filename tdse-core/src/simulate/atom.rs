//! The model atom of a run: potential and bound states on its grid.

use num_complex::Complex;

use crate::grid::Grid;
use crate::potential::{Potential, PotentialOnGrid};
use crate::problem::{InitialState, PlaneLabel};
use crate::stationary::{
    BoundStates, PlaneState, StationaryError, bound_states_below, parity_states, plane_states,
};

/// A model atom on a grid: computed once for all runs that share it.
#[derive(Clone, Debug, PartialEq)]
pub struct Atom {
    /// Potential and gradient.
    pub potential: PotentialOnGrid,
    /// Its bound states in one dimension: every one below zero, and as many as were asked for in any case.
    pub bound: BoundStates,
    /// Its bound states in two dimensions: those that were asked for, in that order.
    pub plane: Vec<PlaneState>,
}

impl Atom {
    /// Atom with every state below zero, and the `states` lowest in any case.
    pub fn new(potential: &Potential, grid: &Grid, states: usize) -> Result<Self, StationaryError> {
        Ok(Self {
            potential: PotentialOnGrid::sample(potential, grid),
            bound: bound_states_below(potential, grid, states)?,
            plane: Vec::new(),
        })
    }

    /// Atom in two dimensions with the states that `labels` name; an [`InitialState`] and a [`Record`](crate::problem::Record) count them in this
    /// order.
    pub fn on_plane(
        potential: &Potential,
        grid: &Grid,
        labels: &[PlaneLabel],
    ) -> Result<Self, StationaryError> {
        Ok(Self {
            potential: PotentialOnGrid::sample(potential, grid),
            bound: BoundStates { energies: Vec::new(), states: Vec::new() },
            plane: plane_states(potential, grid, labels)?,
        })
    }

    /// Atom in two dimensions of any potential that keeps both mirrors, with the states that `labels` name by parity. A run starts
    /// with [`Plan::from_wave_function`](super::Plan::from_wave_function) and [`Self::wave_function`].
    ///
    /// # Errors
    /// As [`parity_states`].
    ///
    /// # Panics
    /// As [`parity_states`].
    pub fn of_values(
        potential: PotentialOnGrid,
        grid: &Grid,
        labels: &[PlaneLabel],
    ) -> Result<Self, StationaryError> {
        let plane = parity_states(&potential, grid, labels)?;
        let bound = BoundStates { energies: Vec::new(), states: Vec::new() };
        Ok(Self { potential, bound, plane })
    }

    /// Number of bound states it holds.
    pub fn states(&self) -> usize {
        self.bound.states.len() + self.plane.len()
    }

    /// Bound state `number` at point `i`.
    fn state(&self, number: usize, i: usize) -> Complex<f64> {
        match self.plane.get(number) {
            Some(state) => state.at(i),
            None => Complex::new(self.bound.states[number][i], 0.0),
        }
    }

    /// ψ(0) of an initial state, normalised.
    ///
    /// # Panics
    /// If the atom holds fewer states than the initial state names.
    pub fn wave_function(&self, initial: &InitialState) -> Vec<Complex<f64>> {
        let points = self.potential.values.len();
        let state = |number: usize| (0..points).map(move |i| self.state(number, i));
        match initial {
            InitialState::Single(number) => state(*number).collect(),
            InitialState::Superposition(terms) => {
                let total: f64 = terms.iter().map(|t| t.weight).sum();
                let mut psi = vec![Complex::default(); points];
                for term in terms {
                    let amplitude = Complex::from_polar((term.weight / total).sqrt(), term.phase);
                    for (p, s) in psi.iter_mut().zip(state(term.number)) {
                        *p += amplitude * s;
                    }
                }
                psi
            }
        }
    }
}
