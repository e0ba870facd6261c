//! The diagram as nested sums with shared sub-expressions: what is too long to expand.
//!
//! The monomial that all terms of a node have in common moves to the edges above, and so up to the
//! roots, where it cancels between numerator and denominator. A node that is used once stands where
//! it is used; the others, and sums nested too deep to read, get a name.

use std::collections::BTreeMap;

use super::diagram::{Diagram, Link};
use crate::algebra::{Polynomial, Var};

/// Sums nest no deeper than this before one of them gets a name.
const DEEPEST: usize = 4;

/// A ratio of sums over named sub-expressions.
#[derive(Clone, Debug, Default)]
pub struct Nested {
    /// Sub-expressions; each uses earlier ones only.
    pub definitions: Vec<NestedSum>,
    /// The numerator.
    pub numerator: NestedSum,
    /// The denominator.
    pub denominator: NestedSum,
}

/// A sum of weight × factor.
#[derive(Clone, Debug, Default)]
pub struct NestedSum {
    /// The terms, at least one; the sum 0 has none.
    pub terms: Vec<(Polynomial, NestedFactor)>,
}

/// What a weight multiplies.
#[derive(Clone, Debug)]
pub enum NestedFactor {
    /// 1.
    One,
    /// Index into [`Nested::definitions`].
    Definition(usize),
    /// A sum that is used only here.
    Sum(Box<NestedSum>),
}

/// Powers of variables.
type Monomial = BTreeMap<Var, u32>;

pub(crate) fn of(
    diagram: &Diagram,
    weights: &[Polynomial],
    numerator: Link,
    denominator: Link,
) -> Nested {
    let contents = contents(diagram, weights);
    let uses = diagram.uses();
    let mut nested = Nested::default();
    // What stands for each node: a factor, how deep it nests, how often it was taken.
    let mut factors: Vec<(NestedFactor, usize)> = vec![(NestedFactor::One, 0)];
    for node in 1..diagram.len() {
        let mut sum = NestedSum::default();
        let mut depth = 0;
        for edge in diagram.edges(node) {
            let child = edge.link.node();
            let weight = rescaled(
                &weights[edge.weight as usize],
                &contents[child],
                &contents[node],
                edge.link.is_negative(),
            );
            let factor = if uses[child] == 1 {
                depth = depth.max(factors[child].1);
                std::mem::replace(&mut factors[child].0, NestedFactor::One)
            } else {
                factors[child].0.clone()
            };
            sum.push(weight, factor);
        }
        depth += 1;
        let factor = match sum.terms.as_slice() {
            // Alone and of weight 1: nothing to name.
            [(weight, NestedFactor::One | NestedFactor::Definition(_))] if weight.is_one() => {
                sum.terms.swap_remove(0).1
            }
            _ if uses[node] > 1 || depth > DEEPEST => {
                nested.definitions.push(sum);
                depth = 0;
                NestedFactor::Definition(nested.definitions.len() - 1)
            }
            _ => NestedFactor::Sum(Box::new(sum)),
        };
        factors.push((factor, depth));
    }
    let (above, below) = without_common(&contents, numerator, denominator);
    let root = |link: Link, content: &Monomial, factors: &[(NestedFactor, usize)]| {
        let mut sum = NestedSum::default();
        if !link.is_dead() {
            let weight = monomial(content);
            let weight = if link.is_negative() { -&weight } else { weight };
            sum.push(weight, factors[link.node()].0.clone());
        }
        sum
    };
    nested.numerator = root(numerator, &above, &factors);
    nested.denominator = root(denominator, &below, &factors);
    nested
}

impl NestedSum {
    /// Adds a term; a sum multiplied by 1 is dissolved, terms with the same factor are collected.
    fn push(&mut self, weight: Polynomial, factor: NestedFactor) {
        match factor {
            NestedFactor::Sum(inner) if weight.is_one() => {
                for (weight, factor) in inner.terms {
                    self.push(weight, factor);
                }
            }
            factor => {
                let same = self.terms.iter_mut().find(|(_, other)| match (other, &factor) {
                    (NestedFactor::One, NestedFactor::One) => true,
                    (NestedFactor::Definition(a), NestedFactor::Definition(b)) => *a == *b,
                    _ => false,
                });
                match same {
                    Some((sum, _)) => *sum = &*sum + &weight,
                    None => self.terms.push((weight, factor)),
                }
            }
        }
    }
}

/// For each node the monomial that divides all its terms.
fn contents(diagram: &Diagram, weights: &[Polynomial]) -> Vec<Monomial> {
    let of_weight: Vec<Monomial> =
        weights.iter().map(|weight| weight.monomial_content().into_iter().collect()).collect();
    let mut contents: Vec<Monomial> = vec![Monomial::new()];
    for node in 1..diagram.len() {
        let mut common: Option<Monomial> = None;
        for edge in diagram.edges(node) {
            let mut content = contents[edge.link.node()].clone();
            for (&variable, &power) in &of_weight[edge.weight as usize] {
                *content.entry(variable).or_insert(0) += power;
            }
            common = Some(match common {
                None => content,
                Some(common) => least(&common, &content),
            });
        }
        contents.push(common.unwrap_or_default());
    }
    contents
}

fn least(a: &Monomial, b: &Monomial) -> Monomial {
    a.iter()
        .filter_map(|(&variable, &power)| {
            let power = power.min(*b.get(&variable)?);
            (power > 0).then_some((variable, power))
        })
        .collect()
}

fn monomial(powers: &Monomial) -> Polynomial {
    Polynomial::monomial(powers.iter().map(|(&variable, &power)| (variable, power)), 1)
}

/// weight · child / node, with a sign.
fn rescaled(weight: &Polynomial, child: &Monomial, node: &Monomial, negative: bool) -> Polynomial {
    let mut result = weight.clone();
    if !child.is_empty() {
        result = &result * &monomial(child);
    }
    if !node.is_empty() {
        // The node's content divides every edge by construction.
        result = result.divide_exact(&monomial(node)).unwrap_or(result);
    }
    if negative { -&result } else { result }
}

/// The roots' contents without what they share.
fn without_common(contents: &[Monomial], above: Link, below: Link) -> (Monomial, Monomial) {
    let content = |link: Link| {
        if link.is_dead() { Monomial::new() } else { contents[link.node()].clone() }
    };
    let (a, b) = (content(above), content(below));
    let common = least(&a, &b);
    let rest = |of: Monomial| {
        of.into_iter()
            .map(|(variable, power)| {
                (variable, power - common.get(&variable).copied().unwrap_or(0))
            })
            .filter(|&(_, power)| power > 0)
            .collect()
    };
    (rest(a), rest(b))
}
