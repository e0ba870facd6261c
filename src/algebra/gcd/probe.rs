//! Degrees of a gcd from univariate images modulo a prime.
//!
//! At a random point, the image along each variable of both operands costs one addition a term.
//! The gcd of two images has at least the degree of the gcd in that variable, and the same degree
//! unless the point is unlucky (Brown 1971). Coprime operands show at once: all degrees are 0.

use super::super::modular::{Dense, Random, primes};
use super::super::monomial::Var;
use super::super::polynomial::Polynomial;

/// An upper bound, almost always attained, for the degree of the gcd in each variable. Both
/// operands contain the same variables.
pub(super) fn degrees(a: &Polynomial, b: &Polynomial) -> Vec<(Var, u32)> {
    let Some(field) = primes().next() else { return Vec::new() };
    let mut random = Random::new(0x6763_6421);
    let variables: Vec<Var> = a.variables().collect();
    let point: Vec<u64> = variables.iter().map(|_| random.unit(&field)).collect();
    let value = |variable: Var| variables.binary_search(&variable).map_or(1, |place| point[place]);
    let lines = a.lines_modulo(&field, value).into_iter().zip(b.lines_modulo(&field, value));
    lines
        .map(|((variable, left), (_, right))| {
            let (most, other) = (a.degree(variable), b.degree(variable));
            let kept = |line: &Dense, degree: u32| line.degree() == degree as usize;
            if kept(&left, most) || kept(&right, other) {
                (variable, left.gcd(&right, &field).degree() as u32)
            } else {
                (variable, most.min(other))
            }
        })
        .collect()
}
