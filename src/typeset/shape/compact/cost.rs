//! How hard a formula is to read: the symbols in it, and what a reader stumbles over.
//!
//! A symbol costs [`SYMBOL`], everything else less or little more, so that the shortest form wins
//! unless it hides what a designer looks for: the powers of `s` in order, a polynomial that begins
//! with 1 or a plain product, one bar above another, poles inside sums. One pass from below.

use crate::typeset::{Formula, Letter, View};

/// The cost of one symbol.
pub(super) const SYMBOL: u32 = 10;
/// `s·(a + s·b)` inside a sum: the coefficients of the powers cannot be read off.
const CROSSED_POWERS: u32 = 40;
/// `a·(1 + s·b)` inside a sum.
const MIXED_POWERS: u32 = 15;
/// A term of a sum with a sum in `s` below a bar: poles and zeros of the whole are not seen.
const POLE_IN_TERM: u32 = 15;
/// A bare number beside such a term: `2/(1 + s·a) − 1`.
const NUMBER_BESIDE_POLE: u32 = 15;
/// The same with a sum in `s` above the bar too.
const RATIO_IN_TERM: u32 = 40;
/// Such terms, or `a/(s·b)`, in a sum that is itself above or below a bar.
const POLE_ABOVE: u32 = 15;
const POLE_BELOW: u32 = 5;
const S_DIVISOR: u32 = 15;
/// `a/(1 + b/c)`, and the same under a bare 1.
const BAR_BELOW: u32 = 5;
const BAR_BELOW_ONE: u32 = 17;
/// `a/(1 + b/c)` where `a*c/(b + c)` is the familiar form.
const DIVIDER: u32 = 6;
/// A sum over a bar that has long bars itself, as a term of a sum: `(1 + (a + b)/c)/d + e`.
const BAR_ABOVE: u32 = 10;
/// `s` in a parallel.
const S_IN_PARALLEL: u32 = 25;
/// A polynomial in `s` that begins with a quotient; less where it ends with a bare power of `s`.
const BEGINS_WITH_QUOTIENT: u32 = 30;
const MONIC: u32 = 12;

/// What is known of a formula from below.
#[derive(Clone, Copy, Default)]
struct Measure {
    cost: u32,
    /// `s` occurs.
    s: bool,
    /// A bar occurs; a sum stands over a bar.
    bar: bool,
    long_bar: bool,
    /// Among the factors: a power of `s`; something else in `s`.
    power_of_s: bool,
    sum_in_s: bool,
    /// It is a quotient.
    quotient: bool,
    /// Quotients: a sum in `s` below; also above; a mere power of `s` below.
    pole: bool,
    ratio: bool,
    s_divisor: bool,
    /// Factors that are sums: a term has a pole, or a mere power of `s` below.
    pole_term: bool,
    s_divisor_term: bool,
}

impl Measure {
    /// What holds of a whole when it holds of a part.
    fn and(self, other: Self) -> Self {
        Self {
            cost: self.cost.saturating_add(other.cost),
            s: self.s | other.s,
            bar: self.bar | other.bar,
            long_bar: self.long_bar | other.long_bar,
            ..Self::default()
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

fn measure(formula: &Formula) -> Measure {
    let leaf = Measure::default();
    match formula.view() {
        View::Number(_) => leaf.plus(u32::from(!formula.is_one())),
        View::Letter(Letter::S) => Measure { s: true, power_of_s: true, ..leaf },
        View::Letter(Letter::Pi | Letter::Frequency) => leaf,
        View::Letter(Letter::Symbol(_) | Letter::Definition(_)) => leaf.plus(SYMBOL),
        View::Power(base, _) => measure(base).plus(1),
        View::Negative(operand) => measure(operand).plus(1),
        View::Product(factors) => factors.iter().map(measure).fold(leaf, |whole, factor| Measure {
            power_of_s: whole.power_of_s | factor.power_of_s,
            sum_in_s: whole.sum_in_s | factor.sum_in_s,
            pole_term: whole.pole_term | factor.pole_term,
            s_divisor_term: whole.s_divisor_term | factor.s_divisor_term,
            ..whole.and(factor)
        }),
        View::Sum(terms) => sum(terms),
        View::Quotient(above, below) => quotient(above, below),
        View::Parallel(operands) => {
            let whole = operands.iter().map(measure).fold(leaf, Measure::and);
            let cost = if whole.s { S_IN_PARALLEL } else { 1 };
            Measure { bar: false, sum_in_s: whole.s, ..whole.plus(cost) }
        }
    }
}

fn sum(terms: &[Formula]) -> Measure {
    let mut whole = Measure::default();
    // Constant terms that are quotients, and those that are not; a bare power of s.
    let (mut quotients, mut plain, mut monic, mut number) = (false, false, false, false);
    for term in terms {
        let measured = measure(term);
        let powers = match (measured.power_of_s, measured.sum_in_s) {
            (true, true) => CROSSED_POWERS,
            (false, true) => MIXED_POWERS,
            _ => 0,
        };
        let pole = match (measured.pole, measured.ratio) {
            (_, true) => RATIO_IN_TERM,
            (true, _) => POLE_IN_TERM,
            _ => 0,
        };
        let above =
            if measured.quotient && measured.long_bar && nested(term) { BAR_ABOVE } else { 0 };
        quotients |= !measured.s && measured.quotient;
        plain |= !measured.s && !measured.quotient;
        monic |= is_power_of_s(term);
        number |= matches!(unsigned(term).view(), View::Number(_));
        let (pole_term, s_divisor_term) =
            (whole.pole_term | measured.pole, whole.s_divisor_term | measured.s_divisor);
        whole = whole.and(measured.plus(powers + pole + above));
        (whole.pole_term, whole.s_divisor_term) = (pole_term, s_divisor_term);
    }
    let begins = match (whole.s && quotients && !plain, monic) {
        (false, _) => 0,
        (true, true) => MONIC,
        (true, false) => BEGINS_WITH_QUOTIENT,
    };
    let beside = if number && whole.pole_term { NUMBER_BESIDE_POLE } else { 0 };
    let (pole_term, s_divisor_term) = (whole.pole_term, whole.s_divisor_term);
    Measure { sum_in_s: whole.s, pole_term, s_divisor_term, ..whole.plus(begins + beside) }
}

fn quotient(above: &Formula, below: &Formula) -> Measure {
    let (a, b) = (measure(above), measure(below));
    let mut cost = 2;
    cost += match (b.bar, matches!(above.view(), View::Number(_))) {
        (false, _) => 0,
        (true, true) => BAR_BELOW_ONE,
        (true, false) => BAR_BELOW,
    };
    cost += if is_divider(below) && !matches!(above.view(), View::Sum(_)) { DIVIDER } else { 0 };
    cost += if a.pole_term { POLE_ABOVE } else { 0 } + if b.pole_term { POLE_BELOW } else { 0 };
    cost += if a.s_divisor_term | b.s_divisor_term { S_DIVISOR } else { 0 };
    Measure {
        bar: true,
        long_bar: a.long_bar | b.long_bar | matches!(above.view(), View::Sum(_)),
        quotient: true,
        power_of_s: a.power_of_s,
        sum_in_s: a.sum_in_s,
        pole: b.sum_in_s,
        ratio: b.sum_in_s && a.sum_in_s,
        s_divisor: b.power_of_s && !b.sum_in_s,
        ..a.and(b).plus(cost)
    }
}

/// Whether it is `1 + b/c` of two letters.
fn is_divider(below: &Formula) -> bool {
    let letter = |formula: &Formula| matches!(formula.view(), View::Letter(_));
    let View::Sum([one, ratio]) = below.view() else { return false };
    match ratio.view() {
        View::Quotient(b, c) => one.is_one() && letter(b) && letter(c),
        _ => false,
    }
}

/// Whether the numerator of a quotient has a sum over a bar.
fn nested(term: &Formula) -> bool {
    match unsigned(term).view() {
        View::Quotient(above, _) => measure(above).long_bar,
        _ => false,
    }
}

/// Whether `s` occurs.
pub(super) fn contains_s(formula: &Formula) -> bool {
    measure(formula).s
}

/// Whether a sum in `s` stands among the factors of a divisor.
pub(super) fn has_pole(below: &Formula) -> bool {
    measure(below).sum_in_s
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
