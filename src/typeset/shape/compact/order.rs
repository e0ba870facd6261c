//! The order that readers expect: in sums numbers first, then by powers of `s`, single symbols before
//! products; in products the number, `s`, the symbols, then the parentheses; names in reference order.

use num_bigint::BigInt;
use num_rational::BigRational;

use super::cost::{has_pole, unsigned};
use super::sum::MAX_DIVISOR;
use crate::typeset::{Formula, Letter, View};

/// A sum in order, beginning with a term that is not negative where there is one.
pub(super) fn sum(terms: impl IntoIterator<Item = Formula>) -> Formula {
    let whole = Formula::sum(terms);
    let View::Sum(terms) = unsigned(&whole).view() else { return whole };
    let negative = whole.is_negative();
    let mut keyed: Vec<(Key, Formula)> =
        terms.iter().map(|term| (key(term), term.clone())).collect();
    keyed.sort_by(|a, b| a.0.cmp(&b.0));
    // The first positive term leads, unless that would tear the powers of s apart.
    let lead = keyed.first().map(|first| first.0.power);
    let positive = keyed
        .iter()
        .position(|(key, term)| !term.is_negative() && Some(key.power) == lead)
        .or_else(|| keyed.iter().position(|(_, term)| !term.is_negative()));
    if let Some(place) = positive {
        keyed[..=place].rotate_right(1);
    }
    let ordered = Formula::sum(keyed.into_iter().map(|(_, term)| term));
    if negative { ordered.negative() } else { ordered }
}

/// A product in order, over one bar.
pub(crate) fn product(factors: impl IntoIterator<Item = Formula>) -> Formula {
    let whole = Formula::product(factors);
    let negative = whole.is_negative();
    let ordered = match unsigned(&whole).view() {
        View::Product(factors) => {
            let (mut above, mut below) = (Vec::new(), Vec::new());
            for factor in factors {
                match factor.view() {
                    View::Quotient(a, b) => {
                        above.extend(flat(a));
                        below.extend(flat(b));
                    }
                    View::Number(value) if value.denom() <= &BigInt::from(MAX_DIVISOR) => {
                        let integer = |part: &BigInt| {
                            Formula::number(BigRational::from_integer(part.clone()))
                        };
                        above.push(integer(value.numer()));
                        below.push(integer(value.denom()));
                    }
                    _ => above.push(factor.clone()),
                }
            }
            let sorted = |mut factors: Vec<Formula>| {
                factors.sort_by_cached_key(factor_key);
                Formula::product(factors)
            };
            Formula::quotient(sorted(above), sorted(below))
        }
        _ => return whole,
    };
    if negative { ordered.negative() } else { ordered }
}

fn flat(formula: &Formula) -> Vec<Formula> {
    match formula.view() {
        View::Product(factors) => factors.to_vec(),
        _ => vec![formula.clone()],
    }
}

#[derive(PartialEq, Eq, PartialOrd, Ord)]
struct Key {
    pole: bool,
    power: i64,
    class: u8,
    letters: Vec<Letter>,
}

/// The place of a term in a sum.
fn key(term: &Formula) -> Key {
    let term = unsigned(term);
    let (above, below) = match term.view() {
        View::Quotient(above, below) => (above, Some(below)),
        _ => (term, None),
    };
    let power = power_of_s(above) - below.map_or(0, power_of_s);
    let class = match term.view() {
        View::Number(_) => 0,
        View::Letter(_) | View::Power(..) => 1,
        _ => 2,
    };
    Key { pole: below.is_some_and(has_pole), power, class, letters: letters(term) }
}

fn factor_key(factor: &Formula) -> (u8, Vec<Letter>) {
    let class = match factor.view() {
        View::Number(_) => 0,
        View::Letter(_) => 1,
        View::Power(base, _) if matches!(base.view(), View::Letter(_)) => 1,
        View::Parallel(_) => 2,
        _ => 3,
    };
    (class, letters(factor))
}

/// The power of `s` among the factors of a product.
fn power_of_s(formula: &Formula) -> i64 {
    match formula.view() {
        View::Letter(Letter::S) => 1,
        View::Power(base, power) => power_of_s(base) * i64::from(power),
        View::Product(factors) => factors.iter().map(power_of_s).sum(),
        _ => 0,
    }
}

/// The first letters of a formula, in reading order.
pub(super) fn letters(formula: &Formula) -> Vec<Letter> {
    const ENOUGH: usize = 12;
    let mut found = Vec::new();
    let mut pending = vec![formula];
    while let Some(formula) = pending.pop() {
        if let View::Letter(letter) = formula.view()
            && letter != Letter::S
        {
            found.push(letter);
            if found.len() == ENOUGH {
                break;
            }
        }
        pending.extend(formula.operands().iter().rev());
    }
    found
}
