//! The layout: every group and dataset of a result with its unit, axes and meaning.
//!
//! Writer, reader, gathering, reports, documentation and tests read this table; nothing else knows a name or unit.
//! Units are written as the Python library pint reads them. A new output is a new line in [`GROUPS`].

use tdse_core::problem::ElectronMethod;

mod groups;
mod models;

pub use groups::GROUPS;
pub use models::verdict_number;

/// Version of the layout. Readers take lower ones and refuse higher ones; raised when the meaning of an existing
/// name changes, not when names are added.
pub const LAYOUT_VERSION: i64 = 1;

/// A group below `/entry`, or below `/entry/models/NAME`; an NXdata of the NeXus base classes.
#[derive(Debug)]
pub struct Group {
    /// Its name.
    pub name: &'static str,
    /// Its title.
    pub title: &'static str,
    /// The dataset shown by default.
    pub signal: &'static str,
    /// Datasets shown with it where they have the same axes.
    pub auxiliary: &'static [&'static str],
    /// What it may hold. An axis stands before what uses it.
    pub datasets: &'static [Dataset],
}

/// A dataset of a group.
#[derive(Debug)]
pub struct Dataset {
    /// Its name.
    pub name: &'static str,
    /// Its meaning, in words for the label of a plot.
    pub long_name: &'static str,
    /// Element type.
    pub kind: Kind,
    /// What it is to the others in the group.
    pub role: Role,
    /// Axes and unit for an atom of one dimension.
    pub line: Form,
    /// Axes and unit for an atom of two dimensions.
    pub plane: Form,
}

/// Element type of a dataset.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Kind {
    /// Double precision number.
    Real,
    /// Whole number.
    Integer,
    /// Text in UTF-8.
    Text,
}

/// What a dataset is to the others in its group.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Role {
    /// The coordinates of the dimension named like it.
    Axis,
    /// A second set of coordinates along an axis.
    Coordinate,
    /// A result.
    Value,
}

/// Axes and unit of a dataset.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Form {
    /// Names of the axes, slowest first.
    pub axes: &'static [&'static str],
    /// Unit; none for text.
    pub units: Option<&'static str>,
}

/// How far a point of a scan has come, in `summary/status`.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Status {
    /// Computed.
    Done = 0,
    /// Computed, with doubts that `reason` names.
    Doubtful = 1,
    /// Failed for the reason that `reason` names.
    Failed = 2,
    /// Not computed yet.
    Missing = 3,
}

impl Status {
    /// All of them with the word for each.
    pub const MEANINGS: [(Self, &'static str); 4] = [
        (Self::Done, "done"),
        (Self::Doubtful, "doubtful"),
        (Self::Failed, "failed"),
        (Self::Missing, "missing"),
    ];
}

/// Words for the numbers of `summary/electron_method`; whole numbers that a gathered file lacks read as -1.
fn electron_methods() -> Vec<(i64, &'static str)> {
    let methods = [ElectronMethod::ScatteringStates, ElectronMethod::OutgoingAmplitude];
    std::iter::once((-1, "none")).chain(methods.map(|method| (method as i64, method.name()))).collect()
}

/// The group at a path below `/entry`: `harmonics`, or `models/NAME/harmonics`.
pub fn group(path: &str) -> Option<&'static Group> {
    let name = match path.split('/').collect::<Vec<_>>()[..] {
        [name] => name,
        ["models", model, name] if !model.is_empty() => name,
        _ => return None,
    };
    GROUPS.iter().find(|group| group.name == name)
}

impl Group {
    /// The dataset of this name.
    pub fn dataset(&self, name: &str) -> Option<&'static Dataset> {
        self.datasets.iter().find(|dataset| dataset.name == name)
    }

    /// Where the dataset stands in the list; those before it may be its axes.
    pub fn position(&self, name: &str) -> Option<usize> {
        self.datasets.iter().position(|dataset| dataset.name == name)
    }

    /// Whether it holds series in time, which for a scan stay in the files of the points.
    pub fn is_series(&self) -> bool {
        self.dataset("time").is_some()
    }
}

impl Dataset {
    /// The words for its numbers, where they stand for words.
    pub fn flags(&self) -> Option<Vec<(i64, &'static str)>> {
        match self.name {
            "status" => Some(Status::MEANINGS.map(|(status, word)| (status as i64, word)).to_vec()),
            "electron_method" => Some(electron_methods()),
            "branch" => Some(models::branches()),
            name if name.ends_with("verdict") => Some(models::verdicts()),
            _ => None,
        }
    }

    /// Its unit for an atom of one dimension as people write it: empty for a pure number.
    pub fn unit(&self) -> &'static str {
        self.line.units.filter(|units| *units != "1").unwrap_or_default()
    }

    /// Axes and unit of an array with `rank` dimensions; none if it cannot have so many.
    ///
    /// An axis has one dimension, itself, which its form does not list.
    pub fn form(&self, rank: usize) -> Option<Form> {
        [self.line, self.plane].into_iter().find(|form| match self.role {
            Role::Axis => rank == 1,
            Role::Coordinate | Role::Value => form.axes.len() == rank,
        })
    }
}

/// Whether the layout uses this name where it could meet a scan axis, so that no scan axis can have it.
///
/// Results in time stay in the files of the points, so only their axes count: a scan may have an axis `intensity`.
pub fn is_reserved_name(name: &str) -> bool {
    let above = ["entry", "provenance", "models", "inputs", "title", "start_time", "end_time"];
    let suffixes = ["_errors", "_indices"];
    above.contains(&name)
        || suffixes.iter().any(|suffix| name.ends_with(suffix))
        || GROUPS.iter().any(|group| {
            let used =
                group.dataset(name).is_some_and(|found| found.role == Role::Axis || !group.is_series());
            used || group.name == name
        })
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_name_in_the_table_resolves() {
        for group in GROUPS {
            let signal = group.dataset(group.signal).expect(group.name);
            assert_eq!(signal.role, Role::Value, "{}", group.name);
            for name in group.auxiliary {
                assert_eq!(group.dataset(name).expect(name).line.axes, signal.line.axes, "{name}");
            }
            for (position, dataset) in group.datasets.iter().enumerate() {
                for axis in dataset.line.axes.iter().chain(dataset.plane.axes) {
                    let before = group.datasets[..position].iter().find(|other| other.name == *axis);
                    assert_eq!(before.expect(axis).role, Role::Axis, "{}/{}", group.name, dataset.name);
                }
            }
        }
    }

    #[test]
    fn names_of_the_layout_are_reserved() {
        for name in
            ["spectrum", "time", "harmonics", "component", "order", "models", "yield_errors", "x_indices"]
        {
            assert!(is_reserved_name(name), "{name}");
        }
        for name in ["cep", "wavelength", "intensity", "_field_pulses_0_phase"] {
            assert!(!is_reserved_name(name), "{name}");
        }
    }

    #[test]
    fn models_hold_the_same_groups() {
        assert_eq!(group("models/three_step/harmonics").unwrap().name, "harmonics");
        assert!(group("models/harmonics").is_none());
        assert!(group("harmonics/spectrum").is_none());
    }
}
