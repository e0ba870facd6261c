//! Dense polynomials in s with integer coefficients, and their quotients.
//!
//! Coefficients ascend and the last one is not 0; the zero polynomial has none. Meant for the
//! degrees of circuits (tens), so products are by the school method. The greatest common divisor
//! is by primitive remainders (Knuth, TAOCP 2, 4.6.1), after a test modulo a prime that finds
//! coprime pairs at once.

use num_bigint::BigInt;
use num_integer::Integer;
use num_traits::{One, Signed, ToPrimitive, Zero};

use super::{Additive, Field, PRIMES, PrimeField};
use crate::circuit::Number;

/// A polynomial over the integers.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub(crate) struct Polynomial(Vec<BigInt>);

impl Polynomial {
    pub(crate) fn new(mut coefficients: Vec<BigInt>) -> Self {
        while coefficients.last().is_some_and(BigInt::is_zero) {
            coefficients.pop();
        }
        Self(coefficients)
    }

    pub(crate) fn zero() -> Self {
        Self::default()
    }

    pub(crate) fn constant(value: BigInt) -> Self {
        Self::new(vec![value])
    }

    pub(crate) fn one() -> Self {
        Self::constant(BigInt::one())
    }

    pub(crate) fn is_zero(&self) -> bool {
        self.0.is_empty()
    }

    pub(crate) fn is_one(&self) -> bool {
        self.0.len() == 1 && self.0[0].is_one()
    }

    /// The degree; 0 for the zero polynomial, too.
    pub(crate) fn degree(&self) -> usize {
        self.0.len().saturating_sub(1)
    }

    pub(crate) fn coefficients(&self) -> &[BigInt] {
        &self.0
    }

    pub(crate) fn add(&self, other: &Self) -> Self {
        let (long, short) =
            if self.0.len() < other.0.len() { (other, self) } else { (self, other) };
        let mut sum = long.0.clone();
        sum.iter_mut().zip(&short.0).for_each(|(a, b)| *a += b);
        Self::new(sum)
    }

    pub(crate) fn negative(&self) -> Self {
        Self(self.0.iter().map(|a| -a).collect())
    }

    pub(crate) fn subtract(&self, other: &Self) -> Self {
        self.add(&other.negative())
    }

    pub(crate) fn multiply(&self, other: &Self) -> Self {
        if self.is_zero() || other.is_zero() {
            return Self::zero();
        }
        let mut product = vec![BigInt::zero(); self.0.len() + other.0.len() - 1];
        for (i, a) in self.0.iter().enumerate().filter(|(_, a)| !a.is_zero()) {
            for (j, b) in other.0.iter().enumerate() {
                product[i + j] += a * b;
            }
        }
        Self::new(product)
    }

    /// The quotient where `divisor`, which is not 0, divides; otherwise without meaning.
    pub(crate) fn divide_exactly(&self, divisor: &Self) -> Self {
        if divisor.is_one() || divisor.is_zero() || self.is_zero() {
            return self.clone();
        }
        if divisor.0.len() > self.0.len() {
            return Self::zero();
        }
        let lead = &divisor.0[divisor.degree()];
        let mut rest = self.0.clone();
        let mut quotient = vec![BigInt::zero(); rest.len() - divisor.degree()];
        for at in (0..quotient.len()).rev() {
            let factor = &rest[at + divisor.degree()] / lead;
            if !factor.is_zero() {
                for (i, b) in divisor.0.iter().enumerate() {
                    rest[at + i] -= &factor * b;
                }
            }
            quotient[at] = factor;
        }
        Self::new(quotient)
    }

    /// The greatest common divisor of the coefficients, not negative.
    pub(crate) fn content(&self) -> BigInt {
        let mut content = BigInt::zero();
        for coefficient in &self.0 {
            content = content.gcd(coefficient);
            if content.is_one() {
                break;
            }
        }
        content
    }

    fn over_integer(&self, divisor: &BigInt) -> Self {
        Self(self.0.iter().map(|a| a / divisor).collect())
    }

    /// Without its content and with a positive leading coefficient.
    fn primitive(&self) -> Self {
        let Some(lead) = self.0.last() else { return Self::zero() };
        let content = if lead.is_negative() { -self.content() } else { self.content() };
        if content.is_one() { self.clone() } else { self.over_integer(&content) }
    }

    /// The greatest common divisor over the integers, with a positive leading coefficient;
    /// gcd(0, 0) is 0.
    pub(crate) fn gcd(&self, other: &Self) -> Self {
        if self.is_zero() || other.is_zero() {
            let given = self.add(other);
            let negative = given.0.last().is_some_and(Signed::is_negative);
            return if negative { given.negative() } else { given };
        }
        let content = self.content().gcd(&other.content());
        let scale = |polynomial: Self| polynomial.multiply(&Self::constant(content.clone()));
        if self.degree() == 0 || other.degree() == 0 || self.is_coprime_modulo_prime(other) {
            return Self::constant(content);
        }
        let (mut a, mut b) = (self.primitive(), other.primitive());
        if a.degree() < b.degree() {
            std::mem::swap(&mut a, &mut b);
        }
        while !b.is_zero() {
            let rest = a.pseudo_remainder(&b).primitive();
            a = std::mem::replace(&mut b, rest);
        }
        scale(a)
    }

    fn pseudo_remainder(&self, divisor: &Self) -> Self {
        let mut rest = self.clone();
        let lead = &divisor.0[divisor.degree()];
        while !rest.is_zero() && rest.degree() >= divisor.degree() {
            let shift = rest.degree() - divisor.degree();
            let top = rest.0[rest.degree()].clone();
            rest.0.iter_mut().for_each(|a| *a *= lead);
            for (i, b) in divisor.0.iter().enumerate() {
                rest.0[shift + i] -= &top * b;
            }
            rest = Self::new(rest.0);
        }
        rest
    }

    /// True only if there is no common factor of positive degree: the images modulo a prime that
    /// divides no leading coefficient have none.
    fn is_coprime_modulo_prime(&self, other: &Self) -> bool {
        let field = PrimeField::new(PRIMES[0]);
        let image = |polynomial: &Self| -> Option<Vec<u64>> {
            let residues: Vec<u64> = polynomial
                .0
                .iter()
                .map(|a| a.mod_floor(&BigInt::from(field.prime())).to_u64().unwrap_or(0))
                .collect();
            residues.last().is_some_and(|lead| *lead != 0).then_some(residues)
        };
        let (Some(mut a), Some(mut b)) = (image(self), image(other)) else { return false };
        while !b.is_empty() {
            let Some(inverse) = b.last().and_then(|lead| field.inverse(lead)) else { return false };
            while a.len() >= b.len() {
                let shift = a.len() - b.len();
                let factor = field.multiply(&a[a.len() - 1], &inverse);
                for (i, value) in b.iter().enumerate() {
                    a[shift + i] = field.subtract(&a[shift + i], &field.multiply(&factor, value));
                }
                while a.last() == Some(&0) {
                    a.pop();
                }
            }
            std::mem::swap(&mut a, &mut b);
        }
        a.len() == 1
    }
}

/// A quotient of polynomials in lowest terms, its denominator with a positive leading coefficient.
#[derive(Clone, Debug, PartialEq, Eq)]
pub(crate) struct Quotient {
    pub(crate) numerator: Polynomial,
    pub(crate) denominator: Polynomial,
}

impl Quotient {
    /// In lowest terms; `denominator` is not 0.
    pub(crate) fn new(numerator: Polynomial, denominator: Polynomial) -> Self {
        let gcd = numerator.gcd(&denominator);
        let (numerator, denominator) =
            (numerator.divide_exactly(&gcd), denominator.divide_exactly(&gcd));
        if denominator.0.last().is_some_and(Signed::is_negative) {
            return Self { numerator: numerator.negative(), denominator: denominator.negative() };
        }
        Self { numerator, denominator }
    }
}

/// The field Q(s).
#[derive(Clone, Copy, Debug, Default)]
pub(crate) struct Quotients;

impl Additive for Quotients {
    type Element = Quotient;
    fn zero(&self) -> Quotient {
        Quotient { numerator: Polynomial::zero(), denominator: Polynomial::one() }
    }
    fn one(&self) -> Quotient {
        Quotient { numerator: Polynomial::one(), denominator: Polynomial::one() }
    }
    fn add(&self, a: &Quotient, b: &Quotient) -> Quotient {
        let upper = a.numerator.multiply(&b.denominator).add(&b.numerator.multiply(&a.denominator));
        Quotient::new(upper, a.denominator.multiply(&b.denominator))
    }
    fn negative(&self, a: &Quotient) -> Quotient {
        Quotient { numerator: a.numerator.negative(), denominator: a.denominator.clone() }
    }
}

impl Field for Quotients {
    fn number(&self, number: &Number) -> Option<Quotient> {
        Some(Quotient {
            numerator: Polynomial::constant(number.numer().clone()),
            denominator: Polynomial::constant(number.denom().clone()),
        })
    }
    fn multiply(&self, a: &Quotient, b: &Quotient) -> Quotient {
        Quotient::new(a.numerator.multiply(&b.numerator), a.denominator.multiply(&b.denominator))
    }
    fn inverse(&self, a: &Quotient) -> Option<Quotient> {
        (!a.numerator.is_zero()).then(|| Quotient::new(a.denominator.clone(), a.numerator.clone()))
    }
    fn is_zero(&self, a: &Quotient) -> bool {
        a.numerator.is_zero()
    }
    fn magnitude(&self, a: &Quotient) -> f64 {
        if a.numerator.is_zero() { 0.0 } else { 1.0 }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn polynomial(coefficients: &[i64]) -> Polynomial {
        Polynomial::new(coefficients.iter().map(|a| BigInt::from(*a)).collect())
    }

    #[test]
    fn greatest_common_divisors() {
        let check = |a: &[i64], b: &[i64], expected: &[i64]| {
            let (a, b, expected) = (polynomial(a), polynomial(b), polynomial(expected));
            assert_eq!(a.gcd(&b), expected);
            assert_eq!(b.gcd(&a), expected);
        };
        check(&[], &[], &[]);
        check(&[], &[-2, -4], &[2, 4]);
        check(&[6], &[4, 8], &[2]);
        // (1 + s)(2 + s) and (1 + s)(3 + s), one of them times −2
        check(&[2, 3, 1], &[-6, -8, -2], &[1, 1]);
        check(&[2, 3, 1], &[3, 5, 1], &[1]);
        check(&[0, 0, 6], &[0, 4, 2], &[0, 2]);
        // A square and its derivative.
        check(&[1, 4, 4], &[4, 8], &[1, 2]);
    }

    #[test]
    fn products_divide_exactly() {
        let factors = [polynomial(&[3, 0, -2]), polynomial(&[0, 7]), polynomial(&[-1, 5, 1, 9])];
        for a in &factors {
            for b in &factors {
                assert_eq!(&a.multiply(b).divide_exactly(b), a);
            }
        }
    }

    #[test]
    fn quotients_are_in_lowest_terms() {
        let quotient = Quotient::new(polynomial(&[2, 3, 1]), polynomial(&[-2, -2]));
        assert_eq!(quotient.numerator, polynomial(&[-2, -1]));
        assert_eq!(quotient.denominator, polynomial(&[2]));
        let zero = Quotient::new(polynomial(&[]), polynomial(&[4, 4]));
        assert_eq!(zero, Quotients.zero());
        let field = Quotients;
        let inverse = field.inverse(&quotient).expect("not 0");
        assert_eq!(field.multiply(&quotient, &inverse), field.one());
        assert_eq!(field.subtract(&quotient, &quotient), field.zero());
    }
}
