//! What the reader has to say about a text: errors, warnings and notices, with places.
//!
//! A diagnostic holds data only (a code, a message, spans, help); [`render`] gives it the form with
//! the line of the text and marks under it. Spans are bytes of the original text, never of the folded one.

use annotate_snippets::{AnnotationKind, Group, Level, Renderer, Snippet};

/// A part of the text, in bytes; `start` ≤ `end`, both on character boundaries.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct Span {
    /// First byte.
    pub start: usize,
    /// One past the last byte.
    pub end: usize,
}

impl Span {
    /// The smallest span that holds both.
    #[must_use]
    pub fn join(self, other: Self) -> Self {
        Self { start: self.start.min(other.start), end: self.end.max(other.end) }
    }
}

/// How grave a diagnostic is.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Severity {
    /// Nothing can be derived.
    Error,
    /// Probably not what was meant.
    Warning,
    /// Good to know.
    Notice,
}

/// A further place, and what it has to do with the fault.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Label {
    /// Where.
    pub span: Span,
    /// What is there.
    pub text: String,
}

/// One finding about a text.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Diagnostic {
    /// How grave it is.
    pub severity: Severity,
    /// A stable code in kebab case; see [`CODES`](super::CODES).
    pub code: &'static str,
    /// What was found, in lower case and without a full stop.
    pub message: String,
    /// Where.
    pub span: Span,
    /// Further places.
    pub labels: Vec<Label>,
    /// What to write instead.
    pub help: Vec<String>,
}

impl Diagnostic {
    fn new(severity: Severity, code: &'static str, span: Span, message: String) -> Self {
        Self { severity, code, message, span, labels: Vec::new(), help: Vec::new() }
    }

    pub(crate) fn error(code: &'static str, span: Span, message: impl Into<String>) -> Self {
        Self::new(Severity::Error, code, span, message.into())
    }

    pub(crate) fn warning(code: &'static str, span: Span, message: impl Into<String>) -> Self {
        Self::new(Severity::Warning, code, span, message.into())
    }

    pub(crate) fn notice(code: &'static str, span: Span, message: impl Into<String>) -> Self {
        Self::new(Severity::Notice, code, span, message.into())
    }

    /// Adds a line of help.
    #[must_use]
    pub(crate) fn help(mut self, text: impl Into<String>) -> Self {
        self.help.push(text.into());
        self
    }

    /// Adds a labelled place.
    #[must_use]
    pub(crate) fn label(mut self, span: Span, text: impl Into<String>) -> Self {
        self.labels.push(Label { span, text: text.into() });
        self
    }
}

/// No more than this many diagnostics of a run are printed.
pub const MOST_SHOWN: usize = 20;

/// All diagnostics as text, errors first as [`read`](super::read) sorts them; after
/// [`MOST_SHOWN`] of them only their number.
pub fn render_all(diagnostics: &[Diagnostic], text: &str, name: &str, colour: bool) -> String {
    let mut shown: Vec<String> = diagnostics
        .iter()
        .take(MOST_SHOWN)
        .map(|diagnostic| render(diagnostic, text, name, colour))
        .collect();
    if diagnostics.len() > MOST_SHOWN {
        shown.push(format!("and {} more", diagnostics.len() - MOST_SHOWN));
    }
    shown.join("\n\n")
}

/// Line and column of a byte of `text`, both from 1; columns count characters.
pub fn line_and_column(text: &str, offset: usize) -> (u32, u32) {
    let offset = floor(text, offset);
    let before = &text[..offset];
    let line_start = before.rfind('\n').map_or(0, |position| position + 1);
    let line = before.bytes().filter(|byte| *byte == b'\n').count() + 1;
    let column = before[line_start..].chars().filter(|c| *c != '\u{feff}').count() + 1;
    (u32::try_from(line).unwrap_or(u32::MAX), u32::try_from(column).unwrap_or(u32::MAX))
}

/// A diagnostic as text: message, the lines it is about with marks, and the help.
///
/// `name` is the file's name as printed; with `colour` the text holds terminal colours.
pub fn render(diagnostic: &Diagnostic, text: &str, name: &str, colour: bool) -> String {
    let level = match diagnostic.severity {
        Severity::Error => Level::ERROR,
        Severity::Warning => Level::WARNING,
        Severity::Notice => Level::NOTE.with_name("notice"),
    };
    let title = level.primary_title(diagnostic.message.as_str()).id(diagnostic.code);
    let clamp = |span: Span| {
        let start = floor(text, span.start);
        start..ceil(text, span.end).max(start)
    };
    let mut group = Group::with_title(title);
    if !text.is_empty() {
        // Only the lines concerned are handed on: a renderer that sees a large file is slow.
        let spans = diagnostic.labels.iter().map(|label| label.span).chain([diagnostic.span]);
        let (first, last) =
            spans.fold((text.len(), 0), |(low, high), s| (low.min(s.start), high.max(s.end)));
        let first = floor(text, first);
        let window_start = text[..first].rfind('\n').map_or(0, |position| position + 1);
        let last = ceil(text, last);
        let window_end = text[last..].find('\n').map_or(text.len(), |position| last + position);
        let window = &text[window_start..window_end];
        let shift = |span: Span| {
            let range = clamp(span);
            range.start - window_start..range.end - window_start
        };
        let (line, _) = line_and_column(text, window_start);
        let mut snippet = Snippet::source(window)
            .line_start(line as usize)
            .path(name)
            .annotation(AnnotationKind::Primary.span(shift(diagnostic.span)));
        for label in &diagnostic.labels {
            snippet = snippet.annotation(
                AnnotationKind::Context.span(shift(label.span)).label(label.text.as_str()),
            );
        }
        group = group.element(snippet);
    }
    for help in &diagnostic.help {
        group = group.element(Level::HELP.message(help.as_str()));
    }
    let renderer = if colour { Renderer::styled() } else { Renderer::plain() };
    renderer.render(&[group])
}

/// The last character boundary that is not after `offset`.
pub(crate) fn floor(text: &str, offset: usize) -> usize {
    (0..=offset.min(text.len())).rev().find(|at| text.is_char_boundary(*at)).unwrap_or(0)
}

/// The first character boundary that is not before `offset`.
fn ceil(text: &str, offset: usize) -> usize {
    (offset..text.len()).find(|at| text.is_char_boundary(*at)).unwrap_or(text.len())
}
