//! The mean square over all frequencies, in closed form.
//!
//! With H = N/D, D of degree n with all roots in the left half-plane and N of lower degree, there is
//! one A of degree below n with A(s)·D(−s) + A(−s)·D(s) = N(s)·N(−s), and ∫|H(j2πf)|² df from −∞ to
//! ∞ is a_{n−1}/d_n. The equations for A have Hurwitz's matrix, so that Cramer's rule gives the
//! ratio of determinants of R. S. Phillips (1947); tables of it up to a high order stand in Newton,
//! Gould & Kaiser, Analytical Design of Linear Feedback Controls (1957).

use num_traits::{Signed, ToPrimitive, Zero};

use super::sources::Source;
use super::{TotalNoise, value_of};
use crate::algebra::{Fraction, Polynomial, Var};
use crate::analysis::Notice;
use crate::circuit::Number;

/// The largest order: beyond it the determinants are too long to read.
const HIGHEST_ORDER: usize = 4;

/// The sum over all sources; none where a share is infinite or of too high an order.
pub(crate) fn total(
    sources: &[Source],
    values: Option<&[Number]>,
    notices: &mut Vec<Notice>,
) -> Option<TotalNoise> {
    let mut say = |code, message: &str| {
        notices.push(Notice { code, message: message.to_owned(), line: 0 });
    };
    let mut square = Fraction::zero();
    for source in sources {
        let transfer = source.transfer()?;
        if transfer.is_zero() || source.weight.is_zero() {
            continue;
        }
        let (n, d) = (transfer.numerator(), transfer.denominator());
        if n.degree(Var::S) >= d.degree(Var::S) || d.trailing_degree(Var::S) > 0 {
            say("infinite-total", "the noise over all frequencies is infinite");
            return None;
        }
        if d.degree(Var::S) as usize > HIGHEST_ORDER {
            return None;
        }
        if let Some(values) = values
            && !is_stable(d, values)
        {
            say(
                "unstable",
                "the circuit is not stable at the nominal values, so it has no total noise",
            );
            return None;
        }
        let integral = mean_square(n, d)?;
        square = &square + &(&source.weight * &integral);
    }
    let value = values
        .and_then(|values| square.evaluate(|variable| value_of(values, variable)))
        .and_then(|value| value.to_f64());
    Some(TotalNoise { square, rms: value.map(f64::sqrt) })
}

/// ∫|N/D|² df from 0 to ∞; none where it is infinite whatever the values.
pub(crate) fn mean_square(numerator: &Polynomial, denominator: &Polynomial) -> Option<Fraction> {
    let d = denominator.coefficients(Var::S);
    let n = numerator.coefficients(Var::S);
    let order = d.len() - 1;
    let zero = Polynomial::zero();
    let at = |of: &[Polynomial], index: usize| of.get(index).cloned().unwrap_or_default();
    // N(s)·N(−s) holds even powers only.
    let even = |k: usize| {
        (0..=2 * k).fold(zero.clone(), |sum, i| {
            let product = &at(&n, i) * &at(&n, 2 * k - i);
            if i % 2 == 0 { &sum + &product } else { &sum - &product }
        })
    };
    let hurwitz: Vec<Vec<Polynomial>> = (0..order)
        .map(|k| {
            (0..order).map(|i| if i <= 2 * k { at(&d, 2 * k - i) } else { zero.clone() }).collect()
        })
        .collect();
    let mut replaced = hurwitz.clone();
    for (k, row) in replaced.iter_mut().enumerate() {
        if let Some(last) = row.last_mut() {
            *last = even(k);
        }
    }
    // 2·Σ (−1)^i·a_i·d_{2k−i} = (N·N(−s))_{2k}, and half of the integral lies above 0.
    let above = determinant(&replaced);
    let above = if order.is_multiple_of(2) { -&above } else { above };
    let below = &(&determinant(&hurwitz) * &d[order]) * &Polynomial::from(4);
    Fraction::new(&above, &below)
}

/// By the first row's minors: the order is small.
fn determinant(matrix: &[Vec<Polynomial>]) -> Polynomial {
    let Some((first, below)) = matrix.split_first() else { return Polynomial::one() };
    let mut sum = Polynomial::zero();
    for (column, entry) in first.iter().enumerate().filter(|(_, entry)| !entry.is_zero()) {
        let minor: Vec<Vec<Polynomial>> = below
            .iter()
            .map(|row| {
                let others = row.iter().enumerate().filter(|(other, _)| *other != column);
                others.map(|(_, entry)| entry.clone()).collect()
            })
            .collect();
        let term = entry * &determinant(&minor);
        sum = if column % 2 == 0 { &sum + &term } else { &sum - &term };
    }
    sum
}

/// Whether all roots lie in the left half-plane (Routh 1877).
fn is_stable(denominator: &Polynomial, values: &[Number]) -> bool {
    let parts = denominator.coefficients(Var::S);
    let mut numbers: Vec<Number> =
        parts.iter().map(|part| part.evaluate(|variable| value_of(values, variable))).collect();
    while numbers.last().is_some_and(Zero::is_zero) {
        numbers.pop();
    }
    numbers.reverse();
    let every_other =
        |from: usize| -> Vec<Number> { numbers.iter().skip(from).step_by(2).cloned().collect() };
    let (mut upper, mut lower) = (every_other(0), every_other(1));
    let Some(sign) = upper.first().cloned() else { return false };
    for _ in 1..numbers.len() {
        let Some(pivot) = lower.first().filter(|pivot| (*pivot * &sign).is_positive()) else {
            return false;
        };
        let factor = &upper[0] / pivot;
        let next = (1..upper.len())
            .map(|i| &upper[i] - &factor * lower.get(i).cloned().unwrap_or_default())
            .collect();
        upper = std::mem::replace(&mut lower, next);
    }
    true
}
