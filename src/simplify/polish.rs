//! After the expansion: a formula is shortened as it is written.
//!
//! In turn, the step that costs least of the goal for each symbol that it saves: an operand of a sum or a
//! parallel is left out, or two symbols of nearly the same value become one. What is left is written
//! anew when that is shorter.

use std::cell::RefCell;

use rustc_hash::FxHashMap;

use super::Watch;
use super::goal::Goal;
use super::matched::Matched;
use super::program::Program;
use super::pruning::{fraction, parts, prunings, renamed, symbols};
use super::roots::{self, ExactRoots};
use super::target::Target;
use crate::algebra::{Fraction, Polynomial, Var};
use crate::analysis::NumericForm;
use crate::circuit::{Number, Symbol};
use crate::typeset::Formula;
use crate::typeset::shape::{Lettering, compact};
use num_traits::{ToPrimitive, Zero};

/// Formulas up to this length are written anew after each step.
const REWRITTEN: u64 = 60;
/// The cost of a step counts at least this, so that among free ones the longest goes first.
const FREE: f64 = 1e-3;
/// An operand of a sum counts as this part of a symbol.
const PART: f64 = 0.2;
/// Points at which steps are ranked, for long formulas and for short ones.
const FEW_POINTS: usize = 10;
const RANKING_POINTS: usize = 30;
/// Merges that are written anew in each round.
const MERGES: usize = 3;
/// Formulas up to this length count as short.
const SHORT: u64 = 80;

/// A formula and what it costs.
#[derive(Clone, Debug)]
pub(crate) struct Written {
    pub(crate) formula: Formula,
    pub(crate) length: u64,
    /// Operands of its sums and parallels.
    pub(crate) parts: u64,
    /// Of the goal.
    pub(crate) used: f64,
    /// Symbols that stand for others: (the one that is gone, the one that is written).
    pub(crate) merged: Vec<(u32, u32)>,
}

impl Written {
    fn new(formula: Formula, used: f64, merged: Vec<(u32, u32)>) -> Self {
        Self { length: formula.symbols(), parts: parts(&formula), used, formula, merged }
    }

    /// What counts: the symbols, and among formulas with as many of them the operands of sums.
    pub(crate) fn size(&self) -> (u64, u64) {
        (self.length, self.parts)
    }

    /// How much shorter another formula is, in symbols.
    fn saves(&self, other: &Self) -> f64 {
        let fewer = |a: u64, b: u64| a as f64 - b as f64;
        fewer(self.length, other.length) + PART * fewer(self.parts, other.parts).max(0.0)
    }
}

/// What a formula is held against besides magnitude and phase.
#[derive(Clone, Copy, Debug)]
pub(crate) struct Context<'a> {
    pub(crate) symbols: &'a [Symbol],
    pub(crate) letters: Lettering<'a>,
    /// Symbols that may be taken for one.
    pub(crate) matched: &'a Matched,
    pub(crate) roots: &'a ExactRoots,
    pub(crate) numeric: Option<&'a NumericForm>,
    pub(crate) goal: &'a Goal,
    /// In Hz.
    pub(crate) band: (f64, f64),
    /// What has been written already: plans meet on the way.
    pub(crate) known: &'a RefCell<FxHashMap<Fraction, Formula>>,
}

impl Context<'_> {
    /// Whether a fraction is one that may stand for the exact function: its poles lie on the same sides of the
    /// imaginary axis, and the goals for roots and coefficients are met.
    pub(crate) fn allows(&self, fraction: &Fraction) -> bool {
        !fraction.is_zero() && self.roots_fit(fraction) && self.coefficients_fit(fraction)
    }

    fn roots_fit(&self, fraction: &Fraction) -> bool {
        let Some([zeros, poles]) = &self.roots.sides else { return true };
        let Some([own_zeros, own_poles]) = roots::of_fraction(fraction, *self) else {
            return false;
        };
        let fits = |exact: &[_], own: &[_]| {
            self.goal.roots.is_none_or(|part| roots::all_within(exact, own, self.band, part))
        };
        roots::right(&own_poles) == roots::right(poles)
            && fits(zeros, &own_zeros)
            && fits(poles, &own_poles)
    }

    /// Coefficients are compared with the lowest one below the bar as 1.
    fn coefficients_fit(&self, fraction: &Fraction) -> bool {
        let (Some(part), Some(numeric)) = (self.goal.coefficients, self.numeric) else {
            return true;
        };
        let values = |of: &Polynomial| -> Vec<Number> {
            let value = |variable: Var| self.value(variable);
            of.coefficients(Var::S).iter().map(|c| c.evaluate(value)).collect()
        };
        let (above, below) = (values(fraction.numerator()), values(fraction.denominator()));
        let Some(unit) = below.iter().find(|c| !c.is_zero()).cloned() else { return false };
        let near = |own: &[Number], exact: &[Number]| {
            own.iter().enumerate().filter(|(_, c)| !c.is_zero()).all(|(power, own)| {
                let exact = exact.get(power).filter(|c| !c.is_zero());
                let ratio = exact.and_then(|exact| (own / &unit / exact).to_f64());
                ratio.is_some_and(|ratio| (ratio - 1.0).abs() <= part)
            })
        };
        near(&above, &numeric.numerator) && near(&below, &numeric.denominator)
    }

    /// The fraction in compact form.
    pub(crate) fn compact(&self, fraction: &Fraction) -> Formula {
        if let Some(known) = self.known.borrow().get(fraction) {
            return known.clone();
        }
        let formula = compact(fraction, self.letters);
        self.known.borrow_mut().insert(fraction.clone(), formula.clone());
        formula
    }

    /// The nominal value of a variable.
    pub(crate) fn value(&self, variable: Var) -> Number {
        let symbol = variable.0.checked_sub(1).and_then(|index| self.symbols.get(index as usize));
        if self.letters.pi == Some(variable) {
            return crate::numeric::exact_pi();
        }
        symbol.and_then(|symbol| symbol.nominal.clone()).unwrap_or_else(Number::zero)
    }
}

/// Writes a fraction.
pub(crate) fn written(target: &Target, context: Context<'_>, fraction: &Fraction) -> Written {
    measured(target, context.compact(fraction), Vec::new())
}

pub(crate) fn measured(target: &Target, formula: Formula, merged: Vec<(u32, u32)>) -> Written {
    let used = target.used(&Program::new(&formula));
    Written::new(formula, used, merged)
}

/// How a formula is shortened.
#[derive(Clone, Copy, Debug)]
pub(crate) struct Manner {
    /// Of the goal, what may be used.
    pub(crate) share: f64,
    /// Whether the shape may change.
    pub(crate) rewrite: bool,
}

/// Shortens a formula; every stage goes to `steps`.
pub(crate) fn polish(
    target: &Target,
    context: Context<'_>,
    start: Written,
    manner: Manner,
    steps: &mut Vec<Written>,
    watch: &mut dyn Watch,
) -> Written {
    let [few, coarse] = [FEW_POINTS, RANKING_POINTS].map(|points| target.coarse(points));
    let length = start.length;
    let mut now = start;
    let mut refused: Vec<Formula> = Vec::new();
    while !watch.expired() {
        watch.progress("shortening", (length - now.length) as usize, length as usize);
        let ranking = if now.length > SHORT { &few } else { &coarse };
        let Some(next) = next(ranking, context, &now, manner, &refused) else { break };
        let settled = settled(target, context, &next, manner.rewrite);
        match settled.filter(|settled| settled.used <= manner.share) {
            Some(better) => {
                now = better;
                refused.clear();
                steps.push(now.clone());
            }
            None => refused.push(next.formula),
        }
    }
    now
}

/// The best single step by the points that rank.
fn next(
    coarse: &Target,
    context: Context<'_>,
    now: &Written,
    manner: Manner,
    refused: &[Formula],
) -> Option<Written> {
    let mut best: Option<(f64, Written)> = None;
    let mut offer = |candidate: Written| {
        if candidate.used > manner.share
            || candidate.size() >= now.size()
            || refused.contains(&candidate.formula)
        {
            return;
        }
        let cost = (candidate.used - now.used).max(FREE) / now.saves(&candidate);
        if best.as_ref().is_none_or(|(least, _)| cost < *least) {
            best = Some((cost, candidate));
        }
    };
    for formula in prunings(&now.formula) {
        let used = coarse.used_within(&Program::new(&formula), manner.share);
        if used <= manner.share {
            offer(Written::new(formula, used, now.merged.clone()));
        }
    }
    if manner.rewrite && now.length <= REWRITTEN {
        for candidate in merges(coarse, context, now, manner.share) {
            if let Some(fraction) = fraction(&candidate.formula, context.letters) {
                offer(measured(coarse, context.compact(&fraction), candidate.merged));
            }
        }
    }
    best.map(|(_, written)| written)
}

/// The formulas with one symbol in the place of another that use least of the goal; not written anew yet.
fn merges(coarse: &Target, context: Context<'_>, now: &Written, share: f64) -> Vec<Written> {
    let mut merges: Vec<Written> = context
        .matched
        .among(&symbols(&now.formula))
        .map(|(from, into)| {
            let mut merged = now.merged.clone();
            merged.push((from.0, into.0));
            measured(coarse, renamed(&now.formula, from.0, into.0), merged)
        })
        .filter(|candidate| candidate.used <= share)
        .collect();
    merges.sort_by(|a, b| a.used.total_cmp(&b.used).then(a.merged.cmp(&b.merged)));
    merges.truncate(MERGES);
    merges
}

/// The formula at all points, or what it is when written anew, if that is shorter; none where it may not
/// stand for the exact function.
fn settled(
    target: &Target,
    context: Context<'_>,
    next: &Written,
    rewrite: bool,
) -> Option<Written> {
    let plain = measured(target, next.formula.clone(), next.merged.clone());
    if next.length > REWRITTEN {
        return Some(plain);
    }
    let fraction = fraction(&next.formula, context.letters)?;
    if !context.allows(&fraction) {
        return None;
    }
    if !rewrite {
        return Some(plain);
    }
    let anew = measured(target, context.compact(&fraction), next.merged.clone());
    Some(if anew.size() <= plain.size() { anew } else { plain })
}
