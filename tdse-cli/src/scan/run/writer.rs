//! The one thread that writes: results as they come, whole or not at all.

use std::sync::mpsc::Receiver;

use super::Shared;
use super::compute::{How, now};
use super::tasks::Task;
use crate::progress::Event;
use crate::store::{self, Contents, FailedPoint};

/// What a worker hands over.
pub struct Parcel<'a> {
    /// The task.
    pub task: &'a Task,
    /// Time it took, s.
    pub seconds: f64,
    /// What came of it; else why it failed.
    pub result: Result<(How, Vec<Contents>), String>,
}

/// Writes what comes until all workers are gone. Where the disk refuses, computing is given up: the points that are
/// not on disk are missing, and run again with the next call.
pub fn write_all(shared: &Shared, parcels: Receiver<Parcel>) {
    for parcel in parcels {
        let written = match &parcel.result {
            Ok((how, results)) => write(shared, &parcel, *how, results),
            Err(reason) => keep_failure(shared, &parcel, reason),
        };
        if let Err(error) = written {
            let point = shared.name(parcel.task.points[0]);
            shared.reporter.tell(&Event::Refused { point, reason: error.to_string() });
            shared.stop.give_up();
        }
    }
}

fn write(shared: &Shared, parcel: &Parcel, how: How, results: &[Contents]) -> Result<(), store::Error> {
    let mut seconds = parcel.seconds;
    for (&index, contents) in parcel.task.points.iter().zip(results) {
        let path = shared.ledger.path(index);
        let point = shared.name(index);
        shared.reporter.tell(&Event::Writing { point: point.clone() });
        shared.ledger.folder.make_room(&path)?;
        store::write(&path, contents)?;
        shared.ledger.folder.forget_failure(&shared.ledger.rows[index].identity)?;
        shared.ledger.folder.forget_checkpoint(&shared.ledger.rows[index].identity)?;
        // Further files of a propagation are derived from it.
        shared.reporter.tell(&if how == How::Propagated && index == parcel.task.points[0] {
            Event::Propagated { point, seconds, estimate: parcel.task.cost.seconds }
        } else {
            Event::Derived { point, seconds }
        });
        seconds = 0.0;
    }
    Ok(())
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
