//! What follows from a recorded series.

use ndarray::Array2;
use tdse_core::simulate::Schedule;
use tdse_core::spectrum::{
    EnergyAxis, TAPER, TimeFrequency, gabor, harmonics, measured_cutoff, order_yields, radiated_energy,
};

use super::{doubts, electronvolts, femtoseconds};
use crate::config::request;
use crate::scan::prepare::{Job, Point};
use crate::store::Contents;

/// Groups made by [`derive`].
const DERIVED: [&str; 3] = ["harmonics", "harmonic_yields", "time_frequency"];

const FILLED: &str = "defaults are filled in before a point runs";

/// (Re)makes everything that follows from the recorded series, as the point's outputs ask.
///
/// # Panics
/// If `contents` does not hold the series of the point.
pub fn derive(point: &Point, contents: &mut Contents) {
    for group in DERIVED {
        contents.remove_group(group);
    }
    contents.remove("summary", "cutoff_energy");
    let job = &point.job;
    let numerics = &job.numerics;
    let schedule = Schedule::new(&job.problem.field, numerics.time_step, numerics.trailing_time);
    let acceleration = contents
        .real("dynamics", "dipole_acceleration")
        .and_then(|a| a.as_slice())
        .map(<[f64]>::to_vec)
        .expect("a recorded result holds its acceleration");
    if let Some(wanted) = &job.outputs.harmonics {
        spectrum(contents, job, wanted, &acceleration, &schedule);
        yields(contents, job, wanted, &acceleration, &schedule);
    }
    if let Some(wanted) = &job.outputs.time_frequency {
        map(contents, wanted, &acceleration, &schedule);
    }
    doubts::renew(point, contents, &acceleration, &schedule);
}

/// Axis of an output whose defaults are filled in.
fn axis(max_energy: Option<f64>, energy_step: Option<f64>) -> EnergyAxis {
    EnergyAxis::up_to(max_energy.expect(FILLED), energy_step.expect(FILLED))
}

fn spectrum(
    contents: &mut Contents,
    job: &Job,
    wanted: &request::Harmonics,
    acceleration: &[f64],
    schedule: &Schedule,
) {
    let axis = axis(wanted.max_energy, wanted.energy_step);
    let found = harmonics(acceleration, schedule, wanted.window, axis);
    let energies = axis.values();
    let group = "harmonics";
    contents.insert(group, "photon_energy", energies.iter().map(|&e| electronvolts(e)).collect::<Vec<_>>());
    if let Some(first) = job.problem.field.pulses.first() {
        let orders: Vec<f64> = energies.iter().map(|e| e / first.frequency).collect();
        contents.insert(group, "harmonic_order", orders);
    }
    let spectrum = found.spectrum();
    contents.insert(
        group,
        "radiated_energy",
        spectrum.iter().map(|&s| radiated_energy(s)).collect::<Vec<_>>(),
    );
    contents.insert(group, "spectrum", spectrum);
    contents.insert(group, "spectral_phase", found.phase());
    contents.remark(group, "window", wanted.window.name());
}

/// Yields per order, and the cutoff measured on them: as far as the time step resolves photons, NaN beyond.
fn yields(
    contents: &mut Contents,
    job: &Job,
    wanted: &request::Harmonics,
    acceleration: &[f64],
    schedule: &Schedule,
) {
    let Some(first) = job.problem.field.pulses.first() else {
        contents.insert("summary", "cutoff_energy", f64::NAN);
        return;
    };
    let resolved = 0.5 * std::f64::consts::PI / schedule.time_step;
    let orders = (resolved / first.frequency - 0.5).floor().max(1.0) as usize;
    let all = order_yields(acceleration, schedule, wanted.window, first.frequency, orders);
    let cutoff = measured_cutoff(&all).map_or(f64::NAN, |knee| electronvolts(knee.order * first.frequency));
    contents.insert("summary", "cutoff_energy", cutoff);
    let shown = wanted.max_order.expect(FILLED) as usize;
    let yields: Vec<f64> = (0..shown).map(|i| all.get(i).map_or(f64::NAN, |&y| electronvolts(y))).collect();
    contents.insert("harmonic_yields", "order", (1..=shown as i64).collect::<Vec<_>>());
    contents.insert("harmonic_yields", "yield", yields);
    contents.remark("harmonic_yields", "window", wanted.window.name());
}

fn map(contents: &mut Contents, wanted: &request::TimeFrequency, acceleration: &[f64], schedule: &Schedule) {
    let settings = TimeFrequency {
        window_length: wanted.window_length.expect(FILLED),
        time_step: wanted.time_step.expect(FILLED),
        axis: axis(wanted.max_energy, wanted.energy_step),
    };
    let found = gabor(acceleration, schedule, &settings);
    let group = "time_frequency";
    let energies: Vec<f64> = found.axis.values().into_iter().map(electronvolts).collect();
    let shape = (found.times.len(), energies.len());
    contents.insert(group, "time", found.times.iter().map(|&t| femtoseconds(t)).collect::<Vec<_>>());
    contents.insert(group, "photon_energy", energies);
    let map = Array2::from_shape_fn(shape, |(t, e)| found.intensity[t * shape.1 + e]);
    contents.insert(group, "intensity", map.into_dyn());
    let length = femtoseconds(settings.window_length);
    let window = format!(
        "gaussian, {length:.4} fs full width at half maximum of its square; ends tapered over {:.4} fs",
        TAPER * length
    );
    contents.remark(group, "window", &window);
}
