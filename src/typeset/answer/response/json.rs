//! What `response --format json` prints.
//!
//! Numbers are doubles in SI units; what is not finite (the logarithm of 0) is null.

use serde::Serialize;

use super::{Kind, Report, excitation_word};
use crate::analysis::response::{Envelope, Point};
use crate::circuit::Unit;
use crate::typeset::json::{Symbol, Warning};

/// The value of [`Responses::schema`].
pub const RESPONSE_SCHEMA: &str = "cofactor/response/1";

/// The whole output of `response`.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Responses {
    /// Name and version of this format: [`RESPONSE_SCHEMA`].
    pub schema: &'static str,
    /// The circuit's title; null when it has none.
    pub circuit: Option<String>,
    /// The symbols of the formulas, in the order of the circuit.
    pub symbols: Vec<Symbol>,
    /// One entry for each result.
    pub results: Vec<ResponseResult>,
    /// What the reader should know besides.
    pub warnings: Vec<Warning>,
}

/// One result.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct ResponseResult {
    /// The name of the result: `H`.
    pub name: String,
    /// The question: `V(out) / Vin`.
    pub query: String,
    /// The independent source whose share it is, in a superposition; else null.
    pub source: Option<String>,
    /// The SI unit of the values.
    pub unit: String,
    /// Over the frequency; null where the answer is over time.
    pub frequency: Option<Frequency>,
    /// Over time; null where the answer is over the frequency.
    pub time: Option<Time>,
}

/// A function over its band.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Frequency {
    /// The lower end of the band.
    pub from_hz: f64,
    /// The upper end.
    pub to_hz: f64,
    /// The function at each frequency.
    pub points: Vec<PointOut>,
    /// Where the asymptote bends, by frequency.
    pub corners: Vec<CornerOut>,
    /// The ends of the straight lines.
    pub asymptote: Vec<AsymptoteOut>,
    /// What the tolerances do; null where nobody asked, or nothing has a tolerance.
    pub envelope: Option<EnvelopeOut>,
}

/// A function at one frequency.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct PointOut {
    hz: f64,
    re: Option<f64>,
    im: Option<f64>,
    magnitude: Option<f64>,
    magnitude_db: Option<f64>,
    phase_deg: f64,
    group_delay_s: f64,
}

/// Poles or zeros of one size.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct CornerOut {
    hz: f64,
    kind: &'static str,
    order: u32,
    asymptote_db: Option<f64>,
}

/// An end of a straight line.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct AsymptoteOut {
    hz: f64,
    magnitude_db: Option<f64>,
}

/// The outermost of circuits drawn within the tolerances, at the frequencies of the points.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct EnvelopeOut {
    trials: usize,
    seed: u64,
    least_magnitude_db: Vec<Option<f64>>,
    largest_magnitude_db: Vec<Option<f64>>,
    least_phase_deg: Vec<f64>,
    largest_phase_deg: Vec<f64>,
}

/// A function over time.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Time {
    /// `step` or `impulse`.
    pub excitation: &'static str,
    /// The height of the step, or the weight of the impulse.
    pub height: f64,
    /// The SI unit of the values.
    pub unit: String,
    /// Initial voltages of capacitors and currents of inductors.
    pub initial: Vec<InitialOut>,
    /// Weights of the impulse and its derivatives at t = 0.
    pub impulses: Vec<f64>,
    /// The closed form: the sum of coefficient · t^(power − 1)/(power − 1)! · e^(pole · t).
    pub terms: Vec<TermOut>,
    /// The values.
    pub points: Vec<TimeOut>,
}

/// An initial value.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct InitialOut {
    element: String,
    value: f64,
}

/// A complex number.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub(super) struct ComplexOut {
    re: f64,
    im: f64,
}

/// A term of a closed form.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct TermOut {
    pole: ComplexOut,
    power: u32,
    coefficient: ComplexOut,
}

/// A value at a time.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct TimeOut {
    s: f64,
    value: Option<f64>,
}

fn finite(value: f64) -> Option<f64> {
    value.is_finite().then_some(value)
}

/// One result with its curves.
pub fn result(report: &Report<'_>) -> ResponseResult {
    let (frequency, time) = match &report.kind {
        Kind::Frequency(curves) => {
            (Some(frequency(report, &curves.points, curves.envelope.as_ref())), None)
        }
        Kind::Time { excitation, height, initial, curve } => {
            let initial = initial.iter();
            let terms = curve.function.terms.iter().map(|term| TermOut {
                pole: ComplexOut { re: term.pole.re, im: term.pole.im },
                power: term.power,
                coefficient: ComplexOut { re: term.coefficient.re, im: term.coefficient.im },
            });
            let points = curve.points.iter();
            let time = Time {
                excitation: excitation_word(*excitation),
                height: *height,
                unit: report.time_unit(*excitation).to_string(),
                initial: initial
                    .map(|(element, value)| InitialOut { element: element.clone(), value: *value })
                    .collect(),
                impulses: curve.function.impulses.clone(),
                terms: terms.collect(),
                points: points.map(|&[s, value]| TimeOut { s, value: finite(value) }).collect(),
            };
            (None, Some(time))
        }
    };
    ResponseResult {
        name: report.entry.name.clone(),
        query: report.entry.query.clone(),
        source: report.entry.source.clone(),
        unit: if report.entry.unit == Unit::ONE {
            "1".to_owned()
        } else {
            report.entry.unit.to_string()
        },
        frequency,
        time,
    }
}

fn frequency(report: &Report<'_>, points: &[Point], envelope: Option<&Envelope>) -> Frequency {
    let function = report.response.transfer();
    let corners = function.map(|function| function.corners()).unwrap_or_default();
    let asymptote = function.map(|function| function.asymptote(report.band)).unwrap_or_default();
    Frequency {
        from_hz: report.band[0],
        to_hz: report.band[1],
        points: points
            .iter()
            .map(|point| PointOut {
                hz: point.hz,
                re: finite(point.value.re),
                im: finite(point.value.im),
                magnitude: finite(point.value.norm()),
                magnitude_db: finite(point.decibels()),
                phase_deg: point.degrees(),
                group_delay_s: point.delay,
            })
            .collect(),
        corners: corners
            .iter()
            .map(|corner| CornerOut {
                hz: corner.hz,
                kind: if corner.is_pole { "pole" } else { "zero" },
                order: corner.order,
                asymptote_db: finite(20.0 * corner.decades),
            })
            .collect(),
        asymptote: asymptote
            .iter()
            .map(|&[hz, decades]| AsymptoteOut { hz, magnitude_db: finite(20.0 * decades) })
            .collect(),
        envelope: envelope.map(|envelope| {
            let decibels = |end: usize| {
                envelope.ranges.iter().map(|range| finite(20.0 * range.decades[end])).collect()
            };
            let degrees = |end: usize| {
                envelope.ranges.iter().map(|range| range.phase[end].to_degrees()).collect()
            };
            EnvelopeOut {
                trials: envelope.trials,
                seed: envelope.seed,
                least_magnitude_db: decibels(0),
                largest_magnitude_db: decibels(1),
                least_phase_deg: degrees(0),
                largest_phase_deg: degrees(1),
            }
        }),
    }
}
