//! Claims with their verdicts: text, LaTeX and JSON.

mod json;
mod latex;
mod text;
mod words;

pub use json::{CHECK_SCHEMA, Check, ClaimResult, Place, UnitErrorObject, result};
pub use latex::latex;
pub use text::{Look, heading, summary, text};
pub use words::step_text;

use crate::analysis::check::Judgement;
use crate::circuit::{Circuit, Claim, Unit};
use crate::typeset::{SymbolTable, shape::Lettering};

/// A claim and what was found about it.
#[derive(Debug)]
pub struct Checked<'a> {
    /// The circuit.
    pub circuit: &'a Circuit,
    /// The claim.
    pub claim: &'a Claim,
    /// Its number, from 1.
    pub index: usize,
    /// What was found.
    pub judgement: Judgement,
    /// Which of its units do not fit.
    pub units: Option<UnitError>,
}

/// Two units that would have to be one, and where, in bytes of the claim's text.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct UnitError {
    /// The unit of the first summand, or of the answer.
    pub left: Unit,
    /// The unit of the other summand, or of the whole formula.
    pub right: Unit,
    /// The other summand, or the whole formula.
    pub part: (usize, usize),
    /// The first summand; none where the whole formula is not in the unit of the answer.
    pub before: Option<(usize, usize)>,
}

/// The names of a judgement's symbols, and which of them are what.
fn names(judgement: &Judgement, of_frequency: bool) -> (SymbolTable, Lettering<'_>) {
    let names = SymbolTable::new(judgement.symbols.iter().map(|symbol| symbol.name.as_str()));
    let names = if of_frequency { names.of_frequency() } else { names };
    (names, super::lettering_of(&judgement.symbols))
}

/// Whether a claim is about a noise density, a function of the frequency in hertz.
fn of_frequency(claim: &Claim) -> bool {
    claim.extra.iter().any(|symbol| symbol.name == "k_B")
}
