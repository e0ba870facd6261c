//! Gain, and corner or ω0 and Q of each section.
//!
//! Numerator and denominator are factored over the rational numbers; each factor is a section that
//! begins with 1. First order, 1 + s·b₁: the corner is 1/b₁. Second order, 1 + s·b₁ + s²·b₂: ω0² = 1/b₂
//! and Q² = b₂/b₁². Of a higher order that does not factor there is no such closed form, which is said;
//! its sections are given by numbers, where the symbols have values.

use num_rational::BigRational;
use num_traits::{One, Signed, ToPrimitive};

use super::bode::lowest;
use super::compact::{Coefficients, factors, product};
use super::{Lettering, with_s};
use crate::algebra::{Fraction, Polynomial, Univariate, Var};
use crate::analysis::roots::find;
use crate::circuit::SymbolRole;
use crate::elimination::symbol_of;
use crate::numeric::exact_pi;
use crate::typeset::{Formula, Letter};

/// A quantity of a section.
#[derive(Clone, Debug, PartialEq)]
pub struct Quantity {
    /// `gain`, `w0`, `Q`, `w`.
    pub name: &'static str,
    /// What stands before the root.
    pub factor: Formula,
    /// What stands under the square root, if there is one.
    pub radicand: Option<Formula>,
    /// The value at the nominal values of the symbols.
    pub nominal: Option<f64>,
}

/// The gain, or one factor.
#[derive(Clone, Debug, PartialEq)]
pub struct Section {
    /// A factor of the denominator: poles, not zeros.
    pub poles: bool,
    /// The order; 0 for the gain.
    pub order: u32,
    /// How often it occurs.
    pub multiplicity: u32,
    /// Empty for an order above 2: no closed form.
    pub quantities: Vec<Quantity>,
    /// Of an order above 2 the sections of first and second order at the nominal values, by rising
    /// frequency; empty where values are missing.
    pub parts: Vec<NumericSection>,
}

/// A section by numbers.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct NumericSection {
    /// The corner or ω0, in rad/s.
    pub frequency: f64,
    /// Q of a second-order section, negative with a positive real part; infinite on the imaginary
    /// axis. None for the first order.
    pub q: Option<f64>,
    /// Whether the real part is positive.
    pub right: bool,
    /// How often it occurs.
    pub multiplicity: u32,
}

/// The shape `sections`: the product of the sections, and what each is.
pub fn sections(fraction: &Fraction, letters: Lettering<'_>) -> (Formula, Vec<Section>) {
    if fraction.is_zero() {
        return (Formula::integer(0), Vec::new());
    }
    let sides = [fraction.numerator(), fraction.denominator()];
    let mut coefficients = Coefficients::new(&sides, letters);
    let [(above, above_power), (below, below_power)] = sides.map(lowest);
    let gain = Fraction::new(&above, &below).unwrap_or_else(Fraction::zero);
    let factor = coefficients.ratio(gain.numerator(), gain.denominator());
    let nominal = nominal(&factor, letters).filter(|_| factor.symbols() > 0);
    let nominal = nominal.as_ref().and_then(ToPrimitive::to_f64);
    let quantity = Quantity { name: "gain", factor: factor.clone(), radicand: None, nominal };
    let mut list = vec![Section {
        poles: false,
        order: 0,
        multiplicity: 1,
        quantities: vec![quantity],
        parts: Vec::new(),
    }];
    let s = Formula::power(Formula::s(), above_power as i32 - below_power as i32);
    let mut written = vec![factor, s];
    for (side, poles) in sides.into_iter().zip([false, true]) {
        for (factor, multiplicity) in factors(side).1 {
            let order = factor.degree(Var::S);
            if order == 0 || factor.len() == 1 {
                continue;
            }
            let (formula, quantities) = section(&factor, &mut coefficients, letters);
            let power = i32::try_from(multiplicity).unwrap_or(i32::MAX);
            written.push(Formula::power(formula, if poles { -power } else { power }));
            let parts = if order > 2 { by_numbers(&factor, letters) } else { Vec::new() };
            list.push(Section { poles, order, multiplicity, quantities, parts });
        }
    }
    (product(written), list)
}

/// The section that begins with 1, and its quantities.
fn section(
    factor: &Polynomial,
    coefficients: &mut Coefficients<'_>,
    letters: Lettering<'_>,
) -> (Formula, Vec<Quantity>) {
    let parts = factor.coefficients(Var::S);
    let (first, _) = lowest(factor);
    let mut terms = vec![Formula::integer(1)];
    for (power, part) in (0_u32..).zip(&parts).skip(1).filter(|(_, part)| !part.is_zero()) {
        terms.push(with_s(power, coefficients.ratio(part, &first)));
    }
    let mut quantity = |name, value: Option<Fraction>, root: Option<Fraction>| {
        let value = value?;
        let (outside, inside) = match root {
            None => (value, Fraction::one()),
            Some(sign) => square(&value, &sign)?,
        };
        let mut write = |f: &Fraction| coefficients.ratio(f.numerator(), f.denominator());
        let (factor, radicand) = (write(&outside), write(&inside));
        let number = |formula| nominal(formula, letters)?.to_f64();
        let known = factor.symbols() + radicand.symbols() > 0;
        let nominal = number(&factor).zip(number(&radicand)).filter(|_| known);
        let nominal = nominal.map(|(a, b)| a * libm::sqrt(b));
        let radicand = (!radicand.is_one()).then_some(radicand);
        Some(Quantity {
            name,
            factor,
            radicand,
            nominal: nominal.filter(|value| value.is_finite()),
        })
    };
    let quantities = match parts.as_slice() {
        [c0, c1] => vec![quantity("w", Fraction::new(c0, c1), None)],
        [c0, c1, c2] => vec![
            quantity("w0", Fraction::new(c0, c2), Some(Fraction::one())),
            // None where c₁ is 0: the section is on the imaginary axis.
            quantity("Q", Fraction::new(&(c0 * c2), &c1.pow(2)), Fraction::new(c0, c1)),
        ],
        _ => Vec::new(),
    };
    (Formula::sum(terms), quantities.into_iter().flatten().collect())
}

/// The sections of a factor at the nominal values.
fn by_numbers(factor: &Polynomial, letters: Lettering<'_>) -> Vec<NumericSection> {
    let value = |variable: Var| {
        let symbol = symbol_of(variable).and_then(|id| letters.symbols.get(id.0 as usize))?;
        if symbol.role == SymbolRole::Pi { Some(exact_pi()) } else { symbol.nominal.clone() }
    };
    let parts = factor.coefficients(Var::S);
    if parts.iter().flat_map(Polynomial::variables).any(|variable| value(variable).is_none()) {
        return Vec::new();
    }
    let coefficients: Vec<BigRational> = parts
        .iter()
        .map(|part| part.evaluate(|variable| value(variable).unwrap_or_else(BigRational::one)))
        .collect();
    let roots = find(&Univariate::from_rationals(&coefficients)).unwrap_or_default();
    let upper = roots.iter().filter(|root| root.value.im >= 0.0);
    upper
        .map(|root| NumericSection {
            frequency: root.value.norm(),
            q: (!root.is_real()).then(|| root.value.norm() / (-2.0 * root.value.re)),
            right: root.value.re > 0.0,
            multiplicity: root.multiplicity,
        })
        .collect()
}

/// A fraction as square · rest: what stands before a square root, and under it. Of the two signs
/// before the root, that of `sign`.
fn square(fraction: &Fraction, sign: &Fraction) -> Option<(Fraction, Fraction)> {
    let mut sides = Vec::new();
    for side in [fraction.numerator(), fraction.denominator()] {
        let (content, factors) = factors(side);
        let root = content.abs().sqrt();
        let squared = &root * &root == content;
        let (mut outside, mut inside) = if squared {
            (Polynomial::from(root), Polynomial::one())
        } else {
            (Polynomial::one(), Polynomial::from(content))
        };
        for (factor, multiplicity) in factors {
            outside = &outside * &factor.pow(multiplicity / 2);
            inside = &inside * &factor.pow(multiplicity % 2);
        }
        sides.push((outside, inside));
    }
    let [(a, b), (c, d)] = sides.try_into().ok()?;
    let outside = Fraction::new(&a, &c)?;
    // Equal or opposite as functions, up to positive factors: one point tells.
    let at = |fraction: &Fraction| {
        let value = |variable: Var| BigRational::new((variable.0 + 3).into(), 2.into());
        fraction.evaluate(value).is_some_and(|value| value.is_negative())
    };
    let outside = if at(&outside) == at(sign) { outside } else { -&outside };
    Some((outside, Fraction::new(&b, &d)?))
}

/// The value at the nominal values.
fn nominal(formula: &Formula, letters: Lettering<'_>) -> Option<BigRational> {
    formula.evaluate(|letter| match letter {
        Letter::Symbol(index) => letters.symbols.get(index as usize)?.nominal.clone(),
        _ => None,
    })
}
