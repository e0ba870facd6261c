//! The floating-point witness: complex nodal equations by sparse LU, with an error bound.
//!
//! The equations are scaled by powers of two (Ruiz 2001), the pivots are chosen once per circuit
//! ([`super::sparse`]) and reused at the other frequencies as long as none becomes small, and one
//! step of iterative refinement follows. The bound of a probe c·x is a posteriori and structured
//! (Oettli & Prager 1964; Arioli, Demmel & Duff 1989): with y = A⁻ᵀc,
//! |error| ≤ Σ |yᵢ|·(|rᵢ| + k·u·(|A||x| + |b|)ᵢ), r the residual and u the unit roundoff. The bound
//! does not change when equations or unknowns are scaled.

mod factors;

use std::rc::Rc;

use num_complex::Complex;
use num_traits::ToPrimitive;

use super::field::size;
use super::network::{Form, Network, System, summed};
use super::{Assignment, Complexes, Field, NumericError, Origin, Rationals, evaluate, lowered};
use crate::circuit::{Circuit, Class, Law, Number, Transfer};
use factors::{Factors, Plan};

type C = Complex<f64>;

/// k in the bound: roundings in the evaluation of an entry and of the formula that is judged,
/// which sums the same products in another order.
const ROUNDINGS: f64 = 256.0;
const UNIT_ROUNDOFF: f64 = f64::EPSILON / 2.0;

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
    /// Estimate of the condition number in the 1-norm, after scaling.
    pub condition: f64,
}

/// A transfer made ready for many frequencies.
#[derive(Debug)]
pub struct Sweep<'a> {
    network: Network<'a>,
    symbols: Vec<C>,
    plan: Option<Rc<Plan>>,
}

/// A solved point, before its quality is examined.
struct Solved {
    system: System<C>,
    scaled: Scaled,
    factors: Factors,
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
        let symbols = values.iter().map(|value| C::new(*value, 0.0)).collect();
        Ok(Self { network: Network::new(circuit, transfer)?, symbols, plan: None })
    }

    /// The ratio at one complex frequency, in rad/s.
    ///
    /// # Errors
    /// [`NumericError::Singular`], [`NumericError::ZeroDenominator`],
    /// [`NumericError::DivisionByZero`].
    pub fn value(&mut self, s: C) -> Result<C, NumericError> {
        let solved = self.solve(s)?;
        let [numerator, denominator] = probes(&solved);
        ratio(numerator, denominator)
    }

    /// The ratio with its error bound and the condition of the equations.
    ///
    /// # Errors
    /// As [`Sweep::value`].
    pub fn examine(&mut self, s: C) -> Result<PointAnswer, NumericError> {
        let solved = self.solve(s)?;
        let [numerator, denominator] = probes(&solved);
        let value = ratio(numerator, denominator)?;
        let condition = solved.scaled.norm() * solved.factors.inverse_norm();
        let sums = solved.magnitudes();
        let residual = residual(&solved.system, &solved.x);
        let [upper, lower] = [0, 1].map(|which| {
            let y = solved.adjoint(which);
            let terms = |weight: &dyn Fn(usize) -> f64| -> f64 {
                y.iter().enumerate().map(|(i, y)| size(*y) * weight(i)).sum()
            };
            (
                terms(&|i| size(residual[i]) + ROUNDINGS * UNIT_ROUNDOFF * sums[i]),
                terms(&|i| sums[i]),
            )
        });
        let below = denominator.norm();
        let error_bound = if lower.0 < below / 2.0 {
            (upper.0 + value.norm() * lower.0) / (below - lower.0)
        } else {
            f64::INFINITY
        };
        let voltages = solved.x.iter().take(solved.system.voltages).map(|v| v.norm());
        let largest = match self.network.asks_voltage() {
            true => voltages.fold(0.0, f64::max),
            false => 0.0,
        };
        let scale = upper.1.max(largest) / below;
        Ok(PointAnswer { s, value, error_bound, scale, condition })
    }

    fn solve(&mut self, s: C) -> Result<Solved, NumericError> {
        let system = self.network.assemble(&Complexes, &self.symbols, &s, Form::Extended)?;
        let scaled = Scaled::new(&system);
        let factors = match self.plan.take().filter(|plan| plan.fits(&scaled.rows)) {
            Some(plan) => Factors::compute(plan, &scaled.rows).ok(),
            None => None,
        };
        let factors = match factors {
            Some(factors) => factors,
            None => {
                let plan = Rc::new(Plan::new(&scaled.rows).ok_or(NumericError::Singular)?);
                Factors::compute_anyway(plan, &scaled.rows).ok_or(NumericError::Singular)?
            }
        };
        self.plan = Some(Rc::clone(factors.plan()));
        let mut solved = Solved { system, scaled, factors, x: Vec::new() };
        solved.x = solved.apply(&solved.system.right);
        let correction = solved.apply(&residual(&solved.system, &solved.x));
        solved.x.iter_mut().zip(correction).for_each(|(x, dx)| *x += dx);
        if solved.x.iter().all(|x| x.is_finite()) {
            Ok(solved)
        } else {
            Err(NumericError::Singular)
        }
    }
}

impl Solved {
    /// A⁻¹·b for the unscaled equations.
    fn apply(&self, right: &[C]) -> Vec<C> {
        let scaled = right.iter().zip(&self.scaled.row_scale).map(|(b, r)| b * r).collect();
        let solution = self.factors.solve(scaled);
        solution.iter().zip(&self.scaled.column_scale).map(|(x, c)| x * c).collect()
    }

    /// A⁻ᵀ·c for a probe c.
    fn adjoint(&self, which: usize) -> Vec<C> {
        let mut right = vec![C::ZERO; self.x.len()];
        for (column, factor) in &self.system.probes[which].row {
            right[*column] += factor * self.scaled.column_scale[*column];
        }
        let solution = self.factors.solve_transposed(right);
        solution.iter().zip(&self.scaled.row_scale).map(|(y, r)| y * r).collect()
    }

    /// |A||x| + |b|, where |A| adds the magnitudes of all contributions.
    fn magnitudes(&self) -> Vec<f64> {
        let rows = self.system.rows.iter().zip(&self.system.right);
        rows.map(|(row, right)| {
            size(*right) + row.iter().map(|(c, a)| size(*a) * size(self.x[*c])).sum::<f64>()
        })
        .collect()
    }
}

fn residual(system: &System<C>, x: &[C]) -> Vec<C> {
    let rows = system.rows.iter().zip(&system.right);
    rows.map(|(row, right)| row.iter().fold(*right, |rest, (c, a)| rest - a * x[*c])).collect()
}

fn probes(solved: &Solved) -> [C; 2] {
    [0, 1].map(|which| {
        let probe = &solved.system.probes[which];
        probe.row.iter().fold(probe.constant, |sum, (c, a)| sum + a * solved.x[*c])
    })
}

fn ratio(numerator: C, denominator: C) -> Result<C, NumericError> {
    let inverse = Complexes.inverse(&denominator).ok_or(NumericError::ZeroDenominator)?;
    Ok(numerator * inverse)
}

/// R·A·C with largest entries of rows and columns near 1.
struct Scaled {
    rows: Vec<Vec<(usize, C)>>,
    row_scale: Vec<f64>,
    column_scale: Vec<f64>,
}

impl Scaled {
    fn new(system: &System<C>) -> Self {
        let count = system.rows.len();
        let mut rows: Vec<_> = system.rows.iter().map(|row| summed(&Complexes, row)).collect();
        let (mut row_scale, mut column_scale) = (vec![1.0; count], vec![1.0; count]);
        for _ in 0..3 {
            let mut row_largest = vec![0.0f64; count];
            let mut column_largest = vec![0.0f64; count];
            for (i, row) in rows.iter().enumerate() {
                for (j, value) in row {
                    row_largest[i] = row_largest[i].max(size(*value));
                    column_largest[*j] = column_largest[*j].max(size(*value));
                }
            }
            let row_factors: Vec<f64> = row_largest.iter().map(|m| root_of_inverse(*m)).collect();
            let column_factors: Vec<f64> =
                column_largest.iter().map(|m| root_of_inverse(*m)).collect();
            for (i, row) in rows.iter_mut().enumerate() {
                row.iter_mut().for_each(|(j, value)| *value *= row_factors[i] * column_factors[*j]);
            }
            row_scale.iter_mut().zip(&row_factors).for_each(|(scale, factor)| *scale *= factor);
            column_scale.iter_mut().zip(&column_factors).for_each(|(s, factor)| *s *= factor);
        }
        Self { rows, row_scale, column_scale }
    }

    /// The 1-norm.
    fn norm(&self) -> f64 {
        let mut sums = vec![0.0; self.rows.len()];
        for (column, value) in self.rows.iter().flatten() {
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
