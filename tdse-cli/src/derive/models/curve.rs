//! The user's own curve on the axes of the full run.

use tdse_core::model::curve::{Beyond, Curve, RateOver};
use tdse_core::spectrum::radiated_energy;
use tdse_core::units::TIME_FS;

use super::run::Run;
use super::{electronvolts, harmonics, own};
use crate::config::models::CurveOf;
use crate::derive::volts_per_metre;
use crate::store::Contents;

const NAME: &str = "curve";

/// Where the curve says nothing there is NaN.
///
/// # Errors
/// Of rates that the field goes beyond.
pub(super) fn put(contents: &mut Contents, run: &Run, of: CurveOf, curve: &Curve) -> Result<(), String> {
    match (of, &run.spectrum, run.electron_axis()) {
        (CurveOf::Harmonics, Some(full), _) => {
            harmonics::spectra(contents, run, NAME, vec![curve.on(full.axis)]);
            // |a(ω)|² and the radiated energy are in proportion.
            let integrals = curve.order_yields(full.photon, full.orders);
            let yields: Vec<f64> = integrals.into_iter().map(radiated_energy).collect();
            harmonics::yields(contents, run, NAME, &yields);
        }
        (CurveOf::Photoelectrons, _, Some(axis)) => {
            let group = format!("models/{NAME}/photoelectrons");
            let values = curve.on(axis);
            let known = values.iter().filter(|v| v.is_finite()).sum::<f64>();
            contents.insert(
                &group,
                "energy",
                axis.values().into_iter().map(electronvolts).collect::<Vec<_>>(),
            );
            contents.insert(&group, "yield", values);
            contents.insert(&own(NAME), "electron_yield", known * electronvolts(axis.step));
        }
        (CurveOf::Ionization(over), ..) => ionization(contents, run, over, curve)?,
        _ => {}
    }
    Ok(())
}

/// Ionization in time by the rates.
fn ionization(contents: &mut Contents, run: &Run, over: RateOver, curve: &Curve) -> Result<(), String> {
    let times = contents.real("populations", "time").expect("a recorded run has populations").clone();
    let atomic: Vec<f64> = times.iter().map(|t| t / TIME_FS).collect();
    let said = |position: f64| match over {
        RateOver::Field => format!("{:e} V/m", volts_per_metre(position)),
        RateOver::Intensity => format!("{position:e} W/cm**2"),
    };
    let found = curve.ionization(over, run.field, &atomic);
    let probability = found.map_err(|Beyond { last, reached }| {
        format!("the curve ends at {}, and the field reaches {}", said(last), said(reached))
    })?;
    let last = probability.last().copied().unwrap_or(f64::NAN);
    let group = format!("models/{NAME}/ionization");
    contents.insert(&group, "time", times);
    contents.insert(&group, "probability", probability);
    contents.insert(&own(NAME), "ionization_probability", last);
    Ok(())
}
