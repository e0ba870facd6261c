//! What is asked of a circuit, resolved: nodes and elements are known, the driving source is chosen.

use super::{ElementId, NodeId, Unit};

/// A question of the file or of the command line.
#[derive(Clone, Debug)]
pub struct Ask {
    /// The name of the result (`H`).
    pub name: String,
    /// The query as written, tidied (`V(out) / Vin`).
    pub text: String,
    /// The transfer functions that answer it: one, or one for each independent source
    /// when a bare `V(..)` or `I(..)` asks for the superposition.
    pub transfers: Vec<Transfer>,
    /// True for a bare `V(..)` or `I(..)`: the answer is the sum of transfer × source.
    pub superposition: bool,
    /// The line of the file, from 1; 0 for the command line.
    pub line: u32,
}

/// One exact ratio: `numerator / denominator` while `drive` is the only excitation.
#[derive(Clone, Debug)]
pub struct Transfer {
    /// What excites the circuit. Every other independent source is zeroed: a voltage source is a
    /// short, a current source an open.
    pub drive: Drive,
    /// The upper quantity.
    pub numerator: Probe,
    /// The lower quantity.
    pub denominator: Probe,
    /// Independent sources that are taken out altogether because they lie exactly across the port.
    pub removed: Vec<ElementId>,
    /// The unit of the ratio.
    pub unit: Unit,
}

/// The only excitation of a transfer function.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Drive {
    /// An independent source of the circuit, with its own sign convention, set to 1.
    Source(ElementId),
    /// A test current of 1 A that enters the circuit at the first node and leaves it at the second.
    Port(NodeId, NodeId),
}

/// A quantity of the circuit under the drive.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Probe {
    /// The voltage from the first node to the second.
    Voltage(NodeId, NodeId),
    /// The current through an element, along its walk.
    Current(ElementId),
    /// The drive itself: 1.
    Drive,
}
