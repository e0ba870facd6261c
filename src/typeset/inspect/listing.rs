//! From a circuit to the structures of the JSON.

use super::Values;
use super::json::{
    Ask, Band, Claim, Definition, Element, Graph, Group, INSPECT_SCHEMA, Inspect, Node, Noise,
    Order, Shot,
};
use super::words::{class_word, groups, limit, question};
use crate::circuit::graph::{Facts, branches, facts};
use crate::circuit::{Circuit, ElementId, Law, NodeId};
use crate::typeset::answer::symbols;
use crate::typeset::json::Warning;
use crate::typeset::number::shortest;

/// Kelvin, where the file says nothing.
const TEMPERATURE: &str = "300";

/// The whole listing.
pub fn listing(circuit: &Circuit, warnings: Vec<Warning>) -> Inspect {
    let values = Values::new(circuit);
    let name = |id: ElementId| circuit[id].name.clone();
    let names = |ids: &[ElementId]| ids.iter().map(|&id| name(id)).collect::<Vec<_>>();
    let node = |id: NodeId| circuit[id].name.clone();
    let ids = || (0..circuit.elements.len() as u32).map(ElementId);
    let with = |keep: &dyn Fn(ElementId) -> bool| -> Vec<String> {
        ids().filter(|&id| keep(id)).map(name).collect()
    };
    let independent =
        |id: ElementId| matches!(circuit[id].law, Law::VoltageSource | Law::CurrentSource);
    Inspect {
        schema: INSPECT_SCHEMA,
        circuit: circuit.title.clone(),
        nodes: nodes(circuit),
        elements: ids().map(|id| element(circuit, &values, id)).collect(),
        symbols: symbols(circuit),
        definitions: circuit
            .definitions
            .iter()
            .map(|definition| Definition {
                name: definition.name.clone(),
                expression: values.text(&definition.value),
            })
            .collect(),
        groups: groups(circuit)
            .into_iter()
            .map(|(name, ids)| Group { name, elements: names(&ids) })
            .collect(),
        sources: with(&independent),
        asks: circuit
            .asks
            .iter()
            .map(|ask| Ask {
                name: ask.name.clone(),
                query: ask.text.clone(),
                kind: question(ask),
                line: ask.line,
            })
            .collect(),
        claims: circuit
            .claims
            .iter()
            .map(|claim| Claim {
                name: claim.name.clone(),
                formula: claim.text.clone(),
                line: claim.line,
            })
            .collect(),
        limits: circuit.limits.iter().map(|taken| limit(circuit, taken)).collect(),
        band: circuit
            .band
            .as_ref()
            .map(|band| Band { from_hz: shortest(&band.from), to_hz: shortest(&band.to) }),
        noise: Noise {
            thermal: with(&|id| circuit.is_noisy(id)),
            shot: circuit
                .shots
                .iter()
                .map(|shot| Shot {
                    name: shot.name.clone(),
                    nodes: [node(shot.plus), node(shot.minus)],
                    current: shortest(&shot.current),
                })
                .collect(),
            temperature: circuit.temperature.as_ref().map_or(TEMPERATURE.to_owned(), shortest),
        },
        graph: graph(circuit, &facts(circuit)),
        warnings,
    }
}

/// Nodes with what touches them.
fn nodes(circuit: &Circuit) -> Vec<Node> {
    let mut touching: Vec<Vec<String>> = vec![Vec::new(); circuit.nodes.len()];
    for branch in branches(circuit) {
        let name = &circuit[branch.element].name;
        for end in [branch.plus, branch.minus] {
            let list = &mut touching[end.0 as usize];
            if list.last() != Some(name) {
                list.push(name.clone());
            }
        }
    }
    circuit
        .nodes
        .iter()
        .zip(touching)
        .map(|(node, elements)| Node {
            name: node.name.clone(),
            aliases: node.aliases.clone(),
            elements,
        })
        .collect()
}

fn element(circuit: &Circuit, values: &Values<'_>, id: ElementId) -> Element {
    let element = &circuit[id];
    let node = |id: NodeId| circuit[id].name.clone();
    let symbol = values.symbol(element);
    let (own, other) = match element.law {
        Law::Nullor(a, b)
        | Law::Transformer { secondary: (a, b), .. }
        | Law::Gyrator { second: (a, b), .. } => {
            (vec![node(element.plus), node(element.minus)], vec![node(a), node(b)])
        }
        Law::Mutual { .. } => (Vec::new(), Vec::new()),
        _ => (vec![node(element.plus), node(element.minus)], Vec::new()),
    };
    let valued = !matches!(element.law, Law::VoltageSource | Law::CurrentSource | Law::Nullor(..));
    Element {
        name: element.name.clone(),
        class: class_word(element.class),
        nodes: own,
        other_nodes: other,
        value: values.own(element).or_else(|| {
            valued.then(|| match &element.law {
                Law::ControlledVoltage(_) | Law::ControlledCurrent(_) => "0".to_owned(),
                _ => element.name.clone(),
            })
        }),
        nominal: symbol.and_then(|symbol| symbol.nominal.as_ref()).map(shortest),
        tolerance: symbol
            .and_then(|symbol| symbol.tolerance.as_ref())
            .map(|tolerance| tolerance.text.clone()),
        dependent: matches!(
            &element.law,
            Law::ControlledVoltage(terms) | Law::ControlledCurrent(terms) if !terms.is_empty()
        ),
        noisy: circuit.is_noisy(id),
        line: element.line,
    }
}

fn graph(circuit: &Circuit, facts: &Facts) -> Graph {
    let elements =
        |ids: &[ElementId]| ids.iter().map(|&id| circuit[id].name.clone()).collect::<Vec<_>>();
    let lists = |all: &[Vec<ElementId>]| all.iter().map(|ids| elements(ids)).collect::<Vec<_>>();
    let nodes = |ids: &[NodeId]| ids.iter().map(|&id| circuit[id].name.clone()).collect::<Vec<_>>();
    Graph {
        branches: facts.branches,
        parts: facts.parts.iter().map(|part| nodes(part)).collect(),
        loops: facts.loops,
        cutsets: facts.cutsets,
        voltage_loop: facts.voltage_loop.as_deref().map(elements),
        current_cutset: facts.current_cutset.as_deref().map(elements),
        charge_groups: facts.charge_groups.iter().map(|group| nodes(&group.nodes)).collect(),
        planar: facts.planar,
        series_parallel: facts.series_parallel,
        bridges: elements(&facts.bridges),
        cut_nodes: nodes(&facts.cut_nodes),
        order: Order {
            order: facts.order.order,
            exact: facts.order.exact,
            reactive: facts.order.reactive,
            from_expressions: facts.order.from_expressions,
            capacitor_loops: lists(&facts.order.capacitor_loops),
            inductor_cutsets: lists(&facts.order.inductor_cutsets),
        },
    }
}
