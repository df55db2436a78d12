//! Writing one group of a file: its arrays, then what ties them together for NeXus, netCDF and xarray.

use std::collections::BTreeMap;

use super::axes::{ScanAxis, ScanDimension};
use super::contents::Member;
use super::hdf5::{Array, Attribute, Failure, Node};
use super::table::{self, Kind, Role};
use super::values::Values;

/// A group being written.
pub(super) struct GroupWriter<'a> {
    node: Node,
    path: String,
    scan: &'a [ScanDimension],
    written: Vec<Written>,
}

/// An array of the group, kept open: compressed pieces that several points share stay in its cache.
struct Written {
    name: String,
    role: Role,
    kind: Kind,
    dimensions: Vec<String>,
    array: Array,
}

impl<'a> GroupWriter<'a> {
    /// Makes the group at `path` below `/entry`, with the axes of the scan in it.
    ///
    /// Readers look for the coordinates of a dimension in the group itself, so each group has its own copy.
    pub fn new(entry: &Node, path: &str, scan: &'a [ScanDimension]) -> Result<Self, Failure> {
        for (end, _) in path.match_indices('/') {
            if !entry.has(&path[..end]) {
                entry.create(&path[..end], "NXcollection")?;
            }
        }
        let node = entry.create(path, "NXdata")?;
        let mut group = Self { node, path: path.into(), scan, written: Vec::new() };
        for dimension in scan {
            for axis in &dimension.axes {
                group.put_scan_axis(axis, dimension.name())?;
            }
        }
        Ok(group)
    }

    fn put_scan_axis(&mut self, axis: &ScanAxis, dimension: &str) -> Result<(), Failure> {
        let array = self.node.write(&axis.name, &axis.values)?;
        array.set("long_name", &Attribute::Text(&axis.long_name))?;
        if let Some(units) = &axis.units {
            array.set("units", &Attribute::Text(units))?;
        }
        self.written.push(Written {
            name: axis.name.clone(),
            role: if axis.name == dimension { Role::Axis } else { Role::Coordinate },
            kind: axis.values.kind(),
            dimensions: vec![dimension.into()],
            array,
        });
        Ok(())
    }

    /// Writes an array whole.
    pub fn put(&mut self, name: &str, values: &Values) -> Result<(), Failure> {
        let array = self.node.write(name, values)?;
        self.describe(name, values.shape().len(), array)
    }

    /// Makes an array over the whole scan, from the shape it has in one point.
    pub fn reserve(&mut self, name: &str, kind: Kind, of_point: &[usize]) -> Result<(), Failure> {
        let shape: Vec<_> =
            self.scan.iter().map(ScanDimension::length).chain(of_point.iter().copied()).collect();
        let array = self.node.reserve(name, kind, &shape)?;
        self.describe(name, shape.len(), array)
    }

    /// Writes the part of one point.
    pub fn fill(&self, name: &str, index: &[usize], values: &Values) -> Result<(), Failure> {
        let found = self.written.iter().find(|written| written.name == name);
        found.ok_or_else(|| format!("no room was made for {name}"))?.array.fill(index, values)
    }

    fn describe(&mut self, name: &str, rank: usize, array: Array) -> Result<(), Failure> {
        let member = Member::find(&self.path, name).ok_or_else(|| format!("{name} is not in the layout"))?;
        let (dimensions, form) =
            member.shape(rank, self.scan).ok_or_else(|| format!("{name} cannot have {rank} dimensions"))?;
        array.set("long_name", &Attribute::Text(&member.long_name()))?;
        if let Some(units) = form.units {
            array.set("units", &Attribute::Text(units))?;
        }
        if let Some(flags) = member.dataset.flags() {
            array.set(
                "flag_values",
                &Attribute::Integers(&flags.iter().map(|(number, _)| *number).collect::<Vec<_>>()),
            )?;
            array.set(
                "flag_meanings",
                &Attribute::Text(&flags.iter().map(|(_, word)| *word).collect::<Vec<_>>().join(" ")),
            )?;
        }
        let (role, kind) = (member.dataset.role, member.dataset.kind);
        self.written.push(Written { name: name.into(), role, kind, dimensions, array });
        Ok(())
    }

    /// Ties the arrays together and attaches the remarks.
    pub fn finish(self, remarks: &BTreeMap<String, String>) -> Result<(), Failure> {
        self.attach_scales()?;
        self.attach_coordinates()?;
        self.attach_signal()?;
        remarks.iter().try_for_each(|(name, text)| self.node.set(name, &Attribute::Text(text)))
    }

    fn of(&self, role: Role) -> impl Iterator<Item = &Written> {
        self.written.iter().filter(move |written| written.role == role)
    }

    fn attach_scales(&self) -> Result<(), Failure> {
        let scales: Vec<_> = self.of(Role::Axis).map(|axis| axis.name.as_str()).collect();
        let arrays = self.of(Role::Coordinate).chain(self.of(Role::Value));
        let arrays: Vec<_> = arrays
            .map(|array| (array.name.as_str(), array.dimensions.iter().map(String::as_str).collect()))
            .collect();
        self.node.attach_scales(&scales, &arrays)
    }

    /// Names the further coordinates of every value, as the CF conventions do (Climate and Forecast metadata
    /// conventions 1.11, section 5).
    fn attach_coordinates(&self) -> Result<(), Failure> {
        for value in self.of(Role::Value) {
            let along = self.of(Role::Coordinate).filter(|further| further.runs_along(value));
            let names: Vec<_> = along.map(|further| further.name.as_str()).collect();
            if !names.is_empty() {
                value.array.set("coordinates", &Attribute::Text(&names.join(" ")))?;
            }
        }
        Ok(())
    }

    /// What to plot over what, as NXdata of the NeXus base classes says it.
    fn attach_signal(&self) -> Result<(), Failure> {
        let table = table::group(&self.path).ok_or_else(|| format!("{} is not in the layout", self.path))?;
        self.node.set("title", &Attribute::Text(table.title))?;
        let preferred = self.of(Role::Value).find(|value| value.name == table.signal);
        let Some(signal) = preferred.or_else(|| self.of(Role::Value).next()) else {
            return Ok(());
        };
        self.node.set("signal", &Attribute::Text(&signal.name))?;
        let beside = self.of(Role::Value).filter(|value| {
            table.auxiliary.contains(&value.name.as_str()) && value.dimensions == signal.dimensions
        });
        let beside: Vec<_> = beside.map(|value| value.name.as_str()).collect();
        if !beside.is_empty() {
            self.node.set("auxiliary_signals", &Attribute::Texts(&beside))?;
        }
        if signal.dimensions.is_empty() {
            return Ok(());
        }
        let axes: Vec<_> = signal.dimensions.iter().map(|dimension| self.plottable(dimension)).collect();
        self.node.set("axes", &Attribute::Texts(&axes))?;
        for along in self.of(Role::Axis).chain(self.of(Role::Coordinate)) {
            if let Some(indices) = along.positions_in(signal) {
                self.node.set(&format!("{}_indices", along.name), &Attribute::Indices(&indices))?;
            }
        }
        Ok(())
    }

    /// The dimension as NXdata's `axes` lists it: `.` where the coordinates are texts, which cannot be plotted over.
    fn plottable<'b>(&'b self, dimension: &'b str) -> &'b str {
        let text = self.of(Role::Axis).any(|axis| axis.name == dimension && axis.kind == Kind::Text);
        if text { "." } else { dimension }
    }
}

impl Written {
    fn positions_in(&self, value: &Self) -> Option<Vec<i32>> {
        let position = |dimension| (0..).zip(&value.dimensions).find(|(_, other)| *other == dimension);
        self.dimensions.iter().map(|dimension| position(dimension).map(|(position, _)| position)).collect()
    }

    fn runs_along(&self, value: &Self) -> bool {
        self.positions_in(value).is_some()
    }
}
