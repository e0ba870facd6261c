//! The order in which choices are made: it decides everything about the size of the diagram.
//!
//! A node is on the frontier of a graph from the first choice that touches it to the last. The
//! number of states of a level grows like the exponential of the frontier's length, so an order is
//! judged by Σ exp(0.6·(f_I + f_V)) over its levels. The frontier is a line, not a tree: this
//! minimises path-width, and orders made for sparse elimination (minimum degree, minimum fill) are
//! the worst choice here. Candidates are the natural order, a breadth-first one from a peripheral
//! node (Cuthill & McKee 1969), a greedy one from each start, and randomised greedy ones; the
//! cheapest is taken. Work is bounded by counting, never by the clock: the same network always
//! gets the same order.

/// The nodes that a choice touches in each graph; the reference node is left out.
#[derive(Clone, Debug, Default)]
pub(crate) struct Touch {
    /// Nodes of the current graph.
    pub(crate) current: Vec<u32>,
    /// Nodes of the voltage graph.
    pub(crate) voltage: Vec<u32>,
}

/// An order and what it is predicted to cost.
#[derive(Clone, Debug)]
pub(crate) struct Order {
    /// Choices in the order of their elimination.
    pub(crate) choices: Vec<u32>,
    /// Σ exp(0.6·(f_I + f_V)): grows with the number of states.
    pub(crate) cost: f64,
}

/// Steps of greedy search (choices emitted) that are allowed altogether.
const SEARCH_STEPS: usize = 150_000;
/// Randomised greedy runs at most.
const RANDOM_RUNS: usize = 300;
/// A mean level cost (about six frontier places) below which searching on costs more than it saves.
const CHEAP_LEVEL: f64 = 40.0;

/// The cheapest order found for choices that touch `touches` among `nodes` nodes.
///
/// Deterministic. Time is bounded by a fixed number of greedy steps for networks of up to some
/// thousand choices, and grows linearly beyond.
pub(crate) fn search(touches: &[Touch], nodes: usize) -> Order {
    let search = Search::new(touches, nodes);
    let mut best = search.judged((0..touches.len() as u32).collect());
    let mut keep = |order: Vec<u32>| {
        let candidate = search.judged(order);
        if candidate.cost < best.cost {
            best = candidate;
        }
        best.cost <= CHEAP_LEVEL * touches.len() as f64
    };
    let peripheral = search.peripheral(0);
    let mut cheap = keep(search.breadth_first(peripheral));
    cheap = keep(search.greedy(peripheral, &mut Ties::Oldest)) || cheap;
    let runs = (SEARCH_STEPS / touches.len().max(1)).max(2);
    if cheap && touches.len() > 400 {
        return best;
    }
    let starts = nodes.min(runs / 2 + 1);
    for start in 0..starts {
        keep(search.greedy(start * nodes / starts, &mut Ties::Oldest));
    }
    let mut random = Ties::Random(0x9e37_79b9_7f4a_7c15);
    for _ in 0..RANDOM_RUNS.min(runs.saturating_sub(starts)) {
        let start = random.below(nodes.max(1));
        keep(search.greedy(start, &mut random));
    }
    best
}

/// How equal candidates are told apart.
enum Ties {
    Oldest,
    /// State of a 64-bit xorshift generator (Marsaglia 2003).
    Random(u64),
}

impl Ties {
    fn below(&mut self, bound: usize) -> usize {
        match self {
            Self::Oldest => 0,
            Self::Random(state) => {
                *state ^= *state << 13;
                *state ^= *state >> 7;
                *state ^= *state << 17;
                (*state >> 33) as usize % bound
            }
        }
    }
}

struct Search<'t> {
    touches: &'t [Touch],
    nodes: usize,
    /// For each choice the nodes it touches in either graph, without repetition.
    both: Vec<Vec<u32>>,
    /// For each node the choices that touch it.
    choices_of: Vec<Vec<u32>>,
}

impl<'t> Search<'t> {
    fn new(touches: &'t [Touch], nodes: usize) -> Self {
        let mut both = Vec::with_capacity(touches.len());
        let mut choices_of = vec![Vec::new(); nodes];
        for (choice, touch) in touches.iter().enumerate() {
            let mut all: Vec<u32> = touch.current.iter().chain(&touch.voltage).copied().collect();
            all.sort_unstable();
            all.dedup();
            for &node in &all {
                choices_of[node as usize].push(choice as u32);
            }
            both.push(all);
        }
        Self { touches, nodes, both, choices_of }
    }

    fn judged(&self, choices: Vec<u32>) -> Order {
        let mut last = vec![[0_u32; 2]; self.nodes];
        for (level, &choice) in choices.iter().enumerate() {
            let touch = &self.touches[choice as usize];
            for (graph, touched) in [&touch.current, &touch.voltage].into_iter().enumerate() {
                for &node in touched {
                    last[node as usize][graph] = level as u32 + 1;
                }
            }
        }
        let mut seen = vec![[false; 2]; self.nodes];
        let mut length = 0_i32;
        let mut cost = 0.0;
        for (level, &choice) in choices.iter().enumerate() {
            let touch = &self.touches[choice as usize];
            for (graph, touched) in [&touch.current, &touch.voltage].into_iter().enumerate() {
                for &node in touched {
                    if !std::mem::replace(&mut seen[node as usize][graph], true) {
                        length += 1;
                    }
                }
            }
            cost += libm::exp(0.6 * f64::from(length));
            for (graph, touched) in [&touch.current, &touch.voltage].into_iter().enumerate() {
                for &node in touched {
                    let end = &mut last[node as usize][graph];
                    if *end == level as u32 + 1 {
                        length -= 1;
                        *end = 0;
                    }
                }
            }
        }
        Order { choices, cost }
    }

    /// The node farthest from `start` in its part, after two sweeps (George & Liu 1979).
    fn peripheral(&self, start: usize) -> usize {
        let mut node = start;
        for _ in 0..2 {
            node = self.sweep(node).last().map_or(node, |&last| last as usize);
        }
        node
    }

    /// Nodes reached from `start`, nearest first, nodes of few choices first within a step.
    fn sweep(&self, start: usize) -> Vec<u32> {
        let mut reached = Vec::with_capacity(self.nodes);
        if start >= self.nodes {
            return reached;
        }
        let mut seen = vec![false; self.nodes];
        seen[start] = true;
        reached.push(start as u32);
        let mut next = 0;
        while let Some(&node) = reached.get(next) {
            next += 1;
            let mut fresh: Vec<u32> = Vec::new();
            for &choice in &self.choices_of[node as usize] {
                for &other in &self.both[choice as usize] {
                    if !std::mem::replace(&mut seen[other as usize], true) {
                        fresh.push(other);
                    }
                }
            }
            fresh.sort_by_key(|&other| (self.choices_of[other as usize].len(), other));
            reached.extend(fresh);
        }
        reached
    }

    /// Choices in the order in which a breadth-first sweep closes their nodes.
    fn breadth_first(&self, start: usize) -> Vec<u32> {
        let mut order = Vec::with_capacity(self.touches.len());
        let mut emitted = vec![false; self.touches.len()];
        let mut visited = vec![false; self.nodes];
        let mut begin = start;
        loop {
            for node in self.sweep(begin) {
                visited[node as usize] = true;
                self.close(node, &mut emitted, &mut order);
            }
            match visited.iter().position(|seen| !seen) {
                Some(rest) => begin = rest,
                None => break,
            }
        }
        self.emit_rest(&mut emitted, &mut order);
        order
    }

    fn close(&self, node: u32, emitted: &mut [bool], order: &mut Vec<u32>) {
        for &choice in &self.choices_of[node as usize] {
            if !std::mem::replace(&mut emitted[choice as usize], true) {
                order.push(choice);
            }
        }
    }

    /// Choices that touch no node at all.
    fn emit_rest(&self, emitted: &mut [bool], order: &mut Vec<u32>) {
        for (choice, done) in emitted.iter_mut().enumerate() {
            if !std::mem::replace(done, true) {
                order.push(choice as u32);
            }
        }
    }

    /// Closes, again and again, the frontier node that brings in the fewest new ones.
    fn greedy(&self, start: usize, ties: &mut Ties) -> Vec<u32> {
        let mut order = Vec::with_capacity(self.touches.len());
        let mut emitted = vec![false; self.touches.len()];
        let mut entered = vec![false; self.nodes];
        let mut closed = vec![false; self.nodes];
        // Oldest first; closed nodes are dropped as they are met.
        let mut frontier: Vec<u32> = Vec::new();
        let mut mark = vec![0_u32; self.nodes];
        let mut stamp = 0_u32;
        let mut next_start = 0;
        let mut chosen = Some(start as u32).filter(|_| start < self.nodes);
        loop {
            let node = match chosen.take() {
                Some(node) => node,
                None => {
                    let mut best: Option<(usize, usize, u32)> = None;
                    for &candidate in &frontier {
                        stamp += 1;
                        let mut fresh = 0_usize;
                        for &choice in &self.choices_of[candidate as usize] {
                            if emitted[choice as usize] {
                                continue;
                            }
                            for &other in &self.both[choice as usize] {
                                if !entered[other as usize] && mark[other as usize] != stamp {
                                    mark[other as usize] = stamp;
                                    fresh += 1;
                                }
                            }
                        }
                        let tie = match ties {
                            Ties::Oldest => 0,
                            // A little noise on the count as well: now and then the second best.
                            Ties::Random(_) => ties.below(8),
                        };
                        let score = 4 * fresh + tie;
                        if best.is_none_or(|(least, ..)| score < least) {
                            best = Some((score, fresh, candidate));
                        }
                    }
                    match best {
                        Some((_, _, node)) => node,
                        None => {
                            while next_start < self.nodes && closed[next_start] {
                                next_start += 1;
                            }
                            if next_start == self.nodes {
                                break;
                            }
                            next_start as u32
                        }
                    }
                }
            };
            closed[node as usize] = true;
            entered[node as usize] = true;
            for &choice in &self.choices_of[node as usize] {
                if std::mem::replace(&mut emitted[choice as usize], true) {
                    continue;
                }
                order.push(choice);
                for &other in &self.both[choice as usize] {
                    if !std::mem::replace(&mut entered[other as usize], true) {
                        frontier.push(other);
                    }
                }
            }
            frontier.retain(|&other| !closed[other as usize]);
        }
        self.emit_rest(&mut emitted, &mut order);
        order
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn chain(length: u32) -> Vec<Touch> {
        (0..length)
            .map(|k| {
                let touched = if k + 1 < length { vec![k, k + 1] } else { vec![k] };
                Touch { current: touched.clone(), voltage: touched }
            })
            .collect()
    }

    #[test]
    fn a_shuffled_chain_is_walked_from_end_to_end() {
        let mut touches = chain(40);
        touches.reverse();
        touches.swap(3, 30);
        touches.swap(11, 22);
        let order = search(&touches, 40);
        // Two nodes of each graph at every level but the last.
        let least = 39.0 * libm::exp(0.6 * 4.0) + libm::exp(0.6 * 2.0);
        assert!(order.cost <= least + 1e-6, "cost {} above {least}", order.cost);
    }

    #[test]
    fn every_choice_is_made_once() {
        let touches: Vec<Touch> = (0..30_u32)
            .map(|k| Touch { current: vec![k % 7, (k * 3 + 1) % 7], voltage: vec![(k * 5) % 7] })
            .chain([Touch::default()])
            .collect();
        let mut order = search(&touches, 9).choices;
        order.sort_unstable();
        assert_eq!(order, (0..31).collect::<Vec<u32>>());
    }
}
