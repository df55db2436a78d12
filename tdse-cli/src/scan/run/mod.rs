//! Computes the points of a scan: workers take tasks, one writer puts results on disk.

mod caught;
mod compute;
mod keeper;
pub mod machine;
mod shard;
mod stop;
mod tasks;
mod writer;

use std::sync::atomic::{AtomicUsize, Ordering};
use std::sync::mpsc::{SyncSender, sync_channel};
use std::thread;
use std::time::Instant;

use rayon::{ThreadPoolBuildError, ThreadPoolBuilder};

pub use compute::{now, origin, spelled};
pub use shard::Shard;
pub use stop::{Signal, Stop};
pub use tasks::{Retry, Task, tasks};

use crate::progress::{Event, PointName, Reporter};
use crate::scan::atoms::Atoms;
use crate::scan::ledger::Ledger;
use crate::scan::prepare::Prepared;
use caught::caught;
use compute::{Outcome, compute};
use writer::{Parcel, write_all};

/// What all threads share.
#[derive(Debug)]
pub struct Shared<'a> {
    /// The points.
    pub prepared: &'a Prepared,
    /// Their files.
    pub ledger: &'a Ledger,
    /// Who talks.
    pub reporter: &'a Reporter,
    /// Whether to stop.
    pub stop: &'a Stop,
    /// Atoms made so far.
    pub atoms: Atoms,
}

impl Shared<'_> {
    fn name(&self, index: usize) -> PointName {
        name(self.prepared, index)
    }
}

/// What events call a point.
pub fn name(prepared: &Prepared, index: usize) -> PointName {
    let point = &prepared.points[index];
    PointName { index, identity: point.identity.clone(), label: point.label.clone() }
}

/// Number of tasks at once: as many as asked, as fit into memory, and as there are.
pub fn at_once(jobs: usize, tasks: &[Task]) -> usize {
    // A result waits in the channel while the next point is computed.
    let largest = tasks.iter().map(|task| 2 * task.cost.bytes).max().unwrap_or(0);
    machine::fitting(jobs, largest).min(tasks.len()).max(1)
}

/// Does the tasks, `at_once` at once on `jobs` threads, until all are done or a stop is due.
///
/// # Errors
/// If the machine gives no threads.
pub fn run(shared: &Shared, tasks: &[Task], at_once: usize, jobs: usize) -> Result<(), ThreadPoolBuildError> {
    let pool = ThreadPoolBuilder::new()
        .num_threads(jobs.max(at_once))
        .thread_name(|n| format!("point {n}"))
        .build()?;
    let next = AtomicUsize::new(0);
    let (sender, receiver) = sync_channel(at_once);
    thread::scope(|scope| {
        scope.spawn(|| write_all(shared, receiver));
        pool.broadcast(|thread| {
            if thread.index() >= at_once {
                return;
            }
            while let Some(task) = tasks.get(next.fetch_add(1, Ordering::Relaxed)) {
                if shared.stop.is_due() {
                    break;
                }
                work(shared, task, &sender);
            }
        });
        drop(sender);
    });
    Ok(())
}

fn work<'a>(shared: &Shared, task: &'a Task, sender: &SyncSender<Parcel<'a>>) {
    if was_done_by_others(shared, task) {
        return;
    }
    let start = Instant::now();
    shared.reporter.tell(&Event::Started { point: shared.name(task.points[0]) });
    let computed = caught(|| compute(shared, task)).unwrap_or_else(Err);
    let result = match computed {
        Ok(Outcome::Stopped) => return,
        Ok(Outcome::Whole(how, results)) => Ok((how, results)),
        Err(reason) => Err(reason),
    };
    // The writer leaves only after the last worker.
    let _ = sender.send(Parcel { task, seconds: start.elapsed().as_secs_f64(), result });
}

/// Another process may work on the same folder: what it has finished since is kept.
fn was_done_by_others(shared: &Shared, task: &Task) -> bool {
    let is_there =
        |index: &usize| shared.ledger.path(*index).exists() && shared.ledger.standing(*index).is_there();
    let done = task.recorded.is_none() && task.points.iter().all(is_there);
    for &index in task.points.iter().filter(|_| done) {
        shared.reporter.tell(&Event::Kept { point: shared.name(index) });
    }
    done
}
