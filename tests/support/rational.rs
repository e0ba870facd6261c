//! A rational function of s with numbers for coefficients, from the `numeric` field of a result.
//!
//! Coefficients stay exact; the response at a frequency is computed in double precision.

use super::{exact, roots};
use num_complex::Complex64;
use num_rational::BigRational;
use num_traits::{ToPrimitive, Zero};
use serde_json::Value;
use std::f64::consts::{PI, SQRT_2};

/// Numerator over denominator, coefficients by rising powers of s.
pub(crate) struct Rational {
    /// Coefficients of the numerator.
    pub(crate) numerator: Vec<BigRational>,
    /// Coefficients of the denominator.
    pub(crate) denominator: Vec<BigRational>,
}

impl Rational {
    /// Reads a result.
    ///
    /// # Errors
    /// Where the result has no numbers, or has what are no numbers.
    pub(crate) fn of(result: &Value) -> Result<Self, String> {
        let side = |name: &str| {
            let list = result["numeric"][name].as_array();
            let list = list.ok_or_else(|| format!("`numeric` has no {name}"))?;
            list.iter()
                .map(|value| exact::number(value.as_str().ok_or("a coefficient is no text")?))
                .collect::<Result<Vec<_>, String>>()
        };
        let rational = Self { numerator: side("numerator")?, denominator: side("denominator")? };
        match rational.denominator.last() {
            Some(leading) if !leading.is_zero() => Ok(rational),
            _ => Err("the denominator has no leading coefficient".into()),
        }
    }

    /// The value at s = jω.
    pub(crate) fn at(&self, omega: f64) -> Complex64 {
        let s = Complex64::new(0.0, omega);
        horner(&self.numerator, s) / horner(&self.denominator, s)
    }

    /// The exact value at s = 0.
    pub(crate) fn dc(&self) -> Result<BigRational, String> {
        let first = |side: &[BigRational]| side.first().cloned().unwrap_or_else(BigRational::zero);
        let under = first(&self.denominator);
        if under.is_zero() {
            return Err("a pole lies at s = 0".into());
        }
        Ok(first(&self.numerator) / under)
    }

    /// The exact value at infinite s.
    pub(crate) fn high(&self) -> Result<BigRational, String> {
        let degree = self.denominator.len();
        let zero = BigRational::zero();
        let over = self.numerator.get(degree - 1).unwrap_or(&zero);
        if self.numerator.len() > degree {
            return Err("the value grows without bound".into());
        }
        Ok(over / &self.denominator[degree - 1])
    }

    /// The zeros.
    pub(crate) fn zeros(&self) -> Vec<Complex64> {
        roots::of(&self.numerator)
    }

    /// The poles.
    pub(crate) fn poles(&self) -> Vec<Complex64> {
        roots::of(&self.denominator)
    }

    /// Where the magnitude has fallen by 3.01 dB from that at `from` rad/s; by bisection over nine decades.
    pub(crate) fn edge(&self, from: f64, upwards: bool) -> f64 {
        let level = self.at(from).norm() / SQRT_2;
        let (mut inside, mut outside) = (from, if upwards { from * 1e9 } else { from / 1e9 });
        for _ in 0..100 {
            let middle = (inside * outside).sqrt();
            if self.at(middle).norm() < level {
                outside = middle;
            } else {
                inside = middle;
            }
        }
        (inside * outside).sqrt()
    }

    /// Where between two frequencies in rad/s the magnitude is largest; by golden section.
    pub(crate) fn peak(&self, mut low: f64, mut high: f64) -> f64 {
        let golden = (5.0_f64.sqrt() - 1.0) / 2.0;
        for _ in 0..100 {
            let (left, right) = (high - golden * (high - low), low + golden * (high - low));
            if self.at(left).norm() > self.at(right).norm() {
                high = right;
            } else {
                low = left;
            }
        }
        (low + high) / 2.0
    }
}

/// The nearest double; a number far outside the range becomes infinite or 0.
pub(crate) fn float(number: &BigRational) -> f64 {
    number.to_f64().unwrap_or(f64::NAN)
}

/// Radians per second in hertz.
pub(crate) fn hertz(omega: f64) -> f64 {
    omega / (2.0 * PI)
}

fn horner(coefficients: &[BigRational], s: Complex64) -> Complex64 {
    coefficients.iter().rev().fold(Complex64::zero(), |sum, c| sum * s + float(c))
}
