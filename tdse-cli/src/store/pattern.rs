//! Files of points that are like those of other points.
//!
//! The points of a scan mostly differ in numbers and a few texts alone. Groups, attributes and dimension scales, most of
//! the work of a small file, are made once: the file of the next point is a copy of the first one's in memory, with
//! whatever differs written over.

use std::collections::{BTreeMap, VecDeque};
use std::path::Path;

use super::atomic::Unfinished;
use super::contents::{Contents, Group};
use super::error::Error;
use super::hdf5::{Failure, File, is_plain};
use super::values::Values;
use super::write::{has_values, put};

/// Most patterns kept: a scan over what changes the lengths of arrays comes back to the same ones.
const MOST: usize = 16;

/// Larger files are written as they come: their numbers take longer than what is around them.
const LARGEST: usize = 1 << 20;

/// The files to copy.
#[derive(Debug, Default)]
pub struct Patterns(VecDeque<Pattern>);

/// A file with what is in it.
#[derive(Debug)]
struct Pattern {
    contents: Contents,
    bytes: Vec<u8>,
}

impl Patterns {
    /// None yet.
    pub fn new() -> Self {
        Self::default()
    }

    /// Writes a result all but its name, which [`publish()`](super::publish()) gives to many files at once.
    ///
    /// It reads like one of [`write()`](super::write()).
    pub fn begin(&mut self, path: &Path, contents: &Contents) -> Result<Unfinished, Error> {
        if !is_small(contents) {
            return Unfinished::hdf5(path, |root| put(root, contents).map_err(Error::write(path)));
        }
        let fitting = self.0.iter().find(|pattern| is_alike(&pattern.contents, contents));
        if let Some(pattern) = fitting {
            return Unfinished::of_bytes(path, &pattern.filled(contents).map_err(Error::write(path))?);
        }
        let bytes = whole(contents).map_err(Error::write(path))?;
        let file = Unfinished::of_bytes(path, &bytes)?;
        self.0.truncate(MOST - 1);
        self.0.push_front(Pattern { contents: contents.clone(), bytes });
        Ok(file)
    }
}

impl Pattern {
    /// The file of contents that are alike.
    fn filled(&self, contents: &Contents) -> Result<Vec<u8>, Failure> {
        let file = File::of_bytes(&self.bytes)?;
        let entry = file.root()?.open("entry")?;
        contents.provenance.overwrite(&self.contents.provenance, &entry)?;
        let groups = contents.groups().zip(self.contents.groups());
        for ((path, group), (_, known)) in groups.filter(|((path, group), _)| has_values(path, group)) {
            for ((name, values), known) in group.arrays.iter().zip(known.arrays.values()) {
                if !values.is_identical(known) {
                    entry.overwrite(&format!("{path}/{name}"), values)?;
                }
            }
        }
        drop(entry);
        file.into_bytes()
    }
}

fn whole(contents: &Contents) -> Result<Vec<u8>, Failure> {
    let file = File::in_memory()?;
    put(&file.root()?, contents)?;
    file.into_bytes()
}

/// Whether it is fit for memory, and to be written over without leaving gaps, as compressed arrays do.
fn is_small(contents: &Contents) -> bool {
    let arrays = || contents.groups().flat_map(|(_, group)| group.arrays.values());
    arrays().all(is_plain) && arrays().map(|values| 8 * values.len()).sum::<usize>() <= LARGEST
}

/// Whether two results differ in nothing but texts of the provenance and values of arrays.
fn is_alike(known: &Contents, other: &Contents) -> bool {
    known.scan() == other.scan()
        && same_keys(&known.provenance.inputs, &other.provenance.inputs)
        && known.groups().count() == other.groups().count()
        && known.groups().zip(other.groups()).all(|((path, group), (other_path, other_group))| {
            path == other_path && are_alike(group, other_group)
        })
}

fn are_alike(known: &Group, other: &Group) -> bool {
    let same_form =
        |(known, other): (&Values, &Values)| known.kind() == other.kind() && known.shape() == other.shape();
    known.attributes == other.attributes
        && same_keys(&known.arrays, &other.arrays)
        && known.arrays.values().zip(other.arrays.values()).all(same_form)
}

fn same_keys<T>(known: &BTreeMap<String, T>, other: &BTreeMap<String, T>) -> bool {
    known.keys().eq(other.keys())
}
