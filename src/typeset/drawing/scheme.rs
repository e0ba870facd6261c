//! What is to be drawn: spans between two nodes, drops from a node to ground, blocks with pins.

use super::canvas::{Face, width};
use crate::circuit::{Ask, Circuit, Class, Drive, Element, GROUND, Law, NodeId, Probe, Quantity};
use crate::typeset::inspect::{Values, nominal};
use crate::typeset::number::Medium;

/// Elements at one place of a drop stand side by side; more than these get a place of their own.
const SIDE_BY_SIDE: usize = 3;

/// Longest label, in letters.
const LONGEST: usize = 34;

/// The sign of a two-terminal element.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Symbol {
    Resistor,
    Capacitor,
    Inductor,
    /// A one-port of any kind, with its letter.
    General(char),
    Voltage {
        controlled: bool,
    },
    Current {
        controlled: bool,
    },
}

/// A two-terminal element.
#[derive(Clone, Debug)]
pub(super) struct Single {
    pub(super) symbol: Symbol,
    pub(super) name: String,
    pub(super) value: String,
    /// The first node of the walk is the right or the lower one.
    pub(super) reversed: bool,
}

impl Single {
    /// The width of its label.
    pub(super) fn label(&self) -> f64 {
        width(&self.name, Face::Name).max(width(&self.value, Face::Value))
    }
}

/// What a block is.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum BlockKind {
    Amplifier,
    Nullor,
    Transformer,
    Gyrator,
}

/// A block: pins on its left and on its right; `None` is ground.
#[derive(Clone, Debug)]
pub(super) struct Block {
    pub(super) kind: BlockKind,
    pub(super) name: String,
    pub(super) note: String,
    pub(super) left: Vec<Option<NodeId>>,
    pub(super) right: Vec<Option<NodeId>>,
}

/// One thing to be placed.
#[derive(Clone, Debug)]
pub(super) enum Part {
    /// An element between two nodes, neither of them ground.
    Span { from: NodeId, to: NodeId, single: Single },
    /// Elements from a node to ground.
    Drop { node: NodeId, singles: Vec<Single> },
    /// A block.
    Block(Block),
}

/// Everything to be placed, and where signals come from and go to.
#[derive(Debug)]
pub(super) struct Scheme {
    pub(super) parts: Vec<Part>,
    /// Pairs of nodes: the first should stand to the left of the second.
    pub(super) flows: Vec<(NodeId, NodeId)>,
    /// The nodes that are driven.
    pub(super) inputs: Vec<NodeId>,
    /// The nodes that are asked for.
    pub(super) outputs: Vec<NodeId>,
    /// What could not be drawn as lines, in words.
    pub(super) remarks: Vec<String>,
}

impl Scheme {
    pub(super) fn new(circuit: &Circuit) -> Self {
        let values = Values::new(circuit);
        let mut scheme = Self {
            parts: Vec::new(),
            flows: Vec::new(),
            inputs: Vec::new(),
            outputs: Vec::new(),
            remarks: Vec::new(),
        };
        let mut drops: Vec<Vec<Single>> = vec![Vec::new(); circuit.nodes.len()];
        for element in &circuit.elements {
            if let Some(block) = block(element, &values) {
                scheme.parts.push(Part::Block(block));
                continue;
            }
            if let Law::Mutual { first, second, .. } = element.law {
                let value = label(element, &values);
                let value = if value.is_empty() { value } else { format!(" = {value}") };
                let (first, second) = (&circuit[first].name, &circuit[second].name);
                scheme
                    .remarks
                    .push(format!("{}{value} couples {first} and {second}", element.name));
                continue;
            }
            scheme.flow(circuit, element);
            let single = single(element, &values);
            if element.plus == element.minus {
                let node = &circuit[element.plus].name;
                scheme.remarks.push(format!("{} has both ends at {node}", element.name));
            } else if element.minus == GROUND {
                drops[element.plus.0 as usize].push(single);
            } else if element.plus == GROUND {
                drops[element.minus.0 as usize].push(Single { reversed: true, ..single });
            } else {
                scheme.parts.push(Part::Span { from: element.plus, to: element.minus, single });
            }
        }
        for (singles, node) in drops.into_iter().zip(0_u32..) {
            for group in singles.chunks(SIDE_BY_SIDE) {
                scheme.parts.push(Part::Drop { node: NodeId(node), singles: group.to_vec() });
            }
        }
        scheme.ends(circuit);
        scheme
    }

    /// A controlling voltage stands before what it controls.
    fn flow(&mut self, circuit: &Circuit, element: &Element) {
        let (Law::ControlledVoltage(controls) | Law::ControlledCurrent(controls)) = &element.law
        else {
            return;
        };
        for control in controls {
            let from = match control.quantity {
                Quantity::Voltage(plus, minus) => [plus, minus],
                Quantity::Current(id) => [circuit[id].plus, circuit[id].minus],
            };
            for from in from {
                for to in [element.plus, element.minus] {
                    if from != GROUND && to != GROUND && from != to {
                        self.flows.push((from, to));
                    }
                }
            }
        }
    }

    /// Driven nodes and asked ones: from the questions, else the independent sources.
    fn ends(&mut self, circuit: &Circuit) {
        let probed = |probe: Probe| match probe {
            Probe::Voltage(plus, _) => Some(plus),
            Probe::Current(id) => Some(circuit[id].plus),
            Probe::Drive => None,
        };
        for transfer in circuit.asks.iter().flat_map(Ask::transfers) {
            if let Drive::Source(id) = transfer.drive {
                self.inputs.extend([circuit[id].plus, circuit[id].minus]);
                self.outputs.extend(probed(transfer.numerator));
            }
        }
        if self.inputs.is_empty() {
            let independent = circuit
                .elements
                .iter()
                .filter(|element| matches!(element.law, Law::VoltageSource | Law::CurrentSource));
            self.inputs.extend(independent.flat_map(|element| [element.plus, element.minus]));
        }
        let mut seen = Vec::new();
        let mut fresh = |node: &NodeId| {
            *node != GROUND && !seen.contains(node) && {
                seen.push(*node);
                true
            }
        };
        self.inputs.retain(&mut fresh);
        self.outputs.retain(&mut fresh);
    }
}

/// Op-amps and parts with two ports.
fn block(element: &Element, values: &Values<'_>) -> Option<Block> {
    let pin = |node: NodeId| (node != GROUND).then_some(node);
    let name = element.name.clone();
    let note = label(element, values);
    let own = || vec![pin(element.plus), pin(element.minus)];
    let block = match &element.law {
        Law::Nullor(plus, minus) if element.class == Class::Opamp => Block {
            kind: BlockKind::Amplifier,
            note: String::new(),
            left: vec![pin(*plus), pin(*minus)],
            right: vec![pin(element.plus)],
            name,
        },
        Law::Nullor(a, b) => Block {
            kind: BlockKind::Nullor,
            note: String::new(),
            left: vec![pin(*a), pin(*b)],
            right: own(),
            name,
        },
        // A source to ground that senses a difference is an amplifier.
        Law::ControlledVoltage(controls) if element.minus == GROUND => {
            let [control] = &controls[..] else { return None };
            let Quantity::Voltage(plus, minus) = control.quantity else { return None };
            if minus == GROUND {
                return None;
            }
            let gain = values.gain(&control.gain, Medium::Unicode);
            Block {
                kind: BlockKind::Amplifier,
                left: vec![pin(plus), pin(minus)],
                right: vec![pin(element.plus)],
                note: shortened(format!("gain {}", gain.replace('*', "·"))),
                name,
            }
        }
        Law::Transformer { secondary, .. } => Block {
            kind: BlockKind::Transformer,
            left: own(),
            right: vec![pin(secondary.0), pin(secondary.1)],
            name,
            note,
        },
        Law::Gyrator { second, .. } => Block {
            kind: BlockKind::Gyrator,
            left: own(),
            right: vec![pin(second.0), pin(second.1)],
            name,
            note,
        },
        _ => return None,
    };
    Some(block)
}

fn single(element: &Element, values: &Values<'_>) -> Single {
    let controlled = matches!(element.law, Law::ControlledVoltage(_) | Law::ControlledCurrent(_));
    let symbol = match element.class {
        Class::Resistor | Class::Conductance => Symbol::Resistor,
        Class::Capacitor => Symbol::Capacitor,
        Class::Inductor => Symbol::Inductor,
        Class::Admittance => Symbol::General('Y'),
        Class::Impedance => Symbol::General('Z'),
        Class::Current => Symbol::Current { controlled },
        _ => Symbol::Voltage { controlled },
    };
    Single { symbol, name: element.name.clone(), value: label(element, values), reversed: false }
}

/// The value beside an element: its expression, or its nominal value.
fn label(element: &Element, values: &Values<'_>) -> String {
    let text = values
        .own(element)
        .or_else(|| values.symbol(element).and_then(|symbol| nominal(symbol, Medium::Unicode)));
    shortened(text.unwrap_or_default().replace('*', "·"))
}

fn shortened(text: String) -> String {
    if text.chars().count() <= LONGEST {
        return text;
    }
    text.chars().take(LONGEST - 1).chain(['…']).collect()
}
