//! A sum of terms with few symbols: what is common goes before parentheses.
//!
//! What all terms share is taken out. Then the forms that compete are: written out; by powers of
//! `s`, each coefficient by itself; divisor · quotient + rest for the most saving kernels
//! ([`super::kernel`]), each of the three by the same rules. Long sums take the literal that most
//! terms share, again and again, without trying others.
//!
//! Sums are remembered, and the work is counted: past the bound nothing is tried any more that
//! needs a choice.

use std::cmp::Ordering;

use num_rational::BigRational;
use rustc_hash::FxHashMap;

use super::cost::{SYMBOL, cost};
use super::kernel::divisions;
use super::laurent::{Laurent, Ring, integer};
use super::order::{self, letters};
use crate::typeset::Formula;
use crate::typeset::shape::Lettering;

/// A formula with its cost.
#[derive(Clone, Debug)]
pub(super) struct Form {
    pub(super) formula: Formula,
    pub(super) cost: u32,
}

impl Form {
    pub(super) fn new(formula: Formula) -> Self {
        let cost = cost(&formula);
        Self { formula, cost }
    }

    /// The cheaper one; of equals the one whose names come in reference order.
    pub(super) fn better(self, other: Self) -> Self {
        let wins = match other.cost.cmp(&self.cost) {
            Ordering::Less => true,
            Ordering::Equal => letters(&other.formula) < letters(&self.formula),
            Ordering::Greater => false,
        };
        if wins { other } else { self }
    }
}

/// Sums of more terms than this are written without choosing.
const MAX_CHOICE: usize = 120;

/// Numbers up to this stand below a bar; those over larger ones are decimals.
pub(super) const MAX_DIVISOR: i64 = 1000;

/// Term comparisons spent on choices, of all sums of one problem together.
const MAX_WORK: u64 = 300_000;

/// Writes sums.
#[derive(Debug)]
pub(super) struct Writer<'a> {
    pub(super) ring: Ring,
    pub(super) letters: Lettering<'a>,
    known: FxHashMap<Laurent, Form>,
    work: u64,
}

impl<'a> Writer<'a> {
    pub(super) fn new(ring: Ring, letters: Lettering<'a>) -> Self {
        Self { ring, letters, known: FxHashMap::default(), work: 0 }
    }

    /// Whether the bound on the work has been reached.
    pub(super) fn exhausted(&self) -> bool {
        self.work > MAX_WORK
    }

    /// Counts work done elsewhere.
    pub(super) fn spend(&mut self, work: usize) {
        self.work = self.work.saturating_add(work as u64);
    }

    /// A number times a product of literals; reciprocals below a bar.
    pub(super) fn monomial(&self, exponents: &[i8], coefficient: &BigRational) -> Formula {
        let side = |sign: i8| {
            let variables = self.ring.variables.iter().zip(exponents);
            variables.filter(move |(_, power)| power.signum() == sign).map(|(variable, power)| {
                let letter = Formula::letter(self.letters.letter(*variable));
                Formula::power(letter, i32::from(power.abs()))
            })
        };
        if coefficient.denom() > &MAX_DIVISOR.into() {
            let number = Formula::number(coefficient.clone());
            let above = Formula::product([number].into_iter().chain(side(1)));
            return Formula::quotient(above, Formula::product(side(-1)));
        }
        let number =
            |value: &num_bigint::BigInt| Formula::number(BigRational::from_integer(value.clone()));
        let above = Formula::product([number(coefficient.numer())].into_iter().chain(side(1)));
        let below = Formula::product([number(coefficient.denom())].into_iter().chain(side(-1)));
        Formula::quotient(above, below)
    }

    fn term(&self, exponents: &[i8], coefficient: i128) -> Formula {
        self.monomial(exponents, &BigRational::from_integer(integer(coefficient)))
    }

    /// The best form that is found.
    pub(super) fn sum(&mut self, sum: &Laurent) -> Form {
        if let [(exponents, coefficient)] = sum.terms.as_slice() {
            return Form::new(self.term(exponents, *coefficient));
        }
        let (shared, number, rest) = sum.primitive();
        if rest.len() > MAX_CHOICE {
            let rest = self.long(&rest);
            let factor = self.term(&shared, number);
            return Form { formula: Formula::product([factor, rest]), cost: u32::MAX / 4 };
        }
        if number == 1 && shared.iter().all(|power| *power == 0) {
            return self.primitive(&rest);
        }
        let rest = self.primitive(&rest);
        Form::new(order::product([self.term(&shared, number), rest.formula]))
    }

    /// A sum whose terms share nothing.
    fn primitive(&mut self, sum: &Laurent) -> Form {
        if let Some(known) = self.known.get(sum) {
            return known.clone();
        }
        let terms = sum.terms.iter().map(|(exponents, c)| self.term(exponents, *c));
        let mut best = Form::new(order::sum(terms));
        let least = sum.distinct() as u32 * SYMBOL;
        self.spend(sum.len() * sum.len());
        let parts = sum.by_power();
        if parts.len() > 1 {
            let formula = self.by_powers(&parts);
            best = best.better(Form::new(formula));
        }
        if best.cost > least && sum.len() > 2 {
            let most = match sum.len() {
                _ if self.exhausted() => 1,
                0..=8 => 6,
                9..=16 => 4,
                17..=32 => 2,
                _ => 1,
            };
            for division in divisions(sum, most) {
                self.spend(sum.len() * sum.len());
                let divisor = self.sum(&division.divisor).formula;
                let quotient = self.sum(&division.quotient).formula;
                let mut terms = vec![order::product([quotient, divisor])];
                if division.rest.len() > 0 {
                    terms.push(self.sum(&division.rest).formula);
                }
                best = best.better(Form::new(order::sum(terms)));
            }
        }
        self.known.insert(sum.clone(), best.clone());
        best
    }

    /// c₀ + s·c₁ + s²·c₂ + …
    pub(super) fn by_powers(&mut self, parts: &[(i8, Laurent)]) -> Formula {
        let terms: Vec<Formula> = parts
            .iter()
            .map(|(power, part)| {
                let s = Formula::power(Formula::s(), i32::from(*power));
                order::product([s, self.sum(part).formula])
            })
            .collect();
        order::sum(terms)
    }

    /// A long sum, without choosing: by powers of `s`, then by the literal that most terms share.
    fn long(&mut self, sum: &Laurent) -> Formula {
        let parts = sum.by_power();
        if parts.len() > 1 {
            return self.by_powers(&parts);
        }
        let mut terms = Vec::new();
        let mut rest = sum.clone();
        while rest.len() > MAX_CHOICE {
            let Some((place, sign)) = most_shared(&rest) else { break };
            let (with, without): (Vec<_>, Vec<_>) =
                rest.terms.into_iter().partition(|term| term.0[place].signum() == sign);
            terms.push(self.sum(&Laurent { terms: with }).formula);
            rest = Laurent { terms: without };
        }
        if rest.len() > MAX_CHOICE {
            terms.extend(rest.terms.iter().map(|(exponents, c)| self.term(exponents, *c)));
        } else if rest.len() > 0 {
            terms.push(self.sum(&rest).formula);
        }
        order::sum(terms)
    }
}

/// The literal that most terms share, if any is in two; the first of equals.
fn most_shared(sum: &Laurent) -> Option<(usize, i8)> {
    let places = sum.terms.first()?.0.len();
    let mut counts = vec![[0_usize; 2]; places];
    for (exponents, _) in &sum.terms {
        for (count, power) in counts.iter_mut().zip(exponents).skip(1) {
            match power.signum() {
                1 => count[0] += 1,
                -1 => count[1] += 1,
                _ => {}
            }
        }
    }
    let literals = counts
        .iter()
        .enumerate()
        .flat_map(|(place, count)| [(count[0], place, 1), (count[1], place, -1)]);
    let best = literals.fold((1, 0, 0), |best, next| if next.0 > best.0 { next } else { best });
    (best.0 > 1).then_some((best.1, best.2))
}
