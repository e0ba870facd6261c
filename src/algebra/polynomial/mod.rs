//! Multivariate polynomials over **Z** in packed sparse form.
//!
//! A polynomial owns the list of its variables (inside its [`Layout`]), a flat vector of packed
//! exponent words and a vector of coefficients. **Canonical form**, which every operation keeps:
//! terms in descending lexicographic order with [`Var::S`] most significant, no coefficient 0, no
//! variable that does not occur, each field exactly as wide as its variable's degree needs. So
//! derived equality is equality of polynomials, and results never depend on history.
//!
//! Operands need not share variables: there is no ring to set up. Exponents are limited to 32 bits.

mod arithmetic;
mod calculus;
mod display;
mod division;
mod multiplication;
mod residues;
#[cfg(test)]
pub(crate) mod tests;

use num_bigint::BigInt;

use super::integer::Integer;
use super::monomial::{Key, Layout, LongKey, Packing, Var, bits_for};

/// A polynomial in any number of variables with integer coefficients.
#[derive(Clone, PartialEq, Eq, Hash)]
pub struct Polynomial {
    pub(crate) layout: Layout,
    /// `layout.words()` words for each term.
    pub(crate) words: Vec<u64>,
    pub(crate) coefficients: Vec<Integer>,
}

impl Polynomial {
    /// The polynomial 0.
    pub fn zero() -> Self {
        Self { layout: Layout::default(), words: Vec::new(), coefficients: Vec::new() }
    }

    /// The polynomial 1.
    pub fn one() -> Self {
        Self::constant(Integer::ONE)
    }

    /// The polynomial of one variable.
    pub fn variable(variable: Var) -> Self {
        Self::monomial([(variable, 1)], 1)
    }

    /// An integer times a product of powers; repeated variables are multiplied.
    pub fn monomial(
        powers: impl IntoIterator<Item = (Var, u32)>,
        coefficient: impl Into<BigInt>,
    ) -> Self {
        Self::from_terms([(powers, coefficient.into())])
    }

    /// The sum of terms in any order; like terms are collected. Cost: a sort.
    ///
    /// # Panics
    /// If an exponent of a term exceeds `u32::MAX`.
    pub fn from_terms<P: IntoIterator<Item = (Var, u32)>>(
        terms: impl IntoIterator<Item = (P, BigInt)>,
    ) -> Self {
        let mut flat: Vec<(Vec<(Var, u32)>, Integer)> = Vec::new();
        let mut degrees: Vec<(Var, u32)> = Vec::new();
        for (powers, coefficient) in terms {
            let powers = collected(powers.into_iter().filter(|power| power.1 > 0).collect());
            degrees.extend_from_slice(&powers);
            flat.push((powers, Integer::from(coefficient)));
        }
        degrees.sort_unstable_by(|a, b| a.0.cmp(&b.0).then(b.1.cmp(&a.1)));
        degrees.dedup_by_key(|power| power.0);
        let layout = Layout::new(degrees.iter().map(|&(var, degree)| (var, bits_for(degree))));
        let terms = flat.into_iter().map(|(powers, coefficient)| {
            let mut key = LongKey::from_elem(0, layout.words());
            for (variable, exponent) in powers {
                if let Some(field) = layout.field(variable) {
                    field.add(&mut key, exponent);
                }
            }
            (key, coefficient)
        });
        let mut terms: Vec<(LongKey, Integer)> = terms.collect();
        terms.sort_unstable_by(|a, b| b.0.cmp(&a.0));
        Self::from_sorted(layout, terms)
    }

    pub(crate) fn constant(value: Integer) -> Self {
        if value.is_zero() {
            return Self::zero();
        }
        Self { layout: Layout::default(), words: Vec::new(), coefficients: vec![value] }
    }

    /// From keys in descending order; equal neighbours are added.
    pub(crate) fn from_sorted<K: Key>(
        layout: Layout,
        terms: impl IntoIterator<Item = (K, Integer)>,
    ) -> Self {
        let mut words = Vec::new();
        let mut coefficients: Vec<Integer> = Vec::new();
        let mut last: Option<(K, Integer)> = None;
        let mut flush = |term: (K, Integer)| {
            if !term.1.is_zero() {
                term.0.push_words(layout.words(), &mut words);
                coefficients.push(term.1);
            }
        };
        for (key, coefficient) in terms {
            match &mut last {
                Some(previous) if previous.0 == key => {
                    previous.1 = previous.1.plus(&coefficient);
                }
                _ => {
                    if let Some(previous) = last.replace((key, coefficient)) {
                        flush(previous);
                    }
                }
            }
        }
        if let Some(previous) = last {
            flush(previous);
        }
        Self { layout, words, coefficients }.tightened()
    }

    /// Restores the canonical layout of sorted terms: narrows fields, drops unused variables.
    pub(crate) fn tightened(self) -> Self {
        let used = self.used_bits();
        let fields = self.layout.fields();
        let width = |field: &super::monomial::Field| bits_for(field.get(&used));
        if fields.iter().all(|field| width(field) == field.bits) {
            return self;
        }
        let widths = fields.iter().map(|field| (field.variable, width(field)));
        let layout = Layout::new(widths.filter(|&(_, bits)| bits > 0));
        let words = Packing::new(&self.layout, &layout).words(self.len(), &self.words);
        Self { layout, words, coefficients: self.coefficients }
    }

    /// The union of the bits of all monomials: as many bits a field as its degree has.
    fn used_bits(&self) -> LongKey {
        let count = self.layout.words();
        let mut used = LongKey::from_elem(0, count);
        if count > 0 {
            for term in self.words.chunks_exact(count) {
                for (all, word) in used.iter_mut().zip(term) {
                    *all |= word;
                }
            }
        }
        used
    }

    /// The number of terms.
    pub fn len(&self) -> usize {
        self.coefficients.len()
    }

    /// Whether this is the polynomial 0 (which has no terms).
    pub fn is_empty(&self) -> bool {
        self.is_zero()
    }

    /// Whether this is the polynomial 0.
    pub fn is_zero(&self) -> bool {
        self.coefficients.is_empty()
    }

    /// Whether this is the polynomial 1.
    pub fn is_one(&self) -> bool {
        self.is_constant() && self.coefficients.first().is_some_and(Integer::is_one)
    }

    /// Whether no variable occurs.
    pub fn is_constant(&self) -> bool {
        self.layout.fields().is_empty()
    }

    /// The value of a polynomial in which no variable occurs.
    pub fn to_constant(&self) -> Option<BigInt> {
        self.is_constant()
            .then(|| self.coefficients.first().map_or_else(BigInt::default, Integer::to_big))
    }

    /// The variables that occur, ascending.
    pub fn variables(&self) -> impl ExactSizeIterator<Item = Var> + '_ {
        self.layout.fields().iter().map(|field| field.variable)
    }

    /// Whether a variable occurs.
    pub fn contains(&self, variable: Var) -> bool {
        self.layout.field(variable).is_some()
    }

    /// The degree in one variable; 0 for the polynomial 0.
    pub fn degree(&self, variable: Var) -> u32 {
        let Some(field) = self.layout.field(variable) else { return 0 };
        if field.bits == 1 {
            return 1;
        }
        self.monomials().map(|words| field.get(words)).max().unwrap_or(0)
    }

    /// The lowest power of one variable among the terms; 0 for the polynomial 0.
    pub fn trailing_degree(&self, variable: Var) -> u32 {
        let Some(field) = self.layout.field(variable) else { return 0 };
        self.monomials().map(|words| field.get(words)).min().unwrap_or(0)
    }

    /// The terms in canonical order: the powers of a monomial (only positive exponents, variables
    /// ascending) and its coefficient.
    pub fn terms(
        &self,
    ) -> impl ExactSizeIterator<Item = (impl Iterator<Item = (Var, u32)> + Clone + '_, BigInt)> + '_
    {
        self.coefficients
            .iter()
            .enumerate()
            .map(|(term, coefficient)| (self.powers(term), coefficient.to_big()))
    }

    /// Whether the coefficient of the leading term is negative.
    pub fn is_negative(&self) -> bool {
        self.coefficients.first().is_some_and(Integer::is_negative)
    }

    /// The coefficient of the leading term; 0 for the polynomial 0.
    pub fn leading_coefficient(&self) -> BigInt {
        self.coefficients.first().map_or_else(BigInt::default, Integer::to_big)
    }

    /// Bits of the largest coefficient.
    pub fn coefficient_bits(&self) -> u64 {
        self.coefficients.iter().map(Integer::bits).max().unwrap_or(0)
    }

    pub(crate) fn powers(&self, term: usize) -> impl Iterator<Item = (Var, u32)> + Clone + '_ {
        let words = self.monomial_words(term);
        self.layout
            .fields()
            .iter()
            .map(move |field| (field.variable, field.get(words)))
            .filter(|power| power.1 > 0)
    }

    pub(crate) fn monomial_words(&self, term: usize) -> &[u64] {
        let count = self.layout.words();
        &self.words[term * count..][..count]
    }

    pub(crate) fn monomials(&self) -> impl ExactSizeIterator<Item = &[u64]> {
        (0..self.len()).map(|term| self.monomial_words(term))
    }

    /// Checks every promise of the canonical form; for tests.
    ///
    /// # Panics
    /// If a promise is broken.
    pub fn assert_canonical(&self) {
        let count = self.layout.words();
        assert_eq!(self.words.len(), count * self.len(), "one monomial for each coefficient");
        assert!(self.coefficients.iter().all(|c| !c.is_zero()), "a coefficient is 0");
        for coefficient in &self.coefficients {
            if let Integer::Large(value) = coefficient {
                assert!(i64::try_from(&**value).is_err(), "a small coefficient is kept large");
            }
        }
        for pair in 1..self.len() {
            let (before, after) = (self.monomial_words(pair - 1), self.monomial_words(pair));
            assert!(before > after, "terms are not in descending order");
        }
        let used = self.used_bits();
        for field in self.layout.fields() {
            assert_eq!(bits_for(field.get(&used)), field.bits, "a field has the wrong width");
        }
        let variables: Vec<Var> = self.variables().collect();
        assert!(variables.is_sorted_by(|a, b| a < b), "variables are not ascending");
    }
}

/// Adds up the exponents of repeated variables.
fn collected(mut powers: Vec<(Var, u32)>) -> Vec<(Var, u32)> {
    powers.sort_unstable_by_key(|power| power.0);
    powers.dedup_by(|next, kept| {
        let same = next.0 == kept.0;
        if same {
            kept.1 = kept.1.checked_add(next.1).expect("an exponent exceeds 32 bits");
        }
        same
    });
    powers
}

impl Default for Polynomial {
    fn default() -> Self {
        Self::zero()
    }
}

impl From<i64> for Polynomial {
    fn from(value: i64) -> Self {
        Self::constant(Integer::from(value))
    }
}

impl From<BigInt> for Polynomial {
    fn from(value: BigInt) -> Self {
        Self::constant(Integer::from(value))
    }
}

impl From<Var> for Polynomial {
    fn from(variable: Var) -> Self {
        Self::variable(variable)
    }
}
