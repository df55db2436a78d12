//! Configurations that are sound: what they mean, how they are resolved, and what identifies them.
//!
//! The configurations are invented for these tests.

use std::collections::BTreeMap;
use std::path::Path;

use serde_json::{Value, json};
use tdse_cli::config::identity::identity;
use tdse_cli::config::request::{AtomPotential, Outputs, Softening};
use tdse_cli::config::resolved::{Chosen, resolved, text};
use tdse_cli::config::schema::{self, example, schema};
use tdse_cli::config::structure::{Shape, faults};
use tdse_cli::config::{Files, Request, read};
use tdse_core::choose::PinnedAbsorber;
use tdse_core::field::Envelope;
use tdse_core::grid::Grid;
use tdse_core::potential::Potential;
use tdse_core::problem::{Absorber, Gauge, InitialState, Numerics, Record, Scheme};
use tdse_core::units::{HARTREE_EV, TIME_FS};

const ARGON: &str = r#"{
  "title": "Invented for the tests",
  "note": "two colours",
  "atom": { "potential": { "kind": "soft_coulomb" }, "element": "Ar" },
  "field": {
    "pulses": [
      { "wavelength": "800 nm", "intensity": "1.5e14 W/cm^2", "envelope": { "kind": "sin2", "cycles": 5 } },
      { "photon_energy": "3.1 eV", "peak_field": "5 GV/m", "delay": "0.7 fs", "phase": "90 deg",
        "chirp": "0.01 rad/fs^2", "envelope": { "kind": "gaussian", "fwhm": "4 fs" } }
    ]
  },
  "numerics": { "time_step": "2.5 as", "extent": "301 bohr" },
  "outputs": { "harmonics": {}, "time_frequency": { "window_length": "0.25 fs" }, "populations": { "states": 3 } }
}"#;

fn request(text: &str) -> Request {
    read(text, &[], Path::new("")).unwrap_or_else(|complaints| panic!("{complaints}"))
}

fn assert_close(value: f64, expected: f64) {
    assert!((value - expected).abs() <= 1e-12 * expected.abs(), "{value} against {expected}");
}

#[test]
fn a_configuration_means_what_it_says() {
    let request = request(ARGON);
    assert_eq!(request.title, "Invented for the tests");
    assert_eq!(request.atom.initial, InitialState::Single(0));
    assert_eq!(request.atom.dimensions, 1);
    // First ionization energy of argon: NIST Atomic Spectra Database, 15.7596119(5) eV.
    assert_close(request.atom.potential.target_energy().unwrap_or(0.0), 15.759_611_9 / HARTREE_EV);
    let [first, second] = request.field.pulses.as_slice() else { panic!("two pulses") };
    let period_fs = 800e-9 / 299_792_458.0 * 1e15;
    let Envelope::Sin2 { duration } = first.envelope else { panic!("sin2") };
    assert_close(duration * TIME_FS, 5.0 * period_fs);
    assert_close(second.frequency, 3.1 / HARTREE_EV);
    assert_close(second.phase, std::f64::consts::FRAC_PI_2);
    assert_close(second.centre * TIME_FS, 0.7);
    assert_close(second.chirp / TIME_FS / TIME_FS, 0.01);
    assert_close(request.pins.time_step.unwrap_or(0.0) * TIME_FS, 2.5e-3);
    assert_eq!(request.pins.extent, Some(301.0));
    assert_eq!((request.pins.spacing, request.accuracy), (None, 1e-4));
    assert_eq!(request.record, Record { populations: 3 });
}

#[test]
fn a_softening_given_leaves_nothing_to_tune() {
    let given = ARGON.replace(
        r#""kind": "soft_coulomb" }, "element": "Ar""#,
        r#""kind": "soft_coulomb", "softening": "2 au" }"#,
    );
    let potential = request(&given).atom.potential;
    let softening = Softening::Given(2.0);
    assert_eq!(potential, AtomPotential::Softened { charge: 1.0, screening_length: None, softening });
    assert_eq!(potential.with_softening(7.0), Potential::SoftCoulomb { charge: 1.0, softening: 2.0 });
}

#[test]
fn a_superposition_is_tuned_by_its_lowest_member() {
    let state = r#""element": "Ar", "state": { "kind": "superposition", "terms": [
        { "number": 3, "weight": 0.5, "phase": "1 pi" }, { "number": 1, "weight": 0.5 }] }"#;
    let atom = request(&ARGON.replace(r#""element": "Ar""#, state)).atom;
    assert_eq!(atom.tuned_state(), 1);
    assert_eq!(atom.initial.highest(), 3);
}

fn number(seed: &mut u64) -> f64 {
    // Steele, Lea, Flood, OOPSLA 2014 (SplitMix64).
    *seed = seed.wrapping_add(0x9e37_79b9_7f4a_7c15);
    let mut z = *seed;
    z = (z ^ (z >> 30)).wrapping_mul(0xbf58_476d_1ce4_e5b9);
    z = (z ^ (z >> 27)).wrapping_mul(0x94d0_49bb_1331_11eb);
    ((z ^ (z >> 31)) >> 11) as f64 / (1_u64 << 53) as f64
}

fn some_numerics(seed: &mut u64) -> Numerics {
    Numerics {
        grid: Grid::line(2 * (100.0 + 900.0 * number(seed)) as usize, 0.05 + number(seed)),
        time_step: 0.01 + number(seed),
        scheme: if number(seed) < 0.5 { Scheme::Strang } else { Scheme::FourthOrder },
        gauge: if number(seed) < 0.5 { Gauge::Length } else { Gauge::Velocity },
        absorber: if number(seed) < 0.3 {
            Absorber::None
        } else {
            Absorber::Smooth { width: 60.0 * number(seed) + 0.1 }
        },
        trailing_time: if number(seed) < 0.3 { 0.0 } else { 100.0 * number(seed) },
    }
}

fn filled(outputs: &Outputs, seed: &mut u64) -> Outputs {
    let mut outputs = outputs.clone();
    if let Some(harmonics) = &mut outputs.harmonics {
        harmonics.max_energy.get_or_insert(1.0 + 5.0 * number(seed));
        harmonics.energy_step.get_or_insert(1e-3 + 1e-3 * number(seed));
    }
    if let Some(map) = &mut outputs.time_frequency {
        map.window_length.get_or_insert(1.0 + 20.0 * number(seed));
        map.max_energy.get_or_insert(1.0 + 5.0 * number(seed));
        map.energy_step.get_or_insert(1e-3 + 1e-2 * number(seed));
        map.time_step.get_or_insert(1.0 + number(seed));
    }
    outputs
}

#[test]
fn resolving_again_changes_nothing_and_keeps_every_bit() {
    let request = request(ARGON);
    let seed = &mut 20_261_201;
    for _ in 0..300 {
        let (numerics, outputs, softening) =
            (some_numerics(seed), filled(&request.outputs, seed), 0.5 + number(seed));
        let chosen = Chosen {
            softening: Some(softening),
            numerics: &numerics,
            electron_method: None,
            outputs: &outputs,
        };
        let once = resolved(&request, &chosen);
        let again =
            read(&text(&once), &[], Path::new("")).unwrap_or_else(|complaints| panic!("{complaints}"));

        let chosen =
            Chosen { softening: None, numerics: &numerics, electron_method: None, outputs: &again.outputs };
        assert_eq!(text(&resolved(&again, &chosen)), text(&once));

        assert_eq!(again.field, request.field);
        assert_eq!(again.outputs, outputs);
        let potential = request.atom.potential.with_softening(softening);
        assert_eq!(again.atom.potential.with_softening(f64::NAN), potential);
        let pins = again.pins;
        assert_eq!(pins.spacing, Some(numerics.grid.x.spacing));
        assert_eq!(pins.extent, Some(numerics.grid.x.extent()));
        assert_eq!(pins.time_step, Some(numerics.time_step));
        assert_eq!(pins.trailing_time, Some(numerics.trailing_time));
        assert_eq!((pins.scheme, pins.gauge), (Some(numerics.scheme), Some(numerics.gauge)));
        assert_eq!(pins.absorber, Some(PinnedAbsorber::from(numerics.absorber)));
    }
}

fn resolved_argon(from: &str) -> Value {
    let request = request(from);
    let numerics = some_numerics(&mut 7);
    let outputs = filled(&request.outputs, &mut 8);
    resolved(
        &request,
        &Chosen { softening: Some(1.25), numerics: &numerics, electron_method: None, outputs: &outputs },
    )
}

#[test]
fn what_the_user_wrote_stays_in_the_users_words() {
    let tree = resolved_argon(ARGON);
    assert_eq!(tree["field"]["pulses"][0]["intensity"], "1.5e14 W/cm^2");
    assert_eq!(tree["field"]["pulses"][0]["phase"], "0 deg");
    assert_eq!(tree["note"], "two colours");
    assert_eq!(
        tree["atom"],
        json!({
            "dimensions": 1,
            "potential": { "kind": "soft_coulomb", "charge": 1, "softening": "1.25 au" },
            "state": { "kind": "single", "number": 0 },
        })
    );
}

#[test]
fn identity_sees_what_decides_bits_and_nothing_else() {
    let identity_of = |text: &str| identity(&resolved_argon(text), Record { populations: 3 }, 1);
    let own = identity_of(ARGON);
    assert_eq!(own.len(), 16);
    for (old, new) in [
        ("Invented for the tests", "Another title"),
        ("\"element\": \"Ar\"", "\"note\": \"x\", \"element\": \"Ar\""),
        ("\"harmonics\": {}", "\"harmonics\": { \"window\": { \"kind\": \"hann\" } }"),
        ("\"numerics\": {", "\"numerics\": { \"accuracy\": 1e-5,"),
        ("\"harmonics\": {}", "\"harmonics\": { \"max_energy\": \"80 eV\" }"),
    ] {
        assert_eq!(identity_of(&ARGON.replace(old, new)), own, "{new}");
    }
    for (old, new) in [("90 deg", "91 deg"), ("\"cycles\": 5", "\"cycles\": 6"), ("1.5e14", "1.6e14")] {
        assert_ne!(identity_of(&ARGON.replace(old, new)), own, "{new}");
    }
    assert_ne!(identity(&resolved_argon(ARGON), Record { populations: 4 }, 1), own);
    assert_ne!(identity(&resolved_argon(ARGON), Record { populations: 3 }, 2), own);
}

/// SHA-256 of the canonical text made by hand from RFC 8785: sorted keys, no space, shortest numbers.
#[test]
fn identity_is_the_hash_of_canonical_json() {
    use sha2::{Digest, Sha256};
    let resolved = json!({ "numerics": { "time_step": "1 au" }, "field": { "b": 1.0, "a": "x" }, "atom": { "charge": 1e21 } });
    let canonical = r#"{"atom":{"charge":1e+21},"field":{"a":"x","b":1},"numerics":{"time_step":"1 au"},"numerics_version":1,"record":{"populations":0}}"#;
    let hash = format!("{:x}", Sha256::digest(canonical));
    assert_eq!(identity(&resolved, Record::default(), 1), hash[..16]);
}

const PULSE: &str = "# measured nowhere\ntime [fs],electric_field [GV/m]\n-2,0\n-1,0.5\n\n1,-0.5\n2,0\n";

fn with_table(file: &str) -> String {
    let mut tree: Value = serde_json::from_str(ARGON).unwrap_or_default();
    tree["field"] = json!({ "sampled": { "file": file } });
    tree.to_string()
}

#[test]
fn a_table_travels_with_the_result() {
    let folder = tempfile::tempdir().expect("a temporary folder");
    std::fs::write(folder.path().join("pulse.csv"), PULSE).expect("a table");
    let request = read(&with_table("pulse.csv"), &[], folder.path()).unwrap_or_else(|c| panic!("{c}"));
    let [input] = request.inputs.as_slice() else { panic!("one table") };
    assert_eq!((&*input.contents, input.user.as_str()), (PULSE, "/field/sampled"));
    let (numerics, outputs) = (some_numerics(&mut 7), filled(&request.outputs, &mut 8));
    let chosen =
        Chosen { softening: Some(1.25), numerics: &numerics, electron_method: None, outputs: &outputs };
    let once = resolved(&request, &chosen);
    assert_eq!(once["field"]["sampled"]["file"], format!("inputs/{}", input.name));
    assert_eq!(once["field"]["sampled"]["sha256"], input.sha256);

    let stored = Files::Stored(BTreeMap::from([(input.name.clone(), input.contents.to_string())]));
    let again = read(&text(&once), &[], stored).unwrap_or_else(|c| panic!("{c}"));
    assert_eq!(again.field, request.field);
    assert_eq!(again.inputs, request.inputs);
    let same = Chosen { softening: None, ..chosen };
    assert_eq!(resolved(&again, &same), once);

    let mut moved = once.clone();
    moved["field"]["sampled"]["file"] = json!("elsewhere.csv");
    assert_eq!(identity(&moved, request.record, 1), identity(&once, request.record, 1));
}

#[test]
fn a_fault_of_a_table_is_found_by_file_line_and_value() {
    let folder = tempfile::tempdir().expect("a temporary folder");
    let cases = [
        (
            "time [fs],electric_field [V]\n",
            "has a fault in line 1: \"electric_field [V]\" is not electric_field and its unit",
        ),
        ("time,electric_field [V/m]\n", "has a fault in line 1: \"time\" is not time and its unit"),
        ("# only\n", "has a fault in line 1: is the end"),
        ("time [fs],electric_field [V/m]\n0,1\n1,x\n", "has a fault in line 3: \"x\" is not a number"),
        ("time [fs],electric_field [V/m]\n0,1\n1,nan\n", "has a fault in line 3: \"nan\" is not a number"),
        ("time [fs],electric_field [V/m]\n# c\n0,1\n0,2\n", "has a fault in line 4: \"0\" does not rise"),
        ("time [fs],electric_field [V/m]\n0,1\n# c\n\n0,2\n", "has a fault in line 5: \"0\" does not rise"),
        ("time [fs],electric_field [V/m]\r\n0,1\r\n1,\r\n", "has a fault in line 3: \"\" is not a number"),
        (
            "\u{feff}time [fs],electric_field [V/m]\n0,1\n1,?\n",
            "has a fault in line 3: \"?\" is not a number",
        ),
        ("time [fs],electric_field [V/m]\n0,1,2\n", "has a fault in line 2: \"0\" has 3 columns"),
        ("time [fs],electric_field [V/m]\n0,1\n1,2\n2,3\n", "has a fault in line 4: is the end"),
    ];
    for (contents, reason) in cases {
        std::fs::write(folder.path().join("pulse.csv"), contents).expect("a table");
        let complaints = read(&with_table("pulse.csv"), &[], folder.path()).expect_err(contents);
        let said: Vec<_> = complaints.0.iter().map(|c| (c.place.as_str(), c.reason.as_str())).collect();
        assert_eq!(said, [("/field/sampled/file", reason)], "{contents}");
        assert_eq!(complaints.0[0].written.as_deref(), Some("\"pulse.csv\""));
    }
}

/// In two dimensions positions are distances from the centre, which belongs to the table.
#[test]
fn a_table_on_a_plane_begins_at_the_centre() {
    let folder = tempfile::tempdir().expect("a temporary folder");
    let said = |first: f64| {
        let table = format!("position [bohr],potential [eV]\n{first},-30\n1,-9\n2,-3\n90,0\n");
        std::fs::write(folder.path().join("well.csv"), table).expect("a table");
        let mut tree: Value = serde_json::from_str(ARGON).expect("an example");
        tree["atom"] = json!({ "dimensions": 2, "potential": { "kind": "sampled", "file": "well.csv" } });
        read(&text(&tree), &[], folder.path()).err().map(|complaints| complaints.to_string())
    };
    let allowed =
        "in two dimensions its positions are distances from the centre; allowed: a table from 0 bohr on";
    let complaint = |first: &str, fix: &str| {
        Some(format!("/atom/potential/file: \"well.csv\" begins at {first} bohr; {allowed}; {fix}"))
    };
    assert_eq!(said(0.0), None);
    assert_eq!(said(0.05), complaint("0.05", "begin the table with a row at 0 bohr"));
    assert_eq!(said(-0.5), complaint("-0.5", "at /atom/dimensions try 1"));
}

/// A table has one component, or on a plane both.
#[test]
fn tables_are_told_every_width_they_may_have() {
    let folder = tempfile::tempdir().expect("a temporary folder");
    let table = "time [fs],electric_field_x [V/m],electric_field_y [V/m],electric_field_z [V/m]\n0,1,2,3\n";
    std::fs::write(folder.path().join("pulse.csv"), table).expect("a table");
    let complaints = read(&with_table("pulse.csv"), &[], folder.path()).expect_err("four columns");
    let said: Vec<_> = complaints.0.iter().map(|c| (c.reason.as_str(), c.allowed.as_str())).collect();
    let reason = "has a fault in line 1: \"time [fs]\" has 4 columns";
    assert_eq!(said, [(reason, "two columns, or in two dimensions three, parted by a comma")]);
}

#[test]
fn overrides_are_applied_in_order_and_may_add_known_keys() {
    let sets = [
        "/field/pulses/0/phase=45 deg",
        "/field/pulses/0/phase=90 deg",
        "/numerics/common=true",
        "/outputs/harmonics/window/kind=hann",
        "/title=a=b",
        "/atom/state={\"kind\": \"single\", \"number\": 2}",
    ];
    let request = read(ARGON, &sets.map(String::from), Path::new("")).unwrap_or_else(|c| panic!("{c}"));
    assert_close(request.field.pulses[0].phase, std::f64::consts::FRAC_PI_2);
    assert_eq!((request.title.as_str(), request.atom.initial), ("a=b", InitialState::Single(2)));
    let window = request.outputs.harmonics.map(|harmonics| harmonics.window);
    assert_eq!(window, Some(tdse_core::spectrum::Window::Hann));
}

#[test]
fn an_override_may_reach_into_a_default() {
    let sets = ["/atom/state/number=1".to_owned()];
    let request = read(ARGON, &sets, Path::new("")).unwrap_or_else(|c| panic!("{c}"));
    assert_eq!(request.atom.initial, InitialState::Single(1));
}

#[test]
fn overrides_that_lead_nowhere_are_refused() {
    let said =
        |set: &str| read(ARGON, &[set.into()], Path::new("")).err().map(|complaints| complaints.to_string());
    let nowhere = "has a pointer that leads nowhere; allowed: a JSON Pointer (RFC 6901) to a key of the schema or an \
                   existing list element; as its pointer try";
    assert_eq!(
        said("/field/pulse/0/phase=90 deg"),
        Some(format!("--set /field/pulse/0/phase: \"90 deg\" {nowhere} \"/field/pulses/0/phase\""))
    );
    assert_eq!(
        said("/field/pulses/2={}"),
        Some(format!("--set /field/pulses/2: {{}} {nowhere} \"/field/pulses/0\""))
    );
    assert_eq!(said("numerics=1"), Some(format!("--set numerics: 1 {nowhere} \"/numerics\"")));
    assert_eq!(
        said("/title"),
        Some("--set: \"/title\" has no \"=\"; allowed: POINTER=VALUE; write --set '/field/pulses/0/phase=90 deg'".into())
    );
}

/// Every example and default of the schema passes where it stands, so that what a message offers passes too.
#[test]
fn every_example_of_the_schema_passes() {
    fn visit(place: &Value, path: &str, count: &mut usize) {
        *count += 1;
        assert_eq!(faults(place, &example(place), path), [], "{path}");
        if let Some(default) = place.get("default") {
            assert_eq!(faults(place, default, path), [], "{path}");
        }
        match Shape::of(place) {
            Shape::Tagged(variants) => variants.iter().for_each(|variant| visit(variant, path, count)),
            Shape::Object(properties) => {
                for (key, child) in properties {
                    assert!(
                        child["description"].is_string() || key == "kind",
                        "{path}/{key} is not described"
                    );
                    visit(child, &format!("{path}/{key}"), count);
                }
            }
            Shape::List if place["items"].is_object() => visit(&place["items"], &format!("{path}/0"), count),
            _ => {}
        }
    }
    let mut count = 0;
    visit(schema(), "", &mut count);
    assert!(count > 100, "only {count} places");
}

#[test]
fn the_published_schema_names_its_draft_and_every_unit() {
    let published = schema::text();
    assert!(published.contains("https://json-schema.org/draft/2020-12/schema"), "{published}");
    for quantity in tdse_cli::config::quantity::QUANTITIES {
        for unit in quantity.units() {
            assert!(published.contains(&format!("\"{}\"", unit.symbol)), "{}", unit.symbol);
        }
    }
}

/// Whatever one value is replaced by, reading ends in a request or in complaints, and the structure check leaves
/// nothing for the types to refuse.
#[test]
fn no_replacement_gets_past_the_structure_check_into_the_types() {
    let wrong = [
        json!(null),
        json!(true),
        json!(-1),
        json!(1e300),
        json!(4_294_967_296_u64),
        json!("x"),
        json!("1 nm"),
        json!([]),
        json!([null]),
        json!({}),
        json!({ "kind": "none" }),
        json!({ "note": 1 }),
    ];
    let tree: Value = serde_json::from_str(ARGON).unwrap_or_default();
    let mut read_count = 0;
    for place in schema::places(&tree) {
        for value in &wrong {
            let mut changed = tree.clone();
            tdse_cli::config::pointer::put(&mut changed, &place, value.clone());
            match read(&changed.to_string(), &[], Path::new("")) {
                Ok(_) => read_count += 1,
                Err(complaints) => {
                    assert!(complaints.0.iter().all(|c| !c.place.is_empty()), "{place}: {complaints}");
                }
            }
        }
    }
    assert!(read_count > 0, "nothing passes at all");
}
