//! Prime fields with moduli between 2⁶⁰ and 2⁶¹.
//!
//! Elements are plain residues in `0..p`. Products are reduced with a precomputed reciprocal
//! (Barrett 1986): three multiplications, no division. The primes are the largest below 2⁶¹, the
//! first one the Mersenne prime 2⁶¹ − 1.

/// Distances of the 32 largest primes below 2⁶¹ from 2⁶¹.
const DISTANCES: [u64; 32] = [
    1, 31, 45, 229, 259, 283, 339, 391, 403, 465, 531, 579, 675, 759, 799, 819, 829, 843, 859, 939,
    985, 1015, 1153, 1195, 1215, 1281, 1299, 1351, 1371, 1425, 1489, 1525,
];

/// The primes below 2⁶¹ in descending order: 32 from a list, the next ones by search.
pub fn primes() -> impl Iterator<Item = Field> {
    let listed = DISTANCES.iter().map(|distance| (1 << 61) - distance);
    let last = (1_u64 << 61) - DISTANCES[DISTANCES.len() - 1];
    let searched = (1_u64 << 60..last).rev().filter(|&candidate| is_prime(candidate));
    listed.chain(searched).map(Field::new)
}

/// Miller's test (Rabin 1980) with the first twelve primes as bases, which is a proof for all
/// numbers below 3·10²³ (Sorenson & Webster 2017).
fn is_prime(candidate: u64) -> bool {
    const BASES: [u64; 12] = [2, 3, 5, 7, 11, 13, 17, 19, 23, 29, 31, 37];
    if BASES.iter().any(|base| candidate.is_multiple_of(*base)) {
        return false;
    }
    let field = Field::new(candidate);
    let twos = (candidate - 1).trailing_zeros();
    BASES.iter().all(|&base| {
        let mut power = field.pow(base, (candidate - 1) >> twos);
        if power == 1 {
            return true;
        }
        for _ in 1..twos {
            if power == candidate - 1 {
                return true;
            }
            power = field.mul(power, power);
        }
        power == candidate - 1
    })
}

/// The integers modulo a prime.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Field {
    modulus: u64,
    /// `⌊2^124 / p⌋`.
    reciprocal: u64,
}

impl Field {
    /// `modulus` is a prime between 2⁶⁰ and 2⁶¹.
    fn new(modulus: u64) -> Self {
        Self { modulus, reciprocal: ((1_u128 << 124) / u128::from(modulus)) as u64 }
    }

    /// The prime.
    pub fn modulus(&self) -> u64 {
        self.modulus
    }

    /// The sum.
    pub fn add(&self, a: u64, b: u64) -> u64 {
        let sum = a + b;
        if sum >= self.modulus { sum - self.modulus } else { sum }
    }

    /// The difference.
    pub fn sub(&self, a: u64, b: u64) -> u64 {
        if a >= b { a - b } else { a + self.modulus - b }
    }

    /// The negative.
    pub fn neg(&self, a: u64) -> u64 {
        if a == 0 { 0 } else { self.modulus - a }
    }

    /// The residue of a number below 2¹²².
    pub fn reduce(&self, value: u128) -> u64 {
        // The quotient estimate is short by less than 3.25: both factors are rounded down.
        let high = (value >> 60) as u64;
        let quotient = ((u128::from(high) * u128::from(self.reciprocal)) >> 64) as u64;
        let mut rest = (value as u64).wrapping_sub(quotient.wrapping_mul(self.modulus));
        if rest >= 2 * self.modulus {
            rest -= 2 * self.modulus;
        }
        if rest >= self.modulus { rest - self.modulus } else { rest }
    }

    /// The product.
    pub fn mul(&self, a: u64, b: u64) -> u64 {
        self.reduce(u128::from(a) * u128::from(b))
    }

    /// The power.
    pub fn pow(&self, base: u64, mut exponent: u64) -> u64 {
        let (mut result, mut square) = (1, base);
        while exponent > 0 {
            if exponent & 1 == 1 {
                result = self.mul(result, square);
            }
            square = self.mul(square, square);
            exponent >>= 1;
        }
        result
    }

    /// The inverse, by Euclid's algorithm; of 0 it is 0.
    pub fn inverse(&self, a: u64) -> u64 {
        let (mut r0, mut r1) = (self.modulus as i64, a as i64);
        let (mut t0, mut t1) = (0_i64, 1_i64);
        while r1 != 0 {
            let quotient = r0 / r1;
            (r0, r1) = (r1, r0 - quotient * r1);
            (t0, t1) = (t1, t0 - quotient * t1);
        }
        if a == 0 {
            0
        } else if t0 < 0 {
            (t0 + self.modulus as i64) as u64
        } else {
            t0 as u64
        }
    }

    /// Inverts all, none of which is 0, with a single inversion (Montgomery 1987).
    pub fn invert_all(&self, values: &mut [u64]) {
        let mut prefix = Vec::with_capacity(values.len());
        let mut product = 1;
        for &value in values.iter() {
            prefix.push(product);
            product = self.mul(product, value);
        }
        let mut inverse = self.inverse(product);
        for (value, before) in values.iter_mut().zip(prefix).rev() {
            let own = self.mul(inverse, before);
            inverse = self.mul(inverse, *value);
            *value = own;
        }
    }

    /// The powers `1, base, …, base^degree`.
    pub fn powers(&self, base: u64, degree: u32) -> Vec<u64> {
        let mut powers = vec![1];
        for place in 0..degree as usize {
            powers.push(self.mul(powers[place], base));
        }
        powers
    }

    /// The integer nearest to 0 with this residue.
    pub fn symmetric(&self, value: u64) -> i64 {
        if value > self.modulus / 2 { value as i64 - self.modulus as i64 } else { value as i64 }
    }

    /// The residue of a machine integer.
    pub fn from_i64(&self, value: i64) -> u64 {
        let rest = value.unsigned_abs() % self.modulus;
        if value < 0 { self.neg(rest) } else { rest }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::algebra::modular::Random;

    #[test]
    fn products_agree_with_division() {
        let mut random = Random::new(1);
        for field in primes().take(33) {
            let p = field.modulus();
            assert!(is_prime(p) && p >> 60 == 1);
            for _ in 0..200 {
                let (a, b) = (random.word() % p, p - 1 - random.word() % 5);
                let product = u128::from(a) * u128::from(b) % u128::from(p);
                assert_eq!(u128::from(field.mul(a, b)), product);
                assert_eq!(field.mul(field.inverse(b), b), 1);
                assert_eq!(field.pow(b, p - 1), 1);
                assert_eq!(field.from_i64(field.symmetric(a)), a);
            }
        }
    }

    #[test]
    fn the_list_is_without_gaps() {
        let listed: Vec<u64> = DISTANCES.iter().map(|distance| (1 << 61) - distance).collect();
        let found = (listed[31]..1 << 61).rev().filter(|&candidate| is_prime(candidate));
        assert_eq!(listed, found.collect::<Vec<_>>());
    }

    #[test]
    fn batch_inversion() {
        let field = primes().next().expect("there is a first prime");
        let mut values = [5, 7, field.modulus() - 1, 1 << 60];
        let inverses = values.map(|value| field.inverse(value));
        field.invert_all(&mut values);
        assert_eq!(values, inverses);
        assert_eq!(field.inverse(0), 0);
    }
}
