//! The same question gives the same bits, however it is asked.

use std::fs;
use std::process::Stdio;

use serde_json::json;

use crate::fixture::{Place, assert_same_bits, phases};

#[test]
fn a_scan_equals_single_runs_from_what_its_points_keep() {
    let place = Place::new();
    let mut scan = phases("0 deg", "90 deg", 3);
    scan["field"]["sampled"] = json!({ "file": "probe.csv" });
    place.write("scan.json", &scan);
    fs::write(
        place.path("probe.csv"),
        "time [fs],electric_field [V/m]\n-1,0\n-0.5,2e9\n0,0\n0.5,-2e9\n1,0\n",
    )
    .expect("a table");
    place.tdse("run scan.json --out first --jobs 2").with(0);
    fs::rename(place.path("first"), place.path("moved")).expect("moved");
    fs::remove_file(place.path("probe.csv")).expect("removed");
    fs::remove_file(place.path("scan.json")).expect("removed");
    for (index, row) in place.rows("moved").iter().enumerate() {
        let out = format!("single-{index}");
        let path = row.last().expect("a path");
        place.tdse(&format!("run moved/{path} --out {out} --jobs 1")).with(0);
        assert_same_bits(&place.point("moved", index), &place.point(&out, 0));
        assert_same_bits(&place.point("moved", index), &place.path(&out).join("result.h5"));
    }
    place.tdse("run moved/result.h5 --out again --jobs 1").with(0);
    assert_same_bits(&place.path("moved/result.h5"), &place.path("again/result.h5"));
}

#[test]
fn shards_make_what_one_process_makes() {
    let place = Place::new();
    place.write("scan.json", &phases("0 deg", "90 deg", 4));
    place.tdse("run scan.json --out whole").with(0);
    place.tdse("run scan.json --out parts --shard 1/2").with(0).says(&["2 of 4 points are left"]);
    assert!(!place.path("parts/result.h5").exists());
    let partial = place.tdse("gather parts").with(1);
    assert!(partial.data.contains("2 of 4 points"), "{}", partial.data);
    place.tdse("run scan.json --out parts --shard 2/2").with(0);
    assert_eq!(place.counts("parts"), [2, 0, 0, 0]);
    assert_same_bits(&place.path("whole/result.h5"), &place.path("parts/result.h5"));
    fs::remove_file(place.path("parts/result.h5")).expect("removed");
    place.tdse("gather parts").with(0);
    assert_same_bits(&place.path("whole/result.h5"), &place.path("parts/result.h5"));
}

#[test]
fn two_processes_on_one_folder_make_what_one_makes() {
    let place = Place::new();
    place.write("scan.json", &phases("0 deg", "90 deg", 8));
    place.tdse("run scan.json --out whole").with(0);
    let both = [(); 2].map(|()| {
        place.command("run scan.json --out shared --quiet").stdout(Stdio::null()).spawn().expect("started")
    });
    for mut process in both {
        assert_eq!(process.wait().expect("ended").code(), Some(0));
    }
    assert_same_bits(&place.path("whole/result.h5"), &place.path("shared/result.h5"));
}

#[test]
fn a_scan_over_what_is_derived_propagates_once() {
    let place = Place::new();
    let mut scan = phases("0 deg", "0 deg", 1);
    let windows = json!([{ "kind": "none" }, { "kind": "hann" }]);
    scan["scan"] = json!([{ "parameter": "/outputs/harmonics/window", "name": "shape", "values": windows }]);
    place.write("scan.json", &scan);
    place.tdse("run scan.json --out out").with(0);
    assert_eq!(place.counts("out"), [1, 1, 0, 0]);
    for (index, window) in ["none", "hann"].iter().enumerate() {
        scan["scan"] = json!([]);
        scan["outputs"]["harmonics"]["window"] = json!({ "kind": window });
        place.write("single.json", &scan);
        place.tdse(&format!("run single.json --out {window}")).with(0);
        assert_same_bits(&place.point("out", index), &place.point(window, 0));
    }
}

#[test]
#[ignore = "compares the two results that TDSE_ONE and TDSE_OTHER name; for scripts"]
fn two_results() {
    let path = |name| {
        std::path::PathBuf::from(std::env::var_os(name).unwrap_or_else(|| panic!("{name} is not set")))
    };
    assert_same_bits(&path("TDSE_ONE"), &path("TDSE_OTHER"));
}
