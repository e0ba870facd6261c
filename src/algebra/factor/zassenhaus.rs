//! Factorisation of polynomials in one variable over the integers (Zassenhaus 1969).
//!
//! Factor modulo a 61-bit prime, the best of a few; lift the factors to a power of the prime beyond
//! the bound of Landau and Mignotte on coefficients of divisors (linear Hensel lifting; with so
//! large a prime it takes few steps); then try products of the lifted factors, small sets first,
//! each checked by its constant term before it is divided out. The number of trials is bounded.

use num_bigint::{BigInt, Sign};
use num_integer::Integer as _;
use num_traits::{Signed, Zero};

use super::super::integer::Integer;
use super::super::modular::{Dense, Field, Random, primes};
use super::super::monomial::Var;
use super::super::polynomial::Polynomial;

/// Primes among which the one with the fewest factors is taken.
const PRIMES: usize = 3;
/// Sets of lifted factors to be tried at most.
const TRIALS: usize = 200_000;

/// Irreducible factors of a primitive square-free polynomial in one variable; `None` if the
/// bound on the work was met.
pub(super) fn factors(polynomial: &Polynomial) -> Option<Vec<Polynomial>> {
    let variable = polynomial.variables().next()?;
    let polynomial = polynomial.clone().abs();
    if polynomial.degree(variable) == 1 {
        return Some(vec![polynomial]);
    }
    let mut random = Random::new(0x7a61_7373);
    let images = primes().take(4 * PRIMES).filter_map(|field| {
        let image = polynomial.univariate_modulo(&field, variable, |_| 0);
        let good = image.degree() == polynomial.degree(variable) as usize;
        (good && image.is_square_free(&field)).then_some((field, image))
    });
    let split = images
        .take(PRIMES)
        .map(|(field, image)| (image.irreducible_factors(&field, &mut random), field))
        .min_by_key(|split| split.0.len())?;
    let (images, field) = split;
    if images.len() == 1 {
        return Some(vec![polynomial]);
    }
    let (lifted, modulus) = lifted(&polynomial, variable, images, &field)?;
    recombined(polynomial, variable, lifted, &modulus)
}

fn dense(polynomial: &Polynomial, variable: Var) -> Vec<BigInt> {
    let mut result = vec![BigInt::zero(); polynomial.degree(variable) as usize + 1];
    for (mut powers, coefficient) in polynomial.terms() {
        result[powers.next().map_or(0, |power| power.1 as usize)] = coefficient;
    }
    result
}

fn residues(values: &[BigInt], field: &Field) -> Dense {
    Dense::new(values.iter().map(|value| Integer::from(value).modulo(field.modulus())).collect())
}

fn product(a: &[BigInt], b: &[BigInt], modulus: &BigInt) -> Vec<BigInt> {
    let mut sums = vec![BigInt::zero(); a.len() + b.len() - 1];
    for (place, x) in a.iter().enumerate() {
        for (sum, y) in sums[place..].iter_mut().zip(b) {
            *sum += x * y;
        }
    }
    sums.iter().map(|sum| sum.mod_floor(modulus)).collect()
}

/// Lifts monic factors modulo p to a power of p beyond twice the bound.
fn lifted(
    polynomial: &Polynomial,
    variable: Var,
    images: Vec<Dense>,
    field: &Field,
) -> Option<(Vec<Vec<BigInt>>, BigInt)> {
    let whole = dense(polynomial, variable);
    let lead = whole.last()?.clone();
    // Coefficients of lc·divisor are at most |lc|·2^n·‖f‖₂ (Mignotte 1974).
    let norm = whole.iter().map(|value| value * value).sum::<BigInt>().sqrt() + 1;
    let bound = (norm * &lead.abs()) << (whole.len() + 1);
    // Cofactor inverses: 1/Π_{j≠i} gⱼ modulo gᵢ.
    let all = images.iter().fold(Dense::new(vec![1]), |product, image| product.mul(image, field));
    let inverses = images.iter().map(|image| {
        let cofactor = all.div_rem(image, field).0;
        cofactor.inverse_modulo(image, field)
    });
    let inverses: Vec<Dense> = inverses.collect::<Option<_>>()?;
    let inverse_lead = field.inverse(Integer::from(&lead).modulo(field.modulus()));
    let prime = BigInt::from(field.modulus());
    let big =
        |image: &Dense| image.coefficients().iter().map(|&value| BigInt::from(value)).collect();
    let mut factors: Vec<Vec<BigInt>> = images.iter().map(big).collect();
    let mut modulus = prime.clone();
    while modulus <= bound {
        let next = &modulus * &prime;
        let scale = vec![lead.clone()];
        let present = factors.iter().fold(scale, |all, factor| product(&all, factor, &next));
        let error: Vec<BigInt> =
            whole.iter().zip(&present).map(|(a, b)| (a - b).mod_floor(&next) / &modulus).collect();
        let error = residues(&error, field).scaled(inverse_lead, field);
        for ((factor, image), inverse) in factors.iter_mut().zip(&images).zip(&inverses) {
            let change = error.mul(inverse, field).div_rem(image, field).1;
            for (value, &step) in factor.iter_mut().zip(change.coefficients()) {
                *value += &modulus * step;
            }
        }
        modulus = next;
    }
    Some((factors, modulus))
}

/// Finds the sets of lifted factors that multiply to factors over the integers.
fn recombined(
    polynomial: Polynomial,
    variable: Var,
    mut lifted: Vec<Vec<BigInt>>,
    modulus: &BigInt,
) -> Option<Vec<Polynomial>> {
    let mut found = Vec::new();
    let mut rest = polynomial;
    let mut trials = 0;
    let mut size = 1;
    while 2 * size <= lifted.len() {
        let lead = rest.leading_coefficient();
        let last = rest.coefficient(variable, 0).to_constant().unwrap_or_default() * &lead;
        let mut set: Vec<usize> = (0..size).collect();
        let hit = loop {
            trials += 1;
            if trials > TRIALS {
                return None;
            }
            if let Some(factor) = candidate(&set, &lifted, &lead, &last, modulus, variable)
                && let Some(quotient) = rest.divide_exact(&factor)
            {
                break Some((factor, quotient));
            }
            if !advance(&mut set, lifted.len()) {
                break None;
            }
        };
        match hit {
            Some((factor, quotient)) => {
                found.push(factor);
                rest = quotient;
                for place in set.into_iter().rev() {
                    lifted.remove(place);
                }
            }
            None => size += 1,
        }
    }
    if !rest.is_constant() {
        found.push(rest.abs());
    }
    Some(found)
}

/// The primitive polynomial that the set stands for, unless its constant term rules it out.
fn candidate(
    set: &[usize],
    lifted: &[Vec<BigInt>],
    lead: &BigInt,
    last: &BigInt,
    modulus: &BigInt,
    variable: Var,
) -> Option<Polynomial> {
    let symmetric = |value: BigInt| {
        let rest = value.mod_floor(modulus);
        if &rest * 2 > *modulus { rest - modulus } else { rest }
    };
    let constant = set.iter().fold(lead.clone(), |all, &place| all * &lifted[place][0] % modulus);
    let constant = symmetric(constant);
    if constant.sign() == Sign::NoSign || !(last % &constant).is_zero() {
        return None;
    }
    let scale = vec![lead.clone()];
    let all = set.iter().fold(scale, |all, &place| product(&all, &lifted[place], modulus));
    let terms = all.into_iter().zip(0_u32..);
    let terms = terms.map(|(value, power)| ([(variable, power)], symmetric(value)));
    Some(Polynomial::from_terms(terms).primitive_part())
}

/// The next set of the same size in lexicographic order.
fn advance(set: &mut [usize], count: usize) -> bool {
    let size = set.len();
    let Some(place) = (0..size).rev().find(|&place| set[place] < count - size + place) else {
        return false;
    };
    set[place] += 1;
    for next in place + 1..size {
        set[next] = set[next - 1] + 1;
    }
    true
}
