//! What happens while points are computed.

use serde::Serialize;

/// A point in an event.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct PointName {
    /// Its place in the scan.
    pub index: usize,
    /// Its identity.
    pub identity: String,
    /// Values of the scan axes, for people.
    pub label: String,
}

/// What happened; one line each in the folder's log.
#[derive(Clone, Debug, PartialEq, Serialize)]
#[serde(tag = "event", rename_all = "snake_case")]
pub enum Event {
    /// Computing begins.
    Began {
        /// Version of the program.
        version: &'static str,
        /// What tells the process from all others.
        process: String,
        /// Points of the request.
        points: usize,
        /// Points at once.
        jobs: usize,
        /// Time steps of the longest point.
        steps: usize,
        /// Estimated work that is to be done, s on one core.
        work: f64,
        /// Points that are to be computed or derived.
        due: usize,
    },
    /// A remark.
    Noted {
        /// The remark, one line.
        text: String,
    },
    /// The point was there.
    Kept {
        /// Which.
        #[serde(flatten)]
        point: PointName,
    },
    /// Computing the point begins.
    Started {
        /// Which.
        #[serde(flatten)]
        point: PointName,
    },
    /// The point goes on from its checkpoint.
    Continued {
        /// Which.
        #[serde(flatten)]
        point: PointName,
        /// Steps done before.
        step: usize,
    },
    /// The point's state is on disk.
    Checkpointed {
        /// Which.
        #[serde(flatten)]
        point: PointName,
        /// Steps done.
        step: usize,
    },
    /// A file of the point is being written.
    Writing {
        /// Which.
        #[serde(flatten)]
        point: PointName,
    },
    /// A point has come to some step; not logged.
    Advanced {
        /// Steps done.
        step: usize,
    },
    /// The point was propagated and is on disk.
    Propagated {
        /// Which.
        #[serde(flatten)]
        point: PointName,
        /// Time it took, s.
        seconds: f64,
        /// Time it was estimated to take, s.
        estimate: f64,
    },
    /// The point was derived anew from its recorded series and is on disk.
    Derived {
        /// Which.
        #[serde(flatten)]
        point: PointName,
        /// Time it took, s.
        seconds: f64,
    },
    /// The point failed.
    Failed {
        /// Which.
        #[serde(flatten)]
        point: PointName,
        /// Why.
        reason: String,
    },
    /// The machine refused something; the point is missing and runs again with the next call.
    Refused {
        /// Which.
        #[serde(flatten)]
        point: PointName,
        /// What and why.
        reason: String,
    },
    /// Everything that exists is being gathered.
    Gathering,
    /// Everything that exists was gathered.
    Gathered {
        /// Where.
        path: String,
        /// Time it took, s.
        seconds: f64,
    },
    /// Computing has ended.
    Ended {
        /// Points by how they ended.
        #[serde(flatten)]
        counts: Counts,
        /// Signal that stopped it.
        signal: Option<&'static str>,
    },
}

/// Numbers of points.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Serialize)]
pub struct Counts {
    /// Propagated now.
    pub propagated: usize,
    /// Derived anew now.
    pub derived: usize,
    /// There before.
    pub kept: usize,
    /// Failed, now or before.
    pub failed: usize,
    /// Not there.
    pub missing: usize,
}
