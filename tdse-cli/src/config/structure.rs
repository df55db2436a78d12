//! Whether a configuration has the shape of the schema: every fault at once, in file order.
//!
//! Checked is the subset of JSON Schema that [`super::schema`] generates: objects with known keys, lists, choices by
//! `kind`, listed words, numbers with limits, and quantities (`x-quantity`, `x-minimum`, …).

use serde_json::{Map, Value};
use tdse_core::units::Quantity;

use super::complaint::{Complaint, Complaints, Fix};
use super::quantity::{self, Refusal};
use super::schema::{example, schema};
use super::{allowed, pointer, repair};

/// Checks `tree` against the schema of the configuration.
pub fn check(tree: &Value) -> Result<(), Complaints> {
    Complaints(faults(schema(), tree, "")).into_result(tree)
}

/// Every fault of `value`, which stands at `place`, against `schema`.
pub fn faults(schema: &Value, value: &Value, place: &str) -> Vec<Complaint> {
    let mut found = Vec::new();
    inspect(schema, value, place, &mut found);
    found
}

/// What a schema of our subset asks for.
pub enum Shape<'s> {
    /// One of several objects, told apart by `kind`.
    Tagged(&'s [Value]),
    /// One of these words.
    Word(Vec<&'s str>),
    /// A text with number and unit.
    Quantity(Quantity),
    /// An object with known keys.
    Object(&'s Map<String, Value>),
    /// A list.
    List,
    /// Number, truth value, text, or several of these.
    Plain,
    /// Anything.
    Any,
}

impl<'s> Shape<'s> {
    /// Reads the shape off a schema.
    pub fn of(schema: &'s Value) -> Self {
        if let Some(choices) = schema["oneOf"].as_array() {
            let words: Vec<&str> = choices.iter().filter_map(|choice| choice["const"].as_str()).collect();
            return if words.is_empty() { Self::Tagged(choices) } else { Self::Word(words) };
        }
        if let Some(words) = schema["enum"].as_array() {
            return Self::Word(words.iter().filter_map(Value::as_str).collect());
        }
        if let Some(word) = schema["const"].as_str() {
            return Self::Word(vec![word]);
        }
        if let Some(quantity) = schema["x-quantity"].as_str().and_then(quantity::named) {
            return Self::Quantity(quantity);
        }
        match (schema["type"].as_str(), schema["properties"].as_object()) {
            (_, Some(properties)) => Self::Object(properties),
            (Some("array"), _) => Self::List,
            _ if schema.get("type").is_none() => Self::Any,
            _ => Self::Plain,
        }
    }
}

fn inspect(schema: &Value, value: &Value, place: &str, found: &mut Vec<Complaint>) {
    match (Shape::of(schema), value) {
        (Shape::Tagged(variants), Value::Object(map)) => tagged(variants, map, place, found),
        (Shape::Object(properties), Value::Object(map)) => object(schema, properties, map, place, found),
        (Shape::List, Value::Array(list)) => {
            if list.len() < schema["minItems"].as_u64().unwrap_or(0) as usize {
                found.push(refuse(schema, value, place, "is empty"));
            }
            for (i, item) in list.iter().enumerate() {
                inspect(&schema["items"], item, &format!("{place}/{i}"), found);
            }
        }
        (Shape::Quantity(quantity), Value::String(text)) => {
            found.extend(quantity_fault(schema, quantity, text).map(|why| refuse(schema, value, place, why)));
        }
        (Shape::Quantity(_), Value::Number(_)) => {
            found.push(refuse(schema, value, place, "has no unit"));
        }
        (Shape::Word(words), Value::String(text)) => {
            if !words.contains(&text.as_str()) {
                found.push(refuse(schema, value, place, "is unknown"));
            }
        }
        (Shape::Plain, _) => {
            found.extend(plain_fault(schema, value).map(|why| refuse(schema, value, place, why)));
        }
        (Shape::Any, _) => {}
        (_, other) => found.push(refuse(schema, value, place, format!("is {}", described(other)))),
    }
}

fn refuse(schema: &Value, value: &Value, place: &str, reason: impl Into<String>) -> Complaint {
    let fix = repair::repaired(schema, value);
    Complaint::new(place, Some(value), reason).allowed(allowed::allowed(schema)).fix(Fix::Value(fix))
}

fn missing(schema: &Value, place: String) -> Complaint {
    let complaint = Complaint::new(place, None, "is missing").allowed(allowed::allowed(schema));
    complaint.fix(Fix::Value(example(schema)))
}

/// The variant with the object's `kind`, and what is wrong with it.
fn tagged(variants: &[Value], map: &Map<String, Value>, place: &str, found: &mut Vec<Complaint>) {
    let kinds: Vec<Value> =
        variants.iter().map(|variant| variant["properties"]["kind"]["const"].clone()).collect();
    let words = serde_json::json!({ "type": "string", "enum": kinds });
    let here = pointer::join(place, "kind");
    match map.get("kind") {
        None => found.push(missing(&words, here)),
        Some(kind) => match kinds.iter().position(|known| known == kind) {
            None => inspect(&words, kind, &here, found),
            Some(i) => inspect(&variants[i], &Value::Object(map.clone()), place, found),
        },
    }
}

fn object(
    schema: &Value,
    properties: &Map<String, Value>,
    map: &Map<String, Value>,
    place: &str,
    found: &mut Vec<Complaint>,
) {
    for (key, child) in map {
        let here = pointer::join(place, key);
        match properties.get(key) {
            Some(schema) => inspect(schema, child, &here, found),
            None => found.push(unknown_key(properties, map, place, key)),
        }
    }
    let required = schema["required"].as_array().into_iter().flatten().filter_map(Value::as_str);
    for key in required.filter(|key| !map.contains_key(*key)) {
        found.push(missing(&properties[key], pointer::join(place, key)));
    }
}

fn unknown_key(
    properties: &Map<String, Value>,
    map: &Map<String, Value>,
    place: &str,
    key: &str,
) -> Complaint {
    let here = pointer::join(place, key);
    let complaint = |reason| Complaint::new(&here, Some(&map[key]), reason);
    let mut rest = map.clone();
    rest.shift_remove(key);
    let left_out = match place {
        "" => Fix::LeaveOut,
        _ => Fix::Elsewhere { place: place.into(), value: rest.into() },
    };
    if is_planned(&here) {
        return complaint("is not available in this version").allowed("the key left out").fix(left_out);
    }
    let keys: Vec<&str> = properties.keys().map(String::as_str).collect();
    let free = keys.iter().copied().filter(|known| !map.contains_key(*known));
    let near = pointer::nearest(key, free).filter(|known| pointer::is_near(key, known));
    complaint("stands under an unknown key")
        .allowed(format!("the keys {}", keys.join(", ")))
        .fix(near.map_or(left_out, |known| Fix::Key(known.into())))
}

/// Places of the configuration that a later version will know.
fn is_planned(place: &str) -> bool {
    const PLANNED: [&str; 3] =
        ["/atom/state/angular_momentum", "/atom/state/parity_x", "/atom/state/parity_y"];
    PLANNED.contains(&place)
}

fn quantity_fault(schema: &Value, quantity: Quantity, text: &str) -> Option<String> {
    let value = match quantity::parse(quantity, text) {
        Ok(parsed) => parsed.value(),
        Err(refusal) => return Some(Refusal::reason(&refusal, quantity)),
    };
    let limit = |key: &str| schema[key].as_str().map(|text| quantity::value(quantity, text));
    let outside = limit("x-minimum").is_some_and(|least| value < least)
        || limit("x-exclusive-minimum").is_some_and(|bound| value <= bound)
        || limit("x-maximum").is_some_and(|most| value > most);
    outside.then(|| "is out of range".into())
}

/// What is wrong with a number, truth value or text.
fn plain_fault(schema: &Value, value: &Value) -> Option<String> {
    let fits = match &schema["type"] {
        Value::Array(names) => names.iter().filter_map(Value::as_str).any(|name| has_type(value, name)),
        name => name.as_str().is_some_and(|name| has_type(value, name)),
    };
    if !fits {
        return Some(match value {
            Value::Number(_) if schema["type"] == "integer" => "is not a whole number".into(),
            _ => format!("is {}", described(value)),
        });
    }
    let number = value.as_f64()?;
    let limit = |key: &str| schema[key].as_f64();
    let outside = limit("minimum").is_some_and(|least| number < least)
        || limit("exclusiveMinimum").is_some_and(|bound| number <= bound)
        || limit("maximum").is_some_and(|most| number > most);
    outside.then(|| "is out of range".into())
}

fn has_type(value: &Value, name: &str) -> bool {
    match name {
        "string" => value.is_string(),
        "boolean" => value.is_boolean(),
        "number" => value.is_number(),
        "integer" => value.is_i64() || value.is_u64(),
        _ => false,
    }
}

/// A value by its JSON type.
fn described(value: &Value) -> &'static str {
    match value {
        Value::Null => "no value",
        Value::Bool(_) => "a truth value",
        Value::Number(_) => "a number",
        Value::String(_) => "a text",
        Value::Array(_) => "a list",
        Value::Object(_) => "an object",
    }
}
