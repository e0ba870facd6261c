//! Poles and zeros as the JSON of `roots`.

use serde::Serialize;
use serde_json::{Map, Value};

use super::Answer;
use crate::analysis::roots::{RootFacts, RootReport, Sensitivity};
use crate::circuit::Circuit;
use crate::typeset::json::{Symbol, Warning};

/// The value of [`Roots::schema`].
pub const ROOTS_SCHEMA: &str = "cofactor/roots/1";

/// The whole output of `roots`.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Roots {
    /// Name and version of this format: [`ROOTS_SCHEMA`].
    pub schema: &'static str,
    /// The circuit's title; null when it has none.
    pub circuit: Option<String>,
    /// The symbols, in the order of the circuit.
    pub symbols: Vec<Symbol>,
    /// One entry for each question.
    pub results: Vec<RootsResult>,
    /// What the reader should know besides.
    pub warnings: Vec<Warning>,
}

/// The roots of one question.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct RootsResult {
    /// The name of the question: `H`.
    pub name: String,
    /// The question: `V(out) / Vin`.
    pub query: String,
    /// The roots, or those of each source's share.
    #[serde(flatten)]
    body: Body,
}

#[derive(Clone, Debug, PartialEq, Serialize)]
#[serde(untagged)]
enum Body {
    Single(Box<Function>),
    Superposition { by_source: Vec<Share> },
}

#[derive(Clone, Debug, PartialEq, Serialize)]
struct Share {
    source: String,
    #[serde(flatten)]
    function: Function,
}

/// One transfer function.
#[derive(Clone, Debug, PartialEq, Serialize)]
struct Function {
    poles: Vec<Root>,
    zeros: Vec<Root>,
    /// H = gain · Π(s − zero)/Π(s − pole), in the function's unit and powers of the second.
    gain: f64,
}

/// A pole or a zero.
#[derive(Clone, Debug, PartialEq, Serialize)]
struct Root {
    /// In 1/s.
    re: f64,
    im: f64,
    /// The size over 2π.
    hz: f64,
    /// Null for real roots and on the imaginary axis.
    q: Option<f64>,
    /// −re/|p|, 1/(2·q) in the left half plane; null for a root at 0.
    damping: Option<f64>,
    /// 1/|re| in seconds; null on the imaginary axis.
    time_constant: Option<f64>,
    multiplicity: u32,
    /// The exact root is within this distance, in 1/s.
    error_bound: f64,
    /// The relative change of the size for a relative change of the symbol; null for a multiple
    /// root and a root at 0.
    sensitivity: Option<Map<String, Value>>,
    /// The change of the angle in radians; null for real roots besides.
    sensitivity_angle: Option<Map<String, Value>>,
    set_by: Vec<String>,
}

/// One result.
pub fn result(answer: &Answer<'_>) -> RootsResult {
    let mut functions = answer
        .parts()
        .map(|(transfer, report)| (answer.source(transfer), function(answer.circuit, report)));
    let body = if answer.ask.superposition {
        let share = |(source, function): (Option<&str>, Function)| Share {
            source: source.unwrap_or_default().to_owned(),
            function,
        };
        Body::Superposition { by_source: functions.map(share).collect() }
    } else {
        match functions.next() {
            Some((_, function)) => Body::Single(Box::new(function)),
            None => Body::Superposition { by_source: Vec::new() },
        }
    };
    RootsResult { name: answer.ask.name.clone(), query: answer.ask.text.clone(), body }
}

fn function(circuit: &Circuit, report: &RootReport) -> Function {
    let all = |roots: &[RootFacts]| roots.iter().map(|facts| root(circuit, facts)).collect();
    Function { poles: all(&report.poles), zeros: all(&report.zeros), gain: report.gain }
}

fn root(circuit: &Circuit, facts: &RootFacts) -> Root {
    let root = &facts.root;
    let (size, re) = (root.value.norm(), root.value.re);
    let named = |part: fn(&Sensitivity) -> f64| {
        let all = facts.sensitivities.as_ref()?.iter();
        let named = all.map(|one| (circuit[one.symbol].name.clone(), rounded(part(one))));
        Some(named.collect::<Map<String, Value>>())
    };
    Root {
        re,
        im: root.value.im,
        hz: size / std::f64::consts::TAU,
        q: root.q(),
        // Without the sign that a zero may have.
        damping: (size > 0.0).then(|| 0.0 - re / size),
        time_constant: (re != 0.0).then(|| 1.0 / re.abs()),
        multiplicity: root.multiplicity,
        error_bound: root.error_bound,
        sensitivity: named(|one| one.value.re),
        sensitivity_angle: if root.is_real() { None } else { named(|one| one.value.im) },
        set_by: facts.set_by.iter().map(|&id| circuit[id].name.clone()).collect(),
    }
}

/// To nine decimals: what is beyond is the noise of the arithmetic.
fn rounded(value: f64) -> Value {
    Value::from((value * 1e9).round() / 1e9 + 0.0)
}
