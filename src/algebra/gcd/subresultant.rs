//! Greatest common divisors by the subresultant remainder sequence (Collins 1967, Brown & Traub
//! 1971), recursively over the variables.
//!
//! No primes, no luck, no interpolation: an independent check of the modular method and the last
//! resort behind it. Intermediate coefficients grow, so that it is for small operands. The
//! recursion goes over the variables, one at a time.

use super::super::monomial::Var;
use super::super::polynomial::Polynomial;

/// The greatest common divisor, normalised like [`super::gcd`].
pub fn gcd(a: &Polynomial, b: &Polynomial) -> Polynomial {
    if a.is_zero() || b.is_zero() {
        return if a.is_zero() { b.clone().abs() } else { a.clone().abs() };
    }
    let Some(variable) = a.variables().chain(b.variables()).max() else {
        return Polynomial::constant(a.integer_content().gcd(&b.integer_content()));
    };
    let (left, right) = (content(a, variable), content(b, variable));
    let common = gcd(&left, &right);
    let (Some(mut a), Some(mut b)) = (a.divide_exact(&left), b.divide_exact(&right)) else {
        return common;
    };
    if a.degree(variable) < b.degree(variable) {
        std::mem::swap(&mut a, &mut b);
    }
    let last = last_remainder(a, b, variable);
    if !last.contains(variable) {
        return common;
    }
    let primitive = last.divide_exact(&content(&last, variable)).unwrap_or(last);
    (&common * &primitive).abs()
}

/// The gcd of the coefficients with respect to one variable.
fn content(value: &Polynomial, variable: Var) -> Polynomial {
    let mut parts = value.coefficients(variable);
    parts.sort_by_key(Polynomial::len);
    parts.into_iter().fold(Polynomial::zero(), |common, part| {
        if common.is_one() { common } else { gcd(&common, &part) }
    })
}

/// The last remainder that is not 0. The divisions by `g·h^δ` are exact (Brown & Traub 1971).
fn last_remainder(mut a: Polynomial, mut b: Polynomial, variable: Var) -> Polynomial {
    let (mut g, mut h) = (Polynomial::one(), Polynomial::one());
    loop {
        let delta = a.degree(variable) - b.degree(variable);
        let rest = pseudo_remainder(&a, &b, variable);
        if rest.is_zero() {
            return b;
        }
        if !rest.contains(variable) {
            return rest;
        }
        let Some(next) = rest.divide_exact(&(&g * &h.pow(delta))) else { return rest };
        a = std::mem::replace(&mut b, next);
        g = a.leading_coefficient_in(variable);
        h = match delta {
            0 => h,
            1 => g.clone(),
            _ => g.pow(delta).divide_exact(&h.pow(delta - 1)).unwrap_or(h),
        };
    }
}

/// The remainder of `lc(b)^(deg a − deg b + 1) · a` divided by `b`.
pub(crate) fn pseudo_remainder(a: &Polynomial, b: &Polynomial, variable: Var) -> Polynomial {
    let degree = b.degree(variable);
    let lead = b.leading_coefficient_in(variable);
    let mut rest = a.clone();
    let mut steps = a.degree(variable) + 1 - degree;
    while !rest.is_zero() && rest.degree(variable) >= degree {
        let shift = rest.degree(variable) - degree;
        let top = rest.leading_coefficient_in(variable).times_power(variable, shift);
        rest = &(&rest * &lead) - &(&top * b);
        steps -= 1;
    }
    &rest * &lead.pow(steps)
}
