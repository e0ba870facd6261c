//! Devices: from a line with terminals and parameters to element drafts, by the table of kinds.

use super::bias::BiasDraft;
use super::build::{Builder, Draft, DraftLaw};
use super::definitions::{Definition, Meaning};
use super::devices::{self, Kind, PartLaw, Pin, Role, ShotRow, Takes, When};
use super::diagnostic::{Diagnostic, Span};
use super::names::nearest;
use super::syntax::{Content, Device, Item, Name, Quantity};
use crate::circuit::{Class, SymbolRole, Unit};
use num_traits::Signed;

/// A device's items, sorted.
pub(crate) struct Terminals {
    pub(crate) owner: Name,
    /// By role; both are the same where a role takes one node.
    nodes: Vec<[usize; 2]>,
    /// The inductors of a coupling.
    pub(crate) inductors: Vec<Name>,
    pub(crate) given: Vec<Given>,
    bias: Option<Quantity>,
}

/// A parameter or a number as written.
pub(crate) struct Given {
    pub(crate) word: &'static str,
    pub(crate) name: Name,
    pub(crate) value: Option<Content>,
}

/// What is read of a role.
enum Tied {
    Nodes([usize; 2]),
    Inductors(Vec<Name>),
}

impl Builder<'_> {
    pub(crate) fn device(&mut self, device: Device) {
        let Some(kind) = devices::kind(&device.kind.text) else {
            let word = &device.kind.text;
            let fault = Diagnostic::error(
                "unknown-kind",
                device.kind.span,
                format!("`{word}` is no kind of device"),
            );
            self.faults.push(match nearest(word, devices::kinds()) {
                Some(near) => fault.help(format!("is it `{near}`?")),
                None => fault
                    .help(format!("kinds are {}", devices::kinds().collect::<Vec<_>>().join(", "))),
            });
            self.incomplete = true;
            return;
        };
        if !self.is_free(&device.name) {
            return;
        }
        self.devices.insert(device.name.text.clone(), device.name.span);
        let Some(read) = self.terminals(kind, device) else {
            self.incomplete = true;
            return;
        };
        if kind.word == "mutual" {
            self.couple(read);
        } else {
            self.expand(kind, read);
        }
    }

    /// Sorts a device's items into terminals and parameters.
    fn terminals(&mut self, kind: &'static Kind, device: Device) -> Option<Terminals> {
        let owner = device.name;
        let before = self.faults.len();
        let mut tied: Vec<Option<(Tied, Span)>> = kind.roles.iter().map(|_| None).collect();
        let mut given: Vec<Given> = Vec::new();
        let mut bias: Option<Quantity> = None;
        for item in device.items {
            let (name, value) = match item {
                Item::Bias(quantity) => {
                    self.bias(kind, quantity, &mut bias);
                    continue;
                }
                Item::Binding(name, value) => (name, Some(value)),
                Item::Role(words) => {
                    let Some((first, rest)) = words.split_first() else { continue };
                    if let Some(role) = kind.role(&first.text) {
                        self.terminal(&kind.roles[role], first, rest, &mut tied[role]);
                        continue;
                    }
                    if !rest.is_empty() {
                        self.faults.push(unknown_item(kind, first, kind.role_words()));
                        continue;
                    }
                    (first.clone(), None)
                }
            };
            let Some(word) = kind.words().find(|word| *word == name.text) else {
                let known = kind.words().chain(kind.role_words());
                self.faults.push(unknown_item(kind, &name, known));
                continue;
            };
            if let Some(known) = given.iter().find(|known| known.word == word) {
                let first = known.name.span;
                self.faults.push(given_twice(&name.text, name.span, first));
                continue;
            }
            given.push(Given { word, name, value });
        }
        if self.faults.len() == before {
            self.missing_roles(kind, &owner, &mut tied);
            self.check_needs(kind, &owner, &tied, &given, bias.is_some());
        }
        if self.faults.len() > before {
            return None;
        }
        let mut nodes = Vec::new();
        let mut inductors = Vec::new();
        for (role, slot) in kind.roles.iter().zip(&tied) {
            match slot {
                Some((Tied::Nodes(pair), _)) => nodes.push(*pair),
                Some((Tied::Inductors(names), _)) => inductors.clone_from(names),
                None => {
                    let other = kind.role(role.default?)?;
                    let pair = *nodes.get(other)?;
                    nodes.push(pair);
                }
            }
        }
        Some(Terminals { owner, nodes, inductors, given, bias })
    }

    /// The current of `at`.
    fn bias(&mut self, kind: &Kind, quantity: Quantity, slot: &mut Option<Quantity>) {
        if kind.nominals.is_empty() {
            self.faults.push(
                Diagnostic::error(
                    "bias",
                    quantity.span,
                    format!("`at` means nothing for a {}", kind.word),
                )
                .help("a bjt takes its collector current, a diode its own"),
            );
        } else if let Some(first) = slot {
            let first = first.span;
            self.faults.push(given_twice("at", quantity.span, first));
        } else if let Some(unit) = quantity.unit.filter(|unit| *unit != Unit::AMPERE) {
            self.faults.push(
                Diagnostic::error(
                    "wrong-unit",
                    quantity.span,
                    format!("the bias is given in `{unit}` and must be in `A`"),
                )
                .help("write the current, as in `at 1 mA`"),
            );
        } else if !quantity.value.is_positive() {
            self.faults.push(
                Diagnostic::error("bias", quantity.span, "a bias current must be above 0 A")
                    .help("the small-signal model of a pnp is that of an npn"),
            );
        } else {
            *slot = Some(quantity);
        }
    }

    fn terminal(
        &mut self,
        role: &Role,
        word: &Name,
        names: &[Name],
        slot: &mut Option<(Tied, Span)>,
    ) {
        let (count, what, example) = match role.takes {
            Takes::Node => (1, "one node", "node"),
            Takes::Port => (2, "two nodes", "a b"),
            Takes::Inductors => (2, "two inductors", "L1 L2"),
        };
        if names.len() != count {
            self.faults.push(
                Diagnostic::error("role", word.span, format!("`{}` takes {what}", word.text))
                    .help(format!("write `{} {example}`, and a comma before the next", word.text)),
            );
            return;
        }
        if let Some((_, first)) = slot {
            let first = *first;
            self.faults.push(given_twice(&word.text, word.span, first));
            return;
        }
        let tied = if role.takes == Takes::Inductors {
            Tied::Inductors(names.to_vec())
        } else {
            let nodes: Vec<Option<usize>> = names.iter().map(|name| self.node(name)).collect();
            let (Some(Some(first)), Some(Some(last))) = (nodes.first(), nodes.last()) else {
                return;
            };
            Tied::Nodes([*first, *last])
        };
        *slot = Some((tied, word.span));
    }

    fn missing_roles(&mut self, kind: &Kind, owner: &Name, tied: &mut [Option<(Tied, Span)>]) {
        let missing: Vec<&str> = kind
            .roles
            .iter()
            .zip(tied)
            .filter(|(role, slot)| slot.is_none() && role.default.is_none())
            .map(|(role, _)| role.word)
            .collect();
        if missing.is_empty() {
            return;
        }
        let what = if kind.word == "mutual" { "nothing" } else { "no node" };
        self.faults.push(
            Diagnostic::error(
                "missing-role",
                owner.span,
                format!("`{}` has {what} for `{}`", owner.text, missing.join("`, `")),
            )
            .help(format!(
                "a {} has the terminals {}",
                kind.word,
                kind.role_words().collect::<Vec<_>>().join(", ")
            )),
        );
    }

    fn check_needs(
        &mut self,
        kind: &Kind,
        owner: &Name,
        tied: &[Option<(Tied, Span)>],
        given: &[Given],
        biased: bool,
    ) {
        let find = |word: &str| given.iter().find(|given| given.word == word);
        for need in kind.needs {
            let Some(parameter) = find(need.parameter) else { continue };
            let role = kind.role(need.needed);
            let met = match role {
                Some(role) => tied[role].is_some(),
                None => find(need.needed).is_some() || (need.needed == "at" && biased),
            };
            if met {
                continue;
            }
            let add = match need.needed {
                "at" => "add the bias: `at 1 mA`".to_owned(),
                needed if role.is_some() => format!("add `{needed} node`"),
                needed => format!("add `{needed} = …`"),
            };
            self.faults.push(
                Diagnostic::error(
                    "needs",
                    parameter.name.span,
                    format!("`{}` needs `{}`: {}", need.parameter, need.needed, need.reason),
                )
                .help(add),
            );
        }
        for (first, second) in kind.either {
            if let (Some(a), Some(b)) = (find(first), find(second)) {
                let (a, b) = if a.name.span < b.name.span { (a, b) } else { (b, a) };
                self.faults.push(
                    Diagnostic::error(
                        "either",
                        b.name.span,
                        format!("`{first}` and `{second}` say the same thing twice"),
                    )
                    .label(a.name.span, "given here")
                    .help("leave one of them out"),
                );
            }
        }
        if given.is_empty() && !biased && !kind.works_alone() {
            self.faults.push(
                Diagnostic::error(
                    "no-parameters",
                    owner.span,
                    format!("`{}` has no parameter, so it does nothing", owner.text),
                )
                .help(format!(
                    "name those that exist: {}",
                    kind.parameters.iter().map(|(name, _)| *name).collect::<Vec<_>>().join(", ")
                )),
            );
        }
    }

    /// Makes a device's elements.
    fn expand(&mut self, kind: &'static Kind, read: Terminals) {
        let Terminals { owner, nodes, given, bias, .. } = read;
        let mut definitions: Vec<Option<usize>> = vec![None; kind.parameters.len()];
        let mut numbers: Vec<Given> = Vec::new();
        for entry in given {
            let Some(parameter) = kind.parameter(entry.word) else {
                numbers.push(entry);
                continue;
            };
            let name =
                Name { text: format!("{}.{}", owner.text, entry.word), span: entry.name.span };
            let unit = kind.parameters[parameter].1;
            definitions[parameter] =
                Some(self.define(&name, SymbolRole::DeviceParameter, unit, entry.value));
        }
        if bias.is_some() {
            self.add_biased(kind, &owner, &numbers, &mut definitions);
        }
        let given = |word: &str| definitions[kind.parameter(word)?];
        let mut inner = nodes.clone();
        for split in kind.splits.iter().filter(|split| given(split.parameter).is_some()) {
            let name = format!("{}.{}", owner.text, split.suffix);
            if let Some(role) = kind.role(split.terminal) {
                inner[role] = [self.nodes.add(&name, owner.span); 2];
            }
        }
        let pin = |pin: Pin| {
            let find = |nodes: &[[usize; 2]], role: &str, place: usize| {
                kind.role(role).map_or(0, |index| nodes[index][place])
            };
            match pin {
                Pin::Ground => 0,
                Pin::At(role) => find(&inner, role, 0),
                Pin::Outer(role) => find(&nodes, role, 0),
                Pin::Second(role) => find(&nodes, role, 1),
            }
        };
        for part in kind.parts {
            let (definition, name) = match part.when {
                When::Always => (None, owner.text.clone()),
                When::Given(word) => (given(word), format!("{}.{word}", owner.text)),
                When::GivenWhole(word) => (given(word), owner.text.clone()),
                When::Missing(word) if given(word).is_none() => (None, owner.text.clone()),
                When::Missing(_) => continue,
            };
            let (law, class) = match (part.law, definition) {
                (PartLaw::Nullor(class, a, b), _) => (DraftLaw::Nullor(pin(a), pin(b)), class),
                (_, None) => continue,
                (PartLaw::Resistor | PartLaw::Slope, Some(id)) => {
                    (DraftLaw::Passive(id), Class::Resistor)
                }
                (PartLaw::Capacitor, Some(id)) => (DraftLaw::Passive(id), Class::Capacitor),
                (PartLaw::CurrentBy(a, b), Some(id)) => {
                    (DraftLaw::ByVoltage(id, None, pin(a), pin(b)), Class::Current)
                }
                (PartLaw::CurrentByOver(a, b, over), Some(id)) => {
                    (DraftLaw::ByVoltage(id, given(over), pin(a), pin(b)), Class::Current)
                }
                (PartLaw::VoltageBy(a, b), Some(id)) => {
                    (DraftLaw::ByVoltage(id, None, pin(a), pin(b)), Class::Voltage)
                }
                (PartLaw::Transformer(a, b), Some(id)) => {
                    (DraftLaw::Transformer(id, pin(a), pin(b)), Class::Transformer)
                }
                (PartLaw::Gyrator(a, b), Some(id)) => {
                    (DraftLaw::Gyrator(id, pin(a), pin(b)), Class::Gyrator)
                }
            };
            let (plus, minus) = (pin(part.plus), pin(part.minus));
            let name = Name { text: name, span: owner.span };
            let noiseless = matches!(part.law, PartLaw::Slope);
            self.push(Draft { name, class, plus, minus, law, noiseless });
        }
        if let Some(bias) = bias {
            let place =
                |row: &'static ShotRow| (row, pin(Pin::At(row.terminal)), pin(Pin::At(row.other)));
            let shots = kind.shots.iter().map(place).collect();
            self.biases.push(BiasDraft { owner, kind, definitions, current: bias, numbers, shots });
        }
    }

    /// The parameters that a bias makes, where they were not written.
    fn add_biased(
        &mut self,
        kind: &Kind,
        owner: &Name,
        numbers: &[Given],
        definitions: &mut [Option<usize>],
    ) {
        for nominal in kind.nominals {
            let Some(parameter) = kind.parameter(nominal.parameter) else { continue };
            let known = nominal
                .factor
                .is_none_or(|factor| numbers.iter().any(|number| number.word == factor));
            if definitions[parameter].is_none() && known {
                definitions[parameter] = Some(self.definitions.add(Definition {
                    name: format!("{}.{}", owner.text, nominal.parameter),
                    span: owner.span,
                    role: SymbolRole::DeviceParameter,
                    meaning: Meaning::Symbol { nominal: None, tolerance: None },
                    unit: Some(kind.parameters[parameter].1),
                    uses: 0,
                    implicit: false,
                    by_let: false,
                }));
            }
        }
    }
}

fn given_twice(word: &str, span: Span, first: Span) -> Diagnostic {
    Diagnostic::error("duplicate", span, format!("`{word}` is given twice"))
        .label(first, "here first")
}

fn unknown_item(kind: &Kind, name: &Name, known: impl Iterator<Item = &'static str>) -> Diagnostic {
    let fault = Diagnostic::error(
        "unknown-item",
        name.span,
        format!("`{}` is no terminal and no parameter of `{}`", name.text, kind.word),
    );
    match nearest(&name.text, known) {
        Some(near) => fault.help(format!("is it `{near}`?")),
        None => {
            let list = |words: Vec<&str>| {
                if words.is_empty() { "none".to_owned() } else { words.join(", ") }
            };
            fault.help(format!(
                "terminals: {}; parameters: {}",
                list(kind.role_words().collect()),
                list(kind.words().collect())
            ))
        }
    }
}
