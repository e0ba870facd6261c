//! The gain towards dc and the −3 dB edges of the band, with their sensitivities.
//!
//! |H(jω)|² is a quotient of polynomials in ω² with exact coefficients, so an edge is a root like
//! any other: a positive root of |N|² − ½·|H₀|²·|D|². H₀ is the value at dc or towards infinity, or the
//! largest one of a band-pass.

use num_bigint::BigInt;
use num_complex::Complex;
use num_rational::BigRational;
use num_traits::{ToPrimitive, Zero};

use super::find::find;
use super::sensitivity::{self, Sensitivity};
use super::values::Nominal;
use crate::algebra::Univariate;

/// The gain at zero frequency, where it is finite and not 0.
#[derive(Clone, Debug, PartialEq)]
pub struct DcGain {
    /// H(0), in the function's unit.
    pub value: f64,
    /// x/H(0)·∂H(0)/∂x; none where only a limit exists.
    pub sensitivities: Option<Vec<Sensitivity>>,
}

/// Where the magnitude passes 1/√2 of what it is measured against.
#[derive(Clone, Debug, PartialEq)]
pub struct BandEdge {
    /// The frequency in hertz.
    pub hz: f64,
    /// What it is measured against.
    pub against: Against,
    /// x/f·∂f/∂x.
    pub sensitivities: Option<Vec<Sensitivity>>,
}

/// The magnitude that an edge is measured against.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Against {
    /// That at zero frequency.
    Dc,
    /// That towards infinite frequency.
    Infinity,
    /// The largest, of a function that vanishes at both ends.
    Peak,
}

pub(super) fn dc_gain(
    numerator: &Univariate,
    denominator: &Univariate,
    nominal: &Nominal<'_>,
) -> Option<DcGain> {
    let (above, below) = (numerator.coefficient(0), denominator.coefficient(0));
    if above.is_zero() || below.is_zero() {
        return None;
    }
    Some(DcGain {
        value: (above / below).to_f64()?,
        sensitivities: sensitivity::of_value(nominal, Complex::zero()),
    })
}

/// The upper edge against dc, the lower edge against infinity, or both edges against a peak between.
pub(super) fn band_edges(
    numerator: &Univariate,
    denominator: &Univariate,
    nominal: &Nominal<'_>,
) -> Vec<BandEdge> {
    let squares = [magnitude_squared(numerator), magnitude_squared(denominator)];
    let (above, below) = (numerator.coefficient(0), denominator.coefficient(0));
    let proper = numerator.degree() < denominator.degree();
    if numerator.is_zero() {
        return Vec::new();
    }
    if above.is_zero() && !below.is_zero() && proper {
        return around_peak(&squares, nominal).unwrap_or_default();
    }
    let mut edges = Vec::new();
    if !above.is_zero() && !below.is_zero() {
        let dc = &above / &below;
        let omega = crossings(&squares, &(&dc * &dc)).first().copied();
        edges.extend(omega.map(|omega| edge(nominal, omega, Against::Dc, Complex::zero())));
    }
    if numerator.degree() == denominator.degree() {
        let limit = numerator.leading_coefficient() / denominator.leading_coefficient();
        let omega = crossings(&squares, &(&limit * &limit)).last().copied();
        // The size differs from its limit by a part that falls with the square of the frequency.
        let far = |omega: f64| Complex::new(0.0, 1e8 * omega);
        edges.extend(omega.map(|omega| edge(nominal, omega, Against::Infinity, far(omega))));
    }
    edges.sort_by(|a, b| a.hz.total_cmp(&b.hz));
    edges
}

/// The edges on both sides of the largest magnitude; none where that is infinite.
fn around_peak(squares: &[Univariate; 2], nominal: &Nominal<'_>) -> Option<Vec<BandEdge>> {
    let [above, below] = squares;
    let slope = &(&above.derivative() * below) - &(above * &below.derivative());
    let size = |x: &BigRational| {
        let below = below.evaluate(x);
        (!below.is_zero()).then(|| above.evaluate(x) / below)
    };
    let mut peak: Option<(f64, BigRational)> = None;
    for root in find(&slope).ok()?.iter().filter(|root| root.is_real() && root.value.re > 0.0) {
        // The magnitude is flat there: rounding the place changes it by the square of that.
        let found = size(&BigRational::from_float(root.value.re)?)?;
        if peak.as_ref().is_none_or(|(_, largest)| found > *largest) {
            peak = Some((root.value.re, found));
        }
    }
    let (place, square) = peak?;
    let place = place.sqrt();
    let all = crossings(squares, &square);
    let sides = [
        all.iter().rfind(|&&omega| omega < place).copied(),
        all.iter().find(|&&omega| omega > place).copied(),
    ];
    let at_peak = Complex::new(0.0, place);
    Some(
        sides
            .into_iter()
            .flatten()
            .map(|omega| edge(nominal, omega, Against::Peak, at_peak))
            .collect(),
    )
}

/// Where |H|² passes half of `square`, ascending in ω.
fn crossings([above, below]: &[Univariate; 2], square: &BigRational) -> Vec<f64> {
    let half = square / BigRational::from_integer(BigInt::from(2));
    let difference = above - &below.scaled(&half);
    let roots = find(&difference).unwrap_or_default();
    roots
        .into_iter()
        .filter(|root| root.is_real() && root.value.re > 0.0 && root.multiplicity % 2 == 1)
        .map(|root| root.value.re.sqrt())
        .collect()
}

/// The edge at ω, measured against the magnitude at the place `reference`, which stays put to first order.
fn edge(nominal: &Nominal<'_>, omega: f64, against: Against, reference: Complex<f64>) -> BandEdge {
    let sensitivities = edge_sensitivities(nominal, Complex::new(0.0, omega), reference);
    BandEdge { hz: omega / std::f64::consts::TAU, against, sensitivities }
}

/// ln|H(jω)| − ln|H(reference)| stays what it is while x moves: implicit differentiation.
fn edge_sensitivities(
    nominal: &Nominal<'_>,
    s: Complex<f64>,
    reference: Complex<f64>,
) -> Option<Vec<Sensitivity>> {
    let slope = sensitivity::logarithmic_slope(nominal, s)?.re;
    let here = sensitivity::of_value(nominal, s)?;
    let there = sensitivity::of_value(nominal, reference)?;
    let each: Vec<Sensitivity> = here
        .into_iter()
        .map(|one| {
            let reference = there.iter().find(|other| other.symbol == one.symbol);
            let reference = reference.map_or(0.0, |other| other.value.re);
            let value = Complex::new(-(one.value.re - reference) / slope, 0.0);
            Sensitivity { symbol: one.symbol, value }
        })
        .collect();
    each.iter().all(|one| one.value.is_finite()).then_some(each)
}

/// |A(jω)|² as a polynomial in ω².
fn magnitude_squared(polynomial: &Univariate) -> Univariate {
    let half = |parity: usize| {
        let parts = (parity..=polynomial.degree()).step_by(2).enumerate().map(|(place, power)| {
            let value = polynomial.coefficient(power);
            if place % 2 == 1 { -value } else { value }
        });
        Univariate::from_rationals(&parts.collect::<Vec<_>>())
    };
    let (even, odd) = (half(0), half(1));
    let x = Univariate::from_integers([0, 1]);
    &(&even * &even) + &(&(&odd * &odd) * &x)
}
