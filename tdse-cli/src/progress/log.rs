//! The log of one process: a JSON object per line.

use std::fs::{self, File};
use std::io::Write;
use std::path::Path;
use std::process;

use jiff::Timestamp;
use serde::Serialize;

use super::event::Event;
use crate::store::{Error, host_name};

/// An open log.
#[derive(Debug)]
pub(super) struct Log {
    file: File,
}

#[derive(Serialize)]
struct Line<'a> {
    time: String,
    #[serde(flatten)]
    event: &'a Event,
}

impl Log {
    /// Makes `<start>-<host>-<pid>.jsonl` in a folder, and the folder.
    pub fn create(folder: &Path) -> Result<Self, Error> {
        let refused =
            |doing: &'static str, path: &Path, source| Error::Io { doing, path: path.into(), source };
        fs::create_dir_all(folder).map_err(|source| refused("make the folder", folder, source))?;
        let start = Timestamp::now().strftime("%Y%m%dT%H%M%S%3fZ");
        let path = folder.join(format!("{start}-{}-{}.jsonl", host_name(), process::id()));
        let file = File::options().create(true).append(true).open(&path);
        Ok(Self { file: file.map_err(|source| refused("make the log", &path, source))? })
    }

    /// Writes a line. Losing one is no reason to stop computing.
    pub fn write(&mut self, event: &Event) {
        let line = Line { time: Timestamp::now().strftime("%Y-%m-%dT%H:%M:%S%.3fZ").to_string(), event };
        if let Ok(mut text) = serde_json::to_string(&line) {
            text.push('\n');
            let _ = self.file.write_all(text.as_bytes());
        }
    }
}
