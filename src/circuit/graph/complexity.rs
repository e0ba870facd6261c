//! The order of complexity that the graph lets one expect.
//!
//! Reactive elements, minus the independent loops of capacitors and voltage-fixing elements, minus
//! the independent cut-sets of inductors and independent current sources (Bryant 1959; Kuh & Rohrer
//! 1965). Exact for resistors, conductances, capacitors, inductors and independent sources of
//! general values; an upper bound where dependent sources, op-amps or other multi-ports are present.
//! Elements whose value is an expression in `s` count with the degree of that expression.

use super::{NodeSets, branches, path};
use crate::circuit::{Circuit, Class, ElementId, Law, Value};

/// The order and how it came about.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Order {
    /// Capacitors and inductors.
    pub reactive: usize,
    /// Degrees in `s` of other elements' values.
    pub from_expressions: usize,
    /// Fundamental loops of capacitors, voltage sources and outputs of op-amps, each of which
    /// takes one from the order: no new charge can be chosen in it.
    pub capacitor_loops: Vec<Vec<ElementId>>,
    /// Independent cut-sets of inductors and independent current sources, each of which takes one
    /// from the order: every set is the inductors around one group of nodes.
    pub inductor_cutsets: Vec<Vec<ElementId>>,
    /// The order.
    pub order: usize,
    /// False where it is only an upper bound.
    pub exact: bool,
}

/// Counts reactive elements less loops and cut-sets.
pub fn order(circuit: &Circuit) -> Order {
    let elements = || circuit.elements.iter().zip(0_u32..).map(|(e, i)| (ElementId(i), e));
    let reactive = elements()
        .filter(|(_, element)| matches!(element.class, Class::Capacitor | Class::Inductor))
        .count();
    let from_expressions: usize = elements()
        .filter(|(_, element)| !matches!(element.class, Class::Capacitor | Class::Inductor))
        .flat_map(|(_, element)| element.law.values())
        .map(|value| degrees(value).0.max(degrees(value).1))
        .sum();
    let capacitor_loops = capacitor_loops(circuit);
    let inductor_cutsets = inductor_cutsets(circuit);
    // A loop without a capacitor is a fault of its own and takes nothing.
    let lost = capacitor_loops.len() + inductor_cutsets.len();
    let exact = from_expressions == 0
        && elements().all(|(_, element)| {
            matches!(
                element.law,
                Law::Impedance(_) | Law::Admittance(_) | Law::VoltageSource | Law::CurrentSource
            ) || matches!(&element.law, Law::ControlledVoltage(terms) if terms.is_empty())
        });
    let order = (reactive + from_expressions).saturating_sub(lost);
    Order {
        reactive,
        from_expressions,
        order,
        capacitor_loops,
        inductor_cutsets,
        exact: exact || order == 0,
    }
}

/// Loops that a capacitor closes over capacitors and elements that fix a voltage. A dependent
/// source or an op-amp's output carries any current, so no current of a capacitor is seen there.
fn capacitor_loops(circuit: &Circuit) -> Vec<Vec<ElementId>> {
    let mut sets = NodeSets::new(circuit.nodes.len());
    let mut tree = Vec::new();
    let all = || circuit.elements.iter().zip(0_u32..).map(|(e, i)| (ElementId(i), e));
    let fixing = all().filter(|(_, element)| {
        matches!(element.law, Law::VoltageSource | Law::ControlledVoltage(_) | Law::Nullor(..))
    });
    for (id, element) in fixing {
        if sets.join(element.plus.0, element.minus.0) {
            tree.push(id);
        }
    }
    let mut loops = Vec::new();
    for (id, element) in all().filter(|(_, element)| element.class == Class::Capacitor) {
        if sets.join(element.plus.0, element.minus.0) {
            tree.push(id);
        } else {
            let mut found = path(circuit, &tree, element.plus, element.minus);
            found.push(id);
            found.sort_unstable();
            loops.push(found);
        }
    }
    loops
}

/// With everything else joined, the inductors that hold the groups together must carry currents
/// that add up: one loss for each group but one of every part.
fn inductor_cutsets(circuit: &Circuit) -> Vec<Vec<ElementId>> {
    let mut groups = NodeSets::new(circuit.nodes.len());
    let mut inductors = Vec::new();
    for branch in branches(circuit) {
        match circuit[branch.element].class {
            Class::Inductor => inductors.push(branch),
            _ if matches!(circuit[branch.element].law, Law::CurrentSource) => {}
            _ => {
                groups.join(branch.plus.0, branch.minus.0);
            }
        }
    }
    let mut parts = groups.clone();
    for branch in &inductors {
        parts.join(branch.plus.0, branch.minus.0);
    }
    let mut cutsets = Vec::new();
    for members in groups.groups() {
        let group = groups.find(members[0]);
        // The group that holds the smallest node of its part stands for the rest.
        if parts.find(group) == group {
            continue;
        }
        let around: Vec<ElementId> = inductors
            .iter()
            .filter(|branch| {
                (groups.find(branch.plus.0) == group) != (groups.find(branch.minus.0) == group)
            })
            .map(|branch| branch.element)
            .collect();
        cutsets.push(around);
    }
    cutsets
}

/// Upper bounds on the degrees in `s` of numerator and denominator.
fn degrees(value: &Value) -> (usize, usize) {
    match value {
        Value::Number(_) | Value::Symbol(_) => (0, 0),
        Value::S => (1, 0),
        Value::Negative(inner) => degrees(inner),
        Value::Power(base, exponent) => {
            let (above, below) = degrees(base);
            let times = exponent.unsigned_abs() as usize;
            let (above, below) = (above.saturating_mul(times), below.saturating_mul(times));
            if *exponent < 0 { (below, above) } else { (above, below) }
        }
        Value::Product(factors) => factors
            .iter()
            .map(degrees)
            .fold((0, 0), |(n, d), (m, e)| (n.saturating_add(m), d.saturating_add(e))),
        Value::Sum(terms) => sum(terms.iter().map(degrees)),
        Value::Parallel(parts) => {
            let (above, below) = sum(parts.iter().map(degrees).map(|(n, d)| (d, n)));
            (below, above)
        }
    }
}

fn sum(terms: impl Iterator<Item = (usize, usize)>) -> (usize, usize) {
    terms.fold((0, 0), |(n, d), (m, e)| {
        (n.saturating_add(e).max(m.saturating_add(d)), d.saturating_add(e))
    })
}
