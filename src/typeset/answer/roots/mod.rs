//! Poles and zeros with what sets them: text, LaTeX, JSON and the picture of the complex plane.

mod json;
mod table;
mod text;

pub use json::{ROOTS_SCHEMA, Roots, RootsResult, result};
pub use text::text;

use crate::analysis::roots::RootReport;
use crate::circuit::{Ask, Circuit, Drive, Transfer};

/// One question with the roots of its transfer functions.
#[derive(Debug)]
pub struct Answer<'a> {
    /// The circuit.
    pub circuit: &'a Circuit,
    /// The question.
    pub ask: &'a Ask,
    /// One for each of the question's transfer functions, in their order.
    pub reports: &'a [RootReport],
}

impl<'a> Answer<'a> {
    fn parts(&self) -> impl Iterator<Item = (&'a Transfer, &'a RootReport)> {
        self.ask.transfers.iter().zip(self.reports)
    }

    /// The source whose share in a superposition this is.
    fn source(&self, transfer: &Transfer) -> Option<&'a str> {
        match transfer.drive {
            Drive::Source(id) if self.ask.superposition => Some(&self.circuit[id].name),
            _ => None,
        }
    }
}
