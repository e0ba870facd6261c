//! The exact value of a formula when every letter has a rational value.
//!
//! Serves tests and callers that prove two forms equal: two rational functions that agree at
//! enough points are one (Schwartz 1980, Zippel 1979). Post-order with a stack of its own.

use num_rational::BigRational;
use num_traits::{One, Zero, pow};

use super::{Formula, Letter, View};

/// The longest power that is worked out, in bits.
const MAX_POWER_BITS: u64 = 1 << 24;

enum Step<'a> {
    /// Visit the operands, then combine.
    Enter(&'a Formula),
    /// The operands' values lie on top of the stack.
    Combine(&'a Formula),
}

impl Formula {
    /// The value at the point that `letter` gives, π and named sub-expressions included.
    ///
    /// `None` where a letter has no value or a divisor is 0 there. A parallel is 0 where one operand
    /// is 0, as a·b/(a + b) says, and has no value where two are. Costs one exact operation for each node.
    pub fn evaluate(
        &self,
        mut letter: impl FnMut(Letter) -> Option<BigRational>,
    ) -> Option<BigRational> {
        let mut steps = vec![Step::Enter(self)];
        let mut values: Vec<BigRational> = Vec::new();
        while let Some(step) = steps.pop() {
            match step {
                Step::Enter(formula) => match formula.view() {
                    View::Number(value) => values.push(value.clone()),
                    View::Letter(name) => values.push(letter(name)?),
                    _ => {
                        steps.push(Step::Combine(formula));
                        steps.extend(formula.operands().iter().rev().map(Step::Enter));
                    }
                },
                Step::Combine(formula) => {
                    let first = values.len().checked_sub(formula.operands().len())?;
                    let operands = values.split_off(first);
                    values.push(combine(formula, operands)?);
                }
            }
        }
        values.pop()
    }
}

/// One operation on the values of its operands.
fn combine(formula: &Formula, operands: Vec<BigRational>) -> Option<BigRational> {
    let mut operands = operands.into_iter();
    match formula.view() {
        View::Number(_) | View::Letter(_) => None,
        View::Sum(_) => Some(operands.fold(BigRational::zero(), |sum, term| sum + term)),
        View::Product(_) => Some(operands.fold(BigRational::one(), |all, factor| all * factor)),
        View::Quotient(..) => {
            let (above, below) = (operands.next()?, operands.next()?);
            (!below.is_zero()).then(|| above / below)
        }
        View::Power(_, exponent) => {
            let base = operands.next()?;
            let bits = base.numer().bits().max(base.denom().bits());
            (bits.saturating_mul(exponent.into()) <= MAX_POWER_BITS)
                .then(|| pow(base, exponent as usize))
        }
        View::Negative(_) => Some(-operands.next()?),
        View::Parallel(_) => {
            let operands: Vec<BigRational> = operands.collect();
            match operands.iter().filter(|operand| operand.is_zero()).count() {
                0 => {
                    let sum: BigRational = operands.iter().map(BigRational::recip).sum();
                    (!sum.is_zero()).then(|| sum.recip())
                }
                1 => Some(BigRational::zero()),
                _ => None,
            }
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[track_caller]
    fn check(formula: Formula, expected: Option<(i64, i64)>) {
        // x_i = i + 2, s = 10, π = 3.
        let value = formula.evaluate(|letter| match letter {
            Letter::Symbol(index) => Some(BigRational::from_integer((index + 2).into())),
            Letter::S => Some(BigRational::from_integer(10.into())),
            Letter::Pi => Some(BigRational::from_integer(3.into())),
            Letter::Frequency | Letter::Definition(_) => None,
        });
        assert_eq!(value, expected.map(|(p, q)| BigRational::new(p.into(), q.into())));
    }

    #[test]
    fn every_operation_has_its_value() {
        let (a, b, c) = (Formula::symbol(0), Formula::symbol(1), Formula::symbol(2));
        check(Formula::sum([a.clone(), b.clone().negative()]), Some((-1, 1)));
        check(Formula::product([a.clone(), b.clone(), Formula::s()]), Some((60, 1)));
        check(Formula::quotient(a.clone(), b.clone()), Some((2, 3)));
        check(Formula::power(b.clone(), -2), Some((1, 9)));
        check(Formula::parallel([a.clone(), b.clone(), c]), Some((12, 13)));
        check(Formula::product([Formula::integer(2), Formula::pi()]), Some((6, 1)));
        let difference = Formula::sum([a.clone(), Formula::integer(-2)]);
        check(Formula::parallel([difference.clone(), b]), Some((0, 1)));
        check(Formula::quotient(a.clone(), difference), None);
        check(Formula::parallel([a.clone(), a.negative()]), None);
        check(Formula::frequency(), None);
        check(Formula::power(Formula::s(), i32::MAX), None);
    }
}
