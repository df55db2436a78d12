//! Files that appear whole or not at all.

use std::env;
use std::fs;
use std::path::Path;

use super::error::Error;
use super::hdf5::{File, Node};
use super::partial;
use super::pause::{Place, pause};

/// Makes an HDF5 file at `path`, filled by `fill`.
///
/// It is written beside under another name, closed, forced to the disk and renamed, and the folder forced to the
/// disk. If anything fails, the unfinished file is removed.
pub(super) fn create(path: &Path, fill: impl FnOnce(&Node) -> Result<(), Error>) -> Result<(), Error> {
    let partial = partial::beside(path);
    let made = compose(&partial, path, fill).and_then(|()| publish(&partial, path));
    if made.is_err() {
        // The first error is the one to report; a file that is left behind does no harm.
        let _ = fs::remove_file(&partial);
    }
    made
}

/// Makes a file of these bytes at `path`, in the same way.
pub(super) fn write(path: &Path, bytes: &[u8]) -> Result<(), Error> {
    let partial = partial::beside(path);
    let made = fs::write(&partial, bytes)
        .map_err(Error::io("write", &partial))
        .and_then(|()| publish(&partial, path));
    if made.is_err() {
        let _ = fs::remove_file(&partial);
    }
    made
}

/// Makes the folder that a file lies in.
pub(super) fn make_parent(path: &Path) -> Result<(), Error> {
    let parent = path.parent().unwrap_or(Path::new(""));
    fs::create_dir_all(parent).map_err(Error::io("make the folder", parent))
}

fn compose(partial: &Path, path: &Path, fill: impl FnOnce(&Node) -> Result<(), Error>) -> Result<(), Error> {
    // The library's message for a folder that is missing or closed to us is long and says less.
    fs::File::create(partial).map_err(Error::io("create", partial))?;
    let file = File::create(partial).map_err(Error::write(path))?;
    let root = file.root().map_err(Error::write(path))?;
    fill(&root)?;
    pause(Place::Write);
    drop(root);
    file.close().map_err(Error::write(path))
}

fn publish(partial: &Path, path: &Path) -> Result<(), Error> {
    let sync = |path: &Path| fs::File::open(path).and_then(|file| file.sync_all());
    sync(partial).map_err(Error::io("write to the disk", partial))?;
    fs::rename(partial, path).map_err(Error::io("rename a file to", path))?;
    let folder = match path.parent() {
        Some(folder) if folder != Path::new("") => folder,
        _ => Path::new("."),
    };
    sync(folder).map_err(Error::io("write to the disk the folder", folder))
}

/// The name of this machine, fit for a file name.
pub fn host_name() -> String {
    let known =
        fs::read_to_string("/proc/sys/kernel/hostname").or_else(|_| fs::read_to_string("/etc/hostname"));
    let name = known.ok().or_else(|| env::var("HOSTNAME").ok()).unwrap_or_default();
    let name: String =
        name.trim().chars().filter(|c| c.is_ascii_alphanumeric() || "-.".contains(*c)).collect();
    if name.is_empty() { "host".into() } else { name }
}
