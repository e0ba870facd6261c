//! How far a claim is off at the nominal values, over the band.

use num_complex::Complex;

use super::subject::{Subject, depends_on_s};
use super::values::Values;
use crate::algebra::Fraction;
use crate::circuit::{Circuit, Claim, Property};
use crate::elimination::fraction_of;

/// The largest deviations of a claim.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Deviation {
    /// Claim over exact, in dB; infinite where one of them is 0.
    pub magnitude_db: f64,
    /// Where, in hertz; none where nothing depends on the frequency.
    pub magnitude_at_hz: Option<f64>,
    /// The phase of claim over exact in degrees, from −180 to 180.
    pub phase_deg: f64,
    /// Where.
    pub phase_at_hz: Option<f64>,
    /// The claimed value and the exact one, where they do not depend on the frequency and are real.
    pub values: Option<[f64; 2]>,
}

/// The worst deviations; none where a nominal value is missing.
pub(super) fn worst(
    _circuit: &Circuit,
    claim: &Claim,
    subject: &Subject,
    values: &Values,
) -> Option<Deviation> {
    if claim.property != Property::Function {
        let exact = subject.number(values).ok()??;
        let claimed = Subject::claimed_number(claim, values)?;
        let real = (exact.im == 0.0).then_some([claimed, exact.re]);
        return Some(of_ratio(Complex::new(claimed, 0.0) / exact, real));
    }
    let claimed = fraction_of(&claim.formula).ok()?;
    over_band(&claimed, &subject.function, values)
}

fn of_ratio(ratio: Complex<f64>, values: Option<[f64; 2]>) -> Deviation {
    Deviation {
        magnitude_db: decibels(ratio),
        magnitude_at_hz: None,
        phase_deg: degrees(ratio),
        phase_at_hz: None,
        values,
    }
}

fn over_band(claimed: &Fraction, exact: &Fraction, values: &Values) -> Option<Deviation> {
    let (claim, truth) = (values.response(claimed)?, values.response(exact)?);
    if claim.is_constant() && truth.is_constant() {
        let (a, b) = (claim.at(0.0), truth.at(0.0));
        return Some(of_ratio(a / b, Some([a.re, b.re])));
    }
    let ratio = |hertz: f64| claim.at(hertz) / truth.at(hertz);
    let worst = |of: fn(Complex<f64>) -> f64| {
        let mut worst = (0.0_f64, None);
        for &hertz in &values.frequencies {
            let value = of(ratio(hertz));
            if value.abs() > worst.0.abs() {
                worst = (value, Some(hertz));
            }
        }
        worst
    };
    let (magnitude_db, magnitude_at_hz) = worst(decibels);
    let (phase_deg, phase_at_hz) = worst(degrees);
    let depends = depends_on_s(claimed) || depends_on_s(exact);
    Some(Deviation {
        magnitude_db,
        magnitude_at_hz: magnitude_at_hz.filter(|_| depends),
        phase_deg,
        phase_at_hz: phase_at_hz.filter(|_| depends),
        values: None,
    })
}

/// What is smaller than this is the rounding of doubles.
const ROUNDING: f64 = 1e-9;

fn decibels(ratio: Complex<f64>) -> f64 {
    settled(20.0 * libm::log10(ratio.norm()))
}

fn degrees(ratio: Complex<f64>) -> f64 {
    settled(libm::atan2(ratio.im, ratio.re).to_degrees())
}

fn settled(value: f64) -> f64 {
    if value.abs() < ROUNDING { 0.0 } else { value }
}
