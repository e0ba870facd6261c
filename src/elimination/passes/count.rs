//! Counting terms without making them.

use num_bigint::BigUint;
use num_traits::Zero;

use super::Ring;
use crate::algebra::{Polynomial, Var};

/// Numbers of terms by powers of `s`. Signs do not count, nor do coefficients: where terms can meet
/// this is how many there are before they do.
pub(crate) struct Counts;

/// How many terms a weight has at each power of `s`.
pub(crate) fn weight(polynomial: &Polynomial) -> Vec<(usize, u64)> {
    let mut counts: Vec<(usize, u64)> = Vec::new();
    for (mut powers, _) in polynomial.terms() {
        let power = powers.find(|power| power.0 == Var::S).map_or(0, |power| power.1 as usize);
        match counts.iter_mut().find(|(known, _)| *known == power) {
            Some((_, count)) => *count += 1,
            None => counts.push((power, 1)),
        }
    }
    counts
}

impl Ring for Counts {
    type Weight = Vec<(usize, u64)>;
    type Value = Vec<BigUint>;

    fn zero(&self) -> Self::Value {
        Vec::new()
    }

    fn one(&self) -> Self::Value {
        vec![BigUint::from(1_u32)]
    }

    fn add(&self, sum: &mut Self::Value, weight: &Self::Weight, value: &Self::Value, _: bool) {
        for &(power, count) in weight {
            if sum.len() < value.len() + power {
                sum.resize(value.len() + power, BigUint::zero());
            }
            for (at, terms) in value.iter().enumerate() {
                if count == 1 {
                    sum[at + power] += terms;
                } else {
                    sum[at + power] += terms * count;
                }
            }
        }
    }

    fn negate(&self, value: &Self::Value) -> Self::Value {
        value.clone()
    }
}
