//! What each part of a formula would have to be for the whole to be right.

use super::{Change, Repair};
use crate::algebra::{Fraction, Polynomial, Var};
use crate::analysis::check::residues::Point;
use crate::circuit::{Number, Value};
use crate::elimination::{fraction_of, symbol_of};

/// The parts of a formula in reading order, the whole first.
pub(super) struct Parts<'v> {
    pub(super) list: Vec<Part<'v>>,
}

/// A part and where it stands.
pub(super) struct Part<'v> {
    pub(super) value: &'v Value,
    pub(super) parent: Option<usize>,
    /// Which operand of the parent it is.
    pub(super) place: usize,
}

impl<'v> Parts<'v> {
    pub(super) fn new(whole: &'v Value) -> Self {
        let mut parts = Self { list: Vec::new() };
        parts.add(whole, None, 0);
        parts
    }

    fn add(&mut self, value: &'v Value, parent: Option<usize>, place: usize) {
        let own = self.list.len();
        self.list.push(Part { value, parent, place });
        for (place, operand) in operands(value).iter().enumerate() {
            self.add(operand, Some(own), place);
        }
    }

    /// The residue of each part, and what it would have to be; none where something divides by 0 or
    /// where a power cannot be undone.
    pub(super) fn residues(&self, point: &Point, whole: u64) -> Vec<[Option<u64>; 2]> {
        let field = &point.field;
        let values: Vec<Option<u64>> =
            self.list.iter().map(|part| point.value(part.value)).collect();
        let mut needed: Vec<Option<u64>> = vec![None; self.list.len()];
        needed[0] = Some(whole);
        for index in 1..self.list.len() {
            let Some(parent) = self.list[index].parent else { continue };
            let others = || {
                (parent + 1..self.list.len())
                    .filter(|&other| other != index && self.list[other].parent == Some(parent))
                    .map(|other| values[other])
            };
            needed[index] = needed[parent].and_then(|wanted| match self.list[parent].value {
                Value::Sum(_) => {
                    others().try_fold(wanted, |rest, other| Some(field.sub(rest, other?)))
                }
                Value::Product(_) => {
                    let product =
                        others().try_fold(1, |all, other| Some(field.mul(all, other?)))?;
                    point.quotient(wanted, product)
                }
                Value::Negative(_) => Some(field.neg(wanted)),
                Value::Power(_, -1) => point.quotient(1, wanted),
                Value::Parallel(_) => {
                    let rest = others().try_fold(point.quotient(1, wanted)?, |rest, other| {
                        Some(field.sub(rest, point.quotient(1, other?)?))
                    })?;
                    point.quotient(1, rest)
                }
                _ => None,
            });
        }
        values.into_iter().zip(needed).map(|(value, needed)| [value, needed]).collect()
    }

    /// The whole with one part replaced.
    pub(super) fn replaced(&self, index: usize, by: Value) -> Value {
        let mut path = Vec::new();
        let mut at = index;
        while let Some(parent) = self.list[at].parent {
            path.push(self.list[at].place);
            at = parent;
        }
        path.reverse();
        replace(self.list[0].value, &path, by)
    }

    /// What a part would have to be, exactly.
    fn exactly(&self, index: usize, whole: &Fraction) -> Option<Fraction> {
        let part = &self.list[index];
        let Some(parent) = part.parent else { return Some(whole.clone()) };
        let wanted = self.exactly(parent, whole)?;
        let others = operands(self.list[parent].value);
        let others = others.iter().enumerate().filter(|(place, _)| *place != part.place);
        let others: Vec<Fraction> =
            others.map(|(_, value)| fraction_of(value).ok()).collect::<Option<_>>()?;
        Some(match self.list[parent].value {
            Value::Sum(_) => others.iter().fold(wanted, |rest, other| &rest - other),
            Value::Product(_) => {
                let product = others.iter().fold(Fraction::one(), |all, other| &all * other);
                wanted.checked_div(&product)?
            }
            Value::Negative(_) => -&wanted,
            Value::Power(_, -1) => wanted.recip()?,
            Value::Parallel(_) => {
                let mut rest = wanted.recip()?;
                for other in &others {
                    rest = &rest - &other.recip()?;
                }
                rest.recip()?
            }
            _ => return None,
        })
    }
}

/// The operands of a value.
pub(super) fn operands(value: &Value) -> &[Value] {
    match value {
        Value::Number(_) | Value::Symbol(_) | Value::S => &[],
        Value::Sum(parts) | Value::Product(parts) | Value::Parallel(parts) => parts,
        Value::Power(inner, _) | Value::Negative(inner) => std::slice::from_ref(inner),
    }
}

fn replace(value: &Value, path: &[usize], by: Value) -> Value {
    let Some((&place, rest)) = path.split_first() else { return by };
    let list = |parts: &[Value]| {
        let mut parts = parts.to_vec();
        parts[place] = replace(&parts[place], rest, by.clone());
        parts
    };
    match value {
        Value::Number(_) | Value::Symbol(_) | Value::S => by,
        Value::Sum(parts) => Value::Sum(list(parts)),
        Value::Product(parts) => Value::Product(list(parts)),
        Value::Parallel(parts) => Value::Parallel(list(parts)),
        Value::Power(inner, exponent) => {
            Value::Power(Box::new(replace(inner, rest, by)), *exponent)
        }
        Value::Negative(inner) => Value::Negative(Box::new(replace(inner, rest, by))),
    }
}

/// Terms of a missing sum, and symbols in its formula, that still count as a single change.
const LONGEST: usize = 4;
/// Places that are tried.
const MOST_PLACES: usize = 12;

/// A sum of several terms that one of the claim's sums lacks; the shortest one.
pub(super) fn missing_sum(formula: &Value, exact: &Fraction) -> Option<Repair> {
    let parts = Parts::new(formula);
    let mut best: Option<(usize, Repair)> = None;
    let places = parts.list.iter().enumerate().filter(|(_, part)| {
        let parent = part.parent.map(|parent| parts.list[parent].value);
        matches!(part.value, Value::Sum(_)) || matches!(parent, None | Some(Value::Power(_, -1)))
    });
    for (index, part) in places.take(MOST_PLACES) {
        let Some(wanted) = parts.exactly(index, exact) else { continue };
        let Ok(own) = fraction_of(part.value) else { continue };
        let rest = &wanted - &own;
        let length = rest.numerator().len();
        if rest.denominator().len() != 1 || length > LONGEST || length == 0 {
            continue;
        }
        if best.as_ref().is_none_or(|(least, _)| length < *least) {
            let term = value_of(&rest);
            let formula = parts.replaced(index, with_term(part.value, term.clone()));
            let change = Change::MissingTerm { term, part: part.value.clone() };
            best = Some((length, Repair::new(change, formula)));
        }
    }
    best.map(|(_, repair)| repair)
}

/// A part with a term added.
pub(super) fn with_term(part: &Value, term: Value) -> Value {
    match part {
        Value::Sum(terms) => Value::Sum(terms.iter().cloned().chain([term]).collect()),
        _ => Value::Sum(vec![part.clone(), term]),
    }
}

/// A fraction as a value: what all terms share before a parenthesis.
pub(super) fn value_of(fraction: &Fraction) -> Value {
    let above = polynomial(fraction.numerator());
    if fraction.denominator().is_one() {
        return above;
    }
    let below = polynomial(fraction.denominator());
    Value::Product(vec![above, Value::Power(Box::new(below), -1)])
}

fn polynomial(of: &Polynomial) -> Value {
    let shared = Polynomial::monomial(of.monomial_content(), 1);
    let rest = of.divide_exact(&shared).unwrap_or_else(|| of.clone());
    let mut terms: Vec<Value> = rest
        .terms()
        .map(|(powers, number)| {
            monomial(powers.map(|(v, p)| (v, p as i32)), &Number::from_integer(number))
        })
        .collect();
    if terms.len() == 1 {
        let (powers, number) = match of.terms().next() {
            Some((powers, number)) => (powers.collect::<Vec<_>>(), number),
            None => return Value::Number(Number::default()),
        };
        let powers = powers.into_iter().map(|(v, p)| (v, p as i32));
        return monomial(powers, &Number::from_integer(number));
    }
    terms.reverse();
    let sum = Value::Sum(terms);
    if shared.is_one() { sum } else { Value::Product(vec![polynomial(&shared), sum]) }
}

/// number · Π variable^power
pub(super) fn monomial(powers: impl IntoIterator<Item = (Var, i32)>, number: &Number) -> Value {
    use num_traits::{One, Signed};
    let (mut above, mut below) = (Vec::new(), Vec::new());
    let size = number.abs();
    for (variable, power) in powers.into_iter().filter(|(_, power)| *power != 0) {
        let base = symbol_of(variable).map_or(Value::S, Value::Symbol);
        let list = if power > 0 { &mut above } else { &mut below };
        list.push(match power.abs() {
            1 => base,
            power => Value::Power(Box::new(base), power),
        });
    }
    if !size.is_one() || (above.is_empty() && below.is_empty()) {
        above.insert(0, Value::Number(size));
    }
    let one = || Value::Number(Number::one());
    let product = |mut factors: Vec<Value>| match factors.len() {
        0 => one(),
        1 => factors.remove(0),
        _ => Value::Product(factors),
    };
    let whole = if below.is_empty() {
        product(above)
    } else {
        Value::Product(vec![product(above), Value::Power(Box::new(product(below)), -1)])
    };
    if number.is_negative() { Value::Negative(Box::new(whole)) } else { whole }
}
