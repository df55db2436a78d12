//! From a file to a result in memory.

use std::fs;
use std::io::Read;
use std::path::Path;

use super::axes::{ScanAxis, ScanDimension};
use super::contents::{Contents, Member, is_structural};
use super::error::Error;
use super::hdf5::{Failure, File, Node, SIGNATURE};
use super::provenance::Provenance;
use super::table::{self, LAYOUT_VERSION};

/// Reads a whole file. What [`write()`](super::write()) wrote comes back exactly.
pub fn read(path: &Path) -> Result<Contents, Error> {
    read_where(path, |_| true)
}

/// Reads the provenance and the given groups, named as in [`Contents`]; those that are not there are left out.
pub fn read_groups(path: &Path, groups: &[&str]) -> Result<Contents, Error> {
    read_where(path, |group| groups.contains(&group))
}

/// Reads the provenance and the groups that `wanted` accepts by their path.
pub fn read_groups_where(path: &Path, wanted: impl Fn(&str) -> bool) -> Result<Contents, Error> {
    read_where(path, wanted)
}

/// Reads the resolved configuration and the group `summary` only: what tells how far a point has come.
pub fn read_headline(path: &Path) -> Result<Contents, Error> {
    take(path, Provenance::read_configuration, |group| group == "summary")
}

/// Reads the groups that `wanted` accepts by their path, no provenance.
pub(super) fn read_arrays(path: &Path, wanted: impl Fn(&str) -> bool) -> Result<Contents, Error> {
    take(path, |_| Ok(Provenance::default()), wanted)
}

fn read_where(path: &Path, wanted: impl Fn(&str) -> bool) -> Result<Contents, Error> {
    take(path, Provenance::read, wanted)
}

fn take(
    path: &Path,
    provenance: impl Fn(&Node) -> Result<Provenance, Failure>,
    wanted: impl Fn(&str) -> bool,
) -> Result<Contents, Error> {
    let file = open(path)?;
    let take = || {
        let entry = file.root()?.open("entry")?;
        let scan = read_scan(&entry)?;
        let mut contents = Contents::of_scan(provenance(&entry)?, scan).map_err(|error| error.to_string())?;
        for group in data_groups(&entry)?.iter().filter(|group| wanted(group)) {
            read_group(&entry, group, &mut contents)?;
        }
        Ok(contents)
    };
    take().map_err(Error::damaged(path))
}

/// Opens a file and makes sure that it is ours, whole, and not from the future.
fn open(path: &Path) -> Result<File, Error> {
    let mut start = Vec::new();
    let opened = fs::File::open(path).and_then(|file| file.take(8).read_to_end(&mut start));
    opened.map_err(Error::io("read", path))?;
    if start.len() < SIGNATURE.len() && SIGNATURE.starts_with(&start) {
        let reason = format!("it ends after {} bytes", start.len());
        return Err(Error::Damaged { path: path.into(), reason });
    }
    if start != SIGNATURE {
        return Err(Error::Foreign { path: path.into(), reason: "it is no HDF5 file" });
    }
    let file = File::open(path).map_err(Error::damaged(path))?;
    let version = file.root().and_then(|root| root.integers("layout_version"));
    match version.map_err(Error::damaged(path))?[..] {
        [found] if found > LAYOUT_VERSION => {
            Err(Error::NewerLayout { path: path.into(), found, known: LAYOUT_VERSION })
        }
        [found] if found > 0 => Ok(file),
        _ => Err(Error::Foreign { path: path.into(), reason: "its root has no attribute layout_version" }),
    }
}

/// The groups of the layout that the file has, in alphabetical order.
fn data_groups(entry: &Node) -> Result<Vec<String>, Failure> {
    let mut paths = entry.names()?;
    if entry.has("models") {
        let models = entry.open("models")?;
        for model in models.groups()? {
            let groups = models.open(&model)?.names()?;
            paths.extend(groups.iter().map(|group| format!("models/{model}/{group}")));
        }
    }
    paths.retain(|path| table::group(path).is_some());
    paths.sort();
    Ok(paths)
}

/// The axes of the scan, from the first group: each has a copy of them.
fn read_scan(entry: &Node) -> Result<Vec<ScanDimension>, Failure> {
    let names = entry.texts("scan_axes")?;
    let mut scan: Vec<ScanDimension> = Vec::new();
    if names.is_empty() {
        return Ok(scan);
    }
    let first = data_groups(entry)?.into_iter().next().ok_or("scan axes without a data group")?;
    let group = entry.open(&first)?;
    for name in names {
        let axis = ScanAxis {
            units: group.text_of(&name, "units")?,
            long_name: group.text_of(&name, "long_name")?.unwrap_or_default(),
            values: group.read(&name, group.kind(&name)?)?,
            name,
        };
        let place = group.integers(&format!("{}_indices", axis.name))?;
        join(&mut scan, axis, &place)?;
    }
    Ok(scan)
}

/// Puts an axis into the dimension at its place, which may be the next new one.
fn join(scan: &mut Vec<ScanDimension>, axis: ScanAxis, place: &[i64]) -> Result<(), String> {
    let wrong = |what: String| Err(format!("the scan axis {} {what}", axis.name));
    let place = match *place {
        [place] => usize::try_from(place).unwrap_or(usize::MAX),
        _ => return wrong(format!("belongs to {} dimensions", place.len())),
    };
    let (next, shape) = (scan.len(), axis.values.shape());
    match scan.get_mut(place) {
        Some(dimension) if shape == [dimension.length()] => dimension.axes.push(axis),
        None if place == next && shape.len() == 1 => scan.push(ScanDimension { axes: vec![axis] }),
        _ => return wrong(format!("has the shape {shape:?}, which does not fit dimension {place}")),
    }
    Ok(())
}

/// Reads what the layout knows of one group; what others added is passed over.
fn read_group(entry: &Node, path: &str, contents: &mut Contents) -> Result<(), Failure> {
    let group = entry.open(path)?;
    let mut names = group.names()?;
    names.retain(|name| Member::find(path, name).is_some());
    names.sort_by_key(|name| table::group(path).and_then(|group| group.position(name)).unwrap_or(usize::MAX));
    for name in names {
        let Some(member) = Member::find(path, &name) else { continue };
        let values = group.read(&name, member.dataset.kind)?;
        contents.try_insert(path, &name, values).map_err(|reason| format!("{path}/{name}: {reason}"))?;
    }
    for name in group.attributes()?.into_iter().filter(|name| !is_structural(name)) {
        if let Some(text) = group.text(&name)? {
            contents.remark(path, &name, &text);
        }
    }
    Ok(())
}
