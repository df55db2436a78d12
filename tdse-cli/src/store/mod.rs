//! Results on disk: HDF5 files with the NeXus base classes, open to any HDF5 reader.
//!
//! * [`table`] says what a file may hold: every group and dataset with its unit, axes and meaning.
//! * [`Contents`] is a result in memory, checked against the table as it is filled.
//! * [`write()`] puts one on disk whole or not at all; [`read()`] gets it back exactly.
//! * [`gather()`] stacks the files of a scan's points into one, scan axes first.
//! * [`checkpoint`] keeps a run that is not finished.
//! * [`Folder`] is where all of a request's files lie; [`differences()`] compares two results.
//!
//! All numbers are in the units of the table, which are those of the file. Only the module `hdf5` calls the
//! HDF5 library; that library holds one global lock, so threads gain nothing here.

mod atomic;
mod axes;
pub mod checkpoint;
mod column;
mod compare;
mod contents;
mod entry;
mod error;
mod folder;
mod gather;
mod group;
mod hdf5;
mod partial;
mod pattern;
mod pause;
mod provenance;
mod read;
mod stack;
pub mod table;
mod values;
mod write;

pub use atomic::{Unfinished, host_name, publish};
pub use axes::{ScanAxis, ScanDimension};
pub use column::{Column, column, is_hdf5};
pub use compare::differences;
pub use contents::{Contents, Group};
pub use error::Error;
pub use folder::{AxisValues, Claim, Difference, FailedPoint, Folder, Request, Row, TableAxis};
pub use gather::{Gathering, Point, gather, gather_while};
pub use partial::{may_run, process_mark};
pub use pattern::Patterns;
pub use provenance::Provenance;
pub use read::{read, read_groups, read_groups_where, read_headline};
pub use table::{Status, is_reserved_name};
pub use values::Values;
pub use write::write;
