//! The exact value of a transfer at one point of a prime field, by sparse Gaussian elimination.
//!
//! Costs little more than a floating solve and never rounds. Two rational functions that agree at
//! a random point modulo a 61-bit prime differ with a probability of about degree/2^61 (Schwartz
//! 1980, Zippel 1979).

use super::network::{Form, Network, System, summed};
use super::sparse::eliminate;
use super::{Field, NumericError, PrimeField, lowered};
use crate::circuit::{Circuit, Transfer};

/// The four largest primes below 2^61.
pub const PRIMES: [u64; 4] = [
    2_305_843_009_213_693_951,
    2_305_843_009_213_693_921,
    2_305_843_009_213_693_907,
    2_305_843_009_213_693_723,
];

/// numerator/denominator of the transfer at `s`, everything modulo `prime`; `symbols` is indexed
/// by symbol.
///
/// # Errors
/// [`NumericError::Singular`] where the equations have no unique solution at this point, which at
/// a random point means everywhere; [`NumericError::ZeroDenominator`] likewise; others as named.
pub fn modular_value(
    circuit: &Circuit,
    transfer: &Transfer,
    prime: u64,
    s: u64,
    symbols: &[u64],
) -> Result<u64, NumericError> {
    let circuit = lowered(circuit);
    let network = Network::new(&circuit, transfer)?;
    let field = PrimeField::new(prime);
    let reduced: Vec<u64> = symbols.iter().map(|value| value % field.prime()).collect();
    let system = network.assemble(&field, &reduced, &(s % field.prime()), Form::Compact)?;
    let [numerator, denominator] = probe_values(&field, &system)?;
    let inverse = field.inverse(&denominator).ok_or(NumericError::ZeroDenominator)?;
    Ok(field.multiply(&numerator, &inverse))
}

/// Both probes of a system over an exact field.
pub(crate) fn probe_values<F: Field>(
    field: &F,
    system: &System<F::Element>,
) -> Result<[F::Element; 2], NumericError> {
    let size = system.rows.len();
    let mut rows: Vec<_> = system.rows.iter().map(|row| summed(field, row)).collect();
    for (row, right) in rows.iter_mut().zip(&system.right) {
        row.retain(|(_, value)| !field.is_zero(value));
        if !field.is_zero(right) {
            row.push((size, right.clone()));
        }
    }
    for probe in &system.probes {
        let mut row = summed(field, &probe.row);
        // The corner becomes d − c·A⁻¹·b; with d = −constant it is minus the probe.
        row.push((size, field.negative(&probe.constant)));
        rows.push(row);
    }
    if eliminate(field, &mut rows, size).len() < size {
        return Err(NumericError::Singular);
    }
    let corner = |row: &Vec<(usize, F::Element)>| {
        let last = row.last().filter(|(column, _)| *column == size);
        last.map_or_else(|| field.zero(), |(_, value)| field.negative(value))
    };
    Ok([corner(&rows[size]), corner(&rows[size + 1])])
}
