//! Rational functions in lowest terms.
//!
//! What must hold: numerator and denominator are coprime, including their integer contents, and the
//! leading coefficient of the denominator is positive; 0 is 0/1. So derived equality is equality of
//! functions. Sums and products cancel before they multiply out (Henrici 1956), so that the gcds
//! are taken of operands and not of their products.

use std::ops::{Add, Div, Mul, Neg, Sub};

use num_bigint::BigInt;
use num_rational::BigRational;

use super::gcd::gcd_cofactors;
use super::monomial::Var;
use super::polynomial::Polynomial;

/// A quotient of polynomials in lowest terms.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub struct Fraction {
    numerator: Polynomial,
    denominator: Polynomial,
}

impl Fraction {
    /// In lowest terms; `None` if the denominator is 0.
    pub fn new(numerator: &Polynomial, denominator: &Polynomial) -> Option<Self> {
        if denominator.is_zero() {
            return None;
        }
        let (_, numerator, denominator) = gcd_cofactors(numerator, denominator);
        Some(Self::with_sign(numerator, denominator))
    }

    /// The function 0.
    pub fn zero() -> Self {
        Self { numerator: Polynomial::zero(), denominator: Polynomial::one() }
    }

    /// The function 1.
    pub fn one() -> Self {
        Self { numerator: Polynomial::one(), denominator: Polynomial::one() }
    }

    /// The ratio of two integers; `None` if the second is 0.
    pub fn ratio(numerator: impl Into<BigInt>, denominator: impl Into<BigInt>) -> Option<Self> {
        Self::new(&Polynomial::from(numerator.into()), &Polynomial::from(denominator.into()))
    }

    /// The part above the line.
    pub fn numerator(&self) -> &Polynomial {
        &self.numerator
    }

    /// The part below the line; its leading coefficient is positive.
    pub fn denominator(&self) -> &Polynomial {
        &self.denominator
    }

    /// Both parts.
    pub fn into_parts(self) -> (Polynomial, Polynomial) {
        (self.numerator, self.denominator)
    }

    /// Whether this is the function 0.
    pub fn is_zero(&self) -> bool {
        self.numerator.is_zero()
    }

    /// Whether this is the function 1.
    pub fn is_one(&self) -> bool {
        self.numerator.is_one() && self.denominator.is_one()
    }

    /// The inverse; `None` for 0.
    pub fn recip(&self) -> Option<Self> {
        let inverse = || Self::with_sign(self.denominator.clone(), self.numerator.clone());
        (!self.is_zero()).then(inverse)
    }

    /// The quotient; `None` when dividing by 0.
    pub fn checked_div(&self, divisor: &Self) -> Option<Self> {
        Some(self * &divisor.recip()?)
    }

    /// The power with a natural exponent; no gcd is needed.
    pub fn pow(&self, exponent: u32) -> Self {
        Self {
            numerator: self.numerator.pow(exponent),
            denominator: self.denominator.pow(exponent),
        }
    }

    /// The value at rational values of the variables; `None` at a pole.
    pub fn evaluate(&self, value: impl Fn(Var) -> BigRational) -> Option<BigRational> {
        let below = self.denominator.evaluate(&value);
        (below != BigRational::default()).then(|| self.numerator.evaluate(&value) / below)
    }

    fn with_sign(numerator: Polynomial, denominator: Polynomial) -> Self {
        if denominator.is_negative() {
            return Self { numerator: -numerator, denominator: -denominator };
        }
        Self { numerator, denominator }
    }
}

impl From<Polynomial> for Fraction {
    fn from(numerator: Polynomial) -> Self {
        Self { numerator, denominator: Polynomial::one() }
    }
}

impl Neg for &Fraction {
    type Output = Fraction;
    fn neg(self) -> Fraction {
        Fraction { numerator: -&self.numerator, denominator: self.denominator.clone() }
    }
}

impl Add for &Fraction {
    type Output = Fraction;
    fn add(self, other: Self) -> Fraction {
        let (common, left, right) = gcd_cofactors(&self.denominator, &other.denominator);
        let sum = &(&self.numerator * &right) + &(&other.numerator * &left);
        if common.is_one() {
            return Fraction { numerator: sum, denominator: &self.denominator * &right }.settled();
        }
        // Only factors of the common denominator can cancel.
        let (shared, numerator, _) = gcd_cofactors(&sum, &common);
        let rest = common.divide_exact(&shared).unwrap_or(common);
        Fraction { numerator, denominator: &(&rest * &left) * &right }.settled()
    }
}

impl Fraction {
    /// Gives 0 its denominator 1.
    fn settled(self) -> Self {
        if self.numerator.is_zero() { Self::zero() } else { self }
    }
}

impl Sub for &Fraction {
    type Output = Fraction;
    fn sub(self, other: Self) -> Fraction {
        self + &-other
    }
}

impl Mul for &Fraction {
    type Output = Fraction;
    fn mul(self, other: Self) -> Fraction {
        let (_, a, d) = gcd_cofactors(&self.numerator, &other.denominator);
        let (_, c, b) = gcd_cofactors(&other.numerator, &self.denominator);
        Fraction::with_sign(&a * &c, &b * &d).settled()
    }
}

macro_rules! operators_by_value {
    ($($operator:ident $method:ident;)*) => {$(
        impl $operator for Fraction {
            type Output = Self;
            fn $method(self, other: Self) -> Self {
                (&self).$method(&other)
            }
        }
    )*};
}

operators_by_value! {
    Add add;
    Sub sub;
    Mul mul;
}

impl Div for &Fraction {
    type Output = Option<Fraction>;
    /// `None` when dividing by 0.
    fn div(self, divisor: Self) -> Option<Fraction> {
        self.checked_div(divisor)
    }
}

#[cfg(test)]
mod tests {
    use proptest::prelude::*;

    use super::super::polynomial::tests::polynomial;
    use super::*;

    fn fraction() -> BoxedStrategy<Fraction> {
        (polynomial(2, 2, 3), polynomial(2, 2, 3))
            .prop_filter_map("denominator 0", |(a, b)| Fraction::new(&a, &b))
            .boxed()
    }

    fn lowest(value: Fraction) -> Fraction {
        assert!(super::super::gcd(value.numerator(), value.denominator()).is_one());
        assert!(!value.denominator().is_negative());
        value
    }

    proptest! {
        #![proptest_config(ProptestConfig::with_cases(64))]

        #[test]
        fn field_laws(a in fraction(), b in fraction(), c in fraction()) {
            prop_assert_eq!(lowest(&a + &b), &b + &a);
            prop_assert_eq!(lowest(&a * &b), &b * &a);
            prop_assert_eq!(lowest(&(&a + &b) * &c), lowest(&(&a * &c) + &(&b * &c)));
            prop_assert!((&a - &a).is_zero());
            prop_assert_eq!(&(&a - &b) + &b, a.clone());
            if let Some(quotient) = &a / &b {
                prop_assert_eq!(&lowest(quotient) * &b, a);
            } else {
                prop_assert!(b.is_zero());
            }
        }
    }

    #[test]
    fn integers() {
        assert_eq!(Fraction::ratio(6, -4), Fraction::ratio(-3, 2));
        assert_eq!(Fraction::ratio(1, 0), None);
        let zero = Fraction::ratio(0, -7).expect("the denominator is not 0");
        assert!(zero.is_zero() && zero.denominator().is_one() && zero.recip().is_none());
    }
}
