//! The program `tdse`.

use std::process::ExitCode;

fn main() -> ExitCode {
    tdse_cli::command::run_program()
}
