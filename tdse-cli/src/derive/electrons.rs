//! The electrons of a finished run: spectrum, momentum distribution, and the numbers that say how far to trust them.

use num_complex::Complex;
use tdse_core::absorber::slowest_momentum;
use tdse_core::choose::tail_of;
use tdse_core::problem::ElectronMethod;
use tdse_core::spectrum::{ContinuumAmplitude, Electrons, EnergyAxis, asymmetry, momenta_of, without_bound};
use tdse_core::stationary::ScatteringStates;
use tdse_core::units::HARTREE_EV;

use super::electronvolts;
use super::recorded::Finished;
use crate::store::Contents;

/// Puts the electrons in, with `bound` the population of all bound states.
pub(super) fn electrons(
    contents: &mut Contents,
    finished: &Finished,
    continuum: &ScatteringStates,
    (method, axis): (ElectronMethod, EnergyAxis),
    bound: f64,
) {
    let amplitude = amplitude(finished, continuum, axis);
    let spectrum = Electrons::new(axis, &amplitude);
    let per_ev = |values: &[f64]| values.iter().map(|v| v / HARTREE_EV).collect::<Vec<_>>();
    let energies: Vec<f64> = axis.values().into_iter().map(electronvolts).collect();
    contents.insert("photoelectrons", "energy", energies);
    contents.insert("photoelectrons", "yield", per_ev(&spectrum.total()));
    contents.insert("photoelectrons", "left", per_ev(&spectrum.left));
    contents.insert("photoelectrons", "right", per_ev(&spectrum.right));
    contents.remark("photoelectrons", "method", method.name());
    let (momenta, density) = amplitude.momentum_density();
    contents.insert("momentum", "momentum", momenta);
    contents.insert("momentum", "density", density);

    let [left, right] = amplitude.probability();
    contents.insert("summary", "electron_yield", left + right);
    contents.insert("summary", "asymmetry", asymmetry([left, right]).unwrap_or(f64::NAN));
    contents.insert("summary", "unaccounted_probability", 1.0 - bound - left - right);
    contents.insert("summary", "electron_method", method as i64);
    if method == ElectronMethod::OutgoingAmplitude {
        let job = &finished.point.job;
        let left = tail_of(&job.problem, &job.numerics);
        let slowest = slowest_momentum(job.numerics.absorber.width());
        contents.insert("summary", "lowest_clean_momentum", slowest);
        contents.insert("summary", "coulomb_shift", electronvolts(left.shift));
        contents.insert("summary", "coulomb_sideband", left.sideband);
    }
}

/// What is in the box at the end, without its bound part, on scattering states, and what was collected before.
fn amplitude(finished: &Finished, continuum: &ScatteringStates, axis: EnergyAxis) -> ContinuumAmplitude {
    let Finished { point, atom, plan, state, .. } = *finished;
    let numerics = &point.job.numerics;
    let mut psi = vec![Complex::default(); numerics.grid.len()];
    plan.wave_function(state, &mut psi);
    let inner = 0.5 * numerics.grid.x.extent() - numerics.absorber.width();
    // Those that were asked for are converged, the rest are good to the sum of their populations only.
    let states = &atom.bound.states[..point.job.states().min(atom.bound.states.len())];
    let free = without_bound(&psi, states, numerics.grid.x, inner);
    let amplitude = ContinuumAmplitude::of(&free, continuum, momenta_of(axis));
    match (plan.collector(), &state.outgoing) {
        (Some(collector), Some(outgoing)) => amplitude.with_collected(collector, outgoing),
        _ => amplitude,
    }
}
