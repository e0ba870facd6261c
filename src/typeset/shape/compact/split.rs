//! A fraction as the sum of two simpler ones.
//!
//! By a variable x: where the denominator has x only as a power, the numerator's powers of x part;
//! else the quotient of the highest or of the lowest coefficients is taken out, which is the value at
//! x = ∞ or x = 0. Both give polynomial part and rest, `s·L1 + RL/(1 + s·RL·C1)`, and partial
//! fractions, `R2/(R1 + R2) − R4/(R3 + R4)`.

use num_traits::Signed;

use crate::algebra::{Fraction, Polynomial, Var};

/// Two fractions whose sum is the whole.
pub(super) type Pair = (Fraction, Fraction);

/// Literals of numerator and denominator written out; `s` does not count.
pub(super) fn literals(fraction: &Fraction) -> usize {
    let of = |polynomial: &Polynomial| -> usize {
        polynomial.terms().map(|(powers, _)| powers.filter(|p| p.0 != Var::S).count()).sum()
    };
    of(fraction.numerator()) + of(fraction.denominator())
}

/// The splits after which less is left to write, the shortest first.
pub(super) fn splits(fraction: &Fraction) -> Vec<Pair> {
    let (n, d) = (fraction.numerator(), fraction.denominator());
    let before = literals(fraction);
    // Where all has one sign, a difference would only hide that.
    let sign = sign(fraction);
    let mut found: Vec<(usize, Pair)> = Vec::new();
    let mut take = |first: Option<Fraction>| {
        let Some(first) = first else { return };
        let rest = fraction - &first;
        let difference = || [&first, &rest].iter().any(|part| self::sign(part) != sign);
        if first.is_zero() || rest.is_zero() || (sign.is_some() && difference()) {
            return;
        }
        let after = literals(&first) + literals(&rest);
        let known = |pair: &Pair| pair.0 == first || pair.1 == first;
        if after < before && !found.iter().any(|(_, pair)| known(pair)) {
            found.push((after, (first, rest)));
        }
    };
    for x in n.variables() {
        let (above, below) = (n.coefficients(x), d.coefficients(x));
        let (above, below) = (ends(&above), ends(&below));
        if below[0].0 == below[1].0 {
            if above[0].0 < above[1].0 {
                for (power, coefficient) in above {
                    take(Fraction::new(&(coefficient * &Polynomial::monomial([(x, power)], 1)), d));
                }
            }
            continue;
        }
        for (above, below) in above.into_iter().zip(below) {
            if above.0 >= below.0 {
                let power = Polynomial::monomial([(x, above.0 - below.0)], 1);
                take(Fraction::new(&(above.1 * &power), below.1));
            }
        }
    }
    found.sort_by_key(|(after, _)| *after);
    found.into_iter().map(|(_, pair)| pair).collect()
}

/// Whether the fraction is negative for positive values; `None` where that depends on them.
fn sign(fraction: &Fraction) -> Option<bool> {
    let one = |polynomial: &Polynomial| {
        let mut signs = polynomial.terms().map(|(_, coefficient)| coefficient.is_negative());
        let first = signs.next()?;
        signs.all(|sign| sign == first).then_some(first)
    };
    Some(one(fraction.numerator())? != one(fraction.denominator())?)
}

/// Lowest and highest power with their coefficients.
fn ends(coefficients: &[Polynomial]) -> [(u32, &Polynomial); 2] {
    let mut present = (0_u32..).zip(coefficients).filter(|(_, part)| !part.is_zero());
    let Some(first) = present.next() else { unreachable!("a polynomial other than 0 has terms") };
    let last = present.last().unwrap_or(first);
    [first, last]
}
