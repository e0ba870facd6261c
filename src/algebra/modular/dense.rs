//! Dense polynomials in one variable modulo a prime.
//!
//! Schoolbook arithmetic: degrees here stay below a few hundred. The gcd avoids inversions by
//! cross-multiplying leading coefficients (Euclid's algorithm, quadratic in the degree).

use super::Field;

/// Coefficients, lowest first; the last one is not 0.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Dense(Vec<u64>);

impl Dense {
    /// From residues, lowest power first; leading zeros are dropped.
    pub fn new(mut coefficients: Vec<u64>) -> Self {
        while coefficients.last() == Some(&0) {
            coefficients.pop();
        }
        Self(coefficients)
    }

    /// The coefficients, lowest power first.
    pub fn coefficients(&self) -> &[u64] {
        &self.0
    }

    /// The number of coefficients: the degree plus one, 0 for the polynomial 0.
    pub fn len(&self) -> usize {
        self.0.len()
    }

    /// Whether this is the polynomial 0.
    pub fn is_empty(&self) -> bool {
        self.0.is_empty()
    }

    /// The degree; 0 for the polynomial 0.
    pub fn degree(&self) -> usize {
        self.0.len().saturating_sub(1)
    }

    /// The coefficient of the highest power; 0 for the polynomial 0.
    pub fn leading(&self) -> u64 {
        self.0.last().copied().unwrap_or(0)
    }

    /// The sum.
    pub fn add(&self, other: &Self, field: &Field) -> Self {
        let (long, short) = if self.len() >= other.len() { (self, other) } else { (other, self) };
        let mut sum = long.0.clone();
        for (a, &b) in sum.iter_mut().zip(&short.0) {
            *a = field.add(*a, b);
        }
        Self::new(sum)
    }

    /// The difference.
    pub fn sub(&self, other: &Self, field: &Field) -> Self {
        self.add(&other.scaled(field.neg(1), field), field)
    }

    /// The product with a number.
    pub fn scaled(&self, factor: u64, field: &Field) -> Self {
        Self::new(self.0.iter().map(|&value| field.mul(value, factor)).collect())
    }

    /// The product.
    pub fn mul(&self, other: &Self, field: &Field) -> Self {
        if self.is_empty() || other.is_empty() {
            return Self::default();
        }
        let mut product = vec![0; self.len() + other.len() - 1];
        for (place, &a) in self.0.iter().enumerate() {
            for (sum, &b) in product[place..].iter_mut().zip(&other.0) {
                *sum = field.add(*sum, field.mul(a, b));
            }
        }
        Self::new(product)
    }

    /// Quotient and remainder; dividing by 0 gives the quotient 0.
    pub fn div_rem(&self, divisor: &Self, field: &Field) -> (Self, Self) {
        if divisor.is_empty() || self.len() < divisor.len() {
            return (Self::default(), self.clone());
        }
        let inverse = field.inverse(divisor.leading());
        let mut rest = self.0.clone();
        let mut quotient = vec![0; self.len() - divisor.len() + 1];
        for place in (0..quotient.len()).rev() {
            let factor = field.mul(rest[place + divisor.len() - 1], inverse);
            quotient[place] = factor;
            if factor != 0 {
                for (value, &b) in rest[place..].iter_mut().zip(&divisor.0) {
                    *value = field.sub(*value, field.mul(factor, b));
                }
            }
        }
        rest.truncate(divisor.len() - 1);
        (Self::new(quotient), Self::new(rest))
    }

    /// With leading coefficient 1.
    pub fn monic(&self, field: &Field) -> Self {
        self.scaled(field.inverse(self.leading()), field)
    }

    /// The monic greatest common divisor; `gcd(0, 0) = 0`.
    pub fn gcd(&self, other: &Self, field: &Field) -> Self {
        let (mut a, mut b) = (self.0.clone(), other.0.clone());
        if a.len() < b.len() {
            std::mem::swap(&mut a, &mut b);
        }
        while let Some(&lead) = b.last() {
            while a.len() >= b.len() {
                let shift = a.len() - b.len();
                let Some(top) = a.pop() else { break };
                for value in &mut a[..shift] {
                    *value = field.mul(*value, lead);
                }
                for (value, &other) in a[shift..].iter_mut().zip(&b) {
                    // lead·value − top·other in one reduction, kept positive and below 2^122.
                    let keep = u128::from(lead) * u128::from(*value);
                    let take = u128::from(field.neg(top)) * u128::from(other);
                    *value = field.add(field.reduce(keep), field.reduce(take));
                }
                while a.last() == Some(&0) {
                    a.pop();
                }
            }
            std::mem::swap(&mut a, &mut b);
        }
        Self(a).monic(field)
    }

    /// The derivative.
    pub fn derivative(&self, field: &Field) -> Self {
        let terms = self.0.iter().zip(0_u64..).skip(1);
        Self::new(terms.map(|(&value, power)| field.mul(value, power)).collect())
    }

    /// The value at a point, by Horner's rule.
    pub fn evaluate(&self, point: u64, field: &Field) -> u64 {
        self.0.iter().rev().fold(0, |sum, &value| field.add(field.mul(sum, point), value))
    }

    /// The polynomial of least degree through points with distinct abscissae (Newton's divided
    /// differences). Quadratic, one batch inversion a column.
    pub fn interpolate(points: &[u64], values: &[u64], field: &Field) -> Self {
        let mut differences = values.to_vec();
        let count = points.len().min(values.len());
        for step in 1..count {
            let mut spans: Vec<u64> =
                (step..count).map(|place| field.sub(points[place], points[place - step])).collect();
            field.invert_all(&mut spans);
            for place in (step..count).rev() {
                let rise = field.sub(differences[place], differences[place - 1]);
                differences[place] = field.mul(rise, spans[place - step]);
            }
        }
        let mut result: Vec<u64> = Vec::with_capacity(count);
        for place in (0..count).rev() {
            // result ← result·(x − points[place]) + differences[place]
            result.insert(0, differences[place]);
            for power in 0..result.len() - 1 {
                let product = field.mul(result[power + 1], points[place]);
                result[power] = field.sub(result[power], product);
            }
        }
        Self::new(result)
    }
}

#[cfg(test)]
mod tests {
    use proptest::prelude::*;

    use super::*;
    use crate::algebra::modular::primes;

    fn dense(length: usize) -> impl Strategy<Value = Dense> {
        prop::collection::vec(prop_oneof![0..5_u64, (1_u64 << 60) - 9..1 << 60], 0..length)
            .prop_map(Dense::new)
    }

    proptest! {
        #![proptest_config(ProptestConfig::with_cases(64))]

        #[test]
        fn division_and_gcd(a in dense(9), b in dense(9), c in dense(5)) {
            let field = primes().next().expect("there is a first prime");
            let (quotient, rest) = a.div_rem(&b, &field);
            prop_assert_eq!(quotient.mul(&b, &field).add(&rest, &field), a.clone());
            prop_assert!(b.is_empty() || rest.len() < b.len());
            let common = a.mul(&c, &field).gcd(&b.mul(&c, &field), &field);
            prop_assert_eq!(common, a.gcd(&b, &field).mul(&c.monic(&field), &field));
        }

        #[test]
        fn interpolation_inverts_evaluation(a in dense(9)) {
            let field = primes().nth(1).expect("there is a second prime");
            let points: Vec<u64> = (0..a.len() as u64 + 1).map(|k| k * k + 3).collect();
            let values: Vec<u64> = points.iter().map(|&x| a.evaluate(x, &field)).collect();
            prop_assert_eq!(Dense::interpolate(&points, &values, &field), a);
        }
    }
}
