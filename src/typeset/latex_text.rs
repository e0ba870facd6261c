//! Plain text for LaTeX: the one place where text is made safe for it.
//!
//! The engine may be pdfTeX with its usual fonts, so what they lack is written by its code. Nothing that
//! comes out of here is a command of the text's own.

use super::{greek, visible};

/// A line of text, for text mode.
pub(crate) fn text(line: &str) -> String {
    let mut out = String::with_capacity(line.len());
    for c in visible::line(line).chars() {
        out.push_str(&letter(c));
    }
    out
}

/// A line of a listing: every space keeps its place.
pub(crate) fn listing(line: &str) -> String {
    let mut out = String::with_capacity(line.len());
    let mut column = 0;
    let mut after_space = true;
    for c in visible::lines(line).chars() {
        let spaces = match c {
            ' ' => 1,
            '\t' => 8 - column % 8,
            _ => 0,
        };
        column += spaces.max(1);
        if spaces == 0 {
            out.push_str(&letter(c));
        }
        for _ in 0..spaces {
            // A line may break at a single space, not within an indentation.
            out.push_str(if after_space { "~" } else { "\\ " });
            after_space = true;
        }
        after_space = spaces > 0;
    }
    out
}

/// What is not ASCII in a formula stands inside `\text`.
pub(crate) fn within_formula(formula: &str) -> String {
    let each = formula.chars().map(|c| if c.is_ascii() { c.to_string() } else { letter(c) });
    each.collect()
}

fn letter(c: char) -> String {
    let fixed = match c {
        '\\' => "\\textbackslash{}",
        '{' => "\\{",
        '}' => "\\}",
        '$' => "\\$",
        '&' => "\\&",
        '#' => "\\#",
        '%' => "\\%",
        '_' => "\\_",
        '^' => "\\textasciicircum{}",
        '~' => "\\textasciitilde{}",
        '<' => "\\textless{}",
        '>' => "\\textgreater{}",
        '|' => "\\textbar{}",
        '"' => "\\textquotedbl{}",
        // No ligatures: quotes, dashes and inverted marks stay what they are.
        '\'' => "\\textquotesingle{}",
        '`' => "\\textasciigrave{}",
        '-' => "-{}",
        ',' => ",{}",
        '!' => "!{}",
        '?' => "?{}",
        '±' => "\\ensuremath{\\pm}",
        '−' => "\\ensuremath{-}",
        '·' => "\\ensuremath{\\cdot}",
        '×' => "\\ensuremath{\\times}",
        '÷' => "\\ensuremath{\\div}",
        '≫' => "\\ensuremath{\\gg}",
        '≈' => "\\ensuremath{\\approx}",
        '≤' => "\\ensuremath{\\le}",
        '≥' => "\\ensuremath{\\ge}",
        '√' => "\\ensuremath{\\surd}",
        '∥' => "\\ensuremath{\\parallel}",
        '∞' => "\\ensuremath{\\infty}",
        '°' => "\\textdegree{}",
        'µ' => "\\textmu{}",
        '…' => "\\ldots{}",
        '–' => "--",
        '—' => "---",
        '“' => "\\textquotedblleft{}",
        '”' => "\\textquotedblright{}",
        '‘' => "\\textquoteleft{}",
        '’' => "\\textquoteright{}",
        '⟨' => "\\ensuremath{\\langle}",
        '⟩' => "\\ensuremath{\\rangle}",
        '\u{a0}' => "~",
        _ => "",
    };
    if !fixed.is_empty() {
        return fixed.to_owned();
    }
    const RAISED: &str = "⁰¹²³⁴⁵⁶⁷⁸⁹";
    const LOWERED: &str = "₀₁₂₃₄₅₆₇₈₉";
    // Latin letters that the T1 encoding holds.
    const LATIN: &str = "ĂăĄąĆćČčĎďĐđĘęĚěĞğİıĹĺĽľŁłŃńŇňŐőŒœŔŕŘřŚśŞşŠšŢţŤťŮůŰűŸŹźŻżŽž¡¿§ßẞ";
    if c.is_ascii() || LATIN.contains(c) || ('À'..='ÿ').contains(&c) {
        return c.to_string();
    }
    if let Some(digit) = RAISED.chars().position(|raised| raised == c) {
        return format!("\\textsuperscript{{{digit}}}");
    }
    if let Some(digit) = LOWERED.chars().position(|lowered| lowered == c) {
        return format!("\\textsubscript{{{digit}}}");
    }
    match (c, greek::of_char(c)) {
        ('⁻', _) => "\\textsuperscript{-}".to_owned(),
        (_, Some(greek)) => format!("\\ensuremath{{{}}}", greek.latex),
        _ => format!("\\ensuremath{{\\langle}}U+{:04X}\\ensuremath{{\\rangle}}", u32::from(c)),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn text_is_never_a_command() {
        assert_eq!(text("\\input{/etc/passwd}"), "\\textbackslash{}input\\{/etc/passwd\\}");
        assert_eq!(text("50 % of $x_1$"), "50 \\% of \\$x\\_1\\$");
        assert_eq!(
            text("10 kΩ ± 1 µ"),
            "10 k\\ensuremath{\\Omega} \\ensuremath{\\pm} 1 \\textmu{}"
        );
        assert_eq!(text("中"), "\\ensuremath{\\langle}U+4E2D\\ensuremath{\\rangle}");
        assert_eq!(text("^^41"), "\\textasciicircum{}\\textasciicircum{}41");
        assert_eq!(text("m s⁻²"), "m s\\textsuperscript{-}\\textsuperscript{2}");
        assert_eq!(listing("  a b"), "~~a\\ b");
    }
}
