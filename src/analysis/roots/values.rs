//! A function with numbers for its symbols, the nominal ones or others: what everything here works on.

use num_complex::Complex;
use num_traits::{One, ToPrimitive, Zero};

use super::RootsError;
use super::find::{Root, find};
use super::sensitivity;
use crate::algebra::{Polynomial, Univariate, Var};
use crate::analysis::notice::listed;
use crate::analysis::{ClosedForm, Entry};
use crate::circuit::{Circuit, Number, Symbol, SymbolId, SymbolRole};
use crate::elimination::{Elimination, Gradient, symbol_of};
use crate::numeric::exact_pi;

/// The nearest double of an exact number.
pub(super) fn to_f64(number: &Number) -> f64 {
    number.to_f64().unwrap_or(f64::NAN)
}

/// A function and a number for each of its symbols.
#[derive(Clone, Debug)]
pub struct Nominal<'a> {
    form: &'a ClosedForm,
    elimination: Option<&'a Elimination>,
    numbers: Vec<Number>,
    floats: Vec<f64>,
}

impl<'a> Nominal<'a> {
    /// The function of a result at the nominal values.
    ///
    /// # Errors
    /// Symbols that have no value.
    pub fn new(circuit: &Circuit, entry: &'a Entry) -> Result<Self, RootsError> {
        let elimination = entry.elimination.as_ref();
        let used: Vec<Var> = match (&entry.form, elimination) {
            (ClosedForm::Expanded(fraction), _) => {
                fraction.numerator().variables().chain(fraction.denominator().variables()).collect()
            }
            (ClosedForm::Nested(_), Some(elimination)) => elimination.variables().to_vec(),
            (ClosedForm::Nested(_), None) => return Err(RootsError::TooLarge),
        };
        let mut used: Vec<SymbolId> = used.into_iter().filter_map(symbol_of).collect();
        used.sort_unstable();
        used.dedup();
        let given = |symbol: &Symbol| match symbol.role {
            SymbolRole::Pi => Some(exact_pi()),
            _ => symbol.nominal.clone(),
        };
        let missing: Vec<String> = used
            .iter()
            .filter(|&&id| given(&circuit[id]).is_none())
            .map(|&id| format!("`{}`", circuit[id].name))
            .collect();
        if !missing.is_empty() {
            let verb = if missing.len() == 1 { "has" } else { "have" };
            return Err(RootsError::NoValues(listed(missing.into_iter()), verb));
        }
        // What is not used does not count.
        let numbers: Vec<Number> = circuit
            .symbols
            .iter()
            .map(|symbol| given(symbol).unwrap_or_else(Number::one))
            .collect();
        let floats = numbers.iter().map(to_f64).collect();
        Ok(Self { form: &entry.form, elimination, numbers, floats })
    }

    /// The exact number of a symbol.
    pub(super) fn number(&self, symbol: SymbolId) -> Option<&Number> {
        self.numbers.get(symbol.0 as usize)
    }

    /// The diagram of the function, where it has one.
    pub(crate) fn elimination(&self) -> Option<&'a Elimination> {
        self.elimination
    }

    /// The numbers as doubles, by index.
    pub(crate) fn floats(&self) -> &[f64] {
        &self.floats
    }

    /// The numerator and the denominator in lowest terms for all values, where they are expanded.
    pub(crate) fn parts(&self) -> Option<[&'a Polynomial; 2]> {
        match self.form {
            ClosedForm::Expanded(fraction) => Some([fraction.numerator(), fraction.denominator()]),
            ClosedForm::Nested(_) => None,
        }
    }

    /// The value of a polynomial in the symbols alone.
    pub(super) fn value(&self, polynomial: &Polynomial) -> Number {
        polynomial.evaluate(|variable| self.value_of(variable, &[]))
    }

    fn value_of(&self, variable: Var, changes: &[(SymbolId, Number)]) -> Number {
        let Some(symbol) = symbol_of(variable) else { return Number::zero() };
        match changes.iter().find(|(changed, _)| *changed == symbol) {
            Some((_, number)) => number.clone(),
            None => self.number(symbol).cloned().unwrap_or_else(Number::zero),
        }
    }

    /// Numerator and denominator by powers of `s` with these numbers changed, not in lowest terms.
    pub(crate) fn coefficients(&self, changes: &[(SymbolId, Number)]) -> [Univariate; 2] {
        let value = |variable: Var| self.value_of(variable, changes);
        match (self.parts(), self.elimination) {
            (None, Some(elimination)) => {
                elimination.coefficients(value).map(Univariate::from_integers)
            }
            (Some(parts), _) => parts.map(|part| {
                let numbers: Vec<Number> =
                    part.coefficients(Var::S).iter().map(|c| c.evaluate(value)).collect();
                Univariate::from_rationals(&numbers)
            }),
            (None, None) => [Univariate::zero(), Univariate::zero()],
        }
    }

    /// Numerator and denominator in lowest terms with these numbers changed; none where the function is
    /// not finite.
    pub(crate) fn with(&self, changes: &[(SymbolId, Number)]) -> Option<(Univariate, Univariate)> {
        let [numerator, denominator] = self.coefficients(changes);
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

    /// Numerator and denominator at `s` with their relative derivatives.
    pub(super) fn gradients(&self, s: Complex<f64>) -> Option<[Gradient; 2]> {
        match self.elimination {
            Some(elimination) => Some(elimination.gradients_at(s, &self.floats)),
            None => self.expanded_gradients(s),
        }
    }

    /// The same from the terms of the formula in lowest terms.
    pub(super) fn expanded_gradients(&self, s: Complex<f64>) -> Option<[Gradient; 2]> {
        Some(self.parts()?.map(|part| sensitivity::gradient(part, &self.floats, s)))
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
