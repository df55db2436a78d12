//! Error bars of every array of a result, from the same arrays of the runs with finer numerics.

use tdse_core::refine::{Cause, Errors, Neighbours, Varied, errors};

use super::plan::Plan;
use crate::store::Contents;

/// Harmonic yields below this part of the largest are rounding (double precision squared, with room).
pub(super) const YIELD_FLOOR: f64 = 1e-22;
/// Electron peaks below this part of the largest do not count in the median.
pub(super) const ELECTRON_FLOOR: f64 = 1e-8;
/// What has no bar: a phase is known up to full turns, an orientation up to half ones, the norm in the box is the box's own, and the others follow from
/// the request alone.
const WITHOUT: [&str; 6] = [
    "spectral_phase",
    "harmonic_orientation",
    "ponderomotive_energy",
    "first_photon_energy",
    "classical_cutoff",
    "final_norm",
];
/// The knee is searched in steps of a tenth of a photon: a cutoff is not known better than half of that.
const KNEE: f64 = 0.05;

/// An array of a result by group and name.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) struct Place<'a> {
    pub group: &'a str,
    pub name: &'a str,
}

/// Groups that are about errors themselves.
const ABOUT_ERRORS: [&str; 2] = ["refinement", "model_atoms"];

/// Arrays that get bars. Models have none of their own: their comparison takes those of the full result.
pub(super) fn places(contents: &Contents) -> Vec<(String, &'static str)> {
    let with_bars = |group: &str, name: &str| {
        !ABOUT_ERRORS.iter().any(|about| group.ends_with(about))
            && !group.starts_with("models/")
            && !WITHOUT.contains(&name)
    };
    let places = contents.numbers().map(|(group, dataset, _)| (group.to_owned(), dataset.name));
    places.filter(|(group, name)| with_bars(group, name)).collect()
}

/// Where the values of a point begin, the values, and their errors.
pub(super) type Found = (usize, Vec<f64>, Errors);

/// Errors of an array at every repeated point, with the flat place where the point's values begin and the values.
pub(super) fn of(plan: &Plan, base: &Contents, finer: &Contents, place: Place) -> Vec<Found> {
    let (Some(own), Some(all)) = (base.real(place.group, place.name), finer.real(place.group, place.name))
    else {
        return Vec::new();
    };
    let count: usize = base.scan().iter().map(crate::store::ScanDimension::length).product();
    let length = own.len() / count.max(1);
    let all = all.as_slice().unwrap_or_default();
    let spans = spans_the_run(base, place);
    let neighbours = neighbours(base, place);
    plan.starts()
        .filter(|(repeated, start)| all.len() >= (start + repeated.runs.len()) * length)
        .map(|(repeated, start)| {
            let kept = repeated.runs.iter().enumerate();
            let kept = kept.filter(|(_, run)| !(spans && run.what == Varied::One(Cause::TrailingTime)));
            let (runs, values): (Vec<_>, Vec<_>) = kept
                .map(|(j, run)| (run.clone(), all[(start + j) * length..(start + j + 1) * length].to_vec()))
                .unzip();
            let mut found = errors(&runs, &values, neighbours);
            if place.name == "cutoff_energy" {
                let photon = base.real("summary", "first_photon_energy");
                let photon = photon.and_then(|all| all.iter().nth(repeated.index)).copied().unwrap_or(0.0);
                found.bars.iter_mut().for_each(|bar| *bar += KNEE * photon);
            }
            (repeated.index * length, values[0].clone(), found)
        })
        .collect()
}

/// Whether a window that spans the whole run weights this array: a longer run would change its meaning, not its error.
fn spans_the_run(contents: &Contents, place: Place) -> bool {
    let of_spectrum =
        ["harmonics", "harmonic_yields"].contains(&place.group) || place.name == "cutoff_energy";
    let window = contents.groups().find(|(path, _)| *path == "harmonics").map(|(_, group)| &group.attributes);
    let window = window.and_then(|attributes| attributes.get("window")).map_or("", String::as_str);
    of_spectrum && ["hann", "blackman"].contains(&window)
}

/// Half a photon to each side along a spectrum, two orders along yields.
fn neighbours(contents: &Contents, place: Place) -> Neighbours {
    let photon = contents
        .real("summary", "first_photon_energy")
        .and_then(|photons| photons.iter().copied().find(|photon| photon.is_finite()));
    let step = |axis: &str| {
        contents
            .real(place.group, axis)
            .and_then(|axis| Some(axis.get([1].as_slice())? - axis[[0].as_slice()]))
    };
    let half_photon = |axis: &str| match (photon, step(axis)) {
        (Some(photon), Some(step)) => Neighbours::Within((0.5 * photon / step).ceil() as usize),
        _ => Neighbours::Within(2),
    };
    match place.group {
        "harmonics" => half_photon("photon_energy"),
        "photoelectrons" => half_photon("energy"),
        // A map has neighbours in two directions.
        "momentum" if contents.get("momentum", "momentum_x").is_some() => Neighbours::None,
        "harmonic_yields" | "momentum" => Neighbours::Within(2),
        _ => Neighbours::None,
    }
}

/// Which of many values count in a median: those above a part of the largest, and so many first ones at most.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Counted {
    /// Part of the largest.
    pub floor: f64,
    /// First values.
    pub first: usize,
}

/// Median of what a cause contributes beside the value.
pub(super) fn relative(values: &[f64], errors: &Errors, cause: Cause, counted: Counted) -> f64 {
    let parts = errors.by_cause.iter().find(|(known, _)| *known == cause);
    parts.map_or(f64::NAN, |(_, parts)| median(values, parts, counted))
}

/// The cause whose median is largest.
pub(super) fn limiting(values: &[f64], errors: &Errors, counted: Counted) -> Option<Cause> {
    let medians = errors.by_cause.iter().map(|(cause, parts)| (*cause, median(values, parts, counted)));
    let there = medians.filter(|(_, median)| median.is_finite());
    there.max_by(|a, b| a.1.total_cmp(&b.1)).map(|(cause, _)| cause)
}

/// Median of errors beside their values.
pub(super) fn median(values: &[f64], errors: &[f64], counted: Counted) -> f64 {
    let largest = values.iter().copied().filter(|v| v.is_finite()).fold(0.0, f64::max);
    let pairs = values.iter().zip(errors).take(counted.first);
    let pairs = pairs.filter(|(value, _)| **value > counted.floor * largest);
    let mut ratios: Vec<f64> = pairs.map(|(value, error)| error / value).filter(|r| r.is_finite()).collect();
    ratios.sort_by(f64::total_cmp);
    ratios.get(ratios.len() / 2).copied().unwrap_or(f64::NAN)
}
