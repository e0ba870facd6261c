//! MathML Core, the part of MathML 4 that browsers draw by themselves.
//!
//! It follows [`super::latex`] piece by piece: quotients are `mfrac`, products are set off by thin spaces,
//! parallels by ∥. Parentheses stretch only around what is tall. A sum wider than the limit becomes the
//! rows of a table, wherever it stands. Linear in the formula, and its depth is no burden.

use num_rational::BigRational;

use super::linear::{self, Mark};
use super::measure::{
    Binding, Extent, Extents, NumberForm, begins_with_number, binding, extents, number_form,
};
use super::number::{self, Medium};
use super::{Formula, Style, SymbolTable, View};

const TIMES: &str = "<mspace width=\"0.17em\"></mspace>";
const DOT: &str = "<mo>·</mo>";
const NEW_ROW: &str = "</mtd></mtr><mtr><mtd>";

enum Piece<'a> {
    Text(&'static str),
    Exponent(u32),
    /// A formula, in parentheses when it binds more weakly than that.
    Formula(&'a Formula, Binding),
}

/// Writes formulas with these names, breaking sums beyond that width.
#[derive(Clone, Copy, Debug)]
pub struct MathMl<'a> {
    /// The names of the symbols.
    pub names: &'a SymbolTable,
    /// The widest sum that stays in one row, in symbols: names, numbers and operators each count 1.
    pub width: usize,
}

impl MathMl<'_> {
    /// The formula as elements that belong inside `math` or a row of it.
    #[must_use]
    pub fn text(&self, formula: &Formula) -> String {
        let extents = extents(formula, self.width);
        let writer = Writer { mathml: self, extents: &extents };
        writer.written(vec![Piece::Formula(formula, Binding::Sum)])
    }

    /// `left = formula`, where `left` is MathML.
    #[must_use]
    pub fn equation(&self, left: &str, formula: &Formula) -> String {
        format!("<mrow>{left}<mo>=</mo>{}</mrow>", self.text(formula))
    }
}

struct Writer<'a> {
    mathml: &'a MathMl<'a>,
    extents: &'a Extents,
}

impl Writer<'_> {
    /// Pieces that are given in reading order.
    fn written(&self, pieces: Vec<Piece<'_>>) -> String {
        let mut out = String::new();
        let mut stack = pieces;
        stack.reverse();
        while let Some(piece) = stack.pop() {
            let (formula, least) = match piece {
                Piece::Text(text) => {
                    out.push_str(text);
                    continue;
                }
                Piece::Exponent(exponent) => {
                    out.push_str(&format!("<mn>{exponent}</mn>"));
                    continue;
                }
                Piece::Formula(formula, least) => (formula, least),
            };
            if binding(formula) < least {
                let (open, close) = if self.extent(formula).tall {
                    ("<mrow><mo>(</mo>", "<mo>)</mo></mrow>")
                } else {
                    ("<mrow><mo stretchy=\"false\">(</mo>", "<mo stretchy=\"false\">)</mo></mrow>")
                };
                out.push_str(open);
                stack.push(Piece::Text(close));
            }
            match formula.view() {
                View::Number(value) => out.push_str(&number_text(value)),
                View::Letter(letter) => {
                    out.push_str(&self.mathml.names.letter(letter, Style::MathMl));
                }
                _ => {
                    let first = stack.len();
                    self.split(formula, &mut stack);
                    stack[first..].reverse();
                }
            }
        }
        out
    }

    fn extent(&self, formula: &Formula) -> Extent {
        self.extents.get(&std::ptr::from_ref(formula)).copied().unwrap_or_default()
    }

    /// The pieces of an operation, in reading order.
    fn split<'f>(&self, formula: &'f Formula, pieces: &mut Vec<Piece<'f>>) {
        match formula.view() {
            View::Number(_) | View::Letter(_) => {}
            View::Sum(terms) if self.mathml.width < self.extent(formula).width => {
                pieces.push(Piece::Text("<mtable class=\"rows\"><mtr><mtd>"));
                self.rows(terms, pieces);
                pieces.push(Piece::Text("</mtd></mtr></mtable>"));
            }
            View::Sum(terms) => {
                pieces.push(Piece::Text("<mrow>"));
                for (index, term) in terms.iter().enumerate() {
                    pieces.extend(term_pieces(term, index));
                }
                pieces.push(Piece::Text("</mrow>"));
            }
            View::Negative(operand) => pieces.extend([
                Piece::Text("<mrow><mo form=\"prefix\">−</mo>"),
                Piece::Formula(operand, Binding::Product),
                Piece::Text("</mrow>"),
            ]),
            View::Product(factors) => {
                pieces.push(Piece::Text("<mrow>"));
                for (index, factor) in factors.iter().enumerate() {
                    if index > 0 {
                        let between = if begins_with_number(factor) { DOT } else { TIMES };
                        pieces.push(Piece::Text(between));
                    }
                    pieces.push(Piece::Formula(factor, Binding::Product));
                }
                pieces.push(Piece::Text("</mrow>"));
            }
            View::Quotient(above, below) => pieces.extend([
                Piece::Text("<mfrac><mrow>"),
                Piece::Formula(above, Binding::Sum),
                Piece::Text("</mrow><mrow>"),
                Piece::Formula(below, Binding::Sum),
                Piece::Text("</mrow></mfrac>"),
            ]),
            View::Power(base, exponent) => pieces.extend([
                Piece::Text("<msup><mrow>"),
                Piece::Formula(base, Binding::Atom),
                Piece::Text("</mrow>"),
                Piece::Exponent(exponent),
                Piece::Text("</msup>"),
            ]),
            View::Parallel(operands) => {
                pieces.push(Piece::Text("<mrow>"));
                for (index, operand) in operands.iter().enumerate() {
                    if index > 0 {
                        pieces.push(Piece::Text("<mo>∥</mo>"));
                    }
                    pieces.push(Piece::Formula(operand, Binding::Product));
                }
                pieces.push(Piece::Text("</mrow>"));
            }
        }
    }

    /// The terms of a sum in rows, each filled up to the width.
    fn rows<'f>(&self, terms: &'f [Formula], pieces: &mut Vec<Piece<'f>>) {
        let mut used = 0;
        for (index, term) in terms.iter().enumerate() {
            let width = self.extent(term).width.saturating_add(1);
            if used > 0 && self.mathml.width.saturating_sub(used) < width {
                pieces.push(Piece::Text(NEW_ROW));
                used = 0;
            }
            used = width.saturating_add(used);
            pieces.extend(term_pieces(term, index));
        }
    }
}

/// A term of a sum with its sign.
fn term_pieces(term: &Formula, index: usize) -> [Piece<'_>; 2] {
    let (sign, term) = linear::signed(term, index == 0);
    let sign = match sign {
        None => "",
        Some(Mark::Negative) => "<mo form=\"prefix\">−</mo>",
        Some(Mark::Minus) => "<mo form=\"infix\">−</mo>",
        Some(_) => "<mo form=\"infix\">+</mo>",
    };
    [Piece::Text(sign), Piece::Formula(term, Binding::Product)]
}

fn number_text(value: &BigRational) -> String {
    match number_form(value) {
        NumberForm::Fraction => {
            format!("<mfrac><mn>{}</mn><mn>{}</mn></mfrac>", value.numer(), value.denom())
        }
        NumberForm::Digits => format!("<mn>{}</mn>", number::shortest(value)),
        NumberForm::Power => {
            let text = number::shortest_in(value, Medium::Ascii);
            let (mantissa, exponent) = text.split_once('e').unwrap_or((&text, "0"));
            let exponent = match exponent.strip_prefix('-') {
                Some(digits) => format!("<mrow><mo form=\"prefix\">−</mo><mn>{digits}</mn></mrow>"),
                None => format!("<mn>{exponent}</mn>"),
            };
            format!("<mrow><mn>{mantissa}</mn><mo>·</mo><msup><mn>10</mn>{exponent}</msup></mrow>")
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::typeset::random::tree;
    use pretty_assertions::assert_eq;
    use proptest::prelude::*;

    fn names() -> SymbolTable {
        SymbolTable::new(["R1", "C1", "L1"])
    }

    #[test]
    fn a_low_pass() {
        let names = names();
        let [r, c] = [0, 1].map(Formula::symbol);
        let below = Formula::sum([Formula::integer(1), Formula::product([Formula::s(), r, c])]);
        let formula = Formula::quotient(Formula::integer(1), below);
        let found = MathMl { names: &names, width: 40 }.equation("<mi>H</mi>", &formula);
        assert_eq!(
            found,
            "<mrow><mi>H</mi><mo>=</mo><mfrac><mrow><mn>1</mn></mrow><mrow><mrow><mn>1</mn>\
             <mo form=\"infix\">+</mo><mrow><mi>s</mi><mspace width=\"0.17em\"></mspace>\
             <msub><mi>R</mi><mn>1</mn></msub><mspace width=\"0.17em\"></mspace>\
             <msub><mi>C</mi><mn>1</mn></msub></mrow></mrow></mrow></mfrac></mrow>"
        );
    }

    proptest! {
        /// Every formula is well-formed XML with the children that each element needs.
        #[test]
        fn elements_have_their_children(formula in tree(), width in 4_usize..60) {
            let names = names();
            let text = MathMl { names: &names, width }.text(&formula);
            let whole = format!("<math>{text}</math>");
            let document = roxmltree::Document::parse(&whole).expect("XML");
            for node in document.descendants().filter(|node| node.is_element()) {
                let children = node.children().filter(|child| child.is_element()).count();
                match node.tag_name().name() {
                    "mfrac" | "msub" | "msup" => prop_assert_eq!(children, 2, "{}", text),
                    "mi" | "mn" | "mo" | "mtext" | "mspace" => prop_assert_eq!(children, 0),
                    _ => {}
                }
            }
        }
    }
}
