//! One line of ASCII, in two dialects.
//!
//! What is written reads back to the same value in both: precedence is that of the circuit
//! language, which is also what other programs expect, and `||` occurs only in the language.
//! It streams: nothing is held but the path to where the writer is.

use std::fmt;

use super::linear::{Binding, Dialect, Mark, Marks};
use super::number;
use super::{Formula, Style, SymbolTable};

/// The formula as a string.
#[must_use]
pub fn text(formula: &Formula, names: &SymbolTable, dialect: Dialect) -> String {
    let mut out = String::new();
    // Writing to a string does not fail.
    let _ = write(&mut out, formula, names, dialect);
    out
}

/// Writes the formula; linear in what is written.
///
/// # Errors
/// Only those of the writer.
pub fn write(
    out: &mut (impl fmt::Write + ?Sized),
    formula: &Formula,
    names: &SymbolTable,
    dialect: Dialect,
) -> fmt::Result {
    let style = match dialect {
        Dialect::Expression => Style::Identifier,
        Dialect::Language => Style::Source,
    };
    for mark in Marks::new(formula, Binding::Sum, dialect) {
        match mark {
            Mark::Number(value) => match dialect {
                Dialect::Expression => write!(out, "{value}")?,
                Dialect::Language => out.write_str(&number::shortest(value))?,
            },
            Mark::Letter(letter) => out.write_str(&names.letter(letter, style))?,
            Mark::Exponent(exponent) => write!(out, "^{exponent}")?,
            Mark::One => out.write_str("1")?,
            Mark::Open => out.write_str("(")?,
            Mark::Close => out.write_str(")")?,
            Mark::Plus => out.write_str(" + ")?,
            Mark::Minus => out.write_str(" - ")?,
            Mark::Negative => out.write_str("-")?,
            Mark::Times => out.write_str("*")?,
            Mark::Over => out.write_str("/")?,
            Mark::Parallel => out.write_str(" || ")?,
        }
    }
    Ok(())
}

#[cfg(test)]
mod tests;
