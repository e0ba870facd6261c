//! The command line: arguments, files, streams and exit codes; everything else is the library's.
//!
//! Results go to standard output, everything else to standard error. May use: the whole library.
//!
//! | exit code | meaning |
//! | --- | --- |
//! | 0 | done |
//! | 1 | a claim is false, or a witness disagrees |
//! | 2 | the command line or the file is wrong |
//! | 3 | the circuit has no unique solution; the answer, a limit or a set of parameters does not exist |
//! | 4 | a work bound was reached; what was found before was printed |

mod args;
mod check;
mod derive;
mod failure;
mod input;
mod inspect;
mod messages;
mod note;
mod paper;
mod response;
mod roots;
mod schema;

use std::io::Write;
use std::process::ExitCode;

use clap::Parser;

use args::{Arguments, Command, Format};
use failure::Failure;
use messages::Messages;

/// Stack of the thread that works: the bound on the depth of expressions needs a fraction of it.
const STACK: usize = 64 << 20;

/// Reads the command line, does the work, prints.
pub(crate) fn run() -> ExitCode {
    let arguments = match Arguments::try_parse() {
        Ok(arguments) => arguments,
        Err(error) => return usage(&error),
    };
    let worker =
        std::thread::Builder::new().stack_size(STACK).spawn(move || match arguments.command {
            Command::Derive(derive) => {
                let messages = Messages::new(&derive.output);
                finish(&messages, derive::run(&derive, &messages))
            }
            Command::Roots(roots) => {
                let messages = Messages::new(&roots.output.output());
                finish(&messages, roots::run(&roots, &messages))
            }
            Command::Check(check) => {
                let messages = Messages::new(&check.output);
                finish(&messages, check::run(&check, &messages))
            }
            Command::Response(response) => {
                let messages = Messages::new(&response.output());
                finish(&messages, response::run(&response, &messages))
            }
            Command::Note(note) => {
                let messages = Messages::new(&note.output());
                finish(&messages, note::run(&note, &messages))
            }
            Command::Completions(completions) => {
                finish(&Messages::plain(), paper::completions(&completions))
            }
            Command::Manual(manual) => finish(&Messages::plain(), paper::manual(&manual)),
            Command::Inspect(inspect) => {
                let messages = Messages::new(&inspect.output());
                finish(&messages, inspect::run(&inspect, &messages))
            }
            Command::Schema(schema) => {
                finish(&Messages::new(&args::Output::default()), schema::run(&schema))
            }
        });
    match worker.map(std::thread::JoinHandle::join) {
        Ok(Ok(code)) => ExitCode::from(code),
        // A panic has printed its own message.
        _ => ExitCode::from(2),
    }
}

/// Prints what went wrong and gives the exit code.
fn finish(messages: &Messages, outcome: Result<u8, Failure>) -> u8 {
    match outcome {
        Ok(code) => code,
        Err(failure) => {
            messages.failure(&failure);
            failure.exit_code()
        }
    }
}

/// Help and version are results; anything else is a wrong command line. Under `--format json` that
/// is JSON too.
fn usage(error: &clap::Error) -> ExitCode {
    if !error.use_stderr() {
        let _ = error.print();
        return ExitCode::SUCCESS;
    }
    let wants_json = std::env::args().any(|argument| argument == "--format=json")
        || std::env::args().collect::<Vec<_>>().windows(2).any(|pair| pair == ["--format", "json"]);
    if wants_json {
        let text = error.to_string();
        let message = text.trim_start_matches("error: ").lines().next().unwrap_or_default();
        let failure = Failure::usage(message);
        let _ = writeln!(std::io::stderr(), "{}", failure.json());
    } else {
        let _ = error.print();
    }
    ExitCode::from(2)
}

/// Writes results; a reader that has closed the pipe has had enough.
pub(crate) fn write_results(text: &str) -> Result<(), Failure> {
    let mut out = anstream::stdout().lock();
    match out.write_all(text.as_bytes()).and_then(|()| out.flush()) {
        Err(error) if error.kind() == std::io::ErrorKind::BrokenPipe => Ok(()),
        Err(error) => Err(Failure::output(&error)),
        Ok(()) => Ok(()),
    }
}

/// Columns of the terminal; 80 where there is none.
pub(crate) fn width(format: Format) -> usize {
    match format {
        Format::Text => {
            terminal_size::terminal_size().map_or(80, |(width, _)| usize::from(width.0)).max(40)
        }
        Format::Latex | Format::Json => 80,
    }
}
