//! Passes whose values are numbers: complex ones at one frequency, and remainders modulo a prime.

use num_bigint::BigInt;
use num_complex::Complex;
use num_traits::ToPrimitive;
use smallvec::SmallVec;

use super::Ring;
use crate::algebra::{Polynomial, Var, modular::Field};
use crate::elimination::value::symbol_of;

/// log₂ of the unit in which exponents are counted: large, so that numbers are rarely moved.
const STEP: i32 = 256;
/// 2^STEP and 2^−STEP.
const UP: f64 = f64::from_bits((1023 + STEP as u64) << 52);
const DOWN: f64 = f64::from_bits((1023 - STEP as u64) << 52);
/// Mantissas are from 2^(−STEP/2) to 2^(STEP/2): products of two stay far inside a double.
const LEAST: f64 = f64::from_bits((1023 - STEP as u64 / 2) << 52);
const LARGEST: f64 = f64::from_bits((1023 + STEP as u64 / 2) << 52);

/// A complex number times a power of two: products of a thousand admittances leave the range of a
/// double, so the exponent is carried apart.
#[derive(Clone, Copy, Debug)]
pub(crate) struct Scaled {
    /// Zero, or of a size between [`LEAST`] and [`LARGEST`].
    mantissa: Complex<f64>,
    /// In steps of 2^[`STEP`].
    exponent: i32,
}

impl Scaled {
    pub(crate) const ZERO: Self = Self { mantissa: Complex::new(0.0, 0.0), exponent: 0 };

    /// A number times two to the power of `bits`.
    pub(crate) fn new(number: Complex<f64>, bits: i32) -> Self {
        let mantissa = number * libm::ldexp(1.0, bits.rem_euclid(STEP));
        if mantissa.is_finite() {
            return Self { mantissa, exponent: bits.div_euclid(STEP) }.normal();
        }
        let mantissa = number * DOWN * libm::ldexp(1.0, bits.rem_euclid(STEP));
        Self { mantissa, exponent: bits.div_euclid(STEP) + 1 }.normal()
    }

    /// The same number with a mantissa in its range.
    fn normal(mut self) -> Self {
        loop {
            let size = self.mantissa.re.abs().max(self.mantissa.im.abs());
            if (LEAST..LARGEST).contains(&size) {
                return self;
            }
            if size == 0.0 || !size.is_finite() {
                return Self { exponent: 0, ..self };
            }
            if size < LEAST {
                self = Self { mantissa: self.mantissa * UP, exponent: self.exponent - 1 };
            } else {
                self = Self { mantissa: self.mantissa * DOWN, exponent: self.exponent + 1 };
            }
        }
    }

    pub(crate) fn times(self, other: Self) -> Self {
        let mantissa = self.mantissa * other.mantissa;
        Self { mantissa, exponent: self.exponent + other.exponent }.normal()
    }

    pub(crate) fn plus(self, other: Self) -> Self {
        if self.mantissa == Complex::ZERO {
            return other;
        }
        if other.mantissa == Complex::ZERO {
            return self;
        }
        let (large, small) =
            if self.exponent >= other.exponent { (self, other) } else { (other, self) };
        match large.exponent - small.exponent {
            0 => Self { mantissa: large.mantissa + small.mantissa, ..large }.normal(),
            1 => Self { mantissa: large.mantissa + small.mantissa * DOWN, ..large }.normal(),
            // Far below the last bit.
            _ => large,
        }
    }

    /// The power of two of the largest; 1 for none and for zeros.
    pub(crate) fn largest<'a>(values: impl IntoIterator<Item = &'a Self>) -> Self {
        let exponent = values
            .into_iter()
            .filter(|value| value.mantissa != Complex::ZERO)
            .map(|value| value.exponent)
            .max()
            .unwrap_or(0);
        Self { mantissa: Complex::ONE, exponent }
    }

    fn negative(self) -> Self {
        Self { mantissa: -self.mantissa, exponent: self.exponent }
    }

    /// The quotient.
    pub(crate) fn divided_by(self, other: Self) -> Self {
        Self::new(self.mantissa / other.mantissa, self.exponent - other.exponent)
    }

    /// The logarithm of the size to base ten; −∞ for 0.
    pub(crate) fn log10(self) -> f64 {
        libm::log10(self.mantissa.norm()) + f64::from(self.exponent) * std::f64::consts::LOG10_2
    }

    /// The plain number; overflows to infinity and underflows to 0 as a double does.
    pub(crate) fn value(self) -> Complex<f64> {
        self.over(Self::new(Complex::new(1.0, 0.0), 0))
    }

    /// The quotient as a plain number; overflows to infinity and underflows to 0 as a double does.
    pub(crate) fn over(self, other: Self) -> Complex<f64> {
        let quotient = self.mantissa / other.mantissa;
        let exponent = (self.exponent - other.exponent).clamp(-16, 16) * STEP;
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

/// A weight with numbers for the symbols: its coefficients by powers of `s`.
#[derive(Clone, Debug)]
pub(crate) struct Coefficients(SmallVec<[(u32, Scaled); 2]>);

impl Coefficients {
    pub(crate) fn new(weight: &Polynomial, symbols: &[f64]) -> Self {
        let mut coefficients = SmallVec::<[(u32, Scaled); 2]>::new();
        for (powers, coefficient) in weight.terms() {
            let (mut product, mut power_of_s) = (scaled_integer(&coefficient), 0);
            for (variable, power) in powers {
                let Some(symbol) = symbol_of(variable) else {
                    power_of_s = power;
                    continue;
                };
                let base = Scaled::new(Complex::new(symbols[symbol.0 as usize], 0.0), 0);
                for _ in 0..power {
                    product = product.times(base);
                }
            }
            match coefficients.iter_mut().find(|(known, _)| *known == power_of_s) {
                Some((_, sum)) => *sum = sum.plus(product),
                None => coefficients.push((power_of_s, product)),
            }
        }
        Self(coefficients)
    }

    pub(crate) fn at(&self, s: Scaled) -> Scaled {
        self.0.iter().fold(Scaled::ZERO, |sum, &(power, coefficient)| {
            sum.plus((0..power).fold(coefficient, |product, _| product.times(s)))
        })
    }
}

/// The value of a weight at `s` and these symbol values.
pub(crate) fn complex_weight(weight: &Polynomial, s: Complex<f64>, symbols: &[f64]) -> Scaled {
    Coefficients::new(weight, symbols).at(Scaled::new(s, 0))
}

/// An integer of any size, rounded to a double's mantissa.
pub(crate) fn scaled_integer(integer: &BigInt) -> Scaled {
    let shift = integer.bits().saturating_sub(64);
    let mantissa = match shift {
        0 => integer.to_f64(),
        _ => (integer >> shift).to_f64(),
    };
    Scaled::new(Complex::new(mantissa.unwrap_or(0.0), 0.0), shift as i32)
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

#[cfg(test)]
mod tests {
    use super::*;

    /// x·2^bits for sizes far beyond a double, against the same sum with the exponents taken apart.
    #[test]
    fn sums_and_quotients_far_outside_the_range_of_a_double() {
        let number = |value: f64, bits| Scaled::new(Complex::new(value, -value), bits);
        for bits in [-100_000, -300, -255, -1, 0, 1, 127, 128, 129, 255, 256, 700, 100_000] {
            let large = number(3.0, bits);
            assert_eq!(large.over(number(1.5, bits)), Complex::new(2.0, 0.0));
            assert_eq!(large.over(number(1.5, bits + 500)).re, libm::ldexp(2.0, -500));
            // 3 + 3·2^−40, and something too small to count.
            let sum = large.plus(number(3.0, bits - 40)).plus(number(1.0, bits - 600));
            assert_eq!(sum.over(large).re, 1.0 + libm::ldexp(1.0, -40));
            // What cancels leaves the small part whole.
            let rest = sum.plus(large.negative());
            assert_eq!(rest.over(number(3.0, bits)).re, libm::ldexp(1.0, -40));
            assert_eq!(large.plus(large.negative()).over(large), Complex::ZERO);
            // (1 − j)² = −2j, and the exponents add.
            let square = large.times(large);
            assert_eq!(square.over(Scaled::new(Complex::new(0.0, -18.0), 2 * bits)), Complex::ONE);
        }
        assert_eq!(number(1e300, 900).over(number(1e300, 900)), Complex::ONE);
        assert_eq!(number(5e-324, 10).over(number(5e-324, 8)).re, 4.0);
    }
}
