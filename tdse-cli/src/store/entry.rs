//! The top of every file: what the file is, where it comes from, what to show first.

use super::axes::ScanDimension;
use super::hdf5::{Attribute, Failure, Node};
use super::provenance::Provenance;
use super::table::{GROUPS, LAYOUT_VERSION};

/// Makes `/entry` with the provenance in it.
pub(super) fn begin(root: &Node, provenance: &Provenance, scan: &[ScanDimension]) -> Result<Node, Failure> {
    root.set("NX_class", &Attribute::Text("NXroot"))?;
    root.set("default", &Attribute::Text("entry"))?;
    root.set("layout_version", &Attribute::Integer(LAYOUT_VERSION))?;
    let entry = root.create("entry", "NXentry")?;
    let names: Vec<_> =
        scan.iter().flat_map(|dimension| &dimension.axes).map(|axis| axis.name.as_str()).collect();
    if !names.is_empty() {
        entry.set("scan_axes", &Attribute::Texts(&names))?;
    }
    provenance.write(&entry)?;
    Ok(entry)
}

/// Makes the first data group present the one that viewers show.
pub(super) fn finish(entry: &Node) -> Result<(), Failure> {
    match GROUPS.iter().find(|group| entry.has(group.name)) {
        Some(first) => entry.set("default", &Attribute::Text(first.name)),
        None => Ok(()),
    }
}
