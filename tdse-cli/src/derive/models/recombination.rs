//! Harmonics of the strong-field packet with the atom's own recombination dipole.

use tdse_core::model::recombination::{recombined, recombined_on_plane};
use tdse_core::spectrum::Harmonics;
use tdse_core::stationary::{RoundTransitions, ScatteringStates};

use super::harmonics::{self, Source};
use super::run::Run;
use crate::store::Contents;

/// On a line.
pub(super) fn put(contents: &mut Contents, run: &Run, states: &ScatteringStates) -> Result<(), String> {
    let line = run.line()?;
    with(contents, run, |h| recombined(h, states, &line.ground))
}

/// On a plane, to a level without angular momentum.
pub(super) fn on_plane(contents: &mut Contents, run: &Run) -> Result<(), String> {
    let (round, Some(full)) = (run.round()?, &run.spectrum) else { return Ok(()) };
    let orders = (full.orders as f64 + 1.0) * full.photon;
    let highest = orders.max(full.axis.step * full.axis.points as f64);
    let (potential, fastest) = (&run.job.problem.potential, (2.0 * highest).sqrt());
    let transitions = RoundTransitions::new(potential, round.m, round.number, fastest)
        .map_err(|error| error.to_string())?;
    with(contents, run, |h| recombined_on_plane(h, &transitions))
}

fn with(
    contents: &mut Contents,
    run: &Run,
    recombined: impl Fn(&Harmonics) -> Harmonics,
) -> Result<(), String> {
    let packet = run.packet()?;
    let transformed = |axis, window| packet.harmonics(axis, window).iter().map(&recombined).collect();
    let (schedule, highest) = (&packet.series.schedule, packet.highest);
    harmonics::put(contents, run, &Source { name: "recombination", schedule, highest, transformed });
    Ok(())
}
