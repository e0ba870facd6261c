//! Bode's form: gain · s^k · (1 + …)/(1 + …).

use super::{Lettering, signed, with_s};
use crate::algebra::{Fraction, Polynomial, Var};
use crate::typeset::Formula;

/// The shape `bode`: the constant that rules at low frequencies, a power of `s`, and a fraction of
/// polynomials that begin with 1.
pub fn bode(fraction: &Fraction, letters: Lettering<'_>) -> Formula {
    if fraction.is_zero() {
        return Formula::integer(0);
    }
    let (numerator, denominator) = signed(fraction);
    let (above, above_power) = lowest(&numerator);
    let (below, below_power) = lowest(&denominator);
    let gain = ratio(&above, &below, letters);
    let s = Formula::power(Formula::s(), above_power as i32 - below_power as i32);
    let numerator = from_one(&numerator, &above, above_power, letters);
    let denominator = from_one(&denominator, &below, below_power, letters);
    Formula::product([gain, s, Formula::quotient(numerator, denominator)])
}

/// The coefficient of the lowest power of `s`, and that power.
fn lowest(polynomial: &Polynomial) -> (Polynomial, u32) {
    let power = polynomial.trailing_degree(Var::S);
    (polynomial.coefficient(Var::S, power), power)
}

/// a/b in lowest terms.
pub(crate) fn ratio(a: &Polynomial, b: &Polynomial, letters: Lettering<'_>) -> Formula {
    match Fraction::new(a, b) {
        Some(fraction) => Formula::quotient(
            letters.polynomial(fraction.numerator()),
            letters.polynomial(fraction.denominator()),
        ),
        None => Formula::quotient(letters.polynomial(a), letters.polynomial(b)),
    }
}

/// 1 + s·(c₁/c₀) + s²·(c₂/c₀) + …
fn from_one(
    polynomial: &Polynomial,
    first: &Polynomial,
    from: u32,
    letters: Lettering<'_>,
) -> Formula {
    let parts = polynomial.coefficients(Var::S);
    let terms = parts
        .iter()
        .zip(0_u32..)
        .filter(|(part, power)| *power > from && !part.is_zero())
        .map(|(part, power)| with_s(power - from, ratio(part, first, letters)));
    Formula::sum(std::iter::once(Formula::integer(1)).chain(terms))
}
