//! `models.curve`: the user's own table, from a CSV or an HDF5 file.

use std::sync::Arc;

use tdse_core::cubic::Cubic;
use tdse_core::field::Field;
use tdse_core::model::curve::{Curve, RateOver};

use super::Check;
use crate::config::complaint::Fix;
use crate::config::models::{CurveOf, Model};
use crate::config::pointer::join;
use crate::config::stored::Places;
use crate::config::tables::Layout;
use crate::config::{raw, tables};

const CURVE: &str = "/models/curve";

/// The curve, with its values in atomic units.
pub(super) fn curve(check: &mut Check, raw: &raw::Curve, field: &Field) -> Option<Model> {
    let kind = Kind::of(raw.of);
    if let Some(output) = kind.output
        && check.tree.pointer(&join("/outputs", output)).is_none()
    {
        let fix = check.without("/models", "curve");
        let reason = format!("is laid beside outputs.{output}, which is not there");
        check.complain(CURVE, reason, "that output, or the key left out", fix);
    }
    if kind.of == CurveOf::Ionization(RateOver::Intensity) && !is_one_linear_pulse(field) {
        let fix = check.without("/models", "curve");
        let reason = "holds rates averaged over a cycle, and the field has no one cycle";
        check.complain(CURVE, reason, "a single linearly polarized pulse, or rates over the field", fix);
    }
    let table = curve_table(check, raw, &kind)?;
    let (positions, values) = table.points();
    match Curve::new(positions.to_vec(), values.to_vec()) {
        Ok(curve) => Some(Model::Curve { of: kind.of, curve }),
        Err(error) => {
            let fix = Fix::Words("correct the file".into());
            check.complain(
                &join(CURVE, "file"),
                format!("holds no curve: {error}"),
                "values of 0 or more",
                fix,
            );
            None
        }
    }
}

fn is_one_linear_pulse(field: &Field) -> bool {
    matches!((&field.pulses[..], &field.sampled), ([pulse], None) if pulse.ellipticity == 0.0)
}

/// What a curve of one kind needs.
struct Kind {
    of: CurveOf,
    layout: Layout,
    /// Key of the output that it is laid beside.
    output: Option<&'static str>,
    /// Where a result of this program has the like.
    own: Option<Places<'static>>,
}

impl Kind {
    fn of(raw: raw::CurveOf) -> Self {
        let spectrum = |of, layout, output, axis, dataset| Self {
            of,
            layout,
            output: Some(output),
            own: Some(Places { axis, dataset }),
        };
        let rates = |over, layout| Self { of: CurveOf::Ionization(over), layout, output: None, own: None };
        match raw {
            raw::CurveOf::Harmonics => spectrum(
                CurveOf::Harmonics,
                tables::SPECTRUM,
                "harmonics",
                "/entry/harmonics/photon_energy",
                "/entry/harmonics/spectrum",
            ),
            raw::CurveOf::Photoelectrons => spectrum(
                CurveOf::Photoelectrons,
                tables::YIELD,
                "photoelectrons",
                "/entry/photoelectrons/energy",
                "/entry/photoelectrons/yield",
            ),
            raw::CurveOf::RateOverField => rates(RateOver::Field, tables::RATE_OVER_FIELD),
            raw::CurveOf::RateOverIntensity => rates(RateOver::Intensity, tables::RATE_OVER_INTENSITY),
        }
    }
}

/// The table of a CSV file, or in two datasets of an HDF5 file.
fn curve_table(check: &mut Check, raw: &raw::Curve, kind: &Kind) -> Option<Arc<Cubic>> {
    let hdf5 = check.library.is_hdf5(&raw.file);
    let named = [("dataset", &raw.dataset), ("axis", &raw.axis)];
    for (key, _) in named.iter().filter(|(_, place)| place.is_some() && !hdf5) {
        let reason = format!("names a dataset, and {:?} is no HDF5 file", raw.file);
        check.complain(&join(CURVE, key), reason, "an HDF5 file, or the key left out", Fix::LeaveOut);
    }
    if !hdf5 {
        return check.table(CURVE, &raw.file, raw.sha256.as_ref(), kind.layout);
    }
    if raw.sha256.is_some() {
        let reason = "is of an HDF5 file, of which only the curve is kept";
        check.complain(&join(CURVE, "sha256"), reason, "a CSV file, or the key left out", Fix::LeaveOut);
    }
    let places = match (&raw.axis, &raw.dataset, kind.own) {
        (Some(axis), Some(dataset), _) => Places { axis, dataset },
        (None, None, Some(own)) => own,
        (axis, ..) => {
            let (key, example) =
                if axis.is_none() { ("axis", "/spectra/energy") } else { ("dataset", "/spectra/mine") };
            let reason = "is missing: a curve in an HDF5 file has a dataset and an axis";
            check.complain(
                &join(CURVE, key),
                reason,
                "the path of a dataset in the file",
                Fix::Value(example.into()),
            );
            return None;
        }
    };
    check.stored_table(CURVE, &raw.file, places, kind.layout)
}
