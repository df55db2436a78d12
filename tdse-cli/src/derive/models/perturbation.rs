//! First order in the field, and two resonant levels.

use ndarray::Array2;
use tdse_core::field::{Field, Pulse};
use tdse_core::model::perturbation::{PlaneOnePhoton, TwoLevels, one_photon};
use tdse_core::problem::{PlaneLabel, Symmetry};
use tdse_core::spectrum::{EnergyAxis, momenta_of};
use tdse_core::stationary::{RoundTransitions, ScatteringStates};
use tdse_core::units::TIME_FS;

use super::run::{Line, Run};
use super::{electrons, electronvolts, own};
use crate::derive::plane::emission_angles;
use crate::store::Contents;

const NAME: &str = "perturbation";
/// How far photons reach: electron energies up to so many times the fastest photon, hartree.
const BEYOND: f64 = 2.0;
/// Their number.
const ENERGIES: usize = 800;

/// The axis that holds all electrons of one photon: the run's where that reaches as far, for its spectrum may end before.
fn whole(run: &Run) -> EnergyAxis {
    let fastest = run.field.pulses.iter().map(|pulse| pulse.frequency).fold(0.5, f64::max);
    let largest = BEYOND * fastest;
    let reaches = |axis: &EnergyAxis| axis.step * (axis.points - 1) as f64 >= largest;
    let own_axis = EnergyAxis { step: largest / ENERGIES as f64, points: ENERGIES + 1 };
    run.electron_axis().filter(reaches).unwrap_or(own_axis)
}

/// Ionization by one photon in two dimensions.
pub(super) fn on_plane(contents: &mut Contents, run: &Run) -> Result<(), String> {
    let (round, whole) = (run.round()?, whole(run));
    let fastest = (2.0 * whole.step * whole.points as f64).sqrt();
    let transitions = RoundTransitions::new(&run.job.problem.potential, round.m, round.number, fastest)
        .map_err(|error| error.to_string())?;
    let found = PlaneOnePhoton::new(&transitions, run.field, whole);
    contents.insert(&own(NAME), "ionization_probability", found.probability());
    if let Some(axis) = run.electron_axis() {
        let found = if axis == whole { found } else { PlaneOnePhoton::new(&transitions, run.field, axis) };
        let group = format!("models/{NAME}/photoelectrons");
        let energies: Vec<f64> = axis.values().into_iter().map(electronvolts).collect();
        contents.insert(&group, "energy", energies);
        let per_ev: Vec<f64> = found.spectrum().iter().map(|y| y / electronvolts(1.0)).collect();
        contents.insert(&group, "yield", per_ev);
        let angles = emission_angles();
        let distribution = found.angular_distribution(&angles);
        contents.insert(&group, "emission_angle", angles);
        contents.insert(&group, "angular_distribution", distribution);
        contents.insert(&own(NAME), "electron_yield", found.probability());
    }
    levels_on_plane(contents, run)
}

/// The initial level without angular momentum and those of |m| = 1 that linear light along one direction is nearest to.
fn levels_on_plane(contents: &mut Contents, run: &Run) -> Result<(), String> {
    let (round, Some(field)) = (run.round()?, along_x(run.field)) else { return Ok(()) };
    let photon = field.pulses[0].frequency;
    let place = |m: i32, number: usize| {
        let label = PlaneLabel { symmetry: Symmetry::Angular(m), number };
        run.job.labels[..run.job.record.populations].iter().position(|other| *other == label)
    };
    let (0, Some(from)) = (round.m, place(0, round.number)) else { return Ok(()) };
    let reached = |number: usize| {
        let both = [place(-1, number)?, place(1, number)?];
        let levels = TwoLevels::on_plane(&run.job.problem.potential, [round.number, number]).ok()?;
        Some((both, levels))
    };
    let off = |levels: &TwoLevels| (levels.transition - photon).abs();
    let nearest = (0..).map_while(reached).min_by(|a, b| off(&a.1).total_cmp(&off(&b.1)));
    let Some(([back, forth], levels)) = nearest else { return Ok(()) };
    let half = |p: &f64| 0.5 * p;
    let upper = populations(contents, &levels, &field);
    let below = -electronvolts(round.ionization_energy);
    let above = below + electronvolts(levels.transition);
    let split: Vec<f64> = upper.iter().map(half).collect();
    let lower = upper.iter().map(|p| 1.0 - p).collect();
    put_levels(contents, &[(from, below, lower), (back, above, split.clone()), (forth, above, split)]);
    Ok(())
}

/// Linear light of one direction, turned to x.
fn along_x(field: &Field) -> Option<Field> {
    let first = field.pulses.first()?;
    let alike = field.pulses.iter().all(|pulse| pulse.ellipticity == 0.0 && pulse.angle == first.angle);
    let turned = field.pulses.iter().map(|pulse| Pulse { angle: 0.0, ..*pulse }).collect();
    (alike && field.sampled.is_none()).then_some(Field { pulses: turned, sampled: None })
}

/// Population of the upper of two levels at the times of the full run's populations.
fn populations(contents: &Contents, levels: &TwoLevels, field: &Field) -> Vec<f64> {
    let times = contents.real("populations", "time").expect("a recorded run has populations");
    levels.populations(field, &times.iter().map(|t| t / TIME_FS).collect::<Vec<f64>>())
}

/// Puts levels in, by number, energy in eV and population in time; the first is the initial one.
fn put_levels(contents: &mut Contents, levels: &[(usize, f64, Vec<f64>)]) {
    let times = contents.real("populations", "time").expect("a recorded run has populations").clone();
    let group = format!("models/{NAME}/populations");
    contents.insert(&group, "state", levels.iter().map(|level| level.0 as i64).collect::<Vec<_>>());
    contents.insert(&group, "time", times);
    contents.insert(&group, "energy", levels.iter().map(|level| level.1).collect::<Vec<_>>());
    let rows = Array2::from_shape_fn((levels.len(), levels[0].2.len()), |(s, t)| levels[s].2[t]);
    contents.insert(&group, "initial_population", levels[0].2.clone());
    contents.insert(&group, "populations", rows.into_dyn());
}

/// Ionization by one photon on a line; two levels where at least two populations are written.
pub(super) fn put(contents: &mut Contents, run: &Run, line: &Line, states: &ScatteringStates) {
    let whole = whole(run);
    let on = |axis: EnergyAxis| one_photon(states, &line.ground, run.field, momenta_of(axis));
    let amplitude = on(whole);
    let probability = amplitude.probability().iter().sum::<f64>();
    contents.insert(&own(NAME), "ionization_probability", probability);
    if let Some(axis) = run.electron_axis() {
        let amplitude = if axis == whole { amplitude } else { on(axis) };
        electrons(contents, NAME, axis, &amplitude);
    }
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
    let upper = populations(contents, &levels, run.field);
    let energy = |n: usize| electronvolts(bound.energies[n]);
    let lower = upper.iter().map(|p| 1.0 - p).collect();
    put_levels(contents, &[(from, energy(from), lower), (to, energy(to), upper)]);
}
