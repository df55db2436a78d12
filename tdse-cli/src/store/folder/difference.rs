//! How two configurations differ in what may not change within a folder.

use std::collections::BTreeSet;
use std::fmt;

use serde_json::Value;

use crate::config::pointer;

/// Parts of a configuration that may change: points that belong are kept.
const FREE: [&str; 4] = ["scan", "outputs", "models", "title"];

/// One place where two configurations differ.
#[derive(Clone, Debug, PartialEq)]
pub struct Difference {
    /// JSON Pointer (RFC 6901).
    pub place: String,
    /// What the folder was made with; none where nothing was written.
    pub before: Option<Value>,
    /// What is asked now.
    pub now: Option<Value>,
}

impl fmt::Display for Difference {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let word = |value: &Option<Value>| value.as_ref().map_or("nothing".into(), Value::to_string);
        write!(f, "{}: {} before, {} now", self.place, word(&self.before), word(&self.now))
    }
}

/// Where the configurations differ, apart from what may change and from what both scan.
pub(super) fn between(before: &Value, now: &Value) -> Vec<Difference> {
    let mut found = Vec::new();
    for key in keys(before, now) {
        if !FREE.contains(&key) {
            compare(&pointer::join("", key), before.get(key), now.get(key), &mut found);
        }
    }
    let (old, new) = (scanned(before), scanned(now));
    found.retain(|difference| {
        let within = |axis: &&str| {
            let rest = difference.place.strip_prefix(axis);
            rest.is_some_and(|rest| rest.is_empty() || rest.starts_with('/'))
        };
        !(old.iter().any(within) && new.iter().any(within))
    });
    found
}

/// Which of the parts that may change did.
pub(super) fn changed_parts(before: &Value, now: &Value) -> Vec<String> {
    let changed = |part: &&str| {
        let mut found = Vec::new();
        compare("", before.get(part), now.get(part), &mut found);
        !found.is_empty()
    };
    FREE.into_iter().filter(changed).map(str::to_owned).collect()
}

fn scanned(configuration: &Value) -> Vec<&str> {
    let axes = configuration["scan"].as_array().into_iter().flatten();
    axes.filter_map(|axis| axis["parameter"].as_str()).collect()
}

fn keys<'a>(a: &'a Value, b: &'a Value) -> BTreeSet<&'a str> {
    let keys = |value: &'a Value| value.as_object().into_iter().flatten().map(|(key, _)| key.as_str());
    keys(a).chain(keys(b)).filter(|key| !matches!(*key, "note" | "$schema")).collect()
}

fn compare(place: &str, before: Option<&Value>, now: Option<&Value>, found: &mut Vec<Difference>) {
    match (before, now) {
        (Some(a), Some(b)) if a.is_object() && b.is_object() => {
            for key in keys(a, b) {
                compare(&pointer::join(place, key), a.get(key), b.get(key), found);
            }
        }
        (Some(Value::Array(a)), Some(Value::Array(b))) if a.len() == b.len() => {
            for (index, (a, b)) in a.iter().zip(b).enumerate() {
                compare(&pointer::join(place, &index.to_string()), Some(a), Some(b), found);
            }
        }
        _ if before == now => {}
        _ => found.push(Difference { place: place.into(), before: before.cloned(), now: now.cloned() }),
    }
}

#[cfg(test)]
mod tests {
    use serde_json::json;

    use super::*;

    #[test]
    fn differences_are_named_with_both_values() {
        let before = json!({ "field": { "pulses": [{ "phase": "0 deg", "delay": "1 fs" }] }, "title": "A" });
        let now = json!({ "field": { "pulses": [{ "phase": "9 deg", "note": "new" }] }, "title": "B" });
        let lines: Vec<String> = between(&before, &now).iter().map(ToString::to_string).collect();
        assert_eq!(
            lines,
            [
                "/field/pulses/0/delay: \"1 fs\" before, nothing now",
                "/field/pulses/0/phase: \"0 deg\" before, \"9 deg\" now",
            ]
        );
        assert_eq!(changed_parts(&before, &now), ["title"]);
    }

    #[test]
    fn what_both_scan_may_differ_where_it_stands() {
        let request =
            |phase: &str, axis: &str| json!({ "field": { "phase": phase }, "scan": [{ "parameter": axis }] });
        let phase = "/field/phase";
        assert!(between(&request("0 deg", phase), &request("9 deg", phase)).is_empty());
        assert_eq!(between(&request("0 deg", phase), &request("9 deg", "/field/delay")).len(), 1);
        assert_eq!(changed_parts(&request("0 deg", phase), &request("0 deg", "/field")), ["scan"]);
    }
}
