//! `schema NAME`: the JSON Schema (draft 2020-12) of what a command prints under `--format json`.
//!
//! One file for each format, and a row here. `tests/schemas.rs` holds the outputs of the examples against
//! them.

use clap::Args;
use clap::builder::PossibleValuesParser;

use super::{Failure, write_results};

/// Names and texts.
const SCHEMAS: [(&str, &str); 5] = [
    ("derive", include_str!("derive.json")),
    ("roots", include_str!("roots.json")),
    ("check", include_str!("check.json")),
    ("inspect", include_str!("inspect.json")),
    ("error", include_str!("error.json")),
];

/// What was typed behind `schema`.
#[derive(Debug, Args)]
pub(crate) struct Schema {
    /// The command whose output is described, or `error`
    #[arg(value_parser = PossibleValuesParser::new(SCHEMAS.map(|(name, _)| name)))]
    name: String,
}

/// Prints a schema.
pub(crate) fn run(schema: &Schema) -> Result<u8, Failure> {
    for (name, text) in SCHEMAS {
        if name == schema.name {
            write_results(text)?;
        }
    }
    Ok(0)
}
