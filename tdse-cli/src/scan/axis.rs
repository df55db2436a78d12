//! One axis of a scan: where it points, what it is called, which values it takes.

use serde_json::{Value, json};
use tdse_core::units::{Quantity, Unit};

use crate::config::complaint::{Complaint, Complaints, Fix};
use crate::config::quantity::{self, Parsed, digits, rounded};
use crate::config::raw::{self, Spacing};
use crate::config::structure::Shape;
use crate::config::{allowed, pointer, repair, schema};

/// Significant decimal digits of interpolated values.
const DIGITS: usize = 12;

/// An axis, checked.
#[derive(Clone, Debug, PartialEq)]
pub struct Axis {
    /// Name in results.
    pub name: String,
    /// JSON Pointer to what is varied.
    pub parameter: String,
    /// Which dimension of the grid it runs along; axes that move together share one.
    pub dimension: usize,
    /// The values, as they are written into each point.
    pub values: Vec<Value>,
    /// The same for results.
    pub coordinates: Coordinates,
}

/// Values of an axis as results show them.
#[derive(Clone, Debug, PartialEq)]
pub enum Coordinates {
    /// Numbers, in this unit if they have one.
    Numbers {
        /// One number per value.
        values: Vec<f64>,
        /// Their common unit, as in the configuration.
        unit: Option<&'static str>,
    },
    /// Words, or JSON text.
    Words(Vec<String>),
}

impl Coordinates {
    /// Numbers where every value is one, with or without unit; else words.
    fn of(values: &[Value], schema: &Value) -> Self {
        let numbers: Option<Vec<f64>> = values.iter().map(Value::as_f64).collect();
        if let Some(values) = numbers {
            return Self::Numbers { values, unit: None };
        }
        if let Shape::Quantity(quantity) = Shape::of(schema) {
            let parsed = values.iter().map(|value| quantity::parse(quantity, value.as_str()?).ok());
            if let Some([first, rest @ ..]) = parsed.collect::<Option<Vec<Parsed>>>().as_deref() {
                let rest = rest.iter().map(|value| number_in(first.unit, *value));
                let values = std::iter::once(first.number).chain(rest).collect();
                return Self::Numbers { values, unit: Some(first.unit.symbol) };
            }
        }
        let word = |value: &Value| value.as_str().map_or_else(|| value.to_string(), str::to_owned);
        Self::Words(values.iter().map(word).collect())
    }
}

/// The number of a quantity in another unit; exactly itself in its own.
fn number_in(unit: Unit, parsed: Parsed) -> f64 {
    if parsed.unit == unit { parsed.number } else { parsed.value() / unit.factor }
}

/// Reads an axis that stands at `place`; `tree` is the configuration with its scan.
pub fn axis(
    tree: &Value,
    raw: &raw::Axis,
    place: &str,
    is_reserved: fn(&str) -> bool,
) -> Result<Axis, Complaints> {
    let schema = target(tree, raw, place)?;
    let name = name(tree, raw, place, is_reserved)?;
    let values = match (&raw.values, &raw.from, &raw.to, raw.points) {
        (Some(values), None, None, None) => values.clone(),
        (None, Some(from), Some(to), Some(points)) => {
            let ends = Ends { tree, schema, place, spacing: raw.spacing, points };
            ends.values(from, to)?
        }
        _ => return Err(neither_way(tree, raw, place)),
    };
    let coordinates = Coordinates::of(&values, schema);
    Ok(Axis { name, parameter: raw.parameter.clone(), dimension: 0, values, coordinates })
}

/// Schema of what the axis varies.
fn target(tree: &Value, raw: &raw::Axis, place: &str) -> Result<&'static Value, Complaints> {
    let varied = |pointer: &str| {
        ["/atom", "/field", "/numerics", "/outputs"].iter().any(|top| pointer.starts_with(top))
    };
    if let Some(schema) = schema::at(tree, &raw.parameter).filter(|_| varied(&raw.parameter)) {
        return Ok(schema);
    }
    let places = schema::places(tree);
    let known = places.iter().map(String::as_str).filter(|known| varied(known));
    let nearest = pointer::nearest(&raw.parameter, known).unwrap_or("/atom");
    let complaint =
        Complaint::new(pointer::join(place, "parameter"), Some(&json!(raw.parameter)), "leads nowhere");
    let allowed = "a JSON Pointer (RFC 6901) into /atom, /field, /numerics or /outputs, to a key of the schema or an \
                   existing list element";
    Err(complaint.allowed(allowed).fix(Fix::Value(json!(nearest))).into())
}

fn name(
    tree: &Value,
    raw: &raw::Axis,
    place: &str,
    is_reserved: fn(&str) -> bool,
) -> Result<String, Complaints> {
    let name = raw.name.clone().unwrap_or_else(|| raw.parameter.trim_start_matches('/').replace('/', "_"));
    let first_is_letter = name.starts_with(|c: char| c.is_ascii_alphabetic());
    let spelled = first_is_letter && name.chars().all(|c| c.is_ascii_alphanumeric() || c == '_');
    if spelled && !is_reserved(&name) {
        return Ok(name);
    }
    let place = pointer::join(place, "name");
    let reason = if spelled { "is a name that results use" } else { "is no name" };
    let letters: String = name.chars().map(|c| if c.is_ascii_alphanumeric() { c } else { '_' }).collect();
    let fix = Fix::Value(json!(format!("scan_{}", letters.trim_matches('_'))));
    let complaint = Complaint::new(&place, Some(tree.pointer(&place).unwrap_or(&json!(name))), reason);
    let allowed = "letters, digits and _, a letter first, and no name of the results";
    Err(complaint.allowed(allowed).fix(fix).into())
}

fn neither_way(tree: &Value, raw: &raw::Axis, place: &str) -> Complaints {
    let mut value = tree.pointer(place).cloned().unwrap_or_default();
    let example = schema::at(tree, &raw.parameter).map(schema::example).unwrap_or_default();
    if let Value::Object(map) = &mut value {
        map.retain(|key, _| !matches!(key.as_str(), "from" | "to" | "points" | "spacing"));
        map.entry("values").or_insert_with(|| json!([example]));
    }
    let complaint = Complaint::new(place, tree.pointer(place), "does not say its values in one way");
    complaint.allowed("from, to and points, or values").fix(Fix::Value(value)).into()
}

/// An axis between two ends.
struct Ends<'a> {
    tree: &'a Value,
    schema: &'static Value,
    place: &'a str,
    spacing: Spacing,
    points: u32,
}

impl Ends<'_> {
    fn values(&self, from: &Value, to: &Value) -> Result<Vec<Value>, Complaints> {
        match Shape::of(self.schema) {
            Shape::Quantity(quantity) => {
                let (from, to) = (self.quantity("from", quantity, from)?, self.quantity("to", quantity, to)?);
                let numbers = self.between(from.number, number_in(from.unit, to))?;
                let text = |number| json!(format!("{} {}", digits(number), from.unit.symbol));
                Ok(numbers.into_iter().map(text).collect())
            }
            Shape::Plain if self.schema["type"] == "number" || self.schema["type"] == "integer" => {
                let numbers = self.between(self.number("from", from)?, self.number("to", to)?)?;
                Ok(numbers.into_iter().map(number_value).collect())
            }
            _ => {
                let complaint = self.complaint("from", "is an end where there is nothing between");
                let mut axis = self.tree.pointer(self.place).cloned().unwrap_or_default();
                if let Value::Object(map) = &mut axis {
                    map.retain(|key, _| !matches!(key.as_str(), "from" | "to" | "points" | "spacing"));
                    map.insert("values".into(), json!([schema::example(self.schema)]));
                }
                let fix = Fix::Elsewhere { place: self.place.into(), value: axis };
                Err(complaint.allowed("values, listed one by one").fix(fix).into())
            }
        }
    }

    fn quantity(&self, key: &str, quantity: Quantity, value: &Value) -> Result<Parsed, Complaints> {
        let reason = match value.as_str().map(|text| quantity::parse(quantity, text)) {
            Some(Ok(parsed)) => return Ok(parsed),
            Some(Err(refusal)) => refusal.reason(quantity),
            None => "has no unit".into(),
        };
        Err(self.unfit(key, value, reason))
    }

    fn number(&self, key: &str, value: &Value) -> Result<f64, Complaints> {
        value.as_f64().ok_or_else(|| self.unfit(key, value, "is not a number".into()))
    }

    fn unfit(&self, key: &str, value: &Value, reason: String) -> Complaints {
        let complaint = self.complaint(key, reason).allowed(allowed::allowed(self.schema));
        complaint.fix(Fix::Value(repair::repaired(self.schema, value))).into()
    }

    /// The numbers from one end to the other, ends exact, the rest to [`DIGITS`] digits.
    fn between(&self, from: f64, to: f64) -> Result<Vec<f64>, Complaints> {
        if self.spacing == Spacing::Log {
            for (key, end) in [("from", from), ("to", to)] {
                if end <= 0.0 {
                    let complaint = self.complaint(key, "cannot be an end of logarithmic spacing");
                    let fix = Fix::Elsewhere {
                        place: pointer::join(self.place, "spacing"),
                        value: json!("linear"),
                    };
                    return Err(complaint.allowed("ends above 0, or linear spacing").fix(fix).into());
                }
            }
        }
        let last = f64::from(self.points - 1);
        let value = |i: u32| match (i, self.spacing) {
            (0, _) => from,
            (i, _) if i == self.points - 1 => to,
            (i, Spacing::Linear) => from + (to - from) * (f64::from(i) / last),
            (i, Spacing::Log) => from * (to / from).powf(f64::from(i) / last),
        };
        Ok((0..self.points).map(|i| rounded(value(i), DIGITS)).collect())
    }

    fn complaint(&self, key: &str, reason: impl Into<String>) -> Complaint {
        let place = pointer::join(self.place, key);
        let written = self.tree.pointer(&place);
        Complaint::new(place, written, reason)
    }
}

/// A JSON number; whole numbers without a fraction, so that they may stand where a whole number is due.
fn number_value(number: f64) -> Value {
    let whole = number.fract() == 0.0 && number.abs() < 1e15;
    if whole { json!(number as i64) } else { json!(number) }
}
