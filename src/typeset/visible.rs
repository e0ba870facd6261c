//! Text of unknown origin, made visible: what would hide, reorder or break text is written by its code.
//!
//! Titles, names and comments come from files that anybody may have written. Control characters, marks
//! that turn the direction of reading (Unicode Standard Annex 9), invisible characters and noncharacters
//! are shown as `⟨U+202E⟩`; so they are plain text in whatever format follows.

use std::borrow::Cow;

/// The text with such characters written by their codes; new lines and tabs become spaces.
pub(crate) fn line(text: &str) -> Cow<'_, str> {
    if text.chars().any(is_hidden) { shown(text, false).into() } else { text.into() }
}

/// The same for a text of several lines.
pub(crate) fn lines(text: &str) -> Cow<'_, str> {
    let breaks = |c: char| matches!(c, '\n' | '\t');
    if text.chars().any(|c| is_hidden(c) && !breaks(c)) {
        shown(text, true).into()
    } else {
        text.into()
    }
}

fn shown(text: &str, keep_lines: bool) -> String {
    let mut out = String::with_capacity(text.len());
    for c in text.chars() {
        match c {
            '\n' | '\t' if keep_lines => out.push(c),
            '\n' | '\t' | '\r' if !keep_lines => out.push(' '),
            '\r' => {}
            c if is_hidden(c) => out.push_str(&format!("⟨U+{:04X}⟩", u32::from(c))),
            c => out.push(c),
        }
    }
    out
}

fn is_hidden(c: char) -> bool {
    c.is_control()
        || matches!(c,
            '\u{ad}' | '\u{61c}' | '\u{180e}' | '\u{200b}'..='\u{200f}' | '\u{2028}'..='\u{202e}'
            | '\u{2060}'..='\u{206f}' | '\u{feff}' | '\u{fff9}'..='\u{fffb}'
            | '\u{fdd0}'..='\u{fdef}' | '\u{e0000}'..='\u{e0fff}')
        || u32::from(c) & 0xfffe == 0xfffe
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn what_hides_is_shown() {
        assert_eq!(line("plain Ω"), "plain Ω");
        assert_eq!(line("a\u{202e}b\u{7}c\nd"), "a⟨U+202E⟩b⟨U+0007⟩c d");
        assert_eq!(lines("a\r\n\tb\u{200b}"), "a\n\tb⟨U+200B⟩");
        assert_eq!(line("\u{ffff}"), "⟨U+FFFF⟩");
    }
}
