//! Plots over a logarithmic frequency axis.

use super::panel::Panel;
use super::scale::{self, Scale, extent};
use super::{Kind, Sign, TOP, cross, key, sheet};
use crate::analysis::response::{Corner, Envelope, Point, Range};
use crate::typeset::svg::{Picture, label};

/// What a plot over the frequency shows.
#[derive(Clone, Copy, Debug)]
pub struct FrequencyPlot<'a> {
    /// The name of the function.
    pub name: &'a str,
    /// The unit of the function; `1` for none.
    pub unit: &'a str,
    /// The exact function.
    pub points: &'a [Point],
    /// What the tolerances do.
    pub envelope: Option<&'a Envelope>,
    /// The ends of the straight lines: hertz and logarithm of the magnitude.
    pub asymptote: &'a [[f64; 2]],
    /// Where they bend.
    pub corners: &'a [Corner],
}

/// Heights of the panels.
const MAGNITUDE: [f64; 2] = [TOP, 290.0];
const PHASE: [f64; 2] = [304.0, 464.0];
/// Room for the words below the last panel.
const FOOT: f64 = 48.0;
/// How far a notch or a peak may leave the asymptote, in decades.
const DEEPEST: f64 = 2.5;

impl FrequencyPlot<'_> {
    fn band(&self) -> [f64; 2] {
        let end = |point: Option<&Point>| point.map_or(1.0, |point| point.hz);
        [end(self.points.first()), end(self.points.last())]
    }

    fn across(&self) -> Scale {
        scale::logarithmic(self.band().map(libm::log10), "Hz", 8)
    }

    fn is_ratio(&self) -> bool {
        self.unit == "1"
    }

    /// From decades to what the magnitude's axis counts: decibels for a plain ratio.
    fn height(&self, decades: f64) -> f64 {
        if self.is_ratio() { 20.0 * decades } else { decades }
    }

    fn magnitudes(&self) -> Scale {
        let ranges = self.envelope.map(|envelope| envelope.ranges.as_slice()).unwrap_or_default();
        let all = self.points.iter().map(|point| point.decades);
        let all = all.chain(ranges.iter().flat_map(|range| range.decades));
        let lines = extent(self.asymptote.iter().map(|end| end[1]));
        let shown = extent(all).unwrap_or([0.0, 0.0]);
        let [low, high] = match lines {
            Some([low, high]) => [shown[0].max(low - DEEPEST), shown[1].min(high + DEEPEST)],
            None => shown,
        };
        let range = [low, high.max(low)].map(|decades| self.height(decades));
        if self.is_ratio() { scale::decibels(range) } else { scale::magnitudes(range, self.unit) }
    }

    fn magnitude_words(&self) -> String {
        if self.is_ratio() { "magnitude in dB".to_owned() } else { "magnitude".to_owned() }
    }

    /// The curve in words: its values at the ends and at the largest.
    fn describe(&self) -> String {
        let size = |point: &Point| match self.is_ratio() {
            true if point.decades.is_finite() => format!("{} dB", label(point.decibels(), "")),
            true => "nothing".to_owned(),
            false => label(point.value.norm(), self.unit),
        };
        let at = |point: &Point| format!("{} at {}", size(point), label(point.hz, "Hz"));
        let largest = self.points.iter().max_by(|a, b| a.decades.total_cmp(&b.decades));
        let mut said: Vec<String> = self.points.first().map(at).into_iter().collect();
        said.extend(largest.map(|point| format!("at most {}", at(point))));
        said.extend(self.points.last().map(at));
        format!("Magnitude: {}.", said.join(", "))
    }

    fn signs(&self) -> Vec<(Sign, String)> {
        let mut signs = vec![(Sign::Curve(Kind::Exact), "exact".to_owned())];
        if let Some(Envelope { trials, .. }) = self.envelope {
            let words = format!("{trials} within tolerances");
            signs.push((Sign::Curve(Kind::Envelope), words));
        }
        signs
    }

    fn curves(&self, picture: &mut Picture, panel: &Panel, parts: &Parts<'_>) {
        if let Some(envelope) = self.envelope {
            let ranges = envelope.ranges.iter();
            let area = ranges.map(|range| (libm::log10(range.hz), (parts.range)(range)));
            panel.area(picture, Kind::Envelope.class(), area);
        }
        let points = self.points.iter();
        let points = points.map(|point| [libm::log10(point.hz), (parts.point)(point)]);
        panel.curve(picture, Kind::Exact.class(), points);
    }
}

/// What of a point a panel shows.
struct Parts<'a> {
    point: &'a dyn Fn(&Point) -> f64,
    range: &'a dyn Fn(&Range) -> [f64; 2],
}

/// Magnitude and phase, with the asymptotes and the corners.
pub fn bode(identifier: &str, plot: &FrequencyPlot<'_>) -> Picture {
    let title = format!("Magnitude and phase of {}", plot.name);
    let mut picture = sheet(identifier, PHASE[1] + FOOT, &title, &describe_bode(plot));
    let mut signs = plot.signs();
    signs.push((Sign::Curve(Kind::Asymptote), "asymptote".to_owned()));
    let [from, to] = plot.band();
    let inside = |corner: &&Corner| (from..=to).contains(&corner.hz);
    let corners: Vec<&Corner> = plot.corners.iter().filter(inside).collect();
    if corners.iter().any(|corner| corner.is_pole) {
        signs.push((Sign::Pole, "pole".to_owned()));
    }
    if corners.iter().any(|corner| !corner.is_pole) {
        signs.push((Sign::Zero, "zero".to_owned()));
    }
    key(&mut picture, &signs);
    let (across, up) = (plot.across(), plot.magnitudes());
    let panel = Panel::new(MAGNITUDE, &across, &up);
    panel.ground(&mut picture, (&across, &up), &plot.magnitude_words(), None);
    panel.inside(&mut picture, |picture| {
        let lines = plot.asymptote.iter().map(|&[hz, y]| [libm::log10(hz), plot.height(y)]);
        let parts = Parts {
            point: &|point| plot.height(point.decades),
            range: &|range| range.decades.map(|decades| plot.height(decades)),
        };
        panel.curve(picture, Kind::Asymptote.class(), lines);
        plot.curves(picture, &panel, &parts);
        for corner in corners {
            let place = panel.place([libm::log10(corner.hz), plot.height(corner.decades)]);
            if corner.is_pole { cross(picture, place) } else { picture.circle("mark", place, 4.5) }
        }
    });
    let ranges = plot.envelope.map(|envelope| envelope.ranges.as_slice()).unwrap_or_default();
    let all = plot.points.iter().map(Point::degrees);
    let all = all.chain(ranges.iter().flat_map(|range| range.phase.map(f64::to_degrees)));
    let up = scale::degrees(extent(all).unwrap_or([0.0, 0.0]));
    let panel = Panel::new(PHASE, &across, &up);
    panel.ground(&mut picture, (&across, &up), "phase in degrees", Some("frequency"));
    panel.inside(&mut picture, |picture| {
        let parts =
            Parts { point: &Point::degrees, range: &|range| range.phase.map(f64::to_degrees) };
        plot.curves(picture, &panel, &parts);
    });
    picture
}

fn describe_bode(plot: &FrequencyPlot<'_>) -> String {
    let degrees = |point: Option<&Point>| {
        point.map_or(String::new(), |point| format!("{}°", label(point.degrees(), "")))
    };
    format!(
        "{} Phase: from {} to {}.",
        plot.describe(),
        degrees(plot.points.first()),
        degrees(plot.points.last())
    )
}

/// The group delay.
pub fn delay(identifier: &str, plot: &FrequencyPlot<'_>) -> Picture {
    let shown = extent(plot.points.iter().map(|point| point.delay)).unwrap_or([0.0, 0.0]);
    let title = format!("Group delay of {}", plot.name);
    let words = format!("Between {} and {}.", label(shown[0], "s"), label(shown[1], "s"));
    let mut picture = sheet(identifier, MAGNITUDE[1] + FOOT, &title, &words);
    key(&mut picture, &plot.signs()[..1]);
    let (across, up) = (plot.across(), scale::linear(shown, "s", 6));
    let panel = Panel::new(MAGNITUDE, &across, &up);
    panel.ground(&mut picture, (&across, &up), "group delay", Some("frequency"));
    panel.inside(&mut picture, |picture| {
        let points = plot.points.iter().map(|point| [libm::log10(point.hz), point.delay]);
        panel.curve(picture, Kind::Exact.class(), points);
    });
    picture
}

/// A noise density.
pub fn density(identifier: &str, plot: &FrequencyPlot<'_>) -> Picture {
    let title = format!("Noise density {}", plot.name);
    let mut picture = sheet(identifier, MAGNITUDE[1] + FOOT, &title, &plot.describe());
    key(&mut picture, &plot.signs()[..1]);
    // The root of the density is what data sheets give.
    let root = |point: &Point| point.decades / 2.0;
    let shown = extent(plot.points.iter().map(root)).unwrap_or([0.0, 0.0]);
    let (across, up) = (plot.across(), scale::magnitudes(shown, "V"));
    let panel = Panel::new(MAGNITUDE, &across, &up);
    panel.ground(&mut picture, (&across, &up), "root of the density, per √Hz", Some("frequency"));
    panel.inside(&mut picture, |picture| {
        let points = plot.points.iter().map(|point| [libm::log10(point.hz), root(point)]);
        panel.curve(picture, Kind::Exact.class(), points);
    });
    picture
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::algebra::Univariate;
    use crate::analysis::response::{Factored, logarithmic};

    /// The drawn curve holds the points of the table.
    #[test]
    fn the_curve_is_the_table() {
        let above = Univariate::from_integers([5_i64]);
        let below = Univariate::from_integers([1000_i64, 3, 1]);
        let function = Factored::new(&above, &below).expect("roots");
        let points: Vec<Point> =
            logarithmic([0.1, 100.0], 50).into_iter().map(|hz| function.at(hz)).collect();
        let (corners, asymptote) = (function.corners(), function.asymptote([0.1, 100.0]));
        let plot = FrequencyPlot {
            name: "H",
            unit: "1",
            points: &points,
            envelope: None,
            asymptote: &asymptote,
            corners: &corners,
        };
        let svg = bode("try", &plot).svg();
        let document = roxmltree::Document::parse(&svg).expect("XML");
        let exact: Vec<&str> = document
            .descendants()
            .filter(|node| node.attribute("class") == Some("exact"))
            .filter_map(|node| node.attribute("d"))
            .collect();
        // One in the key, one for the magnitude, one for the phase.
        assert_eq!(exact.len(), 3);
        let (across, up) = (plot.across(), plot.magnitudes());
        let panel = Panel::new(MAGNITUDE, &across, &up);
        let back = |axis: &crate::typeset::svg::Axis, place: f64| {
            let part = (place - axis.places[0]) / (axis.places[1] - axis.places[0]);
            axis.values[0] + part * (axis.values[1] - axis.values[0])
        };
        let drawn: Vec<Vec<f64>> = exact[1]
            .split(['M', 'L'])
            .filter(|text| !text.is_empty())
            .map(|pair| pair.split(' ').map(|text| text.parse().expect("a number")).collect())
            .collect();
        assert_eq!(drawn.len(), points.len());
        for (place, point) in drawn.iter().zip(&points) {
            assert!((back(&panel.x, place[0]) - libm::log10(point.hz)).abs() < 1e-4);
            assert!((back(&panel.y, place[1]) - point.decibels()).abs() < 0.01);
        }
    }
}
