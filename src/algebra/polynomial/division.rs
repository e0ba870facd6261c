//! Exact division of sparse polynomials.
//!
//! Quotient terms come out in descending order. The products `qᵢ·bⱼ` still to be subtracted wait
//! in a heap, so that the remainder is never formed (Johnson 1974; Monagan & Pearce 2007,
//! "Polynomial division using dynamic arrays, heaps, and packed exponent vectors"): memory is that
//! of the quotient, work `q·b·log q` comparisons. The first term that the leading term of the
//! divisor does not divide ends the attempt. Degrees and last terms are compared before.

use std::collections::BinaryHeap;

use num_bigint::BigInt;

use super::{Integer, Key, Layout, LongKey, Packing, Polynomial};

/// What a coefficient of the remainder is accumulated in; `None` on overflow.
trait Remainder: Sized {
    fn start(value: Option<&Integer>) -> Self;
    fn minus_product(self, a: &Integer, b: &Integer) -> Option<Self>;
    fn finish(self) -> Integer;
}

impl Remainder for i128 {
    fn start(value: Option<&Integer>) -> Self {
        match value {
            Some(Integer::Small(value)) => Self::from(*value),
            _ => 0,
        }
    }
    fn minus_product(self, a: &Integer, b: &Integer) -> Option<Self> {
        match (a, b) {
            (Integer::Small(a), Integer::Small(b)) => {
                self.checked_sub(Self::from(*a) * Self::from(*b))
            }
            _ => None,
        }
    }
    fn finish(self) -> Integer {
        Integer::from(self)
    }
}

impl Remainder for BigInt {
    fn start(value: Option<&Integer>) -> Self {
        value.map_or_else(Self::default, Integer::to_big)
    }
    fn minus_product(self, a: &Integer, b: &Integer) -> Option<Self> {
        Some(match (a, b) {
            (Integer::Small(a), Integer::Small(b)) => self - i128::from(*a) * i128::from(*b),
            (Integer::Small(a), Integer::Large(b)) | (Integer::Large(b), Integer::Small(a)) => {
                self - &**b * *a
            }
            (Integer::Large(a), Integer::Large(b)) => self - &**a * &**b,
        })
    }
    fn finish(self) -> Integer {
        Integer::from(self)
    }
}

/// Why a division ended without a quotient.
enum Failure {
    /// The divisor does not divide.
    Inexact,
    /// A remainder left 128 bits.
    Overflow,
}

impl Polynomial {
    /// The quotient if the divisor divides; `None` if it does not or is 0. Cost: see the module.
    pub fn divide_exact(&self, divisor: &Self) -> Option<Self> {
        if divisor.is_zero() || self.is_zero() {
            return (!divisor.is_zero()).then(Self::zero);
        }
        if divisor.is_constant() {
            return self.divided_by_integer(&divisor.coefficients[0]);
        }
        if !self.may_be_multiple_of(divisor) {
            return None;
        }
        if self == divisor {
            return Some(Self::one());
        }
        let layout = self.layout.with_guards();
        match layout.words() {
            0 | 1 => self.quotient::<u64>(divisor, layout),
            2 => self.quotient::<u128>(divisor, layout),
            _ => self.quotient::<LongKey>(divisor, layout),
        }
    }

    /// All coefficients divided by an integer, if it divides all.
    pub(crate) fn divided_by_integer(&self, divisor: &Integer) -> Option<Self> {
        if divisor.is_one() {
            return Some(self.clone());
        }
        let quotients = self.coefficients.iter().map(|value| value.divided_exactly(divisor));
        let coefficients = quotients.collect::<Option<_>>()?;
        Some(Self { layout: self.layout.clone(), words: self.words.clone(), coefficients })
    }

    /// Cheap necessary conditions: variables, degrees, and the last terms.
    fn may_be_multiple_of(&self, divisor: &Self) -> bool {
        let degrees = || divisor.variables().all(|var| divisor.degree(var) <= self.degree(var));
        let ends = |place: fn(&Self) -> usize| {
            let (mine, other) = (place(self), place(divisor));
            let words = self.monomial_words(mine);
            let divides = divisor.powers(other).all(|(variable, exponent)| {
                self.layout.field(variable).is_some_and(|field| field.get(words) >= exponent)
            });
            let (value, by) = (&self.coefficients[mine], &divisor.coefficients[other]);
            divides && value.divided_exactly(by).is_some()
        };
        ends(|_| 0) && ends(|polynomial| polynomial.len() - 1) && degrees()
    }

    fn quotient<K: Key>(&self, divisor: &Self, layout: Layout) -> Option<Self> {
        let dividend: Vec<K> = Packing::new(&self.layout, &layout).keys(self.len(), &self.words);
        let keys: Vec<K> =
            Packing::new(&divisor.layout, &layout).keys(divisor.len(), &divisor.words);
        let guards = layout.top_bits();
        let small = |part: &Self| part.coefficient_bits() <= 63;
        let attempt = if small(self) && small(divisor) {
            divided::<K, i128>(self, &dividend, divisor, &keys, &guards)
        } else {
            Err(Failure::Overflow)
        };
        let terms = match attempt {
            Err(Failure::Overflow) => {
                divided::<K, BigInt>(self, &dividend, divisor, &keys, &guards).ok()?
            }
            attempt => attempt.ok()?,
        };
        Some(Self::from_sorted(layout, terms))
    }
}

/// A product of a quotient term and a divisor term that waits to be subtracted.
#[derive(PartialEq, Eq, PartialOrd, Ord)]
struct Pending<K> {
    key: K,
    quotient: u32,
    divisor: u32,
}

fn divided<K: Key, R: Remainder>(
    a: &Polynomial,
    dividend: &[K],
    b: &Polynomial,
    divisor: &[K],
    guards: &K,
) -> Result<Vec<(K, Integer)>, Failure> {
    let mut quotient: Vec<(K, Integer)> = Vec::new();
    let mut heap: BinaryHeap<Pending<K>> = BinaryHeap::new();
    let mut next = 0;
    loop {
        let key = match (dividend.get(next), heap.peek()) {
            (Some(key), Some(top)) => key.max(&top.key).clone(),
            (Some(key), None) => key.clone(),
            (None, Some(top)) => top.key.clone(),
            (None, None) => return Ok(quotient),
        };
        let here = dividend.get(next) == Some(&key);
        let mut rest = R::start(here.then(|| &a.coefficients[next]));
        next += usize::from(here);
        while let Some(mut top) = heap.peek_mut().filter(|top| top.key == key) {
            let (i, j) = (top.quotient as usize, top.divisor as usize);
            let (term, factor) = (&quotient[i], &b.coefficients[j]);
            rest = rest.minus_product(&term.1, factor).ok_or(Failure::Overflow)?;
            match divisor.get(j + 1) {
                Some(following) => {
                    top.key = term.0.times(following);
                    top.divisor += 1;
                }
                None => {
                    std::collections::binary_heap::PeekMut::pop(top);
                }
            }
        }
        let rest = rest.finish();
        if rest.is_zero() {
            continue;
        }
        let power = key.over(&divisor[0], guards).ok_or(Failure::Inexact)?;
        let value = rest.divided_exactly(&b.coefficients[0]).ok_or(Failure::Inexact)?;
        if let Some(second) = divisor.get(1) {
            let place = u32::try_from(quotient.len()).map_err(|_| Failure::Inexact)?;
            heap.push(Pending { key: power.times(second), quotient: place, divisor: 1 });
        }
        quotient.push((power, value));
    }
}
