//! The electrons of a run in two dimensions, from its momentum map.

use std::f64::consts::PI;

use ndarray::Array2;
use tdse_core::absorber::slowest_momentum;
use tdse_core::choose::tail_of;
use tdse_core::outgoing::MomentumMap;
use tdse_core::problem::ElectronMethod;
use tdse_core::spectrum::EnergyAxis;
use tdse_core::units::HARTREE_EV;

use super::electronvolts;
use super::recorded::Finished;
use crate::store::Contents;

/// Angles at which the angular distribution is written.
const ANGLES: usize = 180;

/// Puts the electrons in, with `bound` the population of all bound states.
pub(super) fn electrons(contents: &mut Contents, finished: &Finished, axis: EnergyAxis, bound: f64) {
    let Finished { point, plan, state, .. } = *finished;
    let (Some(collector), Some(outgoing)) = (plan.map_collector(), &state.outgoing) else { return };
    let job = &point.job;
    let map = MomentumMap::new(collector, &outgoing.map);

    let energies = axis.values();
    let spectrum = map.energy_spectrum(&energies);
    let group = "photoelectrons";
    contents.insert(group, "energy", energies.iter().map(|&e| electronvolts(e)).collect::<Vec<_>>());
    contents.insert(group, "yield", spectrum.iter().map(|y| y / HARTREE_EV).collect::<Vec<_>>());
    let last = axis.step * (axis.points - 1) as f64;
    let angles: Vec<f64> = (0..ANGLES).map(|n| 2.0 * PI * n as f64 / ANGLES as f64).collect();
    let distribution = map.angular_distribution(&angles, [0.0, last]);
    contents.insert(group, "emission_angle", angles);
    contents.insert(group, "angular_distribution", distribution);
    contents.remark(group, "method", ElectronMethod::OutgoingAmplitude.name());
    momenta(contents, &map, last);

    let inner: f64 = spectrum.iter().sum();
    let total = axis.step * (inner - 0.5 * (spectrum[0] + spectrum[axis.points - 1]));
    contents.insert("summary", "electron_yield", total);
    contents.insert("summary", "unaccounted_probability", 1.0 - bound - total);
    contents.insert("summary", "electron_method", ElectronMethod::OutgoingAmplitude as i64);
    let slowest = slowest_momentum(job.numerics.absorber.width());
    contents.insert("summary", "lowest_clean_momentum", slowest);
    let left = tail_of(&job.problem, &job.numerics);
    contents.insert("summary", "coulomb_shift", electronvolts(left.shift));
    contents.insert("summary", "coulomb_sideband", left.sideband);
}

/// The density over final momenta, on the momenta of the map as far as the energies go.
fn momenta(contents: &mut Contents, map: &MomentumMap, largest_energy: f64) {
    let largest = (2.0 * largest_energy).sqrt() * (1.0 + 1e-9);
    let kept = |d: usize| -> Vec<f64> {
        map.momenta[d].iter().copied().filter(|k: &f64| k.abs() <= largest).collect()
    };
    let (x, y) = (kept(0), kept(1));
    let first = (map.momenta[0].len() - x.len()) / 2;
    let density = Array2::from_shape_fn((y.len(), x.len()), |(j, i)| {
        map.density[(j + first) * map.momenta[0].len() + i + first]
    });
    contents.insert("momentum", "momentum_y", y);
    contents.insert("momentum", "momentum_x", x);
    contents.insert("momentum", "density", density);
}
