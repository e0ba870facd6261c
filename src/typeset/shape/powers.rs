//! Numerator over denominator, each by ascending powers of `s`, coefficients factored.

use super::compact::Coefficients;
use super::{Lettering, signed, with_s};
use crate::algebra::{Fraction, Polynomial, Var};
use crate::typeset::Formula;

/// The shape `powers`: a₀ + s·a₁ + s²·a₂ + … over the same.
pub fn powers(fraction: &Fraction, letters: Lettering<'_>) -> Formula {
    let (numerator, denominator) = signed(fraction);
    let mut coefficients = Coefficients::new(&[&numerator, &denominator], letters);
    let mut side = |polynomial: &Polynomial| {
        let parts = polynomial.coefficients(Var::S);
        let terms = (0_u32..).zip(&parts).filter(|(_, part)| !part.is_zero());
        Formula::sum(terms.map(|(power, part)| with_s(power, coefficients.polynomial(part))))
    };
    let numerator = side(&numerator);
    Formula::quotient(numerator, side(&denominator))
}
