//! Noise densities: the one-sided density of a voltage in V²/Hz, as a function of the frequency f.
//!
//! Every noisy element drives the circuit with a current of known density beside it, and the densities
//! add up: S(f) = Σ w·|Z(j2πf)|², Z the transfer from that current to the voltage. Resistors and
//! conductances have w = 4·k_B·T_0·G (J. B. Johnson and H. Nyquist, Phys. Rev. 32, 1928), junctions
//! with a given bias w = 2·q_e·I (W. Schottky, Ann. Phys. 362, 1918). |Z|² is a ratio of polynomials
//! in f with real coefficients, so S is one rational function of f and the symbols. In its
//! polynomials f takes the place of `s`.

mod band;
mod integral;
mod sources;
mod witness;

use super::Length;
use super::{AnalysisError, Check, ClosedForm, Entry, Notice, NumericForm, Options, limit_text};
use crate::algebra::{Fraction, Polynomial, Var, gcd};
use crate::circuit::{Ask, Circuit, NodeId, Number, Unit};
use crate::elimination::symbol_of;
use crate::numeric::{Assignment, Origin};
use sources::{Constants, Source};

pub use band::BandNoise;

/// What a noise density consists of, and what it adds up to.
#[derive(Clone, Debug)]
pub struct Noise {
    /// Every noisy element, in the order of the circuit; those that do not reach the voltage have 0.
    pub contributors: Vec<Contributor>,
    /// The mean square over all frequencies, where it is finite and of an order up to 4.
    pub total: Option<TotalNoise>,
    /// The mean square in the band, where that and all nominal values are given.
    pub band: Option<BandNoise>,
}

/// The share of one noisy element.
#[derive(Clone, Debug)]
pub struct Contributor {
    /// The element, or a device's terminal for shot noise.
    pub element: String,
    /// Its share of the density, in V²/Hz.
    pub density: Fraction,
}

/// The mean square over all frequencies from 0.
#[derive(Clone, Debug)]
pub struct TotalNoise {
    /// In V². It holds where the circuit is stable.
    pub square: Fraction,
    /// The root of its nominal value, in volt.
    pub rms: Option<f64>,
}

/// Products of terms for each term that is allowed: terms meet in the squares.
const SQUARES: usize = 30;

/// The noise density of a voltage.
///
/// # Errors
/// Those of the transfer functions, and [`AnalysisError::TooLong`]: a density has no nested form.
pub(crate) fn answer(
    circuit: &Circuit,
    ask: &Ask,
    (plus, minus): (NodeId, NodeId),
    options: &Options,
) -> Result<Entry, AnalysisError> {
    let constants = Constants::new(circuit);
    let sources = sources::find(circuit, &constants, (plus, minus), options)?;
    check_length(&sources, options)?;
    let squared: Vec<Fraction> = sources.iter().map(|source| constants.density(source)).collect();
    let sum = total_density(&sources, &constants);
    if sum.numerator().len() + sum.denominator().len() > options.max_terms {
        return Err(too_long(options));
    }
    let report = witness::compare(circuit, &constants, &sources, &sum)?;
    let mut notices: Vec<Notice> = Vec::new();
    for notice in sources.iter().flat_map(|source| &source.derivation.notices) {
        // That one element has no influence on the answer for another says nothing here.
        let general = !matches!(notice.code, "no-influence" | "zero-answer" | "zero-limit");
        if general && !notices.contains(notice) {
            notices.push(notice.clone());
        }
    }
    let mut checks: Vec<Check> = Vec::new();
    for check in sources.iter().flat_map(|source| &source.derivation.checks) {
        if !checks.contains(check) {
            checks.push(check.clone());
        }
    }
    let limited = super::limits::without_limited(circuit);
    let assignment = nominal(&limited, &sources);
    let values = assignment.as_ref().map(|numbers| constants.values(numbers));
    let total = integral::total(&sources, values.as_deref(), &mut notices);
    let band =
        assignment.as_ref().and_then(|_| band::in_band(circuit, &sources, values.as_deref()?));
    let contributors = sources
        .iter()
        .zip(squared)
        .map(|(source, density)| Contributor { element: source.name.clone(), density })
        .collect();
    Ok(Entry {
        name: ask.name.clone(),
        query: ask.text.clone(),
        source: None,
        unit: Unit::VOLT.power(2).over(Unit::HERTZ),
        symbols: constants.symbols.clone(),
        own_symbols: circuit.symbols.len(),
        length: Length::of(&sum),
        numeric: values.as_deref().and_then(|values| rounded(&sum, values)),
        form: ClosedForm::Expanded(sum),
        limits: circuit.limits.iter().map(|limit| limit_text(circuit, limit)).collect(),
        evidence: report,
        checks,
        notices,
        elimination: None,
        noise: Some(Noise { contributors, total, band }),
    })
}

fn too_long(options: &Options) -> AnalysisError {
    AnalysisError::TooLong { what: "the noise density", allowed: options.max_terms }
}

fn check_length(sources: &[Source], options: &Options) -> Result<(), AnalysisError> {
    let mut products = 0_usize;
    for source in sources {
        let Some(transfer) = source.transfer() else { return Err(too_long(options)) };
        for part in [transfer.numerator(), transfer.denominator()] {
            products = products.saturating_add(part.len().saturating_mul(part.len()));
        }
    }
    if products > options.max_terms.saturating_mul(SQUARES) {
        return Err(too_long(options));
    }
    Ok(())
}

/// The sum of all shares over their common denominator. The transfers share nearly all of theirs, so
/// that is found before anything is squared.
fn total_density(sources: &[Source], constants: &Constants) -> Fraction {
    let mut weights = Polynomial::one();
    let mut transfers = Polynomial::one();
    let reached = || {
        sources
            .iter()
            .filter_map(|source| Some((&source.weight, source.transfer()?)))
            .filter(|(weight, transfer)| !weight.is_zero() && !transfer.is_zero())
    };
    for (weight, transfer) in reached() {
        weights = common_multiple(&weights, weight.denominator());
        transfers = common_multiple(&transfers, transfer.denominator());
    }
    let mut numerator = Polynomial::zero();
    for (weight, transfer) in reached() {
        let cofactor = |whole: &Polynomial, part: &Polynomial| {
            whole.divide_exact(part).unwrap_or_else(Polynomial::one)
        };
        let weight = weight.numerator() * &cofactor(&weights, weight.denominator());
        let transfer = transfer.numerator() * &cofactor(&transfers, transfer.denominator());
        numerator = &numerator + &(&weight * &constants.square(&transfer));
    }
    let denominator = &weights * &constants.square(&transfers);
    Fraction::new(&numerator, &denominator).unwrap_or_else(Fraction::zero)
}

fn common_multiple(a: &Polynomial, b: &Polynomial) -> Polynomial {
    match b.divide_exact(&gcd(a, b)) {
        Some(rest) => a * &rest,
        None => a.clone(),
    }
}

/// The nominal numbers of the circuit's symbols, when every transfer has its numeric form.
fn nominal(circuit: &Circuit, sources: &[Source]) -> Option<Vec<Number>> {
    let first = sources.first()?;
    if sources.iter().any(|source| source.derivation.numeric.is_none()) {
        return None;
    }
    let assignment = Assignment::for_transfer(circuit, &first.question, 0);
    (assignment.origin == Origin::Nominal).then_some(assignment.numbers)
}

/// The value of a variable, from the values of the symbols.
fn value_of(values: &[Number], variable: Var) -> Number {
    let symbol = symbol_of(variable).and_then(|symbol| values.get(symbol.0 as usize));
    symbol.cloned().unwrap_or_default()
}

/// Coefficients by powers of f, to 15 digits: they hold powers of π.
fn rounded(density: &Fraction, values: &[Number]) -> Option<NumericForm> {
    let numbers = |polynomial: &Polynomial| -> Vec<Number> {
        let parts = polynomial.coefficients(Var::S);
        parts.iter().map(|part| part.evaluate(|variable| value_of(values, variable))).collect()
    };
    let (numerator, denominator) = (numbers(density.numerator()), numbers(density.denominator()));
    let scale = denominator.iter().find(|c| **c != Number::default())?.clone();
    let scaled = |of: Vec<Number>| {
        of.into_iter().map(|number| fifteen_digits(&(number / &scale))).collect::<Option<_>>()
    };
    Some(NumericForm { numerator: scaled(numerator)?, denominator: scaled(denominator)? })
}

fn fifteen_digits(number: &Number) -> Option<Number> {
    use num_traits::ToPrimitive;
    let text = format!("{:.14e}", number.to_f64()?);
    let (mantissa, exponent) = text.split_once('e')?;
    let digits: num_bigint::BigInt = mantissa.replace('.', "").parse().ok()?;
    let exponent = exponent.parse::<i32>().ok()? - 14;
    let power = Number::from_integer(num_bigint::BigInt::from(10).pow(exponent.unsigned_abs()));
    let digits = Number::from_integer(digits);
    Some(if exponent < 0 { digits / power } else { digits * power })
}
