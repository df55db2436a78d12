//! A folder grows: what is there is kept, what is derived is derived anew, what is missing is computed.

use std::fs;

use serde_json::json;

use crate::fixture::{Place, assert_same_bits, phases};

#[test]
fn the_same_command_twice_computes_once() {
    let place = Place::new();
    place.write("scan.json", &phases("0 deg", "90 deg", 3));
    place.tdse("run scan.json --out out").with(0);
    assert_eq!(place.counts("out"), [3, 0, 0, 0]);
    place.tdse("run scan.json --out out").with(0).says(&["3 of 3 points are there already"]);
    assert_eq!(place.counts("out"), [0, 0, 3, 0]);
}

#[test]
fn a_longer_and_denser_scan_computes_new_points_only() {
    let place = Place::new();
    place.write("scan.json", &phases("0 deg", "90 deg", 3));
    place.tdse("run scan.json --out out").with(0);
    place.write("scan.json", &phases("180 deg", "0 deg", 5));
    place.tdse("run scan.json --out out").with(0).says(&["changed scan", "request-1.json"]);
    assert_eq!(place.counts("out"), [2, 0, 3, 0], "longer, and descending");
    place.write("scan.json", &phases("0 deg", "180 deg", 9));
    place.tdse("run scan.json --out out").with(0).says(&["request-2.json"]);
    assert_eq!(place.counts("out"), [4, 0, 5, 0], "denser");
    place.tdse("run scan.json --out fresh --jobs 1").with(0);
    assert_same_bits(&place.path("out/result.h5"), &place.path("fresh/result.h5"));
    assert!(place.path("out/request-1.json").is_file() && !place.path("out/request-3.json").exists());
}

#[test]
fn other_outputs_are_derived_without_propagating() {
    let place = Place::new();
    let mut scan = phases("0 deg", "90 deg", 3);
    place.write("scan.json", &scan);
    place.tdse("run scan.json --out out").with(0);
    for (step, harmonics) in [
        json!({ "max_energy": "40 eV", "energy_step": "0.5 eV", "window": { "kind": "hann" } }),
        json!({ "max_energy": "30 eV", "energy_step": "0.25 eV" }),
    ]
    .into_iter()
    .enumerate()
    {
        scan["outputs"]["harmonics"] = harmonics;
        place.write("scan.json", &scan);
        place.tdse("run scan.json --out out").with(0).says(&["changed outputs"]);
        assert_eq!(place.counts("out"), [0, 3, 0, 0]);
        let fresh = format!("fresh-{step}");
        place.tdse(&format!("run scan.json --out {fresh}")).with(0);
        assert_eq!(place.counts(&fresh), [3, 0, 0, 0]);
        assert_same_bits(&place.path("out/result.h5"), &place.path(&fresh).join("result.h5"));
    }
}

#[test]
fn an_output_that_is_dropped_leaves_nothing_behind() {
    let place = Place::new();
    let mut single = phases("0 deg", "0 deg", 1);
    single["scan"] = json!([]);
    place.write("with.json", &single);
    single["outputs"] = json!({ "populations": { "states": 2 } });
    place.write("without.json", &single);
    place.tdse("run with.json --out out").with(0);
    place.tdse("run without.json --out out").with(0);
    assert_eq!(place.counts("out"), [0, 1, 0, 0]);
    place.tdse("run without.json --out fresh").with(0);
    assert_same_bits(&place.path("out/result.h5"), &place.path("fresh/result.h5"));
}

#[test]
fn another_request_is_refused_with_both_values() {
    let place = Place::new();
    place.write("scan.json", &phases("0 deg", "90 deg", 2));
    place.tdse("run scan.json --out out").with(0);
    let before = fs::read(place.path("out/request.json")).expect("a request");
    let mut command = place.command("run scan.json --out out --set");
    let output = command.arg("/field/pulses/0/intensity=2e14 W/cm^2").output().expect("the program starts");
    let refused = crate::fixture::Ended::from(output).with(2);
    refused.says(&["/field/pulses/0/intensity: \"1e14 W/cm^2\" before, \"2e14 W/cm^2\" now"]);
    assert_eq!(fs::read(place.path("out/request.json")).expect("a request"), before);
    let mut titled = phases("0 deg", "90 deg", 2);
    titled["title"] = json!("Another title");
    titled["atom"]["note"] = json!("A note");
    place.write("scan.json", &titled);
    place.tdse("run scan.json --out out").with(0).says(&["changed title"]);
    assert_eq!(place.counts("out"), [0, 0, 2, 0]);
}

#[test]
fn a_table_with_other_contents_is_another_request() {
    let place = Place::new();
    let mut single = phases("0 deg", "0 deg", 1);
    single["scan"] = json!([]);
    single["field"]["sampled"] = json!({ "file": "probe.csv" });
    place.write("single.json", &single);
    let table = "time [fs],electric_field [V/m]\n-1,0\n-0.5,2e9\n0,0\n0.5,-2e9\n1,0\n";
    fs::write(place.path("probe.csv"), table).expect("a table");
    place.tdse("run single.json --out out").with(0);
    fs::write(place.path("probe.csv"), table.replace("2e9", "3e9")).expect("a table");
    place.tdse("run single.json --out out").with(2).says(&["/field/sampled/file", "inputs/probe-"]);
}
