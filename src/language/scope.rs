//! The names inside a block where it is used: `R` of the use `S1` is `S1.R`.
//!
//! Terminals become the nodes that they are tied to, `ground` stays; other nodes and the block's own
//! elements, devices and parameters get the name of the use before theirs. All other names in
//! expressions are the circuit's.

use super::diagnostic::Diagnostic;
use super::names::is_ground;
use super::syntax::{
    Argument, Content, Device, Expression, ExpressionKind, Item, Name, Part, Statement,
    StatementKind, Step,
};
use rustc_hash::{FxHashMap, FxHashSet};

/// One use of a block.
pub(crate) struct Scope<'b> {
    /// The full name of the use.
    pub(crate) prefix: String,
    /// Terminals and their nodes.
    pub(crate) terminals: FxHashMap<String, String>,
    /// The block's own names.
    pub(crate) own: &'b FxHashSet<String>,
}

impl Scope<'_> {
    /// A name of the block.
    pub(crate) fn name(&self, name: &Name) -> Name {
        Name { text: format!("{}.{}", self.prefix, name.text), span: name.span }
    }

    /// A node of the block.
    pub(crate) fn node(&self, name: &Name) -> Name {
        if is_ground(&name.text) {
            return name.clone();
        }
        match self.terminals.get(&name.text) {
            Some(node) => Name { text: node.clone(), span: name.span },
            None => self.name(name),
        }
    }

    /// A line of the block; `values` are those of parameters that are elements.
    pub(crate) fn statement(
        &self,
        kind: &StatementKind,
        values: &FxHashMap<&str, Option<Content>>,
        faults: &mut Vec<Diagnostic>,
    ) -> StatementKind {
        match kind {
            StatementKind::Walk(steps) => {
                let mut mapped = Vec::with_capacity(steps.len());
                for (index, step) in steps.iter().enumerate() {
                    let parts = step.parts.iter();
                    let parts = if index % 2 == 0 {
                        parts.map(|part| self.node_part(part, faults)).collect()
                    } else {
                        parts.map(|part| self.element(part, values, faults)).collect()
                    };
                    mapped.push(Step { parts, span: step.span });
                }
                StatementKind::Walk(mapped)
            }
            StatementKind::Device(device) => StatementKind::Device(self.device(device, faults)),
            StatementKind::Let(name, value) => {
                refuse_dot(name, faults);
                let value = value.as_ref().map(|value| Box::new(self.content(value)));
                StatementKind::Let(self.name(name), value)
            }
            // Nothing else stands in a block.
            _ => StatementKind::BlockEnd,
        }
    }

    fn node_part(&self, part: &Part, faults: &mut Vec<Diagnostic>) -> Part {
        let node = |name: &Name| {
            refuse_dot(name, faults);
            self.node(name)
        };
        Part {
            words: part.words.iter().map(node).collect(),
            value: part.value.clone(),
            span: part.span,
        }
    }

    fn element(
        &self,
        part: &Part,
        values: &FxHashMap<&str, Option<Content>>,
        faults: &mut Vec<Diagnostic>,
    ) -> Part {
        let mut words = part.words.clone();
        let mut value = part.value.as_ref().map(|value| self.content(value));
        if let Some(name) = words.last_mut()
            && !(part.words.len() == 1 && name.text == "wire")
        {
            refuse_dot(name, faults);
            if let Some(given) = values.get(name.text.as_str()) {
                if value.is_some() {
                    faults.push(
                        Diagnostic::error(
                            "block-parameter",
                            part.span,
                            format!("`{}` is a parameter of the block and has a value", name.text),
                        )
                        .help("put the value into the head of the block, as its default"),
                    );
                }
                value.clone_from(given);
            }
            *name = self.name(name);
        }
        Part { words, value, span: part.span }
    }

    fn device(&self, device: &Device, faults: &mut Vec<Diagnostic>) -> Device {
        let inductors = device.kind.text == "mutual";
        let items = device.items.iter().map(|item| match item {
            Item::Role(words) => {
                let mut words = words.clone();
                for word in words.iter_mut().skip(1) {
                    refuse_dot(word, faults);
                    *word = if inductors { self.name(word) } else { self.node(word) };
                }
                Item::Role(words)
            }
            Item::Binding(name, value) => Item::Binding(name.clone(), self.content(value)),
            Item::Bias(quantity) => Item::Bias(quantity.clone()),
        });
        let items = items.collect();
        refuse_dot(&device.name, faults);
        Device { kind: device.kind.clone(), name: self.name(&device.name), items }
    }

    /// A value with the block's names.
    pub(crate) fn content(&self, content: &Content) -> Content {
        match content {
            Content::Quantity(quantity) => Content::Quantity(quantity.clone()),
            Content::Expression(expression) => Content::Expression(self.expression(expression)),
        }
    }

    fn expression(&self, expression: &Expression) -> Expression {
        let all = |list: &[Expression]| list.iter().map(|part| self.expression(part)).collect();
        let kind = match &expression.kind {
            ExpressionKind::Number(number) => ExpressionKind::Number(number.clone()),
            ExpressionKind::Name(name) => {
                // `Q1.gm` belongs to the block if `Q1` does.
                let owner = name.split('.').next().unwrap_or(name);
                ExpressionKind::Name(if self.own.contains(owner) {
                    format!("{}.{name}", self.prefix)
                } else {
                    name.clone()
                })
            }
            ExpressionKind::Call(callee, arguments) => {
                let arguments = arguments.iter().map(|argument| Argument {
                    names: argument
                        .names
                        .iter()
                        .map(
                            |name| {
                                if callee.text == "I" { self.name(name) } else { self.node(name) }
                            },
                        )
                        .collect(),
                    ..argument.clone()
                });
                ExpressionKind::Call(callee.clone(), arguments.collect())
            }
            ExpressionKind::Sum(list) => ExpressionKind::Sum(all(list)),
            ExpressionKind::Product(list) => ExpressionKind::Product(all(list)),
            ExpressionKind::Parallel(list) => ExpressionKind::Parallel(all(list)),
            ExpressionKind::Power(inner, power) => {
                ExpressionKind::Power(Box::new(self.expression(inner)), *power)
            }
            ExpressionKind::Negative(inner) => {
                ExpressionKind::Negative(Box::new(self.expression(inner)))
            }
        };
        Expression { kind, span: expression.span }
    }
}

/// A dot in a name that is typed inside a block.
fn refuse_dot(name: &Name, faults: &mut Vec<Diagnostic>) {
    if name.text.contains('.') {
        let message = format!("a dot in the name `{}`", name.text);
        faults.push(
            Diagnostic::error("bad-name", name.span, message)
                .help("names in a block have no dot; the use puts its own before them"),
        );
    }
}

/// How many names a line holds, about.
pub(crate) fn names_of(statement: &Statement) -> usize {
    let content = |content: &Content| match content {
        Content::Quantity(_) => 0,
        Content::Expression(expression) => names_in(expression),
    };
    match &statement.kind {
        StatementKind::Walk(steps) => steps
            .iter()
            .flat_map(|step| &step.parts)
            .map(|part| part.words.len() + part.value.as_ref().map_or(0, content))
            .sum(),
        StatementKind::Device(device) | StatementKind::Use(device) => {
            let of_items = device.items.iter().map(|item| match item {
                Item::Role(words) => words.len(),
                Item::Binding(_, value) => 1 + content(value),
                Item::Bias(_) => 1,
            });
            of_items.sum::<usize>() + 1
        }
        StatementKind::Let(_, Some(value)) => 1 + content(value),
        _ => 1,
    }
}

fn names_in(expression: &Expression) -> usize {
    match &expression.kind {
        ExpressionKind::Number(_) => 0,
        ExpressionKind::Name(_) => 1,
        ExpressionKind::Call(_, arguments) => {
            arguments.iter().map(|argument| argument.names.len()).sum()
        }
        ExpressionKind::Sum(list)
        | ExpressionKind::Product(list)
        | ExpressionKind::Parallel(list) => list.iter().map(names_in).sum(),
        ExpressionKind::Power(inner, _) | ExpressionKind::Negative(inner) => names_in(inner),
    }
}
