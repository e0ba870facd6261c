//! How hard a formula is to read: the symbols in it, and what a reader stumbles over.
//!
//! A symbol costs [`SYMBOL`], everything else less or little more, so that the shortest form wins
//! unless it hides what a designer looks for: the powers of `s` in order, a polynomial that begins
//! with 1 or a plain product, one bar above another.

use crate::typeset::{Formula, Letter, View};

/// The cost of one symbol.
pub(super) const SYMBOL: u32 = 10;
/// `s·(a + s·b)` inside a sum: the coefficients of the powers cannot be read off.
const CROSSED_POWERS: u32 = 40;
/// `a·(1 + s·b)` inside a sum.
const MIXED_POWERS: u32 = 15;
/// A term of a sum with `s` below a bar: poles and zeros of the whole are not seen.
const POLE_IN_TERM: u32 = 20;
/// `a/(1 + b/c)`, and the same under a bare 1.
const BAR_BELOW: u32 = 5;
const BAR_BELOW_ONE: u32 = 15;
/// `s` in a parallel.
const S_IN_PARALLEL: u32 = 25;
/// A sum over a bar that has bars itself, as a term of a sum: `(1 + a/b)/c + d`.
const BAR_ABOVE: u32 = 10;
/// `a/(s·b) + c` or `a/(1 + s·b) + c` above or below a bar.
const POLE_BESIDE_BAR: u32 = 15;
/// A polynomial in `s` that begins with a quotient; less where it ends with a bare power of `s`.
const BEGINS_WITH_QUOTIENT: u32 = 30;
const MONIC: u32 = 12;

/// What is known of a formula from below.
#[derive(Clone, Copy, Default)]
struct Measure {
    cost: u32,
    /// `s` occurs.
    s: bool,
    /// A bar occurs.
    bar: bool,
}

impl Measure {
    fn and(self, other: Self) -> Self {
        Self {
            cost: self.cost.saturating_add(other.cost),
            s: self.s | other.s,
            bar: self.bar | other.bar,
        }
    }

    fn plus(self, cost: u32) -> Self {
        Self { cost: self.cost.saturating_add(cost), ..self }
    }
}

/// The cost of a formula. Recurses as deep as the formula is.
pub(super) fn cost(formula: &Formula) -> u32 {
    measure(formula).cost
}

/// Whether `s` occurs.
pub(super) fn contains_s(formula: &Formula) -> bool {
    matches!(formula.view(), View::Letter(Letter::S)) || formula.operands().iter().any(contains_s)
}

fn measure(formula: &Formula) -> Measure {
    let all =
        |operands: &[Formula]| operands.iter().map(measure).fold(Measure::default(), Measure::and);
    match formula.view() {
        View::Number(_) => Measure::default().plus(u32::from(!formula.is_one())),
        View::Letter(Letter::S) => Measure { s: true, ..Measure::default() },
        View::Letter(Letter::Pi | Letter::Frequency) => Measure::default(),
        View::Letter(Letter::Symbol(_) | Letter::Definition(_)) => Measure::default().plus(SYMBOL),
        View::Power(base, _) => measure(base).plus(1),
        View::Negative(operand) => measure(operand).plus(1),
        View::Product(factors) => all(factors),
        View::Sum(terms) => {
            let whole = all(terms);
            let penalty = terms.iter().map(term_penalty).sum();
            let begins = if whole.s { begins_with_quotient(terms) } else { 0 };
            whole.plus(penalty).plus(begins)
        }
        View::Quotient(above, below) => {
            let (a, b) = (measure(above), measure(below));
            let compound = match (b.bar, matches!(above.view(), View::Number(_))) {
                (false, _) => 0,
                (true, true) => BAR_BELOW_ONE,
                (true, false) => BAR_BELOW,
            };
            let poles = [above, below].into_iter().map(pole_beside_bar).sum::<u32>();
            Measure { bar: true, ..a.and(b).plus(2 + compound + poles) }
        }
        View::Parallel(operands) => {
            let whole = all(operands);
            Measure { bar: false, ..whole.plus(if whole.s { S_IN_PARALLEL } else { 1 }) }
        }
    }
}

fn term_penalty(term: &Formula) -> u32 {
    let term = unsigned(term);
    let (above, below) = match term.view() {
        View::Quotient(above, below) => (above, Some(below)),
        _ => (term, None),
    };
    let factors = match above.view() {
        View::Product(factors) => factors,
        _ => std::slice::from_ref(above),
    };
    let outside = factors.iter().any(is_power_of_s);
    let inside = factors.iter().any(|factor| !is_power_of_s(factor) && contains_s(factor));
    let powers = match (outside, inside) {
        (true, true) => CROSSED_POWERS,
        (false, true) => MIXED_POWERS,
        _ => 0,
    };
    let pole = if below.is_some_and(has_pole) { POLE_IN_TERM } else { 0 };
    let above = if below.is_some() && has_long_bar(above) { BAR_ABOVE } else { 0 };
    powers + pole + above
}

/// Whether a sum stands over a bar somewhere.
fn has_long_bar(formula: &Formula) -> bool {
    match formula.view() {
        View::Quotient(above, _) => matches!(above.view(), View::Sum(_)),
        _ => formula.operands().iter().any(has_long_bar),
    }
}

/// For `1/R + s·C` and the like, not for `1 + a/b + s·C`; less for `1/(R·C) + s`.
fn begins_with_quotient(terms: &[Formula]) -> u32 {
    let mut constants = terms.iter().filter(|term| !contains_s(term)).peekable();
    let quotient = |term: &Formula| matches!(unsigned(term).view(), View::Quotient(..));
    if constants.peek().is_none() || !constants.all(quotient) {
        0
    } else if terms.iter().any(is_power_of_s) {
        MONIC
    } else {
        BEGINS_WITH_QUOTIENT
    }
}

/// For a factor that is a sum with `s` in the divisor of a term.
fn pole_beside_bar(side: &Formula) -> u32 {
    let pole = |term: &Formula| match unsigned(term).view() {
        View::Quotient(_, below) => contains_s(below),
        _ => false,
    };
    let sum = |factor: &Formula| match factor.view() {
        View::Sum(terms) => terms.iter().any(pole),
        _ => false,
    };
    let factors = match side.view() {
        View::Product(factors) => factors,
        _ => std::slice::from_ref(side),
    };
    if factors.iter().any(sum) { POLE_BESIDE_BAR } else { 0 }
}

/// Whether `s` stands in a divisor other than as a mere factor.
pub(super) fn has_pole(below: &Formula) -> bool {
    let factors = match below.view() {
        View::Product(factors) => factors,
        _ => std::slice::from_ref(below),
    };
    factors.iter().any(|factor| !is_power_of_s(factor) && contains_s(factor))
}

/// `s` or a power of it.
pub(super) fn is_power_of_s(formula: &Formula) -> bool {
    match formula.view() {
        View::Letter(letter) => letter == Letter::S,
        View::Power(base, _) => is_power_of_s(base),
        _ => false,
    }
}

/// Without its minus sign.
pub(super) fn unsigned(formula: &Formula) -> &Formula {
    match formula.view() {
        View::Negative(operand) => operand,
        _ => formula,
    }
}
