//! Factorisation of square-free polynomials in one variable modulo a prime.
//!
//! Distinct degrees first, then random splitting of each part (Cantor & Zassenhaus 1981). Powers by
//! the prime are linear maps: the matrix of Frobenius is formed once (Berlekamp 1967), after which
//! each application is quadratic. Cost: cubic in the degree, plus 61 products for `x^p` and for each
//! splitting.

use super::{Dense, Field, Random};

/// The map `h ↦ h^p` modulo a polynomial.
struct Frobenius<'a> {
    modulus: &'a Dense,
    field: &'a Field,
    /// `x^(k·p)` for all k below the degree.
    powers: Vec<Dense>,
}

impl<'a> Frobenius<'a> {
    fn new(modulus: &'a Dense, field: &'a Field) -> Self {
        let step = Dense::new(vec![0, 1]).pow_modulo(field.modulus(), modulus, field);
        let mut powers = vec![Dense::new(vec![1])];
        for place in 1..modulus.degree() {
            powers.push(powers[place - 1].mul(&step, field).div_rem(modulus, field).1);
        }
        Self { modulus, field, powers }
    }

    fn apply(&self, value: &Dense) -> Dense {
        let mut sums = vec![0; self.modulus.degree()];
        for (&factor, power) in value.coefficients().iter().zip(&self.powers) {
            for (sum, &coefficient) in sums.iter_mut().zip(power.coefficients()) {
                *sum = self.field.add(*sum, self.field.mul(factor, coefficient));
            }
        }
        Dense::new(sums)
    }
}

impl Dense {
    /// The power with a natural exponent, modulo a polynomial.
    pub fn pow_modulo(&self, mut exponent: u64, modulus: &Self, field: &Field) -> Self {
        let mut square = self.div_rem(modulus, field).1;
        let mut result = Self::new(vec![1]).div_rem(modulus, field).1;
        while exponent > 0 {
            if exponent & 1 == 1 {
                result = result.mul(&square, field).div_rem(modulus, field).1;
            }
            square = square.mul(&square, field).div_rem(modulus, field).1;
            exponent >>= 1;
        }
        result
    }

    /// The inverse modulo a polynomial, by Euclid's algorithm; `None` if they are not coprime.
    pub fn inverse_modulo(&self, modulus: &Self, field: &Field) -> Option<Self> {
        let (mut r0, mut r1) = (modulus.clone(), self.div_rem(modulus, field).1);
        let (mut t0, mut t1) = (Self::default(), Self::new(vec![1]));
        while !r1.is_empty() {
            let (quotient, rest) = r0.div_rem(&r1, field);
            (r0, r1) = (r1, rest);
            let next = t0.sub(&quotient.mul(&t1, field), field);
            (t0, t1) = (t1, next);
        }
        (r0.len() == 1).then(|| t0.scaled(field.inverse(r0.leading()), field))
    }

    /// Whether no square of positive degree divides.
    pub fn is_square_free(&self, field: &Field) -> bool {
        self.gcd(&self.derivative(field), field).len() == 1
    }

    /// The monic irreducible factors of a square-free polynomial.
    pub fn irreducible_factors(&self, field: &Field, random: &mut Random) -> Vec<Self> {
        let mut factors = Vec::new();
        if self.degree() == 0 {
            return factors;
        }
        let whole = self.monic(field);
        let frobenius = Frobenius::new(&whole, field);
        let x = Self::new(vec![0, 1]);
        let (mut rest, mut power) = (whole.clone(), x.div_rem(&whole, field).1);
        let mut degree = 0;
        while rest.degree() > 2 * degree {
            degree += 1;
            if rest.degree() < 2 * degree {
                break;
            }
            power = frobenius.apply(&power);
            let part = rest.gcd(&power.sub(&x, field), field);
            if part.degree() > 0 {
                rest = rest.div_rem(&part, field).0;
                split(part, degree, &frobenius, random, &mut factors);
            }
        }
        if rest.degree() > 0 {
            factors.push(rest);
        }
        factors
    }
}

/// Splits a product of irreducible factors of one degree.
fn split(
    product: Dense,
    degree: usize,
    frobenius: &Frobenius<'_>,
    random: &mut Random,
    factors: &mut Vec<Dense>,
) {
    let field = frobenius.field;
    let mut pending = vec![product];
    while let Some(part) = pending.pop() {
        if part.degree() == degree {
            factors.push(part);
            continue;
        }
        let sample = (0..frobenius.modulus.degree()).map(|_| random.unit(field)).collect();
        let sample = Dense::new(sample);
        // The norm down to the prime field, then its quadratic character.
        let (mut norm, mut conjugate) = (sample.clone(), sample);
        for _ in 1..degree {
            conjugate = frobenius.apply(&conjugate);
            norm = norm.mul(&conjugate, field).div_rem(frobenius.modulus, field).1;
        }
        let character = norm.pow_modulo((field.modulus() - 1) / 2, &part, field);
        let common = part.gcd(&character.sub(&Dense::new(vec![1]), field), field);
        if common.degree() > 0 && common.degree() < part.degree() {
            pending.push(part.div_rem(&common, field).0);
            pending.push(common);
        } else {
            pending.push(part);
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::algebra::modular::primes;

    #[test]
    fn factors_multiply_to_the_whole() {
        let field = primes().next().expect("there is a first prime");
        let mut random = Random::new(7);
        for degree in 1..24 {
            let mut terms: Vec<u64> = (0..degree).map(|_| random.word() % 9).collect();
            terms.push(1);
            let whole = Dense::new(terms);
            if !whole.is_square_free(&field) {
                continue;
            }
            let factors = whole.irreducible_factors(&field, &mut random);
            let one = Dense::new(vec![1]);
            let product = factors.iter().fold(one, |product, factor| product.mul(factor, &field));
            assert_eq!(product, whole);
            for factor in &factors {
                assert_eq!(factor.irreducible_factors(&field, &mut random).len(), 1);
                if let Some(other) = factors.iter().find(|other| *other != factor) {
                    let inverse = other.inverse_modulo(factor, &field).expect("they are coprime");
                    let unit = inverse.mul(other, &field).div_rem(factor, &field).1;
                    assert_eq!(unit, Dense::new(vec![1]));
                }
            }
        }
    }
}
