//! The user's own curve on the axes of the full run.

use tdse_core::model::curve::Curve;
use tdse_core::spectrum::radiated_energy;

use super::run::Run;
use super::{electronvolts, harmonics, own};
use crate::config::models::CurveOf;
use crate::store::Contents;

/// Where the curve says nothing there is NaN.
pub(super) fn put(contents: &mut Contents, run: &Run, of: CurveOf, curve: &Curve) {
    const NAME: &str = "curve";
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
        _ => {}
    }
}
