//! The mean square in the band at nominal values, by adaptive quadrature over the logarithm of the
//! frequency (the 15-point rule of Gauss and Kronrod, Piessens and others, QUADPACK, 1983). The
//! integrand is a sum of squares, so nothing cancels in it; the error is what the two nested rules
//! differ by, which is far above the error of the better one.

use num_complex::Complex;
use num_traits::ToPrimitive;

use super::sources::Source;
use super::value_of;
use crate::circuit::{Circuit, Number};

/// Noise between two frequencies.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct BandNoise {
    /// Lower end, hertz.
    pub from_hz: f64,
    /// Upper end, hertz.
    pub to_hz: f64,
    /// Root of the mean square, volt.
    pub rms: f64,
    /// Bound of its relative error.
    pub relative_error: f64,
}

/// Relative difference of the two rules at which a part is fine enough.
const TOLERANCE: f64 = 1e-10;
/// Parts of the band.
const MOST_PARTS: usize = 4_000;

/// The nodes from the outermost to the middle, weights of Kronrod and of Gauss.
const RULE: [(f64, f64, f64); 8] = [
    (0.991_455_371_120_812_6, 0.022_935_322_010_529_224, 0.0),
    (0.949_107_912_342_758_5, 0.063_092_092_629_978_56, 0.129_484_966_168_869_7),
    (0.864_864_423_359_769_1, 0.104_790_010_322_250_19, 0.0),
    (0.741_531_185_599_394_4, 0.140_653_259_715_525_92, 0.279_705_391_489_276_64),
    (0.586_087_235_467_691_1, 0.169_004_726_639_267_9, 0.0),
    (0.405_845_151_377_397_2, 0.190_350_578_064_785_4, 0.381_830_050_505_118_9),
    (0.207_784_955_007_898_47, 0.204_432_940_075_298_9, 0.0),
    (0.0, 0.209_482_141_084_727_82, 0.417_959_183_673_469_4),
];

/// The noise in the circuit's band; none where it has no band or a value is missing.
pub(crate) fn in_band(
    circuit: &Circuit,
    sources: &[Source],
    values: &[Number],
) -> Option<BandNoise> {
    let band = circuit.band.as_ref()?;
    let (from_hz, to_hz) = (band.from.to_f64()?, band.to.to_f64()?);
    let floats = |of: &[Number]| of.iter().map(ToPrimitive::to_f64).collect::<Option<Vec<f64>>>();
    let mut shares: Vec<(f64, Vec<f64>, Vec<f64>)> = Vec::new();
    for source in sources {
        let weight = source.weight.evaluate(|variable| value_of(values, variable))?;
        let numeric = source.derivation.numeric.as_ref()?;
        shares.push((weight.to_f64()?, floats(&numeric.numerator)?, floats(&numeric.denominator)?));
    }
    let density = |f: f64| -> f64 {
        let s = Complex::new(0.0, std::f64::consts::TAU * f);
        let value = |of: &[f64]| of.iter().rev().fold(Complex::new(0.0, 0.0), |sum, c| sum * s + c);
        shares.iter().map(|(weight, n, d)| weight * (value(n) / value(d)).norm_sqr()).sum()
    };
    let (square, error) = integrate(
        &|x| {
            let f = libm::exp(x);
            f * density(f)
        },
        libm::log(from_hz),
        libm::log(to_hz),
    );
    let rms = square.sqrt();
    if !rms.is_finite() {
        return None;
    }
    // The root halves a relative error.
    let relative_error = if square > 0.0 { error / square / 2.0 } else { 0.0 };
    Some(BandNoise { from_hz, to_hz, rms, relative_error })
}

/// The integral of a positive function and a bound of its error.
fn integrate(function: &dyn Fn(f64) -> f64, from: f64, to: f64) -> (f64, f64) {
    let part = |from: f64, to: f64| {
        let (middle, half) = (f64::midpoint(from, to), (to - from) / 2.0);
        let (mut fine, mut coarse) = (0.0, 0.0);
        for (node, kronrod, gauss) in RULE {
            let value = if node == 0.0 {
                function(middle)
            } else {
                function(middle - half * node) + function(middle + half * node)
            };
            fine += kronrod * value;
            coarse += gauss * value;
        }
        (fine * half, ((fine - coarse) * half).abs())
    };
    let whole = part(from, to);
    let mut parts = vec![(from, to, whole.0, whole.1)];
    while parts.len() < MOST_PARTS {
        let sum: f64 = parts.iter().map(|part| part.2).sum();
        let error: f64 = parts.iter().map(|part| part.3).sum();
        if error.is_nan() || error <= TOLERANCE * sum {
            break;
        }
        // The worst part is halved.
        let worst = parts.iter().enumerate().max_by(|a, b| a.1.3.total_cmp(&b.1.3));
        let Some(index) = worst.map(|(index, _)| index) else { break };
        let (from, to, ..) = parts.swap_remove(index);
        let middle = f64::midpoint(from, to);
        for (from, to) in [(from, middle), (middle, to)] {
            let (sum, error) = part(from, to);
            parts.push((from, to, sum, error));
        }
    }
    (parts.iter().map(|part| part.2).sum(), parts.iter().map(|part| part.3).sum())
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_rule_integrates_what_is_known() {
        let close = |found: (f64, f64), expected: f64| {
            assert!((found.0 - expected).abs() <= 1e-9 * expected, "{found:?} for {expected}");
            assert!(found.1 <= 1e-9 * expected, "{found:?}");
        };
        close(integrate(&|x| x * x, 0.0, 3.0), 9.0);
        close(integrate(&|x| libm::exp(x), 0.0, 1.0), std::f64::consts::E - 1.0);
        // A peak a millionth wide: π/2 · 10⁻³ over all x.
        let narrow = |x: f64| 1e-6 / ((x - 0.3) * (x - 0.3) + 1e-12);
        close(integrate(&narrow, 0.3, 5.0), libm::atan(4.7e6));
    }
}
