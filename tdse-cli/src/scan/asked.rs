//! What a folder keeps of a request: a text of the whole that runs anywhere, and the axes of the scan.

use std::collections::BTreeMap;

use serde_json::{Value, json};
use tdse_core::units::Quantity;

use super::points::{Axis, Coordinates, position};
use super::prepare::{NUMERICS_VERSION, Prepared};
use crate::config::complaint::Complaints;
use crate::config::files::INPUTS;
use crate::config::structure::Shape;
use crate::config::{self, pointer, schema};
use crate::store::{AxisValues, Request, TableAxis};

/// What `request.json` says of a request.
///
/// # Errors
/// None for a request that was prepared: its text was read before.
pub fn request(prepared: &Prepared) -> Result<Request, Complaints> {
    let tree = config::parse(&prepared.input, &prepared.overrides)?;
    Ok(Request {
        version: env!("CARGO_PKG_VERSION").into(),
        numerics_version: NUMERICS_VERSION,
        title: prepared.title.clone(),
        input: prepared.input.clone(),
        overrides: prepared.overrides.clone(),
        scan: dimensions(prepared, &tree),
        configuration: portable(prepared, tree),
    })
}

/// The tables of all points by the names under which results keep them.
pub fn inputs(prepared: &Prepared) -> BTreeMap<String, String> {
    let inputs = prepared.points.iter().flat_map(|point| &point.job.inputs);
    inputs.map(|input| (input.name.clone(), input.contents.to_string())).collect()
}

fn dimensions(prepared: &Prepared, tree: &Value) -> Vec<Vec<TableAxis>> {
    let along = |dimension: usize| prepared.axes.iter().filter(move |axis| axis.dimension == dimension);
    (0..prepared.shape.len())
        .map(|dimension| along(dimension).map(|axis| table_axis(axis, tree)).collect())
        .collect()
}

fn table_axis(axis: &Axis, tree: &Value) -> TableAxis {
    let quantity = match schema::at(tree, &axis.parameter).map(Shape::of) {
        Some(Shape::Quantity(quantity)) => Some(quantity),
        _ => None,
    };
    let (units, values) = match &axis.coordinates {
        Coordinates::Numbers { values, unit } => {
            let units =
                quantity.zip(*unit).map_or("1".into(), |(quantity, symbol)| spelled(quantity, symbol));
            (Some(units), AxisValues::Numbers(values.clone()))
        }
        Coordinates::Words(words) => (None, AxisValues::Words(words.clone())),
    };
    TableAxis { name: axis.name.clone(), long_name: axis.name.clone(), units, values }
}

/// A unit of configurations as the Python library pint reads it, where `au` is the astronomical unit.
fn spelled(quantity: Quantity, symbol: &str) -> String {
    match (symbol, quantity) {
        ("au", Quantity::Length) => "bohr".into(),
        ("au", Quantity::Energy) => "hartree".into(),
        ("au", Quantity::Time) => "atomic_unit_of_time".into(),
        ("au", Quantity::ElectricField) => "hartree / elementary_charge / bohr".into(),
        ("au", Quantity::Angle) => "rad".into(),
        ("au", Quantity::Chirp) => "rad / atomic_unit_of_time**2".into(),
        ("as", _) => "attosecond".into(),
        ("pi", _) => "pi * rad".into(),
        _ => symbol.replace('^', "**"),
    }
}

/// The configuration with its overrides applied and every table named as results keep it.
fn portable(prepared: &Prepared, mut tree: Value) -> Value {
    let names = names(prepared, &tree);
    let mut scan = tree.get_mut("scan").map(Value::take);
    rename(&mut tree, &names);
    for axis in scan.iter_mut().filter_map(Value::as_array_mut).flatten() {
        let is_file = axis["parameter"].as_str().is_some_and(|parameter| parameter.ends_with("/file"));
        for value in axis.get_mut("values").and_then(Value::as_array_mut).into_iter().flatten() {
            if is_file {
                replace(value, &names);
            }
            rename(value, &names);
        }
    }
    if let Some(scan) = scan {
        tree["scan"] = scan;
    }
    tree
}

/// Names in results by the paths as written.
fn names(prepared: &Prepared, tree: &Value) -> BTreeMap<String, String> {
    let mut names = BTreeMap::new();
    for (index, point) in prepared.points.iter().enumerate() {
        for input in &point.job.inputs {
            let place = pointer::join(&input.user, "file");
            let position = position(index, &prepared.shape);
            let scanned = prepared.axes.iter().find_map(|axis| {
                let rest = place.strip_prefix(&axis.parameter)?;
                axis.values[position[axis.dimension]].pointer(rest)
            });
            if let Some(written) = scanned.or_else(|| tree.pointer(&place)).and_then(Value::as_str) {
                names.insert(written.to_owned(), format!("{INPUTS}{}", input.name));
            }
        }
    }
    names
}

/// Renames the tables in all `file`s below.
fn rename(value: &mut Value, names: &BTreeMap<String, String>) {
    match value {
        Value::Object(map) => {
            for (key, value) in map.iter_mut() {
                if key == "file" {
                    replace(value, names);
                }
                rename(value, names);
            }
            // What is kept of an HDF5 file is a table.
            if map.get("file").and_then(Value::as_str).is_some_and(|file| file.starts_with(INPUTS)) {
                map.shift_remove("dataset");
                map.shift_remove("axis");
            }
        }
        Value::Array(list) => list.iter_mut().for_each(|value| rename(value, names)),
        _ => {}
    }
}

fn replace(value: &mut Value, names: &BTreeMap<String, String>) {
    if let Some(name) = value.as_str().and_then(|written| names.get(written)) {
        *value = json!(name);
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_atomic_unit_is_spelled_by_its_quantity() {
        assert_eq!(spelled(Quantity::Length, "au"), "bohr");
        assert_eq!(spelled(Quantity::Time, "as"), "attosecond");
        assert_eq!(spelled(Quantity::Intensity, "W/cm^2"), "W/cm**2");
        assert_eq!(spelled(Quantity::Chirp, "rad/fs^2"), "rad/fs**2");
    }
}
