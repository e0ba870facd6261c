//! At which frequencies and times curves are taken.

use std::f64::consts::TAU;

use super::Factored;

/// So many frequencies, evenly over the logarithm, with the ends as they are.
pub fn logarithmic([from, to]: [f64; 2], points: usize) -> Vec<f64> {
    let last = points.max(2) - 1;
    let span = libm::log10(to / from);
    let each = (0..=last).map(|index| match index {
        0 => from,
        _ if index == last => to,
        _ => from * libm::exp10(span * index as f64 / last as f64),
    });
    each.collect()
}

/// So many values, evenly, with the ends as they are.
pub fn even([from, to]: [f64; 2], points: usize) -> Vec<f64> {
    let last = points.max(2) - 1;
    let each = (0..=last).map(|index| match index {
        _ if index == last => to,
        _ => from + (to - from) * index as f64 / last as f64,
    });
    each.collect()
}

/// The frequencies 1, 2, 5, 10, … of the band, with its ends.
pub fn preferred([from, to]: [f64; 2]) -> Vec<f64> {
    let mut all = vec![from];
    let first = libm::log10(from).floor() as i32;
    let last = libm::log10(to).ceil() as i32;
    for decade in first..=last {
        let inside = [1.0, 2.0, 5.0].map(|digit| {
            // Division keeps 0.1 and its like the nearest doubles.
            if decade < 0 {
                digit / libm::exp10(f64::from(-decade))
            } else {
                digit * libm::exp10(f64::from(decade))
            }
        });
        all.extend(
            inside.into_iter().filter(|&hz| hz > from * (1.0 + 1e-9) && hz < to * (1.0 - 1e-9)),
        );
    }
    all.push(to);
    all
}

/// How far beside a sharp pair points are added, in half widths.
const BESIDE: [f64; 6] = [0.0, 0.25, 0.5, 1.0, 2.0, 4.0];

/// Q from which on a pair is narrower than an even grid shows.
const SHARP: f64 = 3.0;

/// The grid with points added around the pairs of high Q, where an even grid would step over a peak or a
/// notch.
pub fn sharpened(grid: &[f64], function: &Factored) -> Vec<f64> {
    let (Some(&from), Some(&to)) = (grid.first(), grid.last()) else { return Vec::new() };
    let mut all = grid.to_vec();
    for root in function.zeros.iter().chain(&function.poles).filter(|root| root.value.im > 0.0) {
        let (hz, size) = (root.value.im / TAU, root.value.norm() / TAU);
        let half = (root.value.re.abs() / TAU).max(1e-6 * size);
        if size / (2.0 * half) < SHARP {
            continue;
        }
        for beside in BESIDE {
            all.extend([hz - beside * half, hz + beside * half]);
        }
    }
    all.retain(|hz| (from..=to).contains(hz));
    all.sort_by(f64::total_cmp);
    all.dedup();
    all
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::algebra::Univariate;

    #[test]
    fn grids_hold_their_ends() {
        assert_eq!(preferred([10.0, 300.0]), [10.0, 20.0, 50.0, 100.0, 200.0, 300.0]);
        assert_eq!(preferred([0.05, 0.3]), [0.05, 0.1, 0.2, 0.3]);
        let grid = logarithmic([1.0, 1e6], 7);
        assert_eq!((grid[0], grid[6], grid.len()), (1.0, 1e6, 7));
        assert!((grid[3] - 1e3).abs() < 1e-9);
        assert_eq!(even([0.0, 1.0], 3), [0.0, 0.5, 1.0]);
    }

    #[test]
    fn a_notch_is_met_exactly() {
        let above = Univariate::from_integers([4_i64, 0, 1]);
        let below = Univariate::from_integers([4_i64, 5, 1]);
        let notch = Factored::new(&above, &below).expect("roots");
        let grid = sharpened(&logarithmic([0.01, 10.0], 5), &notch);
        assert!(grid.iter().any(|&hz| notch.at(hz).value.norm() < 1e-12));
        assert!(grid.windows(2).all(|pair| pair[0] < pair[1]));
    }
}
