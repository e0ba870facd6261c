//! What the tolerances do to a root: the shift to expect, and the worst one.

use super::sensitivity::Sensitivity;
use super::values::to_f64;
use crate::circuit::{Circuit, SymbolId};

/// Relative shifts, to first order in the tolerances.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Shift {
    /// The root of the sum of squares: what independent deviations add up to.
    pub expected: f64,
    /// All deviations at their limits, each in the worse direction.
    pub worst: f64,
}

/// The relative tolerance of a symbol: its larger side over the nominal value.
pub(super) fn relative(circuit: &Circuit, symbol: SymbolId) -> Option<f64> {
    let symbol = &circuit[symbol];
    let (nominal, tolerance) = (symbol.nominal.as_ref()?, symbol.tolerance.as_ref()?);
    let side = to_f64(&tolerance.low).abs().max(to_f64(&tolerance.high).abs());
    let relative = side / to_f64(nominal).abs();
    relative.is_finite().then_some(relative)
}

/// The shift of a quantity with these relative sensitivities; none where no symbol of it has a tolerance.
pub(super) fn shift(
    circuit: &Circuit,
    sensitivities: &[Sensitivity],
    part: impl Fn(&Sensitivity) -> f64,
) -> Option<Shift> {
    let shares: Vec<f64> = sensitivities
        .iter()
        .filter_map(|one| Some((part(one) * relative(circuit, one.symbol)?).abs()))
        .collect();
    if shares.is_empty() {
        return None;
    }
    Some(Shift {
        expected: shares.iter().map(|share| share * share).sum::<f64>().sqrt(),
        worst: shares.iter().sum(),
    })
}
