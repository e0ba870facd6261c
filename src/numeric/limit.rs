//! The witness of limits: the value of a limit at one point of a prime field.
//!
//! As a function of one symbol alone a transfer is a rational function over the field. It is
//! recovered from its values at random points by Thiele's continued fraction (T. N. Thiele,
//! Interpolationsrechnung, 1909), which ends by itself when the function is complete; two more
//! points confirm it. What it does at 0 and at infinity stands in its lowest and highest
//! coefficients. Limits after one another nest: the inner ones are taken at each point of the outer.

use super::values::Generator;
use super::{Additive, Field, NumericError, PrimeField, modular_value};
use crate::circuit::{Circuit, Limit, LimitTo, Transfer};

/// Values of the transfer that one limit value may take; beyond it nothing is said.
const AFFORDABLE: usize = 4_000;
/// Limits after one another; beyond it nothing is said.
const MOST_LIMITS: usize = 16;
/// Points that must confirm the recovered function.
const CONFIRMATIONS: usize = 2;

/// What a limit is at one point.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum LimitValue {
    /// This remainder.
    Finite(u64),
    /// It grows without bound.
    Infinite,
    /// Too many values would be needed.
    Unknown,
}

/// The limits of a transfer, taken one after the other, at `s` and these symbol values, everything
/// modulo `prime`; the values of symbols that go to a limit do not matter.
///
/// # Errors
/// Those of [`modular_value`].
pub fn limit_value(
    circuit: &Circuit,
    transfer: &Transfer,
    limits: &[Limit],
    prime: u64,
    s: u64,
    symbols: &[u64],
) -> Result<LimitValue, NumericError> {
    if limits.len() > MOST_LIMITS {
        return Ok(LimitValue::Unknown);
    }
    let mut point = Point {
        circuit,
        transfer,
        field: PrimeField::new(prime),
        s,
        symbols: symbols.to_vec(),
        random: Generator::new(prime ^ s),
        left: AFFORDABLE,
    };
    match point.value(limits) {
        Ok(value) => Ok(LimitValue::Finite(value)),
        Err(Stop::Infinite) => Ok(LimitValue::Infinite),
        Err(Stop::TooMany) => Ok(LimitValue::Unknown),
        Err(Stop::Fault(error)) => Err(error),
    }
}

/// Why there is no value.
enum Stop {
    Infinite,
    TooMany,
    Fault(NumericError),
}

struct Point<'a> {
    circuit: &'a Circuit,
    transfer: &'a Transfer,
    field: PrimeField,
    s: u64,
    symbols: Vec<u64>,
    random: Generator,
    /// Values that may still be asked for.
    left: usize,
}

impl Point<'_> {
    /// The value with these limits taken, the first one first.
    fn value(&mut self, limits: &[Limit]) -> Result<u64, Stop> {
        let Some((last, before)) = limits.split_last() else {
            self.left = self.left.checked_sub(1).ok_or(Stop::TooMany)?;
            return modular_value(
                self.circuit,
                self.transfer,
                self.field.prime(),
                self.s,
                &self.symbols,
            )
            .map_err(Stop::Fault);
        };
        let fraction = self.recovered(*last, before)?;
        let ends = |polynomial: &[u64]| match last.to {
            LimitTo::Infinity => polynomial.iter().rposition(|&value| value != 0),
            LimitTo::Zero => polynomial.iter().position(|&value| value != 0),
        };
        let [above, below] = &fraction;
        let (Some(n), Some(d)) = (ends(above), ends(below)) else { return Ok(0) };
        let grows = match last.to {
            LimitTo::Infinity => n > d,
            LimitTo::Zero => n < d,
        };
        if grows {
            return Err(Stop::Infinite);
        }
        if n != d {
            return Ok(0);
        }
        let inverse = self.field.inverse(&below[d]).ok_or(Stop::Infinite)?;
        Ok(self.field.multiply(&above[n], &inverse))
    }

    fn at(&mut self, limit: Limit, before: &[Limit], x: u64) -> Result<u64, Stop> {
        match limit.symbol {
            None => self.s = x,
            Some(symbol) => {
                if let Some(value) = self.symbols.get_mut(symbol.0 as usize) {
                    *value = x;
                }
            }
        }
        self.value(before)
    }

    /// Numerator and denominator as polynomials in the limit's variable.
    fn recovered(&mut self, limit: Limit, before: &[Limit]) -> Result<[Vec<u64>; 2], Stop> {
        let field = self.field;
        let mut nodes: Vec<(u64, u64)> = Vec::new();
        let mut confirmed = 0;
        loop {
            let x = self.random.below(field.prime());
            let value = self.at(limit, before, x)?;
            match inverse_difference(&field, &nodes, x, value) {
                Some(difference) => {
                    nodes.push((x, difference));
                    confirmed = 0;
                }
                None => confirmed += 1,
            }
            if confirmed == CONFIRMATIONS {
                return Ok(convergent(&field, &nodes));
            }
        }
    }
}

/// φ_k(x) with φ_0 = f and φ_{k+1}(x) = (x − x_k)/(φ_k(x) − b_k); none where the fraction so far
/// gives the value already.
fn inverse_difference(field: &PrimeField, nodes: &[(u64, u64)], x: u64, value: u64) -> Option<u64> {
    nodes.iter().try_fold(value, |phi, (at, b)| {
        let inverse = field.inverse(&field.subtract(&phi, b))?;
        Some(field.multiply(&field.subtract(&x, at), &inverse))
    })
}

/// b_0 + (x − x_0)/(b_1 + (x − x_1)/(b_2 + …)) as a quotient of polynomials, lowest power first.
fn convergent(field: &PrimeField, nodes: &[(u64, u64)]) -> [Vec<u64>; 2] {
    let Some(((_, last), rest)) = nodes.split_last() else { return [Vec::new(), vec![1]] };
    let (mut above, mut below) = (vec![*last], vec![1]);
    for (at, b) in rest.iter().rev() {
        // b + (x − at)·below/above
        let length = above.len().max(below.len() + 1);
        let mut next = vec![0; length];
        for (power, value) in above.iter().enumerate() {
            next[power] = field.add(&next[power], &field.multiply(b, value));
        }
        for (power, value) in below.iter().enumerate() {
            next[power + 1] = field.add(&next[power + 1], value);
            next[power] = field.subtract(&next[power], &field.multiply(at, value));
        }
        below = std::mem::replace(&mut above, next);
    }
    [above, below]
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::numeric::PRIMES;

    /// The fraction that is recovered from values of numerator/denominator.
    fn recover(numerator: &[u64], denominator: &[u64]) -> [Vec<u64>; 2] {
        let field = PrimeField::new(PRIMES[0]);
        let horner = |polynomial: &[u64], x: u64| {
            polynomial.iter().rev().fold(0, |sum, c| field.add(&field.multiply(&sum, &x), c))
        };
        let mut random = Generator::new(7);
        let mut nodes = Vec::new();
        for _ in 0..20 {
            let x = random.below(field.prime());
            let inverse = field.inverse(&horner(denominator, x)).expect("no pole at random");
            let value = field.multiply(&horner(numerator, x), &inverse);
            if let Some(difference) = inverse_difference(&field, &nodes, x, value) {
                nodes.push((x, difference));
            }
        }
        convergent(&field, &nodes)
    }

    #[test]
    fn rational_functions_are_recovered_in_lowest_terms() {
        let field = PrimeField::new(PRIMES[0]);
        for (numerator, denominator) in [
            (vec![5], vec![1]),
            (vec![0, 0, 3], vec![1]),
            (vec![1], vec![0, 0, 0, 0, 2]),
            (vec![1, 2, 3], vec![4, 5, 6]),
            (vec![0, 7], vec![1, 1, 1, 1, 1]),
            (vec![0], vec![1]),
        ] {
            let [above, below] = recover(&numerator, &denominator);
            let degree = |of: &[u64]| of.iter().rposition(|&value| value != 0);
            assert_eq!(degree(&above), degree(&numerator), "{numerator:?}/{denominator:?}");
            assert_eq!(degree(&below), degree(&denominator), "{numerator:?}/{denominator:?}");
            let cross = |a: &[u64], b: &[u64], x: u64| {
                let horner = |polynomial: &[u64]| {
                    polynomial.iter().rev().fold(0, |s, c| field.add(&field.multiply(&s, &x), c))
                };
                field.multiply(&horner(a), &horner(b))
            };
            assert_eq!(cross(&above, &denominator, 12345), cross(&numerator, &below, 12345));
        }
    }
}
