//! Everything that is told of a result in one go: formula, roots, curves, and the answer to a step.

use super::response::{Curves, Excitation, POINTS, Response, ResponseError, TimeCurve};
use super::roots::{self, Nominal, RootReport};
use super::{AnalysisError, Entry, Options, answer};
use crate::circuit::{Ask, Circuit};

/// A result and what follows from its numbers.
#[derive(Debug)]
pub struct Survey {
    /// The result.
    pub entry: Entry,
    /// What needs numbers, or why there is none of it.
    pub numbers: Result<Numbers, ResponseError>,
}

/// What follows from the nominal values.
#[derive(Debug)]
pub struct Numbers {
    /// The function.
    pub response: Response,
    /// Over which band, in hertz.
    pub band: [f64; 2],
    /// The function over the band.
    pub curves: Curves,
    /// Poles and zeros; none of a noise density.
    pub roots: Option<RootReport>,
    /// The answer to a unit step; none of a noise density.
    pub step: Option<Result<TimeCurve, ResponseError>>,
}

/// Answers a question with all that is told of it; the envelope is that of so many circuits from a seed.
///
/// # Errors
/// Those of [`answer()`].
pub fn survey(
    circuit: &Circuit,
    ask: &Ask,
    options: &Options,
    chance: Option<(usize, u64)>,
) -> Result<Vec<Survey>, AnalysisError> {
    let entries = answer(circuit, ask, options)?;
    let with_numbers = |entry: Entry| {
        let numbers = numbers(circuit, &entry, chance);
        Survey { entry, numbers }
    };
    Ok(entries.into_iter().map(with_numbers).collect())
}

fn numbers(
    circuit: &Circuit,
    entry: &Entry,
    chance: Option<(usize, u64)>,
) -> Result<Numbers, ResponseError> {
    let response = Response::new(circuit, entry)?;
    let band = response.band(circuit);
    let curves = Curves::new(circuit, entry, &response, &response.grid(band), chance)?;
    let roots = match response.transfer() {
        None => None,
        Some(_) => Some(roots::analyse(circuit, entry, &Nominal::new(circuit, entry)?)?),
    };
    let step = response.transfer().map(|function| {
        let answer = function.answer(Excitation::Step)?;
        TimeCurve::new(answer, None, POINTS)
    });
    Ok(Numbers { response, band, curves, roots, step })
}
