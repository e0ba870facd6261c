//! Partial fractions: a function of s as a function of time, in closed form.
//!
//! At a pole p of multiplicity m, H·(s − p)^m is expanded in powers of x = s − p, factor by factor over the
//! other roots (Heaviside's expansion theorem); the polynomial part is an exact division.

use num_complex::Complex;
use num_traits::{ToPrimitive, Zero};

use super::{Factored, ResponseError, scaled};
use crate::algebra::Univariate;
use crate::analysis::roots::{Root, find};
use crate::elimination::Scaled;

/// coefficient · t^(power − 1)/(power − 1)! · e^(pole·t), for t ≥ 0.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Term {
    /// The pole in 1/s.
    pub pole: Complex<f64>,
    /// From 1 to the multiplicity of the pole.
    pub power: u32,
    /// In the unit of the function, by powers of seconds.
    pub coefficient: Complex<f64>,
}

/// A function of time that is 0 before t = 0.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct TimeFunction {
    /// Weights of the unit impulse at t = 0 and of its derivatives.
    pub impulses: Vec<f64>,
    /// The terms; conjugate poles stand side by side, so that the sum is real.
    pub terms: Vec<Term>,
    /// What the rounding of the roots may do to the sum at t = 0, absolute; an estimate.
    pub uncertainty: f64,
}

impl TimeFunction {
    /// The value at a time above 0, in seconds; at 0 the limit from above.
    pub fn at(&self, t: f64) -> f64 {
        let term = |term: &Term| {
            let growth = exponential(term.pole * t);
            let power = (1..term.power).fold(1.0, |product, k| product * t / f64::from(k));
            (term.coefficient * growth).re * power
        };
        self.terms.iter().map(term).sum()
    }

    /// The sum with another one times a factor.
    #[must_use]
    pub fn plus(mut self, other: &Self, factor: f64) -> Self {
        self.impulses.resize(self.impulses.len().max(other.impulses.len()), 0.0);
        for (weight, more) in self.impulses.iter_mut().zip(&other.impulses) {
            *weight += factor * more;
        }
        for more in &other.terms {
            let same = |term: &&mut Term| term.pole == more.pole && term.power == more.power;
            match self.terms.iter_mut().find(same) {
                Some(term) => term.coefficient += more.coefficient * factor,
                None => self.terms.push(Term { coefficient: more.coefficient * factor, ..*more }),
            }
        }
        self.uncertainty += factor.abs() * other.uncertainty;
        self
    }

    /// A time after which little happens: five time constants of the slowest term that counts, or ten
    /// periods where nothing decays; none without such a term.
    pub fn duration(&self) -> Option<f64> {
        const COUNTS: f64 = 1e-3;
        let size = |term: &Term| term.coefficient.norm();
        let moving = || self.terms.iter().filter(|term| !term.pole.is_zero());
        let largest = moving().filter(|term| term.power == 1).map(size).fold(0.0, f64::max);
        let counting = || moving().filter(|term| term.power > 1 || size(term) >= COUNTS * largest);
        let slowest = counting().map(|term| term.pole.re.abs()).fold(f64::INFINITY, f64::min);
        let period = counting()
            .map(|term| std::f64::consts::TAU / term.pole.im.abs())
            .fold(f64::INFINITY, f64::min);
        let longest = counting().map(|term| term.power).max().unwrap_or(1);
        match (5.0 + 2.0 * f64::from(longest - 1)) / slowest {
            time if time.is_finite() && time <= 60.0 * period => Some(time),
            time if time.is_finite() && !period.is_finite() => Some(time),
            _ if period.is_finite() => Some(10.0 * period.min(f64::MAX)),
            _ => None,
        }
    }
}

impl Factored {
    /// The answer to a unit impulse.
    ///
    /// # Errors
    /// Poles that double precision does not tell apart.
    pub fn impulse(&self) -> Result<TimeFunction, ResponseError> {
        let [above, below] = &self.parts;
        expand(above, below)
    }

    /// The answer to a unit step.
    ///
    /// # Errors
    /// As for [`Self::impulse`].
    pub fn step(&self) -> Result<TimeFunction, ResponseError> {
        let [above, below] = &self.parts;
        let s = Univariate::from_integers([0, 1]);
        match above.divide_exact(&s) {
            Some(rest) if !above.is_zero() => expand(&rest, below),
            _ => expand(above, &(below * &s)),
        }
    }
}

/// With the same last bit on every machine.
fn exponential(z: Complex<f64>) -> Complex<f64> {
    Complex::new(libm::cos(z.im), libm::sin(z.im)) * libm::exp(z.re)
}

/// above/below, in lowest terms, as a function of time.
fn expand(above: &Univariate, below: &Univariate) -> Result<TimeFunction, ResponseError> {
    if above.is_zero() {
        return Ok(TimeFunction::default());
    }
    let (whole, _) = above.div_rem(below).ok_or(ResponseError::NotFinite)?;
    let weight = |power| whole.coefficient(power).to_f64().ok_or(ResponseError::NotFinite);
    let count = if whole.is_zero() { 0 } else { whole.degree() + 1 };
    let impulses = (0..count).map(weight).collect::<Result<_, _>>()?;
    let (zeros, poles) = (find(above)?, find(below)?);
    let gain = scaled(&(above.leading_coefficient() / below.leading_coefficient()));
    let mut function = TimeFunction { impulses, ..TimeFunction::default() };
    for (index, pole) in poles.iter().enumerate() {
        let others = || poles.iter().enumerate().filter(|&(other, _)| other != index);
        let mut series = vec![Scaled::ZERO; pole.multiplicity as usize];
        series[0] = gain;
        let mut relative = 0.0;
        let mut take = |root: &Root, above: bool| {
            let distance = pole.value - root.value;
            let blur = root.error_bound + pole.error_bound + f64::EPSILON * pole.value.norm();
            relative += f64::from(root.multiplicity) * blur / distance.norm();
            for _ in 0..root.multiplicity {
                let distance = Scaled::new(distance, 0);
                if above { multiply(&mut series, distance) } else { divide(&mut series, distance) }
            }
        };
        zeros.iter().for_each(|zero| take(zero, true));
        others().for_each(|(_, other)| take(other, false));
        for (power, coefficient) in (1..=pole.multiplicity).rev().zip(&series) {
            let coefficient = coefficient.value();
            if !coefficient.is_finite() {
                return Err(ResponseError::Cancelling);
            }
            function.terms.push(Term { pole: pole.value, power, coefficient });
            function.uncertainty += coefficient.norm() * relative;
        }
    }
    Ok(function)
}

/// Times (distance + x), in place.
fn multiply(series: &mut [Scaled], distance: Scaled) {
    for k in (0..series.len()).rev() {
        let product = series[k].times(distance);
        series[k] = if k == 0 { product } else { product.plus(series[k - 1]) };
    }
}

/// Over (distance + x), in place.
fn divide(series: &mut [Scaled], distance: Scaled) {
    let minus = Scaled::new(Complex::new(-1.0, 0.0), 0);
    for k in 0..series.len() {
        let rest = if k == 0 { series[k] } else { series[k].plus(series[k - 1].times(minus)) };
        series[k] = rest.divided_by(distance);
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn function(above: &[i64], below: &[i64]) -> Factored {
        let of = |list: &[i64]| Univariate::from_integers(list.iter().copied());
        Factored::new(&of(above), &of(below)).expect("roots")
    }

    #[test]
    fn transforms_of_the_tables() {
        let check = |found: TimeFunction, impulses: &[f64], expected: &dyn Fn(f64) -> f64| {
            assert_eq!(found.impulses, impulses);
            for t in [0.0, 0.1, 0.7, 2.0, 5.0] {
                assert!((found.at(t) - expected(t)).abs() < 1e-12, "{t}: {}", found.at(t));
            }
        };
        // 1/(1 + s)
        check(function(&[1], &[1, 1]).impulse().expect("it"), &[], &|t| libm::exp(-t));
        check(function(&[1], &[1, 1]).step().expect("it"), &[], &|t| 1.0 - libm::exp(-t));
        // s/(1 + s): the step starts at 1, the impulse has a weight.
        check(function(&[0, 1], &[1, 1]).step().expect("it"), &[], &|t| libm::exp(-t));
        check(function(&[0, 1], &[1, 1]).impulse().expect("it"), &[1.0], &|t| -libm::exp(-t));
        // 1/(1 + s)³
        let third = function(&[1], &[1, 3, 3, 1]);
        check(third.impulse().expect("it"), &[], &|t| t * t / 2.0 * libm::exp(-t));
        check(third.step().expect("it"), &[], &|t| 1.0 - (1.0 + t + t * t / 2.0) * libm::exp(-t));
        // 1/(1 + s²): nothing decays.
        check(function(&[1], &[1, 0, 1]).impulse().expect("it"), &[], &libm::sin);
        // (s² + 1)/s = s + 1/s
        check(function(&[1, 0, 1], &[0, 1]).impulse().expect("it"), &[0.0, 1.0], &|_| 1.0);
        check(function(&[1, 0, 1], &[0, 1]).step().expect("it"), &[1.0], &|t| t);
        check(function(&[0], &[1]).step().expect("it"), &[], &|_| 0.0);
    }
}
