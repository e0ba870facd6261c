//! What the tolerances do to the curves: the outermost of many circuits drawn by chance.
//!
//! The values lie evenly between the limits of their tolerances; the same seed gives the same
//! circuits on every machine (SplitMix64).

use std::f64::consts::TAU;

use num_complex::Complex;
use num_traits::ToPrimitive;

use super::{Point, scaled};
use crate::algebra::Univariate;
use crate::algebra::modular::Random;
use crate::analysis::Entry;
use crate::analysis::roots::{Nominal, RootsError, Toleranced};
use crate::circuit::Circuit;
use crate::elimination::Scaled;

/// The least and the largest at one frequency, the nominal circuit included.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Range {
    /// The frequency.
    pub hz: f64,
    /// Of the logarithm of the magnitude to base ten.
    pub decades: [f64; 2],
    /// Of the phase in radian, each on the turn next to the nominal phase.
    pub phase: [f64; 2],
}

/// What chance does to a response.
#[derive(Clone, Debug, PartialEq)]
pub struct Envelope {
    /// Circuits drawn.
    pub trials: usize,
    /// The seed they were drawn with.
    pub seed: u64,
    /// The outermost at each frequency.
    pub ranges: Vec<Range>,
}

/// The envelope of a transfer function over these nominal points; none where no value has a
/// tolerance.
///
/// # Errors
/// Symbols without a value.
///
/// # Cost
/// For each circuit: its exact coefficients where the formula is expanded, and one evaluation a
/// point.
pub fn envelope(
    circuit: &Circuit,
    entry: &Entry,
    points: &[Point],
    (trials, seed): (usize, u64),
) -> Result<Option<Envelope>, RootsError> {
    let toleranced = Toleranced::new(circuit);
    if toleranced.is_empty() || entry.noise.is_some() {
        return Ok(None);
    }
    let nominal = Nominal::new(circuit, entry)?;
    let frequencies: Vec<Complex<f64>> =
        points.iter().map(|point| Complex::new(0.0, TAU * point.hz)).collect();
    let mut random = Random::new(seed);
    let start = |point: &Point| Range {
        hz: point.hz,
        decades: [point.decades; 2],
        phase: [point.phase; 2],
    };
    let mut ranges: Vec<Range> = points.iter().map(start).collect();
    for _ in 0..trials {
        let drawn = toleranced.draw(&mut random);
        let values: Vec<Value> = match (nominal.parts(), nominal.elimination()) {
            (None, Some(elimination)) => {
                let mut floats = nominal.floats().to_vec();
                for (symbol, value) in &drawn {
                    floats[symbol.0 as usize] = value.to_f64().unwrap_or(f64::NAN);
                }
                elimination.values_at(&frequencies, &floats).into_iter().map(Value::from).collect()
            }
            _ => {
                let [above, below] = nominal.coefficients(&drawn).map(|part| Floating::new(&part));
                let at = |s: &Complex<f64>| {
                    let quotient = above.at(s.im).divided_by(below.at(s.im));
                    Value { decades: quotient.log10(), phase: arg(quotient.value()) }
                };
                frequencies.iter().map(at).collect()
            }
        };
        for ((range, point), value) in ranges.iter_mut().zip(points).zip(values) {
            range.take(point, value);
        }
    }
    Ok(Some(Envelope { trials, seed, ranges }))
}

struct Value {
    decades: f64,
    phase: f64,
}

impl From<Complex<f64>> for Value {
    fn from(value: Complex<f64>) -> Self {
        Self { decades: libm::log10(value.norm()), phase: arg(value) }
    }
}

fn arg(value: Complex<f64>) -> f64 {
    libm::atan2(value.im, value.re)
}

impl Range {
    fn take(&mut self, nominal: &Point, value: Value) {
        if !value.decades.is_finite() || !value.phase.is_finite() {
            return;
        }
        let widen = |range: &mut [f64; 2], value: f64| {
            *range = [range[0].min(value), range[1].max(value)];
        };
        widen(&mut self.decades, value.decades);
        let turns = ((nominal.phase - value.phase) / TAU).round();
        widen(&mut self.phase, value.phase + TAU * turns);
    }
}

/// A polynomial whose coefficients carry their exponents apart.
struct Floating(Vec<Scaled>);

impl Floating {
    fn new(polynomial: &Univariate) -> Self {
        let count = polynomial.numerators().len();
        Self((0..count).map(|power| scaled(&polynomial.coefficient(power))).collect())
    }

    fn at(&self, omega: f64) -> Scaled {
        let s = Scaled::new(Complex::new(0.0, omega), 0);
        self.0.iter().rev().fold(Scaled::ZERO, |sum, &c| sum.times(s).plus(c))
    }
}
