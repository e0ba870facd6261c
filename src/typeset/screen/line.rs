//! The one-line form and its breaking.
//!
//! The line is one string with the places where it may break, each with a penalty: the deeper in
//! parentheses and the stronger the operator, the worse. A line is filled as far as it goes and
//! then broken at the best place in it, the last of equals. The operator begins the next line,
//! which is indented further inside parentheses.

use unicode_width::UnicodeWidthStr;

use super::Characters;
use crate::typeset::linear::{Binding, Dialect, Mark, Marks};
use crate::typeset::number;
use crate::typeset::{Formula, Style, SymbolTable};

/// A formula in one line.
pub(super) struct Line {
    text: String,
    breaks: Vec<Break>,
}

/// A place before an operator.
struct Break {
    /// Byte offset in the text, before the space if there is one.
    at: usize,
    penalty: u32,
    /// Parentheses around.
    depth: u32,
}

/// The penalty of one more parenthesis around, against 0 to 3 for the operators.
const PARENTHESIS: u32 = 4;

/// Added where a line would end in its first third.
const EARLY: u32 = 2;

/// Added for a break between factors without parentheses, which is the last resort.
const BETWEEN_FACTORS: u32 = 1 << 24;

/// Columns that a parenthesis indents, and how many of them do.
const INDENT: usize = 2;
const MAX_INDENTS: usize = 4;

impl Line {
    pub(super) fn new(formula: &Formula, names: &SymbolTable, characters: Characters) -> Self {
        Self::with_binding(formula, Binding::Sum, names, characters)
    }

    /// In parentheses when it binds more weakly than `least`.
    pub(super) fn with_binding(
        formula: &Formula,
        least: Binding,
        names: &SymbolTable,
        characters: Characters,
    ) -> Self {
        let mut line = Self { text: String::new(), breaks: Vec::new() };
        let mut depth: u32 = 0;
        let (style, times) = match characters {
            Characters::Unicode => (Style::Unicode, "·"),
            Characters::Ascii => (Style::Ascii, "*"),
        };
        for mark in Marks::new(formula, least, Dialect::Language) {
            let kind = match mark {
                Mark::Plus | Mark::Minus => Some(0),
                Mark::Parallel => Some(1),
                Mark::Over => Some(2),
                // The next mark tells: see `Open`.
                Mark::Times if line.text.ends_with(')') => Some(3),
                Mark::Times => Some(BETWEEN_FACTORS),
                _ => None,
            };
            if let Some(kind) = kind {
                let penalty = depth.saturating_mul(PARENTHESIS).saturating_add(kind);
                line.breaks.push(Break { at: line.text.len(), penalty, depth });
            }
            let glyph = match mark {
                Mark::Number(value) => {
                    line.text.push_str(&number::shortest(value));
                    continue;
                }
                Mark::Letter(letter) => {
                    line.text.push_str(&names.letter(letter, style));
                    continue;
                }
                Mark::Exponent(value) => {
                    line.text.push_str(&exponent(value, characters));
                    continue;
                }
                Mark::One => "1",
                Mark::Open => {
                    if line.text.ends_with(times)
                        && let Some(before) = line.breaks.last_mut()
                    {
                        before.penalty = depth.saturating_mul(PARENTHESIS).saturating_add(3);
                    }
                    depth += 1;
                    "("
                }
                Mark::Close => {
                    depth = depth.saturating_sub(1);
                    ")"
                }
                Mark::Plus => " + ",
                Mark::Minus => characters.choose(" − ", " - "),
                Mark::Negative => characters.choose("−", "-"),
                Mark::Times => times,
                Mark::Over => "/",
                Mark::Parallel => characters.choose(" ∥ ", " || "),
            };
            line.text.push_str(glyph);
        }
        line
    }

    pub(super) fn width(&self) -> usize {
        self.text.width()
    }

    pub(super) fn into_text(self) -> String {
        self.text
    }

    /// The text behind `left`, broken to the width, with later lines indented.
    pub(super) fn broken(&self, left: &str, indent: usize, width: usize) -> String {
        let mut out = left.to_owned();
        let mut room = width.saturating_sub(left.width());
        let mut start = 0;
        // Index of the first break behind the start of the line.
        let mut next = 0;
        while let Some(chosen) = self.break_in(start, next, room) {
            let place = &self.breaks[chosen];
            out.push_str(&self.text[start..place.at]);
            out.push('\n');
            let depth = usize::try_from(place.depth).unwrap_or(MAX_INDENTS).min(MAX_INDENTS);
            let indent = if width < 2 * (indent + MAX_INDENTS * INDENT) {
                indent
            } else {
                indent + INDENT * depth
            };
            out.extend(std::iter::repeat_n(' ', indent));
            start = place.at;
            if self.text[start..].starts_with(' ') {
                start += 1;
            }
            next = chosen + 1;
            room = width.saturating_sub(indent);
        }
        out.push_str(&self.text[start..]);
        out
    }

    /// The best break for the line from `start` on; `None` when the rest fits or cannot be broken.
    fn break_in(&self, start: usize, next: usize, room: usize) -> Option<usize> {
        // Penalty and index.
        let mut best: Option<(u32, usize)> = None;
        let mut end = start;
        let mut used = 0;
        for (index, place) in self.breaks.iter().enumerate().skip(next) {
            used += self.text[end..place.at].width();
            end = place.at;
            if room < used {
                return best.map(|(_, index)| index).or(Some(index));
            }
            let early = if used * 3 < room { EARLY } else { 0 };
            let penalty = place.penalty.saturating_add(early);
            if best.is_none_or(|(least, _)| penalty <= least) {
                best = Some((penalty, index));
            }
        }
        let rest = self.text[end..].width();
        if room < used + rest { best.map(|(_, index)| index) } else { None }
    }
}

/// `²` or `^2`.
pub(super) fn exponent(exponent: u32, characters: Characters) -> String {
    match characters {
        Characters::Unicode => number::superscript(exponent),
        Characters::Ascii => format!("^{exponent}"),
    }
}
