//! The exact witness: a transfer over Q\[s\] by fraction-free elimination (Bareiss 1968).
//!
//! The equations are written over Q(s) and each row is multiplied by the least common denominator,
//! so that entries are integer polynomials. Bordered by the right side and by one row for each
//! probe, elimination leaves in the two corners the determinants of Cramer's rule, so their ratio
//! is the answer. Every division on the way is exact (Sylvester's identity).

use num_bigint::BigInt;
use num_traits::{One, Zero};

use super::network::{Form, Network, System, summed};
use super::polynomial::{Polynomial, Quotient, Quotients};
use super::values::images;
use super::{Field, NumericError};
use crate::circuit::{Circuit, Number, Transfer};

/// Bound of unknowns³ · (degree + 1)² up to which the exact solve is a matter of a second or two.
const AFFORDABLE_WORK: usize = 100_000_000;

/// A rational function of s in lowest terms; coefficients ascend from the constant one.
///
/// The lowest coefficient of the denominator that is not 0 is 1; 0 has an empty numerator over 1.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Fraction {
    /// Coefficients of the numerator.
    pub numerator: Vec<Number>,
    /// Coefficients of the denominator.
    pub denominator: Vec<Number>,
}

/// Whether the exact solve is predicted to end soon.
///
/// # Errors
/// Those of the assembly of the equations.
pub fn exact_is_affordable(
    circuit: &Circuit,
    transfer: &Transfer,
    numbers: &[Number],
) -> Result<bool, NumericError> {
    Ok(is_affordable(&Matrix::new(circuit, transfer, numbers)?))
}

/// The transfer as a rational function of s at these numbers, indexed by symbol.
///
/// # Errors
/// [`NumericError::Singular`] where the determinant is zero as a polynomial,
/// [`NumericError::ZeroDenominator`], [`NumericError::TooLarge`] (see [`exact_is_affordable`]),
/// and those of the assembly.
pub fn exact(
    circuit: &Circuit,
    transfer: &Transfer,
    numbers: &[Number],
) -> Result<Fraction, NumericError> {
    let matrix = Matrix::new(circuit, transfer, numbers)?;
    if !is_affordable(&matrix) {
        return Err(NumericError::TooLarge);
    }
    let [numerator, denominator] = matrix.corners()?;
    if denominator.is_zero() {
        return Err(NumericError::ZeroDenominator);
    }
    Ok(Fraction::from_integers(&numerator, &denominator))
}

impl Fraction {
    /// From coefficients in any scale; trailing zeros and common factors are removed. `None` when
    /// the denominator is 0.
    pub fn new(numerator: &[Number], denominator: &[Number]) -> Option<Self> {
        let (upper, upper_scale) = integers(numerator);
        let (lower, lower_scale) = integers(denominator);
        if lower.is_zero() {
            return None;
        }
        let upper = upper.multiply(&Polynomial::constant(lower_scale));
        let lower = lower.multiply(&Polynomial::constant(upper_scale));
        Some(Self::from_integers(&upper, &lower))
    }

    fn from_integers(numerator: &Polynomial, denominator: &Polynomial) -> Self {
        let quotient = Quotient::new(numerator.clone(), denominator.clone());
        let lowest = quotient.denominator.coefficients().iter().find(|a| !a.is_zero());
        let lowest = lowest.cloned().unwrap_or_else(BigInt::one);
        let scaled = |polynomial: &Polynomial| {
            let coefficients = polynomial.coefficients().iter();
            coefficients.map(|a| Number::new(a.clone(), lowest.clone())).collect()
        };
        Self { numerator: scaled(&quotient.numerator), denominator: scaled(&quotient.denominator) }
    }
}

impl std::fmt::Display for Fraction {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        let polynomial = |coefficients: &[Number]| {
            let terms: Vec<String> = coefficients
                .iter()
                .enumerate()
                .filter(|(_, a)| !a.is_zero())
                .map(|(power, a)| match power {
                    0 => a.to_string(),
                    power => format!("{a}*s^{power}"),
                })
                .collect();
            if terms.is_empty() { "0".to_owned() } else { terms.join(" + ") }
        };
        write!(f, "({})/({})", polynomial(&self.numerator), polynomial(&self.denominator))
    }
}

/// An integer polynomial and the common denominator that it was multiplied by.
fn integers(coefficients: &[Number]) -> (Polynomial, BigInt) {
    let scale = coefficients
        .iter()
        .fold(BigInt::one(), |scale, a| num_integer::Integer::lcm(&scale, a.denom()));
    let whole = coefficients.iter().map(|a| a.numer() * (&scale / a.denom())).collect();
    (Polynomial::new(whole), scale)
}

/// Bordered equations: `size` + 2 rows and `size` + 1 columns.
struct Matrix {
    size: usize,
    rows: Vec<Vec<Polynomial>>,
}

fn is_affordable(matrix: &Matrix) -> bool {
    let degree: usize = matrix.rows[..matrix.size]
        .iter()
        .map(|row| row.iter().map(Polynomial::degree).max().unwrap_or(0))
        .sum();
    let size = matrix.size;
    let work = size.saturating_pow(3).saturating_mul((degree + 1).saturating_pow(2));
    work <= AFFORDABLE_WORK
}

impl Matrix {
    fn new(
        circuit: &Circuit,
        transfer: &Transfer,
        numbers: &[Number],
    ) -> Result<Self, NumericError> {
        let network = Network::new(circuit, transfer)?;
        let field = Quotients;
        let symbols = images(&field, numbers)?;
        let s = Quotient {
            numerator: Polynomial::new(vec![BigInt::zero(), BigInt::one()]),
            denominator: Polynomial::one(),
        };
        let system: System<Quotient> = network.assemble(&field, &symbols, &s, Form::Compact)?;
        let size = system.rows.len();
        let dense = |row: &[(usize, Quotient)], last: Quotient| {
            let mut cells = vec![field.zero(); size + 1];
            for (column, value) in summed(&field, row) {
                cells[column] = value;
            }
            cells[size] = last;
            without_denominators(&cells)
        };
        let mut rows: Vec<_> = system
            .rows
            .iter()
            .zip(&system.right)
            .map(|(row, right)| dense(row, right.clone()))
            .collect();
        // Their entries are −1, 0 and 1: these rows are not scaled, so the ratio is kept.
        let [upper, lower] = system.probes;
        for probe in [upper, lower] {
            rows.push(dense(&probe.row, field.negative(&probe.constant)));
        }
        Ok(Self { size, rows })
    }

    /// det A · (d − c·A⁻¹·b) up to a sign, for both probes.
    fn corners(mut self) -> Result<[Polynomial; 2], NumericError> {
        let size = self.size;
        let mut previous = Polynomial::one();
        for step in 0..size {
            let (row, column) = self.pivot(step).ok_or(NumericError::Singular)?;
            self.rows.swap(step, row);
            self.rows.iter_mut().for_each(|row| row.swap(step, column));
            let (done, rest) = self.rows.split_at_mut(step + 1);
            let pivot_row = &done[step];
            let pivot = &pivot_row[step];
            for row in rest {
                let factor = std::mem::take(&mut row[step]);
                for (cell, above) in row[step + 1..].iter_mut().zip(&pivot_row[step + 1..]) {
                    let mut product =
                        if cell.is_zero() { Polynomial::zero() } else { pivot.multiply(cell) };
                    if !factor.is_zero() && !above.is_zero() {
                        product = product.subtract(&factor.multiply(above));
                    }
                    *cell = product.divide_exactly(&previous);
                }
            }
            previous = self.rows[step][step].clone();
        }
        let mut corners = self.rows.drain(size..).map(|mut row| row.pop().unwrap_or_default());
        match (corners.next(), corners.next()) {
            (Some(numerator), Some(denominator)) => Ok([numerator, denominator]),
            _ => Err(NumericError::Singular),
        }
    }

    /// The entry with the least fill (Markowitz 1957), then the least degree.
    fn pivot(&self, step: usize) -> Option<(usize, usize)> {
        let active = step..self.size;
        let mut columns = vec![0usize; self.size];
        let mut counts = vec![0usize; self.size];
        for i in active.clone() {
            for j in active.clone().filter(|j| !self.rows[i][*j].is_zero()) {
                columns[j] += 1;
                counts[i] += 1;
            }
        }
        let entries = active.clone().flat_map(|i| active.clone().map(move |j| (i, j)));
        entries
            .filter(|(i, j)| !self.rows[*i][*j].is_zero())
            .min_by_key(|(i, j)| ((counts[*i] - 1) * (columns[*j] - 1), self.rows[*i][*j].degree()))
    }
}

/// A row times its least common denominator, with integer polynomials left.
fn without_denominators(cells: &[Quotient]) -> Vec<Polynomial> {
    let common = cells.iter().fold(Polynomial::one(), |common, cell| {
        let gcd = common.gcd(&cell.denominator);
        common.multiply(&cell.denominator.divide_exactly(&gcd))
    });
    cells
        .iter()
        .map(|cell| cell.numerator.multiply(&common.divide_exactly(&cell.denominator)))
        .collect()
}
