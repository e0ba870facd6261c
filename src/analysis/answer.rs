//! What a question is answered with: named results.

use super::closed_form::terms_by_power;
use super::noise::{self, Noise};
use super::{
    AnalysisError, Check, ClosedForm, Derivation, Length, Notice, NumericForm, Options, feedback,
    limit_text, posed::Posed, return_ratio, two_port,
};
use crate::circuit::{Ask, Circuit, Drive, Question, Symbol, Transfer, Unit};
use crate::elimination::{Elimination, TermCounts};
use crate::numeric::Report;

/// One named result.
#[derive(Clone, Debug)]
pub struct Entry {
    /// Its name: `H`, `P.z11`.
    pub name: String,
    /// What it is, in the words of the question.
    pub query: String,
    /// The independent source whose share it is, in a superposition.
    pub source: Option<String>,
    /// Its unit.
    pub unit: Unit,
    /// The symbols that the formula's variables stand for: the circuit's, and behind them constants
    /// of nature where the formula has some.
    pub symbols: Vec<Symbol>,
    /// How many of these are the circuit's.
    pub own_symbols: usize,
    /// The formula. The first variable is the frequency in hertz in a noise density, else `s`.
    pub form: ClosedForm,
    /// How many terms it has expanded; by powers of `s` see [`Self::terms_by_power`].
    pub length: Length,
    /// The formula with the nominal values put in.
    pub numeric: Option<NumericForm>,
    /// The limits that were taken, as they are written.
    pub limits: Vec<String>,
    /// The cross-check.
    pub evidence: Report,
    /// What else was tried.
    pub checks: Vec<Check>,
    /// Remarks.
    pub notices: Vec<Notice>,
    /// The eliminated network; none where the formula has no diagram of its own.
    pub elimination: Option<Elimination>,
    /// Contributions and totals of a noise density.
    pub noise: Option<Noise>,
}

impl Entry {
    /// Whether every witness agrees.
    pub fn passed(&self) -> bool {
        self.evidence.passed() && self.checks.iter().all(|check| check.passed)
    }

    /// How many terms the formula has expanded, by powers of `s`; none for a nested form without a diagram.
    ///
    /// # Cost
    /// For a nested form one pass over the diagram with a large integer for each power of `s`.
    pub fn terms_by_power(&self) -> Option<TermCounts> {
        terms_by_power(&self.length, self.elimination.as_ref())
    }

    /// From the derivation of a transfer function.
    pub(crate) fn new(
        circuit: &Circuit,
        name: String,
        query: String,
        unit: Unit,
        derivation: Derivation,
    ) -> Self {
        Self {
            name,
            query,
            source: None,
            unit,
            symbols: circuit.symbols.clone(),
            own_symbols: circuit.symbols.len(),
            form: derivation.form,
            length: derivation.length,
            numeric: derivation.numeric,
            limits: circuit.limits.iter().map(|limit| limit_text(circuit, limit)).collect(),
            evidence: derivation.evidence,
            checks: derivation.checks,
            notices: derivation.notices,
            elimination: Some(derivation.elimination),
            noise: None,
        }
    }
}

/// Answers a question: one result for a ratio, one for each source of a superposition, four for a
/// set of two-port parameters.
///
/// # Errors
/// Those of [`super::derive()`], and sets of parameters that do not exist.
pub fn answer(
    circuit: &Circuit,
    ask: &Ask,
    options: &Options,
) -> Result<Vec<Entry>, AnalysisError> {
    let ratio = |transfer: &Transfer| {
        let derivation = Posed::new(circuit, transfer.clone()).derive(options)?;
        Ok(Entry::new(circuit, ask.name.clone(), ask.text.clone(), transfer.unit, derivation))
    };
    match &ask.question {
        Question::Ratio(transfer) => {
            let mut entries = vec![ratio(transfer)?];
            if let Some(around) = options.feedback {
                entries.extend(feedback::parts(
                    circuit,
                    ask,
                    transfer,
                    &entries[0],
                    around,
                    options,
                )?);
            }
            Ok(entries)
        }
        Question::Superposition(transfers) => transfers
            .iter()
            .map(|transfer| {
                let source = match transfer.drive {
                    Drive::Source(id) => Some(circuit[id].name.clone()),
                    Drive::Port(..) => None,
                };
                Ok(Entry { source, ..ratio(transfer)? })
            })
            .collect(),
        Question::TwoPort(ports) => two_port::answer(circuit, ask, ports, options),
        Question::ReturnRatio(id) => {
            let derivation = return_ratio::pose(circuit, *id)?.derive(options)?;
            let (name, query) = (ask.name.clone(), ask.text.clone());
            Ok(vec![Entry::new(circuit, name, query, Unit::ONE, derivation)])
        }
        Question::NoiseDensity(plus, minus) => {
            noise::answer(circuit, ask, (*plus, *minus), options).map(|entry| vec![entry])
        }
    }
}
