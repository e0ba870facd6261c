//! The design note: one document about a circuit and its answers, as HTML, LaTeX or Markdown.
//!
//! [`document()`] puts together what there is to say, in the order in which a reader wants it; [`html`],
//! [`tex`] and [`markdown`] write it. Each writer has one function that makes text safe for its format, and
//! all text goes through it: titles, names and comments come from files that anybody may have written.
//!
//! May use: everything of [`crate::typeset`].

mod circuit;
mod claims;
mod closing;
mod document;
mod function;
pub mod html;
pub mod markdown;
mod roots;
pub mod tex;

pub use document::Document;

use super::answer::check::Checked;
use super::shape::Shape;
use crate::analysis::{Notice, Survey};
use crate::circuit::{Ask, Circuit};
use document::{Blocks, code, text};

/// What a note is made from.
#[derive(Debug)]
pub struct Material<'a> {
    /// The circuit, with the options applied.
    pub circuit: &'a Circuit,
    /// The questions with their answers.
    pub answers: &'a [(Ask, Vec<Survey>)],
    /// What the file claims about them.
    pub claims: &'a [Posed<'a>],
    /// How formulas are written.
    pub shape: Shape,
    /// What was said about the text of the file.
    pub remarks: &'a [Notice],
    /// Where it all comes from.
    pub origin: Origin<'a>,
}

/// A claim and what became of it.
#[derive(Debug)]
pub struct Posed<'a> {
    /// The name of the result that it is about.
    pub name: String,
    /// The source whose share that is in a superposition.
    pub source: Option<String>,
    /// The claim as written.
    pub text: String,
    /// The verdict, or why there is none.
    pub outcome: Result<Checked<'a>, String>,
}

/// What is needed to make the note again.
#[derive(Clone, Copy, Debug)]
pub struct Origin<'a> {
    /// The version of the program.
    pub version: &'a str,
    /// The name of the file, without its folder.
    pub file: &'a str,
    /// Its text.
    pub text: &'a str,
    /// SHA-256 of the text, hexadecimal.
    pub hash: &'a str,
    /// The options of the command line that count.
    pub options: &'a [String],
}

/// The note.
pub fn document(material: &Material<'_>) -> Document {
    let title = match material.circuit.title.as_deref() {
        None | Some("") => "Design note".to_owned(),
        Some(title) => title.to_owned(),
    };
    let mut blocks = Blocks::default();
    blocks.paragraph(vec![
        text("Design note of the circuit in "),
        code(material.origin.file),
        text(format!(
            ", made by cofactor {}. Every formula is exact for the circuit as drawn, and was judged by \
             solves that share no code with its derivation; numbers hold at the nominal values.",
            material.origin.version
        )),
    ]);
    circuit::write(&mut blocks, material);
    for (ask, surveys) in material.answers {
        for survey in surveys {
            function::write(&mut blocks, material, ask, survey);
        }
        function::superposition(&mut blocks, ask, surveys);
    }
    closing::write(&mut blocks, material);
    Document { title, blocks: blocks.all }
}

/// Numbers and quantities in the words of a note.
mod words {
    use num_rational::BigRational;

    use crate::circuit::{Tolerance, Unit};
    use crate::typeset::number::{self, Medium};

    /// A value with its unit and a prefix.
    pub(super) fn quantity(value: f64, unit: &str, digits: u32) -> String {
        match BigRational::from_float(value) {
            Some(exact) => number::quantity(&exact, unit, digits, Medium::Unicode),
            None if value < 0.0 => "−∞".to_owned(),
            None => "∞".to_owned(),
        }
    }

    /// A plain number.
    pub(super) fn rounded(value: f64, digits: u32) -> String {
        match BigRational::from_float(value) {
            Some(exact) => number::rounded(&exact, digits, Medium::Unicode),
            None => value.to_string(),
        }
    }

    /// A fixed number of decimals, for columns.
    pub(super) fn decimals(value: f64, places: usize) -> String {
        let text = format!("{value:.places$}");
        let is_zero = text.trim_start_matches('-').chars().all(|c| matches!(c, '0' | '.'));
        if is_zero { text.trim_start_matches('-').to_owned() } else { text.replace('-', "−") }
    }

    /// `± 1 %`, `−20 % +80 %`.
    pub(super) fn tolerance(tolerance: &Tolerance) -> String {
        let text = tolerance.text.replace('-', "−");
        if text.starts_with(['+', '−']) { text } else { format!("± {text}") }
    }

    /// A unit, empty for none.
    pub(super) fn unit(unit: Unit) -> String {
        if unit == Unit::ONE { String::new() } else { unit.to_string() }
    }
}
