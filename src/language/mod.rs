//! The circuit language: pest grammars, the syntax tree with spans, diagnostics, and the step from
//! a syntax tree to a [`crate::circuit::Circuit`].
//!
//! The text is folded (look-alike characters become one), cut into logical lines, and each line is read by
//! itself; names, values and units are resolved over the whole file. Nothing here panics or
//! takes quadratic time, whatever the text.
//!
//! May use: [`crate::circuit`].

mod ask;
mod bias;
mod blocks;
mod build;
mod claim;
mod claim_file;
mod claim_target;
mod codes;
mod definitions;
mod devices;
mod diagnostic;
mod expand;
mod expression;
mod fault;
mod latex;
mod names;
mod nodes;
mod parse;
mod quantity;
mod queries;
mod scope;
mod source;
mod sources;
mod symbols;
mod syntax;
#[cfg(test)]
mod tests;
mod units;
mod walks;
mod warnings;

pub use claim::{UnitClash, claim_units};
pub use codes::CODES;
pub use diagnostic::{
    Diagnostic, Label, MOST_SHOWN, Severity, Span, line_and_column, render, render_all,
};

use crate::circuit::{Ask, Band, Circuit, Claim, Limit, Number, Unit, Value};
use build::Builder;
use parse::{Reader, Rule};
use source::Source;

/// What was understood of a text.
#[derive(Debug)]
pub struct Reading {
    /// The circuit; `None` if any diagnostic is an error.
    pub circuit: Option<Circuit>,
    /// What there is to say, in the order of the text.
    pub diagnostics: Vec<Diagnostic>,
}

/// Reads a circuit file.
pub fn read(text: &str) -> Reading {
    let source = Source::new(text);
    let mut faults = Vec::new();
    let mut statements = Vec::new();
    for line in source.logical_lines() {
        statements.extend(parse::statement(&source, &line, &mut faults));
    }
    let (circuit, mut diagnostics) = Builder::new(&source, faults).build(statements);
    diagnostics.sort_by_key(|diagnostic| (diagnostic.severity, diagnostic.span));
    Reading { circuit, diagnostics }
}

/// Reads a query of the command line: `V(out) / Vin`, or the name of an `ask` of the file.
///
/// # Errors
/// What cannot be read or is unknown; spans are places in `text`.
pub fn query(circuit: &Circuit, text: &str) -> Result<Ask, Vec<Diagnostic>> {
    if let Some(ask) = circuit.asks.iter().find(|ask| ask.name == text.trim()) {
        return Ok(ask.clone());
    }
    let source = Source::new(text);
    let mut faults = Vec::new();
    let range = 0..source.text.len();
    let read = parse::tokens(&source, &range, Rule::query_text, &mut faults)
        .and_then(|pair| Reader { source: &source, offset: 0, faults: &mut faults }.query(pair));
    match read {
        Some(query) => ask::resolve(circuit, &query),
        None => Err(faults),
    }
}

/// Reads a band of the command line: `10 Hz to 1 MHz`.
///
/// # Errors
/// What cannot be read; spans are places in `text`.
pub fn band(text: &str) -> Result<Band, Vec<Diagnostic>> {
    let source = Source::new(text);
    let mut faults = Vec::new();
    let range = 0..source.text.len();
    let read = parse::tokens(&source, &range, Rule::band_text, &mut faults)
        .and_then(|pair| Reader { source: &source, offset: 0, faults: &mut faults }.band(pair));
    match read {
        Some((from, to)) => build::make_band(&from, &to).map_err(|fault| vec![fault]),
        None => Err(faults),
    }
}

/// Reads a quantity of the command line: `1 kHz`, `4k7`, `0.7`; the unit may be left out.
///
/// # Errors
/// What cannot be read; spans are places in `text`.
pub fn quantity(text: &str) -> Result<(Number, Option<Unit>), Vec<Diagnostic>> {
    quantity::whole(text).map_err(|fault| vec![fault])
}

/// Reads a limit of the command line: `A0 to infinity`.
///
/// # Errors
/// What cannot be read or is unknown; spans are places in `text`.
pub fn limit(circuit: &Circuit, text: &str) -> Result<Limit, Vec<Diagnostic>> {
    let source = Source::new(text);
    let mut faults = Vec::new();
    let range = 0..source.text.len();
    let read = parse::tokens(&source, &range, Rule::limit_text, &mut faults).and_then(|pair| {
        Reader { source: &source, offset: 0, faults: &mut faults }.limit(pair.into_inner())
    });
    match read {
        Some((name, point)) => claim::limit(circuit, &name, point).map_err(|fault| vec![fault]),
        None => Err(faults),
    }
}

/// Reads a claim of the command line: `H = 1/(1 + s R1 C1)`, `p1 ~ -1/(R1*C1) within 5 %`.
///
/// Left of the relation may also stand a query; it is added to the questions of the circuit, and its
/// text is its name.
///
/// # Errors
/// What cannot be read or is unknown; spans are places in `text`.
pub fn claim(circuit: &mut Circuit, text: &str) -> Result<Claim, Vec<Diagnostic>> {
    claim_file::one(circuit, text)
}

/// Reads a file of claims: one on each line, or the displayed formulas of a LaTeX document.
///
/// # Errors
/// Everything that cannot be read or is unknown.
pub fn claims(circuit: &mut Circuit, text: &str) -> Result<Vec<Claim>, Vec<Diagnostic>> {
    claim_file::all(circuit, text)
}

/// Reads an expression over the symbols of a circuit, as a claim or a printed result holds it.
///
/// A space multiplies. A symbol with a dot may be written by its identifier (`Q1_gm`) where nothing
/// else bears that name; names that stand for expressions are replaced.
///
/// # Errors
/// What cannot be read or is unknown; spans are places in `text`.
pub fn parse_expression(circuit: &Circuit, text: &str) -> Result<Value, Vec<Diagnostic>> {
    let source = Source::new(text);
    let mut faults = Vec::new();
    let range = 0..source.text.len();
    let read =
        parse::tokens(&source, &range, Rule::expression_text, &mut faults).and_then(|pair| {
            Reader { source: &source, offset: 0, faults: &mut faults }.whole_expression(pair)
        });
    match read {
        Some(expression) => claim::resolve(circuit, &expression),
        None => Err(faults),
    }
}
