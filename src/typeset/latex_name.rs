//! LaTeX names of symbols: a quantity letter with the rest as its subscript.
//!
//! - `R1` is R₁, `Rload` R with an upright "load", `gm` g with "m", `wp` w with "p";
//! - Greek names are letters, in front (`tau`, `omega0`) and as a whole subscript (`rpi`, `Cmu`);
//! - `_` begins another part of the subscript, and so does the owner: `Q1.gm` is g with "m,Q1";
//! - a word of four small letters or more stays a word (`gain`), unless it is a letter with a
//!   customary subscript (`rout`).

use super::greek;

/// Subscripts that are written right behind a small quantity letter.
const CUSTOMARY: [&str; 16] = [
    "in", "out", "load", "ref", "max", "min", "src", "sense", "zero", "pole", "low", "high", "fb",
    "bias", "gain", "loop",
];

/// What stands on the line of a name.
#[derive(Clone, Copy)]
pub(crate) enum Quantity<'a> {
    /// A Greek letter.
    Greek(&'static greek::Greek),
    /// A word.
    Word(&'a str),
    /// A letter of another alphabet.
    Letter(char),
    /// Nothing but underscores.
    Blank,
}

/// The quantity, and the parts of its subscript.
pub(crate) fn split(source: &str) -> (Quantity<'_>, Vec<&str>) {
    let (owner, own) = match source.rsplit_once('.') {
        Some((owner, own)) => (Some(owner), own),
        None => (None, source),
    };
    let (quantity, rest) = split_quantity(own);
    (quantity, rest.split('_').chain(owner).filter(|part| !part.is_empty()).collect())
}

/// The source name in LaTeX, for mathematics mode.
pub(crate) fn latex_name(source: &str) -> String {
    let (quantity, parts) = split(source);
    let quantity = match quantity {
        Quantity::Greek(letter) => letter.latex.to_owned(),
        Quantity::Word(word) => format!("\\mathrm{{{word}}}"),
        Quantity::Letter(letter) if letter.is_ascii() => letter.to_string(),
        Quantity::Letter(letter) => format!("\\text{{{letter}}}"),
        Quantity::Blank => "\\_".to_owned(),
    };
    if parts.is_empty() { quantity } else { format!("{quantity}_{{{}}}", subscript(&parts)) }
}

/// The quantity, and what belongs below.
fn split_quantity(own: &str) -> (Quantity<'_>, &str) {
    if let Some((greek, rest)) = greek::split_leading_name(own) {
        return (Quantity::Greek(greek), rest);
    }
    let own = own.trim_start_matches('_');
    let Some(first) = own.chars().next() else { return (Quantity::Blank, own) };
    let small = own.bytes().take_while(u8::is_ascii_lowercase).count();
    let after_first = own.get(1..small).unwrap_or_default();
    let is_word =
        small >= 4 && greek::of_name(after_first).is_none() && !CUSTOMARY.contains(&after_first);
    if is_word {
        let (word, rest) = own.split_at(small);
        return (Quantity::Word(word), rest);
    }
    (Quantity::Letter(first), &own[first.len_utf8()..])
}

/// The parts of a subscript, separated by commas. Letters stand upright, numbers alone need no
/// font, Greek is in mathematics italics, other alphabets are text.
fn subscript(parts: &[&str]) -> String {
    #[derive(PartialEq)]
    enum Face {
        Upright,
        Greek,
        Text,
    }
    let mut runs: Vec<(Face, String)> = Vec::new();
    let mut put = |face: Face, text: &str| match runs.last_mut() {
        Some((last, run)) if *last == face && face != Face::Greek => run.push_str(text),
        _ => runs.push((face, text.to_owned())),
    };
    for (index, part) in parts.iter().enumerate() {
        if index > 0 {
            put(Face::Upright, ",");
        }
        if let Some((greek, rest)) = greek::split_leading_name(part)
            && rest.bytes().all(|b| b.is_ascii_digit())
        {
            put(Face::Greek, greek.latex);
            put(Face::Upright, rest);
            continue;
        }
        for c in part.chars() {
            match greek::of_char(c) {
                Some(greek) => put(Face::Greek, greek.latex),
                None if c.is_ascii() => put(Face::Upright, &c.to_string()),
                None => put(Face::Text, &c.to_string()),
            }
        }
    }
    let mut out = String::new();
    for (face, run) in &runs {
        // A comma between faces needs none of its own.
        let unseparated = run.strip_prefix(',').unwrap_or(run);
        if unseparated.len() < run.len() {
            out.push(',');
        }
        let has_letters = unseparated.bytes().any(|b| b.is_ascii_alphabetic());
        match face {
            Face::Upright if has_letters => out.push_str(&format!("\\mathrm{{{unseparated}}}")),
            // A command ends by itself before a digit, a comma or another command.
            Face::Upright | Face::Greek => out.push_str(unseparated),
            Face::Text => out.push_str(&format!("\\text{{{unseparated}}}")),
        }
    }
    out
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn names_are_set_as_the_trade_does() {
        for (source, expected) in [
            ("R", "R"),
            ("R1", "R_{1}"),
            ("R12", "R_{12}"),
            ("Rload", r"R_{\mathrm{load}}"),
            ("R_load2", r"R_{\mathrm{load2}}"),
            ("Rload_2", r"R_{\mathrm{load,2}}"),
            ("Cf", r"C_{\mathrm{f}}"),
            ("Cmu", r"C_{\mu}"),
            ("beta", r"\beta"),
            ("β", r"\beta"),
            ("tau", r"\tau"),
            ("betaF", r"\beta_{\mathrm{F}}"),
            ("omega0", r"\omega_{0}"),
            ("tau_m1", r"\tau_{\mathrm{m1}}"),
            ("wp", r"w_{\mathrm{p}}"),
            ("A0", "A_{0}"),
            ("gm", r"g_{\mathrm{m}}"),
            ("gmb", r"g_{\mathrm{mb}}"),
            ("Q1.gm", r"g_{\mathrm{m,Q1}}"),
            ("Q1.rpi", r"r_{\pi,\mathrm{Q1}}"),
            ("Q1.Cmu", r"C_{\mu,\mathrm{Q1}}"),
            ("S1.R", r"R_{\mathrm{S1}}"),
            ("S1.R1", r"R_{\mathrm{1,S1}}"),
            ("S1.S2.C3", r"C_{\mathrm{3,S1.S2}}"),
            ("U1.gain", r"\mathrm{gain}_{\mathrm{U1}}"),
            ("U1.rout", r"r_{\mathrm{out,U1}}"),
            ("etch", r"\mathrm{etch}"),
            ("rbeta1", r"r_{\beta1}"),
            ("k_B", r"k_{\mathrm{B}}"),
            ("T_0", "T_{0}"),
            ("Rü", r"R_{\text{ü}}"),
            ("Rβ2", r"R_{\beta2}"),
            ("Rb_β2", r"R_{\mathrm{b,}\beta2}"),
            ("βx.C1", r"C_{1,\beta\mathrm{x}}"),
            ("Rho", r"R_{\mathrm{ho}}"),
            ("Gamma2", r"\Gamma_{2}"),
            ("_x", "x"),
            ("__", r"\_"),
        ] {
            assert_eq!(latex_name(source), expected, "for `{source}`");
        }
    }
}
