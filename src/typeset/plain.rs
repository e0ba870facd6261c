//! One line of ASCII, in two dialects.
//!
//! Precedence from weak to strong: `+ -`, unary `-`, `||`, `* /`, `^`; `-s^2` is −(s²) and `a/b/c`
//! is (a/b)/c. An operand of `||` is a name, a number or a parenthesis, and beside `*`, `/`, `^` a
//! parallel stands in parentheses. What is written reads back to the same value in both dialects.
//!
//! The writer keeps its own stack of pending pieces: it streams, and depth costs no native stack.

use std::fmt;

use super::number;
use super::{Formula, Letter, Style, SymbolTable, View};

/// Which text is written.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Dialect {
    /// For any program: identifiers, integers and `+ - * / ^ ( )` only. A decimal is a fraction,
    /// `a || b` is written out.
    Expression,
    /// The circuit language: names as in the source, decimals, `||`.
    Language,
}

/// How strongly the written form holds together.
#[derive(Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
enum Binding {
    Sum,
    Parallel,
    Product,
    Power,
    Atom,
}

enum Piece<'a> {
    Text(&'static str),
    Exponent(u32),
    /// A formula, in parentheses when it binds more weakly than that.
    Formula(&'a Formula, Binding),
}

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
    let mut stack = vec![Piece::Formula(formula, Binding::Sum)];
    // The pieces of one operation in reading order, before they go on the stack in reverse.
    let mut pieces = Vec::new();
    while let Some(piece) = stack.pop() {
        match piece {
            Piece::Text(text) => out.write_str(text)?,
            Piece::Exponent(exponent) => write!(out, "^{exponent}")?,
            Piece::Formula(formula, least) => {
                let parenthesised = binding(formula, dialect) < least;
                if parenthesised {
                    out.write_str("(")?;
                    stack.push(Piece::Text(")"));
                }
                match formula.view() {
                    View::Number(value) if dialect == Dialect::Expression => {
                        write!(out, "{value}")?;
                    }
                    View::Number(value) => out.write_str(&number::shortest(value))?,
                    View::Letter(letter) => write_letter(out, letter, names, dialect)?,
                    _ => split(formula, dialect, &mut pieces),
                }
                stack.extend(pieces.drain(..).rev());
            }
        }
    }
    Ok(())
}

fn write_letter(
    out: &mut (impl fmt::Write + ?Sized),
    letter: Letter,
    names: &SymbolTable,
    dialect: Dialect,
) -> fmt::Result {
    let style = match dialect {
        Dialect::Expression => Style::Identifier,
        Dialect::Language => Style::Source,
    };
    out.write_str(&names.letter(letter, style))
}

fn binding(formula: &Formula, dialect: Dialect) -> Binding {
    match formula.view() {
        View::Letter(_) => Binding::Atom,
        View::Number(value) if value.is_integer() => Binding::Atom,
        View::Number(value) if dialect == Dialect::Language && number::is_short(value) => {
            Binding::Atom
        }
        View::Number(_) | View::Product(_) | View::Quotient(..) => Binding::Product,
        View::Power(..) => Binding::Power,
        View::Sum(_) | View::Negative(_) => Binding::Sum,
        View::Parallel(_) => match dialect {
            Dialect::Expression => Binding::Product,
            Dialect::Language => Binding::Parallel,
        },
    }
}

/// The pieces of an operation, in reading order.
fn split<'a>(formula: &'a Formula, dialect: Dialect, pieces: &mut Vec<Piece<'a>>) {
    match formula.view() {
        View::Number(_) | View::Letter(_) => {}
        View::Sum(terms) => {
            for (index, term) in terms.iter().enumerate() {
                let (sign, term) = match (term.view(), index) {
                    (View::Negative(term), 0) => ("-", term),
                    (View::Negative(term), _) => (" - ", term),
                    (_, 0) => ("", term),
                    _ => (" + ", term),
                };
                pieces.extend([Piece::Text(sign), Piece::Formula(term, Binding::Parallel)]);
            }
        }
        View::Negative(operand) => {
            pieces.extend([Piece::Text("-"), Piece::Formula(operand, Binding::Parallel)]);
        }
        View::Product(factors) => {
            for (index, factor) in factors.iter().enumerate() {
                if index > 0 {
                    pieces.push(Piece::Text("*"));
                }
                // `a/b*c` is (a/b)*c, but readers take it for a/(b*c).
                let last = index + 1 == factors.len();
                let number = matches!(factor.view(), View::Number(_));
                let least = if last || number { Binding::Product } else { Binding::Power };
                pieces.push(Piece::Formula(factor, least));
            }
        }
        View::Quotient(above, below) => pieces.extend([
            Piece::Formula(above, Binding::Product),
            Piece::Text("/"),
            Piece::Formula(below, Binding::Power),
        ]),
        View::Power(base, exponent) => {
            pieces.extend([Piece::Formula(base, Binding::Atom), Piece::Exponent(exponent)]);
        }
        View::Parallel(operands) => match dialect {
            Dialect::Language => {
                for (index, operand) in operands.iter().enumerate() {
                    if index > 0 {
                        pieces.push(Piece::Text(" || "));
                    }
                    pieces.push(Piece::Formula(operand, Binding::Atom));
                }
            }
            Dialect::Expression => write_out_parallel(operands, pieces),
        },
    }
}

/// Two names: a·b/(a + b). Else 1/(1/a + 1/b + …), which writes each operand only once.
fn write_out_parallel<'a>(operands: &'a [Formula], pieces: &mut Vec<Piece<'a>>) {
    let is_letter = |formula: &Formula| matches!(formula.view(), View::Letter(_));
    match operands {
        [a, b] if is_letter(a) && is_letter(b) => {
            for (formula, after) in [(a, "*"), (b, "/("), (a, " + "), (b, ")")] {
                pieces.extend([Piece::Formula(formula, Binding::Atom), Piece::Text(after)]);
            }
        }
        _ => {
            for (index, operand) in operands.iter().enumerate() {
                let before = if index == 0 { "1/(1/" } else { " + 1/" };
                pieces.extend([Piece::Text(before), Piece::Formula(operand, Binding::Power)]);
            }
            pieces.push(Piece::Text(")"));
        }
    }
}

#[cfg(test)]
mod tests;
