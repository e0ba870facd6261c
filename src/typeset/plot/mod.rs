//! Plots of responses: magnitude and phase, group delay, the Nyquist plane, and answers over time.
//!
//! What is drawn are the points that the tables hold, nothing is computed here. A curve has a colour and a
//! pattern of dashes of its own, so that it is told apart without colours too.

mod frequency;
mod nyquist;
mod panel;
mod scale;
mod time;

pub use frequency::{FrequencyPlot, bode, delay, density};
pub use nyquist::nyquist;
pub use time::{TimePlot, time};

use super::svg::{Anchor, Picture};

/// Width of every plot.
const WIDTH: f64 = 660.0;
/// Edges of the panels.
const LEFT: f64 = 84.0;
const RIGHT: f64 = 626.0;
/// Below the title and the key.
const TOP: f64 = 62.0;

/// What a curve is, which decides how it looks.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Kind {
    /// The exact function at the nominal values.
    Exact,
    /// The outermost of circuits drawn within the tolerances.
    Envelope,
    /// The straight lines.
    Asymptote,
}

impl Kind {
    fn class(self) -> &'static str {
        match self {
            Self::Exact => "exact",
            Self::Envelope => "envelope",
            Self::Asymptote => "asymptote",
        }
    }
}

/// A picture with the rules of the curves, its title written in it.
fn sheet(identifier: &str, height: f64, title: &str, description: &str) -> Picture {
    let mut picture = Picture::new(identifier, [WIDTH, height], title, description);
    picture.rule(
        ".exact",
        "fill:none;stroke:#0b5394;stroke-width:2.2;stroke-linejoin:round",
        "stroke:#7fbcf5",
    );
    picture.rule(
        ".envelope",
        "fill:#0b5394;fill-opacity:.16;stroke:#0b5394;stroke-width:.6",
        "fill:#7fbcf5;stroke:#7fbcf5",
    );
    picture.rule(
        ".asymptote",
        "fill:none;stroke:#5c5c5c;stroke-width:1.2;stroke-dasharray:7 4",
        "stroke:#b0b0b0",
    );
    picture.rule(".mark", "fill:none;stroke:#b45309;stroke-width:1.8", "stroke:#f2a65a");
    picture.rule(".fine", "fill:none;stroke:#eee;stroke-width:1", "stroke:#2b2b2b");
    picture.rule(".heading", "font-weight:bold", "");
    picture.text("heading", [LEFT, 20.0], Anchor::Start, title);
    picture
}

/// What can stand in a key.
enum Sign {
    Curve(Kind),
    Pole,
    Zero,
}

/// The key: a sample and words for each.
fn key(picture: &mut Picture, signs: &[(Sign, String)]) {
    let mut x = LEFT;
    let y = 43.0;
    for (sign, words) in signs {
        match sign {
            Sign::Curve(Kind::Envelope) => {
                picture.rectangle("envelope", [x, y - 6.0], [26.0, 12.0]);
                x += 32.0;
            }
            Sign::Curve(kind) => {
                picture.line(kind.class(), [x, y], [x + 26.0, y]);
                x += 32.0;
            }
            Sign::Pole => {
                cross(picture, [x + 6.0, y]);
                x += 16.0;
            }
            Sign::Zero => {
                picture.circle("mark", [x + 6.0, y], 4.5);
                x += 16.0;
            }
        }
        picture.text("", [x, y + 4.5], Anchor::Start, words);
        x += 6.7 * words.chars().count() as f64 + 18.0;
    }
}

fn cross(picture: &mut Picture, [x, y]: [f64; 2]) {
    picture.line("mark", [x - 4.5, y - 4.5], [x + 4.5, y + 4.5]);
    picture.line("mark", [x - 4.5, y + 4.5], [x + 4.5, y - 4.5]);
}
