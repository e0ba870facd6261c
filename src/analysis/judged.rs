//! The closed form as the witnesses see it.

use std::cell::RefCell;

use num_bigint::BigInt;
use num_complex::Complex;

use super::closed_form::ClosedForm;
use crate::algebra::modular::{Field, primes};
use crate::algebra::{Polynomial, Var};
use crate::circuit::Number;
use crate::elimination::{Elimination, Nested, NestedFactor, NestedSum, symbol_of};
use crate::numeric::Candidate;

/// Products of big integers that the exact comparison may take.
const AFFORDABLE: u64 = 3_000_000;

/// A closed form and the elimination it came from.
///
/// The formula itself is judged: in the prime field it is evaluated as it will be printed, expanded
/// or nested. Only where a nested form would leave the range of a double is the diagram asked instead.
pub(crate) struct Judged<'a> {
    elimination: &'a Elimination,
    form: &'a ClosedForm,
    /// Numbers that were last put in, and what came of it: the numeric form asks for the same as the
    /// witness before.
    last: RefCell<Option<(Vec<Number>, Option<Coefficients>)>>,
}

/// Of numerator and denominator, lowest power first.
type Coefficients = (Vec<Number>, Vec<Number>);

impl<'a> Judged<'a> {
    pub(crate) fn new(elimination: &'a Elimination, form: &'a ClosedForm) -> Self {
        Self { elimination, form, last: RefCell::new(None) }
    }

    fn with_numbers(&self, symbols: &[Number]) -> Option<Coefficients> {
        let value = |variable: Var| symbol_value(symbols, variable);
        let whole = |numbers: Vec<BigInt>| numbers.into_iter().map(Number::from_integer).collect();
        match self.form {
            ClosedForm::Expanded(fraction) => {
                let of = |polynomial: &Polynomial| {
                    polynomial.coefficients(Var::S).iter().map(|p| p.evaluate(value)).collect()
                };
                Some((of(fraction.numerator()), of(fraction.denominator())))
            }
            ClosedForm::Nested(_) => {
                let [numerator, denominator] =
                    self.elimination.coefficients_within(value, AFFORDABLE)?;
                Some((whole(numerator), whole(denominator)))
            }
        }
    }
}

impl Candidate for Judged<'_> {
    fn values_at(&self, frequencies: &[Complex<f64>], symbols: &[f64]) -> Vec<Complex<f64>> {
        self.elimination.values_at(frequencies, symbols)
    }

    fn coefficients(&self, symbols: &[Number]) -> Option<Coefficients> {
        if let Some((numbers, known)) = &*self.last.borrow()
            && numbers == symbols
        {
            return known.clone();
        }
        let found = self.with_numbers(symbols);
        *self.last.borrow_mut() = Some((symbols.to_vec(), found.clone()));
        found
    }

    fn value_modulo(&self, prime: u64, s: u64, symbols: &[u64]) -> Option<u64> {
        let field = primes().find(|field| field.modulus() == prime)?;
        let value = |variable: Var| match symbol_of(variable) {
            Some(symbol) => symbols[symbol.0 as usize],
            None => s,
        };
        let (numerator, denominator) = match self.form {
            ClosedForm::Expanded(fraction) => (
                fraction.numerator().evaluate_modulo(&field, value),
                fraction.denominator().evaluate_modulo(&field, value),
            ),
            ClosedForm::Nested(nested) => nested_modulo(nested, &field, &value),
        };
        (denominator != 0).then(|| field.mul(numerator, field.inverse(denominator)))
    }
}

fn symbol_value(symbols: &[Number], variable: Var) -> Number {
    symbol_of(variable)
        .and_then(|symbol| symbols.get(symbol.0 as usize).cloned())
        .unwrap_or_else(|| Number::from_integer(0.into()))
}

fn nested_modulo(nested: &Nested, field: &Field, value: &impl Fn(Var) -> u64) -> (u64, u64) {
    let mut definitions: Vec<u64> = Vec::with_capacity(nested.definitions.len());
    for definition in &nested.definitions {
        let sum = sum_modulo(definition, field, value, &definitions);
        definitions.push(sum);
    }
    (
        sum_modulo(&nested.numerator, field, value, &definitions),
        sum_modulo(&nested.denominator, field, value, &definitions),
    )
}

/// Sums nest only a few levels deep: the elimination names them beyond that.
fn sum_modulo(
    sum: &NestedSum,
    field: &Field,
    value: &impl Fn(Var) -> u64,
    definitions: &[u64],
) -> u64 {
    sum.terms.iter().fold(0, |total, (weight, factor)| {
        let factor = match factor {
            NestedFactor::One => 1,
            NestedFactor::Definition(index) => definitions[*index],
            NestedFactor::Sum(inner) => sum_modulo(inner, field, value, definitions),
        };
        field.add(total, field.mul(weight.evaluate_modulo(field, value), factor))
    })
}
