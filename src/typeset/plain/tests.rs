//! Tables of both dialects, and a random tree read back by a small reader of its own.

use num_bigint::BigInt;
use num_rational::BigRational;
use num_traits::{One, Zero};
use proptest::prelude::*;

use super::*;
use crate::typeset::Letter;
use crate::typeset::random::tree;

fn names() -> SymbolTable {
    SymbolTable::new(["R1", "R2", "C1", "Q1.gm", "β"])
}

fn x(index: u32) -> Formula {
    Formula::symbol(index)
}

fn n(value: i64) -> Formula {
    Formula::integer(value)
}

fn ratio(above: i64, below: i64) -> Formula {
    Formula::number(BigRational::new(above.into(), below.into()))
}

#[track_caller]
fn check(formula: Formula, expression: &str, language: &str) {
    assert_eq!(text(&formula, &names(), Dialect::Expression), expression);
    assert_eq!(text(&formula, &names(), Dialect::Language), language);
}

#[track_caller]
fn check_both(formula: Formula, expected: &str) {
    check(formula, expected, expected);
}

#[test]
fn names_and_numbers() {
    check_both(Formula::s(), "s");
    check_both(Formula::pi(), "pi");
    check_both(Formula::frequency(), "f");
    check_both(Formula::definition(0), "e1");
    check(x(3), "Q1_gm", "Q1.gm");
    check(x(4), "beta", "β");
    check(ratio(1, 4), "1/4", "0.25");
    check(ratio(-1, 3), "-1/3", "-1/3");
    check(Formula::power(x(9), 2), "x9^2", "x9^2");
}

#[test]
fn precedence() {
    let sum = || Formula::sum([x(0), x(1)]);
    check_both(Formula::product([Formula::s(), x(2), sum()]), "s*C1*(R1 + R2)");
    check_both(Formula::power(Formula::s(), 2).negative(), "-s^2");
    check_both(Formula::power(sum(), 2), "(R1 + R2)^2");
    check_both(Formula::quotient(x(0), Formula::product([x(1), x(2)])), "R1/(R2*C1)");
    check_both(Formula::quotient(x(0), Formula::power(x(1), 2)), "R1/R2^2");
    check_both(Formula::quotient(sum().negative(), x(2)), "-(R1 + R2)/C1");
    let over = || Formula::quotient(x(0), x(1));
    check_both(Formula::product([over(), x(2)]), "(R1/R2)*C1");
    check_both(Formula::product([x(2), over()]), "C1*R1/R2");
    let reciprocal = || Formula::quotient(n(1), Formula::product([x(0), x(1)]));
    check_both(Formula::product([x(2), reciprocal()]), "C1/(R1*R2)");
    check_both(Formula::product([reciprocal(), reciprocal()]), "(1/(R1*R2))/(R1*R2)");
    check_both(Formula::power(over(), 2), "(R1/R2)^2");
    check(Formula::power(Formula::product([ratio(1, 2), x(0)]), 2), "(1/2*R1)^2", "(0.5*R1)^2");
    check_both(Formula::power(Formula::power(x(0), i32::MAX), 4), "(R1^2147483647)^4");
    check_both(Formula::sum([sum().negative(), n(1)]), "-R1 - R2 + 1");
}

#[test]
fn parallels() {
    let pair = || Formula::parallel([x(0), x(1)]);
    check(pair(), "R1*R2/(R1 + R2)", "R1 || R2");
    check(Formula::parallel([x(0), x(1), x(2)]), "1/(1/R1 + 1/R2 + 1/C1)", "R1 || R2 || C1");
    check(Formula::sum([x(2), pair()]), "C1 + R1*R2/(R1 + R2)", "C1 + R1 || R2");
    check(Formula::sum([x(2), pair().negative()]), "C1 - R1*R2/(R1 + R2)", "C1 - R1 || R2");
    check(pair().negative(), "-R1*R2/(R1 + R2)", "-R1 || R2");
    check(Formula::product([x(2), pair()]), "C1*R1*R2/(R1 + R2)", "C1*(R1 || R2)");
    check(Formula::product([pair(), x(2)]), "(R1*R2/(R1 + R2))*C1", "(R1 || R2)*C1");
    check(Formula::quotient(x(2), pair()), "C1/(R1*R2/(R1 + R2))", "C1/(R1 || R2)");
    check(Formula::power(pair(), 2), "(R1*R2/(R1 + R2))^2", "(R1 || R2)^2");
    let reactance = Formula::quotient(n(1), Formula::product([Formula::s(), x(2)]));
    check(Formula::parallel([x(0), reactance]), "1/(1/R1 + 1/(1/(s*C1)))", "R1 || (1/(s*C1))");
    check(
        Formula::parallel([x(0).negative(), ratio(1, 3)]),
        "1/(1/(-R1) + 1/(1/3))",
        "(-R1) || (1/3)",
    );
    check(Formula::parallel([x(0), ratio(5, 2)]), "1/(1/R1 + 1/(5/2))", "R1 || 2.5");
}

/// Reads both dialects: `+ -`, unary `-`, `||`, `* /`, `^`, as the circuit language defines them.
/// `a || b` beside `*`, `/` or `^` without parentheses is refused.
struct Reader<'a> {
    rest: &'a str,
}

impl Reader<'_> {
    fn read(text: &str) -> Result<BigRational, String> {
        let mut reader = Reader { rest: text };
        let value = reader.sum()?;
        if reader.rest.is_empty() { Ok(value) } else { Err(format!("left over: {}", reader.rest)) }
    }

    fn take(&mut self, token: &str) -> bool {
        let rest = self.rest.trim_start();
        match rest.strip_prefix(token) {
            Some(rest) => {
                self.rest = rest;
                true
            }
            None => false,
        }
    }

    fn sum(&mut self) -> Result<BigRational, String> {
        let minus = self.take("-");
        let mut value = self.term()?;
        if minus {
            value = -value;
        }
        loop {
            if self.take("+") {
                value += self.term()?;
            } else if self.take("-") {
                value -= self.term()?;
            } else {
                return Ok(value);
            }
        }
    }

    fn term(&mut self) -> Result<BigRational, String> {
        let (mut value, is_operand) = self.power()?;
        let mut operands = vec![value.clone()];
        while self.take("||") {
            let (operand, good) = self.power()?;
            if !(is_operand && good) {
                return Err("an operand of || is no name, number or parenthesis".to_owned());
            }
            operands.push(operand);
        }
        if operands.len() > 1 {
            let sum: BigRational = operands.iter().map(one_over).sum::<Result<_, _>>()?;
            value = one_over(&sum)?;
        }
        loop {
            let divides = self.take("/");
            if !divides && !self.take("*") {
                return Ok(value);
            }
            if operands.len() > 1 {
                return Err("|| beside * or /".to_owned());
            }
            let factor = self.power()?.0;
            value *= if divides { one_over(&factor)? } else { factor };
            if self.rest.trim_start().starts_with("||") {
                return Err("|| beside * or /".to_owned());
            }
        }
    }

    /// A value, and whether it may stand beside `||`.
    fn power(&mut self) -> Result<(BigRational, bool), String> {
        let base = self.atom()?;
        if !self.take("^") {
            return Ok((base, true));
        }
        let exponent: usize = self.word().parse().map_err(|_| "exponent")?;
        Ok((num_traits::pow(base, exponent), false))
    }

    fn atom(&mut self) -> Result<BigRational, String> {
        if self.take("(") {
            let value = self.sum()?;
            return if self.take(")") { Ok(value) } else { Err(format!("no ) at {}", self.rest)) };
        }
        let word = self.word();
        if word.starts_with(|c: char| c.is_ascii_digit()) {
            return decimal(&word).ok_or_else(|| format!("number {word}"));
        }
        value_of(&word).ok_or_else(|| format!("name {word} at {}", self.rest))
    }

    fn word(&mut self) -> String {
        let text = self.rest.trim_start();
        let mut end = 0;
        for (index, c) in text.char_indices() {
            let exponent_sign = c == '-'
                && text[..index].ends_with('e')
                && text.starts_with(|c: char| c.is_ascii_digit());
            if !(c.is_alphanumeric() || c == '_' || c == '.' || exponent_sign) {
                break;
            }
            end = index + c.len_utf8();
        }
        let (word, rest) = text.split_at(end);
        self.rest = rest;
        word.to_owned()
    }
}

fn one_over(value: &BigRational) -> Result<BigRational, String> {
    if value.is_zero() { Err("division by 0".to_owned()) } else { Ok(value.recip()) }
}

fn decimal(word: &str) -> Option<BigRational> {
    let (mantissa, exponent) = word.split_once('e').unwrap_or((word, "0"));
    let (whole, part) = mantissa.split_once('.').unwrap_or((mantissa, ""));
    let digits: BigInt = format!("{whole}{part}").parse().ok()?;
    let power = exponent.parse::<i32>().ok()? - i32::try_from(part.len()).ok()?;
    let ten = BigRational::from_integer(10.into());
    Some(BigRational::from_integer(digits) * ten.pow(power))
}

/// Large primes, so that random divisors are hardly ever 0.
fn point(letter: Letter) -> Option<BigRational> {
    Some(BigRational::from_integer(match letter {
        Letter::S => 1_000_003.into(),
        Letter::Frequency => 1_000_033.into(),
        Letter::Pi => 1_000_037.into(),
        Letter::Symbol(index) => {
            [1_000_039, 1_000_081, 1_000_099, 1_000_117, 1_000_121][index as usize].into()
        }
        Letter::Definition(_) => 1_000_133.into(),
    }))
}

fn value_of(word: &str) -> Option<BigRational> {
    let letters = [Letter::S, Letter::Frequency, Letter::Pi, Letter::Definition(0)]
        .into_iter()
        .chain((0..5).map(Letter::Symbol));
    let names = names();
    letters
        .into_iter()
        .find(|&letter| {
            [Style::Source, Style::Identifier]
                .iter()
                .any(|&style| names.letter(letter, style) == word)
        })
        .and_then(point)
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(1000))]

    #[test]
    fn what_is_written_reads_back(formula in tree()) {
        // A formula without a value here (1/0, or an operand 0 of `||`) has nothing to compare.
        let Some(value) = formula.evaluate(point) else { return Ok(()) };
        for dialect in [Dialect::Expression, Dialect::Language] {
            let text = text(&formula, &names(), dialect);
            match Reader::read(&text) {
                Ok(read) => prop_assert_eq!(read, value.clone(), "{}", text),
                Err(error) => prop_assert_eq!(error, "division by 0", "{}", text),
            }
            if dialect == Dialect::Expression {
                prop_assert!(text.is_ascii() && !text.contains(['|', '.']), "{}", text);
            }
        }
    }
}

#[test]
fn the_reader_itself() {
    for (text, expected) in [
        ("-2^2", Some((-4, 1))),
        ("2 + 3*4/6", Some((4, 1))),
        ("2/3/4", Some((1, 6))),
        ("2 + 2 || 2", Some((3, 1))),
        ("-2 || 2", Some((-1, 1))),
        ("2.5e-1", Some((1, 4))),
        ("2*3 || 3", None),
        ("3 || 3*2", None),
        ("2^2 || 3", None),
    ] {
        let value = Reader::read(text).ok();
        assert_eq!(value, expected.map(|(p, q)| BigRational::new(p.into(), q.into())), "{text}");
    }
    assert!(Reader::read("1/(1 - 1)").is_err());
    assert_eq!(one_over(&BigRational::one()), Ok(BigRational::one()));
}

#[test]
fn streams_a_million_terms() {
    let terms = (0..250_000).map(|index| {
        Formula::product([x(index % 5), x((index + 1) % 5), Formula::power(Formula::s(), 2)])
    });
    let text = text(&Formula::sum(terms), &names(), Dialect::Language);
    assert_eq!(text.matches(" + ").count(), 249_999);
}
