//! The folder of a request: what lies where, and whose it is.

mod claim;
mod difference;
mod table;

use std::fs;
use std::path::{Path, PathBuf};

use serde::de::DeserializeOwned;
use serde::{Deserialize, Serialize};
use serde_json::Value;

use super::atomic;
use super::axes::ScanDimension;
use super::error::Error;
use super::hdf5::Failure;
use super::partial;

pub use claim::Claim;
pub use difference::Difference;
pub use table::{AxisValues, Row, TableAxis};

/// Version of the folder's layout. Lower ones are read, higher ones refused.
const LAYOUT_VERSION: i64 = 1;

/// Everything that is kept of one request.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Folder {
    root: PathBuf,
}

/// What was asked, as `request.json` keeps it.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct Request {
    /// Version of the program that asked.
    pub version: String,
    /// Version of the numerics, which is part of every point's identity.
    pub numerics_version: u32,
    /// Title.
    pub title: String,
    /// The configuration as written.
    pub input: String,
    /// What the command line changed in it.
    pub overrides: Vec<String>,
    /// The configuration with the changes made, its tables named as `inputs/` keeps them: runs again as it is.
    pub configuration: Value,
    /// The axes of the scan, one list per dimension; none for a single run.
    pub scan: Vec<Vec<TableAxis>>,
}

impl Request {
    /// The dimensions of the scan.
    pub fn dimensions(&self) -> Vec<ScanDimension> {
        let dimension =
            |axes: &Vec<TableAxis>| ScanDimension { axes: axes.iter().map(TableAxis::scan_axis).collect() };
        self.scan.iter().map(dimension).collect()
    }
}

/// A point that failed, as `failed/<id>.json` keeps it.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct FailedPoint {
    /// Why.
    pub reason: String,
    /// Values of the scan axes, for people.
    pub point: String,
    /// When, ISO 8601.
    pub time: String,
    /// Version of the program.
    pub version: String,
    /// The configuration of the point as resolved.
    pub configuration: Value,
}

impl Folder {
    /// A folder that a run has filled before.
    pub fn open(root: &Path) -> Result<Self, Error> {
        let folder = Self { root: root.into() };
        fs::read_dir(root).map_err(Error::io("read the folder", root))?;
        if !folder.request_path().is_file() {
            return Err(Error::Foreign { path: root.into(), reason: "it has no request.json" });
        }
        Ok(folder)
    }

    /// The folder itself.
    pub fn root(&self) -> &Path {
        &self.root
    }

    fn request_path(&self) -> PathBuf {
        self.root.join("request.json")
    }

    /// What was asked last.
    pub fn request(&self) -> Result<Request, Error> {
        let path = self.request_path();
        let tree: Value = read_json(&path)?;
        match tree["layout_version"].as_i64() {
            Some(found) if found > LAYOUT_VERSION => {
                return Err(Error::NewerLayout { path, found, known: LAYOUT_VERSION });
            }
            Some(_) => {}
            None => return Err(Error::Foreign { path, reason: "it has no layout_version" }),
        }
        serde_json::from_value(tree).map_err(|error| damaged(&path, &error))
    }

    /// Where the file of a point lies within the folder; `name` is its identity, and a mark where it has more than one.
    pub fn point_place(name: &str) -> String {
        format!("points/{}/{name}.h5", name.get(..2).unwrap_or(name))
    }

    /// Everything gathered.
    pub fn result(&self) -> PathBuf {
        self.root.join("result.h5")
    }

    /// Puts a file of these bytes into the folder, whole or not at all; folders on the way are made.
    pub fn put(&self, path: &Path, bytes: &[u8]) -> Result<(), Error> {
        atomic::make_parent(path)?;
        atomic::write(path, bytes)
    }

    /// Folder of the logs.
    pub fn log(&self) -> PathBuf {
        self.root.join("log")
    }

    fn failed(&self, identity: &str) -> PathBuf {
        self.root.join(format!("failed/{identity}.json"))
    }

    /// Why the point failed, if it did. A record that cannot be read is none: the point runs again.
    pub fn failure(&self, identity: &str) -> Option<FailedPoint> {
        read_json(&self.failed(identity)).ok()
    }

    /// Keeps why a point failed.
    pub fn keep_failure(&self, identity: &str, failure: &FailedPoint) -> Result<(), Error> {
        let path = self.failed(identity);
        atomic::make_parent(&path)?;
        write_json(&path, failure)
    }

    /// Forgets that a point failed, now that it has not.
    pub fn forget_failure(&self, identity: &str) -> Result<(), Error> {
        remove(&self.failed(identity))
    }

    /// Removes what processes that are gone left unfinished; how many files.
    pub fn sweep(&self) -> usize {
        partial::sweep(&self.root)
    }

    /// Folder of the checkpoints.
    pub fn checkpoints(&self) -> PathBuf {
        self.root.join("checkpoints")
    }

    /// The checkpoint of a point.
    pub fn checkpoint(&self, identity: &str) -> PathBuf {
        self.checkpoints().join(format!("{identity}.checkpoint"))
    }

    /// Forgets how far a point had come, now that it is final.
    pub fn forget_checkpoint(&self, identity: &str) -> Result<(), Error> {
        remove(&self.checkpoint(identity))
    }

    /// Makes the folder that a file lies in.
    pub fn make_room(&self, path: &Path) -> Result<(), Error> {
        atomic::make_parent(path)
    }

    /// Texts of the tables that the configuration names, by name.
    pub fn inputs(&self) -> Result<std::collections::BTreeMap<String, String>, Error> {
        let folder = self.root.join("inputs");
        let mut inputs = std::collections::BTreeMap::new();
        if !folder.is_dir() {
            return Ok(inputs);
        }
        for entry in fs::read_dir(&folder).map_err(Error::io("read", &folder))? {
            let path = entry.map_err(Error::io("read", &folder))?.path();
            let name = path.file_name().unwrap_or_default().to_string_lossy().into_owned();
            if !partial::is_partial(&name) {
                inputs.insert(name, fs::read_to_string(&path).map_err(Error::io("read", &path))?);
            }
        }
        Ok(inputs)
    }

    /// Writes the table of all points.
    pub fn write_rows(&self, request: &Request, rows: &[Row]) -> Result<(), Error> {
        let path = self.root.join("points.csv");
        let text = table::text(request, rows).map_err(|error| damaged(&path, &error))?;
        atomic::write(&path, &text)
    }

    /// Reads the table of all points.
    pub fn rows(&self) -> Result<Vec<Row>, Error> {
        let path = self.root.join("points.csv");
        let text = fs::read(&path).map_err(Error::io("read", &path))?;
        table::rows(&text).map_err(|error| damaged(&path, &error))
    }
}

/// Removes a file, which may be gone already.
fn remove(path: &Path) -> Result<(), Error> {
    match fs::remove_file(path) {
        Err(error) if error.kind() != std::io::ErrorKind::NotFound => Err(Error::io("remove", path)(error)),
        _ => Ok(()),
    }
}

fn read_json<T: DeserializeOwned>(path: &Path) -> Result<T, Error> {
    let text = fs::read(path).map_err(Error::io("read", path))?;
    serde_json::from_slice(&text).map_err(|error| damaged(path, &error))
}

fn write_json(path: &Path, value: &impl Serialize) -> Result<(), Error> {
    let text = serde_json::to_value(value).map_err(|error| damaged(path, &error))?;
    atomic::write(path, format!("{text:#}\n").as_bytes())
}

fn damaged(path: &Path, error: &impl ToString) -> Error {
    Error::damaged(path)(Failure::from(error.to_string()))
}

#[cfg(test)]
mod tests {
    use std::collections::BTreeMap;

    use serde_json::json;

    use super::*;

    fn request(phase: &str) -> Request {
        Request {
            version: "0.1.0".into(),
            numerics_version: 1,
            title: "Invented".into(),
            input: "{}".into(),
            overrides: Vec::new(),
            configuration: json!({ "field": { "phase": phase }, "scan": [] }),
            scan: Vec::new(),
        }
    }

    fn claim(root: &Path, request: &Request) -> Result<Claim, Error> {
        let inputs = BTreeMap::from([("probe-0f.csv".to_owned(), "1,2\n".to_owned())]);
        Folder::claim(root, request, &inputs).map(|(_, claim)| claim)
    }

    #[test]
    fn a_folder_is_taken_once_and_known_again() {
        let place = tempfile::tempdir().expect("a folder");
        let root = place.path().join("deep/out");
        fs::create_dir_all(&root).expect("a folder");
        fs::write(root.join("request.json.host-1.partial"), "left by a kill").expect("a file");
        assert_eq!(claim(&root, &request("0 deg")).expect("taken"), Claim::New);
        assert_eq!(claim(&root, &request("0 deg")).expect("known"), Claim::Same);
        let folder = Folder::open(&root).expect("a folder");
        assert_eq!(folder.request().expect("a request"), request("0 deg"));
        assert_eq!(folder.inputs().expect("tables")["probe-0f.csv"], "1,2\n");
        let refused = claim(&root, &request("9 deg")).expect_err("another request").to_string();
        assert!(refused.contains("/field/phase: \"0 deg\" before, \"9 deg\" now"), "{refused}");
        let newer = Request { numerics_version: 2, ..request("0 deg") };
        let kept = root.join("request-1.json");
        assert_eq!(claim(&root, &newer).expect("taken over"), Claim::Changed { parts: Vec::new(), kept });
    }

    #[test]
    fn a_failure_is_kept_until_it_is_forgotten() {
        let place = tempfile::tempdir().expect("a folder");
        claim(place.path(), &request("0 deg")).expect("taken");
        let folder = Folder::open(place.path()).expect("a folder");
        let failure = FailedPoint {
            reason: "the norm grew".into(),
            point: "cep = 3".into(),
            time: "2026-03-01T12:00:00Z".into(),
            version: "0.1.0".into(),
            configuration: json!({}),
        };
        assert_eq!(folder.failure("ab12"), None);
        folder.keep_failure("ab12", &failure).expect("kept");
        assert_eq!(folder.failure("ab12"), Some(failure));
        fs::write(place.path().join("failed/ab12.json"), "{ \"reason\"").expect("cut short");
        assert_eq!(folder.failure("ab12"), None);
        folder.forget_failure("ab12").expect("forgotten");
        folder.forget_failure("ab12").expect("nothing to forget");
        assert!(!place.path().join("failed/ab12.json").exists());
    }
}
