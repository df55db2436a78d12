//! `field`.

use schemars::JsonSchema;
use serde::{Deserialize, Serialize};
use serde_json::{Value, json};

use super::{Angle, Chirp, ElectricField, Energy, Intensity, Length, Time};

/// The laser field; at least one pulse or a sampled field.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Field {
    /// Anything worth remembering.
    pub note: Option<String>,
    /// Pulses; the fields add. Harmonic orders count photons of the first.
    #[serde(default)]
    #[schemars(example = json!([example()]))]
    pub pulses: Vec<Pulse>,
    /// A field given by a table; in two dimensions it points along x.
    #[schemars(example = json!({ "file": "field.csv" }))]
    pub sampled: Option<Sampled>,
}

/// One pulse, defined by its vector potential, so that it has no net area.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Pulse {
    /// Anything worth remembering.
    pub note: Option<String>,
    /// Wavelength of the carrier; or give `photon_energy`.
    #[schemars(example = "800 nm", extend("x-minimum" = "1 nm", "x-maximum" = "100 um"))]
    pub wavelength: Option<Length>,
    /// Photon energy of the carrier; or give `wavelength`.
    #[schemars(example = "1.55 eV", extend("x-minimum" = "0.0123 eV", "x-maximum" = "1240 eV"))]
    pub photon_energy: Option<Energy>,
    /// Cycle-averaged intensity at the envelope's peak; or give `peak_field`.
    #[schemars(example = "1.5e14 W/cm^2", extend("x-exclusive-minimum" = "0 W/cm^2", "x-maximum" = "1e18 W/cm^2"))]
    pub intensity: Option<Intensity>,
    /// Peak field of the linearly polarized pulse of this intensity; or give `intensity`.
    #[schemars(example = "0.05 au", extend("x-exclusive-minimum" = "0 au", "x-maximum" = "6 au"))]
    pub peak_field: Option<ElectricField>,
    /// Envelope of the field.
    #[schemars(example = json!({ "kind": "sin2", "cycles": 6 }))]
    pub envelope: Envelope,
    /// Carrier-envelope phase; 0 puts a crest of the field at the envelope's centre.
    #[serde(default = "zero_angle")]
    pub phase: Angle,
    /// Time of the envelope's centre.
    #[serde(default = "no_delay")]
    #[schemars(example = "1.5 fs", extend("x-minimum" = "-10 ps", "x-maximum" = "10 ps"))]
    pub delay: Time,
    /// Linear chirp: the instantaneous frequency rises by this much per time; up for positive values.
    #[serde(default = "no_chirp")]
    pub chirp: Chirp,
    /// Ellipticity, 0 linear, 1 or -1 circular; only in two dimensions other than 0.
    #[serde(default)]
    #[schemars(extend("minimum" = -1, "maximum" = 1))]
    pub ellipticity: f64,
    /// Angle of the major axis to x; only in two dimensions other than 0.
    #[serde(default = "zero_angle")]
    pub angle: Angle,
}

/// Envelope of the field (not of the intensity).
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(tag = "kind", rename_all = "snake_case", deny_unknown_fields)]
pub enum Envelope {
    /// Square of a sine, from zero to zero.
    Sin2 {
        /// Anything worth remembering.
        note: Option<String>,
        /// Length from zero to zero in cycles of the carrier; or give `duration`.
        #[schemars(example = 6, extend("minimum" = 1, "maximum" = 10000))]
        cycles: Option<f64>,
        /// Length from zero to zero, at least one cycle; or give `cycles`.
        #[schemars(example = "16 fs", extend("x-exclusive-minimum" = "0 fs"))]
        duration: Option<Time>,
    },
    /// Gaussian, cut where the field has fallen to 1e-8 of its peak.
    Gaussian {
        /// Anything worth remembering.
        note: Option<String>,
        /// Full width at half maximum of the intensity.
        #[schemars(example = "6 fs", extend("x-exclusive-minimum" = "0 fs"))]
        fwhm: Time,
    },
    /// A plateau between ramps that are the square of a sine.
    FlatTop {
        /// Anything worth remembering.
        note: Option<String>,
        /// Length of each ramp in cycles of the unchirped carrier.
        #[schemars(example = 2, extend("minimum" = 0.5, "maximum" = 10000))]
        ramp_cycles: f64,
        /// Length of the plateau in cycles of the unchirped carrier.
        #[schemars(example = 4, extend("minimum" = 0, "maximum" = 10000))]
        plateau_cycles: f64,
    },
}

/// A field from a CSV file with the header `time [fs],electric_field [V/m]` (any units): cubic spline, zero outside. It points along
/// x; in two dimensions `time [fs],electric_field_x [V/m],electric_field_y [V/m]` has both components.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Sampled {
    /// Anything worth remembering.
    pub note: Option<String>,
    /// Path, relative to the configuration's folder.
    #[schemars(example = "field.csv")]
    pub file: String,
    /// SHA-256 that the contents must have.
    pub sha256: Option<String>,
}

/// A pulse to start from.
pub fn example() -> Value {
    json!({ "wavelength": "800 nm", "intensity": "1e14 W/cm^2", "envelope": { "kind": "sin2", "cycles": 6 } })
}

pub fn zero_angle() -> Angle {
    Angle("0 deg".into())
}

fn no_delay() -> Time {
    Time("0 fs".into())
}

fn no_chirp() -> Chirp {
    Chirp("0 rad/fs^2".into())
}
