//! What can be left out of a formula as it is written: an operand of a sum or of a parallel.

use crate::algebra::{Fraction, Polynomial, Var};
use crate::circuit::SymbolId;
use crate::typeset::shape::{Lettering, ordered_product};
use crate::typeset::{Formula, Letter, View};

/// The formulas with one operand of one sum or parallel left out.
///
/// Formulas are small here; the depth is that of parentheses.
pub(crate) fn prunings(formula: &Formula) -> Vec<Formula> {
    let mut found = Vec::new();
    let operands = formula.operands();
    let rebuilt = |operands: Vec<Formula>| rebuild(formula, operands);
    if matches!(formula.view(), View::Sum(_) | View::Parallel(_)) {
        for index in 0..operands.len() {
            let mut rest = operands.to_vec();
            rest.remove(index);
            found.push(rebuilt(rest));
        }
    }
    for (index, operand) in operands.iter().enumerate() {
        for pruned in prunings(operand) {
            let mut all = operands.to_vec();
            all[index] = pruned;
            found.push(rebuilt(all));
        }
    }
    found
}

/// How many operands the sums and parallels of a formula have.
pub(crate) fn parts(formula: &Formula) -> u64 {
    let mut count = 0;
    let mut pending = vec![formula];
    while let Some(formula) = pending.pop() {
        if let View::Sum(operands) | View::Parallel(operands) = formula.view() {
            count += operands.len() as u64;
        }
        pending.extend(formula.operands());
    }
    count
}

/// The same operation on other operands.
fn rebuild(formula: &Formula, mut operands: Vec<Formula>) -> Formula {
    match formula.view() {
        View::Number(_) | View::Letter(_) => formula.clone(),
        View::Sum(_) => Formula::sum(operands),
        View::Product(_) => ordered_product(operands),
        View::Parallel(_) => Formula::parallel(operands),
        View::Power(_, exponent) => Formula::power(operands.swap_remove(0), exponent as i32),
        View::Negative(_) => operands.swap_remove(0).negative(),
        View::Quotient(..) => {
            let below = operands.swap_remove(1);
            Formula::quotient(operands.swap_remove(0), below)
        }
    }
}

/// The formula with one symbol in the place of another.
pub(crate) fn renamed(formula: &Formula, from: u32, to: u32) -> Formula {
    match formula.view() {
        View::Letter(Letter::Symbol(symbol)) if symbol == from => Formula::symbol(to),
        _ => {
            let operands = formula.operands().iter().map(|part| renamed(part, from, to));
            rebuild(formula, operands.collect())
        }
    }
}

/// The symbols of a formula, ascending.
pub(crate) fn symbols(formula: &Formula) -> Vec<SymbolId> {
    let mut found = Vec::new();
    let mut pending = vec![formula];
    while let Some(formula) = pending.pop() {
        if let View::Letter(Letter::Symbol(symbol)) = formula.view() {
            found.push(SymbolId(symbol));
        }
        pending.extend(formula.operands());
    }
    found.sort_unstable();
    found.dedup();
    found
}

/// The formula as a fraction in lowest terms; none where it divides by 0.
pub(crate) fn fraction(formula: &Formula, letters: Lettering<'_>) -> Option<Fraction> {
    let all = |formulas: &[Formula]| {
        formulas.iter().map(|part| fraction(part, letters)).collect::<Option<Vec<_>>>()
    };
    let variable = |variable: Var| Some(Fraction::from(Polynomial::variable(variable)));
    match formula.view() {
        View::Number(value) => Fraction::ratio(value.numer().clone(), value.denom().clone()),
        View::Letter(Letter::S) => variable(Var::S),
        View::Letter(Letter::Symbol(symbol)) => variable(Var(symbol + 1)),
        View::Letter(Letter::Pi) => variable(letters.pi?),
        View::Letter(Letter::Frequency | Letter::Definition(_)) => None,
        View::Sum(terms) => all(terms)?.into_iter().reduce(|a, b| &a + &b),
        View::Product(factors) => all(factors)?.into_iter().reduce(|a, b| &a * &b),
        View::Quotient(above, below) => {
            fraction(above, letters)?.checked_div(&fraction(below, letters)?)
        }
        View::Power(base, exponent) => Some(fraction(base, letters)?.pow(exponent)),
        View::Negative(inner) => Some(-&fraction(inner, letters)?),
        View::Parallel(parts) => {
            let inverse: Option<Vec<Fraction>> = all(parts)?.iter().map(Fraction::recip).collect();
            inverse?.into_iter().reduce(|a, b| &a + &b)?.recip()
        }
    }
}
