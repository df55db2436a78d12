//! The axes of a scan, which come first in every stacked dataset.

use super::error::Error;
use super::table::is_reserved_name;
use super::values::Values;

/// One quantity that a scan varies.
#[derive(Clone, Debug, PartialEq)]
pub struct ScanAxis {
    /// Its name in the file.
    pub name: String,
    /// Unit as the Python library pint reads it; none for text.
    pub units: Option<String>,
    /// Words for the label of a plot.
    pub long_name: String,
    /// One-dimensional: the value at each position.
    pub values: Values,
}

/// One dimension of the grid of points: an axis, and those that move in step with it.
#[derive(Clone, Debug, PartialEq)]
pub struct ScanDimension {
    /// The first gives the dimension its name and coordinates, the others further coordinates; equal lengths.
    pub axes: Vec<ScanAxis>,
}

impl ScanDimension {
    /// The name of the dimension.
    pub fn name(&self) -> &str {
        &self.axes[0].name
    }

    /// The number of positions.
    pub fn length(&self) -> usize {
        self.axes[0].values.shape()[0]
    }
}

/// Checks that every name can stand in a file beside the layout's own.
///
/// # Panics
///
/// If a dimension has no axis, or its axes are not one-dimensional and of equal length.
pub(super) fn check(scan: &[ScanDimension]) -> Result<(), Error> {
    let mut seen = Vec::new();
    for dimension in scan {
        for axis in &dimension.axes {
            let shape = axis.values.shape();
            assert_eq!(shape, [dimension.length()], "shape of the scan axis {}", axis.name);
            let refuse = |reason| Err(Error::AxisName { name: axis.name.clone(), reason });
            if is_reserved_name(&axis.name) {
                return refuse("the layout of the results uses it");
            }
            if !is_identifier(&axis.name) {
                return refuse("only letters, digits and _ are allowed, and no digit first");
            }
            if seen.contains(&&axis.name) {
                return refuse("another scan axis has it");
            }
            seen.push(&axis.name);
        }
    }
    Ok(())
}

fn is_identifier(name: &str) -> bool {
    name.chars().all(|c| c.is_alphanumeric() || c == '_')
        && name.chars().next().is_some_and(|c| !c.is_numeric())
}
