//! Stopped by a signal, continued by the same command.

use std::fs;
use std::process::{Child, Command, Stdio};
use std::thread::sleep;
use std::time::{Duration, Instant, SystemTime};

use serde_json::{Value, json};

use crate::fixture::{Ended, Place, assert_same_bits, files, phases};

/// A scan that takes seconds: a fine grid, and a long pulse.
fn long(place: &Place) {
    let mut scan = phases("0 deg", "90 deg", 8);
    scan["numerics"] = json!({ "spacing": "0.2 bohr", "extent": "400 bohr" });
    scan["field"]["pulses"][0]["envelope"]["cycles"] = json!(4);
    place.write("scan.json", &scan);
}

/// Starts the scan and waits until the first point is on disk.
fn started(place: &Place, out: &str) -> Child {
    // Whoever runs the tests may ignore signals, and children inherit that.
    let mut command = Command::new("env");
    command.arg("--default-signal=HUP,INT,TERM").arg(env!("CARGO_BIN_EXE_tdse"));
    command.args(["run", "scan.json", "--out", out, "--jobs", "2"]).current_dir(place.path(""));
    let child = command.stdout(Stdio::piped()).stderr(Stdio::piped()).spawn().expect("the program starts");
    let start = Instant::now();
    let log = place.path(out).join("log");
    let has_point = || {
        files(&log).iter().any(|log| fs::read_to_string(log).is_ok_and(|text| text.contains("propagated")))
    };
    while !has_point() {
        assert!(start.elapsed() < Duration::from_mins(2), "no point within two minutes");
        sleep(Duration::from_millis(5));
    }
    child
}

/// Starts the scan, sends a signal when the first point is on disk, and waits for the end.
fn stopped(place: &Place, out: &str, signal: &str) -> Ended {
    let child = started(place, out);
    let kill = Command::new("kill").args([signal, &child.id().to_string()]).status().expect("kill");
    assert!(kill.success());
    let asked = Instant::now();
    let ended = Ended::from(child.wait_with_output().expect("an end"));
    assert!(asked.elapsed() < Duration::from_secs(5), "it took {:?} to stop", asked.elapsed());
    ended
}

#[test]
fn a_signal_stops_in_time_and_the_same_command_continues_to_the_same_bits() {
    let place = Place::new();
    long(&place);
    place.tdse("run scan.json --out whole").with(0);
    for (signal, status) in [("-INT", 130), ("-TERM", 143), ("-HUP", 129)] {
        let out = format!("out{signal}");
        let ended = stopped(&place, &out, signal).with(status);
        ended.says(&[&signal[1..], "continue with the same command"]);
        assert!(!place.path(&out).join("result.h5").exists());
        let done = place.counts(&out)[0];
        assert!((1..8).contains(&done), "{done} of 8 points before the signal");
        let stray: Vec<_> = files(&place.path(&out))
            .into_iter()
            .filter(|path| path.extension().is_some_and(|e| e == "partial"))
            .collect();
        assert!(stray.is_empty(), "{stray:?}");
        let rows = place.rows(&out);
        assert_eq!(rows.iter().filter(|row| row.contains(&"missing".to_owned())).count(), 8 - done);
        place.tdse(&format!("run scan.json --out {out} --jobs 1")).with(0);
        assert_eq!(place.counts(&out), [8 - done, 0, done, 0]);
        assert_same_bits(&place.path("whole/result.h5"), &place.path(&out).join("result.h5"));
    }
}

#[test]
fn a_kill_leaves_whole_points_that_are_kept() {
    let place = Place::new();
    long(&place);
    place.tdse("run scan.json --out whole").with(0);
    let ended = stopped(&place, "out", "-KILL");
    assert_eq!(ended.status, None, "killed");
    let done = files(&place.path("out/points"))
        .iter()
        .filter(|path| path.extension().is_some_and(|e| e == "h5"))
        .count();
    assert!((1..8).contains(&done), "{done} of 8 points before the kill");
    place.tdse("run scan.json --out out").with(0);
    assert_eq!(place.counts("out"), [8 - done, 0, done, 0]);
    assert_same_bits(&place.path("whole/result.h5"), &place.path("out/result.h5"));
}

#[test]
fn status_counts_the_processes_that_run() {
    let place = Place::new();
    long(&place);
    let mut child = started(&place, "out");
    let says = |words: &str| {
        let text = place.tdse("status out").with(0).data;
        assert!(text.contains(words), "no {words} in\n{text}");
    };
    says("with 2 points at once");
    child.kill().expect("killed");
    child.wait().expect("an end");
    says("nothing is running");
    // The same log as another machine would have left it: of a process out of sight only its age is known.
    let log = files(&place.path("out/log")).pop().expect("a log");
    let text = fs::read_to_string(&log).expect("a text");
    let began = text.lines().find(|line| line.contains("began")).expect("a beginning");
    let began: Value = serde_json::from_str(began).expect("JSON");
    let process = began["process"].as_str().expect("what tells the process");
    fs::write(&log, text.replace(process, "other.example-0badcafe-1")).expect("written");
    says("with 2 points at once");
    let old = SystemTime::now() - Duration::from_hours(1);
    fs::File::options().write(true).open(&log).and_then(|log| log.set_modified(old)).expect("made old");
    says("nothing is running");
}
