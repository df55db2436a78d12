//! The one thread that writes results as they come, and the one that makes sure they are on disk.
//!
//! HDF5 takes a core's time, the disk takes its own: while one batch of files is forced to the disk, the next is written.

use std::sync::mpsc::{Receiver, SyncSender, sync_channel};
use std::thread;

use super::Shared;
use super::compute::{How, now};
use super::tasks::Task;
use crate::progress::Event;
use crate::store::{self, Contents, FailedPoint, Patterns, Unfinished};

/// Most files that are forced to the disk together, and most that wait for it.
const BATCH: usize = 16;

/// What a worker hands over.
pub struct Parcel<'a> {
    /// The task.
    pub task: &'a Task,
    /// Time it took, s.
    pub seconds: f64,
    /// What came of it; else why it failed.
    pub result: Result<(How, Vec<Contents>), String>,
}

/// A file of a point that has not its name yet.
struct Written {
    index: usize,
    file: Unfinished,
    /// What is to be said when it has.
    event: Event,
}

/// Writes what comes until all workers are gone. Where the disk refuses, computing is given up: the points that are
/// not on disk are missing, and run again with the next call.
pub fn write_all(shared: &Shared, parcels: Receiver<Parcel>) {
    let (sender, written) = sync_channel(BATCH);
    thread::scope(|scope| {
        scope.spawn(move || publish_all(shared, &written));
        let mut writer = Writer { shared, patterns: Patterns::new(), sender };
        for parcel in parcels {
            let done = match &parcel.result {
                Ok((how, results)) => writer.write(&parcel, *how, results),
                Err(reason) => keep_failure(shared, &parcel, reason),
            };
            if let Err(error) = done {
                refuse(shared, parcel.task.points[0], &error);
            }
        }
        drop(writer);
    });
}

fn refuse(shared: &Shared, index: usize, error: &store::Error) {
    shared.reporter.tell(&Event::Refused { point: shared.name(index), reason: error.to_string() });
    shared.stop.give_up();
}

/// Writes files all but their names.
struct Writer<'a> {
    shared: &'a Shared<'a>,
    patterns: Patterns,
    sender: SyncSender<Written>,
}

impl Writer<'_> {
    fn write(&mut self, parcel: &Parcel, how: How, results: &[Contents]) -> Result<(), store::Error> {
        let Self { shared, patterns, sender } = self;
        let mut seconds = parcel.seconds;
        for (&index, contents) in parcel.task.points.iter().zip(results) {
            let path = shared.ledger.path(index);
            let point = shared.name(index);
            shared.reporter.tell(&Event::Writing { point: point.clone() });
            shared.ledger.folder.make_room(&path)?;
            let file = patterns.begin(&path, contents)?;
            // Further files of a propagation are derived from it.
            let event = if how == How::Propagated && index == parcel.task.points[0] {
                Event::Propagated { point, seconds, estimate: parcel.task.cost.seconds }
            } else {
                Event::Derived { point, seconds }
            };
            seconds = 0.0;
            // The other thread leaves only after this one.
            let _ = sender.send(Written { index, file, event });
        }
        Ok(())
    }
}

/// Gives files their names, as many at a time as wait.
fn publish_all(shared: &Shared, written: &Receiver<Written>) {
    while let Ok(first) = written.recv() {
        let (mut files, mut said) = (vec![first.file], vec![(first.index, first.event)]);
        for Written { index, file, event } in written.try_iter().take(BATCH - 1) {
            files.push(file);
            said.push((index, event));
        }
        for (published, (index, event)) in store::publish(&files).into_iter().zip(said) {
            match published.and_then(|()| forget(shared, index)) {
                Ok(()) => shared.reporter.tell(&event),
                Err(error) => refuse(shared, index, &error),
            }
        }
    }
}

/// Drops what was kept of the point before it was final.
fn forget(shared: &Shared, index: usize) -> Result<(), store::Error> {
    let identity = &shared.ledger.rows[index].identity;
    shared.ledger.folder.forget_failure(identity)?;
    shared.ledger.folder.forget_checkpoint(identity)
}

fn keep_failure(shared: &Shared, parcel: &Parcel, reason: &str) -> Result<(), store::Error> {
    let index = parcel.task.points[0];
    let point = &shared.prepared.points[index];
    let failure = FailedPoint {
        reason: reason.into(),
        point: point.label.clone(),
        time: now(),
        version: env!("CARGO_PKG_VERSION").into(),
        configuration: serde_json::from_str(&point.configuration).unwrap_or_default(),
    };
    shared.ledger.folder.keep_failure(&point.identity, &failure)?;
    shared.ledger.folder.forget_checkpoint(&point.identity)?;
    for &index in &parcel.task.points {
        shared.reporter.tell(&Event::Failed { point: shared.name(index), reason: reason.into() });
    }
    Ok(())
}
