//! Dimension scales: which dataset holds the coordinates of which dimension of which other dataset.
//!
//! The attributes are those of the HDF5 dimension scale specification (The HDF Group, "HDF5 Dimension Scale
//! Specification and Design Notes", 2005), which h5py, netCDF-4 and its readers follow.

use hdf5_metno::types::VarLenArray;
use hdf5_metno::{Group, H5Type, ObjectReference1, Result};

use super::terminated;

/// One entry of a scale's `REFERENCE_LIST`: a dataset, and which of its dimensions the scale describes.
#[derive(H5Type, Clone, Copy)]
#[repr(C)]
struct Use {
    dataset: ObjectReference1,
    dimension: i32,
}

/// Makes scales of the named datasets of `group`, and ties the dimensions of the others to them.
///
/// `arrays` lists the datasets that are no scales, each with the scale of every dimension.
pub(super) fn attach(group: &Group, scales: &[&str], arrays: &[(&str, Vec<&str>)]) -> Result<()> {
    for &(name, ref dimensions) in arrays.iter().filter(|(_, dimensions)| !dimensions.is_empty()) {
        let list = dimensions
            .iter()
            .map(|&scale| Ok(VarLenArray::from_slice(&[group.reference::<ObjectReference1>(scale)?])))
            .collect::<Result<Vec<_>>>()?;
        group.dataset(name)?.new_attr_builder().with_data(&list).create("DIMENSION_LIST")?;
    }
    scales.iter().try_for_each(|scale| mark(group, scale, arrays))
}

fn mark(group: &Group, scale: &str, arrays: &[(&str, Vec<&str>)]) -> Result<()> {
    let mut uses = Vec::new();
    for (name, dimensions) in arrays {
        for (dimension, _) in (0..).zip(dimensions).filter(|(_, of)| **of == scale) {
            uses.push(Use { dataset: group.reference(name)?, dimension });
        }
    }
    let dataset = group.dataset(scale)?;
    terminated::set(&dataset, "CLASS", "DIMENSION_SCALE")?;
    terminated::set(&dataset, "NAME", scale)?;
    if !uses.is_empty() {
        dataset.new_attr_builder().with_data(&uses).create("REFERENCE_LIST")?;
    }
    Ok(())
}
