//! Sparse LU factors over a fixed pattern, and what is done with them.
//!
//! A [`Plan`] is the order of the pivots and the places where L and U have entries; it comes from
//! one run of the pivot search and serves every matrix of the same pattern. [`Factors`] are the
//! numbers: rows of U with the pivot first, rows of L without their unit diagonal, so that
//! A\[rowₖ, columnₗ\] = (L·U)\[k, l\].

use std::rc::Rc;

use num_complex::Complex;

use crate::numeric::Complexes;
use crate::numeric::field::size;
use crate::numeric::sparse::{Row, eliminate};

type C = Complex<f64>;

/// A pivot below this fraction of its row asks for a new order.
const REUSE_THRESHOLD: f64 = 1e-3;
/// Steps of the norm estimate; it nearly always ends after two (Higham 1988).
const NORM_STEPS: usize = 5;

/// Order of elimination and pattern of the factors.
#[derive(Clone, Debug)]
pub(super) struct Plan {
    /// Columns of each row of the matrix, to recognise the pattern.
    pattern: Vec<Vec<usize>>,
    row_order: Vec<usize>,
    column_order: Vec<usize>,
    /// Where each column stands in `column_order`.
    position: Vec<usize>,
    lower: Vec<Vec<usize>>,
    upper: Vec<Vec<usize>>,
}

impl Plan {
    /// Chooses the pivots on these numbers; none when the matrix is exactly singular.
    pub(super) fn new(rows: &[Row<C>]) -> Option<Self> {
        let count = rows.len();
        let mut work = rows.to_vec();
        let pivots = eliminate(&Complexes, &mut work, count);
        if pivots.len() < count {
            return None;
        }
        let pattern: Vec<Vec<usize>> =
            rows.iter().map(|row| row.iter().map(|(column, _)| *column).collect()).collect();
        let mut position = vec![0; count];
        for (k, (_, column)) in pivots.iter().enumerate() {
            position[*column] = k;
        }
        let (mut lower, mut upper) = (Vec::with_capacity(count), Vec::<Vec<usize>>::new());
        // Marks which row last put a column on its list.
        let mut mark = vec![usize::MAX; count];
        for (k, (row, _)) in pivots.iter().enumerate() {
            let mut below = std::collections::BTreeSet::new();
            let mut above = vec![k];
            mark[k] = k;
            let mut add = |at: usize, below: &mut std::collections::BTreeSet<usize>| {
                if mark[at] != k {
                    mark[at] = k;
                    if at < k {
                        below.insert(at);
                    } else {
                        above.push(at);
                    }
                }
            };
            pattern[*row].iter().for_each(|column| add(position[*column], &mut below));
            let mut done = Vec::new();
            while let Some(j) = below.pop_first() {
                upper[j][1..].iter().for_each(|at| add(*at, &mut below));
                done.push(j);
            }
            above[1..].sort_unstable();
            lower.push(done);
            upper.push(above);
        }
        let (row_order, column_order) = pivots.into_iter().unzip();
        Some(Self { pattern, row_order, column_order, position, lower, upper })
    }

    /// Whether the rows have entries where those of the plan had.
    pub(super) fn fits(&self, rows: &[Row<C>]) -> bool {
        rows.len() == self.pattern.len()
            && rows.iter().zip(&self.pattern).all(|(row, pattern)| {
                row.len() == pattern.len()
                    && row.iter().zip(pattern).all(|((column, _), known)| column == known)
            })
    }
}

/// The numbers of L and U, in the order of the plan's pattern.
#[derive(Debug)]
pub(super) struct Factors {
    plan: Rc<Plan>,
    lower: Vec<Vec<C>>,
    upper: Vec<Vec<C>>,
}

impl Factors {
    /// Factors in the order of the plan; gives the plan back when a pivot is too small.
    pub(super) fn compute(plan: Rc<Plan>, rows: &[Row<C>]) -> Result<Self, Rc<Plan>> {
        Self::factorise(plan, rows, REUSE_THRESHOLD)
    }

    /// The same with a plan made for these numbers: only a pivot of 0 stops it.
    pub(super) fn compute_anyway(plan: Rc<Plan>, rows: &[Row<C>]) -> Option<Self> {
        Self::factorise(plan, rows, 0.0).ok()
    }

    fn factorise(plan: Rc<Plan>, rows: &[Row<C>], threshold: f64) -> Result<Self, Rc<Plan>> {
        let count = rows.len();
        let mut work = vec![C::ZERO; count];
        let (mut lower, mut upper) =
            (Vec::with_capacity(count), Vec::<Vec<C>>::with_capacity(count));
        for k in 0..count {
            for (column, value) in &rows[plan.row_order[k]] {
                work[plan.position[*column]] = *value;
            }
            let mut multipliers = Vec::with_capacity(plan.lower[k].len());
            for &j in &plan.lower[k] {
                let multiplier = std::mem::take(&mut work[j]) / upper[j][0];
                multipliers.push(multiplier);
                for (at, value) in plan.upper[j].iter().zip(&upper[j]).skip(1) {
                    work[*at] -= multiplier * value;
                }
            }
            let row: Vec<C> =
                plan.upper[k].iter().map(|at| std::mem::take(&mut work[*at])).collect();
            let largest = row.iter().map(|value| size(*value)).fold(0.0, f64::max);
            let pivot = size(row[0]);
            // Written so that a NaN is refused, too.
            if !(pivot > 0.0 && pivot >= threshold * largest) {
                return Err(plan);
            }
            lower.push(multipliers);
            upper.push(row);
        }
        Ok(Self { plan, lower, upper })
    }

    pub(super) fn plan(&self) -> &Rc<Plan> {
        &self.plan
    }

    /// A⁻¹·b.
    pub(super) fn solve(&self, right: Vec<C>) -> Vec<C> {
        let plan = &self.plan;
        let mut z: Vec<C> = plan.row_order.iter().map(|row| right[*row]).collect();
        for k in 0..z.len() {
            let sum: C = plan.lower[k].iter().zip(&self.lower[k]).map(|(j, l)| l * z[*j]).sum();
            z[k] -= sum;
        }
        for k in (0..z.len()).rev() {
            let tail = plan.upper[k].iter().zip(&self.upper[k]).skip(1);
            let sum: C = tail.map(|(j, u)| u * z[*j]).sum();
            z[k] = (z[k] - sum) / self.upper[k][0];
        }
        let mut x = vec![C::ZERO; z.len()];
        for (column, value) in plan.column_order.iter().zip(z) {
            x[*column] = value;
        }
        x
    }

    /// A⁻ᵀ·c.
    pub(super) fn solve_transposed(&self, right: Vec<C>) -> Vec<C> {
        let plan = &self.plan;
        let mut z: Vec<C> = plan.column_order.iter().map(|column| right[*column]).collect();
        for k in 0..z.len() {
            let value = z[k] / self.upper[k][0];
            z[k] = value;
            for (j, u) in plan.upper[k].iter().zip(&self.upper[k]).skip(1) {
                z[*j] -= u * value;
            }
        }
        for k in (0..z.len()).rev() {
            let value = z[k];
            for (j, l) in plan.lower[k].iter().zip(&self.lower[k]) {
                z[*j] -= l * value;
            }
        }
        let mut y = vec![C::ZERO; z.len()];
        for (row, value) in plan.row_order.iter().zip(z) {
            y[*row] = value;
        }
        y
    }

    /// Estimate from below of the 1-norm of A⁻¹ (Hager 1984, Higham 1988), usually exact.
    #[expect(clippy::cast_precision_loss, reason = "sizes are far below 2^53")]
    pub(super) fn inverse_norm(&self) -> f64 {
        let count = self.upper.len();
        let norm = |vector: &[C]| vector.iter().map(|value| value.norm()).sum::<f64>();
        if count == 0 {
            return 1.0;
        }
        let mut x = vec![C::new(1.0 / count as f64, 0.0); count];
        let mut estimate = 0.0f64;
        for _ in 0..NORM_STEPS {
            let y = self.solve(x.clone());
            let found = norm(&y);
            if found <= estimate {
                break;
            }
            estimate = found;
            let signs = y.iter().map(|v| if v.norm() > 0.0 { v.conj() / v.norm() } else { C::ONE });
            // The conjugate of A⁻ᴴ·sign(y).
            let z = self.solve_transposed(signs.collect());
            let reached: f64 = z.iter().zip(&x).map(|(z, x)| (z * x).re).sum();
            let (at, largest) = z.iter().map(|value| value.norm()).enumerate().fold(
                (0, 0.0),
                |best, (at, value)| if value > best.1 { (at, value) } else { best },
            );
            if largest <= reached {
                break;
            }
            x = vec![C::ZERO; count];
            x[at] = C::ONE;
        }
        // A vector that defeats cancellation in the estimate above (Higham 1988).
        let spread = (count.max(2) - 1) as f64;
        let alternating = (0..count).map(|i| {
            let value = 1.0 + i as f64 / spread;
            C::new(if i % 2 == 0 { value } else { -value }, 0.0)
        });
        let other = 2.0 * norm(&self.solve(alternating.collect())) / (3.0 * count as f64);
        estimate.max(other)
    }
}
