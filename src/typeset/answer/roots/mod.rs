//! Poles and zeros with what sets them: text, LaTeX, JSON and the picture of the complex plane.

mod json;
mod latex;
mod map;
mod text;
pub(crate) mod words;

pub use json::{ROOTS_SCHEMA, Roots, RootsResult, results};
pub use latex::latex;
pub use map::map;
pub use text::text;

use crate::analysis::Entry;
use crate::analysis::roots::{Chance, Quantity, RootReport, Solution};
use crate::circuit::{Ask, Circuit, SymbolId};
use crate::typeset::SymbolTable;

/// One question with the roots of its results.
#[derive(Debug)]
pub struct Answer<'a> {
    /// The circuit.
    pub circuit: &'a Circuit,
    /// The question.
    pub ask: &'a Ask,
    /// One for each of the question's results, in their order.
    pub reports: &'a [Report<'a>],
}

/// The roots of one result, and what was asked besides.
#[derive(Debug)]
pub struct Report<'a> {
    /// The result.
    pub entry: &'a Entry,
    /// Roots and what sets them.
    pub roots: RootReport,
    /// What chance does to them.
    pub chance: Option<Chance>,
    /// An element that was solved for.
    pub moved: Option<Moved>,
}

/// A solved element.
#[derive(Debug)]
pub struct Moved {
    /// What was moved.
    pub quantity: Quantity,
    /// To where, in hertz or in the function's unit.
    pub target: f64,
    /// With which symbol.
    pub symbol: SymbolId,
    /// The values that do it.
    pub solution: Solution,
}

impl Answer<'_> {
    /// The names of the circuit's symbols.
    fn names(&self) -> SymbolTable {
        SymbolTable::new(self.circuit.symbols.iter().map(|symbol| symbol.name.as_str()))
    }
}

/// `H`, or `H[Vin]` for a source's share in a superposition.
fn label(entry: &Entry) -> String {
    match &entry.source {
        Some(source) => format!("{}[{source}]", entry.name),
        None => entry.name.clone(),
    }
}
