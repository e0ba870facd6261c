//! What a function does over frequency and over time, at the nominal values.
//!
//! Everything comes from the exact numeric coefficients and their certified roots: the value at a
//! frequency is the product of the factors of Bode's form, so it neither overflows nor loses the turns of
//! its phase; group delay and asymptotes are sums over the roots; step and impulse responses are
//! partial fractions. A noise density is a function of the frequency alone.
//!
//! May use: the rest of [`crate::analysis`], [`crate::circuit`], [`crate::algebra`],
//! [`crate::elimination`]. Prints nothing.

mod asymptote;
mod curves;
mod envelope;
mod error;
mod factored;
mod fractions;
mod grid;
mod initial;

pub use asymptote::Corner;
pub use curves::{Curves, Excitation, POINTS, TimeCurve};
pub use envelope::{Envelope, Range, envelope};
pub use error::ResponseError;
pub use factored::{Factored, Point};
pub use fractions::{Term, TimeFunction};
pub use grid::{even, logarithmic, preferred, sharpened};
pub use initial::{InitialCondition, from_state};

use num_complex::Complex;
use num_traits::{ToPrimitive, Zero};

use super::notice::listed;
use super::roots::Nominal;
use super::{ClosedForm, Entry};
use crate::algebra::{Univariate, Var};
use crate::circuit::{Circuit, Number, SymbolId, SymbolRole};
use crate::elimination::{Scaled, scaled_integer, symbol_of};

/// The band in hertz where neither the file nor the roots suggest one.
const PLAIN_BAND: [f64; 2] = [1.0, 1e6];

/// A function with numbers in it.
#[derive(Clone, Debug)]
pub enum Response {
    /// A ratio of two quantities.
    Transfer(Box<Factored>),
    /// A density of noise power over the frequency.
    Density(Density),
}

impl Response {
    /// The function of a result at the nominal values.
    ///
    /// # Errors
    /// Symbols without a value, a function that is not finite there, and bounds of the work.
    pub fn new(circuit: &Circuit, entry: &Entry) -> Result<Self, ResponseError> {
        let missing = missing(circuit, entry);
        if !missing.is_empty() {
            let verb = if missing.len() == 1 { "has" } else { "have" };
            return Err(ResponseError::NoValues(listed(missing.into_iter()), verb));
        }
        if entry.noise.is_some() {
            let numeric = entry.numeric.as_ref().ok_or(ResponseError::NotFinite)?;
            let [above, below] = [&numeric.numerator, &numeric.denominator].map(|c| c.to_vec());
            return Ok(Self::Density(Density { above, below }));
        }
        let (above, below) = coefficients(circuit, entry)?;
        Ok(Self::Transfer(Box::new(Factored::new(&above, &below)?)))
    }

    /// The value at a frequency in hertz.
    pub fn at(&self, hz: f64) -> Point {
        match self {
            Self::Transfer(factored) => factored.at(hz),
            Self::Density(density) => density.at(hz),
        }
    }

    /// The transfer function, unless this is a density.
    pub fn transfer(&self) -> Option<&Factored> {
        match self {
            Self::Transfer(factored) => Some(factored),
            Self::Density(_) => None,
        }
    }

    /// Whether the function is the same at every frequency.
    pub fn is_constant(&self) -> bool {
        match self {
            Self::Transfer(factored) => factored.is_constant(),
            Self::Density(density) => density.above.len() <= 1 && density.below.len() <= 1,
        }
    }

    /// The band of the circuit; without one, a decade beyond the lowest and the highest corner.
    pub fn band(&self, circuit: &Circuit) -> [f64; 2] {
        if let Some(band) = &circuit.band {
            let ends = [&band.from, &band.to].map(|end| end.to_f64().unwrap_or(f64::NAN));
            if ends.iter().all(|end| end.is_finite() && *end > 0.0) && ends[0] < ends[1] {
                return ends;
            }
        }
        let corners = self.transfer().map(Factored::corners).unwrap_or_default();
        match (corners.first(), corners.last()) {
            (Some(first), Some(last)) => [
                libm::exp10(libm::log10(first.hz).floor() - 1.0),
                libm::exp10(libm::log10(last.hz).ceil() + 1.0),
            ],
            _ => PLAIN_BAND,
        }
    }
}

/// Numerator and denominator in lowest terms at the nominal values.
fn coefficients(
    circuit: &Circuit,
    entry: &Entry,
) -> Result<(Univariate, Univariate), ResponseError> {
    if let Some(numeric) = &entry.numeric {
        let of = |coefficients: &[Number]| Univariate::from_rationals(coefficients);
        return Ok((of(&numeric.numerator), of(&numeric.denominator)));
    }
    let nominal = Nominal::new(circuit, entry)?;
    match nominal.parts() {
        Some(_) => nominal.with(&[]).ok_or(ResponseError::NotFinite),
        None if entry.notices.iter().any(|notice| notice.code == "no-nominal-value") => {
            Err(ResponseError::NotFinite)
        }
        None => Err(ResponseError::TooLarge),
    }
}

/// The symbols of the formula that have no value, quoted.
fn missing(circuit: &Circuit, entry: &Entry) -> Vec<String> {
    let used: Vec<Var> = match (&entry.form, &entry.elimination) {
        (ClosedForm::Expanded(fraction), _) => {
            fraction.numerator().variables().chain(fraction.denominator().variables()).collect()
        }
        (ClosedForm::Nested(_), Some(elimination)) => elimination.variables().to_vec(),
        (ClosedForm::Nested(_), None) => Vec::new(),
    };
    let mut used: Vec<SymbolId> = used.into_iter().filter_map(symbol_of).collect();
    used.sort_unstable();
    used.dedup();
    let symbols = used.into_iter().filter_map(|id| circuit.symbols.get(id.0 as usize));
    symbols
        .filter(|symbol| symbol.nominal.is_none() && symbol.role != SymbolRole::Pi)
        .map(|symbol| format!("`{}`", symbol.name))
        .collect()
}

/// A density of noise power: a quotient of polynomials in the frequency.
#[derive(Clone, Debug)]
pub struct Density {
    above: Vec<Number>,
    below: Vec<Number>,
}

impl Density {
    fn at(&self, hz: f64) -> Point {
        let part = |coefficients: &[Number]| {
            let x = Scaled::new(Complex::new(hz, 0.0), 0);
            coefficients.iter().rev().fold(Scaled::ZERO, |sum, c| sum.times(x).plus(scaled(c)))
        };
        let quotient = part(&self.above).divided_by(part(&self.below));
        let value = quotient.value();
        Point { hz, value, decades: quotient.log10(), phase: 0.0, delay: 0.0 }
    }
}

/// An exact number with its exponent apart.
fn scaled(number: &Number) -> Scaled {
    if number.is_zero() {
        return Scaled::ZERO;
    }
    scaled_integer(number.numer()).divided_by(scaled_integer(number.denom()))
}
