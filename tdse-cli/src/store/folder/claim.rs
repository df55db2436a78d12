//! Making a folder for a request, or finding that it is there already.

use std::collections::BTreeMap;
use std::fs;
use std::path::{Path, PathBuf};

use serde_json::{Value, json};

use super::{Folder, LAYOUT_VERSION, Request, difference, write_json};
use crate::store::error::Error;
use crate::store::{atomic, partial};

/// How a folder was found.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Claim {
    /// Absent or empty.
    New,
    /// With this very request.
    Same,
    /// With a request that may become this one.
    Changed {
        /// Parts of the configuration that are other ones now.
        parts: Vec<String>,
        /// Where the request before is kept.
        kept: PathBuf,
    },
}

impl Folder {
    /// Takes a folder for a request; `inputs` are the tables it names.
    ///
    /// Nothing is written where the folder is refused.
    ///
    /// # Errors
    /// A folder that holds other things, another request, or a newer layout; and whatever the disk refuses.
    pub fn claim(
        root: &Path,
        request: &Request,
        inputs: &BTreeMap<String, String>,
    ) -> Result<(Self, Claim), Error> {
        let folder = Self { root: root.into() };
        let claim = folder.compare(request)?;
        match &claim {
            Claim::Same => {}
            Claim::New => {
                fs::create_dir_all(root).map_err(Error::io("make the folder", root))?;
                folder.write_request(request)?;
            }
            Claim::Changed { kept, .. } => {
                let path = folder.request_path();
                fs::copy(&path, kept).map_err(Error::io("keep the request before in", kept))?;
                folder.write_request(request)?;
            }
        }
        for (name, text) in inputs {
            let path = root.join("inputs").join(name);
            // Names hold the hash of the contents, but a file may have been cut short by hand.
            if fs::read_to_string(&path).ok().as_ref() != Some(text) {
                atomic::make_parent(&path)?;
                atomic::write(&path, text.as_bytes())?;
            }
        }
        Ok((folder, claim))
    }

    fn write_request(&self, request: &Request) -> Result<(), Error> {
        let mut tree = json!({ "layout_version": LAYOUT_VERSION });
        if let (Value::Object(tree), Ok(Value::Object(rest))) = (&mut tree, serde_json::to_value(request)) {
            tree.extend(rest);
        }
        write_json(&self.request_path(), &tree)
    }

    fn compare(&self, request: &Request) -> Result<Claim, Error> {
        if !self.request_path().exists() && self.is_vacant()? {
            return Ok(Claim::New);
        }
        let before = self.request()?;
        let (old, new) = (&before.configuration, &request.configuration);
        let differences = difference::between(old, new);
        if !differences.is_empty() {
            return Err(Error::OtherRequest { path: self.root.clone(), differences });
        }
        let parts = difference::changed_parts(old, new);
        if parts.is_empty() && before.numerics_version == request.numerics_version {
            return Ok(Claim::Same);
        }
        let number = (1..u32::MAX).find(|n| !self.kept(*n).exists()).unwrap_or(1);
        Ok(Claim::Changed { parts, kept: self.kept(number) })
    }

    fn kept(&self, number: u32) -> PathBuf {
        self.root.join(format!("request-{number}.json"))
    }

    /// Whether nothing is there but what a process that was killed may leave.
    fn is_vacant(&self) -> Result<bool, Error> {
        let root = &self.root;
        if !root.exists() {
            return Ok(true);
        }
        for entry in fs::read_dir(root).map_err(Error::io("read the folder", root))? {
            let name = entry.map_err(Error::io("read the folder", root))?.file_name();
            // Another process may have written the request by now.
            if !partial::is_partial(&name.to_string_lossy()) && !self.request_path().exists() {
                let reason = "it is not empty and has no request.json; give an absent or empty folder";
                return Err(Error::Foreign { path: root.clone(), reason });
            }
        }
        Ok(!self.request_path().exists())
    }
}
