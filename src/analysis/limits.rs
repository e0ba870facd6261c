//! Limits of results, taken exactly and in the order written.
//!
//! A limit is taken in the diagram of the elimination: the ratio of the coefficients of the ruling
//! power. It is judged on another way: the witness recovers the network's own answer as a rational
//! function of the limit's symbol, at random values of everything else in a prime field.

use std::borrow::Cow;

use super::judged::Judged;
use super::{AnalysisError, Check};
use crate::algebra::{Fraction, Var};
use crate::circuit::{Circuit, Limit, LimitTo, Number, SymbolId, Transfer};
use crate::elimination::{Elimination, variable_of};
use crate::numeric::{Candidate, LimitValue, PRIMES, limit_value};

const POINTS_PER_PRIME: usize = 2;
const MODULI: usize = 2;

/// The limit as it is written: `A0 to infinity`.
pub fn limit_text(circuit: &Circuit, limit: &Limit) -> String {
    let name = limit.symbol.map_or("s", |symbol| &circuit[symbol].name);
    match limit.to {
        LimitTo::Zero => format!("{name} to 0"),
        LimitTo::Infinity => format!("{name} to infinity"),
    }
}

/// Takes the circuit's limits, one after the other.
pub(crate) fn take(circuit: &Circuit, whole: &Elimination) -> Result<Elimination, AnalysisError> {
    let mut limited = whole.clone();
    for limit in &circuit.limits {
        let variable = limit.symbol.map_or(Var::S, variable_of);
        limited = limited
            .at_limit(variable, limit.to)
            .map_err(|_| AnalysisError::InfiniteLimit { limit: limit_text(circuit, limit) })?;
    }
    Ok(limited)
}

/// The limit of a fraction; none where it is infinite.
pub(crate) fn fraction_limit(fraction: &Fraction, variable: Var, to: LimitTo) -> Option<Fraction> {
    let (n, d) = (fraction.numerator(), fraction.denominator());
    let (above, below, grows) = match to {
        LimitTo::Infinity => {
            let (above, below) = (n.degree(variable), d.degree(variable));
            (above, below, above > below)
        }
        LimitTo::Zero => {
            let (above, below) = (n.trailing_degree(variable), d.trailing_degree(variable));
            (above, below, above < below)
        }
    };
    if fraction.is_zero() || above != below {
        return (fraction.is_zero() || !grows).then(Fraction::zero);
    }
    Fraction::new(&n.coefficient(variable, above), &d.coefficient(variable, below))
}

/// Compares the limit with the witness's.
pub(crate) fn judge(
    circuit: &Circuit,
    transfer: &Transfer,
    judged: &Judged<'_>,
) -> Result<Check, AnalysisError> {
    let points = POINTS_PER_PRIME * MODULI;
    let taken: Vec<String> =
        circuit.limits.iter().map(|limit| limit_text(circuit, limit)).collect();
    let taken = taken.join(", ");
    let mut random = crate::algebra::modular::Random::new(0x5eed_0003);
    for &prime in &PRIMES[..MODULI] {
        for _ in 0..POINTS_PER_PRIME {
            let s = random.word() % prime;
            let symbols: Vec<u64> = circuit.symbols.iter().map(|_| random.word() % prime).collect();
            let witness = limit_value(circuit, transfer, &circuit.limits, prime, s, &symbols)
                .map_err(AnalysisError::Witness)?;
            let witness = match witness {
                LimitValue::Finite(value) => Some(value),
                LimitValue::Infinite => None,
                LimitValue::Unknown => {
                    return Ok(Check {
                        statement: format!(
                            "the limit {taken} was not compared: the witness would need too many \
                             values"
                        ),
                        passed: true,
                    });
                }
            };
            let derived = judged.value_modulo(prime, s, &symbols);
            if derived.is_none() || derived != witness {
                let text = |value: Option<u64>| match value {
                    Some(value) => format!("{value} modulo {prime}"),
                    None => "infinite".to_owned(),
                };
                return Ok(Check {
                    statement: format!(
                        "NOT the limit {taken} of the network: derived {}, witness {}",
                        text(derived),
                        text(witness)
                    ),
                    passed: false,
                });
            }
        }
    }
    Ok(Check {
        statement: format!(
            "the limit {taken} of the network recovered at {points} random points modulo {MODULI} \
             primes"
        ),
        passed: true,
    })
}

/// The circuit with a nominal value for every symbol that goes to a limit: it is in no formula any
/// more, so that any number does.
pub(crate) fn without_limited(circuit: &Circuit) -> Cow<'_, Circuit> {
    let limited: Vec<SymbolId> = circuit.limits.iter().filter_map(|limit| limit.symbol).collect();
    if limited.iter().all(|&symbol| circuit[symbol].nominal.is_some()) {
        return Cow::Borrowed(circuit);
    }
    let mut changed = circuit.clone();
    for symbol in limited {
        let nominal = &mut changed.symbols[symbol.0 as usize].nominal;
        nominal.get_or_insert_with(|| Number::from_integer(1.into()));
    }
    Cow::Owned(changed)
}
