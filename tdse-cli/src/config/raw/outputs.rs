//! `outputs`.

use schemars::JsonSchema;
use serde::{Deserialize, Serialize};
use serde_json::json;

use super::{Energy, Time};

/// What is derived from a run and written.
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Outputs {
    /// Anything worth remembering.
    pub note: Option<String>,
    /// Spectrum of the harmonics with its phase.
    #[schemars(example = json!({ "max_energy": "120 eV" }))]
    pub harmonics: Option<Harmonics>,
    /// Time-frequency map of the dipole acceleration (Gabor transform).
    #[schemars(example = json!({}))]
    pub time_frequency: Option<TimeFrequency>,
    /// Spectrum of the electrons that leave, by direction.
    #[schemars(example = json!({ "max_energy": "60 eV" }))]
    pub photoelectrons: Option<Photoelectrons>,
    /// Populations of bound states in time.
    #[schemars(example = json!({ "states": 4 }))]
    pub populations: Option<Populations>,
}

/// Spectrum of the harmonics.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Harmonics {
    /// Anything worth remembering.
    pub note: Option<String>,
    /// End of the energy axis, which starts at 0; chosen beyond the classical cutoff if left out.
    #[schemars(example = "120 eV", extend("x-exclusive-minimum" = "0 eV", "x-maximum" = "100 keV"))]
    pub max_energy: Option<Energy>,
    /// Step of the energy axis; chosen from the length of the run if left out.
    #[schemars(example = "0.05 eV", extend("x-exclusive-minimum" = "0 eV"))]
    pub energy_step: Option<Energy>,
    /// Highest order whose yield is written; as far as the energy axis goes if left out.
    #[schemars(range(min = 1, max = 100_000), example = 61)]
    pub max_order: Option<u32>,
    /// Window laid over the acceleration before it is transformed.
    #[serde(default)]
    pub window: Window,
}

/// Window over the whole run.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(tag = "kind", rename_all = "snake_case", deny_unknown_fields)]
pub enum Window {
    /// 1 throughout: the radiated spectrum, where the acceleration has died down by the end.
    None {
        /// Anything worth remembering.
        note: Option<String>,
    },
    /// sin^2 from zero to zero.
    Hann {
        /// Anything worth remembering.
        note: Option<String>,
    },
    /// Blackman window.
    Blackman {
        /// Anything worth remembering.
        note: Option<String>,
    },
    /// 1, falling to zero as sin^2 at both ends.
    Taper {
        /// Anything worth remembering.
        note: Option<String>,
        /// Length of each flank.
        #[schemars(example = "3 fs", extend("x-exclusive-minimum" = "0 fs"))]
        length: Time,
    },
}

impl Default for Window {
    fn default() -> Self {
        Self::Hann { note: None }
    }
}

/// Time-frequency map with a Gaussian window.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct TimeFrequency {
    /// Anything worth remembering.
    pub note: Option<String>,
    /// Full width at half maximum of the window's square; chosen if left out.
    #[schemars(example = "0.3 fs", extend("x-exclusive-minimum" = "0 fs"))]
    pub window_length: Option<Time>,
    /// End of the energy axis, which starts at 0; that of the harmonics if left out.
    #[schemars(example = "120 eV", extend("x-exclusive-minimum" = "0 eV", "x-maximum" = "100 keV"))]
    pub max_energy: Option<Energy>,
    /// Step of the energy axis; chosen if left out.
    #[schemars(example = "0.5 eV", extend("x-exclusive-minimum" = "0 eV"))]
    pub energy_step: Option<Energy>,
    /// Step of the time axis; chosen if left out.
    #[schemars(example = "0.05 fs", extend("x-exclusive-minimum" = "0 fs"))]
    pub time_step: Option<Time>,
}

/// Spectrum of the electrons that leave. Its energies are part of what is recorded: other ones need a new propagation.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Photoelectrons {
    /// Anything worth remembering.
    pub note: Option<String>,
    /// End of the energy axis, which starts at 0; beyond the fastest electrons if left out.
    #[schemars(example = "60 eV", extend("x-exclusive-minimum" = "0 eV", "x-maximum" = "100 keV"))]
    pub max_energy: Option<Energy>,
    /// Step of the energy axis; chosen from the length of the field if left out.
    #[schemars(example = "0.05 eV", extend("x-exclusive-minimum" = "0 eV"))]
    pub energy_step: Option<Energy>,
}

/// Populations of bound states in time.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Populations {
    /// Anything worth remembering.
    pub note: Option<String>,
    /// Number of states, from the lowest.
    #[schemars(range(min = 1, max = 1000), example = 4)]
    pub states: u32,
}
