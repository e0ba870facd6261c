//! 1/(1/a + 1/b) as `a || b`.
//!
//! That helps where a resistance is what is meant: the operands are resistances or inductances, and
//! at least one term of the sum is a bare reciprocal. Capacitances and conductances add when they
//! are parallel; for them the mark would say the opposite of what it is.

use super::cost::{contains_s, unsigned};
use crate::circuit::Unit;
use crate::typeset::shape::Lettering;
use crate::typeset::{Formula, Letter, View};

/// The reciprocal of a sum as a parallel, where it is one.
pub(super) fn inverse(sum: &Formula, letters: Lettering<'_>) -> Option<Formula> {
    let View::Sum(terms) = sum.view() else { return None };
    if contains_s(sum) || terms.iter().any(|term| term.is_negative()) {
        return None;
    }
    let reciprocal = |term: &Formula| match term.view() {
        View::Quotient(above, _) => above.is_one(),
        _ => false,
    };
    if !terms.iter().any(reciprocal) || terms.iter().any(|t| matches!(t.view(), View::Number(_))) {
        return None;
    }
    let over = |term: &Formula| Formula::quotient(Formula::integer(1), term.clone());
    let operands: Vec<Formula> = terms.iter().map(over).collect();
    let suits = operands.iter().all(|operand| {
        let unit = unit(operand, letters);
        [Unit::OHM, Unit::HENRY, Unit::ONE].contains(&unit)
    });
    suits.then(|| Formula::parallel(operands))
}

/// The unit of a formula that is homogeneous in units: that of its first terms.
fn unit(formula: &Formula, letters: Lettering<'_>) -> Unit {
    match unsigned(formula).view() {
        View::Letter(Letter::Symbol(index)) => letters.unit(index),
        View::Letter(Letter::S | Letter::Frequency) => Unit::HERTZ,
        View::Number(_) | View::Letter(_) | View::Negative(_) => Unit::ONE,
        View::Sum(parts) | View::Parallel(parts) => {
            parts.first().map_or(Unit::ONE, |part| unit(part, letters))
        }
        View::Product(parts) => {
            parts.iter().fold(Unit::ONE, |product, part| product.times(unit(part, letters)))
        }
        View::Quotient(above, below) => unit(above, letters).over(unit(below, letters)),
        View::Power(base, exponent) => {
            unit(base, letters).power(i32::try_from(exponent).unwrap_or(1))
        }
    }
}
