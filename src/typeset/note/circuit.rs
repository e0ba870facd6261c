//! The circuit: drawing, elements, parameters, limits.

use super::document::{Blocks, Cell, Inline, Table, code, text};
use super::{Material, words};
use crate::circuit::{Class, Law, NodeId, SymbolRole};
use crate::typeset::drawing::{MOST_ELEMENTS, draw};
use crate::typeset::inspect::{Values, class_word, listing, nominal};
use crate::typeset::math::Math;
use crate::typeset::number::Medium;

pub(super) fn write(blocks: &mut Blocks, material: &Material<'_>) {
    let circuit = material.circuit;
    blocks.heading(1, vec![text("Circuit")]);
    if circuit.elements.len() <= MOST_ELEMENTS {
        let caption =
            "The circuit. Every line that ends in a ground sign leads to the reference node.";
        blocks.figure("circuit", draw(circuit).picture(), vec![text(caption)]);
    }
    elements(blocks, material);
    parameters(blocks, material);
    let limits = listing(circuit, Vec::new()).limits;
    if !limits.is_empty() {
        let mut said = vec![text("Limits that are taken, exactly, in every answer: ")];
        for (index, limit) in limits.into_iter().enumerate() {
            if index > 0 {
                said.push(text(", "));
            }
            said.push(code(limit));
        }
        said.push(text("."));
        blocks.paragraph(said);
    }
}

fn elements(blocks: &mut Blocks, material: &Material<'_>) {
    let circuit = material.circuit;
    let values = Values::new(circuit);
    let rows = circuit.elements.iter().map(|element| {
        let node = |id: NodeId| Cell::of(vec![code(circuit[id].name.as_str())]);
        let is_mutual = matches!(element.law, Law::Mutual { .. });
        let symbol = values.symbol(element);
        let value = match symbol.and_then(|symbol| nominal(symbol, Medium::Unicode)) {
            Some(quantity) => text(quantity),
            None => match values.own(element) {
                Some(expression) => code(expression),
                None => text(match element.law {
                    Law::VoltageSource | Law::CurrentSource => "the source",
                    Law::Nullor(..) => "ideal",
                    _ => "no number",
                }),
            },
        };
        let tolerance = symbol.and_then(|symbol| symbol.tolerance.as_ref());
        let tolerance = tolerance.map(words::tolerance);
        let ends = if is_mutual {
            [Cell::text("–"), Cell::text("–")]
        } else {
            [node(element.plus), node(element.minus)]
        };
        let [from, to] = ends;
        vec![
            Cell::of(vec![Inline::Math(Math::name(&element.name))]),
            Cell::text(kind(element.class, &element.law)),
            from,
            to,
            Cell::of(vec![value]),
            Cell::text(tolerance.unwrap_or_default()),
        ]
    });
    let head = ["element", "what it is", "from (+)", "to (−)", "value", "tolerance"];
    blocks.table(Table {
        caption: vec![text("Elements. Currents are counted from the first node to the second.")],
        head: head.map(|words| vec![text(words)]).into(),
        rows: rows.collect(),
    });
}

fn kind(class: Class, law: &Law) -> String {
    match law {
        Law::ControlledVoltage(terms) if terms.is_empty() => "ammeter".to_owned(),
        Law::ControlledVoltage(_) => "controlled voltage".to_owned(),
        Law::ControlledCurrent(_) => "controlled current".to_owned(),
        Law::Nullor(..) if class == Class::Opamp => "operational amplifier".to_owned(),
        Law::VoltageSource => "voltage source".to_owned(),
        Law::CurrentSource => "current source".to_owned(),
        Law::Mutual { .. } => "mutual inductance".to_owned(),
        _ => class_word(class).to_owned(),
    }
}

/// Symbols that are no elements.
fn parameters(blocks: &mut Blocks, material: &Material<'_>) {
    let circuit = material.circuit;
    let own = circuit
        .symbols
        .iter()
        .filter(|symbol| symbol.role != SymbolRole::Pi && circuit.element(&symbol.name).is_none());
    let rows = own.map(|symbol| {
        let value = nominal(symbol, Medium::Unicode).unwrap_or_else(|| "no number".to_owned());
        vec![
            Cell::of(vec![Inline::Math(Math::name(&symbol.name))]),
            Cell::of(vec![code(symbol.name.as_str())]),
            Cell::text(value),
            Cell::text(symbol.unit.to_string()),
        ]
    });
    let head = ["parameter", "in the file", "value", "unit"];
    blocks.table(Table {
        caption: vec![text("Parameters")],
        head: head.map(|words| vec![text(words)]).into(),
        rows: rows.collect(),
    });
}
