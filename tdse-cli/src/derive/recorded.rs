//! What a run recorded.

use ndarray::Array2;
use num_complex::Complex;
use tdse_core::field::Pulse;
use tdse_core::grid::{Grid, Transform};
use tdse_core::problem::InitialState;
use tdse_core::quantities::classical_cutoff;
use tdse_core::simulate::{Atom, Plan, State};
use tdse_core::spectrum::twice_integrated;
use tdse_core::stationary::{BoundSeries, RoundStates, ScatteringStates};

use super::electrons::electrons;
use super::{
    components, doubts, electronvolts, femtoseconds, plane, volt_seconds_per_metre, volts_per_metre,
};
use crate::scan::levels::{LEVELS, state_name};
use crate::scan::prepare::Point;
use crate::store::{Contents, Provenance};

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
    /// Scattering states, where electrons are asked for; in one dimension.
    pub continuum: Option<&'a ScatteringStates>,
    /// Every bound state; in two dimensions.
    pub round: Option<&'a RoundStates>,
}

/// Field, dynamics, populations, electrons and headline numbers of a finished run.
///
/// # Panics
/// If the run is not finished.
pub fn record(finished: &Finished, provenance: Provenance) -> Contents {
    let Finished { point, atom, plan, state, continuum, .. } = *finished;
    assert_eq!(state.series.norm.len(), plan.schedule().steps + 1, "the run is finished");
    let mut contents = Contents::new(provenance);
    field(&mut contents, point, plan);
    dynamics(&mut contents, point, atom, plan, state);
    populations(&mut contents, point, atom, plan, state);
    let bound = levels(&mut contents, finished);
    summary(&mut contents, point, atom, state, bound);
    doubts::put(&mut contents, &doubts::of_run(point, plan, state, bound));
    match (continuum, point.job.electrons()) {
        (Some(continuum), Some(asked)) => electrons(&mut contents, finished, continuum, asked, bound),
        (None, Some((_, axis))) => plane::electrons(&mut contents, finished, axis, bound),
        (_, None) => {}
    }
    contents
}

fn times(plan: &Plan) -> Vec<f64> {
    plan.schedule().times().into_iter().map(femtoseconds).collect()
}

fn field(contents: &mut Contents, point: &Point, plan: &Plan) {
    let dimensions = begin_vectors(contents, "field", point);
    contents.insert("field", "time", times(plan));
    let electric = plan.electric_field().into_iter().map(|e| e.map(volts_per_metre)).collect::<Vec<_>>();
    contents.insert("field", "electric_field", components(electric.into_iter(), dimensions));
    let potential = plan.vector_potential().iter().map(|a| a.map(volt_seconds_per_metre));
    contents.insert("field", "vector_potential", components(potential, dimensions));
}

/// Puts the axis of components in where there are two; the number of dimensions.
fn begin_vectors(contents: &mut Contents, group: &str, point: &Point) -> usize {
    let dimensions = point.job.numerics.grid.dimensions();
    if dimensions == 2 {
        contents.insert(group, "component", vec![0i64, 1]);
    }
    dimensions
}

/// d²d/dt² = ⟨∇V⟩ + E(t) N(0), and the dipole from it.
fn dynamics(contents: &mut Contents, point: &Point, atom: &Atom, plan: &Plan, state: &State) {
    let (series, grid) = (&state.series, point.job.numerics.grid);
    let norm = series.norm[0];
    let both = series.gradient.iter().zip(plan.electric_field());
    let acceleration: Vec<[f64; 2]> = both.map(|(g, e)| [0, 1].map(|d| g[d] + e[d] * norm)).collect();
    let start = atom.wave_function(&point.job.problem.initial);
    let begun = start_of_dipole(&start, &grid);
    let along = |d: usize| {
        let component: Vec<f64> = acceleration.iter().map(|a| a[d]).collect();
        twice_integrated(&component, plan.schedule().time_step, begun[d][0], begun[d][1])
    };
    let dimensions = begin_vectors(contents, "dynamics", point);
    let second = if dimensions == 2 { along(1) } else { vec![0.0; acceleration.len()] };
    let dipole: Vec<[f64; 2]> = along(0).into_iter().zip(second).map(|(x, y)| [x, y]).collect();
    contents.insert("dynamics", "time", times(plan));
    contents.insert("dynamics", "dipole", components(dipole.into_iter(), dimensions));
    contents.insert("dynamics", "dipole_acceleration", components(acceleration.into_iter(), dimensions));
    contents.insert("dynamics", "norm", series.norm.clone());
}

/// d = -⟨r⟩ and dd/dt = -⟨p⟩ of a wave function along x and y, A = 0.
fn start_of_dipole(psi: &[Complex<f64>], grid: &Grid) -> [[f64; 2]; 2] {
    let nx = grid.x.points;
    let (mut along_x, mut along_y) = ([0.0; 2], [0.0; 2]);
    let transform = Transform::new(nx);
    let (mut scratch, mut waves) = (transform.make_scratch(), vec![Complex::default(); nx]);
    let momenta: Vec<f64> = grid.x.momenta().collect();
    for row in psi.chunks_exact(nx) {
        waves.copy_from_slice(row);
        transform.forward(&mut waves, &mut scratch);
        for (i, (p, w)) in row.iter().zip(&waves).enumerate() {
            along_x[0] -= p.norm_sqr() * grid.x.position(i) * grid.cell();
            along_x[1] -= w.norm_sqr() * momenta[i] * grid.cell() / nx as f64;
        }
    }
    if let Some(y) = grid.y {
        let transform = Transform::new(y.points);
        let mut scratch = transform.make_scratch();
        let mut column = vec![Complex::default(); y.points];
        let momenta: Vec<f64> = y.momenta().collect();
        for x in 0..nx {
            for (j, c) in column.iter_mut().enumerate() {
                *c = psi[j * nx + x];
                along_y[0] -= c.norm_sqr() * y.position(j) * grid.cell();
            }
            transform.forward(&mut column, &mut scratch);
            let momentum: f64 = column.iter().zip(&momenta).map(|(c, k)| c.norm_sqr() * k).sum();
            along_y[1] -= momentum * grid.cell() / y.points as f64;
        }
    }
    [along_x, along_y]
}

fn populations(contents: &mut Contents, point: &Point, atom: &Atom, plan: &Plan, state: &State) {
    let count = point.job.record.populations;
    let (series, schedule) = (&state.series, plan.schedule());
    let samples = series.population_steps.len();
    let numbers: Vec<i64> = (0..count as i64).collect();
    let times: Vec<f64> = series.population_steps.iter().map(|&n| femtoseconds(schedule.time(n))).collect();
    let energies: Vec<f64> = energies(atom)[..count].iter().map(|&e| electronvolts(e)).collect();
    contents.insert("populations", "time", times);
    contents.insert("populations", "initial_population", series.initial_population.clone());
    contents.remark("populations", "gauge", "length");
    if count == 0 {
        return;
    }
    if !atom.plane.is_empty() {
        contents.remark("populations", "states", &state_names(atom, count));
    }
    contents.insert("populations", "state", numbers);
    contents.insert("populations", "energy", energies);
    let rows = Array2::from_shape_fn((count, samples), |(s, t)| series.populations[t * count + s]);
    contents.insert("populations", "populations", rows.into_dyn());
}

/// Bound states after the field by level; returns the population of all of them, those included that the box lacks.
fn levels(contents: &mut Contents, finished: &Finished) -> f64 {
    let Finished { point, atom, plan, state, round, .. } = *finished;
    let confining = point.job.problem.potential.is_confining();
    let cell = point.job.numerics.grid.cell();
    let populations = if atom.plane.is_empty() {
        plan.populations(state, &atom.bound)
    } else {
        let mut psi = vec![Complex::default(); point.job.numerics.grid.len()];
        plan.wave_function(state, &mut psi);
        contents.remark("levels", "states", &state_names(atom, LEVELS));
        atom.plane.iter().map(|bound| bound.overlap(&psi, cell).norm_sqr()).collect()
    };
    let all = energies(atom).into_iter().zip(populations);
    let bound: Vec<_> = all.filter(|(energy, _)| confining || *energy < 0.0).collect();
    let every: (Vec<_>, Vec<_>) = bound.iter().copied().unzip();
    let level = |n: usize| bound.get(n).map_or((f64::NAN, f64::NAN), |(e, p)| (electronvolts(*e), *p));
    let (energies, populations): (Vec<_>, Vec<_>) = (0..LEVELS).map(level).unzip();
    contents.insert("levels", "state", (0..LEVELS as i64).collect::<Vec<_>>());
    contents.insert("levels", "energy", energies);
    contents.insert("levels", "population", populations);
    match round {
        _ if confining => state.series.norm[state.step],
        None => BoundSeries::new(&point.job.problem.potential, &point.job.numerics.grid)
            .bound_on_line(&every.0, &every.1),
        Some(round) => {
            let all = plan.round_populations(state, round, &mut plan.make_workspace());
            all.iter().map(|(_, p)| *p).sum()
        }
    }
}

/// Energies of the atom's bound states on its grid, hartree.
fn energies(atom: &Atom) -> Vec<f64> {
    atom.bound.energies.iter().copied().chain(atom.plane.iter().map(|state| state.energy)).collect()
}

/// What the first states of two dimensions are.
fn state_names(atom: &Atom, count: usize) -> String {
    let named = atom.plane.iter().take(count).enumerate();
    named.map(|(n, state)| format!("{n}: {}", state_name(state.label))).collect::<Vec<_>>().join("; ")
}

fn summary(contents: &mut Contents, point: &Point, atom: &Atom, state: &State, total: f64) {
    contents.insert("summary", "ionization_probability", (1.0 - total).max(0.0));
    contents.insert(
        "summary",
        "initial_energy",
        electronvolts(mean_energy(&point.job.problem.initial, &energies(atom))),
    );
    let is_linear = point.job.problem.field.pulses.iter().all(|pulse| pulse.ellipticity == 0.0);
    let law = if is_linear { classical_law(point).map_or(f64::NAN, electronvolts) } else { f64::NAN };
    contents.insert("summary", "classical_cutoff", law);
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

/// Ip + 3.17 Up, hartree; none where nothing is bound or no pulse is there.
pub(super) fn classical_law(point: &Point) -> Option<f64> {
    let pulses = &point.job.problem.field.pulses;
    let energy = point.facts.ionization_energy();
    (energy > 0.0 && !pulses.is_empty()).then(|| classical_cutoff(energy, ponderomotive(pulses)))
}
