//! Responses: tables as text, CSV and JSON, closed forms over time, and plots.

mod closed;
mod csv;
mod json;
mod plots;
mod text;

pub use closed::closed_form;
pub use csv::csv;
pub use json::{RESPONSE_SCHEMA, ResponseResult, Responses, result};
pub use plots::{View, plot, time_plot};
pub use text::text;

use crate::analysis::Entry;
use crate::analysis::response::{Curves, Excitation, Response, TimeCurve};
use crate::circuit::{Ask, Circuit, Probe, Unit};

/// One result with its curves.
#[derive(Debug)]
pub struct Report<'a> {
    /// The circuit.
    pub circuit: &'a Circuit,
    /// The question.
    pub ask: &'a Ask,
    /// The result.
    pub entry: &'a Entry,
    /// The function with numbers.
    pub response: &'a Response,
    /// Over which band, in hertz.
    pub band: [f64; 2],
    /// Over the frequency, or over time.
    pub kind: Kind,
}

/// Which curves.
#[derive(Debug)]
pub enum Kind {
    /// Over the frequency.
    Frequency(Curves),
    /// Over time.
    Time {
        /// What drives it.
        excitation: Excitation,
        /// The height of the step or the weight of the impulse.
        height: f64,
        /// Initial values: element, value in its unit.
        initial: Vec<(String, f64)>,
        /// The answer.
        curve: TimeCurve,
    },
}

impl Report<'_> {
    /// `H`, or `H[Vin]` for a source's share in a superposition.
    pub fn label(&self) -> String {
        label(self.entry)
    }

    /// The question in words: `V(out) / Vin`.
    pub fn query(&self) -> String {
        match &self.entry.source {
            Some(source) => format!("{} / {source}", self.entry.query),
            None => self.entry.query.clone(),
        }
    }

    /// The unit of the values over time: that of the upper quantity.
    pub fn time_unit(&self, excitation: Excitation) -> Unit {
        let unit = time_unit(self.ask, self.entry);
        match excitation {
            Excitation::Step => unit,
            Excitation::Impulse => unit.times(Unit::HERTZ),
        }
    }
}

/// `H`, or `H[Vin]` for a source's share in a superposition.
pub(crate) fn label(entry: &Entry) -> String {
    match &entry.source {
        Some(source) => format!("{}[{source}]", entry.name),
        None => entry.name.clone(),
    }
}

/// The unit of the upper quantity of a ratio when the lower one is 1.
pub(crate) fn time_unit(ask: &Ask, entry: &Entry) -> Unit {
    match ask.transfers().first().map(|transfer| transfer.numerator) {
        Some(Probe::Voltage(..)) => Unit::VOLT,
        Some(Probe::Current(_)) => Unit::AMPERE,
        _ => entry.unit,
    }
}

/// The words for what drives a function over time.
pub(crate) fn excitation_word(excitation: Excitation) -> &'static str {
    match excitation {
        Excitation::Step => "step",
        Excitation::Impulse => "impulse",
    }
}
