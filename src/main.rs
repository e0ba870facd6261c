//! The program: arguments in, results out.

mod cli;

use std::process::ExitCode;

fn main() -> ExitCode {
    cli::run()
}
