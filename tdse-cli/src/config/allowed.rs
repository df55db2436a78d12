//! What a schema allows, in words.

use serde_json::Value;

use super::quantity::number_text;
use super::structure::Shape;

/// What may stand at a place with this schema.
pub fn allowed(schema: &Value) -> String {
    match Shape::of(schema) {
        Shape::Tagged(variants) => {
            let kinds: Vec<String> =
                variants.iter().map(|variant| variant["properties"]["kind"]["const"].to_string()).collect();
            format!("an object whose \"kind\" is {}", either(&kinds))
        }
        Shape::Word(words) => {
            either(&words.iter().map(|word| Value::from(*word).to_string()).collect::<Vec<_>>())
        }
        Shape::Quantity(quantity) => {
            let units: Vec<&str> = quantity.units().iter().map(|unit| unit.symbol).collect();
            let limits = limits(schema, "x-minimum", "x-exclusive-minimum", "x-maximum");
            let comma = if limits.is_empty() { "" } else { "," };
            format!("{} in {}{comma}{limits}", with_article(quantity.name()), either(&units))
        }
        Shape::Object(properties) => {
            let keys: Vec<&str> = properties.keys().map(String::as_str).collect();
            format!("an object with the keys {}", keys.join(", "))
        }
        Shape::List if schema["minItems"].as_u64().unwrap_or(0) > 0 => {
            "a list with at least one element".into()
        }
        Shape::List => "a list".into(),
        Shape::Plain => plain(schema),
        Shape::Any => "any value".into(),
    }
}

/// `a, b or c`.
pub fn either<S: AsRef<str>>(words: &[S]) -> String {
    let words: Vec<&str> = words.iter().map(AsRef::as_ref).collect();
    match words.split_last() {
        Some((last, [])) => (*last).into(),
        Some((last, rest)) => format!("{} or {last}", rest.join(", ")),
        None => String::new(),
    }
}

fn plain(schema: &Value) -> String {
    match schema["type"].as_str() {
        Some("boolean") => "true or false".into(),
        Some("integer") => {
            format!("a whole number{}", limits(schema, "minimum", "exclusiveMinimum", "maximum"))
        }
        Some("number") => format!("a number{}", limits(schema, "minimum", "exclusiveMinimum", "maximum")),
        Some("string") => "a text".into(),
        _ => "a number, or a text with number and unit".into(),
    }
}

fn limits(schema: &Value, least: &str, above: &str, most: &str) -> String {
    let text = |key: &str| match &schema[key] {
        Value::String(text) => Some(text.clone()),
        Value::Number(number) => Some(number_text(number)),
        _ => None,
    };
    let lower = text(least).map(|limit| format!(" from {limit}"));
    let lower = lower.or_else(|| text(above).map(|limit| format!(" above {limit}"))).unwrap_or_default();
    let joint = if lower.is_empty() {
        " up to"
    } else if text(least).is_some() {
        " to"
    } else {
        ", up to"
    };
    let upper = text(most).map(|limit| format!("{joint} {limit}")).unwrap_or_default();
    format!("{lower}{upper}")
}

fn with_article(name: &str) -> String {
    let article = if name.starts_with(['a', 'e', 'i', 'o', 'u']) { "an" } else { "a" };
    format!("{article} {name}")
}
