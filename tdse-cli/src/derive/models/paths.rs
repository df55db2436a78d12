//! Classical paths and quantum orbits.

use ndarray::Array2;
use tdse_core::field::Pulse;
use tdse_core::model::quantum_orbits::{Orbit, QuantumOrbits};
use tdse_core::model::three_step::{Branch, Extreme, Return, ThreeStep, strongest_part};

use super::run::Run;
use super::{electronvolts, own};
use crate::derive::femtoseconds;
use crate::store::Contents;

/// Returns that are followed.
const RETURNS: usize = 3;
/// Starts in a period of the first pulse.
const PER_PERIOD: f64 = 100.0;
/// Most starts.
const MOST: f64 = 20_000.0;

fn branch(branch: Branch) -> i64 {
    match branch {
        Branch::Short => 0,
        Branch::Long => 1,
    }
}

/// Returns over the time of start, and the limits of this very field.
pub(super) fn three_step(contents: &mut Contents, run: &Run) {
    let model = ThreeStep::new(run.field);
    let (start, end) = run.field.interval();
    let period = run.field.pulses.first().map_or((end - start) / 4.0, Pulse::period);
    let count = ((end - start) / period * PER_PERIOD).clamp(PER_PERIOD, MOST) as usize;
    let starts: Vec<f64> =
        (0..count).map(|i| start + (i as f64 + 0.5) / count as f64 * (end - start)).collect();
    let returns: Vec<Vec<Return>> = starts.iter().map(|&t| model.returns(t, RETURNS)).collect();
    let over = |value: &dyn Fn(&Return) -> f64| {
        let at = |(n, i): (usize, usize)| returns[i].get(n).map_or(f64::NAN, value);
        Array2::from_shape_fn((RETURNS, count), at).into_dyn()
    };
    let group = "models/three_step/returns";
    let ip = run.ionization_energy;
    contents.insert(group, "return_number", (1..=RETURNS as i64).collect::<Vec<_>>());
    contents.insert(group, "time", starts.iter().map(|&t| femtoseconds(t)).collect::<Vec<_>>());
    contents.insert(group, "return_time", over(&|r| femtoseconds(r.time)));
    contents.insert(group, "return_energy", over(&|r| electronvolts(r.energy)));
    contents.insert(group, "photon_energy", over(&|r| electronvolts(r.energy + ip)));
    contents.insert(group, "backscattered_energy", over(&|r| electronvolts(r.backscattered)));
    let branches = |(n, i): (usize, usize)| returns[i].get(n).map_or(-1, |r| branch(r.branch));
    contents.insert(group, "branch", Array2::from_shape_fn((RETURNS, count), branches).into_dyn());
    let comparison = own("three_step");
    let ev = |value: Option<f64>| value.map_or(f64::NAN, electronvolts);
    // Of light that turns only electrons with a velocity across it come back.
    let turns = run.dimensions() == 2 && run.field.sampled.is_none();
    let cutoff =
        if turns { ThreeStep::new(&strongest_part(run.field).0).cutoff(ip) } else { model.cutoff(ip) };
    contents.insert(&comparison, "cutoff_energy", ev(cutoff));
    contents.insert(&comparison, "direct_limit", electronvolts(model.direct_limit()));
    let scattered = model.highest(1, Extreme::Backscattering).map(|r| r.backscattered);
    contents.insert(&comparison, "rescattering_limit", ev(scattered));
}

/// Both orbits around the classical path of highest return energy.
pub(super) fn quantum_orbits(contents: &mut Contents, run: &Run) -> Result<(), String> {
    let Some(full) = &run.spectrum else { return Ok(()) };
    let (ip, dimensions) = (run.ionization_energy, run.dimensions() as u32);
    let model = QuantumOrbits::highest(run.field, ip, dimensions).map_err(|error| error.to_string())?;
    let cutoff = model.cutoff().map_or(f64::NAN, |cutoff| electronvolts(cutoff.energy.re));
    contents.insert(&own("quantum_orbits"), "cutoff_energy", cutoff);
    // Orders above the ionization energy: below it nothing classical returns.
    let first = (ip / full.photon) as usize + 1;
    let energies: Vec<f64> = (first..=full.orders).map(|order| order as f64 * full.photon).collect();
    let orbits = model.orbits(&energies);
    let over = |value: &dyn Fn(&Orbit) -> f64| {
        let at = |(o, i): (usize, usize)| {
            let orbit = (i + 1).checked_sub(first).and_then(|k| orbits[o].get(k)?.as_ref());
            orbit.map_or(f64::NAN, value)
        };
        Array2::from_shape_fn((2, full.orders), at).into_dyn()
    };
    let group = "models/quantum_orbits/orbits";
    contents.insert(group, "orbit", vec![branch(Branch::Short), branch(Branch::Long)]);
    contents.insert(group, "order", (1..=full.orders as i64).collect::<Vec<_>>());
    contents.insert(group, "emission_time", over(&|o| femtoseconds(o.emission.re)));
    contents.insert(group, "barrier_time", over(&|o| femtoseconds(o.emission.im)));
    contents.insert(group, "return_time", over(&|o| femtoseconds(o.time.re)));
    contents.insert(group, "dipole_phase", over(&|o| o.action.re));
    let weight = |o: &Orbit| if o.contributes { (-2.0 * o.action.im).exp() } else { 0.0 };
    contents.insert(group, "weight", over(&weight));
    let full = &full.amplitudes;
    contents.insert(group, "harmonic_amplitude", full.iter().map(|a| a.norm()).collect::<Vec<_>>());
    contents.insert(group, "harmonic_phase", full.iter().map(|a| a.arg()).collect::<Vec<_>>());
    Ok(())
}
