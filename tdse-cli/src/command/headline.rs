//! The headline numbers of a single run.

use std::path::Path;

use crate::store::table::{Kind, group};
use crate::store::{Error, read_groups};
use crate::text::{Table, number};

/// A table of the numbers that the result of a single run holds.
///
/// # Errors
/// Where the result cannot be read.
pub fn headline(result: &Path) -> Result<String, Error> {
    let contents = read_groups(result, &["summary"])?;
    let mut table = Table::new();
    let datasets = group("summary").into_iter().flat_map(|group| group.datasets);
    for dataset in datasets.filter(|dataset| dataset.kind == Kind::Real) {
        let value = contents.real("summary", dataset.name).and_then(|array| array.first());
        if let Some(value) = value.filter(|value| value.is_finite()) {
            table.row(dataset.long_name, number(*value), dataset.unit(), "");
        }
    }
    Ok(table.to_string())
}
