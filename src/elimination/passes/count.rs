//! Counting terms without making them.

use num_bigint::BigUint;

use super::Ring;
use crate::algebra::{Polynomial, Var};

/// Numbers of terms by powers of `s`. Signs do not count, nor do coefficients: where terms can meet
/// this is how many there are before they do.
pub(crate) struct Counts;

/// Large integers of one width in one piece of memory, one for each power of `s`: a long ladder has
/// millions of them, and each by itself would cost an allocation.
#[derive(Clone, Debug)]
pub(crate) struct Tally {
    /// 64-bit digits of each number, at least one.
    width: usize,
    /// The numbers, each with its lowest digit first.
    digits: Vec<u64>,
}

impl Tally {
    fn len(&self) -> usize {
        self.digits.len() / self.width
    }

    /// Makes room for at least this many powers and digits.
    fn grow(&mut self, powers: usize, width: usize) {
        if self.width < width {
            let mut wide = Vec::with_capacity(powers.max(self.len()) * width);
            for number in self.digits.chunks(self.width) {
                wide.extend_from_slice(number);
                wide.resize(wide.len() + width - self.width, 0);
            }
            (self.width, self.digits) = (width, wide);
        }
        if self.len() < powers {
            self.digits.resize(powers * self.width, 0);
        }
    }

    /// Whether no number uses the two highest bits of its width: then two of one width add without
    /// leaving it.
    fn has_headroom(&self) -> bool {
        self.digits.chunks(self.width).all(|number| number[self.width - 1] >> 62 == 0)
    }

    /// Adds numbers of the same width from a power on; both have headroom, so that all of them are
    /// one long addition whose carries end at the borders.
    fn add_all(&mut self, power: usize, other: &Self) {
        let sum = &mut self.digits[power * self.width..][..other.digits.len()];
        let mut carry = false;
        for (digit, more) in sum.iter_mut().zip(&other.digits) {
            let (part, first) = digit.overflowing_add(*more);
            let (whole, second) = part.overflowing_add(u64::from(carry));
            (*digit, carry) = (whole, first || second);
        }
    }

    /// Adds factor × digits to the number at a power.
    fn add(&mut self, power: usize, factor: u64, digits: &[u64]) {
        let number = &mut self.digits[power * self.width..][..self.width];
        let mut carry = 0_u128;
        for (index, digit) in number.iter_mut().enumerate() {
            let more = digits.get(index).copied().unwrap_or(0);
            carry += u128::from(*digit) + u128::from(more) * u128::from(factor);
            *digit = carry as u64;
            carry >>= 64;
        }
        if carry > 0 {
            let width = self.width;
            self.grow(self.len(), width + 1);
            self.digits[power * self.width + width] = carry as u64;
        }
    }

    /// The numbers, lowest power first.
    pub(crate) fn numbers(&self) -> Vec<BigUint> {
        let number = |digits: &[u64]| {
            BigUint::new(digits.iter().flat_map(|&d| [d as u32, (d >> 32) as u32]).collect())
        };
        self.digits.chunks(self.width).map(number).collect()
    }
}

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
    type Value = Tally;

    fn zero(&self) -> Tally {
        Tally { width: 1, digits: Vec::new() }
    }

    fn one(&self) -> Tally {
        Tally { width: 1, digits: vec![1] }
    }

    fn add(&self, sum: &mut Tally, weight: &Self::Weight, value: &Tally, _: bool) {
        for &(power, count) in weight {
            sum.grow(value.len() + power, value.width);
            if count == 1 && sum.width == value.width && sum.has_headroom() && value.has_headroom()
            {
                sum.add_all(power, value);
                continue;
            }
            for (at, digits) in value.digits.chunks(value.width).enumerate() {
                sum.add(at + power, count, digits);
            }
        }
    }

    fn negate(&self, value: &Tally) -> Tally {
        value.clone()
    }
}

/// Numbers of terms altogether.
pub(crate) struct Totals;

impl Ring for Totals {
    type Weight = u64;
    type Value = BigUint;

    fn zero(&self) -> BigUint {
        BigUint::ZERO
    }

    fn one(&self) -> BigUint {
        BigUint::from(1_u32)
    }

    fn add(&self, sum: &mut BigUint, weight: &u64, value: &BigUint, _: bool) {
        match weight {
            1 => *sum += value,
            count => *sum += value * *count,
        }
    }

    fn negate(&self, value: &BigUint) -> BigUint {
        value.clone()
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn numbers_grow_beyond_a_digit() {
        // Doubling a hundred times, and shifting by a power of s each time.
        let ring = Counts;
        let mut value = ring.one();
        for _ in 0..100 {
            let mut sum = ring.zero();
            ring.add(&mut sum, &vec![(0, 1), (1, 2)], &value, false);
            value = sum;
        }
        let numbers = value.numbers();
        assert_eq!(numbers.len(), 101);
        assert_eq!(numbers[0], BigUint::from(1_u32));
        assert_eq!(numbers[1], BigUint::from(200_u32));
        assert_eq!(numbers[100], BigUint::from(1_u32) << 100);
        let total = numbers.iter().fold(BigUint::default(), |sum, number| sum + number);
        assert_eq!(total, BigUint::from(3_u32).pow(100));
    }
}
