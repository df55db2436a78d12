//! Doubts about a finished run: what was watched, and what its ends do to its spectrum.

use tdse_core::simulate::{Plan, Schedule, State};
use tdse_core::watch::{self, Doubt, Kind, Watched};

use super::recorded::classical_law;
use crate::scan::prepare::Point;
use crate::store::table::Status;
use crate::store::{Contents, Values};

/// Doubts that depend on the window, and so come anew with every derivation.
const OF_WINDOW: [Kind; 2] = [Kind::TrailingTime, Kind::WindowLeak];

/// A line of the summary's reason.
fn line(doubt: &Doubt) -> String {
    format!("{}: {}", doubt.kind.name(), doubt.sentence)
}

/// What was known before the run, and what was seen in it.
///
/// `bound` is the population of all bound states at the end.
pub(super) fn of_run(point: &Point, plan: &Plan, state: &State, bound: f64) -> Vec<String> {
    let steps = plan.schedule().steps;
    let (numerics, accuracy) = (&point.job.numerics, point.job.accuracy);
    let seen = watch::doubts(&Watched { state, numerics, steps, accuracy });
    let left = plan.map_collector().and_then(|_| watch::left_inside(state, bound));
    point.doubts.iter().cloned().chain(seen.iter().chain(&left).map(line)).collect()
}

/// Writes status and reason.
pub(super) fn put(contents: &mut Contents, doubts: &[String]) {
    let status = if doubts.is_empty() { Status::Done } else { Status::Doubtful };
    contents.insert("summary", "status", status as i64);
    contents.insert("summary", "reason", doubts.join("\n"));
}

/// Replaces the doubts about the ends of the run by those of the window that the point asks for now.
///
/// Of two components the stronger one tells.
pub(super) fn renew(point: &Point, contents: &mut Contents, components: &[Vec<f64>], schedule: &Schedule) {
    let power = |component: &Vec<f64>| component.iter().map(|a| a * a).sum::<f64>();
    let stronger = components.iter().max_by(|a, b| power(a).total_cmp(&power(b)));
    let acceleration = stronger.map_or(&[][..], Vec::as_slice);
    let known = match contents.get("summary", "reason") {
        Some(Values::Text(text)) => text.first().cloned().unwrap_or_default(),
        _ => String::new(),
    };
    let is_of_window = |line: &str| {
        OF_WINDOW.iter().any(|kind| line.strip_prefix(kind.name()).is_some_and(|rest| rest.starts_with(": ")))
    };
    let kept = known.lines().filter(|line| !is_of_window(line)).map(str::to_owned);
    let doubts: Vec<String> = kept.chain(ending(point, acceleration, schedule)).collect();
    put(contents, &doubts);
}

/// The ends are held against the plateau: what they add at the cutoff by the classical law.
fn ending(point: &Point, acceleration: &[f64], schedule: &Schedule) -> Option<String> {
    let wanted = point.job.outputs.harmonics.as_ref()?;
    let photon = point.job.problem.field.pulses.first()?.frequency;
    let cutoff = classical_law(point)?;
    watch::ending(acceleration, schedule, wanted.window, [photon, cutoff.max(photon)]).as_ref().map(line)
}
