//! The syntax tree: what was typed, with the place of everything.
//!
//! Names are in ASCII (`β` has become `beta`), numbers are exact, nothing is resolved.
//! The depth of an expression is bounded by the parser, so recursion over it is safe.

use super::diagnostic::Span;
use crate::circuit::{Number, Tolerance, Unit};

/// A name and its place.
#[derive(Clone, Debug, PartialEq, Eq)]
pub(crate) struct Name {
    pub(crate) text: String,
    pub(crate) span: Span,
}

/// One logical line.
#[derive(Debug)]
pub(crate) struct Statement {
    pub(crate) kind: StatementKind,
    pub(crate) span: Span,
    /// For a line of a block: where the block is used. Such a line may hold dotted names.
    pub(crate) used: Option<Span>,
}

#[derive(Debug)]
pub(crate) enum StatementKind {
    Title(String),
    /// Nodes and elements in turn, as written: which is which is not yet checked.
    Walk(Vec<Step>),
    Device(Device),
    Ask(Query),
    Claim(Box<ClaimDraft>),
    Let(Name, Option<Box<Content>>),
    Limit(Name, LimitPoint),
    Band(Box<(Quantity, Quantity)>),
    Temperature(Box<Quantity>),
    BlockStart(Block),
    BlockEnd,
    Use(Device),
    /// The name of a block that has been put in.
    Instance(Name),
}

/// A claim before its names are known.
#[derive(Debug)]
pub(crate) struct ClaimDraft {
    pub(crate) name: Name,
    /// None for `=`; the largest relative deviation for `~` and `≈`.
    pub(crate) within: Option<Number>,
    /// None where it is LaTeX, which can be read only when the names are known.
    pub(crate) expression: Option<Expression>,
    /// Where the formula stands.
    pub(crate) span: Span,
}

/// Where a limit goes.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(crate) enum LimitPoint {
    Zero,
    Infinity,
}

/// The head of a block's definition.
#[derive(Debug)]
pub(crate) struct Block {
    pub(crate) name: Name,
    pub(crate) terminals: Vec<Name>,
    /// With their defaults.
    pub(crate) parameters: Vec<(Name, Option<Content>)>,
}

/// What stands between two `>`: one node, or elements joined by `||`.
#[derive(Clone, Debug)]
pub(crate) struct Step {
    pub(crate) parts: Vec<Part>,
    pub(crate) span: Span,
}

/// `in`, `R1`, `voltage Vin`, `R1 = 10 kΩ`.
#[derive(Clone, Debug)]
pub(crate) struct Part {
    /// One word, or a class word and a name.
    pub(crate) words: Vec<Name>,
    pub(crate) value: Option<Content>,
    pub(crate) span: Span,
}

/// `KIND NAME: item, item`; also `use BLOCK NAME: item, item`.
#[derive(Clone, Debug)]
pub(crate) struct Device {
    pub(crate) kind: Name,
    pub(crate) name: Name,
    pub(crate) items: Vec<Item>,
}

#[derive(Clone, Debug)]
pub(crate) enum Item {
    /// `base b`, `primary a b`, or a bare parameter `gm`.
    Role(Vec<Name>),
    /// `gain = A0`.
    Binding(Name, Content),
    /// `at 1 mA`.
    Bias(Quantity),
}

/// What stands after `=`.
#[derive(Clone, Debug)]
pub(crate) enum Content {
    Quantity(Quantity),
    Expression(Expression),
}

/// A number with an optional unit and tolerance, in SI units.
#[derive(Clone, Debug)]
pub(crate) struct Quantity {
    pub(crate) value: Number,
    /// None where no unit was written.
    pub(crate) unit: Option<Unit>,
    /// About the value.
    pub(crate) tolerance: Option<Tolerance>,
    pub(crate) span: Span,
}

/// A query, and what drives it.
#[derive(Debug)]
pub(crate) struct Query {
    pub(crate) name: Name,
    pub(crate) expression: Expression,
    pub(crate) from: Option<Name>,
}

/// An expression; chains are flat, as in [`crate::circuit::Value`].
#[derive(Clone, Debug)]
pub(crate) struct Expression {
    pub(crate) kind: ExpressionKind,
    pub(crate) span: Span,
}

#[derive(Clone, Debug)]
pub(crate) enum ExpressionKind {
    Number(Number),
    Name(String),
    Call(Name, Vec<Argument>),
    Sum(Vec<Expression>),
    Product(Vec<Expression>),
    Power(Box<Expression>, i32),
    Negative(Box<Expression>),
    Parallel(Vec<Expression>),
}

/// What stands between the commas of a call.
#[derive(Clone, Debug)]
pub(crate) struct Argument {
    /// The names, when it is nothing but names (`a`, `a b`).
    pub(crate) names: Vec<Name>,
    /// What it is as a value, where a value may stand.
    pub(crate) value: Option<Box<Content>>,
    /// With even spaces.
    pub(crate) text: String,
    pub(crate) span: Span,
}
