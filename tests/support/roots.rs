//! All roots of a polynomial in double precision, for tests.
//!
//! Aberth's iteration (O. Aberth, Math. Comp. 27, 1973) from starting points on circles whose
//! radii are the slopes of the upper hull of log |coefficient| (D. Bini, Numer. Algorithms 13,
//! 1996), so that roots many decades apart are found too. Roots at 0 are split off exactly.

use super::rational::float;
use num_complex::Complex64;
use num_rational::BigRational;
use num_traits::{Signed, Zero};
use std::f64::consts::PI;

/// The roots of Σ `coefficients[k]`·x^k, each as often as its multiplicity; none for a constant.
pub(crate) fn of(coefficients: &[BigRational]) -> Vec<Complex64> {
    let zeros = coefficients.iter().take_while(|c| c.is_zero()).count();
    let mut roots = vec![Complex64::zero(); zeros.min(coefficients.len().saturating_sub(1))];
    let rest = &coefficients[zeros..];
    if rest.len() > 1 {
        let polynomial: Vec<f64> = rest.iter().map(float).collect();
        roots.extend(iterate(&polynomial, starts(rest)));
    }
    roots
}

/// One starting point for each root.
fn starts(coefficients: &[BigRational]) -> Vec<Complex64> {
    let mut hull: Vec<(usize, f64)> = Vec::new();
    for (k, c) in coefficients.iter().enumerate().filter(|(_, c)| !c.is_zero()) {
        let point = (k, libm::log(float(&c.abs())));
        while let [.., a, b] = hull[..] {
            if slope(a, b) > slope(b, point) {
                break;
            }
            hull.pop();
        }
        hull.push(point);
    }
    let mut starts = Vec::new();
    for edge in hull.windows(2) {
        let radius = libm::exp(-slope(edge[0], edge[1]));
        let count = edge[1].0 - edge[0].0;
        for index in 0..count {
            // The odd offset keeps the points off the axes of symmetry.
            let angle = 2.0 * PI * index as f64 / count as f64 + 0.7 + edge[0].0 as f64;
            starts.push(Complex64::new(radius * libm::cos(angle), radius * libm::sin(angle)));
        }
    }
    starts
}

fn slope(a: (usize, f64), b: (usize, f64)) -> f64 {
    (b.1 - a.1) / (b.0 - a.0) as f64
}

fn iterate(polynomial: &[f64], mut roots: Vec<Complex64>) -> Vec<Complex64> {
    for _ in 0..500 {
        let mut largest = 0.0_f64;
        for k in 0..roots.len() {
            let x = roots[k];
            let newton = newton_step(polynomial, x);
            let others: Complex64 =
                (0..roots.len()).filter(|&j| j != k).map(|j| (x - roots[j]).inv()).sum();
            let step = newton / (Complex64::new(1.0, 0.0) - newton * others);
            if step.is_finite() {
                roots[k] -= step;
                largest = largest.max(step.norm() / x.norm());
            }
        }
        if largest < 1e-15 {
            break;
        }
    }
    roots
}

/// p(x)/p'(x), scaled by the size of x so that high powers stay in range.
fn newton_step(polynomial: &[f64], x: Complex64) -> Complex64 {
    let (mut value, mut derivative) = (Complex64::zero(), Complex64::zero());
    for &c in polynomial.iter().rev() {
        derivative = derivative * x + value;
        value = value * x + c;
    }
    if value.is_zero() { Complex64::zero() } else { value / derivative }
}
