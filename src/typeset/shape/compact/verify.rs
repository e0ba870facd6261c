//! Whether a formula has the value of a fraction: at random points modulo a prime.
//!
//! Two rational functions of total degree d that differ agree at a random point with probability
//! below d/p (Schwartz 1980, Zippel 1979), here with p near 2⁶¹.

use crate::algebra::modular::{Field, Random, primes};
use crate::algebra::{Fraction, Var};
use crate::typeset::shape::Lettering;
use crate::typeset::{Formula, Letter, View};

const POINTS: usize = 2;

/// True where the formula equals the fraction at random points.
pub(super) fn equal(formula: &Formula, fraction: &Fraction, letters: Lettering<'_>) -> bool {
    let Some(field) = primes().next() else { return false };
    let mut random = Random::new(0x0f0a);
    (0..POINTS).all(|_| {
        let seed = random.word();
        let value = |variable: Var| {
            let mut stream = Random::new(seed ^ u64::from(variable.0).wrapping_mul(0x9e37_79b9));
            stream.unit(&field)
        };
        let (n, d) = (
            fraction.numerator().evaluate_modulo(&field, value),
            fraction.denominator().evaluate_modulo(&field, value),
        );
        let letter = |letter| match letter {
            Letter::S => Some(value(Var::S)),
            Letter::Pi => letters.pi.map(value),
            Letter::Symbol(index) => Some(value(Var(index + 1))),
            Letter::Frequency | Letter::Definition(_) => None,
        };
        modulo(formula, &field, &letter).is_some_and(|found| field.mul(found, d) == n)
    })
}

/// The value modulo a prime; recurses as deep as the formula is.
fn modulo(
    formula: &Formula,
    field: &Field,
    letter: &impl Fn(Letter) -> Option<u64>,
) -> Option<u64> {
    let value = |formula: &Formula| modulo(formula, field, letter);
    let inverse = |value: u64| (value != 0).then(|| field.inverse(value));
    match formula.view() {
        View::Number(number) => {
            let residue = |integer: &num_bigint::BigInt| {
                let rest = integer % num_bigint::BigInt::from(field.modulus());
                i64::try_from(rest).ok().map(|rest| field.from_i64(rest))
            };
            Some(field.mul(residue(number.numer())?, inverse(residue(number.denom())?)?))
        }
        View::Letter(name) => letter(name),
        View::Sum(terms) => {
            terms.iter().try_fold(0, |sum, term| Some(field.add(sum, value(term)?)))
        }
        View::Product(factors) => {
            factors.iter().try_fold(1, |all, factor| Some(field.mul(all, value(factor)?)))
        }
        View::Quotient(above, below) => Some(field.mul(value(above)?, inverse(value(below)?)?)),
        View::Power(base, exponent) => Some(field.pow(value(base)?, exponent.into())),
        View::Negative(operand) => Some(field.neg(value(operand)?)),
        View::Parallel(operands) => {
            let sum = operands
                .iter()
                .try_fold(0, |sum, operand| Some(field.add(sum, inverse(value(operand)?)?)))?;
            inverse(sum)
        }
    }
}
