//! Numerator and denominator as products of irreducible factors over the rational numbers.

use super::compact::Coefficients;
use super::{Lettering, powers};
use crate::algebra::Fraction;
use crate::typeset::Formula;

/// The shape `product`: factors that are sums by ascending powers of `s`.
pub fn product(fraction: &Fraction, letters: Lettering<'_>) -> Formula {
    if fraction.is_zero() {
        return Formula::integer(0);
    }
    let polynomials = [fraction.numerator(), fraction.denominator()];
    let factored = Coefficients::new(&polynomials, letters).factored(fraction);
    factored.unwrap_or_else(|| powers(fraction, letters))
}
