//! Answers as a LaTeX fragment that needs amsmath alone.

use std::fmt::Write;

use super::Answer;
use super::json::LATEX_WIDTH;
use crate::typeset::latex::Latex;
use crate::typeset::{Letter, Style, SymbolTable};

/// One displayed formula for each transfer function; definitions of a nested form before it.
pub fn latex(answer: &Answer<'_>) -> String {
    let names = answer.names();
    let writer = Latex { names: &names, width: LATEX_WIDTH };
    let mut out = String::new();
    for (transfer, derivation) in answer.parts() {
        let mut left = name(&answer.ask.name);
        if let Some(source) = answer.source(transfer).filter(|_| answer.ask.superposition) {
            let _ = write!(left, "\\big|_{{{}}}", name(source));
        }
        let written = answer.written(derivation);
        for (definition, index) in written.definitions.iter().zip(0_u32..) {
            let symbol = names.letter(Letter::Definition(index), Style::Latex);
            let _ = writeln!(out, "\\[\n{}\n\\]", writer.equation(&symbol, definition));
        }
        let _ = writeln!(out, "\\[\n{}\n\\]", writer.equation(&left, &written.formula));
        for line in super::sections::latex(&written.sections, &writer) {
            let _ = writeln!(out, "\\[\n{line}\n\\]");
        }
    }
    out
}

/// The name of a result or a source, set like a symbol.
fn name(text: &str) -> String {
    SymbolTable::new([text]).letter(Letter::Symbol(0), Style::Latex).into_owned()
}
