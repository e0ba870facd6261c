//! Sparse LU factors over a fixed pattern, and what is done with them.
//!
//! A [`Plan`] is the order of the pivots and the places where L and U have entries; it comes from
//! one run of the pivot search and serves every matrix of the same pattern. [`Factors`] are the
//! numbers: rows of U with the pivot first, rows of L without their unit diagonal, so that
//! A\[rowₖ, columnₗ\] = (L·U)\[k, l\].

use num_complex::Complex;

use crate::numeric::Complexes;
use crate::numeric::field::size;
use crate::numeric::sparse::eliminate;

use super::equations::Pattern;

type C = Complex<f64>;

/// A pivot below this fraction of its row asks for a new order.
const REUSE_THRESHOLD: f64 = 1e-3;
/// Steps of the norm estimate; it nearly always ends after two (Higham 1988).
const NORM_STEPS: usize = 5;

/// Lists of places, one after the other in one piece of memory.
#[derive(Clone, Debug, Default)]
struct Lists {
    /// Where each list begins, and where the last one ends.
    starts: Vec<usize>,
    places: Vec<usize>,
}

impl Lists {
    fn new() -> Self {
        Self { starts: vec![0], places: Vec::new() }
    }

    fn push(&mut self, list: &[usize]) {
        self.places.extend_from_slice(list);
        self.starts.push(self.places.len());
    }

    fn range(&self, list: usize) -> std::ops::Range<usize> {
        self.starts[list]..self.starts[list + 1]
    }

    fn get(&self, list: usize) -> &[usize] {
        &self.places[self.range(list)]
    }
}

/// Order of elimination and pattern of the factors.
#[derive(Clone, Debug)]
pub(super) struct Plan {
    row_order: Vec<usize>,
    column_order: Vec<usize>,
    /// Where each column stands in `column_order`.
    position: Vec<usize>,
    /// Rows of L, without the diagonal.
    lower: Lists,
    /// Rows of U, the pivot first.
    upper: Lists,
}

impl Plan {
    /// Chooses the pivots on these numbers; none when the matrix is exactly singular.
    pub(super) fn new(pattern: &Pattern<'_>, entries: &[C]) -> Option<Self> {
        let count = pattern.len();
        let mut work = pattern.rows(entries);
        let pivots = eliminate(&Complexes, &mut work, count);
        if pivots.len() < count {
            return None;
        }
        let mut position = vec![0; count];
        for (k, (_, column)) in pivots.iter().enumerate() {
            position[*column] = k;
        }
        let (mut lower, mut upper) = (Lists::new(), Lists::new());
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
            let columns = &pattern.columns[pattern.row(*row)];
            columns.iter().for_each(|column| add(position[*column], &mut below));
            let mut done = Vec::new();
            while let Some(j) = below.pop_first() {
                upper.get(j)[1..].iter().for_each(|at| add(*at, &mut below));
                done.push(j);
            }
            above[1..].sort_unstable();
            lower.push(&done);
            upper.push(&above);
        }
        let (row_order, column_order) = pivots.into_iter().unzip();
        Some(Self { row_order, column_order, position, lower, upper })
    }
}

/// The numbers of L and U, in the order of the plan's pattern.
#[derive(Debug, Default)]
pub(super) struct Factors {
    lower: Vec<C>,
    upper: Vec<C>,
    /// 1/pivot of each row.
    inverse: Vec<C>,
    work: Vec<C>,
}

impl Factors {
    /// Factors in the order of the plan; false when a pivot is too small for it.
    pub(super) fn compute(&mut self, plan: &Plan, pattern: &Pattern<'_>, entries: &[C]) -> bool {
        self.factorise(plan, pattern, entries, REUSE_THRESHOLD)
    }

    /// The same with a plan made for these numbers: only a pivot of 0 stops it.
    pub(super) fn compute_anyway(
        &mut self,
        plan: &Plan,
        pattern: &Pattern<'_>,
        entries: &[C],
    ) -> bool {
        self.factorise(plan, pattern, entries, 0.0)
    }

    fn factorise(
        &mut self,
        plan: &Plan,
        pattern: &Pattern<'_>,
        entries: &[C],
        threshold: f64,
    ) -> bool {
        let count = pattern.len();
        let Self { lower, upper, inverse, work } = self;
        lower.clear();
        upper.clear();
        inverse.clear();
        work.clear();
        work.resize(count, C::ZERO);
        for k in 0..count {
            let row = pattern.row(plan.row_order[k]);
            for (column, value) in pattern.columns[row.clone()].iter().zip(&entries[row]) {
                work[plan.position[*column]] = *value;
            }
            for &j in plan.lower.get(k) {
                let multiplier = std::mem::take(&mut work[j]) * inverse[j];
                lower.push(multiplier);
                let tail = plan.upper.get(j).iter().zip(&upper[plan.upper.range(j)]).skip(1);
                tail.for_each(|(at, value)| work[*at] -= multiplier * value);
            }
            let begin = upper.len();
            upper.extend(plan.upper.get(k).iter().map(|at| std::mem::take(&mut work[*at])));
            let row = &upper[begin..];
            let largest = row.iter().map(|value| size(*value)).fold(0.0, f64::max);
            let pivot = size(row[0]);
            // Written so that a NaN is refused, too.
            if !(pivot > 0.0 && pivot >= threshold * largest) {
                return false;
            }
            inverse.push(row[0].finv());
        }
        true
    }

    /// A⁻¹·b.
    pub(super) fn solve(&self, plan: &Plan, right: &[C]) -> Vec<C> {
        let mut z: Vec<C> = plan.row_order.iter().map(|row| right[*row]).collect();
        for k in 0..z.len() {
            let row = plan.lower.get(k).iter().zip(&self.lower[plan.lower.range(k)]);
            z[k] = row.fold(z[k], |rest, (j, l)| rest - l * z[*j]);
        }
        for k in (0..z.len()).rev() {
            let tail = plan.upper.get(k).iter().zip(&self.upper[plan.upper.range(k)]).skip(1);
            z[k] = tail.fold(z[k], |rest, (j, u)| rest - u * z[*j]) * self.inverse[k];
        }
        let mut x = vec![C::ZERO; z.len()];
        for (column, value) in plan.column_order.iter().zip(z) {
            x[*column] = value;
        }
        x
    }

    /// A⁻ᵀ·c.
    pub(super) fn solve_transposed(&self, plan: &Plan, right: &[C]) -> Vec<C> {
        let mut z: Vec<C> = plan.column_order.iter().map(|column| right[*column]).collect();
        for k in 0..z.len() {
            let value = z[k] * self.inverse[k];
            z[k] = value;
            let tail = plan.upper.get(k).iter().zip(&self.upper[plan.upper.range(k)]).skip(1);
            tail.for_each(|(j, u)| z[*j] -= u * value);
        }
        for k in (0..z.len()).rev() {
            let value = z[k];
            let row = plan.lower.get(k).iter().zip(&self.lower[plan.lower.range(k)]);
            row.for_each(|(j, l)| z[*j] -= l * value);
        }
        let mut y = vec![C::ZERO; z.len()];
        for (row, value) in plan.row_order.iter().zip(z) {
            y[*row] = value;
        }
        y
    }

    /// Estimate from below of the 1-norm of A⁻¹ (Hager 1984, Higham 1988), usually exact.
    #[expect(clippy::cast_precision_loss, reason = "sizes are far below 2^53")]
    pub(super) fn inverse_norm(&self, plan: &Plan) -> f64 {
        let count = self.inverse.len();
        let norm = |vector: &[C]| vector.iter().map(modulus).sum::<f64>();
        if count == 0 {
            return 1.0;
        }
        let mut x = vec![C::new(1.0 / count as f64, 0.0); count];
        let mut estimate = 0.0f64;
        for _ in 0..NORM_STEPS {
            let y = self.solve(plan, &x);
            let found = norm(&y);
            if found <= estimate {
                break;
            }
            estimate = found;
            let signs = y.iter().map(|v| match modulus(v) {
                length if length > 0.0 => v.conj() / length,
                _ => C::ONE,
            });
            // The conjugate of A⁻ᴴ·sign(y).
            let z = self.solve_transposed(plan, &signs.collect::<Vec<_>>());
            let reached: f64 = z.iter().zip(&x).map(|(z, x)| (z * x).re).sum();
            let (at, largest) =
                z.iter().map(modulus).enumerate().fold((0, 0.0), |best, (at, value)| {
                    if value > best.1 { (at, value) } else { best }
                });
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
        let other =
            2.0 * norm(&self.solve(plan, &alternating.collect::<Vec<_>>())) / (3.0 * count as f64);
        estimate.max(other)
    }
}

/// |z| of a number near 1, for which `norm` takes care in vain.
fn modulus(value: &C) -> f64 {
    value.norm_sqr().sqrt()
}
