//! A text, its folded form, and its logical lines.
//!
//! Folding gives look-alike characters one form (both ohm signs, both micro signs, the minus signs,
//! `·` and `×`, `‖`, the many spaces), so that the grammar need not know them. Characters may
//! change their length, so the folded text keeps a table from its offsets to the original's.
//! A logical line is a physical line together with those it goes on in.

use super::diagnostic::Span;
use std::ops::Range;

/// A text in folded form that can point into the original.
#[derive(Debug)]
pub(crate) struct Source {
    /// The folded text.
    pub(crate) text: String,
    /// The text as it was.
    typed: String,
    /// (folded offset, original offset) wherever their difference changes, ascending.
    shifts: Vec<(usize, usize)>,
    /// Original offset of each physical line's first byte.
    line_starts: Vec<usize>,
}

/// A logical line: a range of the folded text.
pub(crate) type LogicalLine = Range<usize>;

impl Source {
    /// Folds `original`.
    pub(crate) fn new(original: &str) -> Self {
        let mut text = String::with_capacity(original.len());
        let mut shifts = vec![(0, 0)];
        let mut line_starts = vec![0];
        for (offset, character) in original.char_indices() {
            if character == '\n' {
                line_starts.push(offset + 1);
            }
            if offset == 0 && character == '\u{feff}' {
                shifts.push((0, character.len_utf8()));
                continue;
            }
            let folded = fold(character);
            text.push(folded);
            if folded.len_utf8() != character.len_utf8() {
                shifts.push((text.len(), offset + character.len_utf8()));
            }
        }
        Self { text, typed: original.to_owned(), shifts, line_starts }
    }

    /// The original place of a range of the folded text.
    pub(crate) fn span(&self, folded: Range<usize>) -> Span {
        Span { start: self.original(folded.start), end: self.original(folded.end) }
    }

    /// The original text of a span.
    pub(crate) fn written(&self, span: Span) -> &str {
        self.typed.get(span.start..span.end).unwrap_or_default()
    }

    fn original(&self, offset: usize) -> usize {
        let after = self.shifts.partition_point(|(folded, _)| *folded <= offset);
        let (folded, original) = self.shifts[after.saturating_sub(1)];
        original + (offset - folded)
    }

    /// The line of an original offset, from 1.
    pub(crate) fn line(&self, original: usize) -> u32 {
        let line = self.line_starts.partition_point(|start| *start <= original);
        u32::try_from(line).unwrap_or(u32::MAX)
    }

    /// The logical lines that hold anything.
    ///
    /// A line goes on in the next after `>`, a comma, an operator or inside a parenthesis, but never
    /// into a line that clearly begins a statement, so that a forgotten `)` costs one line only.
    pub(crate) fn logical_lines(&self) -> Vec<LogicalLine> {
        let mut lines = Vec::new();
        let mut open: Option<OpenLine> = None;
        let mut start = 0;
        for physical in self.text.split_inclusive('\n') {
            let content = without_comment(physical).trim_matches(is_blank);
            let indent = physical.len() - physical.trim_start_matches(is_blank).len();
            let from = start + indent;
            start += physical.len();
            if content.is_empty() {
                continue;
            }
            let mut current = match open.take() {
                Some(line) if !line.ends_before(content) => line,
                Some(line) => {
                    lines.push(line.range);
                    OpenLine::new(from, content)
                }
                None => OpenLine::new(from, content),
            };
            current.add(content, from + content.len());
            if current.goes_on(content) {
                open = Some(current);
            } else {
                lines.push(current.range);
            }
        }
        lines.extend(open.map(|line| line.range));
        lines
    }
}

/// A logical line that is still growing.
struct OpenLine {
    range: Range<usize>,
    depth: usize,
    is_walk: bool,
}

impl OpenLine {
    fn new(start: usize, first: &str) -> Self {
        Self { range: start..start, depth: 0, is_walk: is_walk(first) }
    }

    fn add(&mut self, content: &str, end: usize) {
        let title = content.starts_with("circuit") && content.contains('"');
        for byte in content.bytes().filter(|_| !title) {
            match byte {
                b'(' => self.depth += 1,
                b')' => self.depth = self.depth.saturating_sub(1),
                _ => {}
            }
        }
        self.range.end = end;
    }

    fn goes_on(&self, content: &str) -> bool {
        let Some(last) = content.chars().next_back() else { return false };
        match last {
            '>' | ',' | ';' | '*' | '/' | '^' | '=' | '∥' | '|' => true,
            // `x > R1 > V+` ends at a badly named node, not at an operator.
            '+' | '-' => !self.ends_at_a_node(content),
            _ => self.depth > 0,
        }
    }

    fn ends_at_a_node(&self, content: &str) -> bool {
        let tail = content.rsplit(['>', ',', ':']).next().unwrap_or(content);
        let attached =
            content.chars().rev().nth(1).is_some_and(|c| c.is_alphanumeric() || c == '_');
        attached && !tail.contains('=') && (self.is_walk || content.contains(':'))
    }

    /// True when `next` cannot be a part of this line.
    fn ends_before(&self, next: &str) -> bool {
        begins_statement(next) || (is_walk(next) && !self.is_walk)
    }
}

/// True when the second token of a line is `>`.
pub(crate) fn is_walk(content: &str) -> bool {
    let word = content.find(|c: char| is_blank(c) || c == '>').unwrap_or(content.len());
    word > 0 && content[word..].trim_start_matches(is_blank).starts_with('>')
}

/// The words that begin a statement of their own.
pub(crate) const KEYWORDS: [&str; 10] =
    ["ask", "band", "block", "circuit", "claim", "end", "let", "limit", "temperature", "use"];

/// The first word of a line, if it is one of [`KEYWORDS`] and is followed like one.
pub(crate) fn keyword(content: &str) -> Option<&'static str> {
    let word = content.find(|c: char| !is_word(c)).unwrap_or(content.len());
    let rest = content[word..].trim_start_matches(is_blank);
    let keyword = KEYWORDS.iter().find(|keyword| **keyword == &content[..word])?;
    let follows =
        rest.chars().next().is_none_or(|c| is_word(c) || c == '"' || c == '+' || c == '-');
    follows.then_some(*keyword)
}

fn begins_statement(content: &str) -> bool {
    keyword(content).is_some() || is_device(content)
}

/// True for `WORD WORD:`.
pub(crate) fn is_device(content: &str) -> bool {
    let Some((head, _)) = content.split_once(':') else { return false };
    let mut words = head.split(is_blank).filter(|word| !word.is_empty());
    let both = words.next().zip(words.next());
    both.is_some_and(|(kind, name)| kind.chars().chain(name.chars()).all(is_word))
        && words.next().is_none()
}

fn is_word(character: char) -> bool {
    character.is_alphanumeric() || matches!(character, '_' | '.')
}

fn is_blank(character: char) -> bool {
    matches!(character, ' ' | '\t' | '\r' | '\n')
}

/// The line up to its comment; a `#` inside quotes is none.
fn without_comment(line: &str) -> &str {
    let mut quoted = false;
    for (offset, byte) in line.bytes().enumerate() {
        match byte {
            b'"' => quoted = !quoted,
            b'#' if !quoted => return &line[..offset],
            _ => {}
        }
    }
    // A quote that is never closed hides no comment.
    if quoted { line.split('#').next().unwrap_or(line) } else { line }
}

fn fold(character: char) -> char {
    match character {
        '\u{2126}' => 'Ω',
        '\u{00b5}' => 'μ',
        '\u{2010}'..='\u{2015}' | '\u{2212}' | '\u{fe63}' | '\u{ff0d}' => '-',
        '\u{00b7}' | '\u{22c5}' | '\u{00d7}' | '\u{2219}' | '\u{2217}' => '*',
        '\u{2016}' => '∥',
        '\u{00a0}' | '\u{2000}'..='\u{200a}' | '\u{202f}' | '\u{205f}' | '\u{3000}' => ' ',
        other => other,
    }
}
