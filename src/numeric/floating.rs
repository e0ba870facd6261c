//! The floating-point witness: complex nodal equations by sparse LU, with an error bound.
//!
//! The equations are scaled by powers of two (Ruiz 2001), the pivots are chosen once per circuit
//! ([`super::sparse`]) and reused at the other frequencies as long as none becomes small, and one
//! step of iterative refinement follows. The bound of a probe c·x is a posteriori and structured
//! (Oettli & Prager 1964; Arioli, Demmel & Duff 1989): with y = A⁻ᵀc,
//! |error| ≤ Σ |yᵢ|·(|rᵢ| + k·(u·(|A||x| + |b|)ᵢ + η)), r the residual, u the unit roundoff and η the
//! least double. The bound
//! does not change when equations or unknowns are scaled.

mod equations;
mod factors;

use num_complex::Complex;
use num_traits::ToPrimitive;

use super::field::size;
use super::network::{Form, Network};
use super::{
    Additive, Assignment, Complexes, Field, NumericError, Origin, Rationals, evaluate, lowered,
};
use crate::circuit::{Circuit, Class, Law, Number, Transfer};
use equations::{Numbers, Pattern};
use factors::{Factors, Plan};

type C = Complex<f64>;

/// k in the bound: roundings in the evaluation of an entry and of the formula that is judged,
/// which sums the same products in another order.
const ROUNDINGS: f64 = 256.0;
/// An estimate of the condition costs as much as three solves, and changes slowly.
const CONDITION_STEP: usize = 10;
/// From this many elements on, impedances stand as 1/Z: half as many unknowns. What that loses where
/// numbers of very different size add up is in the bound.
const LONG: usize = 200;
const UNIT_ROUNDOFF: f64 = f64::EPSILON / 2.0;
/// The least double: what a rounding can lose where numbers are subnormal.
const SMALLEST: f64 = f64::from_bits(1);

/// The answer at one frequency and how far it can be trusted.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct PointAnswer {
    /// The complex frequency.
    pub s: C,
    /// The ratio.
    pub value: C,
    /// Bound of the absolute error of `value`; infinite when the lower quantity may be 0.
    pub error_bound: f64,
    /// Size of what adds up to the upper quantity, over the lower one: what an answer that is
    /// exactly 0 is compared with. At least the largest node voltage for a voltage.
    pub scale: f64,
}

/// A transfer made ready for many frequencies.
#[derive(Debug)]
pub struct Sweep<'a> {
    network: Network<'a>,
    symbols: Vec<C>,
    pattern: Pattern<'a>,
    plan: Option<Plan>,
    numbers: Numbers,
    scaled: Scaled,
    factors: Factors,
}

/// A solved point, before its quality is examined.
struct Solved<'s> {
    pattern: &'s Pattern<'s>,
    numbers: &'s Numbers,
    scaled: &'s Scaled,
    plan: &'s Plan,
    factors: &'s Factors,
    /// The unknowns, in their own units.
    x: Vec<C>,
}

impl<'a> Sweep<'a> {
    /// Checks the question; `values` is indexed by symbol, and the circuit has no magnetic elements
    /// (see [`lowered`]).
    ///
    /// # Errors
    /// Those of [`super::grounded_nodes`].
    pub fn new(
        circuit: &'a Circuit,
        transfer: &'a Transfer,
        values: &[f64],
    ) -> Result<Self, NumericError> {
        let network = Network::new(circuit, transfer)?;
        let symbols: Vec<C> = values.iter().map(|value| C::new(*value, 0.0)).collect();
        let is_long = circuit.elements.len() >= LONG;
        let form = match is_long && !network.has_short(&symbols) {
            true => Form::Compact,
            false => Form::Extended,
        };
        Ok(Self {
            pattern: Pattern::new(&network, form, &symbols),
            symbols,
            network,
            plan: None,
            numbers: Numbers::default(),
            scaled: Scaled::default(),
            factors: Factors::default(),
        })
    }

    /// The ratio at one complex frequency, in rad/s.
    ///
    /// # Errors
    /// [`NumericError::Singular`], [`NumericError::ZeroDenominator`],
    /// [`NumericError::DivisionByZero`].
    pub fn value(&mut self, s: C) -> Result<C, NumericError> {
        let solved = self.solve(s)?;
        ratio(solved.probe(0), solved.probe(1))
    }

    /// The largest condition number of the equations (estimated in the 1-norm, each time scaled for
    /// the frequency) at every tenth of these frequencies, the first among them; at least 1.
    pub fn largest_condition(&mut self, frequencies: &[C]) -> f64 {
        let some = frequencies.iter().step_by(CONDITION_STEP);
        some.filter_map(|s| self.condition(*s).ok()).fold(1.0, f64::max)
    }

    fn condition(&mut self, s: C) -> Result<f64, NumericError> {
        self.scaled.forget();
        let solved = self.solve(s)?;
        Ok(solved.scaled.norm(solved.pattern) * solved.factors.inverse_norm(solved.plan))
    }

    /// The ratio with its error bound.
    ///
    /// # Errors
    /// As [`Sweep::value`].
    pub fn examine(&mut self, s: C) -> Result<PointAnswer, NumericError> {
        let asks_voltage = self.network.asks_voltage();
        let solved = self.solve(s)?;
        let (numerator, denominator) = (solved.probe(0), solved.probe(1));
        let value = ratio(numerator, denominator)?;
        let sums = solved.magnitudes();
        let residual = solved.residual();
        let [upper, lower] = [0, 1].map(|which| {
            let (mut bound, mut scale) = (0.0, 0.0);
            for (y, (rest, sum)) in solved.adjoint(which).iter().zip(residual.iter().zip(&sums)) {
                bound += size(*y) * (size(*rest) + ROUNDINGS * (UNIT_ROUNDOFF * sum + SMALLEST));
                scale += size(*y) * sum;
            }
            (bound, scale)
        });
        let below = denominator.norm();
        let error_bound = if lower.0 < below / 2.0 {
            (upper.0 + value.norm() * lower.0) / (below - lower.0)
        } else {
            f64::INFINITY
        };
        let voltages = solved.x.iter().take(solved.pattern.voltages).map(|v| v.norm());
        let largest = if asks_voltage { voltages.fold(0.0, f64::max) } else { 0.0 };
        let scale = upper.1.max(largest) / below;
        Ok(PointAnswer { s, value, error_bound, scale })
    }

    fn solve(&mut self, s: C) -> Result<Solved<'_>, NumericError> {
        self.pattern.fill(&self.network, &self.symbols, s, &mut self.numbers)?;
        let pattern = &self.pattern;
        self.scaled.apply(pattern, &self.numbers.entries);
        let entries = &self.scaled.entries;
        let known = self.plan.take().filter(|plan| self.factors.compute(plan, pattern, entries));
        let plan = match known {
            Some(plan) => plan,
            None => {
                self.scaled.forget();
                self.scaled.apply(pattern, &self.numbers.entries);
                let entries = &self.scaled.entries;
                Plan::new(pattern, entries)
                    .filter(|plan| self.factors.compute_anyway(plan, pattern, entries))
                    .ok_or(NumericError::Singular)?
            }
        };
        let mut solved = Solved {
            pattern,
            numbers: &self.numbers,
            scaled: &self.scaled,
            plan: self.plan.insert(plan),
            factors: &self.factors,
            x: Vec::new(),
        };
        solved.x = solved.apply(&solved.numbers.right);
        let correction = solved.apply(&solved.residual());
        solved.x.iter_mut().zip(correction).for_each(|(x, dx)| *x += dx);
        if solved.x.iter().all(|x| x.is_finite()) {
            Ok(solved)
        } else {
            Err(NumericError::Singular)
        }
    }
}

impl Solved<'_> {
    /// A⁻¹·b for the unscaled equations.
    fn apply(&self, right: &[C]) -> Vec<C> {
        let scaled: Vec<C> = right.iter().zip(&self.scaled.row_scale).map(|(b, r)| b * r).collect();
        let mut solution = self.factors.solve(self.plan, &scaled);
        solution.iter_mut().zip(&self.scaled.column_scale).for_each(|(x, c)| *x *= c);
        solution
    }

    /// A⁻ᵀ·c for a probe c; nothing where the probe reads no unknown.
    fn adjoint(&self, which: usize) -> Vec<C> {
        let (row, _) = self.pattern.probe(which, self.numbers);
        if row.is_empty() {
            return Vec::new();
        }
        let mut right = vec![C::ZERO; self.x.len()];
        for (column, factor) in row {
            right[column] += factor * self.scaled.column_scale[column];
        }
        let mut solution = self.factors.solve_transposed(self.plan, &right);
        solution.iter_mut().zip(&self.scaled.row_scale).for_each(|(y, r)| *y *= r);
        solution
    }

    /// |A||x| + |b|, where |A| adds the magnitudes of all contributions.
    fn magnitudes(&self) -> Vec<f64> {
        let row = |(row, right): (usize, &C)| {
            self.pattern.row(row).fold(size(*right), |sum, at| {
                sum + self.numbers.sizes[at] * size(self.x[self.pattern.columns[at]])
            })
        };
        self.numbers.right.iter().enumerate().map(row).collect()
    }

    fn residual(&self) -> Vec<C> {
        let row = |(row, right): (usize, &C)| {
            self.pattern.row(row).fold(*right, |rest, at| {
                rest - self.numbers.entries[at] * self.x[self.pattern.columns[at]]
            })
        };
        self.numbers.right.iter().enumerate().map(row).collect()
    }

    /// The value of a probe.
    fn probe(&self, which: usize) -> C {
        let (row, constant) = self.pattern.probe(which, self.numbers);
        row.iter().fold(constant, |sum, (column, factor)| sum + factor * self.x[*column])
    }
}

fn ratio(numerator: C, denominator: C) -> Result<C, NumericError> {
    let inverse = Complexes.inverse(&denominator).ok_or(NumericError::ZeroDenominator)?;
    Ok(numerator * inverse)
}

/// R·A·C. R and C are chosen so that the largest entries of rows and columns are near 1, and kept for
/// other frequencies as long as the pivots are.
#[derive(Debug, Default)]
struct Scaled {
    entries: Vec<C>,
    /// What each entry is multiplied by.
    factors: Vec<f64>,
    row_scale: Vec<f64>,
    column_scale: Vec<f64>,
}

impl Scaled {
    /// The next matrix is to have factors of its own.
    fn forget(&mut self) {
        self.factors.clear();
    }

    fn apply(&mut self, pattern: &Pattern<'_>, entries: &[C]) {
        if self.factors.is_empty() {
            self.choose(pattern, entries);
        }
        self.entries.clear();
        self.entries
            .extend(entries.iter().zip(&self.factors).map(|(entry, factor)| entry * factor));
    }

    fn choose(&mut self, pattern: &Pattern<'_>, entries: &[C]) {
        let count = pattern.len();
        let mut sizes: Vec<f64> = entries.iter().map(|entry| size(*entry)).collect();
        for scale in [&mut self.row_scale, &mut self.column_scale] {
            scale.clear();
            scale.resize(count, 1.0);
        }
        let (mut row_factors, mut column_factors) = (vec![0.0_f64; count], vec![0.0_f64; count]);
        for _ in 0..3 {
            row_factors.fill(0.0);
            column_factors.fill(0.0);
            for (row, largest) in row_factors.iter_mut().enumerate() {
                for at in pattern.row(row) {
                    let (magnitude, column) = (sizes[at], pattern.columns[at]);
                    *largest = largest.max(magnitude);
                    column_factors[column] = column_factors[column].max(magnitude);
                }
            }
            for factor in row_factors.iter_mut().chain(&mut column_factors) {
                *factor = root_of_inverse(*factor);
            }
            for (row, factor) in row_factors.iter().enumerate() {
                for at in pattern.row(row) {
                    sizes[at] *= factor * column_factors[pattern.columns[at]];
                }
            }
            self.row_scale
                .iter_mut()
                .zip(&row_factors)
                .for_each(|(scale, factor)| *scale *= factor);
            self.column_scale.iter_mut().zip(&column_factors).for_each(|(s, factor)| *s *= factor);
        }
        for (row, scale) in self.row_scale.iter().enumerate() {
            let columns = &pattern.columns[pattern.row(row)];
            self.factors.extend(columns.iter().map(|column| scale * self.column_scale[*column]));
        }
    }

    /// The 1-norm.
    fn norm(&self, pattern: &Pattern<'_>) -> f64 {
        let mut sums = vec![0.0; pattern.len()];
        for (column, value) in pattern.columns.iter().zip(&self.entries) {
            sums[*column] += value.norm();
        }
        sums.into_iter().fold(0.0, f64::max)
    }
}

/// A power of two near 1/√m, so that scaling never rounds; 1 where there is nothing to scale.
fn root_of_inverse(magnitude: f64) -> f64 {
    if magnitude > 0.0 && magnitude.is_finite() {
        libm::scalbn(1.0, -libm::ilogb(magnitude).div_euclid(2))
    } else {
        1.0
    }
}

/// The response at frequencies in hertz; `values` is indexed by symbol.
///
/// Costs one sparse factorisation for each frequency.
///
/// # Errors
/// As [`Sweep::new`] and [`Sweep::value`], for the first frequency that has no answer.
pub fn response(
    circuit: &Circuit,
    transfer: &Transfer,
    frequencies: &[f64],
    values: &[f64],
) -> Result<Vec<C>, NumericError> {
    let circuit = lowered(circuit);
    let mut sweep = Sweep::new(&circuit, transfer, values)?;
    frequencies
        .iter()
        .map(|hertz| sweep.value(C::new(0.0, std::f64::consts::TAU * hertz)))
        .collect()
}

/// `points` frequencies in hertz, spaced evenly in their logarithm (one point: the geometric middle).
///
/// With nominal values over the circuit's band; where it has none, two decades beyond the corner
/// frequencies 1/(RC), R/L and 1/√(LC) that its elements can make with each other. With random
/// values from 0.01 to 100 rad/s, as these lie around 1.
pub fn frequencies(circuit: &Circuit, assignment: &Assignment, points: usize) -> Vec<f64> {
    let (from, to) = match (&circuit.band, assignment.origin) {
        (Some(band), Origin::Nominal) => {
            (band.from.to_f64().unwrap_or(1.0), band.to.to_f64().unwrap_or(1e6))
        }
        (None, Origin::Nominal) => corner_range(circuit, &assignment.numbers),
        (_, Origin::Random) => (0.01 / std::f64::consts::TAU, 100.0 / std::f64::consts::TAU),
    };
    let (low, high) = (libm::log(from), libm::log(to));
    let steps = points.saturating_sub(1);
    (0..points)
        .map(|k| match (k, steps) {
            (_, 0) => libm::exp((low + high) / 2.0),
            (0, _) => from,
            (k, steps) if k == steps => to,
            #[expect(clippy::cast_precision_loss, reason = "counts of points are small")]
            (k, steps) => libm::exp(low + (high - low) * k as f64 / steps as f64),
        })
        .collect()
}

/// Hertz, from 1 µHz to 1 THz at most; 1 Hz to 1 MHz where nothing sets a corner.
fn corner_range(circuit: &Circuit, numbers: &[Number]) -> (f64, f64) {
    let one = Rationals.one();
    let (mut resistances, mut capacitances, mut inductances) = (vec![], vec![], vec![]);
    for element in &circuit.elements {
        let (Law::Impedance(value) | Law::Admittance(value)) = &element.law else { continue };
        // At s = 1 the value of an inductor is L, that of a capacitor is C.
        let Some(value) = evaluate(&Rationals, value, numbers, &one).and_then(|v| v.to_f64())
        else {
            continue;
        };
        let value = value.abs();
        if !(value.is_finite() && value > 0.0) {
            continue;
        }
        match element.class {
            Class::Resistor | Class::Impedance => resistances.push(value),
            Class::Conductance | Class::Admittance => resistances.push(1.0 / value),
            Class::Capacitor => capacitances.push(value),
            Class::Inductor => inductances.push(value),
            _ => {}
        }
    }
    let ends = |values: &[f64]| {
        let least = values.iter().copied().reduce(f64::min)?;
        Some((least, values.iter().copied().fold(least, f64::max)))
    };
    let (r, c, l) = (ends(&resistances), ends(&capacitances), ends(&inductances));
    let mut corners = Vec::new();
    if let (Some(r), Some(c)) = (r, c) {
        corners.extend([1.0 / (r.0 * c.0), 1.0 / (r.1 * c.1)]);
    }
    if let (Some(r), Some(l)) = (r, l) {
        corners.extend([r.0 / l.1, r.1 / l.0]);
    }
    if let (Some(l), Some(c)) = (l, c) {
        corners.extend([1.0 / (l.0 * c.0).sqrt(), 1.0 / (l.1 * c.1).sqrt()]);
    }
    let Some((low, high)) = ends(&corners) else { return (1.0, 1e6) };
    let hertz = |rate: f64| (rate / std::f64::consts::TAU).clamp(1e-4, 1e10);
    (hertz(low) / 100.0, hertz(high) * 100.0)
}
