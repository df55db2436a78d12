//! Propagation: a plan made once, a state that can be stopped and continued, a series of what was recorded.

mod atom;
mod health;
mod memory;
mod probe;
mod schedule;

pub use atom::Atom;
pub use health::{Failure, Health, health};
pub use memory::{Held, Load, Memory};
pub use schedule::Schedule;

use std::sync::Arc;

use num_complex::Complex;

use crate::field::Field;
use crate::grid::Grid;
use crate::outgoing::{
    Collector, CollectorScratch, Edges, MapCollector, MapRange, MapScratch, Motion, Outgoing,
};
use crate::potential::PotentialOnGrid;
use crate::problem::{Mirror, Numerics, Parity, Problem, Record};
use crate::stationary::{BoundStates, RoundStates, ScatteringStates};
use crate::step::{Drive, Moments, Step, StepWorkspace};

use probe::Probe;

/// Most population samples kept of a run.
const POPULATION_SAMPLES: usize = 512;

/// Everything about a run that is known before it starts.
#[derive(Clone, Debug)]
pub struct Plan {
    atom: Arc<Atom>,
    /// ψ(0) of the part of the grid that is kept.
    initial: Vec<Complex<f64>>,
    grid: Grid,
    kernel: Step,
    schedule: Schedule,
    drives: Vec<Drive>,
    /// A at every sample; used to turn velocity gauge into length gauge.
    vector_potential: Vec<[f64; 2]>,
    populations: usize,
    stride: usize,
    collector: Option<Collector>,
    probe: Probe,
    map: Option<MapCollector>,
}

/// The field is too strong for the time step.
#[derive(Clone, Copy, Debug, PartialEq, thiserror::Error)]
#[error(
    "time step {time_step} a.u. is too long for a field of {field} a.u. on this atom: the gradient correction of the \
     fourth-order splitting allows at most {largest} a.u."
)]
pub struct StepTooLong {
    /// Time step, a.u.
    pub time_step: f64,
    /// Largest field of the run, a.u.
    pub field: f64,
    /// Largest field allowed, a.u.
    pub largest: f64,
}

impl Plan {
    /// Plan for a problem, on an atom made for its potential and grid.
    ///
    /// # Panics
    /// If the atom holds fewer states than the initial state and the record need.
    pub fn new(
        problem: &Problem,
        atom: Arc<Atom>,
        numerics: &Numerics,
        record: Record,
    ) -> Result<Self, StepTooLong> {
        let initial = atom.wave_function(&problem.initial);
        Self::from_wave_function(initial, atom, &problem.field, numerics, record)
    }

    /// Plan that starts from any wave function on the grid.
    ///
    /// # Panics
    /// If the lengths differ, or the atom holds fewer states than are recorded.
    pub fn from_wave_function(
        initial: Vec<Complex<f64>>,
        atom: Arc<Atom>,
        field: &Field,
        numerics: &Numerics,
        record: Record,
    ) -> Result<Self, StepTooLong> {
        assert_eq!(initial.len(), numerics.grid.len(), "wave function and grid have the same length");
        let states = atom.states();
        assert!(record.populations <= states, "{} populations of {states} states", record.populations);
        let schedule = Schedule::new(field, numerics.time_step, numerics.trailing_time);
        let drives: Vec<Drive> = (0..=schedule.steps).map(|n| drive(field, &schedule, n)).collect();
        let mirror = mirror_of(&initial, &atom.potential, &numerics.grid, &drives);
        let kernel = Step::new(&atom.potential, numerics, mirror);
        let strongest = drives
            .iter()
            .flat_map(|d| [d.field, d.middle_field])
            .map(|e| e[0].hypot(e[1]))
            .fold(0.0, f64::max);
        let largest = kernel.largest_field();
        if strongest > largest {
            return Err(StepTooLong { time_step: numerics.time_step, field: strongest, largest });
        }
        let vector_potential = schedule.times().into_iter().map(|t| field.vector_potential(t)).collect();
        let stride = schedule.steps.div_ceil(POPULATION_SAMPLES).max(1);
        let probe = Probe::new(&atom.potential, numerics, field, &schedule, &drives, &kernel);
        Ok(Self {
            atom,
            initial: kernel.folded(initial),
            grid: numerics.grid,
            kernel,
            schedule,
            drives,
            vector_potential,
            populations: record.populations,
            stride,
            collector: None,
            probe,
            map: None,
        })
    }

    /// The same plan, which collects what the absorber of `numerics` takes at `momenta`, 1/bohr, in both directions.
    ///
    /// # Panics
    /// If `numerics` has no absorber, or `states` were not made for its grid.
    #[must_use]
    pub fn collecting(mut self, numerics: &Numerics, states: &ScatteringStates, momenta: Vec<f64>) -> Self {
        let width = numerics.absorber.width();
        assert!(width > 0.0, "only an absorber takes anything");
        let edges = Edges { axis: self.grid.x, width, time_step: self.schedule.time_step };
        let motion = Motion::samples(&self.drives, &self.vector_potential, self.schedule.time_step);
        self.collector = Some(Collector::new(edges, states, momenta, motion));
        self
    }

    /// The same plan in two dimensions, which maps what the absorber of `numerics` takes.
    ///
    /// # Panics
    /// As [`MapCollector::new`].
    #[must_use]
    pub fn mapping(mut self, numerics: &Numerics, range: MapRange) -> Self {
        self.map = Some(MapCollector::new(numerics, range, &self.drives, &self.vector_potential));
        self
    }

    /// What maps the absorbed amplitude, if anything does.
    pub fn map_collector(&self) -> Option<&MapCollector> {
        self.map.as_ref()
    }

    fn start_outgoing(&self) -> Option<Outgoing> {
        match (&self.collector, &self.map) {
            (Some(collector), _) => Some(collector.start()),
            (None, Some(map)) => Some(Outgoing { map: map.start(), ..Outgoing::default() }),
            (None, None) => None,
        }
    }

    /// What collects the absorbed amplitude, if anything does.
    pub fn collector(&self) -> Option<&Collector> {
        self.collector.as_ref()
    }

    /// Steps that are compared with two halves of themselves: the one of the strongest field; in runs of a thousand steps (in
    /// two dimensions two thousand) also the one of the strongest field in the second half, and one at three quarters.
    pub fn doubled_steps(&self) -> Vec<usize> {
        self.probe.steps().collect()
    }

    /// Times of the run.
    pub fn schedule(&self) -> &Schedule {
        &self.schedule
    }

    /// Electric field at every sample, a.u.
    pub fn electric_field(&self) -> Vec<[f64; 2]> {
        self.drives.iter().map(|d| d.field).collect()
    }

    /// Vector potential at every sample, a.u.
    pub fn vector_potential(&self) -> &[[f64; 2]] {
        &self.vector_potential
    }

    /// State before the first step.
    pub fn initial_state(&self) -> State {
        State {
            psi: self.kernel.opened(&self.initial, self.drives[0].field),
            step: 0,
            series: Series::with_capacity(self.schedule.steps + 1, self.populations),
            outgoing: self.start_outgoing(),
        }
    }

    /// Scratch for [`advance`] on one thread.
    pub fn make_workspace(&self) -> Workspace {
        self.make_workspace_on(1)
    }

    /// Scratch for [`advance`] in two dimensions on `threads` threads of the rayon pool it is called in. The bits do not
    /// depend on it.
    pub fn make_workspace_on(&self, threads: usize) -> Workspace {
        Workspace {
            kernel: self.kernel.make_workspace(threads),
            halves: vec![Complex::default(); if self.grid.dimensions() == 1 { self.grid.len() } else { 0 }],
            outgoing: self.collector.as_ref().map(Collector::make_scratch).unwrap_or_default(),
            map: self.map.as_ref().map(MapCollector::make_scratch).unwrap_or_default(),
        }
    }

    /// ψ of the state in length gauge, free of the splitting's open form, into `out`.
    pub fn wave_function(&self, state: &State, out: &mut [Complex<f64>]) {
        let mut work = self.kernel.make_workspace(1);
        self.kernel.unfold(self.closed(state, &mut work), out);
    }

    /// ψ of the state in length gauge, of the part of the grid that is kept.
    fn closed<'w>(&self, state: &State, work: &'w mut StepWorkspace) -> &'w [Complex<f64>] {
        let (field, potential) = (self.drives[state.step].field, self.vector_potential[state.step]);
        self.kernel.closed(&state.psi, field, potential, work)
    }

    /// |⟨f|ψ⟩|² of f on the whole grid and ψ on the part kept.
    fn weight(&self, f: impl Fn(usize) -> Complex<f64>, psi: &[Complex<f64>]) -> f64 {
        (self.kernel.overlap(f, psi) * self.grid.cell()).norm_sqr()
    }

    /// |⟨ψ(0)|ψ⟩|².
    fn initial_weight(&self, psi: &[Complex<f64>]) -> f64 {
        let sum: Complex<f64> = self.initial.iter().zip(psi).map(|(f, p)| f.conj() * p).sum();
        let parts = self.grid.len() / psi.len();
        (sum * self.grid.cell() * parts as f64).norm_sqr()
    }

    /// The mirror under which only half the plane is computed, where field and state keep one.
    pub fn mirror(&self) -> Option<Mirror> {
        self.kernel.mirror()
    }

    /// |⟨n|ψ⟩|² for every bound state of `states`, in length gauge.
    pub fn populations(&self, state: &State, states: &BoundStates) -> Vec<f64> {
        let mut psi = vec![Complex::default(); self.grid.len()];
        self.wave_function(state, &mut psi);
        states.states.iter().map(|s| population(s, &psi, self.grid.cell())).collect()
    }

    /// Population of all bound states of every angular momentum, in two dimensions; see [`RoundStates::populations`]. The
    /// ionization probability is what they lack of the norm at the start, as in one dimension.
    pub fn round_populations(
        &self,
        state: &State,
        states: &RoundStates,
        work: &mut Workspace,
    ) -> Vec<(i32, f64)> {
        let psi = self.closed(state, &mut work.kernel);
        states.populations(&self.grid, |j, out| self.kernel.row(psi, j, out))
    }
}

/// The mirror that field, potential and state keep, bit by bit; none in one dimension.
fn mirror_of(
    psi: &[Complex<f64>],
    potential: &PotentialOnGrid,
    grid: &Grid,
    drives: &[Drive],
) -> Option<Mirror> {
    let (nx, ny) = (grid.x.points, grid.y?.points);
    let vectors = drives.iter().flat_map(|d| {
        let [a, b] = d.potential_integral;
        [d.field, d.middle_field, a, b]
    });
    let mirror = straight(grid, vectors)?;
    let image: &dyn Fn(usize) -> usize = match mirror {
        Mirror::Y(_) => &|i| (ny - 1 - i / nx) * nx + i % nx,
        Mirror::X(_) => &|i| i / nx * nx + nx - 1 - i % nx,
    };
    if (0..psi.len()).any(|i| potential.values[i] != potential.values[image(i)]) {
        return None;
    }
    let keeps = |parity: &Parity| (0..psi.len()).all(|i| psi[i] == psi[image(i)] * parity.sign());
    let parity = [Parity::Even, Parity::Odd].into_iter().find(keeps)?;
    Some(with_parity(mirror, parity))
}

/// The mirror, of any parity, that all of these vectors keep and that halves the grid.
fn straight(grid: &Grid, vectors: impl Iterator<Item = [f64; 2]>) -> Option<Mirror> {
    let mut none = [true; 2];
    for vector in vectors {
        none = [none[0] && vector[0] == 0.0, none[1] && vector[1] == 0.0];
    }
    let halves = |points: usize| points.is_multiple_of(16);
    match none {
        [_, true] if halves(grid.y?.points) => Some(Mirror::Y(Parity::Even)),
        [true, _] if halves(grid.x.points) => Some(Mirror::X(Parity::Even)),
        _ => None,
    }
}

fn with_parity(mirror: Mirror, parity: Parity) -> Mirror {
    match mirror {
        Mirror::X(_) => Mirror::X(parity),
        Mirror::Y(_) => Mirror::Y(parity),
    }
}

/// What step `n` of a schedule needs of the field.
fn drive(field: &Field, schedule: &Schedule, n: usize) -> Drive {
    let (t, half) = (schedule.time(n), 0.5 * schedule.time_step);
    let (first, first_square) = field.potential_integrals(t, half);
    let (second, second_square) = field.potential_integrals(t + half, half);
    Drive {
        field: field.electric_field(t),
        middle_field: field.electric_field(t + half),
        potential_integral: [first, second],
        square_integral: [first_square, second_square],
    }
}

fn population(bound: &[f64], psi: &[Complex<f64>], cell: f64) -> f64 {
    let overlap: Complex<f64> = bound.iter().zip(psi).map(|(s, p)| p * s).sum();
    (overlap * cell).norm_sqr()
}

/// A run stopped between two steps; with its plan, all that is needed to continue.
#[derive(Clone, Debug, PartialEq)]
pub struct State {
    /// Wave function in the form the step works on; see [`Plan::wave_function`].
    pub psi: Vec<Complex<f64>>,
    /// Number of steps done.
    pub step: usize,
    /// What was recorded so far.
    pub series: Series,
    /// Absorbed amplitude collected so far, where the plan collects it.
    pub outgoing: Option<Outgoing>,
}

/// Recorded samples: entry n belongs to time n of the [`Schedule`].
#[derive(Clone, Debug, PartialEq, Default)]
pub struct Series {
    /// ⟨∇V⟩, hartree/bohr.
    pub gradient: Vec<[f64; 2]>,
    /// ∫|ψ|².
    pub norm: Vec<f64>,
    /// Norm near the edges, see [`Moments::edge`].
    pub edge: Vec<f64>,
    /// Norm at the top of the momentum grid, see [`Moments::top`].
    pub top: Vec<f64>,
    /// Step numbers at which populations were taken.
    pub population_steps: Vec<usize>,
    /// |⟨ψ(0)|ψ⟩|² at those steps.
    pub initial_population: Vec<f64>,
    /// Populations of the bound states recorded, one row per entry of `population_steps`, flat.
    pub populations: Vec<f64>,
    /// Part of |ψ|, free of a common phase, by which one step differs from two halves of it, at [`Plan::doubled_steps`].
    pub local_error: Vec<f64>,
    /// ⟨H⟩ without field, hartree, when the field has ended and at the end of the run; empty without such a time.
    pub free_energy: Vec<f64>,
}

impl Series {
    fn with_capacity(samples: usize, populations: usize) -> Self {
        let rows = POPULATION_SAMPLES + 2;
        Self {
            gradient: Vec::with_capacity(samples),
            norm: Vec::with_capacity(samples),
            edge: Vec::with_capacity(samples),
            top: Vec::with_capacity(samples),
            population_steps: Vec::with_capacity(rows),
            initial_population: Vec::with_capacity(rows),
            populations: Vec::with_capacity(rows * populations),
            local_error: Vec::with_capacity(probe::MOMENTS),
            free_energy: Vec::with_capacity(2),
        }
    }

    fn push(&mut self, moments: Moments) {
        self.gradient.push(moments.gradient);
        self.norm.push(moments.norm);
        self.edge.push(moments.edge);
        self.top.push(moments.top);
    }
}

/// Scratch of [`advance`]; holds nothing between calls.
#[derive(Clone, Debug)]
pub struct Workspace {
    kernel: StepWorkspace,
    halves: Vec<Complex<f64>>,
    outgoing: CollectorScratch,
    map: MapScratch,
}

/// Advances by at most `steps` steps, and takes the last sample when the run is over.
///
/// The same bits come out however the steps are divided over calls.
pub fn advance(plan: &Plan, state: &mut State, work: &mut Workspace, steps: usize) {
    let end = plan.schedule.steps.min(state.step + steps);
    while state.step < end {
        record_populations(plan, state, work);
        collect_outgoing(plan, state, work);
        watch(plan, state, work);
        let drive = &plan.drives[state.step];
        let moments = plan.kernel.advance(&mut state.psi, drive, &mut work.kernel);
        state.series.push(moments);
        state.step += 1;
    }
    if state.step == plan.schedule.steps && state.series.norm.len() == state.step {
        record_populations(plan, state, work);
        collect_outgoing(plan, state, work);
        watch(plan, state, work);
        state.series.push(plan.kernel.moments_of(&state.psi, &mut work.kernel));
    }
}

fn record_populations(plan: &Plan, state: &mut State, work: &mut Workspace) {
    if !state.step.is_multiple_of(plan.stride) && state.step != plan.schedule.steps {
        return;
    }
    let psi = plan.closed(state, &mut work.kernel);
    state.series.population_steps.push(state.step);
    state.series.initial_population.push(plan.initial_weight(psi));
    for number in 0..plan.populations {
        let weight = match plan.atom.plane.get(number) {
            Some(bound) => plan.weight(|i| bound.at(i), psi),
            None => plan.weight(|i| plan.atom.bound.states[number][i].into(), psi),
        };
        state.series.populations.push(weight);
    }
}

fn collect_outgoing(plan: &Plan, state: &mut State, work: &mut Workspace) {
    let line = plan.collector.as_ref().filter(|c| c.is_due(state.step));
    let map = plan.map.as_ref().filter(|m| m.is_due(state.step));
    if line.is_none() && map.is_none() {
        return;
    }
    let psi = plan.closed(state, &mut work.kernel);
    let outgoing = state.outgoing.as_mut().expect("a state of a plan that collects");
    if let Some(collector) = line {
        collector.collect(outgoing, psi, state.step, &mut work.outgoing);
    }
    if let Some(collector) = map {
        let row = |j: usize, out: &mut [Complex<f64>]| plan.kernel.row(psi, j, out);
        collector.collect(&mut outgoing.map, row, state.step, &mut work.map);
    }
}

/// Looks at ψ at the few moments of the plan's probe.
fn watch(plan: &Plan, state: &mut State, work: &mut Workspace) {
    let (probe, run, n) = (&plan.probe, (&plan.kernel, &plan.atom.potential), state.step);
    if probe.doubles_at(n) {
        let drives = (&plan.drives[n], plan.drives[n + 1].field);
        let mut scratch = (&mut work.kernel, &mut work.halves[..]);
        let error = probe.local_error(run, n, &state.psi, drives, &mut scratch);
        state.series.local_error.push(error);
    }
    if probe.weighs_at(n) {
        let at = [plan.drives[n].field, plan.vector_potential[n]];
        state.series.free_energy.push(probe.energy(run, &state.psi, at, &mut work.kernel));
    }
}

/// Runs a plan from start to end: a convenience over [`advance`].
pub fn run(plan: &Plan) -> State {
    let mut state = plan.initial_state();
    let mut work = plan.make_workspace();
    advance(plan, &mut state, &mut work, plan.schedule.steps);
    state
}
