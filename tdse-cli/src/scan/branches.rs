//! What a scan has to be for its full result to be parted into short and long paths.

use serde_json::{Value, json};
use tdse_core::units::Quantity;

use super::axis::{Axis, Coordinates};
use crate::config::complaint::{Complaint, Fix};
use crate::config::quantity::{self, digits};
use crate::derive::models::branches::Look;

/// The key that asks for it.
const PLACE: &str = "/models/quantum_orbits/branches";
const INTENSITY: &str = "/field/pulses/0/intensity";
/// Fewest intensities.
const FEWEST: usize = 12;
/// Part of the scanned range that the window has where none is asked for: two of its widths lie within the range.
const WINDOW: f64 = 0.4;
/// Narrowest window, steps.
const NARROWEST: f64 = 3.0;
/// Widest window, part of the range.
const WIDEST: f64 = 0.5;
/// Part of a step by which intensities may be uneven: they have twelve digits.
const UNEVEN: f64 = 1e-6;

/// How the scan is looked at; `None` where its configuration does not ask for branches.
///
/// # Errors
/// Where the scan is none over the intensity alone, in enough equal steps, or the window does not fit it.
pub fn look(tree: &Value, axes: &[Axis]) -> Result<Option<Look>, Box<Complaint>> {
    let Some(asked) = tree.pointer(PLACE) else { return Ok(None) };
    let complain = |reason: &str| {
        let mut orbits = tree.pointer("/models/quantum_orbits").cloned().unwrap_or_default();
        if let Value::Object(map) = &mut orbits {
            map.shift_remove("branches");
        }
        let allowed = format!(
            "a scan over {INTENSITY} on an axis of its own, with {FEWEST} or more rising values in equal steps"
        );
        let fix = Fix::Elsewhere { place: "/models/quantum_orbits".into(), value: orbits };
        Box::new(Complaint::new(PLACE, Some(asked), reason).allowed(allowed).fix(fix))
    };
    let axis = axes.iter().find(|axis| axis.parameter == INTENSITY);
    let axis = axis.ok_or_else(|| complain("needs the intensity scanned, and no axis does that"))?;
    if axes.iter().filter(|other| other.dimension == axis.dimension).count() > 1 {
        return Err(complain("needs the intensity alone to change, and it moves together with another axis"));
    }
    let intensities = in_watts(axis);
    let (count, first) = (intensities.len(), intensities.first().copied().unwrap_or_default());
    let step = (intensities.last().copied().unwrap_or_default() - first) / (count.max(2) - 1) as f64;
    let uneven = |(n, value): (usize, &f64)| (value - first - n as f64 * step).abs() > UNEVEN * step;
    if count < FEWEST || step <= 0.0 || intensities.iter().enumerate().any(uneven) {
        return Err(complain("needs more intensities, or equal steps between them, upwards"));
    }
    let range = step * (count - 1) as f64;
    let look = Look { dimension: axis.dimension, first, step, width: WINDOW * range };
    let Some(window) = asked.get("window") else { return Ok(Some(look)) };
    let width = quantity::value(Quantity::Intensity, window.as_str().unwrap_or_default());
    let fits = [NARROWEST * step, WIDEST * range];
    if !(fits[0]..=fits[1] * (1.0 + UNEVEN)).contains(&width) {
        let text = |value: f64| format!("{} W/cm^2", digits(value));
        let allowed = format!(
            "from three steps of the scan, {}, to half of its range, {}",
            text(fits[0]),
            text(fits[1])
        );
        let complaint = Complaint::new(format!("{PLACE}/window"), Some(window), "does not fit the scan");
        return Err(Box::new(complaint.allowed(allowed).fix(Fix::Value(json!(text(look.width))))));
    }
    Ok(Some(Look { width, ..look }))
}

/// Its values in W/cm².
fn in_watts(axis: &Axis) -> Vec<f64> {
    let Coordinates::Numbers { values, unit } = &axis.coordinates else { return Vec::new() };
    let factor = unit.and_then(|symbol| Quantity::Intensity.unit(symbol)).map_or(1.0, |unit| unit.factor);
    values.iter().map(|value| value * factor).collect()
}
