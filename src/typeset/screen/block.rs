//! Two-dimensional setting: rectangles of characters around a baseline.
//!
//! A fraction is numerator, bar, denominator; the bar is its baseline. Everything else is set side
//! by side on the baselines. Parentheses grow with what they hold. A fraction inside a fraction is
//! written with `/` when it is short, and any fraction inside that one.

use std::fmt;

use unicode_width::UnicodeWidthStr;

use super::Characters;
use super::line::{self, Line};
use crate::typeset::linear::{self, Binding, Dialect, Mark};
use crate::typeset::{Formula, SymbolTable, View};

/// Rows of equal width.
pub(super) struct Block {
    rows: Vec<String>,
    width: usize,
    /// Index of the row of the baseline.
    baseline: usize,
}

impl Block {
    /// One row.
    pub(super) fn text(text: &str) -> Self {
        Self { rows: vec![text.to_owned()], width: text.width(), baseline: 0 }
    }

    /// Several rows, flush left, with the baseline in the first.
    pub(super) fn lines(text: &str) -> Self {
        let width = text.lines().map(UnicodeWidthStr::width).max().unwrap_or(0);
        let rows = text.lines().map(|row| padded(row, 0, width)).collect();
        Self { rows, width, baseline: 0 }
    }

    pub(super) fn width(&self) -> usize {
        self.width
    }

    pub(super) fn height(&self) -> usize {
        self.rows.len()
    }

    /// Rows below the baseline.
    fn depth(&self) -> usize {
        self.rows.len() - 1 - self.baseline
    }

    /// The other to the right of this one, on the same baseline.
    pub(super) fn beside(self, other: Self) -> Self {
        let baseline = self.baseline.max(other.baseline);
        let height = baseline + self.depth().max(other.depth()) + 1;
        let row_of = |block: &Self, row: usize| match (row + block.baseline).checked_sub(baseline) {
            Some(index) if index < block.rows.len() => block.rows[index].clone(),
            _ => " ".repeat(block.width),
        };
        let rows = (0..height).map(|row| row_of(&self, row) + &row_of(&other, row)).collect();
        Self { rows, width: self.width + other.width, baseline }
    }

    /// This one above a bar, the other below it, both centred.
    pub(super) fn over(self, other: Self, characters: Characters) -> Self {
        let width = self.width.max(other.width) + 2;
        let bar = characters.choose("─", "-");
        let centred = |block: &Self| {
            let left = (width - block.width) / 2;
            block.rows.iter().map(|row| padded(row, left, width)).collect::<Vec<_>>()
        };
        let mut rows = centred(&self);
        let baseline = rows.len();
        rows.push(bar.repeat(width));
        rows.extend(centred(&other));
        Self { rows, width, baseline }
    }

    fn in_parentheses(self, characters: Characters) -> Self {
        if self.rows.len() == 1 {
            return Self::text("(").beside(self).beside(Self::text(")"));
        }
        let (left, right) = match characters {
            Characters::Unicode => (["⎛", "⎜", "⎝"], ["⎞", "⎟", "⎠"]),
            Characters::Ascii => (["/", "|", "\\"], ["\\", "|", "/"]),
        };
        let last = self.rows.len() - 1;
        let side = |glyphs: [&str; 3]| {
            let glyph = |row: usize| match row {
                0 => glyphs[0],
                row if row == last => glyphs[2],
                _ => glyphs[1],
            };
            let rows = (0..=last).map(|row| glyph(row).to_owned()).collect();
            Self { rows, width: 1, baseline: self.baseline }
        };
        let (left, right) = (side(left), side(right));
        left.beside(self).beside(right)
    }

    /// The exponent at the upper right corner.
    fn raised(mut self, exponent: &str) -> Self {
        let wide = self.width + exponent.width();
        for (index, row) in self.rows.iter_mut().enumerate() {
            if index == 0 {
                row.push_str(exponent);
            } else {
                *row = padded(row, 0, wide);
            }
        }
        self.width = wide;
        self
    }
}

impl fmt::Display for Block {
    /// The rows, without spaces at their ends.
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        for (index, row) in self.rows.iter().enumerate() {
            if index > 0 {
                f.write_str("\n")?;
            }
            f.write_str(row.trim_end())?;
        }
        Ok(())
    }
}

fn padded(row: &str, left: usize, width: usize) -> String {
    let right = width.saturating_sub(left + row.width());
    format!("{}{row}{}", " ".repeat(left), " ".repeat(right))
}

/// A short fraction inside a fraction, in columns.
const SHORT: usize = 12;

/// Sets formulas. Recursive: the caller bounds the depth.
pub(super) struct Setter<'a> {
    pub(super) names: &'a SymbolTable,
    pub(super) characters: Characters,
}

impl Setter<'_> {
    /// The formula in two dimensions.
    pub(super) fn block(&self, formula: &Formula) -> Block {
        self.set(formula, Binding::Sum, 0)
    }

    /// `bars` counts the fractions around.
    fn set(&self, formula: &Formula, least: Binding, bars: usize) -> Block {
        if let View::Quotient(above, below) = formula.view() {
            let line = Line::with_binding(formula, least, self.names, self.characters);
            if 2 <= bars || (bars == 1 && line.width() <= SHORT) {
                return Block::text(&line.into_text());
            }
            let part = |part| self.set(part, Binding::Sum, bars + 1);
            // The bar holds a fraction together; only an exponent asks for more.
            return part(above).over(part(below), self.characters);
        }
        let block = self.operation(formula, bars);
        if linear::binding(formula, Dialect::Language) < least {
            block.in_parentheses(self.characters)
        } else {
            block
        }
    }

    fn operation(&self, formula: &Formula, bars: usize) -> Block {
        match formula.view() {
            View::Number(_) | View::Letter(_) | View::Quotient(..) => {
                Block::text(&Line::new(formula, self.names, self.characters).into_text())
            }
            View::Sum(terms) => {
                let mut block = Block::text("");
                for (index, term) in terms.iter().enumerate() {
                    let (sign, term) = linear::signed(term, index == 0);
                    let term = self.set(term, Binding::Parallel, bars);
                    block = match sign {
                        Some(Mark::Plus) => block.beside(Block::text(" + ")).beside(term),
                        Some(Mark::Minus) => {
                            let minus = self.characters.choose(" − ", " - ");
                            block.beside(Block::text(minus)).beside(term)
                        }
                        Some(_) => self.negative(term),
                        None => term,
                    };
                }
                block
            }
            View::Negative(operand) => {
                let operand = self.set(operand, Binding::Parallel, bars);
                self.negative(operand)
            }
            View::Product(factors) => {
                let last = factors.len() - 1;
                let factors = factors.iter().enumerate().map(|(index, factor)| {
                    self.set(factor, linear::factor_binding(factor, index == last), bars)
                });
                let (tight, wide) =
                    (self.characters.choose("·", "*"), self.characters.choose(" · ", " * "));
                joined(factors, |a, b| if a.height().max(b.height()) > 1 { wide } else { tight })
            }
            View::Power(base, exponent) => {
                let set = self.set(base, Binding::Atom, bars);
                let set = match base.view() {
                    View::Quotient(..) if set.height() > 1 => set.in_parentheses(self.characters),
                    _ => set,
                };
                set.raised(&line::exponent(exponent, self.characters))
            }
            View::Parallel(operands) => {
                let operands =
                    operands.iter().map(|operand| self.set(operand, Binding::Atom, bars));
                let parallel = self.characters.choose(" ∥ ", " || ");
                joined(operands, |_, _| parallel)
            }
        }
    }

    /// With a leading minus, which stands off a bar.
    pub(super) fn negative(&self, operand: Block) -> Block {
        let tall = operand.height() > 1;
        let sign = if tall {
            self.characters.choose("− ", "- ")
        } else {
            self.characters.choose("−", "-")
        };
        Block::text(sign).beside(operand)
    }
}

/// The blocks side by side, with what stands between each two of them.
fn joined(
    blocks: impl Iterator<Item = Block>,
    between: impl Fn(&Block, &Block) -> &'static str,
) -> Block {
    let mut all: Option<Block> = None;
    for block in blocks {
        all = Some(match all {
            Some(before) => {
                let separator = Block::text(between(&before, &block));
                before.beside(separator).beside(block)
            }
            None => block,
        });
    }
    all.unwrap_or_else(|| Block::text(""))
}
