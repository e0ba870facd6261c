//! Claims outside the circuit file: on the command line, and in files of their own.
//!
//! A file of claims holds a claim on each line, with or without the word `claim`, or displayed formulas of
//! a LaTeX document (`\[ … \]`), as `derive --format latex` prints them. There a formula whose left side
//! is no result is an abbreviation for those behind it.

use std::collections::BTreeMap;

use num_traits::Zero;

use super::claim::{self, complete};
use super::claim_target;
use super::diagnostic::{Diagnostic, Span};
use super::latex;
use super::parse::{self, Reader, Rule};
use super::source::{self, LogicalLine, Source};
use super::syntax::{ClaimDraft, Name};
use super::{names, query};
use crate::circuit::{Circuit, Claim, Number, Value};

/// Reads one claim, `H = 1/(1 + s R1 C1)`; what stands left of the relation may also be a query.
///
/// # Errors
/// What cannot be read or is unknown; spans are places in `text`.
pub(super) fn one(circuit: &mut Circuit, text: &str) -> Result<Claim, Vec<Diagnostic>> {
    let source = Source::new(&with_sign(text));
    let start = source.text.len() - source.text.trim_start().len();
    let end = source.text.trim_end().len().max(start);
    statement(circuit, &source, &(start..end), 0)
}

/// With the sign for `\approx`, spaces behind it, so that every place stays where it is.
fn with_sign(text: &str) -> String {
    text.replace("\\approx", "≈    ")
}

/// Reads a file of claims.
///
/// # Errors
/// Everything that cannot be read or is unknown.
pub(super) fn all(circuit: &mut Circuit, text: &str) -> Result<Vec<Claim>, Vec<Diagnostic>> {
    if text.contains("\\[") {
        return document(circuit, &with_sign(text));
    }
    let source = Source::new(&with_sign(text));
    let (mut claims, mut faults) = (Vec::new(), Vec::new());
    for line in source.logical_lines() {
        let number = source.line(source.span(line.clone()).start);
        match statement(circuit, &source, &line, number) {
            Ok(claim) => claims.push(claim),
            Err(more) => faults.extend(more),
        }
    }
    if faults.is_empty() { Ok(claims) } else { Err(faults) }
}

/// A line `NAME = FORMULA`, with or without the word `claim` before it.
fn statement(
    circuit: &mut Circuit,
    source: &Source,
    line: &LogicalLine,
    number: u32,
) -> Result<Claim, Vec<Diagnostic>> {
    let mut start = line.start;
    if source::keyword(&source.text[line.clone()]) == Some("claim") {
        start += "claim".len();
    }
    let content = &source.text[start..line.end];
    let Some(relation) = relation_at(content) else {
        let span = source.span(line.clone());
        return Err(vec![
            Diagnostic::error("syntax", span, "a claim needs `=`, `~` or `≈`")
                .help("write it like `H = 1/(1 + s R1 C1)`"),
        ]);
    };
    let left = start..start + content[..relation].trim_end().len();
    let indent = source.text[left.clone()].len() - source.text[left.clone()].trim_start().len();
    let left = (left.start + indent).min(left.end)..left.end;
    let span = source.span(left.clone());
    let name = left_side(circuit, &source.text[left], span)?;
    let range = start + relation..line.end;
    let mut faults = Vec::new();
    let rule = match latex::is_latex(&source.text[range.clone()]) {
        true => Rule::latex_claim_right,
        false => Rule::claim_right,
    };
    let draft = parse::tokens(source, &range, rule, &mut faults).and_then(|pair| {
        let mut reader = Reader { source, offset: range.start, faults: &mut faults };
        reader.claim(name, pair.into_inner())
    });
    match draft {
        Some(draft) => {
            let text = source.written(draft.span).to_owned();
            complete(circuit, draft, text, number)
        }
        None => Err(faults),
    }
}

/// Where the relation stands: the first `=`, `~` or `≈` outside braces.
fn relation_at(content: &str) -> Option<usize> {
    let mut depth = 0_usize;
    content.char_indices().find_map(|(at, character)| {
        match character {
            '{' => depth += 1,
            '}' => depth = depth.saturating_sub(1),
            '=' | '~' | '≈' if depth == 0 => return Some(at),
            _ => {}
        }
        None
    })
}

/// The name of a claim from what stands on its left: a name, a name in LaTeX, or a query.
fn left_side(circuit: &mut Circuit, text: &str, span: Span) -> Result<Name, Vec<Diagnostic>> {
    let plain = Name { text: names::ascii_name(text), span };
    if text.contains(['\\', '{', '$']) {
        let found = latex_left(circuit, text);
        return match found {
            Some(name) => Ok(Name { text: name, span }),
            None => Err(vec![Diagnostic::error(
                "claim-name",
                span,
                format!("no result is written like `{text}`"),
            )]),
        };
    }
    let fault = match claim_target::find(circuit, &plain) {
        Ok(_) => return Ok(plain),
        Err(fault) => fault,
    };
    // `z_21` and `p_1`, as LaTeX has them without braces.
    if let Some(name) = latex_left(circuit, text).filter(|_| text.contains('_')) {
        return Ok(Name { text: name, span });
    }
    if !text.contains('(') && !text.contains('/') {
        return Err(vec![fault]);
    }
    let mut ask = query(circuit, text).map_err(|mut faults| {
        for fault in &mut faults {
            fault.span.start += span.start;
            fault.span.end += span.start;
        }
        faults
    })?;
    if let Some(known) = circuit.asks.iter().find(|known| known.text == ask.text) {
        return Ok(Name { text: known.name.clone(), span });
    }
    ask.name = ask.text.clone();
    let name = Name { text: ask.name.clone(), span };
    circuit.asks.push(ask);
    Ok(name)
}

/// The result that a left side in LaTeX means.
fn latex_left(circuit: &Circuit, text: &str) -> Option<String> {
    let mut names = claim_target::names(circuit);
    names.extend(["w0", "w0^2", "f0", "Q", "dc", "hf"].map(str::to_owned));
    names.extend((1..=9).flat_map(|number| [format!("p{number}"), format!("z{number}")]));
    let table = latex::Names::new(names.iter().map(String::as_str));
    let meaning = |text: &str| match table.meaning(&latex::Name(latex::left_side(text))) {
        latex::Meaning::One(name) => Some(name.to_owned()),
        _ => None,
    };
    // Behind a bar stands the source; it says nothing new where there is only one.
    match text.split_once("\\big|") {
        None => meaning(text),
        Some((whole, source)) => meaning(&format!("{source}{whole}")).or_else(|| meaning(whole)),
    }
}

/// The displayed formulas of a document.
fn document(circuit: &Circuit, text: &str) -> Result<Vec<Claim>, Vec<Diagnostic>> {
    let (mut claims, mut faults) = (Vec::new(), Vec::new());
    let mut abbreviations: BTreeMap<String, Value> = BTreeMap::new();
    let mut rest = 0;
    while let Some(open) = text[rest..].find("\\[") {
        let start = rest + open + 2;
        let end = text[start..].find("\\]").map_or(text.len(), |close| start + close);
        rest = (end + 2).min(text.len());
        let body = &text[start..end];
        // Words before a formula, and integrals, are not about a function.
        if body.trim_start().starts_with("\\text{") || body.contains("\\int") {
            continue;
        }
        let Some((at, sign)) = body.char_indices().find(|(_, c)| matches!(c, '=' | '≈')) else {
            continue;
        };
        let left = body[..at].replace("\\begin{aligned}", "").replace('&', "");
        let left = left.trim();
        let right_start = start + at + sign.len_utf8();
        let right = &text[right_start..end];
        let right = right.strip_suffix('\n').unwrap_or(right);
        let span = Span { start: right_start, end: right_start + right.len() };
        let line = text[..right_start].bytes().filter(|byte| *byte == b'\n').count() + 1;
        let place = Span { start: right_start - 1, end: right_start };
        match latex_left(circuit, left) {
            Some(name) => {
                let within = (sign == '≈').then(|| Number::new(1.into(), 10.into()));
                let name = Name { text: name, span: place };
                let draft = ClaimDraft { name, within, expression: None, span };
                let line = u32::try_from(line).unwrap_or(u32::MAX);
                match claim::complete_with(circuit, draft, right.to_owned(), line, &abbreviations) {
                    Ok(claim) => claims.push(claim),
                    Err(more) => faults.extend(more),
                }
            }
            None => {
                let key = latex::left_side(left);
                match claim::abbreviation(circuit, right, span, &abbreviations) {
                    Ok(value) if !key.is_empty() && !is_zero(&value) => {
                        abbreviations.insert(key, value);
                    }
                    Ok(_) => {}
                    Err(more) => faults.extend(more),
                }
            }
        }
    }
    if faults.is_empty() { Ok(claims) } else { Err(faults) }
}

fn is_zero(value: &Value) -> bool {
    matches!(value, Value::Number(number) if number.is_zero())
}
