//! What only physics can refuse, and that the program refuses all of it before it touches the disk.

use std::path::Path;
use std::process::Command;

use serde_json::Value;
use tdse_cli::config::Files;
use tdse_cli::scan::prepare::{Prepared, prepare};
use tdse_cli::scan::source::Source;

use super::cases::CASES;
use super::{edited, folder, pasted};

type Edits = &'static [(&'static str, Option<&'static str>)];

/// Name, edits of the sound configuration, and what the message must hold.
const PHYSICS: &[(&str, Edits, &[&str])] = &[
    (
        "state that does not exist",
        &[
            ("/atom/potential", Some(r#"{ "kind": "poschl_teller", "lambda": 2, "width": "1 bohr" }"#)),
            ("/atom/ionization_energy", None),
            ("/atom/state/number", Some("2")),
        ],
        &[
            "/atom/state/number: 2 does not exist: this potential binds 2 state(s)",
            "allowed: 0 to 1",
            "try 1",
        ],
    ),
    (
        "member of a superposition that does not exist",
        &[
            ("/atom/potential", Some(r#"{ "kind": "poschl_teller", "lambda": 2, "width": "1 bohr" }"#)),
            ("/atom/ionization_energy", None),
            (
                "/atom/state",
                Some(
                    r#"{ "kind": "superposition", "terms": [ { "number": 0, "weight": 1 }, { "number": 7, "weight": 1 } ] }"#,
                ),
            ),
        ],
        &["/atom/state/terms/1/number: 7 does not exist", "allowed: 0 to 1", "try 1"],
    ),
    (
        "more populations than states",
        &[
            ("/atom/potential", Some(r#"{ "kind": "gaussian_well", "depth": "0.5 au", "width": "1 bohr" }"#)),
            ("/atom/ionization_energy", None),
            ("/outputs/populations", Some(r#"{ "states": 9 }"#)),
        ],
        &["/outputs/populations/states: 9 asks for states that do not exist", "allowed: 1 to 1", "try 1"],
    ),
    (
        "step above the resonance",
        &[("/numerics/time_step", Some(r#""0.5 au""#)), ("/numerics/spacing", Some(r#""0.3 bohr""#))],
        &[
            "/numerics/time_step: \"0.5 au\" is above the splitting's resonance at",
            "allowed: below",
            "try \"0.08 au\"",
        ],
    ),
    (
        "box too small",
        &[("/numerics/extent", Some(r#""160 bohr""#))],
        &[
            "/numerics/extent: \"160 bohr\" leaves",
            "where electrons need",
            "allowed: at least",
            "try \"300 bohr\"",
        ],
    ),
    (
        "absorbers that overlap",
        &[
            ("/numerics/extent", Some(r#""85 bohr""#)),
            ("/numerics/absorber", Some(r#"{ "kind": "smooth", "width": "60 bohr" }"#)),
        ],
        &[
            "/numerics/extent: \"85 bohr\" leaves no room between two absorbers of 60 bohr each",
            "try \"300 bohr\"",
        ],
    ),
    (
        "spacing too coarse",
        &[("/numerics/spacing", Some(r#""1 bohr""#))],
        &[
            "/numerics/spacing: \"1 bohr\" holds momenta up to 3.14 / bohr where",
            "allowed: at most",
            "try \"0.25 bohr\"",
        ],
    ),
    (
        "absorber too thin",
        &[("/numerics/absorber", Some(r#"{ "kind": "smooth", "width": "5 bohr" }"#))],
        &[
            "/numerics/absorber/width: \"5 bohr\" reflects",
            "the slowest that come back within the run",
            "allowed: at least",
            "try \"60 bohr\"",
        ],
    ),
    (
        "spacing too coarse for the electrons",
        &[
            ("/outputs/photoelectrons", Some(r#"{ "max_energy": "5 keV" }"#)),
            ("/numerics/spacing", Some(r#""0.4 bohr""#)),
        ],
        &[
            "/numerics/spacing: \"0.4 bohr\" holds momenta up to 7.85 / bohr where the fastest electrons of the \
             spectrum have 19.17 / bohr",
            "allowed: at most 0.1639 bohr, or a lower max_energy",
            "try \"0.15 bohr\"",
        ],
    ),
    (
        "a table along the radius that ends before the corners",
        &[
            ("/atom/dimensions", Some("2")),
            ("/atom/ionization_energy", None),
            ("/atom/potential", Some(r#"{"kind": "sampled", "file": "round.csv"}"#)),
            ("/numerics/extent", Some(r#""300 bohr""#)),
        ],
        &[
            "/numerics/extent: \"300 bohr\" reaches from 0 to 217.2 bohr in its corners; the potential's table, along the radius, \
             from 0 to 60 bohr",
            "allowed: a box within the table, or a table from 0 to at least 217.2 bohr",
            "try \"60 bohr\"",
        ],
    ),
    (
        "ionization energy out of reach",
        &[("/atom/ionization_energy", Some(r#""30 eV""#)), ("/atom/state/number", Some("1"))],
        &["/atom/ionization_energy: \"30 eV\" is out of reach of state 1", "allowed: 0.", "try \""],
    ),
];

fn prepared(folder: &Path, tree: &Value) -> Result<Prepared, String> {
    let source = Source { text: tree.to_string(), files: Files::Folder(folder.into()) };
    prepare(&source, &[]).map_err(|complaints| complaints.to_string())
}

#[test]
fn physics_is_refused_with_a_way_out_that_works() {
    let folder = folder();
    for (name, edits, parts) in PHYSICS {
        let tree = edited(edits);
        let said = prepared(folder.path(), &tree).expect_err(name);
        println!("{said}");
        for part in *parts {
            assert!(said.contains(part), "{name}: no {part:?} in {said}");
        }
        let line = said.lines().next().unwrap();
        if line.contains("; try ") {
            let repaired =
                pasted(&tree, line).unwrap_or_else(|| panic!("{name}: nothing to paste in: {line}"));
            if let Err(again) = prepared(folder.path(), &repaired) {
                assert!(!again.contains(line.split("; allowed").next().unwrap()), "{name}: {again}");
            }
        }
    }
}

/// Doubtful or inadequate numerics run where the file says so, and the result carries the doubt.
#[test]
fn inadequate_numerics_run_on_request() {
    let folder = folder();
    let edits = [("/numerics/spacing", Some(r#""1 bohr""#)), ("/numerics/allow_inadequate", Some("true"))];
    let ready = prepared(folder.path(), &edited(&edits)).unwrap();
    assert!(ready.points[0].doubts[0].contains("holds momenta up to"), "{:?}", ready.points[0].doubts);
}

#[test]
fn the_program_refuses_every_one_and_writes_nothing() {
    let folder = folder();
    let physics = PHYSICS.iter().map(|(name, edits, _)| (*name, *edits));
    // A scan is wrong only where one point is read; the program runs scans.
    let cases = CASES.iter().filter(|case| case.name != "scan for one point");
    let all: Vec<_> = cases.map(|case| (case.name, case.edits)).chain(physics).collect();
    assert!(all.len() >= 25, "{} wrong configurations", all.len());
    for (name, edits) in all {
        let config = folder.path().join("wrong.json");
        std::fs::write(&config, edited(edits).to_string()).unwrap();
        let out = folder.path().join("out");
        let run = |command: &[&str]| {
            let mut program = Command::new(env!("CARGO_BIN_EXE_tdse"));
            program.arg(command[0]).arg(&config).args(&command[1..]).output().unwrap()
        };
        let refused = run(&["run", "--out", out.to_str().unwrap()]);
        assert_eq!(refused.status.code(), Some(2), "{name}: {refused:?}");
        assert!(!out.exists(), "{name}: something was written");
        let checked = run(&["check"]);
        assert_eq!(checked.status.code(), Some(2), "{name}: check says otherwise: {checked:?}");
        assert_eq!(checked.stderr, refused.stderr, "{name}");
        assert!(refused.stdout.is_empty() && !refused.stderr.is_empty(), "{name}");
    }
}
