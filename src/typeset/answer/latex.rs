//! Answers as a LaTeX fragment that needs amsmath alone.

use std::fmt::Write;

use super::json::LATEX_WIDTH;
use super::{Answer, lettering_of, names, written};
use crate::typeset::latex::Latex;
use crate::typeset::shape::compact;
use crate::typeset::{Letter, Style, SymbolTable};

/// One displayed formula for each result; definitions of a nested form before it.
pub fn latex(answer: &Answer<'_>) -> String {
    let mut out = String::new();
    for entry in answer.entries {
        let names = names(entry);
        let writer = Latex { names: &names, width: LATEX_WIDTH };
        let mut left = left_side(&entry.name);
        if let Some(source) = &entry.source {
            let _ = write!(left, "\\big|_{{{}}}", name(source));
        }
        if entry.noise.is_some() {
            left.push_str("(f)");
        }
        let written = written(entry, answer.shape);
        for (definition, index) in written.definitions.iter().zip(0_u32..) {
            let symbol = names.letter(Letter::Definition(index), Style::Latex);
            let _ = writeln!(out, "\\[\n{}\n\\]", writer.equation(&symbol, definition));
        }
        let _ = writeln!(out, "\\[\n{}\n\\]", writer.equation(&left, &written.formula));
        for line in super::sections::latex(&written.sections, &writer) {
            let _ = writeln!(out, "\\[\n{line}\n\\]");
        }
        if let Some(total) = entry.noise.as_ref().and_then(|noise| noise.total.as_ref()) {
            let square = compact(&total.square, lettering_of(&entry.symbols));
            let left = format!("\\int_0^\\infty {left}\\,\\mathrm{{d}}f");
            let _ = writeln!(out, "\\[\n{}\n\\]", writer.equation(&left, &square));
        }
    }
    out
}

/// The name of a result; the parts of a ratio around a source as the asymptotic gain formula has them.
fn left_side(text: &str) -> String {
    match text.rsplit_once('.') {
        Some((whole, "ideal")) => format!("{{{}}}_{{\\infty}}", name(whole)),
        Some((whole, "return_ratio")) => format!("T_{{{}}}", name(whole)),
        Some((whole, "feed_through")) => format!("{{{}}}_{{0}}", name(whole)),
        _ => name(text),
    }
}

/// The name of a result or a source, set like a symbol.
fn name(text: &str) -> String {
    SymbolTable::new([text]).letter(Letter::Symbol(0), Style::Latex).into_owned()
}
