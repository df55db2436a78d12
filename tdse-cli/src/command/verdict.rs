//! The verdict on simpler models, for the terminal: numbers of a single run, a map of a scan over one or two parameters.

use std::fmt::Write as _;
use std::path::Path;

use crate::derive::models::{branches::BRANCHES, judged, names};
use crate::scan::points::position;
use crate::store::table::{Kind, group};
use crate::store::{Contents, Error, ScanDimension, Values, read_groups_where};
use crate::text::{Table, number, with_bar};

/// Signs of the verdicts from -1 on.
const SIGNS: [char; 4] = ['.', '=', '+', 'x'];
const LEGEND: &str = "= within the error, + within the tolerance, x different, . none";
/// Most maps of a scan over more than two parameters.
const MOST_MAPS: usize = 6;
/// Most columns of a map.
const MOST: usize = 60;

/// What the result says of its models; empty where it holds none.
///
/// # Errors
/// Where the result cannot be read.
pub fn text(result: &Path) -> Result<String, Error> {
    let contents = read_groups_where(result, |path| {
        path == BRANCHES || path.starts_with("models/") && path.ends_with("/comparison")
    })?;
    let names = names(&contents);
    if names.is_empty() {
        return Ok(String::new());
    }
    let mut out = String::from("\nSimpler models beside the full result\n");
    if !contents.scan().is_empty() {
        let _ = writeln!(out, "  {LEGEND}");
    }
    for name in &names {
        out += &match contents.scan() {
            [] => single(&contents, name),
            _ => maps(&contents, name),
        };
    }
    Ok(out + &branches(&contents) + "\n")
}

fn verdicts(contents: &Contents, name: &str) -> Vec<i64> {
    match contents.get(&format!("models/{name}/comparison"), "verdict") {
        Some(Values::Integer(verdicts)) => verdicts.iter().copied().collect(),
        _ => Vec::new(),
    }
}

fn sign(verdict: i64) -> char {
    usize::try_from(verdict + 1).ok().and_then(|place| SIGNS.get(place)).copied().unwrap_or('.')
}

/// Every number of one model, with its bar and what that makes of it.
fn single(contents: &Contents, name: &str) -> String {
    let path = format!("models/{name}/comparison");
    let known = group(&path).into_iter().flat_map(|group| group.datasets);
    let flag = |dataset: &str| match contents.get(&path, dataset) {
        Some(Values::Integer(verdicts)) => verdicts.first().copied().unwrap_or(-1),
        _ => -1,
    };
    let mut table = Table::new();
    for dataset in known.filter(|dataset| dataset.kind == Kind::Real && dataset.name != "keldysh_parameter") {
        let at = |name: &str| contents.real(&path, name).and_then(|array| array.first().copied());
        let Some(value) = at(dataset.name).filter(|value| value.is_finite()) else { continue };
        let error = at(&format!("{}_errors", dataset.name)).filter(|error| error.is_finite());
        let text = error.map_or_else(|| number(value), |error| with_bar(value, error));
        let verdict = judged().find(|(number, _)| *number == dataset.name);
        table.row(
            dataset.long_name,
            text,
            dataset.unit(),
            verdict.map_or("", |(_, verdict)| word(flag(verdict))),
        );
    }
    let verdict = match word(flag("verdict")) {
        "" => "nothing to judge it by",
        verdict => verdict,
    };
    let failure = contents.groups().find(|(known, _)| *known == path);
    let failure = failure.and_then(|(_, group)| group.attributes.get("failure"));
    let failure = failure.map_or(String::new(), |failure| format!(" ({failure})"));
    format!("{name}: {verdict}{failure}\n{table}")
}

/// How far the phase slopes of the full result's paths are from the quantum orbits', in the middle of the scan.
fn branches(contents: &Contents) -> String {
    let middle = contents.scan().iter().fold(0, |point, d| point * d.length() + d.length() / 2);
    let Some(medians) = contents.real(BRANCHES, "median_difference").and_then(|array| array.as_slice())
    else {
        return String::new();
    };
    let [short, long] = [0, 1].map(|orbit| number(medians[2 * middle + orbit]));
    let place: Vec<String> = contents.scan().iter().map(|d| label(d, d.length() / 2)).collect();
    format!(
        "Phase slopes of the full result's paths against the quantum orbits at {}: median difference {short} rad cm**2/W of the \
         short ones, {long} of the long ones\n",
        place.join(", ")
    )
}

/// What a verdict says.
fn word(verdict: i64) -> &'static str {
    match verdict {
        0 => "within the error bar",
        1 => "within the tolerance",
        2 => "different",
        _ => "",
    }
}

/// The signs over the scan: one map over its last two parameters for every value of those before, or how many of each.
fn maps(contents: &Contents, name: &str) -> String {
    let scan = contents.scan();
    let (before, shown) = scan.split_at(scan.len().saturating_sub(2));
    let lengths: Vec<usize> = before.iter().map(ScanDimension::length).collect();
    let slices: usize = lengths.iter().product();
    let verdicts = verdicts(contents, name);
    let size = (verdicts.len() / slices).max(1);
    let mut out = format!("{name}\n");
    for (number, slice) in verdicts.chunks(size).enumerate() {
        let place = position(number, &lengths).into_iter().zip(before);
        let said: Vec<String> =
            place.map(|(i, dimension)| format!("{} {}", dimension.name(), label(dimension, i))).collect();
        if slices > MOST_MAPS {
            let _ = writeln!(out, "  {}: {}", said.join(", "), counts(slice));
            continue;
        }
        if slices > 1 {
            let _ = writeln!(out, "  at {}", said.join(", "));
        }
        out += &map(shown, slice);
    }
    out
}

/// The signs over one or two parameters, the first down, the second across.
fn map(scan: &[ScanDimension], verdicts: &[i64]) -> String {
    let columns = scan.get(1).map_or(1, ScanDimension::length);
    let mut out = String::new();
    for (row, chunk) in verdicts.chunks(columns.max(1)).enumerate() {
        let signs: String = chunk.iter().take(MOST).flat_map(|&verdict| [' ', sign(verdict)]).collect();
        let _ = writeln!(out, "  {:>24} {signs}", label(&scan[0], row));
    }
    if let [_, second] = scan {
        let ends = [0, second.length() - 1].map(|place| label(second, place));
        let _ = writeln!(out, "  {:>24}  {} from {} to {}", "", second.name(), ends[0], ends[1]);
    }
    out
}

fn counts(verdicts: &[i64]) -> String {
    let count = |wanted: i64| verdicts.iter().filter(|verdict| **verdict == wanted).count();
    format!("{} =, {} +, {} x, {} .", count(0), count(1), count(2), count(-1))
}

fn label(dimension: &ScanDimension, place: usize) -> String {
    let axis = &dimension.axes[0];
    let unit = axis.units.as_deref().filter(|unit| *unit != "1").map_or(String::new(), |u| format!(" {u}"));
    let value = match &axis.values {
        Values::Real(values) => values.iter().nth(place).map(|&value| number(value)),
        Values::Integer(values) => values.iter().nth(place).map(ToString::to_string),
        Values::Text(values) => values.iter().nth(place).cloned(),
    };
    format!("{}{unit}", value.unwrap_or_default())
}
