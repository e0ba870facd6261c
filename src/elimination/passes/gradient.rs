//! One backward pass: for every weight at once, the factor that it is multiplied by in a root; and
//! from that the derivative with respect to `s` and to every symbol.

use num_complex::Complex;

use super::Ring;
use super::numbers::{ComplexNumbers, Scaled, scaled_integer};
use crate::algebra::Polynomial;
use crate::circuit::SymbolId;
use crate::elimination::diagram::{Diagram, Link};
use crate::elimination::value::symbol_of;

/// A determinant at one frequency with all its first derivatives, made relative (x·∂D/∂x) and
/// divided by one common power of two, so that only their ratios count.
#[derive(Clone, Debug, PartialEq)]
pub struct Gradient {
    /// D.
    pub value: Complex<f64>,
    /// s·∂D/∂s.
    pub by_s: Complex<f64>,
    /// x·∂D/∂x for every symbol that occurs, ascending.
    pub by_symbol: Vec<(SymbolId, Complex<f64>)>,
}

/// The relative derivatives of a root's value.
pub(crate) fn relative(
    diagram: &Diagram,
    polynomials: &[Polynomial],
    weights: &[Scaled],
    values: &[Scaled],
    root: Link,
    at: (Complex<f64>, &[f64]),
) -> Gradient {
    let ring = ComplexNumbers;
    let by_weight = by_weight(&ring, diagram, weights, values, root);
    let (s, symbols) = at;
    let mut by_s = Scaled::ZERO;
    let mut by_symbol: Vec<Option<Scaled>> = vec![None; symbols.len()];
    for (polynomial, factor) in polynomials.iter().zip(by_weight) {
        for (powers, coefficient) in polynomial.terms() {
            let mut product = factor.times(scaled_integer(&coefficient));
            for (variable, power) in powers.clone() {
                let base = match symbol_of(variable) {
                    Some(symbol) => Complex::new(symbols[symbol.0 as usize], 0.0),
                    None => s,
                };
                for _ in 0..power {
                    product = product.times(Scaled::new(base, 0));
                }
            }
            for (variable, power) in powers {
                // x·∂/∂x of a term is its power times the term.
                let share = product.times(Scaled::new(Complex::new(f64::from(power), 0.0), 0));
                match symbol_of(variable) {
                    Some(symbol) => {
                        let sum = &mut by_symbol[symbol.0 as usize];
                        *sum = Some(sum.unwrap_or(Scaled::ZERO).plus(share));
                    }
                    None => by_s = by_s.plus(share),
                }
            }
        }
    }
    let value = super::at(&ring, values, root);
    let unit = Scaled::largest(by_symbol.iter().flatten().chain([&value, &by_s]));
    Gradient {
        value: value.over(unit),
        by_s: by_s.over(unit),
        by_symbol: by_symbol
            .into_iter()
            .zip(0_u32..)
            .filter_map(|(sum, index)| Some((SymbolId(index), sum?.over(unit))))
            .collect(),
    }
}

/// For each weight the derivative of the root's value with respect to it, over all edges of the
/// diagram that carry it (reverse accumulation: Linnainmaa 1970).
///
/// `values` are those of the forward pass; the ring's weights and values must be of one type.
pub(crate) fn by_weight<R>(
    ring: &R,
    diagram: &Diagram,
    weights: &[R::Weight],
    values: &[R::Value],
    root: Link,
) -> Vec<R::Value>
where
    R: Ring<Value = <R as Ring>::Weight>,
    R::Weight: Clone,
{
    let mut derivative = vec![ring.zero(); weights.len()];
    if root.is_dead() {
        return derivative;
    }
    let mut reach = vec![ring.zero(); diagram.len()];
    reach[root.node()] = if root.is_negative() { ring.negate(&ring.one()) } else { ring.one() };
    for node in (1..=root.node()).rev() {
        let here = reach[node].clone();
        for edge in diagram.edges(node) {
            let (child, negative) = (edge.link.node(), edge.link.is_negative());
            let weight = edge.weight as usize;
            ring.add(&mut derivative[weight], &here, &values[child], negative);
            ring.add(&mut reach[child], &weights[weight], &here, negative);
        }
    }
    derivative
}
