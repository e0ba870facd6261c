//! Fields in which a circuit is solved: exact rationals, a prime field, complex numbers.
//!
//! A field is an object, because a prime field must know its prime. Its elements are plain data.
//! Arithmetic never panics: an inverse that does not exist is `None`.

use std::fmt::Debug;

use num_complex::Complex;
use num_traits::{One, Signed, ToPrimitive, Zero};

use crate::circuit::Number;

/// What linear equations are written with: sums and signs, no products.
pub trait Additive {
    /// The numbers of the group.
    type Element: Clone + Debug + PartialEq;
    /// 0.
    fn zero(&self) -> Self::Element;
    /// 1.
    fn one(&self) -> Self::Element;
    /// a + b.
    fn add(&self, a: &Self::Element, b: &Self::Element) -> Self::Element;
    /// −a.
    fn negative(&self, a: &Self::Element) -> Self::Element;

    /// a − b.
    fn subtract(&self, a: &Self::Element, b: &Self::Element) -> Self::Element {
        self.add(a, &self.negative(b))
    }
}

/// The four operations over some kind of number.
pub trait Field: Additive {
    /// The image of a rational; `None` where its denominator becomes 0.
    fn number(&self, number: &Number) -> Option<Self::Element>;
    /// a · b.
    fn multiply(&self, a: &Self::Element, b: &Self::Element) -> Self::Element;
    /// 1/a; `None` for 0.
    fn inverse(&self, a: &Self::Element) -> Option<Self::Element>;
    /// Whether a is 0.
    fn is_zero(&self, a: &Self::Element) -> bool;
    /// A size by which pivots are compared; 0 for 0 and only for it.
    fn magnitude(&self, a: &Self::Element) -> f64;

    /// a to an integer power, by repeated squaring; `None` for a negative power of 0.
    fn power(&self, a: &Self::Element, exponent: i32) -> Option<Self::Element> {
        let mut square = if exponent < 0 { self.inverse(a)? } else { a.clone() };
        let mut left = exponent.unsigned_abs();
        let mut result = self.one();
        while left > 0 {
            if left & 1 == 1 {
                result = self.multiply(&result, &square);
            }
            left >>= 1;
            if left > 0 {
                square = self.multiply(&square, &square);
            }
        }
        Some(result)
    }
}

/// The rational numbers.
#[derive(Clone, Copy, Debug, Default)]
pub struct Rationals;

impl Additive for Rationals {
    type Element = Number;
    fn zero(&self) -> Number {
        Number::zero()
    }
    fn one(&self) -> Number {
        Number::one()
    }
    fn add(&self, a: &Number, b: &Number) -> Number {
        a + b
    }
    fn negative(&self, a: &Number) -> Number {
        -a
    }
}

impl Field for Rationals {
    fn number(&self, number: &Number) -> Option<Number> {
        Some(number.clone())
    }
    fn multiply(&self, a: &Number, b: &Number) -> Number {
        a * b
    }
    fn inverse(&self, a: &Number) -> Option<Number> {
        (!a.is_zero()).then(|| a.recip())
    }
    fn is_zero(&self, a: &Number) -> bool {
        a.is_zero()
    }
    fn magnitude(&self, a: &Number) -> f64 {
        if a.is_zero() { 0.0 } else { a.abs().to_f64().unwrap_or(1.0).max(f64::MIN_POSITIVE) }
    }
}

/// Complex numbers in double precision.
#[derive(Clone, Copy, Debug, Default)]
pub struct Complexes;

impl Additive for Complexes {
    type Element = Complex<f64>;
    fn zero(&self) -> Complex<f64> {
        Complex::new(0.0, 0.0)
    }
    fn one(&self) -> Complex<f64> {
        Complex::new(1.0, 0.0)
    }
    fn add(&self, a: &Complex<f64>, b: &Complex<f64>) -> Complex<f64> {
        a + b
    }
    fn negative(&self, a: &Complex<f64>) -> Complex<f64> {
        -a
    }
}

impl Field for Complexes {
    fn number(&self, number: &Number) -> Option<Complex<f64>> {
        number.to_f64().filter(|value| value.is_finite()).map(|value| Complex::new(value, 0.0))
    }
    fn multiply(&self, a: &Complex<f64>, b: &Complex<f64>) -> Complex<f64> {
        a * b
    }
    fn inverse(&self, a: &Complex<f64>) -> Option<Complex<f64>> {
        // `finv` scales, so that tiny and huge numbers do not under- or overflow.
        let inverse = a.finv();
        (!self.is_zero(a) && inverse.is_finite()).then_some(inverse)
    }
    fn is_zero(&self, a: &Complex<f64>) -> bool {
        a.re == 0.0 && a.im == 0.0
    }
    fn magnitude(&self, a: &Complex<f64>) -> f64 {
        size(*a)
    }
}

/// |re| + |im|: within √2 of the modulus, and far cheaper.
pub(crate) fn size(value: Complex<f64>) -> f64 {
    value.re.abs() + value.im.abs()
}

/// The integers modulo a prime below 2^63.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct PrimeField {
    prime: u64,
}

impl PrimeField {
    /// The field of that many elements. The modulus is taken to be prime; with another one
    /// inverses are missing or wrong, but nothing panics above 1.
    pub fn new(prime: u64) -> Self {
        Self { prime: prime.clamp(2, (1 << 63) - 1) }
    }

    /// The modulus.
    pub fn prime(&self) -> u64 {
        self.prime
    }
}

impl Additive for PrimeField {
    type Element = u64;
    fn zero(&self) -> u64 {
        0
    }
    fn one(&self) -> u64 {
        1
    }
    fn add(&self, a: &u64, b: &u64) -> u64 {
        let sum = a + b;
        if sum >= self.prime { sum - self.prime } else { sum }
    }
    fn negative(&self, a: &u64) -> u64 {
        if *a == 0 { 0 } else { self.prime - a }
    }
}

impl Field for PrimeField {
    fn number(&self, number: &Number) -> Option<u64> {
        let residue = |integer: &num_bigint::BigInt| {
            let magnitude = (integer.magnitude() % self.prime).to_u64().unwrap_or(0);
            if integer.is_negative() { self.negative(&magnitude) } else { magnitude }
        };
        let inverse = self.inverse(&residue(number.denom()))?;
        Some(self.multiply(&residue(number.numer()), &inverse))
    }
    #[expect(clippy::cast_possible_truncation, reason = "a residue fits its modulus")]
    fn multiply(&self, a: &u64, b: &u64) -> u64 {
        (u128::from(*a) * u128::from(*b) % u128::from(self.prime)) as u64
    }
    fn inverse(&self, a: &u64) -> Option<u64> {
        if *a == 0 {
            return None;
        }
        // Extended Euclid: remainder = factor·a modulo p throughout; |factor| stays below p < 2^63.
        let (mut old, mut remainder) = (self.prime, a % self.prime);
        let (mut old_factor, mut factor) = (0_i64, 1_i64);
        while remainder > 1 {
            let quotient = old / remainder;
            (old, remainder) = (remainder, old % remainder);
            #[expect(clippy::cast_possible_wrap, reason = "quotient·factor is at most the prime")]
            let next = old_factor - quotient as i64 * factor;
            (old_factor, factor) = (factor, next);
        }
        // A remainder of 0 means a modulus that is not prime.
        if remainder == 0 {
            return None;
        }
        Some(if factor < 0 { self.prime - factor.unsigned_abs() } else { factor.unsigned_abs() })
    }
    fn is_zero(&self, a: &u64) -> bool {
        *a == 0
    }
    fn magnitude(&self, a: &u64) -> f64 {
        if *a == 0 { 0.0 } else { 1.0 }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::numeric::PRIMES;

    /// The field axioms on a few numbers, by the images of rationals.
    fn check<F: Field>(field: &F) {
        let image = |n: i64, d: i64| {
            field.number(&Number::new(n.into(), d.into())).expect("a denominator that is not 0")
        };
        let (half, third, minus) = (image(1, 2), image(1, 3), image(-7, 4));
        assert_eq!(field.add(&half, &half), field.one());
        assert_eq!(field.subtract(&third, &third), field.zero());
        assert_eq!(field.multiply(&half, &minus), image(-7, 8));
        assert_eq!(field.power(&half, -3), Some(image(8, 1)));
        assert_eq!(field.power(&field.zero(), 0), Some(field.one()));
        assert_eq!(field.power(&field.zero(), -1), None);
        assert_eq!(field.inverse(&field.zero()), None);
        assert_eq!(field.magnitude(&field.zero()), 0.0);
        assert!(field.magnitude(&minus) > 0.0);
    }

    #[test]
    fn axioms() {
        check(&Rationals);
        check(&Complexes);
        PRIMES.iter().for_each(|prime| check(&PrimeField::new(*prime)));
        assert_eq!(PrimeField::new(7).number(&Number::new(1.into(), 14.into())), None);
    }

    #[test]
    fn numbers_at_the_ends_of_double_precision() {
        let inverse = Complexes.inverse(&Complex::new(0.0, 1e-300)).expect("a finite number");
        assert!((inverse.im * 1e-300 + 1.0).abs() < 1e-15, "{inverse}");
        let huge = Number::from_integer(num_bigint::BigInt::from(10).pow(400));
        assert_eq!(Complexes.number(&huge), None);
        assert_eq!(Complexes.number(&(&huge / &huge)), Some(Complex::ONE));
    }

    /// Miller–Rabin with the first twelve primes as bases decides below 3.3e24 (Sorenson &
    /// Webster 2015).
    #[test]
    fn moduli_are_prime() {
        for prime in PRIMES {
            let field = PrimeField::new(prime);
            let twos = (prime - 1).trailing_zeros();
            for base in [2, 3, 5, 7, 11, 13, 17, 19, 23, 29, 31, 37] {
                let (mut power, mut square, mut left) = (1, base, (prime - 1) >> twos);
                while left > 0 {
                    if left & 1 == 1 {
                        power = field.multiply(&power, &square);
                    }
                    square = field.multiply(&square, &square);
                    left >>= 1;
                }
                let mut witness = power == 1;
                for _ in 0..twos {
                    witness |= power == prime - 1;
                    power = field.multiply(&power, &power);
                }
                assert!(witness, "{prime} is composite by {base}");
            }
        }
    }
}
