//! Harmonics and direct electrons of the strong-field approximation.

use tdse_core::model::strong_field::{PlaneDipole, PlaneElectrons, StrongField};
use tdse_core::model::tunnelling::Rate;
use tdse_core::quantities::field_shape;
use tdse_core::simulate::Schedule;
use tdse_core::spectrum::{EnergyAxis, momenta_of};

use super::harmonics::{self, Source};
use super::run::Run;
use super::{electrons, ionization, own};
use crate::config::models::Survival;
use crate::derive::plane;
use crate::store::Contents;

const NAME: &str = "strong_field";

/// Puts in what the run asks for.
pub(super) fn put(contents: &mut Contents, run: &Run, survival: Survival) -> Result<(), String> {
    if let Some(full) = &run.spectrum {
        let depleted;
        let packet = match survival {
            Survival::Whole => run.packet()?,
            Survival::Depleted => {
                let highest = run.highest(full.axis);
                let plan = run.strong_field(highest)?;
                depleted = plan.packet(highest, left(run, plan.schedule())?);
                &depleted
            }
        };
        let (schedule, highest) = (&packet.series.schedule, packet.highest);
        let transformed = |axis, window| packet.harmonics(axis, window);
        harmonics::put(contents, run, &Source { name: NAME, schedule, highest, transformed });
    }
    match run.electron_axis() {
        None => Ok(()),
        Some(axis) if run.dimensions() == 2 => on_plane(contents, run, axis),
        Some(axis) => {
            let highest = axis.step * (axis.points - 1) as f64;
            let trailing = run.job.numerics.trailing_time;
            let plan = StrongField::new(&run.line()?.ground, run.field, highest, trailing);
            electrons(contents, NAME, axis, &plan.electrons(momenta_of(axis)));
            Ok(())
        }
    }
}

/// Electrons on the momenta of the full run's map.
fn on_plane(contents: &mut Contents, run: &Run, axis: EnergyAxis) -> Result<(), String> {
    let Some(range) = run.job.map_range() else { return Ok(()) };
    let (round, potential) = (run.round()?, &run.job.problem.potential);
    let fastest = range.largest + field_shape(run.field).peak_potential;
    let dipole =
        PlaneDipole::new(potential, round.m, round.number, fastest).map_err(|error| error.to_string())?;
    let plan = PlaneElectrons::new(&dipole, run.field, round.ionization_energy, range.largest);
    let map = plan.map([range.momenta(), range.momenta()]);
    let total = plane::spectra(contents, &format!("models/{NAME}/"), &map, axis);
    contents.insert(&own(NAME), "electron_yield", total);
    Ok(())
}

/// Probability that the quasi-static rate leaves in the bound state, over time.
fn left(run: &Run, schedule: &Schedule) -> Result<impl Fn(f64) -> f64 + use<>, String> {
    let rate = Rate::Model(ionization::quasi_static(run)?);
    let gone = rate.ionization(run.field, &schedule.times());
    let (start, step) = (schedule.start, schedule.time_step);
    Ok(move |t: f64| {
        let place = ((t - start) / step).clamp(0.0, (gone.len() - 1) as f64);
        let (before, part) = (place as usize, place.fract());
        1.0 - gone[before] - part * (gone[(before + 1).min(gone.len() - 1)] - gone[before])
    })
}
