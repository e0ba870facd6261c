//! Bode's form in numbers: H = K · s^k · Π(1 − s/zero)/Π(1 − s/pole) (Bode 1945).
//!
//! Each factor is 1 at s = 0, so its phase begins at 0 and can be followed without ever jumping: the
//! phase of the whole is that of K (0 or 180°), k quarter turns, and the sum of the factors'.

use std::f64::consts::{FRAC_PI_2, PI, TAU};

use num_complex::Complex;
use num_traits::{Signed, Zero};

use super::{ResponseError, scaled};
use crate::algebra::Univariate;
use crate::analysis::roots::{Root, find};
use crate::elimination::Scaled;

/// A function at one frequency.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Point {
    /// The frequency.
    pub hz: f64,
    /// The value in SI units; overflows and underflows as a double does.
    pub value: Complex<f64>,
    /// The logarithm of the magnitude to base ten; −∞ for 0.
    pub decades: f64,
    /// The phase in radian, unwrapped; positive is ahead.
    pub phase: f64,
    /// The group delay −dφ/dω in seconds.
    pub delay: f64,
}

impl Point {
    /// The magnitude in decibels; −∞ for 0.
    pub fn decibels(&self) -> f64 {
        20.0 * self.decades
    }

    /// The phase in degrees, unwrapped.
    pub fn degrees(&self) -> f64 {
        self.phase.to_degrees()
    }
}

/// A transfer function by its roots.
#[derive(Clone, Debug)]
pub struct Factored {
    /// Numerator and denominator in lowest terms.
    pub(super) parts: [Univariate; 2],
    /// K, with its exponent apart.
    pub(super) lead: Scaled,
    negative: bool,
    /// The power of s.
    pub(super) power: i32,
    /// The zeros that are not 0.
    pub(super) zeros: Vec<Root>,
    /// The poles that are not 0.
    pub(super) poles: Vec<Root>,
}

impl Factored {
    /// From numerator and denominator in lowest terms.
    ///
    /// # Errors
    /// Those of the root finder.
    pub fn new(above: &Univariate, below: &Univariate) -> Result<Self, ResponseError> {
        let lowest = |of: &Univariate| of.numerators().iter().take_while(|c| c.is_zero()).count();
        let others = |of: &Univariate| -> Result<Vec<Root>, ResponseError> {
            Ok(find(of)?.into_iter().filter(|root| !root.value.is_zero()).collect())
        };
        if below.is_zero() {
            return Err(ResponseError::NotFinite);
        }
        let parts = [above.clone(), below.clone()];
        if above.is_zero() {
            let (zeros, poles) = (Vec::new(), Vec::new());
            return Ok(Self { parts, lead: Scaled::ZERO, negative: false, power: 0, zeros, poles });
        }
        let (up, down) = (lowest(above), lowest(below));
        let lead = above.coefficient(up) / below.coefficient(down);
        Ok(Self {
            parts,
            negative: lead.is_negative(),
            lead: scaled(&lead),
            power: i32::try_from(up).unwrap_or(i32::MAX) - i32::try_from(down).unwrap_or(i32::MAX),
            zeros: others(above)?,
            poles: others(below)?,
        })
    }

    /// Whether the function is the same at every frequency.
    pub fn is_constant(&self) -> bool {
        self.power == 0 && self.zeros.is_empty() && self.poles.is_empty()
    }

    /// The value at a frequency in hertz.
    pub fn at(&self, hz: f64) -> Point {
        let omega = TAU * hz;
        let mut value = self.lead;
        let step = Scaled::new(Complex::new(0.0, omega), 0);
        for _ in 0..self.power.unsigned_abs() {
            value = if self.power > 0 { value.times(step) } else { value.divided_by(step) };
        }
        let mut phase = f64::from(self.power) * FRAC_PI_2 + if self.negative { PI } else { 0.0 };
        let mut delay = 0.0;
        for (roots, sign) in [(&self.zeros, 1.0), (&self.poles, -1.0)] {
            for root in roots {
                let factor = Factor::new(root, omega);
                for _ in 0..root.multiplicity {
                    let one = Scaled::new(factor.value(), 0);
                    value = if sign > 0.0 { value.times(one) } else { value.divided_by(one) };
                }
                let times = sign * f64::from(root.multiplicity);
                phase += times * factor.phase();
                delay -= times * factor.slope();
            }
        }
        Point { hz, value: value.value(), decades: value.log10(), phase, delay }
    }
}

/// The factor 1 − s/root at s = jω, in units of the root's size.
struct Factor {
    /// root/|root|
    direction: Complex<f64>,
    /// ω/|root|
    omega: f64,
    size: f64,
}

impl Factor {
    fn new(root: &Root, omega: f64) -> Self {
        let size = root.value.norm();
        Self { direction: root.value / size, omega: omega / size, size }
    }

    fn value(&self) -> Complex<f64> {
        (self.direction - Complex::new(0.0, self.omega)) * self.direction.conj()
    }

    /// The share of the phase; those of two conjugate roots add up to what begins at 0.
    fn phase(&self) -> f64 {
        let angle = libm::atan2(self.omega - self.direction.im, self.direction.re.abs());
        if self.direction.re > 0.0 { -angle } else { angle }
    }

    /// dφ/dω in seconds; a root on the imaginary axis turns the phase at one frequency alone.
    fn slope(&self) -> f64 {
        let (across, along) = (self.direction.re, self.omega - self.direction.im);
        if across == 0.0 { 0.0 } else { -across / (across * across + along * along) / self.size }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn function(above: &[i64], below: &[i64]) -> Factored {
        let of = |list: &[i64]| Univariate::from_integers(list.iter().copied());
        Factored::new(&of(above), &of(below)).expect("roots")
    }

    /// Against the quotient of the polynomials, and the phase modulo whole turns.
    #[test]
    fn values_are_those_of_the_polynomials() {
        for (above, below) in [
            (&[1][..], &[1, 2, 1][..]),
            (&[0, 3], &[5, 1, 2]),
            (&[-7, 2], &[0, 1, 4, 1]),
            (&[4, 0, 1], &[1, -1, 3]),
            (&[0, 0, 5], &[1]),
        ] {
            let function = function(above, below);
            for hz in [1e-3, 0.04, 0.3, 1.0, 20.0] {
                let s = Complex::new(0.0, TAU * hz);
                let of = |list: &[i64]| {
                    list.iter().rev().fold(Complex::new(0.0, 0.0), |sum, &c| sum * s + c as f64)
                };
                let (found, expected) = (function.at(hz), of(above) / of(below));
                assert!((found.value - expected).norm() < 1e-13 * expected.norm(), "{above:?}");
                let turned = Complex::from_polar(1.0, found.phase) * expected.norm();
                assert!((turned - expected).norm() < 1e-12 * expected.norm(), "{above:?} {hz}");
                let step = 1e-6 * hz;
                let numeric = -(function.at(hz + step).phase - function.at(hz - step).phase)
                    / (2.0 * TAU * step);
                assert!((found.delay - numeric).abs() < 1e-6 * found.delay.abs().max(1e-3));
            }
        }
    }

    #[test]
    fn the_phase_never_jumps() {
        // Five poles at −1: −450° in the end.
        let low_pass = function(&[1], &[1, 5, 10, 10, 5, 1]);
        assert!((low_pass.at(1e9).degrees() + 450.0).abs() < 1e-6);
        // A zero in the right half plane, and an inverting gain.
        let mixed = function(&[-1, 1], &[1, 1]);
        assert!((mixed.at(1e-9).degrees() - 180.0).abs() < 1e-6);
        assert!(mixed.at(1e9).degrees().abs() < 1e-6);
    }

    #[test]
    fn sizes_beyond_a_double_have_a_logarithm() {
        let mut below = vec![0_i64; 40];
        below.push(1);
        let function = function(&[1], &below);
        let point = function.at(1e12);
        assert_eq!(point.value.norm(), 0.0);
        assert!((point.decades + 40.0 * libm::log10(TAU * 1e12)).abs() < 1e-9);
        assert_eq!(point.degrees(), -3600.0);
    }
}
