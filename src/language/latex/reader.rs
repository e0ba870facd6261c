//! From the tokens of a LaTeX formula to its tree.

use pest::iterators::Pair;

use super::names::{Meaning, Name, flattened, greek_name};
use super::{Context, Rule};
use crate::circuit::Number;
use crate::language::diagnostic::{Diagnostic, Span};
use crate::language::names::nearest;
use crate::language::quantity;
use crate::language::syntax::{self, Argument, Content, Expression, ExpressionKind};

/// Powers beyond this are refused, as in expressions.
const LARGEST_POWER: i32 = 1000;

type Read<T> = Result<T, Box<Diagnostic>>;

pub(super) struct Reader<'a> {
    pub(super) context: &'a Context<'a>,
    pub(super) offset: usize,
}

/// What stands between two factors.
#[derive(Clone, Copy, PartialEq, Eq)]
enum Join {
    /// Nothing, or a space.
    Beside,
    /// A thin space.
    Thin,
    Times,
    Over,
    Bars,
}

/// A factor with what stands before it; `parts` of one token are several where `sRC` is a product.
struct Operand {
    join: Join,
    parts: Vec<Expression>,
    text: String,
    is_number: bool,
}

impl Operand {
    fn whole(&self) -> Expression {
        product(self.parts.clone())
    }
}

impl Reader<'_> {
    fn span(&self, pair: &Pair<'_, Rule>) -> Span {
        let span = pair.as_span();
        let length = span.as_str().trim_end().len();
        Span { start: self.offset + span.start(), end: self.offset + span.start() + length }
    }

    pub(super) fn sum(&self, pair: Pair<'_, Rule>) -> Read<Expression> {
        let span = self.span(&pair);
        let mut terms = Vec::new();
        let mut negative = false;
        for token in pair.into_inner() {
            match token.as_rule() {
                Rule::minus => negative = !negative,
                Rule::term => {
                    let term = self.term(token)?;
                    let place = term.span;
                    terms.push(if std::mem::take(&mut negative) {
                        Expression { kind: ExpressionKind::Negative(Box::new(term)), span: place }
                    } else {
                        term
                    });
                }
                _ => {}
            }
        }
        Ok(match terms.len() {
            1 => terms.remove(0),
            _ => Expression { kind: ExpressionKind::Sum(terms), span },
        })
    }

    fn term(&self, pair: Pair<'_, Rule>) -> Read<Expression> {
        let span = self.span(&pair);
        let mut operands: Vec<Operand> = Vec::new();
        let mut join = Join::Beside;
        for token in pair.into_inner() {
            let place = self.span(&token);
            let next = match token.as_rule() {
                Rule::times => Join::Times,
                Rule::over => Join::Over,
                Rule::bars => Join::Bars,
                Rule::thin if join == Join::Beside => Join::Thin,
                Rule::thin => join,
                Rule::factor => {
                    let operand = self.factor(token, join)?;
                    if operand.is_number && !operands.is_empty() && join == Join::Beside {
                        return fault(place, "a number directly behind a factor", |fault| {
                            fault.help("put `\\cdot` before it, or braces around a subscript of several figures: `C_{12}`")
                        });
                    }
                    operands.push(operand);
                    Join::Beside
                }
                _ => join,
            };
            let doubled = |join: Join| !matches!(join, Join::Beside | Join::Thin);
            if doubled(join) && doubled(next) && operands.last().is_some() && next != join {
                return fault(place, "two operators in a row", |fault| fault);
            }
            join = next;
        }
        if join != Join::Beside && join != Join::Thin {
            return fault(span, "an operator without a factor behind it", |fault| fault);
        }
        if operands.iter().any(|operand| operand.join == Join::Bars) {
            return self.parallel(&operands, span);
        }
        self.refuse_product_below_slash(&operands, span)?;
        Ok(self.product(operands, span))
    }

    /// Factors joined by multiplication and division.
    fn product(&self, operands: Vec<Operand>, span: Span) -> Expression {
        let mut factors: Vec<Expression> = Vec::new();
        for operand in operands {
            if operand.join == Join::Over {
                factors.push(reciprocal(operand.whole()));
            } else {
                factors.extend(operand.parts);
            }
        }
        Expression { span, ..product(with_imaginary_axis(factors)) }
    }

    /// `1/sC` and `a/b c` have two readings.
    fn refuse_product_below_slash(&self, operands: &[Operand], span: Span) -> Read<()> {
        let Some(over) = operands.iter().position(|operand| operand.join == Join::Over) else {
            return Ok(());
        };
        let after = operands.get(over + 1..).unwrap_or_default();
        let behind = after.iter().any(|o| matches!(o.join, Join::Beside | Join::Thin));
        let inside = operands[over..].iter().any(|o| o.join == Join::Over && o.parts.len() > 1);
        if !behind && !inside {
            return Ok(());
        }
        let text = |operands: &[Operand]| {
            operands.iter().map(|o| o.text.as_str()).collect::<Vec<_>>().join(" ")
        };
        let above = text(&operands[..over]);
        let below = text(&operands[over..]);
        fault(span, "a product after `/` has two readings", |fault| {
            fault.help(format!(
                "write `\\frac{{{above}}}{{{below}}}`, or `\\frac` with only the first factor below and the rest behind it"
            ))
        })
    }

    /// Factors some of which are in parallel: products are the operands, or only what stands beside the bars.
    fn parallel(&self, operands: &[Operand], span: Span) -> Read<Expression> {
        let mut groups: Vec<Vec<&Operand>> = Vec::new();
        for operand in operands {
            match groups.last_mut() {
                Some(group) if operand.join != Join::Bars => group.push(operand),
                _ => groups.push(vec![operand]),
            }
        }
        let products_first = || {
            let sides: Vec<Expression> =
                groups.iter().map(|group| self.group(group, span)).collect();
            Expression { kind: ExpressionKind::Parallel(sides), span }
        };
        let bars_first = || {
            let mut factors: Vec<Expression> = Vec::new();
            let last = groups.len() - 1;
            let mut sides = Vec::new();
            let mut behind = Vec::new();
            for (index, group) in groups.iter().enumerate() {
                // The last of the first group, all of those between, the first of the last.
                let (before, own): (&[&Operand], &[&Operand]) = match index {
                    0 => group.split_at(group.len() - 1),
                    _ if index == last => (&[], &group[..1]),
                    _ => (&[], group),
                };
                factors.extend(before.iter().map(|operand| self.group(&[*operand], span)));
                sides.push(self.group(own, span));
                if index == last {
                    behind.extend(group[1..].iter().map(|operand| self.group(&[*operand], span)));
                }
            }
            factors.push(Expression { kind: ExpressionKind::Parallel(sides), span });
            factors.extend(behind);
            Expression { span, ..product(factors) }
        };
        // Letters that touch, and thin spaces, bind more tightly than the bars.
        let is_tight =
            groups.iter().all(|group| group[1..].iter().all(|operand| operand.join == Join::Thin));
        if is_tight {
            return Ok(products_first());
        }
        let (first, second) = (products_first(), bars_first());
        let fits = |expression: &Expression| (self.context.unit)(expression).is_ok();
        match (fits(&first), fits(&second)) {
            (true, false) => Ok(first),
            (false, true) => Ok(second),
            _ => fault(span, "`\\parallel` beside a product has two readings", |fault| {
                fault.help("put what is in parallel in parentheses: `g_m (R_1 \\parallel R_2)` or `(g_m R_1) \\parallel R_2`")
            }),
        }
    }

    fn group(&self, operands: &[&Operand], span: Span) -> Expression {
        let mut factors = Vec::new();
        for operand in operands {
            match operand.join {
                Join::Over => factors.push(reciprocal(operand.whole())),
                _ => factors.extend(operand.parts.clone()),
            }
        }
        Expression { span, ..product(with_imaginary_axis(factors)) }
    }

    fn factor(&self, pair: Pair<'_, Rule>, join: Join) -> Read<Operand> {
        let span = self.span(&pair);
        let text = pair.as_str().trim().to_owned();
        let mut inner = pair.into_inner();
        let Some(primary) = inner.next() else { return fault(span, "nothing here", |f| f) };
        let is_number = primary.as_rule() == Rule::number;
        let mut parts = self.primary(primary)?;
        if let Some(exponent) = inner.next() {
            let place = self.span(&exponent);
            let digits: String =
                exponent.as_str().chars().filter(|c| c.is_ascii_digit() || *c == '-').collect();
            let power = digits.parse::<i32>().ok().filter(|power| power.abs() <= LARGEST_POWER);
            let Some(power) = power else {
                return fault(place, "a power is a small integer", |fault| fault);
            };
            // In `sC^2` the power belongs to the last name.
            if let Some(last) = parts.pop() {
                parts.push(match power {
                    1 => last,
                    _ => Expression { kind: ExpressionKind::Power(Box::new(last), power), span },
                });
            }
        }
        Ok(Operand { join, parts, text, is_number })
    }

    fn primary(&self, pair: Pair<'_, Rule>) -> Read<Vec<Expression>> {
        let span = self.span(&pair);
        let one = |kind| Ok(vec![Expression { kind, span }]);
        match pair.as_rule() {
            Rule::number | Rule::digit => match quantity::decimal(pair.as_str().trim(), span) {
                Ok(number) => one(ExpressionKind::Number(number)),
                Err(fault) => Err(Box::new(fault)),
            },
            Rule::fraction => {
                let mut arguments = pair.into_inner().filter(|p| p.as_rule() == Rule::argument);
                let (above, below) = (arguments.next(), arguments.next());
                let (Some(above), Some(below)) = (above, below) else {
                    return fault(span, "a fraction needs two arguments", |fault| fault);
                };
                let (above, below) = (self.argument(above)?, self.argument(below)?);
                if matches!(&below.kind, ExpressionKind::Number(n) if *n == Number::default()) {
                    return Err(Box::new(Diagnostic::error(
                        "zero-divisor",
                        below.span,
                        "a division by zero",
                    )));
                }
                one(ExpressionKind::Product(vec![above, reciprocal(below)]))
            }
            Rule::root => {
                let Some(argument) = pair.into_inner().next() else {
                    return fault(span, "a root needs an argument", |fault| fault);
                };
                let text = argument.as_str().to_owned();
                let value = Box::new(Content::Expression(self.argument(argument)?));
                let argument = Argument { names: Vec::new(), value: Some(value), text, span };
                let name = syntax::Name { text: "sqrt".to_owned(), span };
                one(ExpressionKind::Call(name, vec![argument]))
            }
            Rule::group | Rule::braced => {
                let mut inner = pair.into_inner();
                match inner.find(|token| token.as_rule() == Rule::sum) {
                    Some(sum) => Ok(vec![self.sum(sum)?]),
                    None => fault(span, "an empty pair of parentheses", |fault| fault),
                }
            }
            Rule::names | Rule::names_single => self.names(pair),
            _ => fault(span, "this cannot be read", |fault| fault),
        }
    }

    fn argument(&self, pair: Pair<'_, Rule>) -> Read<Expression> {
        let span = self.span(&pair);
        let Some(inner) = pair.into_inner().next() else {
            return fault(span, "an empty argument", |fault| fault);
        };
        match inner.as_rule() {
            Rule::sum => self.sum(inner),
            _ => match inner.into_inner().next() {
                Some(single) => Ok(product(self.primary(single)?)),
                None => fault(span, "an empty argument", |fault| fault),
            },
        }
    }

    /// A chain of words and subscripts: one name or a product of names.
    fn names(&self, pair: Pair<'_, Rule>) -> Read<Vec<Expression>> {
        let mut items: Vec<Item> = Vec::new();
        for token in pair.into_inner() {
            let span = self.span(&token);
            match token.as_rule() {
                Rule::subscript => {
                    let short = token.clone().into_inner().any(|p| p.as_rule() == Rule::short);
                    let text = self.spelt(&token)?;
                    let text = flattened(&text);
                    match items.last_mut() {
                        Some(item) if item.subscript.is_none() => {
                            item.subscript = Some(text);
                            item.short = short;
                            item.text.push_str(token.as_str());
                            item.span = item.span.join(span);
                        }
                        _ => return fault(span, "two subscripts in a row", |fault| fault),
                    }
                }
                Rule::word | Rule::letter => items.push(Item {
                    word: flattened(token.as_str()),
                    splits: true,
                    subscript: None,
                    text: token.as_str().to_owned(),
                    short: false,
                    span,
                }),
                _ => items.push(Item {
                    word: flattened(&self.spelt(&token)?),
                    splits: token.as_str().starts_with("\\mathrm"),
                    subscript: None,
                    text: token.as_str().to_owned(),
                    short: false,
                    span,
                }),
            }
        }
        let mut factors = Vec::new();
        let mut index = 0;
        while index < items.len() {
            let (read, used) = self.item(&items[index..])?;
            factors.extend(read);
            index += used;
        }
        Ok(factors)
    }

    /// The factors of the first item, and how many items they are.
    fn item(&self, items: &[Item]) -> Read<(Vec<Expression>, usize)> {
        let item = &items[0];
        let mut readings: Vec<(Vec<String>, usize)> = Vec::new();
        for names in self.splittings(&item.word, item.subscript.as_deref(), item.splits) {
            readings.push((names, 1));
        }
        // `R_load`: the subscript goes on where no brace ends it.
        if let (true, Some(subscript), Some(next)) = (item.short, &item.subscript, items.get(1))
            && next.splits
            && next.subscript.is_none()
        {
            let longer = format!("{subscript}{}", next.word);
            for names in self.splittings(&item.word, Some(&longer), item.splits) {
                readings.push((names, 2));
            }
            // The reading with the short subscript also needs the rest to be names.
            let rest = self.splittings(&next.word, None, true);
            if rest.is_empty() {
                readings.retain(|(_, used)| *used == 2);
            }
        }
        let span = item.span;
        match readings.as_slice() {
            [(names, used)] => {
                let factor =
                    |name: &String| Expression { kind: ExpressionKind::Name(name.clone()), span };
                Ok((names.iter().map(factor).collect(), *used))
            }
            [] => self.unknown(item),
            [(first, _), (second, _), ..] => {
                let both = [first, second].map(|names| names.join("*"));
                fault(span, "this name has two readings", |fault| {
                    fault.help(format!(
                        "it is `{}` or `{}`: put a space or `\\,` between factors, `\\mathrm{{…}}` around one name",
                        both[0], both[1]
                    ))
                })
            }
        }
    }

    /// The ways in which a word is made of known names; the subscript belongs to the last one.
    fn splittings(&self, word: &str, subscript: Option<&str>, splits: bool) -> Vec<Vec<String>> {
        let whole = Name(format!("{word}{}", subscript.unwrap_or_default()));
        let mut found: Vec<Vec<String>> = Vec::new();
        match self.context.names.meaning(&whole) {
            Meaning::One(name) => found.push(vec![name.to_owned()]),
            Meaning::Several(names) => found.extend(names.iter().map(|name| vec![name.clone()])),
            Meaning::Nothing => {}
        }
        if !splits {
            return found;
        }
        let ends = word.char_indices().map(|(at, _)| at).filter(|&at| at > 0);
        for end in ends {
            let (head, tail) = word.split_at(end);
            if tail.starts_with(|c: char| c.is_ascii_digit()) {
                continue;
            }
            if !self.context.names.is_exact(head) {
                continue;
            }
            let Meaning::One(name) = self.context.names.meaning(&Name(head.to_owned())) else {
                continue;
            };
            for rest in self.splittings(tail, subscript, true) {
                let mut names = vec![name.to_owned()];
                names.extend(rest);
                found.push(names);
                if found.len() > 2 {
                    return found;
                }
            }
        }
        found
    }

    fn unknown<T>(&self, item: &Item) -> Read<T> {
        let whole = format!("{}{}", item.word, item.subscript.as_deref().unwrap_or_default());
        let near = nearest(&whole, self.context.names.known());
        let fault = Diagnostic::error(
            "unknown-name",
            item.span,
            format!("no symbol of this circuit is written `{}`", item.text),
        );
        Err(Box::new(match near {
            Some(near) => fault.help(format!("is it `{near}`?")),
            None => fault,
        }))
    }

    /// The text of a name or a subscript with commands replaced.
    fn spelt(&self, pair: &Pair<'_, Rule>) -> Read<String> {
        Ok(match pair.as_rule() {
            Rule::greek => self.greek(pair)?,
            Rule::font_name | Rule::comma => String::new(),
            Rule::word | Rule::letter | Rule::plain | Rule::plain_part | Rule::short => {
                pair.as_str().to_owned()
            }
            _ => {
                let mut text = String::new();
                for part in pair.clone().into_inner() {
                    text.push_str(&self.spelt(&part)?);
                }
                text
            }
        })
    }

    /// The name of a Greek letter by its command.
    fn greek(&self, pair: &Pair<'_, Rule>) -> Read<String> {
        let command = pair.as_str().trim().trim_start_matches('\\');
        match greek_name(command) {
            Some(name) => Ok(name.to_owned()),
            None => fault(self.span(pair), &format!("`\\{command}` is no name"), |fault| {
                fault.help("names are letters with subscripts, and Greek letters")
            }),
        }
    }
}

/// A word with its subscript.
struct Item {
    word: String,
    /// Whether it may be a product of names.
    splits: bool,
    subscript: Option<String>,
    /// As written.
    text: String,
    /// Whether the subscript is one character without braces.
    short: bool,
    span: Span,
}

fn product(mut factors: Vec<Expression>) -> Expression {
    if factors.len() == 1 {
        return factors.remove(0);
    }
    let span = factors.iter().map(|factor| factor.span).reduce(Span::join).unwrap_or_default();
    Expression { kind: ExpressionKind::Product(factors), span }
}

fn reciprocal(factor: Expression) -> Expression {
    let span = factor.span;
    Expression { kind: ExpressionKind::Power(Box::new(factor), -1), span }
}

/// `j\omega` is `s` on the imaginary axis.
fn with_imaginary_axis(factors: Vec<Expression>) -> Vec<Expression> {
    let is = |factor: &Expression, wanted: &str| matches!(&factor.kind, ExpressionKind::Name(name) if name == wanted);
    let mut found: Vec<Expression> = Vec::with_capacity(factors.len());
    for factor in factors {
        match found.last_mut() {
            Some(last) if is(last, "j") && is(&factor, "omega") => {
                let span = last.span.join(factor.span);
                *last = Expression { kind: ExpressionKind::Name("s".to_owned()), span };
            }
            _ => found.push(factor),
        }
    }
    found
}

fn fault<T>(span: Span, message: &str, help: impl FnOnce(Diagnostic) -> Diagnostic) -> Read<T> {
    Err(Box::new(help(Diagnostic::error("latex", span, message))))
}
