//! Magnetic and gyrating elements as dependent sources, which the witnesses can solve.
//!
//! A transformer is a voltage source that follows the secondary's voltage and a current source that
//! follows the primary's current; a gyrator is two current sources; a coupled inductor is a
//! voltage source that follows its own current and those it is coupled to. Elements keep their
//! numbers; what is added stands behind them.

use std::borrow::Cow;

use crate::circuit::{Circuit, Class, Control, Element, ElementId, GROUND, Law, Quantity, Value};

/// The circuit without transformers, gyrators and couplings; itself where it has none.
pub fn lowered(circuit: &Circuit) -> Cow<'_, Circuit> {
    let is_plain = |element: &Element| {
        !matches!(element.law, Law::Transformer { .. } | Law::Gyrator { .. } | Law::Mutual { .. })
    };
    if circuit.elements.iter().all(is_plain) {
        return Cow::Borrowed(circuit);
    }
    let mut plain = circuit.clone();
    for index in 0..circuit.elements.len() {
        let id = ElementId(u32::try_from(index).unwrap_or(u32::MAX));
        let element = &circuit.elements[index];
        let added = |plus, minus, law| Element {
            name: format!("{} (second port)", element.name),
            class: Class::Current,
            plus,
            minus,
            law,
            line: element.line,
        };
        match &element.law {
            Law::Transformer { ratio, secondary: (c, d) } => {
                plain.elements[index].law =
                    Law::ControlledVoltage(vec![control(ratio.clone(), Quantity::Voltage(*c, *d))]);
                let back = Value::Negative(Box::new(ratio.clone()));
                let law = Law::ControlledCurrent(vec![control(back, Quantity::Current(id))]);
                plain.elements.push(added(*c, *d, law));
            }
            Law::Gyrator { conductance, second: (c, d) } => {
                plain.elements[index].law = Law::ControlledCurrent(vec![control(
                    conductance.clone(),
                    Quantity::Voltage(*c, *d),
                )]);
                let back = Value::Negative(Box::new(conductance.clone()));
                let port = Quantity::Voltage(element.plus, element.minus);
                let law = Law::ControlledCurrent(vec![control(back, port)]);
                plain.elements.push(added(*c, *d, law));
            }
            Law::Mutual { first, second, inductance } => {
                couple(&mut plain, *first, *second, inductance);
                couple(&mut plain, *second, *first, inductance);
                // Nothing is left between its nodes.
                let rest = &mut plain.elements[index];
                (rest.plus, rest.minus) = (GROUND, GROUND);
                rest.law = Law::ControlledCurrent(Vec::new());
            }
            _ => {}
        }
    }
    Cow::Owned(plain)
}

fn control(gain: Value, quantity: Quantity) -> Control {
    Control { gain, quantity }
}

/// Adds s·M·i(other) to the voltage of an inductor.
fn couple(circuit: &mut Circuit, inductor: ElementId, other: ElementId, inductance: &Value) {
    let law = &mut circuit.elements[inductor.0 as usize].law;
    if let Law::Impedance(own) = law {
        *law = Law::ControlledVoltage(vec![control(own.clone(), Quantity::Current(inductor))]);
    }
    if let Law::ControlledVoltage(controls) = law {
        let gain = Value::Product(vec![Value::S, inductance.clone()]);
        controls.push(control(gain, Quantity::Current(other)));
    }
}
