//! The verdict on simpler models, for the terminal: numbers of a single run, a map of a scan over one or two parameters.

use std::fmt::Write as _;
use std::path::Path;

use crate::derive::models::{branches::BRANCHES, names};
use crate::store::table::{Kind, group};
use crate::store::{Contents, Error, ScanDimension, Values, read_groups_where};
use crate::text::{Table, number, with_bar};

/// Signs of the verdicts from -1 on.
const SIGNS: [char; 4] = ['.', '=', '+', 'x'];
const LEGEND: &str = "= within the error, + within the tolerance, x different, . none";
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
    if let [_] | [_, _] = contents.scan() {
        let _ = writeln!(out, "  {LEGEND}");
    }
    for name in &names {
        out += &match contents.scan() {
            [] => single(&contents, name),
            [_] | [_, _] => map(&contents, name),
            _ => counts(&contents, name),
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

/// Every number of one model.
fn single(contents: &Contents, name: &str) -> String {
    let path = format!("models/{name}/comparison");
    let known = group(&path).into_iter().flat_map(|group| group.datasets);
    let word = |dataset: &str, value: i64| {
        let flags = group(&path).and_then(|group| group.dataset(dataset)?.flags()).unwrap_or_default();
        flags.iter().find(|(flag, _)| *flag == value).map_or("", |(_, word)| word)
    };
    let verdict = verdicts(contents, name).first().map_or("", |&verdict| word("verdict", verdict));
    let mut table = Table::new();
    for dataset in known.filter(|dataset| dataset.kind == Kind::Real && dataset.name != "keldysh_parameter") {
        let at = |name: &str| contents.real(&path, name).and_then(|array| array.first().copied());
        let Some(value) = at(dataset.name).filter(|value| value.is_finite()) else { continue };
        let error = at(&format!("{}_errors", dataset.name)).filter(|error| error.is_finite());
        let text = error.map_or_else(|| number(value), |error| with_bar(value, error));
        table.row(dataset.long_name, text, dataset.unit(), "");
    }
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

/// The signs over the scan, the first parameter down, the second across.
fn map(contents: &Contents, name: &str) -> String {
    let verdicts = verdicts(contents, name);
    let columns = match contents.scan() {
        [_, second] => second.length(),
        _ => 1,
    };
    let first = &contents.scan()[0];
    let mut out = format!("{name}\n");
    for (row, chunk) in verdicts.chunks(columns.max(1)).enumerate() {
        let signs: String = chunk.iter().take(MOST).flat_map(|&verdict| [' ', sign(verdict)]).collect();
        let _ = writeln!(out, "  {:>24} {signs}", label(first, row));
    }
    if let [_, second] = contents.scan() {
        let ends = [0, second.length() - 1].map(|place| label(second, place));
        let _ = writeln!(out, "  {:>24}  {} from {} to {}", "", second.name(), ends[0], ends[1]);
    }
    out
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

fn counts(contents: &Contents, name: &str) -> String {
    let verdicts = verdicts(contents, name);
    let count = |wanted: i64| verdicts.iter().filter(|verdict| **verdict == wanted).count();
    format!(
        "  {name}: {} within the error, {} within the tolerance, {} different, {} none\n",
        count(0),
        count(1),
        count(2),
        count(-1)
    )
}
