//! Circuits by hand, for the tests of this folder.

use crate::circuit::{
    Circuit, Class, Control, Drive, Element, ElementId, GROUND, Law, Node, NodeId, Probe, Quantity,
    Symbol, SymbolId, SymbolRole, Transfer, Unit, Value,
};

/// A circuit that grows line by line; every element has a symbol of its own name.
pub(super) struct Bench {
    pub(super) circuit: Circuit,
}

impl Bench {
    pub(super) fn new() -> Self {
        let mut circuit = Circuit::default();
        circuit.nodes.push(Node { name: "ground".into(), aliases: Vec::new() });
        Self { circuit }
    }

    pub(super) fn node(&mut self, name: &str) -> NodeId {
        if name == "0" {
            return GROUND;
        }
        self.circuit.node(name).unwrap_or_else(|| {
            self.circuit.nodes.push(Node { name: name.into(), aliases: Vec::new() });
            NodeId(self.circuit.nodes.len() as u32 - 1)
        })
    }

    pub(super) fn symbol(&mut self, name: &str) -> Value {
        Value::Symbol(self.circuit.symbol(name).unwrap_or_else(|| {
            self.circuit.symbols.push(Symbol {
                name: name.into(),
                role: SymbolRole::Parameter,
                unit: Unit::ONE,
                nominal: None,
                tolerance: None,
            });
            SymbolId(self.circuit.symbols.len() as u32 - 1)
        }))
    }

    fn add(&mut self, name: &str, class: Class, plus: &str, minus: &str, law: Law) -> ElementId {
        let (plus, minus) = (self.node(plus), self.node(minus));
        self.circuit.elements.push(Element { name: name.into(), class, plus, minus, law, line: 0 });
        ElementId(self.circuit.elements.len() as u32 - 1)
    }

    /// R…, C…, L…, G… by their letter.
    pub(super) fn part(&mut self, name: &str, plus: &str, minus: &str) -> ElementId {
        let symbol = self.symbol(name);
        self.valued(name, plus, minus, symbol)
    }

    pub(super) fn valued(&mut self, name: &str, plus: &str, minus: &str, v: Value) -> ElementId {
        let (class, law) = match name.as_bytes()[0] {
            b'R' => (Class::Resistor, Law::Impedance(v)),
            b'L' => (Class::Inductor, Law::Impedance(Value::Product(vec![Value::S, v]))),
            b'C' => (Class::Capacitor, Law::Admittance(Value::Product(vec![Value::S, v]))),
            _ => (Class::Conductance, Law::Admittance(v)),
        };
        self.add(name, class, plus, minus, law)
    }

    pub(super) fn voltage(&mut self, name: &str, plus: &str, minus: &str) -> ElementId {
        self.add(name, Class::Voltage, plus, minus, Law::VoltageSource)
    }

    pub(super) fn current(&mut self, name: &str, plus: &str, minus: &str) -> ElementId {
        self.add(name, Class::Current, plus, minus, Law::CurrentSource)
    }

    pub(super) fn controlled(
        &mut self,
        name: &str,
        plus: &str,
        minus: &str,
        quantity: Quantity,
    ) -> ElementId {
        let controls = vec![Control { gain: self.symbol(name), quantity }];
        match name.as_bytes()[0] {
            b'A' | b'r' => {
                self.add(name, Class::Voltage, plus, minus, Law::ControlledVoltage(controls))
            }
            _ => self.add(name, Class::Current, plus, minus, Law::ControlledCurrent(controls)),
        }
    }

    pub(super) fn opamp(&mut self, name: &str, plus: &str, minus: &str, output: &str) -> ElementId {
        let (plus, minus) = (self.node(plus), self.node(minus));
        self.add(name, Class::Opamp, output, "0", Law::Nullor(plus, minus))
    }

    /// V(node)/source
    pub(super) fn gain(&mut self, node: &str, source: ElementId) -> Transfer {
        let node = self.node(node);
        transfer(Drive::Source(source), Probe::Voltage(node, GROUND), Probe::Drive)
    }

    pub(super) fn impedance(&mut self, plus: &str, minus: &str) -> Transfer {
        let (plus, minus) = (self.node(plus), self.node(minus));
        transfer(Drive::Port(plus, minus), Probe::Voltage(plus, minus), Probe::Drive)
    }
}

pub(super) fn transfer(drive: Drive, numerator: Probe, denominator: Probe) -> Transfer {
    Transfer { drive, numerator, denominator, removed: Vec::new(), unit: Unit::ONE }
}
