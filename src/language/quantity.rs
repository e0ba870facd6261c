//! Numbers, SI prefixes and units: exact, and strict where a slip would cost a factor of a million.
//!
//! A quantity is a figure, an optional prefix and an optional unit, or an IEC 60062 code (`4k7`), read
//! as a whole. `m` is milli and `M` is mega, always. Decimals become exact rationals.

use super::diagnostic::{Diagnostic, Span};
use crate::circuit::{Number, Unit};
use num_bigint::BigInt;
use num_traits::{Pow, Zero};

/// Powers of ten beyond this are refused: no circuit needs them and they would fill the memory.
const LARGEST_EXPONENT: i64 = 400;

/// More digits than this are refused for the same reason.
const MOST_DIGITS: usize = 1000;

const PREFIXES: [(char, i64); 10] = [
    ('f', -15),
    ('p', -12),
    ('n', -9),
    ('u', -6),
    ('μ', -6),
    ('m', -3),
    ('k', 3),
    ('M', 6),
    ('G', 9),
    ('T', 12),
];

/// Unit words as typed. Longer words stand before those that they begin with.
const UNITS: [(&str, Unit); 17] = [
    ("ohms", Unit::OHM),
    ("Ohm", Unit::OHM),
    ("ohm", Unit::OHM),
    ("Ω", Unit::OHM),
    ("Hz", Unit::HERTZ),
    ("rad/s", Unit::HERTZ),
    ("1/s", Unit::HERTZ),
    ("V/V", Unit::ONE),
    ("A/A", Unit::ONE),
    ("A/V", Unit::SIEMENS),
    ("V/A", Unit::OHM),
    ("S", Unit::SIEMENS),
    ("F", Unit::FARAD),
    ("H", Unit::HENRY),
    ("V", Unit::VOLT),
    ("A", Unit::AMPERE),
    ("s", Unit::SECOND),
];

fn prefix(letter: char) -> Option<i64> {
    PREFIXES.iter().find(|(name, _)| *name == letter).map(|(_, exponent)| *exponent)
}

fn unit(word: &str) -> Option<Unit> {
    UNITS.iter().find(|(name, _)| *name == word).map(|(_, unit)| *unit)
}

/// Splits `kΩ` into the power of ten and the unit; both may be absent.
fn prefix_and_unit(word: &str) -> Option<(i64, Option<Unit>)> {
    if word.is_empty() {
        return Some((0, None));
    }
    if let Some(unit) = unit(word) {
        return Some((0, Some(unit)));
    }
    let first = word.chars().next()?;
    let exponent = prefix(first)?;
    let rest = &word[first.len_utf8()..];
    if rest.is_empty() {
        return Some((exponent, None));
    }
    unit(rest).map(|unit| (exponent, Some(unit)))
}

/// True when `word` can stand after a figure: `kΩ`, `k`, `Hz`.
pub(crate) fn is_unit_word(word: &str) -> bool {
    prefix_and_unit(word).is_some()
}

/// A number and, if written, its unit.
pub(crate) type Amount = (Number, Option<Unit>);

/// Reads `figure` with the words after it (`10`, `kΩ`; `4k7`, nothing).
///
/// # Errors
/// One diagnostic, for each of the slips that the language names.
pub(crate) fn amount(figure: &str, word: &str, span: Span) -> Result<Amount, Diagnostic> {
    if figure.contains(',') {
        let point = figure.replacen(',', ".", 1);
        return Err(Diagnostic::error(
            "decimal-comma",
            span,
            format!("a comma in the number `{figure}`"),
        )
        .help(format!("write the decimal sign as a point: `{point}`")));
    }
    let digits = mantissa_length(figure);
    let (mantissa, tail) = figure.split_at(digits);
    let joined = format!("{tail}{word}");
    if joined.to_lowercase().starts_with("meg") {
        return Err(Diagnostic::error("meg", span, format!("`{joined}` is no SI prefix"))
            .help(format!("mega is `M`: write `{mantissa}M`")));
    }
    if let Some((exponent, unit)) = prefix_and_unit(&joined) {
        return Ok((power_of_ten(decimal(mantissa, span)?, exponent), unit));
    }
    if word.is_empty()
        && let Some(code) = letter_code(figure, span)
    {
        let ohms = figure.contains('R').then_some(Unit::OHM);
        return code.map(|value| (value, ohms));
    }
    if let Some(rest) = joined.strip_prefix('K')
        && (rest.is_empty() || unit(rest).is_some())
    {
        return Err(capital_k(mantissa, span, rest));
    }
    let mut fault =
        Diagnostic::error("unknown-unit", span, format!("`{joined}` is no unit with an SI prefix"));
    fault = match joined.strip_prefix('U') {
        Some(rest) if rest.is_empty() || unit(rest).is_some() => {
            fault.help(format!("micro is `u` or `µ`: write `{mantissa} u{rest}`"))
        }
        _ => fault.help("prefixes are f p n u µ m k M G T; units are Ω (ohm) S F H V A s Hz"),
    };
    Err(fault)
}

/// Reads a text that is one quantity: a sign, a figure, a unit.
///
/// # Errors
/// As for [`amount`], and where no figure stands at the beginning.
pub(crate) fn whole(text: &str) -> Result<Amount, Diagnostic> {
    let span = Span { start: 0, end: text.len() };
    let (negative, rest) = match text.trim().strip_prefix(['-', '−']) {
        Some(rest) => (true, rest.trim_start()),
        None => (false, text.trim()),
    };
    let (figure, word) = match rest.split_once(char::is_whitespace) {
        Some((figure, word)) => (figure, word.trim()),
        None => (rest, ""),
    };
    if !figure.starts_with(|c: char| c.is_ascii_digit() || c == '.') {
        let fault = Diagnostic::error("not-a-quantity", span, format!("`{text}` is no quantity"));
        return Err(fault.help("write a number and a unit, such as `1 kHz`"));
    }
    let (value, unit) = amount(figure, word, span)?;
    Ok((if negative { -value } else { value }, unit))
}

/// Kelvin as a temperature's unit is read by itself, since elsewhere `K` is a slip for `k`.
///
/// # Errors
/// One diagnostic, as [`amount`].
pub(crate) fn temperature(figure: &str, word: &str, span: Span) -> Result<Number, Diagnostic> {
    let digits = mantissa_length(figure);
    let (mantissa, tail) = figure.split_at(digits);
    match format!("{tail}{word}").as_str() {
        "K" => decimal(mantissa, span),
        found => Err(Diagnostic::error(
            "temperature-unit",
            span,
            format!("a temperature is given in kelvin, not `{found}`"),
        )
        .help("write it like `temperature 300 K`")),
    }
}

fn capital_k(mantissa: &str, span: Span, rest: &str) -> Diagnostic {
    Diagnostic::error("capital-k", span, "`K` is no SI prefix (it is the unit kelvin)")
        .help(format!("kilo is `k`: write `{mantissa} k{rest}`"))
}

/// Bytes of the leading plain decimal number, exponent included.
fn mantissa_length(figure: &str) -> usize {
    let bytes = figure.as_bytes();
    let digits_from = |from: usize| bytes[from..].iter().take_while(|b| b.is_ascii_digit()).count();
    let mut end = digits_from(0);
    if bytes.get(end) == Some(&b'.') {
        end += 1 + digits_from(end + 1);
    }
    if matches!(bytes.get(end), Some(b'e' | b'E')) {
        let sign = usize::from(matches!(bytes.get(end + 1), Some(b'+' | b'-')));
        let digits = bytes.get(end + 1 + sign..).map_or(0, |_| digits_from(end + 1 + sign));
        if digits > 0 {
            end += 1 + sign + digits;
        }
    }
    end
}

/// A letter code of IEC 60062: `4k7`, `2R2`, `0R47`, `3u3`. None if the shape is another one.
fn letter_code(figure: &str, span: Span) -> Option<Result<Number, Diagnostic>> {
    let whole = figure.bytes().take_while(u8::is_ascii_digit).count();
    let letter = figure[whole..].chars().next()?;
    let fraction = &figure[whole + letter.len_utf8()..];
    let exponent = match letter {
        'R' => 0,
        'K' => 3,
        other => prefix(other)?,
    };
    if whole == 0 || !fraction.bytes().all(|byte| byte.is_ascii_digit()) {
        return None;
    }
    if fraction.is_empty() && letter != 'R' {
        return None;
    }
    let text = format!("{}.{fraction}", &figure[..whole]);
    Some(decimal(&text, span).map(|value| power_of_ten(value, exponent)))
}

/// An exact decimal: digits, point, exponent.
///
/// # Errors
/// A diagnostic if the exponent or the number of digits passes what is sensible.
pub(crate) fn decimal(text: &str, span: Span) -> Result<Number, Diagnostic> {
    let too_large = || {
        Diagnostic::error(
            "number-range",
            span,
            format!("a number with an exponent beyond ±{LARGEST_EXPONENT} or more than {MOST_DIGITS} digits"),
        )
        .help("values of circuits lie between 1e-18 and 1e18 or so")
    };
    if text.len() > MOST_DIGITS {
        return Err(too_large());
    }
    let (mantissa, exponent) = match text.split_once(['e', 'E']) {
        Some((mantissa, exponent)) => (mantissa, exponent.parse::<i64>().map_err(|_| too_large())?),
        None => (text, 0),
    };
    if exponent.abs() > LARGEST_EXPONENT {
        return Err(too_large());
    }
    let (whole, fraction) = mantissa.split_once('.').unwrap_or((mantissa, ""));
    let digits = format!("{whole}{fraction}");
    let malformed = || Diagnostic::error("number", span, format!("`{text}` is no number"));
    if digits.is_empty() || !digits.bytes().all(|byte| byte.is_ascii_digit()) {
        return Err(malformed());
    }
    let integer: BigInt = digits.parse().map_err(|_| malformed())?;
    let places = i64::try_from(fraction.len()).map_err(|_| too_large())?;
    Ok(power_of_ten(Number::from(integer), exponent - places))
}

/// `value`·10^`exponent`.
pub(crate) fn power_of_ten(value: Number, exponent: i64) -> Number {
    if value.is_zero() {
        return value;
    }
    let power: BigInt = BigInt::from(10).pow(exponent.unsigned_abs());
    let (numerator, denominator) = value.into_raw();
    if exponent >= 0 {
        return Number::new(numerator * power, denominator);
    }
    // Nearly all values of circuits fit machine words, where a common factor costs nothing to find.
    match (i64::try_from(&numerator), i64::try_from(&denominator * &power)) {
        (Ok(n), Ok(d)) => {
            let shared = num_integer::gcd(n, d);
            Number::new_raw((n / shared).into(), (d / shared).into())
        }
        _ => Number::new(numerator, denominator * power),
    }
}

/// True for a figure that a plain expression accepts: digits, point, exponent, nothing after.
pub(crate) fn is_plain(figure: &str) -> bool {
    mantissa_length(figure) == figure.len()
}
