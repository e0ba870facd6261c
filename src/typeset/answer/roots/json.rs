//! Poles and zeros as the JSON of `roots`.

use serde::Serialize;
use serde_json::{Map, Value};

use super::{Answer, Report, words};
use crate::analysis::roots::{
    Against, Approximation, Chance, Condition, Conditions, Form, RootFacts, Sensitivity, Shift,
    Spread,
};
use crate::circuit::Circuit;
use crate::typeset::answer::lettering;
use crate::typeset::json::{Symbol, Warning};
use crate::typeset::shape::Lettering;
use crate::typeset::{Dialect, Formula, SymbolTable, plain};

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
    /// H(0); null where it is 0 or infinite.
    dc_gain: Option<Gain>,
    /// Where the magnitude is 1/√2 of what it is measured against, by frequency.
    band_edges: Vec<Edge>,
    /// `stable`, `marginal` or `unstable`, decided exactly.
    stability: &'static str,
    /// What must be positive for stability, all symbols being so; an empty list for always, null where
    /// no conditions are known, `["0"]` for never.
    stable_when_positive: Option<Vec<String>>,
    /// Poles and zeros that coincide at the nominal values only.
    cancelled: Vec<Cancelled>,
    #[serde(skip_serializing_if = "Option::is_none")]
    monte_carlo: Option<MonteCarlo>,
    #[serde(skip_serializing_if = "Option::is_none")]
    moved: Option<Moved>,
}

/// A number with its relative sensitivities.
#[derive(Clone, Debug, PartialEq, Serialize)]
struct Gain {
    value: f64,
    sensitivity: Option<Map<String, Value>>,
}

#[derive(Clone, Debug, PartialEq, Serialize)]
struct Edge {
    hz: f64,
    /// `dc`, `infinity` or `peak`: what it is measured against.
    against: &'static str,
    sensitivity: Option<Map<String, Value>>,
}

#[derive(Clone, Debug, PartialEq, Serialize)]
struct Cancelled {
    re: f64,
    im: f64,
    multiplicity: u32,
    /// The symbols that separate the pole from the zero.
    separated_by: Vec<String>,
}

#[derive(Clone, Debug, PartialEq, Serialize)]
struct MonteCarlo {
    trials: usize,
    seed: u64,
    not_stable: usize,
    poles: Vec<Quantiles>,
    zeros: Vec<Quantiles>,
}

/// 5 %, 50 % and 95 % quantiles.
#[derive(Clone, Debug, PartialEq, Serialize)]
struct Quantiles {
    hz: [f64; 3],
    q: Option<[f64; 3]>,
}

#[derive(Clone, Debug, PartialEq, Serialize)]
struct Moved {
    /// As on the command line: `w0 of p1`.
    quantity: String,
    target: f64,
    symbol: String,
    value: f64,
    closed_form: bool,
    preferred: Vec<Preferred>,
}

#[derive(Clone, Debug, PartialEq, Serialize)]
struct Preferred {
    /// `E12`, `E24` or `E96`.
    series: &'static str,
    value: f64,
    /// What the quantity becomes with it.
    reached: Option<f64>,
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
    /// A short formula; null when none comes within 10 %.
    approximation: Option<Short>,
    /// Relative shift of the size by the tolerances, to first order; null without tolerances.
    tolerance: Option<Tolerances>,
    /// Likewise of Q.
    q_tolerance: Option<Tolerances>,
}

/// An approximation.
#[derive(Clone, Debug, PartialEq, Serialize)]
struct Short {
    /// The root; for a pair the quadratic in s that has both as roots.
    expression: String,
    /// ω0² and Q² of a pair.
    #[serde(skip_serializing_if = "Option::is_none")]
    w0_squared: Option<String>,
    #[serde(skip_serializing_if = "Option::is_none")]
    q_squared: Option<String>,
    /// Of the root; for a pair the larger one of those of ω0 and Q.
    relative_error: f64,
    /// It holds while each of these is large.
    while_large: Vec<Large>,
}

#[derive(Clone, Debug, PartialEq, Serialize)]
struct Large {
    /// A ratio of terms.
    expression: String,
    /// Its value at the nominal values.
    value: f64,
}

#[derive(Clone, Copy, Debug, PartialEq, Serialize)]
struct Tolerances {
    /// The root of the sum of squares.
    expected: f64,
    worst: f64,
}

/// The results of one question.
pub fn results(answer: &Answer<'_>) -> Vec<RootsResult> {
    let names = answer.names();
    let writer =
        Writer { circuit: answer.circuit, names: &names, letters: lettering(answer.circuit) };
    if answer.ask.is_superposition() {
        let share = |report: &Report<'_>| Share {
            source: report.entry.source.clone().unwrap_or_default(),
            function: writer.function(report),
        };
        let by_source = answer.reports.iter().map(share).collect();
        let (name, query) = (answer.ask.name.clone(), answer.ask.text.clone());
        return vec![RootsResult { name, query, body: Body::Superposition { by_source } }];
    }
    let single = |report: &Report<'_>| RootsResult {
        name: report.entry.name.clone(),
        query: report.entry.query.clone(),
        body: Body::Single(Box::new(writer.function(report))),
    };
    answer.reports.iter().map(single).collect()
}

struct Writer<'a> {
    circuit: &'a Circuit,
    names: &'a SymbolTable,
    letters: Lettering<'a>,
}

impl Writer<'_> {
    fn text(&self, formula: &Formula) -> String {
        plain::text(formula, self.names, Dialect::Expression)
    }

    fn symbols(&self, all: &[crate::circuit::SymbolId]) -> Vec<String> {
        all.iter().map(|&id| self.circuit[id].name.clone()).collect()
    }

    fn named(
        &self,
        all: Option<&Vec<Sensitivity>>,
        part: fn(&Sensitivity) -> f64,
    ) -> Option<Map<String, Value>> {
        let pair = |one: &Sensitivity| (self.circuit[one.symbol].name.clone(), rounded(part(one)));
        Some(all?.iter().map(pair).collect())
    }

    fn function(&self, report: &Report<'_>) -> Function {
        let roots = &report.roots;
        let all = |list: &[RootFacts]| list.iter().map(|facts| self.root(facts)).collect();
        Function {
            poles: all(&roots.poles),
            zeros: all(&roots.zeros),
            gain: roots.gain,
            dc_gain: roots.dc_gain.as_ref().map(|gain| Gain {
                value: gain.value,
                sensitivity: self.named(gain.sensitivities.as_ref(), |one| one.value.re),
            }),
            band_edges: roots
                .band_edges
                .iter()
                .map(|edge| Edge {
                    hz: edge.hz,
                    against: match edge.against {
                        Against::Dc => "dc",
                        Against::Infinity => "infinity",
                        Against::Peak => "peak",
                    },
                    sensitivity: self.named(edge.sensitivities.as_ref(), |one| one.value.re),
                })
                .collect(),
            stability: words::verdict_word(roots.verdict),
            stable_when_positive: roots.conditions.as_ref().map(|conditions| match conditions {
                Conditions::Always => Vec::new(),
                Conditions::Never => vec!["0".to_owned()],
                Conditions::AllPositive(all) => {
                    all.iter().map(|part| self.text(&self.letters.polynomial(part))).collect()
                }
            }),
            cancelled: roots
                .cancelled
                .iter()
                .map(|cancelled| Cancelled {
                    re: cancelled.root.value.re,
                    im: cancelled.root.value.im,
                    multiplicity: cancelled.root.multiplicity,
                    separated_by: self.symbols(&cancelled.separating),
                })
                .collect(),
            monte_carlo: report.chance.as_ref().map(monte_carlo),
            moved: report.moved.as_ref().map(|moved| Moved {
                quantity: words::quantity(moved.quantity),
                target: moved.target,
                symbol: self.circuit[moved.symbol].name.clone(),
                value: moved.solution.value,
                closed_form: moved.solution.closed_form,
                preferred: moved
                    .solution
                    .preferred
                    .iter()
                    .map(|preferred| Preferred {
                        series: preferred.series.name(),
                        value: preferred.value,
                        reached: preferred.reached,
                    })
                    .collect(),
            }),
        }
    }

    fn root(&self, facts: &RootFacts) -> Root {
        let root = &facts.root;
        let (size, re) = (root.value.norm(), root.value.re);
        let all = facts.sensitivities.as_ref();
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
            sensitivity: self.named(all, |one| one.value.re),
            sensitivity_angle: if root.is_real() {
                None
            } else {
                self.named(all, |one| one.value.im)
            },
            set_by: self.symbols(&facts.set_by),
            approximation: facts.approximation.as_ref().map(|found| self.short(found)),
            tolerance: facts.shift.map(tolerances),
            q_tolerance: facts.q_shift.map(tolerances),
        }
    }

    fn short(&self, found: &Approximation) -> Short {
        let squared = |pick: fn(&Form) -> Option<&crate::algebra::Fraction>| {
            pick(&found.form).map(|value| self.text(&words::fraction(value, self.letters)))
        };
        let large = |condition: &Condition| {
            let [large, small] = words::sides(condition, self.letters);
            Large {
                expression: self.text(&Formula::quotient(large, small)),
                value: condition.ratio,
            }
        };
        Short {
            expression: self.text(&words::expression(found, self.letters)),
            w0_squared: squared(|form| match form {
                Form::Real(_) => None,
                Form::Pair(pair) => Some(&pair.w0_squared),
            }),
            q_squared: squared(|form| match form {
                Form::Real(_) => None,
                Form::Pair(pair) => pair.q_squared.as_ref(),
            }),
            relative_error: found.relative_error,
            while_large: found.conditions.iter().map(large).collect(),
        }
    }
}

fn monte_carlo(chance: &Chance) -> MonteCarlo {
    let all = |spreads: &[Spread]| {
        spreads.iter().map(|spread| Quantiles { hz: spread.hz, q: spread.q }).collect()
    };
    MonteCarlo {
        trials: chance.trials,
        seed: chance.seed,
        not_stable: chance.not_stable,
        poles: all(&chance.poles),
        zeros: all(&chance.zeros),
    }
}

fn tolerances(shift: Shift) -> Tolerances {
    Tolerances { expected: shift.expected, worst: shift.worst }
}

/// To nine decimals: what is beyond is the noise of the arithmetic.
fn rounded(value: f64) -> Value {
    Value::from((value * 1e9).round() / 1e9 + 0.0)
}
