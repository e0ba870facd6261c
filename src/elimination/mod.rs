//! Exact nodal elimination on a frontier: each element is a choice, the network determinant is a
//! sum over pairs of trees, and all of it is held in one decision diagram.
//!
//! `system` makes the choices, `order` sorts them, `diagram` holds all terms, `passes` read
//! what is wanted from it. [`Elimination`] is the whole, for one transfer function.
//!
//! May use: [`crate::circuit`], [`crate::algebra`]. Never rounds, but for the passes that say so.
//!
//! Sources: matrix-tree theorem (Kirchhoff 1847, Maxwell 1892), two-graph tree method (Mayeda &
//! Seshu 1965, Chen 1976), decision diagrams (Bryant 1986, Minato 1993), frontier search (Sekine,
//! Imai & Tani 1995; Knuth, TAOCP 4A, 7.1.4).

mod at_limit;
mod choice;
mod diagram;
mod error;
mod frontier;
mod independent;
mod nested;
mod order;
mod parts;
mod passes;
mod system;
#[cfg(test)]
mod testing;
#[cfg(test)]
mod tests;
mod value;

use num_bigint::{BigInt, BigUint};
use num_complex::Complex;
use num_rational::BigRational;

use crate::algebra::modular::{Field, Random, primes};
use crate::algebra::{Polynomial, Var};
use crate::circuit::{Circuit, Drive, ElementId, NodeId, Transfer};
use diagram::{Diagram, Link};
use passes::expand::{self, TermSet};
use passes::{coefficients, count, gradient, numbers};
use system::System;

pub use at_limit::InfiniteLimit;
pub use error::EliminationError;
pub use nested::{Nested, NestedFactor, NestedSum};
pub use passes::gradient::Gradient;
pub(crate) use passes::numbers::{Scaled, scaled_integer};
pub use value::{DividesByZero, fraction_of, symbol_of, variable_of};

/// What the work may cost.
#[derive(Clone, Copy, Debug)]
pub struct Limits {
    /// States of the diagram that may be met; one needs about 30 bytes.
    pub max_states: usize,
}

impl Default for Limits {
    fn default() -> Self {
        Self { max_states: 20_000_000 }
    }
}

/// Numbers of terms by powers of `s`.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct TermCounts {
    /// Of the numerator.
    pub numerator: Vec<BigUint>,
    /// Of the denominator.
    pub denominator: Vec<BigUint>,
    /// False where terms can meet (shared symbols, numbers): then the counts are before that.
    pub exact: bool,
}

/// A transfer function as the ratio of two roots of one diagram.
#[derive(Clone, Debug)]
pub struct Elimination {
    diagram: Diagram,
    /// All weights, alternatives numbered through the choices.
    weights: Vec<Polynomial>,
    /// For each choice the number of its first weight.
    first_weight: Vec<u32>,
    /// For each choice its place in the order of elimination.
    level_of: Vec<u32>,
    /// The symbols in the weights, ascending.
    symbols: Vec<Var>,
    numerator: Link,
    denominator: Link,
    distinct: bool,
    grounded: Vec<(NodeId, Vec<NodeId>)>,
    independent: Vec<ElementId>,
}

impl Elimination {
    /// Eliminates `circuit` for one transfer function.
    ///
    /// The answer is numerator/denominator; choices that it does not depend on (a separate part, an
    /// element across an ideal source) are taken out.
    ///
    /// # Errors
    /// Where there is no unique solution, and where the diagram would be too large. The size is
    /// predicted from the order before anything is built.
    ///
    /// # Cost
    /// Grows with the exponential of the longest frontier, linearly with the number of elements.
    pub fn new(
        circuit: &Circuit,
        transfer: &Transfer,
        limits: &Limits,
    ) -> Result<Self, EliminationError> {
        let system = system::build(circuit, transfer)?;
        let (built, level_of) = build_diagram(&system, limits)?;
        let zeros = zeros(&system, &built);
        let is_zero = |root: usize| zeros[root];
        let is_port = matches!(transfer.drive, Drive::Port(..));
        match (is_zero(system.numerator), is_zero(system.denominator)) {
            // Nothing can flow into the port, but a voltage could stand there.
            (false, true) if is_port => return Err(EliminationError::Infinite),
            _ if is_zero(system.determinant) => return Err(EliminationError::Singular),
            (_, true) => return Err(EliminationError::Infinite),
            // The denominator cancels; only that it is not 0 counts.
            (true, false) => return Ok(Self::zero(system)),
            (false, false) => {}
        }
        let fixed = independent::find(&system, &built);
        if fixed.is_empty() {
            return Ok(Self::of(system, built, level_of, Vec::new()));
        }
        let (system, taken_out) = independent::take_out(system, &fixed);
        let (built, level_of) = build_diagram(&system, limits)?;
        Ok(Self::of(system, built, level_of, taken_out))
    }

    fn zero(system: System) -> Self {
        Self {
            diagram: Diagram::one(),
            weights: Vec::new(),
            first_weight: Vec::new(),
            level_of: Vec::new(),
            symbols: Vec::new(),
            numerator: Link::DEAD,
            denominator: Link::ONE,
            distinct: true,
            grounded: system.grounded,
            independent: Vec::new(),
        }
    }

    fn of(
        system: System,
        diagram: Diagram,
        level_of: Vec<u32>,
        independent: Vec<ElementId>,
    ) -> Self {
        let distinct = terms_never_meet(&system);
        let weights: Vec<Polynomial> = system
            .choices
            .iter()
            .flat_map(|choice| choice.alternatives.iter().map(|a| a.weight.clone()))
            .collect();
        let symbols = symbols_of(&weights);
        Self {
            numerator: diagram.roots[system.numerator],
            denominator: diagram.roots[system.denominator],
            diagram,
            weights,
            first_weight: system.first_weights(),
            level_of,
            symbols,
            distinct,
            grounded: system.grounded,
            independent,
        }
    }

    /// The symbols that the answer depends on, ascending, as variables.
    pub fn variables(&self) -> &[Var] {
        &self.symbols
    }

    /// Whether the answer is exactly 0: the drive does not reach what is asked.
    pub fn is_zero(&self) -> bool {
        self.numerator.is_dead()
    }

    /// The last variable of the weights; none where they are numbers or hold only `s`.
    pub(crate) fn last_variable(&self) -> Option<Var> {
        self.symbols.last().copied()
    }

    /// Whether every term of an expansion is different from every other, so that counts are exact.
    pub fn is_distinct(&self) -> bool {
        self.distinct
    }

    /// Parts without a connection to ground: the node that was grounded, and the part.
    pub fn grounded_parts(&self) -> &[(NodeId, Vec<NodeId>)] {
        &self.grounded
    }

    /// Elements that the answer does not depend on.
    pub fn independent_elements(&self) -> &[ElementId] {
        &self.independent
    }

    /// Nodes of the diagram: what one pass costs.
    pub fn diagram_size(&self) -> usize {
        self.diagram.len()
    }

    /// How many terms each power of `s` has, without making them.
    pub fn count_terms(&self) -> TermCounts {
        let weights: Vec<_> = self.weights.iter().map(count::weight).collect();
        let roots = [self.numerator, self.denominator];
        let mut counts = passes::at_links(&count::Counts, &self.diagram, &weights, &roots);
        let mut last = || counts.pop().map(|tally| tally.numbers()).unwrap_or_default();
        let denominator = last();
        let numerator = last();
        TermCounts { numerator, denominator, exact: self.distinct }
    }

    /// How many terms there are altogether, without making them.
    ///
    /// # Cost
    /// One sum of large integers for each edge of the diagram: far less than [`Self::count_terms`].
    pub fn count_all_terms(&self) -> BigUint {
        let weights: Vec<_> = self.weights.iter().map(|weight| weight.len() as u64).collect();
        let roots = [self.numerator, self.denominator];
        passes::at_links(&count::Totals, &self.diagram, &weights, &roots).into_iter().sum()
    }

    /// Numerator and denominator as polynomials, terms collected; not yet in lowest terms.
    ///
    /// # Cost
    /// Linear in the number of terms where none meet; see [`Self::count_terms`] before.
    pub fn expand(&self) -> (Polynomial, Polynomial) {
        if self.distinct {
            if let Some(pair) = self.expand_sets::<u64>() {
                return pair;
            }
            if let Some(pair) = self.expand_sets::<u128>() {
                return pair;
            }
        }
        let roots = [self.numerator, self.denominator];
        let mut both = expand::collected(&self.diagram, &self.weights, &roots).into_iter();
        let mut next = || both.next().unwrap_or_else(Polynomial::zero);
        (next(), next())
    }

    fn expand_sets<T: TermSet>(&self) -> Option<(Polynomial, Polynomial)> {
        let weights = expand::as_sets::<T>(&self.weights, &self.symbols)?;
        let roots = [self.numerator, self.denominator];
        let mut lists = expand::listed(&self.diagram, &weights, &roots).into_iter();
        let mut polynomial = || {
            let lists = lists.next().unwrap_or_default();
            expand::polynomial(lists, &self.symbols)
        };
        Some((polynomial(), polynomial()))
    }

    /// The number of terms of the full expansion, made and stored one by one; for measuring.
    pub fn list_terms(&self) -> Option<usize> {
        let weights = expand::as_sets::<u64>(&self.weights, &self.symbols)?;
        let lists = expand::listed(&self.diagram, &weights, &[self.denominator]);
        Some(lists.iter().flatten().map(Vec::len).sum())
    }

    /// The value at `s` with these symbol values (by index); exponents are carried, so
    /// that large networks neither overflow nor underflow.
    pub fn value_at(&self, s: Complex<f64>, symbols: &[f64]) -> Complex<f64> {
        self.values_at(&[s], symbols)[0]
    }

    /// The values at many frequencies, as [`Self::value_at`].
    ///
    /// # Cost
    /// One pass over the diagram for each.
    pub fn values_at(&self, frequencies: &[Complex<f64>], symbols: &[f64]) -> Vec<Complex<f64>> {
        let coefficients: Vec<_> =
            self.weights.iter().map(|weight| numbers::Coefficients::new(weight, symbols)).collect();
        let ring = numbers::ComplexNumbers;
        let at = |&s: &Complex<f64>| {
            let s = Scaled::new(s, 0);
            let weights: Vec<_> = coefficients.iter().map(|weight| weight.at(s)).collect();
            let values = passes::values(&ring, &self.diagram, &weights);
            let root = |link| passes::at(&ring, &values, link);
            root(self.numerator).over(root(self.denominator))
        };
        frequencies.iter().map(at).collect()
    }

    /// Numerator and denominator at `s` and these symbol values (by index), each with its relative
    /// derivatives with respect to `s` and to every symbol.
    ///
    /// # Cost
    /// Two backward passes: as much as four values.
    pub fn gradients_at(&self, s: Complex<f64>, symbols: &[f64]) -> [Gradient; 2] {
        let weights: Vec<_> =
            self.weights.iter().map(|w| numbers::complex_weight(w, s, symbols)).collect();
        let values = passes::values(&numbers::ComplexNumbers, &self.diagram, &weights);
        [self.numerator, self.denominator].map(|root| {
            gradient::relative(&self.diagram, &self.weights, &weights, &values, root, (s, symbols))
        })
    }

    /// Numerator and denominator modulo the prime of a field; `values` holds `s` first, then the symbols.
    pub fn remainders(&self, field: Field, values: &[u64]) -> (u64, u64) {
        let weights: Vec<_> =
            self.weights.iter().map(|w| numbers::remainder(w, field, values)).collect();
        let ring = numbers::Remainders(field);
        let values = passes::values(&ring, &self.diagram, &weights);
        (passes::at(&ring, &values, self.numerator), passes::at(&ring, &values, self.denominator))
    }

    /// Numerator and denominator as integer polynomials in `s` (lowest power first) for these symbol
    /// values, exactly; up to one common factor, not in lowest terms.
    ///
    /// # Cost
    /// One product of large integers for each edge of the diagram and power of `s`.
    pub fn coefficients(&self, symbol: impl Fn(Var) -> BigRational) -> [Vec<BigInt>; 2] {
        let scaled = coefficients::scale(&self.weights, &self.first_weight, &symbol);
        let roots = [self.numerator, self.denominator];
        coefficients::of(&self.diagram, &scaled, &self.level_of, roots)
    }

    /// As [`Self::coefficients`], where the number of products is at most `affordable`.
    pub fn coefficients_within(
        &self,
        symbol: impl Fn(Var) -> BigRational,
        affordable: u64,
    ) -> Option<[Vec<BigInt>; 2]> {
        let products = coefficients::products(&self.diagram, &self.weights);
        (products <= affordable).then(|| self.coefficients(symbol))
    }

    /// The diagram as named sub-expressions.
    pub fn nested(&self) -> Nested {
        nested::of(&self.diagram, &self.weights, self.numerator, self.denominator)
    }
}

/// Which roots are 0: those that are dead, and where terms can meet those whose terms cancel. That
/// is tested at two random points modulo a prime, with a chance of error below 10⁻³⁰.
fn zeros(system: &System, diagram: &Diagram) -> Vec<bool> {
    let mut cancelled = vec![false; diagram.roots.len()];
    if let Some(field) = primes().next().filter(|_| !terms_never_meet(system)) {
        cancelled = vec![true; diagram.roots.len()];
        let mut random = Random::new(0x5eed_0002);
        for _ in 0..2 {
            let mut point: std::collections::BTreeMap<Var, u64> = std::collections::BTreeMap::new();
            let mut weights = Vec::new();
            for choice in &system.choices {
                for alternative in &choice.alternatives {
                    for variable in alternative.weight.variables() {
                        point.entry(variable).or_insert_with(|| random.unit(&field));
                    }
                    let value = |variable: Var| point.get(&variable).copied().unwrap_or(0);
                    weights.push(alternative.weight.evaluate_modulo(&field, value));
                }
            }
            let ring = numbers::Remainders(field);
            let values = passes::values(&ring, diagram, &weights);
            for (root, cancelled) in diagram.roots.iter().zip(&mut cancelled) {
                *cancelled &= passes::at(&ring, &values, *root) == 0;
            }
        }
    }
    diagram.roots.iter().zip(cancelled).map(|(root, zero)| root.is_dead() || zero).collect()
}

/// The symbols in these weights, ascending.
fn symbols_of(weights: &[Polynomial]) -> Vec<Var> {
    let mut symbols: Vec<Var> = weights
        .iter()
        .flat_map(Polynomial::variables)
        .filter(|&variable| variable != Var::S)
        .collect();
    symbols.sort_unstable();
    symbols.dedup();
    symbols
}

/// The diagram, and for each choice its place in the order.
fn build_diagram(
    system: &System,
    limits: &Limits,
) -> Result<(Diagram, Vec<u32>), EliminationError> {
    if touched_in_one_graph(system) {
        let roots = system.choices[system.question()].alternatives.len();
        return Ok((Diagram::dead(roots), Vec::new()));
    }
    let touches = touches(system);
    let order = order::search(&touches, system.nodes);
    // About 3.3 states a level for each frontier place, where the cost takes e^0.6 = 1.8: the
    // prediction errs on the small side, the limit on states met does the rest.
    if order.cost > 50.0 * limits.max_states as f64 {
        return Err(EliminationError::TooLarge { states: order.cost });
    }
    let plan = diagram::Plan {
        choices: &system.choices,
        nodes: system.nodes,
        order: &order.choices,
        question: system.question(),
        first_weight: &system.first_weights(),
        max_states: limits.max_states,
    };
    let diagram = diagram::build(&plan).map_err(|error| EliminationError::TooLarge {
        states: match error {
            diagram::TooLarge::Frontier(_) => order.cost,
            diagram::TooLarge::States(met) => met as f64,
        },
    })?;
    let mut level_of = vec![0; system.choices.len()];
    for (level, &choice) in order.choices.iter().enumerate() {
        level_of[choice as usize] = level as u32;
    }
    Ok((diagram, level_of))
}

fn touches(system: &System) -> Vec<order::Touch> {
    let nodes = |pairs: &mut dyn Iterator<Item = &choice::Pair>| {
        let mut nodes: Vec<u32> =
            pairs.flat_map(|pair| [pair.0, pair.1]).filter(|&node| node != 0).collect();
        nodes.sort_unstable();
        nodes.dedup();
        nodes
    };
    system
        .choices
        .iter()
        .map(|choice| order::Touch {
            current: nodes(&mut choice.alternatives.iter().flat_map(|a| &a.current)),
            voltage: nodes(&mut choice.alternatives.iter().flat_map(|a| &a.voltage)),
        })
        .collect()
}

/// A node that only one of the graphs has makes every determinant 0.
fn touched_in_one_graph(system: &System) -> bool {
    let mut seen = vec![[false; 2]; system.nodes];
    for touch in touches(system) {
        for node in touch.current {
            seen[node as usize][0] = true;
        }
        for node in touch.voltage {
            seen[node as usize][1] = true;
        }
    }
    seen.iter().any(|[current, voltage]| current != voltage)
}

/// Whether no two terms of an expansion can be equal: every choice has symbols of its own, and the
/// terms of its alternatives differ in them.
fn terms_never_meet(system: &System) -> bool {
    let mut owner: std::collections::BTreeMap<Var, usize> = std::collections::BTreeMap::new();
    for (index, choice) in system.choices.iter().enumerate() {
        if index == system.question() {
            continue;
        }
        let mut seen: Vec<Vec<(Var, u32)>> = Vec::new();
        for alternative in &choice.alternatives {
            for term in alternative.weight.terms() {
                let symbols: Vec<(Var, u32)> =
                    term.0.filter(|&(variable, _)| variable != Var::S).collect();
                if symbols
                    .iter()
                    .any(|&(variable, _)| *owner.entry(variable).or_insert(index) != index)
                {
                    return false;
                }
                seen.push(symbols);
            }
        }
        let total = seen.len();
        seen.sort();
        seen.dedup();
        if seen.len() != total && !system.forced[index] {
            return false;
        }
    }
    true
}
