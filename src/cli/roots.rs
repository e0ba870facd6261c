//! `cofactor roots`: poles and zeros, and which elements set each.

use cofactor::analysis::roots;
use cofactor::analysis::{self, Options};
use cofactor::language::line_and_column;
use cofactor::typeset::answer::roots::{self as typeset, Answer};
use cofactor::typeset::answer::{self, TextStyle};
use cofactor::typeset::json;
use cofactor::typeset::screen::{Characters, Screen};

use super::args::{Format, Roots, RootsFormat};
use super::failure::Failure;
use super::input::{self, Loaded};
use super::messages::Messages;
use super::{width, write_results};

/// Runs the command; the exit code is 0, or 1 when a witness disagrees.
pub(crate) fn run(arguments: &Roots, messages: &Messages) -> Result<u8, Failure> {
    let loaded = input::load(&arguments.input, messages)?;
    let mut passed = true;
    let mut results = Vec::new();
    let mut warnings = remarks(&loaded);
    for (index, ask) in loaded.asks.iter().enumerate() {
        let mut reports = Vec::new();
        for transfer in &ask.transfers {
            let options = Options { max_terms: arguments.max_terms, ..Options::default() };
            let derivation = analysis::derive(&loaded.circuit, transfer, &options)
                .map_err(|error| Failure::analysis(&ask.name, &error))?;
            let report = roots::analyse(&loaded.circuit, transfer, &derivation)
                .map_err(|error| Failure::roots(&ask.name, &error))?;
            passed &= derivation.evidence.passed();
            for notice in derivation.notices.iter().chain(&report.notices) {
                messages.notice(&ask.name, notice);
                let warning = answer::warning(notice);
                if !warnings.contains(&warning) {
                    warnings.push(warning);
                }
            }
            reports.push(report);
        }
        let answer = Answer { circuit: &loaded.circuit, ask, reports: &reports };
        if arguments.output.format == RootsFormat::Json {
            results.push(typeset::result(&answer));
        } else {
            print(arguments, &loaded, &answer, index == 0)?;
        }
    }
    if arguments.output.format == RootsFormat::Json {
        let whole = typeset::Roots {
            schema: typeset::ROOTS_SCHEMA,
            circuit: loaded.circuit.title.clone(),
            symbols: answer::symbols(&loaded.circuit),
            results,
            warnings,
        };
        let mut text =
            serde_json::to_string_pretty(&whole).map_err(|error| Failure::output(&error.into()))?;
        text.push('\n');
        write_results(&text)?;
    }
    Ok(u8::from(!passed))
}

fn print(
    arguments: &Roots,
    loaded: &Loaded,
    answer: &Answer<'_>,
    first: bool,
) -> Result<(), Failure> {
    let output = &arguments.output;
    let characters = if output.ascii { Characters::Ascii } else { Characters::Unicode };
    let screen = Screen { width: width(Format::Text), characters };
    let style = TextStyle { screen, quiet: output.quiet };
    let mut text = String::new();
    match &loaded.circuit.title {
        Some(title) if first && !output.quiet => text.push_str(&format!("{title}\n\n")),
        _ if !first => text.push('\n'),
        _ => {}
    }
    text.push_str(&typeset::text(answer, style));
    write_results(&text)
}

fn remarks(loaded: &Loaded) -> Vec<json::Warning> {
    let warning = |diagnostic: &cofactor::language::Diagnostic| {
        let (line, column) = line_and_column(&loaded.text, diagnostic.span.start);
        json::Warning {
            code: diagnostic.code.to_owned(),
            message: diagnostic.message.clone(),
            line: Some(line),
            column: Some(column),
        }
    };
    loaded.remarks.iter().map(warning).collect()
}
