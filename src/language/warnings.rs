//! What is probably not meant: names used once and close to others, names never used, open ends.

use super::ask;
use super::build::{Builder, DraftLaw};
use super::diagnostic::Diagnostic;
use super::names::nearest;
use crate::circuit::{Circuit, GROUND, Law, NodeId};

/// Pairs of names that are compared in search of slips; a larger file goes without.
const MOST_COMPARED: usize = 1_000_000;

impl Builder<'_> {
    pub(crate) fn warn(&mut self, circuit: &Circuit) {
        let mut warnings = Vec::new();
        let declared: Vec<&str> = self
            .definitions
            .list
            .iter()
            .filter(|definition| !definition.implicit || definition.uses > 1)
            .map(|definition| definition.name.as_str())
            .collect();
        let implicit =
            self.definitions.list.iter().filter(|definition| definition.implicit).count();
        for definition in &self.definitions.list {
            let name = &definition.name;
            if implicit.saturating_mul(declared.len()) < MOST_COMPARED
                && definition.implicit
                && definition.uses == 1
            {
                if let Some(near) = nearest(name, declared.iter().copied()) {
                    warnings.push(
                        Diagnostic::warning(
                            "near-miss",
                            definition.span,
                            format!("`{name}` is used once and declared nowhere"),
                        )
                        .help(format!("is it `{near}`? If not, declare it: `let {name}`")),
                    );
                }
            } else if definition.by_let && definition.uses == 0 {
                warnings.push(
                    Diagnostic::warning(
                        "unused",
                        definition.span,
                        format!("`{name}` is declared and never used"),
                    )
                    .help("remove the line, or use the name"),
                );
            }
        }
        self.warn_open_ends(circuit, &mut warnings);
        self.faults.append(&mut warnings);
    }

    /// An element with one end on nothing else does nothing, unless that node is asked for.
    fn warn_open_ends(&self, circuit: &Circuit, warnings: &mut Vec<Diagnostic>) {
        let mut touched = vec![0_u32; circuit.nodes.len()];
        let mut touch = |node: NodeId, times: u32| touched[node.0 as usize] += times;
        touch(GROUND, 2);
        for element in &circuit.elements {
            touch(element.plus, 1);
            touch(element.minus, 1);
            match &element.law {
                Law::Nullor(a, b)
                | Law::Transformer { secondary: (a, b), .. }
                | Law::Gyrator { second: (a, b), .. } => {
                    touch(*a, 1);
                    touch(*b, 1);
                }
                Law::ControlledVoltage(controls) | Law::ControlledCurrent(controls) => {
                    for control in controls {
                        if let crate::circuit::Quantity::Voltage(a, b) = control.quantity {
                            touch(a, 1);
                            touch(b, 1);
                        }
                    }
                }
                _ => {}
            }
        }
        for node in circuit.asks.iter().flat_map(ask::nodes) {
            touch(node, 2);
        }
        for (element, draft) in circuit.elements.iter().zip(&self.drafts) {
            // A transistor tied as a diode has such parts by right.
            if matches!(draft.law, DraftLaw::Mutual(..)) || self.is_of_device(&element.name) {
                continue;
            }
            if element.plus == element.minus {
                warnings.push(Diagnostic::warning(
                    "both-ends",
                    draft.name.span,
                    format!("both ends of `{}` are on one node", element.name),
                ));
                continue;
            }
            for node in [element.plus, element.minus] {
                if touched[node.0 as usize] == 1 {
                    warnings.push(Diagnostic::warning(
                        "open-end",
                        draft.name.span,
                        format!(
                            "nothing else is tied to `{}` at node `{}`",
                            element.name, circuit[node].name
                        ),
                    ));
                }
            }
        }
    }

    /// True for an element that a device's line made.
    fn is_of_device(&self, name: &str) -> bool {
        name.rsplit_once('.').is_some_and(|(owner, _)| self.devices.contains_key(owner))
    }
}
