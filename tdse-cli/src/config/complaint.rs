//! What is wrong with a configuration, in one shape: place, value as written, what is allowed, what passes.

use std::fmt;

use serde_json::Value;

use super::quantity;

/// One fault of a configuration.
#[derive(Clone, Debug, PartialEq)]
pub struct Complaint {
    /// Values of the scan axes at the point concerned; `None` if it concerns the file itself.
    pub point: Option<String>,
    /// JSON Pointer (RFC 6901), or line and column where the text is no JSON.
    pub place: String,
    /// The value there as JSON; `None` where there is none.
    pub written: Option<String>,
    /// What is wrong with it.
    pub reason: String,
    /// What may stand there.
    pub allowed: String,
    /// A way out.
    pub fix: Fix,
}

/// What removes a complaint when it is pasted in.
#[derive(Clone, Debug, PartialEq)]
pub enum Fix {
    /// This value at the place of the complaint.
    Value(Value),
    /// This value at another place.
    Elsewhere {
        /// JSON Pointer.
        place: String,
        /// What to write there.
        value: Value,
    },
    /// The same value under this key.
    Key(String),
    /// The key taken out.
    LeaveOut,
    /// What to do, where no value of the configuration is to blame.
    Words(String),
}

impl Complaint {
    /// A complaint about the value at `place`; `None` where nothing is written.
    pub fn new(place: impl Into<String>, written: Option<&Value>, reason: impl Into<String>) -> Self {
        Self {
            point: None,
            place: place.into(),
            written: written.map(shortened),
            reason: reason.into(),
            allowed: String::new(),
            fix: Fix::Words(String::new()),
        }
    }

    /// Says what may stand there.
    #[must_use]
    pub fn allowed(mut self, allowed: impl Into<String>) -> Self {
        self.allowed = allowed.into();
        self
    }

    /// Offers a way out.
    #[must_use]
    pub fn fix(mut self, fix: Fix) -> Self {
        self.fix = fix;
        self
    }
}

/// JSON text, cut after 80 characters: long values are named, not repeated.
fn shortened(value: &Value) -> String {
    let text = match value {
        Value::Number(number) => quantity::number_text(number),
        _ => value.to_string(),
    };
    match text.char_indices().nth(80) {
        Some((end, _)) => format!("{}…", &text[..end]),
        None => text,
    }
}

impl fmt::Display for Complaint {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        if let Some(point) = &self.point {
            write!(f, "at {point}: ")?;
        }
        let place = if self.place.is_empty() { "whole file" } else { &self.place };
        write!(f, "{place}: ")?;
        if let Some(written) = &self.written {
            write!(f, "{written} ")?;
        }
        write!(f, "{}; allowed: {}; {}", self.reason, self.allowed, self.fix)
    }
}

impl fmt::Display for Fix {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::Value(value) => write!(f, "try {value}"),
            Self::Elsewhere { place, value } => write!(f, "at {place} try {value}"),
            Self::Key(key) => write!(f, "as its key try {}", Value::from(key.as_str())),
            Self::LeaveOut => f.write_str("leave it out"),
            Self::Words(words) => f.write_str(words),
        }
    }
}

/// Every fault found, in the order of the file; displayed one per line.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Complaints(pub Vec<Complaint>);

impl Complaints {
    /// `Err(self)` if there is any complaint, sorted by where its place stands in `tree`.
    pub fn into_result(mut self, tree: &Value) -> Result<(), Self> {
        self.0.sort_by_cached_key(|complaint| position(tree, &complaint.place));
        if self.0.is_empty() { Ok(()) } else { Err(self) }
    }
}

impl From<Complaint> for Complaints {
    fn from(complaint: Complaint) -> Self {
        Self(vec![complaint])
    }
}

impl fmt::Display for Complaints {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        for (i, complaint) in self.0.iter().enumerate() {
            let end = if i == 0 { "" } else { "\n" };
            write!(f, "{end}{complaint}")?;
        }
        Ok(())
    }
}

impl std::error::Error for Complaints {}

/// Index of every step of a pointer among its neighbours: compares as the file reads, absent places last.
fn position(tree: &Value, pointer: &str) -> Vec<usize> {
    let mut here = Some(tree);
    super::pointer::segments(pointer)
        .map(|segment| match here {
            Some(Value::Object(map)) => {
                let index = map.keys().position(|key| *key == segment);
                here = map.get(&segment);
                index.unwrap_or(usize::MAX)
            }
            Some(Value::Array(list)) => {
                let index = segment.parse().unwrap_or(usize::MAX);
                here = list.get(index);
                index
            }
            _ => usize::MAX,
        })
        .collect()
}
