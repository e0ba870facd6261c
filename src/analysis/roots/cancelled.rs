//! Poles and zeros that coincide at the nominal values only.

use num_complex::Complex;

use super::RootsError;
use super::find::{Root, find};
use super::sensitivity::{self, Sensitivity, Side};
use super::values::Nominal;
use crate::analysis::Notice;
use crate::circuit::SymbolId;

/// A pole and a zero in one place.
#[derive(Clone, Debug, PartialEq)]
pub struct Cancelled {
    /// The place.
    pub root: Root,
    /// The symbols that move one of them away from the other: those to which they differ in sensitivity.
    pub separating: Vec<SymbolId>,
}

/// The pairs that have cancelled with the numbers put in; pairs that coincide for all values are none.
pub(super) fn find_cancelled(
    nominal: &Nominal<'_>,
    notices: &[Notice],
) -> Result<Vec<Cancelled>, RootsError> {
    // The coefficients of a nested form may have a factor in common for all values: look only where
    // the numbers are known to have cancelled something.
    let noticed = notices.iter().any(|notice| notice.code == "cancelled-at-nominal");
    if !noticed && nominal.parts().is_none() {
        return Ok(Vec::new());
    }
    let [numerator, denominator] = nominal.coefficients(&[]);
    if numerator.is_zero() {
        return Ok(Vec::new());
    }
    let common = numerator.gcd(&denominator);
    let mut cancelled = Vec::new();
    for root in find(&common)? {
        let of = |side| sensitivity::of_root(nominal, root.value, side);
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
