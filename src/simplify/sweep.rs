//! The measure that counts: a formula against the exact function on a dense grid, finer where either
//! changes fast, and searched for the largest deviation between its points.

use std::f64::consts::TAU;

use super::target::{C, Candidate, Deviation, Worst, apart};
use crate::elimination::{AtValues, Elimination};

/// Between two neighbours no larger change than this is left undivided.
const STEP_DEG: f64 = 15.0;
const STEP_DB: f64 = 2.0;
/// How often an interval is halved for that.
const HALVINGS: u32 = 10;
/// Points at most.
const MOST_POINTS: usize = 6_000;
/// Steps of the golden section.
const SECTIONS: usize = 24;
/// Local maxima that are searched, for magnitude and for phase.
const MAXIMA: usize = 4;
/// What is smaller than the largest value by this factor is 0 up to rounding.
const ZERO: f64 = 1e-12;

/// Where a function is measured.
#[derive(Clone, Debug)]
pub(crate) struct Grid {
    /// Ends of the band in Hz.
    pub(crate) band: (f64, f64),
    /// Points, evenly by the logarithm.
    pub(crate) points: usize,
    /// Frequencies that must be among them, in Hz.
    pub(crate) marked: Vec<f64>,
}

impl Grid {
    /// All points in Hz, ascending.
    pub(crate) fn hertz(&self) -> Vec<f64> {
        let (low, high) = self.band;
        let last = self.points.max(2) - 1;
        let mut hertz: Vec<f64> = (0..=last)
            .map(|k| match k {
                0 => low,
                k if k == last => high,
                k => low * libm::pow(high / low, k as f64 / last as f64),
            })
            .collect();
        hertz.extend(self.marked.iter().copied().filter(|hz| (low..=high).contains(hz)));
        hertz.sort_by(f64::total_cmp);
        hertz.dedup();
        hertz
    }
}

struct Pair<'a> {
    exact: AtValues<'a>,
    candidate: &'a dyn Candidate,
    symbols: &'a [f64],
}

#[derive(Clone, Copy)]
struct Point {
    hz: f64,
    exact: C,
    value: C,
}

impl Pair<'_> {
    fn at(&self, hz: f64) -> Point {
        let s = C::new(0.0, TAU * hz);
        let value = self.candidate.values(self.symbols, &[s]).first().copied().unwrap_or_default();
        Point { hz, exact: self.exact.value(s), value }
    }
}

/// The largest deviations at these values of the symbols, searched for between the points too.
pub(crate) fn worst(
    exact: &Elimination,
    candidate: &dyn Candidate,
    symbols: &[f64],
    grid: &Grid,
) -> Worst {
    let pair = Pair { exact: exact.at_values(symbols), candidate, symbols };
    let Measured { points, deviations, zero, mut worst } = measured(&pair, grid);
    let deviation = |point: &Point| apart(point.value, point.exact, zero);
    for part in [|d: &Deviation| d.db, |d: &Deviation| d.deg] {
        for index in maxima(&deviations, part) {
            let low = points[index.saturating_sub(1)].hz;
            let high = points[(index + 1).min(points.len() - 1)].hz;
            for point in golden(&pair, low, high, &|point| part(&deviation(point))) {
                worst.take(deviation(&point), point.hz);
            }
        }
    }
    worst
}

/// The largest deviations at the points alone.
pub(crate) fn at_points(
    exact: &Elimination,
    candidate: &dyn Candidate,
    symbols: &[f64],
    grid: &Grid,
) -> Worst {
    let pair = Pair { exact: exact.at_values(symbols), candidate, symbols };
    measured(&pair, grid).worst
}

struct Measured {
    points: Vec<Point>,
    deviations: Vec<Deviation>,
    /// Up to here a value is 0.
    zero: f64,
    worst: Worst,
}

fn measured(pair: &Pair<'_>, grid: &Grid) -> Measured {
    let points = divided(pair, grid);
    let zero = ZERO * points.iter().map(|point| point.exact.norm()).fold(0.0, f64::max);
    let deviations: Vec<Deviation> =
        points.iter().map(|point| apart(point.value, point.exact, zero)).collect();
    let mut worst = Worst::default();
    for (point, deviation) in points.iter().zip(&deviations) {
        worst.take(*deviation, point.hz);
    }
    Measured { points, deviations, zero, worst }
}

/// The points of the grid and more where the functions change fast.
fn divided(pair: &Pair<'_>, grid: &Grid) -> Vec<Point> {
    let start: Vec<Point> = grid.hertz().into_iter().map(|hz| pair.at(hz)).collect();
    let mut left = MOST_POINTS.saturating_sub(start.len());
    let mut points: Vec<Point> = start[..1].to_vec();
    for two in start.windows(2) {
        let mut pending = vec![(two[1], HALVINGS)];
        while let Some((next, halvings)) = pending.pop() {
            let last = points[points.len() - 1];
            let apart = Deviation::between(next.exact, last.exact);
            let own = Deviation::between(next.value, last.value);
            let jumps = apart.deg.max(own.deg) > STEP_DEG || apart.db.max(own.db) > STEP_DB;
            if jumps && halvings > 0 && left > 0 {
                left -= 1;
                pending.push((next, halvings - 1));
                pending.push((pair.at((last.hz * next.hz).sqrt()), halvings - 1));
            } else {
                points.push(next);
            }
        }
    }
    points
}

/// Places of the largest local maxima.
fn maxima(of: &[Deviation], part: impl Fn(&Deviation) -> f64) -> Vec<usize> {
    let value = |index: usize| part(&of[index]);
    let mut found: Vec<usize> = (0..of.len())
        .filter(|&k| {
            (k == 0 || value(k) >= value(k - 1)) && (k + 1 == of.len() || value(k) >= value(k + 1))
        })
        .collect();
    found.sort_by(|&a, &b| value(b).total_cmp(&value(a)).then(a.cmp(&b)));
    found.truncate(MAXIMA);
    found
}

/// Points of a golden-section search for a maximum between two frequencies (Kiefer 1953).
fn golden(pair: &Pair<'_>, low: f64, high: f64, of: &dyn Fn(&Point) -> f64) -> Vec<Point> {
    const RATIO: f64 = 0.618_033_988_749_894_9;
    if high <= low {
        return Vec::new();
    }
    let at = |log: f64| pair.at(libm::exp(log));
    let (mut a, mut b) = (libm::log(low), libm::log(high));
    let (mut c, mut d) = (b - RATIO * (b - a), a + RATIO * (b - a));
    let (mut at_c, mut at_d) = (at(c), at(d));
    for _ in 0..SECTIONS {
        if of(&at_c) >= of(&at_d) {
            (b, d, at_d) = (d, c, at_c);
            c = b - RATIO * (b - a);
            at_c = at(c);
        } else {
            (a, c, at_c) = (c, d, at_d);
            d = a + RATIO * (b - a);
            at_d = at(d);
        }
    }
    vec![at_c, at_d]
}
