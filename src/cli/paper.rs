//! `cofactor completions` and `cofactor manual`: what shells and `man` want, from the definitions of the
//! arguments themselves.

use clap::{Args, CommandFactory};
use clap_complete::Shell;

use super::args::Arguments;
use super::failure::Failure;
use super::write_results;

#[derive(Debug, Args)]
pub(crate) struct Completions {
    /// The shell
    #[arg(value_enum)]
    pub(crate) shell: Shell,
}

#[derive(Debug, Args)]
pub(crate) struct Manual {
    /// The page of one command; the program's own by default
    pub(crate) command: Option<String>,
}

/// Prints the completions of a shell.
pub(crate) fn completions(arguments: &Completions) -> Result<u8, Failure> {
    // Into memory first: a reader may close the pipe.
    let mut text = Vec::new();
    clap_complete::generate(arguments.shell, &mut Arguments::command(), "cofactor", &mut text);
    write_results(&String::from_utf8_lossy(&text))?;
    Ok(0)
}

/// Prints a page for `man`.
pub(crate) fn manual(arguments: &Manual) -> Result<u8, Failure> {
    let mut program = Arguments::command();
    program.build();
    let page = match &arguments.command {
        None => program,
        Some(name) => match program.find_subcommand(name) {
            Some(command) => command.clone(),
            None => {
                let names: Vec<&str> =
                    program.get_subcommands().map(clap::Command::get_name).collect();
                return Err(Failure::option(
                    format!("there is no command `{name}`"),
                    &format!("the commands are {}", names.join(", ")),
                ));
            }
        },
    };
    let mut text = Vec::new();
    clap_mangen::Man::new(page).render(&mut text).map_err(|error| Failure::output(&error))?;
    write_results(&String::from_utf8_lossy(&text))?;
    Ok(0)
}
