//! `scan`.

use schemars::{JsonSchema, Schema, SchemaGenerator, json_schema};
use serde::{Deserialize, Serialize};
use serde_json::Value;

/// One axis: either `from`, `to` and `points`, or `values`.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Axis {
    /// Anything worth remembering.
    pub note: Option<String>,
    /// JSON Pointer (RFC 6901) to what is varied.
    #[schemars(example = "/field/pulses/0/phase")]
    pub parameter: String,
    /// Name of the axis in results; the pointer with `_` for `/` if left out.
    #[schemars(example = &"cep")]
    pub name: Option<String>,
    /// First value.
    #[serde(default)]
    #[schemars(schema_with = "end", example = "0 deg")]
    pub from: Option<Value>,
    /// Last value.
    #[serde(default)]
    #[schemars(schema_with = "end", example = "345 deg")]
    pub to: Option<Value>,
    /// Number of values, both ends counted.
    #[schemars(range(min = 2, max = 1_000_000), example = 24)]
    pub points: Option<u32>,
    /// How the values lie between the ends.
    #[serde(default)]
    pub spacing: Spacing,
    /// The values one by one: whatever may stand at that place.
    #[schemars(length(min = 1), example = ["0 deg", "90 deg"])]
    pub values: Option<Vec<Value>>,
    /// Axes with the same label move in step.
    #[schemars(example = &"label")]
    pub together: Option<String>,
}

fn end(_: &mut SchemaGenerator) -> Schema {
    json_schema!({ "type": ["string", "number"] })
}

/// How values lie between the ends of an axis.
#[derive(Clone, Copy, Debug, Default, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(rename_all = "snake_case")]
pub enum Spacing {
    /// Equal differences.
    #[default]
    Linear,
    /// Equal ratios, between positive ends.
    Log,
}
