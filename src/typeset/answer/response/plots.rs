//! From a result with its curves to its plot.

use super::{excitation_word, label};
use crate::analysis::Entry;
use crate::analysis::response::{Curves, Excitation, Response, TimeCurve};
use crate::circuit::Unit;
use crate::typeset::plot::{self, FrequencyPlot, TimePlot};
use crate::typeset::svg::Picture;

/// What a plot over the frequency shows.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum View {
    /// Magnitude and phase; a density as it is.
    Bode,
    /// The group delay.
    Delay,
    /// The complex plane.
    Nyquist,
}

/// The plot of a function over its band.
pub fn plot(
    view: View,
    entry: &Entry,
    response: &Response,
    band: [f64; 2],
    curves: &Curves,
) -> Picture {
    let (name, unit) = (label(entry), entry.unit.to_string());
    let function = response.transfer();
    let asymptote = function.map(|function| function.asymptote(band)).unwrap_or_default();
    let corners = function.map(|function| function.corners()).unwrap_or_default();
    let shown = FrequencyPlot {
        name: &name,
        unit: &unit,
        points: &curves.points,
        envelope: curves.envelope.as_ref(),
        asymptote: &asymptote,
        corners: &corners,
    };
    match view {
        View::Bode if function.is_none() => plot::density(&format!("density-{name}"), &shown),
        View::Bode => plot::bode(&format!("bode-{name}"), &shown),
        View::Delay => plot::delay(&format!("delay-{name}"), &shown),
        View::Nyquist => plot::nyquist(&format!("nyquist-{name}"), &shown),
    }
}

/// The plot of a function over time.
pub fn time_plot(entry: &Entry, excitation: Excitation, unit: Unit, curve: &TimeCurve) -> Picture {
    let (name, word) = (label(entry), excitation_word(excitation));
    let title = match excitation {
        Excitation::Step => format!("Step response of {name}"),
        Excitation::Impulse => format!("Impulse response of {name}"),
    };
    let unit = unit.to_string();
    let shown = TimePlot { title: &title, unit: &unit, points: &curve.points };
    plot::time(&format!("{word}-{name}"), &shown)
}
