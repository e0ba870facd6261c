//! All roots of a square-free polynomial with integer coefficients, each in a disc of its own.
//!
//! The roots are found together by the iteration of Aberth (Math. Comp. 27, 1973; Ehrlich, CACM 10,
//! 1967), from starting points whose sizes are the slopes of the Newton polygon (Bini, Numer.
//! Algorithms 13, 1996), in fixed-point arithmetic of growing precision: 64, 128, 256, … bits. Each
//! root has its own scale, a power of two near its size, by which the polynomial is scaled before it
//! is evaluated, so that roots many decades apart are all of size 1.
//!
//! What must hold at the end, with every rounding accounted for: the disc around x with radius
//! n·|p(x)/p'(x)| contains a root; n discs that do not meet contain one each. A root whose disc meets no
//! other than its own in the mirror of the real axis is real; two discs that meet in the mirror hold
//! a conjugate pair.

use std::collections::BTreeMap;

use num_bigint::BigInt;
use num_complex::Complex;
use num_traits::{One, Signed, ToPrimitive, Zero};

use super::fixed::{Fixed, scale};

/// One root of the polynomial and no other lies in the disc.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Disc {
    /// The middle; its imaginary part is 0 exactly when the root is real.
    pub(super) middle: Complex<f64>,
    /// The radius, with the rounding of the middle to doubles.
    pub(super) radius: f64,
    /// The place of the conjugate in the list; its own for a real root.
    pub(super) conjugate: usize,
}

/// Why roots could not be isolated.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Failure {
    /// Roots closer together than a part in 10^300.
    TooClose,
    /// Roots beyond the range of doubles.
    OutOfRange,
}

/// The wanted radius, relative to the size of the root: half of what a double resolves.
const WANTED: f64 = 5.6e-17;

/// The roots of Σ `coefficients[k]`·x^k; the first and the last coefficient must not be 0, and no
/// root may be multiple.
///
/// # Cost
/// Some ten to thirty sweeps, each of 8·n² products of as many words as the condition of the
/// roots demands.
pub(super) fn isolate(coefficients: &[BigInt]) -> Result<Vec<Disc>, Failure> {
    if coefficients.len() < 2 {
        return Ok(Vec::new());
    }
    let points = starts(coefficients);
    Stage::<2>::new(coefficients, &points)
        .run()
        .or_else(|points| Stage::<3>::new(coefficients, &points).run())
        .or_else(|points| Stage::<5>::new(coefficients, &points).run())
        .or_else(|points| Stage::<9>::new(coefficients, &points).run())
        .or_else(|points| Stage::<17>::new(coefficients, &points).run())
        .map_err(|_| Failure::TooClose)?
}

/// A point (re + j·im)·2^(`exponent` − `bits`), between two precisions.
struct Point {
    re: BigInt,
    im: BigInt,
    bits: i64,
    exponent: i64,
}

/// One starting point for each root, on circles whose radii are those of the Newton polygon.
fn starts(coefficients: &[BigInt]) -> Vec<Point> {
    let mut hull: Vec<(usize, f64)> = Vec::new();
    for (power, coefficient) in coefficients.iter().enumerate().filter(|(_, c)| !c.is_zero()) {
        let point = (power, log2(coefficient));
        while let [.., a, b] = hull[..] {
            if slope(a, b) > slope(b, point) {
                break;
            }
            hull.pop();
        }
        hull.push(point);
    }
    let mut points = Vec::with_capacity(coefficients.len() - 1);
    for edge in hull.windows(2) {
        let size = -slope(edge[0], edge[1]);
        let exponent = size.floor() + 1.0;
        let radius = libm::exp2(size - exponent);
        let count = edge[1].0 - edge[0].0;
        for index in 0..count {
            // The odd offset keeps the points off the axes of symmetry.
            let turn = index as f64 / count as f64;
            let angle = std::f64::consts::TAU * turn + 0.7 + edge[0].0 as f64;
            let part = |value: f64| Fixed::<2>::from_f64(radius * value, 0).to_scaled();
            points.push(Point {
                re: part(libm::cos(angle)),
                im: part(libm::sin(angle)),
                bits: Fixed::<2>::FRACTION,
                exponent: exponent as i64,
            });
        }
    }
    points
}

fn slope(a: (usize, f64), b: (usize, f64)) -> f64 {
    (b.1 - a.1) / (b.0 - a.0) as f64
}

fn log2(integer: &BigInt) -> f64 {
    let shift = integer.bits().saturating_sub(60);
    let top = (integer.abs() >> shift).to_f64().unwrap_or(1.0);
    libm::log2(top) + shift as f64
}

/// An approximation w·2^exponent with |w| near 1.
#[derive(Clone, Copy)]
struct Approximation<const L: usize> {
    re: Fixed<L>,
    im: Fixed<L>,
    /// w in double precision.
    near: Complex<f64>,
    exponent: i64,
    /// The radius of the disc in the scale of w; infinite as long as none is known.
    radius: f64,
    /// The radius that is wanted, relative to |w|.
    wanted: f64,
    state: State,
}

#[derive(Clone, Copy, PartialEq, Eq)]
enum State {
    Moving,
    /// The value is below its own error: more precision is needed.
    Noise,
    /// The disc is as small as wanted.
    Certain,
}

/// p and p' at a point, scaled, and bounds of their errors.
struct Values {
    p: Complex<f64>,
    slope: Complex<f64>,
    p_error: f64,
    slope_error: f64,
}

/// The iteration at one precision.
struct Stage<'a, const L: usize> {
    coefficients: &'a [BigInt],
    /// The coefficients c_k·2^(e·k) by exponents e, scaled to a size of at most 1.
    scaled: BTreeMap<i64, Vec<Fixed<L>>>,
    points: Vec<Approximation<L>>,
}

impl<'a, const L: usize> Stage<'a, L> {
    fn new(coefficients: &'a [BigInt], points: &[Point]) -> Self {
        let points = points
            .iter()
            .map(|point| {
                let part = |value: &BigInt| {
                    Fixed::from_scaled(&shifted(value, Fixed::<L>::FRACTION - point.bits))
                };
                let (re, im) = (part(&point.re), part(&point.im));
                let near = Complex::new(re.to_f64(), im.to_f64());
                Approximation {
                    re,
                    im,
                    near,
                    exponent: point.exponent,
                    radius: f64::INFINITY,
                    wanted: WANTED,
                    state: State::Moving,
                }
            })
            .collect();
        Self { coefficients, scaled: BTreeMap::new(), points }
    }

    /// Iterates until every root has its disc, or until no more can be had at this precision.
    fn run(mut self) -> Result<Result<Vec<Disc>, Failure>, Vec<Point>> {
        // Towards roots that are close together the iteration gains about a bit a sweep.
        let sweeps = 40 + 4 * self.points.len() + 2 * Fixed::<L>::FRACTION as usize;
        for _ in 0..sweeps {
            for index in 0..self.points.len() {
                if self.points[index].state == State::Moving {
                    self.step(index);
                }
            }
            if self.points.iter().any(|point| point.state == State::Moving) {
                continue;
            }
            if self.points.iter().any(|point| point.state == State::Noise) {
                break;
            }
            match self.partners() {
                Ok(partners) => return Ok(self.discs(&partners)),
                Err(meeting) => {
                    for index in meeting {
                        self.points[index].wanted *= 1e-10;
                        self.points[index].state = State::Moving;
                    }
                }
            }
        }
        Err(self
            .points
            .iter()
            .map(|point| Point {
                re: point.re.to_scaled(),
                im: point.im.to_scaled(),
                bits: Fixed::<L>::FRACTION,
                exponent: point.exponent,
            })
            .collect())
    }

    /// One step for one root: evaluates, and moves unless it is where it should be.
    fn step(&mut self, index: usize) {
        self.rescale(index);
        let degree = self.points.len() as f64;
        let Values { p, slope, p_error, slope_error } = self.evaluate(index);
        let (p_size, slope_size) = (p.norm(), slope.norm());
        let point = &mut self.points[index];
        point.radius = if slope_size > 2.0 * slope_error {
            degree * (p_size + p_error) / (slope_size - slope_error) * (1.0 + 1e-12)
        } else {
            f64::INFINITY
        };
        let size = point.near.norm();
        if point.radius <= point.wanted * size {
            point.state = State::Certain;
            return;
        }
        if p_size <= 2.0 * p_error {
            point.state = State::Noise;
            return;
        }
        let mut others = Complex::zero();
        for other in (0..self.points.len()).filter(|&other| other != index) {
            let difference = self.difference(index, other, false);
            let inverse = quotient(Complex::one(), difference);
            if inverse.is_finite() {
                others += inverse;
            }
        }
        let mut step = quotient(Complex::one(), quotient(slope, p) - others);
        if !step.is_finite() || step.is_zero() {
            // Two points in one place, or a saddle: any small move helps.
            step = Complex::new(0.01, 0.007) * size;
        }
        let limit = 2.0 * size;
        if step.norm() > limit {
            step *= limit / step.norm();
        }
        let point = &mut self.points[index];
        point.re = point.re.minus(&Fixed::from_f64(step.re, 0));
        point.im = point.im.minus(&Fixed::from_f64(step.im, 0));
        point.near = Complex::new(point.re.to_f64(), point.im.to_f64());
    }

    /// Brings |w| to between 1/4 and 1.
    fn rescale(&mut self, index: usize) {
        let point = &mut self.points[index];
        if point.near.is_zero() {
            point.re = Fixed::from_f64(0.5, 0);
            point.near = Complex::new(0.5, 0.0);
        }
        let (_, power) = libm::frexp(point.near.norm());
        let shift = i64::from(power);
        // A little below 1, so that rounding does not pass it.
        let top = point.near.norm() > 0.999_999;
        if (-1..=0).contains(&shift) && !top {
            return;
        }
        let shift = if scale(point.near.norm(), -shift) > 0.999_999 { shift + 1 } else { shift };
        point.re = point.re.shifted(shift);
        point.im = point.im.shifted(shift);
        point.exponent += shift;
        point.near = Complex::new(point.re.to_f64(), point.im.to_f64());
    }

    /// p and p' by Horner's rule.
    ///
    /// Each product is wrong by less than 6 units of the last place (two products of less than 2 in
    /// each part), each coefficient by less than 1; with |w| ≤ 1 errors do not grow, so
    /// that of p is below 7·(n + 1) units and that of p' below 7·(n + 1)² units.
    fn evaluate(&mut self, index: usize) -> Values {
        let Approximation { re, im, exponent, .. } = self.points[index];
        let coefficients = self
            .scaled
            .entry(exponent)
            .or_insert_with(|| scaled_coefficients(self.coefficients, exponent));
        let (mut p, mut slope) = ([Fixed::ZERO; 2], [Fixed::ZERO; 2]);
        let times = |[a, b]: [Fixed<L>; 2]| {
            [a.times(&re).minus(&b.times(&im)), a.times(&im).plus(&b.times(&re))]
        };
        for coefficient in coefficients.iter().rev() {
            let product = times(slope);
            slope = [product[0].plus(&p[0]), product[1].plus(&p[1])];
            p = times(p);
            p[0] = p[0].plus(coefficient);
        }
        let count = coefficients.len() as f64;
        let unit = scale(1.0, -Fixed::<L>::FRACTION);
        Values {
            p: Complex::new(p[0].to_f64(), p[1].to_f64()),
            slope: Complex::new(slope[0].to_f64(), slope[1].to_f64()),
            p_error: 7.5 * count * unit,
            slope_error: 7.5 * count * count * unit,
        }
    }

    /// The first point minus the second or its mirror image, in the scale of the first.
    fn difference(&self, index: usize, other: usize, mirrored: bool) -> Complex<f64> {
        let (a, b) = (&self.points[index], &self.points[other]);
        let shift = a.exponent - b.exponent;
        let near = if mirrored { b.near.conj() } else { b.near };
        let far = Complex::new(scale(near.re, -shift), scale(near.im, -shift));
        let difference = a.near - far;
        // Where most digits cancel, they are taken from the full precision.
        if difference.norm_sqr() > 1e-10 * a.near.norm_sqr() {
            return difference;
        }
        let im = if mirrored { b.im.negated() } else { b.im };
        Complex::new(
            a.re.minus(&b.re.shifted(shift)).to_f64(),
            a.im.minus(&im.shifted(shift)).to_f64(),
        )
    }

    /// For every root the place of its conjugate; where discs meet, so that this is not certain,
    /// the roots that need smaller ones.
    fn partners(&self) -> Result<Vec<usize>, Vec<usize>> {
        let count = self.points.len();
        let meet = |index: usize, other: usize, mirrored: bool| {
            let (a, b) = (&self.points[index], &self.points[other]);
            let radii = a.radius + scale(b.radius, b.exponent - a.exponent);
            // With room for the rounding of the difference.
            let unit = scale(4.0, -Fixed::<L>::FRACTION);
            let distance = self.difference(index, other, mirrored).norm();
            distance * (1.0 - 1e-9) <= radii + unit
        };
        let (mut partners, mut meeting) = (Vec::with_capacity(count), Vec::new());
        for index in 0..count {
            let apart = (0..count).all(|other| other == index || !meet(index, other, false));
            let mut mirrors = (0..count).filter(|&other| meet(index, other, true));
            match (mirrors.next(), mirrors.next()) {
                (Some(partner), None) if apart => partners.push(partner),
                _ => meeting.push(index),
            }
        }
        if meeting.is_empty() {
            // Mutual but for rounding at the very edge.
            meeting.extend((0..count).filter(|&index| partners[partners[index]] != index));
        }
        if meeting.is_empty() { Ok(partners) } else { Err(meeting) }
    }

    fn discs(&self, partners: &[usize]) -> Result<Vec<Disc>, Failure> {
        let mut discs: Vec<Disc> = Vec::with_capacity(partners.len());
        for (index, (&partner, point)) in partners.iter().zip(&self.points).enumerate() {
            let part = |value: f64| scale(value, point.exponent);
            let mut middle = Complex::new(part(point.near.re), part(point.near.im));
            if partner == index {
                middle.im = 0.0;
            } else if partner < index {
                middle = discs[partner].middle.conj();
            }
            // Half a unit in the last place for each part, and some for the sums here.
            let rounding = 1.2e-16 * (middle.re.abs() + middle.im.abs());
            let radius = (part(point.radius) + rounding) * (1.0 + 1e-15);
            let radius = if partner < index { discs[partner].radius } else { radius };
            let in_range = |value: f64| (1e-290..1e290).contains(&value);
            if !in_range(middle.norm()) {
                return Err(Failure::OutOfRange);
            }
            discs.push(Disc { middle, radius, conjugate: partner });
        }
        Ok(discs)
    }
}

/// The quotient, also where the square of the divisor would leave the range of doubles.
fn quotient(a: Complex<f64>, b: Complex<f64>) -> Complex<f64> {
    let square = b.norm_sqr();
    if (1e-200..1e200).contains(&square) {
        return a * b.conj() / square;
    }
    let (_, power) = libm::frexp(b.re.abs().max(b.im.abs()));
    let halved = |z: Complex<f64>| {
        Complex::new(scale(z.re, -i64::from(power)), scale(z.im, -i64::from(power)))
    };
    halved(a) / halved(b)
}

/// c_k·2^(e·k), all divided by one power of two so that the largest is between 1/2 and 1.
fn scaled_coefficients<const L: usize>(coefficients: &[BigInt], exponent: i64) -> Vec<Fixed<L>> {
    let size = |power: usize, value: &BigInt| value.bits() as i64 + exponent * power as i64;
    let largest = coefficients
        .iter()
        .enumerate()
        .filter(|(_, value)| !value.is_zero())
        .map(|(power, value)| size(power, value))
        .max()
        .unwrap_or(0);
    coefficients
        .iter()
        .enumerate()
        .map(|(power, value)| {
            let shift = exponent * power as i64 - largest + Fixed::<L>::FRACTION;
            if value.is_zero() || value.bits() as i64 + shift <= 0 {
                return Fixed::ZERO;
            }
            Fixed::from_scaled(&shifted(value, shift))
        })
        .collect()
}

/// `value`·2^`shift`, cut.
fn shifted(value: &BigInt, shift: i64) -> BigInt {
    if shift >= 0 { value << shift } else { value >> -shift }
}

#[cfg(test)]
mod tests;
