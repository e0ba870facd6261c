//! The straight lines of a Bode plot and where they bend.

use std::f64::consts::TAU;

use super::Factored;
use crate::analysis::roots::Root;

/// Roots of one kind and one size.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Corner {
    /// |root|/2π.
    pub hz: f64,
    /// Poles bend the line down, zeros up.
    pub is_pole: bool,
    /// How many roots: the change of the slope, in 20 dB a decade.
    pub order: u32,
    /// The logarithm to base ten of the magnitude of the asymptote there.
    pub decades: f64,
}

/// Roots whose sizes differ by less than this part are one corner.
const SAME: f64 = 1e-9;

impl Factored {
    /// The corners by frequency.
    pub fn corners(&self) -> Vec<Corner> {
        let mut corners: Vec<Corner> = Vec::new();
        for (roots, is_pole) in [(&self.zeros, false), (&self.poles, true)] {
            for Root { value, multiplicity, .. } in roots {
                let hz = value.norm() / TAU;
                let same = |corner: &&mut Corner| {
                    corner.is_pole == is_pole && (corner.hz - hz).abs() <= SAME * hz
                };
                match corners.iter_mut().find(same) {
                    Some(corner) => corner.order += multiplicity,
                    None => {
                        let decades = self.asymptote_at(hz);
                        corners.push(Corner { hz, is_pole, order: *multiplicity, decades });
                    }
                }
            }
        }
        corners.sort_by(|a, b| a.hz.total_cmp(&b.hz).then(a.is_pole.cmp(&b.is_pole)));
        corners
    }

    /// The logarithm to base ten of the asymptote's magnitude at a frequency in hertz.
    pub fn asymptote_at(&self, hz: f64) -> f64 {
        let omega = libm::log10(TAU * hz);
        let bends = |roots: &[Root]| -> f64 {
            let bend = |root: &Root| {
                let above = omega - libm::log10(root.value.norm());
                f64::from(root.multiplicity) * above.max(0.0)
            };
            roots.iter().map(bend).sum()
        };
        self.lead.log10() + f64::from(self.power) * omega + bends(&self.zeros) - bends(&self.poles)
    }

    /// The ends of the straight lines over a band: frequency in hertz and logarithm of the magnitude.
    pub fn asymptote(&self, [from, to]: [f64; 2]) -> Vec<[f64; 2]> {
        let inside = self.corners().into_iter().map(|corner| corner.hz);
        let mut ends: Vec<f64> = inside.filter(|hz| (from..=to).contains(hz)).collect();
        ends.extend([from, to]);
        ends.sort_by(f64::total_cmp);
        ends.dedup();
        ends.into_iter().map(|hz| [hz, self.asymptote_at(hz)]).collect()
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::algebra::Univariate;

    #[test]
    fn lines_bend_at_the_corners() {
        // 10·(1 + s)/(1 + s/100)², corners at 1 and 100 rad/s.
        let above = Univariate::from_integers([10 * 10_000_i64, 10 * 10_000]);
        let below = Univariate::from_integers([10_000_i64, 200, 1]);
        let function = Factored::new(&above, &below).expect("roots");
        let corners = function.corners();
        let orders: Vec<_> = corners.iter().map(|c| (c.is_pole, c.order)).collect();
        assert_eq!(orders, [(false, 1), (true, 2)]);
        let at = |omega: f64| function.asymptote_at(omega / TAU);
        for (omega, expected) in [(0.01, 1.0), (1.0, 1.0), (10.0, 2.0), (100.0, 3.0), (1e4, 1.0)] {
            assert!((at(omega) - expected).abs() < 1e-12, "{omega}");
        }
        assert_eq!(function.asymptote([0.01, 1e3]).len(), 4);
    }
}
