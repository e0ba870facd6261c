//! Fixed-point numbers of a fixed count of 64-bit words, for the root finder.
//!
//! A number of `L` words is a two's complement integer over 2^(64·(L − 1)): one word before the
//! point, the rest behind it. The finder scales everything to a size near 1, so the range is never
//! left, and an error is a number of units in the last place. No allocation: a product of three
//! words takes some ten nanoseconds.

use num_bigint::{BigInt, Sign};

/// A number below 2^63 in size with 64·(`L` − 1) bits behind the point.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) struct Fixed<const L: usize>(
    /// Least significant word first.
    [u64; L],
);

impl<const L: usize> Fixed<L> {
    pub(super) const ZERO: Self = Self([0; L]);

    /// Bits behind the point.
    pub(super) const FRACTION: i64 = 64 * (L as i64 - 1);

    /// The integer over 2^[`Self::FRACTION`], cut to the words there are.
    pub(super) fn from_scaled(integer: &BigInt) -> Self {
        let mut words = [0; L];
        for (word, digit) in words.iter_mut().zip(integer.magnitude().iter_u64_digits()) {
            *word = digit;
        }
        Self(words).negated_if(integer.sign() == Sign::Minus)
    }

    /// The number times 2^[`Self::FRACTION`].
    pub(super) fn to_scaled(self) -> BigInt {
        let (words, negative) = self.magnitude();
        let digits = words.iter().flat_map(|&word| [word as u32, (word >> 32) as u32]).collect();
        BigInt::new(if negative { Sign::Minus } else { Sign::Plus }, digits)
    }

    pub(super) fn is_negative(&self) -> bool {
        (self.0[L - 1] >> 63) == 1
    }

    pub(super) fn plus(&self, other: &Self) -> Self {
        let mut carry = false;
        let mut sum = [0; L];
        for ((out, &a), &b) in sum.iter_mut().zip(&self.0).zip(&other.0) {
            let (partial, first) = a.overflowing_add(b);
            let (total, second) = partial.overflowing_add(u64::from(carry));
            *out = total;
            carry = first | second;
        }
        Self(sum)
    }

    pub(super) fn minus(&self, other: &Self) -> Self {
        let mut borrow = false;
        let mut difference = [0; L];
        for ((out, &a), &b) in difference.iter_mut().zip(&self.0).zip(&other.0) {
            let (partial, first) = a.overflowing_sub(b);
            let (total, second) = partial.overflowing_sub(u64::from(borrow));
            *out = total;
            borrow = first | second;
        }
        Self(difference)
    }

    pub(super) fn negated(&self) -> Self {
        self.negated_if(true)
    }

    /// Without branches: signs are as good as random.
    fn negated_if(&self, negative: bool) -> Self {
        let mask = u64::from(negative).wrapping_neg();
        let mut carry = negative;
        let mut out = [0; L];
        for (out, &word) in out.iter_mut().zip(&self.0) {
            (*out, carry) = (word ^ mask).overflowing_add(u64::from(carry));
        }
        Self(out)
    }

    fn magnitude(&self) -> ([u64; L], bool) {
        let negative = self.is_negative();
        (self.negated_if(negative).0, negative)
    }

    /// The product, wrong by less than 2 units in the last place.
    ///
    /// Columns that together stay below 2^-60 units are left out.
    pub(super) fn times(&self, other: &Self) -> Self {
        let (a, negative_a) = self.magnitude();
        let (b, negative_b) = other.magnitude();
        let mut out = [0; L];
        let mut low = 0_u128;
        for column in L.saturating_sub(3)..2 * L - 1 {
            let mut high = 0_u64;
            for place in column.saturating_sub(L - 1)..=column.min(L - 1) {
                let product = u128::from(a[place]) * u128::from(b[column - place]);
                let (sum, carry) = low.overflowing_add(product);
                low = sum;
                high += u64::from(carry);
            }
            if column + 1 >= L {
                out[column + 1 - L] = low as u64;
            }
            low = (low >> 64) | (u128::from(high) << 64);
        }
        Self(out).negated_if(negative_a != negative_b)
    }

    /// Divided by 2^`shift` (multiplied for a negative one), cut towards minus infinity.
    pub(super) fn shifted(&self, shift: i64) -> Self {
        match shift {
            0 => *self,
            1..64 => {
                let mut out = [0; L];
                let fill = if self.is_negative() { u64::MAX } else { 0 };
                for (place, word) in out.iter_mut().enumerate() {
                    let above = self.0.get(place + 1).copied().unwrap_or(fill);
                    *word = (self.0[place] >> shift) | (above << (64 - shift));
                }
                Self(out)
            }
            -63..0 => {
                let mut out = [0; L];
                for (place, word) in out.iter_mut().enumerate() {
                    let below = if place == 0 { 0 } else { self.0[place - 1] >> (64 + shift) };
                    *word = (self.0[place] << -shift) | below;
                }
                Self(out)
            }
            _ if shift >= 64 * L as i64 && self.is_negative() => Self([u64::MAX; L]),
            _ if shift >= 64 * L as i64 => Self::ZERO,
            _ if shift > 0 => self.shifted(63).shifted(shift - 63),
            _ => self.shifted(-63).shifted(shift + 63),
        }
    }

    /// The nearest double.
    pub(super) fn to_f64(self) -> f64 {
        let (words, negative) = self.magnitude();
        let Some(top) = words.iter().rposition(|&word| word != 0) else { return 0.0 };
        let below = if top == 0 { 0 } else { words[top - 1] };
        let value = ((u128::from(words[top]) << 64) | u128::from(below)) as f64;
        let value = scale(value, 64 * (top as i64 - 1) - Self::FRACTION);
        if negative { -value } else { value }
    }

    /// The number nearest to a double times 2^`exponent`; what lies below the last place is cut off.
    pub(super) fn from_f64(value: f64, exponent: i64) -> Self {
        let bits = value.abs().to_bits();
        let (power, mantissa) = match bits >> 52 {
            0 => (-1074, bits),
            field => (field as i64 - 1075, (bits & ((1 << 52) - 1)) | (1 << 52)),
        };
        let shift = power + exponent + Self::FRACTION;
        let mut words = [0; L];
        if shift <= 0 {
            words[0] = if shift > -64 { mantissa >> -shift } else { 0 };
        } else {
            let (place, bit) = ((shift / 64) as usize, shift % 64);
            if let Some(word) = words.get_mut(place) {
                *word = mantissa << bit;
            }
            if let Some(word) = words.get_mut(place + 1).filter(|_| bit > 0) {
                *word = mantissa >> (64 - bit);
            }
        }
        Self(words).negated_if(value < 0.0)
    }
}

/// `value`·2^`exponent`, where that is in the range of a double.
pub(super) fn scale(value: f64, exponent: i64) -> f64 {
    libm::ldexp(value, exponent.clamp(-5000, 5000) as i32)
}

#[cfg(test)]
mod tests {
    use num_traits::ToPrimitive;
    use proptest::prelude::*;

    use super::*;

    fn exact<const L: usize>(value: Fixed<L>) -> BigInt {
        value.to_scaled()
    }

    fn number<const L: usize>(words: Vec<u64>, negative: bool) -> Fixed<L> {
        let mut out = [0; L];
        for (out, word) in out.iter_mut().zip(words) {
            *out = word;
        }
        // Below 2^20, so that sums and products stay in range.
        out[L - 1] >>= 44;
        Fixed(out).negated_if(negative)
    }

    fn check<const L: usize>(a: Fixed<L>, b: Fixed<L>, shift: i64) {
        let one = BigInt::from(1) << Fixed::<L>::FRACTION as usize;
        assert_eq!(exact(a.plus(&b)), exact(a) + exact(b));
        assert_eq!(exact(a.minus(&b)), exact(a) - exact(b));
        assert_eq!(exact(a.negated()), -exact(a));
        let off = exact(a.times(&b)) - exact(a) * exact(b) / one;
        assert!(off.magnitude() <= BigInt::from(1).magnitude(), "{off}");
        assert_eq!(exact(a.shifted(shift)), exact(a) >> shift as usize);
        assert_eq!(exact(a.shifted(20).shifted(-20)), (exact(a) >> 20_usize) << 20_usize);
        assert_eq!(Fixed::<L>::from_scaled(&exact(a)), a);
        let double = a.to_f64();
        let expected = exact(a).to_f64().unwrap_or(f64::NAN);
        let expected = scale(expected, -Fixed::<L>::FRACTION);
        assert!((double - expected).abs() <= 2e-16 * expected.abs(), "{double} {expected}");
        let again = Fixed::<L>::from_f64(double, 0).to_f64();
        assert!((again - double).abs() <= scale(1.0, 1 - Fixed::<L>::FRACTION), "{again} {double}");
    }

    proptest! {
        #[test]
        fn as_big_integers(
            a in prop::collection::vec(any::<u64>(), 5), b in prop::collection::vec(any::<u64>(), 5),
            sa in any::<bool>(), sb in any::<bool>(), shift in 0_i64..150,
        ) {
            check::<2>(number(a.clone(), sa), number(b.clone(), sb), shift);
            check::<3>(number(a.clone(), sa), number(b.clone(), sb), shift);
            check::<5>(number(a, sa), number(b, sb), shift);
        }
    }

    #[test]
    fn doubles_far_below_the_last_place_are_zero() {
        assert_eq!(Fixed::<2>::from_f64(1e-300, 0), Fixed::ZERO);
        assert_eq!(Fixed::<2>::from_f64(-1.5, 0).to_f64(), -1.5);
        assert_eq!(Fixed::<17>::from_f64(3.0, -1000).to_f64(), scale(3.0, -1000));
    }
}
