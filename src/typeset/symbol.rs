//! Symbols and their names in each medium.
//!
//! A name of the source is a path of components (`S1.Q1.gm`); the last is the quantity, those
//! before it say whose. The identifier joins the path with `_`. The LaTeX name is set as the
//! trade does: a quantity letter, and everything else in its subscript, `g_{\mathrm{m,Q1}}`.
//!
//! Identifiers are unique in a table, differ from `s`, `f` and `pi`, and depend on nothing but the
//! list of names.

use std::borrow::Cow;
use std::collections::BTreeSet;
use std::sync::OnceLock;

use super::Letter;
use super::greek;
use super::latex_name::latex_name;
use super::mathml_name::mathml_name;

/// How names are written.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Style {
    /// As in the source.
    Source,
    /// As in the source, with the names of Greek letters and codes of others.
    Ascii,
    /// ASCII letters, digits and `_`, beginning with a letter or `_`.
    Identifier,
    /// LaTeX, mathematics mode.
    Latex,
    /// MathML.
    MathMl,
    /// As in the source, with Greek letters for their names.
    Unicode,
}

/// One symbol's name in every style.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct SymbolName {
    source: String,
    identifier: String,
    // Made when first asked for: a large circuit has thousands of names, of which one style is printed.
    ascii: OnceLock<String>,
    latex: OnceLock<String>,
    mathml: OnceLock<String>,
    unicode: OnceLock<String>,
}

impl SymbolName {
    fn new(source: &str, identifier: String) -> Self {
        Self {
            source: source.to_owned(),
            identifier,
            ascii: OnceLock::new(),
            latex: OnceLock::new(),
            mathml: OnceLock::new(),
            unicode: OnceLock::new(),
        }
    }

    /// The name in that style.
    #[must_use]
    pub fn styled(&self, style: Style) -> &str {
        match style {
            Style::Source => &self.source,
            Style::Identifier => &self.identifier,
            Style::Ascii => self.ascii.get_or_init(|| ascii_name(&self.source)),
            Style::Latex => self.latex.get_or_init(|| latex_name(&self.source)),
            Style::MathMl => self.mathml.get_or_init(|| mathml_name(&self.source)),
            Style::Unicode => self.unicode.get_or_init(|| unicode_name(&self.source)),
        }
    }
}

/// The symbols that formulas refer to by index, and the stem of the names of sub-expressions.
#[derive(Clone, Debug)]
pub struct SymbolTable {
    names: Vec<SymbolName>,
    definition_stem: String,
    /// Whether the first variable is `f` and not `s`.
    of_frequency: bool,
}

impl Default for SymbolTable {
    /// No symbols.
    fn default() -> Self {
        Self::new([])
    }
}

impl SymbolTable {
    /// The table of these source names, in this order.
    ///
    /// Where two names ask for one identifier, a name that is an identifier already keeps it and
    /// the others, in order, take `_2`, `_3`, …. Sub-expressions are called `e1`, `e2`, …, or with
    /// as many `e` as it takes to differ from every symbol.
    #[must_use]
    pub fn new<'a>(names: impl IntoIterator<Item = &'a str>) -> Self {
        let sources: Vec<&str> = names.into_iter().collect();
        let mut taken: BTreeSet<String> = ["s", "f", "pi"].map(str::to_owned).into();
        let mut identifiers: Vec<Option<String>> = vec![None; sources.len()];
        for (source, identifier) in sources.iter().zip(&mut identifiers) {
            if ascii_identifier(source) == *source && taken.insert((*source).to_owned()) {
                *identifier = Some((*source).to_owned());
            }
        }
        let names: Vec<SymbolName> = sources
            .iter()
            .zip(identifiers)
            .map(|(source, identifier)| {
                let identifier =
                    identifier.unwrap_or_else(|| unique(ascii_identifier(source), &mut taken));
                SymbolName::new(source, identifier)
            })
            .collect();

        let mut definition_stem = "e".to_owned();
        // `e_1` counts too: in LaTeX it looks like `e1`.
        let is_numbered = |name: &str, stem: &str| {
            name.strip_prefix(stem).is_some_and(|rest| {
                let number = rest.strip_prefix('_').unwrap_or(rest);
                !number.is_empty() && number.bytes().all(|b| b.is_ascii_digit())
            })
        };
        while names.iter().any(|name| {
            is_numbered(&name.source, &definition_stem)
                || is_numbered(&name.identifier, &definition_stem)
        }) {
            definition_stem.push('e');
        }
        Self { names, definition_stem, of_frequency: false }
    }

    /// The same names for functions of the frequency: the variable that is `s` elsewhere is `f`.
    #[must_use]
    pub fn of_frequency(self) -> Self {
        Self { of_frequency: true, ..self }
    }

    /// The name of a symbol.
    #[must_use]
    pub fn get(&self, index: u32) -> Option<&SymbolName> {
        self.names.get(index as usize)
    }

    /// The name of a letter; a symbol that is not in the table is `x` and its index.
    #[must_use]
    pub fn letter(&self, letter: Letter, style: Style) -> Cow<'_, str> {
        match letter {
            Letter::S | Letter::Frequency => {
                let is_s = letter == Letter::S && !self.of_frequency;
                match (is_s, style) {
                    (true, Style::MathMl) => "<mi>s</mi>".into(),
                    (false, Style::MathMl) => "<mi>f</mi>".into(),
                    (true, _) => "s".into(),
                    (false, _) => "f".into(),
                }
            }
            Letter::Pi => match style {
                Style::Source | Style::Ascii | Style::Identifier => "pi".into(),
                Style::Latex => "\\pi".into(),
                Style::MathMl => "<mi>π</mi>".into(),
                Style::Unicode => "π".into(),
            },
            Letter::Symbol(index) => match (self.get(index), style) {
                (Some(name), _) => name.styled(style).into(),
                (None, Style::Latex) => format!("x_{{{index}}}").into(),
                (None, Style::MathMl) => indexed("x", u64::from(index)).into(),
                (None, _) => format!("x{index}").into(),
            },
            Letter::Definition(index) => {
                // Counted from 1 for the reader.
                let number = u64::from(index) + 1;
                match style {
                    Style::Latex if self.definition_stem.len() == 1 => {
                        format!("e_{{{number}}}").into()
                    }
                    Style::Latex => {
                        format!("\\mathrm{{{}}}_{{{number}}}", self.definition_stem).into()
                    }
                    Style::MathMl => indexed(&self.definition_stem, number).into(),
                    _ => format!("{}{number}", self.definition_stem).into(),
                }
            }
        }
    }
}

/// A letter with a number below, in MathML.
fn indexed(stem: &str, number: u64) -> String {
    format!("<msub><mi>{stem}</mi><mn>{number}</mn></msub>")
}

/// The name with Greek letters spelt out, and hexadecimal codes for other letters.
fn ascii_name(source: &str) -> String {
    let mut name = String::with_capacity(source.len());
    for c in source.chars() {
        match greek::name_of(c) {
            Some(greek) => name.push_str(greek),
            None if c.is_ascii() => name.push(c),
            None => name.push_str(&format!("u{:04X}", u32::from(c))),
        }
    }
    name
}

/// The ASCII name with `_` for `.` and for all else that is neither letter nor digit.
fn ascii_identifier(source: &str) -> String {
    let replaced = |c: char| if c.is_ascii_alphanumeric() { c } else { '_' };
    let name: String = ascii_name(source).chars().map(replaced).collect();
    if name.starts_with(|c: char| !c.is_ascii_digit()) { name } else { format!("_{name}") }
}

fn unique(wanted: String, taken: &mut BTreeSet<String>) -> String {
    if taken.insert(wanted.clone()) {
        return wanted;
    }
    (2_u64..)
        .map(|number| format!("{wanted}_{number}"))
        .find(|candidate| taken.insert(candidate.clone()))
        .unwrap_or(wanted)
}

/// The name with Greek letters where a component is a Greek name, alone or before a number.
fn unicode_name(source: &str) -> String {
    let component = |component: &str| match greek::split_leading_name(component) {
        Some((greek, rest)) => format!("{}{rest}", greek.letter),
        None => component.to_owned(),
    };
    source.split('.').map(component).collect::<Vec<_>>().join(".")
}

#[cfg(test)]
mod tests {
    use super::*;

    #[track_caller]
    fn check_identifiers(sources: &[&str], expected: &[&str]) {
        let table = SymbolTable::new(sources.iter().copied());
        let identifiers: Vec<&str> =
            table.names.iter().map(|name| name.styled(Style::Identifier)).collect();
        assert_eq!(identifiers, expected);
    }

    #[test]
    fn identifiers_are_ascii_and_unique() {
        check_identifiers(&["R1", "Q1.gm", "β", "S1.S2.C3"], &["R1", "Q1_gm", "beta", "S1_S2_C3"]);
        check_identifiers(&["Q1.gm", "Q1_gm"], &["Q1_gm_2", "Q1_gm"]);
        check_identifiers(&["a.b_c", "a_b.c", "a_b_c"], &["a_b_c_2", "a_b_c_3", "a_b_c"]);
        check_identifiers(&["a.b", "a_b_2", "a_b"], &["a_b_3", "a_b_2", "a_b"]);
        check_identifiers(&["s", "f", "pi"], &["s_2", "f_2", "pi_2"]);
        check_identifiers(&["Rü", "1a", ""], &["Ru00FC", "_1a", "_"]);
    }

    #[test]
    fn definitions_never_clash() {
        let name = |sources: &[&str]| {
            let table = SymbolTable::new(sources.iter().copied());
            table.letter(Letter::Definition(0), Style::Identifier).into_owned()
        };
        assert_eq!(name(&["R1"]), "e1");
        assert_eq!(name(&["e", "ear", "e1x", "e1_"]), "e1");
        assert_eq!(name(&["e12"]), "ee1");
        assert_eq!(name(&["e_3", "ee.7"]), "eee1");
    }

    #[test]
    fn unicode_shows_greek_letters() {
        for (source, expected) in [
            ("beta", "β"),
            ("tau2", "τ2"),
            ("Q1.rpi", "Q1.rpi"),
            ("U1.alpha", "U1.α"),
            ("etch", "etch"),
            ("R1", "R1"),
            ("β", "β"),
        ] {
            assert_eq!(unicode_name(source), expected);
        }
    }
}
