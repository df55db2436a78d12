//! What follows from a recorded series.

use ndarray::Array2;
use tdse_core::simulate::Schedule;
use tdse_core::spectrum::{
    EnergyAxis, Harmonics, Helicity, PlaneHarmonics, TAPER, TimeFrequency, gabor, harmonics, helicity_yields,
    measured_cutoff, order_yields, radiated_energy,
};

use super::{doubts, electronvolts, femtoseconds};
use crate::config::request;
use crate::scan::prepare::{Job, Point};
use crate::store::{Contents, Values};

/// Groups made by [`derive`].
const DERIVED: [&str; 3] = ["harmonics", "harmonic_yields", "time_frequency"];

/// Helicities in the order of their axis, with their numbers.
pub(super) const HELICITIES: [(Helicity, i64); 2] = [(Helicity::Positive, 1), (Helicity::Negative, -1)];

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
    let acceleration: Vec<Vec<f64>> = {
        let recorded = contents.real("dynamics", "dipole_acceleration");
        let flat = recorded.and_then(|a| a.as_slice()).expect("a recorded result holds its acceleration");
        flat.chunks(schedule.steps + 1).map(<[f64]>::to_vec).collect()
    };
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
    acceleration: &[Vec<f64>],
    schedule: &Schedule,
) {
    let axis = axis(wanted.max_energy, wanted.energy_step);
    let energies = axis.values();
    let group = "harmonics";
    if acceleration.len() == 2 {
        contents.insert(group, "component", vec![0i64, 1]);
    }
    contents.insert(group, "photon_energy", energies.iter().map(|&e| electronvolts(e)).collect::<Vec<_>>());
    if let Some(first) = job.problem.field.pulses.first() {
        let orders: Vec<f64> = energies.iter().map(|e| e / first.frequency).collect();
        contents.insert(group, "harmonic_order", orders);
    }
    let found: Vec<Harmonics> =
        acceleration.iter().map(|component| harmonics(component, schedule, wanted.window, axis)).collect();
    let spectra: Vec<Vec<f64>> = found.iter().map(Harmonics::spectrum).collect();
    let total = (0..axis.points).map(|i| radiated_energy(spectra.iter().map(|s| s[i]).sum()));
    contents.insert(group, "radiated_energy", total.collect::<Vec<_>>());
    contents.insert(group, "spectrum", rows(spectra));
    contents.insert(group, "spectral_phase", rows(found.iter().map(Harmonics::phase).collect()));
    if let Ok(components) = <[Harmonics; 2]>::try_from(found) {
        polarization(contents, group, &PlaneHarmonics { components });
    }
    contents.remark(group, "window", wanted.window.name());
}

/// Spectra per helicity, ellipticity and orientation.
pub(super) fn polarization(contents: &mut Contents, group: &str, found: &PlaneHarmonics) {
    let spectra = HELICITIES.map(|(helicity, _)| found.helicity(helicity).spectrum());
    contents.insert(group, "helicity", HELICITIES.map(|(_, number)| number).to_vec());
    contents.insert(group, "helicity_spectrum", rows(spectra.to_vec()));
    contents.insert(group, "harmonic_ellipticity", found.ellipticity());
    contents.insert(group, "harmonic_orientation", found.orientation());
}

/// One series as it is, several below one another.
pub(super) fn rows(series: Vec<Vec<f64>>) -> Values {
    match <[Vec<f64>; 1]>::try_from(series) {
        Ok([only]) => only.into(),
        Err(several) => {
            let (count, length) = (several.len(), several[0].len());
            Array2::from_shape_vec((count, length), several.concat()).expect("rows of one length").into()
        }
    }
}

/// Yields per order, and the cutoff measured on them: as far as the time step resolves photons, NaN beyond.
fn yields(
    contents: &mut Contents,
    job: &Job,
    wanted: &request::Harmonics,
    acceleration: &[Vec<f64>],
    schedule: &Schedule,
) {
    let Some(first) = job.problem.field.pulses.first() else {
        contents.insert("summary", "cutoff_energy", f64::NAN);
        return;
    };
    let resolved = 0.5 * std::f64::consts::PI / schedule.time_step;
    let orders = (resolved / first.frequency - 0.5).floor().max(1.0) as usize;
    let by_helicity: Vec<Vec<f64>> = match acceleration {
        [x, y] => {
            let both: Vec<[f64; 2]> = x.iter().zip(y).map(|(x, y)| [*x, *y]).collect();
            helicity_yields(&both, schedule, wanted.window, first.frequency, orders).to_vec()
        }
        _ => vec![order_yields(&acceleration[0], schedule, wanted.window, first.frequency, orders)],
    };
    let all: Vec<f64> = (0..orders).map(|i| by_helicity.iter().map(|yields| yields[i]).sum()).collect();
    let cutoff = measured_cutoff(&all).map_or(f64::NAN, |knee| electronvolts(knee.order * first.frequency));
    contents.insert("summary", "cutoff_energy", cutoff);
    let count = wanted.max_order.expect(FILLED) as usize;
    let shown = |all: &Vec<f64>| -> Vec<f64> {
        (0..count).map(|i| all.get(i).map_or(f64::NAN, |&y| electronvolts(y))).collect()
    };
    let group = "harmonic_yields";
    if by_helicity.len() == 2 {
        contents.insert(group, "helicity", HELICITIES.map(|(_, number)| number).to_vec());
    }
    contents.insert(group, "order", (1..=count as i64).collect::<Vec<_>>());
    contents.insert(group, "yield", shown(&all));
    if by_helicity.len() == 2 {
        contents.insert(group, "helicity_yield", rows(by_helicity.iter().map(shown).collect()));
    }
    contents.remark(group, "window", wanted.window.name());
}

fn map(
    contents: &mut Contents,
    wanted: &request::TimeFrequency,
    acceleration: &[Vec<f64>],
    schedule: &Schedule,
) {
    let settings = TimeFrequency {
        window_length: wanted.window_length.expect(FILLED),
        time_step: wanted.time_step.expect(FILLED),
        axis: axis(wanted.max_energy, wanted.energy_step),
    };
    let mut maps = acceleration.iter().map(|component| gabor(component, schedule, &settings));
    let mut found = maps.next().expect("at least one component");
    for other in maps {
        found.intensity.iter_mut().zip(&other.intensity).for_each(|(sum, value)| *sum += value);
    }
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
