//! From a reduced diagram to a fraction: all terms where they are few, else the largest of each
//! coefficient, and of these the ones that matter.

use std::collections::BTreeMap;

use num_bigint::BigInt;
use num_traits::ToPrimitive;

use super::target::{C, Candidate, Target};
use super::{Watch, target};
use crate::algebra::{Fraction, Polynomial, Var};
use crate::analysis::total;
use crate::elimination::{Elimination, Side, symbol_of};

/// Terms up to which everything is expanded.
const EXPANDED: u32 = 3_000;
/// Terms of one coefficient that are looked at.
const MOST_TERMS: usize = 2_000;
/// Of the largest term of a coefficient, the size below which no more are asked for; tried in turn.
const SMALLEST: [f64; 4] = [0.1, 0.02, 0.003, 0.0003];
/// Rounds of taking terms out.
const ROUNDS: usize = 8;

/// A fraction that uses at most `share` of the goal, with as few terms as that allows when `pruned`.
pub(crate) fn fraction(
    target: &Target,
    elimination: &Elimination,
    share: f64,
    pruned: bool,
    watch: &mut dyn Watch,
) -> Option<Fraction> {
    let counts = elimination.count_terms();
    let allowed = if counts.exact { EXPANDED } else { 10 * EXPANDED };
    if total(&counts) <= allowed.into() {
        let (above, below) = elimination.expand();
        let fraction = Fraction::new(&above, &below)?;
        return if pruned {
            Terms::new(&fraction, target)?.prune(target, share)
        } else {
            Some(fraction)
        };
    }
    let mut largest = elimination.largest_terms(target.nominal());
    for (round, smallest) in SMALLEST.into_iter().enumerate() {
        watch.progress("taking the largest terms", round, SMALLEST.len());
        let mut sides = [Side::Numerator, Side::Denominator].map(|side| {
            let Some((low, high)) = largest.powers(side) else { return Polynomial::zero() };
            let coefficients = (low..=high).map(|power| {
                let mut taken: Vec<(Vec<(Var, u32)>, BigInt)> = Vec::new();
                let mut first = None;
                for rank in 0..MOST_TERMS {
                    let Some(term) = largest.term(side, power, rank) else { break };
                    let first = *first.get_or_insert(term.log2);
                    if term.log2 < first + libm::log2(smallest) {
                        break;
                    }
                    taken.push((term.powers, term.coefficient));
                }
                Polynomial::from_terms(taken)
            });
            Polynomial::sum(coefficients)
        });
        let [above, below] = std::mem::take(&mut sides);
        if below.is_zero() || above.is_zero() {
            continue;
        }
        let terms = Terms::of(&above, &below, target);
        if let Some(fraction) = terms.prune(target, share) {
            return Some(fraction);
        }
        if watch.expired() {
            return None;
        }
    }
    None
}

/// The terms of a fraction and their values.
struct Terms {
    /// Side, powers, coefficient.
    terms: Vec<(usize, Vec<(Var, u32)>, BigInt)>,
    kept: Vec<bool>,
    unit: f64,
}

impl Terms {
    fn new(fraction: &Fraction, target: &Target) -> Option<Self> {
        (!fraction.is_zero())
            .then(|| Self::of(fraction.numerator(), fraction.denominator(), target))
    }

    fn of(above: &Polynomial, below: &Polynomial, target: &Target) -> Self {
        let terms: Vec<_> = [above, below]
            .into_iter()
            .zip(0..)
            .flat_map(|(side, which)| {
                side.terms().map(move |(powers, c)| (which, powers.collect::<Vec<_>>(), c))
            })
            .collect();
        let ends = [target.points.first(), target.points.last()].map(|s| s.map_or(1.0, |s| s.im));
        Self { kept: vec![true; terms.len()], terms, unit: (ends[0] * ends[1]).sqrt() }
    }

    /// The value and the power of `s` of each term, each side scaled by a power of its own so that
    /// nothing leaves the range of a double; the power of `s` in units of the band's middle.
    fn values(&self, symbols: &[f64]) -> (Vec<(usize, i32, f64)>, f64) {
        let logs: Vec<(f64, f64, i32)> = self
            .terms
            .iter()
            .map(|(_, powers, coefficient)| {
                let number = coefficient.to_f64().unwrap_or(f64::INFINITY);
                let (mut log, mut sign, mut s_power) =
                    (libm::log2(number.abs()), number.signum(), 0);
                for &(variable, power) in powers {
                    match symbol_of(variable) {
                        Some(symbol) => {
                            let value = symbols[symbol.0 as usize];
                            log += f64::from(power) * libm::log2(value.abs());
                            sign *= value.signum().powi(power as i32);
                        }
                        None => {
                            log += f64::from(power) * libm::log2(self.unit);
                            s_power = power as i32;
                        }
                    }
                }
                (log, sign, s_power)
            })
            .collect();
        let top = [0, 1].map(|side| {
            let of_side = self.terms.iter().zip(&logs).filter(|(term, _)| term.0 == side);
            of_side.map(|(_, value)| value.0).fold(f64::NEG_INFINITY, f64::max)
        });
        let values = self
            .terms
            .iter()
            .zip(&logs)
            .map(|(term, &(log, sign, power))| (term.0, power, sign * (log - top[term.0]).exp2()))
            .collect();
        (values, (top[0] - top[1]).exp2())
    }

    /// Takes out terms, those that change least first, within the share of the goal.
    fn prune(mut self, target: &Target, share: f64) -> Option<Fraction> {
        if target.used(&self) > share {
            return None;
        }
        let coarse = target.coarse(40);
        for _ in 0..ROUNDS {
            let order = self.by_importance(&coarse, share);
            // The longest beginning of the list that can go at once.
            let (mut can, mut cannot) = (0, order.len() + 1);
            while cannot - can > 1 {
                let middle = usize::midpoint(can, cannot);
                self.set(&order[..middle], false);
                let fits = target.used(&self) <= share;
                self.set(&order[..middle], true);
                if fits {
                    can = middle;
                } else {
                    cannot = middle;
                }
            }
            self.set(&order[..can], false);
            if can == 0 {
                break;
            }
        }
        let side = |which: usize| {
            let kept =
                self.terms.iter().zip(&self.kept).filter(|(term, kept)| **kept && term.0 == which);
            Polynomial::from_terms(kept.map(|(term, _)| (term.1.clone(), term.2.clone())))
        };
        Fraction::new(&side(0), &side(1))
    }

    fn set(&mut self, terms: &[usize], kept: bool) {
        for &term in terms {
            self.kept[term] = kept;
        }
    }

    /// The terms that can go alone, those that use least of the goal first.
    fn by_importance(&self, target: &Target, share: f64) -> Vec<usize> {
        let (values, factor) = self.values(target.nominal());
        let powers: Vec<C> = target.points.iter().map(|s| s / self.unit).collect();
        let exact = &target.exact[0];
        let zero = 1e-12 * target::largest(exact);
        let sums: Vec<[C; 2]> = powers.iter().map(|&s| self.sides(&values, s)).collect();
        let mut ranked: Vec<(f64, usize)> = Vec::new();
        for (term, &(side, power, value)) in values.iter().enumerate() {
            if !self.kept[term] {
                continue;
            }
            let mut used = 0.0_f64;
            for ((sums, s), exact) in sums.iter().zip(&powers).zip(exact) {
                let mut sums = *sums;
                sums[side] -= s.powi(power) * value;
                let deviation = target::apart(sums[0] / sums[1] * factor, *exact, zero);
                used = used.max(target.goal.used(deviation));
            }
            if used <= share {
                ranked.push((used, term));
            }
        }
        ranked.sort_by(|a, b| a.0.total_cmp(&b.0).then(a.1.cmp(&b.1)));
        ranked.into_iter().map(|(_, term)| term).collect()
    }

    fn sides(&self, values: &[(usize, i32, f64)], s: C) -> [C; 2] {
        let mut coefficients: [BTreeMap<i32, f64>; 2] = Default::default();
        for (&(side, power, value), _) in values.iter().zip(&self.kept).filter(|(_, kept)| **kept) {
            *coefficients[side].entry(power).or_insert(0.0) += value;
        }
        coefficients.map(|side| side.iter().map(|(&power, value)| s.powi(power) * value).sum())
    }
}

impl Candidate for Terms {
    fn values(&self, symbols: &[f64], points: &[C]) -> Vec<C> {
        let (values, factor) = self.values(symbols);
        let mut coefficients: [BTreeMap<i32, f64>; 2] = Default::default();
        for (&(side, power, value), _) in values.iter().zip(&self.kept).filter(|(_, kept)| **kept) {
            *coefficients[side].entry(power).or_insert(0.0) += value;
        }
        points
            .iter()
            .map(|s| {
                let s = s / self.unit;
                let [above, below] = [0, 1].map(|side: usize| {
                    coefficients[side].iter().map(|(&k, value)| s.powi(k) * value).sum::<C>()
                });
                above / below * factor
            })
            .collect()
    }
}
