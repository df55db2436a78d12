//! Simpler models of a recorded run, in the groups `models/NAME`, and how far each is from it.
//!
//! What a model gives is derived from the request and the recorded arrays alone, so models can be changed without a new
//! propagation.

mod comparison;
mod curve;
mod harmonics;
mod ionization;
mod paths;
mod perturbation;

use std::cell::OnceCell;

use num_complex::Complex;
use tdse_core::field::Field;
use tdse_core::model::recombination::recombined;
use tdse_core::model::strong_field::{DipoleSeries, Ground, StrongField};
use tdse_core::model::tunnelling::Rate;
use tdse_core::simulate::{Atom, Schedule};
use tdse_core::spectrum::{
    ContinuumAmplitude, Electrons, EnergyAxis, Harmonics, Window, harmonics as transformed, momenta_of,
    sampled_by_order,
};

use super::electronvolts;
use crate::config::models::{Model, Survival};
use crate::config::request;
use crate::scan::atoms::Atoms;
use crate::scan::defaults::classical_cutoff;
use crate::scan::prepare::{Job, Point};
use crate::store::Contents;
use harmonics::Source;

pub use comparison::{compare, names};

/// Times the classical cutoff to which models of harmonics reach: the fall behind it is part of the measured cutoff.
const BEYOND: f64 = 1.5;
const FILLED: &str = "defaults are filled in before a point runs";

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
        Model::StrongField(survival) => strong_field(contents, run, *survival)?,
        Model::Recombination => {
            let (states, packet) = (continuum()?, run.packet());
            let transformed =
                |axis, window| recombined(&packet.harmonics(axis, window), &states, &run.ground);
            let (schedule, highest) = (&packet.series.schedule, packet.highest);
            harmonics::put(contents, run, &Source { name: model.name(), schedule, highest, transformed });
        }
        Model::Tunnelling { angular_momentum } => ionization::tunnelling(contents, run, *angular_momentum)?,
        Model::Perturbation => perturbation::put(contents, run, &*continuum()?),
        Model::Curve { of, curve } => curve::put(contents, run, *of, curve),
    }
    Ok(())
}

/// What models start from, in atomic units.
struct Run<'a> {
    job: &'a Job,
    field: &'a Field,
    atom: &'a Atom,
    ground: Ground<'a>,
    /// Spectrum of the full run, where it is asked for and a pulse gives the photon.
    spectrum: Option<Spectrum>,
    packet: OnceCell<Packet>,
}

/// Dipole of the strong-field approximation.
struct Packet {
    series: DipoleSeries,
    acceleration: Vec<f64>,
    /// Up to this photon energy, hartree.
    highest: f64,
}

impl Packet {
    fn new(series: DipoleSeries, highest: f64) -> Self {
        Self { acceleration: series.along_x(), series, highest }
    }

    fn harmonics(&self, axis: EnergyAxis, window: Window) -> Harmonics {
        transformed(&self.acceleration, &self.series.schedule, window, axis)
    }
}

/// Harmonics of the full run.
struct Spectrum {
    axis: EnergyAxis,
    wanted: request::Harmonics,
    photon: f64,
    orders: usize,
    /// Amplitudes of orders 1, 2, ….
    amplitudes: Vec<Complex<f64>>,
}

impl<'a> Run<'a> {
    fn new(point: &'a Point, atom: &'a Atom, contents: &Contents) -> Self {
        let job = &point.job;
        let number = job.problem.initial.lowest();
        let ground = Ground {
            axis: job.numerics.grid.x,
            state: &atom.bound.states[number],
            ionization_energy: -atom.bound.energies[number],
        };
        let field = &job.problem.field;
        let photon = field.pulses.first().map(|pulse| pulse.frequency);
        let spectrum = job.outputs.harmonics.zip(photon).map(|(wanted, photon)| {
            let (numerics, orders) = (&job.numerics, wanted.max_order.expect(FILLED) as usize);
            let schedule = Schedule::new(field, numerics.time_step, numerics.trailing_time);
            let recorded = contents.real("dynamics", "dipole_acceleration").expect("a recorded series");
            let acceleration: Vec<f64> = recorded.iter().copied().collect();
            let full = transformed(&acceleration, &schedule, wanted.window, every_order(photon, orders));
            Spectrum {
                axis: EnergyAxis::up_to(wanted.max_energy.expect(FILLED), wanted.energy_step.expect(FILLED)),
                wanted,
                photon,
                orders,
                amplitudes: full.amplitude[1..].to_vec(),
            }
        });
        Self { job, field, atom, ground, spectrum, packet: OnceCell::new() }
    }

    /// Axis of the electron spectrum, where one is asked for.
    fn electron_axis(&self) -> Option<EnergyAxis> {
        self.job.electrons().map(|(_, axis)| axis)
    }

    /// Photon energy up to which the strong-field approximation is computed, hartree: well beyond the classical cutoff of this very
    /// point, within the axis that all points share.
    fn highest(&self, axis: EnergyAxis) -> f64 {
        let fastest = self.field.pulses.iter().map(|pulse| pulse.frequency).fold(0.0, f64::max);
        let classical = classical_cutoff(self.field, self.ground.ionization_energy, fastest);
        (BEYOND * classical).min(axis.step * (axis.points - 1) as f64)
    }

    /// The strong-field approximation up to an energy.
    fn strong_field(&self, highest: f64) -> StrongField {
        StrongField::new(&self.ground, self.field, highest, self.job.numerics.trailing_time)
    }

    /// Its undepleted dipole, made once; of a run that writes harmonics.
    fn packet(&self) -> &Packet {
        self.packet.get_or_init(|| {
            let highest = self.spectrum.as_ref().map_or(0.0, |full| self.highest(full.axis));
            Packet::new(self.strong_field(highest).dipole(), highest)
        })
    }

    /// √(Ip/2Up) with the ponderomotive energy that the summary states.
    fn keldysh_parameter(&self, contents: &Contents) -> f64 {
        let up = contents.real("summary", "ponderomotive_energy").and_then(|array| array.first().copied());
        let ip = electronvolts(self.ground.ionization_energy);
        tdse_core::quantities::keldysh_parameter(ip, up.unwrap_or(f64::NAN))
    }
}

/// Axis of the orders themselves, from 0 on.
fn every_order(photon: f64, orders: usize) -> EnergyAxis {
    EnergyAxis { step: photon, points: orders + 1 }
}

fn strong_field(contents: &mut Contents, run: &Run, survival: Survival) -> Result<(), String> {
    const NAME: &str = "strong_field";
    if let Some(full) = &run.spectrum {
        let depleted;
        let packet = match survival {
            Survival::Whole => run.packet(),
            Survival::Depleted => {
                let highest = run.highest(full.axis);
                let plan = run.strong_field(highest);
                let left = left(run, plan.schedule())?;
                depleted = Packet::new(plan.dipole_with(left), highest);
                &depleted
            }
        };
        let (schedule, highest) = (&packet.series.schedule, packet.highest);
        let transformed = |axis, window| packet.harmonics(axis, window);
        harmonics::put(contents, run, &Source { name: NAME, schedule, highest, transformed });
    }
    if let Some(axis) = run.electron_axis() {
        let plan = run.strong_field(axis.step * (axis.points - 1) as f64);
        electrons(contents, NAME, axis, &plan.electrons(momenta_of(axis)));
    }
    Ok(())
}

/// Probability that the quasi-static rate leaves in the bound state, over time.
fn left(run: &Run, schedule: &Schedule) -> Result<impl Fn(f64) -> f64 + use<>, String> {
    let rate = Rate::Model(ionization::quasi_static(run)?);
    let gone = rate.ionization(run.field, &schedule.times());
    let (start, step) = (schedule.start, schedule.time_step);
    Ok(move |t: f64| {
        let place = ((t - start) / step).clamp(0.0, (gone.len() - 1) as f64);
        let (before, part) = (place as usize, place.fract());
        1.0 - gone[before] - part * (gone[(before + 1).min(gone.len() - 1)] - gone[before])
    })
}

/// Electrons of a model.
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
