//! Before anything is expanded: symbols that may go to 0 or to infinity, and symbols of nearly one
//! value that may be taken for one.
//!
//! A symbol at 0 or infinity is an element opened, shorted, or a parameter of a device idealised, and
//! is taken exactly, in the diagram. What each would cost comes from one sweep for all of them (the
//! function is bilinear in each); the cheapest go first, several at once as long as together they
//! use little of what is left, and each time the whole is measured against the exact function.

use super::Watch;
use super::matched::Matched;
use super::target::{C, Candidate, Target, Worst};
use crate::circuit::{LimitTo, SymbolId};
use crate::elimination::{Elimination, symbol_of, variable_of};

/// Points of the sweep that ranks.
const RANKING_POINTS: usize = 24;
/// Of what is left of the goal, the part that a batch may use by the estimate.
const BATCH_SHARE: f64 = 0.3;

/// A symbol that was taken to a limit.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(crate) struct Dropped {
    /// The symbol.
    pub symbol: SymbolId,
    /// Where it went.
    pub to: LimitTo,
    /// What that alone changes, over the band at the nominal values.
    pub change: Worst,
}

/// A symbol that was taken to be equal to another.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(crate) struct Merged {
    /// The symbol that is gone.
    pub from: SymbolId,
    /// The one that stands in its place.
    pub into: SymbolId,
    /// What that alone changes, over the band at the nominal values.
    pub change: Worst,
}

/// The function without the symbols that were dropped and merged.
#[derive(Clone, Debug)]
pub(crate) struct Reduced {
    pub(crate) elimination: Elimination,
    pub(crate) dropped: Vec<Dropped>,
    pub(crate) merged: Vec<Merged>,
    /// Of the goal.
    pub(crate) used: f64,
}

impl Reduced {
    /// The exact function, without any symbol of which only its limit can be told from rounding.
    pub(crate) fn nothing(exact: &Elimination) -> Self {
        Self { elimination: exact.clone(), dropped: Vec::new(), merged: Vec::new(), used: 0.0 }
    }
}

/// One limit and what it would cost.
#[derive(Clone, Copy, Debug)]
struct Offer {
    dropped: Dropped,
    /// Of the goal, altogether, by the sweep that ranks.
    used: f64,
}

/// Drops symbols as long as no more than `share` of the goal is used.
pub(crate) fn drop(target: &Target, now: &mut Reduced, share: f64, watch: &mut dyn Watch) {
    let coarse = target.coarse(RANKING_POINTS);
    let mut refused = Vec::new();
    let before = now.elimination.variables().len();
    while !watch.expired() {
        let left = now.elimination.variables().len();
        watch.progress("leaving elements out", before - left, before);
        let mut offers = offers(&coarse, &now.elimination);
        offers.retain(|offer| {
            offer.used <= share && !refused.contains(&(offer.dropped.symbol, offer.dropped.to))
        });
        let mut batch = batch(&offers, now.used, share);
        if batch.is_empty() {
            break;
        }
        loop {
            match tried(target, &now.elimination, batch).filter(|(_, after)| *after <= share) {
                Some((elimination, after)) => {
                    now.elimination = elimination;
                    now.dropped.extend(batch.iter().map(|offer| offer.dropped));
                    now.used = after;
                    break;
                }
                None if batch.len() > 1 => batch = &batch[..batch.len().div_ceil(4)],
                None => {
                    refused.push((batch[0].dropped.symbol, batch[0].dropped.to));
                    break;
                }
            }
        }
    }
}

/// Merges matched symbols of nearly one value as long as no more than `share` of the goal is
/// used, the cheapest pair first.
pub(crate) fn merge(
    target: &Target,
    matched: &Matched,
    now: &mut Reduced,
    share: f64,
    watch: &mut dyn Watch,
) {
    let coarse = target.coarse(RANKING_POINTS);
    while !watch.expired() {
        let present = now.elimination.variables().iter().filter_map(|&v| symbol_of(v));
        let present: Vec<SymbolId> = present.collect();
        let (done, left) = (now.merged.len(), present.len());
        watch.progress("taking equal what nearly is", done, done + left);
        let mut offers: Vec<(f64, SymbolId, SymbolId)> = matched
            .among(&present)
            .map(|(from, into)| {
                let renamed = now.elimination.renamed(variable_of(from), variable_of(into));
                (coarse.used(&renamed), from, into)
            })
            .filter(|(used, ..)| *used <= share)
            .collect();
        offers.sort_by(|a, b| a.0.total_cmp(&b.0).then((a.1, a.2).cmp(&(b.1, b.2))));
        let taken = offers.into_iter().find_map(|(_, from, into)| {
            let renamed = now.elimination.renamed(variable_of(from), variable_of(into));
            let used = target.used(&renamed);
            (used <= share).then_some((renamed, used, from, into))
        });
        let Some((renamed, used, from, into)) = taken else { break };
        let values = |of: &Elimination| of.values(target.nominal(), &target.points);
        let change = target.compare(&values(&renamed), &values(&now.elimination));
        now.merged.push(Merged { from, into, change });
        (now.elimination, now.used) = (renamed, used);
    }
}

/// The offers that are taken together: the first, and more while their costs add up to little.
fn batch(offers: &[Offer], used: f64, share: f64) -> &[Offer] {
    let mut left = BATCH_SHARE * (share - used).max(0.0);
    let mut count = 0;
    for offer in offers {
        left -= (offer.used - used).max(0.0);
        if count > 0 && left < 0.0 {
            break;
        }
        count += 1;
    }
    &offers[..count]
}

/// The function with these limits taken, and what of the goal it uses; none where a limit does not exist.
fn tried(target: &Target, from: &Elimination, batch: &[Offer]) -> Option<(Elimination, f64)> {
    let mut elimination = from.clone();
    for offer in batch {
        let variable = variable_of(offer.dropped.symbol);
        elimination = elimination.at_limit(variable, offer.dropped.to).ok()?;
    }
    let used = target.used(&elimination);
    (!elimination.is_zero() && used.is_finite()).then_some((elimination, used))
}

/// The better limit of each symbol of the exact function, and what it changes.
pub(crate) fn alone(target: &Target, exact: &Elimination) -> Vec<Dropped> {
    let offers = offers(&target.coarse(RANKING_POINTS), exact);
    offers.into_iter().map(|offer| offer.dropped).collect()
}

/// The better limit of each symbol, the cheapest first.
fn offers(target: &Target, elimination: &Elimination) -> Vec<Offer> {
    let at = elimination.at_values(target.nominal());
    let sweeps: Vec<_> = target.points.iter().map(|&s| at.extremes(s)).collect();
    let values: Vec<C> = sweeps.iter().map(|(value, _)| *value).collect();
    let mut offers = Vec::new();
    for index in 0..sweeps.first().map_or(0, |(_, extremes)| extremes.len()) {
        let symbol = sweeps[0].1[index].symbol;
        let offer = |to: LimitTo| {
            let limits: Option<Vec<C>> = sweeps
                .iter()
                .map(|(_, extremes)| match to {
                    LimitTo::Zero => extremes[index].at_zero,
                    LimitTo::Infinity => extremes[index].at_infinity,
                })
                .collect();
            let limits = limits?;
            let change = target.compare(&limits, &values);
            let used = target.goal.used(target.compare(&limits, &target.exact[0]).deviation());
            Some(Offer { dropped: Dropped { symbol, to, change }, used })
        };
        let [zero, infinity] = [LimitTo::Zero, LimitTo::Infinity].map(offer);
        let better = match (zero, infinity) {
            (Some(zero), Some(infinity)) if infinity.used < zero.used => Some(infinity),
            (zero, infinity) => zero.or(infinity),
        };
        offers.extend(better);
    }
    offers.sort_by(|a, b| a.used.total_cmp(&b.used).then(a.dropped.symbol.cmp(&b.dropped.symbol)));
    offers
}
