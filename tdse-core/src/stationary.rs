//! Stationary states: grid-free levels of a model atom, the softening that gives a level, and bound states on a grid,
//! scattering states and what one photon does between the two.

mod bound;
mod level;
mod magnus;
mod mirrored;
mod one_photon;
mod plane;
mod radial;
pub(crate) mod root;
mod round;
mod round_continuum;
mod round_photon;
mod scattering;
mod sector;
mod tail;
mod threshold;
mod tune;

pub use bound::{BoundStates, bound_states, bound_states_below};
pub use level::{Level, count_below, level, radial_count_below, radial_level};
pub use mirrored::parity_states;
pub use one_photon::{TransitionDipole, transition_dipole};
pub use plane::{PlaneState, lowest_plane_levels, plane_level, plane_states};
pub use radial::RadialFunction;
pub use round::RoundStates;
pub use round_continuum::{RoundContinuum, RoundWave};
pub use round_photon::{NoTransition, RoundDipole, RoundTransitions};
pub use scattering::{NoContinuum, Scattering, ScatteringStates, Side};
pub use threshold::BoundSeries;
pub use tune::{Softenable, tune_plane_softening, tune_radial_softening, tune_softening};

/// Why a stationary state could not be had.
#[derive(Clone, Debug, PartialEq, thiserror::Error)]
pub enum StationaryError {
    /// The atom has fewer bound states.
    #[error("state {number} does not exist: this potential binds {bound} state(s), numbered 0 to {}", bound.saturating_sub(1))]
    NoSuchState {
        /// Number asked for.
        number: usize,
        /// How many there are.
        bound: usize,
    },
    /// No softening gives the energy asked for.
    #[error(
        "no softening between {smallest} and {largest} bohr gives state {number} the energy {energy} hartree: \
         it reaches from {lowest} to {highest} hartree"
    )]
    OutOfReach {
        /// Number of the state.
        number: usize,
        /// Energy asked for, hartree.
        energy: f64,
        /// Smallest softening tried, bohr.
        smallest: f64,
        /// Largest softening tried, bohr.
        largest: f64,
        /// Energy at the smallest softening.
        lowest: f64,
        /// Energy at the largest softening.
        highest: f64,
    },
    /// A potential on a grid has no parity.
    #[error(
        "the potential at {axis} and -{axis} differs by up to {difference:e} hartree: its states have no parity"
    )]
    NoMirror {
        /// Axis that the mirror turns round.
        axis: &'static str,
        /// Largest difference, hartree.
        difference: f64,
    },
    /// An iteration did not reach its accuracy.
    #[error("{what} did not converge: {reached:e} reached, {wanted:e} wanted ({unit})")]
    NotConverged {
        /// What was iterated.
        what: &'static str,
        /// Accuracy reached.
        reached: f64,
        /// Accuracy wanted.
        wanted: f64,
        /// Unit of both.
        unit: &'static str,
    },
}
