//! Fewer variables by gradings.
//!
//! If integer weights make every term of both operands weigh the same (each operand for itself),
//! then the same holds for every factor. Physical units are such gradings: a determinant has a unit
//! as a whole. Each independent grading allows one variable to be set to 1 and its exponents to be
//! found again from the weights of the others. A uniform ladder in `s`, `G` and `C` becomes a
//! polynomial in `s` alone.
//!
//! The weights span the kernel of the differences of exponents. The kernel is carried through the
//! terms, modulo a prime, shrinking by one vector with each independent difference (the dual of
//! Gaussian elimination), so that a polynomial without gradings is recognised after a few terms.
//! Cost: terms × variables × gradings.

use num_bigint::BigInt;

use super::super::modular::{Field, primes};
use super::super::monomial::Var;
use super::super::polynomial::Polynomial;

/// A full set of gradings, solved for the variables that can be left out.
#[derive(Debug)]
pub(in crate::algebra) struct Grading {
    field: Field,
    kept: Vec<Var>,
    /// Each left-out variable with the change of its exponent for a step in each kept one.
    dropped: Vec<(Var, Vec<u64>)>,
}

impl Grading {
    /// The gradings common to both operands, which contain the same variables; none without any.
    pub(in crate::algebra) fn find(a: &Polynomial, b: &Polynomial) -> Option<Self> {
        let field = primes().next()?;
        let variables: Vec<Var> = a.variables().collect();
        let count = variables.len();
        let unit = |place: usize| (0..count).map(|other| u64::from(other == place)).collect();
        let mut kernel: Vec<Vec<u64>> = (0..count).map(unit).collect();
        for operand in [a, b] {
            let rows = |term: usize| {
                let words = operand.monomial_words(term);
                operand.layout.fields().iter().map(move |place| i64::from(place.get(words)))
            };
            for term in 1..operand.len() {
                let step: Vec<u64> =
                    rows(term).zip(rows(0)).map(|(e, f)| field.from_i64(e - f)).collect();
                shrink(&mut kernel, &step, &field);
                if kernel.is_empty() {
                    return None;
                }
            }
        }
        // Drop variables of high degree, but rather keep the frequency.
        let mut order: Vec<usize> = (0..count).collect();
        order.sort_by_key(|&place| {
            let variable = variables[place];
            (variable == Var::S, u32::MAX - a.degree(variable).max(b.degree(variable)))
        });
        Some(Self::solved(field, &variables, kernel, &order))
    }

    /// Row reduction of the weights; pivots are taken in the given order of columns.
    fn solved(field: Field, variables: &[Var], mut kernel: Vec<Vec<u64>>, order: &[usize]) -> Self {
        let mut pivots: Vec<usize> = Vec::new();
        for &column in order {
            let done = pivots.len();
            let Some(row) = (done..kernel.len()).find(|&row| kernel[row][column] != 0) else {
                continue;
            };
            kernel.swap(done, row);
            let inverse = field.inverse(kernel[done][column]);
            for value in &mut kernel[done] {
                *value = field.mul(*value, inverse);
            }
            let pivot = kernel[done].clone();
            for (_, other) in kernel.iter_mut().enumerate().filter(|(row, _)| *row != done) {
                let factor = field.neg(other[column]);
                for (value, &by) in other.iter_mut().zip(&pivot) {
                    *value = field.add(*value, field.mul(factor, by));
                }
            }
            pivots.push(column);
        }
        let kept: Vec<usize> =
            (0..variables.len()).filter(|column| !pivots.contains(column)).collect();
        let dropped = pivots.iter().zip(&kernel).map(|(&column, weights)| {
            (variables[column], kept.iter().map(|&place| field.neg(weights[place])).collect())
        });
        let dropped = dropped.collect();
        Self { field, kept: kept.into_iter().map(|place| variables[place]).collect(), dropped }
    }

    /// Sets the variables to be left out to 1.
    pub(in crate::algebra) fn apply(&self, value: &Polynomial) -> Polynomial {
        value.projected(&self.kept)
    }

    /// Finds their exponents again, the lowest of each being 0; none if they are no small integers.
    pub(in crate::algebra) fn restore(&self, value: &Polynomial) -> Option<Polynomial> {
        let exponents = |term: usize| -> Vec<i64> {
            let words = value.monomial_words(term);
            let field = |variable: &Var| value.layout.field(*variable);
            self.kept.iter().map(|var| field(var).map_or(0, |f| f.get(words).into())).collect()
        };
        if value.is_zero() {
            return None;
        }
        let first = exponents(0);
        let mut rows: Vec<Vec<i64>> = Vec::with_capacity(value.len());
        for term in 0..value.len() {
            let own = exponents(term);
            let mut row = Vec::with_capacity(self.dropped.len());
            for (_, slopes) in &self.dropped {
                let steps = own.iter().zip(&first).map(|(e, f)| self.field.from_i64(e - f));
                let sum = steps.zip(slopes).fold(0, |sum, (step, &slope)| {
                    self.field.add(sum, self.field.mul(step, slope))
                });
                let change = self.field.symmetric(sum);
                i32::try_from(change).ok()?;
                row.push(change);
            }
            rows.push(row);
        }
        let lowest: Vec<i64> = (0..self.dropped.len())
            .map(|place| rows.iter().map(|row| row[place]).min().unwrap_or(0))
            .collect();
        let mut terms: Vec<(Vec<(Var, u32)>, BigInt)> = Vec::with_capacity(value.len());
        for ((powers, coefficient), row) in value.terms().zip(&rows) {
            let mut powers: Vec<(Var, u32)> = powers.collect();
            for (((variable, _), &change), &least) in self.dropped.iter().zip(row).zip(&lowest) {
                powers.push((*variable, u32::try_from(change - least).ok()?));
            }
            terms.push((powers, coefficient));
        }
        Some(Polynomial::from_terms(terms))
    }
}

/// Restricts the kernel to what is orthogonal to one more vector.
fn shrink(kernel: &mut Vec<Vec<u64>>, step: &[u64], field: &Field) {
    let dot = |row: &[u64]| {
        row.iter()
            .zip(step)
            .filter(|entry| *entry.1 != 0)
            .fold(0, |sum, (&weight, &change)| field.add(sum, field.mul(weight, change)))
    };
    let Some(pivot) = kernel.iter().position(|row| dot(row) != 0) else { return };
    let leaving = kernel.swap_remove(pivot);
    let inverse = field.inverse(dot(&leaving));
    for row in kernel {
        let factor = field.neg(field.mul(dot(row), inverse));
        if factor != 0 {
            for (value, &by) in row.iter_mut().zip(&leaving) {
                *value = field.add(*value, field.mul(factor, by));
            }
        }
    }
}
