//! What is to be done: one task per identity, dear ones first.

use std::cmp::Reverse;
use std::collections::{BTreeMap, HashSet};
use std::hash::{DefaultHasher, Hash, Hasher};
use std::path::PathBuf;
use std::process;

use super::shard::Shard;
use crate::scan::cost::{Cost, cost};
use crate::scan::ledger::{Ledger, Standing};
use crate::scan::prepare::Prepared;
use crate::store::host_name;

/// What to do with points that failed before.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Retry {
    /// Leave them.
    Never,
    /// Compute them again.
    Failed,
}

/// Files to make from one propagation.
#[derive(Clone, Debug, PartialEq)]
pub struct Task {
    /// The point of each file.
    pub points: Vec<usize>,
    /// A file with the recorded series, where there is one.
    pub recorded: Option<PathBuf>,
    /// What propagating costs, by estimate.
    pub cost: Cost,
}

/// The tasks that are left, by decreasing cost.
pub fn tasks(
    prepared: &Prepared,
    ledger: &Ledger,
    standings: &[Standing],
    shard: Option<Shard>,
    retry: Retry,
) -> Vec<Task> {
    let is_due = |index: &usize| match &standings[*index] {
        Standing::Done | Standing::Doubtful(_) => false,
        Standing::Failed(_) => retry == Retry::Failed,
        Standing::Stale | Standing::Missing | Standing::Unusable(_) => true,
    };
    let mut paths = HashSet::new();
    let mut groups: BTreeMap<&str, Vec<usize>> = BTreeMap::new();
    for (index, row) in ledger.rows.iter().enumerate() {
        if paths.insert(&row.path) {
            groups.entry(&row.identity).or_default().push(index);
        }
    }
    let mut tasks: Vec<Task> = Vec::new();
    for group in groups.into_values() {
        let points: Vec<usize> = group.iter().copied().filter(is_due).collect();
        let Some(&first) = points.first() else { continue };
        if shard.is_some_and(|shard| !shard.holds(first)) {
            continue;
        }
        let has_series =
            |index: &&usize| standings[**index].is_there() || standings[**index] == Standing::Stale;
        let recorded = group.iter().find(has_series).map(|index| ledger.path(*index));
        tasks.push(Task { points, recorded, cost: cost(&prepared.points[first].job) });
    }
    // Dear points first, so that none runs alone at the end; among those of about equal cost each process goes its own
    // way, so that two on one folder seldom compute the same.
    tasks.sort_by_cached_key(|task| {
        (Reverse(class(task.cost.seconds)), way(&ledger.rows[task.points[0]].identity))
    });
    tasks
}

/// Costs within a factor of two.
fn class(seconds: f64) -> i32 {
    seconds.max(1e-9).log2().floor() as i32
}

/// A number that differs between processes and points.
fn way(identity: &str) -> u64 {
    let mut hasher = DefaultHasher::new();
    (host_name(), process::id(), identity).hash(&mut hasher);
    hasher.finish()
}
