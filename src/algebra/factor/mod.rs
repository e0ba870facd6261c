//! Factorisation over **Q** of polynomials with integer coefficients.
//!
//! Integer and monomial contents are split off, then squares ([`square_free`]). A square-free part
//! that is linear in every variable is split in time linear in its terms ([`linear`]); a variable
//! that occurs to the first power only splits off the irreducible factor that contains it with one
//! gcd. What is left after that, of degree two or more in everything, has the hard cases: gradings
//! remove variables, one variable is done after Zassenhaus ([`zassenhaus`]), several by lifting
//! from one ([`lifting`]).
//!
//! Every factorisation is verified by division. Normalisation: factors are primitive with positive
//! leading coefficient, in a fixed order; sign and content are in [`Factors::content`].

mod lifting;
mod linear;
mod square_free;
#[cfg(test)]
mod tests;
mod zassenhaus;

use num_bigint::BigInt;

use super::gcd::{Grading, gcd};
use super::monomial::Var;
use super::polynomial::Polynomial;

/// A factorisation: `content · Π factor^multiplicity`.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Factors {
    /// The signed integer content; 0 for the polynomial 0.
    pub content: BigInt,
    /// Factors of positive degree, pairwise coprime, with their multiplicities.
    pub factors: Vec<(Polynomial, u32)>,
    /// Whether every factor is irreducible. If not, the work bound was met, and some factor is
    /// only known to be square-free.
    pub complete: bool,
}

impl Factors {
    /// The polynomial that was factored.
    pub fn product(&self) -> Polynomial {
        let content = Polynomial::from(self.content.clone());
        self.factors
            .iter()
            .fold(content, |product, (factor, multiplicity)| &product * &factor.pow(*multiplicity))
    }
}

/// Factors over the rational numbers. Cost: that of some gcds in the usual case; polynomials of
/// higher degree in all variables are given up after a bounded number of trials.
pub fn factor(polynomial: &Polynomial) -> Factors {
    let content = polynomial.content();
    let content = if polynomial.is_negative() { -content } else { content };
    let mut result = Factors { content, factors: Vec::new(), complete: true };
    if polynomial.is_constant() {
        return result;
    }
    let powers = polynomial.monomial_content();
    let single = |&(variable, power): &(Var, u32)| (Polynomial::variable(variable), power);
    result.factors.extend(powers.iter().map(single));
    let primitive = polynomial.primitive_part();
    let core = primitive.divide_exact(&Polynomial::monomial(powers, 1)).unwrap_or(primitive);
    for (part, multiplicity) in square_free::parts(&core) {
        let (factors, complete) = irreducible_factors(&part);
        result.complete &= complete;
        result.factors.extend(factors.into_iter().map(|factor| (factor, multiplicity)));
    }
    result.factors.sort_by(|a, b| order(&a.0, &b.0));
    result
}

/// Short factors first; then by their terms.
fn order(a: &Polynomial, b: &Polynomial) -> std::cmp::Ordering {
    let terms = |value: &Polynomial| {
        let terms =
            value.terms().map(|(powers, coefficient)| (powers.collect::<Vec<_>>(), coefficient));
        terms.collect::<Vec<_>>()
    };
    a.len().cmp(&b.len()).then_with(|| terms(a).cmp(&terms(b)))
}

/// The factors of a primitive square-free polynomial without monomial content, and whether all
/// are irreducible.
fn irreducible_factors(polynomial: &Polynomial) -> (Vec<Polynomial>, bool) {
    let mut factors = Vec::new();
    let mut rest = polynomial.clone();
    loop {
        if rest.is_constant() {
            return (factors, true);
        }
        let degrees: Vec<(Var, u32)> =
            rest.variables().map(|variable| (variable, rest.degree(variable))).collect();
        if degrees.iter().all(|entry| entry.1 == 1) {
            factors.extend(linear::factors(&rest));
            return (factors, true);
        }
        let Some(&(variable, _)) = degrees.iter().find(|entry| entry.1 == 1) else { break };
        // F = A·v + B: the factor that contains v is F/gcd(A, B), and it is irreducible.
        let [below, above] = [0, 1].map(|power| rest.coefficient(variable, power));
        let others = gcd(&above, &below);
        match rest.divide_exact(&others) {
            Some(factor) => factors.push(factor.abs()),
            None => break,
        }
        rest = others;
    }
    let (hard, complete) = without_linear_variable(&rest);
    factors.extend(hard);
    (factors, complete)
}

/// Degree two or more in every variable.
fn without_linear_variable(polynomial: &Polynomial) -> (Vec<Polynomial>, bool) {
    if let Some(grading) = Grading::find(polynomial, polynomial) {
        let reduced = grading.apply(polynomial).primitive_part();
        let (parts, complete) = irreducible_factors(&reduced);
        let restored: Option<Vec<Polynomial>> =
            parts.iter().map(|part| grading.restore(part).map(Polynomial::abs)).collect();
        // The reduced polynomial can have more factors, such as x² − y with y set to 1.
        if let Some(factors) = restored
            && multiply(&factors) == *polynomial
        {
            return (factors, complete);
        }
    }
    let found = if polynomial.variables().len() == 1 {
        zassenhaus::factors(polynomial)
    } else {
        lifting::factors(polynomial)
    };
    match found {
        Some(factors) => (factors, true),
        None => (vec![polynomial.clone()], false),
    }
}

fn multiply(factors: &[Polynomial]) -> Polynomial {
    factors.iter().fold(Polynomial::one(), |product, factor| &product * factor)
}
