//! Square-free decomposition (Yun 1976), a variable at a time.
//!
//! With respect to one variable the polynomial is content times primitive part. Yun's algorithm
//! separates the multiplicities of the primitive part, all of whose factors contain the variable;
//! the content goes on to the next variable. Cost: a few gcds for each multiplicity.

use super::super::gcd::{gcd, gcd_all};
use super::super::monomial::Var;
use super::super::polynomial::Polynomial;

/// Primitive, square-free, pairwise coprime parts with their multiplicities. The argument is
/// primitive.
pub(super) fn parts(polynomial: &Polynomial) -> Vec<(Polynomial, u32)> {
    let mut result: Vec<(Polynomial, u32)> = Vec::new();
    let mut rest = polynomial.clone();
    while let Some(variable) = rest.variables().min_by_key(|&variable| rest.degree(variable)) {
        if rest.variables().all(|variable| rest.degree(variable) == 1) {
            result.push((rest.abs(), 1));
            break;
        }
        let content = gcd_all(rest.coefficients(variable)).primitive_part();
        let primitive = rest.divide_exact(&content).unwrap_or_else(Polynomial::one);
        result.extend(separated(&primitive, variable));
        rest = content;
    }
    result
}

/// Yun's algorithm for a polynomial all of whose factors contain the variable.
fn separated(polynomial: &Polynomial, variable: Var) -> Vec<(Polynomial, u32)> {
    if polynomial.degree(variable) == 1 {
        return vec![(polynomial.primitive_part(), 1)];
    }
    let over = |value: &Polynomial, divisor: &Polynomial| {
        value.divide_exact(divisor).unwrap_or_else(Polynomial::zero)
    };
    let slope = polynomial.derivative(variable);
    let common = gcd(polynomial, &slope);
    let mut rest = over(polynomial, &common);
    let mut excess = &over(&slope, &common) - &rest.derivative(variable);
    let mut parts = Vec::new();
    for multiplicity in 1.. {
        if rest.is_constant() {
            break;
        }
        let factor = gcd(&rest, &excess);
        rest = over(&rest, &factor);
        excess = &over(&excess, &factor) - &rest.derivative(variable);
        if !factor.is_constant() {
            parts.push((factor.primitive_part(), multiplicity));
        }
    }
    parts
}
