//! Ionization in time by tunnelling rates.

use tdse_core::model::tunnelling::{Orbital, QuasiStatic, Rate};
use tdse_core::quantities::field_shape;
use tdse_core::units::TIME_FS;

use super::own;
use super::run::Run;
use crate::store::Contents;

/// The quasi-static rate of the model atom in the fields of the run.
pub(super) fn quasi_static(run: &Run) -> Result<QuasiStatic, String> {
    let (problem, peak) = (&run.job.problem, field_shape(run.field).peak);
    let rate = if run.dimensions() == 1 {
        QuasiStatic::on_line(&problem.potential, problem.initial.lowest(), peak)
    } else {
        let round = run.round()?;
        QuasiStatic::on_plane(&problem.potential, round.m.unsigned_abs(), round.number)
    };
    rate.map_err(|error| error.to_string())
}

/// Probabilities at the times of the populations; the model atom's own rate is the one that is compared.
pub(super) fn tunnelling(contents: &mut Contents, run: &Run, l: u32) -> Result<(), String> {
    let group = "models/tunnelling/ionization";
    let times = contents.real("populations", "time").expect("a recorded run has populations").clone();
    let atomic: Vec<f64> = times.iter().map(|t| t / TIME_FS).collect();
    contents.insert(group, "time", times);
    let own_rate = Rate::Model(quasi_static(run)?);
    let probability = own_rate.ionization(run.field, &atomic);
    let last = probability.last().copied().unwrap_or(f64::NAN);
    contents.insert(group, "probability", probability);
    let comparison = own("tunnelling");
    contents.insert(&comparison, "ionization_probability", last);
    let saturation = own_rate.saturation_intensity(run.field).unwrap_or(f64::NAN);
    contents.insert(&comparison, "saturation_intensity", saturation);
    let charge = run.job.problem.potential.far_charge();
    if charge > 0.0 {
        let orbital = Orbital { ionization_energy: run.ionization_energy, charge, l, m: 0 };
        contents.insert(group, "adk", Rate::Adk(orbital).ionization(run.field, &atomic));
        // Averaged over a cycle of linear polarization.
        if let ([pulse], None) = (&run.field.pulses[..], &run.field.sampled)
            && pulse.ellipticity == 0.0
        {
            let rate = Rate::Ppt { orbital, frequency: pulse.frequency };
            contents.insert(group, "ppt", rate.ionization(run.field, &atomic));
        }
    }
    Ok(())
}
