//! The JSON Schema of the configuration: published by `tdse schema`, and what [`super::structure`] checks against.

use std::sync::LazyLock;

use schemars::generate::SchemaSettings;
use serde_json::{Value, json};

use super::pointer;
use super::raw::Configuration;

/// The schema, without references: every place of the configuration holds its own description.
pub fn schema() -> &'static Value {
    static SCHEMA: LazyLock<Value> = LazyLock::new(generate);
    &SCHEMA
}

/// Text of the schema, draft 2020-12.
pub fn text() -> String {
    format!("{:#}\n", schema())
}

fn generate() -> Value {
    let settings = SchemaSettings::draft2020_12().with(|settings| settings.inline_subschemas = true);
    let mut schema = settings.into_generator().into_root_schema_for::<Configuration>().to_value();
    simplify(&mut schema);
    schema
}

/// Optional means that a key may be left out, never that it may be null; widths of integers are of no interest.
fn simplify(schema: &mut Value) {
    tidy(schema);
    match schema {
        Value::Object(map) => {
            map.shift_remove("format");
            if let Some(Value::Array(types)) = map.get_mut("type") {
                types.retain(|name| name != "null");
                if let [only] = types.as_slice() {
                    map["type"] = only.clone();
                }
            }
            if let Some(Value::Array(choices)) = map.shift_remove("anyOf")
                && let Some(Value::Object(choice)) = choices.into_iter().next()
            {
                let outer = std::mem::take(map);
                map.extend(choice);
                map.extend(outer);
            }
            map.values_mut().for_each(simplify);
        }
        Value::Array(list) => list.iter_mut().for_each(simplify),
        _ => {}
    }
}

/// Drops what serde writes for options without value, and the fraction it writes for whole numbers.
pub fn tidy(value: &mut Value) {
    match value {
        Value::Number(number) => {
            let whole = number.as_f64().filter(|x| number.is_f64() && x.fract() == 0.0 && x.abs() < 1e15);
            if let Some(whole) = whole {
                *value = json!(whole as i64);
            }
        }
        Value::Object(map) => {
            map.retain(|_, child| !child.is_null());
            map.values_mut().for_each(tidy);
        }
        Value::Array(list) => {
            list.retain(|child| !child.is_null());
            list.iter_mut().for_each(tidy);
        }
        _ => {}
    }
}

/// The schema of a place of `tree`, whether something is written there or only may be; `None` where nothing may.
///
/// List elements must exist. In an object whose `kind` is not written yet, the keys of every kind are known.
pub fn at(tree: &Value, pointer: &str) -> Option<&'static Value> {
    let mut schema = schema();
    let mut here = Some(tree);
    if !pointer.is_empty() && !pointer.starts_with('/') {
        return None;
    }
    for segment in pointer::segments(pointer) {
        if let Some(Value::Array(list)) = here {
            here = Some(list.get(pointer::index(&segment)?)?);
            schema = schema.get("items")?;
        } else {
            schema = variants(schema, here).find_map(|variant| variant["properties"].get(&segment))?;
            here = here.and_then(|value| value.get(&segment));
        }
    }
    Some(schema)
}

/// Writes `value` at a place that [`at`] knows; a choice by `kind` on the way that is not written yet is its default.
pub fn put(tree: &mut Value, pointer: &str, value: Value) {
    for (end, _) in pointer.match_indices('/').skip(1) {
        let ancestor = &pointer[..end];
        let default = at(tree, ancestor).and_then(|schema| schema.get("default"));
        let absent = tree.pointer(ancestor).is_none();
        if let Some(default) = default.filter(|default| absent && default.get("kind").is_some()) {
            pointer::put(tree, ancestor, default.clone());
        }
    }
    pointer::put(tree, pointer, value);
}

/// Every place of `tree` where something is written or may be, notes aside, in the order of the schema.
pub fn places(tree: &Value) -> Vec<String> {
    let mut found = Vec::new();
    collect(schema(), Some(tree), "", &mut found);
    found
}

fn collect(schema: &Value, value: Option<&Value>, here: &str, found: &mut Vec<String>) {
    if let Some(Value::Array(list)) = value {
        for (i, item) in list.iter().enumerate() {
            let place = format!("{here}/{i}");
            found.push(place.clone());
            collect(&schema["items"], Some(item), &place, found);
        }
        return;
    }
    let properties =
        variants(schema, value).filter_map(|variant| variant["properties"].as_object()).flatten();
    for (key, child) in properties.filter(|(key, _)| !matches!(key.as_str(), "note" | "$schema")) {
        let place = pointer::join(here, key);
        found.push(place.clone());
        collect(child, value.and_then(|value| value.get(key)), &place, found);
    }
}

/// The object schemas that `value` may follow: itself, or of a choice by `kind` those of its kind (all if it has none).
fn variants<'s>(schema: &'s Value, value: Option<&Value>) -> impl Iterator<Item = &'s Value> {
    let kind = value.and_then(|value| value.get("kind"));
    let choices = schema["oneOf"].as_array().into_iter().flatten();
    let fitting = choices.filter(move |variant| {
        let own = &variant["properties"]["kind"]["const"];
        kind.is_none_or(|kind| kind == own)
    });
    fitting.chain(std::iter::once(schema).filter(|schema| schema.get("oneOf").is_none()))
}

/// A value that passes the schema: its example, its default, or one made of the examples of what it requires.
pub fn example(schema: &Value) -> Value {
    let given = schema["examples"].get(0).or(schema.get("default")).or(schema.get("const"));
    if let Some(value) = given.or(schema["enum"].get(0)) {
        return value.clone();
    }
    if let Some(first) = schema["oneOf"].get(0) {
        return example(first);
    }
    match schema["type"].as_str() {
        Some("object") => {
            let required = schema["required"].as_array().into_iter().flatten().filter_map(Value::as_str);
            required.map(|key| (key.to_owned(), example(&schema["properties"][key]))).collect()
        }
        Some("array") => json!([example(&schema["items"])]),
        Some("boolean") => json!(false),
        Some("integer" | "number") => schema.get("minimum").cloned().unwrap_or(json!(1)),
        _ => json!(""),
    }
}
