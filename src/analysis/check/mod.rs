//! Judging a claim: a formula derived by hand, against the exact result.
//!
//! Equality is equality of fractions in lowest terms, so it is proved; values modulo a prime serve only
//! to discard candidates before the exact algebra confirms one. [`judge`] tries in turn: equality, limits
//! over the symbols that the claim leaves out (`limits`), and where the claim is wrong what is different
//! (`compare`), which single change mends it (`repair`), and how far it is off (`deviation`).
//! A claim with `~` is judged by numbers (`about`).
//!
//! May use: the rest of [`crate::analysis`], [`crate::circuit`], [`crate::algebra`],
//! [`crate::elimination`]. Prints nothing.

mod about;
mod compare;
mod deviation;
mod error;
mod limits;
mod long;
mod repair;
mod residues;
mod subject;
mod values;

pub use about::Nearness;
pub use compare::{Difference, Side};
pub use deviation::Deviation;
pub use error::CheckError;
pub use limits::Step;
pub use repair::{Change, Repair};

use super::{Entry, Notice};
use crate::algebra::Fraction;
use crate::circuit::{Circuit, Claim, Relation, Symbol, Unit};
use subject::{Exact, Subject};
use values::Values;

/// What a claim turns out to be.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Verdict {
    /// Identical, or within its tolerance where the claim is with `~`.
    Equal,
    /// Identical in a limit of symbols that the claim leaves out.
    EqualInLimit,
    /// Wrong.
    Different,
    /// Quantities of different units are added, or the whole is not in the unit of the answer.
    UnitError,
}

/// A claim with its verdict and the reasons.
#[derive(Clone, Debug)]
pub struct Judgement {
    /// The verdict.
    pub verdict: Verdict,
    /// The least sets of limits, all of one size; empty unless the verdict is
    /// [`Verdict::EqualInLimit`].
    pub limits: Vec<Vec<Step>>,
    /// The claim as a fraction in lowest terms; its square where that of the exact value is known.
    pub claimed: Option<Fraction>,
    /// The exact value; none where it is no rational function of the symbols.
    pub exact: Option<Fraction>,
    /// Whether these two are squares.
    pub squared: bool,
    /// Where the coefficients differ, for a claim that is wrong.
    pub differences: Vec<Difference>,
    /// The nearest single change that makes it right.
    pub repair: Option<Repair>,
    /// What a wrong claim about a function gets right.
    pub right: Option<Right>,
    /// How far the claim is off at the nominal values.
    pub deviation: Option<Deviation>,
    /// How near a claim with `~` is.
    pub nearness: Option<Nearness>,
    /// The symbols of the formulas.
    pub symbols: Vec<Symbol>,
    /// The unit of the claimed quantity; none where the claim's own do not fit.
    pub unit: Option<Unit>,
    /// Remarks.
    pub notices: Vec<Notice>,
}

/// What a claim about a function gets right.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Right {
    /// The behaviour towards s = 0.
    pub dc: bool,
    /// The behaviour towards s = ∞.
    pub high_frequency: bool,
    /// The number of poles that the claim has, and that there are.
    pub poles: (u32, u32),
    /// The number of zeros, likewise.
    pub zeros: (u32, u32),
}

/// Judges a claim against the result that it names; the circuit's limits are taken in that result already.
///
/// `unit` is that of the answer, none where the claim's own units do not fit: then the verdict is
/// [`Verdict::UnitError`], and only the repair is looked for.
///
/// # Errors
/// A formula too long for a proof, roots that do not exist, and values that are missing for a claim
/// with `~`.
///
/// # Cost
/// A few gcds of polynomials of the size of the result where the claim is right; the search for limits is
/// bounded by a number of candidates, and each candidate costs one pass over the terms modulo a prime.
pub fn judge(
    circuit: &Circuit,
    claim: &Claim,
    entry: &Entry,
    unit: Option<Unit>,
) -> Result<Judgement, CheckError> {
    let symbols = symbols_of(circuit, claim, entry);
    let values = Values::new(circuit, entry, &symbols);
    let Some(function) = values::expanded(entry) else {
        return long::refute(claim, entry, symbols, unit);
    };
    let mut notices = Vec::new();
    let subject = Subject::new(circuit, claim, function, &values, &mut notices)?;
    let claimed = subject.claimed(claim)?;
    let mut judgement = Judgement {
        verdict: Verdict::Different,
        limits: Vec::new(),
        claimed: claimed.clone(),
        exact: None,
        squared: matches!(subject.exact, Exact::Square(_)),
        differences: Vec::new(),
        repair: None,
        right: None,
        deviation: None,
        nearness: None,
        symbols,
        unit,
        notices,
    };
    if unit.is_none() {
        judgement.verdict = Verdict::UnitError;
        judgement.exact = subject.fraction().cloned();
        judgement.explain(circuit, claim);
        return Ok(judgement);
    }
    if let (Some(exact), Some(claimed)) = (subject.fraction(), &claimed) {
        judgement.exact = Some(exact.clone());
        if exact == claimed && subject.has_right_sign(claim, &values) {
            judgement.verdict = Verdict::Equal;
            return Ok(judgement);
        }
    }
    if let Relation::About(within) = &claim.relation {
        let nearness = about::judge(circuit, claim, &subject, &values, within)?;
        if nearness.worst <= nearness.within {
            judgement.verdict = Verdict::Equal;
        } else {
            judgement.explain(circuit, claim);
        }
        judgement.nearness = Some(nearness);
        judgement.deviation = deviation::worst(circuit, claim, &subject, &values);
        return Ok(judgement);
    }
    judgement.limits = subject.limits(circuit, claim);
    if judgement.limits.is_empty() {
        judgement.explain(circuit, claim);
    } else {
        judgement.verdict = Verdict::EqualInLimit;
    }
    judgement.deviation = deviation::worst(circuit, claim, &subject, &values);
    Ok(judgement)
}

impl Judgement {
    /// Whether the claim or the exact value has powers of `s`, so that coefficients say something.
    pub fn has_powers(&self) -> bool {
        self.claimed.iter().chain(&self.exact).any(subject::depends_on_s)
    }

    /// Says why a claim is wrong.
    fn explain(&mut self, circuit: &Circuit, claim: &Claim) {
        let (Some(exact), Some(claimed)) = (&self.exact, &self.claimed) else { return };
        self.differences = compare::differences(claimed, exact);
        self.repair = repair::nearest(circuit, claim, exact, self.squared, &self.symbols);
        if subject::depends_on_s(exact) || subject::depends_on_s(claimed) {
            self.right = Some(compare::right(claimed, exact));
        }
    }
}

/// The symbols of the result and of the claim: the circuit's, and behind them what either has besides.
fn symbols_of(circuit: &Circuit, claim: &Claim, entry: &Entry) -> Vec<Symbol> {
    let mut symbols = claim.symbols(circuit);
    // A noise density has numbers for its constants; the claim numbers them alike.
    for (symbol, known) in symbols.iter_mut().zip(&entry.symbols) {
        if symbol.name == known.name && symbol.nominal.is_none() {
            symbol.nominal.clone_from(&known.nominal);
        }
    }
    symbols
}
