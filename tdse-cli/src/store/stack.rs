//! The groups of a gathered file while the points are added one by one.

use std::collections::btree_map::{BTreeMap, Entry};
use std::fmt::Display;
use std::path::{Path, PathBuf};

use super::axes::ScanDimension;
use super::contents::{Contents, Group, Member};
use super::error::Error;
use super::group::GroupWriter;
use super::hdf5::{Failure, Node};
use super::table::Role;
use super::values::Values;

/// The groups of a gathered file; each begins with the first point that has it.
pub(super) struct Stack<'a> {
    path: &'a Path,
    entry: &'a Node,
    scan: &'a [ScanDimension],
    groups: BTreeMap<String, GroupStack<'a>>,
}

impl<'a> Stack<'a> {
    /// No groups yet, in the file at `path`.
    pub fn new(path: &'a Path, entry: &'a Node, scan: &'a [ScanDimension]) -> Self {
        Self { path, entry, scan, groups: BTreeMap::new() }
    }

    /// Adds the point that was read from `file`.
    pub fn add(&mut self, index: &[usize], file: &Path, point: &Contents) -> Result<(), Error> {
        for (path, group) in point.groups() {
            let stack = match self.groups.entry(path.into()) {
                Entry::Occupied(begun) => begun.into_mut(),
                Entry::Vacant(place) => {
                    let writer = GroupWriter::new(self.entry, path, self.scan);
                    place.insert(GroupStack::new(path, writer.map_err(Error::write(self.path))?))
                }
            };
            stack.add(index, file, group).map_err(|refusal| match refusal {
                Refusal::Write(failure) => Error::write(self.path)(failure),
                Refusal::Differs { name, first, reason } => Error::Unstackable {
                    dataset: format!("{path}/{name}"),
                    first,
                    other: file.into(),
                    reason,
                },
            })?;
        }
        Ok(())
    }

    /// Completes all groups.
    pub fn finish(self) -> Result<(), Error> {
        let path = self.path;
        self.groups.into_values().try_for_each(GroupStack::finish).map_err(Error::write(path))
    }
}

/// Why a point cannot be added.
enum Refusal {
    Write(Failure),
    Differs { name: String, first: PathBuf, reason: String },
}

impl From<Failure> for Refusal {
    fn from(failure: Failure) -> Self {
        Self::Write(failure)
    }
}

/// One group.
struct GroupStack<'a> {
    path: String,
    writer: GroupWriter<'a>,
    arrays: BTreeMap<String, ArrayStack>,
    remarks: BTreeMap<String, String>,
}

impl<'a> GroupStack<'a> {
    fn new(path: &str, writer: GroupWriter<'a>) -> Self {
        Self { path: path.into(), writer, arrays: BTreeMap::new(), remarks: BTreeMap::new() }
    }

    fn add(&mut self, index: &[usize], file: &Path, group: &Group) -> Result<(), Refusal> {
        for (name, values) in &group.arrays {
            if let Some(array) = self.arrays.get_mut(name) {
                if array.has_other_rank(values) {
                    self.remarks.insert(LEFT_OUT.into(), LEFT_OUT_WHY.into());
                    continue;
                }
                array.add(&mut self.writer, name, index, values)?;
            } else {
                let state = self.begin(name, index, values)?;
                self.arrays.insert(name.clone(), ArrayStack { first: file.into(), state });
            }
        }
        for (name, text) in &group.attributes {
            let known = self.remarks.entry(name.clone()).or_insert_with(|| text.clone());
            if known != text {
                *known = "varies".into();
            }
        }
        Ok(())
    }

    /// Takes the array of the first point that has it.
    fn begin(&mut self, name: &str, index: &[usize], values: &Values) -> Result<State, Failure> {
        let member = Member::find(&self.path, name).ok_or_else(|| format!("{name} is not in the layout"))?;
        match member.dataset.role {
            Role::Axis => {
                self.writer.put(name, values)?;
                Ok(State::Axis(values.clone()))
            }
            Role::Coordinate => Ok(State::Common(values.clone(), vec![index.to_vec()])),
            Role::Value => {
                self.writer.reserve(name, values.kind(), values.shape())?;
                self.writer.fill(name, index, values)?;
                Ok(State::Stacked(values.shape().to_vec()))
            }
        }
    }

    fn finish(mut self) -> Result<(), Failure> {
        for (name, array) in &self.arrays {
            if let State::Common(values, _) = &array.state {
                self.writer.put(name, values)?;
            }
        }
        self.writer.finish(&self.remarks)
    }
}

/// One array, with the file of the point that had it first.
struct ArrayStack {
    first: PathBuf,
    state: State,
}

enum State {
    /// An axis: written, the same in all points.
    Axis(Values),
    /// A further coordinate: not written yet, the same so far in the points at these indices.
    Common(Values, Vec<Vec<usize>>),
    /// Room for all points was made, of this shape each.
    Stacked(Vec<usize>),
}

/// Remark on arrays that stay in the files of their points.
const LEFT_OUT: &str = "left_out";
const LEFT_OUT_WHY: &str =
    "arrays whose number of axes differs between one and two dimensions: those of the first point are here";

impl ArrayStack {
    /// Whether points in one and in two dimensions meet here: their vectors and momenta have other axes.
    fn has_other_rank(&self, values: &Values) -> bool {
        let rank = match &self.state {
            State::Axis(known) | State::Common(known, _) => known.shape().len(),
            State::Stacked(shape) => shape.len(),
        };
        rank != values.shape().len()
    }

    /// Takes the array of a further point.
    fn add(
        &mut self,
        writer: &mut GroupWriter,
        name: &str,
        index: &[usize],
        values: &Values,
    ) -> Result<(), Refusal> {
        let Self { first, state } = self;
        let differs = |reason| Err(Refusal::Differs { name: name.into(), first: first.clone(), reason });
        match state {
            State::Axis(known) if known.is_identical(values) => Ok(()),
            State::Axis(known) => differs(difference(known, values)),
            State::Common(known, seen) if known.is_identical(values) => {
                seen.push(index.to_vec());
                Ok(())
            }
            State::Common(known, seen) if known.shape() == values.shape() => {
                writer.reserve(name, known.kind(), known.shape())?;
                seen.iter().try_for_each(|index| writer.fill(name, index, known))?;
                writer.fill(name, index, values)?;
                *state = State::Stacked(values.shape().to_vec());
                Ok(())
            }
            State::Stacked(shape) if shape == values.shape() => Ok(writer.fill(name, index, values)?),
            State::Common(..) | State::Stacked(_) => {
                differs(format!("its shape {:?} is another", values.shape()))
            }
        }
    }
}

/// How two axes differ.
fn difference(known: &Values, other: &Values) -> String {
    let (known_length, length) = (known.shape()[0], other.shape()[0]);
    if known_length != length {
        return format!("{length} values instead of {known_length}");
    }
    match (known, other) {
        (Values::Real(known), Values::Real(other)) => first_difference(known.iter().zip(other)),
        (Values::Integer(known), Values::Integer(other)) => first_difference(known.iter().zip(other)),
        _ => "other texts".into(),
    }
}

fn first_difference<'v, T: PartialEq + Display + 'v>(pairs: impl Iterator<Item = (&'v T, &'v T)>) -> String {
    let mut different = pairs.enumerate().filter(|(_, (known, other))| known != other);
    different.next().map_or_else(
        || "other bits of the same numbers".into(),
        |(position, (known, other))| format!("{other} instead of {known} at position {position}"),
    )
}
