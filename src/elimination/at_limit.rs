//! The limit of the answer as one variable goes to 0 or to infinity, taken in the diagram.
//!
//! The coefficient of X^k of a determinant is a diagram again: a node stands for the coefficient of
//! one power, and an edge of weight Σ w_j·X^j leads, for each j, from power k to power k − j of the
//! child. Numerator and denominator are the coefficients of their highest powers (infinity) or
//! lowest ones (0). Which powers these are is found modulo a prime at random values of everything
//! else, since the terms of a power may cancel (Schwartz 1980, Zippel 1979: the chance that a
//! coefficient that is not 0 is missed is below 10⁻¹⁵).

use std::collections::{BTreeMap, BTreeSet};

use super::diagram::{Diagram, Edge, Link, Reducer};
use super::passes::{self, Ring};
use super::{Elimination, symbols_of};
use crate::algebra::modular::{Field, Random, primes};
use crate::algebra::{Polynomial, Var};
use crate::circuit::LimitTo;

/// The ratio grows without bound.
#[derive(Clone, Copy, Debug, PartialEq, Eq, thiserror::Error)]
#[error("the limit is infinite")]
pub struct InfiniteLimit;

impl Elimination {
    /// The elimination of the limit.
    ///
    /// # Errors
    /// The limit is infinite.
    ///
    /// # Cost
    /// The diagram grows at most by the factor of the highest power; one pass modulo a prime, whose
    /// values are polynomials in the variable.
    pub fn at_limit(&self, variable: Var, to: LimitTo) -> Result<Self, InfiniteLimit> {
        let touched = self.weights.iter().any(|weight| weight.contains(variable));
        if self.is_zero() || !touched {
            return Ok(self.clone());
        }
        let [above, below] = self.powers(variable, to);
        // The denominator is not the function 0, so it has a power.
        let (Some(above), Some(below)) = (above, below) else { return Ok(self.vanished()) };
        let grows = match to {
            LimitTo::Infinity => above > below,
            LimitTo::Zero => above < below,
        };
        match above == below {
            true => Ok(self.coefficients_of(variable, above)),
            false if grows => Err(InfiniteLimit),
            false => Ok(self.vanished()),
        }
    }

    /// The powers that rule, of numerator and denominator; none for the function 0.
    fn powers(&self, variable: Var, to: LimitTo) -> [Option<u32>; 2] {
        let Some(field) = primes().next() else { return [None; 2] };
        let mut random = Random::new(0x5eed_0002);
        let last = self.symbols.last().map_or(0, |symbol| symbol.0 as usize);
        let values: Vec<u64> = (0..=last).map(|_| random.unit(&field)).collect();
        let weights: Vec<Vec<u64>> = self
            .weights
            .iter()
            .map(|weight| {
                let parts = weight.coefficients(variable);
                let value = |var: Var| values.get(var.0 as usize).copied().unwrap_or(0);
                parts.iter().map(|part| part.evaluate_modulo(&field, value)).collect()
            })
            .collect();
        let ring = Lines(field);
        let lines = passes::values(&ring, &self.diagram, &weights);
        [self.numerator, self.denominator].map(|root| {
            let line = passes::at(&ring, &lines, root);
            let found = match to {
                LimitTo::Infinity => line.iter().rposition(|&value| value != 0),
                LimitTo::Zero => line.iter().position(|&value| value != 0),
            };
            found.map(|power| power as u32)
        })
    }

    /// The answer 0.
    fn vanished(&self) -> Self {
        Self {
            diagram: Diagram::one(),
            weights: Vec::new(),
            first_weight: Vec::new(),
            level_of: Vec::new(),
            symbols: Vec::new(),
            numerator: Link::DEAD,
            denominator: Link::ONE,
            distinct: true,
            grounded: self.grounded.clone(),
            independent: self.independent.clone(),
        }
    }

    /// The ratio of the coefficients of one power.
    fn coefficients_of(&self, variable: Var, power: u32) -> Self {
        let split = Split::new(&self.weights, &self.first_weight, variable);
        let roots = [self.numerator, self.denominator];
        let diagram = split.diagram(&self.diagram, roots, power);
        let symbols = symbols_of(&split.weights);
        Self {
            numerator: diagram.roots[0],
            denominator: diagram.roots[1],
            diagram,
            weights: split.weights,
            first_weight: split.first_weight,
            level_of: self.level_of.clone(),
            symbols,
            // The terms of one power differed in other symbols already.
            distinct: self.distinct,
            grounded: self.grounded.clone(),
            independent: self.independent.clone(),
        }
    }
}

/// Polynomials in one variable over a prime field, lowest power first.
struct Lines(Field);

impl Ring for Lines {
    type Weight = Vec<u64>;
    type Value = Vec<u64>;

    fn zero(&self) -> Vec<u64> {
        Vec::new()
    }

    fn one(&self) -> Vec<u64> {
        vec![1]
    }

    fn add(&self, sum: &mut Vec<u64>, weight: &Vec<u64>, value: &Vec<u64>, negative: bool) {
        let field = self.0;
        let length = (weight.len() + value.len()).saturating_sub(1);
        if sum.len() < length {
            sum.resize(length, 0);
        }
        for (i, &factor) in weight.iter().enumerate().filter(|&(_, &factor)| factor != 0) {
            for (j, &coefficient) in value.iter().enumerate() {
                let product = field.mul(factor, coefficient);
                let at = &mut sum[i + j];
                *at = if negative { field.sub(*at, product) } else { field.add(*at, product) };
            }
        }
    }

    fn negate(&self, value: &Vec<u64>) -> Vec<u64> {
        value.iter().map(|&coefficient| self.0.neg(coefficient)).collect()
    }
}

/// Every weight taken apart by the powers of the variable.
struct Split {
    weights: Vec<Polynomial>,
    first_weight: Vec<u32>,
    /// For each old weight its parts: (power, index of the new weight).
    parts: Vec<Vec<(u32, u32)>>,
}

impl Split {
    fn new(weights: &[Polynomial], first_weight: &[u32], variable: Var) -> Self {
        let mut split = Self { weights: Vec::new(), first_weight: Vec::new(), parts: Vec::new() };
        let mut choices = first_weight.iter().peekable();
        for (index, weight) in weights.iter().enumerate() {
            while choices.next_if(|&&first| first as usize == index).is_some() {
                split.first_weight.push(split.weights.len() as u32);
            }
            let mut parts = Vec::new();
            for (part, power) in weight.coefficients(variable).into_iter().zip(0_u32..) {
                if !part.is_zero() {
                    parts.push((power, split.weights.len() as u32));
                    split.weights.push(part);
                }
            }
            split.parts.push(parts);
        }
        split.first_weight.resize(first_weight.len(), split.weights.len() as u32);
        split
    }

    /// The diagram whose roots are the coefficients of `power`.
    fn diagram(&self, of: &Diagram, roots: [Link; 2], power: u32) -> Diagram {
        let needed = self.needed(of, roots, power);
        let mut reducer = Reducer::new();
        let mut links: BTreeMap<(usize, u32), Link> = BTreeMap::from([((0, 0), Link::ONE)]);
        let follow = |links: &BTreeMap<(usize, u32), Link>, link: Link, power: u32| {
            let found = links.get(&(link.node(), power)).copied().unwrap_or(Link::DEAD);
            found.signed(link.is_negative())
        };
        for (node, powers) in needed.iter().enumerate().skip(1) {
            for &wanted in powers {
                let mut edges = Vec::new();
                for edge in of.edges(node) {
                    for &(power, weight) in &self.parts[edge.weight as usize] {
                        if power <= wanted {
                            let link = follow(&links, edge.link, wanted - power);
                            edges.push(Edge { weight, link });
                        }
                    }
                }
                edges.retain(|edge| !edge.link.is_dead());
                let is_unit = |weight: u32| self.weights[weight as usize].is_one();
                let link = reducer.reduced(of.choice(node), edges, is_unit);
                links.insert((node, wanted), link);
            }
        }
        reducer.finish(
            roots
                .map(|root| if root.is_dead() { root } else { follow(&links, root, power) })
                .to_vec(),
        )
    }

    /// For each node the powers whose coefficients are needed.
    fn needed(&self, of: &Diagram, roots: [Link; 2], power: u32) -> Vec<BTreeSet<u32>> {
        let bounds = self.bounds(of);
        let mut needed: Vec<BTreeSet<u32>> = vec![BTreeSet::new(); of.len()];
        for root in roots.into_iter().filter(|root| !root.is_dead()) {
            needed[root.node()].insert(power);
        }
        for node in (1..of.len()).rev() {
            let powers = std::mem::take(&mut needed[node]);
            for edge in of.edges(node) {
                let child = edge.link.node();
                let (low, high) = bounds[child];
                for &(power, _) in &self.parts[edge.weight as usize] {
                    let left = powers.iter().filter_map(|wanted| wanted.checked_sub(power));
                    needed[child].extend(left.filter(|left| (low..=high).contains(left)));
                }
            }
            needed[node] = powers;
        }
        needed
    }

    /// For each node the lowest and the highest power that its paths have.
    fn bounds(&self, of: &Diagram) -> Vec<(u32, u32)> {
        let mut bounds: Vec<(u32, u32)> = vec![(0, 0)];
        for node in 1..of.len() {
            let (mut low, mut high) = (u32::MAX, 0);
            for edge in of.edges(node) {
                let below = bounds[edge.link.node()];
                for &(power, _) in &self.parts[edge.weight as usize] {
                    low = low.min(below.0.saturating_add(power));
                    high = high.max(below.1 + power);
                }
            }
            bounds.push((low, high));
        }
        bounds
    }
}
