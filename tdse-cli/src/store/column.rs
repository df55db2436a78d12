//! One array of any HDF5 file, ours or not.

use std::io::Read;
use std::path::Path;

use super::hdf5::{self, File};
use super::table::Kind;
use super::values::Values;

/// A dataset along one axis.
#[derive(Clone, Debug, PartialEq)]
pub struct Column {
    /// Its numbers.
    pub values: Vec<f64>,
    /// Its attribute `units`, where it has one that is a text.
    pub units: Option<String>,
}

/// Whether a file begins as HDF5 files do.
pub fn is_hdf5(path: &Path) -> bool {
    let mut start = [0; 8];
    let read = std::fs::File::open(path).and_then(|mut file| file.read_exact(&mut start));
    read.is_ok() && start == hdf5::SIGNATURE
}

/// The dataset at `place`, a path from the root.
///
/// # Errors
/// Why it is no column of numbers, in words that follow its name.
pub fn column(path: &Path, place: &str) -> Result<Column, String> {
    let words = |failure| hdf5::reason(&failure);
    let root = File::open(path).and_then(|file| file.root()).map_err(words)?;
    let name = place.trim_start_matches('/');
    let kind = root.kind(name).map_err(|_| "is no dataset of the file".to_owned())?;
    if kind == Kind::Text {
        return Err("holds texts".into());
    }
    let Values::Real(values) = root.read(name, Kind::Real).map_err(words)? else {
        return Err("holds no numbers".into());
    };
    if values.ndim() != 1 {
        return Err(format!("has {} dimensions", values.ndim()));
    }
    Ok(Column { values: values.into_iter().collect(), units: root.any_text_of(name, "units") })
}
