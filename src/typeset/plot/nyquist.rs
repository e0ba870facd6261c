//! The Nyquist plane: the value as the frequency goes from 0 upwards, and its mirror image for negative
//! frequencies.

use num_complex::Complex;

use super::{FrequencyPlot, Kind, LEFT, RIGHT, Sign, TOP, key, sheet};
use crate::typeset::svg::{Anchor, Axis, Picture, label, ticks};

/// Far from the unit circle the plane is cut off at this many times its radius, where the point −1 matters.
const FAR: f64 = 20.0;

/// The curve in the complex plane, both axes on one scale, with the point −1 of a loop gain.
pub fn nyquist(identifier: &str, plot: &FrequencyPlot<'_>) -> Picture {
    let finite = plot.points.iter().map(|point| point.value).filter(|value| value.is_finite());
    let values: Vec<Complex<f64>> = finite.collect();
    let largest = values.iter().map(|value| value.norm()).fold(0.0, f64::max);
    let is_ratio = plot.unit == "1";
    let half = if is_ratio && largest > FAR { FAR } else { 1.1 * largest.max(1e-300) };
    let half = if is_ratio { half.max(1.3) } else { half };
    let side = RIGHT - LEFT;
    let bottom = TOP + side;
    let title = format!("Nyquist plot of {}", plot.name);
    let words = format!(
        "The value in the complex plane over the band; its size is at most {}.",
        label(largest, if is_ratio { "" } else { plot.unit })
    );
    let mut picture = sheet(identifier, bottom + 48.0, &title, &words);
    picture.rule(
        ".mirror",
        "fill:none;stroke:#0b5394;stroke-width:1.3;stroke-dasharray:3 3",
        "stroke:#7fbcf5",
    );
    picture.rule(
        ".unit",
        "fill:none;stroke:#5c5c5c;stroke-width:1;stroke-dasharray:7 4",
        "stroke:#b0b0b0",
    );
    key(&mut picture, &[(Sign::Curve(Kind::Exact), "positive frequencies".to_owned())]);
    picture.line("mirror", [LEFT + 200.0, 43.0], [LEFT + 226.0, 43.0]);
    picture.text("", [LEFT + 232.0, 47.5], Anchor::Start, "negative frequencies");
    let x = Axis { values: [-half, half], places: [LEFT, RIGHT] };
    let y = Axis { values: [-half, half], places: [bottom, TOP] };
    let unit = if is_ratio { "" } else { plot.unit };
    for tick in ticks(-half, half, 6) {
        let (across, up) = (x.place(tick), y.place(tick));
        picture.line("grid", [across, TOP], [across, bottom]);
        picture.line("grid", [LEFT, up], [RIGHT, up]);
        picture.text("", [across, bottom + 18.0], Anchor::Middle, &label(tick, unit));
        picture.text("", [LEFT - 7.0, up + 4.5], Anchor::End, &label(tick, unit));
    }
    picture.rectangle("frame", [LEFT, TOP], [side, side]);
    picture.line("axis", [LEFT, y.place(0.0)], [RIGHT, y.place(0.0)]);
    picture.line("axis", [x.place(0.0), TOP], [x.place(0.0), bottom]);
    picture.text("", [(LEFT + RIGHT) / 2.0, bottom + 37.0], Anchor::Middle, "real part");
    picture.upright_text("", [14.0, (TOP + bottom) / 2.0], Anchor::Middle, "imaginary part");
    picture.begin_clip([LEFT, TOP], [side, side]);
    let limit = |place: f64| place.clamp(-3e3, 3e3);
    let place = |value: &Complex<f64>| [limit(x.place(value.re)), limit(y.place(value.im))];
    let mirror: Vec<[f64; 2]> = values.iter().map(|value| place(&value.conj())).collect();
    picture.path("mirror", &mirror);
    let places: Vec<[f64; 2]> = values.iter().map(place).collect();
    picture.path(Kind::Exact.class(), &places);
    if is_ratio {
        picture.circle("unit", [x.place(0.0), y.place(0.0)], x.place(1.0) - x.place(0.0));
    }
    picture.end_clip();
    if is_ratio {
        let [across, up] = place(&Complex::new(-1.0, 0.0));
        super::cross(&mut picture, [across, up]);
        picture.text("", [across + 8.0, up - 7.0], Anchor::Start, "−1");
    }
    picture
}
