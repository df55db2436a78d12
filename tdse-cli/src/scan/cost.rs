//! What a point costs: steps, memory, and time on one core.

use num_complex::Complex;

use super::electrons::energies;
use super::prepare::Job;
use super::run::machine;
use tdse_core::choose::{electron_bytes, electron_work};
use tdse_core::simulate::{Held, Load, Memory, Schedule};
use tdse_core::stationary::count_below;

/// Nanoseconds per point, binary logarithm of the number of points, and step (two transform pairs and what goes with
/// them), as measured on one core of a server processor; an estimate only, replaced by measured times as a scan goes.
const NANOSECONDS: f64 = 3.2;

/// An estimate.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Cost {
    /// Time steps.
    pub steps: usize,
    /// Grid points.
    pub points: usize,
    /// Time on one core, s.
    pub seconds: f64,
    /// Memory at the peak.
    pub bytes: u64,
}

/// Estimated cost of a point.
pub fn cost(job: &Job) -> Cost {
    let numerics = &job.numerics;
    let grid = numerics.grid;
    let schedule = Schedule::new(&job.problem.field, numerics.time_step, numerics.trailing_time);
    if grid.dimensions() == 2 {
        return on_plane(job, &schedule);
    }
    let (points, steps) = (grid.len() as f64, schedule.steps as f64);
    // ψ, scratch and factors; the bound states with their iteration; fields and series; the map.
    let states = bound(job).max(8) as f64;
    let per_point = 16.0 * 8.0 + 8.0 * 6.0 * states;
    let bytes = points * per_point + steps * 18.0 * 8.0 + 16.0 * map(job, steps * schedule.time_step);
    let (mut work, mut bytes) = (steps * points * points.log2(), bytes);
    if let Some((method, axis)) = job.electrons() {
        let energies = energies(axis);
        work += electron_work(&job.problem, numerics, energies, method)[1];
        bytes += electron_bytes(&job.problem, numerics, energies, method);
    }
    let seconds = work * NANOSECONDS * 1e-9;
    Cost { steps: schedule.steps, points: grid.len(), seconds, bytes: bytes as u64 }
}

/// Estimated cost in two dimensions; its memory is counted.
fn on_plane(job: &Job, schedule: &Schedule) -> Cost {
    let points = job.numerics.grid.len();
    let memory = memory_on_plane(job);
    let kept = points / parts(job, &memory);
    // A map is made of the whole plane, whatever part is kept.
    let passes = kept as f64 + map_share(job) * points as f64;
    let steps = schedule.steps as f64;
    let bytes = memory.total() as f64 + 16.0 * map(job, steps * schedule.time_step);
    let seconds = steps * passes * (points as f64).log2() * NANOSECONDS * 1e-9;
    Cost { steps: schedule.steps, points, seconds, bytes: bytes as u64 }
}

/// Memory of a run in two dimensions on all cores.
pub fn memory_on_plane(job: &Job) -> Memory {
    let load = Load {
        field: &job.problem.field,
        numerics: &job.numerics,
        states: Held::Plane(&job.labels),
        initial: &job.problem.initial,
        record: job.record,
        map: job.map_range(),
        threads: machine::cores(),
    };
    load.memory()
}

/// Into how many mirror images a plane falls, of which one is computed.
fn parts(job: &Job, memory: &Memory) -> usize {
    size_of::<Complex<f64>>() * job.numerics.grid.len() / memory.wave_function
}

/// Whether a run in two dimensions keeps a mirror, so that half the plane is enough.
pub fn keeps_mirror(job: &Job) -> bool {
    parts(job, &memory_on_plane(job)) == 2
}

/// Work of a momentum map beside that of propagating the whole plane.
pub fn map_share(job: &Job) -> f64 {
    job.electrons().map_or(0.0, |(method, axis)| {
        let [propagation, map] = electron_work(&job.problem, &job.numerics, energies(axis), method);
        map / propagation
    })
}

/// Bound states of the run: every one below zero in its box, and as many as it names.
fn bound(job: &Job) -> usize {
    let potential = &job.problem.potential;
    let half = 0.5 * job.numerics.grid.x.extent();
    // A box that no machine holds needs no count.
    let below = if potential.is_confining() || half > 1e6 { 0 } else { count_below(potential, 0.0, half) };
    below.max(job.states())
}

/// Values of the time-frequency map.
fn map(job: &Job, length: f64) -> f64 {
    let Some(map) = &job.outputs.time_frequency else {
        return 0.0;
    };
    let ratio = |whole: f64, step: Option<f64>| step.map_or(0.0, |step| whole / step + 1.0);
    ratio(length, map.time_step) * ratio(map.max_energy.unwrap_or_default(), map.energy_step)
}
