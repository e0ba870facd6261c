//! Gain · s^k · (1 + …)/(1 + …): corner frequencies stand where Bode's rules look for them.

use super::compact::{Coefficients, product};
use super::{Lettering, signed, with_s};
use crate::algebra::{Fraction, Polynomial, Var};
use crate::typeset::Formula;

/// The shape `bode` (Bode 1945): the low-frequency behaviour as gain · s^k, then polynomials that
/// begin with 1, all over one bar.
pub fn bode(fraction: &Fraction, letters: Lettering<'_>) -> Formula {
    if fraction.is_zero() {
        return Formula::integer(0);
    }
    let (numerator, denominator) = signed(fraction);
    let mut coefficients = Coefficients::new(&[&numerator, &denominator], letters);
    let (above, above_power) = lowest(&numerator);
    let (below, below_power) = lowest(&denominator);
    let gain = coefficients.ratio(&above, &below);
    let s = Formula::power(Formula::s(), above_power as i32 - below_power as i32);
    let numerator = from_one(&numerator, &above, above_power, &mut coefficients);
    let denominator = from_one(&denominator, &below, below_power, &mut coefficients);
    product([gain, s, numerator, Formula::quotient(Formula::integer(1), denominator)])
}

/// The coefficient of the lowest power of `s`, and that power.
pub(super) fn lowest(polynomial: &Polynomial) -> (Polynomial, u32) {
    let power = polynomial.trailing_degree(Var::S);
    (polynomial.coefficient(Var::S, power), power)
}

/// 1 + s·(c₁/c₀) + s²·(c₂/c₀) + …
pub(super) fn from_one(
    polynomial: &Polynomial,
    first: &Polynomial,
    from: u32,
    coefficients: &mut Coefficients<'_>,
) -> Formula {
    let parts = polynomial.coefficients(Var::S);
    let terms = (0_u32..)
        .zip(&parts)
        .filter(|(power, part)| *power > from && !part.is_zero())
        .map(|(power, part)| with_s(power - from, coefficients.ratio(part, first)));
    Formula::sum(std::iter::once(Formula::integer(1)).chain(terms))
}

/// a/b in compact form.
pub(crate) fn ratio(a: &Polynomial, b: &Polynomial, letters: Lettering<'_>) -> Formula {
    Coefficients::new(&[a, b], letters).ratio(a, b)
}
