//! Choices that the answer does not depend on.
//!
//! A part that hangs on the rest by one node, an element across an ideal source or in series with
//! a current source multiply numerator and denominator by the same factor. With N = Σ w_a·N_a and
//! D = Σ w_a·D_a over the alternatives of one choice, the ratio does not depend on the choice exactly
//! when the vectors (N_a) and (D_a) are proportional. That is tested modulo a prime, with an
//! independent random weight for every alternative (Schwartz 1980, Zippel 1979: the chance of a false
//! answer is below 10⁻¹⁵); two backward passes give all N_a and D_a at once. Such a choice
//! is fixed to an alternative that leaves the denominator alive.

use super::choice::Choice;
use super::diagram::{Diagram, Link, unit_alternative};
use super::passes::{self, gradient, numbers::Remainders};
use super::system::System;
use crate::algebra::modular::{Field, Random, primes};
use crate::circuit::ElementId;

/// A choice and the alternative that it is fixed to.
pub(crate) type Fixed = (usize, usize);

/// The choices that the ratio does not depend on.
pub(crate) fn find(system: &System, diagram: &Diagram) -> Vec<Fixed> {
    let first_weight = system.first_weights();
    let (numerator, denominator) =
        (diagram.roots[system.numerator], diagram.roots[system.denominator]);
    let Some(field) = primes().next() else { return Vec::new() };
    let mut random = Random::new(0x5eed_0001);
    let mut weights = Vec::new();
    for choice in &system.choices {
        let unit = unit_alternative(choice);
        for alternative in 0..choice.alternatives.len() {
            // The unit alternative is not an edge where it stands alone, so it must weigh 1.
            let is_unit = unit == Some(alternative);
            weights.push(if is_unit { 1 } else { random.unit(&field) });
        }
    }
    let ring = Remainders(field);
    let values = passes::values(&ring, diagram, &weights);
    let parts = |root: Link| {
        let derivative = gradient::by_weight(&ring, diagram, &weights, &values, root);
        let mut parts: Vec<u64> =
            derivative.iter().zip(&weights).map(|(&d, &w)| field.mul(d, w)).collect();
        // What does not pass an edge of the choice passes its unit alternative unseen.
        let whole = passes::at(&ring, &values, root);
        for (choice, &first) in system.choices.iter().zip(&first_weight) {
            if let Some(unit) = unit_alternative(choice) {
                let range = first as usize..first as usize + choice.alternatives.len();
                let rest = parts[range]
                    .iter()
                    .enumerate()
                    .filter(|&(alternative, _)| alternative != unit)
                    .fold(whole, |rest, (_, &part)| field.sub(rest, part));
                parts[first as usize + unit] = rest;
            }
        }
        parts
    };
    let (upper, lower) = (parts(numerator), parts(denominator));
    let path = a_path(diagram, denominator);
    let mut fixed = Vec::new();
    for (index, choice) in system.choices.iter().enumerate() {
        if index == system.question() || choice.alternatives.len() < 2 {
            continue;
        }
        let first = first_weight[index] as usize;
        let n = &upper[first..first + choice.alternatives.len()];
        let d = &lower[first..first + choice.alternatives.len()];
        if proportional(field, n, d) {
            let taken = path
                .iter()
                .find(|&&weight| (first..first + n.len()).contains(&(weight as usize)))
                .map(|&weight| weight as usize - first)
                .or_else(|| unit_alternative(choice));
            fixed.extend(taken.map(|alternative| (index, alternative)));
        }
    }
    fixed
}

fn proportional(field: Field, n: &[u64], d: &[u64]) -> bool {
    let Some(pivot) = d.iter().position(|&part| part != 0) else {
        return false;
    };
    (0..d.len()).all(|a| field.mul(n[a], d[pivot]) == field.mul(n[pivot], d[a]))
}

/// The weights along one path from the root to the determinant 1.
fn a_path(diagram: &Diagram, root: Link) -> Vec<u32> {
    let mut path = Vec::new();
    let mut node = root.node();
    while let Some(edge) = diagram.edges(node).first() {
        path.push(edge.weight);
        node = edge.link.node();
    }
    path
}

/// The system with these choices fixed, and the elements that are thereby out of the answer.
pub(crate) fn take_out(mut system: System, fixed: &[Fixed]) -> (System, Vec<ElementId>) {
    let mut taken_out = Vec::new();
    let mut gone = vec![false; system.choices.len()];
    for &(index, alternative) in fixed {
        let mut kept = system.choices[index].alternatives.swap_remove(alternative);
        taken_out.extend_from_slice(&system.origins[index]);
        if kept.current.is_empty() {
            gone[index] = true;
        } else {
            kept.weight = crate::algebra::Polynomial::one();
            system.choices[index] = Choice { alternatives: vec![kept] };
        }
    }
    let mut flags = gone.iter();
    system.choices.retain(|_| !flags.next().copied().unwrap_or(false));
    let mut flags = gone.iter();
    system.origins.retain(|_| !flags.next().copied().unwrap_or(false));
    let mut flags = gone.iter();
    system.forced.retain(|_| !flags.next().copied().unwrap_or(false));
    taken_out.sort_unstable();
    taken_out.dedup();
    (system, taken_out)
}
