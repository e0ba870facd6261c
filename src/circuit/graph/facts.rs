//! Everything that a listing of a circuit tells about its graph.
//!
//! The graph is that of the [`branches()`]: pairs of nodes between which a current can flow. Facts
//! are those of the circuit as it stands, with every source in its place.

use super::{
    ChargeGroup, NodeSets, Order, articulation, branches, charge_groups, current_cutset, is_planar,
    is_series_parallel, order, voltage_loop,
};
use crate::circuit::{Circuit, Drive, ElementId, GROUND, NodeId, Probe, Transfer, Unit};

/// What the graph of a circuit says.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Facts {
    /// Branches: ports of elements that carry a current.
    pub branches: usize,
    /// Nodes that branches join, part by part; the first part is that of ground. A node that
    /// nothing but sensing inputs touch is a part by itself.
    pub parts: Vec<Vec<NodeId>>,
    /// Independent loops: branches − nodes + parts (Kirchhoff 1847).
    pub loops: usize,
    /// Independent cut-sets: nodes − parts.
    pub cutsets: usize,
    /// A loop of elements that all fix a voltage: its current has no unique solution.
    pub voltage_loop: Option<Vec<ElementId>>,
    /// Elements that all fix a current and alone join two parts.
    pub current_cutset: Option<Vec<ElementId>>,
    /// Groups of nodes that only capacitors join to the rest: they keep their charge, so one of the
    /// natural frequencies lies at 0.
    pub charge_groups: Vec<ChargeGroup>,
    /// Whether the graph can be drawn without crossings.
    pub planar: bool,
    /// Whether series and parallel steps alone take the graph away.
    pub series_parallel: bool,
    /// Elements that no loop goes through: they carry no current.
    pub bridges: Vec<ElementId>,
    /// Nodes whose loss takes their part apart.
    pub cut_nodes: Vec<NodeId>,
    /// The order of complexity.
    pub order: Order,
}

/// Finds the facts. Linear but for the loops of sources and capacitors that are listed.
pub fn facts(circuit: &Circuit) -> Facts {
    let branches = branches(circuit);
    let edges: Vec<(u32, u32)> =
        branches.iter().map(|branch| (branch.plus.0, branch.minus.0)).collect();
    let nodes = circuit.nodes.len();
    let mut sets = NodeSets::new(nodes);
    for &(a, b) in &edges {
        sets.join(a, b);
    }
    let parts: Vec<Vec<NodeId>> =
        sets.groups().into_iter().map(|group| group.into_iter().map(NodeId).collect()).collect();
    // Nothing is driven and nothing taken out.
    let still = Transfer {
        drive: Drive::Port(GROUND, GROUND),
        numerator: Probe::Drive,
        denominator: Probe::Drive,
        removed: Vec::new(),
        unit: Unit::ONE,
    };
    let articulation = articulation(nodes, &edges);
    Facts {
        branches: branches.len(),
        loops: branches.len() + parts.len() - nodes,
        cutsets: nodes - parts.len(),
        voltage_loop: voltage_loop(circuit, &still),
        current_cutset: current_cutset(circuit, &still),
        charge_groups: charge_groups(circuit, &still),
        planar: is_planar(nodes, &edges),
        series_parallel: is_series_parallel(nodes, &edges),
        bridges: articulation.bridges.iter().map(|&edge| branches[edge].element).collect(),
        cut_nodes: articulation.cut_nodes.into_iter().map(NodeId).collect(),
        order: order(circuit),
        parts,
    }
}

#[cfg(test)]
mod tests;
