//! Electron spectra of a model beside the full one, and the energies at which the full one breaks beside the classical limits.

use tdse_core::compare::Measured;
use tdse_core::model::metrics::{Metric, Tolerance, breaks, compare_electrons, moving_mean};

use super::{Numbers, OF_ELECTRONS, OF_LIMITS, scalar, values};
use crate::store::Contents;

/// Fewest photons on an axis whose peaks are averaged over one.
const PHOTONS: f64 = 4.0;

impl Numbers {
    /// Distance of the spectra, and breaks where the model has limits of them.
    pub(super) fn electrons(&mut self, contents: &Contents, name: &str, index: usize, tolerance: &Tolerance) {
        let full = values(contents, "photoelectrons", "yield", index);
        let Some(axis) = contents.real("photoelectrons", "energy").and_then(|array| array.as_slice()) else {
            return;
        };
        let photon =
            scalar(contents, "summary", "first_photon_energy", index).filter(|photon| photon.is_finite());
        let half = half_photon(axis, photon);
        let model = values(contents, &format!("models/{name}/photoelectrons"), "yield", index);
        if !full.is_empty() && model.len() == full.len() {
            let bars = values(contents, "photoelectrons", "yield_errors", index);
            let full: Vec<Measured> = full
                .iter()
                .enumerate()
                .map(|(i, &value)| Measured { value, error: bars.get(i).copied() })
                .collect();
            if let Some(found) = compare_electrons(model, &full, half) {
                self.reals.insert("electron_first", (axis[found.places[0]], None));
                self.reals.insert("electron_last", (axis[found.places[1]], None));
                self.reals.insert("electron_shift", (found.shift, None));
                for (names, metric) in OF_ELECTRONS.into_iter().zip([found.distance, found.shifted_distance])
                {
                    self.judge(names, metric, tolerance.decades);
                }
            }
        }
        let limit = |number: &str| scalar(contents, &super::super::own(name), number, index);
        if let (Some(direct), Some(rescattered), Some(photon), false) =
            (limit("direct_limit"), limit("rescattering_limit"), photon, full.is_empty())
            && let Some(found) = breaks(axis[0], axis[1] - axis[0], &moving_mean(full, half))
        {
            self.reals.insert("direct_break", (found.direct, None));
            self.reals.insert("rescattering_break", (found.rescattered, None));
            let off = [direct - found.direct, rescattered - found.rescattered];
            for (names, off) in OF_LIMITS.into_iter().zip(off) {
                let metric = Metric { value: off / photon, neutral: 0.0, error: None };
                self.judge(names, metric, tolerance.orders);
            }
        }
    }
}

/// Half a photon in steps of the axis; none where the axis holds too few.
fn half_photon(axis: &[f64], photon: Option<f64>) -> usize {
    let (Some(&[first, second]), Some(&last), Some(photon)) = (axis.first_chunk(), axis.last(), photon)
    else {
        return 0;
    };
    if last < PHOTONS * photon { 0 } else { (0.5 * photon / (second - first)).round() as usize }
}
