//! Numbering: which symbols a circuit lists, and in which order.
//!
//! While a circuit is being built, the symbols of its values are numbers of definitions. Here those that
//! occur are put into reference order, and the values are renumbered.

use super::build::Builder;
use super::definitions::{Meaning, visit_names};
use super::names;
use super::queries::reference_of;
use crate::circuit::{Circuit, SymbolId, Unit, Value};

impl Builder<'_> {
    /// Lists the symbols that occur, in reference order, and renumbers the values.
    pub(crate) fn number_symbols(&self, units: &[Unit], circuit: &mut Circuit) {
        let mut occurs = vec![false; self.definitions.list.len()];
        for value in values(circuit) {
            mark(value, &mut occurs);
        }
        for expression in
            self.queries.iter().filter_map(|(query, _)| reference_of(&query.expression))
        {
            visit_names(expression, &mut |name, _| {
                let settled =
                    self.definitions.find(name).and_then(|id| self.definitions.settled(id));
                if let Some(settled) = settled {
                    mark(&settled.value, &mut occurs);
                }
            });
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
    circuit.elements.iter().flat_map(|element| element.law.values())
}

fn values_mut(circuit: &mut Circuit) -> impl Iterator<Item = &mut Value> {
    let elements = circuit.elements.iter_mut().flat_map(|element| element.law.values_mut());
    elements.chain(circuit.definitions.iter_mut().map(|definition| &mut definition.value))
}

fn mark(value: &Value, occurs: &mut [bool]) {
    value.for_each_symbol(&mut |id| occurs[id.0 as usize] = true);
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
    value.for_each_symbol(&mut |id| all &= occurs[id.0 as usize]);
    all
}
