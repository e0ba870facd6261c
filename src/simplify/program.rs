//! A formula as a list of operations on complex doubles, for many evaluations.

use num_complex::Complex;
use num_traits::ToPrimitive;

use crate::typeset::{Formula, Letter, View};

type C = Complex<f64>;

/// Operations in reverse Polish order.
#[derive(Clone, Debug)]
pub(crate) struct Program(Vec<Operation>);

#[derive(Clone, Copy, Debug)]
enum Operation {
    Number(f64),
    Symbol(u32),
    S,
    Sum(usize),
    Product(usize),
    Quotient,
    Power(i32),
    Negative,
    Parallel(usize),
}

enum Step<'a> {
    Enter(&'a Formula),
    Leave(Operation),
}

impl Program {
    /// The operations of a formula; a letter that is neither `s` nor a symbol nor π has no value.
    pub(crate) fn new(formula: &Formula) -> Self {
        let mut operations = Vec::new();
        let mut steps = vec![Step::Enter(formula)];
        while let Some(step) = steps.pop() {
            let formula = match step {
                Step::Leave(operation) => {
                    operations.push(operation);
                    continue;
                }
                Step::Enter(formula) => formula,
            };
            let count = formula.operands().len();
            let operation = match formula.view() {
                View::Number(value) => Operation::Number(value.to_f64().unwrap_or(f64::NAN)),
                View::Letter(Letter::S) => Operation::S,
                View::Letter(Letter::Symbol(index)) => Operation::Symbol(index),
                View::Letter(Letter::Pi) => Operation::Number(std::f64::consts::PI),
                View::Letter(Letter::Frequency | Letter::Definition(_)) => {
                    Operation::Number(f64::NAN)
                }
                View::Sum(_) => Operation::Sum(count),
                View::Product(_) => Operation::Product(count),
                View::Quotient(..) => Operation::Quotient,
                View::Power(_, exponent) => Operation::Power(exponent as i32),
                View::Negative(_) => Operation::Negative,
                View::Parallel(_) => Operation::Parallel(count),
            };
            steps.push(Step::Leave(operation));
            steps.extend(formula.operands().iter().rev().map(Step::Enter));
        }
        Self(operations)
    }

    /// The value; not a number where it divides 0 by 0.
    pub(crate) fn value(&self, symbols: &[f64], s: C) -> C {
        let mut stack: Vec<C> = Vec::with_capacity(16);
        for operation in &self.0 {
            let value = match *operation {
                Operation::Number(value) => C::new(value, 0.0),
                Operation::Symbol(index) => C::new(symbols[index as usize], 0.0),
                Operation::S => s,
                Operation::Sum(count) => pop(&mut stack, count).sum(),
                Operation::Product(count) => pop(&mut stack, count).product(),
                Operation::Quotient => {
                    let below = stack.pop().unwrap_or_default();
                    stack.pop().unwrap_or_default() / below
                }
                Operation::Power(exponent) => stack.pop().unwrap_or_default().powi(exponent),
                Operation::Negative => -stack.pop().unwrap_or_default(),
                Operation::Parallel(count) => {
                    pop(&mut stack, count).map(|value| value.inv()).sum::<C>().inv()
                }
            };
            stack.push(value);
        }
        stack.pop().unwrap_or_default()
    }
}

fn pop(stack: &mut Vec<C>, count: usize) -> impl Iterator<Item = C> + '_ {
    stack.drain(stack.len().saturating_sub(count)..)
}
