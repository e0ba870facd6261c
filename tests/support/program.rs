//! Runs the built program on a file or on a text, and gives its JSON.

use serde_json::Value;
use std::io::Write;
use std::path::Path;
use std::process::{Command, Output, Stdio};

/// What `derive FILE --format json` prints.
///
/// # Errors
/// The exit code and the words on standard error where the code is not 0; output that is no JSON.
pub(crate) fn derive(file: &Path) -> Result<Value, String> {
    let output = command().arg(file).stdin(Stdio::null()).output();
    json(&output.map_err(|error| format!("the program did not start: {error}"))?)
}

/// The same for a circuit that is written on standard input.
pub(crate) fn derive_text(text: &str) -> Result<Value, String> {
    let failed = |error: std::io::Error| format!("the program did not run: {error}");
    let mut child = command().arg("-").stdin(Stdio::piped()).spawn().map_err(failed)?;
    if let Some(mut input) = child.stdin.take() {
        // A program that ends before it has read everything says why on its own.
        let _ = input.write_all(text.as_bytes());
    }
    json(&child.wait_with_output().map_err(failed)?)
}

/// The result of that name.
pub(crate) fn result<'a>(derived: &'a Value, name: &str) -> Result<&'a Value, String> {
    let results = derived["results"].as_array().ok_or("no list of results")?;
    let found = results.iter().find(|result| result["name"] == name);
    found.ok_or_else(|| format!("no result is called `{name}`"))
}

/// The text in that field.
pub(crate) fn text<'a>(value: &'a Value, field: &str) -> Result<&'a str, String> {
    value[field].as_str().ok_or_else(|| format!("the field `{field}` is no text: {}", value[field]))
}

fn command() -> Command {
    let mut command = Command::new(env!("CARGO_BIN_EXE_cofactor"));
    command.args(["derive", "--format", "json"]).stdout(Stdio::piped()).stderr(Stdio::piped());
    command
}

fn json(output: &Output) -> Result<Value, String> {
    if !output.status.success() {
        let words = String::from_utf8_lossy(&output.stderr);
        return Err(format!("{}: {}", output.status, words.trim()));
    }
    serde_json::from_slice(&output.stdout).map_err(|error| format!("no JSON: {error}"))
}
