//! `tdse compare`: two results number by number, or the points of one scan with its first.

use std::fmt::Write as _;
use std::path::{Path, PathBuf};

use clap::Args;
use ndarray::{ArrayD, Axis};
use tdse_core::compare::{Agreement, Measured, Tally, judge};

use super::exit::{Exit, Trouble};
use super::output::data;
use crate::store::table::{self, Role};
use crate::store::{self, Contents, Folder, Values};
use crate::text::{number, with_bar};

/// What `compare` takes.
#[derive(Debug, Args)]
pub struct Options {
    /// A folder that `tdse run` or `tdse refine` filled, or the .h5 file of a result or of a point
    #[arg(value_name = "A")]
    pub a: PathBuf,
    /// What to compare it with; left out together with --along
    #[arg(value_name = "B")]
    pub b: Option<PathBuf>,
    /// Compare the points of a scan along this axis, by its name or the place it varies, with the first of them
    #[arg(long, value_name = "AXIS")]
    pub along: Option<String>,
}

/// Compares and prints.
///
/// # Errors
/// Refused where a result cannot be read, or has no such axis.
pub fn compare(options: &Options) -> Result<Exit, Trouble> {
    let a = read(&options.a)?;
    let mut text = String::new();
    match (&options.b, &options.along) {
        (Some(path), Some(_)) => {
            let reason = "goes with one result";
            return Err(Trouble::refused(format!("--along: {reason}; leave out {}", path.display())));
        }
        (Some(path), None) => {
            let b = read(path)?;
            if a.scan() != b.scan() {
                let reason = "the scan axes differ; allowed: results over the same points";
                return Err(Trouble::refused(format!("{}: {reason}", path.display())));
            }
            text += &lines(&pairs(&a, &b));
        }
        (None, Some(name)) => {
            // An axis without a name of its own is called after the place it varies.
            let called = name.trim_start_matches('/').replace('/', "_");
            let dimension =
                a.scan().iter().position(|dimension| dimension.axes.iter().any(|axis| axis.name == called));
            let Some(dimension) = dimension else {
                let known: Vec<&str> =
                    a.scan().iter().flat_map(|d| &d.axes).map(|axis| axis.name.as_str()).collect();
                let known =
                    if known.is_empty() { "none, it is a single run".into() } else { known.join(", ") };
                return Err(Trouble::refused(format!("--along {name}: no such axis; allowed: {known}")));
            };
            for k in 1..a.scan()[dimension].length() {
                let found = lines(&along(&a, dimension, k));
                let _ = write!(text, "{name}: value {k} beside value 0\n{found}");
            }
        }
        (None, None) => {
            return Err(Trouble::refused("B is missing; allowed: two results, or one with --along AXIS"));
        }
    }
    data(text);
    Ok(Exit::Complete)
}

fn read(path: &Path) -> Result<Contents, Trouble> {
    if path.is_dir() {
        let folder = Folder::open(path).map_err(Trouble::refused)?;
        return store::read(&folder.result()).map_err(Trouble::refused);
    }
    store::read(path).map_err(Trouble::refused)
}

/// One array on both sides.
struct Pair {
    /// `group/name`.
    place: String,
    unit: &'static str,
    /// Values with bars, in step; empty where the arrays have other axes.
    values: Vec<(Measured, Measured)>,
}

/// A side of a comparison: values and bars of an array.
type Side<'a> = (&'a ArrayD<f64>, Option<&'a ArrayD<f64>>);

/// The bars beside an array.
fn bars<'a>(contents: &'a Contents, group: &str, name: &str) -> Option<&'a ArrayD<f64>> {
    contents.real(group, &format!("{name}_errors"))
}

fn pairs(a: &Contents, b: &Contents) -> Vec<Pair> {
    let found = a.numbers().filter_map(|(group, dataset, own)| {
        let (name, other) = (dataset.name, b.real(group, dataset.name)?);
        let shared = same_axes(a, b, group) && own.shape() == other.shape();
        let both = || zipped((own, bars(a, group, name)), (other, bars(b, group, name)));
        let values = if shared { both() } else { Vec::new() };
        Some(Pair { place: format!("{group}/{name}"), unit: dataset.unit(), values })
    });
    found.collect()
}

fn along(contents: &Contents, dimension: usize, k: usize) -> Vec<Pair> {
    let at = |array: &ArrayD<f64>, k: usize| array.index_axis(Axis(dimension), k).to_owned();
    let found = contents.numbers().map(|(group, dataset, values)| {
        let errors = bars(contents, group, dataset.name);
        let side = |k: usize| (at(values, k), errors.map(|errors| at(errors, k)));
        let (one, other) = (side(0), side(k));
        let values = zipped((&one.0, one.1.as_ref()), (&other.0, other.1.as_ref()));
        Pair { place: format!("{group}/{}", dataset.name), unit: dataset.unit(), values }
    });
    found.collect()
}

/// Whether the axes of a group are the same to rounding.
fn same_axes(a: &Contents, b: &Contents, group: &str) -> bool {
    let Some(known) = table::group(group) else { return false };
    known.datasets.iter().filter(|dataset| dataset.role == Role::Axis).all(|axis| {
        match (a.get(group, axis.name), b.get(group, axis.name)) {
            (Some(Values::Real(a)), Some(Values::Real(b))) => {
                a.shape() == b.shape() && a.iter().zip(b).all(|(a, b)| (a - b).abs() <= 1e-12 * a.abs())
            }
            (a, b) => a == b,
        }
    })
}

fn zipped(a: Side, b: Side) -> Vec<(Measured, Measured)> {
    let measured = |(values, errors): Side| -> Vec<Measured> {
        let bars: Vec<Option<f64>> = match errors {
            Some(errors) => errors.iter().map(|error| Some(*error)).collect(),
            None => vec![None; values.len()],
        };
        values.iter().zip(bars).map(|(&value, error)| Measured { value, error }).collect()
    };
    measured(a).into_iter().zip(measured(b)).collect()
}

fn lines(pairs: &[Pair]) -> String {
    let width = pairs.iter().map(|pair| pair.place.len()).max().unwrap_or(0);
    let mut text = String::new();
    for pair in pairs {
        let _ = writeln!(text, "  {:width$}  {}", pair.place, said(pair));
    }
    text
}

fn said(pair: &Pair) -> String {
    match &pair.values[..] {
        [] => "not compared: the axes differ".into(),
        [(a, b)] => {
            let one = |m: &Measured| match m.error.filter(|error| error.is_finite()) {
                Some(error) => with_bar(m.value, error),
                None => number(m.value),
            };
            let unit = if pair.unit.is_empty() { String::new() } else { format!(" {}", pair.unit) };
            format!("{} and {}{unit}: {}", one(a), one(b), word(judge(*a, *b)))
        }
        many => tally(Tally::of(many.iter().copied()), many),
    }
}

fn word(agreement: Agreement) -> &'static str {
    match agreement {
        Agreement::Equal => "equal to the last bit",
        Agreement::Same => "same within error bars",
        Agreement::Different => "different",
        Agreement::Unjudged => "differ, no error bar to judge by",
        Agreement::Missing => "missing on one side",
    }
}

/// How many of many values, and how far apart they are.
fn tally(tally: Tally, values: &[(Measured, Measured)]) -> String {
    let counts = [
        (tally.equal, Agreement::Equal),
        (tally.same, Agreement::Same),
        (tally.different, Agreement::Different),
        (tally.unjudged, Agreement::Unjudged),
        (tally.missing, Agreement::Missing),
    ];
    let counted = counts.into_iter().filter(|(count, _)| *count > 0);
    let counted: Vec<String> =
        counted.map(|(count, agreement)| format!("{count} {}", word(agreement))).collect();
    let mut ratios: Vec<f64> = values
        .iter()
        .map(|(a, b)| (a.value - b.value).abs() / a.value.abs().max(b.value.abs()))
        .filter(|ratio| ratio.is_finite())
        .collect();
    ratios.sort_by(f64::total_cmp);
    let median = ratios
        .get(ratios.len() / 2)
        .map_or(String::new(), |median| format!("; median relative difference {}", number(*median)));
    format!("of {}: {}{median}", values.len(), counted.join(", "))
}
