//! Greatest common divisors over **Z**: which method for which pair.
//!
//! In this order: contents (integers, monomials) are split off; variables that only one operand
//! has, or that a probe modulo a prime shows to be absent from the gcd, are removed by going over
//! to coefficients; a divisor among the operands is recognised; gradings (physical units are such)
//! reduce the number of variables ([`homogeneous`]); what remains goes to the sparse modular
//! method ([`sparse`]). Its answers are verified by dividing both operands; should it give up, the
//! subresultant method ([`subresultant`]) decides, slowly but surely.
//!
//! Normalisation: the leading coefficient is positive; `gcd(0, 0) = 0`.

mod homogeneous;
mod probe;
mod sparse;
mod subresultant;
#[cfg(test)]
mod tests;

use std::collections::BTreeMap;

pub(super) use homogeneous::Grading;
pub use subresultant::gcd as subresultant_gcd;

use super::integer::Integer;
use super::monomial::{LongKey, Var};
use super::polynomial::Polynomial;

/// The greatest common divisor, with positive leading coefficient; `gcd(0, 0) = 0`.
pub fn gcd(a: &Polynomial, b: &Polynomial) -> Polynomial {
    if a.is_zero() || b.is_zero() {
        return if a.is_zero() { b.clone().abs() } else { a.clone().abs() };
    }
    let content = a.integer_content().gcd(&b.integer_content());
    if a.is_constant() || b.is_constant() {
        return Polynomial::constant(content);
    }
    let (left, right) = (a.monomial_content(), b.monomial_content());
    let common = left.iter().filter_map(|&(variable, power)| {
        let place = right.binary_search_by_key(&variable, |entry| entry.0).ok()?;
        Some((variable, power.min(right[place].1)))
    });
    let common = Polynomial::monomial(common, 1).scaled_by(&content);
    let core = gcd_of_cores(&core(a, left), &core(b, right));
    if core.is_one() { common } else { &common * &core }
}

/// The gcd `g` with `a/g` and `b/g`; all 0 if both operands are.
pub fn gcd_cofactors(a: &Polynomial, b: &Polynomial) -> (Polynomial, Polynomial, Polynomial) {
    let common = gcd(a, b);
    let over = |value: &Polynomial| value.divide_exact(&common).unwrap_or_default();
    let (left, right) = (over(a), over(b));
    (common, left, right)
}

/// The gcd of any number of polynomials; 0 for none.
pub fn gcd_all(parts: impl IntoIterator<Item = Polynomial>) -> Polynomial {
    let mut parts: Vec<Polynomial> = parts.into_iter().filter(|part| !part.is_zero()).collect();
    parts.sort_by_key(Polynomial::len);
    let mut common = Polynomial::zero();
    for part in parts {
        if common.is_zero() || part.divide_exact(&common).is_none() {
            common = gcd(&common, &part);
        }
        if common.is_one() {
            break;
        }
    }
    common.abs()
}

/// Divided by the integer content and by the monomial content.
fn core(value: &Polynomial, content: Vec<(Var, u32)>) -> Polynomial {
    let primitive = value.primitive_part();
    if content.is_empty() {
        return primitive;
    }
    primitive.divide_exact(&Polynomial::monomial(content, 1)).unwrap_or(primitive)
}

/// Operands are not 0 and have no integer or monomial content.
fn gcd_of_cores(a: &Polynomial, b: &Polynomial) -> Polynomial {
    let alone: Vec<Var> = a
        .variables()
        .filter(|&variable| !b.contains(variable))
        .chain(b.variables().filter(|&variable| !a.contains(variable)))
        .collect();
    if !alone.is_empty() {
        return gcd_of_coefficients(a, b, &alone);
    }
    if a == b {
        return a.clone();
    }
    let degrees = probe::degrees(a, b);
    let absent: Vec<Var> =
        degrees.iter().filter(|entry| entry.1 == 0).map(|entry| entry.0).collect();
    if absent.len() == degrees.len() {
        return Polynomial::one();
    }
    if !absent.is_empty() {
        return gcd_of_coefficients(a, b, &absent);
    }
    for (divisor, other) in [(a, b), (b, a)] {
        if degrees.iter().all(|&(variable, degree)| divisor.degree(variable) == degree)
            && other.divide_exact(divisor).is_some()
        {
            return divisor.clone();
        }
    }
    let reduced = Grading::find(a, b).and_then(|grading| {
        let (left, right) = (grading.apply(a), grading.apply(b));
        grading.restore(&gcd_with_degrees(&left, &right, &degrees)).map(Polynomial::abs)
    });
    reduced.unwrap_or_else(|| gcd_with_degrees(a, b, &degrees))
}

/// Every variable occurs in both operands and, as far as the probe can tell, in their gcd.
fn gcd_with_degrees(a: &Polynomial, b: &Polynomial, degrees: &[(Var, u32)]) -> Polynomial {
    sparse::gcd(a, b, degrees).unwrap_or_else(|| subresultant_gcd(a, b))
}

/// The gcd when it contains none of the given variables: that of all coefficients in them.
fn gcd_of_coefficients(a: &Polynomial, b: &Polynomial, absent: &[Var]) -> Polynomial {
    let mut parts = coefficients_in(a, absent);
    parts.extend(coefficients_in(b, absent));
    gcd_all(parts).primitive_part()
}

/// The coefficients with respect to the power products of several variables.
fn coefficients_in(value: &Polynomial, variables: &[Var]) -> Vec<Polynomial> {
    let fields: Vec<_> =
        value.layout.fields().iter().filter(|field| variables.contains(&field.variable)).collect();
    let mut parts: BTreeMap<LongKey, (Vec<u64>, Vec<Integer>)> = BTreeMap::new();
    for (words, coefficient) in value.monomials().zip(&value.coefficients) {
        let mut rest = LongKey::from_slice(words);
        fields.iter().for_each(|field| field.clear(&mut rest));
        // The fields do not overlap: the difference holds exactly the given variables.
        let power: LongKey = words.iter().zip(&rest).map(|(all, rest)| all ^ rest).collect();
        let part = parts.entry(power).or_default();
        part.0.extend_from_slice(&rest);
        part.1.push(coefficient.clone());
    }
    let layout = &value.layout;
    let polynomial = |(words, coefficients)| {
        Polynomial { layout: layout.clone(), words, coefficients }.tightened()
    };
    parts.into_values().map(polynomial).collect()
}
