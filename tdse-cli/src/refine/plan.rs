//! The scan over finer numerics: which points are repeated, and how.

use serde_json::{Value, json};
use tdse_core::model::metrics::Tolerance;
use tdse_core::problem::{Absorber, Numerics};
use tdse_core::refine::{Variation, variations};
use tdse_core::simulate::Schedule;

use crate::config::Files;
use crate::config::quantity::digits;
use crate::scan::asked;
use crate::scan::cost::cost;
use crate::scan::points::position;
use crate::scan::prepare::{Point, Prepared};
use crate::scan::source::Source;
use crate::store::Request;

/// Points of a scan that are repeated.
const REPRESENTATIVES: usize = 3;
/// Choices that are varied.
const KEYS: [&str; 5] = ["spacing", "extent", "time_step", "absorber", "trailing_time"];

/// A point that is repeated.
#[derive(Clone, Debug)]
pub struct Repeated {
    /// Its number in the request.
    pub index: usize,
    /// The runs, in the order of the scan.
    pub runs: Vec<Variation>,
}

/// A request as a scan over finer numerics.
#[derive(Clone, Debug)]
pub struct Plan {
    /// The points that are repeated, in the order of the scan.
    pub repeated: Vec<Repeated>,
    /// The configuration of the scan, whose only dimension runs through the runs of all repeated points.
    pub configuration: Value,
    /// The tables it names.
    files: Files,
    /// What counts as agreement of a model at every point of the request.
    pub(super) tolerances: Vec<Tolerance>,
}

impl Plan {
    /// Of a request that is ready: the cheapest, the middling and the dearest point, every one with all variations.
    pub fn new(prepared: &Prepared, request: &Request) -> Self {
        let repeated: Vec<Repeated> = representatives(prepared)
            .into_iter()
            .map(|index| Repeated { index, runs: runs(&prepared.points[index]) })
            .collect();
        let configuration = configuration(prepared, request, &repeated);
        let tolerance = |point: &Point| {
            point.job.outputs.models.as_ref().map_or_else(Tolerance::default, |m| m.tolerance)
        };
        let tolerances = prepared.points.iter().map(tolerance).collect();
        Self { repeated, configuration, files: Files::Stored(asked::inputs(prepared)), tolerances }
    }

    /// What is to be prepared and run.
    pub fn source(&self) -> Source {
        Source { text: format!("{:#}\n", self.configuration), files: self.files.clone() }
    }

    /// For every repeated point, the first of its runs in the scan.
    pub fn starts(&self) -> impl Iterator<Item = (&Repeated, usize)> {
        self.repeated.iter().scan(0, |next, repeated| {
            let start = *next;
            *next += repeated.runs.len();
            Some((repeated, start))
        })
    }
}

/// Numbers of the points that stand for a scan: by estimated cost the least, the middle and the most.
pub(super) fn representatives(prepared: &Prepared) -> Vec<usize> {
    let mut order: Vec<usize> = (0..prepared.points.len()).collect();
    let seconds: Vec<f64> = prepared.points.iter().map(|point| cost(&point.job).seconds).collect();
    order.sort_by(|a, b| seconds[*a].total_cmp(&seconds[*b]).then(a.cmp(b)));
    let count = REPRESENTATIVES.min(order.len());
    let pick = |k: usize| order[k * (order.len() - 1) / (count - 1).max(1)];
    let mut picked: Vec<usize> = (0..count).map(pick).collect();
    picked.sort_unstable();
    picked
}

fn runs(point: &Point) -> Vec<Variation> {
    let numerics = &point.job.numerics;
    let schedule = Schedule::new(&point.job.problem.field, numerics.time_step, numerics.trailing_time);
    let length = schedule.steps as f64 * schedule.time_step;
    variations(numerics, point.facts.ionization_energy(), length)
}

/// The request with a scan of its own: its axes at the repeated points, and what is varied, all moving together.
fn configuration(prepared: &Prepared, request: &Request, repeated: &[Repeated]) -> Value {
    let mut tree = request.configuration.clone();
    let scan = tree.as_object_mut().and_then(|map| map.shift_remove("scan")).unwrap_or_default();
    without_models(&mut tree);
    let resolved = |index: usize| -> Value {
        serde_json::from_str(&prepared.points[index].configuration).unwrap_or_default()
    };
    let first = resolved(repeated[0].index);
    tree["outputs"] = first["outputs"].clone();
    tree["numerics"] = first["numerics"].clone();
    let points: Vec<(usize, usize)> = repeated.iter().map(|point| (point.index, point.runs.len())).collect();
    let mut axes =
        own_axes(prepared, &scan, &points, |parameter| !is_varied(parameter) && !is_of_models(parameter));
    for key in KEYS {
        let values = repeated.iter().flat_map(|point| {
            let written = resolved(point.index)["numerics"][key].clone();
            let base = &prepared.points[point.index].job.numerics;
            point.runs.iter().map(move |run| spelled(key, &run.numerics, base, &written)).collect::<Vec<_>>()
        });
        axes.push(json!({ "parameter": format!("/numerics/{key}"), "name": key, "together": "refine",
                          "values": values.collect::<Vec<_>>() }));
    }
    tree["scan"] = Value::Array(axes);
    tree
}

/// The axes of a request that are kept, as they stand at points that are repeated so many times each.
pub(super) fn own_axes(
    prepared: &Prepared,
    scan: &Value,
    points: &[(usize, usize)],
    is_kept: impl Fn(&str) -> bool,
) -> Vec<Value> {
    let kept = prepared.axes.iter().enumerate().filter(|(_, axis)| is_kept(&axis.parameter));
    kept.map(|(number, axis)| {
        // Tables go by the names under which results keep them.
        let listed = scan[number]["values"].as_array().unwrap_or(&axis.values);
        let values = points.iter().flat_map(|&(index, times)| {
            let at = position(index, &prepared.shape)[axis.dimension];
            std::iter::repeat_n(listed[at].clone(), times)
        });
        json!({ "parameter": axis.parameter, "name": axis.name, "values": values.collect::<Vec<_>>(),
                "together": "refine" })
    })
    .collect()
}

/// Takes the simpler models out: repeated runs are there for the full result.
pub(super) fn without_models(tree: &mut Value) {
    if let Some(map) = tree.as_object_mut() {
        map.shift_remove("models");
    }
}

/// Whether an axis of the request is about them.
pub(super) fn is_of_models(parameter: &str) -> bool {
    parameter == "/models" || parameter.starts_with("/models/")
}

/// Whether an axis of the request sets what is varied here.
fn is_varied(parameter: &str) -> bool {
    let below = parameter.strip_prefix("/numerics").and_then(|rest| rest.strip_prefix('/'));
    parameter == "/numerics"
        || below
            .is_some_and(|rest| KEYS.iter().any(|key| rest == *key || rest.starts_with(&format!("{key}/"))))
}

/// A choice as a configuration says it; in the point's own words where it is the point's own, so that the point keeps
/// its identity and is not computed twice.
fn spelled(key: &str, numerics: &Numerics, base: &Numerics, written: &Value) -> Value {
    let au = |value: f64, own: f64| {
        if value.to_bits() == own.to_bits() { written.clone() } else { json!(format!("{} au", short(value))) }
    };
    match key {
        "spacing" => au(numerics.grid.x.spacing, base.grid.x.spacing),
        "extent" => au(numerics.grid.x.extent(), base.grid.x.extent()),
        "time_step" => au(numerics.time_step, base.time_step),
        "trailing_time" => au(numerics.trailing_time, base.trailing_time),
        _ if numerics.absorber == base.absorber => written.clone(),
        _ => match numerics.absorber {
            Absorber::None => json!({ "kind": "none" }),
            Absorber::Smooth { width } | Absorber::Round { width } => {
                // In the words of the point but for the width: it keeps its shape.
                let mut edges = written.clone();
                edges["width"] = json!(format!("{} au", short(width)));
                edges
            }
        },
    }
}

/// Twelve significant digits: what a scan's values have.
fn short(value: f64) -> String {
    digits(format!("{value:.11e}").parse().unwrap_or(value))
}
