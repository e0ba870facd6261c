//! Polynomials in one variable over **Q**, held as integers over a common denominator.
//!
//! What must hold: the last coefficient is not 0, the denominator is positive, and denominator and
//! coefficients together have no common factor; so derived equality is equality of polynomials.
//! Arithmetic is fraction-free and schoolbook; greatest common divisors are those of
//! [`gcd`](super::gcd()), modular and verified.

use std::ops::{Add, Mul, Neg, Sub};

use num_bigint::BigInt;
use num_complex::Complex;
use num_integer::Integer;
use num_rational::BigRational;
use num_traits::{One, Signed, ToPrimitive, Zero};

use super::gcd::gcd;
use super::monomial::Var;
use super::polynomial::Polynomial;

/// A polynomial in one unnamed variable with rational coefficients.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub struct Univariate {
    /// Lowest power first.
    coefficients: Vec<BigInt>,
    denominator: BigInt,
}

impl Univariate {
    /// The polynomial 0.
    pub fn zero() -> Self {
        Self { coefficients: Vec::new(), denominator: BigInt::one() }
    }

    /// The polynomial 1.
    pub fn one() -> Self {
        Self { coefficients: vec![BigInt::one()], denominator: BigInt::one() }
    }

    /// Integer coefficients, lowest power first, over a common denominator; `None` if that is 0.
    pub fn new(coefficients: Vec<BigInt>, denominator: BigInt) -> Option<Self> {
        (!denominator.is_zero()).then(|| Self { coefficients, denominator }.normalised())
    }

    /// Integer coefficients, lowest power first.
    pub fn from_integers(coefficients: impl IntoIterator<Item = impl Into<BigInt>>) -> Self {
        let coefficients = coefficients.into_iter().map(Into::into).collect();
        Self { coefficients, denominator: BigInt::one() }.normalised()
    }

    /// Rational coefficients, lowest power first.
    pub fn from_rationals(coefficients: &[BigRational]) -> Self {
        let denominator = coefficients
            .iter()
            .fold(BigInt::one(), |common, coefficient| common.lcm(coefficient.denom()));
        let scaled = |value: &BigRational| value.numer() * (&denominator / value.denom());
        let coefficients = coefficients.iter().map(scaled).collect();
        Self { coefficients, denominator }.normalised()
    }

    /// A polynomial that contains at most the given variable; `None` if it contains another one.
    pub fn from_polynomial(value: &Polynomial, variable: Var) -> Option<Self> {
        let mut coefficients = vec![BigInt::zero(); value.degree(variable) as usize + 1];
        for (mut powers, coefficient) in value.terms() {
            let place = match (powers.next(), powers.next()) {
                (None, _) => 0,
                (Some((var, power)), None) if var == variable => power as usize,
                _ => return None,
            };
            coefficients[place] = coefficient;
        }
        Some(Self::from_integers(coefficients))
    }

    /// Numerator, as a polynomial in the given variable, and denominator.
    pub fn to_polynomial(&self, variable: Var) -> (Polynomial, BigInt) {
        let terms = self.coefficients.iter().zip(0_u32..);
        let terms = terms.map(|(value, power)| ([(variable, power)], value.clone()));
        (Polynomial::from_terms(terms), self.denominator.clone())
    }

    fn normalised(mut self) -> Self {
        while self.coefficients.last().is_some_and(Zero::is_zero) {
            self.coefficients.pop();
        }
        let mut common = self.denominator.clone();
        for coefficient in &self.coefficients {
            if common.is_one() {
                break;
            }
            common = common.gcd(coefficient);
        }
        if self.denominator.is_negative() != common.is_negative() {
            common = -common;
        }
        if !common.is_one() {
            for coefficient in &mut self.coefficients {
                *coefficient /= &common;
            }
            self.denominator /= common;
        }
        self
    }

    /// The numerators of the coefficients over the common denominator, lowest power first.
    pub fn numerators(&self) -> &[BigInt] {
        &self.coefficients
    }

    /// The common denominator, positive.
    pub fn denominator(&self) -> &BigInt {
        &self.denominator
    }

    /// The coefficient of a power.
    pub fn coefficient(&self, power: usize) -> BigRational {
        let value = self.coefficients.get(power).cloned().unwrap_or_default();
        BigRational::new(value, self.denominator.clone())
    }

    /// The degree; 0 for the polynomial 0.
    pub fn degree(&self) -> usize {
        self.coefficients.len().saturating_sub(1)
    }

    /// The coefficient of the highest power; 0 for the polynomial 0.
    pub fn leading_coefficient(&self) -> BigRational {
        self.coefficient(self.degree())
    }

    /// Whether this is the polynomial 0.
    pub fn is_zero(&self) -> bool {
        self.coefficients.is_empty()
    }

    /// Whether this is a number.
    pub fn is_constant(&self) -> bool {
        self.coefficients.len() <= 1
    }

    /// The product with a number.
    pub fn scaled(&self, factor: &BigRational) -> Self {
        let coefficients = self.coefficients.iter().map(|value| value * factor.numer()).collect();
        let denominator = &self.denominator * factor.denom();
        Self { coefficients, denominator }.normalised()
    }

    /// The associate with coprime integer coefficients and positive leading coefficient.
    pub fn primitive_part(&self) -> Self {
        let content = self.coefficients.iter().fold(BigInt::zero(), |common, c| common.gcd(c));
        let negative = self.coefficients.last().is_some_and(Signed::is_negative);
        let content = if negative { -content } else { content };
        let coefficients = self.coefficients.iter().map(|value| value / &content).collect();
        Self { coefficients, denominator: BigInt::one() }
    }

    /// Quotient and remainder; `None` when dividing by 0. Fraction-free: the dividend is scaled
    /// by a power of the divisor's leading coefficient first.
    pub fn div_rem(&self, divisor: &Self) -> Option<(Self, Self)> {
        let lead = divisor.coefficients.last()?;
        let count = divisor.coefficients.len();
        if self.coefficients.len() < count {
            return Some((Self::zero(), self.clone()));
        }
        let steps = self.coefficients.len() - count + 1;
        let scale = num_traits::pow(lead.clone(), steps);
        let mut rest: Vec<BigInt> = self.coefficients.iter().map(|value| value * &scale).collect();
        let mut quotient = vec![BigInt::zero(); steps];
        for place in (0..steps).rev() {
            // Divisible: `rest` still carries the factor lead^(place + 1).
            let factor = &rest[place + count - 1] / lead;
            if !factor.is_zero() {
                for (value, by) in rest[place..].iter_mut().zip(&divisor.coefficients) {
                    *value -= &factor * by;
                }
            }
            quotient[place] = factor * &divisor.denominator;
        }
        rest.truncate(count - 1);
        let denominator = scale * &self.denominator;
        let quotient = Self { coefficients: quotient, denominator: denominator.clone() };
        Some((quotient.normalised(), Self { coefficients: rest, denominator }.normalised()))
    }

    /// The quotient if the divisor divides; `None` if it does not or is 0.
    pub fn divide_exact(&self, divisor: &Self) -> Option<Self> {
        let (quotient, rest) = self.div_rem(divisor)?;
        rest.is_zero().then_some(quotient)
    }

    /// The greatest common divisor with coprime integer coefficients and positive leading
    /// coefficient; `gcd(0, 0) = 0`.
    pub fn gcd(&self, other: &Self) -> Self {
        let polynomial = |value: &Self| value.to_polynomial(Var::S).0;
        let common = gcd(&polynomial(self), &polynomial(other));
        Self::from_polynomial(&common, Var::S).unwrap_or_else(Self::one).primitive_part()
    }

    /// The derivative.
    pub fn derivative(&self) -> Self {
        let terms = self.coefficients.iter().zip(0_u32..).skip(1);
        let coefficients = terms.map(|(value, power)| value * power).collect();
        Self { coefficients, denominator: self.denominator.clone() }.normalised()
    }

    /// Square-free factors of positive degree with their multiplicities, ascending, each with
    /// coprime integer coefficients and positive leading coefficient (Yun 1976). Their product is
    /// the polynomial up to a number; none for a number.
    pub fn square_free(&self) -> Vec<(Self, u32)> {
        let mut factors = Vec::new();
        if self.is_constant() {
            return factors;
        }
        let whole = self.primitive_part();
        let slope = whole.derivative();
        let common = whole.gcd(&slope);
        let over = |value: &Self, divisor: &Self| value.divide_exact(divisor).unwrap_or_default();
        let mut rest = over(&whole, &common);
        let mut excess = &over(&slope, &common) - &rest.derivative();
        for multiplicity in 1.. {
            if rest.is_constant() {
                break;
            }
            let factor = rest.gcd(&excess);
            rest = over(&rest, &factor);
            excess = &over(&excess, &factor) - &rest.derivative();
            if !factor.is_constant() {
                factors.push((factor, multiplicity));
            }
        }
        factors
    }

    /// The value at a rational number. Integers only, one reduction at the end.
    pub fn evaluate(&self, at: &BigRational) -> BigRational {
        let (mut sum, mut scale) = (BigInt::zero(), BigInt::one());
        for coefficient in self.coefficients.iter().rev() {
            // sum/scale ← sum/scale · at + coefficient, keeping `scale` a power of the denominator.
            sum = sum * at.numer() + coefficient * &scale * at.denom();
            scale *= at.denom();
        }
        BigRational::new(sum, scale * &self.denominator)
    }

    /// The value at a complex number, by Horner's rule in double precision.
    pub fn evaluate_complex(&self, at: Complex<f64>) -> Complex<f64> {
        (0..self.coefficients.len()).rev().fold(Complex::zero(), |sum, power| {
            sum * at + self.coefficient(power).to_f64().unwrap_or(f64::NAN)
        })
    }

    /// The quotient of two polynomials in lowest terms: coprime, with integer coefficients that
    /// have no common factor, the denominator's leading coefficient positive. `None` if the
    /// denominator is 0.
    pub fn lowest_terms(numerator: &Self, denominator: &Self) -> Option<(Self, Self)> {
        if denominator.is_zero() {
            return None;
        }
        let common = numerator.gcd(denominator);
        let (above, below) = (numerator.divide_exact(&common)?, denominator.divide_exact(&common)?);
        let factor = BigRational::new(below.denominator.clone(), above.denominator.clone());
        let content =
            |value: &Self| value.coefficients.iter().fold(BigInt::zero(), |c, v| c.gcd(v));
        let factor = factor * BigRational::new(content(&above), content(&below));
        let sign = |value: &Self| match value.coefficients.last() {
            Some(last) if last.is_negative() => -BigInt::one(),
            _ => BigInt::one(),
        };
        if above.is_zero() {
            return Some((Self::zero(), Self::one()));
        }
        let numer = factor.numer() * sign(&above) * sign(&below);
        let numer = above.primitive_part().scaled(&BigRational::from(numer));
        let denom = below.primitive_part().scaled(&BigRational::from(factor.denom().clone()));
        Some((numer, denom))
    }
}

impl Default for Univariate {
    fn default() -> Self {
        Self::zero()
    }
}

impl Add for &Univariate {
    type Output = Univariate;
    fn add(self, other: Self) -> Univariate {
        let denominator = self.denominator.lcm(&other.denominator);
        let (left, right) = (&denominator / &self.denominator, &denominator / &other.denominator);
        let count = self.coefficients.len().max(other.coefficients.len());
        let part = |value: &Univariate, scale: &BigInt, power: usize| {
            value.coefficients.get(power).map_or_else(BigInt::zero, |value| value * scale)
        };
        let sum = |power| part(self, &left, power) + part(other, &right, power);
        Univariate { coefficients: (0..count).map(sum).collect(), denominator }.normalised()
    }
}

impl Sub for &Univariate {
    type Output = Univariate;
    fn sub(self, other: Self) -> Univariate {
        self + &-other
    }
}

impl Neg for &Univariate {
    type Output = Univariate;
    fn neg(self) -> Univariate {
        let coefficients = self.coefficients.iter().map(|value| -value).collect();
        Univariate { coefficients, denominator: self.denominator.clone() }
    }
}

impl Mul for &Univariate {
    type Output = Univariate;
    fn mul(self, other: Self) -> Univariate {
        if self.is_zero() || other.is_zero() {
            return Univariate::zero();
        }
        let count = self.coefficients.len() + other.coefficients.len() - 1;
        let mut coefficients = vec![BigInt::zero(); count];
        for (place, a) in self.coefficients.iter().enumerate() {
            for (sum, b) in coefficients[place..].iter_mut().zip(&other.coefficients) {
                *sum += a * b;
            }
        }
        let denominator = &self.denominator * &other.denominator;
        Univariate { coefficients, denominator }.normalised()
    }
}

#[cfg(test)]
mod tests {
    use proptest::prelude::*;

    use super::*;

    fn univariate(length: usize) -> impl Strategy<Value = Univariate> {
        (prop::collection::vec(-9_i64..10, 0..length), 1_i64..7).prop_map(|(terms, below)| {
            let terms = terms.into_iter().map(BigInt::from).collect();
            Univariate { coefficients: terms, denominator: BigInt::from(below) }.normalised()
        })
    }

    fn rational(above: i64, below: i64) -> BigRational {
        BigRational::new(above.into(), below.into())
    }

    proptest! {
        #![proptest_config(ProptestConfig::with_cases(96))]

        #[test]
        fn ring_and_division(a in univariate(6), b in univariate(5), c in univariate(4), x in -9_i64..9) {
            prop_assert_eq!(&(&a + &b) * &c, &(&a * &c) + &(&b * &c));
            let at = rational(x, 4);
            prop_assert_eq!((&a * &b).evaluate(&at), a.evaluate(&at) * b.evaluate(&at));
            if let Some((quotient, rest)) = a.div_rem(&b) {
                prop_assert_eq!(&(&quotient * &b) + &rest, a.clone());
                prop_assert_eq!((&a * &b).divide_exact(&b), Some(a.clone()));
            }
            let (product, slope) = (&a * &b, &(&a.derivative() * &b) + &(&a * &b.derivative()));
            prop_assert_eq!(product.derivative(), slope);
        }

        #[test]
        fn lowest_terms(a in univariate(5), b in univariate(5), c in univariate(4)) {
            prop_assume!(!b.is_zero() && !c.is_zero());
            let (above, below) = Univariate::lowest_terms(&(&a * &c), &(&b * &c))
                .expect("the denominator is not 0");
            prop_assert_eq!(&above * &b, &below * &a);
            prop_assert!(above.gcd(&below).is_constant());
            prop_assert!(below.leading_coefficient().is_positive());
            prop_assert!(above.denominator().is_one() && below.denominator().is_one());
        }

        #[test]
        fn square_free(a in univariate(4), b in univariate(3), c in univariate(3)) {
            let whole = &(&(&a * &b) * &b) * &(&(&c * &c) * &c);
            let mut product = Univariate::one();
            for (factor, multiplicity) in whole.square_free() {
                prop_assert!(factor.gcd(&factor.derivative()).is_constant());
                prop_assert!(product.gcd(&factor).is_constant());
                product = (0..multiplicity).fold(product, |product, _| &product * &factor);
            }
            if !whole.is_constant() {
                prop_assert_eq!(product.primitive_part(), whole.primitive_part());
            }
        }
    }

    #[test]
    fn values_and_conversion() {
        let value = Univariate::from_rationals(&[rational(1, 2), rational(0, 1), rational(-2, 3)]);
        assert_eq!((value.denominator(), value.degree()), (&BigInt::from(6), 2));
        assert_eq!(value.evaluate(&rational(3, 2)), rational(-1, 1));
        let at = value.evaluate_complex(Complex::new(0.0, 1.5));
        assert!((at - Complex::new(2.0, 0.0)).norm() < 1e-12);
        let (above, below) = value.to_polynomial(Var(4));
        let back = Univariate::from_polynomial(&above, Var(4)).expect("one variable");
        assert_eq!(back.scaled(&BigRational::new(BigInt::one(), below)), value);
        assert_eq!(Univariate::from_polynomial(&above, Var(3)), None);
    }
}
