//! Identity of a point: the hash of what decides its bits.

use serde_json::{Value, json};
use sha2::{Digest, Sha256};
use tdse_core::problem::Record;

/// Keys of resolved numerics that decide no bit: everything they would decide is pinned beside them.
const WITHOUT_EFFECT: [&str; 3] = ["accuracy", "common", "allow_inadequate"];

/// First 16 hexadecimal digits of the SHA-256 of the canonical JSON (RFC 8785) of a resolved configuration's atom, field
/// and numerics, what is recorded (populations, and the energies of electrons), and the version of the numerics. Tables
/// count by their hash, notes not at all.
pub fn identity(resolved: &Value, record: Record, numerics_version: u32) -> String {
    let mut basis = json!({
        "atom": resolved["atom"],
        "field": resolved["field"],
        "numerics": resolved["numerics"],
        "record": { "populations": record.populations },
        "numerics_version": numerics_version,
    });
    if let Some(electrons) = resolved["outputs"].get("photoelectrons") {
        basis["record"]["photoelectrons"] = electrons.clone();
    }
    forget(&mut basis);
    if let Value::Object(numerics) = &mut basis["numerics"] {
        numerics.retain(|key, _| !WITHOUT_EFFECT.contains(&key.as_str()));
    }
    let canonical = serde_json_canonicalizer::to_vec(&basis).unwrap_or_default();
    format!("{:x}", Sha256::digest(canonical))[..16].to_owned()
}

/// Drops notes, and the paths of tables whose hash is given.
fn forget(value: &mut Value) {
    match value {
        Value::Object(map) => {
            let hashed = map.contains_key("sha256");
            map.retain(|key, _| key != "note" && !(hashed && key == "file"));
            map.values_mut().for_each(forget);
        }
        Value::Array(list) => list.iter_mut().for_each(forget),
        _ => {}
    }
}
