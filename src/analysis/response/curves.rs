//! Curves: a function over its band, and over time, as lists of points.

use super::{
    Envelope, Factored, Point, Response, ResponseError, TimeFunction, envelope, even, sharpened,
};
use crate::analysis::Entry;
use crate::circuit::Circuit;

/// Points of a picture over the frequency or over time, where nothing else is asked for.
pub const POINTS: usize = 301;

/// A function over its band.
#[derive(Clone, Debug)]
pub struct Curves {
    /// The function at each frequency.
    pub points: Vec<Point>,
    /// What the tolerances do to it.
    pub envelope: Option<Envelope>,
}

impl Curves {
    /// Over a grid of frequencies; the envelope of so many circuits from a seed where that is asked for.
    ///
    /// # Errors
    /// Symbols without a value.
    pub fn new(
        circuit: &Circuit,
        entry: &Entry,
        response: &Response,
        grid: &[f64],
        chance: Option<(usize, u64)>,
    ) -> Result<Self, ResponseError> {
        let points: Vec<Point> = grid.iter().map(|&hz| response.at(hz)).collect();
        let envelope = match chance {
            Some(draws) => envelope(circuit, entry, &points, draws)?,
            None => None,
        };
        Ok(Self { points, envelope })
    }
}

impl Response {
    /// The grid of a picture over a band: even over the logarithm, closer where a pair is sharp.
    pub fn grid(&self, band: [f64; 2]) -> Vec<f64> {
        let grid = super::logarithmic(band, POINTS);
        match self.transfer() {
            Some(function) => sharpened(&grid, function),
            None => grid,
        }
    }
}

/// What drives a function over time.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Excitation {
    /// The unit step.
    Step,
    /// The unit impulse.
    Impulse,
}

/// A function over time, in closed form and as points.
#[derive(Clone, Debug)]
pub struct TimeCurve {
    /// The closed form.
    pub function: TimeFunction,
    /// Seconds and values.
    pub points: Vec<[f64; 2]>,
}

/// The part of the largest value that rounding may cost before a closed form is given up.
const TRUSTED: f64 = 1e-7;

impl TimeCurve {
    /// The points of a closed form from t = 0 to `end`, or to a time after which little happens.
    ///
    /// # Errors
    /// A closed form whose terms cancel beyond what double precision resolves.
    pub fn new(
        function: TimeFunction,
        end: Option<f64>,
        points: usize,
    ) -> Result<Self, ResponseError> {
        let end = end.unwrap_or_else(|| round_up(function.duration().unwrap_or(1.0)));
        let times = even([0.0, end], points).into_iter();
        let points: Vec<[f64; 2]> = times.map(|t| [t, function.at(t)]).collect();
        let largest = points.iter().map(|point| point[1].abs()).fold(0.0, f64::max);
        if function.uncertainty > TRUSTED * largest.max(f64::MIN_POSITIVE) {
            return Err(ResponseError::Cancelling);
        }
        Ok(Self { function, points })
    }
}

impl Factored {
    /// The answer to a unit step or impulse.
    ///
    /// # Errors
    /// Poles that double precision does not tell apart.
    pub fn answer(&self, excitation: Excitation) -> Result<TimeFunction, ResponseError> {
        match excitation {
            Excitation::Step => self.step(),
            Excitation::Impulse => self.impulse(),
        }
    }
}

/// The next of 1, 2, 5, 10, …
fn round_up(value: f64) -> f64 {
    let power = libm::exp10(libm::log10(value).floor());
    let digits = [1.0, 2.0, 5.0, 10.0].into_iter();
    digits.map(|digit| digit * power).find(|&round| round >= value * (1.0 - 1e-9)).unwrap_or(value)
}
