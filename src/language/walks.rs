//! Walks: from what stands between nodes to element drafts.
//!
//! The alternation of nodes and elements is checked here, as are the names of nodes and the classes of
//! elements; values are only defined, not looked at.

use super::build::{Builder, Draft, DraftLaw};
use super::definitions::{Definition, Meaning, find_call};
use super::devices;
use super::diagnostic::{Diagnostic, Span};
use super::names::{
    self, class_of_letter, class_of_word, looks_like_element, nearest, trade_word, unit_of,
    word_of_class,
};
use super::syntax::{Content, Name, Part, Quantity, Step};
use crate::circuit::{Class, SymbolRole, Unit};
use num_traits::Zero;

impl Builder<'_> {
    pub(crate) fn walk(&mut self, steps: Vec<Step>) {
        if let Some(fault) = wrong_order(&steps) {
            self.faults.push(fault);
            self.incomplete = true;
            return;
        }
        let mut before = None;
        let mut between: Option<Step> = None;
        for (index, step) in steps.into_iter().enumerate() {
            if index % 2 == 1 {
                between = Some(step);
                continue;
            }
            let node = step
                .parts
                .first()
                .and_then(|part| part.words.first())
                .and_then(|name| self.node(name));
            if let (Some(Some(plus)), Some(minus), Some(elements)) = (before, node, between.take())
            {
                let several = elements.parts.len() > 1;
                for part in elements.parts {
                    self.element(part, plus, minus, several);
                }
            }
            before = Some(node);
        }
    }

    /// The node of that name; reports names that no node can bear.
    pub(crate) fn node(&mut self, name: &Name) -> Option<usize> {
        match node_fault(name, self.in_block) {
            Some(fault) => {
                self.faults.push(fault);
                self.incomplete = true;
                None
            }
            None => {
                if let Some(element) = self.elements.get(&name.text) {
                    let place = self.drafts[*element].name.span;
                    self.clash(name, place, "an element");
                } else if let Some(place) = self.devices.get(&name.text).copied() {
                    self.clash(name, place, "a device");
                }
                Some(self.nodes.add(&name.text, name.span))
            }
        }
    }

    pub(crate) fn clash(&mut self, name: &Name, place: Span, what: &str) {
        self.faults.push(
            Diagnostic::error(
                "duplicate",
                name.span,
                format!("`{}` already names {what}", name.text),
            )
            .label(place, "here")
            .help("nodes and elements share their names: choose another one"),
        );
    }

    /// True if a name is free for an element or a device; reports if it is not.
    pub(crate) fn is_free(&mut self, name: &Name) -> bool {
        if self.refuse_name(name) {
            return false;
        }
        let element = self.elements.get(&name.text).map(|index| self.drafts[*index].name.span);
        let device = self.devices.get(&name.text).copied();
        let definition = self.definitions.find(&name.text).map(|id| self.definitions.list[id].span);
        let node = self.nodes.find(&name.text).map(|node| self.nodes.place(node));
        let taken = [
            (element, "an element"),
            (device, "a device"),
            (definition, "a parameter"),
            (node, "a node"),
        ];
        for (place, what) in taken {
            if let Some(place) = place {
                self.clash(name, place, what);
                return false;
            }
        }
        true
    }

    fn element(&mut self, part: Part, plus: usize, minus: usize, several: bool) {
        let mut words = part.words.into_iter();
        let (Some(first), second) = (words.next(), words.next()) else { return };
        if first.text == "wire" {
            if several || part.value.is_some() || second.is_some() {
                self.faults.push(
                    Diagnostic::error(
                        "wire",
                        part.span,
                        "a wire has no name, no value and no parallel element",
                    )
                    .help("write `a > wire > b`"),
                );
            } else {
                self.nodes.wire(plus, minus);
            }
            return;
        }
        let (class, name) = match second {
            Some(name) => {
                let Some(class) = class_of_word(&first.text) else {
                    self.faults.push(unknown_class(&first, &name));
                    self.incomplete = true;
                    return;
                };
                (class, name)
            }
            None => match class_of_letter(&first.text) {
                Some(class) => (class, first),
                None => {
                    self.faults.push(no_class(&first));
                    self.incomplete = true;
                    return;
                }
            },
        };
        if !self.is_free(&name) {
            return;
        }
        let law = match class {
            Class::Voltage | Class::Current => self.source_law(class, part.value),
            _ => {
                let definition =
                    self.define(&name, SymbolRole::Element(class), unit_of(class), part.value);
                Some(DraftLaw::Passive(definition))
            }
        };
        let Some(law) = law else { return };
        self.push(Draft { name, class, plus, minus, law, noiseless: false });
    }

    pub(crate) fn push(&mut self, draft: Draft) {
        self.elements.insert(draft.name.text.clone(), self.drafts.len());
        self.drafts.push(draft);
    }

    fn source_law(&mut self, class: Class, value: Option<Content>) -> Option<DraftLaw> {
        match value {
            None => Some(DraftLaw::Source),
            Some(Content::Quantity(quantity)) => {
                let unit = if class == Class::Voltage { Unit::VOLT } else { Unit::AMPERE };
                self.check_unit(&quantity, unit, word_of_class(class));
                let zero = quantity.value.is_zero();
                Some(if zero { DraftLaw::Controlled(None) } else { DraftLaw::Source })
            }
            Some(Content::Expression(expression)) => Some(DraftLaw::Controlled(Some(expression))),
        }
    }

    /// Defines what an element's or a parameter's name stands for.
    pub(crate) fn define(
        &mut self,
        name: &Name,
        role: SymbolRole,
        unit: Unit,
        value: Option<Content>,
    ) -> usize {
        let meaning = match value {
            None => Meaning::Symbol { nominal: None, tolerance: None },
            Some(Content::Quantity(quantity)) => {
                self.check_unit(&quantity, unit, &name.text);
                Meaning::Symbol { nominal: Some(quantity.value), tolerance: quantity.tolerance }
            }
            Some(Content::Expression(expression)) => {
                if find_call(&expression).is_some() {
                    self.refuse_call(&expression, &name.text);
                }
                Meaning::Expression(expression)
            }
        };
        self.definitions.add(Definition {
            name: name.text.clone(),
            span: name.span,
            role,
            meaning,
            unit: Some(unit),
            uses: 0,
            implicit: false,
            by_let: false,
        })
    }

    pub(crate) fn check_unit(&mut self, quantity: &Quantity, unit: Unit, what: &str) {
        if let Some(found) = quantity.unit
            && found != unit
        {
            self.faults.push(
                Diagnostic::error(
                    "wrong-unit",
                    quantity.span,
                    format!("`{what}` is given in `{found}` and must be in `{unit}`"),
                )
                .help(format!("write the value in {unit}, or give it a name of another class")),
            );
        }
    }
}

/// What is wrong with the alternation of nodes and elements.
fn wrong_order(steps: &[Step]) -> Option<Diagnostic> {
    let last = steps.len() - 1;
    for (index, step) in steps.iter().enumerate().step_by(2) {
        let name = step.parts.first().and_then(|part| part.words.first())?;
        let plain = matches!(step.parts.as_slice(), [part] if part.words.len() == 1 && part.value.is_none());
        let next = steps.get(index + 1).and_then(|step| step.parts.first());
        let next_is_node = next.is_some_and(|part| {
            part.words.len() == 1
                && part.value.is_none()
                && part.words[0].text != "wire"
                && class_of_letter(&part.words[0].text).is_none()
        });
        let element = !plain
            || looks_like_element(&name.text)
            || (index > 0 && class_of_letter(&name.text).is_some() && next_is_node);
        if !element {
            continue;
        }
        let shown = step.parts.first().map_or(String::new(), |part| {
            part.words.iter().map(|word| word.text.as_str()).collect::<Vec<_>>().join(" ")
        });
        let fault = Diagnostic::error(
            "element-as-node",
            step.span,
            if index == 0 {
                format!("`{shown}` looks like an element; a walk begins at a node")
            } else if index == last {
                format!("`{shown}` looks like an element; a walk ends at a node")
            } else {
                format!("`{shown}` looks like an element; put a node between")
            },
        );
        return Some(fault.help("a walk goes from node to node: `in > R1 > x > C1 > ground`"));
    }
    if steps.len().is_multiple_of(2) {
        let step = &steps[last];
        return Some(
            Diagnostic::error(
                "walk-end",
                step.span,
                "a walk ends at a node, and this is the place of an element",
            )
            .help("add `> ground` or another node"),
        );
    }
    None
}

/// What is wrong with the name of a node.
pub(crate) fn node_fault(name: &Name, in_block: bool) -> Option<Diagnostic> {
    let text = if in_block { names::local(&name.text) } else { name.text.as_str() };
    let fault = |message: String| Diagnostic::error("bad-node", name.span, message);
    if text == "0" {
        return Some(fault("node `0` has no meaning here".to_owned()).help("write `ground`"));
    }
    if let Some(sign) = text.find(['+', '-']) {
        let positive = text[sign..].starts_with('+');
        let base = text.trim_matches(['+', '-']);
        let ending = if positive { "p" } else { "n" };
        let offer = if sign == 0 {
            format!("{ending}_{base}")
        } else if base.chars().count() == 1 {
            format!("{base}{ending}")
        } else {
            format!("{base}_{ending}")
        };
        return Some(
            fault(format!("a sign in the node name `{text}`")).help(format!("write `{offer}`")),
        );
    }
    if text.contains('.') {
        return Some(
            fault(format!("a dot in the node name `{text}`"))
                .help("nodes are named by letters, digits and `_`"),
        );
    }
    if text.starts_with('0') {
        return Some(
            fault(format!("the node name `{text}` begins with 0"))
                .help("a node's number is 1 or more"),
        );
    }
    if matches!(text, "wire" | "infinity") || names::QUERIES.contains(&text) {
        return Some(
            Diagnostic::error("reserved", name.span, format!("`{text}` is a word of the language"))
                .help("choose another name"),
        );
    }
    None
}

fn unknown_class(word: &Name, name: &Name) -> Diagnostic {
    let known = names::CLASS_WORDS.iter().map(|(word, _)| *word);
    let fault = Diagnostic::error(
        "unknown-class",
        word.span,
        format!("`{}` is no class of element", word.text),
    );
    match nearest(&word.text, known.clone()) {
        Some(near) => fault.help(format!("is it `{near} {}`?", name.text)),
        None if devices::is_kind(&word.text) => fault.help(format!(
            "a device stands in a line of its own: `{} {}: …`",
            word.text, name.text
        )),
        None => fault.help(format!("classes are {}", known.collect::<Vec<_>>().join(", "))),
    }
}

fn no_class(name: &Name) -> Diagnostic {
    let text = &name.text;
    let fault = Diagnostic::error(
        "no-class",
        name.span,
        format!("`{text}` does not tell what kind of element it is"),
    );
    if let Some(word) = trade_word(text) {
        return fault.help(format!(
            "`{word}` is a word of the trade; say the class, as in `resistor {text}`"
        ));
    }
    match text.chars().next() {
        Some('V' | 'v' | 'E') => fault.help(format!("write `voltage {text}`")),
        Some('I' | 'i') => fault.help(format!("write `current {text}`")),
        Some(letter) if class_of_letter(&letter.to_uppercase().to_string()).is_some() => {
            let class =
                class_of_letter(&letter.to_uppercase().to_string()).map_or("", word_of_class);
            fault.help(format!("class letters are capitals: write `{class} {text}`"))
        }
        _ => fault.help(format!("write its class before the name, as in `resistor {text}`")),
    }
}
