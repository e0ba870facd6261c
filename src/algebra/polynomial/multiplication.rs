//! Products of sparse polynomials.
//!
//! - A single term shifts the other operand: linear.
//! - Where the products of terms fill most of the box of possible exponents, they are added into a
//!   plain array indexed by mixed radix (Kronecker 1882): one addition a product.
//! - Where the rows `aᵢ·B` overlap a good deal and monomials are short, the products are formed in
//!   large blocks and put in order by a radix sort: linear in their number.
//! - Otherwise the rows, each sorted already, are merged in pairs like a merge sort
//!   (schoolbook, Johnson 1974): `n·m·log n` word comparisons, like terms met early; rows that
//!   do not overlap, the common case for different variables, are only put one after the other.
//!
//! Coefficients are accumulated in 64 or 128 bits where a bound on their size allows it, else in
//! big integers.

use std::cmp::Ordering;

use num_bigint::BigInt;

use super::{Integer, Key, Layout, LongKey, Packing, Polynomial};

/// Products that are sorted at once: bounds the memory beside the result.
const BLOCK: usize = 1 << 21;

/// What coefficients are accumulated in.
pub(super) trait Accumulator: Clone + Default {
    /// Coefficients of the operands.
    type Operand: Clone;
    fn operand(value: &Integer) -> Self::Operand;
    fn product(a: &Self::Operand, b: &Self::Operand) -> Self;
    fn add(&mut self, other: &Self);
    fn add_product(&mut self, a: &Self::Operand, b: &Self::Operand);
    fn is_zero(&self) -> bool;
    fn finish(self) -> Integer;
}

fn word(value: &Integer) -> i64 {
    match value {
        Integer::Small(value) => *value,
        Integer::Large(_) => unreachable!("the size of all coefficients has been checked"),
    }
}

impl Accumulator for i64 {
    type Operand = Self;
    fn operand(value: &Integer) -> Self {
        word(value)
    }
    fn product(a: &Self, b: &Self) -> Self {
        a * b
    }
    fn add(&mut self, other: &Self) {
        *self += other;
    }
    fn add_product(&mut self, a: &Self, b: &Self) {
        *self += a * b;
    }
    fn is_zero(&self) -> bool {
        *self == 0
    }
    fn finish(self) -> Integer {
        Integer::Small(self)
    }
}

impl Accumulator for i128 {
    type Operand = i64;
    fn operand(value: &Integer) -> i64 {
        word(value)
    }
    fn product(a: &i64, b: &i64) -> Self {
        Self::from(*a) * Self::from(*b)
    }
    fn add(&mut self, other: &Self) {
        *self += other;
    }
    fn add_product(&mut self, a: &i64, b: &i64) {
        *self += Self::from(*a) * Self::from(*b);
    }
    fn is_zero(&self) -> bool {
        *self == 0
    }
    fn finish(self) -> Integer {
        Integer::from(self)
    }
}

impl Accumulator for BigInt {
    type Operand = Self;
    fn operand(value: &Integer) -> Self {
        value.to_big()
    }
    fn product(a: &Self, b: &Self) -> Self {
        a * b
    }
    fn add(&mut self, other: &Self) {
        *self += other;
    }
    fn add_product(&mut self, a: &Self, b: &Self) {
        *self += a * b;
    }
    fn is_zero(&self) -> bool {
        *self == Self::default()
    }
    fn finish(self) -> Integer {
        Integer::from(self)
    }
}

/// The product of two polynomials.
pub(super) fn product(a: &Polynomial, b: &Polynomial) -> Polynomial {
    let (a, b) = if a.len() <= b.len() { (a, b) } else { (b, a) };
    if a.is_zero() {
        return Polynomial::zero();
    }
    if a.is_constant() {
        return b.scaled_by(&a.coefficients[0]);
    }
    let layout = a.layout.for_product(&b.layout);
    let count = usize::BITS - a.len().leading_zeros();
    let bits = a.coefficient_bits() + b.coefficient_bits() + u64::from(count);
    let small = a.coefficient_bits() <= 63 && b.coefficient_bits() <= 63;
    match bits {
        ..=62 => accumulated::<i64>(a, b, layout),
        ..=126 if small => accumulated::<i128>(a, b, layout),
        _ => accumulated::<BigInt>(a, b, layout),
    }
}

fn accumulated<A: Accumulator>(a: &Polynomial, b: &Polynomial, layout: Layout) -> Polynomial {
    if a.len() > 1
        && let Some(grid) = Grid::fitting(a, b)
    {
        return dense::<A>(a, b, layout, &grid);
    }
    match layout.words() {
        0 | 1 => sparse::<u64, A>(a, b, layout),
        2 => sparse::<u128, A>(a, b, layout),
        _ => sparse::<LongKey, A>(a, b, layout),
    }
}

/// Mixed radix over the box of exponents of the product, [`super::Var::S`] most significant.
struct Grid {
    strides: Vec<usize>,
    size: usize,
}

impl Grid {
    /// If the box has at most a few places for each product of terms.
    fn fitting(a: &Polynomial, b: &Polynomial) -> Option<Self> {
        let limit = a.len().checked_mul(b.len())?.saturating_mul(4).min(1 << 24);
        let variables = a.layout.union(&b.layout);
        let mut strides = vec![0; variables.fields().len()];
        let mut size = 1_usize;
        for (place, field) in variables.fields().iter().enumerate().rev() {
            strides[place] = size;
            let degree = a.degree(field.variable) + b.degree(field.variable);
            size = size.checked_mul(degree as usize + 1).filter(|&size| size <= limit)?;
        }
        Some(Self { strides, size })
    }

    fn places(&self, operand: &Polynomial, layout: &Layout) -> Vec<usize> {
        let fields: Vec<_> = operand
            .layout
            .fields()
            .iter()
            .map(|field| {
                let all = layout.fields();
                let place = all.binary_search_by_key(&field.variable, |other| other.variable);
                (field, self.strides[place.unwrap_or(0)])
            })
            .collect();
        let place = |words: &[u64]| -> usize {
            fields.iter().map(|(field, stride)| field.get(words) as usize * stride).sum()
        };
        operand.monomials().map(place).collect()
    }
}

fn dense<A: Accumulator>(
    a: &Polynomial,
    b: &Polynomial,
    layout: Layout,
    grid: &Grid,
) -> Polynomial {
    let (rows, columns) = (grid.places(a, &layout), grid.places(b, &layout));
    let left: Vec<_> = a.coefficients.iter().map(A::operand).collect();
    let right: Vec<_> = b.coefficients.iter().map(A::operand).collect();
    let mut sums = vec![A::default(); grid.size];
    for (row, x) in rows.iter().zip(&left) {
        for (column, y) in columns.iter().zip(&right) {
            sums[row + column].add_product(x, y);
        }
    }
    let mut words = Vec::new();
    let mut coefficients = Vec::new();
    let mut key = LongKey::from_elem(0, layout.words());
    for (place, sum) in sums.into_iter().enumerate().rev() {
        if sum.is_zero() {
            continue;
        }
        key.fill(0);
        let mut rest = place;
        for (field, stride) in layout.fields().iter().zip(&grid.strides) {
            field.add(&mut key, (rest / stride) as u32);
            rest %= stride;
        }
        words.extend_from_slice(&key);
        coefficients.push(sum.finish());
    }
    Polynomial { layout, words, coefficients }.tightened()
}

fn sparse<K: Key, A: Accumulator>(a: &Polynomial, b: &Polynomial, layout: Layout) -> Polynomial {
    let rows: Vec<K> = Packing::new(&a.layout, &layout).keys(a.len(), &a.words);
    let columns: Vec<K> = Packing::new(&b.layout, &layout).keys(b.len(), &b.words);
    let left: Vec<_> = a.coefficients.iter().map(A::operand).collect();
    let right: Vec<_> = b.coefficients.iter().map(A::operand).collect();
    // Blocks of rows that a radix sort puts in order, or single rows.
    let digits = digits::<K>(&rows, &columns);
    let overlaps = (1..rows.len())
        .filter(|&row| {
            rows[row - 1].times(&columns[columns.len() - 1]) <= rows[row].times(&columns[0])
        })
        .count();
    let levels = (usize::BITS - rows.len().leading_zeros()) as usize;
    let sorting = !digits.is_empty()
        && rows.len() < 2 * overlaps
        && digits.len() < 2 * levels
        && columns.len() >= 64;
    let height = if sorting { (BLOCK / columns.len()).max(1) } else { 1 };
    // The stack holds 2^k merged blocks with falling k, like the digits of a counter.
    let mut stack: Vec<(u32, Vec<(K, A)>)> = Vec::new();
    for (rows, left) in rows.chunks(height).zip(left.chunks(height)) {
        let mut products = Vec::with_capacity(rows.len() * columns.len());
        for (row, x) in rows.iter().zip(left) {
            let row = columns.iter().zip(&right).map(|(key, y)| (row.times(key), A::product(x, y)));
            products.extend(row);
        }
        if height > 1 {
            products = sorted(products, &digits);
        }
        let mut block = (0, products);
        while let Some(top) = stack.pop_if(|top| top.0 == block.0) {
            block = (block.0 + 1, merged(top.1, block.1));
        }
        stack.push(block);
    }
    let blocks = stack.into_iter().rev().map(|block| block.1);
    let terms = blocks.reduce(|lower, upper| merged(upper, lower)).unwrap_or_default();
    Polynomial::from_sorted(layout, terms.into_iter().map(|(key, sum)| (key, sum.finish())))
}

/// The bytes, last one first, in which sums of keys can differ.
fn digits<K: Key>(rows: &[K], columns: &[K]) -> Vec<usize> {
    let used = |place: &usize| rows.iter().chain(columns).any(|key| key.byte(*place) != 0);
    // A carry within a field can reach one byte further than the operands do.
    let places: Vec<usize> = (0..K::BYTES).filter(used).collect();
    let mut digits: Vec<usize> = places.iter().flat_map(|&place| [place, place + 1]).collect();
    digits.dedup();
    digits.retain(|&place| place < K::BYTES);
    digits
}

/// Sorts by the given bytes in descending order, last byte first, and adds like terms (radix sort,
/// Hollerith 1889).
fn sorted<K: Key, A: Accumulator>(mut terms: Vec<(K, A)>, digits: &[usize]) -> Vec<(K, A)> {
    let mut other = terms.clone();
    for &digit in digits {
        let mut starts = [0_usize; 256];
        for term in &terms {
            starts[usize::from(255 - term.0.byte(digit))] += 1;
        }
        let mut total = 0;
        for start in &mut starts {
            total += std::mem::replace(start, total);
        }
        for (key, sum) in &mut terms {
            let start = &mut starts[usize::from(255 - key.byte(digit))];
            other[*start] = (key.clone(), std::mem::take(sum));
            *start += 1;
        }
        std::mem::swap(&mut terms, &mut other);
    }
    terms.dedup_by(|next, kept| {
        let same = next.0 == kept.0;
        if same {
            kept.1.add(&next.1);
        }
        same
    });
    terms.retain(|term| !term.1.is_zero());
    terms
}

/// Merges two descending lists; like terms are added.
fn merged<K: Key, A: Accumulator>(mut upper: Vec<(K, A)>, mut lower: Vec<(K, A)>) -> Vec<(K, A)> {
    match (upper.last(), lower.first()) {
        (Some(last), Some(first)) if last.0 <= first.0 => {}
        _ => {
            upper.append(&mut lower);
            return upper;
        }
    }
    let mut result = Vec::with_capacity(upper.len() + lower.len());
    let (mut i, mut j) = (0, 0);
    while i < upper.len() && j < lower.len() {
        let (left, right) = (&mut upper[i], &mut lower[j]);
        match left.0.cmp(&right.0) {
            Ordering::Greater => {
                result.push((left.0.clone(), std::mem::take(&mut left.1)));
                i += 1;
            }
            Ordering::Less => {
                result.push((right.0.clone(), std::mem::take(&mut right.1)));
                j += 1;
            }
            Ordering::Equal => {
                let mut sum = std::mem::take(&mut left.1);
                sum.add(&right.1);
                if !sum.is_zero() {
                    result.push((left.0.clone(), sum));
                }
                i += 1;
                j += 1;
            }
        }
    }
    result.extend(upper.drain(i..));
    result.extend(lower.drain(j..));
    result
}
