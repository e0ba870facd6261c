//! Sparse Gaussian elimination with Markowitz's choice of pivots (Markowitz 1957) over any field.
//!
//! A pivot must be at least a fraction of the largest entry of its row (threshold pivoting, Duff,
//! Erisman & Reid 1986), which bounds growth; among those of the few shortest rows the one with
//! the least (r − 1)(c − 1) is taken. In an exact field every entry but 0 is as good as another.
//!
//! Rows from `size` on are borders: they are reduced but never hold pivots; columns from `size`
//! on likewise. With A bordered by a right side b and a row c, the corner becomes d − c·A⁻¹·b.

use std::collections::BTreeSet;

use super::Field;

/// How many of the shortest rows are searched for a pivot (Zlatev 1980 advises three or four).
const SEARCHED_ROWS: usize = 4;
/// The smallest pivot in terms of the largest entry of its row.
const THRESHOLD: f64 = 0.1;

/// Entries by ascending column.
pub(crate) type Row<E> = Vec<(usize, E)>;

/// Eliminates in place and returns the pivots, (row, column) in their order. Fewer than `size`
/// of them: the matrix is singular.
pub(crate) fn eliminate<F: Field>(
    field: &F,
    rows: &mut [Row<F::Element>],
    size: usize,
) -> Vec<(usize, usize)> {
    let mut columns: Vec<Vec<usize>> = vec![Vec::new(); size];
    for (index, row) in rows.iter().enumerate() {
        for (column, _) in row.iter().filter(|(column, _)| *column < size) {
            columns[*column].push(index);
        }
    }
    let count = |row: &Row<F::Element>| row.iter().filter(|(column, _)| *column < size).count();
    let mut waiting: BTreeSet<(usize, usize)> =
        rows.iter().take(size).enumerate().map(|(index, row)| (count(row), index)).collect();
    let mut pivots = Vec::with_capacity(size);
    while let Some((row, column)) = choose(field, rows, &columns, &mut waiting, size) {
        waiting.remove(&(count(&rows[row]), row));
        pivots.push((row, column));
        let pivot_row = std::mem::take(&mut rows[row]);
        for (other, _) in pivot_row.iter().filter(|(other, _)| *other < size) {
            columns[*other].retain(|index| *index != row);
        }
        let Some(inverse) = entry(&pivot_row, column).and_then(|pivot| field.inverse(pivot)) else {
            break;
        };
        for target in std::mem::take(&mut columns[column]) {
            let Some(value) = entry(&rows[target], column) else { continue };
            let factor = field.negative(&field.multiply(value, &inverse));
            let before = count(&rows[target]);
            let merged = combine(field, &rows[target], &pivot_row, &factor, column, |filled| {
                if filled < size {
                    columns[filled].push(target);
                }
            });
            rows[target] = merged;
            if target < size {
                waiting.remove(&(before, target));
                waiting.insert((count(&rows[target]), target));
            }
        }
        rows[row] = pivot_row;
    }
    pivots
}

/// The entry of a column.
pub(crate) fn entry<E>(row: &Row<E>, column: usize) -> Option<&E> {
    row.binary_search_by_key(&column, |(column, _)| *column).ok().map(|at| &row[at].1)
}

fn choose<F: Field>(
    field: &F,
    rows: &[Row<F::Element>],
    columns: &[Vec<usize>],
    waiting: &mut BTreeSet<(usize, usize)>,
    size: usize,
) -> Option<(usize, usize)> {
    let mut best: Option<(usize, f64, usize, usize)> = None;
    let mut searched = 0;
    let mut empty = Vec::new();
    for &(length, index) in waiting.iter() {
        if searched == SEARCHED_ROWS {
            break;
        }
        let inside = || rows[index].iter().filter(|(column, _)| *column < size);
        let largest = inside().map(|(_, e)| field.magnitude(e)).fold(0.0, f64::max);
        if largest == 0.0 {
            empty.push((length, index));
            continue;
        }
        searched += 1;
        for (column, value) in inside() {
            let magnitude = field.magnitude(value) / largest;
            if magnitude == 0.0 || magnitude < THRESHOLD {
                continue;
            }
            let active = columns[*column].len();
            let fill = length.saturating_sub(1) * active.saturating_sub(1);
            let better = best.is_none_or(|(least, largest, ..)| {
                fill < least || fill == least && magnitude > largest
            });
            if better {
                best = Some((fill, magnitude, index, *column));
            }
        }
        if best.is_some_and(|(fill, ..)| fill == 0) {
            break;
        }
    }
    // Zero rows can never become anything else here: only pivots change rows, and not these.
    empty.iter().for_each(|key| {
        waiting.remove(key);
    });
    best.map(|(_, _, row, column)| (row, column))
}

/// `target` + `factor` · `pivot_row`, without the eliminated column; reports columns that fill.
fn combine<F: Field>(
    field: &F,
    target: &Row<F::Element>,
    pivot_row: &Row<F::Element>,
    factor: &F::Element,
    eliminated: usize,
    mut fills: impl FnMut(usize),
) -> Row<F::Element> {
    let mut result = Vec::with_capacity(target.len() + pivot_row.len());
    let (mut left, mut right) = (target.iter().peekable(), pivot_row.iter().peekable());
    loop {
        let (take_left, take_right) = match (left.peek(), right.peek()) {
            (None, None) => break,
            (Some(_), None) => (true, false),
            (None, Some(_)) => (false, true),
            (Some((a, _)), Some((b, _))) => (a <= b, b <= a),
        };
        let own = if take_left { left.next() } else { None };
        let other = if take_right { right.next() } else { None };
        let merged = match (own, other) {
            (Some(own), None) => own.clone(),
            (None, Some((column, value))) => {
                fills(*column);
                (*column, field.multiply(factor, value))
            }
            (Some((column, own)), Some((_, value))) => {
                (*column, field.add(own, &field.multiply(factor, value)))
            }
            (None, None) => break,
        };
        if merged.0 != eliminated {
            result.push(merged);
        }
    }
    result
}
