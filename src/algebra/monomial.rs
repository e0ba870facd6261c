//! Packed monomials: exponents as bit fields in 64-bit words, compared and multiplied as words.
//!
//! A [`Layout`] gives each variable a field just wide enough for its degree, the smallest variable
//! in the most significant bits of the first word; no field crosses a word. Comparing the words
//! therefore compares monomials in **lexicographic order with [`Var::S`] most significant**,
//! whatever the widths, so that packing anew never changes the order of terms. A product of
//! monomials is a sum of words as long as no field overflows, for which [`Layout::for_product`]
//! makes room; one spare bit a field ([`Layout::with_guards`]) turns divisibility into one mask.
//! Source: Monagan & Pearce 2009, "Parallel sparse polynomial multiplication using heaps".

use std::hash::Hash;

use smallvec::{SmallVec, smallvec};

/// A variable. Only its number is known here: names and units belong to other layers.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct Var(pub u32);

impl Var {
    /// The complex frequency; the most significant variable of the term order.
    pub const S: Self = Self(0);
}

/// Where the exponent of one variable sits.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub(crate) struct Field {
    pub(crate) variable: Var,
    word: u16,
    shift: u8,
    pub(crate) bits: u8,
}

impl Field {
    fn mask(&self) -> u64 {
        u64::MAX >> (64 - u32::from(self.bits))
    }

    /// The exponent of the field's variable in a packed monomial.
    pub(crate) fn get(&self, words: &[u64]) -> u32 {
        ((words[usize::from(self.word)] >> self.shift) & self.mask()) as u32
    }

    /// Adds to the exponent; the caller has made room.
    pub(crate) fn add(&self, words: &mut [u64], exponent: u32) {
        words[usize::from(self.word)] += u64::from(exponent) << self.shift;
    }

    /// Makes the exponent 0.
    pub(crate) fn clear(&self, words: &mut [u64]) {
        words[usize::from(self.word)] &= !(self.mask() << self.shift);
    }
}

/// The number of bits that a field needs for exponents up to `degree`.
pub(crate) fn bits_for(degree: u32) -> u8 {
    (32 - degree.leading_zeros()) as u8
}

/// The fields of all variables, in the order of the variables.
#[derive(Clone, Debug, Default, PartialEq, Eq, Hash)]
pub(crate) struct Layout {
    fields: SmallVec<[Field; 4]>,
    words: u16,
}

impl Layout {
    /// Lays out variables in ascending order with given widths of 1 to 33 bits.
    pub(crate) fn new(widths: impl Iterator<Item = (Var, u8)>) -> Self {
        let mut fields = SmallVec::new();
        let mut words = 0_u16;
        let mut free = 0_u8;
        for (variable, bits) in widths {
            if free < bits {
                words = words.checked_add(1).expect("a monomial has fewer than 65536 words");
                free = 64;
            }
            free -= bits;
            fields.push(Field { variable, word: words - 1, shift: free, bits });
        }
        Self { fields, words }
    }

    pub(crate) fn fields(&self) -> &[Field] {
        &self.fields
    }

    /// Words of a monomial.
    pub(crate) fn words(&self) -> usize {
        usize::from(self.words)
    }

    pub(crate) fn field(&self, variable: Var) -> Option<&Field> {
        let place = self.fields.binary_search_by_key(&variable, |field| field.variable).ok()?;
        Some(&self.fields[place])
    }

    /// Room for the monomials of both.
    pub(crate) fn union(&self, other: &Self) -> Self {
        if self == other {
            return self.clone();
        }
        Self::new(self.merged(other, |a, b| a.max(b)))
    }

    /// Room for products of a monomial of one with a monomial of the other.
    ///
    /// # Panics
    /// If an exponent could exceed `u32::MAX`.
    pub(crate) fn for_product(&self, other: &Self) -> Self {
        let layout = Self::new(self.merged(other, |a, b| a.max(b) + 1));
        assert!(layout.fields.iter().all(|field| field.bits <= 32), "an exponent exceeds 32 bits");
        layout
    }

    /// The same with one spare bit on top of each field.
    pub(crate) fn with_guards(&self) -> Self {
        Self::new(self.fields.iter().map(|field| (field.variable, field.bits + 1)))
    }

    /// The monomial whose fields have only their top bit set.
    pub(crate) fn top_bits<K: Key>(&self) -> K {
        let mut words: SmallVec<[u64; 8]> = smallvec![0; self.words()];
        for field in &self.fields {
            words[usize::from(field.word)] |= 1 << (field.shift + field.bits - 1);
        }
        K::from_words(&words)
    }

    fn merged<'a>(
        &'a self,
        other: &'a Self,
        common: impl Fn(u8, u8) -> u8 + 'a,
    ) -> impl Iterator<Item = (Var, u8)> + 'a {
        let mut left = self.fields.iter().peekable();
        let mut right = other.fields.iter().peekable();
        std::iter::from_fn(move || match (left.peek(), right.peek()) {
            (Some(a), Some(b)) if a.variable == b.variable => {
                let item = (a.variable, common(a.bits, b.bits));
                left.next();
                right.next();
                Some(item)
            }
            (Some(a), Some(b)) if a.variable > b.variable => {
                right.next().map(|field| (field.variable, field.bits))
            }
            (None, _) => right.next().map(|field| (field.variable, field.bits)),
            (Some(_), _) => left.next().map(|field| (field.variable, field.bits)),
        })
    }
}

/// How monomials of one layout become monomials of another: masked shifts, neighbouring fields
/// that move by the same distance together. Fields that the target lacks are dropped.
#[derive(Debug)]
pub(crate) struct Packing {
    moves: SmallVec<[Move; 4]>,
    from_words: usize,
    to_words: usize,
}

#[derive(Debug)]
struct Move {
    from_word: usize,
    to_word: usize,
    mask: u64,
    left: u8,
    right: u8,
}

impl Packing {
    pub(crate) fn new(from: &Layout, to: &Layout) -> Self {
        let mut moves: SmallVec<[Move; 4]> = SmallVec::new();
        for source in &from.fields {
            let Some(target) = to.field(source.variable) else { continue };
            let next = Move {
                from_word: usize::from(source.word),
                to_word: usize::from(target.word),
                mask: source.mask() << source.shift,
                left: target.shift.saturating_sub(source.shift),
                right: source.shift.saturating_sub(target.shift),
            };
            match moves.last_mut() {
                Some(last)
                    if last.from_word == next.from_word
                        && last.to_word == next.to_word
                        && last.left == next.left
                        && last.right == next.right =>
                {
                    last.mask |= next.mask;
                }
                _ => moves.push(next),
            }
        }
        Self { moves, from_words: from.words(), to_words: to.words() }
    }

    fn apply(&self, from: &[u64], to: &mut [u64]) {
        for step in &self.moves {
            to[step.to_word] |= ((from[step.from_word] & step.mask) >> step.right) << step.left;
        }
    }

    /// All monomials of a flat list, packed anew.
    pub(crate) fn words(&self, terms: usize, from: &[u64]) -> Vec<u64> {
        let mut result = vec![0; terms * self.to_words];
        if self.from_words > 0 && self.to_words > 0 {
            let targets = result.chunks_exact_mut(self.to_words);
            for (source, target) in from.chunks_exact(self.from_words).zip(targets) {
                self.apply(source, target);
            }
        }
        result
    }

    /// All monomials of a flat list as keys.
    pub(crate) fn keys<K: Key>(&self, terms: usize, from: &[u64]) -> Vec<K> {
        let mut buffer: SmallVec<[u64; 8]> = smallvec![0; self.to_words];
        (0..terms)
            .map(|term| {
                buffer.fill(0);
                self.apply(&from[term * self.from_words..][..self.from_words], &mut buffer);
                K::from_words(&buffer)
            })
            .collect()
    }
}

/// A packed monomial of fixed or variable length, as the inner loops want it.
pub(crate) trait Key: Clone + Ord + Hash {
    /// Bytes that [`Self::byte`] can tell; 0 if the length varies.
    const BYTES: usize;
    fn from_words(words: &[u64]) -> Self;
    /// Appends as many words as the layout has.
    fn push_words(&self, count: usize, to: &mut Vec<u64>);
    /// The product of two monomials; no field overflows.
    fn times(&self, other: &Self) -> Self;
    /// The quotient of two monomials whose fields have their top bits, `guards`, clear.
    fn over(&self, divisor: &Self, guards: &Self) -> Option<Self>;
    /// The byte at a place, 0 being the last one of the last word.
    fn byte(&self, place: usize) -> u8;
}

impl Key for u64 {
    const BYTES: usize = 8;
    fn from_words(words: &[u64]) -> Self {
        words.first().copied().unwrap_or(0)
    }
    fn push_words(&self, count: usize, to: &mut Vec<u64>) {
        if count > 0 {
            to.push(*self);
        }
    }
    fn times(&self, other: &Self) -> Self {
        self + other
    }
    fn over(&self, divisor: &Self, guards: &Self) -> Option<Self> {
        let difference = (self | guards) - divisor;
        (difference & guards == *guards).then_some(difference ^ guards)
    }
    fn byte(&self, place: usize) -> u8 {
        (self >> (8 * place)) as u8
    }
}

impl Key for u128 {
    const BYTES: usize = 16;
    fn from_words(words: &[u64]) -> Self {
        let word = |place: usize| Self::from(words.get(place).copied().unwrap_or(0));
        (word(0) << 64) | word(1)
    }
    fn push_words(&self, count: usize, to: &mut Vec<u64>) {
        to.extend_from_slice(&[(self >> 64) as u64, *self as u64][..count.min(2)]);
    }
    fn times(&self, other: &Self) -> Self {
        self + other
    }
    fn over(&self, divisor: &Self, guards: &Self) -> Option<Self> {
        let difference = (self | guards) - divisor;
        (difference & guards == *guards).then_some(difference ^ guards)
    }
    fn byte(&self, place: usize) -> u8 {
        (self >> (8 * place)) as u8
    }
}

/// Monomials of any length.
pub(crate) type LongKey = SmallVec<[u64; 8]>;

impl Key for LongKey {
    const BYTES: usize = 0;
    fn from_words(words: &[u64]) -> Self {
        Self::from_slice(words)
    }
    fn push_words(&self, _count: usize, to: &mut Vec<u64>) {
        to.extend_from_slice(self);
    }
    fn times(&self, other: &Self) -> Self {
        self.iter().zip(other).map(|(a, b)| a + b).collect()
    }
    fn over(&self, divisor: &Self, guards: &Self) -> Option<Self> {
        self.iter().zip(divisor).zip(guards).map(|((a, b), guard)| a.over(b, guard)).collect()
    }
    fn byte(&self, place: usize) -> u8 {
        self.iter().rev().nth(place / 8).map_or(0, |word| word.byte(place % 8))
    }
}
