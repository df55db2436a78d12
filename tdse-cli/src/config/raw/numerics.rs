//! `numerics`.

use schemars::JsonSchema;
use serde::{Deserialize, Serialize};
use serde_json::json;

use super::{Length, Time};

/// How it is computed; whatever is left out is chosen from the physics and the accuracy asked.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Numerics {
    /// Anything worth remembering.
    pub note: Option<String>,
    /// Relative error asked for of the dipole acceleration, root mean square over the run, and of harmonic yields up to the cutoff
    /// and above 1e-8 of the largest; `tdse refine` says what it is of every other number.
    #[serde(default = "accuracy")]
    #[schemars(extend("minimum" = 1e-10, "maximum" = 0.1))]
    pub accuracy: f64,
    /// Grid spacing, taken exactly.
    #[schemars(example = "0.4 bohr", extend("x-exclusive-minimum" = "0 bohr"))]
    pub spacing: Option<Length>,
    /// Full length of the box per axis, rounded up to a number of points that transforms fast.
    #[schemars(example = "300 bohr", extend("x-exclusive-minimum" = "0 bohr"))]
    pub extent: Option<Length>,
    /// Time step, taken exactly; the run is lengthened to a whole number of steps.
    #[schemars(example = "0.1 au", extend("x-exclusive-minimum" = "0 au"))]
    pub time_step: Option<Time>,
    /// Splitting of a time step.
    pub scheme: Option<Scheme>,
    /// Gauge in which the equation is solved.
    pub gauge: Option<Gauge>,
    /// Edges of the box.
    #[schemars(example = json!({ "kind": "smooth" }))]
    pub absorber: Option<Absorber>,
    /// Time without field after the field.
    #[schemars(example = "2 fs", extend("x-minimum" = "0 fs"))]
    pub trailing_time: Option<Time>,
    /// Way to the electron spectrum.
    pub electron_method: Option<ElectronMethod>,
    /// Whether all points of a scan share the strictest choice.
    #[serde(default)]
    pub common: bool,
    /// Whether pinned values that are known to be inadequate are accepted.
    #[serde(default)]
    pub allow_inadequate: bool,
}

fn accuracy() -> f64 {
    1e-4
}

impl Default for Numerics {
    fn default() -> Self {
        Self {
            note: None,
            accuracy: accuracy(),
            spacing: None,
            extent: None,
            time_step: None,
            scheme: None,
            gauge: None,
            absorber: None,
            trailing_time: None,
            electron_method: None,
            common: false,
            allow_inadequate: false,
        }
    }
}

/// Splitting of a time step.
#[derive(Clone, Copy, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(rename_all = "snake_case")]
pub enum Scheme {
    /// Fourth order with a gradient-corrected potential.
    FourthOrder,
    /// Second order.
    Strang,
}

/// Gauge in which the equation is solved.
#[derive(Clone, Copy, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(rename_all = "snake_case")]
pub enum Gauge {
    /// p^2/2 + V + r E.
    Length,
    /// (p + A)^2/2 + V.
    Velocity,
}

/// Way to the electron spectrum.
#[derive(Clone, Copy, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(rename_all = "snake_case")]
pub enum ElectronMethod {
    /// Projection on scattering states at the end, in a box that nothing leaves.
    ScatteringStates,
    /// What the absorber takes, collected coherently, and the rest on scattering states.
    OutgoingAmplitude,
}

/// Edges of the box.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(tag = "kind", rename_all = "snake_case", deny_unknown_fields)]
pub enum Absorber {
    /// Nothing: nothing may reach the edge.
    None {
        /// Anything worth remembering.
        note: Option<String>,
    },
    /// A smooth complex potential at the edges.
    Smooth {
        /// Anything worth remembering.
        note: Option<String>,
        /// Width per side; chosen if left out.
        #[schemars(example = "40 bohr", extend("x-exclusive-minimum" = "0 bohr"))]
        width: Option<Length>,
        /// Where it lies, two dimensions only; round if left out.
        shape: Option<Shape>,
    },
}

/// Where an absorber of two dimensions lies.
#[derive(Clone, Copy, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(rename_all = "snake_case")]
pub enum Shape {
    /// In a ring that begins at one distance from the centre.
    Round,
    /// Along all four sides.
    Sides,
}
