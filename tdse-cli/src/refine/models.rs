//! The same field on other model atoms of the same ionization energy: the model's own uncertainty, never mixed with
//! the numerical error.

use std::path::{Path, PathBuf};

use ndarray::ArrayD;
use serde_json::{Value, json};
use tdse_core::potential::Potential;
use tdse_core::problem::{InitialState, Parity, Symmetry};
use tdse_core::refine::{ModelAtom, model_atoms, plane_model_atoms};

use super::attach::finished;
use super::plan::{is_of_models, own_axes, representatives, without_models};
use crate::config::Files;
use crate::config::quantity::digits;
use crate::scan::asked;
use crate::scan::prepare::{Job, Prepared};
use crate::scan::source::Source;
use crate::store::{self, Contents, Error, Request};

/// Where the scan over model atoms lies in the folder of a request.
pub fn models_folder(root: &Path) -> PathBuf {
    root.join("refine").join("model_atoms")
}

/// A request as a scan over model atoms.
#[derive(Clone, Debug)]
pub struct ModelPlan {
    /// Numbers of the points that are repeated, in the order of the scan.
    repeated: Vec<usize>,
    /// Names of the model atoms; the one asked for comes first.
    names: Vec<String>,
    configuration: Value,
    files: Files,
}

impl ModelPlan {
    /// Of a request that is ready.
    ///
    /// # Errors
    /// Why there are no such atoms: they are made for ground states that are bound.
    pub fn new(prepared: &Prepared, request: &Request) -> Result<Self, String> {
        let repeated = representatives(prepared);
        let mut atoms = Vec::new();
        let mut names = vec!["as asked".to_owned()];
        for &index in &repeated {
            let point = &prepared.points[index];
            if !is_ground(&point.job) {
                return Err(format!(
                    "/atom/state: {} is no ground state; allowed: the ground state, which other model atoms can share",
                    request.configuration["atom"]["state"]
                ));
            }
            if point.facts.ionization_energy() <= 0.0 {
                return Err(
                    "/atom/potential: binds nothing below zero; allowed: an atom that can be ionized".into(),
                );
            }
            let make = if point.job.labels.is_empty() { model_atoms } else { plane_model_atoms };
            let models = make(point.facts.ionization_energy()).map_err(|error| error.to_string())?;
            let resolved: Value = serde_json::from_str(&point.configuration).unwrap_or_default();
            atoms.push(resolved["atom"].clone());
            atoms.extend(models.iter().map(|model| spelled(model, &resolved["atom"])));
            names.truncate(1);
            names.extend(models.into_iter().map(|model| model.name));
        }
        let configuration = configuration(prepared, request, &repeated, &atoms);
        Ok(Self { repeated, names, configuration, files: Files::Stored(asked::inputs(prepared)) })
    }

    /// What is to be prepared and run.
    pub fn source(&self) -> Source {
        Source { text: format!("{:#}\n", self.configuration), files: self.files.clone() }
    }
}

/// On a plane the ground state is named by its angular momentum or by its parities.
fn is_ground(job: &Job) -> bool {
    let InitialState::Single(number) = job.problem.initial else { return false };
    let symmetries = [Symmetry::Angular(0), Symmetry::Mirror([Parity::Even; 2])];
    match job.labels.get(number) {
        None => number == 0,
        Some(label) => label.number == 0 && symmetries.contains(&label.symmetry),
    }
}

fn configuration(prepared: &Prepared, request: &Request, repeated: &[usize], atoms: &[Value]) -> Value {
    let mut tree = request.configuration.clone();
    let scan = tree.as_object_mut().and_then(|map| map.shift_remove("scan")).unwrap_or_default();
    without_models(&mut tree);
    let first: Value = serde_json::from_str(&prepared.points[repeated[0]].configuration).unwrap_or_default();
    tree["outputs"] = first["outputs"].clone();
    // Another atom has other levels, perhaps fewer; the one that all have keeps the box, and so the ionization, that of the run.
    if !tree["outputs"]["populations"].is_null() {
        tree["outputs"]["populations"]["states"] = 1.into();
    }
    let each = atoms.len() / repeated.len();
    let points: Vec<(usize, usize)> = repeated.iter().map(|index| (*index, each)).collect();
    let mut axes = own_axes(prepared, &scan, &points, |parameter| {
        !parameter.starts_with("/atom") && !is_of_models(parameter)
    });
    axes.push(json!({ "parameter": "/atom", "name": "atom", "values": atoms, "together": "refine" }));
    tree["scan"] = Value::Array(axes);
    tree
}

fn spelled(model: &ModelAtom, atom: &Value) -> Value {
    let au = |value: f64| format!("{} au", digits(value));
    let potential = match &model.potential {
        Potential::Screened { charge, softening, screening_length } => json!({
            "kind": "screened", "charge": charge, "softening": au(*softening),
            "screening_length": au(*screening_length) }),
        Potential::PoschlTeller { lambda, width } => {
            json!({ "kind": "poschl_teller", "lambda": lambda, "width": au(*width) })
        }
        Potential::GaussianWell { depth, width } => {
            json!({ "kind": "gaussian_well", "depth": au(*depth), "width": au(*width) })
        }
        other => unreachable!("no model atom is made of {other:?}"),
    };
    json!({ "dimensions": atom["dimensions"], "potential": potential, "state": atom["state"] })
}

/// How far a number moves from model to model.
#[derive(Clone, Debug, PartialEq)]
pub struct Spread {
    /// Number of the point.
    pub point: usize,
    /// What it is.
    pub name: &'static str,
    /// Unit; empty where there is none.
    pub unit: &'static str,
    /// The number of every model, with the model's name.
    pub values: Vec<(String, f64)>,
}

/// Writes what the finished scan in [`models_folder()`] found into `result.h5`; nothing where there is none of this request.
///
/// # Errors
/// Where a result cannot be read or written.
pub fn attach_models(root: &Path, plan: &ModelPlan) -> Result<Vec<Spread>, Error> {
    let Some(found) = finished(&models_folder(root), &plan.configuration)? else { return Ok(Vec::new()) };
    let result = root.join("result.h5");
    let mut base = store::read(&result)?;
    let group = "model_atoms";
    let names = plan.names.iter().enumerate().map(|(number, name)| format!("{number} {name}"));
    base.remove_group(group);
    base.insert(group, "model", (0..plan.names.len() as i64).collect::<Vec<_>>());
    base.remark(group, "models", &names.collect::<Vec<_>>().join(", "));
    if let Some(store::Values::Integer(orders)) = found.get("harmonic_yields", "order") {
        base.insert(group, "order", orders.clone());
        put(&mut base, plan, &found, ("harmonic_yields", "yield"));
    }
    let mut spreads = Vec::new();
    for (name, long_name, unit) in
        [("cutoff_energy", "Measured cutoff", "eV"), ("ionization_probability", "Ionization probability", "")]
    {
        put(&mut base, plan, &found, ("summary", name));
        let all = found.real("summary", name).map(|all| all.iter().copied().collect::<Vec<_>>());
        for (i, &point) in plan.repeated.iter().enumerate() {
            let own = all.iter().flatten().skip(i * plan.names.len());
            let values = plan.names.iter().cloned().zip(own.copied()).collect();
            spreads.push(Spread { point, name: long_name, unit, values });
        }
    }
    store::write(&result, &base)?;
    Ok(spreads)
}

/// Copies one array, NaN at points that were not repeated.
fn put(base: &mut Contents, plan: &ModelPlan, found: &Contents, (from, name): (&str, &str)) {
    let Some(all) = found.real(from, name) else { return };
    let own = all.len() / (plan.repeated.len() * plan.names.len());
    let mut shape: Vec<usize> = base.scan().iter().map(store::ScanDimension::length).collect();
    shape.push(plan.names.len());
    shape.extend(&all.shape()[1..]);
    let mut array = ArrayD::from_elem(shape, f64::NAN);
    let (flat, all) = (array.as_slice_mut().expect("a new array"), all.as_slice().unwrap_or_default());
    let length = plan.names.len() * own;
    for (i, &index) in plan.repeated.iter().enumerate() {
        flat[index * length..(index + 1) * length].copy_from_slice(&all[i * length..(i + 1) * length]);
    }
    base.insert("model_atoms", name, array);
}

impl Spread {
    /// Largest over smallest value, where all are positive.
    pub fn factor(&self) -> Option<f64> {
        let values = || self.values.iter().map(|(_, value)| *value);
        let (least, most) = (values().fold(f64::INFINITY, f64::min), values().fold(0.0, f64::max));
        (least > 0.0 && values().all(f64::is_finite)).then(|| most / least)
    }
}
