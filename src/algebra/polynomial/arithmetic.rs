//! Sums, differences, signs, powers and the operators.
//!
//! Addition merges two sorted lists of terms in one layout that has room for both: linear in the
//! number of terms. Packing anew keeps the order, so nothing is ever sorted here.

use std::ops::{Add, AddAssign, Mul, MulAssign, Neg, Sub, SubAssign};

use num_bigint::BigInt;

use super::{Integer, Layout, Packing, Polynomial, Var};

impl Polynomial {
    fn combined(&self, other: &Self, subtract: bool) -> Self {
        if other.is_zero() {
            return self.clone();
        }
        if self.is_zero() {
            return if subtract { -other } else { other.clone() };
        }
        let layout = self.layout.union(&other.layout);
        let (left, right) = (self.repacked(&layout), other.repacked(&layout));
        let count = layout.words();
        let mut words = Vec::with_capacity(left.len() + right.len());
        let mut coefficients = Vec::with_capacity(self.len() + other.len());
        let (mut i, mut j) = (0, 0);
        let mut cancelled = false;
        let signed = |value: &Integer| if subtract { value.negated() } else { value.clone() };
        while i < self.len() && j < other.len() {
            let (a, b) = (&left[i * count..][..count], &right[j * count..][..count]);
            match a.cmp(b) {
                std::cmp::Ordering::Greater => {
                    words.extend_from_slice(a);
                    coefficients.push(self.coefficients[i].clone());
                    i += 1;
                }
                std::cmp::Ordering::Less => {
                    words.extend_from_slice(b);
                    coefficients.push(signed(&other.coefficients[j]));
                    j += 1;
                }
                std::cmp::Ordering::Equal => {
                    let (x, y) = (&self.coefficients[i], &other.coefficients[j]);
                    let sum = if subtract { x.minus(y) } else { x.plus(y) };
                    if sum.is_zero() {
                        cancelled = true;
                    } else {
                        words.extend_from_slice(a);
                        coefficients.push(sum);
                    }
                    i += 1;
                    j += 1;
                }
            }
        }
        words.extend_from_slice(&left[i * count..]);
        coefficients.extend_from_slice(&self.coefficients[i..]);
        words.extend_from_slice(&right[j * count..]);
        coefficients.extend(other.coefficients[j..].iter().map(signed));
        let sum = Self { layout, words, coefficients };
        if cancelled { sum.tightened() } else { sum }
    }

    pub(crate) fn repacked(&self, layout: &Layout) -> std::borrow::Cow<'_, [u64]> {
        if self.layout == *layout {
            return std::borrow::Cow::Borrowed(&self.words);
        }
        let packing = Packing::new(&self.layout, layout);
        std::borrow::Cow::Owned(packing.words(self.len(), &self.words))
    }

    /// The sum of many polynomials, by pairs, so that each term takes part in few additions.
    pub fn sum(parts: impl IntoIterator<Item = Self>) -> Self {
        // The stack holds sums of 2^k parts with falling k, like the digits of a binary counter.
        let mut stack: Vec<(u32, Self)> = Vec::new();
        for part in parts {
            let mut entry = (0, part);
            while let Some(top) = stack.pop_if(|top| top.0 == entry.0) {
                entry = (entry.0 + 1, &top.1 + &entry.1);
            }
            stack.push(entry);
        }
        stack.into_iter().rev().map(|entry| entry.1).reduce(|a, b| &a + &b).unwrap_or_default()
    }

    /// The product with an integer.
    pub fn scaled(&self, factor: &BigInt) -> Self {
        self.scaled_by(&Integer::from(factor))
    }

    pub(crate) fn scaled_by(&self, factor: &Integer) -> Self {
        if factor.is_zero() {
            return Self::zero();
        }
        if factor.is_one() {
            return self.clone();
        }
        let coefficients = self.coefficients.iter().map(|value| value.times(factor)).collect();
        Self { layout: self.layout.clone(), words: self.words.clone(), coefficients }
    }

    /// The product with a power of a variable.
    pub fn times_power(&self, variable: Var, exponent: u32) -> Self {
        self * &Self::monomial([(variable, exponent)], 1)
    }

    /// The power with a natural exponent, by repeated squaring. `0⁰ = 1`.
    pub fn pow(&self, exponent: u32) -> Self {
        if self.len() == 1 {
            let powers = self.powers(0).map(|(variable, power)| {
                (variable, power.checked_mul(exponent).expect("an exponent exceeds 32 bits"))
            });
            return Self::monomial(powers, self.leading_coefficient().pow(exponent));
        }
        let mut result = Self::one();
        for bit in (0..32 - exponent.leading_zeros()).rev() {
            result = result.squared();
            if exponent >> bit & 1 == 1 {
                result = &result * self;
            }
        }
        result
    }

    /// The square.
    pub fn squared(&self) -> Self {
        self * self
    }

    /// The same up to sign, with a leading coefficient that is not negative.
    pub fn abs(self) -> Self {
        if self.is_negative() { -self } else { self }
    }
}

impl Add for &Polynomial {
    type Output = Polynomial;
    fn add(self, other: Self) -> Polynomial {
        self.combined(other, false)
    }
}

impl Sub for &Polynomial {
    type Output = Polynomial;
    fn sub(self, other: Self) -> Polynomial {
        self.combined(other, true)
    }
}

impl Mul for &Polynomial {
    type Output = Polynomial;
    fn mul(self, other: Self) -> Polynomial {
        super::multiplication::product(self, other)
    }
}

impl Neg for &Polynomial {
    type Output = Polynomial;
    fn neg(self) -> Polynomial {
        -self.clone()
    }
}

impl Neg for Polynomial {
    type Output = Self;
    fn neg(mut self) -> Self {
        for coefficient in &mut self.coefficients {
            *coefficient = coefficient.negated();
        }
        self
    }
}

macro_rules! operators_by_value {
    ($($operator:ident $method:ident $assign:ident $assign_method:ident;)*) => {$(
        impl $operator for Polynomial {
            type Output = Self;
            fn $method(self, other: Self) -> Self {
                (&self).$method(&other)
            }
        }
        impl $operator<&Self> for Polynomial {
            type Output = Self;
            fn $method(self, other: &Self) -> Self {
                (&self).$method(other)
            }
        }
        impl $assign<&Self> for Polynomial {
            fn $assign_method(&mut self, other: &Self) {
                *self = (&*self).$method(other);
            }
        }
    )*};
}

operators_by_value! {
    Add add AddAssign add_assign;
    Sub sub SubAssign sub_assign;
    Mul mul MulAssign mul_assign;
}
