//! Poles and zeros with what sets them: text, LaTeX, JSON and the picture of the complex plane.

mod json;
mod latex;
mod map;
mod table;
mod text;
mod words;

pub use json::{ROOTS_SCHEMA, Roots, RootsResult, result};
pub use latex::latex;
pub use map::map;
pub use text::text;

use crate::analysis::roots::{Chance, Quantity, RootReport, Solution};
use crate::circuit::{Ask, Circuit, Drive, SymbolId, Transfer};
use crate::typeset::SymbolTable;

/// One question with the roots of its transfer functions.
#[derive(Debug)]
pub struct Answer<'a> {
    /// The circuit.
    pub circuit: &'a Circuit,
    /// The question.
    pub ask: &'a Ask,
    /// One for each of the question's transfer functions, in their order.
    pub reports: &'a [Report],
}

/// The roots of one transfer function, and what was asked besides.
#[derive(Debug)]
pub struct Report {
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

impl<'a> Answer<'a> {
    /// The names of the circuit's symbols.
    fn names(&self) -> SymbolTable {
        SymbolTable::new(self.circuit.symbols.iter().map(|symbol| symbol.name.as_str()))
    }

    fn parts(&self) -> impl Iterator<Item = (&'a Transfer, &'a Report)> {
        self.ask.transfers().iter().zip(self.reports)
    }

    /// The source whose share in a superposition this is.
    fn source(&self, transfer: &Transfer) -> Option<&'a str> {
        match transfer.drive {
            Drive::Source(id) if self.ask.is_superposition() => Some(&self.circuit[id].name),
            _ => None,
        }
    }
}

/// `H`, or `H[Vin]` for a source's share in a superposition.
fn label(answer: &Answer<'_>, transfer: &Transfer) -> String {
    match answer.source(transfer) {
        Some(source) => format!("{}[{source}]", answer.ask.name),
        None => answer.ask.name.clone(),
    }
}
