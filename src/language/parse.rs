//! From a logical line to its syntax tree.
//!
//! The kind of line is told by its first two tokens; the grammar rule of that kind reads it, and
//! this module turns the tokens into a tree. Depth is checked before any recursion starts.

use super::diagnostic::{Diagnostic, Span};
use super::expression::ExpressionReader;
use super::fault;
use super::latex;
use super::names::ascii_name;
use super::quantity;
use super::source::{self, LogicalLine, Source};
use super::syntax::{
    Block, ClaimDraft, Content, Device, Item, LimitPoint, Name, Part, Quantity, Query, Statement,
    StatementKind, Step,
};
use crate::circuit::{Number, Tolerance};
use num_traits::Zero;
use pest::Parser;
use pest::iterators::Pair;

/// The pest parser of both grammars.
#[derive(pest_derive::Parser)]
#[grammar = "../grammar/expression.pest"]
#[grammar = "../grammar/circuit.pest"]
pub(crate) struct Grammar;

/// The relative deviation that `~` and `≈` allow where a claim names none, in percent.
const DEFAULT_PERCENT: i64 = 10;

/// Parentheses may be nested this deep.
pub(crate) const DEEPEST: usize = 200;

/// Reads one logical line; what is wrong with it goes into `faults`.
pub(crate) fn statement(
    source: &Source,
    line: &LogicalLine,
    faults: &mut Vec<Diagnostic>,
) -> Option<Statement> {
    let content = &source.text[line.clone()];
    let rule = match line_rule(content) {
        Some(rule) => rule,
        None => {
            faults.push(fault::unknown_line(source, line));
            return None;
        }
    };
    let pair = tokens(source, line, rule, faults)?;
    let mut reader = Reader { source, offset: line.start, faults };
    let kind = reader.statement(pair)?;
    Some(Statement { kind, span: source.span(line.clone()), used: None })
}

/// Runs the grammar on a part of the folded text.
pub(crate) fn tokens<'s>(
    source: &'s Source,
    range: &LogicalLine,
    rule: Rule,
    faults: &mut Vec<Diagnostic>,
) -> Option<Pair<'s, Rule>> {
    let content = &source.text[range.clone()];
    if let Some(position) = too_deep(content) {
        let place = range.start + position;
        faults.push(
            Diagnostic::error(
                "nesting",
                source.span(place..place + 1),
                format!("parentheses nested more than {DEEPEST} deep"),
            )
            .help("name a part with `let` and use the name"),
        );
        return None;
    }
    match Grammar::parse(rule, content) {
        Ok(mut pairs) => pairs.next(),
        Err(error) => {
            faults.push(fault::syntax(source, range, &error));
            None
        }
    }
}

fn too_deep(content: &str) -> Option<usize> {
    let mut depth = 0_usize;
    for (position, byte) in content.bytes().enumerate() {
        match byte {
            b'(' => depth += 1,
            b')' => depth = depth.saturating_sub(1),
            _ => {}
        }
        if depth > DEEPEST {
            return Some(position);
        }
    }
    None
}

fn line_rule(content: &str) -> Option<Rule> {
    if source::is_walk(content) {
        return Some(Rule::walk_line);
    }
    if let Some(keyword) = source::keyword(content) {
        return Some(match keyword {
            "ask" => Rule::ask_line,
            "band" => Rule::band_line,
            "block" => Rule::block_line,
            "circuit" => Rule::title_line,
            "claim" if latex::is_latex(content) => Rule::latex_claim_line,
            "claim" => Rule::claim_line,
            "end" => Rule::end_line,
            "let" => Rule::let_line,
            "limit" => Rule::limit_line,
            "temperature" => Rule::temperature_line,
            _ => Rule::use_line,
        });
    }
    let first = content.split([' ', '\t', '\n']).next().unwrap_or(content);
    if source::is_device(content) || super::devices::is_kind(first) {
        return Some(Rule::device_line);
    }
    content.contains('>').then_some(Rule::walk_line)
}

/// Turns tokens into a tree.
pub(crate) struct Reader<'a> {
    pub(crate) source: &'a Source,
    /// Where the tokens' text begins in the folded text.
    pub(crate) offset: usize,
    pub(crate) faults: &'a mut Vec<Diagnostic>,
}

impl Reader<'_> {
    pub(crate) fn span(&self, pair: &Pair<'_, Rule>) -> Span {
        let span = pair.as_span();
        let trimmed = span.as_str().trim_end();
        let start = self.offset + span.start();
        self.source.span(start..start + trimmed.len())
    }

    fn name(&self, pair: &Pair<'_, Rule>) -> Name {
        Name { text: ascii_name(pair.as_str()), span: self.span(pair) }
    }

    fn expression(
        &mut self,
        pair: Pair<'_, Rule>,
        space_multiplies: bool,
    ) -> Option<super::syntax::Expression> {
        ExpressionReader { reader: self, space_multiplies }.sum(pair)
    }

    /// A `query_text` token; the query has no name but its own text.
    pub(crate) fn query(&mut self, pair: Pair<'_, Rule>) -> Option<Query> {
        let span = self.span(&pair);
        let name = Name { text: pair.as_str().trim().to_owned(), span };
        let mut inner = pair.into_inner();
        let expression = self.expression(inner.next()?, true)?;
        let from = inner.find(|token| token.as_rule() == Rule::name);
        let from = from.map(|token| self.name(&token));
        Some(Query { name, expression, from })
    }

    /// A `band_text` token.
    pub(crate) fn band(&mut self, pair: Pair<'_, Rule>) -> Option<(Quantity, Quantity)> {
        let mut ends = pair.into_inner().filter(|token| token.as_rule() == Rule::quantity);
        let from = self.quantity(ends.next()?)?;
        Some((from, self.quantity(ends.next()?)?))
    }

    /// The tokens of a limit: a name, and `0` or `infinity`.
    pub(crate) fn limit<'i>(
        &self,
        tokens: impl Iterator<Item = Pair<'i, Rule>>,
    ) -> Option<(Name, LimitPoint)> {
        let mut tokens = tokens.filter(|token| token.as_rule() != Rule::to);
        let name = self.name(&tokens.next()?);
        let infinite = tokens.next()?.as_rule() == Rule::infinity;
        Some((name, if infinite { LimitPoint::Infinity } else { LimitPoint::Zero }))
    }

    /// The tokens of a claim behind its name: relation, formula, tolerance.
    pub(crate) fn claim<'i>(
        &mut self,
        name: Name,
        tokens: impl Iterator<Item = Pair<'i, Rule>>,
    ) -> Option<ClaimDraft> {
        let (mut expression, mut place) = (None, None);
        let (mut about, mut within) = (None, None);
        for token in tokens {
            let span = self.span(&token);
            match token.as_rule() {
                Rule::about => about = Some(span),
                Rule::sum => {
                    place = Some(span);
                    expression = Some(self.expression(token, true)?);
                }
                Rule::latex_formula => place = Some(span),
                Rule::within => within = Some((self.within(token)?, span)),
                _ => {}
            }
        }
        let within = match (about, within) {
            (None, None) => None,
            (None, Some((_, span))) => {
                self.faults.push(
                    Diagnostic::error("within", span, "`=` has no tolerance")
                        .help("write `~` in the place of `=`"),
                );
                return None;
            }
            (Some(_), Some((within, _))) => Some(within),
            (Some(_), None) => Some(Number::new(DEFAULT_PERCENT.into(), 100.into())),
        };
        Some(ClaimDraft { name, within, expression, span: place? })
    }

    /// `within 5 %`
    fn within(&mut self, pair: Pair<'_, Rule>) -> Option<Number> {
        let token = pair.into_inner().find(|token| token.as_rule() == Rule::number)?;
        let span = self.span(&token);
        match quantity::decimal(token.as_str(), span) {
            Ok(percent) if percent > Number::zero() => {
                Some(percent / Number::from_integer(100.into()))
            }
            Ok(_) => {
                self.faults.push(Diagnostic::error("within", span, "a tolerance is above 0 %"));
                None
            }
            Err(fault) => {
                self.faults.push(fault);
                None
            }
        }
    }

    /// An expression or a quantity inside a call, read again as a value.
    pub(crate) fn value_again(&mut self, pair: &Pair<'_, Rule>) -> Option<Content> {
        let range = pair.as_span();
        let start = self.offset + range.start();
        let end = start + range.as_str().trim_end().len();
        let again = tokens(self.source, &(start..end), Rule::value, self.faults)?;
        let mut reader = Reader { source: self.source, offset: start, faults: self.faults };
        reader.value(again, true)
    }

    /// An `expression_text` token.
    pub(crate) fn whole_expression(
        &mut self,
        pair: Pair<'_, Rule>,
    ) -> Option<super::syntax::Expression> {
        let sum = pair.into_inner().next()?;
        self.expression(sum, true)
    }

    fn statement(&mut self, line: Pair<'_, Rule>) -> Option<StatementKind> {
        let rule = line.as_rule();
        let mut inner = line.into_inner().filter(|pair| {
            !matches!(
                pair.as_rule(),
                Rule::EOI
                    | Rule::arrow
                    | Rule::colon
                    | Rule::comma
                    | Rule::equals
                    | Rule::keyword
                    | Rule::to
                    | Rule::from
                    | Rule::open
                    | Rule::close
            )
        });
        match rule {
            Rule::title_line => {
                let title = inner.next()?.into_inner().find(|p| p.as_rule() == Rule::title)?;
                Some(StatementKind::Title(title.as_str().to_owned()))
            }
            Rule::walk_line => {
                let steps: Vec<_> = inner.map(|pair| self.step(pair)).collect();
                Some(StatementKind::Walk(steps.into_iter().collect::<Option<_>>()?))
            }
            Rule::device_line => Some(StatementKind::Device(self.device(inner)?)),
            Rule::use_line => Some(StatementKind::Use(self.device(inner)?)),
            Rule::ask_line => {
                let name = self.name(&inner.next()?);
                let expression = self.expression(inner.next()?, true)?;
                let from = inner.next().map(|pair| self.name(&pair));
                Some(StatementKind::Ask(Query { name, expression, from }))
            }
            Rule::claim_line | Rule::latex_claim_line => {
                let name = self.name(&inner.next()?);
                Some(StatementKind::Claim(Box::new(self.claim(name, inner)?)))
            }
            Rule::let_line => {
                let name = self.name(&inner.next()?);
                let value = match inner.next() {
                    Some(pair) => Some(Box::new(self.let_value(pair)?)),
                    None => None,
                };
                Some(StatementKind::Let(name, value))
            }
            Rule::limit_line => {
                let (name, point) = self.limit(inner)?;
                Some(StatementKind::Limit(name, point))
            }
            Rule::band_line => {
                let from = self.quantity(inner.next()?)?;
                Some(StatementKind::Band(Box::new((from, self.quantity(inner.next()?)?))))
            }
            Rule::temperature_line => {
                let pair = inner.next()?;
                let span = self.span(&pair);
                let (figure, word) = figure_and_word(&pair);
                match quantity::temperature(&figure, &word, span) {
                    Ok(value) => Some(StatementKind::Temperature(Box::new(Quantity {
                        value,
                        unit: None,
                        tolerance: None,
                        span,
                    }))),
                    Err(fault) => {
                        self.faults.push(fault);
                        None
                    }
                }
            }
            Rule::block_line => {
                let name = self.name(&inner.next()?);
                let mut block = Block { name, terminals: Vec::new(), parameters: Vec::new() };
                for pair in inner {
                    let rule = pair.as_rule();
                    for part in pair.into_inner() {
                        match (rule, part.as_rule()) {
                            (Rule::names, Rule::name) => block.terminals.push(self.name(&part)),
                            (Rule::parameters, Rule::parameter) => {
                                block.parameters.push(self.parameter(part)?);
                            }
                            _ => {}
                        }
                    }
                }
                Some(StatementKind::BlockStart(block))
            }
            Rule::end_line => Some(StatementKind::BlockEnd),
            _ => None,
        }
    }

    /// A parameter of a block, with its default.
    fn parameter(&mut self, pair: Pair<'_, Rule>) -> Option<(Name, Option<Content>)> {
        let mut inner = pair.into_inner();
        let name = self.name(&inner.next()?);
        let value = match inner.find(|token| token.as_rule() == Rule::block_value) {
            Some(value) => Some(self.value(value, false)?),
            None => None,
        };
        Some((name, value))
    }

    fn step(&mut self, pair: Pair<'_, Rule>) -> Option<Step> {
        let span = self.span(&pair);
        let parts: Vec<_> = pair
            .into_inner()
            .filter(|p| p.as_rule() == Rule::part)
            .map(|part| self.part(part))
            .collect();
        Some(Step { parts: parts.into_iter().collect::<Option<_>>()?, span })
    }

    fn part(&mut self, pair: Pair<'_, Rule>) -> Option<Part> {
        let span = self.span(&pair);
        let mut words = Vec::new();
        let mut value = None;
        for token in pair.into_inner() {
            match token.as_rule() {
                Rule::node => words.push(self.name(&token)),
                Rule::walk_value => value = Some(self.value(token, false)?),
                _ => {}
            }
        }
        Some(Part { words, value, span })
    }

    fn device<'i>(&mut self, mut inner: impl Iterator<Item = Pair<'i, Rule>>) -> Option<Device> {
        let kind = self.name(&inner.next()?);
        let name = self.name(&inner.next()?);
        let mut items = Vec::new();
        let mut sound = true;
        for pair in inner {
            let Some(item) = pair.into_inner().next() else { continue };
            let read = match item.as_rule() {
                Rule::role => Some(Item::Role(item.into_inner().map(|p| self.name(&p)).collect())),
                Rule::binding => self.binding(item),
                Rule::bias => {
                    let quantity = item.into_inner().find(|p| p.as_rule() == Rule::quantity)?;
                    self.quantity(quantity).map(Item::Bias)
                }
                _ => None,
            };
            sound &= read.is_some();
            items.extend(read);
        }
        sound.then_some(Device { kind, name, items })
    }

    fn binding(&mut self, pair: Pair<'_, Rule>) -> Option<Item> {
        let mut inner = pair.into_inner().filter(|p| p.as_rule() != Rule::equals);
        let name = self.name(&inner.next()?);
        Some(Item::Binding(name, self.value(inner.next()?, false)?))
    }

    /// `2 R` is a product in a `let`, `2 k` is a quantity.
    fn let_value(&mut self, pair: Pair<'_, Rule>) -> Option<Content> {
        let inner = pair.clone().into_inner().next()?;
        if inner.as_rule() == Rule::quantity {
            let (figure, word) = figure_and_word(&inner);
            let plain_product = quantity::is_plain(&figure)
                && !word.is_empty()
                && !quantity::is_unit_word(&word)
                && !word.to_lowercase().starts_with("meg")
                && !matches!(word.as_str(), "K" | "KOhm" | "Kohm" | "KΩ" | "UF" | "UH");
            if plain_product && word.is_ascii() && inner.as_str().trim_start().contains(' ') {
                let range = pair.as_span();
                let start = self.offset + range.start();
                let end = start + range.as_str().trim_end().len();
                let again = tokens(self.source, &(start..end), Rule::expression_text, self.faults)?;
                let sum = again.into_inner().next()?;
                let mut reader = Reader { source: self.source, offset: start, faults: self.faults };
                return reader.expression(sum, true).map(Content::Expression);
            }
        }
        self.value(pair, true)
    }

    fn value(&mut self, pair: Pair<'_, Rule>, space_multiplies: bool) -> Option<Content> {
        let inner = pair.into_inner().next()?;
        if inner.as_rule() == Rule::quantity {
            self.quantity(inner).map(Content::Quantity)
        } else {
            self.expression(inner, space_multiplies).map(Content::Expression)
        }
    }

    /// A quantity, in SI units.
    pub(crate) fn quantity(&mut self, pair: Pair<'_, Rule>) -> Option<Quantity> {
        match self.read_quantity(pair) {
            Ok(quantity) => Some(quantity),
            Err(fault) => {
                self.faults.push(fault);
                None
            }
        }
    }

    fn read_quantity(&self, pair: Pair<'_, Rule>) -> Result<Quantity, Diagnostic> {
        let whole = self.span(&pair);
        let mut figures = Vec::new();
        let mut word = String::new();
        let mut negative = false;
        let mut tolerance = None;
        let mut span: Option<Span> = None;
        for token in pair.into_inner() {
            let place = self.span(&token);
            match token.as_rule() {
                Rule::figure => figures.push(token.as_str().to_owned()),
                Rule::unit => word.push_str(token.as_str()),
                Rule::minus => negative = true,
                Rule::tolerance => {
                    tolerance = Some(token);
                    continue;
                }
                _ => {}
            }
            span = Some(span.map_or(place, |before| before.join(place)));
        }
        let span = span.unwrap_or(whole);
        if figures.len() > 1 {
            let joined = figures.concat();
            return Err(Diagnostic::error(
                "digit-groups",
                span,
                format!("spaces inside the number `{}`", figures.join(" ")),
            )
            .help(format!("write the digits together: `{joined}`")));
        }
        let figure = figures.pop().unwrap_or_default();
        let (mut value, unit) = quantity::amount(&figure, &word, span)?;
        if negative {
            value = -value;
        }
        let tolerance = match tolerance {
            Some(pair) => Some(self.tolerance(pair, &value, unit)?),
            None => None,
        };
        Ok(Quantity { value, unit, tolerance, span: whole })
    }

    fn tolerance(
        &self,
        pair: Pair<'_, Rule>,
        nominal: &Number,
        unit: Option<crate::circuit::Unit>,
    ) -> Result<Tolerance, Diagnostic> {
        let span = self.span(&pair);
        let mut tokens = pair.into_inner().peekable();
        let both = tokens.peek().is_some_and(|token| token.as_rule() == Rule::plus_minus);
        let mut sign = Number::from(num_bigint::BigInt::from(1));
        let (mut low, mut high) = (Number::zero(), Number::zero());
        let mut text = String::new();
        while let Some(token) = tokens.next() {
            match token.as_rule() {
                Rule::minus => sign = -Number::from(num_bigint::BigInt::from(1)),
                Rule::plus => sign = Number::from(num_bigint::BigInt::from(1)),
                Rule::figure => {
                    let figure = token.as_str();
                    let word: String =
                        std::iter::from_fn(|| tokens.next_if(|next| next.as_rule() == Rule::unit))
                            .map(|next| next.as_str().to_owned())
                            .collect();
                    let percent = tokens.next_if(|next| next.as_rule() == Rule::percent).is_some();
                    let (deviation, own) = quantity::amount(figure, &word, span)?;
                    let deviation = if percent {
                        let hundredth = quantity::power_of_ten(deviation, -2);
                        &hundredth
                            * if nominal < &Number::zero() { -nominal } else { nominal.clone() }
                    } else {
                        if own.is_none() && word.is_empty() {
                            return Err(Diagnostic::error(
                                "tolerance",
                                span,
                                "a tolerance needs a percent sign or a unit",
                            )
                            .help(format!("write `± {figure} %`")));
                        }
                        if own.is_some() && unit.is_some() && own != unit {
                            return Err(Diagnostic::error(
                                "wrong-unit",
                                span,
                                format!("the tolerance is in `{word}`, the value is not"),
                            ));
                        }
                        deviation
                    };
                    let signed = &deviation * &sign;
                    low = low.min(signed.clone());
                    high = high.max(signed);
                    if both {
                        low = -deviation;
                    }
                    if !text.is_empty() {
                        text.push(' ');
                    }
                    if !both {
                        text.push(if sign < Number::zero() { '-' } else { '+' });
                    }
                    text.push_str(figure);
                    if !word.is_empty() || percent {
                        text.push(' ');
                    }
                    text.push_str(if percent { "%" } else { &word });
                }
                _ => {}
            }
        }
        Ok(Tolerance { low, high, text })
    }
}

/// The figures and the unit words of a quantity, joined.
fn figure_and_word(pair: &Pair<'_, Rule>) -> (String, String) {
    let collect = |rule: Rule| -> String {
        let tokens = pair.clone().into_inner().filter(|token| token.as_rule() == rule);
        tokens.map(|token| token.as_str().to_owned()).collect()
    };
    (collect(Rule::figure), collect(Rule::unit))
}
