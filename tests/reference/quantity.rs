//! Quantities of the reference tables: computed from a result and compared with a published value.

use crate::support::exact;
use crate::support::rational::{Rational, float, hertz};
use num_bigint::BigInt;
use num_complex::Complex64;
use num_rational::BigRational;
use num_traits::{Signed, Zero};
use serde_json::Value;
use std::f64::consts::PI;

/// π to 40 decimals (from memory), for coefficients in hertz that are published to 16 digits.
const PI_DECIMALS: &str = "3.1415926535897932384626433832795028841972";

/// Compares one quantity of a result with its published value.
///
/// # Errors
/// What was found instead.
pub(crate) fn judge(
    result: &Value,
    quantity: &str,
    published: &str,
    tolerance: &str,
) -> Result<(), String> {
    if quantity == "terms" {
        return same(&terms(&result["denominator"], &result["term_counts"])?, published);
    }
    let rational = Rational::of(result)?;
    match quantity {
        "numerator" | "denominator" | "numerator in hertz" | "denominator in hertz" => {
            let found =
                if quantity.starts_with('n') { &rational.numerator } else { &rational.denominator };
            let found = if quantity.ends_with("hertz") { in_hertz(found)? } else { found.clone() };
            coefficients(&found, &list(published)?, tolerance)
        }
        "ratio" => {
            let (over, under) = published.split_once(" over ").ok_or("`over` is missing")?;
            let (over, under) = (list(over)?, list(under)?);
            let lowest = under.iter().find(|c| !c.is_zero()).ok_or("the denominator is 0")?.clone();
            let scaled =
                |side: &[BigRational]| -> Vec<_> { side.iter().map(|c| c / &lowest).collect() };
            coefficients(&rational.numerator, &scaled(&over), tolerance)?;
            coefficients(&rational.denominator, &scaled(&under), tolerance)
        }
        "poles" | "zeros" | "zeros in hertz" | "poles in hertz" => {
            let mut found =
                if quantity.starts_with('p') { rational.poles() } else { rational.zeros() };
            if quantity.ends_with("hertz") {
                found.iter_mut().for_each(|root| *root /= 2.0 * PI);
            }
            root_sets(found, published, tolerance)
        }
        _ => {
            let (factor, quantity) = quantity.split_once(" * ").unwrap_or(("1", quantity));
            let factor = exact::number(factor)?;
            match exact_value(&rational, quantity)? {
                Some(found) => number(&(found * factor), published, tolerance),
                None => float_number(
                    real_value(&rational, quantity)? * float(&factor),
                    published,
                    tolerance,
                ),
            }
        }
    }
}

/// The sum of the term counts of a polynomial, from its coefficients or from the counts alone.
///
/// # Errors
/// Where neither is there.
pub(crate) fn terms(coefficients: &Value, counts: &Value) -> Result<String, String> {
    let counts: Vec<&Value> = match (coefficients.as_array(), counts["denominator"].as_array()) {
        (Some(coefficients), _) => coefficients.iter().map(|c| &c["terms"]).collect(),
        (None, Some(counts)) => counts.iter().collect(),
        (None, None) => return Err("neither `terms` nor `term_counts`".into()),
    };
    let mut sum = BigInt::zero();
    for count in counts {
        let count = count.as_str().ok_or("a count of terms is no text")?;
        sum += count.parse::<BigInt>().map_err(|error| format!("`{count}`: {error}"))?;
    }
    Ok(sum.to_string())
}

fn same(found: &str, published: &str) -> Result<(), String> {
    if found == published { Ok(()) } else { Err(format!("{found} instead of {published}")) }
}

fn list(text: &str) -> Result<Vec<BigRational>, String> {
    text.split(',').map(|number| exact::number(number.trim())).collect()
}

fn in_hertz(coefficients: &[BigRational]) -> Result<Vec<BigRational>, String> {
    let omega = exact::number(PI_DECIMALS)? * exact::number("2")?;
    Ok(coefficients.iter().enumerate().map(|(k, c)| c * exact::power(&omega, k)).collect())
}

/// Coefficient lists that are equal (`exact`), or each within a share of the published one.
fn coefficients(
    found: &[BigRational],
    published: &[BigRational],
    tolerance: &str,
) -> Result<(), String> {
    let trimmed = |side: &[BigRational]| {
        let length = side.iter().rposition(|c| !c.is_zero()).map_or(0, |last| last + 1);
        side[..length].to_vec()
    };
    let (found, published) = (trimmed(found), trimmed(published));
    let share = match tolerance {
        "exact" => BigRational::zero(),
        _ => exact::number(tolerance.trim_end_matches("relative").trim())?,
    };
    let near = |(a, b): (&BigRational, &BigRational)| (a - b).abs() <= b.abs() * &share;
    if found.len() == published.len() && found.iter().zip(&published).all(near) {
        return Ok(());
    }
    let shown: Vec<String> = found.iter().map(|c| format!("{} = {:e}", c, float(c))).collect();
    Err(format!("[{}]", shown.join(", ")))
}

/// Each published root has its own computed root within the tolerance.
fn root_sets(mut found: Vec<Complex64>, published: &str, tolerance: &str) -> Result<(), String> {
    let published = published
        .split(',')
        .map(|root| root.trim().parse::<Complex64>().map_err(|_| format!("`{root}` is no root")))
        .collect::<Result<Vec<_>, _>>()?;
    let tolerance: f64 = tolerance.parse().map_err(|_| format!("tolerance `{tolerance}`"))?;
    let all = format!("{found:?}");
    if found.len() != published.len() {
        return Err(format!("{} roots instead of {}: {all}", found.len(), published.len()));
    }
    for root in published {
        let distance = |other: &Complex64| (other - root).norm();
        let nearest = (0..found.len())
            .min_by(|&a, &b| distance(&found[a]).total_cmp(&distance(&found[b])))
            .map(|index| found.swap_remove(index));
        match nearest {
            Some(nearest) if distance(&nearest) <= tolerance => {}
            _ => return Err(format!("no root is near {root}: {all}")),
        }
    }
    Ok(())
}

/// Values that are known as exact numbers.
fn exact_value(rational: &Rational, quantity: &str) -> Result<Option<BigRational>, String> {
    Ok(Some(match quantity {
        "dc" => rational.dc()?,
        "high" => rational.high()?,
        "order" => BigRational::from_integer(BigInt::from(rational.denominator.len() - 1)),
        "delay" => slope(&rational.denominator)? - slope(&rational.numerator)?,
        _ => return Ok(None),
    }))
}

/// The coefficient of s over that of 1.
fn slope(coefficients: &[BigRational]) -> Result<BigRational, String> {
    match coefficients {
        [first, ..] if first.is_zero() => Err("nothing is left at s = 0".into()),
        [] => Err("nothing is left at s = 0".into()),
        [_] => Ok(BigRational::zero()),
        [first, second, ..] => Ok(second / first),
    }
}

/// Values in double precision.
fn real_value(rational: &Rational, quantity: &str) -> Result<f64, String> {
    let missing = || format!("`{quantity}` does not exist");
    let damping = |root: &Complex64| (root.re / root.norm()).abs();
    let pair = |roots: Vec<Complex64>| {
        let roots = roots.into_iter().filter(|root| !root.is_zero());
        roots.min_by(|a, b| damping(a).total_cmp(&damping(b))).ok_or_else(missing)
    };
    let sizes = |roots: Vec<Complex64>| roots.into_iter().map(|root| root.norm());
    Ok(match quantity {
        "slowest pole" => {
            hertz(sizes(rational.poles()).min_by(f64::total_cmp).ok_or_else(missing)?)
        }
        "fastest pole" => {
            hertz(sizes(rational.poles()).max_by(f64::total_cmp).ok_or_else(missing)?)
        }
        "pole frequency" => hertz(pair(rational.poles())?.norm()),
        "zero frequency" => hertz(pair(rational.zeros())?.norm()),
        "pole q" => 0.5 / damping(&pair(rational.poles())?),
        "pole damping" => damping(&pair(rational.poles())?),
        "open-circuit corner" => hertz(1.0 / float(&slope(&rational.denominator)?)),
        _ => return response_value(rational, quantity),
    })
}

/// Values of the response at given frequencies.
fn response_value(rational: &Rational, quantity: &str) -> Result<f64, String> {
    let unknown = || format!("`{quantity}` is no quantity of these tables");
    if let Some((word, at)) = quantity.split_once(" at ") {
        let (at, reference) = match at.split_once(" re ") {
            Some((at, reference)) => (at, rational.at(omega(reference)?)),
            None => (at, Complex64::new(1.0, 0.0)),
        };
        let value = rational.at(omega(at)?) / reference;
        return match word {
            "modulus" => Ok(value.norm()),
            "level" => Ok(20.0 * libm::log10(value.norm())),
            "phase" => Ok(libm::atan2(value.im, value.re).to_degrees()),
            "real" => Ok(value.re),
            "imaginary" => Ok(value.im),
            _ => Err(unknown()),
        };
    }
    let (word, from) = quantity.split_once(" from ").ok_or_else(unknown)?;
    match (word, from.split_once(" to ")) {
        ("lower edge", None) => Ok(hertz(rational.edge(omega(from)?, false))),
        ("upper edge", None) => Ok(hertz(rational.edge(omega(from)?, true))),
        ("peak frequency", Some((low, high))) => {
            Ok(hertz(rational.peak(omega(low)?, omega(high)?)))
        }
        ("peak modulus", Some((low, high))) => {
            Ok(rational.at(rational.peak(omega(low)?, omega(high)?)).norm())
        }
        _ => Err(unknown()),
    }
}

/// A frequency of the tables in rad/s.
fn omega(text: &str) -> Result<f64, String> {
    let (number, unit) =
        text.trim().split_once(' ').ok_or_else(|| format!("`{text}` has no unit"))?;
    let number: f64 = number.parse().map_err(|_| format!("`{number}` is no number"))?;
    let scale = match unit {
        "rad/s" => 1.0,
        "Hz" => 2.0 * PI,
        "kHz" => 2e3 * PI,
        "MHz" => 2e6 * PI,
        _ => return Err(format!("`{unit}` is no unit of frequency")),
    };
    Ok(number * scale)
}

fn number(found: &BigRational, published: &str, tolerance: &str) -> Result<(), String> {
    if tolerance != "exact" {
        return float_number(float(found), published, tolerance);
    }
    if *found == exact::number(published)? {
        Ok(())
    } else {
        Err(format!("{found} instead of {published}"))
    }
}

fn float_number(found: f64, published: &str, tolerance: &str) -> Result<(), String> {
    let expected = float(&exact::number(published)?);
    let allowed = match tolerance.strip_suffix('%') {
        Some(percent) => float(&exact::number(percent.trim())?) / 100.0 * expected.abs(),
        None => float(&exact::number(tolerance)?),
    };
    if (found - expected).abs() <= allowed {
        Ok(())
    } else {
        Err(format!("{found} instead of {published} (allowed: {tolerance})"))
    }
}
