//! Data to stdout, talk to stderr. Whoever reads may have gone away: that is no reason to stop.

use std::fmt::Display;
use std::io::{Write, stderr, stdout};

/// Writes data to stdout.
pub fn data(text: impl Display) {
    let mut out = stdout().lock();
    // A reader that closed the pipe wants no more.
    let _ = write!(out, "{text}").and_then(|()| out.flush());
}

/// Writes one line of talk to stderr.
pub fn talk(line: impl Display) {
    let _ = writeln!(stderr().lock(), "{line}");
}
