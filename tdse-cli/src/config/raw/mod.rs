//! The configuration as written: the only layer that serde reads and writes.
//!
//! Doc comments, examples, ranges and defaults here are the published schema; [`super::structure`] checks against that
//! schema, so what passes there always fits these types.

mod atom;
mod field;
mod models;
mod numerics;
mod outputs;
mod scan;

use std::borrow::Cow;

use schemars::{JsonSchema, Schema, SchemaGenerator, json_schema};
use serde::{Deserialize, Serialize};
use serde_json::json;
use tdse_core::units::Quantity;

use super::quantity;

pub use atom::{Atom, ElementSymbol, Parity, Potential, State, Term};
pub use field::example as example_pulse;
pub use field::{Envelope, Field, Pulse, Sampled};
pub use models::{Branches, Curve, CurveOf, Models, Tolerance};
pub use numerics::{Absorber, ElectronMethod, Gauge, Numerics, Scheme, Shape};
pub use outputs::{Harmonics, Outputs, Populations, TimeFrequency, Window};
pub use scan::{Axis, Spacing};

/// One calculation, or a scan of many: one atom in one laser field.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Configuration {
    /// Where the JSON Schema of this file is found; for editors.
    #[serde(rename = "$schema")]
    pub schema: Option<String>,
    /// Anything worth remembering.
    pub note: Option<String>,
    /// Title on results and pictures.
    #[serde(default)]
    #[schemars(example = "Cutoff of argon at 800 nm")]
    pub title: String,
    /// The model atom and its state before the field.
    #[schemars(example = json!({ "potential": { "kind": "soft_coulomb" }, "element": "Ar" }))]
    pub atom: Atom,
    /// The laser field: the sum of all pulses and of the sampled field.
    #[schemars(example = json!({ "pulses": [field::example()] }))]
    pub field: Field,
    /// How it is computed; whatever is left out is chosen.
    #[serde(default)]
    pub numerics: Numerics,
    /// What is derived from the run and written; without any, only the series in time.
    #[serde(default)]
    pub outputs: Outputs,
    /// Simpler models to compare with; what they are can be changed without a new propagation.
    #[schemars(example = json!({ "three_step": {}, "strong_field": {} }))]
    pub models: Option<Models>,
    /// Axes of a scan, combined as a grid, the last one fastest.
    #[schemars(example = json!([]))]
    pub scan: Option<Vec<Axis>>,
}

macro_rules! quantities {
    ($($(#[$doc:meta])* $name:ident),*) => {$(
        $(#[$doc])*
        #[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
        #[serde(transparent)]
        pub struct $name(pub String);

        impl $name {
            /// Value in the base of its quantity.
            ///
            /// # Panics
            /// If the text has not passed the structure check.
            pub fn value(&self) -> f64 {
                quantity::value(Quantity::$name, &self.0)
            }
        }

        impl JsonSchema for $name {
            fn inline_schema() -> bool {
                true
            }

            fn schema_name() -> Cow<'static, str> {
                stringify!($name).into()
            }

            fn json_schema(_: &mut SchemaGenerator) -> Schema {
                quantity_schema(Quantity::$name)
            }
        }
    )*};
}

quantities! {
    /// A length; base bohr.
    Length,
    /// An energy; base hartree.
    Energy,
    /// A time; base ħ/hartree.
    Time,
    /// A cycle-averaged intensity; base W/cm².
    Intensity,
    /// An electric field; base hartree/(e bohr).
    ElectricField,
    /// An angle; base rad.
    Angle,
    /// A chirp; base rad per atomic unit of time squared.
    Chirp
}

fn quantity_schema(quantity: Quantity) -> Schema {
    let units: Vec<&str> = quantity.units().iter().map(|unit| unit.symbol).collect();
    json_schema!({
        "type": "string",
        "x-quantity": quantity.name(),
        "x-units": units,
        "pattern": quantity::pattern(quantity),
    })
}
