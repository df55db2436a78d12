//! The command line: one file per command.

pub mod check;
pub mod compare;
pub mod continuum;
mod exit;
pub mod gather;
mod headline;
pub mod options;
pub mod output;
pub mod refine;
pub mod report;
pub mod run;
pub mod states;
pub mod status;
mod verdict;

use std::process::ExitCode;

use clap::error::ErrorKind;
use clap::{Parser, Subcommand};

pub use exit::{Exit, Trouble};
use options::{Asked, Place, RefineOptions, RunOptions, StatesOptions};

use crate::config::schema;
use crate::scan::prepare::Prepared;
use crate::scan::run::machine;

/// Strong-field and attosecond physics of one active electron: from one JSON file to checked results.
#[derive(Debug, Parser)]
#[command(name = "tdse", version, disable_help_subcommand = true)]
struct Line {
    #[command(subcommand)]
    command: Command,
}

#[derive(Debug, Subcommand)]
enum Command {
    /// Say what would be computed, how, at what cost, and what is doubtful; compute nothing long
    Check(Asked),
    /// Compute a run or a scan, continue one that stopped, gather and draw the results
    Run(RunOptions),
    /// Run, repeat with finer numerics, and put an error bar on every number
    Refine(RefineOptions),
    /// Compare two results number by number, or the values of one scan with its first
    Compare(compare::Options),
    /// Say which points of a folder are done, doubtful, failed or missing
    Status(Place),
    /// Build result.h5 from the points that exist
    Gather(Place),
    /// Draw pictures and one page of a folder's results
    Report(report::Options),
    /// Print the bound states and the tuned softening, or the scattering states
    States(StatesOptions),
    /// Print the JSON Schema of the configuration
    Schema,
}

/// Runs the program with the arguments of its process.
pub fn run_program() -> ExitCode {
    let command = match Line::try_parse() {
        Ok(line) => line.command,
        Err(error) => return misspelled(&error).into(),
    };
    let ended = match &command {
        Command::Check(asked) => printed(asked, |prepared| Ok(check::text(prepared, machine::jobs(None)))),
        Command::Run(options) => run::run(options),
        Command::Refine(options) => refine::refine(options),
        Command::Compare(options) => compare::compare(options),
        Command::Status(place) => status::status(&place.dir),
        Command::Gather(place) => gather::gather(&place.dir),
        Command::Report(options) => report::report(options),
        Command::States(options) => printed(&options.asked, |prepared| match options.continuum {
            None => states::text(prepared).map_err(Trouble::incomplete),
            Some(highest) => continuum::text(prepared, highest).map_err(Trouble::incomplete),
        }),
        Command::Schema => {
            output::data(schema::text());
            Ok(Exit::Complete)
        }
    };
    let exit = ended.unwrap_or_else(|trouble| {
        output::talk(&trouble.message);
        trouble.exit
    });
    exit.into()
}

/// Prints a text about a request.
fn printed(asked: &Asked, text: impl Fn(&Prepared) -> Result<String, Trouble>) -> Result<Exit, Trouble> {
    output::data(text(&asked.prepare()?)?);
    Ok(Exit::Complete)
}

/// Help and version where asked for; else one line that says what is wrong with the command line.
fn misspelled(error: &clap::Error) -> Exit {
    match error.kind() {
        ErrorKind::DisplayHelp | ErrorKind::DisplayVersion => {
            output::data(error);
            Exit::Complete
        }
        ErrorKind::DisplayHelpOnMissingArgumentOrSubcommand => {
            output::talk(error);
            Exit::Refused
        }
        _ => {
            output::talk(one_line(&error.to_string()));
            Exit::Refused
        }
    }
}

/// What comes before the usage, in one line.
fn one_line(text: &str) -> String {
    let wrong = text.lines().take_while(|line| !line.starts_with("Usage:") && !line.starts_with("For more"));
    let words = wrong.flat_map(str::split_whitespace).collect::<Vec<_>>().join(" ");
    let words = words.trim_start_matches("error: ").replace(" tip: ", "; ");
    format!("{words}; `tdse --help` lists what there is")
}

#[cfg(test)]
mod tests {
    use super::*;

    fn refusal(arguments: &[&str]) -> String {
        one_line(&Line::try_parse_from(arguments).expect_err("a wrong command line").to_string())
    }

    #[test]
    fn a_wrong_command_line_is_refused_in_one_line_that_names_the_value() {
        for (arguments, words) in [
            (&["tdse", "run", "a.json", "--out", "o", "--jobs", "0"][..], ["'0'", "--jobs", "at least 1"]),
            (&["tdse", "run", "a.json", "--out", "o", "--jobs", "many"], ["'many'", "--jobs", "at least 1"]),
            (&["tdse", "run", "a.json", "--out", "o", "--shard", "3/2"], ["'3/2'", "--shard", "1 <= K <= N"]),
            (&["tdse", "run", "a.json", "--out", "o", "--shard", "0/2"], ["'0/2'", "--shard", "1 <= K <= N"]),
            (&["tdse", "run", "a.json", "--out", "o", "--within", "2"], ["'2'", "--within", "\"2 h\""]),
            (
                &["tdse", "run", "a.json", "--out", "o", "--within", "-1 h"],
                ["'-1 h'", "--within", "positive"],
            ),
            (&["tdse", "run", "a.json"], ["required", "--out", "--help"]),
            (&["tdse", "runn", "a.json"], ["'runn'", "run", "--help"]),
        ] {
            let line = refusal(arguments);
            assert!(!line.contains('\n'), "{line}");
            for word in words {
                assert!(line.contains(word), "{line}: no {word}");
            }
        }
    }

    #[test]
    fn the_command_line_is_sound() {
        use clap::CommandFactory;
        Line::command().debug_assert();
    }
}
