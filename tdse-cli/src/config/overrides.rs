//! `--set POINTER=VALUE`: changes to the parsed file before anything is judged.

use serde_json::Value;

use super::complaint::{Complaint, Complaints, Fix};
use super::{pointer, schema};

/// Applies the overrides in order. VALUE is JSON; text that is not JSON is a string.
///
/// # Errors
/// An override without `=`, or whose pointer leads to no place that the schema knows.
pub fn apply(tree: &mut Value, sets: &[String]) -> Result<(), Complaints> {
    let mut found = Vec::new();
    for set in sets {
        match split(set) {
            Ok((place, value)) if tree.pointer(place).is_some() || schema::at(tree, place).is_some() => {
                schema::put(tree, place, value);
            }
            Ok((place, value)) => found.push(leads_nowhere(tree, place, &value)),
            Err(complaints) => found.extend(complaints.0),
        }
    }
    if found.is_empty() { Ok(()) } else { Err(Complaints(found)) }
}

fn split(set: &str) -> Result<(&str, Value), Complaints> {
    let Some((place, text)) = set.split_once('=') else {
        let complaint = Complaint::new("--set", Some(&set.into()), "has no \"=\"").allowed("POINTER=VALUE");
        return Err(complaint.fix(Fix::Words("write --set '/field/pulses/0/phase=90 deg'".into())).into());
    };
    Ok((place, serde_json::from_str(text).unwrap_or_else(|_| text.into())))
}

fn leads_nowhere(tree: &Value, place: &str, value: &Value) -> Complaint {
    let places = schema::places(tree);
    let nearest = pointer::nearest(place, places.iter().map(String::as_str)).unwrap_or("/atom");
    Complaint::new(format!("--set {place}"), Some(value), "has a pointer that leads nowhere")
        .allowed("a JSON Pointer (RFC 6901) to a key of the schema or an existing list element")
        .fix(Fix::Words(format!("as its pointer try {}", Value::from(nearest))))
}
