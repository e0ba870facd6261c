//! One backward pass: for every weight at once, the factor that it is multiplied by in a root.

use super::Ring;
use crate::elimination::diagram::{Diagram, Link};

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
