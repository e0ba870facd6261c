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
use super::{Additive, NumericError, lowered};
use crate::circuit::{Circuit, Number, Transfer};

/// Bound of unknowns³ · (degree + 1)² up to which the exact solve stays within about a second.
const AFFORDABLE_WORK: usize = 100_000_000;

/// Powers of ten tried as the unit of s: with picofarads beside siemens, integers are three times
/// shorter where s counts in 1e9/s.
const UNITS: [usize; 4] = [3, 6, 9, 12];

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
    match Matrix::new(&lowered(circuit), transfer, numbers, 0) {
        Err(NumericError::TooLarge) => Ok(false),
        matrix => Ok(matrix?.is_affordable()),
    }
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
    let circuit = lowered(circuit);
    let mut matrix = Matrix::new(&circuit, transfer, numbers, 0)?;
    if !matrix.is_affordable() {
        return Err(NumericError::TooLarge);
    }
    for exponent in UNITS {
        let other = Matrix::new(&circuit, transfer, numbers, exponent)?;
        if other.bits() < matrix.bits() {
            matrix = other;
        }
    }
    let exponent = matrix.exponent;
    let [numerator, denominator] = matrix.corners()?;
    if denominator.is_zero() {
        return Err(NumericError::ZeroDenominator);
    }
    let degree = numerator.degree().max(denominator.degree());
    let [numerator, denominator] = [numerator, denominator].map(|polynomial| {
        let ten = BigInt::from(10);
        let coefficients = polynomial.coefficients().iter().enumerate();
        let powers = coefficients
            .map(|(power, a)| a * num_traits::pow(ten.clone(), exponent * (degree - power)));
        Polynomial::new(powers.collect())
    });
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

/// Bordered equations without denominators: `size` + 2 rows over `size` + 1 columns.
struct Matrix {
    size: usize,
    /// The unit of s in the entries, as a power of ten.
    exponent: usize,
    rows: Vec<Vec<(usize, Polynomial)>>,
}

impl Matrix {
    fn new(
        circuit: &Circuit,
        transfer: &Transfer,
        numbers: &[Number],
        exponent: usize,
    ) -> Result<Self, NumericError> {
        let network = Network::new(circuit, transfer)?;
        if network.voltages().saturating_pow(3) > AFFORDABLE_WORK {
            return Err(NumericError::TooLarge);
        }
        let field = Quotients;
        let symbols = images(&field, numbers)?;
        let s = Quotient {
            numerator: Polynomial::new(vec![
                BigInt::zero(),
                num_traits::pow(BigInt::from(10), exponent),
            ]),
            denominator: Polynomial::one(),
        };
        let system: System<Quotient> = network.assemble(&field, &symbols, &s, Form::Compact)?;
        let size = system.rows.len();
        let bordered = |row: &[(usize, Quotient)], last: Quotient| {
            let mut cells = summed(&field, row);
            cells.push((size, last));
            without_denominators(&cells)
        };
        let equations = system.rows.iter().zip(system.right);
        let mut rows: Vec<_> = equations.map(|(row, right)| bordered(row, right)).collect();
        // Their entries are −1, 0 and 1: these rows are not scaled, so the ratio is kept.
        for probe in &system.probes {
            rows.push(bordered(&probe.row, field.negative(&probe.constant)));
        }
        Ok(Self { size, exponent, rows })
    }

    /// Binary digits of all entries.
    fn bits(&self) -> u64 {
        let cells = self.rows.iter().flatten();
        cells.flat_map(|(_, cell)| cell.coefficients()).map(BigInt::bits).sum()
    }

    fn is_affordable(&self) -> bool {
        let degree = |row: &Vec<(usize, Polynomial)>| {
            row.iter().map(|(_, cell)| cell.degree()).max().unwrap_or(0)
        };
        let degree: usize = self.rows.iter().map(degree).sum();
        let work = self.size.saturating_pow(3).saturating_mul((degree + 1).saturating_pow(2));
        work <= AFFORDABLE_WORK
    }

    /// det A · (d − c·A⁻¹·b) up to a sign, for both probes.
    fn corners(self) -> Result<[Polynomial; 2], NumericError> {
        let size = self.size;
        let mut rows = vec![vec![Polynomial::zero(); size + 1]; size + 2];
        for (cells, row) in rows.iter_mut().zip(self.rows) {
            for (column, value) in row {
                cells[column] = value;
            }
        }
        let mut previous = Polynomial::one();
        for step in 0..size {
            let (row, column) = choose_pivot(&rows, step, size).ok_or(NumericError::Singular)?;
            rows.swap(step, row);
            rows.iter_mut().for_each(|row| row.swap(step, column));
            let (done, rest) = rows.split_at_mut(step + 1);
            let pivot_row = &done[step];
            for row in rest {
                eliminate_row(row, pivot_row, step, &previous);
            }
            previous = rows[step][step].clone();
        }
        let mut corners = rows.drain(size..).map(|mut row| row.pop().unwrap_or_default());
        match (corners.next(), corners.next()) {
            (Some(numerator), Some(denominator)) => Ok([numerator, denominator]),
            _ => Err(NumericError::Singular),
        }
    }
}

/// One row of one of Bareiss's steps.
fn eliminate_row(
    row: &mut [Polynomial],
    pivot_row: &[Polynomial],
    step: usize,
    previous: &Polynomial,
) {
    let factor = std::mem::take(&mut row[step]);
    let pivot = &pivot_row[step];
    for (cell, above) in row[step + 1..].iter_mut().zip(&pivot_row[step + 1..]) {
        let product = pivot.multiply(cell).subtract(&factor.multiply(above));
        *cell = product.divide_exactly(previous);
    }
}

/// The entry with the least fill (Markowitz 1957), then the least degree.
fn choose_pivot(rows: &[Vec<Polynomial>], step: usize, size: usize) -> Option<(usize, usize)> {
    let (mut row_counts, mut column_counts) = (vec![0usize; size], vec![0usize; size]);
    let mut entries = Vec::new();
    for i in step..size {
        for j in (step..size).filter(|j| !rows[i][*j].is_zero()) {
            row_counts[i] += 1;
            column_counts[j] += 1;
            entries.push((i, j));
        }
    }
    let fill = |i: usize, j: usize| (row_counts[i] - 1) * (column_counts[j] - 1);
    entries.into_iter().min_by_key(|&(i, j)| (fill(i, j), rows[i][j].degree()))
}

/// A row times its least common denominator.
fn without_denominators(cells: &[(usize, Quotient)]) -> Vec<(usize, Polynomial)> {
    let common = cells.iter().fold(Polynomial::one(), |common, (_, cell)| {
        let gcd = common.gcd(&cell.denominator);
        common.multiply(&cell.denominator.divide_exactly(&gcd))
    });
    let cleared =
        |cell: &Quotient| cell.numerator.multiply(&common.divide_exactly(&cell.denominator));
    cells.iter().map(|(column, cell)| (*column, cleared(cell))).collect()
}
