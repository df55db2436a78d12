//! Propagation: a plan made once, a state that can be stopped and continued, a series of what was recorded.

mod probe;

use std::sync::Arc;

use num_complex::Complex;

use crate::field::Field;
use crate::grid::Grid;
use crate::outgoing::{
    Collector, CollectorScratch, Edges, MapCollector, MapRange, MapScratch, Motion, Outgoing,
};
use crate::potential::{Potential, PotentialOnGrid};
use crate::problem::{InitialState, Numerics, Parity, PlaneLabel, Problem, Record};
use crate::stationary::{
    BoundStates, PlaneState, ScatteringStates, StationaryError, bound_states_below, plane_states,
};
use crate::step::{Drive, Moments, Step, StepWorkspace};

use probe::Probe;

/// Most population samples kept of a run.
const POPULATION_SAMPLES: usize = 512;

/// A model atom on a grid: computed once for all runs that share it.
#[derive(Clone, Debug, PartialEq)]
pub struct Atom {
    /// Potential and gradient.
    pub potential: PotentialOnGrid,
    /// Its bound states in one dimension: every one below zero, and as many as were asked for in any case.
    pub bound: BoundStates,
    /// Its bound states in two dimensions: those that were asked for, in that order.
    pub plane: Vec<PlaneState>,
}

impl Atom {
    /// Atom with every state below zero, and the `states` lowest in any case.
    pub fn new(potential: &Potential, grid: &Grid, states: usize) -> Result<Self, StationaryError> {
        Ok(Self {
            potential: PotentialOnGrid::sample(potential, grid),
            bound: bound_states_below(potential, grid, states)?,
            plane: Vec::new(),
        })
    }

    /// Atom in two dimensions with the states that `labels` name; an [`InitialState`] and a [`Record`] count them in this
    /// order.
    pub fn on_plane(
        potential: &Potential,
        grid: &Grid,
        labels: &[PlaneLabel],
    ) -> Result<Self, StationaryError> {
        Ok(Self {
            potential: PotentialOnGrid::sample(potential, grid),
            bound: BoundStates { energies: Vec::new(), states: Vec::new() },
            plane: plane_states(potential, grid, labels)?,
        })
    }

    /// Number of bound states it holds.
    pub fn states(&self) -> usize {
        self.bound.states.len() + self.plane.len()
    }

    /// Bound state `number` at point `i`.
    fn state(&self, number: usize, i: usize) -> Complex<f64> {
        match self.plane.get(number) {
            Some(state) => state.at(i),
            None => Complex::new(self.bound.states[number][i], 0.0),
        }
    }

    /// ψ(0) of an initial state, normalised.
    ///
    /// # Panics
    /// If the atom holds fewer states than the initial state names.
    pub fn wave_function(&self, initial: &InitialState) -> Vec<Complex<f64>> {
        let points = self.potential.values.len();
        let state = |number: usize| (0..points).map(move |i| self.state(number, i));
        match initial {
            InitialState::Single(number) => state(*number).collect(),
            InitialState::Superposition(terms) => {
                let total: f64 = terms.iter().map(|t| t.weight).sum();
                let mut psi = vec![Complex::default(); points];
                for term in terms {
                    let amplitude = Complex::from_polar((term.weight / total).sqrt(), term.phase);
                    for (p, s) in psi.iter_mut().zip(state(term.number)) {
                        *p += amplitude * s;
                    }
                }
                psi
            }
        }
    }
}

/// Times and field of a run: t_n = start + n τ, n = 0 … steps.
#[derive(Clone, Debug, PartialEq)]
pub struct Schedule {
    /// First time, a.u.
    pub start: f64,
    /// Time step, a.u.
    pub time_step: f64,
    /// Number of steps.
    pub steps: usize,
    /// Time when the field has ended, a.u.
    pub field_end: f64,
    /// Time asked for, a.u.: the last sample lies less than a step behind it, the windows of spectra end there, so that
    /// they do not change with the step.
    pub end: f64,
}

impl Schedule {
    /// From the start of the field to `trailing_time` after its end, lengthened to whole steps.
    pub fn new(field: &Field, time_step: f64, trailing_time: f64) -> Self {
        let (start, field_end) = field.interval();
        // A length within rounding of whole steps counts as whole.
        let steps = ((field_end + trailing_time - start) / time_step - 1e-9).ceil().max(1.0);
        Self { start, time_step, steps: steps as usize, field_end, end: field_end + trailing_time }
    }

    /// Time of sample `n`, a.u.
    pub fn time(&self, n: usize) -> f64 {
        self.start + n as f64 * self.time_step
    }

    /// Every sample's time, a.u.; length `steps + 1`.
    pub fn times(&self) -> Vec<f64> {
        (0..=self.steps).map(|n| self.time(n)).collect()
    }
}

/// Everything about a run that is known before it starts.
#[derive(Clone, Debug)]
pub struct Plan {
    atom: Arc<Atom>,
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
    probe: Option<Probe>,
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
        let one = numerics.grid.dimensions() == 1;
        let probe = one.then(|| Probe::new(&atom.potential, numerics, field, &schedule, &drives));
        Ok(Self {
            atom,
            initial,
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

    /// Steps that are compared with two halves of themselves: the one of the strongest field; in runs of a thousand steps also
    /// the one of the strongest field in the second half, and one at three quarters.
    pub fn doubled_steps(&self) -> Vec<usize> {
        self.probe.iter().flat_map(Probe::steps).collect()
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
            halves: vec![Complex::default(); if self.probe.is_some() { self.grid.len() } else { 0 }],
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

    /// The mirror y → -y under which only half the plane is computed, where field and state keep one.
    pub fn mirror(&self) -> Option<Parity> {
        self.kernel.mirror()
    }

    /// |⟨n|ψ⟩|² for every bound state of `states`, in length gauge.
    pub fn populations(&self, state: &State, states: &BoundStates) -> Vec<f64> {
        let mut psi = vec![Complex::default(); self.grid.len()];
        self.wave_function(state, &mut psi);
        states.states.iter().map(|s| population(s, &psi, self.grid.cell())).collect()
    }
}

/// The mirror that field, potential and state keep, bit by bit; none in one dimension.
fn mirror_of(
    psi: &[Complex<f64>],
    potential: &PotentialOnGrid,
    grid: &Grid,
    drives: &[Drive],
) -> Option<Parity> {
    let along_x = |d: &Drive| {
        let [a, b] = d.potential_integral;
        [d.field[1], d.middle_field[1], a[1], b[1]] == [0.0; 4]
    };
    let (nx, ny) = (grid.x.points, grid.y?.points);
    if !ny.is_multiple_of(16) || !drives.iter().all(along_x) {
        return None;
    }
    let half = ny / 2 * nx;
    let mirrored = |i: usize| (ny - 1 - i / nx) * nx + i % nx;
    if (0..half).any(|i| potential.values[i] != potential.values[mirrored(i)]) {
        return None;
    }
    let keeps = |parity: &Parity| (0..half).all(|i| psi[i] == psi[mirrored(i)] * parity.sign());
    [Parity::Even, Parity::Odd].into_iter().find(keeps)
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
    state.series.initial_population.push(plan.weight(|i| plan.initial[i], psi));
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

/// Looks at ψ at the few moments of the plan's probe; one dimension only.
fn watch(plan: &Plan, state: &mut State, work: &mut Workspace) {
    let (Some(probe), Step::Line(line)) = (&plan.probe, &plan.kernel) else { return };
    let field = plan.drives[state.step].field[0];
    let Some((psi, scratch)) = work.kernel.of_line() else { return };
    if probe.doubles_at(state.step) {
        // In the gauge of the run: no vector potential here.
        psi.copy_from_slice(&state.psi);
        line.close(psi, field, 0.0, scratch);
        let (index, next) = (state.series.local_error.len(), plan.drives[state.step + 1].field[0]);
        let whole = &plan.drives[state.step];
        let error = probe.doubled(index, (whole, next), psi, &mut work.halves, scratch);
        state.series.local_error.push(error);
    }
    if probe.weighs_at(state.step) {
        psi.copy_from_slice(&state.psi);
        line.close(psi, field, plan.vector_potential[state.step][0], scratch);
        state.series.free_energy.push(probe.energy(&plan.atom.potential, psi, scratch));
    }
}

/// How a run is doing.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Health {
    /// Norm at the last sample.
    pub norm: f64,
    /// Largest norm near the edges so far.
    pub edge: f64,
    /// Largest norm at the top of the momentum grid so far.
    pub top: f64,
}

/// What went wrong beyond repair.
#[derive(Clone, Copy, Debug, PartialEq, thiserror::Error)]
pub enum Failure {
    /// Numbers stopped being numbers.
    #[error("the wave function is not finite after step {step}")]
    NotFinite {
        /// Steps done.
        step: usize,
    },
    /// The norm grew, which no exact propagation can.
    #[error("the norm grew from {before} to {after} by step {step}")]
    NormGrew {
        /// Norm at the start.
        before: f64,
        /// Norm at the last sample.
        after: f64,
        /// Steps done.
        step: usize,
    },
}

/// Judges the recorded samples of a state.
pub fn health(state: &State) -> Result<Health, Failure> {
    let series = &state.series;
    let (Some(&before), Some(&after)) = (series.norm.first(), series.norm.last()) else {
        return Ok(Health { norm: 1.0, edge: 0.0, top: 0.0 });
    };
    if !after.is_finite() || series.gradient.last().is_some_and(|g| !(g[0] + g[1]).is_finite()) {
        return Err(Failure::NotFinite { step: state.step });
    }
    if after > before * (1.0 + 1e-9) {
        return Err(Failure::NormGrew { before, after, step: state.step });
    }
    let largest = |values: &[f64]| values.iter().copied().fold(0.0, f64::max);
    Ok(Health { norm: after, edge: largest(&series.edge), top: largest(&series.top) })
}

/// Runs a plan from start to end: a convenience over [`advance`].
pub fn run(plan: &Plan) -> State {
    let mut state = plan.initial_state();
    let mut work = plan.make_workspace();
    advance(plan, &mut state, &mut work, plan.schedule.steps);
    state
}
