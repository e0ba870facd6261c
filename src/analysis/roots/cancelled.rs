//! Poles and zeros that coincide at the nominal values only.

use num_complex::Complex;

use super::RootsError;
use super::find::{Root, find};
use super::sensitivity::{self, Sensitivity, Side};
use crate::algebra::{Univariate, Var};
use crate::analysis::Derivation;
use crate::circuit::{Number, SymbolId};
use crate::elimination::symbol_of;

/// A pole and a zero in one place.
#[derive(Clone, Debug, PartialEq)]
pub struct Cancelled {
    /// The place.
    pub root: Root,
    /// The symbols that move one of them away from the other: those to which they differ in sensitivity.
    pub separating: Vec<SymbolId>,
}

/// The pairs that the numeric form has lost; pairs that coincide for all values are none.
pub(super) fn find_cancelled(
    derivation: &Derivation,
    numbers: &[Number],
    symbols: &[f64],
) -> Result<Vec<Cancelled>, RootsError> {
    if !derivation.notices.iter().any(|notice| notice.code == "cancelled-at-nominal") {
        return Ok(Vec::new());
    }
    let value = |variable: Var| {
        symbol_of(variable)
            .and_then(|symbol| numbers.get(symbol.0 as usize).cloned())
            .unwrap_or_else(|| Number::from_integer(0.into()))
    };
    let [numerator, denominator] = derivation.elimination.coefficients(value);
    let common = Univariate::from_integers(numerator).gcd(&Univariate::from_integers(denominator));
    let mut cancelled = Vec::new();
    for root in find(&common)? {
        let of = |side| sensitivity::of_root(&derivation.elimination, symbols, root.value, side);
        let separating = match (of(Side::Zeros), of(Side::Poles)) {
            (Some(zero), Some(pole)) => different(&zero, &pole),
            _ => Vec::new(),
        };
        let certain = root.multiplicity == 1 && root.value != Complex::new(0.0, 0.0);
        if !separating.is_empty() || !certain {
            cancelled.push(Cancelled { root, separating });
        }
    }
    Ok(cancelled)
}

fn different(zero: &[Sensitivity], pole: &[Sensitivity]) -> Vec<SymbolId> {
    let value = |list: &[Sensitivity], symbol| {
        list.iter().find(|one| one.symbol == symbol).map_or(Complex::new(0.0, 0.0), |one| one.value)
    };
    let mut all: Vec<SymbolId> = zero.iter().chain(pole).map(|one| one.symbol).collect();
    all.sort_unstable();
    all.dedup();
    all.retain(|&symbol| (value(zero, symbol) - value(pole, symbol)).norm() > 1e-6);
    all
}
