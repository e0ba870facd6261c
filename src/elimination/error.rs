//! Why an elimination has no answer.

use crate::circuit::{ElementId, NodeId};

/// What stands against a unique solution, or against finding it.
#[derive(Clone, Debug, PartialEq, thiserror::Error)]
pub enum EliminationError {
    /// The determinant is 0 whatever the element values.
    #[error("the circuit has no unique solution")]
    Singular,
    /// The quantity below the fraction bar is 0 whatever the element values.
    #[error("the answer is infinite")]
    Infinite,
    /// The driving current enters one part of the circuit and would have to leave another.
    #[error("the driving current has no way back")]
    NoReturnPath(NodeId, NodeId),
    /// The nodes of a voltage lie in parts that nothing connects.
    #[error("the voltage is between parts that nothing connects")]
    Undetermined(NodeId, NodeId),
    /// An element's value is a fraction with denominator 0.
    #[error("a value divides by 0")]
    DivisionByZero(ElementId),
    /// The diagram would need more states than allowed.
    #[error("the elimination would need about {states:.0} states")]
    TooLarge {
        /// States, predicted or met.
        states: f64,
    },
}
