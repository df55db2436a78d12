//! Harmonics of a model on the axes of the full run.

use tdse_core::model::metrics::compare_phases;
use tdse_core::simulate::Schedule;
use tdse_core::spectrum::{EnergyAxis, Harmonics, Window, radiated_energy, sums_by_order};

use super::comparison::plateau;
use super::{Run, electronvolts, every_order, own, sampled_by_order};
use crate::store::Contents;

/// Harmonics of a model, ready to be evaluated.
pub(super) struct Source<'a, F: Fn(EnergyAxis, Window) -> Harmonics> {
    /// Name of the model.
    pub name: &'a str,
    /// Times of its dipole.
    pub schedule: &'a Schedule,
    /// Photon energy up to which it is computed, hartree; beyond, it says nothing.
    pub highest: f64,
    /// a(ω) on an axis.
    pub transformed: F,
}

/// Puts spectrum, yields and phases in.
pub(super) fn put<F: Fn(EnergyAxis, Window) -> Harmonics>(
    contents: &mut Contents,
    run: &Run,
    source: &Source<'_, F>,
) {
    let Some(full) = &run.spectrum else { return };
    let (name, window, transformed) = (source.name, full.wanted.window, &source.transformed);
    let found = transformed(full.axis, window);
    let known = |energy: f64, value: f64| if energy <= source.highest { value } else { f64::NAN };
    // Where the amplitude is zero to the last bit the model says nothing.
    let said = |values: Vec<f64>| -> Vec<f64> {
        let all = values.into_iter().zip(&found.amplitude).zip(full.axis.values());
        all.map(|((value, a), energy)| if a.norm_sqr() > 0.0 { known(energy, value) } else { f64::NAN })
            .collect()
    };
    spectrum(contents, run, name, &said(found.spectrum()));
    let group = format!("models/{name}/harmonics");
    contents.insert(&group, "spectral_phase", said(found.phase()));
    contents.remark(&group, "window", window.name());
    let axis = sampled_by_order(source.schedule, full.photon, full.orders);
    let all = sums_by_order(&transformed(axis, window).spectrum(), axis, full.orders);
    let all = all.into_iter().enumerate().map(|(i, y)| known((i as f64 + 1.5) * full.photon, y));
    yields(contents, run, name, &all.collect::<Vec<_>>());
    contents.remark(&format!("models/{name}/harmonic_yields"), "window", window.name());
    let Some(plateau) = plateau(contents, 0) else { return };
    let odd: Vec<usize> = plateau.filter(|order| order % 2 == 1 && *order <= full.orders).collect();
    let amplitudes = transformed(every_order(full.photon, full.orders), window).amplitude;
    let model: Vec<_> = odd.iter().map(|&order| amplitudes[order]).collect();
    let of_run: Vec<_> = odd.iter().map(|&order| full.amplitudes[order - 1]).collect();
    if let Some(phases) = compare_phases(&model, &of_run, None) {
        contents.insert(&own(name), "phase_difference", phases.rms.value);
    }
}

/// Puts |a(ω)|² on the full run's axis in.
pub(super) fn spectrum(contents: &mut Contents, run: &Run, name: &str, spectrum: &[f64]) {
    let Some(full) = &run.spectrum else { return };
    let energies = full.axis.values();
    let group = format!("models/{name}/harmonics");
    contents.insert(&group, "photon_energy", energies.iter().map(|&e| electronvolts(e)).collect::<Vec<_>>());
    contents.insert(&group, "harmonic_order", energies.iter().map(|e| e / full.photon).collect::<Vec<_>>());
    let radiated: Vec<f64> = spectrum.iter().map(|&s| radiated_energy(s)).collect();
    contents.insert(&group, "radiated_energy", radiated);
    contents.insert(&group, "spectrum", spectrum.to_vec());
}

/// Puts yields, hartree, in; of a yield of zero the model says nothing.
pub(super) fn yields(contents: &mut Contents, run: &Run, name: &str, yields: &[f64]) {
    let Some(full) = &run.spectrum else { return };
    let group = format!("models/{name}/harmonic_yields");
    let yields: Vec<f64> =
        yields.iter().map(|&y| if y > 0.0 { electronvolts(y) } else { f64::NAN }).collect();
    contents.insert(&group, "order", (1..=full.orders as i64).collect::<Vec<_>>());
    contents.insert(&group, "yield", yields);
}
