//! Stacking the files of a scan's points into one file, scan axes first.

use std::path::{Path, PathBuf};

use super::axes::{self, ScanDimension};
use super::contents::Contents;
use super::error::Error;
use super::pause::{Place, pause};
use super::provenance::Provenance;
use super::read::{read, read_arrays};
use super::stack::Stack;
use super::table::{self, Status};
use super::write::write;
use super::{atomic, entry};

/// What to gather.
#[derive(Clone, Copy, Debug)]
pub struct Gathering<'a> {
    /// Provenance of the whole, not of a point.
    pub provenance: &'a Provenance,
    /// The dimensions of the grid; none for a single run.
    pub scan: &'a [ScanDimension],
    /// The points of the grid, the last dimension running fastest; one for a single run.
    pub points: &'a [Point],
}

/// One point of the grid.
#[derive(Clone, Debug, PartialEq)]
pub enum Point {
    /// Its file.
    File(PathBuf),
    /// It has none.
    Absent {
        /// How far it has come.
        status: Status,
        /// Why it is not there.
        reason: String,
    },
}

/// Writes the points of a scan to `path` as one result, whole or not at all.
///
/// `spectrum[photon_energy]` of the points becomes `spectrum[cep, photon_energy]`. What a point does not have is NaN.
/// The axes of the points must be identical; further coordinates (the harmonic order, where the wavelength is
/// scanned) are stacked where they differ. Results in time stay in the files of the points, and a remark that
/// differs becomes "varies". A single run has no scan axes: its result is its point, with everything in it.
/// No more than one point is in memory at a time.
///
/// # Panics
///
/// If the number of points is not the product of the lengths of the dimensions.
pub fn gather(path: &Path, gathering: Gathering) -> Result<(), Error> {
    gather_while(path, gathering, || true)
}

/// The same, as long as `go_on` says so, which is asked before every point.
///
/// # Panics
///
/// As [`gather`].
pub fn gather_while(path: &Path, gathering: Gathering, go_on: impl Fn() -> bool) -> Result<(), Error> {
    let Gathering { provenance, scan, points } = gathering;
    axes::check(scan)?;
    let expected: usize = scan.iter().map(ScanDimension::length).product();
    assert_eq!(points.len(), expected, "number of points");
    if scan.is_empty() {
        return write(path, &single(provenance, &points[0])?);
    }
    atomic::create(path, |root| {
        let entry = entry::begin(root, provenance, scan).map_err(Error::write(path))?;
        let mut stack = Stack::new(path, &entry, scan);
        for (number, point) in points.iter().enumerate() {
            pause(Place::Gather);
            if !go_on() {
                return Err(Error::Stopped { path: path.into() });
            }
            let index = index(number, scan);
            match point {
                Point::File(file) => {
                    let is_stacked = |path: &str| table::group(path).is_some_and(|group| !group.is_series());
                    stack.add(&index, file, &read_arrays(file, is_stacked)?)?;
                }
                Point::Absent { .. } => stack.add(&index, path, &absent(provenance, point))?,
            }
        }
        stack.finish()?;
        entry::finish(&entry).map_err(Error::write(path))
    })
}

fn single(provenance: &Provenance, point: &Point) -> Result<Contents, Error> {
    match point {
        Point::File(file) => {
            let mut contents = read(file)?;
            contents.provenance = provenance.clone();
            Ok(contents)
        }
        Point::Absent { .. } => Ok(absent(provenance, point)),
    }
}

/// What the result says of a point that has no file.
fn absent(provenance: &Provenance, point: &Point) -> Contents {
    let mut contents = Contents::new(provenance.clone());
    if let Point::Absent { status, reason } = point {
        contents.insert("summary", "status", *status as i64);
        contents.insert("summary", "reason", reason.as_str());
    }
    contents
}

/// The position on the grid of the point with this number, the last dimension running fastest.
fn index(mut number: usize, scan: &[ScanDimension]) -> Vec<usize> {
    let mut index: Vec<_> = scan
        .iter()
        .rev()
        .map(|dimension| {
            let position = number % dimension.length();
            number /= dimension.length();
            position
        })
        .collect();
    index.reverse();
    index
}
