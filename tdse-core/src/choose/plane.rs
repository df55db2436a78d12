//! What a plane adds to the rules: facts of a round atom by symmetry, and the momentum map with the flight out of what is still
//! in the box when the field has ended.

use super::{AtomFacts, Choice, Energies, Finding, Knob, Reason, Verdict, Wish, ladder, smoothness};
use crate::absorber::slowest_momentum;
use crate::outgoing::{MapRange, map_interval};
use crate::potential::Potential;
use crate::problem::{Absorber, ElectronMethod, Numerics, PlaneLabel, Problem};
use crate::stationary::{Level, StationaryError, plane_level};

/// Work of a chirp-z transform, in transforms of the same length: one forth and one back, and the chirps.
const CHIRP: f64 = 4.0;
/// Work of a step, in transforms of a line of the grid per line: two pairs along both axes.
const STEP: f64 = 8.0;
/// Most momenta to either side of zero up to the fastest electron: beside grids of 400 points each way and more, map and
/// scratch then keep within one and a half wave functions.
const MOST: f64 = 160.0;

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
            analytic_length: smoothness::in_a_plane(potential)?,
        })
    }
}

/// Range and fineness of the momentum map that a spectrum at `energies` is read from: up to its last energy and as fine as its
/// energies lie there, but at most 160 momenta to either side of zero. Only the range depends on the grid, so points of a scan
/// share their momenta.
pub fn map_range(problem: &Problem, numerics: &Numerics, energies: Energies) -> MapRange {
    let axis = numerics.grid.x;
    let inner = (0.5 * axis.extent() - numerics.absorber.width()).max(1.0);
    let fastest = energies.momentum();
    let step = energies.largest / energies.count.saturating_sub(1).max(1) as f64;
    let spacing = ladder::at_least((step / fastest).max(fastest / MOST));
    // Room for a cubic through neighbours. The map's momenta are final, so no more is needed, but the times at which it is taken
    // hang on its range: it keeps the momentum that the tail gives at the absorber.
    let at_absorber = (fastest * fastest + 2.0 * problem.potential.far_charge() / inner).sqrt();
    MapRange { largest: (at_absorber + 3.0 * spacing).min(axis.largest_momentum()), spacing }
}

/// Work of the map beside that of the propagation of the whole plane.
pub(super) fn map_work(problem: &Problem, numerics: &Numerics, energies: Energies) -> f64 {
    let range = map_range(problem, numerics, energies);
    let more = 1.0 + (2.0 * range.last() as f64 + 1.0) / numerics.grid.x.points as f64;
    CHIRP / STEP * more * more / map_interval(range.largest, numerics.time_step) as f64
}

/// Memory of the map with its scratch and tables, bytes; [`Load`](crate::simulate::Load) has it to the byte.
pub(super) fn map_bytes(problem: &Problem, numerics: &Numerics, energies: Energies) -> f64 {
    let momenta = 2.0 * map_range(problem, numerics, energies).last() as f64 + 1.0;
    16.0 * momenta * (momenta + numerics.grid.x.points as f64) + 8.0 * numerics.grid.len() as f64
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
        range.largest, range.spacing
    );
    let kept = choice.reasons.iter_mut().find(|reason| reason.knob == Knob::TrailingTime);
    if let Some(reason) = kept {
        *reason = Reason { knob: Knob::TrailingTime, why };
    }
}
