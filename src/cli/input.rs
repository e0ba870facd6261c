//! From arguments to a circuit and its questions.

use std::io::Read;
use std::path::Path;

use cofactor::circuit::{Ask, Circuit, SymbolId};
use cofactor::language::{self, Diagnostic, Reading, Severity, line_and_column};
use cofactor::typeset::json;

use super::args::Input;
use super::failure::Failure;
use super::messages::Messages;

/// Bytes of a file that are read at most; a circuit of a million elements needs a fraction.
const LARGEST_FILE: u64 = 256 << 20;

/// A circuit file as read.
pub(crate) struct Loaded {
    pub(crate) circuit: Circuit,
    /// The questions to answer.
    pub(crate) asks: Vec<Ask>,
    /// Warnings and notices about the text.
    pub(crate) remarks: Vec<Diagnostic>,
    /// The text, for places.
    pub(crate) text: String,
}

/// Reads the file and applies the options.
pub(crate) fn load(input: &Input, messages: &Messages) -> Result<Loaded, Failure> {
    let Loaded { mut circuit, remarks, text, .. } = load_file(&input.file, messages)?;
    apply_band_and_limits(&mut circuit, input)?;
    let asks = questions(&circuit, input)?;
    if let Some(keep) = &input.keep {
        circuit = keep_symbols(&circuit, keep)?;
    }
    Ok(Loaded { circuit, asks, remarks, text })
}

/// Puts the band and the limits of the command line in.
pub(crate) fn apply_band_and_limits(circuit: &mut Circuit, input: &Input) -> Result<(), Failure> {
    if let Some(band) = &input.band {
        circuit.band = Some(language::band(band).map_err(|diagnostics| Failure::Text {
            name: "--band".to_owned(),
            text: band.clone(),
            diagnostics,
        })?);
    }
    for limit in &input.limits {
        let read = language::limit(circuit, limit).map_err(|diagnostics| Failure::Text {
            name: "--limit".to_owned(),
            text: limit.clone(),
            diagnostics,
        })?;
        circuit.limits.push(read);
    }
    Ok(())
}

/// Reads the file; the questions are its own, if it has any.
pub(crate) fn load_file(file: &Path, messages: &Messages) -> Result<Loaded, Failure> {
    let name = file.display().to_string();
    let text = read_text(file).map_err(|error| Failure::input(&name, &error))?;
    let Reading { circuit, diagnostics } = language::read(&text);
    messages.remarks(&name, &text, &diagnostics);
    let (errors, remarks): (Vec<_>, Vec<_>) =
        diagnostics.into_iter().partition(|diagnostic| diagnostic.severity == Severity::Error);
    match circuit {
        Some(circuit) => Ok(Loaded { asks: circuit.asks.clone(), circuit, remarks, text }),
        None => Err(Failure::Text { name, text, diagnostics: errors }),
    }
}

/// What was said about the text, for JSON.
pub(crate) fn warnings(loaded: &Loaded) -> Vec<json::Warning> {
    warnings_about(&loaded.text, &loaded.remarks)
}

/// Remarks about a text, for JSON.
pub(crate) fn warnings_about(text: &str, remarks: &[Diagnostic]) -> Vec<json::Warning> {
    let warning = |diagnostic: &Diagnostic| {
        debug_assert!(diagnostic.severity != Severity::Error, "errors end the run before");
        let (line, column) = line_and_column(text, diagnostic.span.start);
        json::Warning {
            code: diagnostic.code.to_owned(),
            message: diagnostic.message.clone(),
            line: Some(line),
            column: Some(column),
        }
    };
    remarks.iter().map(warning).collect()
}

pub(crate) fn read_text(path: &Path) -> std::io::Result<String> {
    let mut bytes = Vec::new();
    if path == Path::new("-") {
        std::io::stdin().lock().take(LARGEST_FILE + 1).read_to_end(&mut bytes)?;
    } else {
        std::fs::File::open(path)?.take(LARGEST_FILE + 1).read_to_end(&mut bytes)?;
    }
    if bytes.len() as u64 > LARGEST_FILE {
        let message = format!("it has more than {} MiB", LARGEST_FILE >> 20);
        return Err(std::io::Error::new(std::io::ErrorKind::FileTooLarge, message));
    }
    String::from_utf8(bytes)
        .map_err(|error| std::io::Error::new(std::io::ErrorKind::InvalidData, error.utf8_error()))
}

/// The queries of the command line, or the questions of the file.
fn questions(circuit: &Circuit, input: &Input) -> Result<Vec<Ask>, Failure> {
    if input.queries.is_empty() {
        if circuit.asks.is_empty() {
            return Err(Failure::option(
                "the file asks nothing, and neither does the command line".to_owned(),
                "add a line such as `ask H = V(out) / Vin`, or give a query: `cofactor derive FILE \"V(out) / Vin\"`",
            ));
        }
        return Ok(circuit.asks.clone());
    }
    input
        .queries
        .iter()
        .map(|query| {
            language::query(circuit, query).map_err(|diagnostics| Failure::Text {
                name: "query".to_owned(),
                text: query.clone(),
                diagnostics,
            })
        })
        .collect()
}

/// The circuit with the numbers of all symbols but these put in.
pub(crate) fn keep_symbols(circuit: &Circuit, keep: &[String]) -> Result<Circuit, Failure> {
    let mut kept: Vec<SymbolId> = Vec::new();
    for name in keep.iter().map(|name| name.trim()).filter(|name| !name.is_empty()) {
        match circuit.symbol(name) {
            Some(symbol) => kept.push(symbol),
            None => {
                return Err(Failure::option(
                    format!("`--keep` names `{name}`, which is no symbol of this circuit"),
                    "symbols are elements with a value of their own, and parameters",
                ));
            }
        }
    }
    // What goes to a limit has to be a symbol until then.
    kept.extend(circuit.limits.iter().filter_map(|limit| limit.symbol));
    circuit.with_numbers(|symbol| !kept.contains(&symbol)).map_err(|missing| {
        Failure::option(
            format!("`{}` has no nominal value to put in", circuit[missing].name),
            "give it a value in the file, or name it in `--keep`",
        )
    })
}
