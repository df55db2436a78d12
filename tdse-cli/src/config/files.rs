//! Where the tables of a configuration are found.

use std::collections::BTreeMap;
use std::io;
use std::path::{Path, PathBuf};

/// Source of the files that a configuration names.
#[derive(Clone, Debug)]
pub enum Files {
    /// The folder of the configuration.
    Folder(PathBuf),
    /// Contents by name, kept with a result.
    Stored(BTreeMap<String, String>),
}

impl From<&Path> for Files {
    fn from(folder: &Path) -> Self {
        Self::Folder(folder.into())
    }
}

/// Folder of stored contents in resolved configurations.
pub const INPUTS: &str = "inputs/";

impl Files {
    /// Contents of `file`, which must be UTF-8.
    pub fn contents(&self, file: &str) -> io::Result<String> {
        match self {
            Self::Folder(folder) => std::fs::read_to_string(folder.join(file)),
            Self::Stored(contents) => {
                let name = file.strip_prefix(INPUTS).unwrap_or(file);
                contents.get(name).cloned().ok_or_else(|| io::Error::from(io::ErrorKind::NotFound))
            }
        }
    }

    /// Where a file lies; nowhere where only contents are kept.
    pub fn path(&self, file: &str) -> Option<PathBuf> {
        match self {
            Self::Folder(folder) => Some(folder.join(file)),
            Self::Stored(_) => None,
        }
    }

    /// Names of the tables that can be read.
    pub fn tables(&self) -> Vec<String> {
        match self {
            Self::Folder(folder) => {
                let entries = std::fs::read_dir(folder).into_iter().flatten().flatten();
                let names = entries.filter_map(|entry| entry.file_name().into_string().ok());
                let mut names: Vec<String> = names.filter(|name| is_table(name)).collect();
                names.sort();
                names
            }
            Self::Stored(contents) => contents.keys().map(|name| format!("{INPUTS}{name}")).collect(),
        }
    }
}

fn is_table(name: &str) -> bool {
    Path::new(name).extension().is_some_and(|extension| extension.eq_ignore_ascii_case("csv"))
}
