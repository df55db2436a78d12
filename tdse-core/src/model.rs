//! Simpler models of the same atom in the same field, and how far each is from the full result.
//!
//! Plain data in, plain data out; where there is cost, a plan is made once. What a model gives has the form the full run's
//! results have, so that everything derived from those is derived from it in the same way:
//!
//! * harmonics: an acceleration d²d/dt² on a [`Schedule`](crate::simulate::Schedule), for
//!   [`harmonics`](crate::spectrum::harmonics()), or amplitudes a(ω) on an energy axis;
//! * electrons: a [`ContinuumAmplitude`](crate::spectrum::ContinuumAmplitude) at
//!   [`momenta_of`](crate::spectrum::momenta_of) an axis;
//! * ionization: the probability to be ionized at given times.

pub mod branches;
pub mod curve;
pub mod metrics;
mod motion;
pub mod perturbation;
pub mod quantum_orbits;
pub mod recombination;
pub mod strong_field;
pub mod three_step;
pub mod tunnelling;

pub use motion::Motion;
