//! The nearest single change that makes a wrong claim right.
//!
//! Every part of the formula as written stands in the whole exactly once, so what it would have to be for
//! the claim to be right can be worked out from the outside inwards ([`needed`]). That is done modulo a
//! prime at a few points that differ in one symbol each: from these it is seen whether what is needed is the
//! part times a monomial (a sign, a factor, another element, a power), its inverse, or the part plus a
//! monomial (a missing term). Changes that touch several places (two elements swapped) are tried one by one.
//! The cheapest change that exact algebra confirms is the repair.

mod candidates;
mod in_limit;
mod needed;

use super::Step;
use crate::algebra::Fraction;
use crate::circuit::{Circuit, Claim, Number, Symbol, SymbolId, SymbolRole, Value};
use crate::elimination::fraction_of;

/// A single change.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Change {
    /// The sign of a part is wrong.
    Sign {
        /// As written.
        part: Value,
    },
    /// A part lacks a factor that is a number, or has it too much: part × factor is right.
    Factor {
        /// As written.
        part: Value,
        /// What it is to be multiplied by.
        factor: Value,
    },
    /// The same with a factor that holds symbols or `s`.
    Power {
        /// As written.
        part: Value,
        /// What stands in its place.
        meant: Value,
    },
    /// A frequency in hertz stands for one in radians per second, or the other way round.
    Turns {
        /// As written.
        part: Value,
        /// 2π to some power.
        factor: Value,
    },
    /// A ratio is upside down.
    Inverted {
        /// As written.
        part: Value,
    },
    /// Two elements stand for each other, everywhere.
    Swapped(SymbolId, SymbolId),
    /// One element stands where another belongs.
    Element {
        /// As written.
        written: SymbolId,
        /// What belongs there.
        meant: SymbolId,
        /// Whether that is so wherever it stands.
        everywhere: bool,
    },
    /// A term is missing in a sum, or beside a part that becomes a sum.
    MissingTerm {
        /// The term, with its sign.
        term: Value,
        /// Where it is missing, as written.
        part: Value,
    },
    /// Something in parallel is missing.
    MissingParallel {
        /// What is missing.
        operand: Value,
        /// Where it is missing.
        part: Value,
    },
    /// A term is too much.
    ExtraTerm {
        /// The term, with its sign.
        term: Value,
    },
    /// ω stands for `s`.
    Omega,
}

impl Change {
    /// A short name for programs.
    pub fn kind(&self) -> &'static str {
        match self {
            Self::Sign { .. } => "sign",
            Self::Factor { .. } => "factor",
            Self::Power { .. } => "power",
            Self::Turns { .. } => "hertz",
            Self::Inverted { .. } => "inverted",
            Self::Swapped(..) => "swapped",
            Self::Element { .. } => "element",
            Self::MissingTerm { .. } | Self::MissingParallel { .. } => "missing_term",
            Self::ExtraTerm { .. } => "extra_term",
            Self::Omega => "omega",
        }
    }
}

/// A change and the formula that it gives.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Repair {
    /// What is changed.
    pub change: Change,
    /// The whole formula afterwards.
    pub formula: Value,
    /// In which limit that is right; empty where it is right as it stands.
    pub limits: Vec<Step>,
}

impl Repair {
    fn new(change: Change, formula: Value) -> Self {
        Self { change, formula, limits: Vec::new() }
    }
}

/// A change that is to be confirmed; the cheaper, the likelier it is what went wrong.
struct Candidate {
    cost: u32,
    repair: Repair,
}

/// How many candidates are confirmed exactly.
const TRIED: usize = 12;

/// The nearest repair; none where no single change does it.
///
/// `exact` is the square of what is right where `squared` is set.
pub(super) fn nearest(
    circuit: &Circuit,
    claim: &Claim,
    exact: &Fraction,
    squared: bool,
    symbols: &[Symbol],
) -> Option<Repair> {
    if squared {
        return of_square(claim, exact, symbols);
    }
    if claim.under_root.is_some() {
        return None;
    }
    let mut found = candidates::all(&claim.formula, exact, symbols)?;
    found.sort_by_key(|candidate| candidate.cost);
    let is_right = |candidate: &Candidate| {
        fraction_of(&candidate.repair.formula).is_ok_and(|fraction| fraction == *exact)
    };
    let first = found.into_iter().take(TRIED).find(is_right).map(|candidate| candidate.repair);
    first
        .or_else(|| needed::missing_sum(&claim.formula, exact))
        .or_else(|| in_limit::first(circuit, claim, exact))
}

/// Where the square is known: a factor, or an inverted ratio.
fn of_square(claim: &Claim, exact: &Fraction, symbols: &[Symbol]) -> Option<Repair> {
    let plain = fraction_of(&claim.formula).ok()?;
    let root = match &claim.under_root {
        Some(root) => fraction_of(root).ok()?,
        None => Fraction::one(),
    };
    let square = &plain.pow(2) * &root;
    let part = claim.formula.clone();
    if square == *exact {
        let formula = Value::Negative(Box::new(part.clone()));
        return Some(Repair::new(Change::Sign { part }, formula));
    }
    if square.recip().as_ref() == Some(exact) {
        let formula = Value::Power(Box::new(part.clone()), -1);
        return Some(Repair::new(Change::Inverted { part }, formula));
    }
    let ratio = exact.checked_div(&square)?;
    let number =
        |power: i32| Value::Power(Box::new(Value::Number(Number::from_integer(2.into()))), power);
    for power in [1, -1, 2, -2] {
        let factor = number(power);
        if fraction_of(&factor).ok().map(|f| f.pow(2)).as_ref() == Some(&ratio) {
            let formula = Value::Product(vec![factor.clone(), part.clone()]);
            return Some(Repair::new(Change::Factor { part, factor }, formula));
        }
    }
    let pi = symbols.iter().position(|symbol| symbol.role == SymbolRole::Pi)?;
    let pi = Value::Symbol(SymbolId(pi as u32));
    for power in [1, -1] {
        let factor = Value::Product(vec![number(power), Value::Power(Box::new(pi.clone()), power)]);
        if fraction_of(&factor).ok().map(|f| f.pow(2)).as_ref() == Some(&ratio) {
            let formula = Value::Product(vec![factor.clone(), part.clone()]);
            return Some(Repair::new(Change::Turns { part, factor }, formula));
        }
    }
    None
}
