//! What a machine cannot hold is refused before anything runs.

use serde_json::Value;

use super::cost::cost;
use super::prepare::Job;
use crate::config::complaint::{Complaint, Fix};
use crate::text;

/// More steps than anybody waits for (a limit of our own).
const MOST_STEPS: usize = 10_000_000_000;

/// A complaint about a point that needs more than `free` bytes of memory, or more steps than will ever end.
pub fn objection(job: &Job, tree: &Value, free: Option<u64>) -> Option<Complaint> {
    let cost = cost(job);
    let places: Vec<String> = ["spacing", "extent", "time_step", "trailing_time"]
        .into_iter()
        .map(|key| format!("/numerics/{key}"))
        .filter(|place| tree.pointer(place).is_some())
        .collect();
    let place = places.first().map_or("/field", String::as_str);
    let complain = |reason: String, allowed: String| {
        let others = if places.is_empty() { "the field or the outputs".into() } else { places.join(", ") };
        let written = if places.is_empty() { None } else { tree.pointer(place) };
        Complaint::new(place, written, reason).allowed(allowed).fix(Fix::Words(format!("change {others}")))
    };
    if cost.steps > MOST_STEPS {
        let reason = format!("makes {:.1e} steps", cost.steps as f64);
        return Some(complain(reason, format!("at most {MOST_STEPS} steps")));
    }
    let free = free.filter(|free| cost.bytes > *free)?;
    let needed = text::bytes(cost.bytes);
    let reason = format!("needs {needed} of memory for {} grid points and {} steps", cost.points, cost.steps);
    Some(complain(reason, format!("at most the {} that are free on this machine", text::bytes(free))))
}
