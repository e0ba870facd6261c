//! Numerator over denominator, each by ascending powers of `s`.

use super::{Lettering, signed, with_s};
use crate::algebra::{Fraction, Polynomial, Var};
use crate::typeset::Formula;

/// The shape `powers`: a₀ + s·a₁ + s²·a₂ + … over the same.
pub fn powers(fraction: &Fraction, letters: Lettering<'_>) -> Formula {
    let (numerator, denominator) = signed(fraction);
    Formula::quotient(by_powers(&numerator, letters), by_powers(&denominator, letters))
}

/// A polynomial by ascending powers of `s`.
pub(crate) fn by_powers(polynomial: &Polynomial, letters: Lettering<'_>) -> Formula {
    let parts = polynomial.coefficients(Var::S);
    let terms = parts
        .iter()
        .zip(0_u32..)
        .filter(|(part, _)| !part.is_zero())
        .map(|(part, power)| with_s(power, letters.polynomial(part)));
    Formula::sum(terms)
}
