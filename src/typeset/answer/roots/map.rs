//! The complex plane: crosses for poles, open circles for zeros, the circle of ω0 through each pair, and
//! the paths of a root locus.
//!
//! Both axes have one scale, so that angles are true and a circle is a circle. Where the sizes of the
//! roots differ by more than fifty, the distance from the origin is the logarithm of the size;
//! directions, and with them the Q of a pair, stay what they are.

use num_complex::Complex;

use crate::analysis::Entry;
use crate::analysis::roots::{Locus, RootFacts, RootReport};
use crate::circuit::Circuit;
use crate::typeset::number::superscript;
use crate::typeset::svg::{Anchor, Axis, Picture, label, ticks};

const SIZE: [f64; 2] = [560.0, 560.0];
const LEFT: f64 = 70.0;
const TOP: f64 = 46.0;
const SIDE: f64 = 450.0;

/// Ratio of sizes up to which the scale is linear.
const LINEAR: f64 = 50.0;

/// The picture of one result; with the paths of the poles where a locus is given.
pub fn map(
    circuit: &Circuit,
    entry: &Entry,
    report: &RootReport,
    locus: Option<&Locus>,
) -> Picture {
    let name = super::label(entry);
    let roots = || report.poles.iter().chain(&report.zeros).map(|facts| facts.root.value);
    let paths = || locus.into_iter().flat_map(|locus| locus.paths.iter().flatten().flatten());
    let sizes: Vec<f64> = roots().chain(paths().copied()).map(|root| root.norm()).collect();
    let plane = Plane::around(&sizes);
    let title = match locus {
        Some(locus) => {
            format!("Root locus of {name} against {}", circuit[locus.symbol].name)
        }
        None => format!("Poles and zeros of {name}"),
    };
    let identifier = format!("roots-{name}");
    let mut picture = Picture::new(&identifier, SIZE, &title, &describe(report));
    picture.rule(".pole", "fill:none;stroke:#0b5394;stroke-width:2.2", "stroke:#7fbcf5");
    picture.rule(".zero", "fill:none;stroke:#b45309;stroke-width:2.2", "stroke:#f2a65a");
    picture.rule(
        ".circle",
        "fill:none;stroke:#888;stroke-width:1;stroke-dasharray:5 4",
        "stroke:#999",
    );
    picture.rule(
        ".locus",
        "fill:none;stroke:#0b5394;stroke-width:1.3;opacity:.75",
        "stroke:#7fbcf5",
    );
    picture.rule(".arrow", "fill:#0b5394;stroke:none", "fill:#7fbcf5");
    picture.rule(".right", "fill:#c0392b;opacity:.07", "opacity:.16");
    picture.text("", [LEFT + SIDE / 2.0, 20.0], Anchor::Middle, &title);
    let key = match locus {
        Some(_) => "× poles, ○ zeros, • poles at ten times the value",
        None => "× poles, ○ zeros",
    };
    picture.text("", [LEFT + SIDE, TOP - 8.0], Anchor::End, key);
    plane.ground(&mut picture);
    picture.begin_clip([LEFT, TOP], [SIDE, SIDE]);
    if let Some(locus) = locus {
        paths_of(&mut picture, &plane, locus);
    }
    pairs(&mut picture, &plane, &report.poles);
    picture.end_clip();
    for facts in &report.zeros {
        let place = plane.place(facts.root.value);
        picture.circle("zero", place, 6.0);
        times(&mut picture, place, facts.root.multiplicity);
    }
    for facts in &report.poles {
        let [x, y] = plane.place(facts.root.value);
        picture.line("pole", [x - 5.5, y - 5.5], [x + 5.5, y + 5.5]);
        picture.line("pole", [x - 5.5, y + 5.5], [x + 5.5, y - 5.5]);
        times(&mut picture, [x, y], facts.root.multiplicity);
    }
    picture
}

fn times(picture: &mut Picture, [x, y]: [f64; 2], multiplicity: u32) {
    if multiplicity > 1 {
        picture.text("", [x + 9.0, y - 7.0], Anchor::Start, &format!("({multiplicity})"));
    }
}

/// What the picture shows, in words.
fn describe(report: &RootReport) -> String {
    let list = |roots: &[RootFacts]| {
        let each = roots.iter().map(|facts| {
            let value = facts.root.value;
            match (value.re == 0.0, value.im == 0.0) {
                (_, true) => label(value.re, ""),
                (true, false) => format!("j{}", label(value.im, "")),
                (false, false) => format!("{} + j({})", label(value.re, ""), label(value.im, "")),
            }
        });
        let all: Vec<String> = each.collect();
        if all.is_empty() { "none".to_owned() } else { all.join("; ") }
    };
    format!(
        "The complex plane in 1/s. Poles (crosses): {}. Zeros (circles): {}.",
        list(&report.poles),
        list(&report.zeros)
    )
}

/// How the plane is drawn.
struct Plane {
    /// Half the side of the square, in drawn units.
    half: f64,
    /// The size at which a logarithmic distance is 0, a little below the smallest root.
    smallest: Option<f64>,
}

impl Plane {
    /// A plane that holds numbers of these sizes.
    fn around(sizes: &[f64]) -> Self {
        let largest = sizes.iter().copied().fold(0.0, f64::max);
        let above_zero = sizes.iter().copied().filter(|&size| size > 0.0);
        let smallest = above_zero.fold(f64::INFINITY, f64::min);
        if largest == 0.0 {
            return Self { half: 1.0, smallest: None };
        }
        if largest / smallest <= LINEAR {
            return Self { half: 1.2 * largest, smallest: None };
        }
        // The innermost circle stands half a decade below the smallest root.
        let inner = libm::pow(10.0, (libm::log10(smallest) - 0.5).floor());
        Self { half: libm::log10(largest / inner) + 0.4, smallest: Some(inner) }
    }

    fn drawn(&self, value: Complex<f64>) -> Complex<f64> {
        match self.smallest {
            None => value,
            Some(_) if value.norm() == 0.0 => value,
            Some(inner) => value / value.norm() * libm::log10(value.norm() / inner).max(0.0),
        }
    }

    fn axes(&self) -> [Axis; 2] {
        let values = [-self.half, self.half];
        [Axis { values, places: [LEFT, LEFT + SIDE] }, Axis { values, places: [TOP + SIDE, TOP] }]
    }

    fn place(&self, value: Complex<f64>) -> [f64; 2] {
        let drawn = self.drawn(value);
        let [x, y] = self.axes();
        [x.place(drawn.re), y.place(drawn.im)]
    }

    /// The right half plane, the grid, the axes and their labels.
    fn ground(&self, picture: &mut Picture) {
        let [x, y] = self.axes();
        let origin = [x.place(0.0), y.place(0.0)];
        picture.rectangle("right", [origin[0], TOP], [SIDE / 2.0, SIDE]);
        let (right, bottom) = (LEFT + SIDE, TOP + SIDE);
        match self.smallest {
            None => {
                for tick in ticks(-self.half, self.half, 6) {
                    let (across, up) = (x.place(tick), y.place(tick));
                    picture.line("grid", [across, TOP], [across, bottom]);
                    picture.line("grid", [LEFT, up], [right, up]);
                    picture.text("", [across, bottom + 18.0], Anchor::Middle, &label(tick, ""));
                    picture.text("", [LEFT - 6.0, up + 4.0], Anchor::End, &label(tick, ""));
                }
                picture.text("", [right, bottom + 38.0], Anchor::End, "real part in 1/s");
                picture.text("", [LEFT - 60.0, TOP - 10.0], Anchor::Start, "imaginary part in 1/s");
            }
            Some(inner) => {
                let decades = self.half.floor() as u32;
                picture.begin_clip([LEFT, TOP], [SIDE, SIDE]);
                for decade in 1..=decades {
                    let radius = x.place(f64::from(decade)) - origin[0];
                    picture.circle("grid", origin, radius);
                }
                picture.end_clip();
                for decade in (1..=decades).step_by(1 + decades as usize / 8) {
                    let power = (libm::log10(inner).round() as i64) + i64::from(decade);
                    let across = x.place(f64::from(decade));
                    let size = format!("10{}", superscript(power));
                    picture.text("", [across, bottom + 18.0], Anchor::Middle, &size);
                    picture.line("axis", [across, bottom], [across, bottom + 4.0]);
                }
                let words =
                    "distance from the origin: size in 1/s, logarithmic; directions are true";
                picture.text("", [right, bottom + 38.0], Anchor::End, words);
            }
        }
        picture.rectangle("frame", [LEFT, TOP], [SIDE, SIDE]);
        picture.line("axis", [LEFT, origin[1]], [right, origin[1]]);
        picture.line("axis", [origin[0], TOP], [origin[0], bottom]);
    }

    /// The radius of the circle of all numbers of that size.
    fn radius(&self, size: f64) -> f64 {
        let [x, _] = self.axes();
        x.place(self.drawn(Complex::new(size, 0.0)).re) - x.place(0.0)
    }
}

/// The circle of ω0 and the ray for each pair.
fn pairs(picture: &mut Picture, plane: &Plane, poles: &[RootFacts]) {
    let [x, y] = plane.axes();
    let origin = [x.place(0.0), y.place(0.0)];
    let uppers = poles.iter().map(|facts| facts.root.value).filter(|value| value.im > 0.0);
    for value in uppers {
        picture.circle("circle", origin, plane.radius(value.norm()));
        picture.line("circle", origin, plane.place(value));
    }
}

fn paths_of(picture: &mut Picture, plane: &Plane, locus: &Locus) {
    for path in &locus.paths {
        let places: Vec<[f64; 2]> = path.iter().flatten().map(|&root| plane.place(root)).collect();
        if places.len() > 1 {
            picture.path("locus", &places);
        }
        // The end of a path is where the value is largest.
        if let Some(&end) = places.last() {
            picture.circle("arrow", end, 3.2);
        }
    }
}
