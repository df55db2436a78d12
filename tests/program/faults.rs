//! What goes wrong is refused before anything ran, or recorded while the rest goes on.

use std::fs;
use std::os::unix::fs::PermissionsExt;

use serde_json::{Value, json};
use tdse_cli::store::{Values, read};

use crate::fixture::{Place, assert_same_bits, files, phases};

#[test]
fn a_wrong_configuration_leaves_nothing_behind() {
    let place = Place::new();
    let mut wrong = phases("0 deg", "90 deg", 3);
    wrong["atom"]["potential"]["kind"] = json!("soft_cuolomb");
    place.write("wrong.json", &wrong);
    place.tdse("run wrong.json --out out").with(2).says(&["/atom/potential", "soft_cuolomb"]);
    place.tdse("check wrong.json").with(2).says(&["/atom/potential"]);
    place.tdse("run absent.json --out out").with(2).says(&["absent.json"]);
    // Points are judged before the first starts: the last of three is wrong.
    let mut middle = phases("0 deg", "90 deg", 3);
    middle["scan"][0] = json!({ "parameter": "/field/pulses/0/envelope/cycles", "values": [2, 3, -1] });
    place.write("middle.json", &middle);
    place.tdse("run middle.json --out out").with(2).says(&["-1"]);
    assert!(!place.path("out").exists());
}

#[test]
fn a_foreign_folder_is_left_alone() {
    let place = Place::new();
    place.write("scan.json", &phases("0 deg", "90 deg", 2));
    fs::create_dir(place.path("photos")).expect("a folder");
    fs::write(place.path("photos/cat.png"), "meow").expect("a file");
    place.tdse("run scan.json --out photos").with(2).says(&["photos", "request.json"]);
    assert_eq!(files(&place.path("photos")), [place.path("photos/cat.png")]);
    for command in ["status photos", "gather photos"] {
        place.tdse(command).with(2).says(&["photos", "request.json"]);
    }
    fs::create_dir(place.path("empty")).expect("a folder");
    place.tdse("run scan.json --out empty").with(0);
}

#[test]
fn a_newer_folder_is_left_alone() {
    let place = Place::new();
    place.write("scan.json", &phases("0 deg", "90 deg", 2));
    place.tdse("run scan.json --out out").with(0);
    let path = place.path("out/request.json");
    let text = fs::read_to_string(&path).expect("a request");
    fs::write(&path, text.replace("\"layout_version\": 1", "\"layout_version\": 2")).expect("written");
    for command in ["run scan.json --out out", "status out", "gather out"] {
        place.tdse(command).with(2).says(&["layout version 2", "up to 1"]);
    }
}

#[test]
fn a_folder_that_cannot_be_written_is_refused() {
    let place = Place::new();
    place.write("scan.json", &phases("0 deg", "90 deg", 2));
    fs::create_dir(place.path("locked")).expect("a folder");
    fs::set_permissions(place.path("locked"), fs::Permissions::from_mode(0o555)).expect("locked");
    // The administrator may write everywhere but into the kernel's own folders.
    let locked = fs::write(place.path("locked/probe"), "").is_err();
    let out = if locked { "locked/out" } else { "/proc/out" };
    place.tdse(&format!("run scan.json --out {out}")).with(2).says(&["cannot make the folder", out]);
    fs::write(place.path("file"), "").expect("a file");
    place.tdse("run scan.json --out file").with(2).says(&["file"]);
}

/// The third field is so strong that the fourth-order step, pinned far too long, cannot hold it.
fn failing() -> Value {
    let mut scan = phases("0 deg", "0 deg", 1);
    scan["numerics"] =
        json!({ "allow_inadequate": true, "time_step": "2 au", "spacing": "0.5 bohr", "extent": "200 bohr" });
    let values = ["1e13 W/cm^2", "1e14 W/cm^2", "9e17 W/cm^2"];
    scan["scan"][0] = json!({ "parameter": "/field/pulses/0/intensity", "name": "peak", "values": values });
    scan
}

#[test]
fn a_point_that_fails_is_recorded_and_the_others_go_on() {
    let place = Place::new();
    place.write("scan.json", &failing());
    let reason = "time step 2 a.u. is too long";
    let ended = place.tdse("run scan.json --out out").with(1);
    ended.says(&["9e17 W/cm^2", reason]);
    assert_eq!(place.counts("out"), [2, 0, 0, 1]);
    let record = files(&place.path("out/failed"));
    let text = fs::read_to_string(&record[0]).expect("a record");
    assert_eq!(record.len(), 1);
    assert!(text.contains(reason) && text.contains("9e17 W/cm^2"), "{text}");
    let status = place.tdse("status out").with(0).data;
    for words in ["doubtful  2", "failed    1", "missing   0", reason] {
        assert!(status.contains(words), "no {words} in\n{status}");
    }
    let result = read(&place.path("out/result.h5")).expect("a result");
    let numbers = result.real("summary", "final_norm").expect("numbers");
    assert!(numbers[0].is_finite() && numbers[1].is_finite() && numbers[2].is_nan(), "{numbers}");
    let Some(Values::Integer(flags)) = result.get("summary", "status") else { panic!("a status") };
    assert_eq!(flags.iter().copied().collect::<Vec<_>>(), [1, 1, 2]);
    // A failure is not tried again unless asked.
    place.tdse("run scan.json --out out").with(1).says(&["--retry"]);
    assert_eq!(place.counts("out"), [0, 0, 2, 0]);
    place.tdse("run scan.json --out out --retry").with(1);
    assert_eq!(place.counts("out"), [0, 0, 2, 1]);
}

#[test]
fn files_that_cannot_be_used_are_named_and_made_again() {
    let place = Place::new();
    place.write("scan.json", &phases("0 deg", "90 deg", 4));
    place.tdse("run scan.json --out whole").with(0);
    place.tdse("run scan.json --out out").with(0);
    let [cut, text, other] = [0, 1, 2].map(|index| place.point("out", index));
    let bytes = fs::read(&cut).expect("a point");
    fs::write(&cut, &bytes[..bytes.len() / 2]).expect("cut");
    fs::write(&text, "no result").expect("written");
    fs::copy(place.point("out", 3), &other).expect("copied");
    fs::write(place.path("out/points/half.h5.host-1.partial"), "left by a kill").expect("written");
    let status = place.tdse("status out").with(0).data;
    assert!(status.contains("done      1") && status.contains("missing   3"), "{status}");
    let ended = place.tdse("run scan.json --out out").with(0);
    ended.says(&["is damaged", "it is no HDF5 file", "holds another point"]);
    assert_eq!(place.counts("out"), [3, 0, 1, 0]);
    assert_same_bits(&place.path("whole/result.h5"), &place.path("out/result.h5"));
}
