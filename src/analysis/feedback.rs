//! The parts of the asymptotic gain formula (S. Rosenstark, IEEE Trans. Circuits Syst. 21, 1974).
//!
//! With respect to a dependent source, a ratio is G = G∞·T/(1 + T) + G0/(1 + T): the ideal gain G∞
//! is its limit for an infinite gain of the source, the feed-through G0 its value with the source
//! silenced, and T the return ratio. The source's gain is multiplied by a symbol of its own, and the
//! two are limits in it. That the parts make up the ratio is then proven: as equality of rational
//! functions where all are expanded, else at random points modulo primes.

use super::posed::{Posed, TestBench};
use super::{AnalysisError, Check, ClosedForm, Entry, Options, return_ratio};
use crate::algebra::Fraction;
use crate::algebra::modular::{Random, primes};
use crate::circuit::{
    Ask, Circuit, ElementId, Limit, LimitTo, Symbol, SymbolId, SymbolRole, Transfer, Unit, Value,
};
use crate::elimination::Elimination;

/// Where equality is tried, in each of two prime fields.
const POINTS_PER_PRIME: usize = 4;
const MODULI: usize = 2;

/// Ideal gain, return ratio and feed-through of a ratio, named `H.ideal`, `H.return_ratio`,
/// `H.feed_through`.
///
/// # Errors
/// The element is no dependent source or lies in no loop; those of the derivations.
pub(crate) fn parts(
    circuit: &Circuit,
    ask: &Ask,
    transfer: &Transfer,
    whole: &Entry,
    around: ElementId,
    options: &Options,
) -> Result<Vec<Entry>, AnalysisError> {
    let options = &Options { feedback: None, ..*options };
    let name = &circuit[around].name;
    let loop_gain = return_ratio::pose(circuit, around)?.derive(options)?;
    if loop_gain.elimination.is_zero() {
        let reason = "lies in no loop: its return ratio is 0";
        return Err(AnalysisError::NoLoop { element: name.clone(), reason });
    }
    let extreme = |to| scaled(circuit, transfer, around, to)?.derive(options);
    let ideal = extreme(LimitTo::Infinity)?;
    let silent = extreme(LimitTo::Zero)?;
    let entry = |suffix: &str, words: String, unit, derivation| {
        let name = format!("{}.{suffix}", ask.name);
        Entry::new(circuit, name, format!("{}, {words}", ask.text), unit, derivation)
    };
    let mut ideal = entry("ideal", format!("`{name}` infinitely strong"), transfer.unit, ideal);
    let loop_gain = entry("return_ratio", format!("return_ratio({name})"), Unit::ONE, loop_gain);
    let feed = entry("feed_through", format!("`{name}` silenced"), transfer.unit, silent);
    ideal.checks.push(proven(whole, &ideal, &loop_gain, &feed));
    Ok(vec![ideal, loop_gain, feed])
}

/// The ratio with the source's gain multiplied by a symbol that goes to 0 or to infinity. That limit
/// comes first: the circuit's own are taken of what it leaves.
fn scaled(
    circuit: &Circuit,
    transfer: &Transfer,
    around: ElementId,
    to: LimitTo,
) -> Result<Posed<'static>, AnalysisError> {
    return_ratio::controls(circuit, around)?;
    let mut bench = TestBench::new(circuit);
    let changed = bench.circuit_mut();
    let symbol = SymbolId(changed.symbols.len() as u32);
    changed.symbols.push(Symbol {
        name: format!("gain of {}", circuit[around].name),
        role: SymbolRole::Parameter,
        unit: Unit::ONE,
        nominal: Some(crate::circuit::Number::from_integer(1.into())),
        tolerance: None,
    });
    for gain in changed.elements[around.0 as usize].law.values_mut() {
        *gain = Value::Product(vec![Value::Symbol(symbol), gain.clone()]);
    }
    changed.limits.insert(0, Limit { symbol: Some(symbol), to });
    Ok(bench.pose(transfer.clone()))
}

/// G·(1 + T) = G∞·T + G0.
fn proven(whole: &Entry, ideal: &Entry, loop_gain: &Entry, feed: &Entry) -> Check {
    let formula = "ideal·T/(1 + T) + feed-through/(1 + T)";
    let forms = (&whole.form, &ideal.form, &loop_gain.form, &feed.form);
    if let (
        ClosedForm::Expanded(g),
        ClosedForm::Expanded(g_ideal),
        ClosedForm::Expanded(t),
        ClosedForm::Expanded(g_feed),
    ) = forms
    {
        let holds = g * &(&Fraction::one() + t) == &(g_ideal * t) + g_feed;
        let is = if holds { "is" } else { "is NOT" };
        let statement = format!("{} {is} {formula}, as rational functions", whole.name);
        return Check { statement, passed: holds };
    }
    let parts = [whole, ideal, loop_gain, feed].map(|entry| entry.elimination.as_ref());
    let holds = parts.into_iter().collect::<Option<Vec<_>>>().is_some_and(|parts| equal(&parts));
    let is = if holds { "is" } else { "is NOT" };
    let points = POINTS_PER_PRIME * MODULI;
    let statement =
        format!("{} {is} {formula}, at {points} random points modulo {MODULI} primes", whole.name);
    Check { statement, passed: holds }
}

fn equal(parts: &[&Elimination]) -> bool {
    let mut random = Random::new(0x5eed_0004);
    primes().take(MODULI).all(|field| {
        (0..POINTS_PER_PRIME).all(|_| {
            let last = parts.iter().filter_map(|part| part.last_variable()).max();
            let values: Vec<u64> =
                (0..=last.map_or(0, |v| v.0)).map(|_| random.unit(&field)).collect();
            let value = |part: &Elimination| {
                let (n, d) = part.remainders(field, &values);
                field.mul(n, field.inverse(d))
            };
            let [g, ideal, t, feed] = [0, 1, 2, 3].map(|part| value(parts[part]));
            let left = field.mul(g, field.add(1, t));
            left == field.add(field.mul(ideal, t), feed)
        })
    })
}
