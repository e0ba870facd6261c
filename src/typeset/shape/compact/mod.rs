//! The shape `compact`: what a designer would have written by hand.
//!
//! Strategies make candidates, and the one that costs the reader least ([`cost`]) wins: one bar with
//! factors above and below ([`quotient`]), sums of two simpler fractions ([`split`]), reciprocals of
//! such sums, each part again by all strategies, a few levels deep. Sums are factored by kernels
//! ([`sum`]). The winner has been compared with the fraction at random points ([`verify`]).
//!
//! The work is counted; past a bound the choices that are left are not made. What is too large for
//! this is written by powers of `s`.

mod cost;
mod inverse;
mod kernel;
mod laurent;
mod order;
mod quotient;
mod split;
mod sum;
mod verify;

use num_rational::BigRational;
use rustc_hash::FxHashMap;

use super::{Lettering, bode, powers};
use crate::algebra::{Fraction, Polynomial, Var, gcd};
use crate::typeset::Formula;
use laurent::{Laurent, Ring};
pub(crate) use order::product;
use quotient::Factored;
pub(super) use quotient::factors;
use sum::{Form, Writer};

/// Terms of fractions that are split.
const MAX_SPLIT_TERMS: usize = 60;
/// Splits of splits.
const MAX_DEPTH: usize = 3;
/// Splits that are followed.
const MAX_SPLITS: usize = 6;

/// Coefficients of more bits than this come from numbers that were put in for symbols.
const MAX_BITS: u64 = 24;

/// The shape `compact`. Where numbers stand for most symbols, it is the shape `bode` unless `powers`
/// has fewer symbols: what counts there are the decimals of each coefficient.
pub fn compact(fraction: &Fraction, letters: Lettering<'_>) -> Formula {
    let sides = [fraction.numerator(), fraction.denominator()];
    if sides.iter().any(|side| side.coefficient_bits() > MAX_BITS) {
        return simpler(fraction, letters);
    }
    let ring = Ring::new(&[fraction.numerator(), fraction.denominator()]);
    let mut search = Search { writer: Writer::new(ring, letters), known: FxHashMap::default() };
    if let Some(form) = search.best(fraction, MAX_DEPTH)
        && verify::equal(&form.formula, fraction, letters)
    {
        return form.formula;
    }
    simpler(fraction, letters)
}

fn simpler(fraction: &Fraction, letters: Lettering<'_>) -> Formula {
    let (powers, bode) = (powers(fraction, letters), bode(fraction, letters));
    if powers.symbols() < bode.symbols() { powers } else { bode }
}

struct Search<'a> {
    writer: Writer<'a>,
    known: FxHashMap<(Fraction, usize), Form>,
}

impl Search<'_> {
    /// The best form that is found; `None` where something is too large.
    fn best(&mut self, fraction: &Fraction, depth: usize) -> Option<Form> {
        if fraction.is_zero() {
            return Some(Form::new(Formula::integer(0)));
        }
        let key = (fraction.clone(), depth);
        if let Some(known) = self.known.get(&key) {
            return Some(known.clone());
        }
        let mut best = Factored::new(fraction, &self.writer)?.write(&mut self.writer);
        let terms = fraction.numerator().len() + fraction.denominator().len();
        if depth > 0 && terms <= MAX_SPLIT_TERMS && !self.writer.exhausted() {
            for pair in split::splits(fraction).iter().take(MAX_SPLITS) {
                if let Some(form) = self.sum_of(pair, depth - 1, false) {
                    best = best.better(form);
                }
            }
            if let Some(inverse) = fraction.recip() {
                for pair in split::splits(&inverse).iter().take(MAX_SPLITS) {
                    if let Some(form) = self.sum_of(pair, depth - 1, true) {
                        best = best.better(form);
                    }
                }
            }
        }
        self.known.insert(key, best.clone());
        Some(best)
    }

    /// The sum of two fractions, or its reciprocal; with and without what both share before it.
    fn sum_of(&mut self, pair: &split::Pair, depth: usize, inverse: bool) -> Option<Form> {
        let (a, b) = pair;
        let mut best = self.written(a, b, None, depth, inverse)?;
        let above = gcd(a.numerator(), b.numerator());
        let below = gcd(a.denominator(), b.denominator());
        let shared = Fraction::new(&above, &below)?;
        // A mere s stays with the terms: s·L is an impedance.
        let symbols = |part: &Polynomial| part.variables().any(|variable| variable != Var::S);
        if symbols(shared.numerator()) || symbols(shared.denominator()) {
            let (a, b) = (a.checked_div(&shared)?, b.checked_div(&shared)?);
            best = best.better(self.written(&a, &b, Some(&shared), depth, inverse)?);
        }
        Some(best)
    }

    fn written(
        &mut self,
        a: &Fraction,
        b: &Fraction,
        factor: Option<&Fraction>,
        depth: usize,
        inverse: bool,
    ) -> Option<Form> {
        let sum = order::sum([self.best(a, depth)?.formula, self.best(b, depth)?.formula]);
        let factor = match factor {
            None => Formula::integer(1),
            Some(factor) => {
                let factor = if inverse { factor.recip()? } else { factor.clone() };
                Factored::new(&factor, &self.writer)?.write(&mut self.writer).formula
            }
        };
        if !inverse {
            return Some(Form::new(product([factor, sum])));
        }
        let negative = sum.is_negative();
        let sum = cost::unsigned(&sum).clone();
        let reciprocal = Formula::quotient(Formula::integer(1), sum.clone());
        let mut form = Form::new(product([factor.clone(), reciprocal]));
        if let Some(parallel) = inverse::inverse(&sum, self.writer.letters) {
            form = form.better(Form::new(product([factor, parallel])));
        }
        Some(if negative { Form::new(form.formula.negative()) } else { form })
    }
}

/// Writes coefficients for other shapes, all of one fraction with one memory.
pub(super) struct Coefficients<'a> {
    search: Search<'a>,
}

impl<'a> Coefficients<'a> {
    /// For coefficients of these polynomials.
    pub(super) fn new(polynomials: &[&Polynomial], letters: Lettering<'a>) -> Self {
        let writer = Writer::new(Ring::new(polynomials), letters);
        Self { search: Search { writer, known: FxHashMap::default() } }
    }

    /// A polynomial, factored.
    pub(super) fn polynomial(&mut self, polynomial: &Polynomial) -> Formula {
        let writer = &mut self.search.writer;
        match Laurent::new(polynomial, &writer.ring) {
            Some(sum) if !polynomial.is_zero() => writer.sum(&sum).formula,
            _ => writer.letters.polynomial(polynomial),
        }
    }

    /// The irreducible factors of a fraction, each by powers of `s`.
    pub(super) fn factored(&mut self, fraction: &Fraction) -> Option<Formula> {
        let factored = Factored::new(fraction, &self.search.writer)?;
        Some(factored.plain(&mut self.search.writer))
    }

    /// a/b in compact form.
    pub(super) fn ratio(&mut self, a: &Polynomial, b: &Polynomial) -> Formula {
        let ratio = Fraction::new(a, b);
        if let Some(decimals) = ratio.as_ref().and_then(|ratio| self.decimals(ratio)) {
            return decimals;
        }
        let form = ratio.and_then(|ratio| self.search.best(&ratio, 2));
        match form {
            Some(form) => form.formula,
            None => Formula::quotient(self.polynomial(a), self.polynomial(b)),
        }
    }

    /// Over a large number: term by term, so that each coefficient is one decimal.
    fn decimals(&self, fraction: &Fraction) -> Option<Formula> {
        let writer = &self.search.writer;
        let below = fraction
            .denominator()
            .to_constant()
            .filter(|below| *below > sum::MAX_DIVISOR.into())?;
        let sum = Laurent::new(fraction.numerator(), &writer.ring)?;
        let terms = sum.terms.iter().map(|(exponents, coefficient)| {
            let number = BigRational::new(laurent::integer(*coefficient), below.clone());
            writer.monomial(exponents, &number)
        });
        Some(order::sum(terms))
    }
}
