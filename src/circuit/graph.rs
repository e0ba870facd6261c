//! What the graph alone says: loops of voltage sources, cut-sets of current sources, nodes that only
//! capacitors touch.
//!
//! All of it is connectivity (Kirchhoff 1847), found with disjoint sets and a breadth-first search;
//! no value is looked at. [`facts()`] puts together what a listing tells about a whole circuit.

mod branches;
mod complexity;
mod facts;
mod planarity;
mod reduction;
mod search;

pub use branches::{Branch, branches};
pub use complexity::{Order, order};
pub use facts::{Facts, facts};
pub use planarity::is_planar;
pub use reduction::is_series_parallel;
pub use search::{Articulation, articulation};

use super::{Circuit, Class, Drive, ElementId, GROUND, Law, NodeId, Transfer};

/// Disjoint sets of nodes (Tarjan 1975).
#[derive(Clone, Debug)]
pub struct NodeSets {
    parent: Vec<u32>,
}

impl NodeSets {
    /// Every node by itself.
    pub fn new(nodes: usize) -> Self {
        Self { parent: (0..nodes as u32).collect() }
    }

    /// The representative of a node's set: its smallest node.
    pub fn find(&mut self, node: u32) -> u32 {
        let mut root = node;
        while self.parent[root as usize] != root {
            let above = self.parent[self.parent[root as usize] as usize];
            self.parent[root as usize] = above;
            root = above;
        }
        root
    }

    /// Unites two sets; false when they were one already.
    pub fn join(&mut self, a: u32, b: u32) -> bool {
        let (a, b) = (self.find(a), self.find(b));
        self.parent[a.max(b) as usize] = a.min(b);
        a != b
    }

    /// Every set, its members ascending; sets by their smallest member.
    pub fn groups(&mut self) -> Vec<Vec<u32>> {
        let mut groups: Vec<Vec<u32>> = vec![Vec::new(); self.parent.len()];
        for node in 0..self.parent.len() as u32 {
            let root = self.find(node);
            groups[root as usize].push(node);
        }
        groups.retain(|group| !group.is_empty());
        groups
    }
}

/// The elements that are in the circuit while a transfer function is solved.
fn present<'c>(
    circuit: &'c Circuit,
    transfer: &'c Transfer,
) -> impl Iterator<Item = (ElementId, &'c super::Element)> {
    circuit
        .elements
        .iter()
        .zip(0_u32..)
        .map(|(element, index)| (ElementId(index), element))
        .filter(|(id, _)| !transfer.removed.contains(id))
}

/// The first loop of elements that all fix a voltage: independent and dependent voltage sources.
/// Its currents have no unique solution.
pub fn voltage_loop(circuit: &Circuit, transfer: &Transfer) -> Option<Vec<ElementId>> {
    let fixing: Vec<ElementId> = present(circuit, transfer)
        .filter(|(_, element)| {
            matches!(element.law, Law::VoltageSource | Law::ControlledVoltage(_))
        })
        .map(|(id, _)| id)
        .collect();
    let mut sets = NodeSets::new(circuit.nodes.len());
    let mut tree: Vec<ElementId> = Vec::new();
    for id in fixing {
        let element = &circuit[id];
        if !sets.join(element.plus.0, element.minus.0) {
            let mut found = path(circuit, &tree, element.plus, element.minus);
            found.push(id);
            found.sort_unstable();
            return Some(found);
        }
        tree.push(id);
    }
    None
}

/// The elements of a tree that lead from one node to another.
fn path(circuit: &Circuit, tree: &[ElementId], from: NodeId, to: NodeId) -> Vec<ElementId> {
    let mut came_by: Vec<Option<(ElementId, NodeId)>> = vec![None; circuit.nodes.len()];
    let mut queue = vec![from];
    let mut next = 0;
    while let Some(&node) = queue.get(next) {
        next += 1;
        for &id in tree {
            let element = &circuit[id];
            let other = if element.plus == node {
                element.minus
            } else if element.minus == node {
                element.plus
            } else {
                continue;
            };
            if other != from && came_by[other.0 as usize].is_none() {
                came_by[other.0 as usize] = Some((id, node));
                queue.push(other);
            }
        }
    }
    let mut found = Vec::new();
    let mut node = to;
    while let Some((id, before)) = came_by[node.0 as usize] {
        found.push(id);
        node = before;
    }
    found
}

/// The first set of elements that all fix a current and that alone join two parts: independent and
/// dependent current sources. The voltage between the parts has no unique solution.
pub fn current_cutset(circuit: &Circuit, transfer: &Transfer) -> Option<Vec<ElementId>> {
    let fixes_current = |law: &Law| matches!(law, Law::CurrentSource | Law::ControlledCurrent(_));
    let mut sets = NodeSets::new(circuit.nodes.len());
    for (_, element) in present(circuit, transfer) {
        if !fixes_current(&element.law) {
            sets.join(element.plus.0, element.minus.0);
        }
    }
    let mut crossing: Vec<(u32, ElementId)> = Vec::new();
    for (id, element) in present(circuit, transfer) {
        let (a, b) = (sets.find(element.plus.0), sets.find(element.minus.0));
        if fixes_current(&element.law) && a != b {
            // The part without ground is the one that hangs in the air.
            let part = if a == GROUND.0 { b } else { a };
            crossing.push((part, id));
        }
    }
    let part = crossing.first()?.0;
    let mut found: Vec<ElementId> = crossing
        .iter()
        .filter(|&&(of, id)| {
            of == part
                || sets.find(circuit[id].plus.0) == part
                || sets.find(circuit[id].minus.0) == part
        })
        .map(|&(_, id)| id)
        .collect();
    found.dedup();
    Some(found)
}

/// A group of nodes that only capacitors join to the rest.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct ChargeGroup {
    /// The nodes.
    pub nodes: Vec<NodeId>,
    /// The capacitors around it.
    pub capacitors: Vec<ElementId>,
}

/// Groups of nodes that keep their charge: whatever joins them to the rest is a capacitor (inputs
/// of ideal amplifiers and control voltages carry no current).
pub fn charge_groups(circuit: &Circuit, transfer: &Transfer) -> Vec<ChargeGroup> {
    let is_capacitor = |element: &super::Element| element.class == Class::Capacitor;
    let mut sets = NodeSets::new(circuit.nodes.len());
    for (_, element) in present(circuit, transfer) {
        if !is_capacitor(element) {
            sets.join(element.plus.0, element.minus.0);
        }
    }
    if let Drive::Port(enters, leaves) = transfer.drive {
        sets.join(enters.0, leaves.0);
    }
    let groups = sets.groups();
    let around = |group: &[u32]| -> Vec<ElementId> {
        present(circuit, transfer)
            .filter(|(_, element)| {
                is_capacitor(element)
                    && group.contains(&element.plus.0) != group.contains(&element.minus.0)
            })
            .map(|(id, _)| id)
            .collect()
    };
    // Without any ground in reach the whole part floats: that is another fact.
    groups
        .into_iter()
        .filter(|group| !group.contains(&GROUND.0))
        .map(|group| ChargeGroup {
            capacitors: around(&group),
            nodes: group.into_iter().map(NodeId).collect(),
        })
        .filter(|group| !group.capacitors.is_empty())
        .collect()
}
