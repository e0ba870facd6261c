//! The branches of a circuit: every pair of nodes between which a current can flow.
//!
//! An element with two ports gives two branches. What only senses (the input of an ideal op-amp, a
//! controlling voltage) carries no current and is no branch; a coupling of inductors adds none.

use crate::circuit::{Circuit, ElementId, Law, NodeId};

/// A pair of nodes that an element lets a current flow between.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Branch {
    /// The element.
    pub element: ElementId,
    /// Its first node.
    pub plus: NodeId,
    /// Its second node.
    pub minus: NodeId,
}

/// All branches, in the order of the elements.
pub fn branches(circuit: &Circuit) -> Vec<Branch> {
    let mut found = Vec::with_capacity(circuit.elements.len());
    for (element, index) in circuit.elements.iter().zip(0_u32..) {
        let id = ElementId(index);
        let own = Branch { element: id, plus: element.plus, minus: element.minus };
        match element.law {
            Law::Mutual { .. } => {}
            Law::Transformer { secondary: (plus, minus), .. }
            | Law::Gyrator { second: (plus, minus), .. } => {
                found.extend([own, Branch { element: id, plus, minus }]);
            }
            _ => found.push(own),
        }
    }
    found
}
