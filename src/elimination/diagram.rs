//! The decision diagram: all terms of several determinants, shared.
//!
//! Levels are choices in the order of their elimination; a node is a state of both frontiers, and
//! an edge an alternative with its weight and sign. It is built top-down, a level at a time (frontier
//! method: Sekine, Imai & Tani 1995; Knuth, TAOCP 4A, 7.1.4), then reduced bottom-up: dead states
//! go, a node whose only edge is the unit alternative is bypassed, the first edge of a node is made
//! positive (the sign moves to the edges above), and equal nodes are one (Bryant 1986; Minato
//! 1993). One choice holds the question: its alternatives become roots of their own.

use rustc_hash::FxHashMap;

use super::choice::{Choice, Pair};
use super::frontier::{self, LONGEST, Labels, Level, States};

/// A node with a sign; [`Link::DEAD`] is the determinant 0.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub(crate) struct Link(u32);

impl Link {
    pub(crate) const DEAD: Self = Self(u32::MAX);
    /// The determinant 1.
    pub(crate) const ONE: Self = Self(0);

    pub(crate) fn to(node: usize) -> Self {
        Self((node as u32) << 1)
    }

    pub(crate) fn is_dead(self) -> bool {
        self == Self::DEAD
    }

    pub(crate) fn node(self) -> usize {
        (self.0 >> 1) as usize
    }

    pub(crate) fn is_negative(self) -> bool {
        self.0 & 1 == 1
    }

    /// With its sign changed when `negative`; a dead link stays dead.
    pub(crate) fn signed(self, negative: bool) -> Self {
        if self.is_dead() { self } else { Self(self.0 ^ u32::from(negative)) }
    }
}

/// An alternative of a node: weight × what the link leads to.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub(crate) struct Edge {
    /// Index of the weight: alternatives are numbered through all choices.
    pub(crate) weight: u32,
    pub(crate) link: Link,
}

/// Sums of weight × child, children before parents; node 0 is the determinant 1.
#[derive(Clone, Debug)]
pub(crate) struct Diagram {
    /// For each node where its edges begin; one more at the end.
    starts: Vec<u32>,
    edges: Vec<Edge>,
    /// For each node the choice it stands for; node 0 has none.
    choice_of: Vec<u32>,
    /// One root for each alternative of the question.
    pub(crate) roots: Vec<Link>,
}

/// Why no diagram was built.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(crate) enum TooLarge {
    /// The frontier has more places than labels can number.
    Frontier(usize),
    /// More states than allowed were met.
    States(usize),
}

/// The choices, in the order of their elimination, and which one holds the question.
pub(crate) struct Plan<'c> {
    pub(crate) choices: &'c [Choice],
    /// Nodes including the reference, which is 0.
    pub(crate) nodes: usize,
    pub(crate) order: &'c [u32],
    pub(crate) question: usize,
    /// For each choice the number of its first weight.
    pub(crate) first_weight: &'c [u32],
    /// States allowed altogether.
    pub(crate) max_states: usize,
}

/// A level before the reduction: for each state and alternative the next state, or dead.
struct RawLevel {
    choice: u32,
    alternatives: usize,
    links: Vec<Link>,
}

/// Builds and reduces the diagram.
pub(crate) fn build(plan: &Plan<'_>) -> Result<Diagram, TooLarge> {
    let raw = explore(plan)?;
    let mut reducer = Reducer::new();
    let question = plan.question as u32;
    let roots = plan.choices[plan.question].alternatives.len();
    // Reduced links of the level below: one list, or one for each root above the question.
    let mut below: Vec<Vec<Link>> = vec![vec![Link::ONE]];
    for level in raw.iter().rev() {
        if level.choice == question {
            below = (0..roots)
                .map(|root| {
                    // The weights of the question are 1 and −1.
                    let weight = &plan.choices[plan.question].alternatives[root].weight;
                    let link = |links: &[Link]| {
                        follow(links[root], &below[0]).signed(weight.is_negative())
                    };
                    level.links.chunks(roots).map(link).collect()
                })
                .collect();
            continue;
        }
        let first_weight = plan.first_weight[level.choice as usize];
        let unit = unit_alternative(&plan.choices[level.choice as usize]);
        below = below
            .iter()
            .map(|next| {
                level
                    .links
                    .chunks(level.alternatives)
                    .map(|links| reducer.node(level.choice, first_weight, unit, links, next))
                    .collect()
            })
            .collect();
    }
    Ok(reducer.finish(below.into_iter().map(|list| list[0]).collect()))
}

/// The alternative whose weight is left out of the diagram where it stands alone.
pub(crate) fn unit_alternative(choice: &Choice) -> Option<usize> {
    choice.alternatives.iter().position(|alternative| alternative.weight.is_one())
}

fn follow(link: Link, next: &[Link]) -> Link {
    if link.is_dead() { link } else { next[link.node()].signed(link.is_negative()) }
}

/// A graph's levels, and the states reached at the current one.
struct Side {
    levels: Vec<Level>,
    states: States,
}

impl Side {
    fn new(plan: &Plan<'_>, merges: impl Fn(usize) -> Vec<Vec<Pair>>) -> Self {
        let merges: Vec<Vec<Vec<Pair>>> =
            plan.order.iter().map(|&choice| merges(choice as usize)).collect();
        let borrowed: Vec<Vec<&[Pair]>> =
            merges.iter().map(|all| all.iter().map(Vec::as_slice).collect()).collect();
        let mut states = States::default();
        states.intern(Labels::new());
        Self { levels: frontier::levels(&borrowed, plan.nodes), states }
    }

    /// For every state and alternative the next state and the sign; replaces the states.
    fn advance(&mut self, level: usize, alternatives: usize) -> Vec<Option<(u32, bool)>> {
        let states = std::mem::take(&mut self.states);
        let mut table = Vec::with_capacity(states.all().len() * alternatives);
        for labels in states.all() {
            for alternative in 0..alternatives {
                let next = frontier::step(labels, &self.levels[level], alternative);
                table.push(next.map(|(labels, sign)| (self.states.intern(labels), sign)));
            }
        }
        table
    }
}

fn explore(plan: &Plan<'_>) -> Result<Vec<RawLevel>, TooLarge> {
    let merges_of = |choice: usize, pick: fn(&super::choice::Alternative) -> &Vec<Pair>| {
        plan.choices[choice].alternatives.iter().map(|a| pick(a).clone()).collect()
    };
    let mut current = Side::new(plan, |choice| merges_of(choice, |a| &a.current));
    let mut voltage = Side::new(plan, |choice| merges_of(choice, |a| &a.voltage));
    let longest =
        current.levels.iter().chain(&voltage.levels).map(Level::length).max().unwrap_or(0);
    if longest > LONGEST {
        return Err(TooLarge::Frontier(longest));
    }
    let mut raw = Vec::with_capacity(plan.order.len());
    let mut pairs: Vec<(u32, u32)> = vec![(0, 0)];
    let mut total = 0_usize;
    for (level, &choice) in plan.order.iter().enumerate() {
        let alternatives = plan.choices[choice as usize].alternatives.len();
        let current_steps = current.advance(level, alternatives);
        let voltage_steps = voltage.advance(level, alternatives);
        let mut next: FxHashMap<(u32, u32), u32> = FxHashMap::default();
        let mut next_pairs: Vec<(u32, u32)> = Vec::new();
        let mut links = Vec::with_capacity(pairs.len() * alternatives);
        for &(i, v) in &pairs {
            for alternative in 0..alternatives {
                let step = (
                    current_steps[i as usize * alternatives + alternative],
                    voltage_steps[v as usize * alternatives + alternative],
                );
                let (Some((ni, si)), Some((nv, sv))) = step else {
                    links.push(Link::DEAD);
                    continue;
                };
                let id = *next.entry((ni, nv)).or_insert_with(|| {
                    next_pairs.push((ni, nv));
                    next_pairs.len() as u32 - 1
                });
                links.push(Link::to(id as usize).signed(si ^ sv));
            }
        }
        total += next_pairs.len();
        if total > plan.max_states {
            return Err(TooLarge::States(total));
        }
        raw.push(RawLevel { choice, alternatives, links });
        pairs = next_pairs;
    }
    Ok(raw)
}

/// Makes reduced nodes, each only once.
pub(crate) struct Reducer {
    starts: Vec<u32>,
    edges: Vec<Edge>,
    choice_of: Vec<u32>,
    unique: FxHashMap<Vec<Edge>, u32>,
}

impl Reducer {
    pub(crate) fn new() -> Self {
        let Diagram { starts, edges, choice_of, .. } = Diagram::one();
        Self { starts, edges, choice_of, unique: FxHashMap::default() }
    }

    fn node(
        &mut self,
        choice: u32,
        first_weight: u32,
        unit: Option<usize>,
        links: &[Link],
        next: &[Link],
    ) -> Link {
        let edges: Vec<Edge> = links
            .iter()
            .enumerate()
            .map(|(alternative, &link)| Edge {
                weight: first_weight + alternative as u32,
                link: follow(link, next),
            })
            .filter(|edge| !edge.link.is_dead())
            .collect();
        let is_unit = |weight| unit.is_some_and(|unit| weight == first_weight + unit as u32);
        self.reduced(choice, edges, is_unit)
    }

    /// The node with these edges, none of them dead; one alone of weight 1 is bypassed.
    pub(crate) fn reduced(
        &mut self,
        choice: u32,
        mut edges: Vec<Edge>,
        is_unit: impl Fn(u32) -> bool,
    ) -> Link {
        let Some(&first) = edges.first() else {
            return Link::DEAD;
        };
        if edges.len() == 1 && is_unit(first.weight) {
            return first.link;
        }
        let negative = first.link.is_negative();
        for edge in &mut edges {
            edge.link = edge.link.signed(negative);
        }
        let id = match self.unique.get(&edges) {
            Some(&id) => id,
            None => {
                let id = self.choice_of.len() as u32;
                self.edges.extend_from_slice(&edges);
                self.starts.push(self.edges.len() as u32);
                self.choice_of.push(choice);
                self.unique.insert(edges, id);
                id
            }
        };
        Link::to(id as usize).signed(negative)
    }

    /// The diagram of everything that these roots lead to.
    pub(crate) fn finish(self, roots: Vec<Link>) -> Diagram {
        let whole =
            Diagram { starts: self.starts, edges: self.edges, choice_of: self.choice_of, roots };
        whole.reachable()
    }
}

impl Diagram {
    /// The determinant 1 alone.
    pub(crate) fn one() -> Self {
        Self { starts: vec![0, 0], edges: Vec::new(), choice_of: vec![u32::MAX], roots: Vec::new() }
    }

    /// Roots that are all 0.
    pub(crate) fn dead(roots: usize) -> Self {
        Self { roots: vec![Link::DEAD; roots], ..Self::one() }
    }

    /// How many nodes there are, the determinant 1 among them.
    pub(crate) fn len(&self) -> usize {
        self.choice_of.len()
    }

    pub(crate) fn edges(&self, node: usize) -> &[Edge] {
        &self.edges[self.starts[node] as usize..self.starts[node + 1] as usize]
    }

    /// The choice that a node stands for.
    pub(crate) fn choice(&self, node: usize) -> u32 {
        self.choice_of[node]
    }

    /// For each node by how many edges and roots it is reached.
    pub(crate) fn uses(&self) -> Vec<u32> {
        let mut uses = vec![0; self.len()];
        for link in self.edges.iter().map(|edge| edge.link).chain(self.roots.iter().copied()) {
            if !link.is_dead() {
                uses[link.node()] += 1;
            }
        }
        uses
    }

    /// Without the nodes that no root leads to (left over where a level's state died above).
    fn reachable(self) -> Self {
        let mut alive = vec![false; self.len()];
        alive[0] = true;
        for link in &self.roots {
            if !link.is_dead() {
                alive[link.node()] = true;
            }
        }
        for node in (1..self.len()).rev() {
            if alive[node] {
                for edge in self.edges(node) {
                    alive[edge.link.node()] = true;
                }
            }
        }
        let mut renumbered = vec![0_usize; self.len()];
        let mut kept =
            Self { starts: vec![0], edges: Vec::new(), choice_of: Vec::new(), roots: Vec::new() };
        let moved = |renumbered: &[usize], link: Link| {
            if link.is_dead() {
                link
            } else {
                Link::to(renumbered[link.node()]).signed(link.is_negative())
            }
        };
        for node in 0..self.len() {
            if !alive[node] {
                continue;
            }
            renumbered[node] = kept.choice_of.len();
            kept.edges.extend(
                self.edges(node)
                    .iter()
                    .map(|edge| Edge { weight: edge.weight, link: moved(&renumbered, edge.link) }),
            );
            kept.starts.push(kept.edges.len() as u32);
            kept.choice_of.push(self.choice_of[node]);
        }
        kept.roots = self.roots.iter().map(|&link| moved(&renumbered, link)).collect();
        kept
    }
}
