//! From values as written to fractions of polynomials.

use crate::algebra::{Fraction, Polynomial, Var};
use crate::circuit::{SymbolId, Value};

/// The variable of a symbol; `s` is [`Var::S`].
pub fn variable_of(symbol: SymbolId) -> Var {
    Var(symbol.0 + 1)
}

/// The symbol of a variable; `None` for `s`.
pub fn symbol_of(variable: Var) -> Option<SymbolId> {
    variable.0.checked_sub(1).map(SymbolId)
}

/// A value that divides by 0.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct DividesByZero;

/// The value as a fraction in lowest terms.
pub fn fraction_of(value: &Value) -> Result<Fraction, DividesByZero> {
    let all = |values: &[Value]| values.iter().map(fraction_of).collect::<Result<Vec<_>, _>>();
    Ok(match value {
        Value::Number(number) => {
            Fraction::ratio(number.numer().clone(), number.denom().clone()).ok_or(DividesByZero)?
        }
        Value::Symbol(symbol) => Fraction::from(Polynomial::variable(variable_of(*symbol))),
        Value::S => Fraction::from(Polynomial::variable(Var::S)),
        Value::Sum(terms) => {
            all(terms)?.into_iter().reduce(|a, b| &a + &b).unwrap_or_else(Fraction::zero)
        }
        Value::Product(factors) => {
            all(factors)?.into_iter().reduce(|a, b| &a * &b).unwrap_or_else(Fraction::one)
        }
        Value::Negative(inner) => -&fraction_of(inner)?,
        Value::Power(base, exponent) => {
            let power = fraction_of(base)?.pow(exponent.unsigned_abs());
            if *exponent < 0 { power.recip().ok_or(DividesByZero)? } else { power }
        }
        Value::Parallel(parts) => {
            let parts = all(parts)?;
            // One part that is 0 shorts the others; the formula's reciprocals would not exist.
            let Some(reciprocals) = parts.iter().map(Fraction::recip).collect::<Option<Vec<_>>>()
            else {
                return Ok(Fraction::zero());
            };
            let sum = reciprocals.into_iter().reduce(|a, b| &a + &b);
            sum.and_then(|sum| sum.recip()).ok_or(DividesByZero)?
        }
    })
}
