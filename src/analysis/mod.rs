//! The questions: from a circuit and a query to rational functions in lowest terms, the evidence
//! for them, and what a reader should know besides.
//!
//! [`answer()`] gives every question its named results. Whatever is asked comes down to transfer
//! functions, some of them of the circuit with test elements added (`posed`); each is derived by
//! [`derive()`] and judged by the witnesses.
//!
//! May use: [`crate::circuit`], [`crate::algebra`], [`crate::elimination`], [`crate::numeric`].

mod answer;
pub mod check;
mod closed_form;
mod error;
mod feedback;
mod judged;
mod limits;
mod noise;
mod notice;
mod numbers;
mod port;
mod posed;
pub mod response;
mod return_ratio;
pub mod roots;
mod survey;
mod two_port;

pub use answer::{Entry, answer};
pub use closed_form::{ClosedForm, Length};
pub use error::AnalysisError;
pub use limits::limit_text;
pub use noise::{BandNoise, Contributor, Noise, TotalNoise};
pub use notice::Notice;
pub use numbers::NumericForm;
pub use survey::{Numbers, Survey, survey};

use crate::circuit::{Circuit, ElementId, Transfer};
use crate::elimination::{Elimination, Limits};
use crate::numeric::Report;
use posed::Posed;

/// What an answer may cost, and what it is to hold besides.
#[derive(Clone, Copy, Debug)]
pub struct Options {
    /// Terms up to which the formula is expanded; beyond it is nested.
    pub max_terms: usize,
    /// Bounds of the elimination.
    pub limits: Limits,
    /// The dependent source around which every ratio is split into ideal gain, return ratio and
    /// feed-through (Rosenstark 1974).
    pub feedback: Option<ElementId>,
}

impl Default for Options {
    fn default() -> Self {
        Self { max_terms: 20_000, limits: Limits::default(), feedback: None }
    }
}

/// Something that was tried besides the cross-check of the transfer function.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Check {
    /// What holds when it passed, in one line.
    pub statement: String,
    /// Whether it holds.
    pub passed: bool,
}

/// The answer to one transfer function.
#[derive(Clone, Debug)]
pub struct Derivation {
    /// The formula, in lowest terms, with the circuit's limits taken.
    pub form: ClosedForm,
    /// How many terms it has expanded.
    pub length: Length,
    /// The formula with the nominal values put in, where all are known and that is affordable.
    pub numeric: Option<NumericForm>,
    /// What the witnesses say of the function, before limits are taken.
    pub evidence: Report,
    /// What the witnesses say of the limits.
    pub checks: Vec<Check>,
    /// Remarks.
    pub notices: Vec<Notice>,
    /// The eliminated network with the limits taken, for questions that go on from here.
    pub elimination: Elimination,
}

/// Derives one transfer function with the circuit's limits taken, and has it judged by the witnesses.
///
/// # Errors
/// No unique solution, an infinite limit, a work bound, or a witness that could not be asked. A
/// witness that disagrees is no error here: see [`Report::passed`] and [`Check::passed`].
pub fn derive(
    circuit: &Circuit,
    transfer: &Transfer,
    options: &Options,
) -> Result<Derivation, AnalysisError> {
    Posed::new(circuit, transfer.clone()).derive(options)
}
