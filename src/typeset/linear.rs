//! The linear form: a formula as marks in reading order, with parentheses where they are needed.
//!
//! Precedence from weak to strong: `+ -`, unary `-`, `||`, `* /`, `^`; `-s^2` is −(s²) and `a/b/c`
//! is (a/b)/c. An operand of `||` is a name, a number or a parenthesis, and beside `*`, `/`, `^` a
//! parallel stands in parentheses. The marks keep their own stack of what is pending, so they come
//! one by one in linear time, and depth costs no native stack.

use num_rational::BigRational;

use super::number;
use super::{Formula, Letter, View};

/// Which text is written.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Dialect {
    /// For any program: identifiers, integers and `+ - * / ^ ( )` only. A decimal is a fraction,
    /// `a || b` is written out.
    Expression,
    /// The circuit language: names as in the source, decimals, `||`.
    Language,
}

/// A piece of the linear form.
#[derive(Clone, Copy)]
pub(crate) enum Mark<'a> {
    Number(&'a BigRational),
    One,
    Letter(Letter),
    Open,
    Close,
    /// Between two terms.
    Plus,
    /// Between two terms.
    Minus,
    /// Before the first term.
    Negative,
    Times,
    Over,
    Parallel,
    Exponent(u32),
}

/// How strongly the written form holds together.
#[derive(Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub(crate) enum Binding {
    Sum,
    Parallel,
    Product,
    Power,
    Atom,
}

enum Pending<'a> {
    Mark(Mark<'a>),
    /// A formula, in parentheses when it binds more weakly than that.
    Formula(&'a Formula, Binding),
}

/// The marks of a formula, in reading order.
pub(crate) struct Marks<'a> {
    dialect: Dialect,
    pending: Vec<Pending<'a>>,
    /// The parts of one operation in reading order, before they become pending in reverse.
    parts: Vec<Pending<'a>>,
}

impl<'a> Marks<'a> {
    /// The formula, in parentheses when it binds more weakly than `least`.
    pub(crate) fn new(formula: &'a Formula, least: Binding, dialect: Dialect) -> Self {
        Self { dialect, pending: vec![Pending::Formula(formula, least)], parts: Vec::new() }
    }
}

impl<'a> Iterator for Marks<'a> {
    type Item = Mark<'a>;

    fn next(&mut self) -> Option<Mark<'a>> {
        loop {
            let (formula, least) = match self.pending.pop()? {
                Pending::Mark(mark) => return Some(mark),
                Pending::Formula(formula, least) => (formula, least),
            };
            let parenthesised = binding(formula, self.dialect) < least;
            if parenthesised {
                self.pending.push(Pending::Mark(Mark::Close));
            }
            split(formula, self.dialect, &mut self.parts);
            self.pending.extend(self.parts.drain(..).rev());
            if parenthesised {
                return Some(Mark::Open);
            }
        }
    }
}

/// How strongly the formula holds together in that dialect.
pub(crate) fn binding(formula: &Formula, dialect: Dialect) -> Binding {
    match formula.view() {
        View::Letter(_) => Binding::Atom,
        View::Number(value) if value.is_integer() => Binding::Atom,
        View::Number(value) if dialect == Dialect::Language && number::is_short(value) => {
            Binding::Atom
        }
        View::Number(_) | View::Product(_) | View::Quotient(..) => Binding::Product,
        View::Power(..) => Binding::Power,
        View::Sum(_) | View::Negative(_) => Binding::Sum,
        View::Parallel(_) => match dialect {
            Dialect::Expression => Binding::Product,
            Dialect::Language => Binding::Parallel,
        },
    }
}

/// How strongly a factor must hold together. `a/b*c` is (a/b)*c, but readers take it for a/(b*c):
/// a quotient that is not the last factor gets parentheses. A leading number does not need them.
pub(crate) fn factor_binding(factor: &Formula, last: bool) -> Binding {
    let number = matches!(factor.view(), View::Number(_));
    if last || number { Binding::Product } else { Binding::Power }
}

/// The sign of a term of a sum, and what follows it.
pub(crate) fn signed(term: &Formula, first: bool) -> (Option<Mark<'static>>, &Formula) {
    match (term.view(), first) {
        (View::Negative(term), true) => (Some(Mark::Negative), term),
        (View::Negative(term), false) => (Some(Mark::Minus), term),
        (_, true) => (None, term),
        (_, false) => (Some(Mark::Plus), term),
    }
}

/// The parts of an operation, in reading order.
fn split<'a>(formula: &'a Formula, dialect: Dialect, parts: &mut Vec<Pending<'a>>) {
    use Pending::{Formula as Part, Mark as Sign};
    match formula.view() {
        View::Number(value) => parts.push(Sign(Mark::Number(value))),
        View::Letter(letter) => parts.push(Sign(Mark::Letter(letter))),
        View::Sum(terms) => {
            for (index, term) in terms.iter().enumerate() {
                let (sign, term) = signed(term, index == 0);
                parts.extend(sign.map(Sign));
                parts.push(Part(term, Binding::Parallel));
            }
        }
        View::Negative(operand) => {
            parts.extend([Sign(Mark::Negative), Part(operand, Binding::Parallel)]);
        }
        View::Product(factors) => {
            for (index, factor) in factors.iter().enumerate() {
                let last = index + 1 == factors.len();
                match factor.view() {
                    // `a/b` rather than `a*1/b`.
                    View::Quotient(above, below) if last && above.is_one() => {
                        parts.extend([Sign(Mark::Over), Part(below, Binding::Power)]);
                        continue;
                    }
                    _ if index > 0 => parts.push(Sign(Mark::Times)),
                    _ => {}
                }
                parts.push(Part(factor, factor_binding(factor, last)));
            }
        }
        View::Quotient(above, below) => parts.extend([
            Part(above, Binding::Product),
            Sign(Mark::Over),
            Part(below, Binding::Power),
        ]),
        View::Power(base, exponent) => {
            parts.extend([Part(base, Binding::Atom), Sign(Mark::Exponent(exponent))]);
        }
        View::Parallel(operands) => match dialect {
            Dialect::Language => {
                for (index, operand) in operands.iter().enumerate() {
                    if index > 0 {
                        parts.push(Sign(Mark::Parallel));
                    }
                    parts.push(Part(operand, Binding::Atom));
                }
            }
            Dialect::Expression => write_out_parallel(operands, parts),
        },
    }
}

/// Two names: a·b/(a + b). Else 1/(1/a + 1/b + …), which writes each operand only once.
fn write_out_parallel<'a>(operands: &'a [Formula], parts: &mut Vec<Pending<'a>>) {
    use Pending::{Formula as Part, Mark as Sign};
    let is_letter = |formula: &Formula| matches!(formula.view(), View::Letter(_));
    match operands {
        [a, b] if is_letter(a) && is_letter(b) => parts.extend([
            Part(a, Binding::Atom),
            Sign(Mark::Times),
            Part(b, Binding::Atom),
            Sign(Mark::Over),
            Sign(Mark::Open),
            Part(a, Binding::Atom),
            Sign(Mark::Plus),
            Part(b, Binding::Atom),
            Sign(Mark::Close),
        ]),
        _ => {
            parts.extend([Sign(Mark::One), Sign(Mark::Over), Sign(Mark::Open)]);
            for (index, operand) in operands.iter().enumerate() {
                if index > 0 {
                    parts.push(Sign(Mark::Plus));
                }
                parts.extend([Sign(Mark::One), Sign(Mark::Over), Part(operand, Binding::Power)]);
            }
            parts.push(Sign(Mark::Close));
        }
    }
}
