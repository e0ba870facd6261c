//! The search for the shortest formula that meets a goal.
//!
//! Several plans are followed, each a different way to spend the goal: how much of it goes to elements
//! that are left out, how much to values that are taken equal, and whether terms are picked before the
//! formula is written. The shortest result wins. It is then measured on a dense grid; where it fails, the
//! places of failure are added to the points of the search, and the search is made again.

use super::dropping::{self, Dropped, Merged, Reduced};
use super::polish::{Context, Manner, Written, measured, polish, written};
use super::target::Target;
use super::{Watch, pruning, sections, terms};
use crate::algebra::Fraction;
use crate::elimination::Elimination;

/// A way to spend the goal: shares of it used after each stage.
#[derive(Clone, Copy, Debug)]
struct Plan {
    /// Elements left out before values are taken equal.
    drop: f64,
    /// After that.
    merge: f64,
    /// Elements left out after that.
    again: f64,
}

/// The share that every plan uses first.
const BASE: f64 = 0.03;

const PLANS: [Plan; 7] = [
    Plan { drop: 0.2, merge: 0.5, again: 0.6 },
    Plan { drop: 0.4, merge: 0.6, again: 0.8 },
    Plan { drop: 0.7, merge: 0.8, again: 0.9 },
    Plan { drop: 0.95, merge: 0.95, again: 0.95 },
    Plan { drop: 0.2, merge: 0.0, again: 0.0 },
    Plan { drop: 0.6, merge: 0.0, again: 0.0 },
    Plan { drop: 0.03, merge: 0.06, again: 0.1 },
];

/// The plan by which more is found out about a function than its formula holds.
const WIDER: Plan = Plan { drop: 0.4, merge: 0.6, again: 0.8 };

/// Terms of the exact function up to which it is itself shortened, nothing left out before.
const SMALL: usize = 400;
/// Terms of a fraction up to which it is written without picking terms before.
const WRITABLE: usize = 500;

/// A formula that begins this many times as long as the best one does not overtake it.
const HOPELESS: u64 = 6;
/// Terms of a fraction up to which picking is left to the shortening.
const FEW: usize = 20;
/// The same once there is a formula of at most so many symbols.
const WORTH: usize = 250;
const SHORT: u64 = 40;

/// A formula that meets the goal at the points of the search.
#[derive(Clone, Debug)]
pub(crate) struct Found {
    pub(crate) written: Written,
    pub(crate) dropped: Vec<Dropped>,
    pub(crate) merged: Vec<Merged>,
}

/// What every plan begins with: the function without what hardly matters.
pub(crate) fn base(target: &Target, exact: &Elimination, watch: &mut dyn Watch) -> Reduced {
    let mut base = Reduced::nothing(exact);
    dropping::drop(target, &mut base, BASE, watch);
    base
}

/// The shortest formula that is found from a base; stages on the way go to `steps`.
pub(crate) fn search(
    target: &Target,
    context: Context<'_>,
    base: &Reduced,
    expanded: Option<&Fraction>,
    steps: &mut Vec<Written>,
    watch: &mut dyn Watch,
) -> Option<Found> {
    let mut search = Search { target, context, best: None, started: Vec::new(), steps };
    if let Some(fraction) = expanded.filter(|of| terms(of) <= SMALL) {
        search.take(fraction, &Reduced { dropped: Vec::new(), ..base.clone() }, watch);
    }
    let mut done: Vec<Reduced> = Vec::new();
    for plan in PLANS {
        if watch.expired() {
            break;
        }
        let mut reduced = base.clone();
        dropping::drop(target, &mut reduced, plan.drop, watch);
        dropping::merge(target, context.matched, &mut reduced, plan.merge, watch);
        dropping::drop(target, &mut reduced, plan.again, watch);
        let same =
            |other: &Reduced| other.dropped == reduced.dropped && other.merged == reduced.merged;
        if done.iter().any(same) {
            continue;
        }
        search.follow(&reduced, watch);
        done.push(reduced);
    }
    search.split(watch);
    search.best
}

/// One quick look at a function, as a fraction that is within the goal of the target; for its roots.
pub(crate) fn glance(
    target: &Target,
    context: Context<'_>,
    exact: &Elimination,
    watch: &mut dyn Watch,
) -> Option<Fraction> {
    let mut reduced = base(target, exact, watch);
    dropping::drop(target, &mut reduced, WIDER.drop, watch);
    dropping::merge(target, context.matched, &mut reduced, WIDER.merge, watch);
    dropping::drop(target, &mut reduced, WIDER.again, watch);
    let start = terms::fraction(target, &reduced.elimination, 1.0, true, watch)?;
    let start = written(target, context, &start);
    let manner = Manner { share: 1.0, rewrite: true };
    let end = polish(target, context, start, manner, &mut Vec::new(), watch);
    pruning::fraction(&end.formula, context.letters)
}

struct Search<'a> {
    target: &'a Target,
    context: Context<'a>,
    best: Option<Found>,
    /// Fractions that were shortened already.
    started: Vec<Fraction>,
    steps: &'a mut Vec<Written>,
}

impl Search<'_> {
    /// Writes what is left of the function in two ways: with the terms that matter, and with all.
    fn follow(&mut self, reduced: &Reduced, watch: &mut dyn Watch) {
        let share = f64::midpoint(reduced.used.max(0.6), 1.0);
        let whole = terms::fraction(self.target, &reduced.elimination, share, false, watch);
        let few = whole.as_ref().is_some_and(|fraction| terms(fraction) <= FEW);
        let picked = if few {
            None
        } else {
            terms::fraction(self.target, &reduced.elimination, share, true, watch)
        };
        if let Some(fraction) = picked {
            self.take(&fraction, reduced, watch);
        }
        let worth = |fraction: &Fraction| {
            let short = self.best.as_ref().is_some_and(|best| best.written.length <= SHORT);
            terms(fraction) <= if short { WORTH } else { WRITABLE }
        };
        if let Some(fraction) = whole.filter(worth) {
            self.take(&fraction, reduced, watch);
        }
    }

    /// Shortens a fraction and keeps the result if it is the best so far.
    fn take(&mut self, fraction: &Fraction, reduced: &Reduced, watch: &mut dyn Watch) {
        if self.started.contains(fraction) {
            return;
        }
        self.started.push(fraction.clone());
        let start = written(self.target, self.context, fraction);
        let hopeless =
            self.best.as_ref().is_some_and(|best| start.length > HOPELESS * best.written.length);
        if start.used > 1.0 || hopeless {
            return;
        }
        if self.context.allows(fraction) {
            self.keep(start.clone(), &reduced.dropped, &reduced.merged);
        }
        let manner = Manner { share: 1.0, rewrite: true };
        let end = polish(self.target, self.context, start, manner, self.steps, watch);
        self.keep(end, &reduced.dropped, &reduced.merged);
    }

    fn keep(&mut self, written: Written, dropped: &[Dropped], merged: &[Merged]) {
        let key = |written: &Written| (written.size(), written.used);
        let better = self.best.as_ref().is_none_or(|best| key(&written) < key(&best.written));
        let allowed = || {
            pruning::fraction(&written.formula, self.context.letters)
                .is_some_and(|fraction| self.context.allows(&fraction))
        };
        if better && written.used <= 1.0 && allowed() {
            self.steps.push(written.clone());
            let (dropped, merged) = (dropped.to_vec(), merged.to_vec());
            self.best = Some(Found { written, dropped, merged });
        }
    }

    /// Tries the best result as a product of sections.
    fn split(&mut self, watch: &mut dyn Watch) {
        let Some(best) = self.best.clone() else { return };
        let fraction = pruning::fraction(&best.written.formula, self.context.letters);
        let Some(formula) = fraction.and_then(|of| sections::split(&of, self.context)) else {
            return;
        };
        let start = measured(self.target, formula, best.written.merged.clone());
        if start.used > 1.0 {
            return;
        }
        let manner = Manner { share: 1.0, rewrite: false };
        let end = polish(self.target, self.context, start, manner, self.steps, watch);
        self.keep(end, &best.dropped, &best.merged);
    }
}

fn terms(of: &Fraction) -> usize {
    of.numerator().len() + of.denominator().len()
}
