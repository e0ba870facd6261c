//! Numbering: which symbols a circuit lists, and in which order.
//!
//! While a circuit is being built, the symbols of its values are numbers of definitions. Here those that
//! occur are put into reference order, and the values are renumbered.

use super::build::Builder;
use super::definitions::Meaning;
use super::names;
use crate::circuit::{Circuit, Law, SymbolId, Unit, Value};

impl Builder<'_> {
    /// Lists the symbols that occur, in reference order, and renumbers the values.
    pub(crate) fn number_symbols(&self, units: &[Unit], circuit: &mut Circuit) {
        let mut occurs = vec![false; self.definitions.list.len()];
        for value in values(circuit) {
            mark(value, &mut occurs);
        }
        let mut order: Vec<usize> = (0..occurs.len()).filter(|id| occurs[*id]).collect();
        order.sort_by_cached_key(|id| {
            let definition = &self.definitions.list[*id];
            (definition.role, names::natural_key(&definition.name))
        });
        let mut numbers = vec![None; occurs.len()];
        for (number, id) in order.iter().enumerate() {
            let definition = &self.definitions.list[*id];
            numbers[*id] = u32::try_from(number).ok().map(SymbolId);
            let Meaning::Symbol { nominal, tolerance } = &definition.meaning else { continue };
            circuit.symbols.push(crate::circuit::Symbol {
                name: definition.name.clone(),
                role: definition.role,
                unit: units[*id],
                nominal: nominal.clone(),
                tolerance: tolerance.clone(),
            });
        }
        for (id, definition) in self.definitions.list.iter().enumerate() {
            let Meaning::Expression(_) = definition.meaning else { continue };
            let Some(settled) = self.definitions.settled(id) else { continue };
            if all_occur(&settled.value, &occurs) {
                circuit.definitions.push(crate::circuit::Definition {
                    name: definition.name.clone(),
                    value: settled.value.clone(),
                });
            }
        }
        for value in values_mut(circuit) {
            renumber(value, &numbers);
        }
    }
}

/// All values of a circuit's elements.
fn values(circuit: &Circuit) -> impl Iterator<Item = &Value> {
    circuit.elements.iter().flat_map(|element| -> Vec<&Value> {
        match &element.law {
            Law::Impedance(value) | Law::Admittance(value) => vec![value],
            Law::ControlledVoltage(controls) | Law::ControlledCurrent(controls) => {
                controls.iter().map(|control| &control.gain).collect()
            }
            _ => Vec::new(),
        }
    })
}

fn values_mut(circuit: &mut Circuit) -> impl Iterator<Item = &mut Value> {
    let elements = circuit.elements.iter_mut().flat_map(|element| -> Vec<&mut Value> {
        match &mut element.law {
            Law::Impedance(value) | Law::Admittance(value) => vec![value],
            Law::ControlledVoltage(controls) | Law::ControlledCurrent(controls) => {
                controls.iter_mut().map(|control| &mut control.gain).collect()
            }
            _ => Vec::new(),
        }
    });
    elements.chain(circuit.definitions.iter_mut().map(|definition| &mut definition.value))
}

/// Calls `visit` for every symbol of a value.
fn visit_symbols(value: &Value, visit: &mut impl FnMut(SymbolId)) {
    match value {
        Value::Number(_) | Value::S => {}
        Value::Symbol(id) => visit(*id),
        Value::Sum(list) | Value::Product(list) | Value::Parallel(list) => {
            list.iter().for_each(|child| visit_symbols(child, visit));
        }
        Value::Power(inner, _) | Value::Negative(inner) => visit_symbols(inner, visit),
    }
}

fn mark(value: &Value, occurs: &mut [bool]) {
    visit_symbols(value, &mut |id| occurs[id.0 as usize] = true);
}

fn renumber(value: &mut Value, numbers: &[Option<SymbolId>]) {
    match value {
        Value::Number(_) | Value::S => {}
        Value::Symbol(id) => {
            if let Some(number) = numbers[id.0 as usize] {
                *id = number;
            }
        }
        Value::Sum(list) | Value::Product(list) | Value::Parallel(list) => {
            list.iter_mut().for_each(|child| renumber(child, numbers));
        }
        Value::Power(inner, _) | Value::Negative(inner) => renumber(inner, numbers),
    }
}

/// True if all symbols of a value occur.
fn all_occur(value: &Value, occurs: &[bool]) -> bool {
    let mut all = true;
    visit_symbols(value, &mut |id| all &= occurs[id.0 as usize]);
    all
}
