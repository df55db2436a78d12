//! A result in memory.

use std::collections::BTreeMap;

use ndarray::ArrayD;

use super::axes::{self, ScanDimension};
use super::error::Error;
use super::provenance::Provenance;
use super::table::{self, Dataset, Form, Kind, Role};
use super::values::Values;

/// A result in memory: arrays in the groups, shapes and units of the layout.
///
/// Groups are named as below `/entry`: `harmonics`, or `models/NAME/harmonics`.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Contents {
    /// Where it comes from.
    pub provenance: Provenance,
    scan: Vec<ScanDimension>,
    groups: BTreeMap<String, Group>,
}

/// One group of a result.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Group {
    /// The arrays by name.
    pub arrays: BTreeMap<String, Values>,
    /// Remarks on the whole group, such as the name of a window.
    pub attributes: BTreeMap<String, String>,
}

impl Contents {
    /// An empty result of one point.
    pub fn new(provenance: Provenance) -> Self {
        Self { provenance, ..Self::default() }
    }

    /// An empty result of a scan, whose dimensions come first in every array that is not an axis.
    ///
    /// # Panics
    ///
    /// If a dimension has no axis, or its axes are not one-dimensional and of equal length.
    pub fn of_scan(provenance: Provenance, scan: Vec<ScanDimension>) -> Result<Self, Error> {
        axes::check(&scan)?;
        Ok(Self { provenance, scan, ..Self::default() })
    }

    /// The dimensions of the scan; empty for one point.
    pub fn scan(&self) -> &[ScanDimension] {
        &self.scan
    }

    /// The groups in alphabetical order.
    pub fn groups(&self) -> impl Iterator<Item = (&str, &Group)> {
        self.groups.iter().map(|(path, group)| (path.as_str(), group))
    }

    /// The array `name` of a group.
    pub fn get(&self, group: &str, name: &str) -> Option<&Values> {
        self.groups.get(group)?.arrays.get(name)
    }

    /// The same where it holds double precision numbers.
    pub fn real(&self, group: &str, name: &str) -> Option<&ArrayD<f64>> {
        match self.get(group, name)? {
            Values::Real(array) => Some(array),
            Values::Integer(_) | Values::Text(_) => None,
        }
    }

    /// Every real value of the groups that hold no series in time, with its group.
    pub fn numbers(&self) -> impl Iterator<Item = (&str, &'static Dataset, &ArrayD<f64>)> {
        let known =
            |(path, group)| Some((path, group, table::group(path).filter(|known| !known.is_series())?));
        self.groups().filter_map(known).flat_map(|(path, group, known)| {
            group.arrays.iter().filter_map(move |(name, values)| match (known.dataset(name)?, values) {
                (dataset, Values::Real(array)) if dataset.role == Role::Value => Some((path, dataset, array)),
                _ => None,
            })
        })
    }

    /// Puts an array in. Axes go in before what uses them; `NAME_errors` holds the errors of `NAME`.
    ///
    /// # Panics
    ///
    /// If the table does not know the name, or gives it another element type, or other axes than the dimensions
    /// of the array and the lengths of the axes already there allow.
    pub fn insert(&mut self, group: &str, name: &str, values: impl Into<Values>) {
        let inserted = self.try_insert(group, name, values.into());
        assert!(inserted.is_ok(), "{group}/{name}: {}", inserted.unwrap_err());
    }

    /// The same with the reason as an error.
    pub(super) fn try_insert(&mut self, path: &str, name: &str, values: Values) -> Result<(), String> {
        let found = Member::find(path, name).ok_or("the layout has no such dataset")?;
        if values.kind() != found.dataset.kind {
            return Err(format!("{:?} values where {:?} ones are due", values.kind(), found.dataset.kind));
        }
        let shape = values.shape();
        let dimensions = found.dimensions(shape.len(), &self.scan).ok_or("wrong number of dimensions")?;
        for (dimension, &length) in dimensions.iter().zip(shape) {
            match self.length(path, dimension) {
                Some(expected) if expected == length => {}
                Some(expected) => return Err(format!("{length} values along {dimension} of {expected}")),
                None if *dimension == name => {}
                None => return Err(format!("its axis {dimension} is not there yet")),
            }
        }
        self.groups.entry(path.into()).or_default().arrays.insert(name.into(), values);
        Ok(())
    }

    fn length(&self, group: &str, dimension: &str) -> Option<usize> {
        let of_scan = self.scan.iter().find(|scanned| scanned.name() == dimension);
        of_scan.map(ScanDimension::length).or_else(|| Some(self.get(group, dimension)?.shape()[0]))
    }

    /// Takes a group out with all that is in it.
    pub fn remove_group(&mut self, group: &str) {
        self.groups.remove(group);
    }

    /// Takes one array out.
    pub fn remove(&mut self, group: &str, name: &str) {
        if let Some(group) = self.groups.get_mut(group) {
            group.arrays.remove(name);
        }
    }

    /// Attaches a remark to a group, such as the name of the window used.
    ///
    /// # Panics
    ///
    /// If the table does not know the group, or the layout itself uses the attribute's name.
    pub fn remark(&mut self, group: &str, name: &str, text: &str) {
        assert!(table::group(group).is_some(), "the layout has no group {group}");
        assert!(!is_structural(name), "the layout uses the attribute {name}");
        self.groups.entry(group.into()).or_default().attributes.insert(name.into(), text.into());
    }
}

/// Whether an attribute of a group is the layout's own, not a remark.
pub(super) fn is_structural(attribute: &str) -> bool {
    ["NX_class", "title", "signal", "auxiliary_signals", "axes"].contains(&attribute)
        || attribute.ends_with("_indices")
}

/// What the table says about an array.
pub(super) struct Member {
    pub dataset: &'static Dataset,
    pub errors_of: Option<&'static str>,
}

impl Member {
    /// Looks a name up; `NAME_errors` is found where `NAME` is a number that has errors.
    pub fn find(group: &str, name: &str) -> Option<Self> {
        let group = table::group(group)?;
        if let Some(dataset) = group.dataset(name) {
            return Some(Self { dataset, errors_of: None });
        }
        let dataset = group.dataset(name.strip_suffix("_errors")?)?;
        let has_errors = dataset.kind == Kind::Real && dataset.role == Role::Value;
        has_errors.then_some(Self { dataset, errors_of: Some(dataset.name) })
    }

    /// Words for the label of a plot.
    pub fn long_name(&self) -> String {
        let prefix = if self.errors_of.is_some() { "Error of: " } else { "" };
        format!("{prefix}{}", self.dataset.long_name)
    }

    /// The names of the dimensions of an array of this rank, and its unit; none if it cannot have this rank.
    ///
    /// Values have the dimensions of the scan first. A coordinate may be common to the whole scan.
    pub fn shape(&self, rank: usize, scan: &[ScanDimension]) -> Option<(Vec<String>, Form)> {
        let own = |rank: usize| self.dataset.form(rank);
        let stacked = || Some((scan, own(rank.checked_sub(scan.len())?)?));
        let (leading, form) = match self.dataset.role {
            Role::Axis => (&[][..], own(rank)?),
            Role::Coordinate => own(rank).map(|form| (&[][..], form)).or_else(stacked)?,
            Role::Value => stacked()?,
        };
        let axes = if self.dataset.role == Role::Axis { &[self.dataset.name][..] } else { form.axes };
        let leading = leading.iter().map(ScanDimension::name);
        Some((leading.chain(axes.iter().copied()).map(Into::into).collect(), form))
    }

    fn dimensions(&self, rank: usize, scan: &[ScanDimension]) -> Option<Vec<String>> {
        self.shape(rank, scan).map(|(dimensions, _)| dimensions)
    }
}
