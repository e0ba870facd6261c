//! The questions: from a circuit and a query to a rational function in lowest terms, the evidence
//! for it, and what a reader should know besides.
//!
//! May use: [`crate::circuit`], [`crate::algebra`], [`crate::elimination`], [`crate::numeric`].

mod closed_form;
mod error;
mod judged;
mod notice;
mod numbers;
mod port;
pub mod roots;

pub use closed_form::{Closed, ClosedForm, total};
pub use error::AnalysisError;
pub use notice::Notice;
pub use numbers::NumericForm;

use crate::circuit::{Circuit, Transfer};
use crate::elimination::{Elimination, EliminationError, Limits, TermCounts};
use crate::numeric::{self, Report};

/// What an answer may cost.
#[derive(Clone, Copy, Debug)]
pub struct Options {
    /// Terms up to which the formula is expanded; beyond it is nested.
    pub max_terms: usize,
    /// Bounds of the elimination.
    pub limits: Limits,
}

impl Default for Options {
    fn default() -> Self {
        Self { max_terms: 20_000, limits: Limits::default() }
    }
}

/// The answer to one transfer function.
#[derive(Clone, Debug)]
pub struct Derivation {
    /// The formula, in lowest terms.
    pub form: ClosedForm,
    /// How many terms it has expanded, by powers of `s`.
    pub counts: TermCounts,
    /// The formula with the nominal values put in, where all are known and that is affordable.
    pub numeric: Option<NumericForm>,
    /// What the witnesses say.
    pub evidence: Report,
    /// Remarks.
    pub notices: Vec<Notice>,
    /// The eliminated network, for questions that go on from here.
    pub elimination: Elimination,
}

/// Derives one transfer function and has it judged by the witnesses.
///
/// # Errors
/// No unique solution, a work bound, or a witness that could not be asked. A witness that
/// disagrees is no error here: see [`Report::passed`].
pub fn derive(
    circuit: &Circuit,
    transfer: &Transfer,
    options: &Options,
) -> Result<Derivation, AnalysisError> {
    let elimination = match Elimination::new(circuit, transfer, &options.limits) {
        Ok(elimination) => elimination,
        Err(EliminationError::Singular | EliminationError::NoReturnPath(..))
            if port::is_admittance(transfer) =>
        {
            // No current can be forced into the port; a voltage can still stand there.
            let (circuit, transfer) = port::with_test_voltage(circuit, transfer);
            return derive(&circuit, &transfer, options);
        }
        Err(error) => {
            return Err(AnalysisError::explain(&error, circuit, transfer, &options.limits));
        }
    };
    let Closed { form, counts } = closed_form::close(&elimination, options.max_terms);
    let judged = judged::Judged { elimination: &elimination, form: &form };
    let evidence =
        numeric::crosscheck(circuit, transfer, &judged).map_err(AnalysisError::Witness)?;
    let mut notices = notice::collect(circuit, transfer, &elimination);
    let numeric = numbers::nominal(circuit, transfer, &judged, &mut notices);
    Ok(Derivation { form, counts, numeric, evidence, notices, elimination })
}
