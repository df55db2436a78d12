//! How far every point of a folder has come, read from its files.

use std::path::PathBuf;

use serde_json::{Value, json};
use sha2::{Digest, Sha256};
use tdse_core::problem::Record;

use super::prepare::{NUMERICS_VERSION, Prepared};
use crate::config::identity;
use crate::store::{self, Contents, Folder, Row, Status, Values};

/// How far a point has come.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Standing {
    /// Computed.
    Done,
    /// Computed, with these doubts.
    Doubtful(String),
    /// Computed, but something else was derived from it.
    Stale,
    /// Failed for this reason.
    Failed(String),
    /// Not there.
    Missing,
    /// A file stands in its place that cannot be used, for this reason.
    Unusable(String),
}

impl Standing {
    /// Whether nothing more is to be done for the point.
    pub fn is_final(&self) -> bool {
        matches!(self, Self::Done | Self::Doubtful(_) | Self::Failed(_))
    }

    /// Whether its result is there.
    pub fn is_there(&self) -> bool {
        matches!(self, Self::Done | Self::Doubtful(_))
    }

    /// What results say.
    pub fn status(&self) -> Status {
        match self {
            Self::Done => Status::Done,
            Self::Doubtful(_) => Status::Doubtful,
            Self::Failed(_) => Status::Failed,
            Self::Stale | Self::Missing | Self::Unusable(_) => Status::Missing,
        }
    }

    /// The word for it in tables.
    pub fn word(&self) -> &'static str {
        let status = self.status();
        Status::MEANINGS.iter().find(|(known, _)| *known == status).map_or("", |(_, word)| word)
    }

    /// Why the point is doubtful or not there.
    pub fn reason(&self) -> &str {
        match self {
            Self::Done | Self::Missing => "",
            Self::Stale => "other outputs were derived from it",
            Self::Doubtful(reason) | Self::Failed(reason) | Self::Unusable(reason) => reason,
        }
    }
}

/// The rows of a request, nothing known of their standing yet.
///
/// Points that differ only in what is derived share an identity: the second and later ones have a mark in the names of
/// their files.
fn rows(prepared: &Prepared) -> Vec<Row> {
    let mut rows: Vec<Row> = Vec::with_capacity(prepared.points.len());
    let mut first = std::collections::HashMap::new();
    for point in &prepared.points {
        let outputs = outputs_hash(&point.configuration);
        let plain = first.entry(&point.identity).or_insert_with(|| outputs.clone());
        let name =
            if *plain == outputs { point.identity.clone() } else { format!("{}-{outputs}", point.identity) };
        rows.push(Row {
            identity: point.identity.clone(),
            outputs,
            status: Standing::Missing.word().into(),
            path: Folder::point_place(&name),
        });
    }
    rows
}

/// Hash of what a resolved configuration derives, 8 hexadecimal digits.
fn outputs_hash(configuration: &str) -> String {
    let tree: Value = serde_json::from_str(configuration).unwrap_or_default();
    let basis = json!([tree["outputs"], tree["models"]]);
    let canonical = serde_json_canonicalizer::to_vec(&basis).unwrap_or_default();
    format!("{:x}", Sha256::digest(canonical))[..8].to_owned()
}

/// A folder with the points of its request.
#[derive(Clone, Debug)]
pub struct Ledger {
    /// The folder.
    pub folder: Folder,
    /// Version of the numerics in the identities.
    pub numerics_version: u32,
    /// One row per point.
    pub rows: Vec<Row>,
}

impl Ledger {
    /// The folder as a request fills it.
    pub fn new(folder: Folder, prepared: &Prepared) -> Self {
        Self { folder, numerics_version: NUMERICS_VERSION, rows: rows(prepared) }
    }

    /// A folder as it was left, without judging its request again.
    ///
    /// # Errors
    /// Where its table of points cannot be read.
    pub fn open(folder: Folder, request: &store::Request) -> Result<Self, store::Error> {
        let rows = folder.rows()?;
        Ok(Self { folder, numerics_version: request.numerics_version, rows })
    }

    /// The file of a point.
    pub fn path(&self, index: usize) -> PathBuf {
        self.folder.root().join(&self.rows[index].path)
    }

    /// Looks at the files of a point.
    pub fn standing(&self, index: usize) -> Standing {
        let (row, path) = (&self.rows[index], self.path(index));
        if path.exists() {
            let read = store::read_headline(&path);
            let found =
                read.map_err(|error| error.to_string()).and_then(|contents| self.judge(row, &contents));
            return found.unwrap_or_else(Standing::Unusable);
        }
        self.folder.failure(&row.identity).map_or(Standing::Missing, |failed| Standing::Failed(failed.reason))
    }

    /// All of them.
    pub fn standings(&self) -> Vec<Standing> {
        (0..self.rows.len()).map(|index| self.standing(index)).collect()
    }

    /// All of them; none where `go_on` says no before one.
    pub fn standings_while(&self, go_on: impl Fn() -> bool) -> Option<Vec<Standing>> {
        (0..self.rows.len()).map(|index| go_on().then(|| self.standing(index))).collect()
    }

    /// The same, looking again only at those that were not there.
    pub fn standings_after(&self, before: Vec<Standing>, go_on: impl Fn() -> bool) -> Option<Vec<Standing>> {
        let again = |(index, standing): (usize, Standing)| {
            go_on().then(|| if standing.is_there() { standing } else { self.standing(index) })
        };
        before.into_iter().enumerate().map(again).collect()
    }

    fn judge(&self, row: &Row, contents: &Contents) -> Result<Standing, String> {
        let configuration = &contents.provenance.configuration;
        let tree: Value = serde_json::from_str(configuration).unwrap_or_default();
        let states = tree.pointer("/outputs/populations/states").and_then(Value::as_u64).unwrap_or(0);
        let found = identity::identity(&tree, Record { populations: states as usize }, self.numerics_version);
        if found != row.identity {
            return Err(format!("{} holds another point, {found}", row.path));
        }
        if outputs_hash(configuration) != row.outputs {
            return Ok(Standing::Stale);
        }
        let Some(Values::Integer(status)) = contents.get("summary", "status") else {
            return Err(format!("{} has no status", row.path));
        };
        let reason = match contents.get("summary", "reason") {
            Some(Values::Text(text)) => text.first().cloned().unwrap_or_default(),
            _ => String::new(),
        };
        let doubtful = status.first() != Some(&(Status::Done as i64));
        Ok(if doubtful { Standing::Doubtful(reason) } else { Standing::Done })
    }

    /// Writes the table of all points with how far they have come.
    ///
    /// # Errors
    /// Whatever the disk refuses.
    pub fn write(&mut self, request: &store::Request, standings: &[Standing]) -> Result<(), store::Error> {
        for (row, standing) in self.rows.iter_mut().zip(standings) {
            row.status = standing.word().into();
        }
        self.folder.write_rows(request, &self.rows)
    }

    /// What gathering takes of every point.
    pub fn gatherable(&self, standings: &[Standing]) -> Vec<store::Point> {
        let point = |(index, standing): (usize, &Standing)| {
            if standing.is_there() {
                return store::Point::File(self.path(index));
            }
            store::Point::Absent { status: standing.status(), reason: standing.reason().into() }
        };
        standings.iter().enumerate().map(point).collect()
    }
}
