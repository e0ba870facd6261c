//! Sums of power products with exponents of either sign: what a designer writes over a common line.
//!
//! Dividing a polynomial by a monomial gives such a sum, `1 + R2/R1` for `(R1 + R2)/R1`. Exponents
//! sit in a dense vector over the variables of one [`Ring`]. A literal is a variable or its
//! reciprocal; `x` and `1/x` are different literals, and `1/x` does not divide `x`: so taking
//! something out of a sum never makes a bar that was not there.
//!
//! What must hold: terms in descending order of their exponents, no coefficient 0.

use num_bigint::BigInt;
use num_traits::ToPrimitive;
use smallvec::SmallVec;

use crate::algebra::{Polynomial, Var};

/// Exponents, one for each variable of the ring; the first one is that of `s`.
pub(super) type Exponents = SmallVec<[i8; 24]>;

/// The variables of a problem; place 0 is always `s`.
#[derive(Clone, Debug)]
pub(super) struct Ring {
    pub(super) variables: Vec<Var>,
}

impl Ring {
    pub(super) fn new(polynomials: &[&Polynomial]) -> Self {
        let mut variables = vec![Var::S];
        variables.extend(polynomials.iter().flat_map(|polynomial| polynomial.variables()));
        variables.sort_unstable();
        variables.dedup();
        Self { variables }
    }

    pub(super) fn place(&self, variable: Var) -> Option<usize> {
        self.variables.binary_search(&variable).ok()
    }

    pub(super) fn one(&self) -> Exponents {
        SmallVec::from_elem(0, self.variables.len())
    }
}

/// A sum of terms.
#[derive(Clone, Debug, Default, PartialEq, Eq, Hash)]
pub(super) struct Laurent {
    pub(super) terms: Vec<(Exponents, i128)>,
}

impl Laurent {
    /// `None` where an exponent or a coefficient is too large to be dealt with here.
    pub(super) fn new(polynomial: &Polynomial, ring: &Ring) -> Option<Self> {
        let mut terms = Vec::with_capacity(polynomial.len());
        for (powers, coefficient) in polynomial.terms() {
            let mut exponents = ring.one();
            for (variable, power) in powers {
                let power = i8::try_from(power).ok().filter(|power| *power <= MAX_EXPONENT)?;
                exponents[ring.place(variable)?] = power;
            }
            terms.push((exponents, coefficient.to_i128().filter(|c| c.abs() <= MAX_COEFFICIENT)?));
        }
        Some(Self::sorted(terms))
    }

    /// From different monomials in any order.
    pub(super) fn sorted(mut terms: Vec<(Exponents, i128)>) -> Self {
        terms.sort_unstable_by(|a, b| b.0.cmp(&a.0));
        Self { terms }
    }

    pub(super) fn len(&self) -> usize {
        self.terms.len()
    }

    /// Divided by a monomial.
    pub(super) fn over(&self, divisor: &[i8]) -> Self {
        if divisor.iter().all(|power| *power == 0) {
            return self.clone();
        }
        let quotient = |exponents: &Exponents| {
            exponents.iter().zip(divisor).map(|(a, b)| a.saturating_sub(*b)).collect()
        };
        let terms = self.terms.iter().map(|(exponents, c)| (quotient(exponents), *c)).collect();
        // Subtracting the same from all keeps the order.
        Self { terms }
    }

    /// What all terms share: the literals, and the number, negative where all terms are.
    pub(super) fn content(&self) -> (Exponents, i128) {
        let Some((first, _)) = self.terms.first() else { return (Exponents::new(), 1) };
        let mut shared = first.clone();
        let mut number = 0_i128;
        for (exponents, coefficient) in &self.terms {
            for (shared, power) in shared.iter_mut().zip(exponents) {
                *shared = nearer(*shared, *power);
            }
            number = num_integer::gcd(number, *coefficient);
        }
        if self.terms.iter().all(|term| term.1 < 0) {
            number = -number;
        }
        (shared, number)
    }

    /// Without what all terms share, and that.
    pub(super) fn primitive(&self) -> (Exponents, i128, Self) {
        let (shared, number) = self.content();
        let mut rest = self.over(&shared);
        for term in &mut rest.terms {
            term.1 /= number;
        }
        (shared, number, rest)
    }

    /// The terms that a literal divides, divided by it.
    pub(super) fn cofactor(&self, place: usize, sign: i8) -> Self {
        let terms = self.terms.iter().filter(|term| term.0[place].signum() == sign);
        let terms = terms.map(|(exponents, coefficient)| {
            let mut exponents = exponents.clone();
            exponents[place] -= sign;
            (exponents, *coefficient)
        });
        Self::sorted(terms.collect())
    }

    /// How often literals stand in the sum when it is written out; `s` does not count.
    pub(super) fn literals(&self) -> usize {
        self.terms.iter().map(|term| term.0.iter().skip(1).filter(|p| **p != 0).count()).sum()
    }

    /// How many different literals there are, without `s`: no form can have fewer symbols.
    pub(super) fn distinct(&self) -> usize {
        let Some((first, _)) = self.terms.first() else { return 0 };
        let occurs =
            |place: usize, sign: i8| self.terms.iter().any(|t| t.0[place].signum() == sign);
        (1..first.len())
            .map(|place| usize::from(occurs(place, 1)) + usize::from(occurs(place, -1)))
            .sum()
    }

    /// The parts by power of `s`, lowest first, without the power.
    pub(super) fn by_power(&self) -> Vec<(i8, Self)> {
        let mut parts: Vec<(i8, Self)> = Vec::new();
        for (exponents, coefficient) in self.terms.iter().rev() {
            let power = exponents[0];
            let mut exponents = exponents.clone();
            exponents[0] = 0;
            match parts.last_mut() {
                Some((last, part)) if *last == power => part.terms.push((exponents, *coefficient)),
                _ => parts.push((power, Self { terms: vec![(exponents, *coefficient)] })),
            }
        }
        for (_, part) in &mut parts {
            part.terms.reverse();
        }
        parts
    }

    /// The degree in each variable.
    pub(super) fn degrees(&self) -> Exponents {
        let mut degrees = self.terms.first().map(|term| term.0.clone()).unwrap_or_default();
        for (exponents, _) in &self.terms {
            for (degree, power) in degrees.iter_mut().zip(exponents) {
                *degree = (*degree).max(*power);
            }
        }
        degrees
    }
}

/// The one of two powers that is nearer to 0 when both have the same sign, else 0.
pub(super) fn nearer(a: i8, b: i8) -> i8 {
    if a.signum() != b.signum() {
        0
    } else if a.abs() < b.abs() {
        a
    } else {
        b
    }
}

/// A coefficient as a number of any size.
pub(super) fn integer(value: i128) -> BigInt {
    BigInt::from(value)
}

/// Exponents stay small enough for sums and differences of two of them.
const MAX_EXPONENT: i8 = 30;

/// Coefficients stay small enough for products of a few of them.
const MAX_COEFFICIENT: i128 = 1 << 100;
