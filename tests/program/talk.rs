//! Data to stdout, talk to stderr.

use std::process::Stdio;

use serde_json::json;

use crate::fixture::{Place, phases};

#[test]
fn a_single_run_ends_with_its_headline_numbers_and_units() {
    let place = Place::new();
    let mut single = phases("0 deg", "0 deg", 1);
    single["scan"] = json!([]);
    place.write("single.json", &single);
    let ended = place.tdse("run single.json --out out").with(0);
    // -1/2 hartree exactly for softening sqrt(2): Eberly et al., J. Opt. Soc. Am. B 4, 1268 is where the atom is from;
    // the closed form is checked in the tests of bound states. In eV by CODATA 2022: 13.605693 eV.
    for words in
        ["Ionization probability", "-13.606 eV", "Measured cutoff", "Norm in the box", "out/result.h5"]
    {
        assert!(ended.data.contains(words), "no {words} in\n{}", ended.data);
    }
    assert!(ended.talk.starts_with("1/1: done in "), "{}", ended.talk);
}

#[test]
fn a_scan_says_a_line_per_point_and_where_its_result_lies() {
    let place = Place::new();
    place.write("scan.json", &phases("0 deg", "90 deg", 3));
    let ended = place.tdse("run scan.json --out out").with(0);
    assert_eq!(ended.data, "3 of 3 points: out/result.h5\n");
    assert_eq!(ended.talk.lines().count(), 3, "{}", ended.talk);
    assert!(
        ended.talk.lines().all(|line| line.contains("cep = ") && line.contains("done in ")),
        "{}",
        ended.talk
    );
    assert!(!ended.talk.contains('\x1b'), "no bar where there is no terminal");
}

#[test]
fn quiet_says_errors_only() {
    let place = Place::new();
    place.write("scan.json", &phases("0 deg", "90 deg", 3));
    assert_eq!(place.tdse("run scan.json --out out --quiet").with(0).talk, "");
    place.tdse("run absent.json --out other --quiet").with(2).says(&["absent.json"]);
}

#[test]
fn a_reader_that_goes_away_is_no_panic() {
    let place = Place::new();
    let mut child =
        place.command("schema").stdout(Stdio::piped()).stderr(Stdio::piped()).spawn().expect("started");
    drop(child.stdout.take());
    let ended = child.wait_with_output().expect("an end");
    assert_eq!((ended.status.code(), String::from_utf8_lossy(&ended.stderr).as_ref()), (Some(0), ""));
}

#[test]
fn a_wrong_command_line_is_one_line_and_status_2() {
    let place = Place::new();
    for (line, words) in [
        ("run scan.json --out out --jobs none", ["'none'", "--jobs"]),
        ("run scan.json --out out --shard 5/4", ["'5/4'", "1 <= K <= N"]),
        ("run scan.json", ["--out", "required"]),
        ("compute scan.json", ["'compute'", "--help"]),
    ] {
        let ended = place.tdse(line).with(2);
        ended.says(&words);
        assert_eq!(ended.talk.lines().count(), 1, "{}", ended.talk);
    }
}
