//! Syntax errors in the reader's words: what was expected, what was found.

use super::devices;
use super::diagnostic::{Diagnostic, floor};
use super::names::nearest;
use super::parse::Rule;
use super::source::{KEYWORDS, LogicalLine, Source};
use pest::error::{Error, ErrorVariant, InputLocation};

/// An error for a line that begins like no statement.
pub(crate) fn unknown_line(source: &Source, line: &LogicalLine) -> Diagnostic {
    let content = &source.text[line.clone()];
    let end = content.find([' ', '\t', '\n', '=', '(']).unwrap_or(content.len());
    let end = if end == 0 { content.chars().next().map_or(0, char::len_utf8) } else { end };
    let word = &content[..end];
    let span = source.span(line.start..line.start + end);
    if let Some(stranger) = stranger(content)
        && stranger < end
    {
        return unexpected_character(source, line.start + stranger);
    }
    let shown: String = word.chars().take(40).collect();
    let fault =
        Diagnostic::error("unknown-statement", span, format!("`{shown}` begins no statement"));
    if let Some(known) = nearest(word, KEYWORDS.into_iter().chain(devices::kinds())) {
        return fault.help(format!("is it `{known}`?"));
    }
    if super::names::class_of_letter(word).is_some() || super::names::class_of_word(word).is_some()
    {
        return fault.help(format!("an element stands between two nodes: `a > {shown} > b`"));
    }
    fault.help("a line is a walk (`in > R1 > out`), a device (`opamp U1: …`) or a statement (`ask`, `let`, `band`, …)")
}

/// Offset of the first character that the language does not know.
fn stranger(content: &str) -> Option<usize> {
    content
        .char_indices()
        .find(|(_, c)| {
            !c.is_ascii_graphic()
                && !c.is_ascii_whitespace()
                && !is_greek(*c)
                && !matches!(c, '∥' | '±' | '≈' | '∞')
        })
        .map(|(offset, _)| offset)
}

fn is_greek(character: char) -> bool {
    matches!(character, 'Α'..='Ω' | 'α'..='ω')
}

fn unexpected_character(source: &Source, offset: usize) -> Diagnostic {
    let character = source.text[offset..].chars().next().unwrap_or(' ');
    let fault = Diagnostic::error(
        "unexpected-character",
        source.span(offset..offset + character.len_utf8()),
        format!("unexpected character `{}`", character.escape_debug()),
    );
    match character {
        '²' | '³' => fault.help("a power is written `^`, as in `s^2`"),
        _ => fault.help("names are made of Latin or Greek letters, digits and `_`"),
    }
}

/// An error of the grammar, in words.
pub(crate) fn syntax(source: &Source, line: &LogicalLine, error: &Error<Rule>) -> Diagnostic {
    let content = &source.text[line.clone()];
    let position = match error.location {
        InputLocation::Pos(position) | InputLocation::Span((position, _)) => position,
    };
    let position = floor(content, position);
    let rest = content[position..].trim_start();
    let place = line.start + content.len() - rest.len();
    if !rest.is_empty() && stranger(rest) == Some(0) {
        return unexpected_character(source, place);
    }
    if let Some(open) = unclosed(content)
        && (rest.is_empty() || rest.starts_with('>'))
    {
        let open = line.start + open;
        return Diagnostic::error(
            "parenthesis",
            source.span(open..open + 1),
            "a parenthesis that is never closed",
        )
        .help("add the missing `)`");
    }
    let token = rest.len().min(token_length(rest));
    let found = if rest.is_empty() {
        "found the end of the line".to_owned()
    } else {
        let shown: String = rest[..token].chars().take(40).collect();
        format!("found `{shown}`")
    };
    let expected = match &error.variant {
        ErrorVariant::ParsingError { positives, .. } => expected(positives),
        ErrorVariant::CustomError { message } => message.clone(),
    };
    let span = if rest.is_empty() {
        // Mark the last character: nothing stands behind it.
        let last = content.trim_end().char_indices().next_back().map_or(0, |(offset, _)| offset);
        source.span(line.start + last..line.start + content.trim_end().len())
    } else {
        source.span(place..place + token)
    };
    let fault = Diagnostic::error("syntax", span, format!("expected {expected}, {found}"));
    if rest.starts_with(')') {
        return fault.help("there is no `(` for this `)`");
    }
    fault
}

fn token_length(rest: &str) -> usize {
    let word =
        rest.find(|c: char| !c.is_alphanumeric() && c != '_' && c != '.').unwrap_or(rest.len());
    if word > 0 { word } else { rest.chars().next().map_or(0, char::len_utf8) }
}

/// Offset of the innermost `(` that stays open.
fn unclosed(content: &str) -> Option<usize> {
    let mut open = Vec::new();
    for (offset, byte) in content.bytes().enumerate() {
        match byte {
            b'(' => open.push(offset),
            b')' => {
                open.pop();
            }
            _ => {}
        }
    }
    open.pop()
}

/// The list of what could have stood there, the likeliest first.
fn expected(positives: &[Rule]) -> String {
    let mut words: Vec<&str> = Vec::new();
    for rule in positives {
        let word = match rule {
            Rule::arrow => "`>`",
            Rule::colon => "`:`",
            Rule::semicolon => "`;`",
            Rule::comma => "`,`",
            Rule::equals => "`=`",
            Rule::about => "`~`",
            Rule::within => "`within`",
            Rule::open | Rule::arguments => "`(`",
            Rule::close => "`)`",
            Rule::quote | Rule::quoted => "a title in quotes",
            Rule::to => "`to`",
            Rule::from => "`from`",
            Rule::percent => "`%`",
            Rule::infinity => "`infinity`",
            Rule::zero => "`0`",
            Rule::plus | Rule::minus | Rule::times | Rule::over | Rule::caret | Rule::stars => {
                "an operator"
            }
            Rule::bars => "`||`",
            Rule::name
            | Rule::names
            | Rule::parameter
            | Rule::parameters
            | Rule::kind
            | Rule::claim_name
            | Rule::callee => "a name",
            Rule::latex_formula => "a formula",
            Rule::node | Rule::nodes | Rule::part | Rule::step => "a node or an element",
            Rule::quantity | Rule::figure | Rule::plus_minus | Rule::tolerance => "a quantity",
            Rule::unit => "a unit",
            Rule::value | Rule::walk_value | Rule::block_value => "a value",
            Rule::sum
            | Rule::walk_sum
            | Rule::term
            | Rule::walk_term
            | Rule::factor
            | Rule::symbol
            | Rule::number
            | Rule::group
            | Rule::call => "an expression",
            Rule::item | Rule::role | Rule::binding | Rule::bias => "a role or a parameter",
            Rule::EOI => "the end of the line",
            _ => continue,
        };
        if !words.contains(&word) {
            words.push(word);
        }
    }
    // A unit may follow nearly anything; it explains least.
    if words.len() > 1 {
        words.retain(|word| *word != "a unit");
    }
    match words.split_last() {
        None => "something else".to_owned(),
        Some((last, [])) => (*last).to_owned(),
        Some((last, rest)) => format!("{} or {last}", rest.join(", ")),
    }
}
