//! How far every model is from the full result, from the arrays of a result alone: at once for a run, and again for a whole
//! scan when it has got error bars.

mod electrons;

use std::collections::{BTreeMap, BTreeSet};
use std::ops::RangeInclusive;

use ndarray::{ArrayD, IxDyn};
use tdse_core::compare::Measured;
use tdse_core::model::metrics::{Metric, Tolerance, Verdict, compare_harmonics, worst};

use crate::store::table::verdict_number;
use crate::store::{Contents, ScanDimension};

/// Fewest orders that make a plateau.
const FEWEST: usize = 4;

/// Models that stand for ionization: the others are judged by the harmonics, or the electrons where they have no harmonics.
const OF_IONIZATION: [&str; 2] = ["tunnelling", "perturbation"];

/// Names of the models that a result holds.
pub fn names(contents: &Contents) -> Vec<String> {
    let of = |path: &str| path.strip_prefix("models/")?.strip_suffix("/comparison").map(str::to_owned);
    contents.groups().filter_map(|(path, _)| of(path)).collect()
}

/// (Re)makes every comparison of a result, with the tolerance of every point.
pub fn compare(contents: &mut Contents, tolerance: impl Fn(usize) -> Tolerance) {
    let shape: Vec<usize> = contents.scan().iter().map(ScanDimension::length).collect();
    let points: usize = shape.iter().product();
    for name in names(contents) {
        let found: Vec<Numbers> =
            (0..points).map(|index| Numbers::of(contents, &name, index, &tolerance(index))).collect();
        let group = super::own(&name);
        let columns: BTreeSet<&str> =
            found.iter().flat_map(|numbers| numbers.reals.keys().copied()).collect();
        for column in columns {
            let at = |part: fn(&(f64, Option<f64>)) -> f64| -> Vec<f64> {
                found.iter().map(|numbers| numbers.reals.get(column).map_or(f64::NAN, part)).collect()
            };
            let (values, errors) = (at(|v| v.0), at(|v| v.1.unwrap_or(f64::NAN)));
            if errors.iter().any(|error| error.is_finite()) {
                contents.insert(&group, &format!("{column}_errors"), shaped(&shape, errors));
            }
            contents.insert(&group, column, shaped(&shape, values));
        }
        let judged: BTreeSet<&str> =
            found.iter().flat_map(|numbers| numbers.verdicts.keys().copied()).collect();
        for column in judged {
            let number = |numbers: &Numbers| {
                verdict_number(numbers.verdicts.get(column).copied().unwrap_or(Verdict::Missing))
            };
            contents.insert(&group, column, shaped(&shape, found.iter().map(number).collect::<Vec<i64>>()));
        }
    }
}

fn shaped<T>(shape: &[usize], values: Vec<T>) -> ArrayD<T> {
    ArrayD::from_shape_vec(IxDyn(shape), values).expect("a value for every point")
}

/// What is found at one point.
#[derive(Default)]
struct Numbers {
    /// Value and error bar by the dataset's name.
    reals: BTreeMap<&'static str, (f64, Option<f64>)>,
    verdicts: BTreeMap<&'static str, Verdict>,
}

impl Numbers {
    fn of(contents: &Contents, name: &str, index: usize, tolerance: &Tolerance) -> Self {
        let mut numbers = Self::default();
        let group = super::own(name);
        let model = |number: &str| scalar(contents, &group, number, index);
        let full = |number: &str| Measured {
            value: scalar(contents, "summary", number, index).unwrap_or(f64::NAN),
            error: scalar(contents, "summary", &format!("{number}_errors"), index),
        };
        let photon = full("first_photon_energy").value;
        numbers.harmonics(contents, name, index, tolerance);
        numbers.electrons(contents, name, index, tolerance);
        if !numbers.reals.contains_key("cutoff_difference")
            && let Some(cutoff) = model("cutoff_energy")
        {
            let known = full("cutoff_energy");
            let error = known.error.map(|error| error / photon);
            let metric = Metric { value: (cutoff - known.value) / photon, neutral: 0.0, error };
            numbers.judge(OF_PLATEAU[0], metric, tolerance.orders);
        }
        if let Some(phase) = model(PHASE.0) {
            let metric = Metric { value: phase, neutral: 0.0, error: None };
            numbers.judge(PHASE, metric, tolerance.phase);
        }
        for (number, ratio, verdict) in OF_RATIOS {
            if let Some(value) = model(number) {
                numbers.judge((ratio, verdict), Metric::ratio(value, full(number)), tolerance.ratio);
            }
        }
        numbers.verdicts.insert("verdict", numbers.verdict(name));
        numbers
    }

    /// Yields over the plateau.
    fn harmonics(&mut self, contents: &Contents, name: &str, index: usize, tolerance: &Tolerance) {
        let group = format!("models/{name}/harmonic_yields");
        let model = values(contents, &group, "yield", index);
        let full = values(contents, "harmonic_yields", "yield", index);
        if model.is_empty() || full.is_empty() {
            return;
        }
        let bars = values(contents, "harmonic_yields", "yield_errors", index);
        let full: Vec<Measured> = full
            .iter()
            .enumerate()
            .map(|(i, &value)| Measured { value, error: bars.get(i).copied() })
            .collect();
        let Some(plateau) = plateau(contents, index) else {
            for (_, verdict) in OF_PLATEAU {
                self.verdicts.insert(verdict, Verdict::Missing);
            }
            return;
        };
        let photon = scalar(contents, "summary", "first_photon_energy", index).unwrap_or(f64::NAN);
        let cutoff_error = scalar(contents, "summary", "cutoff_energy_errors", index).map(|e| e / photon);
        self.reals.insert("plateau_first", (*plateau.start() as f64, None));
        self.reals.insert("plateau_last", (*plateau.end() as f64, None));
        let known = model.iter().rposition(|y| y.is_finite()).map_or(0, |last| last + 1);
        let found = compare_harmonics(&model[..known], &full, plateau, cutoff_error);
        self.reals.insert("vertical_shift", (found.shift, None));
        self.reals.insert("cutoff_energy", (found.model_cutoff * photon, None));
        self.reals.insert("full_cutoff", (found.full_cutoff * photon, None));
        let metrics = [
            (found.cutoff, tolerance.orders),
            (found.slope, tolerance.slope),
            (found.level, tolerance.decades),
            (found.distance, tolerance.decades),
            (found.shifted_distance, tolerance.decades),
            (found.yields, tolerance.ratio),
        ];
        for (names, (metric, tolerance)) in OF_PLATEAU.into_iter().zip(metrics) {
            self.judge(names, metric, tolerance);
        }
    }

    fn judge(&mut self, (number, verdict): (&'static str, &'static str), metric: Metric, tolerance: f64) {
        self.reals.insert(number, (metric.value, metric.error.filter(|error| error.is_finite())));
        self.verdicts.insert(verdict, metric.verdict(tolerance));
    }

    /// Shape of the harmonics, else of the electrons, else what is ionized.
    fn verdict(&self, name: &str) -> Verdict {
        let of = |names: &[&str]| worst(names.iter().filter_map(|name| self.verdicts.get(name).copied()));
        let shapes = [&["cutoff_verdict", "slope_verdict", "shape_verdict"][..], &["electron_shape_verdict"]];
        let found = shapes.into_iter().filter(|_| !OF_IONIZATION.contains(&name)).map(of);
        found
            .chain([of(&["ionization_verdict"])])
            .find(|v| *v != Verdict::Missing)
            .unwrap_or(Verdict::Missing)
    }
}

/// Every number that is judged, and the dataset of its verdict.
pub fn judged() -> impl Iterator<Item = (&'static str, &'static str)> {
    OF_PLATEAU
        .into_iter()
        .chain(OF_ELECTRONS)
        .chain(OF_LIMITS)
        .chain(OF_RATIOS.map(|(_, ratio, verdict)| (ratio, verdict)))
        .chain([PHASE])
}

const PHASE: (&str, &str) = ("phase_difference", "phase_verdict");
/// Distances of electron spectra, before and after the shift.
const OF_ELECTRONS: [(&str, &str); 2] = [
    ("electron_distance", "electron_distance_verdict"),
    ("electron_shifted_distance", "electron_shape_verdict"),
];
/// Classical limits beside the breaks of the full electron spectrum.
const OF_LIMITS: [(&str, &str); 2] =
    [("direct_difference", "direct_verdict"), ("rescattering_difference", "rescattering_verdict")];
/// Numbers that the summary has too, with their ratios and verdicts.
const OF_RATIOS: [(&str, &str, &str); 2] = [
    ("ionization_probability", "ionization_ratio", "ionization_verdict"),
    ("electron_yield", "electron_yield_ratio", "electron_yield_verdict"),
];

/// Numbers of the plateau with their verdicts, in the order of [`compare_harmonics`].
const OF_PLATEAU: [(&str, &str); 6] = [
    ("cutoff_difference", "cutoff_verdict"),
    ("slope_difference", "slope_verdict"),
    ("level_difference", "level_verdict"),
    ("distance", "distance_verdict"),
    ("shifted_distance", "shape_verdict"),
    ("harmonic_yield_ratio", "harmonic_yield_verdict"),
];

/// Orders above the ionization energy up to the full run's measured cutoff; `None` where these are too few.
pub(super) fn plateau(contents: &Contents, index: usize) -> Option<RangeInclusive<usize>> {
    let number = |name: &str| scalar(contents, "summary", name, index).filter(|v| v.is_finite());
    let photon = number("first_photon_energy")?;
    let first = (-number("initial_energy")? / photon).max(0.0) as usize + 1;
    let orders = contents.get("harmonic_yields", "order")?.shape()[0];
    let last = ((number("cutoff_energy")? / photon) as usize).min(orders);
    (last + 1 >= first + FEWEST).then_some(first..=last)
}

/// A number of one point.
fn scalar(contents: &Contents, group: &str, name: &str, index: usize) -> Option<f64> {
    contents.real(group, name)?.iter().nth(index).copied()
}

/// An array of one point, along its only axis.
fn values<'a>(contents: &'a Contents, group: &str, name: &str, index: usize) -> &'a [f64] {
    let points: usize = contents.scan().iter().map(ScanDimension::length).product();
    let all = contents.real(group, name).and_then(|array| array.as_slice()).unwrap_or_default();
    let each = all.len() / points.max(1);
    all.get(index * each..(index + 1) * each).unwrap_or_default()
}
