//! First order in the field, and two resonant levels.

use ndarray::Array2;
use tdse_core::model::perturbation::{TwoLevels, one_photon};
use tdse_core::spectrum::{EnergyAxis, momenta_of};
use tdse_core::stationary::ScatteringStates;
use tdse_core::units::TIME_FS;

use super::{Run, electrons, electronvolts, own};
use crate::store::Contents;

const NAME: &str = "perturbation";
/// Electron energies of a run that writes no electrons: up to so many times the fastest photon, hartree.
const BEYOND: f64 = 2.0;
/// Their number.
const ENERGIES: usize = 800;

/// Ionization by one photon; two levels where at least two populations are written.
pub(super) fn put(contents: &mut Contents, run: &Run, states: &ScatteringStates) {
    let fastest = run.field.pulses.iter().map(|pulse| pulse.frequency).fold(0.5, f64::max);
    let own_axis = EnergyAxis { step: BEYOND * fastest / ENERGIES as f64, points: ENERGIES + 1 };
    let axis = run.electron_axis().unwrap_or(own_axis);
    let amplitude = one_photon(states, &run.ground, run.field, momenta_of(axis));
    if run.electron_axis().is_some() {
        electrons(contents, NAME, axis, &amplitude);
    }
    let probability = amplitude.probability().iter().sum::<f64>();
    contents.insert(&own(NAME), "ionization_probability", probability);
    two_levels(contents, run);
}

/// The initial level and the one that the first pulse is nearest to, among those whose populations are written.
fn two_levels(contents: &mut Contents, run: &Run) {
    let (bound, from) = (&run.atom.bound, run.job.problem.initial.lowest());
    let Some(photon) = run.field.pulses.first().map(|pulse| pulse.frequency) else { return };
    let levels = |to: usize| {
        let state = |n: usize| (bound.states[n].as_slice(), bound.energies[n]);
        (to, TwoLevels::of(run.ground.axis, [state(from), state(to)]))
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
