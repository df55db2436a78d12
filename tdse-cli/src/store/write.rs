//! From a result in memory to a file.

use std::path::Path;

use super::contents::{Contents, Group};
use super::error::Error;
use super::group::GroupWriter;
use super::hdf5::{Failure, Node};
use super::table::{self, Role};
use super::{atomic, entry};

/// Writes a result to `path`: there is the whole file or, on any error and whenever killed, what was there before.
///
/// Groups that hold axes only are left out.
pub fn write(path: &Path, contents: &Contents) -> Result<(), Error> {
    atomic::create(path, |root| put(root, contents).map_err(Error::write(path)))
}

/// Fills a file.
pub(super) fn put(root: &Node, contents: &Contents) -> Result<(), Failure> {
    let entry = entry::begin(root, &contents.provenance, contents.scan())?;
    for (path, group) in contents.groups().filter(|(path, group)| has_values(path, group)) {
        let mut writer = GroupWriter::new(&entry, path, contents.scan())?;
        for (name, values) in &group.arrays {
            writer.put(name, values)?;
        }
        writer.finish(&group.attributes)?;
    }
    entry::finish(&entry)
}

/// Whether the file has the group.
pub(super) fn has_values(path: &str, group: &Group) -> bool {
    let value = |name: &String| {
        let found = table::group(path).and_then(|group| group.dataset(name));
        found.is_none_or(|dataset| dataset.role == Role::Value)
    };
    group.arrays.keys().any(value)
}
