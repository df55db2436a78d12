//! Puts error bars into a result.

use std::path::{Path, PathBuf};

use ndarray::ArrayD;
use serde_json::Value;
use tdse_core::refine::{Cause, Errors};

use super::bars::{self, Counted, Found, Place};
use super::models::{ModelPlan, attach_models, models_folder};
use super::plan::Plan;
use crate::derive::models;
use crate::scan::prepare::Prepared;
use crate::store::table;
use crate::store::{self, Contents, Error, Folder, Request};

/// All energies of an electron spectrum.
const ALL_ELECTRONS: Counted = Counted { floor: bars::ELECTRON_FLOOR, first: usize::MAX };

/// Where the scan over finer numerics lies in the folder of a request.
pub fn folder(root: &Path) -> PathBuf {
    root.join("refine").join("numerics")
}

/// A number of the summary with its bar.
#[derive(Clone, Debug, PartialEq)]
pub struct Bar {
    /// Number of the point.
    pub point: usize,
    /// What it is.
    pub name: &'static str,
    /// Unit; empty where there is none.
    pub unit: &'static str,
    /// The number; none where the bar is a relative one of many numbers.
    pub value: Option<f64>,
    /// Its bar.
    pub error: f64,
    /// The choice that limits it.
    pub limiting: Option<Cause>,
}

/// Puts back what [`attach`] and [`attach_models`](super::attach_models()) had put into a result that was gathered anew.
///
/// # Errors
/// Where a result cannot be read or written.
pub fn restore(root: &Path, prepared: &Prepared, request: &Request) -> Result<(), Error> {
    if folder(root).is_dir() {
        attach(root, &Plan::new(prepared, request))?;
    }
    // Its atoms are tuned anew: only where there is something to put back.
    if models_folder(root).is_dir()
        && let Ok(plan) = ModelPlan::new(prepared, request)
    {
        attach_models(root, &plan)?;
    }
    Ok(())
}

/// Writes the bars that the finished scan in [`folder()`] gives into `result.h5`; nothing where there is no such scan, or
/// one of another request. Comparisons of models are made anew with them.
///
/// # Errors
/// Where a result cannot be read or written.
pub fn attach(root: &Path, plan: &Plan) -> Result<Option<Vec<Bar>>, Error> {
    let result = root.join("result.h5");
    let Some(finer) = finished(&folder(root), &plan.configuration)? else { return Ok(None) };
    let mut base = store::read(&result)?;
    let mut said = Vec::new();
    let (mut yields, mut electrons) = (Vec::new(), Vec::new());
    let (mut cutoff, mut ionization) = (Vec::new(), Vec::new());
    for (group, name) in bars::places(&base) {
        let found = bars::of(plan, &base, &finer, Place { group: &group, name });
        let own = base.real(&group, name).expect("a place of the result");
        let mut errors = ArrayD::from_elem(own.raw_dim(), f64::NAN);
        let flat = errors.as_slice_mut().expect("a new array");
        for (start, _, found) in &found {
            flat[*start..start + found.bars.len()].copy_from_slice(&found.bars);
        }
        if group == "summary" {
            said.extend(
                plan.repeated.iter().zip(&found).filter_map(|(point, found)| bar(point.index, name, found)),
            );
        }
        base.insert(&group, &format!("{name}_errors"), errors);
        match (group.as_str(), name) {
            ("harmonic_yields", _) => yields = found,
            ("photoelectrons", "yield") => electrons = found,
            ("summary", "cutoff_energy") => cutoff = found,
            ("summary", "ionization_probability") => ionization = found,
            _ => {}
        }
    }
    let orders = highest_orders(&base, plan);
    causes(&mut base, plan, "harmonic_yields", &yields, |i, values, errors, cause| {
        bars::relative(values, errors, cause, orders[i])
    });
    causes(&mut base, plan, "electron_spectrum", &electrons, |_, values, errors, cause| {
        bars::relative(values, errors, cause, ALL_ELECTRONS)
    });
    let alone = |_: usize, _: &[f64], errors: &Errors, cause: Cause| {
        errors.by_cause.iter().find(|(known, _)| *known == cause).map_or(f64::NAN, |(_, parts)| parts[0])
    };
    causes(&mut base, plan, "cutoff_energy", &cutoff, alone);
    causes(&mut base, plan, "ionization_probability", &ionization, alone);
    said.extend(medians(plan, "Harmonic yields up to the cutoff, median relative", &yields, &orders));
    let all = vec![ALL_ELECTRONS; plan.repeated.len()];
    said.extend(medians(plan, "Electron spectrum, median relative", &electrons, &all));
    models::compare(&mut base, |index| plan.tolerances[index]);
    store::write(&result, &base)?;
    Ok(Some(said))
}

/// The result of a scan in `folder`, if it is the scan of this configuration and has one.
pub(super) fn finished(folder: &Path, configuration: &Value) -> Result<Option<Contents>, Error> {
    let known = Folder::open(folder).and_then(|folder| folder.request());
    let result = folder.join("result.h5");
    if !known.is_ok_and(|request| request.configuration == *configuration) || !result.is_file() {
        return Ok(None);
    }
    store::read(&result).map(Some)
}

fn bar(point: usize, name: &str, (_, values, errors): &Found) -> Option<Bar> {
    let dataset = table::group("summary")?.dataset(name)?;
    let (value, error) = (*values.first()?, *errors.bars.first()?);
    value.is_finite().then(|| Bar {
        point,
        name: dataset.long_name,
        unit: dataset.unit(),
        value: Some(value),
        error,
        limiting: errors.limiting(),
    })
}

/// Median relative bars of an array at every repeated point, over the values that count.
fn medians(plan: &Plan, name: &'static str, found: &[Found], counted: &[Counted]) -> Vec<Bar> {
    let all = plan.repeated.iter().zip(found).zip(counted);
    all.map(|((point, (_, values, errors)), &counted)| Bar {
        point: point.index,
        name,
        unit: "",
        value: None,
        error: bars::median(values, &errors.bars, counted),
        limiting: bars::limiting(values, errors, counted),
    })
    .collect()
}

/// For every repeated point the orders up to its cutoff, or all of them.
fn highest_orders(base: &Contents, plan: &Plan) -> Vec<Counted> {
    let at = |name: &str, index: usize| {
        base.real("summary", name).and_then(|array| array.iter().nth(index).copied()).unwrap_or(f64::NAN)
    };
    let order = |index: usize| at("cutoff_energy", index) / at("first_photon_energy", index);
    let first = |index: usize| match order(index) {
        order if order.is_finite() => order as usize,
        _ => usize::MAX,
    };
    let counted = |index: usize| Counted { floor: bars::YIELD_FLOOR, first: first(index) };
    plan.repeated.iter().map(|point| counted(point.index)).collect()
}

/// Writes what each cause contributes to one quantity, NaN at points that were not repeated.
fn causes(
    base: &mut Contents,
    plan: &Plan,
    name: &str,
    found: &[Found],
    number: impl Fn(usize, &[f64], &Errors, Cause) -> f64,
) {
    if found.is_empty() {
        return;
    }
    let group = "refinement";
    let numbers: Vec<i64> = Cause::WORDS.iter().map(|(cause, _)| *cause as i64).collect();
    let words: Vec<String> =
        Cause::WORDS.iter().map(|(cause, word)| format!("{} {word}", *cause as i64)).collect();
    base.insert(group, "cause", numbers);
    base.remark(group, "causes", &words.join(", "));
    let shape: Vec<usize> =
        base.scan().iter().map(store::ScanDimension::length).chain([Cause::WORDS.len()]).collect();
    let mut array = ArrayD::from_elem(shape, f64::NAN);
    let flat = array.as_slice_mut().expect("a new array");
    for (i, (point, (_, values, errors))) in plan.repeated.iter().zip(found).enumerate() {
        for (cause, _) in Cause::WORDS {
            flat[point.index * Cause::WORDS.len() + cause as usize] = number(i, values, errors, cause);
        }
    }
    base.insert(group, name, array);
}
