//! LaTeX for mathematics mode, with `amsmath` only.
//!
//! Quotients are `\frac`, products are set off by thin spaces, parallels are `\parallel`.
//! Parentheses stand where the layout itself does not group, and are `\left( \right)` only around
//! what is tall. A sum wider than the limit becomes the rows of an `aligned`, wherever it stands.
//!
//! Width and height of each part are found in one pass beforehand; like the writer, it keeps its
//! own stack, so the whole is linear in the formula and its depth is no burden.

use std::fmt;

use num_rational::BigRational;

use super::linear::{self, Mark};
use super::measure::{
    Binding, Extent, Extents, NumberForm, begins_with_number, binding, extents, number_form,
};
use super::number::{self, Medium};
use super::{Formula, Style, SymbolTable, View};

enum Piece<'a> {
    Text(&'static str),
    Exponent(u32),
    /// A formula, in parentheses when it binds more weakly than that.
    Formula(&'a Formula, Binding),
}

/// Writes formulas with these names, breaking sums beyond that width.
pub struct Latex<'a> {
    /// The names of the symbols.
    pub names: &'a SymbolTable,
    /// The widest sum that stays in one row, in symbols: names, numbers and operators each count 1.
    pub width: usize,
}

impl Latex<'_> {
    /// The formula as a string.
    #[must_use]
    pub fn text(&self, formula: &Formula) -> String {
        let mut out = String::new();
        // Writing to a string does not fail.
        let _ = self.write(&mut out, formula);
        out
    }

    /// `left = formula`, where `left` is LaTeX; a long sum is aligned behind the equals sign.
    #[must_use]
    pub fn equation(&self, left: &str, formula: &Formula) -> String {
        let mut out = String::new();
        let extents = extents(formula, self.width);
        let writer = Writer { latex: self, extents: &extents };
        // Writing to a string does not fail.
        let _ = match formula.view() {
            View::Sum(terms) if writer.is_broken(formula) => {
                out.push_str("\\begin{aligned}\n");
                out.push_str(left);
                out.push_str(" &= ");
                let pieces = writer.rows(terms, " \\\\\n&\\quad");
                writer.write(&mut out, pieces).map(|()| out.push_str("\n\\end{aligned}"))
            }
            _ => {
                out.push_str(left);
                out.push_str(" = ");
                writer.write(&mut out, vec![Piece::Formula(formula, Binding::Sum)])
            }
        };
        out
    }

    /// Writes the formula; linear in its length.
    ///
    /// # Errors
    /// Only those of the writer.
    pub fn write(&self, out: &mut impl fmt::Write, formula: &Formula) -> fmt::Result {
        let extents = extents(formula, self.width);
        let writer = Writer { latex: self, extents: &extents };
        writer.write(out, vec![Piece::Formula(formula, Binding::Sum)])
    }
}

struct Writer<'a> {
    latex: &'a Latex<'a>,
    extents: &'a Extents,
}

impl Writer<'_> {
    /// Writes pieces that are given in reading order.
    fn write(&self, out: &mut impl fmt::Write, pieces: Vec<Piece<'_>>) -> fmt::Result {
        let mut stack = pieces;
        stack.reverse();
        while let Some(piece) = stack.pop() {
            match piece {
                Piece::Text(text) => out.write_str(text)?,
                Piece::Exponent(exponent) => write!(out, "^{{{exponent}}}")?,
                Piece::Formula(formula, least) => {
                    if binding(formula) < least {
                        let tall = self.extent(formula).tall;
                        let (open, close) = if tall { ("\\left(", "\\right)") } else { ("(", ")") };
                        out.write_str(open)?;
                        stack.push(Piece::Text(close));
                    }
                    match formula.view() {
                        View::Number(value) => out.write_str(&number_text(value))?,
                        View::Letter(letter) => {
                            out.write_str(&self.latex.names.letter(letter, Style::Latex))?;
                        }
                        _ => {
                            let first = stack.len();
                            self.split(formula, &mut stack);
                            stack[first..].reverse();
                        }
                    }
                }
            }
        }
        Ok(())
    }

    fn extent(&self, formula: &Formula) -> Extent {
        self.extents.get(&std::ptr::from_ref(formula)).copied().unwrap_or_default()
    }

    fn is_broken(&self, formula: &Formula) -> bool {
        matches!(formula.view(), View::Sum(_)) && self.latex.width < self.extent(formula).width
    }

    /// The pieces of an operation, in reading order.
    fn split<'f>(&self, formula: &'f Formula, pieces: &mut Vec<Piece<'f>>) {
        match formula.view() {
            View::Number(_) | View::Letter(_) => {}
            View::Sum(terms) if self.is_broken(formula) => {
                pieces.push(Piece::Text("\\begin{aligned}\n&"));
                pieces.append(&mut self.rows(terms, " \\\\\n&"));
                pieces.push(Piece::Text("\n\\end{aligned}"));
            }
            View::Sum(terms) => {
                for (index, term) in terms.iter().enumerate() {
                    pieces.extend(term_pieces(term, index));
                }
            }
            View::Negative(operand) => {
                pieces.extend([Piece::Text("-"), Piece::Formula(operand, Binding::Product)]);
            }
            View::Product(factors) => {
                for (index, factor) in factors.iter().enumerate() {
                    if index > 0 {
                        pieces.push(Piece::Text(self.between(factor)));
                    }
                    pieces.push(Piece::Formula(factor, Binding::Product));
                }
            }
            View::Quotient(above, below) => pieces.extend([
                Piece::Text("\\frac{"),
                Piece::Formula(above, Binding::Sum),
                Piece::Text("}{"),
                Piece::Formula(below, Binding::Sum),
                Piece::Text("}"),
            ]),
            View::Power(base, exponent) => {
                pieces.extend([Piece::Formula(base, Binding::Atom), Piece::Exponent(exponent)]);
            }
            View::Parallel(operands) => {
                for (index, operand) in operands.iter().enumerate() {
                    if index > 0 {
                        pieces.push(Piece::Text(" \\parallel "));
                    }
                    pieces.push(Piece::Formula(operand, Binding::Product));
                }
            }
        }
    }

    /// What stands before a factor that is not the first. `\left(` brings its own thin space.
    fn between(&self, factor: &Formula) -> &'static str {
        if begins_with_number(factor) {
            return " \\cdot ";
        }
        if binding(factor) < Binding::Product && self.extent(factor).tall { " " } else { "\\," }
    }

    /// The terms of a sum in rows, each filled up to the width.
    fn rows<'f>(&self, terms: &'f [Formula], new_row: &'static str) -> Vec<Piece<'f>> {
        let mut pieces = Vec::new();
        let mut used = 0;
        for (index, term) in terms.iter().enumerate() {
            let width = self.extent(term).width.saturating_add(1);
            if used > 0 && self.latex.width.saturating_sub(used) < width {
                pieces.push(Piece::Text(new_row));
                used = 0;
            }
            used = width.saturating_add(used);
            pieces.extend(term_pieces(term, index));
        }
        pieces
    }
}

/// A term of a sum with its sign.
fn term_pieces(term: &Formula, index: usize) -> [Piece<'_>; 2] {
    let (sign, term) = linear::signed(term, index == 0);
    let sign = match sign {
        None => "",
        Some(Mark::Negative) => "-",
        Some(Mark::Minus) => " - ",
        Some(_) => " + ",
    };
    // A relation sign beside a plus would read the wrong way round: a parallel gets parentheses.
    [Piece::Text(sign), Piece::Formula(term, Binding::Product)]
}

fn number_text(value: &BigRational) -> String {
    match number_form(value) {
        NumberForm::Fraction => format!("\\frac{{{}}}{{{}}}", value.numer(), value.denom()),
        NumberForm::Digits => number::shortest(value),
        NumberForm::Power => number::shortest_in(value, Medium::Latex),
    }
}

#[cfg(test)]
mod tests;
