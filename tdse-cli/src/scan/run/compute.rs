//! One task: propagated in chunks, or read again; then derived.

use std::time::{Duration, Instant};

use tdse_core::problem::ElectronMethod;
use tdse_core::simulate::{Failure, Plan, State, advance, health};
use tdse_core::spectrum::momenta_of;

use super::keeper::Keeper;
use super::stop::Stop;
use super::tasks::Task;
use super::{Shared, machine};
use crate::derive::{self, Finished};
use crate::progress::Event;
use crate::scan::prepare::Point;
use crate::store::{self, Contents, Provenance};

/// Time between two looks at what else is to be done.
const CHUNK: Duration = Duration::from_millis(50);

/// How a result was come by.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum How {
    /// Propagated.
    Propagated,
    /// Derived anew from recorded series.
    Derived,
}

/// What came of a task.
pub enum Outcome {
    /// A result for each of its points.
    Whole(How, Vec<Contents>),
    /// It was stopped.
    Stopped,
}

/// Computes a task.
///
/// # Errors
/// Why it failed.
pub fn compute(shared: &Shared, task: &Task) -> Result<Outcome, String> {
    let points: Vec<&Point> = task.points.iter().map(|index| &shared.prepared.points[*index]).collect();
    // A file that cannot be read whole is made again.
    let recorded = task.recorded.as_deref().and_then(|path| store::read(path).ok());
    let (how, recorded) = match recorded {
        Some(recorded) => (How::Derived, recorded),
        None => match propagated(shared, task.points[0])? {
            Some(recorded) => (How::Propagated, recorded),
            None => return Ok(Outcome::Stopped),
        },
    };
    let derived = points.into_iter().map(|point| {
        let mut contents = recorded.clone();
        let times = (contents.provenance.start_time, contents.provenance.end_time);
        contents.provenance = provenance(shared, point, times);
        derive::derive(point, &mut contents);
        derive::models(point, &shared.atoms, &mut contents)?;
        Ok(contents)
    });
    Ok(Outcome::Whole(how, derived.collect::<Result<_, String>>()?))
}

fn propagated(shared: &Shared, index: usize) -> Result<Option<Contents>, String> {
    let start = now();
    let point = &shared.prepared.points[index];
    let job = &point.job;
    let atom = shared.atoms.get(job).map_err(|error| error.to_string())?;
    let plan = Plan::new(&job.problem, atom.clone(), &job.numerics, job.record);
    let mut plan = plan.map_err(|error| error.to_string())?;
    if let Some(range) = job.map_range() {
        plan = plan.mapping(&job.numerics, range);
    }
    let is_plane = job.numerics.grid.dimensions() == 2;
    let on_line = job.electrons().filter(|_| !is_plane);
    let electrons = on_line.map(|(method, axis)| (method, axis, shared.atoms.continuum(job)));
    let continuum = match electrons {
        Some((method, axis, states)) => {
            let states = states.map_err(|error| error.to_string())?;
            if method == ElectronMethod::OutgoingAmplitude {
                plan = plan.collecting(&job.numerics, &states, momenta_of(axis));
            }
            Some(states)
        }
        None => None,
    };
    let round = is_plane.then(|| shared.atoms.round(job)).transpose().map_err(|error| error.to_string())?;
    let watch = |step| {
        if shared.prepared.points.len() == 1 {
            shared.reporter.tell(&Event::Advanced { step });
        }
    };
    let state = propagate(&plan, &mut Keeper::new(shared, index), shared.stop, watch)
        .map_err(|error| error.to_string())?;
    let times = (start, now());
    Ok(state.map(|state| {
        let (continuum, round) = (continuum.as_deref(), round.as_deref());
        let finished = Finished { point, atom: &atom, plan: &plan, state: &state, continuum, round };
        derive::record(&finished, provenance(shared, point, times))
    }))
}

/// Carries a point to the end of its plan; none where it was stopped, and kept.
fn propagate(
    plan: &Plan,
    keeper: &mut Keeper,
    stop: &Stop,
    watch: impl Fn(usize),
) -> Result<Option<State>, Failure> {
    let steps = plan.schedule().steps;
    let mut state = keeper.start(plan);
    // Threads of the pool that have no point of their own help with this one, in two dimensions.
    let mut work = plan.make_workspace_on(rayon::current_num_threads());
    let mut chunk = 16;
    while state.series.norm.len() <= steps {
        if stop.is_due() {
            keeper.keep(&state);
            return Ok(None);
        }
        let start = Instant::now();
        let now = keeper.limited(&state, chunk);
        advance(plan, &mut state, &mut work, now);
        health(&state)?;
        chunk = next_chunk(now, start.elapsed());
        watch(state.step);
        keeper.keep_in_time(&state);
    }
    Ok(Some(state))
}

/// Number of steps that take about [`CHUNK`], at most four times as many as before.
fn next_chunk(steps: usize, took: Duration) -> usize {
    let factor = CHUNK.as_secs_f64() / took.as_secs_f64().max(1e-6);
    ((steps as f64 * factor.min(4.0)) as usize).max(1)
}

fn provenance(shared: &Shared, point: &Point, (start_time, end_time): (String, String)) -> Provenance {
    let prepared = shared.prepared;
    let inputs = point.job.inputs.iter().map(|input| (input.name.clone(), input.contents.to_string()));
    Provenance {
        title: prepared.title.clone(),
        start_time,
        end_time,
        input: prepared.input.clone(),
        overrides: spelled(&prepared.overrides),
        configuration: point.configuration.clone(),
        inputs: inputs.collect(),
        ..origin()
    }
}

/// Overrides as JSON text.
pub fn spelled(overrides: &[String]) -> String {
    serde_json::Value::from(overrides.to_vec()).to_string()
}

/// What ran, and on what.
pub fn origin() -> Provenance {
    Provenance {
        version: env!("CARGO_PKG_VERSION").into(),
        commit: option_env!("TDSE_COMMIT").unwrap_or("unknown").into(),
        instruction_set: tdse_core::step::instruction_set().into(),
        host_cores: machine::cores().to_string(),
        ..Provenance::default()
    }
}

/// The time, ISO 8601.
pub fn now() -> String {
    jiff::Timestamp::now().strftime("%Y-%m-%dT%H:%M:%SZ").to_string()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn chunks_grow_and_shrink_towards_their_time_and_never_vanish() {
        assert_eq!(next_chunk(16, Duration::from_micros(10)), 64);
        assert_eq!(next_chunk(100, Duration::from_millis(100)), 50);
        assert_eq!(next_chunk(1, Duration::from_secs(3)), 1);
    }
}
