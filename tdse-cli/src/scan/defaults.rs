//! Defaults of outputs, resolved once per request over all points so that a scan has common axes.

use tdse_core::choose::ladder;
use tdse_core::field::Field;
use tdse_core::units::{HARTREE_EV, Quantity};

use crate::config::request::{Harmonics, Outputs, Photoelectrons, TimeFrequency};

/// Part of the classical cutoff by which an axis goes beyond it.
const BEYOND: f64 = 1.5;
/// Points per resolvable width on an energy axis.
const PER_WIDTH: f64 = 4.0;
/// Gabor window in optical periods: short enough to part the bursts of neighbouring half cycles.
const WINDOW: f64 = 0.12;
/// Times of a map per optical period.
const TIMES: f64 = 50.0;

/// End of a default energy axis at the most, eV: within what the schema allows.
const HIGHEST: f64 = 8e4;
/// Finest default step of an energy axis, eV.
const FINEST: f64 = 1e-3;
/// Fewest energies of a default axis of electrons.
const FEWEST_ENERGIES: f64 = 100.0;
/// Most orders, as the schema has it.
const MOST_ORDERS: f64 = 1e5;

/// What the defaults of one point are made from.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Scales {
    /// Highest photon energy a classical electron can emit, hartree.
    pub cutoff: f64,
    /// Photon energy of the first pulse, hartree; of a sampled field alone, its dominant scale.
    pub photon: f64,
    /// Length of the run, a.u.
    pub length: f64,
    /// Largest photon energy that the time step resolves, hartree.
    pub resolved: f64,
    /// Energy of the fastest electrons that matter, hartree.
    pub electrons: f64,
    /// Length of the field and what trails it, a.u., before it is rounded to steps.
    pub duration: f64,
}

/// Classical cutoff 1.32 Ip + 3.17 Up of all pulses together, hartree (Lewenstein et al., Phys. Rev. A 49, 2117 (1994),
/// eq. 32).
pub fn classical_cutoff(field: &Field, ionization_energy: f64, photon: f64) -> f64 {
    let potential: f64 = field.pulses.iter().map(|p| p.peak_field / p.frequency).sum();
    let up = 0.25 * potential * potential;
    (1.32 * ionization_energy.max(0.0) + 3.17 * up).max(ionization_energy.max(0.0) + 5.0 * photon)
}

/// Fills in what the outputs of a request leave open, the same for all its points.
pub fn fill(outputs: &Outputs, points: &[Scales]) -> Outputs {
    let largest = |f: fn(&Scales) -> f64| points.iter().map(f).fold(0.0, f64::max);
    let smallest = |f: fn(&Scales) -> f64| points.iter().map(f).fold(f64::INFINITY, f64::min);
    let in_ev = |value: f64| value * HARTREE_EV;
    let max_energy = || {
        let wanted = ladder::at_least(in_ev(BEYOND * largest(|p| p.cutoff))).min(HIGHEST);
        Some(energy(wanted.min(ladder::at_most(in_ev(smallest(|p| p.resolved))))))
    };
    let energy_step = || {
        let width = 2.0 * std::f64::consts::PI / largest(|p| p.length);
        Some(energy(ladder::at_most(in_ev(width / PER_WIDTH)).max(FINEST)))
    };
    let period = 2.0 * std::f64::consts::PI / largest(|p| p.photon);
    let harmonics = outputs.harmonics.map(|h| {
        let max_energy = h.max_energy.or_else(max_energy);
        let orders = max_energy.unwrap_or_default() / smallest(|p| p.photon) - 0.5;
        Harmonics {
            max_energy,
            energy_step: h.energy_step.or_else(energy_step),
            max_order: h.max_order.or(Some(orders.floor().clamp(1.0, MOST_ORDERS) as u32)),
            ..h
        }
    });
    let time_frequency = outputs.time_frequency.map(|map| TimeFrequency {
        window_length: map
            .window_length
            .or_else(|| Some(time(ladder::at_most(femtoseconds(WINDOW * period))))),
        max_energy: map.max_energy.or(harmonics.and_then(|h| h.max_energy)).or_else(max_energy),
        energy_step: map
            .energy_step
            .or_else(|| Some(energy(ladder::at_most(in_ev(0.25 * smallest(|p| p.photon)))))),
        time_step: map.time_step.or_else(|| Some(time(ladder::at_most(femtoseconds(period / TIMES))))),
    });
    let photoelectrons = outputs.photoelectrons.map(|electrons| filled(electrons, points));
    Outputs { harmonics, time_frequency, photoelectrons, models: outputs.models.clone() }
}

/// Electrons with their axis: beyond the fastest of all points, fine enough for the fringes of the longest.
pub fn filled(electrons: Photoelectrons, points: &[Scales]) -> Photoelectrons {
    let largest = |f: fn(&Scales) -> f64| points.iter().map(f).fold(0.0, f64::max);
    let fastest = (largest(|p| p.electrons) * HARTREE_EV).max(1.0);
    let max_energy = electrons.max_energy.unwrap_or_else(|| energy(ladder::at_least(fastest).min(HIGHEST)));
    let fringe = 2.0 * std::f64::consts::PI / largest(|p| p.duration).max(1.0) / PER_WIDTH;
    let finest = FINEST.min(max_energy * HARTREE_EV / FEWEST_ENERGIES);
    let wanted = fringe.min(max_energy / FEWEST_ENERGIES) * HARTREE_EV;
    let step = electrons.energy_step.unwrap_or_else(|| energy(ladder::at_most(wanted.max(finest))));
    Photoelectrons { max_energy: Some(max_energy), energy_step: Some(step) }
}

/// Value of a number of eV exactly as its text would be read.
fn energy(ev: f64) -> f64 {
    ev * Quantity::Energy.units()[0].factor
}

/// Value of a number of fs exactly as its text would be read.
fn time(fs: f64) -> f64 {
    fs * Quantity::Time.units()[0].factor
}

fn femtoseconds(value: f64) -> f64 {
    value / Quantity::Time.units()[0].factor
}
