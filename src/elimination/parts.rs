//! Parts without a connection to the reference.
//!
//! The unknowns of such a part are determined up to one voltage, so its determinant is 0 although
//! the differences inside it are known. Where a part of the current graph is a part of the voltage
//! graph too, one node of it may be grounded: that changes no difference and no current. Where
//! they differ the circuit is truly singular and is left as it is.

use super::choice::Pair;
use super::error::EliminationError;
use super::system::{System, circuit_nodes};
use crate::circuit::graph::NodeSets;
use crate::circuit::{Circuit, Drive, Law, NodeId, Transfer};

/// Grounds one node of each part that hangs in the air.
///
/// # Errors
/// [`EliminationError::NoReturnPath`] and [`EliminationError::Undetermined`] when the question
/// itself joins two parts.
pub(crate) fn ground_floating(
    circuit: &Circuit,
    transfer: &Transfer,
    system: &mut System,
) -> Result<(), EliminationError> {
    let is_voltage = matches!(transfer.drive, Drive::Source(id)
        if matches!(circuit[id].law, Law::VoltageSource));
    let question = system.question();
    let mut current = NodeSets::new(system.nodes);
    let mut voltage = NodeSets::new(system.nodes);
    for choice in &system.choices[..question] {
        for alternative in &choice.alternatives {
            for pair in &alternative.current {
                current.join(pair.0, pair.1);
            }
            for pair in &alternative.voltage {
                voltage.join(pair.0, pair.1);
            }
        }
    }
    if is_voltage {
        // A voltage source joins its nodes in both graphs, whatever is asked.
        for alternative in &system.choices[question].alternatives {
            for &port in &alternative.current {
                current.join(port.0, port.1);
                voltage.join(port.0, port.1);
            }
        }
    }
    let by_node = circuit_nodes(circuit);
    let circuit_node = |node: u32| by_node.get(node as usize).copied();
    for alternative in &system.choices[question].alternatives {
        for &Pair(a, b) in &alternative.current {
            if current.find(a) != current.find(b) {
                let (a, b) =
                    (circuit_node(a).unwrap_or_default(), circuit_node(b).unwrap_or_default());
                return Err(EliminationError::NoReturnPath(a, b));
            }
        }
        for &Pair(a, b) in &alternative.voltage {
            if voltage.find(a) != voltage.find(b) {
                let (a, b) =
                    (circuit_node(a).unwrap_or_default(), circuit_node(b).unwrap_or_default());
                return Err(EliminationError::Undetermined(a, b));
            }
        }
    }
    let voltage_groups = voltage.groups();
    let floating: Vec<Vec<u32>> = current
        .groups()
        .into_iter()
        .filter(|group| group[0] != 0 && group.len() > 1)
        .filter(|group| {
            voltage_groups
                .binary_search_by_key(&group[0], |g| g[0])
                .is_ok_and(|at| voltage_groups[at] == *group)
        })
        .collect();
    let mut moved: Vec<u32> = (0..system.nodes as u32).collect();
    for group in floating {
        // Nodes are in the order of their names, the circuit's own before those made here.
        moved[group[0] as usize] = 0;
        let part: Vec<NodeId> = group.iter().filter_map(|&node| circuit_node(node)).collect();
        if let Some(&node) = part.first() {
            system.grounded.push((node, part));
        }
    }
    for choice in &mut system.choices {
        for alternative in &mut choice.alternatives {
            for pair in alternative.current.iter_mut().chain(&mut alternative.voltage) {
                *pair = Pair(moved[pair.0 as usize], moved[pair.1 as usize]);
            }
        }
    }
    Ok(())
}
