//! Coefficients as sums over elements: each reactive element times the value it sees.
//!
//! In D/D₀ = 1 + s·b₁ + s²·b₂ + … the part of b₁ that has an element's value as a factor is that value
//! times the driving-point resistance (conductance for an inductance) where it stands, all others at
//! zero; the part of b₂ with two elements is the first one's part of b₁ times the second one and what
//! it sees when the first is infinite, and so on (Cochrun & Grabel 1973, Hajimiri 2010). The same holds
//! for the numerator with the output nulled (Middlebrook 1989). All of it can be read off the polynomial.

use std::collections::BTreeMap;

use super::bode::lowest;
use super::compact::{Coefficients, product};
use super::{Lettering, signed, with_s};
use crate::algebra::{Fraction, Polynomial, Var};
use crate::circuit::Unit;
use crate::typeset::{Formula, Letter};

/// A product of reactive elements, in the order of the variables.
type Elements = Vec<Var>;

/// The shape `by-element`.
pub fn by_element(fraction: &Fraction, letters: Lettering<'_>) -> Formula {
    if fraction.is_zero() {
        return Formula::integer(0);
    }
    let (numerator, denominator) = signed(fraction);
    let mut coefficients = Coefficients::new(&[&numerator, &denominator], letters);
    let (above, above_power) = lowest(&numerator);
    let (below, below_power) = lowest(&denominator);
    let s = Formula::power(Formula::s(), above_power as i32 - below_power as i32);
    let gain = coefficients.ratio(&above, &below);
    let numerator = parts(&numerator, &above, above_power, letters, &mut coefficients);
    let denominator = parts(&denominator, &below, below_power, letters, &mut coefficients);
    product([gain, s, numerator, Formula::quotient(Formula::integer(1), denominator)])
}

/// 1 + s·Σ element · value + s²·Σ element · value · element · value + …
fn parts(
    polynomial: &Polynomial,
    first: &Polynomial,
    from: u32,
    letters: Lettering<'_>,
    coefficients: &mut Coefficients<'_>,
) -> Formula {
    // What all terms share belongs to the gain, also where it is a reactive element.
    let shared = polynomial.monomial_content().into_iter().filter(|power| power.0 != Var::S);
    let shared = Polynomial::monomial(shared, 1);
    let over = |whole: &Polynomial| whole.divide_exact(&shared).unwrap_or_else(|| whole.clone());
    let (polynomial, first) = (&over(polynomial), &over(first));
    let mut terms = vec![Formula::integer(1)];
    let by_power: Vec<BTreeMap<Elements, Polynomial>> = polynomial
        .coefficients(Var::S)
        .iter()
        .skip(from as usize)
        .map(|part| by_elements(part, letters))
        .collect();
    for (power, parts) in (1_u32..).zip(by_power.iter().skip(1)) {
        let written = parts.iter().map(|(elements, part)| {
            let chains = elements.len() == power as usize && are_alike(elements, letters);
            let chain = chain(elements, &by_power).filter(|_| chains);
            let written = chain.map(|order| {
                // Each element with what it sees when those before it are infinite.
                let mut seen = Vec::new();
                let mut before = first;
                for place in 1..=order.len() {
                    let here = prefix(&order, place, &by_power)?;
                    let value = coefficients.ratio(here, before);
                    seen.push(product([letter(order[place - 1], letters), value]));
                    before = here;
                }
                Some(Formula::product(seen))
            });
            written.flatten().unwrap_or_else(|| {
                let elements = elements
                    .chunk_by(|a, b| a == b)
                    .map(|same| Formula::power(letter(same[0], letters), same.len() as i32));
                let value = coefficients.ratio(part, first);
                product(elements.chain([value]))
            })
        });
        let sum = Formula::sum(written.collect::<Vec<_>>());
        terms.push(with_s(power, sum));
    }
    Formula::sum(terms)
}

/// Whether what one element sees can be told from what the next one sees: the elements are
/// different, and all capacitances or all inductances. A capacitance and an inductance make a
/// resonance, and the resistance that the one sees cancels against the other's.
fn are_alike(elements: &Elements, letters: Lettering<'_>) -> bool {
    let unit = |variable: &Var| match letters.letter(*variable) {
        Letter::Symbol(index) => letters.unit(index),
        _ => Unit::ONE,
    };
    elements.windows(2).all(|pair| pair[0] != pair[1] && unit(&pair[0]) == unit(&pair[1]))
}

fn letter(variable: Var, letters: Lettering<'_>) -> Formula {
    Formula::letter(letters.letter(variable))
}

/// The parts of a coefficient by the reactive elements in them.
fn by_elements(part: &Polynomial, letters: Lettering<'_>) -> BTreeMap<Elements, Polynomial> {
    let is_reactive = |variable: Var| match letters.letter(variable) {
        Letter::Symbol(index) => [Unit::FARAD, Unit::HENRY].contains(&letters.unit(index)),
        _ => false,
    };
    type Terms = Vec<(Vec<(Var, u32)>, num_bigint::BigInt)>;
    let mut parts: BTreeMap<Elements, Terms> = BTreeMap::new();
    for (powers, coefficient) in part.terms() {
        let (reactive, rest): (Vec<_>, Vec<_>) = powers.partition(|power| is_reactive(power.0));
        let elements = reactive
            .into_iter()
            .flat_map(|(variable, power)| std::iter::repeat_n(variable, power as usize));
        parts.entry(elements.collect()).or_default().push((rest, coefficient));
    }
    parts.into_iter().map(|(elements, terms)| (elements, Polynomial::from_terms(terms))).collect()
}

/// Elements beyond this number are not put in another order.
const MAX_REORDERED: usize = 4;

/// The first order of the elements in which each sees a value other than 0 after those before it.
fn chain(elements: &Elements, parts: &[BTreeMap<Elements, Polynomial>]) -> Option<Elements> {
    let exists =
        |order: &Elements| (1..=order.len()).all(|place| prefix(order, place, parts).is_some());
    if exists(elements) {
        return Some(elements.clone());
    }
    if elements.len() > MAX_REORDERED {
        return None;
    }
    orders(elements).into_iter().find(exists)
}

/// The coefficient of the first so many elements of a chain.
fn prefix<'a>(
    order: &Elements,
    place: usize,
    parts: &'a [BTreeMap<Elements, Polynomial>],
) -> Option<&'a Polynomial> {
    let mut elements = order[..place].to_vec();
    elements.sort_unstable();
    parts.get(place)?.get(&elements)
}

/// All orders of a few elements.
fn orders(elements: &[Var]) -> Vec<Elements> {
    let mut all: Vec<Elements> = vec![Vec::new()];
    for &element in elements {
        all = all
            .iter()
            .flat_map(|order| {
                (0..=order.len()).map(|place| {
                    let mut longer = order.clone();
                    longer.insert(place, element);
                    longer
                })
            })
            .collect();
    }
    all.sort();
    all
}
