//! Poles and zeros: which must stay, and short formulas for those of the simplified function.

use num_complex::Complex;
use num_traits::ToPrimitive;

use super::polish::Context;
use super::program::Program;
use super::pruning::{fraction, prunings, renamed, symbols};
use crate::algebra::{Fraction, Polynomial, Univariate, Var};
use crate::analysis::NumericForm;
use crate::analysis::roots::find;
use crate::typeset::Formula;

type C = Complex<f64>;

/// Neighbouring coefficients this far apart make a root of its own.
const APART: f64 = 4.0;
/// How far the short formula of a root may be from the exact root.
const ROOT_ERROR: f64 = 0.15;
/// Two values this close count as one in a figure that becomes shorter by this many symbols.
const SAME: f64 = 0.05;
const MUCH: u64 = 3;
/// Beyond this error the number is not told.
const BELIEVED: f64 = 0.3;
/// Roots up to this many times the upper end of the band are told.
const BEYOND: f64 = 10.0;

/// The roots of the exact function at the nominal values.
#[derive(Clone, Debug, Default)]
pub(crate) struct ExactRoots {
    /// Zeros and poles, by size; none where they could not be found.
    pub(crate) sides: Option<[Vec<C>; 2]>,
}

/// A number that a designer looks for, with a short formula.
#[derive(Clone, Debug)]
pub struct Figure {
    /// What it is.
    pub kind: FigureKind,
    /// The formula, for its size; roots in rad/s.
    pub formula: Formula,
    /// Its value at the nominal values.
    pub value: f64,
    /// The exact value, where it is known.
    pub exact: Option<f64>,
}

/// What a [`Figure`] is.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum FigureKind {
    /// The value at s = 0.
    DcGain,
    /// A real pole, numbered by size from 1: its size.
    Pole(usize),
    /// A real zero: its size, and whether it lies in the right half plane.
    Zero(usize, bool),
    /// Two poles that do not stand apart, the first by its number: the square of their ω0.
    PolePair(usize),
    /// Two zeros that do not stand apart: the square of their ω0.
    ZeroPair(usize),
    /// Gain at s = 0 times the first pole.
    GainBandwidth,
}

impl ExactRoots {
    pub(crate) fn new(numeric: Option<&NumericForm>) -> Self {
        let roots = |of: &[crate::circuit::Number]| roots(&Univariate::from_rationals(of));
        let sides =
            numeric.and_then(|form| Some([roots(&form.numerator)?, roots(&form.denominator)?]));
        Self { sides }
    }

    /// Frequencies at which the function may turn sharply, in Hz: around every root off the real axis.
    pub(crate) fn marks(&self) -> Vec<f64> {
        self.sides.iter().flatten().flatten().flat_map(|root| marks(*root)).collect()
    }
}

/// Points about a root, in Hz.
pub(crate) fn marks(root: C) -> Vec<f64> {
    let (size, width) = (root.norm(), root.re.abs());
    // Nothing turns sharply at a root that is well damped.
    if 2.0 * width > size {
        return Vec::new();
    }
    [0.0, 0.3, 1.0, 3.0]
        .into_iter()
        .flat_map(|times| [size - times * width, size + times * width])
        .filter(|omega| *omega > 0.0)
        .map(|omega| omega / std::f64::consts::TAU)
        .collect()
}

fn roots(of: &Univariate) -> Option<Vec<C>> {
    let found = find(of).ok()?;
    let each = found.iter().flat_map(|r| std::iter::repeat_n(r.value, r.multiplicity as usize));
    Some(each.collect())
}

/// The roots of the two sides of a fraction at the nominal values: zeros, poles.
pub(crate) fn of_fraction(fraction: &Fraction, context: Context<'_>) -> Option<[Vec<C>; 2]> {
    let side = |of: &Polynomial| roots(&univariate(of, context));
    Some([side(fraction.numerator())?, side(fraction.denominator())?])
}

pub(crate) fn univariate(of: &Polynomial, context: Context<'_>) -> Univariate {
    let value = |variable: Var| context.value(variable);
    let coefficients: Vec<_> =
        of.coefficients(Var::S).iter().map(|part| part.evaluate(value)).collect();
    Univariate::from_rationals(&coefficients)
}

/// How many roots lie right of the imaginary axis, and how many on it.
pub(crate) fn right(roots: &[C]) -> (usize, usize) {
    let on = roots.iter().filter(|root| root.re == 0.0).count();
    (roots.iter().filter(|root| root.re > 0.0).count(), on)
}

/// Whether every exact root in the band has one of the found roots within this part of its size, each
/// found root taken once.
pub(crate) fn all_within(exact: &[C], found: &[C], band: (f64, f64), part: f64) -> bool {
    let mut free: Vec<C> = found.to_vec();
    exact
        .iter()
        .filter(|root| (band.0..=band.1).contains(&(root.norm() / std::f64::consts::TAU)))
        .all(|root| {
            let nearest = free
                .iter()
                .enumerate()
                .min_by(|a, b| (a.1 - root).norm().total_cmp(&(b.1 - root).norm()))
                .map(|(index, _)| index);
            nearest
                .is_some_and(|index| (free.swap_remove(index) - root).norm() <= part * root.norm())
        })
}

/// The figures of a simplified function.
pub(crate) fn figures(
    fraction: &Fraction,
    exact: &ExactRoots,
    exact_dc: Option<f64>,
    top_hz: f64,
    context: Context<'_>,
) -> Vec<Figure> {
    let above = fraction.numerator().coefficients(Var::S);
    let below = fraction.denominator().coefficients(Var::S);
    let mut figures = Vec::new();
    let (Some(n0), Some(d0)) = (above.first(), below.first()) else { return figures };
    let finite = !n0.is_zero() && !d0.is_zero();
    if finite && above.len().max(below.len()) > 1 {
        figures.extend(figure(FigureKind::DcGain, n0, d0, exact_dc, context));
    }
    let sides = exact.sides.as_ref();
    let top = BEYOND * top_hz * std::f64::consts::TAU;
    let poles = of_side(&below, sides.map(|s| s[1].as_slice()), top, context, true);
    let first = poles.first().filter(|figure| figure.kind == FigureKind::Pole(1)).cloned();
    figures.extend(poles);
    figures.extend(of_side(&above, sides.map(|s| s[0].as_slice()), top, context, false));
    if let (true, Some(first), Some(d1)) = (finite, first, below.get(1)) {
        let exact = exact_dc.zip(first.exact).map(|(gain, pole)| gain.abs() * pole);
        let product = figure(FigureKind::GainBandwidth, n0, d1, exact, context);
        let has_gain =
            |figure: &Figure| figure.kind == FigureKind::DcGain && figure.value.abs() > 1.0;
        let has_gain = figures.first().is_some_and(has_gain);
        figures.extend(product.filter(|_| has_gain));
    }
    figures
}

/// The second pole of a fraction, where it stands apart.
pub(crate) fn second_pole(
    fraction: &Fraction,
    exact: &ExactRoots,
    top_hz: f64,
    context: Context<'_>,
) -> Option<Figure> {
    let below = fraction.denominator().coefficients(Var::S);
    let sides = exact.sides.as_ref();
    let top = BEYOND * top_hz * std::f64::consts::TAU;
    let poles = of_side(&below, sides.map(|s| s[1].as_slice()), top, context, true);
    poles.into_iter().find(|figure| figure.kind == FigureKind::Pole(2))
}

/// The roots of one side, each from two neighbouring coefficients.
fn of_side(
    coefficients: &[Polynomial],
    exact: Option<&[C]>,
    top: f64,
    context: Context<'_>,
    poles: bool,
) -> Vec<Figure> {
    let first = coefficients.iter().take_while(|c| c.is_zero()).count();
    let of = &coefficients[first.min(coefficients.len())..];
    let values: Vec<f64> = of.iter().map(|c| number(c, context)).collect();
    let exact: Option<Vec<C>> =
        exact.map(|roots| roots.iter().copied().filter(|root| root.norm() > 0.0).collect());
    let mut figures = Vec::new();
    let mut at = 0;
    while at + 1 < of.len() {
        let kind_of = |pair: bool| match (poles, pair) {
            (true, false) => FigureKind::Pole(at + 1),
            (true, true) => FigureKind::PolePair(at + 1),
            (false, false) => FigureKind::Zero(at + 1, values[at] * values[at + 1] < 0.0),
            (false, true) => FigureKind::ZeroPair(at + 1),
        };
        let alone = at + 2 >= of.len()
            || values[at + 1] * values[at + 1] > APART * (values[at] * values[at + 2]).abs();
        let nearest = |size: f64| exact.as_ref().and_then(|roots| nearest(roots, size));
        let (kind, low, high, wanted) = if alone {
            let size = (values[at] / values[at + 1]).abs();
            (kind_of(false), at, at + 1, nearest(size))
        } else {
            let size = (values[at] / values[at + 2]).abs().sqrt();
            (kind_of(true), at, at + 2, nearest(size).map(|size| size * size))
        };
        let found = figure(kind, &of[low], &of[high], wanted, context);
        let in_sight =
            |f: &Figure| if alone { f.value.abs() <= top } else { f.value.abs() <= top * top };
        figures.extend(found.filter(in_sight));
        at = high;
    }
    figures
}

/// The size of the root that is nearest to this size by its logarithm.
fn nearest(roots: &[C], size: f64) -> Option<f64> {
    let apart = |root: &C| libm::log(root.norm() / size).abs();
    roots.iter().min_by(|a, b| apart(a).total_cmp(&apart(b))).map(|root| root.norm())
}

fn number(of: &Polynomial, context: Context<'_>) -> f64 {
    of.evaluate(|variable| context.value(variable)).to_f64().unwrap_or(f64::NAN)
}

/// The size of a/b, shortened as far as the exact value allows.
fn figure(
    kind: FigureKind,
    a: &Polynomial,
    b: &Polynomial,
    exact: Option<f64>,
    context: Context<'_>,
) -> Option<Figure> {
    let mut formula = context.compact(&Fraction::new(a, b)?);
    if kind != FigureKind::DcGain && formula.is_negative() {
        formula = formula.negative();
    }
    let values = super::samples::nominal(context.symbols);
    let value = |formula: &Formula| Program::new(formula).value(&values, C::ZERO).re;
    if kind != FigureKind::DcGain && value(&formula) < 0.0 {
        formula = formula.negative();
    }
    let wanted = exact.unwrap_or_else(|| value(&formula));
    let error = |formula: &Formula| (value(formula) / wanted - 1.0).abs();
    loop {
        let shorter = |next: &Formula| next.symbols() < formula.symbols();
        let next = prunings(&formula)
            .into_iter()
            .filter(|next| shorter(next) && error(next) <= ROOT_ERROR)
            .min_by(|a, b| error(a).total_cmp(&error(b)));
        let next = next.or_else(|| merged(&formula, &values, context));
        match next.filter(|next| error(next) <= ROOT_ERROR) {
            Some(next) => formula = next,
            None => break,
        }
    }
    // What is left may have something in common above and below.
    if let Some(rest) = fraction(&formula, context.letters) {
        let anew = context.compact(&rest);
        if anew.symbols() < formula.symbols() {
            formula = anew;
        }
    }
    let value = value(&formula);
    // A root or a gain beyond the band can be far from the truth while the function in it is not.
    let holds = value.is_finite() && (value / wanted - 1.0).abs() <= BELIEVED;
    holds.then_some(Figure { kind, formula, value, exact })
}

/// The formula with two symbols of one unit and the same value taken for one, where that makes it much
/// shorter: a figure is told for its meaning, and what cancels between matched parts hides it.
fn merged(formula: &Formula, values: &[f64], context: Context<'_>) -> Option<Formula> {
    let present = symbols(formula);
    let mut best: Option<Formula> = None;
    for &from in &present {
        for &into in present.iter().filter(|&&into| into != from) {
            let [a, b] = [from, into].map(|id| &context.symbols[id.0 as usize]);
            let ratio = values[from.0 as usize] / values[into.0 as usize];
            if a.role != b.role || a.unit != b.unit || (ratio - 1.0).abs() > SAME {
                continue;
            }
            let Some(of) = fraction(&renamed(formula, from.0, into.0), context.letters) else {
                continue;
            };
            let next = context.compact(&of);
            let next = if next.is_negative() { next.negative() } else { next };
            let length = best
                .as_ref()
                .map_or((formula.symbols() + 1).saturating_sub(MUCH), |best| best.symbols());
            if next.symbols() < length {
                best = Some(next);
            }
        }
    }
    best
}
