//! Passes whose values are numbers: complex ones at one frequency, and remainders modulo a prime.

use num_bigint::BigInt;
use num_complex::Complex;
use num_traits::ToPrimitive;

use super::Ring;
use crate::algebra::{Polynomial, Var, modular::Field};
use crate::elimination::value::symbol_of;

/// A complex number times a power of two: products of a thousand admittances leave the range of a
/// double, so the exponent is carried apart.
#[derive(Clone, Copy, Debug)]
pub(crate) struct Scaled {
    /// Zero, or of a size near 1.
    mantissa: Complex<f64>,
    exponent: i32,
}

impl Scaled {
    pub(crate) const ZERO: Self = Self { mantissa: Complex::new(0.0, 0.0), exponent: 0 };

    pub(crate) fn new(mantissa: Complex<f64>, exponent: i32) -> Self {
        let size = mantissa.re.abs().max(mantissa.im.abs());
        if size == 0.0 || !size.is_finite() {
            return Self { mantissa, exponent: 0 };
        }
        let (_, shift) = libm::frexp(size);
        Self {
            mantissa: Complex::new(
                libm::ldexp(mantissa.re, -shift),
                libm::ldexp(mantissa.im, -shift),
            ),
            exponent: exponent + shift,
        }
    }

    pub(crate) fn times(self, other: Self) -> Self {
        Self::new(self.mantissa * other.mantissa, self.exponent + other.exponent)
    }

    pub(crate) fn plus(self, other: Self) -> Self {
        if self.mantissa == Complex::new(0.0, 0.0) {
            return other;
        }
        if other.mantissa == Complex::new(0.0, 0.0) {
            return self;
        }
        let (large, small) =
            if self.exponent >= other.exponent { (self, other) } else { (other, self) };
        let shift = small.exponent - large.exponent;
        if shift < -1100 {
            return large;
        }
        let moved = Complex::new(
            libm::ldexp(small.mantissa.re, shift),
            libm::ldexp(small.mantissa.im, shift),
        );
        Self::new(large.mantissa + moved, large.exponent)
    }

    /// The power of two of the largest; 1 for none and for zeros.
    pub(crate) fn largest<'a>(values: impl IntoIterator<Item = &'a Self>) -> Self {
        let exponent = values
            .into_iter()
            .filter(|value| value.mantissa != Complex::new(0.0, 0.0))
            .map(|value| value.exponent)
            .max()
            .unwrap_or(0);
        Self { mantissa: Complex::new(1.0, 0.0), exponent }
    }

    pub(crate) fn negative(self) -> Self {
        Self { mantissa: -self.mantissa, exponent: self.exponent }
    }

    /// The real part as m·2^e.
    pub(crate) fn real_parts(self) -> (f64, i32) {
        (self.mantissa.re, self.exponent)
    }

    /// log2 of the size.
    pub(crate) fn log2(self) -> f64 {
        self.mantissa.norm().log2() + f64::from(self.exponent)
    }

    /// The quotient as a plain number; overflows to infinity and underflows to 0 as a double does.
    pub(crate) fn over(self, other: Self) -> Complex<f64> {
        let quotient = self.mantissa / other.mantissa;
        let exponent = self.exponent - other.exponent;
        Complex::new(libm::ldexp(quotient.re, exponent), libm::ldexp(quotient.im, exponent))
    }
}

/// Complex numbers.
pub(crate) struct ComplexNumbers;

impl Ring for ComplexNumbers {
    type Weight = Scaled;
    type Value = Scaled;

    fn zero(&self) -> Scaled {
        Scaled::ZERO
    }

    fn one(&self) -> Scaled {
        Scaled::new(Complex::new(1.0, 0.0), 0)
    }

    fn add(&self, sum: &mut Scaled, weight: &Scaled, value: &Scaled, negative: bool) {
        let product = weight.times(*value);
        *sum = sum.plus(if negative { product.negative() } else { product });
    }

    fn negate(&self, value: &Scaled) -> Scaled {
        value.negative()
    }
}

/// The value of a weight at `s` and these symbol values.
pub(crate) fn complex_weight(weight: &Polynomial, s: Complex<f64>, symbols: &[f64]) -> Scaled {
    let mut sum = Scaled::ZERO;
    for (powers, coefficient) in weight.terms() {
        let mut product = scaled_integer(&coefficient);
        for (variable, power) in powers {
            let base = match symbol_of(variable) {
                Some(symbol) => Complex::new(symbols[symbol.0 as usize], 0.0),
                None => s,
            };
            for _ in 0..power {
                product = product.times(Scaled::new(base, 0));
            }
        }
        sum = sum.plus(product);
    }
    sum
}

/// An integer of any size, rounded to a double's mantissa.
pub(crate) fn scaled_integer(integer: &BigInt) -> Scaled {
    let shift = integer.bits().saturating_sub(64);
    let mantissa = (integer >> shift).to_f64().unwrap_or(0.0);
    Scaled::new(Complex::new(mantissa, 0.0), shift as i32)
}

/// Remainders modulo a prime.
pub(crate) struct Remainders(pub(crate) Field);

impl Ring for Remainders {
    type Weight = u64;
    type Value = u64;

    fn zero(&self) -> u64 {
        0
    }

    fn one(&self) -> u64 {
        1
    }

    fn add(&self, sum: &mut u64, weight: &u64, value: &u64, negative: bool) {
        let product = self.0.mul(*weight, *value);
        *sum = if negative { self.0.sub(*sum, product) } else { self.0.add(*sum, product) };
    }

    fn negate(&self, value: &u64) -> u64 {
        self.0.sub(0, *value)
    }
}

/// The remainder of a weight; `symbols` holds `s` first, then the symbols.
pub(crate) fn remainder(weight: &Polynomial, field: Field, values: &[u64]) -> u64 {
    weight.evaluate_modulo(&field, |variable: Var| values[variable.0 as usize])
}
