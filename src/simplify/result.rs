//! From a result of the exact analysis to a shorter formula with everything that is to be said of it.

use std::cell::RefCell;

use num_bigint::BigUint;

use super::Watch;
use super::dropping::{self, Dropped};
use super::error::SimplifyError;
use super::goal::Goal;
use super::matched::Matched;
use super::polish::{Context, Manner, Written, polish};
use super::program::Program;
use super::pruning;
use super::roots::{self, ExactRoots, Figure, FigureKind};
use super::samples::{self, MOST_CORNERS};
use super::search::{Found, base, glance, search};
use super::sweep::{self, Grid};
use super::target::{Target, Worst};
use crate::algebra::{Fraction, Var};
use crate::analysis::{ClosedForm, Entry, Notice};
use crate::circuit::{Circuit, LimitTo, SymbolId, SymbolRole};
use crate::elimination::{Elimination, symbol_of};
use crate::typeset::Formula;
use crate::typeset::answer::lettering_of;

/// Points of the search, and of the measure at the nominal values and at a corner.
const SEARCH_POINTS: usize = 61;
const DENSE_POINTS: usize = 601;
const CORNER_POINTS: usize = 81;
/// Corners whose error at the points is that near to the largest are searched between the points.
const NEAR: f64 = 0.95;
/// Corners that the search looks at from the beginning.
const SEARCH_CORNERS: usize = 8;
/// Searches, each with what the one before failed at.
const ROUNDS: usize = 5;
/// Node visits that the dense grid may take.
const DENSE_VISITS: usize = 2_000_000;
/// Node visits that the corners may take.
const VISITS: usize = 60_000_000;
/// The second pole is looked for up to this many times the upper end of the band.
const WIDER: f64 = 4.0;
/// How much coarser than the goal the chain of formulas goes on.
const COARSEST: f64 = 6.0;
/// Formulas of the chain that are told.
const MOST_STEPS: usize = 12;
/// Longer formulas are not told in the chain.
const LONGEST_STEP: u64 = 150;

/// A shorter formula and the evidence for it.
#[derive(Clone, Debug)]
pub struct Simplified {
    /// The formula.
    pub formula: Formula,
    /// The same as a fraction in lowest terms.
    pub fraction: Fraction,
    /// Terms of the exact function, before any met.
    pub terms_before: BigUint,
    /// Terms of the simplified one.
    pub terms_after: usize,
    /// Symbols of the exact function.
    pub symbols_before: usize,
    /// What was left out, the largest change first.
    pub left_out: Vec<LeftOut>,
    /// The error at the nominal values.
    pub worst: Worst,
    /// The error over the tolerances; none where there are none.
    pub corners: Option<Corners>,
    /// Ends of the band in Hz.
    pub band: (f64, f64),
    /// What was asked for.
    pub goal: Goal,
    /// Gain, poles, zeros.
    pub figures: Vec<Figure>,
    /// The chain of formulas, from coarse to fine.
    pub steps: Vec<Step>,
    /// Whether nothing shorter than the exact formula meets the goal.
    pub is_exact: bool,
    /// Whether the time was over before the search was.
    pub stopped: bool,
    /// Remarks.
    pub notices: Vec<Notice>,
}

/// The error at corners of the tolerances.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Corners {
    /// How many were measured.
    pub count: usize,
    /// Whether these are all there are.
    pub all: bool,
    /// The largest deviations.
    pub worst: Worst,
}

/// One symbol that the formula does without.
#[derive(Clone, Debug, PartialEq)]
pub struct LeftOut {
    /// The symbol.
    pub symbol: SymbolId,
    /// How it went.
    pub how: Left,
    /// What that alone changes; none where it went together with others only.
    pub change: Option<Worst>,
}

/// How a symbol went.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Left {
    /// To 0.
    Zero,
    /// To infinity.
    Infinity,
    /// It is taken to be equal to another.
    Equal(SymbolId),
    /// Its terms are small, or it cancels in what is left.
    Terms,
}

/// A formula of the chain.
#[derive(Clone, Debug)]
pub struct Step {
    /// The formula.
    pub formula: Formula,
    /// Its symbols.
    pub length: u64,
    /// The error at the nominal values.
    pub worst: Worst,
    /// Whether that is within the goal, at the nominal values.
    pub within: bool,
}

/// Looks for the shortest formula within the goal over a band in Hz; `chain` asks for the formulas on the
/// way.
///
/// # Errors
/// Missing nominal values, a result that is no function of the circuit, and nothing found.
pub fn simplify(
    circuit: &Circuit,
    entry: &Entry,
    band: (f64, f64),
    goal: &Goal,
    chain: bool,
    watch: &mut dyn Watch,
) -> Result<Simplified, SimplifyError> {
    let exact = entry.elimination.as_ref().ok_or(SimplifyError::NoFunction)?;
    if entry.noise.is_some() {
        return Err(SimplifyError::NoFunction);
    }
    let missing = missing(entry, exact);
    if !missing.is_empty() {
        return Err(SimplifyError::NoValues(missing));
    }
    let nominal = samples::nominal(&entry.symbols);
    let matched = Matched::new(circuit, &entry.symbols, &nominal);
    let roots = ExactRoots::new(entry.numeric.as_ref());
    let context = Context {
        symbols: &entry.symbols,
        letters: lettering_of(&entry.symbols),
        matched: &matched,
        roots: &roots,
        numeric: entry.numeric.as_ref(),
        goal,
        band,
        known: &RefCell::default(),
    };
    if exact.is_zero() {
        return Ok(nothing(goal, band));
    }
    Work { entry, exact, context, nominal }.run(chain, watch)
}

fn missing(entry: &Entry, exact: &Elimination) -> Vec<String> {
    let symbols = exact.variables().iter().filter_map(|&variable| symbol_of(variable));
    symbols
        .map(|id| &entry.symbols[id.0 as usize])
        .filter(|symbol| symbol.nominal.is_none() && symbol.role != SymbolRole::Pi)
        .map(|symbol| symbol.name.clone())
        .collect()
}

/// The function 0 has no shorter form.
fn nothing(goal: &Goal, band: (f64, f64)) -> Simplified {
    Simplified {
        formula: Formula::integer(0),
        fraction: Fraction::zero(),
        terms_before: BigUint::default(),
        terms_after: 0,
        symbols_before: 0,
        left_out: Vec::new(),
        worst: Worst::default(),
        corners: None,
        band,
        goal: *goal,
        figures: Vec::new(),
        steps: Vec::new(),
        is_exact: true,
        stopped: false,
        notices: Vec::new(),
    }
}

struct Work<'a> {
    entry: &'a Entry,
    exact: &'a Elimination,
    context: Context<'a>,
    nominal: Vec<f64>,
}

/// What a formula's measure gave.
struct Measured {
    worst: Worst,
    corners: Option<Corners>,
    /// Where the goal is not met: frequencies and corners.
    failures: (Vec<f64>, Vec<Vec<f64>>),
}

impl Work<'_> {
    fn run(&self, chain: bool, watch: &mut dyn Watch) -> Result<Simplified, SimplifyError> {
        let grid = Grid { band: self.context.band, points: SEARCH_POINTS, marked: self.marks() };
        let mut hertz = grid.hertz();
        if hertz.len() > 3 * SEARCH_POINTS {
            hertz = Grid { marked: Vec::new(), ..grid }.hertz();
        }
        let mut samples = vec![self.nominal.clone()];
        samples.extend(self.corners(SEARCH_CORNERS).samples);
        let mut target = Target::new(*self.context.goal, self.exact, &hertz, samples);
        if !target.exact.iter().flatten().all(|value| value.is_finite()) {
            return Err(SimplifyError::NotFinite);
        }
        let expanded = match &self.entry.form {
            ClosedForm::Expanded(fraction) => Some(fraction),
            ClosedForm::Nested(_) => None,
        };
        let base = base(&target, self.exact, watch);
        for _ in 0..ROUNDS {
            let mut steps = Vec::new();
            let found = search(&target, self.context, &base, expanded, &mut steps, watch);
            let Some(found) = found else { break };
            let measured = self.measure(&found.written.formula);
            let (hertz, corners) = &measured.failures;
            if hertz.is_empty() && corners.is_empty() {
                return self.result(&target, found, measured, steps, chain, watch);
            }
            if watch.expired() {
                break;
            }
            target.extend(self.exact, hertz, corners);
        }
        let fraction = expanded.ok_or(SimplifyError::NothingFound)?;
        let formula = self.context.compact(fraction);
        let measured = self.measure(&formula);
        let written = super::polish::measured(&target, formula, Vec::new());
        let found = Found { written, dropped: Vec::new(), merged: Vec::new() };
        self.result(&target, found, measured, Vec::new(), chain, watch)
    }

    /// Points of the dense grid: fewer where each costs much.
    fn dense(&self) -> usize {
        (DENSE_VISITS / self.exact.diagram_size().max(1)).clamp(DENSE_POINTS / 3, DENSE_POINTS)
    }

    fn marks(&self) -> Vec<f64> {
        self.context.roots.marks()
    }

    fn corners(&self, most: usize) -> samples::Corners {
        let used: Vec<SymbolId> =
            self.exact.variables().iter().filter_map(|&variable| symbol_of(variable)).collect();
        samples::corners(&self.entry.symbols, &used, most)
    }

    /// Measures a formula on the dense grid, at the nominal values and at the corners.
    fn measure(&self, formula: &Formula) -> Measured {
        let program = Program::new(formula);
        let goal = self.context.goal;
        let mut marked = self.marks();
        let own = pruning::fraction(formula, self.context.letters)
            .and_then(|fraction| roots::of_fraction(&fraction, self.context));
        marked.extend(own.iter().flatten().flatten().flat_map(|root| roots::marks(*root)));
        let mut failures = (Vec::new(), Vec::new());
        let grid = Grid { band: self.context.band, points: self.dense(), marked: marked.clone() };
        let worst = sweep::worst(self.exact, &program, &self.nominal, &grid);
        let blame = |worst: &Worst, hertz: &mut Vec<f64>| {
            if worst.db > goal.magnitude_db {
                hertz.push(worst.db_hz);
            }
            if worst.deg > goal.phase_deg {
                hertz.push(worst.deg_hz);
            }
        };
        blame(&worst, &mut failures.0);
        let visits = self.exact.diagram_size() * 2 * CORNER_POINTS;
        let corners = self.corners((VISITS / visits.max(1)).clamp(16, MOST_CORNERS));
        let grid = Grid { points: CORNER_POINTS, marked, ..grid };
        let mut over = Worst::default();
        let mut worst_corner = (1.0, None);
        for corner in self.worst_corners(&program, &corners.samples, &grid) {
            let here = sweep::worst(self.exact, &program, corner, &grid);
            let used = goal.used(here.deviation());
            if used > worst_corner.0 {
                worst_corner = (used, Some((here, corner.clone())));
            }
            over.merge(&here);
        }
        if let (_, Some((here, corner))) = worst_corner {
            blame(&here, &mut failures.0);
            failures.1.push(corner);
        }
        over.merge(&worst);
        let corners = (!corners.samples.is_empty()).then_some(Corners {
            count: corners.samples.len(),
            all: corners.all,
            worst: over,
        });
        Measured { worst, corners, failures }
    }

    /// The corners that are among the worst at the points of the grid, by magnitude or by phase.
    fn worst_corners<'c>(
        &self,
        program: &Program,
        corners: &'c [Vec<f64>],
        grid: &Grid,
    ) -> Vec<&'c Vec<f64>> {
        let each: Vec<Worst> = corners
            .iter()
            .map(|corner| sweep::at_points(self.exact, program, corner, grid))
            .collect();
        let mut all = Worst::default();
        each.iter().for_each(|worst| all.merge(worst));
        let near = |worst: &Worst| worst.db >= NEAR * all.db || worst.deg >= NEAR * all.deg;
        corners
            .iter()
            .zip(&each)
            .filter(|(_, worst)| near(worst))
            .map(|(corner, _)| corner)
            .collect()
    }

    fn result(
        &self,
        target: &Target,
        found: Found,
        measured: Measured,
        steps: Vec<Written>,
        chain: bool,
        watch: &mut dyn Watch,
    ) -> Result<Simplified, SimplifyError> {
        let formula = found.written.formula.clone();
        let fraction =
            pruning::fraction(&formula, self.context.letters).ok_or(SimplifyError::NothingFound)?;
        let stopped = watch.expired();
        let steps =
            if chain { self.chain(target, &found.written, steps, watch) } else { Vec::new() };
        let is_exact =
            matches!(&self.entry.form, ClosedForm::Expanded(exact) if *exact == fraction);
        let dc = self.entry.numeric.as_ref().and_then(|numeric| {
            use num_traits::{ToPrimitive, Zero};
            let (above, below) = (numeric.numerator.first()?, numeric.denominator.first()?);
            if below.is_zero() { None } else { (above / below).to_f64() }
        });
        Ok(Simplified {
            terms_before: self.entry.length.terms.clone(),
            terms_after: fraction.numerator().len() + fraction.denominator().len(),
            symbols_before: self.exact.variables().len(),
            left_out: self.left_out(target, &found, &formula),
            worst: measured.worst,
            corners: measured.corners,
            band: self.context.band,
            goal: *self.context.goal,
            figures: self.figures(&fraction, dc, watch),
            steps,
            is_exact,
            stopped,
            notices: self.notices(&fraction),
            fraction,
            formula,
        })
    }

    /// The figures; where the formula has one pole only, the second from a look beyond the band.
    fn figures(&self, fraction: &Fraction, dc: Option<f64>, watch: &mut dyn Watch) -> Vec<Figure> {
        let (from, to) = self.context.band;
        let mut figures = roots::figures(fraction, self.context.roots, dc, to, self.context);
        let first = |figure: &Figure| figure.kind == FigureKind::Pole(1);
        let only = fraction.denominator().degree(Var::S) == 1;
        let more = self.context.roots.sides.as_ref().is_some_and(|sides| sides[1].len() > 1);
        let place = figures.iter().position(first).filter(|_| only && more && !watch.expired());
        let Some(place) = place else { return figures };
        let context = Context { band: (from, WIDER * to), ..self.context };
        let grid = Grid { band: context.band, points: SEARCH_POINTS, marked: Vec::new() };
        let samples = vec![self.nominal.clone()];
        let target = Target::new(*context.goal, self.exact, &grid.hertz(), samples);
        if let Some(wider) = glance(&target, context, self.exact, watch) {
            let second = roots::second_pole(&wider, self.context.roots, to, context);
            figures.splice(place + 1..place + 1, second);
        }
        figures
    }

    /// Every symbol that is gone, and what that alone changes.
    fn left_out(&self, target: &Target, found: &Found, formula: &Formula) -> Vec<LeftOut> {
        let present = pruning::symbols(formula);
        let alone = dropping::alone(target, self.exact);
        let mut left_out: Vec<LeftOut> = self
            .exact
            .variables()
            .iter()
            .filter_map(|&variable| symbol_of(variable))
            .filter(|symbol| !present.contains(symbol))
            .map(|symbol| self.reason(symbol, found, &alone))
            .collect();
        let size = |left: &LeftOut| {
            left.change.map_or(f64::INFINITY, |change| self.context.goal.used(change.deviation()))
        };
        left_out.sort_by(|a, b| size(b).total_cmp(&size(a)).then(a.symbol.cmp(&b.symbol)));
        left_out
    }

    fn reason(&self, symbol: SymbolId, found: &Found, alone: &[Dropped]) -> LeftOut {
        let limit = |to| if to == LimitTo::Zero { Left::Zero } else { Left::Infinity };
        if let Some(dropped) = found.dropped.iter().find(|dropped| dropped.symbol == symbol) {
            return LeftOut { symbol, how: limit(dropped.to), change: Some(dropped.change) };
        }
        if let Some(merged) = found.merged.iter().find(|merged| merged.from == symbol) {
            return LeftOut { symbol, how: Left::Equal(merged.into), change: Some(merged.change) };
        }
        if let Some((_, into)) = found.written.merged.iter().find(|(from, _)| *from == symbol.0) {
            let into = SymbolId(*into);
            let renamed = self.exact.renamed(
                crate::elimination::variable_of(symbol),
                crate::elimination::variable_of(into),
            );
            let grid = Grid { band: self.context.band, points: 25, marked: Vec::new() };
            let change = sweep::worst(self.exact, &renamed, &self.nominal, &grid);
            return LeftOut { symbol, how: Left::Equal(into), change: Some(change) };
        }
        let alone = alone.iter().find(|dropped| dropped.symbol == symbol);
        match alone.filter(|one| self.context.goal.used(one.change.deviation()) <= 1.0) {
            Some(one) => LeftOut { symbol, how: limit(one.to), change: Some(one.change) },
            None => LeftOut { symbol, how: Left::Terms, change: None },
        }
    }

    /// The chain from coarse to fine: the shortest formula for each error.
    fn chain(
        &self,
        target: &Target,
        best: &Written,
        mut steps: Vec<Written>,
        watch: &mut dyn Watch,
    ) -> Vec<Step> {
        let manner = Manner { share: COARSEST, rewrite: true };
        steps.push(best.clone());
        polish(target, self.context, best.clone(), manner, &mut steps, watch);
        steps.retain(|step| step.length <= LONGEST_STEP && step.used.is_finite());
        steps.sort_by(|a, b| a.length.cmp(&b.length).then(a.used.total_cmp(&b.used)));
        let mut front: Vec<Written> = Vec::new();
        for step in steps {
            if front
                .last()
                .is_none_or(|last| step.length > last.length && step.used < 0.9 * last.used)
            {
                front.push(step);
            }
        }
        let skip = front.len().div_ceil(MOST_STEPS).max(1);
        let keep =
            |index: usize, step: &Written| index.is_multiple_of(skip) || step.length == best.length;
        front
            .iter()
            .enumerate()
            .filter(|(index, step)| keep(*index, step))
            .map(|(_, step)| {
                let grid =
                    Grid { band: self.context.band, points: self.dense(), marked: self.marks() };
                let program = Program::new(&step.formula);
                let worst = sweep::worst(self.exact, &program, &self.nominal, &grid);
                let within = self.context.goal.used(worst.deviation()) <= 1.0;
                Step { formula: step.formula.clone(), length: step.length, worst, within }
            })
            .collect()
    }

    /// What has become of the roots on the right of the imaginary axis.
    fn notices(&self, fraction: &Fraction) -> Vec<Notice> {
        let mut notices = Vec::new();
        let own = roots::of_fraction(fraction, self.context);
        if let (Some(exact), Some(own)) = (&self.context.roots.sides, own) {
            let (before, after) = (roots::right(&exact[0]).0, roots::right(&own[0]).0);
            if before != after {
                notices.push(Notice {
                    code: "right-half-plane-zeros",
                    message: format!(
                        "zeros in the right half plane: {before} in the exact function, {after} in \
                         the simplified one; over the band that is within the error"
                    ),
                    line: 0,
                });
            }
        }
        if self.context.roots.sides.is_none() {
            notices.push(Notice {
                code: "stability-unknown",
                message:
                    "the poles of the exact function were not found, so its stability was not \
                          compared"
                        .to_owned(),
                line: 0,
            });
        }
        notices
    }
}
