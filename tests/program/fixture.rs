//! A folder to work in, a small configuration, and the program.

use std::fs;
use std::path::{Path, PathBuf};
use std::process::{Command, Output};

use serde_json::{Value, json};
use tdse_cli::store::{differences, read};
use tempfile::TempDir;

/// A working folder that goes away with the test.
pub struct Place {
    folder: TempDir,
}

impl Place {
    pub fn new() -> Self {
        Self { folder: tempfile::tempdir().expect("a folder") }
    }

    pub fn path(&self, name: &str) -> PathBuf {
        self.folder.path().join(name)
    }

    /// Writes a configuration.
    pub fn write(&self, name: &str, configuration: &Value) {
        fs::write(self.path(name), format!("{configuration:#}\n")).expect("a file");
    }

    /// The program with its arguments, parted by spaces, in this folder.
    pub fn command(&self, arguments: &str) -> Command {
        let mut command = Command::new(env!("CARGO_BIN_EXE_tdse"));
        command.current_dir(self.folder.path()).args(arguments.split_whitespace());
        command
    }

    /// Starts it and waits for its end.
    pub fn tdse(&self, arguments: &str) -> Ended {
        Ended::from(self.command(arguments).output().expect("the program starts"))
    }

    /// Events of one kind in the newest log of a folder.
    pub fn events(&self, out: &str, kind: &str) -> usize {
        let mut logs: Vec<PathBuf> = files(&self.path(out).join("log"));
        logs.sort();
        let text = fs::read_to_string(logs.last().expect("a log")).expect("a text");
        let lines = text.lines().map(|line| serde_json::from_str::<Value>(line).expect("JSON"));
        lines.filter(|line| line["event"] == kind).count()
    }

    /// `[propagated, derived, kept, failed]` of the newest log of a folder.
    pub fn counts(&self, out: &str) -> [usize; 4] {
        ["propagated", "derived", "kept", "failed"].map(|kind| self.events(out, kind))
    }

    /// Rows of `points.csv` as cells.
    pub fn rows(&self, out: &str) -> Vec<Vec<String>> {
        let text = fs::read_to_string(self.path(out).join("points.csv")).expect("a table");
        text.lines().skip(1).map(|line| line.split(',').map(str::to_owned).collect()).collect()
    }

    /// The file of a point of a folder.
    pub fn point(&self, out: &str, index: usize) -> PathBuf {
        self.path(out).join(self.rows(out)[index].last().expect("a path"))
    }
}

/// How the program ended.
#[derive(Debug)]
pub struct Ended {
    pub status: Option<i32>,
    pub data: String,
    pub talk: String,
}

impl From<Output> for Ended {
    fn from(output: Output) -> Self {
        let text = |bytes| String::from_utf8(bytes).expect("UTF-8");
        Self { status: output.status.code(), data: text(output.stdout), talk: text(output.stderr) }
    }
}

impl Ended {
    /// Checks the exit status and gives what was said.
    #[track_caller]
    pub fn with(self, status: i32) -> Self {
        assert_eq!(self.status, Some(status), "{}{}", self.talk, self.data);
        self
    }

    #[track_caller]
    pub fn says(&self, words: &[&str]) {
        for word in words {
            assert!(self.talk.contains(word), "no {word:?} in:\n{}", self.talk);
        }
    }
}

/// All files below a folder.
pub fn files(folder: &Path) -> Vec<PathBuf> {
    let entries = fs::read_dir(folder).into_iter().flatten().flatten().map(|entry| entry.path());
    entries.flat_map(|path| if path.is_dir() { files(&path) } else { vec![path] }).collect()
}

/// Checks that two results are the same to the last bit, outside provenance and time stamps.
#[track_caller]
pub fn assert_same_bits(a: &Path, b: &Path) {
    let contents = [a, b].map(|path| read(path).unwrap_or_else(|error| panic!("{error}")));
    let found = differences(&contents[0], &contents[1]);
    assert!(found.is_empty(), "{} and {} differ in {found:?}", a.display(), b.display());
    assert!(contents[0].groups().count() > 1, "{} holds results", a.display());
}

/// Phases of a three-cycle pulse.
pub fn phases(from: &str, to: &str, points: usize) -> Value {
    json!({
        "title": "Invented for the tests",
        "atom": {
            "potential": { "kind": "soft_coulomb", "softening": "1.4142135623730951 bohr" }
        },
        "field": {
            "pulses": [{
                "wavelength": "400 nm", "intensity": "1e14 W/cm^2", "phase": "0 deg",
                "envelope": { "kind": "sin2", "cycles": 3 }
            }]
        },
        "outputs": {
            // A few cycles leave no room for the ends of a softer window.
            "harmonics": { "max_energy": "40 eV", "energy_step": "0.5 eV", "window": { "kind": "blackman" } },
            "populations": { "states": 2 }
        },
        "scan": [
            { "parameter": "/field/pulses/0/phase", "name": "cep", "from": from, "to": to, "points": points }
        ]
    })
}
