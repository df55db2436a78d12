//! `models`.

use schemars::JsonSchema;
use serde::{Deserialize, Serialize};
use serde_json::json;
use tdse_core::model::metrics;

use super::Intensity;

/// Simpler models of the same atom in the same field, compared with the full result.
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Models {
    /// Anything worth remembering.
    pub note: Option<String>,
    /// Differences from the full result that still count as agreement.
    #[serde(default)]
    pub tolerance: Tolerance,
    /// Classical electrons that start at rest, return and are scattered.
    #[schemars(example = json!({}))]
    pub three_step: Option<Plain>,
    /// Strong-field approximation with the model atom's own matrix elements: harmonics, and electrons that do not return.
    #[schemars(example = json!({}))]
    pub strong_field: Option<StrongField>,
    /// Complex times of start and return of the short and the long orbit, and the dipole phase.
    #[schemars(example = json!({}))]
    pub quantum_orbits: Option<QuantumOrbits>,
    /// Ionization in time by rates: quasi-static of the model atom, ADK and PPT of an atom in three dimensions.
    #[schemars(example = json!({}))]
    pub tunnelling: Option<Tunnelling>,
    /// Ionization by one photon; two resonant levels where populations are written.
    #[schemars(example = json!({}))]
    pub perturbation: Option<Plain>,
    /// Harmonics of the strong-field packet that recombines by the atom's own dipole.
    #[schemars(example = json!({}))]
    pub recombination: Option<Plain>,
    /// A spectrum, or rates, of your own.
    #[schemars(example = json!({ "file": "curve.csv" }))]
    pub curve: Option<Curve>,
}

/// A model without choices.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Plain {
    /// Anything worth remembering.
    pub note: Option<String>,
}

/// Strong-field approximation.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct StrongField {
    /// Anything worth remembering.
    pub note: Option<String>,
    /// Let the bound state be emptied at the quasi-static rate of the model atom.
    #[serde(default)]
    pub depletion: bool,
}

/// Quantum orbits.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct QuantumOrbits {
    /// Anything worth remembering.
    pub note: Option<String>,
    /// Of a scan over the intensity of the pulse: the full result parted into short and long paths, beside the orbits.
    #[schemars(example = json!({}))]
    pub branches: Option<Branches>,
}

/// Paths of the full result, told apart by how fast the phase of a harmonic turns with the intensity.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Branches {
    /// Anything worth remembering.
    pub note: Option<String>,
    /// Intensities looked at together, full width at half maximum of a Gaussian; two fifths of the scan if left out.
    #[schemars(example = "4e13 W/cm^2", extend("x-exclusive-minimum" = "0 W/cm^2"))]
    pub window: Option<Intensity>,
}

/// Rates of tunnelling.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Tunnelling {
    /// Anything worth remembering.
    pub note: Option<String>,
    /// Angular momentum of the orbital in three dimensions, none along the field; of ADK and PPT alone.
    #[serde(default)]
    #[schemars(range(max = 6), example = 1)]
    pub angular_momentum: u32,
}

/// A table laid beside a spectrum.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Curve {
    /// Anything worth remembering.
    pub note: Option<String>,
    /// CSV or HDF5 file, relative to the configuration's folder. The header of a CSV file is `photon_energy [eV],spectrum [au]` for
    /// harmonics, `energy [eV],yield [1/eV]` for photoelectrons, `electric_field [V/m],rate [1/fs]` or
    /// `intensity [W/cm^2],rate [1/fs]` for rates, or other units of the first column; rates may be in `au`.
    #[schemars(example = "curve.csv")]
    pub file: String,
    /// Path of the values in an HDF5 file; of a result of this program the spectrum if left out.
    #[schemars(example = &"/spectra/mine")]
    pub dataset: Option<String>,
    /// Path of what they are values over. Both datasets have an attribute `units` as the Python library pint reads it.
    #[schemars(example = &"/spectra/energy")]
    pub axis: Option<String>,
    /// SHA-256 that the contents of a CSV file must have.
    pub sha256: Option<String>,
    /// What it is laid beside.
    #[serde(default)]
    pub of: CurveOf,
}

/// What a curve is laid beside.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Serialize, Deserialize, JsonSchema)]
#[serde(rename_all = "snake_case")]
pub enum CurveOf {
    /// The harmonic spectrum |a(ω)|².
    #[default]
    Harmonics,
    /// The electron spectrum of both directions.
    Photoelectrons,
    /// The ionization probability: the rate in a static field, over its strength, at every moment of the pulse.
    RateOverField,
    /// The ionization probability: the rate averaged over a cycle, over the intensity, under the envelope of the only pulse.
    RateOverIntensity,
}

/// Largest differences that count as agreement.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields, default)]
pub struct Tolerance {
    /// Anything worth remembering.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub note: Option<String>,
    /// Of cutoffs, in photons of the first pulse.
    #[schemars(extend("minimum" = 0))]
    pub orders: f64,
    /// Of levels and distances, in decades; 0.3 is a factor of two.
    #[schemars(extend("minimum" = 0))]
    pub decades: f64,
    /// Of slopes of the plateau, in decades per order.
    #[schemars(extend("minimum" = 0))]
    pub slope: f64,
    /// Of ratios of yields and of ionization, as |ratio - 1|.
    #[schemars(extend("minimum" = 0))]
    pub ratio: f64,
    /// Of harmonic phases, in rad.
    #[schemars(extend("minimum" = 0))]
    pub phase: f64,
}

impl Default for Tolerance {
    fn default() -> Self {
        let metrics::Tolerance { orders, decades, slope, ratio, phase } = metrics::Tolerance::default();
        Self { note: None, orders, decades, slope, ratio, phase }
    }
}
