//! What a reader should know about an answer besides the formula.

use super::limits::limit_text;
use crate::circuit::graph::charge_groups;
use crate::circuit::{Circuit, Drive, ElementId, Law, NodeId, Transfer};
use crate::elimination::Elimination;

/// A remark on an answer.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Notice {
    /// A short name for programs and for the list of codes.
    pub code: &'static str,
    /// One sentence, lower case, without a full stop.
    pub message: String,
    /// The line of the file that it is about; 0 for none.
    pub line: u32,
}

/// Everything that the elimination and the graph say about an answer; only the first `own` elements
/// are named, those behind them are test elements.
pub(crate) fn collect(
    circuit: &Circuit,
    own: usize,
    transfer: &Transfer,
    elimination: &Elimination,
) -> Vec<Notice> {
    let mut notices = Vec::new();
    let mut say = |code, message| notices.push(Notice { code, message, line: 0 });
    let node = |id: NodeId| format!("`{}`", circuit[id].name);
    let element = |id: ElementId| format!("`{}`", circuit[id].name);
    for (grounded, part) in elimination.grounded_parts() {
        say(
            "floating-part",
            format!(
                "the part with {} has no connection to ground; differences inside it do not \
                 depend on that, and it was solved with {} as its reference",
                listed(part.iter().map(|&id| node(id))),
                node(*grounded)
            ),
        );
    }
    if elimination.is_zero() {
        say(
            "zero-answer",
            format!(
                "{} does not reach what is asked: the answer is 0",
                drive(circuit, own, transfer)
            ),
        );
        return notices;
    }
    for group in charge_groups(circuit, transfer) {
        let concerned =
            group.capacitors.iter().any(|id| !elimination.independent_elements().contains(id));
        if concerned {
            say(
                "kept-charge",
                format!(
                    "only capacitors ({}) reach {}: the charge there is kept for ever, so the \
                     formula holds from whatever level it starts at, and the level follows the \
                     voltages across these capacitors",
                    listed(group.capacitors.iter().map(|&id| element(id))),
                    listed(group.nodes.iter().map(|&id| node(id))),
                ),
            );
        }
    }
    let idle: Vec<ElementId> = elimination
        .independent_elements()
        .iter()
        .copied()
        .filter(|id| transfer.drive != Drive::Source(*id) && (id.0 as usize) < own)
        .collect();
    if !idle.is_empty() {
        let names = listed(idle.iter().map(|&id| element(id)));
        let verb = if idle.len() == 1 { "has" } else { "have" };
        say("no-influence", format!("{names} {verb} no influence on this answer"));
    }
    notices
}

/// The limits leave nothing.
pub(crate) fn vanished(circuit: &Circuit) -> Notice {
    let limits = circuit.limits.iter().map(|limit| limit_text(circuit, limit));
    let limits: Vec<String> = limits.collect();
    Notice {
        code: "zero-limit",
        message: format!("the answer goes to 0 with {}", limits.join(", ")),
        line: 0,
    }
}

fn drive(circuit: &Circuit, own: usize, transfer: &Transfer) -> String {
    let node = |id: NodeId| format!("`{}`", circuit[id].name);
    match transfer.drive {
        Drive::Source(id) if id.0 as usize >= own => {
            // A test source behind the circuit's own elements; of a voltage, the first node is +.
            let (plus, minus) = (node(circuit[id].plus), node(circuit[id].minus));
            match circuit[id].law {
                Law::CurrentSource => format!("a current from {plus} to {minus}"),
                _ => format!("a voltage across the port {plus}, {minus}"),
            }
        }
        Drive::Source(id) => format!("`{}`", circuit[id].name),
        Drive::Port(plus, minus) => {
            format!("a current into the port {}, {}", node(plus), node(minus))
        }
    }
}

/// `a, b and c`; long lists are cut.
pub(super) fn listed(names: impl ExactSizeIterator<Item = String>) -> String {
    const SHOWN: usize = 8;
    let count = names.len();
    let mut shown: Vec<String> = names.take(SHOWN).collect();
    if count > SHOWN {
        return format!("{} and {} more", shown.join(", "), count - SHOWN);
    }
    let last = shown.pop().unwrap_or_default();
    if shown.is_empty() { last } else { format!("{} and {last}", shown.join(", ")) }
}
