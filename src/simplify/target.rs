//! The exact function at points of the band and samples of the values, and the error of a candidate.

use std::f64::consts::TAU;

use num_complex::Complex;

use super::goal::Goal;
use super::program::Program;
use crate::elimination::Elimination;

pub(crate) type C = Complex<f64>;

/// Smaller than the largest value of the sweep by this factor is 0 up to rounding.
const ZERO: f64 = 1e-12;

/// How far a value is from the exact one.
#[derive(Clone, Copy, Debug, PartialEq, Default)]
pub struct Deviation {
    /// Of the magnitude, in dB, not negative.
    pub db: f64,
    /// Of the phase, in degrees, from 0 to 180.
    pub deg: f64,
}

impl Deviation {
    /// Of one value from another; infinite where one of them alone is 0 or not finite.
    pub(crate) fn between(value: C, exact: C) -> Self {
        let ratio = value / exact;
        let size = ratio.norm();
        if !size.is_finite() || size == 0.0 {
            return Self { db: f64::INFINITY, deg: 180.0 };
        }
        Self { db: (20.0 * libm::log10(size)).abs(), deg: ratio.arg().to_degrees().abs() }
    }
}

/// The largest deviations, and where they are.
#[derive(Clone, Copy, Debug, PartialEq, Default)]
pub struct Worst {
    /// The largest of magnitude, in dB.
    pub db: f64,
    /// Where it is, in Hz.
    pub db_hz: f64,
    /// The largest of phase, in degrees.
    pub deg: f64,
    /// Where it is, in Hz.
    pub deg_hz: f64,
}

impl Worst {
    pub(crate) fn take(&mut self, deviation: Deviation, hz: f64) {
        if deviation.db > self.db {
            (self.db, self.db_hz) = (deviation.db, hz);
        }
        if deviation.deg > self.deg {
            (self.deg, self.deg_hz) = (deviation.deg, hz);
        }
    }

    pub(crate) fn merge(&mut self, other: &Self) {
        self.take(Deviation { db: other.db, deg: 0.0 }, other.db_hz);
        self.take(Deviation { db: 0.0, deg: other.deg }, other.deg_hz);
    }

    /// Both at once, wherever they are.
    pub(crate) fn deviation(&self) -> Deviation {
        Deviation { db: self.db, deg: self.deg }
    }
}

/// Something that has a value at a frequency and values of the symbols.
pub(crate) trait Candidate {
    /// The values at frequencies in rad/s.
    fn values(&self, symbols: &[f64], points: &[C]) -> Vec<C>;
}

impl Candidate for Elimination {
    fn values(&self, symbols: &[f64], points: &[C]) -> Vec<C> {
        let at = self.at_values(symbols);
        points.iter().map(|&s| at.value(s)).collect()
    }
}

impl Candidate for Program {
    fn values(&self, symbols: &[f64], points: &[C]) -> Vec<C> {
        points.iter().map(|&s| self.value(symbols, s)).collect()
    }
}

/// The exact function where candidates are compared with it while they are sought.
#[derive(Clone, Debug)]
pub(crate) struct Target {
    pub(crate) goal: Goal,
    /// Frequencies in rad/s.
    pub(crate) points: Vec<C>,
    /// Values of the symbols; the first are the nominal ones.
    pub(crate) samples: Vec<Vec<f64>>,
    /// By samples, then by points.
    pub(crate) exact: Vec<Vec<C>>,
}

impl Target {
    pub(crate) fn new(
        goal: Goal,
        exact: &Elimination,
        hertz: &[f64],
        samples: Vec<Vec<f64>>,
    ) -> Self {
        let points: Vec<C> = hertz.iter().map(|hz| C::new(0.0, TAU * hz)).collect();
        let exact = samples.iter().map(|sample| exact.values(sample, &points)).collect();
        Self { goal, points, samples, exact }
    }

    /// Every n-th point and the nominal values alone: for ranking.
    pub(crate) fn coarse(&self, most: usize) -> Self {
        let step = self.points.len().div_ceil(most).max(1);
        let thin = |of: &[C]| -> Vec<C> {
            let mut thin: Vec<C> = of.iter().step_by(step).copied().collect();
            thin.extend(of.last().filter(|_| !(of.len() - 1).is_multiple_of(step)));
            thin
        };
        Self {
            goal: self.goal,
            points: thin(&self.points),
            samples: self.samples[..1].to_vec(),
            exact: self.exact[..1].iter().map(|exact| thin(exact)).collect(),
        }
    }

    /// The nominal values.
    pub(crate) fn nominal(&self) -> &[f64] {
        &self.samples[0]
    }

    /// Adds points and samples that have turned out to matter.
    pub(crate) fn extend(&mut self, exact: &Elimination, hertz: &[f64], samples: &[Vec<f64>]) {
        let mut known: Vec<f64> = self.points.iter().map(|s| s.im / TAU).collect();
        known.extend_from_slice(hertz);
        known.sort_by(f64::total_cmp);
        known.dedup();
        let mut all = self.samples.clone();
        all.extend(samples.iter().filter(|sample| !self.samples.contains(sample)).cloned());
        *self = Self::new(self.goal, exact, &known, all);
    }

    /// The share of the goal that a candidate uses up, over all points and samples.
    pub(crate) fn used(&self, candidate: &dyn Candidate) -> f64 {
        self.goal.used(self.worst(candidate).deviation())
    }

    /// The share of the goal that a formula uses up; infinite as soon as that is more than `most`.
    pub(crate) fn used_within(&self, program: &Program, most: f64) -> f64 {
        let mut used = 0.0_f64;
        for (sample, exact) in self.samples.iter().zip(&self.exact) {
            let zero = ZERO * largest(exact);
            for (&s, &exact) in self.points.iter().zip(exact) {
                let deviation = apart(program.value(sample, s), exact, zero);
                used = used.max(self.goal.used(deviation));
                if used > most {
                    return f64::INFINITY;
                }
            }
        }
        used
    }

    /// The largest deviations of a candidate.
    pub(crate) fn worst(&self, candidate: &dyn Candidate) -> Worst {
        let mut worst = Worst::default();
        for (sample, exact) in self.samples.iter().zip(&self.exact) {
            let values = candidate.values(sample, &self.points);
            worst.merge(&self.compare(&values, exact));
        }
        worst
    }

    /// The largest deviations of values at the points of one sample.
    pub(crate) fn compare(&self, values: &[C], exact: &[C]) -> Worst {
        let mut worst = Worst::default();
        let zero = ZERO * largest(exact);
        for ((value, exact), s) in values.iter().zip(exact).zip(&self.points) {
            worst.take(apart(*value, *exact, zero), s.im / TAU);
        }
        worst
    }
}

/// The deviation, none where both are 0 up to rounding.
pub(crate) fn apart(value: C, exact: C, zero: f64) -> Deviation {
    if value.norm() <= zero && exact.norm() <= zero {
        return Deviation::default();
    }
    Deviation::between(value, exact)
}

/// The largest size among values.
pub(crate) fn largest(values: &[C]) -> f64 {
    values.iter().map(|value| value.norm()).filter(|size| size.is_finite()).fold(0.0, f64::max)
}
