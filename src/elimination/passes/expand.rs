//! Full expansion.
//!
//! Where no two terms can meet (every choice has symbols of its own, each to the first power, and
//! coefficients ±1) a term is a set of symbols: one bit each, and one for the sign. The list of a
//! node is its children's lists with the edge's bits set, kept apart by powers of `s`; a child's list
//! is dropped after its last use. The work is linear in the output and needs no comparison.
//! Everywhere else the values are polynomials, and terms that meet are collected.

use num_bigint::BigInt;
use num_traits::ToPrimitive;

use super::{Ring, at_links};
use crate::algebra::{Polynomial, Var};
use crate::elimination::diagram::{Diagram, Link};

/// Polynomials over the symbols and `s`.
pub(crate) struct Polynomials;

impl Ring for Polynomials {
    type Weight = Polynomial;
    type Value = Polynomial;

    fn zero(&self) -> Polynomial {
        Polynomial::zero()
    }

    fn one(&self) -> Polynomial {
        Polynomial::one()
    }

    fn add(&self, sum: &mut Polynomial, weight: &Polynomial, value: &Polynomial, negative: bool) {
        let product = if weight.is_one() { value.clone() } else { weight * value };
        *sum = if negative { &*sum - &product } else { &*sum + &product };
    }

    fn negate(&self, value: &Polynomial) -> Polynomial {
        -value
    }
}

/// The polynomials of these roots, terms collected.
pub(crate) fn collected(
    diagram: &Diagram,
    weights: &[Polynomial],
    roots: &[Link],
) -> Vec<Polynomial> {
    at_links(&Polynomials, diagram, weights, roots)
}

/// A set of symbols, and a sign in its highest bit.
pub(crate) trait TermSet: Copy + Ord + Default + Send + 'static {
    /// How many symbols fit.
    const SYMBOLS: usize;
    fn symbol(index: usize) -> Self;
    fn sign() -> Self;
    /// Union of disjoint sets; signs multiply.
    fn with(self, other: Self) -> Self;
    fn is_negative(self) -> bool;
    fn contains(self, index: usize) -> bool;
}

macro_rules! term_set {
    ($word:ty) => {
        impl TermSet for $word {
            const SYMBOLS: usize = <$word>::BITS as usize - 1;
            fn symbol(index: usize) -> Self {
                1 << index
            }
            fn sign() -> Self {
                1 << (<$word>::BITS - 1)
            }
            // The sets are disjoint, so exclusive or is the union and multiplies the signs.
            fn with(self, other: Self) -> Self {
                self ^ other
            }
            fn is_negative(self) -> bool {
                self & Self::sign() != 0
            }
            fn contains(self, index: usize) -> bool {
                self & Self::symbol(index) != 0
            }
        }
    };
}
term_set!(u64);
term_set!(u128);

/// The terms of a root by powers of `s`.
pub(crate) type TermLists<T> = Vec<Vec<T>>;

/// The weights as terms (power of `s`, set); `None` where terms could meet or do not fit.
pub(crate) fn as_sets<T: TermSet>(
    weights: &[Polynomial],
    symbols: &[Var],
) -> Option<Vec<Vec<(usize, T)>>> {
    if symbols.len() > T::SYMBOLS {
        return None;
    }
    weights
        .iter()
        .map(|weight| {
            weight
                .terms()
                .map(|(powers, coefficient)| {
                    let mut set = match coefficient.to_i64()? {
                        1 => T::default(),
                        -1 => T::sign(),
                        _ => return None,
                    };
                    let mut power = 0;
                    for (variable, exponent) in powers {
                        if variable == Var::S {
                            power = exponent as usize;
                        } else if exponent == 1 {
                            let index = symbols.binary_search(&variable).ok()?;
                            set = set.with(T::symbol(index));
                        } else {
                            return None;
                        }
                    }
                    Some((power, set))
                })
                .collect()
        })
        .collect()
}

/// The terms of these roots, by powers of `s`, not sorted.
pub(crate) fn listed<T: TermSet>(
    diagram: &Diagram,
    weights: &[Vec<(usize, T)>],
    roots: &[Link],
) -> Vec<TermLists<T>> {
    let mut uses = diagram.uses();
    let mut lists: Vec<TermLists<T>> = vec![vec![vec![T::default()]]];
    for node in 1..diagram.len() {
        let mut list: TermLists<T> = Vec::new();
        // Room first: each list is written once and never moved.
        let mut room: Vec<usize> = Vec::new();
        for edge in diagram.edges(node) {
            let child = &lists[edge.link.node()];
            for &(power, _) in &weights[edge.weight as usize] {
                room.resize(room.len().max(power + child.len()), 0);
                for (at, terms) in child.iter().enumerate() {
                    room[at + power] += terms.len();
                }
            }
        }
        list.extend(room.into_iter().map(Vec::with_capacity));
        for edge in diagram.edges(node) {
            let child = edge.link.node();
            let sign = if edge.link.is_negative() { T::sign() } else { T::default() };
            for &(power, set) in &weights[edge.weight as usize] {
                let set = set.with(sign);
                for (at, terms) in lists[child].iter().enumerate() {
                    list[at + power].extend(terms.iter().map(|term| term.with(set)));
                }
            }
            uses[child] -= 1;
            if uses[child] == 0 && child != 0 {
                lists[child] = Vec::new();
            }
        }
        lists.push(list);
    }
    roots
        .iter()
        .map(|root| {
            if root.is_dead() {
                return Vec::new();
            }
            let mut list = lists[root.node()].clone();
            if root.is_negative() {
                for term in list.iter_mut().flatten() {
                    *term = term.with(T::sign());
                }
            }
            list
        })
        .collect()
}

/// The polynomial of these lists.
pub(crate) fn polynomial<T: TermSet>(lists: TermLists<T>, symbols: &[Var]) -> Polynomial {
    let terms = lists.into_iter().zip(0_u32..).flat_map(|(terms, power)| {
        terms.into_iter().map(move |term| {
            let powers = symbols
                .iter()
                .enumerate()
                .filter(move |&(index, _)| term.contains(index))
                .map(|(_, &variable)| (variable, 1))
                .chain((power > 0).then_some((Var::S, power)))
                .collect::<Vec<_>>();
            (powers, BigInt::from(if term.is_negative() { -1 } else { 1 }))
        })
    });
    Polynomial::from_terms(terms)
}
