//! A value that passes in place of one that does not, as near to it as can be guessed.

use serde_json::Value;
use tdse_core::units::Quantity;

use super::pointer::nearest;
use super::quantity::{self, Refusal};
use super::schema::example;
use super::structure::{Shape, faults};

/// The nearest guess that `schema` accepts, else its example.
pub fn repaired(schema: &Value, value: &Value) -> Value {
    let passes = |candidate: &Value| faults(schema, candidate, "").is_empty();
    guess(schema, value).filter(passes).unwrap_or_else(|| example(schema))
}

fn guess(schema: &Value, value: &Value) -> Option<Value> {
    match (Shape::of(schema), value) {
        (Shape::Quantity(quantity), Value::Number(number)) => {
            Some(format!("{} {}", quantity::number_text(number), quantity.units()[0].symbol).into())
        }
        (Shape::Quantity(quantity), Value::String(text)) => with_unit(quantity, text).map(Value::from),
        (Shape::Word(words), Value::String(text)) => nearest(text, words).map(Value::from),
        (Shape::Tagged(variants), Value::String(text)) => {
            let kind = |variant: &Value| variant["properties"]["kind"]["const"].clone();
            variants.iter().find(|variant| kind(variant) == text.as_str()).map(example)
        }
        (Shape::Plain, Value::String(text)) => serde_json::from_str(text).ok(),
        _ => None,
    }
}

/// The number of `text` with the unit of `quantity` that is spelled most like what follows it.
fn with_unit(quantity: Quantity, text: &str) -> Option<String> {
    let symbols = || quantity.units().iter().map(|unit| unit.symbol);
    match quantity::parse(quantity, text) {
        Err(Refusal::UnknownUnit { number, unit }) => {
            nearest(&unit, symbols()).map(|symbol| format!("{number} {symbol}"))
        }
        Err(Refusal::Shape) => {
            let text = text.trim();
            let ends = text.char_indices().map(|(i, c)| i + c.len_utf8()).rev();
            let (number, rest) =
                ends.map(|end| text.split_at(end)).find(|(head, _)| quantity::number(head).is_some())?;
            let symbol = if rest.is_empty() { symbols().next() } else { nearest(rest.trim(), symbols()) };
            symbol.map(|symbol| format!("{number} {symbol}"))
        }
        _ => None,
    }
}
