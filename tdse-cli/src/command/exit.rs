//! How the program ends.

use std::fmt;
use std::process::ExitCode;

use crate::scan::run::Signal;

/// How a command that started has ended.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Exit {
    /// Everything asked for is there.
    Complete,
    /// It started, and something asked for is missing.
    Incomplete,
    /// It was refused before anything ran.
    Refused,
    /// A signal stopped it; the same command continues.
    Stopped(Signal),
}

impl From<Exit> for ExitCode {
    fn from(exit: Exit) -> Self {
        Self::from(match exit {
            Exit::Complete => 0,
            Exit::Incomplete => 1,
            Exit::Refused => 2,
            Exit::Stopped(signal) => signal.exit_status(),
        })
    }
}

/// Why a command could not do what was asked; the message is for people and may have several lines.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Trouble {
    /// How the program ends.
    pub exit: Exit,
    /// What to say.
    pub message: String,
}

impl Trouble {
    /// Refused before anything ran.
    pub fn refused(reason: impl fmt::Display) -> Self {
        Self { exit: Exit::Refused, message: reason.to_string() }
    }

    /// Started, and something is missing.
    pub fn incomplete(reason: impl fmt::Display) -> Self {
        Self { exit: Exit::Incomplete, message: reason.to_string() }
    }
}
