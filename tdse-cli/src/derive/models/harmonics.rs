//! Harmonics of a model on the axes of the full run.

use tdse_core::model::metrics::compare_phases;
use tdse_core::simulate::Schedule;
use tdse_core::spectrum::{
    EnergyAxis, Harmonics, PlaneHarmonics, Window, radiated_energy, sampled_by_order, sums_by_order,
};

use super::comparison::plateau;
use super::run::{Run, every_order};
use super::{electronvolts, own};
use crate::derive::spectra::{HELICITIES, polarization, rows};
use crate::store::Contents;

/// Harmonics of a model, ready to be evaluated.
pub(super) struct Source<'a, F: Fn(EnergyAxis, Window) -> Vec<Harmonics>> {
    /// Name of the model.
    pub name: &'a str,
    /// Times of its dipole.
    pub schedule: &'a Schedule,
    /// Photon energy up to which it is computed, hartree; beyond, it says nothing.
    pub highest: f64,
    /// a(ω) of every component on an axis.
    pub transformed: F,
}

/// Puts spectra, yields and phases in.
pub(super) fn put<F: Fn(EnergyAxis, Window) -> Vec<Harmonics>>(
    contents: &mut Contents,
    run: &Run,
    source: &Source<'_, F>,
) {
    let Some(full) = &run.spectrum else { return };
    let (name, window) = (source.name, full.wanted.window);
    let found = (source.transformed)(full.axis, window);
    let said = |h: &Harmonics, values: Vec<f64>| -> Vec<f64> {
        let all = values.into_iter().zip(&h.amplitude).zip(full.axis.values());
        // Where the amplitude is zero to the last bit the model says nothing.
        all.map(
            |((value, a), energy)| {
                if a.norm_sqr() > 0.0 && energy <= source.highest { value } else { f64::NAN }
            },
        )
        .collect()
    };
    spectra(contents, run, name, found.iter().map(|h| said(h, h.spectrum())).collect());
    let group = format!("models/{name}/harmonics");
    contents.insert(&group, "spectral_phase", rows(found.iter().map(|h| said(h, h.phase())).collect()));
    if let Ok(components) = <[Harmonics; 2]>::try_from(found) {
        polarization(contents, &group, &PlaneHarmonics { components });
    }
    contents.remark(&group, "window", window.name());
    all_yields(contents, run, source);
    phases(contents, run, source);
}

/// Yields by order, and by helicity where there are two components.
fn all_yields<F: Fn(EnergyAxis, Window) -> Vec<Harmonics>>(
    contents: &mut Contents,
    run: &Run,
    source: &Source<'_, F>,
) {
    let Some(full) = &run.spectrum else { return };
    let (name, window) = (source.name, full.wanted.window);
    let axis = sampled_by_order(source.schedule, full.photon, full.orders);
    let found = (source.transformed)(axis, window);
    let by_order = |h: &Harmonics| -> Vec<f64> {
        let all = sums_by_order(&h.spectrum(), axis, full.orders).into_iter().enumerate();
        all.map(|(i, y)| if (i as f64 + 1.5) * full.photon <= source.highest { y } else { f64::NAN })
            .collect()
    };
    let each: Vec<Vec<f64>> = found.iter().map(by_order).collect();
    let sum: Vec<f64> = (0..full.orders).map(|i| each.iter().map(|yields| yields[i]).sum()).collect();
    yields(contents, run, name, &sum);
    let group = format!("models/{name}/harmonic_yields");
    if let Ok(components) = <[Harmonics; 2]>::try_from(found) {
        let both = PlaneHarmonics { components };
        let of = |helicity| by_order(&both.helicity(helicity)).into_iter().map(electronvolts).collect();
        contents.insert(&group, "helicity", HELICITIES.map(|(_, number)| number).to_vec());
        contents.insert(&group, "helicity_yield", rows(HELICITIES.map(|(h, _)| of(h)).to_vec()));
    }
    contents.remark(&group, "window", window.name());
}

/// Phases of the plateau's odd orders along the major axis of the first pulse against those of the full run.
fn phases<F: Fn(EnergyAxis, Window) -> Vec<Harmonics>>(
    contents: &mut Contents,
    run: &Run,
    source: &Source<'_, F>,
) {
    let (Some(full), Some(plateau)) = (&run.spectrum, plateau(contents, 0)) else { return };
    let odd: Vec<usize> = plateau.filter(|order| order % 2 == 1 && *order <= full.orders).collect();
    let found = (source.transformed)(every_order(full.photon, full.orders), full.wanted.window);
    let amplitudes = full.along_major(&found);
    let model: Vec<_> = odd.iter().map(|&order| amplitudes[order]).collect();
    let of_run: Vec<_> = odd.iter().map(|&order| full.amplitudes[order - 1]).collect();
    if let Some(phases) = compare_phases(&model, &of_run, None) {
        contents.insert(&own(source.name), "phase_difference", phases.rms.value);
    }
}

/// Puts |a(ω)|² of every component on the full run's axis in.
pub(super) fn spectra(contents: &mut Contents, run: &Run, name: &str, spectra: Vec<Vec<f64>>) {
    let Some(full) = &run.spectrum else { return };
    let energies = full.axis.values();
    let group = format!("models/{name}/harmonics");
    if spectra.len() == 2 {
        contents.insert(&group, "component", vec![0i64, 1]);
    }
    contents.insert(&group, "photon_energy", energies.iter().map(|&e| electronvolts(e)).collect::<Vec<_>>());
    contents.insert(&group, "harmonic_order", energies.iter().map(|e| e / full.photon).collect::<Vec<_>>());
    let total = (0..energies.len()).map(|i| radiated_energy(spectra.iter().map(|s| s[i]).sum()));
    contents.insert(&group, "radiated_energy", total.collect::<Vec<_>>());
    contents.insert(&group, "spectrum", rows(spectra));
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
