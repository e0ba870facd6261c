//! The terms of each coefficient, the largest at given symbol values first.
//!
//! A term is a path through the diagram, its size the product of the sizes of its weights' terms. The k
//! largest paths of a state (a node and the power of `s` still to be had) are made of the k largest
//! of its children, and a rank of a child is worked out only when a path that uses it has come to the
//! top (lazy k best: Jiménez & Marzal 1999; Huang & Chiang 2005). Terms with the same symbols are not
//! added up here: with shared symbols a term can come in several parts.

use std::cmp::Ordering;
use std::collections::BinaryHeap;

use num_bigint::BigInt;
use num_traits::{One, Signed};
use rustc_hash::FxHashMap;

use crate::algebra::{Polynomial, Var};
use crate::elimination::diagram::{Diagram, Link};
use crate::elimination::value::symbol_of;

use super::numbers::scaled_integer;

/// Numerator or denominator.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Side {
    /// Above the bar.
    Numerator,
    /// Below it.
    Denominator,
}

/// A term and the logarithm of its size.
#[derive(Clone, Debug, PartialEq)]
pub struct SizedTerm {
    /// The integer factor.
    pub coefficient: BigInt,
    /// The symbols and `s` with their powers, ascending.
    pub powers: Vec<(Var, u32)>,
    /// log2 of the size at the symbol values.
    pub log2: f64,
}

/// Hands out terms on demand.
#[derive(Debug)]
pub struct LargestTerms<'d> {
    diagram: &'d Diagram,
    roots: [Link; 2],
    /// For each weight its terms.
    weights: Vec<Vec<Factor>>,
    /// For each node the lowest and the highest power of `s` of its paths.
    bounds: Vec<(u32, u32)>,
    states: Vec<State>,
    known: FxHashMap<(u32, u32), u32>,
}

/// A term of a weight.
#[derive(Clone, Debug)]
struct Factor {
    log2: f64,
    s_power: u32,
    powers: Vec<(Var, u32)>,
    coefficient: BigInt,
}

/// The paths from a node that have a certain power of `s`.
#[derive(Clone, Debug, Default)]
struct State {
    /// Found so far, largest first.
    found: Vec<Step>,
    /// What may come next.
    heap: BinaryHeap<Step>,
    /// Whether the successor of the last that was found still has to be put on the heap.
    pending: bool,
}

/// The first step of a path: an edge, a term of its weight, and which path of the child follows.
#[derive(Clone, Copy, Debug)]
struct Step {
    log2: f64,
    edge: u32,
    factor: u32,
    child: u32,
    rank: u32,
}

impl Step {
    /// A total order that no run can change: by size, then by place.
    fn key(&self) -> (u32, u32, u32) {
        (self.edge, self.factor, self.rank)
    }
}

impl PartialEq for Step {
    fn eq(&self, other: &Self) -> bool {
        self.cmp(other) == Ordering::Equal
    }
}

impl Eq for Step {}

impl PartialOrd for Step {
    fn partial_cmp(&self, other: &Self) -> Option<Ordering> {
        Some(self.cmp(other))
    }
}

impl Ord for Step {
    fn cmp(&self, other: &Self) -> Ordering {
        self.log2.total_cmp(&other.log2).then_with(|| other.key().cmp(&self.key()))
    }
}

impl<'d> LargestTerms<'d> {
    /// Terms of these roots at these symbol values (by index).
    pub(crate) fn new(
        diagram: &'d Diagram,
        weights: &[Polynomial],
        roots: [Link; 2],
        symbols: &[f64],
    ) -> Self {
        let weights: Vec<Vec<Factor>> =
            weights.iter().map(|weight| factors(weight, symbols)).collect();
        let mut bounds: Vec<(u32, u32)> = vec![(0, 0)];
        for node in 1..diagram.len() {
            let (mut low, mut high) = (u32::MAX, 0);
            for edge in diagram.edges(node) {
                let below = bounds[edge.link.node()];
                for factor in &weights[edge.weight as usize] {
                    low = low.min(below.0.saturating_add(factor.s_power));
                    high = high.max(below.1 + factor.s_power);
                }
            }
            bounds.push((low, high));
        }
        Self { diagram, roots, weights, bounds, states: Vec::new(), known: FxHashMap::default() }
    }

    /// The powers of `s` of one side, lowest and highest; none for the function 0.
    pub fn powers(&self, side: Side) -> Option<(u32, u32)> {
        let root = self.root(side);
        (!root.is_dead()).then(|| self.bounds[root.node()])
    }

    /// The term of that rank, from 0, of the coefficient of a power of `s`; none where there are no more.
    ///
    /// # Cost
    /// A term costs a walk down the diagram and a few operations on heaps.
    pub fn term(&mut self, side: Side, power: u32, rank: usize) -> Option<SizedTerm> {
        let root = self.root(side);
        if root.is_dead() {
            return None;
        }
        let state = self.state(root.node() as u32, power)?;
        while self.states[state as usize].found.len() <= rank {
            if !self.advance(state) {
                return None;
            }
        }
        Some(self.walk(root, power, rank))
    }

    fn root(&self, side: Side) -> Link {
        self.roots[usize::from(side == Side::Denominator)]
    }

    /// The state of a node and a power with all states below it, each with its first path on the heap.
    fn state(&mut self, node: u32, power: u32) -> Option<u32> {
        if let Some(&known) = self.known.get(&(node, power)) {
            return Some(known);
        }
        let mut needed: Vec<Vec<u32>> = vec![Vec::new(); node as usize + 1];
        needed[node as usize].push(power);
        for at in (1..=node as usize).rev() {
            for wanted in std::mem::take(&mut needed[at]) {
                if self.known.contains_key(&(at as u32, wanted)) {
                    continue;
                }
                let id = self.states.len() as u32;
                self.states.push(State::default());
                self.known.insert((at as u32, wanted), id);
                for edge in self.diagram.edges(at) {
                    let child = edge.link.node();
                    for factor in &self.weights[edge.weight as usize] {
                        if let Some(left) = wanted.checked_sub(factor.s_power)
                            && (self.bounds[child].0..=self.bounds[child].1).contains(&left)
                            && !needed[child].contains(&left)
                        {
                            needed[child].push(left);
                        }
                    }
                }
            }
        }
        self.fill();
        self.known.get(&(node, power)).copied()
    }

    /// Gives every state that has nothing yet its first candidates, children first.
    fn fill(&mut self) {
        let mut fresh: Vec<((u32, u32), u32)> = self
            .known
            .iter()
            .filter(|&(_, &id)| {
                let state = &self.states[id as usize];
                state.found.is_empty() && state.heap.is_empty()
            })
            .map(|(&key, &id)| (key, id))
            .collect();
        fresh.sort_unstable();
        for ((node, wanted), id) in fresh {
            if node == 0 {
                continue;
            }
            let mut heap = Vec::new();
            for (edge, at) in self.diagram.edges(node as usize).iter().zip(0_u32..) {
                for (factor, which) in self.weights[edge.weight as usize].iter().zip(0_u32..) {
                    let Some(left) = wanted.checked_sub(factor.s_power) else { continue };
                    let child = edge.link.node() as u32;
                    let first = if child == 0 {
                        (left == 0).then_some(0)
                    } else {
                        self.known.get(&(child, left)).copied()
                    };
                    let Some(first) = first else { continue };
                    let Some(below) = self.size(child, first, 0) else { continue };
                    let log2 = factor.log2 + below;
                    let child = if child == 0 { u32::MAX } else { first };
                    heap.push(Step { log2, edge: at, factor: which, child, rank: 0 });
                }
            }
            self.states[id as usize].heap = BinaryHeap::from(heap);
            self.pop(id);
        }
    }

    fn size(&self, node: u32, state: u32, rank: usize) -> Option<f64> {
        if node == 0 {
            return Some(0.0);
        }
        self.states[state as usize].found.get(rank).map(|step| step.log2)
    }

    /// Takes the next path from the heap; false where there is none.
    fn pop(&mut self, id: u32) -> bool {
        let state = &mut self.states[id as usize];
        match state.heap.pop() {
            Some(step) => {
                state.found.push(step);
                state.pending = step.child != u32::MAX;
                true
            }
            None => false,
        }
    }

    /// Finds one more path of a state. What has to be found below is a chain: each path needs at
    /// most one new rank of one child.
    fn advance(&mut self, id: u32) -> bool {
        let mut chain = vec![id];
        while let Some(&top) = chain.last() {
            let state = &self.states[top as usize];
            let Some(last) = state.found.last().filter(|_| state.pending) else { break };
            if self.states[last.child as usize].found.len() > last.rank as usize + 1 {
                break;
            }
            chain.push(last.child);
        }
        let mut grown = false;
        for id in chain.into_iter().rev() {
            self.succeed(id);
            grown = self.pop(id);
        }
        grown
    }

    /// Puts the successor of the last path on the heap, if there is one.
    fn succeed(&mut self, id: u32) {
        let state = &self.states[id as usize];
        let Some(&last) = state.found.last().filter(|_| state.pending) else { return };
        let child = &self.states[last.child as usize];
        let next = child.found.get(last.rank as usize + 1).map(|next| {
            let below = child.found[last.rank as usize].log2;
            Step { log2: last.log2 - below + next.log2, rank: last.rank + 1, ..last }
        });
        let state = &mut self.states[id as usize];
        state.pending = false;
        state.heap.extend(next);
    }

    /// The term that a path stands for.
    fn walk(&self, root: Link, power: u32, rank: usize) -> SizedTerm {
        let (mut node, mut left, mut rank) = (root.node(), power, rank);
        let mut negative = root.is_negative();
        let mut coefficient = BigInt::one();
        let mut powers: Vec<(Var, u32)> = Vec::new();
        let mut log2 = 0.0;
        while node != 0 {
            let state = self.known[&(node as u32, left)];
            let step = self.states[state as usize].found[rank];
            let edge = self.diagram.edges(node)[step.edge as usize];
            let factor = &self.weights[edge.weight as usize][step.factor as usize];
            coefficient *= &factor.coefficient;
            powers.extend_from_slice(&factor.powers);
            log2 += factor.log2;
            negative ^= edge.link.is_negative();
            (node, left, rank) = (edge.link.node(), left - factor.s_power, step.rank as usize);
        }
        if negative {
            coefficient = -coefficient;
        }
        powers.sort_unstable();
        powers.dedup_by(|from, into| {
            let same = from.0 == into.0;
            if same {
                into.1 += from.1;
            }
            same
        });
        SizedTerm { coefficient, powers, log2 }
    }
}

fn factors(weight: &Polynomial, symbols: &[f64]) -> Vec<Factor> {
    weight
        .terms()
        .map(|(powers, coefficient)| {
            let powers: Vec<(Var, u32)> = powers.collect();
            let mut log2 = scaled_integer(&coefficient.abs()).log2();
            let mut s_power = 0;
            for &(variable, power) in &powers {
                match symbol_of(variable) {
                    Some(symbol) => {
                        log2 += f64::from(power) * symbols[symbol.0 as usize].abs().log2();
                    }
                    None => s_power = power,
                }
            }
            Factor { log2, s_power, powers, coefficient }
        })
        .collect()
}

#[cfg(test)]
mod tests {
    use pretty_assertions::assert_eq;

    use super::Side;
    use crate::algebra::{Polynomial, Var};
    use crate::circuit::{NodeId, Quantity};
    use crate::elimination::testing::Bench;
    use crate::elimination::{Elimination, Limits};

    /// A ladder with a dependent source, so that terms have both signs.
    fn network() -> (Elimination, Vec<f64>) {
        let mut bench = Bench::new();
        let source = bench.voltage("V1", "in", "0");
        let nodes = ["in", "a", "b", "c", "d"];
        for (index, pair) in nodes.windows(2).enumerate() {
            bench.part(&format!("R{index}"), pair[0], pair[1]);
            bench.part(&format!("C{index}"), pair[1], "0");
        }
        let (a, b): (NodeId, NodeId) = (bench.node("a"), bench.node("c"));
        bench.controlled("g1", "d", "b", Quantity::Voltage(a, b));
        let transfer = bench.gain("d", source);
        let elimination = Elimination::new(&bench.circuit, &transfer, &Limits::default());
        let values = (0..bench.circuit.symbols.len()).map(|k| 1.0 + 0.7 * k as f64).collect();
        (elimination.expect("a solution"), values)
    }

    #[test]
    fn terms_come_by_size_and_all_of_them() {
        let (elimination, values) = network();
        let (numerator, denominator) = elimination.expand();
        let mut largest = elimination.largest_terms(&values);
        for (side, expanded) in [(Side::Numerator, numerator), (Side::Denominator, denominator)] {
            let (low, high) = largest.powers(side).expect("a function");
            let mut all = Vec::new();
            for power in low..=high {
                let mut last = f64::INFINITY;
                let mut rank = 0;
                while let Some(term) = largest.term(side, power, rank) {
                    assert!(term.log2 <= last + 1e-12, "{side:?} s^{power} rank {rank}");
                    last = term.log2;
                    let s_power = term.powers.iter().find(|p| p.0 == Var::S).map_or(0, |p| p.1);
                    assert_eq!(s_power, power);
                    all.push((term.powers, term.coefficient));
                    rank += 1;
                }
            }
            assert_eq!(all.len(), expanded.len());
            assert_eq!(Polynomial::from_terms(all), expanded);
        }
    }

    #[test]
    fn limits_of_symbols_are_those_of_the_diagram() {
        use crate::circuit::LimitTo;
        use crate::elimination::variable_of;
        use num_complex::Complex;

        let (elimination, values) = network();
        let s = Complex::new(0.0, 0.3);
        let (value, extremes) = elimination.at_values(&values).extremes(s);
        assert!((value - elimination.value_at(s, &values)).norm() < 1e-12);
        assert!(!extremes.is_empty());
        for one in extremes {
            for (to, told) in [(LimitTo::Zero, one.at_zero), (LimitTo::Infinity, one.at_infinity)] {
                let limit = elimination.at_limit(variable_of(one.symbol), to).expect("finite");
                let exact = limit.value_at(s, &values);
                let told = told.expect("a value");
                assert!((told - exact).norm() < 1e-9 * exact.norm().max(1e-3), "{one:?} {to:?}");
            }
        }
    }
}
