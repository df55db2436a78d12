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

/// Their number.
const ANGLES: usize = 180;

/// Puts the electrons in, with `bound` the population of all bound states.
pub(super) fn electrons(contents: &mut Contents, finished: &Finished, axis: EnergyAxis, bound: f64) {
    let Finished { point, plan, state, .. } = *finished;
    let (Some(collector), Some(outgoing)) = (plan.map_collector(), &state.outgoing) else { return };
    let job = &point.job;
    let map = MomentumMap::new(collector, &outgoing.map);

    let total = spectra(contents, "", &map, axis);
    contents.remark("photoelectrons", "method", ElectronMethod::OutgoingAmplitude.name());
    contents.insert("summary", "electron_yield", total);
    contents.insert("summary", "unaccounted_probability", 1.0 - bound - total);
    contents.insert("summary", "electron_method", ElectronMethod::OutgoingAmplitude as i64);
    let slowest = slowest_momentum(job.numerics.absorber.width());
    contents.insert("summary", "lowest_clean_momentum", slowest);
    let sideband = tail_of(&job.problem, &job.numerics).sideband;
    contents.insert("summary", "coulomb_sideband", sideband);
}

/// Puts energy spectrum, angular distribution and density of a map in, in the groups of this name after `prefix`; the probability of
/// an electron within the axis.
pub(super) fn spectra(contents: &mut Contents, prefix: &str, map: &MomentumMap, axis: EnergyAxis) -> f64 {
    let energies = axis.values();
    let spectrum = map.energy_spectrum(&energies);
    let group = &format!("{prefix}photoelectrons");
    contents.insert(group, "energy", energies.iter().map(|&e| electronvolts(e)).collect::<Vec<_>>());
    contents.insert(group, "yield", spectrum.iter().map(|y| y / HARTREE_EV).collect::<Vec<_>>());
    let last = axis.step * (axis.points - 1) as f64;
    let angles = emission_angles();
    let distribution = map.angular_distribution(&angles, [0.0, last]);
    contents.insert(group, "emission_angle", angles);
    contents.insert(group, "angular_distribution", distribution);
    momenta(contents, &format!("{prefix}momentum"), map, last);
    let inner: f64 = spectrum.iter().sum();
    axis.step * (inner - 0.5 * (spectrum[0] + spectrum[axis.points - 1]))
}

/// Angles at which angular distributions are written, rad.
pub(super) fn emission_angles() -> Vec<f64> {
    (0..ANGLES).map(|n| 2.0 * PI * n as f64 / ANGLES as f64).collect()
}

/// The density over final momenta, on the momenta of the map as far as the energies go.
fn momenta(contents: &mut Contents, group: &str, map: &MomentumMap, largest_energy: f64) {
    let largest = (2.0 * largest_energy).sqrt() * (1.0 + 1e-9);
    let kept = |d: usize| -> Vec<f64> {
        map.momenta[d].iter().copied().filter(|k: &f64| k.abs() <= largest).collect()
    };
    let (x, y) = (kept(0), kept(1));
    let first = (map.momenta[0].len() - x.len()) / 2;
    let density = Array2::from_shape_fn((y.len(), x.len()), |(j, i)| {
        map.density[(j + first) * map.momenta[0].len() + i + first]
    });
    contents.insert(group, "momentum_y", y);
    contents.insert(group, "momentum_x", x);
    contents.insert(group, "density", density);
}
