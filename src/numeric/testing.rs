//! Circuits built by hand for tests.

use num_bigint::BigInt;

use crate::circuit::{
    Circuit, Class, Control, Drive, Element, ElementId, Law, Node, NodeId, Number, Probe, Quantity,
    Symbol, SymbolId, SymbolRole, Transfer, Unit, Value,
};

/// A circuit that grows; nodes are made on first use, `0` is ground.
#[derive(Default)]
pub(crate) struct Builder {
    pub(crate) circuit: Circuit,
}

/// n/d.
pub(crate) fn number(n: i64, d: i64) -> Number {
    Number::new(BigInt::from(n), BigInt::from(d))
}

pub(crate) fn constant(n: i64) -> Value {
    Value::Number(number(n, 1))
}

impl Builder {
    pub(crate) fn new() -> Self {
        let mut builder = Self::default();
        builder.node("0");
        builder
    }

    pub(crate) fn node(&mut self, name: &str) -> NodeId {
        self.circuit.node(name).unwrap_or_else(|| {
            self.circuit.nodes.push(Node { name: name.to_owned(), aliases: Vec::new() });
            NodeId(u32::try_from(self.circuit.nodes.len() - 1).expect("few nodes"))
        })
    }

    pub(crate) fn symbol(&mut self, name: &str, nominal: Option<Number>) -> Value {
        self.symbol_of(name, SymbolRole::Parameter, nominal)
    }

    fn symbol_of(&mut self, name: &str, role: SymbolRole, nominal: Option<Number>) -> Value {
        let id = self.circuit.symbol(name).unwrap_or_else(|| {
            self.circuit.symbols.push(Symbol {
                name: name.to_owned(),
                role,
                unit: Unit::ONE,
                nominal,
                tolerance: None,
            });
            SymbolId(u32::try_from(self.circuit.symbols.len() - 1).expect("few symbols"))
        });
        Value::Symbol(id)
    }

    pub(crate) fn element(
        &mut self,
        name: &str,
        class: Class,
        nodes: (&str, &str),
        law: Law,
    ) -> ElementId {
        let (plus, minus) = (self.node(nodes.0), self.node(nodes.1));
        let element = Element { name: name.to_owned(), class, plus, minus, law, line: 0 };
        self.circuit.elements.push(element);
        ElementId(u32::try_from(self.circuit.elements.len() - 1).expect("few elements"))
    }

    /// A passive element by its letter, with its own symbol and a nominal value.
    pub(crate) fn passive(&mut self, name: &str, a: &str, b: &str, nominal: Number) -> ElementId {
        let times_s = |value| Value::Product(vec![Value::S, value]);
        let class = match &name[..1] {
            "R" => Class::Resistor,
            "L" => Class::Inductor,
            "C" => Class::Capacitor,
            _ => Class::Conductance,
        };
        let value = self.symbol_of(name, SymbolRole::Element(class), Some(nominal));
        let law = match class {
            Class::Resistor => Law::Impedance(value),
            Class::Inductor => Law::Impedance(times_s(value)),
            Class::Capacitor => Law::Admittance(times_s(value)),
            _ => Law::Admittance(value),
        };
        self.element(name, class, (a, b), law)
    }

    pub(crate) fn voltage(&mut self, name: &str, a: &str, b: &str) -> ElementId {
        self.element(name, Class::Voltage, (a, b), Law::VoltageSource)
    }

    pub(crate) fn current(&mut self, name: &str, a: &str, b: &str) -> ElementId {
        self.element(name, Class::Current, (a, b), Law::CurrentSource)
    }

    pub(crate) fn nullor(
        &mut self,
        name: &str,
        plus: &str,
        minus: &str,
        output: &str,
    ) -> ElementId {
        let law = Law::Nullor(self.node(plus), self.node(minus));
        self.element(name, Class::Opamp, (output, "0"), law)
    }

    /// v(a) − v(b).
    pub(crate) fn across(&mut self, a: &str, b: &str) -> Quantity {
        Quantity::Voltage(self.node(a), self.node(b))
    }

    pub(crate) fn controlled_voltage(
        &mut self,
        name: &str,
        nodes: (&str, &str),
        gain: Value,
        quantity: Quantity,
    ) -> ElementId {
        let law = Law::ControlledVoltage(vec![Control { gain, quantity }]);
        self.element(name, Class::Voltage, nodes, law)
    }

    pub(crate) fn controlled_current(
        &mut self,
        name: &str,
        nodes: (&str, &str),
        gain: Value,
        quantity: Quantity,
    ) -> ElementId {
        let law = Law::ControlledCurrent(vec![Control { gain, quantity }]);
        self.element(name, Class::Current, nodes, law)
    }

    pub(crate) fn ammeter(&mut self, name: &str, a: &str, b: &str) -> ElementId {
        self.element(name, Class::Voltage, (a, b), Law::ControlledVoltage(Vec::new()))
    }

    /// v(out)/drive.
    pub(crate) fn gain(&mut self, drive: ElementId, out: &str) -> Transfer {
        let numerator = Probe::Voltage(self.node(out), NodeId(0));
        transfer(Drive::Source(drive), numerator, Probe::Drive)
    }

    /// The impedance between two nodes.
    pub(crate) fn impedance(&mut self, a: &str, b: &str) -> Transfer {
        let (a, b) = (self.node(a), self.node(b));
        transfer(Drive::Port(a, b), Probe::Voltage(a, b), Probe::Drive)
    }

    /// The nominal values, all of which are given.
    pub(crate) fn numbers(&self) -> Vec<Number> {
        let symbols = self.circuit.symbols.iter();
        symbols.map(|symbol| symbol.nominal.clone().expect("a nominal value")).collect()
    }
}

pub(crate) fn transfer(drive: Drive, numerator: Probe, denominator: Probe) -> Transfer {
    Transfer { drive, numerator, denominator, removed: Vec::new(), unit: Unit::ONE }
}
