//! Files that appear whole or not at all.

use std::collections::BTreeSet;
use std::io::Write;
use std::path::{Path, PathBuf};
use std::{env, fs, thread};

use super::error::Error;
use super::hdf5::{File, Node};
use super::partial;
use super::pause::{Place, pause};

/// A file that is written, closed, and has not its name yet. It is removed where it never gets one.
#[derive(Debug)]
pub struct Unfinished {
    partial: PathBuf,
    path: PathBuf,
}

impl Drop for Unfinished {
    fn drop(&mut self) {
        // Once it has its name there is none; else a file that is left behind does no harm.
        let _ = fs::remove_file(&self.partial);
    }
}

impl Unfinished {
    fn beside(path: &Path) -> Self {
        Self { partial: partial::beside(path), path: path.into() }
    }

    /// An HDF5 file that is to stand at `path`, filled by `fill`.
    pub(super) fn hdf5(path: &Path, fill: impl FnOnce(&Node) -> Result<(), Error>) -> Result<Self, Error> {
        let this = Self::beside(path);
        // The library's message for a folder that is missing or closed to us is long and says less.
        fs::File::create(&this.partial).map_err(Error::io("create", &this.partial))?;
        let file = File::create(&this.partial).map_err(Error::write(path))?;
        let root = file.root().map_err(Error::write(path))?;
        fill(&root)?;
        pause(Place::Write);
        drop(root);
        file.close().map_err(Error::write(path))?;
        Ok(this)
    }

    /// A file of these bytes that is to stand at `path`.
    pub(super) fn of_bytes(path: &Path, bytes: &[u8]) -> Result<Self, Error> {
        let this = Self::beside(path);
        let (first, rest) = bytes.split_at(bytes.len() / 2);
        let written = fs::File::create(&this.partial).and_then(|mut file| {
            file.write_all(first)?;
            // Results alone: tests wait for points, not for tables.
            if path.extension().is_some_and(|extension| extension == "h5") {
                pause(Place::Write);
            }
            file.write_all(rest)
        });
        written.map_err(Error::io("write", &this.partial))?;
        Ok(this)
    }

    fn sync(&self) -> Result<(), Error> {
        sync(&self.partial).map_err(Error::io("write to the disk", &self.partial))
    }

    /// Gives it its name; the folder it lies in.
    fn rename(&self) -> Result<PathBuf, Error> {
        fs::rename(&self.partial, &self.path).map_err(Error::io("rename a file to", &self.path))?;
        let folder = self.path.parent().filter(|folder| *folder != Path::new(""));
        Ok(folder.unwrap_or(Path::new(".")).into())
    }
}

/// Gives files their names: each is forced to the disk, then renamed, then every folder forced to the disk once. A
/// result for each file.
pub fn publish(files: &[Unfinished]) -> Vec<Result<(), Error>> {
    let mut folders = BTreeSet::new();
    let named: Vec<_> = synced(files)
        .into_iter()
        .zip(files)
        .map(|(synced, file)| synced.and_then(|()| file.rename()))
        .collect();
    let settle = |named: Result<PathBuf, Error>| {
        let folder = named?;
        if !folders.contains(&folder) {
            sync(&folder).map_err(Error::io("write to the disk the folder", &folder))?;
            folders.insert(folder);
        }
        Ok(())
    };
    named.into_iter().map(settle).collect()
}

/// At once, so that the file system can force them to the disk together.
fn synced(files: &[Unfinished]) -> Vec<Result<(), Error>> {
    if let [single] = files {
        return vec![single.sync()];
    }
    thread::scope(|scope| {
        let running: Vec<_> = files.iter().map(|file| scope.spawn(|| file.sync())).collect();
        let ended = running.into_iter().map(thread::ScopedJoinHandle::join);
        ended.map(|ended| ended.unwrap_or_else(|panic| std::panic::resume_unwind(panic))).collect()
    })
}

fn sync(path: &Path) -> std::io::Result<()> {
    fs::File::open(path).and_then(|file| file.sync_all())
}

/// Makes an HDF5 file at `path`, filled by `fill`: there is the whole file or, on any error and whenever killed, what was
/// there before.
pub(super) fn create(path: &Path, fill: impl FnOnce(&Node) -> Result<(), Error>) -> Result<(), Error> {
    publish(&[Unfinished::hdf5(path, fill)?]).into_iter().collect()
}

/// Makes a file of these bytes at `path`, in the same way.
pub(super) fn write(path: &Path, bytes: &[u8]) -> Result<(), Error> {
    publish(&[Unfinished::of_bytes(path, bytes)?]).into_iter().collect()
}

/// Makes the folder that a file lies in.
pub(super) fn make_parent(path: &Path) -> Result<(), Error> {
    let parent = path.parent().unwrap_or(Path::new(""));
    fs::create_dir_all(parent).map_err(Error::io("make the folder", parent))
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
