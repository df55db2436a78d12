//! Wrong configurations: every message holds the place, the value as written, what is allowed, and a way out that works.
//!
//! The configurations are invented for these tests.

use std::path::Path;

use serde_json::Value;
use tdse_cli::config::{Complaint, Complaints, Fix, Request, pointer, read};

const SOUND: &str = r#"{
  "title": "Invented for the tests",
  "atom": {
    "dimensions": 1,
    "potential": { "kind": "soft_coulomb", "charge": 1 },
    "ionization_energy": "15.7596 eV",
    "state": { "kind": "single", "number": 0 }
  },
  "field": {
    "pulses": [
      { "wavelength": "800 nm", "intensity": "1e14 W/cm^2", "envelope": { "kind": "sin2", "cycles": 4 } }
    ]
  },
  "numerics": { "accuracy": 1e-4 },
  "outputs": { "harmonics": { "max_energy": "60 eV" } }
}"#;

const PULSE: &str = "time [fs],electric_field [GV/m]\n0,0\n1,0.5\n2,-0.5\n3,0\n";

/// Changes to the sound configuration, and what is said of the result.
struct Case {
    name: &'static str,
    /// Pointer, and JSON to write there; `None` takes the key out.
    edits: &'static [(&'static str, Option<&'static str>)],
    says: &'static [&'static str],
}

const CASES: &[Case] = &[
    Case { name: "unknown key", edits: &[("/field/pulses/0/wavelenght", Some(r#""800 nm""#)), ("/field/pulses/0/wavelength", None)], says: &[] },
    Case { name: "unknown key at the top", edits: &[("/fields", Some(r#"{}"#))], says: &[] },
    Case { name: "key of another kind", edits: &[("/field/pulses/0/envelope/fwhm", Some(r#""6 fs""#))], says: &[] },
    Case { name: "bare number", edits: &[("/field/pulses/0/wavelength", Some(r#"800"#))], says: &[] },
    Case { name: "bare number for an intensity", edits: &[("/field/pulses/0/intensity", Some(r#"1e14"#))], says: &[] },
    Case { name: "unit of another quantity", edits: &[("/field/pulses/0/wavelength", Some(r#""1.55 eV""#))], says: &[] },
    Case { name: "unknown unit", edits: &[("/field/pulses/0/intensity", Some(r#""1e14 W/cm2""#))], says: &[] },
    Case { name: "no space before the unit", edits: &[("/field/pulses/0/wavelength", Some(r#""800nm""#))], says: &[] },
    Case { name: "quantity without unit", edits: &[("/field/pulses/0/phase", Some(r#""90""#))], says: &[] },
    Case { name: "word for a number", edits: &[("/field/pulses/0/phase", Some(r#""inf deg""#))], says: &[] },
    Case { name: "too large for double precision", edits: &[("/field/pulses/0/delay", Some(r#""1e300 s""#))], says: &[] },
    Case { name: "au of intensity", edits: &[("/field/pulses/0/intensity", Some(r#""3 au""#))], says: &[] },
    Case { name: "negative intensity", edits: &[("/field/pulses/0/intensity", Some(r#""-1e14 W/cm^2""#))], says: &[] },
    Case { name: "intensity zero", edits: &[("/field/pulses/0/intensity", Some(r#""0 W/cm^2""#))], says: &[] },
    Case { name: "wavelength out of range", edits: &[("/field/pulses/0/wavelength", Some(r#""800 m""#))], says: &[] },
    Case { name: "wavelength and photon energy", edits: &[("/field/pulses/0/photon_energy", Some(r#""1.55 eV""#))], says: &[] },
    Case { name: "neither wavelength nor photon energy", edits: &[("/field/pulses/0/wavelength", None)], says: &[] },
    Case { name: "intensity and peak field", edits: &[("/field/pulses/0/peak_field", Some(r#""0.05 au""#))], says: &[] },
    Case { name: "neither intensity nor peak field", edits: &[("/field/pulses/0/intensity", None)], says: &[] },
    Case { name: "cycles and duration", edits: &[("/field/pulses/0/envelope/duration", Some(r#""10 fs""#))], says: &[] },
    Case { name: "neither cycles nor duration", edits: &[("/field/pulses/0/envelope/cycles", None)], says: &[] },
    Case { name: "envelope shorter than a cycle", edits: &[("/field/pulses/0/envelope/cycles", Some(r#"0.5"#))], says: &[] },
    Case { name: "duration shorter than a cycle", edits: &[("/field/pulses/0/envelope", Some(r#"{"kind": "sin2", "duration": "2 fs"}"#))], says: &[] },
    Case { name: "unknown envelope", edits: &[("/field/pulses/0/envelope/kind", Some(r#""sine2""#))], says: &[] },
    Case { name: "envelope as a word", edits: &[("/field/pulses/0/envelope", Some(r#""gaussian""#))], says: &[] },
    Case { name: "envelope without kind", edits: &[("/field/pulses/0/envelope/kind", None)], says: &[] },
    Case { name: "missing envelope", edits: &[("/field/pulses/0/envelope", None)], says: &[] },
    Case { name: "chirp through zero frequency", edits: &[("/field/pulses/0/chirp", Some(r#""-1 rad/fs^2""#))], says: &[] },
    Case { name: "ellipticity above 1", edits: &[("/field/pulses/0/ellipticity", Some(r#"1.5"#))], says: &[] },
    Case { name: "ellipticity in one dimension", edits: &[("/field/pulses/0/ellipticity", Some(r#"0.3"#))], says: &[] },
    Case { name: "angle in one dimension", edits: &[("/field/pulses/0/angle", Some(r#""30 deg""#))], says: &[] },
    Case { name: "no field", edits: &[("/field/pulses", Some(r#"[]"#))], says: &[] },
    Case { name: "pulse instead of a list", edits: &[("/field/pulses", Some(r#"{"wavelength": "800 nm"}"#))], says: &[] },
    Case { name: "missing atom", edits: &[("/atom", None)], says: &[] },
    Case { name: "two dimensions", edits: &[("/atom/dimensions", Some(r#"2"#))], says: &[] },
    Case { name: "three dimensions", edits: &[("/atom/dimensions", Some(r#"3"#))], says: &[] },
    Case { name: "softening and ionization energy", edits: &[("/atom/potential/softening", Some(r#""1.4 bohr""#))], says: &[] },
    Case { name: "ionization energy and element", edits: &[("/atom/element", Some(r#""Ar""#))], says: &[] },
    Case { name: "softening without value or target", edits: &[("/atom/ionization_energy", None)], says: &[] },
    Case { name: "unknown element", edits: &[("/atom/ionization_energy", None), ("/atom/element", Some(r#""Argon""#))], says: &[] },
    Case { name: "nothing to tune", edits: &[("/atom/potential", Some(r#"{"kind": "poschl_teller", "lambda": 1, "width": "1 bohr"}"#))], says: &[] },
    Case { name: "missing width", edits: &[("/atom/ionization_energy", None), ("/atom/potential", Some(r#"{"kind": "poschl_teller", "lambda": 1}"#))], says: &[] },
    Case { name: "lambda zero", edits: &[("/atom/ionization_energy", None), ("/atom/potential", Some(r#"{"kind": "poschl_teller", "lambda": 0, "width": "1 bohr"}"#))], says: &[] },
    Case { name: "charge as text", edits: &[("/atom/potential/charge", Some(r#""2""#))], says: &[] },
    Case { name: "state number not whole", edits: &[("/atom/state/number", Some(r#"0.5"#))], says: &[] },
    Case { name: "superposition without members", edits: &[("/atom/state", Some(r#"{"kind": "superposition", "terms": []}"#))], says: &[] },
    Case { name: "repeated member", edits: &[("/atom/state", Some(r#"{"kind": "superposition", "terms": [{"number": 0}, {"number": 0}]}"#))], says: &[] },
    Case { name: "weights all zero", edits: &[("/atom/state", Some(r#"{"kind": "superposition", "terms": [{"number": 0, "weight": 0}]}"#))], says: &[] },
    Case { name: "negative weight", edits: &[("/atom/state", Some(r#"{"kind": "superposition", "terms": [{"number": 0, "weight": -1}]}"#))], says: &[] },
    Case { name: "missing file", edits: &[("/field/sampled", Some(r#"{"file": "pulses.csv"}"#))], says: &[] },
    Case { name: "wrong hash", edits: &[("/field/sampled", Some(r#"{"file": "pulse.csv", "sha256": "00"}"#))], says: &[] },
    Case { name: "accuracy out of range", edits: &[("/numerics/accuracy", Some(r#"2"#))], says: &[] },
    Case { name: "unknown scheme", edits: &[("/numerics/scheme", Some(r#""fourthorder""#))], says: &[] },
    Case { name: "null", edits: &[("/numerics/spacing", Some(r#"null"#))], says: &[] },
    Case { name: "number for a truth value", edits: &[("/numerics/common", Some(r#"1"#))], says: &[] },
    Case { name: "negative trailing time", edits: &[("/numerics/trailing_time", Some(r#""-1 fs""#))], says: &[] },
    Case { name: "energy step beyond the axis", edits: &[("/outputs/harmonics/energy_step", Some(r#""1 keV""#))], says: &[] },
    Case { name: "window without length", edits: &[("/outputs/harmonics/window", Some(r#"{"kind": "taper"}"#))], says: &[] },
    Case { name: "electrons", edits: &[("/outputs/photoelectrons", Some(r#"{"max_energy": "100 eV"}"#))], says: &[] },
    Case { name: "models", edits: &[("/models", Some(r#"{"three_step": {}}"#))], says: &[] },
    Case { name: "scan for one point", edits: &[("/scan", Some(r#"[{"parameter": "/field/pulses/0/phase", "from": "0 deg", "to": "90 deg", "points": 2}]"#))], says: &[] },
    Case { name: "several faults", edits: &[("/numerics/accuracy", Some(r#"0"#)), ("/field/pulses/0/phase", Some(r#"90"#)), ("/atom/state/number", Some(r#"-1"#)), ("/colour", Some(r#"true"#))], says: &[] },];

fn edited(edits: &[(&str, Option<&str>)]) -> Value {
    let mut tree: Value = serde_json::from_str(SOUND).expect("the sound configuration");
    for (place, json) in edits {
        match json {
            Some(json) => pointer::put(&mut tree, place, serde_json::from_str(json).expect("JSON of an edit")),
            None => drop(take(&mut tree, place)),
        }
    }
    tree
}

fn take(tree: &mut Value, place: &str) -> Value {
    let (parent, key) = pointer::split(place).expect("a place below the root");
    let object = tree.pointer_mut(parent).and_then(Value::as_object_mut).expect("an object");
    object.shift_remove(&key).expect("a key to take out")
}

fn read_in(folder: &Path, tree: &Value) -> Result<Request, Complaints> {
    read(&tree.to_string(), &[], folder)
}

fn folder() -> tempfile::TempDir {
    let folder = tempfile::tempdir().expect("a temporary folder");
    std::fs::write(folder.path().join("pulse.csv"), PULSE).expect("a table");
    folder
}

/// Pastes what a line of the message offers, using nothing but the line.
fn pasted(tree: &Value, line: &str) -> Option<Value> {
    let mut tree = tree.clone();
    let (place, _) = line.split_once(": ")?;
    let (offer, json) = line.rsplit_once("try ")?;
    let value: Value = serde_json::from_str(json).ok()?;
    let (_, offer) = offer.rsplit_once("; ")?;
    if offer == "as its key " {
        let (parent, _) = pointer::split(place)?;
        let moved = take(&mut tree, place);
        pointer::put(&mut tree, &pointer::join(parent, value.as_str()?), moved);
    } else {
        pointer::put(&mut tree, offer.strip_prefix("at ").map_or(place, str::trim_end), value);
    }
    Some(tree)
}

fn still_there(result: &Result<Request, Complaints>, complaint: &Complaint) -> bool {
    let same = |other: &Complaint| other.place == complaint.place && other.reason == complaint.reason;
    result.as_ref().is_err_and(|complaints| complaints.0.iter().any(same))
}

#[test]
fn the_sound_configuration_is_read() {
    let folder = folder();
    assert!(read(SOUND, &[], folder.path()).is_ok());
}

#[test]
fn every_message_is_as_written_here() {
    let folder = folder();
    for case in CASES {
        let said = read_in(folder.path(), &edited(case.edits)).err().map(|complaints| complaints.to_string());
        assert_eq!(said.as_deref(), Some(case.says.join("\n").as_str()), "{}", case.name);
    }
}

#[test]
fn every_message_holds_place_value_and_what_is_allowed() {
    let folder = folder();
    for case in CASES {
        let tree = edited(case.edits);
        let complaints = read_in(folder.path(), &tree).expect_err(case.name);
        for complaint in complaints.0 {
            let line = complaint.to_string();
            assert!(line.starts_with(&format!("{}: ", complaint.place)), "{line}");
            match tree.pointer(&complaint.place) {
                Some(value) => assert!(line.contains(&value.to_string()), "{line}"),
                None => assert!(line.contains("missing"), "{line}"),
            }
            assert!(!complaint.allowed.is_empty() && line.contains("; allowed: "), "{line}");
        }
    }
}

#[test]
fn what_a_message_offers_removes_it() {
    let folder = folder();
    for case in CASES {
        let tree = edited(case.edits);
        let complaints = read_in(folder.path(), &tree).expect_err(case.name);
        for complaint in &complaints.0 {
            let line = complaint.to_string();
            let repaired = pasted(&tree, &line).unwrap_or_else(|| panic!("nothing to paste in: {line}"));
            let again = read_in(folder.path(), &repaired);
            assert!(!still_there(&again, complaint), "{line}\n{again:?}");
        }
    }
}

/// With one fault and a value to paste, the whole file passes afterwards.
#[test]
fn a_single_fault_repaired_leaves_none() {
    let folder = folder();
    for case in CASES {
        let tree = edited(case.edits);
        let complaints = read_in(folder.path(), &tree).expect_err(case.name);
        if let [only] = complaints.0.as_slice()
            && matches!(only.fix, Fix::Value(_) | Fix::Elsewhere { .. })
            && !only.place.ends_with("/kind")
        {
            let line = only.to_string();
            let repaired = pasted(&tree, &line).unwrap_or_else(|| panic!("nothing to paste in: {line}"));
            let again = read_in(folder.path(), &repaired);
            assert!(again.is_ok(), "{}: {line}\n{}", case.name, again.err().unwrap_or_default());
        }
    }
}
#[test]
fn dump() {
    let folder = folder();
    for case in CASES {
        let said = read_in(folder.path(), &edited(case.edits)).err().map(|complaints| complaints.to_string());
        println!("@@@{}\n{}", case.name, said.unwrap_or_default());
    }
}
