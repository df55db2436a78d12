//! What can go wrong between a result and the disk.

use std::fmt;
use std::io;
use std::path::{Path, PathBuf};

use super::folder::Difference;
use super::hdf5::{self, Failure};

/// Why a result could not be written, read or gathered. Every message names the file.
#[derive(Debug)]
pub enum Error {
    /// The operating system refused.
    Io {
        /// What was tried, as in "cannot … PATH".
        doing: &'static str,
        /// The file or folder.
        path: PathBuf,
        /// The system's reason.
        source: io::Error,
    },
    /// The HDF5 library could not write.
    Write {
        /// The file being written.
        path: PathBuf,
        /// The library's reason.
        reason: String,
    },
    /// The file is HDF5, but cannot be read: cut short, overwritten, or inconsistent in itself.
    Damaged {
        /// The file.
        path: PathBuf,
        /// What was found.
        reason: String,
    },
    /// The file was not written by this program.
    Foreign {
        /// The file.
        path: PathBuf,
        /// What tells.
        reason: &'static str,
    },
    /// The file was written by a later version of this program.
    NewerLayout {
        /// The file.
        path: PathBuf,
        /// The layout's version in the file.
        found: i64,
        /// The highest version this program reads.
        known: i64,
    },
    /// A checkpoint that something else wrote.
    OtherOrigin {
        /// The file.
        path: PathBuf,
        /// What differs.
        what: &'static str,
        /// That of the file.
        found: String,
        /// That of this process.
        here: String,
    },
    /// A folder holds the results of another request.
    OtherRequest {
        /// The folder.
        path: PathBuf,
        /// Where the requests differ.
        differences: Vec<Difference>,
    },
    /// Gathering was stopped.
    Stopped {
        /// The file that was not made.
        path: PathBuf,
    },
    /// A scan axis has a name that a file cannot give it.
    AxisName {
        /// The name as given.
        name: String,
        /// Why not.
        reason: &'static str,
    },
    /// Two points of a scan cannot be stacked.
    Unstackable {
        /// The dataset, as in `harmonics/photon_energy`.
        dataset: String,
        /// The point file that set the shape.
        first: PathBuf,
        /// The point file that differs.
        other: PathBuf,
        /// How it differs.
        reason: String,
    },
}

impl Error {
    pub(super) fn io(doing: &'static str, path: &Path) -> impl FnOnce(io::Error) -> Self {
        move |source| Self::Io { doing, path: path.into(), source }
    }

    pub(super) fn write(path: &Path) -> impl FnOnce(Failure) -> Self {
        move |failure| Self::Write { path: path.into(), reason: hdf5::reason(&failure) }
    }

    pub(super) fn damaged(path: &Path) -> impl FnOnce(Failure) -> Self {
        move |failure| Self::Damaged { path: path.into(), reason: hdf5::reason(&failure) }
    }
}

impl fmt::Display for Error {
    fn fmt(&self, f: &mut fmt::Formatter) -> fmt::Result {
        match self {
            Self::Io { doing, path, source } => write!(f, "cannot {doing} {}: {source}", path.display()),
            Self::Write { path, reason } => write!(f, "cannot write {}: {reason}", path.display()),
            Self::Damaged { path, reason } => write!(f, "{} is damaged: {reason}", path.display()),
            Self::Foreign { path, reason } => {
                write!(f, "{} was not written by this program: {reason}", path.display())
            }
            Self::NewerLayout { path, found, known } => write!(
                f,
                "{} has layout version {found}, written by a later version of this program; \
                 this one reads up to {known}",
                path.display()
            ),
            Self::OtherOrigin { path, what, found, here } => {
                write!(f, "{} cannot be continued: it is of the {what} {found}, not {here}", path.display())
            }
            Self::OtherRequest { path, differences } => {
                write!(f, "{} holds the results of another request", path.display())?;
                differences.iter().try_for_each(|difference| write!(f, "\n{difference}"))?;
                write!(f, "\nonly scan, outputs, title and notes may change; give another folder")
            }
            Self::Stopped { path } => write!(
                f,
                "stopped while gathering: all points are kept, {} is as before; continue with the same command",
                path.display()
            ),
            Self::AxisName { name, reason } => {
                write!(
                    f,
                    "the scan axis \"{name}\" cannot have this name: {reason}; give it another \"name\""
                )
            }
            Self::Unstackable { dataset, first, other, reason } => write!(
                f,
                "cannot stack {dataset} of {} on that of {}: {reason}",
                other.display(),
                first.display()
            ),
        }
    }
}

impl std::error::Error for Error {
    fn source(&self) -> Option<&(dyn std::error::Error + 'static)> {
        match self {
            Self::Io { source, .. } => Some(source),
            _ => None,
        }
    }
}
