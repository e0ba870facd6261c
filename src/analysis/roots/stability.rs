//! Stability, decided exactly: from the signs of integers, not from the places of roots.
//!
//! Numbers: the array of Routh (1877). What lies symmetrically about the imaginary axis is split off
//! first ([`super::find()`]); an even polynomial A has only simple roots on that axis exactly when A + A' is
//! stable (Hermite 1856, Biehler 1879). Symbols: the conditions of Hurwitz (1895) in the
//! short form of Liénard and Chipart (1914), for orders up to four.

use num_bigint::BigInt;
use num_integer::Integer;
use num_traits::{One, Signed, Zero};

use super::find::split;
use crate::algebra::{Polynomial, Univariate, Var, factor};

/// Where the poles lie.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Verdict {
    /// All in the open left half plane.
    Stable,
    /// None in the right half plane, simple ones on the imaginary axis.
    Marginal,
    /// Some in the right half plane, or multiple ones on the imaginary axis.
    Unstable,
}

/// What the values of the symbols must be for the poles to lie in the open left half plane.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Conditions {
    /// Nothing: every circuit of this form with positive values is stable.
    Always,
    /// Nothing helps: no circuit of this form with positive values is stable.
    Never,
    /// All of these polynomials must be positive.
    AllPositive(Vec<Polynomial>),
}

/// The verdict on a denominator.
pub fn verdict(denominator: &Univariate) -> Verdict {
    let coefficients = denominator.numerators();
    if is_hurwitz(coefficients) {
        return Verdict::Stable;
    }
    let zeros = coefficients.iter().take_while(|c| c.is_zero()).count();
    if zeros > 1 {
        return Verdict::Unstable;
    }
    let rest = Univariate::from_integers(coefficients[zeros..].iter().cloned());
    for (part, multiplicity) in rest.square_free() {
        let (symmetric, others) = split(&part);
        if !is_hurwitz(others.numerators()) {
            return Verdict::Unstable;
        }
        if symmetric.is_constant() {
            continue;
        }
        let even = symmetric.numerators().iter().flat_map(|c| [c.clone(), BigInt::zero()]);
        let even = Univariate::from_integers(even);
        let sum = &even + &even.derivative();
        if multiplicity > 1 || !is_hurwitz(sum.numerators()) {
            return Verdict::Unstable;
        }
    }
    Verdict::Marginal
}

/// Whether all roots lie in the open left half plane: the first column of the array of Routh has one
/// sign. Numbers are divided by what they have in common, so that they stay short.
pub fn is_hurwitz(coefficients: &[BigInt]) -> bool {
    let Some(last) = coefficients.last() else { return false };
    let sign = if last.is_negative() { -BigInt::one() } else { BigInt::one() };
    let row = |skip: usize| -> Vec<BigInt> {
        coefficients.iter().rev().skip(skip).step_by(2).map(|c| c * &sign).collect()
    };
    let (mut above, mut below) = (row(0), row(1));
    while let Some(first) = below.first() {
        if !first.is_positive() {
            return false;
        }
        let zero = BigInt::zero();
        let mut next: Vec<BigInt> = (1..above.len())
            .map(|column| {
                let under = below.get(column).unwrap_or(&zero);
                first * &above[column] - &above[0] * under
            })
            .collect();
        let common = next.iter().fold(BigInt::zero(), |common, value| common.gcd(value));
        if !common.is_zero() && !common.is_one() {
            for value in &mut next {
                *value /= &common;
            }
        }
        if next.iter().all(Zero::is_zero) && !next.is_empty() {
            return false;
        }
        (above, below) = (below, next);
    }
    true
}

/// Orders up to which conditions are written down, and terms up to which they are simplified.
const MAX_ORDER: usize = 4;
const MAX_TERMS: usize = 400;

/// The conditions on the symbols, all of which stand for positive values; `positive` tells the sign of a
/// polynomial at the nominal values. None for orders above four and for what is too long.
pub(super) fn conditions(
    denominator: &Polynomial,
    positive: impl Fn(&Polynomial) -> bool,
) -> Option<Conditions> {
    let mut a = denominator.coefficients(Var::S);
    let order = a.len().checked_sub(1)?;
    if order == 0 {
        return Some(Conditions::Always);
    }
    if a[0].is_zero() {
        return Some(Conditions::Never);
    }
    if order > MAX_ORDER || a.iter().map(Polynomial::len).sum::<usize>() > MAX_TERMS {
        return None;
    }
    // All coefficients of one sign: that of the highest one, where it is sure or at the nominal values.
    if !positive(&a[order]) {
        a = a.into_iter().map(|part| -part).collect();
    }
    let needed: Vec<Polynomial> = match order {
        3 => {
            let second = &(&a[1] * &a[2]) - &(&a[0] * &a[3]);
            vec![a[3].clone(), a[2].clone(), a[0].clone(), second]
        }
        4 => {
            let second = &(&a[1] * &a[2]) - &(&a[0] * &a[3]);
            let third = &(&a[3] * &second) - &(&(&a[1] * &a[1]) * &a[4]);
            vec![a[4].clone(), a[3].clone(), a[2].clone(), a[0].clone(), third]
        }
        _ => a,
    };
    let mut left: Vec<Polynomial> = Vec::new();
    for polynomial in &needed {
        match sign(polynomial) {
            Some(true) => {}
            Some(false) => return Some(Conditions::Never),
            None if polynomial.len() > MAX_TERMS => return None,
            None => {
                let essential = essential(polynomial);
                if !left.contains(&essential) {
                    left.push(essential);
                }
            }
        }
    }
    Some(if left.is_empty() { Conditions::Always } else { Conditions::AllPositive(left) })
}

/// The sign for all positive values, where the terms agree in it; 0 counts as negative.
fn sign(polynomial: &Polynomial) -> Option<bool> {
    let mut signs = polynomial.terms().map(|(_, coefficient)| coefficient.is_positive());
    let Some(first) = signs.next() else { return Some(false) };
    signs.all(|sign| sign == first).then_some(first)
}

/// Without the factors that are positive for all positive values, and without squares of others.
fn essential(polynomial: &Polynomial) -> Polynomial {
    let factors = factor(polynomial);
    let mut negative = factors.content.is_negative();
    let mut product = Polynomial::one();
    for (part, multiplicity) in &factors.factors {
        match sign(part) {
            Some(true) => {}
            Some(false) => negative ^= multiplicity % 2 == 1,
            None if multiplicity % 2 == 1 => product *= part,
            None => {}
        }
    }
    if negative { -product } else { product }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::algebra::modular::Random;
    use crate::analysis::roots::find;

    fn polynomial(coefficients: &[i64]) -> Univariate {
        Univariate::from_integers(coefficients.iter().copied())
    }

    #[test]
    fn verdicts() {
        let check = |coefficients: &[i64], expected| {
            assert_eq!(verdict(&polynomial(coefficients)), expected, "{coefficients:?}");
        };
        check(&[3], Verdict::Stable);
        check(&[1, 1], Verdict::Stable);
        check(&[-1, 1], Verdict::Unstable);
        check(&[-1, -1], Verdict::Stable);
        check(&[1, 0, 1], Verdict::Marginal);
        check(&[0, 1], Verdict::Marginal);
        check(&[0, 0, 1], Verdict::Unstable);
        check(&[0, 1, 0, 1], Verdict::Marginal);
        check(&[1, 0, 2, 0, 1], Verdict::Unstable);
        check(&[1, 0, -1], Verdict::Unstable);
        // s³ + s² + s + 1 = (s + 1)(s² + 1)
        check(&[1, 1, 1, 1], Verdict::Marginal);
        check(&[2, 1, 1, 1], Verdict::Unstable);
        check(&[1, 2, 1, 1], Verdict::Stable);
        // (s + 1)²(s² + 4)
        check(&[4, 8, 5, 2, 1], Verdict::Marginal);
    }

    /// Random polynomials, products of factors among them, so that all verdicts occur.
    #[test]
    fn the_roots_agree_on_ten_thousand_polynomials() {
        let mut random = Random::new(7);
        let mut seen = [0; 3];
        let mut draw = |below: u64, from: i64| from + (random.word() % below) as i64;
        for case in 0..10_000 {
            let mut whole = Univariate::one();
            for _ in 0..=case % 3 {
                let part = match draw(4, 0) {
                    0 => vec![draw(6, 0), draw(5, 1)],
                    1 => vec![draw(6, 1), 0, draw(5, 1)],
                    2 => vec![draw(9, 1), draw(9, -1), draw(6, 1)],
                    _ => (0..=draw(4, 1)).map(|_| draw(12, -1)).collect(),
                };
                let part = polynomial(&part);
                whole = if part.is_zero() { whole } else { &whole * &part };
            }
            let roots = find(&whole).expect("roots");
            let right = roots.iter().any(|root| root.value.re > root.error_bound);
            let unclear = roots
                .iter()
                .any(|root| root.value.re != 0.0 && root.value.re.abs() <= root.error_bound);
            assert!(!unclear, "{whole:?}");
            let axis = || roots.iter().filter(|root| root.value.re == 0.0);
            let expected = if right || axis().any(|root| root.multiplicity > 1) {
                Verdict::Unstable
            } else if axis().next().is_some() {
                Verdict::Marginal
            } else {
                Verdict::Stable
            };
            assert_eq!(verdict(&whole), expected, "{whole:?} {roots:?}");
            seen[expected as usize] += 1;
        }
        assert!(seen.iter().all(|&count| count > 500), "{seen:?}");
    }

    #[test]
    fn conditions_on_symbols() {
        let (k, r, c) =
            (Polynomial::from(Var(1)), Polynomial::from(Var(2)), Polynomial::from(Var(3)));
        let s = Polynomial::from(Var::S);
        let one = Polynomial::one();
        let check = |denominator: &Polynomial, expected: Conditions| {
            assert_eq!(conditions(denominator, |_| true), Some(expected), "{denominator}");
        };
        let tau = &(&s * &r) * &c;
        check(&(&one + &tau), Conditions::Always);
        // 1 + sRC(3 − k) + s²R²C²: the gain must stay below 3.
        let three = &Polynomial::from(3) - &k;
        let second = &(&one + &(&tau * &three)) + &(&tau * &tau);
        check(&second, Conditions::AllPositive(vec![three]));
        check(&(&one - &tau), Conditions::Never);
        // (1 + sRC)³ + k: a phase-shift loop is stable below a gain of 8.
        let cube = &(&one + &tau).pow(3) + &k;
        check(&cube, Conditions::AllPositive(vec![&Polynomial::from(8) - &k]));
    }
}
