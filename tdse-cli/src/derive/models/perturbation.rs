//! First order in the field, and two resonant levels.

use ndarray::Array2;
use tdse_core::model::perturbation::{PlaneOnePhoton, TwoLevels, one_photon};
use tdse_core::spectrum::{EnergyAxis, momenta_of};
use tdse_core::stationary::{RoundTransitions, ScatteringStates};
use tdse_core::units::TIME_FS;

use super::run::{Line, Run};
use super::{electrons, electronvolts, own};
use crate::derive::plane::emission_angles;
use crate::store::Contents;

const NAME: &str = "perturbation";
/// Electron energies of a run that writes no electrons: up to so many times the fastest photon, hartree.
const BEYOND: f64 = 2.0;
/// Their number.
const ENERGIES: usize = 800;

/// The axis of the electrons, or one that holds them where none are written.
fn axis(run: &Run) -> EnergyAxis {
    let fastest = run.field.pulses.iter().map(|pulse| pulse.frequency).fold(0.5, f64::max);
    let own_axis = EnergyAxis { step: BEYOND * fastest / ENERGIES as f64, points: ENERGIES + 1 };
    run.electron_axis().unwrap_or(own_axis)
}

/// Ionization by one photon in two dimensions.
pub(super) fn on_plane(contents: &mut Contents, run: &Run) -> Result<(), String> {
    let (round, axis) = (run.round()?, axis(run));
    let fastest = (2.0 * axis.step * axis.points as f64).sqrt();
    let transitions = RoundTransitions::new(&run.job.problem.potential, round.m, round.number, fastest)
        .map_err(|error| error.to_string())?;
    let found = PlaneOnePhoton::new(&transitions, run.field, axis);
    let probability = found.probability();
    contents.insert(&own(NAME), "ionization_probability", probability);
    if run.electron_axis().is_some() {
        let group = format!("models/{NAME}/photoelectrons");
        let energies: Vec<f64> = axis.values().into_iter().map(electronvolts).collect();
        contents.insert(&group, "energy", energies);
        let per_ev: Vec<f64> = found.spectrum().iter().map(|y| y / electronvolts(1.0)).collect();
        contents.insert(&group, "yield", per_ev);
        let angles = emission_angles();
        let distribution = found.angular_distribution(&angles);
        contents.insert(&group, "emission_angle", angles);
        contents.insert(&group, "angular_distribution", distribution);
        contents.insert(&own(NAME), "electron_yield", probability);
    }
    Ok(())
}

/// Ionization by one photon on a line; two levels where at least two populations are written.
pub(super) fn put(contents: &mut Contents, run: &Run, line: &Line, states: &ScatteringStates) {
    let axis = axis(run);
    let amplitude = one_photon(states, &line.ground, run.field, momenta_of(axis));
    if run.electron_axis().is_some() {
        electrons(contents, NAME, axis, &amplitude);
    }
    let probability = amplitude.probability().iter().sum::<f64>();
    contents.insert(&own(NAME), "ionization_probability", probability);
    two_levels(contents, run, line);
}

/// The initial level and the one that the first pulse is nearest to, among those whose populations are written.
fn two_levels(contents: &mut Contents, run: &Run, line: &Line) {
    let (bound, from) = (line.bound, run.job.problem.initial.lowest());
    let Some(photon) = run.field.pulses.first().map(|pulse| pulse.frequency) else { return };
    let levels = |to: usize| {
        let state = |n: usize| (bound.states[n].as_slice(), bound.energies[n]);
        (to, TwoLevels::of(line.ground.axis, [state(from), state(to)]))
    };
    // A level of the same parity is not reached by one photon.
    let reached = (from + 1..run.job.record.populations).map(levels).filter(|(_, l)| l.dipole.abs() > 1e-6);
    let off = |levels: &TwoLevels| (levels.transition - photon).abs();
    let Some((to, levels)) = reached.min_by(|a, b| off(&a.1).total_cmp(&off(&b.1))) else { return };
    let times = contents.real("populations", "time").expect("a recorded run has populations").clone();
    let atomic: Vec<f64> = times.iter().map(|t| t / TIME_FS).collect();
    let upper = levels.populations(run.field, &atomic);
    let lower: Vec<f64> = upper.iter().map(|p| 1.0 - p).collect();
    let group = format!("models/{NAME}/populations");
    contents.insert(&group, "state", vec![from as i64, to as i64]);
    contents.insert(&group, "time", times);
    let energies = vec![electronvolts(bound.energies[from]), electronvolts(bound.energies[to])];
    contents.insert(&group, "energy", energies);
    let rows = Array2::from_shape_fn((2, upper.len()), |(s, t)| if s == 0 { lower[t] } else { upper[t] });
    contents.insert(&group, "initial_population", lower);
    contents.insert(&group, "populations", rows.into_dyn());
}
