//! What a plane adds to the rules: facts of a round atom by symmetry, and the momentum map with the flight out of what is still
//! in the box when the field has ended.

use std::f64::consts::PI;

use super::{AtomFacts, Choice, Energies, Finding, Knob, Reason, Verdict, Wish, ladder, smoothness};
use crate::absorber::slowest_momentum;
use crate::outgoing::{MapRange, map_interval};
use crate::potential::Potential;
use crate::problem::{Absorber, ElectronMethod, Numerics, PlaneLabel, Problem};
use crate::stationary::{Level, StationaryError, plane_level};

/// Work of taking in one sample of the map, in units of a step's: at any padding, and per padding (benches/plane.rs).
const SAMPLE: [f64; 2] = [0.3, 0.2];
/// Largest part of the momenta a padded grid holds that a map may cover, so that map and scratch keep within one and a half
/// wave functions: x + x² ≤ 3/2.
const COVERED: f64 = 0.82;
/// Finest map, in momenta per 2π/box length.
const FINEST: usize = 8;

impl AtomFacts {
    /// Facts of a round `potential` whose initial state is made of the states that `labels` name.
    ///
    /// # Errors
    /// [`StationaryError::NoSuchState`] where one is not bound.
    ///
    /// # Panics
    /// If there is no label.
    pub fn on_plane(potential: &Potential, labels: &[PlaneLabel]) -> Result<Self, StationaryError> {
        let levels: Vec<Level> =
            labels.iter().map(|label| plane_level(potential, *label)).collect::<Result<_, _>>()?;
        let by_energy = |a: &&Level, b: &&Level| a.energy.total_cmp(&b.energy);
        let lowest = levels.iter().min_by(by_energy).expect("at least one state");
        let highest = levels.iter().max_by(by_energy).expect("at least one state");
        Ok(Self {
            dimensions: 2,
            initial_energy: lowest.energy,
            highest_energy: highest.energy,
            reach: highest.reach,
            analytic_length: smoothness::analytic_length(potential),
        })
    }
}

/// Range and fineness of the momentum map that a spectrum at `energies` is read from, on a grid: up to its last energy and as
/// fine as its energies lie there, as far as memory for one and a half wave functions allows.
pub fn map_range(problem: &Problem, numerics: &Numerics, energies: Energies) -> MapRange {
    let axis = numerics.grid.x;
    let inner = (0.5 * axis.extent() - numerics.absorber.width()).max(1.0);
    let fastest = energies.momentum();
    // Electrons are collected before they have climbed out of the tail, and read off by a cubic through neighbours.
    let at_absorber = (fastest * fastest + 2.0 * problem.potential.far_charge() / inner).sqrt();
    let largest = (at_absorber + 3.0 * axis.momentum(1)).min(axis.largest_momentum());
    let apart = energies.largest / energies.count.saturating_sub(1).max(1) as f64 / fastest;
    let wanted = (axis.momentum(1) / apart).ceil() as usize;
    let affordable = (COVERED * axis.largest_momentum() / largest) as usize;
    MapRange { largest, padding: wanted.min(affordable).clamp(1, FINEST) }
}

/// Work of the map beside that of the propagation.
pub(super) fn map_work(problem: &Problem, numerics: &Numerics, energies: Energies) -> f64 {
    let range = map_range(problem, numerics, energies);
    (SAMPLE[0] + SAMPLE[1] * range.padding as f64) / map_interval(range.largest, numerics.time_step) as f64
}

/// Memory of the map with its scratch and tables, bytes; [`Load`](crate::simulate::Load) has it to the byte.
pub(super) fn map_bytes(problem: &Problem, numerics: &Numerics, energies: Energies) -> f64 {
    let range = map_range(problem, numerics, energies);
    let axis = numerics.grid.x;
    let momenta = 2.0 * range.largest / axis.momentum(1) * range.padding as f64 + 1.0;
    16.0 * momenta * (momenta + axis.points as f64) + 8.0 * numerics.grid.len() as f64
}

/// Lengthens a run with a map until the slowest electrons that its absorber takes cleanly are out, unless the user pinned that.
pub(super) fn fly_out(wish: &Wish, method: ElectronMethod, energies: Energies, choice: &mut Choice) {
    let numerics = &mut choice.numerics;
    let (half, width) = (0.5 * numerics.grid.x.extent(), numerics.absorber.width());
    if method == ElectronMethod::ScatteringStates || numerics.absorber == Absorber::None {
        let (knob, reason) = match method {
            ElectronMethod::ScatteringStates => {
                (Knob::ElectronMethod, "projects on scattering states, which are there in one dimension only")
            }
            ElectronMethod::OutgoingAmplitude => (Knob::Absorber, "takes nothing that could be collected"),
        };
        choice.findings.push(Finding {
            knob: Some(knob),
            verdict: Verdict::Impossible,
            reason: reason.into(),
            allowed: "outgoing_amplitude with an absorber".into(),
            passes: 0.0,
        });
        return;
    }
    let slowest = slowest_momentum(width);
    let needed = half / slowest;
    numerics.trailing_time = wish.pins.trailing_time.unwrap_or_else(|| ladder::at_least(needed));
    if numerics.trailing_time < 0.5 * needed {
        choice.findings.push(Finding {
            knob: Some(Knob::TrailingTime),
            verdict: Verdict::Doubtful,
            reason: format!(
                "leaves electrons slower than {:.3} / bohr in the box, which the map does not show",
                half / numerics.trailing_time
            ),
            allowed: format!("at least {needed:.0} au"),
            passes: ladder::at_least(needed),
        });
    }
    if wish.pins.trailing_time.is_some() {
        return;
    }
    let range = map_range(wish.problem, numerics, energies);
    let why = format!(
        "electrons of {slowest:.3} / bohr, the slowest that the absorber takes cleanly, fly {half:.0} bohr; the map holds momenta \
         up to {:.2} / bohr, {:.4} / bohr apart",
        range.largest,
        2.0 * PI / (2.0 * half * range.padding as f64)
    );
    let kept = choice.reasons.iter_mut().find(|reason| reason.knob == Knob::TrailingTime);
    if let Some(reason) = kept {
        *reason = Reason { knob: Knob::TrailingTime, why };
    }
}
