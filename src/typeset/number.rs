//! Exact numbers as text: shortest, scientific, engineering, and with SI prefix and unit.
//!
//! Rounding is half to even and works on the rational itself: digits are an integer quotient, and
//! the remainder decides. No floating-point number is involved, except in [`float`], whose
//! argument is one.

use num_bigint::BigInt;
use num_integer::Integer;
use num_rational::BigRational;
use num_traits::{One, Signed, ToPrimitive, Zero, pow};

/// Where a number or a formula is to be shown.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Medium {
    /// Text with −, ·, ², µ and Ω.
    Unicode,
    /// The same in ASCII.
    Ascii,
    /// LaTeX, mathematics mode.
    Latex,
}

/// Decimals of at most this many significant digits are written as decimals.
const SHORT_DIGITS: usize = 15;

/// Decimal digits d₁d₂… and an exponent: ±d₁.d₂… · 10^exponent. No trailing zeros; zero is `0`.
struct Decimal {
    negative: bool,
    digits: String,
    exponent: i64,
}

/// True where [`shortest`] gives a decimal and not a fraction.
#[must_use]
pub fn is_short(value: &BigRational) -> bool {
    value.is_integer() || exact_decimal(value).is_some()
}

/// The exact value: an integer, a decimal (`0.25`, `4.7e-9`) when it has at most 15 significant
/// digits, else a fraction (`1/3`).
#[must_use]
pub fn shortest(value: &BigRational) -> String {
    shortest_in(value, Medium::Ascii)
}

/// As [`shortest`], with the medium's minus sign and power of ten.
#[must_use]
pub fn shortest_in(value: &BigRational, medium: Medium) -> String {
    match exact_decimal(value) {
        Some(decimal) => decimal.general(medium, -4, 15),
        None => value.to_string(),
    }
}

/// The shortest text that reads back to the same double (`0.1`, `1e-7`).
#[must_use]
pub fn float(value: f64) -> String {
    if value == 0.0 {
        // Without the sign that a zero may have.
        return "0".to_owned();
    }
    let text = format!("{value:e}");
    let Some((mantissa, exponent)) = text.split_once('e') else { return text };
    let digits = mantissa.chars().filter(char::is_ascii_digit).collect();
    let exponent = exponent.parse().unwrap_or(0);
    Decimal { negative: mantissa.starts_with('-'), digits, exponent }.general(Medium::Ascii, -4, 15)
}

/// Rounded to that many significant digits: positional from 0.001 to below a million, else
/// scientific. Trailing zeros are left out.
#[must_use]
pub fn rounded(value: &BigRational, digits: u32, medium: Medium) -> String {
    Decimal::round(value, digits).general(medium, -3, 6)
}

/// The number rounded to that many significant digits.
#[must_use]
pub fn round(value: &BigRational, digits: u32) -> BigRational {
    let Decimal { negative, digits, exponent } = Decimal::round(value, digits);
    let places = digits.len() as i64 - 1;
    let integer: BigInt = digits.parse().unwrap_or_default();
    let size = BigRational::from_integer(integer) * ten_to(exponent - places);
    if negative { -size } else { size }
}

/// One digit before the point, and a power of ten: `1.59e3`, `1.59·10³`. Trailing zeros are left out.
#[must_use]
pub fn scientific(value: &BigRational, digits: u32, medium: Medium) -> String {
    let decimal = Decimal::round(value, digits);
    decimal.with_power(decimal.exponent, medium)
}

/// As [`scientific`], with a power of ten that is a multiple of three.
#[must_use]
pub fn engineering(value: &BigRational, digits: u32, medium: Medium) -> String {
    let decimal = Decimal::round(value, digits);
    decimal.with_power(decimal.thousands() * 3, medium)
}

/// A number with its unit, rounded to that many significant digits: `4.7 nF`, `1.59 kHz`.
///
/// A simple unit takes an SI prefix from f to T; beyond those, and before a compound unit (`V²/Hz`),
/// stands a power of ten. The unit `1` is not written.
#[must_use]
pub fn quantity(value: &BigRational, unit: &str, digits: u32, medium: Medium) -> String {
    let decimal = Decimal::round(value, digits);
    if unit.is_empty() || unit == "1" {
        return decimal.general(medium, -3, 6);
    }
    let simple = unit.chars().all(char::is_alphabetic);
    let thousands = decimal.thousands();
    let prefix = if simple { prefix(thousands) } else { None };
    let number = match prefix {
        Some(_) => decimal.positional(thousands * 3, medium),
        None => decimal.general(medium, -3, 6),
    };
    let unit = format!("{}{unit}", prefix.unwrap_or_default());
    match medium {
        Medium::Unicode => format!("{number} {unit}"),
        Medium::Ascii => format!("{number} {}", ascii_unit(&unit)),
        Medium::Latex => format!("{number}\\,{}", latex_unit(&unit)),
    }
}

fn prefix(thousands: i64) -> Option<&'static str> {
    let prefixes = ["f", "p", "n", "µ", "m", "", "k", "M", "G", "T"];
    prefixes.get(usize::try_from(thousands + 5).ok()?).copied()
}

/// A unit (with its prefix) in ASCII: `kohm`.
pub(crate) fn ascii_unit(unit: &str) -> String {
    unit.chars()
        .map(|c| match c {
            'Ω' => "ohm".to_owned(),
            'µ' => "u".to_owned(),
            '²' => "^2".to_owned(),
            '³' => "^3".to_owned(),
            '·' => "*".to_owned(),
            c => c.to_string(),
        })
        .collect()
}

/// A unit (with its prefix) in upright LaTeX: `\mathrm{k\Omega}`.
#[must_use]
pub fn latex_unit(unit: &str) -> String {
    let mut out = "\\mathrm{".to_owned();
    let mut after_command = false;
    for c in unit.chars() {
        let (text, command) = match c {
            'Ω' => ("\\Omega".to_owned(), true),
            'µ' => ("\\mu".to_owned(), true),
            '·' => ("\\cdot".to_owned(), true),
            '²' => ("^{2}".to_owned(), false),
            '³' => ("^{3}".to_owned(), false),
            '%' => ("\\%".to_owned(), false),
            c => (c.to_string(), false),
        };
        if after_command && c.is_alphabetic() && !command {
            out.push(' ');
        }
        out.push_str(&text);
        after_command = command;
    }
    out.push('}');
    out
}

/// The value as a decimal where it is one and short.
fn exact_decimal(value: &BigRational) -> Option<Decimal> {
    // 10^±400 and beyond: leave it, rather than divide forever.
    const MAX_BITS: u64 = 1400;
    if value.numer().bits().max(value.denom().bits()) > MAX_BITS {
        return None;
    }
    let twos = value.denom().trailing_zeros().unwrap_or(0);
    let mut rest: BigInt = value.denom() >> twos;
    let mut fives = 0;
    let five = BigInt::from(5);
    while !rest.is_one() {
        let (quotient, remainder) = rest.div_rem(&five);
        if !remainder.is_zero() {
            return None;
        }
        rest = quotient;
        fives += 1;
    }
    let places = twos.max(fives);
    let scale = pow(BigInt::from(10), usize::try_from(places).ok()?);
    let integer = value.numer().abs() * scale / value.denom();
    let decimal =
        Decimal::from_integer(value.is_negative(), &integer, -i64::try_from(places).ok()?);
    (decimal.digits.len() <= SHORT_DIGITS).then_some(decimal)
}

impl Decimal {
    /// ±`integer` · 10^`power`.
    fn from_integer(negative: bool, integer: &BigInt, power: i64) -> Self {
        let mut digits = integer.to_string();
        let exponent = power + i64::try_from(digits.len()).unwrap_or(i64::MAX) - 1;
        digits.truncate(digits.trim_end_matches('0').len());
        if digits.is_empty() {
            return Self { negative: false, digits: "0".to_owned(), exponent: 0 };
        }
        Self { negative, digits, exponent }
    }

    /// Rounds half to even, to 1 to 1000 digits.
    fn round(value: &BigRational, digits: u32) -> Self {
        let digits = i64::from(digits.clamp(1, 1000));
        let magnitude = value.abs();
        if magnitude.is_zero() {
            return Self::from_integer(false, magnitude.numer(), 0);
        }
        // The exponent of the first digit, from below: the lengths in bits are within 1 of the
        // logarithm, and 0.30103 is log10(2) to six digits.
        let bits = |part: &BigInt| i64::try_from(part.bits()).unwrap_or(i64::MAX);
        let bits = bits(magnitude.numer()) - bits(magnitude.denom());
        let mut exponent = (bits - 1) * 30_103 / 100_000 - 1;
        while ten_to(exponent + 1) <= magnitude {
            exponent += 1;
        }
        let power = exponent + 1 - digits;
        let scaled = magnitude * ten_to(-power);
        let (mut integer, remainder) = scaled.numer().div_rem(scaled.denom());
        let twice: BigInt = remainder * 2;
        if twice > *scaled.denom() || (twice == *scaled.denom() && integer.is_odd()) {
            integer += 1;
        }
        Self::from_integer(value.is_negative(), &integer, power)
    }

    /// The power of a thousand that leaves one to three digits before the point.
    fn thousands(&self) -> i64 {
        self.exponent.div_euclid(3)
    }

    /// Positional where `from` ≤ exponent < `below`, else scientific.
    fn general(&self, medium: Medium, from: i64, below: i64) -> String {
        if (from..below).contains(&self.exponent) {
            self.positional(0, medium)
        } else {
            self.with_power(self.exponent, medium)
        }
    }

    /// The value divided by 10^`power`, with a decimal point where it is needed.
    fn positional(&self, power: i64, medium: Medium) -> String {
        let sign = match (self.negative, medium) {
            (false, _) => "",
            (true, Medium::Unicode) => "−",
            (true, Medium::Ascii | Medium::Latex) => "-",
        };
        let digits = &self.digits;
        match usize::try_from(self.exponent - power) {
            Err(_) => {
                let zeros = (power - self.exponent - 1).to_usize().unwrap_or(0);
                format!("{sign}0.{}{digits}", "0".repeat(zeros))
            }
            Ok(place) if digits.len() <= place + 1 => {
                format!("{sign}{digits}{}", "0".repeat(place + 1 - digits.len()))
            }
            Ok(place) => {
                let (whole, part) = digits.split_at(place + 1);
                format!("{sign}{whole}.{part}")
            }
        }
    }

    /// Mantissa and power of ten; the power 0 is left out.
    fn with_power(&self, power: i64, medium: Medium) -> String {
        let mantissa = self.positional(power, medium);
        match (power, medium) {
            (0, _) => mantissa,
            (_, Medium::Unicode) => format!("{mantissa}·10{}", superscript(power)),
            (_, Medium::Ascii) => format!("{mantissa}e{power}"),
            (_, Medium::Latex) => format!("{mantissa}\\cdot 10^{{{power}}}"),
        }
    }
}

fn ten_to(power: i64) -> BigRational {
    let magnitude = pow(BigInt::from(10), power.unsigned_abs().to_usize().unwrap_or(0));
    let value = BigRational::from_integer(magnitude);
    if power < 0 { value.recip() } else { value }
}

/// An integer in superscript characters: `⁻¹²`.
pub(crate) fn superscript(value: impl ToString) -> String {
    value
        .to_string()
        .chars()
        .map(|c| match c {
            '-' => '⁻',
            '1' => '¹',
            '2' => '²',
            '3' => '³',
            // U+2070 is ⁰, U+2074 to U+2079 are ⁴ to ⁹.
            c => c.to_digit(10).and_then(|d| char::from_u32(0x2070 + d)).unwrap_or(c),
        })
        .collect()
}

#[cfg(test)]
mod tests;
