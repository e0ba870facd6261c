//! Formulas written as the LaTeX of a design note, read into the same trees as expressions.
//!
//! The grammar is `grammar/latex.pest`. What it leaves open is settled here with the names of the
//! circuit and their units: whether `sRC` is one name or three, which symbol `g_{m,Q1}` is, what
//! `\parallel` takes as its operands. Where two readings make sense the answer is an error that shows
//! both.

mod names;
mod reader;

use pest::Parser;

use super::diagnostic::{Diagnostic, Span};
use super::syntax::Expression;
use crate::circuit::Unit;

pub(crate) use names::{Meaning, Name, Names, left_side};

/// The pest parser of the grammar.
#[derive(pest_derive::Parser)]
#[grammar = "../grammar/latex.pest"]
struct Grammar;

/// Whether a formula is LaTeX: it holds a backslash, a brace or a dollar sign, which no expression does.
pub(crate) fn is_latex(text: &str) -> bool {
    text.contains(['\\', '{', '$'])
}

/// What the reader has to know of the circuit.
pub(crate) struct Context<'a> {
    /// The names that the formula may hold.
    pub(crate) names: &'a Names,
    /// The unit of an expression: none for 0, an error where a sum does not fit.
    pub(crate) unit: &'a dyn Fn(&Expression) -> Result<Option<Unit>, ()>,
}

/// Reads a formula; spans are places in `text` moved by `offset`.
///
/// # Errors
/// What cannot be read, names that are unknown, and what has two readings.
pub(crate) fn read(
    context: &Context<'_>,
    text: &str,
    offset: usize,
) -> Result<Expression, Vec<Diagnostic>> {
    let deepest = |open: char, close: char| {
        let mut depth = 0_usize;
        text.chars()
            .map(|c| {
                if c == open {
                    depth += 1;
                } else if c == close {
                    depth = depth.saturating_sub(1);
                }
                depth
            })
            .max()
            .unwrap_or(0)
    };
    let whole = Span { start: offset, end: offset + text.len() };
    if deepest('{', '}') + deepest('(', ')') + deepest('[', ']') > super::parse::DEEPEST {
        let message = format!("parentheses nested more than {} deep", super::parse::DEEPEST);
        return Err(vec![Diagnostic::error("nesting", whole, message)]);
    }
    let mut pairs = Grammar::parse(Rule::formula, text)
        .map_err(|error| vec![syntax_fault(text, offset, &error)])?;
    let sum = pairs.next().and_then(|formula| formula.into_inner().next());
    let Some(sum) = sum else {
        return Err(vec![Diagnostic::error("latex", whole, "an empty formula")]);
    };
    reader::Reader { context, offset }.sum(sum).map_err(|fault| vec![*fault])
}

/// An error of the grammar in words.
fn syntax_fault(text: &str, offset: usize, error: &pest::error::Error<Rule>) -> Diagnostic {
    let position = match error.location {
        pest::error::InputLocation::Pos(position)
        | pest::error::InputLocation::Span((position, _)) => position,
    };
    let position = super::diagnostic::floor(text, position);
    let rest = &text[position..];
    let length = match rest.strip_prefix('\\') {
        Some(command) => {
            let letters = command.bytes().take_while(u8::is_ascii_alphabetic).count();
            1 + letters.max(command.chars().next().map_or(0, char::len_utf8).min(1))
        }
        None => rest.chars().next().map_or(0, char::len_utf8),
    };
    let found = &rest[..length.min(rest.len())];
    let span = if found.is_empty() {
        let last = text.char_indices().next_back().map_or(0, |(at, _)| at);
        Span { start: offset + last, end: offset + text.len() }
    } else {
        Span { start: offset + position, end: offset + position + found.len() }
    };
    let message = if found.is_empty() {
        "the LaTeX formula ends too early".to_owned()
    } else {
        format!("`{found}` cannot be read here as LaTeX")
    };
    Diagnostic::error("latex", span, message).help(
        "a formula holds names with subscripts, `\\frac`, `\\sqrt`, `\\cdot`, `\\parallel`, powers, and pairs of parentheses or braces",
    )
}
