//! Claim and result coefficient by coefficient, and what a wrong claim gets right.
//!
//! A fraction is known up to a common factor of its two sides, so before anything is compared the claim
//! is scaled: by the factor that makes most coefficients equal.

use num_bigint::BigInt;
use std::collections::BTreeMap;

use super::Right;
use crate::algebra::{Fraction, Polynomial, Var};
use crate::circuit::Number;

/// Above or below the fraction bar.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Side {
    /// Above.
    Numerator,
    /// Below.
    Denominator,
}

/// A coefficient that the claim has wrong.
#[derive(Clone, Debug, PartialEq)]
pub struct Difference {
    /// Where it stands.
    pub side: Side,
    /// Its power of `s`.
    pub power: u32,
    /// As claimed, scaled.
    pub claimed: Fraction,
    /// As it is.
    pub exact: Fraction,
    /// Terms that the claim lacks, all over one denominator.
    pub missing: Fraction,
    /// Terms that the claim has and should not have.
    pub extra: Fraction,
}

impl Difference {
    /// Claimed over exact, where that is a number.
    pub fn factor(&self) -> Option<Number> {
        let ratio = self.claimed.checked_div(&self.exact)?;
        let above = ratio.numerator().to_constant()?;
        let below = ratio.denominator().to_constant()?;
        (!ratio.is_zero()).then(|| Number::new(above, below))
    }
}

/// The coefficients that differ, the numerator's first.
pub(super) fn differences(claimed: &Fraction, exact: &Fraction) -> Vec<Difference> {
    let (claim, truth) = (sides(claimed), sides(exact));
    let Some(scale) = best_scale(&claim, &truth) else { return Vec::new() };
    let unit = reference(&truth, &scale, &claim);
    let mut differences = Vec::new();
    for (side, index) in [(Side::Numerator, 0), (Side::Denominator, 1)] {
        let length = claim[index].len().max(truth[index].len());
        for power in 0..length {
            let part = |of: &[Vec<Polynomial>; 2]| {
                Fraction::from(of[index].get(power).cloned().unwrap_or_default())
            };
            let (claimed, exact) = (&part(&claim) * &scale, part(&truth));
            if claimed == exact {
                continue;
            }
            let (claimed, exact) = (&claimed * &unit, &exact * &unit);
            let (missing, extra) = by_terms(&claimed, &exact);
            let power = power as u32;
            differences.push(Difference { side, power, claimed, exact, missing, extra });
        }
    }
    differences
}

/// Numerator and denominator by powers of `s`.
fn sides(fraction: &Fraction) -> [Vec<Polynomial>; 2] {
    [fraction.numerator().coefficients(Var::S), fraction.denominator().coefficients(Var::S)]
}

/// The factor for the claim that makes most coefficients equal; of several the one from the lowest
/// powers of the denominator.
fn best_scale(claim: &[Vec<Polynomial>; 2], truth: &[Vec<Polynomial>; 2]) -> Option<Fraction> {
    let mut best: Option<(usize, Fraction)> = None;
    for side in [1, 0] {
        for (claimed, exact) in claim[side].iter().zip(&truth[side]) {
            if claimed.is_zero() || exact.is_zero() {
                continue;
            }
            let Some(scale) = Fraction::new(exact, claimed) else { continue };
            let equal = (0..2)
                .flat_map(|side| claim[side].iter().zip(&truth[side]))
                .filter(|(claimed, exact)| {
                    *claimed * scale.numerator() == *exact * scale.denominator()
                })
                .count();
            if best.as_ref().is_none_or(|(most, _)| equal > *most) {
                best = Some((equal, scale));
            }
        }
    }
    // A claim of 0, or of an answer that is 0, has nothing to be scaled by.
    Some(best.map_or_else(Fraction::one, |(_, scale)| scale))
}

/// What all coefficients are divided by so that they read as by hand: the monomial and number that one
/// equal coefficient is, where it is a single term.
fn reference(
    truth: &[Vec<Polynomial>; 2],
    scale: &Fraction,
    claim: &[Vec<Polynomial>; 2],
) -> Fraction {
    let equal = |side: usize, power: usize| {
        let (Some(claimed), Some(exact)) = (claim[side].get(power), truth[side].get(power)) else {
            return false;
        };
        !exact.is_zero() && claimed * scale.numerator() == exact * scale.denominator()
    };
    for side in [1, 0] {
        for (power, exact) in truth[side].iter().enumerate() {
            if exact.len() == 1
                && equal(side, power)
                && let Some(unit) = Fraction::from(exact.clone()).recip()
            {
                return unit;
            }
        }
    }
    Fraction::one()
}

/// The terms that only the second has, and those that only the first has; a term with another number
/// is in both lists.
fn by_terms(claimed: &Fraction, exact: &Fraction) -> (Fraction, Fraction) {
    let common = &(claimed.denominator() * exact.denominator());
    let [mine, right] =
        [claimed.numerator() * exact.denominator(), exact.numerator() * claimed.denominator()]
            .map(|polynomial| terms(&polynomial));
    let only = |from: &Terms, other: &Terms| {
        let rest = from.iter().filter(|(powers, number)| other.get(*powers) != Some(*number));
        let rest = rest.map(|(powers, number)| (powers.clone(), number.clone()));
        Fraction::new(&Polynomial::from_terms(rest), common).unwrap_or_else(Fraction::zero)
    };
    (only(&right, &mine), only(&mine, &right))
}

type Terms = BTreeMap<Vec<(Var, u32)>, BigInt>;

fn terms(polynomial: &Polynomial) -> Terms {
    polynomial
        .terms()
        .map(|(powers, number)| (powers.filter(|(_, power)| *power > 0).collect(), number))
        .collect()
}

/// What a wrong claim gets right.
pub(super) fn right(claimed: &Fraction, exact: &Fraction) -> Right {
    // The leading behaviour at one end: factor · s^power.
    let end = |fraction: &Fraction, low: bool| {
        let (n, d) = (fraction.numerator(), fraction.denominator());
        let powers = match low {
            true => [n.trailing_degree(Var::S), d.trailing_degree(Var::S)],
            false => [n.degree(Var::S), d.degree(Var::S)],
        };
        let factor =
            Fraction::new(&n.coefficient(Var::S, powers[0]), &d.coefficient(Var::S, powers[1]));
        (factor, i64::from(powers[0]) - i64::from(powers[1]))
    };
    let count =
        |of: fn(&Fraction) -> &Polynomial| (of(claimed).degree(Var::S), of(exact).degree(Var::S));
    let is_zero = claimed.is_zero() || exact.is_zero();
    Right {
        dc: !is_zero && end(claimed, true) == end(exact, true),
        high_frequency: !is_zero && end(claimed, false) == end(exact, false),
        poles: count(Fraction::denominator),
        zeros: count(Fraction::numerator),
    }
}
