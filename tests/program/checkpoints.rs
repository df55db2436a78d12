//! Points in flight are kept on disk, and go on from there to the same bits.

use std::fs;
use std::path::PathBuf;
use std::process::{Child, Command, Stdio};
use std::thread::sleep;
use std::time::{Duration, Instant};

use serde_json::{Value, json};
use tdse_cli::store::read;

use crate::fixture::{Ended, Place, assert_same_bits, files, phases};

/// Steps between checkpoints.
const EVERY: &str = "TDSE_TEST_CHECKPOINT_EVERY";
const EVERY_TEN_MINUTES: [&str; 2] = [EVERY, "none"];

/// One point that takes seconds.
fn single(place: &Place) {
    let mut single = phases("0 deg", "0 deg", 1);
    single["scan"] = json!([]);
    single["numerics"] = json!({ "spacing": "0.2 bohr", "extent": "800 bohr" });
    single["field"]["pulses"][0]["envelope"]["cycles"] = json!(6);
    place.write("single.json", &single);
}

/// Starts the run, waits until its log has an event of this kind or the process has ended.
fn started(place: &Place, line: &str, out: &str, hook: [&str; 2], event: &str) -> Child {
    // Whoever runs the tests may ignore signals, and children inherit that.
    let mut command = Command::new("env");
    command
        .arg("--default-signal=HUP,INT,TERM")
        .arg(env!("CARGO_BIN_EXE_tdse"))
        .args(line.split_whitespace());
    command.current_dir(place.path("")).env(hook[0], hook[1]);
    let before = events(place, out, event).len();
    let mut child =
        command.stdout(Stdio::piped()).stderr(Stdio::piped()).spawn().expect("the program starts");
    let start = Instant::now();
    while events(place, out, event).len() == before && child.try_wait().expect("a state").is_none() {
        assert!(start.elapsed() < Duration::from_mins(2), "no {event} within two minutes");
        sleep(Duration::from_millis(2));
    }
    child
}

/// Events of a kind in all logs of a folder.
fn events(place: &Place, out: &str, kind: &str) -> Vec<Value> {
    let mut logs = files(&place.path(out).join("log"));
    logs.sort();
    let texts = logs.into_iter().map(|log| fs::read_to_string(log).unwrap_or_default());
    let lines = texts.flat_map(|text| text.lines().map(str::to_owned).collect::<Vec<_>>());
    let events = lines.filter_map(|line| serde_json::from_str::<Value>(&line).ok());
    events.filter(|event| event["event"] == kind).collect()
}

fn end(child: Child, signal: &str) -> Ended {
    let sent = Command::new("kill").args([signal, &child.id().to_string()]).stderr(Stdio::null()).status();
    sent.expect("kill");
    let asked = Instant::now();
    let ended = Ended::from(child.wait_with_output().expect("an end"));
    assert!(asked.elapsed() < Duration::from_secs(5), "it took {:?} to stop", asked.elapsed());
    ended
}

fn checkpoints(place: &Place, out: &str) -> Vec<PathBuf> {
    files(&place.path(out).join("checkpoints"))
}

/// The last step that a folder's logs speak of.
fn last_step(place: &Place, out: &str, kind: &str) -> u64 {
    events(place, out, kind).last().and_then(|event| event["step"].as_u64()).expect("a step")
}

#[test]
fn a_signal_keeps_points_in_flight_and_they_go_on_to_the_same_bits() {
    let place = Place::new();
    single(&place);
    place.tdse("run single.json --out whole").with(0);
    for (signal, status) in [("-INT", 130), ("-TERM", 143), ("-HUP", 129)] {
        let out = format!("out{signal}");
        let line = format!("run single.json --out {out}");
        // Waits until it is under way, not while its atom is still made.
        let child = started(&place, &line, &out, [EVERY, "50"], "checkpointed");
        end(child, signal).with(status);
        assert_eq!(checkpoints(&place, &out).len(), 1);
        // The hook keeps one at least, the signal another.
        assert!(events(&place, &out, "checkpointed").len() > 1);
        let step = last_step(&place, &out, "checkpointed");
        place.tdse(&line).with(0);
        assert_eq!(last_step(&place, &out, "continued"), step);
        assert!(checkpoints(&place, &out).is_empty(), "nothing is left of it");
        assert_same_bits(&place.path("whole/result.h5"), &place.path(&out).join("result.h5"));
    }
}

/// The same in two dimensions, with a momentum map, on two threads.
#[test]
fn a_plane_and_its_map_go_on_to_the_same_bits() {
    let place = Place::new();
    let mut single = phases("0 deg", "0 deg", 1);
    single["scan"] = json!([]);
    single["atom"] = json!({ "dimensions": 2, "potential": {
        "kind": "gaussian_well", "depth": "30 eV", "width": "1.2 bohr" } });
    single["field"]["pulses"][0]["ellipticity"] = json!(0.7);
    single["field"]["pulses"][0]["envelope"]["cycles"] = json!(1);
    single["numerics"] = json!({ "spacing": "1 bohr", "extent": "120 bohr", "time_step": "0.3 au",
        "absorber": { "kind": "smooth", "width": "25 bohr", "shape": "sides" }, "trailing_time": "4 fs",
        "allow_inadequate": true });
    single["outputs"]["photoelectrons"] = json!({ "max_energy": "40 eV", "energy_step": "0.5 eV" });
    single["outputs"]["populations"]["states"] = json!(1);
    place.write("single.json", &single);
    place.tdse("run single.json --out whole --jobs 1").with(0);
    let line = "run single.json --out out --jobs 2";
    end(started(&place, line, "out", [EVERY, "50"], "checkpointed"), "-TERM").with(143);
    place.tdse(line).with(0);
    assert!(last_step(&place, "out", "continued") > 0);
    assert_same_bits(&place.path("whole/result.h5"), &place.path("out/result.h5"));
}

/// What the absorber took before the stop is in the checkpoint.
#[test]
fn collected_electrons_go_on_to_the_same_bits() {
    let place = Place::new();
    let mut single = phases("0 deg", "0 deg", 1);
    single["scan"] = json!([]);
    single["numerics"] = json!({ "electron_method": "outgoing_amplitude", "trailing_time": "10 fs" });
    single["outputs"]["photoelectrons"] = json!({ "max_energy": "20 eV", "energy_step": "0.1 eV" });
    place.write("single.json", &single);
    place.tdse("run single.json --out whole").with(0);
    let line = "run single.json --out out";
    for every in ["50", "33"] {
        end(started(&place, line, "out", [EVERY, every], "checkpointed"), "-TERM").with(143);
    }
    place.tdse(line).with(0);
    assert_eq!(events(&place, "out", "continued").len(), 2);
    let [whole, out] = ["whole/result.h5", "out/result.h5"].map(|path| place.path(path));
    assert_same_bits(&whole, &out);
    let contents = read(&out).expect("a result");
    let taken = contents.real("summary", "electron_yield").expect("electrons")[[]];
    assert!(taken > 1e-3, "{taken}");
}

/// Steps between checkpoints drawn once from a hat.
#[test]
fn kills_between_checkpoints_at_any_step_cost_no_bit() {
    let place = Place::new();
    single(&place);
    place.tdse("run single.json --out whole").with(0);
    let line = "run single.json --out out";
    let mut before = 0;
    for every in ["1", "37", "5", "113", "64"] {
        let child = started(&place, line, "out", [EVERY, every], "checkpointed");
        sleep(Duration::from_millis(60));
        end(child, "-KILL");
        let step = last_step(&place, "out", "checkpointed");
        assert!(step >= before, "step {step} after step {before}");
        before = step;
    }
    assert_eq!(events(&place, "out", "continued").len(), 4);
    place.tdse(line).with(0);
    assert_eq!(events(&place, "out", "continued").len(), 5);
    assert!(checkpoints(&place, "out").is_empty());
    assert_same_bits(&place.path("whole/result.h5"), &place.path("out/result.h5"));
}

#[test]
fn time_that_is_over_stops_with_checkpoints_and_status_1() {
    let place = Place::new();
    // Long enough that the time is over under way, however long its atom takes.
    single(&place);
    let text = fs::read_to_string(place.path("single.json")).expect("the configuration");
    let mut long: Value = serde_json::from_str(&text).expect("JSON");
    long["numerics"]["trailing_time"] = json!("25 fs");
    place.write("single.json", &long);
    let start = Instant::now();
    place.tdse("run single.json --out whole").with(0);
    let time = format!("{:.2} s", 0.6 * start.elapsed().as_secs_f64());
    let mut command = place.command("run single.json --out out --within");
    let ended = Ended::from(command.arg(time).output().expect("the program starts")).with(1);
    ended.says(&["time is over (--within): 1 of 1 points are missing; continue with the same command"]);
    assert_eq!(checkpoints(&place, "out").len(), 1);
    let mut command = place.command("run single.json --out out --within");
    Ended::from(command.arg("1 h").output().expect("the program starts")).with(0);
    assert_eq!(events(&place, "out", "continued").len(), 1);
    assert_same_bits(&place.path("whole/result.h5"), &place.path("out/result.h5"));
}

#[test]
fn a_checkpoint_that_cannot_be_used_is_named_and_the_point_computed_from_the_start() {
    let place = Place::new();
    single(&place);
    place.tdse("run single.json --out whole").with(0);
    let line = "run single.json --out out";
    end(started(&place, line, "out", [EVERY, "50"], "checkpointed"), "-TERM").with(143);
    let path = checkpoints(&place, "out").remove(0);
    let whole = fs::read(&path).expect("a checkpoint");
    let replaced = |from: &str, to: &str| {
        let at = whole.windows(from.len()).position(|part| part == from.as_bytes()).expect("in the header");
        [&whole[..at], to.as_bytes(), &whole[at + from.len()..]].concat()
    };
    let mut flipped = whole.clone();
    flipped[whole.len() / 2] ^= 1;
    for (bytes, words) in [
        (whole[..whole.len() / 2].to_vec(), "checkpoint is damaged: its checksum does not fit"),
        (flipped, "checkpoint is damaged: its checksum does not fit"),
        (b"no checkpoint".to_vec(), "checkpoint was not written by this program"),
        (replaced("\"layout_version\":1", "\"layout_version\":7"), "has layout version 7"),
    ] {
        fs::write(&path, bytes).expect("written");
        // The log has it before the terminal does, and the kill may come between.
        let named = || {
            let noted = events(&place, "out", "noted");
            let texts = noted.iter().filter_map(|event| event["text"].as_str());
            texts.filter(|text| text.contains(words) && text.contains("computed from the start")).count()
        };
        let before = named();
        let child = started(&place, line, "out", EVERY_TEN_MINUTES, "noted");
        // It may first say what a kill before left unfinished.
        let late = Instant::now() + Duration::from_secs(20);
        while named() == before && Instant::now() < late {
            sleep(Duration::from_millis(5));
        }
        end(child, "-KILL");
        assert_eq!(named(), before + 1, "{words}");
    }
    place.tdse(line).with(0).says(&["computed from the start"]);
    assert!(events(&place, "out", "continued").is_empty());
    assert_same_bits(&place.path("whole/result.h5"), &place.path("out/result.h5"));
}

#[test]
fn what_a_process_that_is_gone_left_unfinished_is_removed() {
    let place = Place::new();
    place.write("scan.json", &phases("0 deg", "90 deg", 4));
    let mut command = place.command("run scan.json --out out --jobs 1");
    // Longer than anything else here: it ends with the kill.
    command.env("TDSE_TEST_PAUSE_WRITE", "60000").stdout(Stdio::null()).stderr(Stdio::null());
    let mut child = command.spawn().expect("started");
    let start = Instant::now();
    let partial = || {
        files(&place.path("out/points"))
            .into_iter()
            .find(|path| path.extension().is_some_and(|e| e == "partial"))
    };
    while partial().is_none() {
        assert!(start.elapsed() < Duration::from_mins(1), "nothing is written");
        sleep(Duration::from_millis(2));
    }
    let left = partial().expect("a file");
    place.tdse("run scan.json --out out --shard 4/4");
    assert!(left.exists(), "a file that is being written is left alone");
    child.kill().expect("killed");
    child.wait().expect("gone");
    assert!(left.exists(), "the kill left it");
    assert!(place.tdse("status out").data.contains("done      1"));
    place.tdse("run scan.json --out out").with(0).says(&["removed 1 unfinished files"]);
    assert!(partial().is_none());
    assert_eq!(place.counts("out"), [3, 0, 1, 0]);
}

#[test]
fn a_signal_while_gathering_stops_in_time_and_leaves_what_was_there() {
    let place = Place::new();
    place.write("scan.json", &phases("0 deg", "90 deg", 12));
    place.tdse("run scan.json --out whole").with(0);
    let line = "run scan.json --out out";
    let child = started(&place, line, "out", ["TDSE_TEST_PAUSE_GATHER", "200"], "gathering");
    end(child, "-TERM").with(143).says(&["stopped while gathering", "continue with the same command"]);
    let left = files(&place.path("out")).into_iter().map(|path| path.display().to_string());
    let left: Vec<_> = left.filter(|path| path.contains("result") || path.contains("partial")).collect();
    assert!(left.is_empty(), "{left:?}");
    place.tdse(line).with(0);
    assert_eq!(place.counts("out"), [0, 0, 12, 0]);
    assert_same_bits(&place.path("whole/result.h5"), &place.path("out/result.h5"));
}
