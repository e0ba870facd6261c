//! Axes: from values to places, and where the ticks stand.

use num_rational::BigRational;

use crate::typeset::number::{self, Medium};

/// A linear map from values to pixels.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Axis {
    /// The values at the ends.
    pub values: [f64; 2],
    /// The places of the ends.
    pub places: [f64; 2],
}

impl Axis {
    /// The place of a value.
    #[must_use]
    pub fn place(&self, value: f64) -> f64 {
        let part = (value - self.values[0]) / (self.values[1] - self.values[0]);
        self.places[0] + part * (self.places[1] - self.places[0])
    }
}

/// Round values (1, 2 or 5 times a power of ten apart) from `from` to `to`, at most `most` of them.
#[must_use]
pub fn ticks(from: f64, to: f64, most: usize) -> Vec<f64> {
    let span = to - from;
    if !(span.is_finite() && span > 0.0) || most < 2 {
        return Vec::new();
    }
    let coarse = span / most as f64;
    let power = libm::pow(10.0, libm::log10(coarse).floor());
    let step = [1.0, 2.0, 5.0, 10.0]
        .into_iter()
        .map(|factor| factor * power)
        .find(|&step| step >= coarse)
        .unwrap_or(10.0 * power);
    let first = (from / step - 1e-9).ceil() as i64;
    let last = (to / step + 1e-9).floor() as i64;
    (first..=last).map(|index| index as f64 * step).collect()
}

/// A value for an axis, with a prefix and a unit: `2.5 kHz`; the unit may be empty.
#[must_use]
pub fn label(value: f64, unit: &str) -> String {
    match BigRational::from_float(value) {
        Some(exact) if unit.is_empty() => number::rounded(&exact, 4, Medium::Unicode),
        Some(exact) => number::quantity(&exact, unit, 4, Medium::Unicode),
        None => String::new(),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn ticks_are_round() {
        let check = |from: f64, to: f64, most: usize, expected: &[f64]| {
            let found = ticks(from, to, most);
            assert_eq!(found.len(), expected.len(), "{found:?}");
            for (a, b) in found.iter().zip(expected) {
                assert!((a - b).abs() < 1e-9 * to.abs(), "{found:?}");
            }
        };
        check(-1.0, 1.0, 5, &[-1.0, -0.5, 0.0, 0.5, 1.0]);
        check(0.0, 10_000.0, 4, &[0.0, 5000.0, 10_000.0]);
        check(3.0, 3.0, 5, &[]);
    }

    #[test]
    fn places_are_linear() {
        let axis = Axis { values: [-1.0, 1.0], places: [0.0, 100.0] };
        assert_eq!(axis.place(0.0), 50.0);
        assert_eq!(label(2500.0, "Hz"), "2.5 kHz");
    }
}
