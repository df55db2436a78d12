//! From the raw configuration to a [`Request`]: what the schema cannot say, and conversion to atomic units.

mod atom;
mod curve;
mod electrons;
mod field;
mod models;
mod numerics;
mod outputs;
mod symmetry;
mod table;

use serde_json::Value;

use super::complaint::{Complaint, Complaints, Fix};
use super::library::Library;
use super::pointer::join;
use super::raw;
use super::request::Request;
use super::schema;
use super::tables::Input;

/// Judges `written`, which is `tree` in types.
///
/// # Errors
/// Every fault found, in file order.
pub fn validate(written: raw::Configuration, tree: &Value, library: &Library) -> Result<Request, Complaints> {
    let mut check = Check { tree, library, found: Vec::new(), inputs: Vec::new() };
    let atom = atom::atom(&mut check, &written.atom);
    let field = field::field(&mut check, &written.field, written.atom.dimensions);
    let (mut outputs, record) = outputs::outputs(&mut check, &written.outputs);
    outputs.models = models::models(&mut check, &written, &field);
    let electron_method = electrons::method(&mut check, &written);
    let pins = numerics::pins(&mut check, &written.numerics, written.atom.dimensions);
    let Check { found, inputs, .. } = check;
    Complaints(found).into_result(tree)?;
    Ok(Request {
        title: written.title.clone(),
        atom: atom.ok_or_else(Complaints::default)?,
        field,
        record,
        pins,
        electron_method,
        accuracy: written.numerics.accuracy,
        inadequate: numerics::inadequate(&written.numerics),
        sharing: numerics::sharing(&written.numerics),
        outputs,
        inputs,
        written,
    })
}

/// What a check looks at and what it has found.
struct Check<'a> {
    tree: &'a Value,
    library: &'a Library,
    found: Vec<Complaint>,
    inputs: Vec<Input>,
}

impl Check<'_> {
    /// Complains about what stands at `place`.
    fn complain(&mut self, place: &str, reason: impl Into<String>, allowed: impl Into<String>, fix: Fix) {
        let complaint = Complaint::new(place, self.tree.pointer(place), reason).allowed(allowed).fix(fix);
        self.found.push(complaint);
    }

    /// The object at `object` with one key left out.
    fn without(&self, object: &str, key: &str) -> Fix {
        let mut value = self.tree.pointer(object).cloned().unwrap_or_default();
        if let Value::Object(map) = &mut value {
            map.shift_remove(key);
        }
        Fix::Elsewhere { place: object.into(), value }
    }

    /// Complains unless exactly one of two keys stands in the object at `object`.
    fn exactly_one(&mut self, object: &str, keys: [&str; 2]) {
        if keys.iter().all(|key| self.tree.pointer(&join(object, key)).is_none()) {
            let place = join(object, keys[0]);
            let example = schema::at(self.tree, &place).map(schema::example).unwrap_or_default();
            let reason = format!("is missing, and so is {}", keys[1]);
            self.complain(&place, reason, format!("one of {} and {}", keys[0], keys[1]), Fix::Value(example));
        }
        self.at_most_one(object, keys);
    }

    /// Complains if both of two keys stand in the object at `object`.
    fn at_most_one(&mut self, object: &str, keys: [&str; 2]) {
        let [first, second] = keys.map(|key| self.tree.pointer(&join(object, key)));
        if let (Some(first), Some(_)) = (first, second) {
            let reason = format!("stands beside {} {first}", keys[0]);
            let fix = self.without(object, keys[1]);
            self.complain(&join(object, keys[1]), reason, format!("one of {} and {}", keys[0], keys[1]), fix);
        }
    }
}
