//! An element as a choice among alternatives, and the one rule that makes them.
//!
//! The network determinant is a sum over pairs of spanning trees: the unknowns are node voltages
//! (columns, the voltage graph), the equations are current sums (rows, the current graph). An
//! element that obeys A·v + B·i = 0 on k ports adds Σ over port subsets R, T with |R| = |T| of
//! (−1)^|R| · σ(R) · det[A_T | B_(not R)], where the ports R are merged in the current graph and
//! the ports T in the voltage graph, both ascending, and σ(R) is the parity of the permutation
//! (R, then the rest). The two-graph method of Mayeda & Seshu (1965) and Chen (1976), stated for
//! any linear k-port.

use crate::algebra::Polynomial;

/// Two nodes that are merged; the first is +.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub(crate) struct Pair(pub(crate) u32, pub(crate) u32);

/// One way of choosing an element: a weight, and as many merges in either graph.
#[derive(Clone, Debug, PartialEq)]
pub(crate) struct Alternative {
    /// The factor.
    pub(crate) weight: Polynomial,
    /// Merges of the current graph, in order.
    pub(crate) current: Vec<Pair>,
    /// Merges of the voltage graph, in order.
    pub(crate) voltage: Vec<Pair>,
}

/// An element: exactly one of its alternatives stands in each term of the determinant.
#[derive(Clone, Debug, Default, PartialEq)]
pub(crate) struct Choice {
    /// The alternatives; those of weight 0 are left out.
    pub(crate) alternatives: Vec<Alternative>,
}

/// A linear k-port A·v + B·i = 0 with polynomial entries, one row an equation.
#[derive(Clone, Debug)]
pub(crate) struct MultiPort {
    /// The ports; voltages and currents are counted from the first node of each.
    pub(crate) ports: Vec<Pair>,
    /// Coefficients of the port voltages, k rows of k.
    pub(crate) a: Vec<Vec<Polynomial>>,
    /// Coefficients of the port currents, k rows of k.
    pub(crate) b: Vec<Vec<Polynomial>>,
}

impl MultiPort {
    /// The alternatives of this element, by the rule above.
    ///
    /// The subsets T run over the ports whose column of A is not zero, so that an element with
    /// one controlling port and many outputs stays small.
    pub(crate) fn choice(&self) -> Choice {
        let k = self.ports.len();
        let sensed: Vec<usize> =
            (0..k).filter(|&column| self.a.iter().any(|row| !row[column].is_zero())).collect();
        let mut alternatives = Vec::new();
        for size in 0..=sensed.len() {
            for voltage in subsets(&sensed, size) {
                for current in subsets(&(0..k).collect::<Vec<_>>(), size) {
                    let weight = self.weight(&current, &voltage);
                    if !weight.is_zero() {
                        alternatives.push(Alternative {
                            weight,
                            current: current.iter().map(|&port| self.ports[port]).collect(),
                            voltage: voltage.iter().map(|&port| self.ports[port]).collect(),
                        });
                    }
                }
            }
        }
        Choice { alternatives }
    }

    /// (−1)^|R| · σ(R) · det[A_T | B_(not R)].
    fn weight(&self, current: &[usize], voltage: &[usize]) -> Polynomial {
        let rest: Vec<usize> =
            (0..self.ports.len()).filter(|port| !current.contains(port)).collect();
        let matrix: Vec<Vec<&Polynomial>> = self
            .a
            .iter()
            .zip(&self.b)
            .map(|(a, b)| {
                voltage
                    .iter()
                    .map(|&port| &a[port])
                    .chain(rest.iter().map(|&port| &b[port]))
                    .collect()
            })
            .collect();
        // Each element of R that stands behind j smaller ones of the rest moved past them.
        let inversions: usize = current
            .iter()
            .map(|&chosen| rest.iter().filter(|&&other| other < chosen).count())
            .sum();
        let value = determinant(&matrix);
        if (current.len() + inversions) % 2 == 1 { -&value } else { value }
    }
}

/// All subsets of that size, each ascending.
fn subsets(of: &[usize], size: usize) -> Vec<Vec<usize>> {
    if size == 0 {
        return vec![Vec::new()];
    }
    let mut all = Vec::new();
    for (index, &first) in of.iter().enumerate() {
        for mut rest in subsets(&of[index + 1..], size - 1) {
            rest.insert(0, first);
            all.push(rest);
        }
    }
    all
}

/// Expansion by the first row's minors; the matrices of elements are small and mostly zeros.
fn determinant(matrix: &[Vec<&Polynomial>]) -> Polynomial {
    let Some((first, below)) = matrix.split_first() else {
        return Polynomial::one();
    };
    let mut sum = Polynomial::zero();
    for (column, entry) in first.iter().enumerate() {
        if entry.is_zero() {
            continue;
        }
        if below.is_empty() {
            return (*entry).clone();
        }
        let minor: Vec<Vec<&Polynomial>> = below
            .iter()
            .map(|row| {
                let mut row = row.clone();
                row.remove(column);
                row
            })
            .collect();
        let term = *entry * &determinant(&minor);
        sum = if column % 2 == 0 { &sum + &term } else { &sum - &term };
    }
    sum
}
