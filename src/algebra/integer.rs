//! Integers with a fast path: a machine word where it fits, a big integer otherwise.
//!
//! Coefficients of network polynomials are small almost always; keeping them inline avoids an
//! allocation for each term. What must hold: [`Integer::Large`] never carries a value that fits
//! an `i64`, so that derived equality and hashing are those of the numbers.

use num_bigint::{BigInt, Sign};
use num_integer::Integer as _;
use num_traits::{Signed, ToPrimitive, Zero};

/// An integer: inline when it fits 64 bits.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub(crate) enum Integer {
    /// Fits a machine word.
    Small(i64),
    /// Does not fit a machine word.
    Large(Box<BigInt>),
}

impl Integer {
    pub(crate) const ZERO: Self = Self::Small(0);
    pub(crate) const ONE: Self = Self::Small(1);

    pub(crate) fn is_zero(&self) -> bool {
        matches!(self, Self::Small(0))
    }

    pub(crate) fn is_one(&self) -> bool {
        matches!(self, Self::Small(1))
    }

    pub(crate) fn is_negative(&self) -> bool {
        match self {
            Self::Small(value) => *value < 0,
            Self::Large(value) => value.is_negative(),
        }
    }

    /// Number of bits of the absolute value.
    pub(crate) fn bits(&self) -> u64 {
        match self {
            Self::Small(value) => u64::from(64 - value.unsigned_abs().leading_zeros()),
            Self::Large(value) => value.bits(),
        }
    }

    pub(crate) fn to_big(&self) -> BigInt {
        match self {
            Self::Small(value) => BigInt::from(*value),
            Self::Large(value) => (**value).clone(),
        }
    }

    pub(crate) fn into_big(self) -> BigInt {
        match self {
            Self::Small(value) => BigInt::from(value),
            Self::Large(value) => *value,
        }
    }

    pub(crate) fn plus(&self, other: &Self) -> Self {
        match (self, other) {
            (Self::Small(a), Self::Small(b)) => match a.checked_add(*b) {
                Some(sum) => Self::Small(sum),
                None => Self::from(i128::from(*a) + i128::from(*b)),
            },
            (Self::Small(a), Self::Large(b)) | (Self::Large(b), Self::Small(a)) => {
                Self::from(&**b + *a)
            }
            (Self::Large(a), Self::Large(b)) => Self::from(&**a + &**b),
        }
    }

    pub(crate) fn minus(&self, other: &Self) -> Self {
        match (self, other) {
            (Self::Small(a), Self::Small(b)) => match a.checked_sub(*b) {
                Some(difference) => Self::Small(difference),
                None => Self::from(i128::from(*a) - i128::from(*b)),
            },
            _ => self.plus(&other.negated()),
        }
    }

    pub(crate) fn times(&self, other: &Self) -> Self {
        match (self, other) {
            (Self::Small(a), Self::Small(b)) => match a.checked_mul(*b) {
                Some(product) => Self::Small(product),
                None => Self::from(i128::from(*a) * i128::from(*b)),
            },
            (Self::Small(a), Self::Large(b)) | (Self::Large(b), Self::Small(a)) => {
                Self::from(&**b * *a)
            }
            (Self::Large(a), Self::Large(b)) => Self::from(&**a * &**b),
        }
    }

    pub(crate) fn negated(&self) -> Self {
        match self {
            Self::Small(value) => match value.checked_neg() {
                Some(value) => Self::Small(value),
                None => Self::from(-i128::from(*value)),
            },
            Self::Large(value) => Self::from(-&**value),
        }
    }

    /// The quotient if the division leaves no remainder and the divisor is not 0.
    pub(crate) fn divided_exactly(&self, divisor: &Self) -> Option<Self> {
        if divisor.is_zero() {
            return None;
        }
        if let (Self::Small(a), Self::Small(b)) = (self, divisor) {
            // The only overflow is `i64::MIN / -1`.
            return match (a.checked_rem(*b), a.checked_div(*b)) {
                (Some(0), Some(quotient)) => Some(Self::Small(quotient)),
                (None, _) => Some(self.negated()),
                _ => None,
            };
        }
        let (quotient, remainder) = self.to_big().div_rem(&divisor.to_big());
        remainder.is_zero().then(|| Self::from(quotient))
    }

    /// The greatest common divisor, not negative.
    pub(crate) fn gcd(&self, other: &Self) -> Self {
        match (self, other) {
            (Self::Small(a), Self::Small(b)) => {
                Self::from(i128::from(a.unsigned_abs().gcd(&b.unsigned_abs())))
            }
            (Self::Small(0), Self::Large(b)) | (Self::Large(b), Self::Small(0)) => {
                Self::from(b.abs())
            }
            (Self::Small(a), Self::Large(b)) | (Self::Large(b), Self::Small(a)) => {
                let rest = (&**b % *a).to_i64().unwrap_or(0);
                Self::from(i128::from(a.unsigned_abs().gcd(&rest.unsigned_abs())))
            }
            (Self::Large(a), Self::Large(b)) => Self::from(a.gcd(b)),
        }
    }

    /// The residue in `0..modulus`.
    pub(crate) fn modulo(&self, modulus: u64) -> u64 {
        match self {
            Self::Small(value) => {
                let rest = value.unsigned_abs() % modulus;
                if *value < 0 && rest != 0 { modulus - rest } else { rest }
            }
            Self::Large(value) => {
                // Word by word from the top; u128 holds `rest · 2^64 + word`.
                let rest = value.magnitude().iter_u64_digits().rev().fold(0_u64, |rest, word| {
                    let step = (u128::from(rest) << 64) | u128::from(word);
                    (step % u128::from(modulus)) as u64
                });
                if value.sign() == Sign::Minus && rest != 0 { modulus - rest } else { rest }
            }
        }
    }
}

impl From<i64> for Integer {
    fn from(value: i64) -> Self {
        Self::Small(value)
    }
}

impl From<i128> for Integer {
    fn from(value: i128) -> Self {
        match i64::try_from(value) {
            Ok(small) => Self::Small(small),
            Err(_) => Self::Large(Box::new(BigInt::from(value))),
        }
    }
}

impl From<BigInt> for Integer {
    fn from(value: BigInt) -> Self {
        match value.to_i64() {
            Some(small) => Self::Small(small),
            None => Self::Large(Box::new(value)),
        }
    }
}

impl From<&BigInt> for Integer {
    fn from(value: &BigInt) -> Self {
        match value.to_i64() {
            Some(small) => Self::Small(small),
            None => Self::Large(Box::new(value.clone())),
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn edges_of_the_word() {
        let least = Integer::Small(i64::MIN);
        assert_eq!(least.negated().negated(), least);
        assert_eq!(least.minus(&Integer::ONE).plus(&Integer::ONE), least);
        assert_eq!(least.divided_exactly(&Integer::Small(-1)), Some(least.negated()));
        assert_eq!(least.gcd(&Integer::ZERO), least.negated());
        assert_eq!(least.bits(), 64);
        assert_eq!(least.times(&least).divided_exactly(&least), Some(least));
    }

    #[test]
    fn residues_of_both_signs() {
        let huge = Integer::from((BigInt::from(1) << 200) + 5);
        assert_eq!(huge.modulo(7), (4 + 5) % 7); // 2^200 = 2^(3*66+2) = 4 mod 7
        assert_eq!(huge.negated().modulo(7), 5);
        assert_eq!(Integer::Small(-1).modulo(7), 6);
        assert_eq!(Integer::Small(-14).modulo(7), 0);
    }

    #[test]
    fn gcd_mixes_sizes() {
        let huge = Integer::from(BigInt::from(6) << 100);
        assert_eq!(huge.gcd(&Integer::Small(-9)), Integer::Small(3));
        assert_eq!(huge.gcd(&huge.negated()), huge);
        assert_eq!(Integer::ZERO.gcd(&Integer::ZERO), Integer::ZERO);
    }
}
