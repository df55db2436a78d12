//! What a run recorded.

use ndarray::Array2;
use tdse_core::field::Pulse;
use tdse_core::problem::InitialState;
use tdse_core::quantities::classical_cutoff;
use tdse_core::simulate::{Atom, Plan, State};
use tdse_core::spectrum::twice_integrated;
use tdse_core::stationary::ScatteringStates;

use super::electrons::electrons;
use super::{doubts, electronvolts, femtoseconds, volt_seconds_per_metre, volts_per_metre};
use crate::scan::prepare::Point;
use crate::store::{Contents, Provenance};

/// Bound states listed after the field; where an atom has fewer, NaN stands for them.
const LEVELS: usize = 10;

/// A run at its end, with what it was made of.
#[derive(Clone, Copy, Debug)]
pub struct Finished<'a> {
    /// What was asked.
    pub point: &'a Point,
    /// The atom on its grid.
    pub atom: &'a Atom,
    /// The plan.
    pub plan: &'a Plan,
    /// Its last state.
    pub state: &'a State,
    /// Scattering states, where electrons are asked for.
    pub continuum: Option<&'a ScatteringStates>,
}

/// Field, dynamics, populations, electrons and headline numbers of a finished run.
///
/// # Panics
/// If the run is not finished.
pub fn record(finished: &Finished, provenance: Provenance) -> Contents {
    let Finished { point, atom, plan, state, continuum } = *finished;
    assert_eq!(state.series.norm.len(), plan.schedule().steps + 1, "the run is finished");
    let mut contents = Contents::new(provenance);
    field(&mut contents, plan);
    dynamics(&mut contents, point, atom, plan, state);
    populations(&mut contents, point, atom, plan, state);
    let bound = levels(&mut contents, point, atom, plan, state);
    summary(&mut contents, point, atom, state, bound);
    doubts::put(&mut contents, &doubts::of_run(point, plan, state));
    if let (Some(continuum), Some(asked)) = (continuum, point.job.electrons()) {
        electrons(&mut contents, finished, continuum, asked, bound);
    }
    contents
}

fn times(plan: &Plan) -> Vec<f64> {
    plan.schedule().times().into_iter().map(femtoseconds).collect()
}

fn field(contents: &mut Contents, plan: &Plan) {
    contents.insert("field", "time", times(plan));
    let electric: Vec<f64> = plan.electric_field().iter().map(|e| volts_per_metre(e[0])).collect();
    contents.insert("field", "electric_field", electric);
    let potential: Vec<f64> = plan.vector_potential().iter().map(|a| volt_seconds_per_metre(a[0])).collect();
    contents.insert("field", "vector_potential", potential);
}

/// d²d/dt² = ⟨∇V⟩ + E(t) N(0), and the dipole from it.
fn dynamics(contents: &mut Contents, point: &Point, atom: &Atom, plan: &Plan, state: &State) {
    let (series, grid) = (&state.series, point.job.numerics.grid);
    let norm = series.norm[0];
    let acceleration: Vec<f64> =
        series.gradient.iter().zip(plan.electric_field()).map(|(g, e)| g[0] + e[0] * norm).collect();
    let start = atom.wave_function(&point.job.problem.initial);
    let (dipole, velocity) = start_of_dipole(&start, grid.x, grid.cell());
    let step = plan.schedule().time_step;
    contents.insert("dynamics", "time", times(plan));
    contents.insert("dynamics", "dipole", twice_integrated(&acceleration, step, dipole, velocity));
    contents.insert("dynamics", "dipole_acceleration", acceleration);
    contents.insert("dynamics", "norm", series.norm.clone());
}

/// d = -⟨x⟩ and dd/dt = -⟨p⟩ of a wave function, A = 0.
fn start_of_dipole(psi: &[num_complex::Complex<f64>], axis: tdse_core::grid::Axis, cell: f64) -> (f64, f64) {
    let position: f64 = psi.iter().zip(axis.positions()).map(|(p, x)| p.norm_sqr() * x).sum();
    let transform = tdse_core::grid::Transform::new(psi.len());
    let mut waves = psi.to_vec();
    transform.forward(&mut waves, &mut transform.make_scratch());
    let momentum: f64 = waves.iter().zip(axis.momenta()).map(|(p, k)| p.norm_sqr() * k).sum();
    (-position * cell, -momentum * cell / psi.len() as f64)
}

fn populations(contents: &mut Contents, point: &Point, atom: &Atom, plan: &Plan, state: &State) {
    let count = point.job.record.populations;
    let (series, schedule) = (&state.series, plan.schedule());
    let samples = series.population_steps.len();
    let numbers: Vec<i64> = (0..count as i64).collect();
    let times: Vec<f64> = series.population_steps.iter().map(|&n| femtoseconds(schedule.time(n))).collect();
    let energies: Vec<f64> = atom.bound.energies[..count].iter().map(|&e| electronvolts(e)).collect();
    contents.insert("populations", "time", times);
    contents.insert("populations", "initial_population", series.initial_population.clone());
    contents.remark("populations", "gauge", "length");
    if count == 0 {
        return;
    }
    contents.insert("populations", "state", numbers);
    contents.insert("populations", "energy", energies);
    let rows = Array2::from_shape_fn((count, samples), |(s, t)| series.populations[t * count + s]);
    contents.insert("populations", "populations", rows.into_dyn());
}

/// Bound states after the field by level; returns the population of all of them.
fn levels(contents: &mut Contents, point: &Point, atom: &Atom, plan: &Plan, state: &State) -> f64 {
    let populations = plan.populations(state, &atom.bound);
    let confining = point.job.problem.potential.is_confining();
    let all = atom.bound.energies.iter().zip(&populations);
    let bound: Vec<_> = all.filter(|(energy, _)| confining || **energy < 0.0).collect();
    let level = |n: usize| bound.get(n).map_or((f64::NAN, f64::NAN), |(e, p)| (electronvolts(**e), **p));
    let (energies, populations): (Vec<_>, Vec<_>) = (0..LEVELS).map(level).unzip();
    contents.insert("levels", "state", (0..LEVELS as i64).collect::<Vec<_>>());
    contents.insert("levels", "energy", energies);
    contents.insert("levels", "population", populations);
    if confining { state.series.norm[state.step] } else { bound.iter().map(|(_, p)| *p).sum() }
}

fn summary(contents: &mut Contents, point: &Point, atom: &Atom, state: &State, total: f64) {
    contents.insert("summary", "ionization_probability", (1.0 - total).max(0.0));
    contents.insert(
        "summary",
        "initial_energy",
        electronvolts(mean_energy(&point.job.problem.initial, &atom.bound.energies)),
    );
    contents.insert("summary", "classical_cutoff", classical(point));
    let pulses = &point.job.problem.field.pulses;
    contents.insert("summary", "ponderomotive_energy", electronvolts(ponderomotive(pulses)));
    let photon = pulses.first().map_or(f64::NAN, |pulse| electronvolts(pulse.frequency));
    contents.insert("summary", "first_photon_energy", photon);
    contents.insert("summary", "final_norm", state.series.norm[state.step]);
    contents.insert("summary", "bound_population", total);
    let initial = state.series.initial_population.last().copied().unwrap_or(f64::NAN);
    contents.insert("summary", "initial_population", initial);
}

/// Energy of the initial state; of a superposition the mean.
fn mean_energy(initial: &InitialState, energies: &[f64]) -> f64 {
    match initial {
        InitialState::Single(number) => energies[*number],
        InitialState::Superposition(terms) => {
            let total: f64 = terms.iter().map(|term| term.weight).sum();
            terms.iter().map(|term| term.weight * energies[term.number]).sum::<f64>() / total
        }
    }
}

/// Up with the vector potentials of all pulses added up, hartree.
fn ponderomotive(pulses: &[Pulse]) -> f64 {
    let potential: f64 = pulses.iter().map(|pulse| pulse.peak_field / pulse.frequency).sum();
    0.25 * potential * potential
}

/// Ip + 3.17 Up, eV; NaN where nothing is bound or no pulse is there.
fn classical(point: &Point) -> f64 {
    let pulses = &point.job.problem.field.pulses;
    let energy = point.facts.ionization_energy();
    if energy <= 0.0 || pulses.is_empty() {
        return f64::NAN;
    }
    electronvolts(classical_cutoff(energy, ponderomotive(pulses)))
}
