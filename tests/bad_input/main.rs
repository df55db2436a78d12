//! Wrong configurations: every message holds the place, the value as written, what is allowed, and a way out that works.
//!
//! The configurations are invented for these tests.

mod cases;
mod physics;
mod scans;

use std::path::Path;

use serde_json::Value;
use tdse_cli::config::{Complaint, Complaints, Fix, Request, pointer, read};
use tdse_cli::scan::points::read_scan;

use cases::CASES;
use scans::SCANS;

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

const CROSSED: &str =
    "time [fs],electric_field_x [GV/m],electric_field_y [GV/m]\n0,0,0\n1,0.5,0\n2,-0.5,0.5\n3,0,0\n";

/// A well on both sides, and the same over the distance from the centre.
const SIDES: &str = "position [bohr],potential [eV]\n-500,0\n-20,0\n-2,-5\n0,-30\n2,-5\n20,0\n500,0\n";
const ROUND: &str =
    "position [bohr],potential [eV]\n0,-30\n1,-20\n2,-8\n3,-2\n4,-0.3\n6,0\n8,0\n10,0\n20,0\n60,0\n";

fn edited(edits: &[(&str, Option<&str>)]) -> Value {
    let mut tree: Value = serde_json::from_str(SOUND).expect("the sound configuration");
    for (place, json) in edits {
        match json {
            Some(json) => {
                pointer::put(&mut tree, place, serde_json::from_str(json).expect("JSON of an edit"));
            }
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
    for (name, table) in
        [("pulse.csv", PULSE), ("crossed.csv", CROSSED), ("sides.csv", SIDES), ("round.csv", ROUND)]
    {
        std::fs::write(folder.path().join(name), table).expect("a table");
    }
    folder
}

/// Pastes what a line of the message offers, using nothing but the line.
fn pasted(tree: &Value, line: &str) -> Option<Value> {
    let mut tree = tree.clone();
    let (place, _) = line.split_once(": ")?;
    if line.ends_with("; leave it out") {
        take(&mut tree, place);
        return Some(tree);
    }
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
                Some(value) => {
                    let written = &line.as_bytes()[complaint.place.len() + 2..];
                    let first = serde_json::Deserializer::from_slice(written).into_iter::<Value>().next();
                    assert_eq!(first.and_then(Result::ok).as_ref(), Some(value), "{line}");
                }
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

fn is_reserved(name: &str) -> bool {
    name == "time"
}

fn scanned(axes: &str) -> String {
    let mut tree = edited(&[]);
    pointer::put(&mut tree, "/scan", serde_json::from_str(axes).expect("JSON of axes"));
    tree.to_string()
}

fn said_of_scan(text: &str) -> Option<String> {
    read_scan(text, &[], folder().path(), is_reserved).err().map(|complaints| complaints.to_string())
}

#[test]
fn every_message_about_a_scan_is_as_written_here() {
    for case in SCANS {
        let said = said_of_scan(&scanned(case.axes));
        assert_eq!(said.as_deref(), Some(case.says.join("\n").as_str()), "{}", case.name);
    }
}

#[test]
fn what_a_message_about_a_scan_offers_removes_it() {
    for case in SCANS {
        let text = scanned(case.axes);
        let tree: Value = serde_json::from_str(&text).expect("the scan itself");
        for line in said_of_scan(&text).expect(case.name).lines().filter(|line| line.contains("; try ")) {
            if line.starts_with("/scan") {
                let repaired = pasted(&tree, line).unwrap_or_else(|| panic!("nothing to paste in: {line}"));
                let again = said_of_scan(&repaired.to_string()).unwrap_or_default();
                assert!(!again.lines().any(|other| other == line), "{line}\n{again}");
            }
        }
    }
}
