//! Names of symbols in MathML, split as for LaTeX: a quantity letter with the rest as its subscript.

use super::greek;
use super::latex_name::{Quantity, split};
use super::svg::escaped;

/// The source name as one MathML element.
pub(crate) fn mathml_name(source: &str) -> String {
    let (quantity, parts) = split(source);
    let quantity = match quantity {
        Quantity::Greek(letter) => format!("<mi>{}</mi>", letter.letter),
        Quantity::Word(word) => format!("<mi>{}</mi>", escaped(word)),
        Quantity::Letter(letter) => format!("<mi>{}</mi>", escaped(&letter.to_string())),
        Quantity::Blank => "<mi>_</mi>".to_owned(),
    };
    if parts.is_empty() {
        return quantity;
    }
    let below = subscript(&parts);
    format!("<msub>{quantity}{below}</msub>")
}

/// The parts of a subscript, separated by commas: numbers, Greek letters, and upright text.
fn subscript(parts: &[&str]) -> String {
    let mut pieces = Vec::new();
    for (index, part) in parts.iter().enumerate() {
        if index > 0 {
            pieces.push("<mtext>,</mtext>".to_owned());
        }
        match greek::split_leading_name(part) {
            Some((greek, rest)) if rest.bytes().all(|b| b.is_ascii_digit()) => {
                pieces.push(format!("<mi>{}</mi>", greek.letter));
                if !rest.is_empty() {
                    pieces.push(format!("<mn>{rest}</mn>"));
                }
            }
            _ if part.bytes().all(|b| b.is_ascii_digit()) => {
                pieces.push(format!("<mn>{part}</mn>"));
            }
            _ => pieces.push(format!("<mtext>{}</mtext>", escaped(part))),
        }
    }
    match pieces.as_slice() {
        [one] => one.clone(),
        _ => format!("<mrow>{}</mrow>", pieces.concat()),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn names_are_set_as_the_trade_does() {
        for (source, expected) in [
            ("R", "<mi>R</mi>"),
            ("R1", "<msub><mi>R</mi><mn>1</mn></msub>"),
            ("Rload", "<msub><mi>R</mi><mtext>load</mtext></msub>"),
            ("Cmu", "<msub><mi>C</mi><mi>μ</mi></msub>"),
            ("gain", "<mi>gain</mi>"),
            (
                "Q1.gm",
                "<msub><mi>g</mi><mrow><mtext>m</mtext><mtext>,</mtext><mtext>Q1</mtext></mrow></msub>",
            ),
            ("β", "<mi>β</mi>"),
        ] {
            assert_eq!(mathml_name(source), expected, "for `{source}`");
        }
    }
}
