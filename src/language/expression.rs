//! From the tokens of an expression to its tree, with the refusals that need words of their own.
//!
//! Chains become flat sums and products; a quotient is a product with powers −1. Whether a space
//! multiplies depends on where the expression stands.

use super::diagnostic::{Diagnostic, Span};
use super::names::ascii_name;
use super::parse::{Reader, Rule};
use super::quantity;
use super::syntax::{Argument, Expression, ExpressionKind, Name};
use crate::circuit::Number;
use num_traits::{One, Signed, ToPrimitive, Zero};
use pest::iterators::Pair;

/// Powers beyond this are refused: no formula needs them, and they would fill the memory.
const LARGEST_POWER: i32 = 1000;

/// The argument of `two_port` that is a reference resistance.
const REFERENCE: usize = 3;

/// Builds trees of expressions.
pub(crate) struct ExpressionReader<'r, 'a> {
    pub(crate) reader: &'r mut Reader<'a>,
    pub(crate) space_multiplies: bool,
}

#[derive(Clone, Copy, PartialEq, Eq)]
enum Operator {
    Times,
    Over,
    Bars,
    Space,
}

/// A factor with what stands before it.
struct Operand {
    operator: Operator,
    negative: bool,
    factor: Expression,
    /// As written, for the readings that a refusal offers.
    text: String,
    /// True for a number, to tell `10 000` from a product.
    is_number: bool,
}

impl ExpressionReader<'_, '_> {
    /// A `sum` or `walk_sum` token.
    pub(crate) fn sum(&mut self, pair: Pair<'_, Rule>) -> Option<Expression> {
        let span = self.reader.span(&pair);
        let mut terms = Vec::new();
        let mut negative = false;
        let mut sound = true;
        for token in pair.into_inner() {
            match token.as_rule() {
                Rule::minus => negative = !negative,
                Rule::term | Rule::walk_term => {
                    match self.term(token) {
                        Some(term) => terms.push(signed(term, negative)),
                        None => sound = false,
                    }
                    negative = false;
                }
                _ => {}
            }
        }
        if !sound {
            return None;
        }
        if terms.len() == 1 {
            return terms.pop();
        }
        Some(Expression { kind: ExpressionKind::Sum(terms), span })
    }

    fn term(&mut self, pair: Pair<'_, Rule>) -> Option<Expression> {
        let span = self.reader.span(&pair);
        let mut operands: Vec<Operand> = Vec::new();
        let mut operator = Operator::Space;
        let mut negative = false;
        for token in pair.into_inner() {
            match token.as_rule() {
                Rule::times => operator = Operator::Times,
                Rule::over => operator = Operator::Over,
                Rule::bars => operator = Operator::Bars,
                Rule::minus => negative = !negative,
                Rule::stars => {
                    let place = self.reader.span(&token);
                    return self.fault(
                        Diagnostic::error("power-stars", place, "`**` is no operator")
                            .help("a power is written `^`, as in `s^2`"),
                    );
                }
                Rule::factor => {
                    let text = token.as_str().trim().to_owned();
                    let is_number = text.bytes().all(|b| b.is_ascii_digit() || b == b'.');
                    let factor = self.factor(token)?;
                    operands.push(Operand { operator, negative, factor, text, is_number });
                    operator = Operator::Space;
                    negative = false;
                }
                _ => {}
            }
        }
        self.refuse_ambiguous(&operands, span)?;
        let mut factors = Vec::with_capacity(operands.len());
        let parallel = operands.iter().skip(1).any(|operand| operand.operator == Operator::Bars);
        for (index, operand) in operands.into_iter().enumerate() {
            let place = operand.factor.span;
            let mut factor = signed(operand.factor, operand.negative);
            if index > 0 && operand.operator == Operator::Over {
                factor = self.reciprocal(factor, place)?;
            }
            factors.push(factor);
        }
        if factors.len() == 1 {
            return factors.pop();
        }
        let kind = if parallel {
            ExpressionKind::Parallel(factors)
        } else {
            ExpressionKind::Product(factors)
        };
        Some(Expression { kind, span })
    }

    fn refuse_ambiguous(&mut self, operands: &[Operand], span: Span) -> Option<()> {
        let rest = operands.get(1..).unwrap_or_default();
        let written = |operator| rest.iter().any(|operand| operand.operator == operator);
        for (left, right) in operands.iter().zip(rest) {
            if right.operator != Operator::Space {
                continue;
            }
            let place = left.factor.span.join(right.factor.span);
            if left.is_number && right.is_number {
                return self.fault(
                    Diagnostic::error(
                        "digit-groups",
                        place,
                        format!("spaces inside the number `{} {}`", left.text, right.text),
                    )
                    .help(format!("write the digits together: `{}{}`", left.text, right.text)),
                );
            }
            if !self.space_multiplies {
                return self.fault(
                    Diagnostic::error("space-product", place, "two factors without an operator")
                        .help(format!("write a product with `*`: `{}*{}`", left.text, right.text)),
                );
            }
        }
        if let Some(over) = rest.iter().position(|operand| operand.operator == Operator::Over)
            && let Some(after) = rest.get(over + 1..)
            && after.iter().any(|operand| operand.operator == Operator::Space)
        {
            let left = texts(&operands[..=over]);
            let right = texts(&operands[over + 1..]);
            let divisor = &operands[over + 1].text;
            let beyond = texts(&operands[over + 2..]);
            return self.fault(
                Diagnostic::error(
                    "space-after-slash",
                    span,
                    "a space product after `/` has two readings",
                )
                .help(format!("write `{left}/({right})` or `({left}/{divisor})*{beyond}`")),
            );
        }
        if written(Operator::Bars) {
            let mixed = rest.iter().any(|operand| operand.operator != Operator::Bars);
            let power = operands.iter().any(|operand| {
                matches!(operand.factor.kind, ExpressionKind::Power(..))
                    && operand.text.contains('^')
                    && !operand.text.starts_with('(')
            });
            let sign = rest.iter().any(|operand| operand.negative);
            if mixed || power || sign {
                let (first, second) = parallel_readings(operands);
                return self.fault(
                    Diagnostic::error(
                        "mixed-parallel",
                        span,
                        "`||` beside another operator has two readings",
                    )
                    .help(format!("write `{first}` or `{second}`")),
                );
            }
        }
        Some(())
    }

    fn factor(&mut self, pair: Pair<'_, Rule>) -> Option<Expression> {
        let span = self.reader.span(&pair);
        let mut base = None;
        let mut powers: Vec<(bool, Expression)> = Vec::new();
        let mut negative = false;
        for token in pair.into_inner() {
            match token.as_rule() {
                Rule::caret | Rule::plus => {}
                Rule::minus => negative = !negative,
                _ => {
                    let primary = self.primary(token)?;
                    if base.is_none() {
                        base = Some(primary);
                    } else {
                        powers.push((negative, primary));
                    }
                    negative = false;
                }
            }
        }
        let base = base?;
        if powers.is_empty() {
            return Some(base);
        }
        let exponent = self.exponent(powers, span)?;
        if exponent < 0 {
            self.refuse_zero(&base, span)?;
        }
        Some(match exponent {
            1 => base,
            _ => Expression { kind: ExpressionKind::Power(Box::new(base), exponent), span },
        })
    }

    /// The value of `a^b^c`'s exponent, from the right.
    fn exponent(&mut self, powers: Vec<(bool, Expression)>, span: Span) -> Option<i32> {
        let mut value: Option<i32> = None;
        for (negative, expression) in powers.into_iter().rev() {
            let place = expression.span;
            let whole = constant(&expression)
                .filter(Number::is_integer)
                .and_then(|number| number.to_i32())
                .and_then(|base| match value {
                    None => Some(base),
                    Some(power) => base.checked_pow(u32::try_from(power).ok()?),
                })
                .filter(|exponent| exponent.abs() <= LARGEST_POWER);
            let Some(whole) = whole else {
                return self.fault(
                    Diagnostic::error("power", place, format!("a power must be an integer between -{LARGEST_POWER} and {LARGEST_POWER}"))
                        .label(span, "in this power")
                        .help("write a root as a value of its own, with `let`"),
                );
            };
            value = Some(if negative { -whole } else { whole });
        }
        value
    }

    fn primary(&mut self, pair: Pair<'_, Rule>) -> Option<Expression> {
        let span = self.reader.span(&pair);
        match pair.as_rule() {
            Rule::number => {
                let text = pair.as_str();
                if !quantity::is_plain(text) {
                    return self.fault(number_with_letters(text, span));
                }
                match quantity::decimal(text, span) {
                    Ok(number) => Some(Expression { kind: ExpressionKind::Number(number), span }),
                    Err(fault) => self.fault(fault),
                }
            }
            Rule::symbol => {
                Some(Expression { kind: ExpressionKind::Name(ascii_name(pair.as_str())), span })
            }
            Rule::group => {
                let sum = pair.into_inner().find(|token| token.as_rule() == Rule::sum)?;
                self.sum(sum)
            }
            Rule::call => self.call(pair),
            _ => None,
        }
    }

    fn call(&mut self, pair: Pair<'_, Rule>) -> Option<Expression> {
        let span = self.reader.span(&pair);
        let mut inner = pair.into_inner();
        let callee = inner.next()?;
        let name = Name { text: ascii_name(callee.as_str()), span: self.reader.span(&callee) };
        let mut arguments = Vec::new();
        let listed = inner.next()?.into_inner().filter(|p| p.as_rule() == Rule::argument);
        for (index, argument) in listed.enumerate() {
            let span = self.reader.span(&argument);
            let value = if name.text == "two_port" && index == REFERENCE {
                Some(Box::new(self.reader.value_again(&argument)?))
            } else {
                None
            };
            let mut text = argument.as_str().split_whitespace().collect::<Vec<_>>().join(" ");
            let content = argument.into_inner().next()?;
            let names: Vec<Name> = if content.as_rule() == Rule::nodes {
                content
                    .into_inner()
                    .map(|p| Name { text: ascii_name(p.as_str()), span: self.reader.span(&p) })
                    .collect()
            } else {
                Vec::new()
            };
            if value.is_none() && !names.is_empty() {
                text = names.iter().map(|name| name.text.as_str()).collect::<Vec<_>>().join(" ");
            }
            arguments.push(Argument { names, value, text, span });
        }
        Some(Expression { kind: ExpressionKind::Call(name, arguments), span })
    }

    fn reciprocal(&mut self, factor: Expression, place: Span) -> Option<Expression> {
        self.refuse_zero(&factor, place)?;
        let span = factor.span;
        let kind = match factor.kind {
            ExpressionKind::Power(base, exponent) => match -exponent {
                1 => return Some(*base),
                exponent => ExpressionKind::Power(base, exponent),
            },
            _ => ExpressionKind::Power(Box::new(factor), -1),
        };
        Some(Expression { kind, span })
    }

    fn refuse_zero(&mut self, divisor: &Expression, place: Span) -> Option<()> {
        if constant(divisor).is_some_and(|number| number.is_zero()) {
            return self.fault(Diagnostic::error("zero-divisor", place, "a division by zero"));
        }
        Some(())
    }

    fn fault<T>(&mut self, fault: Diagnostic) -> Option<T> {
        self.reader.faults.push(fault);
        None
    }
}

fn signed(expression: Expression, negative: bool) -> Expression {
    if !negative {
        return expression;
    }
    let span = expression.span;
    match expression.kind {
        ExpressionKind::Negative(inner) => *inner,
        _ => Expression { kind: ExpressionKind::Negative(Box::new(expression)), span },
    }
}

/// The value of an expression without names; `None` if it holds any, or a large power.
fn constant(expression: &Expression) -> Option<Number> {
    Some(match &expression.kind {
        ExpressionKind::Number(number) => number.clone(),
        ExpressionKind::Negative(inner) => -constant(inner)?,
        ExpressionKind::Sum(terms) => {
            let mut total = Number::zero();
            for term in terms {
                total += constant(term)?;
            }
            total
        }
        ExpressionKind::Product(factors) => {
            let mut total = Number::one();
            for factor in factors {
                total *= constant(factor)?;
            }
            total
        }
        ExpressionKind::Power(base, exponent) => {
            let base = constant(base)?;
            if exponent.abs() > 64 || (base.is_zero() && exponent.is_negative()) {
                return None;
            }
            base.pow(*exponent)
        }
        _ => return None,
    })
}

fn number_with_letters(text: &str, span: Span) -> Diagnostic {
    let letters = text.find(|c: char| c.is_alphabetic() || c == '_').unwrap_or(text.len());
    let (figure, name) = text.split_at(letters);
    let fault = Diagnostic::error(
        "number-letter",
        span,
        format!("a number followed by a letter in an expression: `{text}`"),
    );
    if name.is_empty() {
        return fault.help("a number is written like `0.5` or `1e3`");
    }
    if quantity::amount(text, "", span).is_ok() {
        return fault.help(format!(
            "numbers in expressions are plain; name the quantity: `let x = {text}`"
        ));
    }
    fault.help(format!("write a product with `*`: `{figure}*{name}`"))
}

/// The operands as a product, for a hint.
fn texts(operands: &[Operand]) -> String {
    let mut text = String::new();
    for (index, operand) in operands.iter().enumerate() {
        if index > 0 {
            text.push(if operand.operator == Operator::Over { '/' } else { '*' });
        }
        text.push_str(&operand.text);
    }
    text
}

/// Two ways of setting the parentheses: `||` first, or the other operators first.
fn parallel_readings(operands: &[Operand]) -> (String, String) {
    let symbol = |operand: &Operand| {
        let sign = if operand.negative { "-" } else { "" };
        match operand.operator {
            Operator::Bars => format!(" || {sign}"),
            Operator::Over => format!("/{sign}"),
            Operator::Times | Operator::Space => format!("*{sign}"),
        }
    };
    let is_bars = |index: usize| operands.get(index).is_some_and(|o| o.operator == Operator::Bars);
    let (mut bars_first, mut bars_last) = (String::new(), String::new());
    for (index, operand) in operands.iter().enumerate() {
        let joined_before = index > 0 && is_bars(index);
        let joined_after = is_bars(index + 1);
        if index > 0 {
            if joined_before {
                bars_first.push_str(" || ");
                bars_last.push_str(" || ");
                if operand.negative {
                    bars_first.push_str("(-");
                }
            } else {
                bars_first.push_str(&symbol(operand));
                bars_last.push_str(&symbol(operand));
            }
        }
        // Parentheses around a run of `||`.
        if joined_after && !joined_before {
            bars_first.push('(');
        }
        let (base, power) = match operand.text.rsplit_once('^') {
            Some((base, power)) if joined_before && !joined_after && !power.contains(')') => {
                (base, format!("^{power}"))
            }
            _ => (operand.text.as_str(), String::new()),
        };
        bars_first.push_str(base);
        if joined_before && operand.negative {
            bars_first.push(')');
        }
        if joined_before && !joined_after {
            bars_first.push(')');
        }
        bars_first.push_str(&power);
        // Parentheses around a run of the other operators.
        let begins = index == 0 || joined_before;
        let ends = joined_after || index + 1 == operands.len();
        let compound = !(begins && ends) || operand.text.contains('^') || operand.negative;
        if begins && compound {
            bars_last.push('(');
            if joined_before && operand.negative {
                bars_last.push('-');
            }
        }
        bars_last.push_str(&operand.text);
        if ends && compound {
            bars_last.push(')');
        }
    }
    (bars_first, bars_last)
}
