//! The gain towards dc and the −3 dB edges of the band, with their sensitivities.
//!
//! |H(jω)|² is a quotient of polynomials in ω² with exact coefficients, so an edge is a root like
//! any other: (the least positive) root of |N|² − ½·H(0)²·|D|².

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

/// Where the magnitude passes 1/√2 of its value at one end of the frequency axis.
#[derive(Clone, Debug, PartialEq)]
pub struct BandEdge {
    /// The frequency in hertz.
    pub hz: f64,
    /// Against which end: true for the value at zero frequency, false for that at infinity.
    pub from_dc: bool,
    /// x/f·∂f/∂x, for an edge against dc.
    pub sensitivities: Option<Vec<Sensitivity>>,
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

pub(super) fn band_edge(
    numerator: &Univariate,
    denominator: &Univariate,
    nominal: &Nominal<'_>,
) -> Option<BandEdge> {
    let (above, below) = (numerator.coefficient(0), denominator.coefficient(0));
    let low = !above.is_zero() && !below.is_zero();
    let high = numerator.degree() == denominator.degree() && !numerator.is_zero();
    let reference = if low {
        above / below
    } else if high {
        numerator.leading_coefficient() / denominator.leading_coefficient()
    } else {
        return None;
    };
    let half = &reference * &reference / BigRational::from_integer(BigInt::from(2));
    let difference = &magnitude_squared(numerator) - &magnitude_squared(denominator).scaled(&half);
    let crossings: Vec<f64> = find(&difference)
        .ok()?
        .into_iter()
        .filter(|root| root.is_real() && root.value.re > 0.0 && root.multiplicity % 2 == 1)
        .map(|root| root.value.re.sqrt())
        .collect();
    let omega = *if low { crossings.first() } else { crossings.last() }?;
    let s = Complex::new(0.0, omega);
    let sensitivities = if low { edge_sensitivities(nominal, s) } else { None };
    Some(BandEdge { hz: omega / std::f64::consts::TAU, from_dc: low, sensitivities })
}

/// ln|H(jω)| − ln|H(0)| stays what it is while x moves: implicit differentiation.
fn edge_sensitivities(nominal: &Nominal<'_>, s: Complex<f64>) -> Option<Vec<Sensitivity>> {
    let slope = sensitivity::logarithmic_slope(nominal, s)?.re;
    let here = sensitivity::of_value(nominal, s)?;
    let there = sensitivity::of_value(nominal, Complex::zero())?;
    let each = here.into_iter().map(|one| {
        let reference = there.iter().find(|other| other.symbol == one.symbol);
        let reference = reference.map_or(0.0, |other| other.value.re);
        let value = Complex::new(-(one.value.re - reference) / slope, 0.0);
        Sensitivity { symbol: one.symbol, value }
    });
    Some(each.collect())
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
