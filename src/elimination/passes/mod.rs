//! What one pass over the diagram gives.
//!
//! A pass is a fold from the determinant 1 upwards: the value of a node is the sum over its edges of
//! weight × value of the child. What a value is decides what comes out: a number of terms, a
//! complex number, a remainder modulo a prime, a polynomial in `s`, a polynomial in the symbols.

pub(crate) mod coefficients;
pub(crate) mod count;
pub(crate) mod expand;
pub(crate) mod gradient;
pub(crate) mod largest;
pub(crate) mod numbers;

use super::diagram::{Diagram, Link};

/// What the values of a pass are, and how they are summed.
pub(crate) trait Ring {
    /// A factor on an edge.
    type Weight;
    /// The value of a node.
    type Value: Clone;

    fn zero(&self) -> Self::Value;
    fn one(&self) -> Self::Value;
    /// sum ← sum ± weight·value
    fn add(
        &self,
        sum: &mut Self::Value,
        weight: &Self::Weight,
        value: &Self::Value,
        negative: bool,
    );
    fn negate(&self, value: &Self::Value) -> Self::Value;
}

/// The values of all nodes, children first.
pub(crate) fn values<R: Ring>(ring: &R, diagram: &Diagram, weights: &[R::Weight]) -> Vec<R::Value> {
    let mut values: Vec<R::Value> = Vec::with_capacity(diagram.len());
    values.push(ring.one());
    for node in 1..diagram.len() {
        let mut sum = ring.zero();
        for edge in diagram.edges(node) {
            let weight = &weights[edge.weight as usize];
            ring.add(&mut sum, weight, &values[edge.link.node()], edge.link.is_negative());
        }
        values.push(sum);
    }
    values
}

/// The values of some links alone: what no parent needs any more is dropped at once, so that long
/// values (polynomials, counts by powers of `s`) are held for a frontier of the diagram only.
pub(crate) fn at_links<R: Ring>(
    ring: &R,
    diagram: &Diagram,
    weights: &[R::Weight],
    links: &[Link],
) -> Vec<R::Value> {
    let mut uses = diagram.uses();
    let mut values: Vec<Option<R::Value>> = Vec::with_capacity(diagram.len());
    values.push(Some(ring.one()));
    for node in 1..diagram.len() {
        let mut sum = ring.zero();
        for edge in diagram.edges(node) {
            let (child, weight) = (edge.link.node(), &weights[edge.weight as usize]);
            if let Some(value) = &values[child] {
                ring.add(&mut sum, weight, value, edge.link.is_negative());
            }
            uses[child] -= 1;
            if uses[child] == 0 {
                values[child] = None;
            }
        }
        values.push(Some(sum));
    }
    links
        .iter()
        .map(|&link| match values.get(link.node()).filter(|_| !link.is_dead()) {
            Some(Some(value)) if link.is_negative() => ring.negate(value),
            Some(Some(value)) => value.clone(),
            _ => ring.zero(),
        })
        .collect()
}

/// The value that a link stands for.
pub(crate) fn at<R: Ring>(ring: &R, values: &[R::Value], link: Link) -> R::Value {
    if link.is_dead() {
        ring.zero()
    } else if link.is_negative() {
        ring.negate(&values[link.node()])
    } else {
        values[link.node()].clone()
    }
}
