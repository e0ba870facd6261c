//! How far each root moves with each symbol, by implicit differentiation.
//!
//! Where D(p) = 0, (x/p)·∂p/∂x = −(x·∂D/∂x)/(s·∂D/∂s) at s = p; both come from one backward pass over
//! the diagram of the elimination, so long formulas are never expanded. A factor that numerator and
//! denominator share multiplies both by the same number and does no harm unless it vanishes too.
//!
//! What must hold (the equations of a network are homogeneous in each unit): the sum over all symbols of
//! the exponent of the second × sensitivity is −1, and of the volt and of the ampere it is 0. For
//! an RC network that is Σ_R S = Σ_C S = −1, the scalings of impedance and of frequency.

use num_complex::Complex;
use num_traits::{ToPrimitive, Zero};

use super::values::Nominal;
use crate::algebra::Polynomial;
use crate::circuit::SymbolId;
use crate::elimination::{Gradient, symbol_of};

/// (x/p)·∂p/∂x for one symbol: the real part is the relative change of |p|, the imaginary part the
/// change of the angle, in radians, for a relative change of the symbol.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Sensitivity {
    /// The symbol.
    pub symbol: SymbolId,
    /// The relative sensitivity.
    pub value: Complex<f64>,
}

/// A polynomial's sensitivity is certain where the evaluation noise moves the root by less than this.
const TRUSTED: f64 = 1e-6;

/// Which roots are meant.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Side {
    Zeros,
    Poles,
}

/// The sensitivities of a simple root; none where the derivative vanishes in the arithmetic (a
/// multiple root moves infinitely fast) and for a root at 0.
pub(super) fn of_root(
    nominal: &Nominal<'_>,
    root: Complex<f64>,
    side: Side,
) -> Option<Vec<Sensitivity>> {
    if root.is_zero() {
        return None;
    }
    let pick = |[numerator, denominator]: [Gradient; 2]| match side {
        Side::Zeros => implicit(&numerator),
        Side::Poles => implicit(&denominator),
    };
    // A common factor of the elimination may vanish too; the formula in lowest terms has none.
    nominal
        .gradients(root)
        .and_then(pick)
        .or_else(|| nominal.expanded_gradients(root).and_then(pick))
}

/// A polynomial at `s` and these values with its relative derivatives, term by term.
pub(super) fn gradient(polynomial: &Polynomial, symbols: &[f64], s: Complex<f64>) -> Gradient {
    let mut gradient =
        Gradient { value: Complex::zero(), by_s: Complex::zero(), by_symbol: Vec::new() };
    let variables = polynomial.variables().filter_map(symbol_of);
    gradient.by_symbol.extend(variables.map(|symbol| (symbol, Complex::zero())));
    for (powers, coefficient) in polynomial.terms() {
        let mut term = Complex::new(coefficient.to_f64().unwrap_or(f64::NAN), 0.0);
        for (variable, power) in powers.clone() {
            let base = match symbol_of(variable) {
                Some(symbol) => Complex::new(symbols[symbol.0 as usize], 0.0),
                None => s,
            };
            term *= base.powu(power);
        }
        gradient.value += term;
        for (variable, power) in powers {
            let share = term * f64::from(power);
            match symbol_of(variable) {
                None => gradient.by_s += share,
                Some(symbol) => {
                    let place = gradient.by_symbol.binary_search_by_key(&symbol, |one| one.0);
                    if let Ok(place) = place {
                        gradient.by_symbol[place].1 += share;
                    }
                }
            }
        }
    }
    gradient
}

fn implicit(gradient: &Gradient) -> Option<Vec<Sensitivity>> {
    let slope = gradient.by_s;
    if slope.is_zero() || gradient.value.norm() > TRUSTED * slope.norm() {
        return None;
    }
    let each = gradient
        .by_symbol
        .iter()
        .map(|&(symbol, share)| Sensitivity { symbol, value: -share / slope });
    Some(each.collect())
}

/// The sensitivities of the function itself at `s`: x·∂H/∂x / H; none where H or 1/H is 0.
pub(super) fn of_value(nominal: &Nominal<'_>, s: Complex<f64>) -> Option<Vec<Sensitivity>> {
    let finite = |[above, below]: &[Gradient; 2]| !above.value.is_zero() && !below.value.is_zero();
    let [above, below] = nominal
        .gradients(s)
        .filter(finite)
        .or_else(|| nominal.expanded_gradients(s).filter(finite))?;
    let share = |gradient: &Gradient, symbol: SymbolId| {
        let found = gradient.by_symbol.iter().find(|(other, _)| *other == symbol);
        found.map_or_else(Complex::zero, |(_, share)| share / gradient.value)
    };
    let mut all: Vec<SymbolId> =
        above.by_symbol.iter().chain(&below.by_symbol).map(|&(symbol, _)| symbol).collect();
    all.sort_unstable();
    all.dedup();
    let each = all
        .into_iter()
        .map(|symbol| Sensitivity { symbol, value: share(&above, symbol) - share(&below, symbol) });
    Some(each.collect())
}

/// s·H'/H at `s`.
pub(super) fn logarithmic_slope(nominal: &Nominal<'_>, s: Complex<f64>) -> Option<Complex<f64>> {
    let [above, below] = nominal.gradients(s)?;
    let slope = above.by_s / above.value - below.by_s / below.value;
    slope.is_finite().then_some(slope)
}

/// The part of the largest sensitivity of a root from which on a symbol counts among those that set it.
pub const SET_BY_SHARE: f64 = 0.1;

/// The symbols whose sensitivity is at least [`SET_BY_SHARE`] of the largest, the largest first.
pub(super) fn set_by(sensitivities: &[Sensitivity]) -> Vec<SymbolId> {
    let size = |one: &Sensitivity| one.value.norm();
    let largest = sensitivities.iter().map(size).fold(0.0, f64::max);
    let mut kept: Vec<&Sensitivity> = sensitivities
        .iter()
        .filter(|one| size(one) > 0.0 && size(one) >= SET_BY_SHARE * largest)
        .collect();
    // Equal ones, but for rounding, stay in the circuit's order.
    kept.sort_by_key(|one| std::cmp::Reverse((size(one) * 1e9 / largest).round() as i64));
    kept.into_iter().map(|one| one.symbol).collect()
}
