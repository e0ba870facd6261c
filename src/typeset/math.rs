//! Mathematics for documents: one expression in LaTeX, in MathML and as plain text, put together from
//! formulas, names and signs.

use super::latex::Latex;
use super::mathml::MathMl;
use super::svg::escaped;
use super::{Dialect, Formula, Letter, Style, SymbolTable, latex_text, plain, visible};

/// An expression in three media.
#[derive(Clone, Debug, Default, PartialEq)]
pub(crate) struct Math {
    /// For mathematics mode.
    pub(crate) latex: String,
    /// Elements that belong inside `math`.
    pub(crate) mathml: String,
    /// One line for those who do not see the others.
    pub(crate) plain: String,
}

/// Signs between expressions.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(crate) enum Sign {
    Equal,
    Approximately,
    MuchGreater,
    Comma,
    Colon,
}

/// Sets formulas with these names.
#[derive(Clone, Copy, Debug)]
pub(crate) struct Setter<'a> {
    pub(crate) names: &'a SymbolTable,
    /// The widest sum that stays in one row, in symbols.
    pub(crate) width: usize,
}

/// Characters of a text alternative.
const LONGEST_PLAIN: usize = 1000;

impl Setter<'_> {
    /// A formula.
    pub(crate) fn formula(self, formula: &Formula) -> Math {
        let Self { names, width } = self;
        Math {
            latex: Latex { names, width }.text(formula),
            mathml: MathMl { names, width }.text(formula),
            plain: shortened(&plain::text(formula, names, Dialect::Language)),
        }
    }

    /// `left = formula`, with the rows of a long sum under each other.
    pub(crate) fn equation(self, left: &Math, formula: &Formula) -> Math {
        let Self { names, width } = self;
        let text = plain::text(formula, names, Dialect::Language);
        Math {
            latex: Latex { names, width }.equation(&left.latex, formula),
            mathml: MathMl { names, width }.equation(&left.mathml, formula),
            plain: shortened(&format!("{} = {text}", left.plain)),
        }
    }

    /// A letter of a formula.
    pub(crate) fn letter(self, letter: Letter) -> Math {
        let name = |style| self.names.letter(letter, style).into_owned();
        Math { latex: name(Style::Latex), mathml: name(Style::MathMl), plain: name(Style::Source) }
    }
}

fn shortened(text: &str) -> String {
    match text.char_indices().nth(LONGEST_PLAIN) {
        None => text.to_owned(),
        Some((end, _)) => format!("{} …", &text[..end]),
    }
}

impl Math {
    /// A name of its own, set like a symbol.
    pub(crate) fn name(name: &str) -> Self {
        let names = SymbolTable::new([name]);
        Setter { names: &names, width: 1 }.letter(Letter::Symbol(0))
    }

    /// The name of a result: `H`, `P.z21`, `H[Vin]`, `S(f)`.
    pub(crate) fn result(name: &str, source: Option<&str>, of_frequency: bool) -> Self {
        let mut all = Self::name(name);
        if let Some(source) = source {
            let source = Self::name(source);
            all = Self {
                latex: format!("\\left.{}\\right|_{{{}}}", all.latex, source.latex),
                mathml: format!(
                    "<msub><mrow>{}<mo form=\"postfix\">|</mo></mrow><mrow>{}</mrow></msub>",
                    all.mathml, source.mathml
                ),
                plain: format!("{}[{}]", all.plain, source.plain),
            };
        }
        if of_frequency {
            let f = Self {
                latex: "(f)".to_owned(),
                mathml: "<mo stretchy=\"false\">(</mo><mi>f</mi><mo stretchy=\"false\">)</mo>"
                    .to_owned(),
                plain: "(f)".to_owned(),
            };
            all = Self::row([all, f]);
        }
        all
    }

    /// Upright words.
    pub(crate) fn text(words: &str) -> Self {
        Self {
            latex: format!("\\text{{{}}}", latex_text::text(words)),
            mathml: format!("<mtext>{}</mtext>", escaped(&visible::line(words))),
            plain: words.to_owned(),
        }
    }

    /// A sign.
    pub(crate) fn sign(sign: Sign) -> Self {
        let (latex, mathml, plain) = match sign {
            Sign::Equal => (" = ", "<mo>=</mo>", " = "),
            Sign::Approximately => (" \\approx ", "<mo>≈</mo>", " ≈ "),
            Sign::MuchGreater => (" \\gg ", "<mo>≫</mo>", " ≫ "),
            Sign::Comma => {
                (",\\quad ", "<mo separator=\"true\">,</mo><mspace width=\"1em\"></mspace>", ", ")
            }
            Sign::Colon => (":\\quad ", "<mo>:</mo><mspace width=\"0.6em\"></mspace>", ": "),
        };
        Self { latex: latex.into(), mathml: mathml.into(), plain: plain.into() }
    }

    /// Side by side.
    pub(crate) fn row(parts: impl IntoIterator<Item = Self>) -> Self {
        let mut all = Self::default();
        for part in parts {
            all.latex.push_str(&part.latex);
            all.mathml.push_str(&part.mathml);
            all.plain.push_str(&part.plain);
        }
        all.mathml = format!("<mrow>{}</mrow>", all.mathml);
        all
    }

    /// The square root.
    pub(crate) fn root(self) -> Self {
        Self {
            latex: format!("\\sqrt{{{}}}", self.latex),
            mathml: format!("<msqrt><mrow>{}</mrow></msqrt>", self.mathml),
            plain: format!("sqrt({})", self.plain),
        }
    }

    /// A fraction.
    pub(crate) fn over(self, below: Self) -> Self {
        Self {
            latex: format!("\\frac{{{}}}{{{}}}", self.latex, below.latex),
            mathml: format!(
                "<mfrac><mrow>{}</mrow><mrow>{}</mrow></mfrac>",
                self.mathml, below.mathml
            ),
            plain: format!("({})/({})", self.plain, below.plain),
        }
    }
}
