//! The function at other values than the nominal ones: what solving for an element, chance and loci need.

use num_complex::Complex;
use num_traits::Zero;

use super::find::{Root, find};
use crate::algebra::{Univariate, Var};
use crate::analysis::Derivation;
use crate::circuit::{Number, SymbolId};
use crate::elimination::symbol_of;
use crate::numeric::Assignment;

/// A derived function with a number for each symbol.
#[derive(Clone, Copy, Debug)]
pub struct Nominal<'a> {
    /// The function.
    pub derivation: &'a Derivation,
    /// The numbers.
    pub assignment: &'a Assignment,
}

impl Nominal<'_> {
    /// Numerator and denominator in lowest terms with these numbers changed; none where the function is not
    /// finite.
    pub(super) fn with(&self, changes: &[(SymbolId, Number)]) -> Option<(Univariate, Univariate)> {
        let value = |variable: Var| {
            let symbol = symbol_of(variable);
            let changed = changes.iter().find(|(id, _)| Some(*id) == symbol);
            match (changed, symbol) {
                (Some((_, number)), _) => number.clone(),
                (None, Some(symbol)) => self
                    .assignment
                    .numbers
                    .get(symbol.0 as usize)
                    .cloned()
                    .unwrap_or_else(Number::zero),
                (None, None) => Number::zero(),
            }
        };
        let [numerator, denominator] = self.derivation.elimination.coefficients(value);
        let (numerator, denominator) =
            (Univariate::from_integers(numerator), Univariate::from_integers(denominator));
        Univariate::lowest_terms(&numerator, &denominator)
    }

    /// As [`Self::with`], for one symbol and a double.
    pub(super) fn with_one(
        &self,
        symbol: SymbolId,
        value: f64,
    ) -> Option<(Univariate, Univariate)> {
        self.with(&[(symbol, Number::from_float(value)?)])
    }
}

/// The roots one by one, multiple ones repeated.
pub(super) fn places(polynomial: &Univariate) -> Option<Vec<Complex<f64>>> {
    let roots = find(polynomial).ok()?;
    let repeat = |root: &Root| std::iter::repeat_n(root.value, root.multiplicity as usize);
    Some(roots.iter().flat_map(repeat).collect())
}

/// How far two roots are apart, by ratio: |ln(a/b)|.
pub(super) fn distance(a: Complex<f64>, b: Complex<f64>) -> f64 {
    match (a.is_zero(), b.is_zero()) {
        (true, true) => 0.0,
        (false, false) => (a / b).ln().norm(),
        _ => f64::MAX,
    }
}

/// For each of `from` the place in `to` of the root that it has become: the closest pairs first; none
/// where `to` has fewer.
pub(super) fn follow(from: &[Complex<f64>], to: &[Complex<f64>]) -> Vec<Option<usize>> {
    let mut pairs: Vec<(f64, usize, usize)> = Vec::with_capacity(from.len() * to.len());
    for (i, &a) in from.iter().enumerate() {
        pairs.extend(to.iter().enumerate().map(|(j, &b)| (distance(a, b), i, j)));
    }
    pairs.sort_by(|a, b| a.0.total_cmp(&b.0).then((a.1, a.2).cmp(&(b.1, b.2))));
    let (mut found, mut taken) = (vec![None; from.len()], vec![false; to.len()]);
    for (_, i, j) in pairs {
        if found[i].is_none() && !taken[j] {
            (found[i], taken[j]) = (Some(j), true);
        }
    }
    found
}
