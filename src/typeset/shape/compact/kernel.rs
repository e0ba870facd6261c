//! Kernels of a sum and division by them (Brayton & McMullen 1982).
//!
//! A kernel is what is left of a sum after the terms that a product of literals divides have been
//! divided by it, where they share nothing more. Sums that can be taken out before a parenthesis
//! are products of kernels, so they alone need to be tried. Division is the weak one of logic
//! synthesis: a term of the quotient is a monomial all of whose products with the divisor are there.

use rustc_hash::FxHashMap;

use super::laurent::{Exponents, Laurent};

/// How many kernels are looked at, and how many literals deep.
const MAX_KERNELS: usize = 40;
const MAX_DEPTH: usize = 3;

/// A sum as divisor · quotient + rest.
#[derive(Debug)]
pub(super) struct Division {
    pub(super) divisor: Laurent,
    pub(super) quotient: Laurent,
    pub(super) rest: Laurent,
}

impl Division {
    /// Symbols of the three parts when each is written out.
    pub(super) fn literals(&self) -> usize {
        self.divisor.literals() + self.quotient.literals() + self.rest.literals()
    }
}

/// Divisions of a sum by its kernels, the most saving ones first; the first `most` of them.
pub(super) fn divisions(sum: &Laurent, most: usize) -> Vec<Division> {
    let mut kernels: Vec<Laurent> = Vec::new();
    collect(sum, MAX_DEPTH, &mut kernels);
    let index: FxHashMap<&Exponents, i128> = sum.terms.iter().map(|(e, c)| (e, *c)).collect();
    let mut divisions: Vec<Division> =
        kernels.into_iter().filter_map(|kernel| divide(sum, &index, kernel)).collect();
    divisions.sort_by_key(Division::literals);
    let before = sum.literals();
    divisions.retain(|division| division.literals() < before);
    divisions.truncate(most);
    divisions
}

fn collect(sum: &Laurent, depth: usize, kernels: &mut Vec<Laurent>) {
    let Some((first, _)) = sum.terms.first() else { return };
    for place in 1..first.len() {
        for sign in [1, -1] {
            if sum.terms.iter().filter(|term| term.0[place].signum() == sign).count() < 2 {
                continue;
            }
            let (_, _, kernel) = sum.cofactor(place, sign).primitive();
            if kernels.len() >= MAX_KERNELS {
                return;
            }
            if !kernels.contains(&kernel) {
                kernels.push(kernel.clone());
                if depth > 1 && kernel.len() > 2 {
                    collect(&kernel, depth - 1, kernels);
                }
            }
        }
    }
}

fn divide(
    sum: &Laurent,
    index: &FxHashMap<&Exponents, i128>,
    divisor: Laurent,
) -> Option<Division> {
    let (lead, lead_coefficient) = divisor.terms.first()?;
    let mut used: FxHashMap<Exponents, i128> = FxHashMap::default();
    let mut quotient = Vec::new();
    'terms: for (exponents, coefficient) in &sum.terms {
        if coefficient % lead_coefficient != 0 || used.contains_key(exponents) {
            continue;
        }
        let factor = coefficient / lead_coefficient;
        let Some(monomial) = over(exponents, lead) else { continue };
        let mut products = Vec::with_capacity(divisor.len());
        for (other, by) in &divisor.terms {
            let Some(product) = times(&monomial, other) else { continue 'terms };
            let expected = factor.checked_mul(*by)?;
            if used.contains_key(&product) || index.get(&product) != Some(&expected) {
                continue 'terms;
            }
            products.push((product, expected));
        }
        used.extend(products);
        quotient.push((monomial, factor));
    }
    if quotient.is_empty() {
        return None;
    }
    let rest = sum.terms.iter().filter(|term| !used.contains_key(&term.0)).cloned().collect();
    let (quotient, rest) = (Laurent::sorted(quotient), Laurent { terms: rest });
    Some(Division { divisor, quotient, rest })
}

/// The quotient of two monomials whose literals divide.
fn over(a: &[i8], b: &[i8]) -> Option<Exponents> {
    let quotient = a
        .iter()
        .zip(b)
        .map(|(a, b)| (*b == 0 || (a.signum() == b.signum() && a.abs() >= b.abs())).then(|| a - b));
    quotient.collect()
}

/// The product of two monomials between which no literal meets its reciprocal.
fn times(a: &[i8], b: &[i8]) -> Option<Exponents> {
    let product = a.iter().zip(b).map(|(a, b)| (i32::from(*a) * i32::from(*b) >= 0).then(|| a + b));
    product.collect()
}
