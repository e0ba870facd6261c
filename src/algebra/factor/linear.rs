//! Polynomials of degree 1 in every variable.
//!
//! Their factors have disjoint variables, and x and y belong to the same factor exactly if
//! `P·∂²P/∂x∂y − ∂P/∂x·∂P/∂y` is not 0 (Shpilka & Volkovich 2010). For one x this is tested at a
//! random point modulo a prime for all y together. The factors are then coefficients: that of any
//! power product of the other variables is a multiple of the factor by a number. A product that
//! fails its verification means an unlucky point. Cost: terms × variables for each factor.

use super::super::modular::{Field, Random, primes};
use super::super::monomial::{LongKey, Var};
use super::super::polynomial::Polynomial;

/// Irreducible factors of a primitive polynomial of degree 1 in every variable.
pub(super) fn factors(polynomial: &Polynomial) -> Vec<Polynomial> {
    let mut factors = Vec::new();
    let mut rest = polynomial.clone();
    for (attempt, field) in (0_u64..).zip(primes()) {
        let Some(first) = rest.variables().next() else { break };
        let mut random = Random::new(attempt);
        let together = related(&rest, first, &field, &mut random);
        if together.len() == rest.variables().len() {
            factors.push(rest.abs());
            break;
        }
        let others: Vec<Var> = rest.variables().filter(|var| !together.contains(var)).collect();
        let factor = leading_part(&rest, &others).primitive_part();
        // A variable that is missed at an unlucky point lets the division fail: try again.
        if let Some(quotient) = rest.divide_exact(&factor) {
            factors.push(factor);
            rest = quotient;
        }
    }
    factors
}

/// The variable and those that are in one factor with it.
fn related(polynomial: &Polynomial, first: Var, field: &Field, random: &mut Random) -> Vec<Var> {
    let variables: Vec<Var> = polynomial.variables().collect();
    let point: Vec<u64> = variables.iter().map(|_| random.unit(field)).collect();
    let value = |var: Var| variables.binary_search(&var).map_or(1, |place| point[place]);
    // Along each line P = a + b·y, and the same for ∂P/∂x = c + d·y: the test is a·d ≠ b·c.
    let slope = polynomial.derivative(first);
    let slopes = slope.lines_modulo(field, value);
    let constant = slope.evaluate_modulo(field, value);
    let lines = polynomial.lines_modulo(field, value);
    let part = |line: &[u64], power: usize| line.get(power).copied().unwrap_or(0);
    let same = lines.iter().filter(|(variable, line)| {
        let line = line.coefficients();
        let found = slopes.iter().find(|entry| entry.0 == *variable);
        let (c, d) = found.map_or((constant, 0), |(_, slope)| {
            (part(slope.coefficients(), 0), part(slope.coefficients(), 1))
        });
        *variable == first || field.mul(part(line, 0), d) != field.mul(part(line, 1), c)
    });
    same.map(|entry| entry.0).collect()
}

/// The coefficient of the power product of the given variables that the leading term has.
fn leading_part(polynomial: &Polynomial, variables: &[Var]) -> Polynomial {
    let fields: Vec<_> = polynomial
        .layout
        .fields()
        .iter()
        .filter(|field| variables.contains(&field.variable))
        .collect();
    let power =
        |words: &[u64]| -> Vec<u32> { fields.iter().map(|field| field.get(words)).collect() };
    let first = power(polynomial.monomial_words(0));
    let mut part = Polynomial { layout: polynomial.layout.clone(), ..Polynomial::zero() };
    for (words, coefficient) in polynomial.monomials().zip(&polynomial.coefficients) {
        if power(words) == first {
            let mut rest = LongKey::from_slice(words);
            fields.iter().for_each(|field| field.clear(&mut rest));
            part.words.extend_from_slice(&rest);
            part.coefficients.push(coefficient.clone());
        }
    }
    part.tightened()
}
