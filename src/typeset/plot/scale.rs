//! Scales: what range an axis shows, and which round values are marked on it.

use crate::typeset::svg::{label, ticks};

/// The range of an axis and its marks: a value on the axis and its words.
#[derive(Clone, Debug)]
pub(super) struct Scale {
    pub(super) range: [f64; 2],
    pub(super) marks: Vec<(f64, String)>,
    /// Unlabelled lines between the marks.
    pub(super) fine: Vec<f64>,
}

/// The least and the largest of finite values; none without one.
pub(super) fn extent(values: impl IntoIterator<Item = f64>) -> Option<[f64; 2]> {
    values.into_iter().filter(|value| value.is_finite()).fold(None, |range, value| {
        let [low, high] = range.unwrap_or([value; 2]);
        Some([low.min(value), high.max(value)])
    })
}

/// A scale whose steps are the first of these that gives at most so many, its ends on steps.
fn stepped([low, high]: [f64; 2], steps: &[f64], most: f64, least_span: f64) -> ([f64; 2], f64) {
    let missing = (least_span - (high - low)).max(0.0) / 2.0;
    let (low, high) = (low - missing, high + missing);
    let span = high - low;
    let fits = steps.iter().copied().find(|step| span / step <= most);
    let step = fits.unwrap_or_else(|| (span / most).ceil());
    let mut ends = [(low / step + 1e-9).floor() * step, (high / step - 1e-9).ceil() * step];
    // A curve on the frame is hard to see.
    if ends[1] - high < 0.02 * span {
        ends[1] += step;
    }
    if low - ends[0] < 0.02 * span {
        ends[0] -= step;
    }
    (ends, step)
}

fn marked(range: [f64; 2], step: f64, words: impl Fn(f64) -> String) -> Scale {
    let (first, last) = ((range[0] / step).round() as i64, (range[1] / step).round() as i64);
    let marks = (first..=last).map(|index| {
        let value = index as f64 * step;
        (value, words(value))
    });
    Scale { range, marks: marks.collect(), fine: Vec::new() }
}

/// Decibels.
pub(super) fn decibels(range: [f64; 2]) -> Scale {
    const STEPS: [f64; 12] = [0.01, 0.02, 0.05, 0.1, 0.2, 0.5, 1.0, 2.0, 5.0, 10.0, 20.0, 40.0];
    let (range, step) = stepped(range, &STEPS, 6.0, 0.04);
    marked(range, step, |value| label(value, ""))
}

/// Degrees.
pub(super) fn degrees(range: [f64; 2]) -> Scale {
    const STEPS: [f64; 10] = [0.1, 0.5, 1.0, 5.0, 10.0, 15.0, 30.0, 45.0, 90.0, 180.0];
    let (range, step) = stepped(range, &STEPS, 5.0, 0.4);
    marked(range, step, |value| label(value, ""))
}

/// Values on a linear axis, in a unit with a prefix.
pub(super) fn linear([low, high]: [f64; 2], unit: &str, most: usize) -> Scale {
    let size = low.abs().max(high.abs());
    let span = if high - low > 1e-9 * size { high - low } else { (0.2 * size).max(1e-300) };
    let middle = (low + high) / 2.0;
    let range = [middle - 0.56 * span, middle + 0.56 * span];
    let marks = ticks(range[0], range[1], most).into_iter();
    let marks = marks.map(|value| {
        // The zero of a step is not quite 0.
        let value = if value.abs() < 1e-9 * span { 0.0 } else { value };
        (value, label(value, unit))
    });
    Scale { range, marks: marks.collect(), fine: Vec::new() }
}

/// A linear axis that begins where the values begin.
pub(super) fn from_start(range: [f64; 2], unit: &str, most: usize) -> Scale {
    let marks =
        ticks(range[0], range[1], most).into_iter().map(|value| (value, label(value, unit)));
    Scale { range, marks: marks.collect(), fine: Vec::new() }
}

/// A logarithmic axis; the range is of logarithms to base ten.
pub(super) fn logarithmic([low, high]: [f64; 2], unit: &str, most: usize) -> Scale {
    let decades = || (low - 1e-9).ceil() as i32..=(high + 1e-9).floor() as i32;
    let count = decades().count();
    let mut fine = Vec::new();
    if count <= most {
        for decade in low.floor() as i32..=high.ceil() as i32 {
            fine.extend((2..10).map(|digit| f64::from(decade) + libm::log10(f64::from(digit))));
        }
    }
    fine.retain(|value| (low..=high).contains(value));
    let words = |value: f64| label(libm::exp10(value), unit);
    let marks: Vec<(f64, String)> = if count >= 3 {
        let every = count.div_ceil(most).max(1) as i32;
        let kept = decades().filter(|decade| decade.rem_euclid(every) == 0 || every == 1);
        kept.map(|decade| (f64::from(decade), words(f64::from(decade)))).collect()
    } else {
        let values = [libm::exp10(low), libm::exp10(high)];
        let digits = [1.0, 2.0, 5.0].map(libm::log10);
        let of_decade = |decade: i32| digits.map(|digit| f64::from(decade) + digit);
        let steps = (low.floor() as i32..=high.ceil() as i32).flat_map(of_decade);
        let steps: Vec<f64> = steps.filter(|value| (low..=high).contains(value)).collect();
        if steps.len() >= 3 {
            steps.into_iter().map(|value| (value, words(value))).collect()
        } else {
            fine.clear();
            let steps = ticks(values[0], values[1], most);
            steps.into_iter().map(|value| (libm::log10(value), label(value, unit))).collect()
        }
    };
    Scale { range: [low, high], marks, fine }
}

/// A logarithmic axis with some room at both ends, for magnitudes.
pub(super) fn magnitudes([low, high]: [f64; 2], unit: &str) -> Scale {
    let room = (0.06 * (high - low)).max(0.02);
    logarithmic([low - room, high + room], unit, 7)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn words(scale: &Scale) -> Vec<&str> {
        scale.marks.iter().map(|(_, words)| words.as_str()).collect()
    }

    #[test]
    fn marks_are_round() {
        assert_eq!(words(&decibels([-83.0, 0.5])), ["−100", "−80", "−60", "−40", "−20", "0", "20"]);
        assert_eq!(
            words(&degrees([-179.0, -1.0])),
            ["−225", "−180", "−135", "−90", "−45", "0", "45"]
        );
        assert_eq!(
            words(&logarithmic([1.0, 4.0], "Hz", 8)),
            ["10 Hz", "100 Hz", "1 kHz", "10 kHz"]
        );
        assert_eq!(
            words(&logarithmic([4.7, 6.0], "Hz", 8)),
            ["100 kHz", "200 kHz", "500 kHz", "1 MHz"]
        );
        assert_eq!(words(&linear([0.0, 1.0], "V", 5)), ["0 V", "500 mV", "1 V"]);
        assert!(words(&magnitudes([3.0, 3.0], "Ω")).len() >= 2);
    }
}
