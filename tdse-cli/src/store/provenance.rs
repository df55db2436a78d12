//! Where a result comes from.

use std::collections::BTreeMap;

use super::hdf5::{Attribute, Failure, Node};
use super::table::Kind;
use super::values::Values;

/// Where a result comes from: enough to run it again, and to tell what ran.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Provenance {
    /// The user's title; may be empty.
    pub title: String,
    /// Start of the calculation, ISO 8601.
    pub start_time: String,
    /// Its end, ISO 8601.
    pub end_time: String,
    /// Version of the program.
    pub version: String,
    /// Commit the program was built from.
    pub commit: String,
    /// Instruction set chosen at the start.
    pub instruction_set: String,
    /// Cores of the machine.
    pub host_cores: String,
    /// The configuration as the user wrote it.
    pub input: String,
    /// What the command line changed in it.
    pub overrides: String,
    /// The configuration as resolved, which runs again as it is.
    pub configuration: String,
    /// Texts of the files that the configuration names. No name holds a `/`.
    pub inputs: BTreeMap<String, String>,
}

impl Provenance {
    /// Writes the texts into `/entry` and `/entry/provenance`.
    ///
    /// # Panics
    ///
    /// If the name of an input holds a `/`.
    pub(super) fn write(&self, entry: &Node) -> Result<(), Failure> {
        entry.create("provenance", "NXcollection")?;
        if !self.inputs.is_empty() {
            entry.create("provenance/inputs", "NXcollection")?;
        }
        for (place, long_name, text) in self.texts() {
            entry.write(&place, &text.into())?.set("long_name", &Attribute::Text(long_name))?;
        }
        Ok(())
    }

    /// Writes the texts over those of `known`, which has inputs of the same names, where they differ.
    pub(super) fn overwrite(&self, known: &Self, entry: &Node) -> Result<(), Failure> {
        let pairs = self.texts().into_iter().zip(known.texts());
        for ((place, _, text), _) in pairs.filter(|((_, _, text), (_, _, known))| text != known) {
            entry.overwrite(&place, &text.into())?;
        }
        Ok(())
    }

    /// Every text with its place below `/entry` and words for it.
    fn texts(&self) -> Vec<(String, &'static str, &str)> {
        let Self {
            title,
            start_time,
            end_time,
            version,
            commit,
            instruction_set,
            host_cores,
            input,
            overrides,
            configuration,
            inputs,
        } = self;
        let fixed = [
            ("title", "Title", title),
            ("start_time", "Start of the calculation", start_time),
            ("end_time", "End of the calculation", end_time),
            ("provenance/version", "Version of the program", version),
            ("provenance/commit", "Commit the program was built from", commit),
            ("provenance/instruction_set", "Instruction set used", instruction_set),
            ("provenance/host_cores", "Cores of the machine", host_cores),
            ("provenance/input", "Configuration as written", input),
            ("provenance/overrides", "Changes by the command line", overrides),
            ("provenance/configuration", "Configuration as resolved", configuration),
        ];
        let fixed = fixed.map(|(place, long_name, text)| (place.to_owned(), long_name, text.as_str()));
        let inputs = inputs.iter().map(|(name, text)| {
            assert!(!name.contains('/'), "name of an input with a slash: {name}");
            (format!("provenance/inputs/{name}"), "Input file", text.as_str())
        });
        fixed.into_iter().chain(inputs).collect()
    }

    /// Reads the resolved configuration, which comes back with nothing else.
    pub(super) fn read_configuration(entry: &Node) -> Result<Self, Failure> {
        let configuration = read_text(&entry.open("provenance")?, "configuration")?;
        Ok(Self { configuration, ..Self::default() })
    }

    /// Reads the texts back; what is not there is empty.
    pub(super) fn read(entry: &Node) -> Result<Self, Failure> {
        let node = entry.open("provenance")?;
        let mut inputs = BTreeMap::new();
        if node.has("inputs") {
            let node = node.open("inputs")?;
            for name in node.arrays()? {
                let text = read_text(&node, &name)?;
                inputs.insert(name, text);
            }
        }
        Ok(Self {
            title: read_text(entry, "title")?,
            start_time: read_text(entry, "start_time")?,
            end_time: read_text(entry, "end_time")?,
            version: read_text(&node, "version")?,
            commit: read_text(&node, "commit")?,
            instruction_set: read_text(&node, "instruction_set")?,
            host_cores: read_text(&node, "host_cores")?,
            input: read_text(&node, "input")?,
            overrides: read_text(&node, "overrides")?,
            configuration: read_text(&node, "configuration")?,
            inputs,
        })
    }
}

fn read_text(node: &Node, name: &str) -> Result<String, Failure> {
    if !node.has(name) {
        return Ok(String::new());
    }
    let Values::Text(text) = node.read(name, Kind::Text)? else { unreachable!("text was read") };
    match text.as_slice() {
        Some([text]) => Ok(text.clone()),
        _ => Err(format!("{name} holds {} texts", text.len()).into()),
    }
}
