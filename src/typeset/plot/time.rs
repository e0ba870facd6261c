//! Answers over time.

use super::panel::Panel;
use super::scale::{self, extent};
use super::{Kind, Sign, TOP, key, sheet};
use crate::typeset::svg::{Picture, label};

/// What a plot over time shows.
#[derive(Clone, Copy, Debug)]
pub struct TimePlot<'a> {
    /// `Step response of H`
    pub title: &'a str,
    /// The unit of the values; `1` for none.
    pub unit: &'a str,
    /// Seconds and values.
    pub points: &'a [[f64; 2]],
}

/// The curve.
pub fn time(identifier: &str, plot: &TimePlot<'_>) -> Picture {
    let unit = if plot.unit == "1" { "" } else { plot.unit };
    let shown = extent(plot.points.iter().map(|point| point[1])).unwrap_or([0.0, 0.0]);
    let ends = [plot.points.first(), plot.points.last()];
    let [first, last] = ends.map(|point| point.copied().unwrap_or([0.0, 0.0]));
    let words = format!(
        "From {} at {} to {} at {}; between {} and {}.",
        label(first[1], unit),
        label(first[0], "s"),
        label(last[1], unit),
        label(last[0], "s"),
        label(shown[0], unit),
        label(shown[1], unit)
    );
    let panel_height = [TOP, 300.0];
    let mut picture = sheet(identifier, panel_height[1] + 48.0, plot.title, &words);
    key(&mut picture, &[(Sign::Curve(Kind::Exact), "exact".to_owned())]);
    // The line of 0 is a reference.
    let with_zero = [shown[0].min(0.0), shown[1].max(0.0)];
    let across = scale::from_start([first[0], last[0]], "s", 7);
    let up = scale::linear(with_zero, unit, 7);
    let panel = Panel::new(panel_height, &across, &up);
    panel.ground(&mut picture, (&across, &up), "value", Some("time"));
    panel.inside(&mut picture, |picture| {
        panel.curve(picture, "axis", [[first[0], 0.0], [last[0], 0.0]]);
        panel.curve(picture, Kind::Exact.class(), plot.points.iter().copied());
    });
    picture
}
