//! Words for classes and questions.

use std::collections::BTreeMap;

use crate::circuit::{
    Ask, Circuit, Class, Element, ElementId, Law, Limit, LimitTo, ParameterSet, Question,
};

/// The word of the circuit language for a class.
pub fn class_word(class: Class) -> &'static str {
    match class {
        Class::Resistor => "resistor",
        Class::Capacitor => "capacitor",
        Class::Inductor => "inductor",
        Class::Conductance => "conductance",
        Class::Impedance => "impedance",
        Class::Admittance => "admittance",
        Class::Voltage => "voltage",
        Class::Current => "current",
        Class::Opamp => "opamp",
        Class::Nullor => "nullor",
        Class::Transformer => "transformer",
        Class::Gyrator => "gyrator",
        Class::Mutual => "mutual",
    }
}

/// What an element is, in words.
pub(super) fn kind(element: &Element) -> String {
    match &element.law {
        Law::VoltageSource => "voltage source".to_owned(),
        Law::CurrentSource => "current source".to_owned(),
        Law::ControlledVoltage(terms) if terms.is_empty() => "ammeter".to_owned(),
        Law::ControlledVoltage(_) if element.class == Class::Opamp => "op-amp".to_owned(),
        Law::ControlledVoltage(_) => "controlled voltage".to_owned(),
        Law::ControlledCurrent(_) => "controlled current".to_owned(),
        Law::Nullor(..) if element.class == Class::Opamp => "ideal op-amp".to_owned(),
        Law::Mutual { .. } => "mutual inductance".to_owned(),
        _ => class_word(element.class).to_owned(),
    }
}

/// Elements by the device or block that they belong to, in the order of the file.
pub(super) fn groups(circuit: &Circuit) -> Vec<(String, Vec<ElementId>)> {
    let mut places: BTreeMap<&str, usize> = BTreeMap::new();
    let mut groups: Vec<(String, Vec<ElementId>)> = Vec::new();
    for (element, index) in circuit.elements.iter().zip(0_u32..) {
        let Some((owner, _)) = element.name.rsplit_once('.') else { continue };
        let place = *places.entry(owner).or_insert_with(|| {
            groups.push((owner.to_owned(), Vec::new()));
            groups.len() - 1
        });
        groups[place].1.push(ElementId(index));
    }
    groups
}

/// What a question asks for.
pub(super) fn question(ask: &Ask) -> &'static str {
    match &ask.question {
        Question::Ratio(_) => "ratio",
        Question::Superposition(_) => "superposition",
        Question::TwoPort(two_port) => match two_port.set {
            ParameterSet::Scattering | ParameterSet::TransferScattering => "scattering parameters",
            _ => "two-port parameters",
        },
        Question::ReturnRatio(_) => "return ratio",
        Question::NoiseDensity(..) => "noise density",
    }
}

/// `A0 to infinity`.
pub(super) fn limit(circuit: &Circuit, limit: &Limit) -> String {
    let name = limit.symbol.map_or("s", |symbol| circuit[symbol].name.as_str());
    let to = match limit.to {
        LimitTo::Zero => "0",
        LimitTo::Infinity => "infinity",
    };
    format!("{name} to {to}")
}
