//! Exact division of sparse polynomials.
//!
//! Degrees and last terms are compared first; then:
//!
//! - A single term shifts exponents: linear.
//! - Where the terms fill most of the box of possible exponents, the remainder is a plain array in
//!   mixed radix (Kronecker 1882): one subtraction for each product of terms.
//! - Large operands are divided as polynomials in their most significant variable, recursively,
//!   so that the work is done by the product of polynomials.
//! - Otherwise quotient terms come out in descending order. The products `qᵢ·bⱼ` still to be
//!   subtracted wait in a heap, so that the remainder is never formed (Johnson 1974; Monagan & Pearce 2007,
//!   "Polynomial division using dynamic arrays, heaps, and packed exponent vectors"): memory is
//!   that of the quotient, work `q·b·log q` comparisons.
//!
//! In each method the first term that the leading term of the divisor does not divide ends the
//! attempt.

use std::collections::BinaryHeap;

use num_bigint::BigInt;

use super::super::monomial::Field;
use super::{Integer, Key, Layout, LongKey, Packing, Polynomial};

/// Terms of a dividend from which on division is recursive.
const RECURSIVE: usize = 4096;

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
        if divisor.len() == 1 {
            return self.shifted_down(divisor);
        }
        if let Some(grid) = Grid::of_dividend(self)
            && let Some(result) = grid.quotient(self, divisor)
        {
            return result;
        }
        if self.len() >= RECURSIVE && divisor.len() >= RECURSIVE.isqrt() / 4 {
            return self.recursive_quotient(divisor);
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

    /// Division by a single term, which divides the first and the last term.
    fn shifted_down(&self, divisor: &Self) -> Option<Self> {
        let fields = divisor.powers(0);
        if !fields.clone().all(|(variable, power)| self.trailing_degree(variable) >= power) {
            return None;
        }
        let mut result = self.divided_by_integer(&divisor.coefficients[0])?;
        let step = Packing::new(&divisor.layout, &self.layout).words(1, divisor.monomial_words(0));
        for words in result.words.chunks_exact_mut(step.len()) {
            for (word, step) in words.iter_mut().zip(&step) {
                *word -= step;
            }
        }
        Some(result.tightened())
    }

    /// Division in the most significant variable; the recursion ends at the latest with the
    /// variables.
    fn recursive_quotient(&self, divisor: &Self) -> Option<Self> {
        let variable = self.variables().next()?;
        let mut rest = self.coefficients(variable);
        let parts = divisor.coefficients(variable);
        let (lead, lower) = parts.split_last()?;
        let count = rest.len().checked_sub(lower.len())?;
        let mut quotient = vec![Self::zero(); count];
        for place in (0..count).rev() {
            let top = std::mem::take(&mut rest[place + lower.len()]).divide_exact(lead)?;
            if !top.is_zero() {
                for (value, part) in rest[place..].iter_mut().zip(lower) {
                    *value -= &(part * &top);
                }
            }
            quotient[place] = top;
        }
        rest.iter().all(Self::is_zero).then(|| Self::from_coefficients(variable, &quotient))
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

/// The box of exponents of a dividend in mixed radix.
struct Grid {
    /// Of each variable: its field, its stride, and the quotient's degree in it.
    axes: Vec<(Field, usize, u32)>,
    size: usize,
}

impl Grid {
    /// If the terms fill a fair part of the box.
    fn of_dividend(dividend: &Polynomial) -> Option<Self> {
        let limit = dividend.len().saturating_mul(8).min(1 << 24);
        let mut axes = Vec::with_capacity(dividend.layout.fields().len());
        let mut size = 1_usize;
        for &field in dividend.layout.fields().iter().rev() {
            let degree = dividend.degree(field.variable);
            axes.push((field, size, degree));
            size = size.checked_mul(degree as usize + 1).filter(|&size| size <= limit)?;
        }
        Some(Self { axes, size })
    }

    fn places(&self, operand: &Polynomial) -> Vec<usize> {
        let axes = self.axes.iter().filter_map(|&(field, stride, _)| {
            Some((operand.layout.field(field.variable)?, stride))
        });
        let axes: Vec<_> = axes.collect();
        let place = |words: &[u64]| -> usize {
            axes.iter().map(|(field, stride)| field.get(words) as usize * stride).sum()
        };
        operand.monomials().map(place).collect()
    }

    /// The division, or `None` where numbers leave 128 bits.
    fn quotient(
        mut self,
        dividend: &Polynomial,
        divisor: &Polynomial,
    ) -> Option<Option<Polynomial>> {
        for axis in &mut self.axes {
            axis.2 -= divisor.degree(axis.0.variable);
        }
        let word = |value: &Integer| match value {
            Integer::Small(value) => Some(i128::from(*value)),
            Integer::Large(_) => None,
        };
        let mut rest = vec![0_i128; self.size];
        for (place, value) in self.places(dividend).into_iter().zip(&dividend.coefficients) {
            rest[place] = word(value)?;
        }
        let places = self.places(divisor);
        let values = divisor.coefficients.iter().map(word).collect::<Option<Vec<i128>>>()?;
        let (first, lead) = (places[0], values[0]);
        let mut words = Vec::new();
        let mut coefficients = Vec::new();
        let mut key = LongKey::from_elem(0, dividend.layout.words());
        for place in (0..self.size).rev() {
            if rest[place] == 0 {
                continue;
            }
            if rest[place].checked_rem(lead)? != 0 || place < first {
                return Some(None);
            }
            let value = i128::from(i64::try_from(rest[place] / lead).ok()?);
            let shift = place - first;
            key.fill(0);
            let mut left = shift;
            for &(field, stride, degree) in self.axes.iter().rev() {
                let exponent = u32::try_from(left / stride).ok()?;
                if exponent > degree {
                    return Some(None);
                }
                field.add(&mut key, exponent);
                left %= stride;
            }
            for (&place, &factor) in places.iter().zip(&values) {
                // Both factors fit 64 bits.
                rest[shift + place] = rest[shift + place].checked_sub(value * factor)?;
            }
            words.extend_from_slice(&key);
            coefficients.push(Integer::from(value));
        }
        let layout = dividend.layout.clone();
        Some(Some(Polynomial { layout, words, coefficients }.tightened()))
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
