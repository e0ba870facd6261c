//! What the names of a file stand for: symbols, or expressions in other names.
//!
//! Definitions are settled in the order of their dependencies, with an explicit stack, so that a
//! chain of ten thousand matched elements is as good as one of two. A value's size and depth are
//! known before it is built, so abbreviations of abbreviations cannot fill the memory.

use super::diagnostic::{Diagnostic, Span};
use super::syntax::{Expression, ExpressionKind};
use crate::circuit::{Number, SymbolId, SymbolRole, Tolerance, Unit, Value};
use num_traits::One;
use rustc_hash::FxHashMap;

/// A value may hold this many nodes.
const LARGEST: usize = 200_000;
/// A value may be nested this deep.
const DEEPEST: usize = 1_000;

/// What a name stands for.
#[derive(Debug)]
pub(crate) struct Definition {
    pub(crate) name: String,
    pub(crate) span: Span,
    pub(crate) role: SymbolRole,
    pub(crate) meaning: Meaning,
    /// The unit where it is known from the class, the device or a `let`.
    pub(crate) unit: Option<Unit>,
    /// How often expressions name it.
    pub(crate) uses: usize,
    /// True for a parameter that nothing declares.
    pub(crate) implicit: bool,
    /// True for what a `let` made.
    pub(crate) by_let: bool,
}

/// A symbol, or an expression in other names.
#[derive(Debug)]
pub(crate) enum Meaning {
    Symbol { nominal: Option<Number>, tolerance: Option<Tolerance> },
    Expression(Expression),
}

/// A settled value; its symbols are numbered by definition.
#[derive(Clone, Debug)]
pub(crate) struct Settled {
    pub(crate) value: Value,
    pub(crate) measure: Measure,
}

/// How large a value is.
#[derive(Clone, Copy, Debug)]
pub(crate) struct Measure {
    size: usize,
    depth: usize,
    pub(crate) holds_s: bool,
}

/// All definitions of a file.
#[derive(Debug, Default)]
pub(crate) struct Definitions {
    pub(crate) list: Vec<Definition>,
    index: FxHashMap<String, usize>,
    /// By definition; `None` for what is broken.
    settled: Vec<Option<Settled>>,
    /// Definitions in the order in which they were settled: each after what it depends on.
    pub(crate) order: Vec<usize>,
}

impl Definitions {
    /// Adds a definition; the caller has made sure that the name is free.
    pub(crate) fn add(&mut self, definition: Definition) -> usize {
        let id = self.list.len();
        self.index.insert(definition.name.clone(), id);
        self.list.push(definition);
        id
    }

    /// The definition of that name.
    pub(crate) fn find(&self, name: &str) -> Option<usize> {
        self.index.get(name).copied()
    }

    /// The settled value of a definition, after [`settle`](Self::settle).
    pub(crate) fn settled(&self, id: usize) -> Option<&Settled> {
        self.settled.get(id)?.as_ref()
    }

    /// Finds the value of every definition. All names must have definitions by now.
    pub(crate) fn settle(&mut self, faults: &mut Vec<Diagnostic>) {
        self.settled = vec![None; self.list.len()];
        let mut state = vec![State::New; self.list.len()];
        for root in 0..self.list.len() {
            // (definition, its dependencies that are still to be visited)
            let mut stack = Vec::new();
            if state[root] == State::New {
                state[root] = State::Open;
                stack.push((root, self.dependencies(root)));
            }
            while let Some((id, rest)) = stack.last_mut() {
                let id = *id;
                let Some(next) = rest.pop() else {
                    self.settled[id] = self.evaluate(id, faults);
                    self.order.push(id);
                    state[id] = State::Done;
                    stack.pop();
                    continue;
                };
                match state[next] {
                    State::Done => {}
                    State::New => {
                        state[next] = State::Open;
                        let dependencies = self.dependencies(next);
                        stack.push((next, dependencies));
                    }
                    State::Open => {
                        let from = stack.iter().position(|(id, _)| *id == next).unwrap_or(0);
                        let mut names: Vec<&str> = stack[from..]
                            .iter()
                            .map(|(id, _)| self.list[*id].name.as_str())
                            .collect();
                        names.push(&self.list[next].name);
                        let shown = if names.len() > 8 {
                            format!("{} > … > {}", names[..6].join(" > "), self.list[next].name)
                        } else {
                            names.join(" > ")
                        };
                        faults.push(
                            Diagnostic::error(
                                "circular",
                                self.list[next].span,
                                format!("`{}` is defined by itself: {shown}", self.list[next].name),
                            )
                            .help("leave one of them without a value, or give it a number"),
                        );
                    }
                }
            }
        }
    }

    fn dependencies(&self, id: usize) -> Vec<usize> {
        let mut found = Vec::new();
        if let Meaning::Expression(expression) = &self.list[id].meaning {
            visit_names(expression, &mut |name, _| found.extend(self.find(name)));
            found.sort_unstable_by(|a, b| b.cmp(a));
            found.dedup();
        }
        found
    }

    fn evaluate(&self, id: usize, faults: &mut Vec<Diagnostic>) -> Option<Settled> {
        match &self.list[id].meaning {
            Meaning::Symbol { .. } => Some(Settled {
                value: Value::Symbol(SymbolId(u32::try_from(id).ok()?)),
                measure: Measure { size: 1, depth: 1, holds_s: false },
            }),
            Meaning::Expression(expression) => self.value(expression, faults),
        }
    }

    /// The value of an expression whose names are settled. `None` if one of them is broken.
    pub(crate) fn value(
        &self,
        expression: &Expression,
        faults: &mut Vec<Diagnostic>,
    ) -> Option<Settled> {
        let measure = self.measure(expression)?;
        if measure.size > LARGEST || measure.depth > DEEPEST {
            faults.push(
                Diagnostic::error(
                    "too-large",
                    expression.span,
                    "the value grows beyond all use once its abbreviations are put in",
                )
                .help("leave a name without a value: it stays a symbol"),
            );
            return None;
        }
        Some(Settled { value: self.build(expression)?, measure })
    }

    fn measure(&self, expression: &Expression) -> Option<Measure> {
        let leaf = Measure { size: 1, depth: 1, holds_s: false };
        let children: &[Expression] = match &expression.kind {
            ExpressionKind::Number(_) => return Some(leaf),
            ExpressionKind::Name(name) if name == "s" => {
                return Some(Measure { holds_s: true, ..leaf });
            }
            ExpressionKind::Name(name) => return Some(self.settled(self.find(name)?)?.measure),
            ExpressionKind::Call(..) => return None,
            ExpressionKind::Sum(list)
            | ExpressionKind::Product(list)
            | ExpressionKind::Parallel(list) => list,
            ExpressionKind::Power(inner, _) | ExpressionKind::Negative(inner) => {
                std::slice::from_ref(inner)
            }
        };
        let mut total = leaf;
        for child in children {
            let measure = self.measure(child)?;
            total.size = total.size.saturating_add(measure.size);
            total.depth = total.depth.max(measure.depth + 1);
            total.holds_s |= measure.holds_s;
        }
        Some(total)
    }

    fn build(&self, expression: &Expression) -> Option<Value> {
        to_value(expression, &mut |name| Some(self.settled(self.find(name)?)?.value.clone()))
    }
}

#[derive(Clone, Copy, PartialEq, Eq)]
enum State {
    New,
    Open,
    Done,
}

/// The value of an expression; `lookup` gives the values of names. `None` where it gives none.
pub(crate) fn to_value(
    expression: &Expression,
    lookup: &mut impl FnMut(&str) -> Option<Value>,
) -> Option<Value> {
    let mut all = |list: &[Expression]| -> Option<Vec<Value>> {
        list.iter().map(|child| to_value(child, lookup)).collect()
    };
    Some(match &expression.kind {
        ExpressionKind::Number(number) => Value::Number(number.clone()),
        ExpressionKind::Name(name) if name == "s" => Value::S,
        ExpressionKind::Name(name) => lookup(name)?,
        ExpressionKind::Call(..) => return None,
        ExpressionKind::Sum(terms) => Value::Sum(all(terms)?),
        ExpressionKind::Product(factors) => Value::Product(all(factors)?),
        ExpressionKind::Parallel(branches) => Value::Parallel(all(branches)?),
        ExpressionKind::Power(base, exponent) => {
            Value::Power(Box::new(to_value(base, lookup)?), *exponent)
        }
        ExpressionKind::Negative(inner) => Value::Negative(Box::new(to_value(inner, lookup)?)),
    })
}

/// Calls `visit` for every name and its place, `s` excepted, in the order of the text.
pub(crate) fn visit_names(expression: &Expression, visit: &mut impl FnMut(&str, Span)) {
    match &expression.kind {
        ExpressionKind::Number(_) | ExpressionKind::Call(..) => {}
        ExpressionKind::Name(name) if name == "s" => {}
        ExpressionKind::Name(name) => visit(name, expression.span),
        ExpressionKind::Sum(list)
        | ExpressionKind::Product(list)
        | ExpressionKind::Parallel(list) => list.iter().for_each(|child| visit_names(child, visit)),
        ExpressionKind::Power(inner, _) | ExpressionKind::Negative(inner) => {
            visit_names(inner, visit);
        }
    }
}

/// The first call in an expression.
pub(crate) fn find_call(expression: &Expression) -> Option<&Expression> {
    match &expression.kind {
        ExpressionKind::Call(..) => Some(expression),
        ExpressionKind::Number(_) | ExpressionKind::Name(_) => None,
        ExpressionKind::Sum(list)
        | ExpressionKind::Product(list)
        | ExpressionKind::Parallel(list) => list.iter().find_map(find_call),
        ExpressionKind::Power(inner, _) | ExpressionKind::Negative(inner) => find_call(inner),
    }
}

/// The number 1 at a place.
pub(crate) fn one(span: Span) -> Expression {
    Expression { kind: ExpressionKind::Number(Number::one()), span }
}
