//! A derived result against the witnesses.
//!
//! - Floating: at frequencies across the band the difference may be at most the error bound of the
//!   solve (see [`super::Sweep::examine`]) plus [`FLOOR`] of the value for the rounding of the
//!   formula itself. A value that is exactly 0 has no relative error; there the floor is taken of
//!   the size of what cancels. Points whose bound is above [`USELESS`] of that are not counted.
//! - Exact: the same rational function over Q\[s\] where that is affordable, and always equal at
//!   random points, with random symbol values, modulo 61-bit primes.

use num_complex::Complex;

use super::{
    Assignment, Fraction, NumericError, Origin, PRIMES, PointAnswer, PrimeField, Sweep, exact,
    frequencies, lowered, modular_value,
    values::{Generator, images},
};
use crate::circuit::{Circuit, Number, Transfer};

/// Relative difference that is always allowed.
const FLOOR: f64 = 1e-9;
/// Relative bound above which a point proves nothing.
const USELESS: f64 = 1e-3;
/// Frequencies at which the floating witness looks.
const POINTS: usize = 41;
/// Random points for each prime; one where a solve is long. Each alone would tell a wrong result from
/// a right one but for a chance of about degree/2⁶¹.
const POINTS_PER_PRIME: usize = 4;
/// Elements from which on a solve is long.
const LONG: usize = 100;
/// How many primes.
const MODULI: usize = 3;
/// Attempts at a random point before a result is taken to have none.
const ATTEMPTS: usize = 8;
const SEED: u64 = 0x5eed;

/// A derived result, as far as a witness must see it. Symbols are indexed by
/// [`crate::circuit::SymbolId`].
pub trait Candidate {
    /// The values at these complex frequencies, in double precision.
    fn values_at(&self, frequencies: &[Complex<f64>], symbols: &[f64]) -> Vec<Complex<f64>>;
    /// Coefficients of numerator and denominator, ascending in s, in any scale; `None` when they
    /// are too long to have.
    fn coefficients(&self, symbols: &[Number]) -> Option<(Vec<Number>, Vec<Number>)>;
    /// The value modulo a prime; `None` where it divides by zero.
    fn value_modulo(&self, prime: u64, s: u64, symbols: &[u64]) -> Option<u64>;
}

/// What the witnesses say.
#[derive(Clone, Debug, PartialEq)]
pub struct Report {
    /// Whether the numbers were nominal or random.
    pub origin: Origin,
    /// Why nominal values could not be used although all were given.
    pub nominal_fault: Option<NumericError>,
    /// The floating-point witness.
    pub floating: FloatingEvidence,
    /// The exact witnesses.
    pub exact: Vec<ExactEvidence>,
}

impl Report {
    /// Whether every witness agrees.
    pub fn passed(&self) -> bool {
        self.floating.passed && self.exact.iter().all(|evidence| evidence.passed)
    }
}

/// Agreement at frequencies across the band.
#[derive(Clone, Debug, PartialEq)]
pub struct FloatingEvidence {
    /// Frequencies that were compared; those where the solve is too uncertain are left out.
    pub points: usize,
    /// Lowest frequency, hertz.
    pub from_hz: f64,
    /// Highest frequency, hertz.
    pub to_hz: f64,
    /// Largest difference over the value; over the size of what cancels where the value is 0.
    pub worst_relative_error: f64,
    /// Where that is, hertz.
    pub worst_hz: f64,
    /// The difference that was allowed there, relative likewise.
    pub bound: f64,
    /// Largest condition number of the equations, at every tenth frequency.
    pub largest_condition: f64,
    /// Whether every difference was allowed. With 0 points nothing was compared and nothing is
    /// said: double precision does not resolve the circuit, and the exact witnesses decide.
    pub passed: bool,
    /// At the first failure: frequency in hertz, derived value, value of the witness.
    pub failure: Option<(f64, Complex<f64>, Complex<f64>)>,
}

/// How an exact witness compared.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum ExactKind {
    /// As rational functions over Q\[s\], at the numbers of the report.
    Identical,
    /// At random points with random symbol values in prime fields.
    EqualAt {
        /// Points altogether.
        points: usize,
        /// Number of primes.
        primes: usize,
    },
}

/// Agreement without rounding.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct ExactEvidence {
    /// How it was compared.
    pub kind: ExactKind,
    /// Whether it agrees.
    pub passed: bool,
    /// When it does not: the derived value and that of the witness, as text.
    pub failure: Option<(String, String)>,
}

/// Compares a derived result with all witnesses that can be afforded.
///
/// Nominal values are taken when the circuit has them all and the transfer is finite there,
/// otherwise seeded random ones.
///
/// # Errors
/// The transfer has no answer at all: those of [`super::grounded_nodes`],
/// [`NumericError::Singular`] and [`NumericError::ZeroDenominator`].
pub fn crosscheck(
    circuit: &Circuit,
    transfer: &Transfer,
    candidate: &impl Candidate,
) -> Result<Report, NumericError> {
    let assignment = Assignment::for_transfer(circuit, transfer, SEED);
    let nominal_fault = match assignment.origin {
        Origin::Nominal => match witnesses(circuit, transfer, candidate, &assignment) {
            Ok(report) => return Ok(report),
            Err(fault) => Some(fault),
        },
        Origin::Random => None,
    };
    let random = Assignment::random(circuit, SEED);
    let report = witnesses(circuit, transfer, candidate, &random)?;
    Ok(Report { nominal_fault, ..report })
}

fn witnesses(
    circuit: &Circuit,
    transfer: &Transfer,
    candidate: &impl Candidate,
    assignment: &Assignment,
) -> Result<Report, NumericError> {
    // The exact solve comes first: it alone tells a singular circuit from a badly conditioned one.
    let mut evidence = Vec::new();
    match exact(circuit, transfer, &assignment.numbers) {
        Ok(witness) => evidence.extend(identical(candidate, assignment, &witness)),
        Err(NumericError::TooLarge) => regular_at(circuit, transfer, &assignment.numbers)?,
        Err(error) => return Err(error),
    }
    evidence.push(equal_modulo_primes(circuit, transfer, candidate)?);
    let floating = floating(circuit, transfer, candidate, assignment)?;
    Ok(Report { origin: assignment.origin, nominal_fault: None, floating, exact: evidence })
}

/// An error where the circuit has no unique solution at these numbers, whatever s is.
fn regular_at(
    circuit: &Circuit,
    transfer: &Transfer,
    numbers: &[Number],
) -> Result<(), NumericError> {
    let field = PrimeField::new(PRIMES[0]);
    let symbols = images(&field, numbers)?;
    let s = Generator::new(SEED).below(field.prime());
    modular_value(circuit, transfer, field.prime(), s, &symbols).map(|_| ())
}

fn identical(
    candidate: &impl Candidate,
    assignment: &Assignment,
    witness: &Fraction,
) -> Option<ExactEvidence> {
    let (numerator, denominator) = candidate.coefficients(&assignment.numbers)?;
    let derived = Fraction::new(&numerator, &denominator);
    let passed = derived.as_ref() == Some(witness);
    let failure = (!passed).then(|| {
        let derived = derived.map_or_else(|| "a denominator of 0".to_owned(), |f| f.to_string());
        (derived, witness.to_string())
    });
    Some(ExactEvidence { kind: ExactKind::Identical, passed, failure })
}

fn equal_modulo_primes(
    circuit: &Circuit,
    transfer: &Transfer,
    candidate: &impl Candidate,
) -> Result<ExactEvidence, NumericError> {
    let mut generator = Generator::new(SEED);
    let points_per_prime = if circuit.elements.len() < LONG { POINTS_PER_PRIME } else { 1 };
    let kind = ExactKind::EqualAt { points: MODULI * points_per_prime, primes: MODULI };
    for &prime in &PRIMES[..MODULI] {
        for _ in 0..points_per_prime {
            let mut attempts = 0;
            let (derived, witness) = loop {
                let s = generator.below(prime);
                let symbols: Vec<u64> =
                    circuit.symbols.iter().map(|_| generator.below(prime)).collect();
                attempts += 1;
                // A chance zero of a denominator is as likely as 2^−61: try elsewhere, but not for ever.
                match modular_value(circuit, transfer, prime, s, &symbols) {
                    Ok(value) => break (candidate.value_modulo(prime, s, &symbols), value),
                    Err(error) if attempts == ATTEMPTS => return Err(error),
                    Err(_) => {}
                }
            };
            if derived != Some(witness) {
                let derived =
                    derived.map_or_else(|| "a division by 0".to_owned(), |value| value.to_string());
                let failure = Some((
                    format!("{derived} modulo {prime}"),
                    format!("{witness} modulo {prime}"),
                ));
                return Ok(ExactEvidence { kind, passed: false, failure });
            }
        }
    }
    Ok(ExactEvidence { kind, passed: true, failure: None })
}

fn floating(
    circuit: &Circuit,
    transfer: &Transfer,
    candidate: &impl Candidate,
    assignment: &Assignment,
) -> Result<FloatingEvidence, NumericError> {
    let hertz = frequencies(circuit, assignment, POINTS);
    let values = assignment.floats();
    let plain = lowered(circuit);
    let mut sweep = Sweep::new(&plain, transfer, &values)?;
    let mut result = FloatingEvidence {
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
    let points: Vec<_> =
        hertz.iter().map(|f| Complex::new(0.0, std::f64::consts::TAU * f)).collect();
    let derived = candidate.values_at(&points, &values);
    result.largest_condition = sweep.largest_condition(&points);
    for ((&frequency, s), derived) in hertz.iter().zip(points).zip(derived) {
        let answer = match sweep.examine(s) {
            Ok(answer) => answer,
            // A pole on the imaginary axis that a frequency happens to meet says nothing.
            Err(
                NumericError::Singular
                | NumericError::ZeroDenominator
                | NumericError::DivisionByZero { .. },
            ) => continue,
            Err(error) => return Err(error),
        };
        let Some((error, bound)) = compare(&answer, derived) else { continue };
        result.points += 1;
        let agrees = error <= bound;
        if error > result.worst_relative_error || !agrees && result.passed || result.points == 1 {
            result.worst_relative_error = error;
            result.worst_hz = frequency;
            result.bound = bound;
        }
        if !agrees && result.passed {
            result.passed = false;
            result.failure = Some((frequency, derived, answer.value));
        }
    }
    Ok(result)
}

/// Relative error and bound; none where the solve is too uncertain to say anything.
fn compare(answer: &PointAnswer, derived: Complex<f64>) -> Option<(f64, f64)> {
    let difference = (derived - answer.value).norm();
    let difference = if difference.is_nan() { f64::INFINITY } else { difference };
    let is_zero = answer.value.norm() <= answer.error_bound;
    let unit = if is_zero { answer.scale } else { answer.value.norm() };
    if unit == 0.0 {
        return Some((difference, 0.0));
    }
    let bound = answer.error_bound / unit;
    (bound <= USELESS).then_some((difference / unit, bound + FLOOR))
}
