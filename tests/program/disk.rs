//! A disk that is full, or may only be read. Needs a small file system of its own, which only an administrator can mount.

use std::fs;
use std::io::{Write, stderr};
use std::path::{Path, PathBuf};
use std::process::{Command, Stdio};

use serde_json::json;
use tdse_cli::store::read;

use crate::fixture::{Place, assert_same_bits, files, phases};

/// A file system in memory; gone with the test.
struct Small(PathBuf);

impl Small {
    /// Of 64 MB; none, with a line that says so, where it cannot be mounted.
    fn mount(path: &Path) -> Option<Self> {
        fs::create_dir(path).expect("a folder");
        let mut command = Command::new("mount");
        command.args(["-t", "tmpfs", "-o", "size=64m", "tmpfs"]).arg(path).stderr(Stdio::null());
        if command.status().is_ok_and(|status| status.success()) {
            return Some(Self(path.into()));
        }
        // Straight to stderr: what the test harness captures, nobody sees.
        let _ = writeln!(stderr(), "program::disk: SKIPPED, because a file system cannot be mounted here");
        None
    }

    fn remount(&self, how: &str) {
        let status = Command::new("mount").args(["-o", &format!("remount,{how}")]).arg(&self.0).status();
        assert!(status.expect("mount").success());
    }

    /// Takes all room but so many bytes.
    fn fill_but(&self, bytes: u64) {
        let ballast = self.0.join("ballast");
        let zeros = vec![0; 4096];
        let mut file = fs::File::create(&ballast).expect("a file");
        while file.write_all(&zeros).is_ok() {}
        let length = file.metadata().expect("a length").len();
        file.set_len(length - bytes).expect("shorter");
    }

    fn make_room(&self) {
        fs::remove_file(self.0.join("ballast")).expect("removed");
    }
}

impl Drop for Small {
    fn drop(&mut self) {
        let _ = Command::new("umount").arg(&self.0).status();
    }
}

fn scan(place: &Place) {
    let mut scan = phases("0 deg", "90 deg", 12);
    scan["outputs"] = json!({ "harmonics": { "max_energy": "40 eV", "energy_step": "0.01 eV" } });
    place.write("scan.json", &scan);
    place.tdse("run scan.json --out whole").with(0);
}

#[test]
fn a_full_disk_keeps_whole_points_and_the_scan_goes_on_when_there_is_room() {
    let place = Place::new();
    let Some(disk) = Small::mount(&place.path("disk")) else { return };
    scan(&place);
    disk.fill_but(0);
    place.tdse("run scan.json --out disk/out").with(2).says(&["disk/out", "No space left on device"]);
    disk.make_room();
    let size: u64 =
        files(&place.path("whole/points")).iter().map(|path| path.metadata().expect("a file").len()).sum();
    disk.fill_but(size / 2);
    let ended = place.tdse("run scan.json --out disk/out").with(1);
    ended.says(&["cannot ", "disk/out/points/", "No space left on device", "continue with the same command"]);
    let points = files(&place.path("disk/out/points"));
    assert!((1..12).contains(&points.len()), "{} of 12 points", points.len());
    for path in &points {
        assert!(read(path).is_ok(), "{} is whole", path.display());
    }
    disk.make_room();
    place.tdse("run scan.json --out disk/out").with(0);
    assert_eq!(place.counts("disk/out"), [12 - points.len(), 0, points.len(), 0]);
    assert_same_bits(&place.path("whole/result.h5"), &place.path("disk/out/result.h5"));
}

#[test]
fn a_disk_that_may_only_be_read_is_refused_and_still_says_how_far_it_is() {
    let place = Place::new();
    let Some(disk) = Small::mount(&place.path("disk")) else { return };
    scan(&place);
    place.tdse("run scan.json --out disk/out --shard 1/2").with(0);
    disk.remount("ro");
    place.tdse("run scan.json --out disk/out").with(2).says(&["disk/out/", "Read-only file system"]);
    place.tdse("run scan.json --out disk/new").with(2).says(&["disk/new", "Read-only file system"]);
    assert!(place.tdse("status disk/out").with(0).data.contains("missing   6"));
    place.tdse("gather disk/out").with(1).says(&["disk/out/", "Read-only file system"]);
    disk.remount("rw");
    place.tdse("run scan.json --out disk/out").with(0);
    assert_eq!(place.counts("disk/out"), [6, 0, 6, 0]);
    assert_same_bits(&place.path("whole/result.h5"), &place.path("disk/out/result.h5"));
}
