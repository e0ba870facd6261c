//! The density against the witnesses.
//!
//! Every transfer has been judged by itself. Their sum, squared and put in one fraction, is
//! evaluated exactly at frequencies across the band and held against weight × |witness|², summed, with
//! the witness's own error bounds.

use num_complex::Complex;
use num_traits::{ToPrimitive, Zero};

use super::super::AnalysisError;
use super::sources::{Constants, Source};
use super::value_of;
use crate::algebra::{Fraction, Polynomial, Var};
use crate::circuit::{Circuit, Number};
use crate::numeric::{
    Assignment, ExactEvidence, FloatingEvidence, NumericError, Origin, Report, Sweep, frequencies,
    lowered,
};

/// Frequencies that are looked at.
const POINTS: usize = 41;
/// Relative difference that is always allowed.
const FLOOR: f64 = 1e-9;
/// Relative bound above which a point proves nothing.
const USELESS: f64 = 1e-3;

/// The report on the whole density.
pub(crate) fn compare(
    circuit: &Circuit,
    constants: &Constants,
    sources: &[Source],
    density: &Fraction,
) -> Result<Report, AnalysisError> {
    let exact = exact_evidence(sources);
    let nominal = sources.iter().all(|source| source.derivation.evidence.origin == Origin::Nominal);
    let assignment = match sources.first() {
        Some(first) if nominal => Assignment::for_transfer(circuit, &first.question, 0),
        _ => Assignment::random(circuit, 0x5eed),
    };
    let hertz = frequencies(circuit, &assignment, POINTS);
    let mut floating = FloatingEvidence {
        points: 0,
        from_hz: hertz.first().copied().unwrap_or(0.0),
        to_hz: hertz.last().copied().unwrap_or(0.0),
        worst_relative_error: 0.0,
        worst_hz: hertz.first().copied().unwrap_or(0.0),
        bound: FLOOR,
        largest_condition: 1.0,
        passed: true,
        failure: None,
    };
    if circuit.limits.is_empty() {
        at_frequencies(constants, sources, density, &assignment, &hertz, &mut floating)
            .map_err(AnalysisError::Witness)?;
    } else {
        // The witness solves the circuit before its limits: each transfer was compared there.
        for evidence in sources.iter().map(|source| &source.derivation.evidence.floating) {
            floating.points = floating.points.max(evidence.points);
            floating.worst_relative_error =
                floating.worst_relative_error.max(evidence.worst_relative_error);
            floating.largest_condition = floating.largest_condition.max(evidence.largest_condition);
            if floating.passed && !evidence.passed {
                floating.passed = false;
                floating.failure = evidence.failure;
            }
        }
    }
    Ok(Report { origin: assignment.origin, nominal_fault: None, floating, exact })
}

/// What the exact witnesses say of all transfers together: each kind passes when it does everywhere.
fn exact_evidence(sources: &[Source]) -> Vec<ExactEvidence> {
    let mut all: Vec<ExactEvidence> = Vec::new();
    for evidence in sources.iter().flat_map(|source| &source.derivation.evidence.exact) {
        match all.iter_mut().find(|other| other.kind == evidence.kind) {
            Some(other) if other.passed => *other = evidence.clone(),
            Some(_) => {}
            None => all.push(evidence.clone()),
        }
    }
    all
}

fn at_frequencies(
    constants: &Constants,
    sources: &[Source],
    density: &Fraction,
    assignment: &Assignment,
    hertz: &[f64],
    result: &mut FloatingEvidence,
) -> Result<(), NumericError> {
    let values = constants.values(&assignment.numbers);
    let coefficients = |of: &Polynomial| -> Vec<Number> {
        let parts = of.coefficients(Var::S);
        parts.iter().map(|part| part.evaluate(|variable| value_of(&values, variable))).collect()
    };
    let above = coefficients(density.numerator());
    let below = coefficients(density.denominator());
    let floats = assignment.floats();
    let circuits: Vec<Circuit> =
        sources.iter().map(|source| lowered(&source.circuit).into_owned()).collect();
    let points: Vec<_> =
        hertz.iter().map(|f| Complex::new(0.0, std::f64::consts::TAU * f)).collect();
    let mut sweeps = Vec::new();
    for (source, circuit) in sources.iter().zip(&circuits) {
        let weight = source.weight.evaluate(|variable| value_of(&values, variable));
        let weight = weight.and_then(|weight| weight.to_f64()).unwrap_or(f64::NAN);
        let mut sweep = Sweep::new(circuit, &source.question, &floats)?;
        result.largest_condition = result.largest_condition.max(sweep.largest_condition(&points));
        sweeps.push((weight, sweep));
    }
    'frequencies: for (&frequency, &s) in hertz.iter().zip(&points) {
        let (mut witness, mut error_bound, mut scale) = (0.0, 0.0, 0.0);
        for (weight, sweep) in &mut sweeps {
            // A pole on the imaginary axis that a frequency happens to meet says nothing.
            let Ok(answer) = sweep.examine(s) else { continue 'frequencies };
            let size = answer.value.norm();
            witness += *weight * size * size;
            error_bound += *weight * answer.error_bound * (2.0 * size + answer.error_bound);
            scale += *weight * answer.scale * answer.scale;
        }
        let Some(derived) = value_at(&above, &below, frequency) else { continue };
        let unit = if witness <= error_bound { scale } else { witness };
        let (error, bound) = match unit == 0.0 {
            true => (derived.abs(), 0.0),
            false => ((derived - witness).abs() / unit, error_bound / unit + FLOOR),
        };
        if bound > USELESS {
            continue;
        }
        result.points += 1;
        let agrees = error <= bound;
        if error > result.worst_relative_error || !agrees && result.passed {
            result.worst_relative_error = error;
            result.worst_hz = frequency;
            result.bound = bound;
        }
        if !agrees && result.passed {
            result.passed = false;
            let complex = |value| Complex::new(value, 0.0);
            result.failure = Some((frequency, complex(derived), complex(witness)));
        }
    }
    Ok(())
}

/// The quotient at a frequency, rounded once.
fn value_at(above: &[Number], below: &[Number], frequency: f64) -> Option<f64> {
    let at = Number::from_float(frequency)?;
    let horner = |of: &[Number]| of.iter().rev().fold(Number::zero(), |sum, c| sum * &at + c);
    let denominator = horner(below);
    if denominator.is_zero() {
        return None;
    }
    (horner(above) / denominator).to_f64()
}
