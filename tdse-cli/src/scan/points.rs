//! Expansion of `scan`: each point is a configuration text of its own.

use serde_json::{Value, json};

use super::branches;
use crate::config::complaint::{Complaint, Complaints, Fix};
use crate::config::raw;
use crate::config::{self, Files, Library, Request, resolved, schema, structure};

pub use super::axis::{Axis, Coordinates};

/// More points than this are a slip of the pen (a limit of our own).
const MOST_POINTS: usize = 1_000_000;

/// A scan, every point of it checked; a single run is a scan without axes, and has one point.
#[derive(Clone, Debug, PartialEq)]
pub struct ScanRequest {
    /// The axes, in the order of the file.
    pub axes: Vec<Axis>,
    /// Number of values along each dimension of the grid; points are stored with the last dimension fastest.
    pub shape: Vec<usize>,
    /// The points.
    pub points: Vec<Point>,
}

/// One point of a scan.
#[derive(Clone, Debug, PartialEq)]
pub struct Point {
    /// Values of the axes, for people: `cep = "15 deg", cycles = 4`; empty without axes.
    pub label: String,
    /// Configuration of this point alone.
    pub text: String,
    /// What it asks.
    pub request: Request,
}

/// Reads a configuration with or without `scan`; `is_reserved` knows the names that results use.
///
/// # Errors
/// Every fault of the scan, or every fault of every point; what is wrong with all points alike is said once.
pub fn read_scan(
    text: &str,
    sets: &[String],
    files: impl Into<Files>,
    is_reserved: fn(&str) -> bool,
) -> Result<ScanRequest, Complaints> {
    let tree = config::parse(text, sets)?;
    let library = Library::new(files.into());
    let (axes, shape) = read_axes(&tree, is_reserved)?;
    let points = points(&tree, &axes, &shape, &library)?;
    branches::look(&tree, &axes).map_err(|complaint| Complaints(vec![*complaint]))?;
    Ok(ScanRequest { axes, shape, points })
}

/// Axes of a configuration, and the lengths of its dimensions.
///
/// # Errors
/// Every fault of the scan.
pub fn read_axes(tree: &Value, is_reserved: fn(&str) -> bool) -> Result<(Vec<Axis>, Vec<usize>), Complaints> {
    let mut axes = axes(tree, is_reserved)?;
    let shape = shape(tree, &mut axes)?;
    Ok((axes, shape))
}

/// The axes, each sound by itself and none in the way of another.
fn axes(tree: &Value, is_reserved: fn(&str) -> bool) -> Result<Vec<Axis>, Complaints> {
    let Some(scan) = tree.get("scan") else {
        return Ok(Vec::new());
    };
    let faults = structure::faults(&schema::schema()["properties"]["scan"], scan, "/scan");
    let raw: Vec<raw::Axis> = match serde_json::from_value(scan.clone()) {
        Ok(raw) if faults.is_empty() => raw,
        _ => {
            structure::check(tree)?;
            return Err(Complaints(faults));
        }
    };
    let mut found = Vec::new();
    let mut axes: Vec<Axis> = Vec::new();
    for (i, raw) in raw.iter().enumerate() {
        match super::axis::axis(tree, raw, &format!("/scan/{i}"), is_reserved) {
            Ok(axis) => {
                found.extend(clash(&axes, &axis, i));
                axes.push(axis);
            }
            Err(complaints) => found.extend(complaints.0),
        }
    }
    if !found.is_empty() {
        found.extend(structure::check(tree).err().into_iter().flat_map(|complaints| complaints.0));
    }
    Complaints(found).into_result(tree)?;
    Ok(axes)
}

/// Two axes of one name, or over one place.
fn clash(before: &[Axis], axis: &Axis, i: usize) -> Option<Complaint> {
    let within = |a: &str, b: &str| a == b || a.strip_prefix(b).is_some_and(|rest| rest.starts_with('/'));
    let (a, b) = (&axis.parameter, |other: &Axis| other.parameter.clone());
    if let Some(other) = before.iter().find(|other| within(a, &b(other)) || within(&b(other), a)) {
        let written = json!(axis.parameter);
        let reason = format!("varies what axis {:?} varies", other.name);
        let complaint = Complaint::new(format!("/scan/{i}/parameter"), Some(&written), reason);
        return Some(
            complaint.allowed("every place on one axis").fix(Fix::Words("leave one axis out".into())),
        );
    }
    let twin = before.iter().any(|other| other.name == axis.name);
    twin.then(|| {
        Complaint::new(format!("/scan/{i}/name"), Some(&json!(axis.name)), "is the name of another axis")
            .allowed("every name once")
            .fix(Fix::Value(json!(format!("{}_{i}", axis.name))))
    })
}

/// Gives every axis its dimension and returns the length of each.
fn shape(tree: &Value, axes: &mut [Axis]) -> Result<Vec<usize>, Complaints> {
    let mut shape: Vec<usize> = Vec::new();
    let mut labels: Vec<Option<String>> = Vec::new();
    let mut found = Vec::new();
    for (i, axis) in axes.iter_mut().enumerate() {
        let place = format!("/scan/{i}");
        let label = tree.pointer(&format!("{place}/together")).and_then(Value::as_str).map(str::to_owned);
        let shared = labels.iter().position(|known| label.is_some() && *known == label);
        axis.dimension = shared.unwrap_or(shape.len());
        match shared {
            None => {
                shape.push(axis.values.len());
                labels.push(label);
            }
            Some(dimension) if shape[dimension] == axis.values.len() => {}
            Some(dimension) => found.push(unequal(tree, &place, axis.values.len(), shape[dimension])),
        }
    }
    let total = shape.iter().try_fold(1_usize, |product, length| product.checked_mul(*length));
    if total.is_none_or(|total| total > MOST_POINTS) {
        let reason =
            format!("has {} points", shape.iter().map(usize::to_string).collect::<Vec<_>>().join(" x "));
        let complaint = Complaint::new("/scan", tree.get("scan"), reason);
        let allowed = format!("at most {MOST_POINTS} points");
        found.push(complaint.allowed(allowed).fix(Fix::Words("split the scan".into())));
    }
    Complaints(found).into_result(tree)?;
    Ok(shape)
}

/// Axes with one label and different numbers of values.
fn unequal(tree: &Value, place: &str, own: usize, others: usize) -> Complaint {
    let listed = tree.pointer(&format!("{place}/values"));
    let key = if listed.is_some() { "values" } else { "points" };
    let fix = match listed {
        None => Fix::Value(json!(others)),
        Some(values) => {
            let values = values.as_array().into_iter().flatten().cycle().take(others);
            Fix::Value(values.cloned().collect())
        }
    };
    let here = format!("{place}/{key}");
    let reason = format!("makes {own} values where the axes it moves with have {others}");
    let complaint = Complaint::new(&here, tree.pointer(&here), reason);
    complaint.allowed("equal numbers of values along axes that move together").fix(fix)
}

fn points(tree: &Value, axes: &[Axis], shape: &[usize], library: &Library) -> Result<Vec<Point>, Complaints> {
    let mut base = tree.clone();
    if let Value::Object(map) = &mut base {
        map.shift_remove("scan");
    }
    let total = shape.iter().product();
    let (mut points, mut faults) = (Vec::new(), Vec::new());
    for index in 0..total {
        let position = position(index, shape);
        let values = || axes.iter().map(|axis| (axis, &axis.values[position[axis.dimension]]));
        let mut point = base.clone();
        for (axis, value) in values() {
            schema::put(&mut point, &axis.parameter, value.clone());
        }
        let label =
            values().map(|(axis, value)| format!("{} = {value}", axis.name)).collect::<Vec<_>>().join(", ");
        match config::request(&point, library) {
            Ok(request) => points.push(Point { label, text: resolved::text(&point), request }),
            Err(complaints) => faults.push((label, complaints)),
        }
    }
    if faults.is_empty() { Ok(points) } else { Err(said_once(faults, total)) }
}

/// Row-major position of a point: the last dimension is fastest.
pub fn position(mut index: usize, shape: &[usize]) -> Vec<usize> {
    let mut position = vec![0; shape.len()];
    for (place, length) in position.iter_mut().zip(shape).rev() {
        *place = index % length;
        index /= length;
    }
    position
}

/// Every fault with its point; a fault that all points share is one of the file itself.
fn said_once(faults: Vec<(String, Complaints)>, total: usize) -> Complaints {
    let first = faults[0].1.0.clone();
    let everywhere = |complaint: &Complaint| {
        faults.len() == total && faults.iter().all(|(_, complaints)| complaints.0.contains(complaint))
    };
    let mut found: Vec<Complaint> = first.into_iter().filter(everywhere).collect();
    let shared = found.len();
    for (label, complaints) in faults {
        for mut complaint in complaints.0 {
            if !found[..shared].contains(&complaint) {
                complaint.point = Some(label.clone());
                found.push(complaint);
            }
        }
    }
    Complaints(found)
}
