//! Simpler models of a recorded run, in the groups `models/NAME`, and how far each is from it.
//!
//! What a model gives is derived from the request and the recorded arrays alone, so models can be changed without a new
//! propagation.

pub mod branches;
mod comparison;
mod curve;
mod harmonics;
mod ionization;
mod paths;
mod perturbation;
mod recombination;
mod run;
mod strong_field;

use tdse_core::spectrum::{ContinuumAmplitude, Electrons, EnergyAxis};

use super::electronvolts;
use crate::config::models::Model;
use crate::scan::atoms::Atoms;
use crate::scan::prepare::Point;
use crate::store::Contents;
use run::Run;

pub use comparison::{compare, judged, names};

/// (Re)makes the models that the point asks for. A model that fails leaves the reason as the remark `failure` beside its comparison:
/// the full result is there without it.
///
/// # Errors
/// Where the atom cannot be had.
///
/// # Panics
/// If `contents` does not hold the series of the point.
pub fn models(point: &Point, atoms: &Atoms, contents: &mut Contents) -> Result<(), String> {
    let made: Vec<String> =
        contents.groups().filter(|(path, _)| path.starts_with("models/")).map(|(p, _)| p.into()).collect();
    for group in made {
        contents.remove_group(&group);
    }
    let Some(models) = point.job.outputs.models.as_ref().filter(|models| !models.asked.is_empty()) else {
        return Ok(());
    };
    let atom = atoms.get(&point.job).map_err(|error| error.to_string())?;
    let run = Run::new(point, &atom, contents);
    for model in &models.asked {
        if let Err(failure) = put(model, &run, atoms, contents) {
            contents.remark(&own(model.name()), "failure", &failure);
        }
        contents.insert(&own(model.name()), "keldysh_parameter", run.keldysh_parameter(contents));
    }
    compare(contents, |_| models.tolerance);
    Ok(())
}

/// The group of a model's own numbers and its comparison.
fn own(name: &str) -> String {
    format!("models/{name}/comparison")
}

fn put(model: &Model, run: &Run, atoms: &Atoms, contents: &mut Contents) -> Result<(), String> {
    let continuum = || atoms.continuum(run.job).map_err(|error| error.to_string());
    match model {
        Model::ThreeStep => paths::three_step(contents, run),
        Model::QuantumOrbits => paths::quantum_orbits(contents, run)?,
        Model::StrongField(survival) => strong_field::put(contents, run, *survival)?,
        Model::Recombination if run.dimensions() == 2 => recombination::on_plane(contents, run)?,
        Model::Recombination => recombination::put(contents, run, &*continuum()?)?,
        Model::Tunnelling { angular_momentum } => ionization::tunnelling(contents, run, *angular_momentum)?,
        Model::Perturbation if run.dimensions() == 2 => perturbation::on_plane(contents, run)?,
        Model::Perturbation => perturbation::put(contents, run, &run.line()?, &*continuum()?),
        Model::Curve { of, curve } => curve::put(contents, run, *of, curve)?,
    }
    Ok(())
}

/// Electrons of a model in one dimension.
fn electrons(contents: &mut Contents, name: &str, axis: EnergyAxis, amplitude: &ContinuumAmplitude) {
    let spectrum = Electrons::new(axis, amplitude);
    let per_ev = |values: &[f64]| -> Vec<f64> { values.iter().map(|v| v / electronvolts(1.0)).collect() };
    let group = format!("models/{name}/photoelectrons");
    let energies: Vec<f64> = axis.values().into_iter().map(electronvolts).collect();
    contents.insert(&group, "energy", energies);
    contents.insert(&group, "yield", per_ev(&spectrum.total()));
    contents.insert(&group, "left", per_ev(&spectrum.left));
    contents.insert(&group, "right", per_ev(&spectrum.right));
    let (momenta, density) = amplitude.momentum_density();
    let group = format!("models/{name}/momentum");
    contents.insert(&group, "momentum", momenta);
    contents.insert(&group, "density", density);
    contents.insert(&own(name), "electron_yield", amplitude.probability().iter().sum::<f64>());
}
