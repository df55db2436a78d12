//! Where a configuration comes from: a JSON file, or a result that holds one.

use std::fmt;
use std::path::{Path, PathBuf};

use crate::config::Files;
use crate::store;

/// Text of a configuration and the files it names.
#[derive(Clone, Debug)]
pub struct Source {
    /// The text.
    pub text: String,
    /// Its files.
    pub files: Files,
}

/// A configuration that cannot be read.
#[derive(Debug)]
pub struct Unreadable {
    path: PathBuf,
    reason: String,
}

impl fmt::Display for Unreadable {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(
            f,
            "{}: {}; allowed: a configuration in JSON, or the .h5 file of a result",
            self.path.display(),
            self.reason
        )
    }
}

impl std::error::Error for Unreadable {}

/// Reads a configuration: of a `.h5` file, the one it was asked with (a scan with its axes) or the resolved one of a
/// point.
///
/// # Errors
/// [`Unreadable`], with the path and the reason.
pub fn source(path: &Path) -> Result<Source, Unreadable> {
    let unreadable = |reason: String| Unreadable { path: path.into(), reason };
    if path.extension().is_some_and(|extension| extension.eq_ignore_ascii_case("h5")) {
        let provenance =
            store::read_groups(path, &[]).map_err(|error| unreadable(error.to_string()))?.provenance;
        return Ok(Source { text: provenance.configuration, files: Files::Stored(provenance.inputs) });
    }
    let bytes = std::fs::read(path).map_err(|error| unreadable(error.to_string()))?;
    let text = String::from_utf8(bytes).map_err(|error| unreadable(error.to_string()))?;
    let folder = path.parent().unwrap_or(Path::new("")).to_owned();
    Ok(Source { text, files: Files::Folder(folder) })
}
