//! An exact reader of expressions: text and the values of its names in, one rational number out.
//!
//! Reads `+ - * / ^ ( )`, unary minus, integers and decimals, names, and `a || b` for
//! a*b/(a + b). `||` binds tighter than `*`, `^` tighter than `||`; `-s^2` is -(s^2); exponents
//! are integers. Names may hold dots (`Q1.gm`).

use num_bigint::BigInt;
use num_rational::BigRational;
use num_traits::{One, Pow, Zero};

/// Evaluates `text`; `value` gives each name its number.
///
/// # Errors
/// What could not be read, which name has no value, or a division by zero.
pub(crate) fn evaluate(
    text: &str,
    value: &dyn Fn(&str) -> Option<BigRational>,
) -> Result<BigRational, String> {
    let tokens = tokens(text)?;
    let mut reader = Reader { tokens: &tokens, next: 0, value };
    let result = reader.sum()?;
    match reader.peek() {
        None => Ok(result),
        Some(token) => Err(format!("`{token}` is left over in `{text}`")),
    }
}

/// The names of an expression, each as often as it stands there.
pub(crate) fn names(text: &str) -> Result<Vec<String>, String> {
    let is_name = |token: &String| token.starts_with(|c: char| c.is_ascii_alphabetic() || c == '_');
    Ok(tokens(text)?.into_iter().filter(is_name).collect())
}

/// An exact number from an integer, a decimal (`1.5e-3`) or a fraction of two of them.
pub(crate) fn number(text: &str) -> Result<BigRational, String> {
    if let Some((over, under)) = text.split_once('/') {
        let under = number(under)?;
        if under.is_zero() {
            return Err(format!("`{text}` divides by zero"));
        }
        return Ok(number(over)? / under);
    }
    let wrong = || format!("`{text}` is not a number");
    let (mantissa, exponent) = match text.split_once(['e', 'E']) {
        Some((mantissa, exponent)) => (mantissa, exponent.parse::<i32>().map_err(|_| wrong())?),
        None => (text, 0),
    };
    let (whole, fraction) = mantissa.split_once('.').unwrap_or((mantissa, ""));
    let digits: BigInt = format!("{whole}{fraction}").trim().parse().map_err(|_| wrong())?;
    let places = i32::try_from(fraction.len()).map_err(|_| wrong())?;
    let ten = BigRational::from_integer(BigInt::from(10));
    Ok(BigRational::from_integer(digits) * ten.pow(exponent - places))
}

fn tokens(text: &str) -> Result<Vec<String>, String> {
    let mut tokens = Vec::new();
    let mut rest = text.trim_start();
    while let Some(first) = rest.chars().next() {
        let length = if first.is_ascii_alphabetic() || first == '_' {
            rest.find(|c: char| !(c.is_ascii_alphanumeric() || c == '_' || c == '.'))
                .unwrap_or(rest.len())
        } else if first.is_ascii_digit() {
            rest.find(|c: char| !(c.is_ascii_digit() || c == '.')).unwrap_or(rest.len())
        } else if rest.starts_with("||") {
            2
        } else if "+-*/^()".contains(first) {
            1
        } else {
            return Err(format!("`{first}` cannot be read in `{text}`"));
        };
        tokens.push(rest[..length].to_owned());
        rest = rest[length..].trim_start();
    }
    Ok(tokens)
}

struct Reader<'a> {
    tokens: &'a [String],
    next: usize,
    value: &'a dyn Fn(&str) -> Option<BigRational>,
}

impl Reader<'_> {
    fn peek(&self) -> Option<&str> {
        self.tokens.get(self.next).map(String::as_str)
    }

    fn take(&mut self, token: &str) -> bool {
        let found = self.peek() == Some(token);
        self.next += usize::from(found);
        found
    }

    fn sum(&mut self) -> Result<BigRational, String> {
        let mut total = self.product()?;
        loop {
            if self.take("+") {
                total += self.product()?;
            } else if self.take("-") {
                total -= self.product()?;
            } else {
                return Ok(total);
            }
        }
    }

    fn product(&mut self) -> Result<BigRational, String> {
        let mut total = self.signed()?;
        loop {
            if self.take("*") {
                total *= self.signed()?;
            } else if self.take("/") {
                total = quotient(&total, &self.signed()?)?;
            } else {
                return Ok(total);
            }
        }
    }

    fn signed(&mut self) -> Result<BigRational, String> {
        if self.take("-") { Ok(-self.signed()?) } else { self.parallel() }
    }

    fn parallel(&mut self) -> Result<BigRational, String> {
        let mut total = self.power()?;
        while self.take("||") {
            let other = self.power()?;
            total = quotient(&(&total * &other), &(&total + &other))?;
        }
        Ok(total)
    }

    fn power(&mut self) -> Result<BigRational, String> {
        let base = self.atom()?;
        if !self.take("^") {
            return Ok(base);
        }
        let parenthesis = self.take("(");
        let negative = self.take("-");
        let exponent = self.peek().unwrap_or("the end").to_owned();
        let exponent: i32 =
            exponent.parse().map_err(|_| format!("`{exponent}` is no integer exponent"))?;
        self.next += 1;
        if parenthesis && !self.take(")") {
            return Err("a parenthesis is not closed".into());
        }
        if negative && base.is_zero() {
            return Err("a division by zero".into());
        }
        Ok(base.pow(if negative { -exponent } else { exponent }))
    }

    fn atom(&mut self) -> Result<BigRational, String> {
        if self.take("(") {
            let inner = self.sum()?;
            return if self.take(")") {
                Ok(inner)
            } else {
                Err("a parenthesis is not closed".into())
            };
        }
        let token = self.peek().ok_or("the expression ends too early")?.to_owned();
        self.next += 1;
        if token.starts_with(|c: char| c.is_ascii_digit()) {
            number(&token)
        } else {
            (self.value)(&token).ok_or_else(|| format!("`{token}` has no value"))
        }
    }
}

fn quotient(over: &BigRational, under: &BigRational) -> Result<BigRational, String> {
    if under.is_zero() { Err("a division by zero".into()) } else { Ok(over / under) }
}

/// Deterministic numbers for points of comparison: fractions of small integers, never 0.
pub(crate) struct Points {
    state: u64,
}

impl Points {
    /// A sequence that depends on `seed` alone.
    pub(crate) fn new(seed: u64) -> Self {
        Self { state: seed }
    }

    /// The next one (a linear congruence; Knuth, TAOCP 2, 3.3.4).
    pub(crate) fn draw(&mut self) -> BigRational {
        let mut integer = || {
            self.state = self
                .state
                .wrapping_mul(6_364_136_223_846_793_005)
                .wrapping_add(1_442_695_040_888_963_407);
            BigInt::from((self.state >> 33) % 997 + 1)
        };
        BigRational::new(integer(), integer())
    }
}

/// Sum of `coefficients[k]`·x^k.
pub(crate) fn horner(coefficients: &[BigRational], x: &BigRational) -> BigRational {
    coefficients.iter().rev().fold(BigRational::zero(), |sum, c| sum * x + c)
}

/// x^k.
pub(crate) fn power(x: &BigRational, k: usize) -> BigRational {
    (0..k).fold(BigRational::one(), |product, _| product * x)
}
