//! Formulas on a terminal: fraction bars where they fit, else one line, else broken lines.
//!
//! Of the forms that fit the width, the first of these is taken: two-dimensional; one line; one
//! fraction bar between numerator and denominator that are broken into lines; lines broken before
//! operators, the weakest first, and never inside a name, a number or (as long as anything else
//! can be broken) a product. Later lines begin under the right-hand side.

mod block;
mod line;

use block::{Block, Setter};

use super::{Formula, SymbolTable, View};

/// The room there is, and the characters to fill it with.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Screen {
    /// Columns.
    pub width: usize,
    /// The characters.
    pub characters: Characters,
}

/// The characters to write with.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Characters {
    /// `−`, `²`, `·`, `∥`, bars of `─`, Greek letters.
    Unicode,
    /// `-`, `^2`, `*`, `||`, bars of `-`.
    Ascii,
}

impl Characters {
    fn choose(self, unicode: &'static str, ascii: &'static str) -> &'static str {
        match self {
            Self::Unicode => unicode,
            Self::Ascii => ascii,
        }
    }
}

/// Rows of a two-dimensional form; a taller one is hard to read.
const MAX_ROWS: usize = 9;

/// Lines above and below a bar, where these are broken.
const MAX_BROKEN_LINES: usize = 16;

/// Nodes and nesting of a formula for which the two-dimensional form is tried.
const MAX_NODES: usize = 500;
const MAX_DEPTH: usize = 40;

impl Screen {
    /// `left = formula` in lines, without a line end at the end; only the formula where `left` is
    /// empty. A name or product wider than the width sticks out.
    #[must_use]
    pub fn equation(self, left: &str, formula: &Formula, names: &SymbolTable) -> String {
        let left = if left.is_empty() { String::new() } else { format!("{left} = ") };
        let label = Block::text(&left);
        // Under a long left side there is no room: continue near the margin.
        let indent = if label.width() * 2 <= self.width { label.width() } else { 4 };
        let room = self.width.saturating_sub(label.width());

        if has_quotient(formula)
            && is_small(formula)
            && let block = self.setter(names).block(formula)
            && block.width() <= room
            && block.height() <= MAX_ROWS
        {
            return label.beside(block).to_string();
        }
        let line = line::Line::new(formula, names, self.characters);
        if room < line.width()
            && let Some(block) = self.broken_fraction(formula, names, room)
        {
            return label.beside(block).to_string();
        }
        line.broken(&left, indent, self.width)
    }

    /// The formula on one line, however long.
    #[must_use]
    pub fn one_line(self, formula: &Formula, names: &SymbolTable) -> String {
        line::Line::new(formula, names, self.characters).broken("", 0, usize::MAX)
    }

    fn setter(self, names: &SymbolTable) -> Setter<'_> {
        Setter { names, characters: self.characters }
    }

    /// A top-level quotient whose numerator and denominator are broken into lines.
    fn broken_fraction(self, formula: &Formula, names: &SymbolTable, room: usize) -> Option<Block> {
        let (negative, formula) = match formula.view() {
            View::Negative(operand) => (true, operand),
            _ => (false, formula),
        };
        let View::Quotient(above, below) = formula.view() else { return None };
        // The bar stands out by a column on each side, a minus sign takes two.
        let room = room.checked_sub(if negative { 4 } else { 2 })?;
        let part = |part: &Formula| {
            let line = line::Line::new(part, names, self.characters);
            // Cheap for what is far too long.
            if line.width() > room * MAX_BROKEN_LINES {
                return None;
            }
            let block = Block::lines(&line.broken("", 0, room));
            (block.width() <= room && block.height() <= MAX_BROKEN_LINES).then_some(block)
        };
        let fraction = part(above)?.over(part(below)?, self.characters);
        Some(if negative { self.setter(names).negative(fraction) } else { fraction })
    }
}

/// True where the two-dimensional form differs from the line.
fn has_quotient(formula: &Formula) -> bool {
    let mut pending = vec![formula];
    while let Some(formula) = pending.pop() {
        if matches!(formula.view(), View::Quotient(..)) {
            return true;
        }
        pending.extend(formula.operands());
    }
    false
}

/// True within the bounds on nodes and nesting; looks at no more than that.
fn is_small(formula: &Formula) -> bool {
    let mut pending = vec![(formula, 1)];
    let mut nodes = 1;
    while let Some((formula, depth)) = pending.pop() {
        nodes += formula.operands().len();
        if nodes > MAX_NODES || depth > MAX_DEPTH {
            return false;
        }
        pending.extend(formula.operands().iter().map(|operand| (operand, depth + 1)));
    }
    true
}

#[cfg(test)]
mod tests;
