//! Tables taken from two datasets of an HDF5 file, as the text of a CSV table: that is what results keep.

use std::fmt::Write as _;
use std::path::Path;

use super::pint;
use super::tables::Layout;
use crate::store::column;

/// Fewest values, as of every table.
const FEWEST: usize = 4;

/// The two datasets of a table: what rises, and what goes with it.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Places<'a> {
    /// Path of the axis in the file.
    pub axis: &'a str,
    /// Path of the values.
    pub dataset: &'a str,
}

/// What is wrong with one of them.
#[derive(Clone, Debug, PartialEq)]
pub struct StoredFault {
    /// Key of the configuration that names it.
    pub key: &'static str,
    /// What is wrong, in words that follow its name.
    pub reason: String,
    /// What may stand there.
    pub allowed: String,
}

/// The text of the table with the header of its layout.
///
/// # Errors
/// The first fault found.
pub fn text(path: &Path, places: Places, layout: Layout) -> Result<String, StoredFault> {
    let [axis, values] = [("axis", places.axis, 0), ("dataset", places.dataset, 1)].map(|(key, place, i)| {
        numbers(path, place, layout.units[i]).map_err(|(reason, allowed)| StoredFault {
            key,
            reason,
            allowed,
        })
    });
    let (axis, values) = (axis?, values?);
    let fault =
        |key, reason: String, allowed: &str| Err(StoredFault { key, reason, allowed: allowed.into() });
    if axis.len() != values.len() || axis.len() < FEWEST {
        let reason = format!("has {} values, and the dataset {}", axis.len(), values.len());
        return fault("axis", reason, &format!("equal numbers, {FEWEST} or more"));
    }
    if let Some(i) = (1..axis.len()).find(|&i| axis[i] <= axis[i - 1]) {
        return fault("axis", format!("does not rise at position {i}"), "rising values");
    }
    let mut text = format!("{}\n", layout.header);
    for (x, y) in axis.iter().zip(&values) {
        let _ = writeln!(text, "{x:e},{y:e}");
    }
    Ok(text)
}

/// Numbers of a dataset in a unit; else what is wrong and what is allowed.
fn numbers(path: &Path, place: &str, wanted: &str) -> Result<Vec<f64>, (String, String)> {
    let dataset = || "the path of a dataset of numbers along one axis".to_owned();
    let found = column(path, place).map_err(|reason| (reason, dataset()))?;
    let units = || format!("an attribute units that can be converted to {wanted}");
    let Some(unit) = found.units else { return Err(("has no attribute units".into(), units())) };
    let factor = pint::factor(&unit, wanted).ok_or_else(|| (format!("has the units {unit:?}"), units()))?;
    let converted: Vec<f64> = found.values.iter().map(|value| value * factor).collect();
    match converted.iter().position(|value| !value.is_finite()) {
        Some(i) => Err((format!("has no number at position {i}"), "finite numbers".into())),
        None => Ok(converted),
    }
}
