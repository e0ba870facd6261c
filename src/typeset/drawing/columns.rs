//! The order of nodes and blocks from left to right.
//!
//! Signals flow to the right: sources stand at the left, outputs at the right, a block between its
//! inputs and its outputs, and elements are short. A linear arrangement with these weights is sought
//! by moving one column at a time from a breadth-first order (Sugiyama, Tagawa & Toda 1981 for the
//! idea of layers; the arrangement problem itself is NP-hard, Garey, Johnson & Stockmeyer 1976).

use super::scheme::{Part, Scheme};
use crate::circuit::{GROUND, NodeId};

/// What stands in a column.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Column {
    Node(NodeId),
    /// Index of a part that is a block.
    Block(usize),
}

/// Evaluations of a term of the cost at most.
const WORK: usize = 60_000_000;

/// Columns and where each node and each part stands.
#[derive(Debug)]
pub(super) struct Columns {
    pub(super) order: Vec<Column>,
    pub(super) of_node: Vec<Option<usize>>,
    pub(super) of_part: Vec<Option<usize>>,
}

/// A wish about two columns: `from` to the left of `to`, and near it.
struct Wish {
    from: usize,
    to: usize,
    near: i64,
    reversed: i64,
}

/// A wish about one column: at the left (negative weight on the right end) or at the right.
struct Pull {
    column: usize,
    weight: i64,
}

/// Finds an order for the nodes that parts touch, and the blocks.
pub(super) fn arrange(scheme: &Scheme, nodes: usize) -> Columns {
    let mut of_node = vec![None; nodes];
    let mut of_part = vec![None; scheme.parts.len()];
    let mut all = Vec::new();
    let mut touch = |node: NodeId, all: &mut Vec<Column>| {
        if node != GROUND && of_node[node.0 as usize].is_none() {
            of_node[node.0 as usize] = Some(all.len());
            all.push(Column::Node(node));
        }
    };
    for (index, part) in scheme.parts.iter().enumerate() {
        match part {
            Part::Span { from, to, .. } => {
                touch(*from, &mut all);
                touch(*to, &mut all);
            }
            Part::Drop { node, .. } => touch(*node, &mut all),
            Part::Block(block) => {
                for node in block.left.iter().flatten() {
                    touch(*node, &mut all);
                }
                of_part[index] = Some(all.len());
                all.push(Column::Block(index));
                for node in block.right.iter().flatten() {
                    touch(*node, &mut all);
                }
            }
        }
    }
    let column = |node: NodeId| of_node[node.0 as usize];
    let mut wishes = Vec::new();
    for (index, part) in scheme.parts.iter().enumerate() {
        match part {
            Part::Span { from, to, .. } => {
                if let (Some(from), Some(to)) = (column(*from), column(*to)) {
                    wishes.push(Wish { from, to, near: 10, reversed: 0 });
                }
            }
            Part::Drop { .. } => {}
            Part::Block(block) => {
                let Some(own) = of_part[index] else { continue };
                for from in block.left.iter().flatten().filter_map(|node| column(*node)) {
                    wishes.push(Wish { from, to: own, near: 10, reversed: 25 });
                }
                for to in block.right.iter().flatten().filter_map(|node| column(*node)) {
                    wishes.push(Wish { from: own, to, near: 12, reversed: 60 });
                }
            }
        }
    }
    for &(from, to) in &scheme.flows {
        if let (Some(from), Some(to)) = (column(from), column(to)) {
            wishes.push(Wish { from, to, near: 1, reversed: 12 });
        }
    }
    let pull = |node: &NodeId, weight: i64| column(*node).map(|column| Pull { column, weight });
    let pulls: Vec<Pull> = scheme
        .inputs
        .iter()
        .zip(0_i64..)
        .filter_map(|(node, rank)| pull(node, if rank == 0 { 30 } else { 9 }))
        .chain(scheme.outputs.iter().filter_map(|node| pull(node, -9)))
        .collect();
    let search = Search { wishes, pulls };
    let found = search.run(all.len(), scheme.inputs.iter().filter_map(|node| column(*node)));
    let mut place = vec![0; all.len()];
    for (position, &column) in found.iter().enumerate() {
        place[column] = position;
    }
    Columns {
        order: found.iter().map(|&column| all[column]).collect(),
        of_node: of_node.iter().map(|column| column.map(|column| place[column])).collect(),
        of_part: of_part.iter().map(|column| column.map(|column| place[column])).collect(),
    }
}

struct Search {
    wishes: Vec<Wish>,
    pulls: Vec<Pull>,
}

impl Search {
    fn cost(&self, order: &[usize], place: &mut [i64]) -> i64 {
        for (&column, position) in order.iter().zip(0_i64..) {
            place[column] = position;
        }
        let wishes = self.wishes.iter().map(|wish| {
            let distance = place[wish.to] - place[wish.from];
            let long = distance.abs();
            long * wish.near + if distance < 0 { wish.reversed } else { 0 }
        });
        let pulls = self.pulls.iter().map(|pull| {
            let position = place[pull.column];
            if pull.weight > 0 {
                position * pull.weight
            } else {
                (order.len() as i64 - 1 - position) * -pull.weight
            }
        });
        wishes.sum::<i64>() + pulls.sum::<i64>()
    }

    fn run(&self, columns: usize, inputs: impl Iterator<Item = usize>) -> Vec<usize> {
        let starts = [self.breadth_first(columns, inputs), (0..columns).collect()];
        let mut place = vec![0; columns];
        let mut best: Option<(i64, Vec<usize>)> = None;
        for start in starts {
            let order = self.improved(start, &mut place);
            let cost = self.cost(&order, &mut place);
            if best.as_ref().is_none_or(|(least, _)| cost < *least) {
                best = Some((cost, order));
            }
        }
        best.map(|(_, order)| order).unwrap_or_default()
    }

    fn breadth_first(&self, columns: usize, inputs: impl Iterator<Item = usize>) -> Vec<usize> {
        let mut neighbours = vec![Vec::new(); columns];
        for wish in self.wishes.iter().filter(|wish| wish.near > 1) {
            neighbours[wish.from].push(wish.to);
            neighbours[wish.to].push(wish.from);
        }
        let mut seen = vec![false; columns];
        let mut order = Vec::with_capacity(columns);
        for start in inputs.chain(0..columns) {
            if std::mem::replace(&mut seen[start], true) {
                continue;
            }
            let mut next = order.len();
            order.push(start);
            while let Some(&column) = order.get(next) {
                next += 1;
                for &other in &neighbours[column] {
                    if !std::mem::replace(&mut seen[other], true) {
                        order.push(other);
                    }
                }
            }
        }
        order
    }

    /// Moves runs of one to three columns while that helps.
    fn improved(&self, mut order: Vec<usize>, place: &mut [i64]) -> Vec<usize> {
        let count = order.len();
        let mut budget = WORK / (self.wishes.len() + self.pulls.len() + count).max(1);
        let mut least = self.cost(&order, place);
        loop {
            let before = least;
            for length in 1..=3.min(count) {
                for from in 0..=count - length {
                    for to in 0..=count - length {
                        if budget == 0 {
                            return order;
                        }
                        budget -= 1;
                        if from == to {
                            continue;
                        }
                        moved(&mut order, from, to, length);
                        let cost = self.cost(&order, place);
                        if cost < least {
                            least = cost;
                        } else {
                            moved(&mut order, to, from, length);
                        }
                    }
                }
            }
            if least == before {
                return order;
            }
        }
    }
}

/// Moves a run so that it begins at `to`.
fn moved(order: &mut [usize], from: usize, to: usize, length: usize) {
    if from < to {
        order[from..to + length].rotate_left(length);
    } else {
        order[to..from + length].rotate_right(length);
    }
}
