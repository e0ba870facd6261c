//! Numbers for the symbols of a claim and of the result it is about.

use num_complex::Complex;
use num_traits::{One, ToPrimitive, Zero};

use crate::algebra::{Fraction, Polynomial, Var};
use crate::analysis::notice::listed;
use crate::analysis::{ClosedForm, Entry};
use crate::circuit::{Circuit, Number, Symbol, SymbolId, SymbolRole};
use crate::elimination::symbol_of;
use crate::numeric::exact_pi;

/// The nominal number of each symbol, where it has one.
#[derive(Clone, Debug)]
pub(super) struct Values {
    numbers: Vec<Option<Number>>,
    names: Vec<String>,
    /// The frequencies that numbers are compared at, in hertz: the band, or one that the elements set.
    pub(super) frequencies: Vec<f64>,
    /// Whether the first variable is the frequency in hertz and not `s`.
    pub(super) of_frequency: bool,
}

/// How many frequencies are compared.
const POINTS: usize = 601;

impl Values {
    pub(super) fn new(circuit: &Circuit, entry: &Entry, symbols: &[Symbol]) -> Self {
        let numbers: Vec<Option<Number>> = symbols
            .iter()
            .map(|symbol| match symbol.role {
                SymbolRole::Pi => Some(exact_pi()),
                _ => symbol.nominal.clone(),
            })
            .collect();
        let own = circuit.symbols.len();
        let assignment = crate::numeric::Assignment {
            numbers: numbers[..own]
                .iter()
                .map(|number| number.clone().unwrap_or_else(Number::one))
                .collect(),
            origin: crate::numeric::Origin::Nominal,
        };
        Self {
            numbers,
            names: symbols.iter().map(|symbol| symbol.name.clone()).collect(),
            frequencies: crate::numeric::frequencies(circuit, &assignment, POINTS),
            of_frequency: entry.noise.is_some(),
        }
    }

    /// The number of a symbol.
    pub(super) fn number(&self, symbol: SymbolId) -> Option<&Number> {
        self.numbers.get(symbol.0 as usize)?.as_ref()
    }

    /// With another number for one symbol.
    pub(super) fn with(&self, symbol: SymbolId, number: Number) -> Self {
        let mut changed = self.clone();
        changed.numbers[symbol.0 as usize] = Some(number);
        changed
    }

    /// The symbols of fractions that have no number, as a list for a message.
    pub(super) fn missing(&self, fractions: &[&Fraction]) -> Option<String> {
        let mut missing: Vec<SymbolId> = fractions
            .iter()
            .flat_map(|fraction| variables(fraction))
            .filter_map(symbol_of)
            .filter(|&symbol| self.number(symbol).is_none())
            .collect();
        missing.sort_unstable();
        missing.dedup();
        if missing.is_empty() {
            return None;
        }
        let verb = if missing.len() == 1 { "has" } else { "have" };
        let names: Vec<String> =
            missing.iter().map(|symbol| format!("`{}`", self.names[symbol.0 as usize])).collect();
        Some(format!("{} {verb}", listed(names.into_iter())))
    }

    /// Coefficients by powers of the first variable; none where a number is missing.
    pub(super) fn coefficients(&self, polynomial: &Polynomial) -> Option<Vec<Number>> {
        let known = polynomial.variables().filter_map(symbol_of);
        if known.into_iter().any(|symbol| self.number(symbol).is_none()) {
            return None;
        }
        let value = |variable: Var| {
            symbol_of(variable).and_then(|s| self.number(s)).cloned().unwrap_or_else(Number::zero)
        };
        Some(polynomial.coefficients(Var::S).iter().map(|part| part.evaluate(value)).collect())
    }

    /// The fraction as a function of the frequency; none where a number is missing.
    pub(super) fn response(&self, fraction: &Fraction) -> Option<Response> {
        let floats = |polynomial: &Polynomial| -> Option<Vec<f64>> {
            let numbers = self.coefficients(polynomial)?;
            Some(numbers.iter().map(|number| number.to_f64().unwrap_or(f64::NAN)).collect())
        };
        Some(Response {
            numerator: floats(fraction.numerator())?,
            denominator: floats(fraction.denominator())?,
            of_frequency: self.of_frequency,
        })
    }

    /// The value of a fraction that does not depend on the frequency.
    pub(super) fn value(&self, fraction: &Fraction) -> Option<f64> {
        let exact = self.exact_value(fraction)?;
        exact.to_f64()
    }

    /// As [`Self::value`], exactly.
    pub(super) fn exact_value(&self, fraction: &Fraction) -> Option<Number> {
        let one = |polynomial: &Polynomial| match self.coefficients(polynomial)?.as_slice() {
            [] => Some(Number::zero()),
            [number] => Some(number.clone()),
            _ => None,
        };
        let below = one(fraction.denominator())?;
        (!below.is_zero()).then_some(one(fraction.numerator())? / below)
    }
}

/// The variables of a fraction; some may come twice.
pub(super) fn variables(fraction: &Fraction) -> impl Iterator<Item = Var> + '_ {
    fraction.numerator().variables().chain(fraction.denominator().variables())
}

/// A fraction with numbers, over the frequency.
pub(super) struct Response {
    numerator: Vec<f64>,
    denominator: Vec<f64>,
    of_frequency: bool,
}

impl Response {
    pub(super) fn at(&self, hertz: f64) -> Complex<f64> {
        let x = match self.of_frequency {
            true => Complex::new(hertz, 0.0),
            false => Complex::new(0.0, std::f64::consts::TAU * hertz),
        };
        let sum = |coefficients: &[f64]| {
            coefficients.iter().rev().fold(Complex::new(0.0, 0.0), |sum, &c| sum * x + c)
        };
        sum(&self.numerator) / sum(&self.denominator)
    }

    /// Whether it is the same at every frequency.
    pub(super) fn is_constant(&self) -> bool {
        self.numerator.len() <= 1 && self.denominator.len() <= 1
    }
}

/// The result as one fraction, expanded if need be; none where that is too long.
pub(super) fn expanded(entry: &Entry) -> Option<Fraction> {
    /// Terms up to which a nested result is expanded for a proof.
    const LONGEST: u64 = 200_000;
    match (&entry.form, &entry.elimination) {
        (ClosedForm::Expanded(fraction), _) => Some(fraction.clone()),
        (ClosedForm::Nested(_), Some(elimination)) => {
            let total = elimination.count_all_terms();
            if total > num_bigint::BigUint::from(LONGEST) {
                return None;
            }
            let (numerator, denominator) = elimination.expand();
            Fraction::new(&numerator, &denominator)
        }
        (ClosedForm::Nested(_), None) => None,
    }
}
