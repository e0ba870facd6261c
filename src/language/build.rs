//! From the statements of a file to its circuit.
//!
//! One pass over the statements names nodes, elements and parameters and joins wired nodes; then
//! definitions are settled, laws are made, units are solved and symbols are numbered in reference order.
//! Questions come last: they are asked of the finished circuit.

use super::ask::{self, Resolver};
use super::bias::{BiasDraft, CouplingDraft, ShotDraft};
use super::blocks;
use super::definitions::{Definition, Definitions, Meaning, find_call, visit_names};
use super::diagnostic::{Diagnostic, Label, MOST_SHOWN, Severity, Span};
use super::names::{self, is_ground, nearest};
use super::nodes::Nodes;
use super::queries::reference_of;
use super::source::Source;
use super::sources::{self, Access, Term};
use super::syntax::{
    ClaimDraft, Content, Expression, LimitPoint, Name, Quantity, Query, Statement, StatementKind,
};
use super::units::UnitSolver;
use crate::circuit::{
    Band, Circuit, Class, Control, Element, ElementId, GROUND, Law, NodeId, Number, SymbolRole,
    Unit, Value,
};
use num_bigint::BigInt;
use num_traits::Signed;
use rustc_hash::FxHashMap;

/// An element before its value is known; nodes are numbers of [`Nodes`].
#[derive(Debug)]
pub(crate) struct Draft {
    pub(crate) name: Name,
    pub(crate) class: Class,
    pub(crate) plus: usize,
    pub(crate) minus: usize,
    pub(crate) law: DraftLaw,
    /// True for the slope of a device's characteristic.
    pub(crate) noiseless: bool,
}

#[derive(Debug)]
pub(crate) enum DraftLaw {
    /// A two-terminal element whose value is this definition.
    Passive(usize),
    /// An independent source.
    Source,
    /// A dependent source as written; empty for 0 V and 0 A.
    Controlled(Option<Expression>),
    /// A dependent source of a device: the value of a definition, over that of another, times the
    /// voltage between two nodes.
    ByVoltage(usize, Option<usize>, usize, usize),
    /// Nullator between these nodes.
    Nullor(usize, usize),
    /// The ratio, and the secondary.
    Transformer(usize, usize, usize),
    /// The conductance, and port 2.
    Gyrator(usize, usize, usize),
    /// Two inductors, and the mutual inductance.
    Mutual(Name, Name, usize),
}

/// What is being built.
pub(crate) struct Builder<'s> {
    pub(crate) source: &'s Source,
    pub(crate) nodes: Nodes,
    pub(crate) drafts: Vec<Draft>,
    /// Elements by name.
    pub(crate) elements: FxHashMap<String, usize>,
    /// Devices by name.
    pub(crate) devices: FxHashMap<String, Span>,
    pub(crate) definitions: Definitions,
    pub(crate) faults: Vec<Diagnostic>,
    /// True if a line could not be read: then unknown names prove nothing.
    pub(crate) incomplete: bool,
    /// True while a line of a block is taken in.
    pub(crate) in_block: bool,
    title: Option<(String, Span)>,
    band: Option<(Band, Span)>,
    pub(crate) queries: Vec<(Query, Span)>,
    pub(crate) claims: Vec<ClaimDraft>,
    pub(crate) limits: Vec<(Name, LimitPoint)>,
    pub(crate) biases: Vec<BiasDraft>,
    pub(crate) couplings: Vec<CouplingDraft>,
    pub(crate) shots: Vec<ShotDraft>,
    temperature: Option<(Number, Span)>,
}

impl<'s> Builder<'s> {
    pub(crate) fn new(source: &'s Source, faults: Vec<Diagnostic>) -> Self {
        Self {
            source,
            nodes: Nodes::default(),
            drafts: Vec::new(),
            elements: FxHashMap::default(),
            devices: FxHashMap::default(),
            definitions: Definitions::default(),
            incomplete: !faults.is_empty(),
            in_block: false,
            faults,
            title: None,
            band: None,
            queries: Vec::new(),
            claims: Vec::new(),
            limits: Vec::new(),
            biases: Vec::new(),
            couplings: Vec::new(),
            shots: Vec::new(),
            temperature: None,
        }
    }

    /// Takes in all statements and makes the circuit; `None` if there is an error.
    pub(crate) fn build(
        mut self,
        statements: Vec<Statement>,
    ) -> (Option<Circuit>, Vec<Diagnostic>) {
        let statements = blocks::put_in(statements, &mut self.faults);
        self.incomplete |= !self.faults.is_empty();
        for statement in statements {
            let (used, before) = (statement.used, self.faults.len());
            self.statement(statement);
            if let Some(used) = used {
                for fault in &mut self.faults[before..] {
                    fault.labels.push(Label { span: used, text: "used here".to_owned() });
                }
            }
        }
        let circuit = self.finish();
        let sound = !self.faults.iter().any(|fault| fault.severity == Severity::Error);
        (circuit.filter(|_| sound), self.faults)
    }

    pub(crate) fn error(&mut self, code: &'static str, span: Span, message: impl Into<String>) {
        self.faults.push(Diagnostic::error(code, span, message));
    }

    /// The nearest known name; only for as many errors as are shown, so that time stays linear.
    fn suggest<'n>(
        &self,
        typed: &str,
        known: impl Iterator<Item = &'n str>,
        so_far: usize,
    ) -> Option<&'n str> {
        if self.faults.len() + so_far < MOST_SHOWN { nearest(typed, known) } else { None }
    }

    fn statement(&mut self, statement: Statement) {
        let span = statement.span;
        self.in_block = statement.used.is_some();
        match statement.kind {
            StatementKind::Title(title) => {
                if let Some((_, first)) = &self.title {
                    let fault = Diagnostic::error("duplicate", span, "a second title")
                        .label(*first, "the first one");
                    self.faults.push(fault);
                } else {
                    self.title = Some((title, span));
                }
            }
            StatementKind::Walk(steps) => self.walk(steps),
            StatementKind::Device(device) => self.device(device),
            StatementKind::Let(name, value) => self.let_name(name, value.map(|value| *value)),
            StatementKind::Band(ends) => self.band(&ends.0, &ends.1, span),
            StatementKind::Ask(query) => self.queries.push((query, span)),
            StatementKind::Claim(claim) => self.claims.push(*claim),
            StatementKind::Limit(name, point) => self.limits.push((name, point)),
            StatementKind::Temperature(quantity) => self.set_temperature(*quantity),
            StatementKind::Instance(name) => {
                if self.is_free(&name) {
                    self.devices.insert(name.text, name.span);
                }
            }
            // Blocks are put in before anything is built.
            StatementKind::BlockStart(_) | StatementKind::BlockEnd | StatementKind::Use(_) => {}
        }
    }

    fn band(&mut self, from: &Quantity, to: &Quantity, span: Span) {
        if let Some((_, first)) = &self.band {
            let fault = Diagnostic::error("duplicate", span, "a second band")
                .label(*first, "the first one");
            self.faults.push(fault);
            return;
        }
        match make_band(from, to) {
            Ok(band) => self.band = Some((band, span)),
            Err(fault) => self.faults.push(fault),
        }
    }

    fn set_temperature(&mut self, quantity: Quantity) {
        if let Some((_, first)) = &self.temperature {
            let fault = Diagnostic::error("duplicate", quantity.span, "a second temperature")
                .label(*first, "the first one");
            self.faults.push(fault);
        } else if !quantity.value.is_positive() {
            self.error("temperature", quantity.span, "a temperature must be above 0 K");
        } else {
            self.temperature = Some((quantity.value, quantity.span));
        }
    }

    /// The temperature of the file, or 300 K.
    pub(crate) fn kelvin(&self) -> Number {
        let usual = || Number::from(BigInt::from(300));
        self.temperature.as_ref().map_or_else(usual, |(kelvin, _)| kelvin.clone())
    }

    fn let_name(&mut self, name: Name, value: Option<Content>) {
        if self.refuse_name(&name) {
            return;
        }
        if let Some(known) = self.definitions.find(&name.text) {
            let first = self.definitions.list[known].span;
            let fault = Diagnostic::error(
                "duplicate",
                name.span,
                format!("`{}` is already defined", name.text),
            )
            .label(first, "here");
            self.faults.push(fault);
            return;
        }
        let (meaning, unit) = match value {
            None => (Meaning::Symbol { nominal: None, tolerance: None }, None),
            Some(Content::Quantity(quantity)) => (
                Meaning::Symbol { nominal: Some(quantity.value), tolerance: quantity.tolerance },
                quantity.unit,
            ),
            Some(Content::Expression(expression)) => {
                self.refuse_call(&expression, &name.text);
                (Meaning::Expression(expression), None)
            }
        };
        self.definitions.add(Definition {
            name: name.text,
            span: name.span,
            role: if self.in_block { SymbolRole::DeviceParameter } else { SymbolRole::Parameter },
            meaning,
            unit,
            uses: 0,
            implicit: false,
            by_let: true,
        });
    }

    /// Reports a name that cannot be given: reserved, or with a sign or a dot in it.
    pub(crate) fn refuse_name(&mut self, name: &Name) -> bool {
        // A name of a block stands behind that of its use.
        let local = if self.in_block { names::local(&name.text) } else { &name.text };
        if names::is_reserved(local) {
            self.error("reserved", name.span, format!("`{}` is a word of the language", name.text));
            return true;
        }
        let good = local.chars().all(|c| c.is_ascii_alphanumeric() || c == '_')
            && !local.starts_with(|c: char| c.is_ascii_digit());
        if !good {
            self.faults.push(
                Diagnostic::error("bad-name", name.span, format!("`{}` is no name", name.text))
                    .help("a name is made of letters, digits and `_` and begins with a letter"),
            );
        }
        !good
    }

    /// Reports V(..), I(..) and other calls where only names and numbers may stand.
    pub(crate) fn refuse_call(&mut self, expression: &Expression, owner: &str) {
        if let Some(call) = find_call(expression) {
            let fault = match sources::access(call) {
                Err(fault) => fault,
                Ok(_) => Diagnostic::error(
                    "access",
                    call.span,
                    format!("the value of `{owner}` names a voltage or a current"),
                )
                .help(
                    "only sources depend on others: write `current` or `voltage` before the name",
                ),
            };
            self.faults.push(fault);
        }
    }

    fn finish(&mut self) -> Option<Circuit> {
        let terms = self.source_terms();
        self.name_parameters(&terms);
        let mut faults = std::mem::take(&mut self.faults);
        self.definitions.settle(&mut faults);
        self.faults = faults;
        self.settle_numbers();
        if self.faults.iter().any(|fault| fault.severity == Severity::Error) {
            // What follows would only repeat what the first errors caused.
            return None;
        }
        let units = self.solve_units(&terms);
        let mut circuit = Circuit {
            title: self.title.take().map(|(title, _)| title),
            nodes: self.nodes.list(),
            band: self.band.take().map(|(band, _)| band),
            temperature: self.temperature.take().map(|(kelvin, _)| kelvin),
            ..Circuit::default()
        };
        self.make_elements(&terms, &mut circuit);
        self.list_shots(&mut circuit);
        self.number_symbols(&units, &mut circuit);
        let asked = self.resolve_queries(&mut circuit);
        self.resolve_limits(&mut circuit);
        self.resolve_claims(&mut circuit, &asked);
        self.warn(&circuit);
        Some(circuit)
    }

    /// The sums of all dependent sources, in the order of the drafts.
    fn source_terms(&mut self) -> Vec<Vec<Term>> {
        let mut all = Vec::with_capacity(self.drafts.len());
        for index in 0..self.drafts.len() {
            let draft = &self.drafts[index];
            let mut terms = Vec::new();
            if let DraftLaw::Controlled(Some(expression)) = &draft.law {
                match sources::terms(expression) {
                    Ok(found) => terms = found,
                    Err(fault) => {
                        let fault = self.explain_source(expression, fault);
                        self.faults.push(fault);
                    }
                }
            }
            all.push(terms);
        }
        all
    }

    /// A value like `k*Vin` is answered with `k*V(in)`.
    fn explain_source(&self, expression: &Expression, fault: Diagnostic) -> Diagnostic {
        let mut hint = None;
        visit_names(expression, &mut |name, span| {
            if hint.is_none()
                && let Some(fault) = self.source_in_expression(name, span)
            {
                hint = Some(fault);
            }
        });
        hint.unwrap_or(fault)
    }

    /// The error for a source's or a device's name inside an expression.
    fn source_in_expression(&self, name: &str, span: Span) -> Option<Diagnostic> {
        if let Some(draft) = self.elements.get(name).map(|index| &self.drafts[*index])
            && (has_one_current(draft.class) || draft.class == Class::Opamp)
            && self.definitions.find(name).is_none()
        {
            let plus = self.nodes.name(draft.plus);
            let quantity = match draft.class {
                Class::Voltage | Class::Opamp if self.nodes.is_ground(draft.minus) => {
                    format!("V({plus})")
                }
                Class::Voltage | Class::Opamp => {
                    format!("V({plus}, {})", self.nodes.name(draft.minus))
                }
                _ => format!("I({name})"),
            };
            return Some(
                Diagnostic::error(
                    "source-in-value",
                    span,
                    format!("`{name}` is a source, and a value holds symbols"),
                )
                .help(format!("write `{quantity}` for what it gives")),
            );
        }
        self.devices.contains_key(name).then(|| {
            Diagnostic::error("device-in-value", span, format!("`{name}` is a device"))
                .help(format!("name one of its parameters, as in `{name}.gm`"))
        })
    }

    /// Makes a parameter of every name that nothing defines, and counts uses.
    fn name_parameters(&mut self, terms: &[Vec<Term>]) {
        let mut used: Vec<(String, Span)> = Vec::new();
        let mut note = |name: &str, span: Span| used.push((name.to_owned(), span));
        for definition in &self.definitions.list {
            if let Meaning::Expression(expression) = &definition.meaning {
                visit_names(expression, &mut note);
            }
        }
        for term in terms.iter().flatten() {
            visit_names(&term.gain, &mut note);
        }
        for expression in
            self.queries.iter().filter_map(|(query, _)| reference_of(&query.expression))
        {
            visit_names(expression, &mut note);
        }
        // Claims and numbers of a bias make no parameters, but use those that there are.
        let numbers = self.biases.iter().flat_map(|bias| &bias.numbers);
        let numbers = numbers.filter_map(|given| match &given.value {
            Some(Content::Expression(expression)) => Some(expression),
            _ => None,
        });
        let claimed = self.claims.iter().filter_map(|claim| claim.expression.as_ref());
        for expression in claimed.chain(numbers) {
            visit_names(expression, &mut |name, span| {
                if self.definitions.find(name).is_some() {
                    note(name, span);
                }
            });
        }
        for (name, span) in used {
            if let Some(id) = self.definitions.find(&name) {
                self.definitions.list[id].uses += 1;
                continue;
            }
            if let Some(fault) = self.name_fault(&name, span) {
                self.faults.push(fault);
                continue;
            }
            let pi = name == "pi";
            self.definitions.add(Definition {
                name,
                span,
                role: if pi { SymbolRole::Pi } else { SymbolRole::Parameter },
                meaning: Meaning::Symbol { nominal: None, tolerance: None },
                unit: pi.then_some(Unit::ONE),
                uses: 1,
                implicit: !pi,
                by_let: false,
            });
        }
    }

    /// What is wrong with a name in an expression that no definition bears.
    fn name_fault(&self, name: &str, span: Span) -> Option<Diagnostic> {
        if let Some(fault) = self.source_in_expression(name, span) {
            return Some(fault);
        }
        if let Some((owner, parameter)) = name.split_once('.') {
            if self.incomplete {
                return None;
            }
            let fault = Diagnostic::error("unknown-name", span, format!("no `{name}` is known"));
            let known = self.definitions.list.iter().map(|definition| definition.name.as_str());
            return Some(match self.suggest(name, known.filter(|known| known.contains('.')), 0) {
                Some(near) => fault.help(format!("is it `{near}`?")),
                None if self.devices.contains_key(owner) => {
                    fault.help(format!("`{owner}` was given no parameter `{parameter}`"))
                }
                None => fault.help(format!("there is no device `{owner}`")),
            });
        }
        if name == "pi" { None } else { reserved_in_expression(name, span) }
    }

    fn solve_units(&mut self, terms: &[Vec<Term>]) -> Vec<Unit> {
        let mut solver = UnitSolver::new(&self.definitions);
        solver.read_definitions();
        for (draft, terms) in self.drafts.iter().zip(terms) {
            let given = if draft.class == Class::Voltage { Unit::VOLT } else { Unit::AMPERE };
            for term in terms {
                solver.demand(&term.gain, given.over(term.access.unit()), "factor");
            }
        }
        for expression in
            self.queries.iter().filter_map(|(query, _)| reference_of(&query.expression))
        {
            solver.demand(expression, Unit::OHM, "reference resistance");
        }
        solver.guess_free();
        let units = (0..self.definitions.list.len()).map(|id| solver.unit(id)).collect();
        let faults = solver.faults;
        self.faults.extend(faults);
        units
    }

    fn make_elements(&mut self, terms: &[Vec<Term>], circuit: &mut Circuit) {
        let mut faults = Vec::new();
        for (draft, terms) in self.drafts.iter().zip(terms) {
            let Some(law) = self.law(draft, terms, &mut faults) else { continue };
            if draft.noiseless {
                let id = u32::try_from(circuit.elements.len()).unwrap_or(u32::MAX);
                circuit.noiseless.push(ElementId(id));
            }
            // A device that gives a voltage is an op-amp of finite gain: a source, and called what it is.
            let finite_opamp =
                draft.class == Class::Voltage && matches!(draft.law, DraftLaw::ByVoltage(..));
            circuit.elements.push(Element {
                name: draft.name.text.clone(),
                class: if finite_opamp { Class::Opamp } else { draft.class },
                plus: self.nodes.id(draft.plus),
                minus: self.nodes.id(draft.minus),
                law,
                line: self.source.line(draft.name.span.start),
            });
        }
        self.faults.append(&mut faults);
    }

    fn law(&self, draft: &Draft, terms: &[Term], faults: &mut Vec<Diagnostic>) -> Option<Law> {
        Some(match &draft.law {
            DraftLaw::Passive(id) => {
                let settled = self.definitions.settled(*id)?;
                let value = settled.value.clone();
                let free = matches!(draft.class, Class::Impedance | Class::Admittance);
                if settled.measure.holds_s && !free {
                    faults.push(
                        Diagnostic::error(
                            "s-in-value",
                            draft.name.span,
                            format!("the value of `{}` depends on `s`", draft.name.text),
                        )
                        .help("an `impedance` or an `admittance` may depend on `s`"),
                    );
                }
                match draft.class {
                    Class::Inductor => Law::Impedance(times_s(value)),
                    Class::Capacitor => Law::Admittance(times_s(value)),
                    Class::Conductance | Class::Admittance => Law::Admittance(value),
                    _ => Law::Impedance(value),
                }
            }
            DraftLaw::Source if draft.class == Class::Voltage => Law::VoltageSource,
            DraftLaw::Source => Law::CurrentSource,
            DraftLaw::Nullor(a, b) => Law::Nullor(self.nodes.id(*a), self.nodes.id(*b)),
            DraftLaw::ByVoltage(id, over, a, b) => {
                let mut gain = self.definitions.settled(*id)?.value.clone();
                if let Some(over) = over {
                    let divisor = self.definitions.settled(*over)?.value.clone();
                    gain = Value::Product(vec![gain, Value::Power(Box::new(divisor), -1)]);
                }
                let voltage =
                    crate::circuit::Quantity::Voltage(self.nodes.id(*a), self.nodes.id(*b));
                controlled(draft.class, vec![Control { gain, quantity: voltage }])
            }
            DraftLaw::Transformer(id, a, b) => Law::Transformer {
                ratio: self.definitions.settled(*id)?.value.clone(),
                secondary: (self.nodes.id(*a), self.nodes.id(*b)),
            },
            DraftLaw::Gyrator(id, a, b) => Law::Gyrator {
                conductance: self.definitions.settled(*id)?.value.clone(),
                second: (self.nodes.id(*a), self.nodes.id(*b)),
            },
            DraftLaw::Mutual(first, second, id) => {
                let inductance = self.definitions.settled(*id)?.value.clone();
                let (a, b) = (self.inductor(first, faults), self.inductor(second, faults));
                let (first_id, second_id) = (a?, b?);
                if first_id == second_id {
                    faults.push(
                        Diagnostic::error(
                            "inductors",
                            second.span,
                            format!("`{}` is coupled to itself", second.text),
                        )
                        .help("name two inductors"),
                    );
                }
                Law::Mutual { first: first_id, second: second_id, inductance }
            }
            DraftLaw::Controlled(_) => {
                let mut controls = Vec::with_capacity(terms.len());
                for term in terms {
                    let gain = self.definitions.value(&term.gain, faults);
                    let quantity = self.quantity(&term.access, faults);
                    if let (Some(gain), Some(quantity)) = (gain, quantity) {
                        controls.push(Control { gain: gain.value, quantity });
                    }
                }
                controlled(draft.class, controls)
            }
        })
    }

    fn quantity(
        &self,
        access: &Access,
        faults: &mut Vec<Diagnostic>,
    ) -> Option<crate::circuit::Quantity> {
        match access {
            Access::Voltage(plus, minus) => {
                let plus = self.known_node(plus, faults)?;
                let minus = match minus {
                    Some(minus) => self.known_node(minus, faults)?,
                    None => GROUND,
                };
                Some(crate::circuit::Quantity::Voltage(plus, minus))
            }
            Access::Current(name) => {
                let index = self.elements.get(&name.text);
                if let Some(index) =
                    index.filter(|index| has_one_current(self.drafts[**index].class))
                {
                    // Elements are made in the order of the drafts, one for each.
                    return Some(crate::circuit::Quantity::Current(ElementId(
                        u32::try_from(*index).ok()?,
                    )));
                }
                let known = self.drafts.iter().map(|draft| draft.name.text.as_str());
                let near = self.suggest(&name.text, known, faults.len());
                let device = self.devices.contains_key(&name.text);
                faults.push(ask::unknown_element(name, near, device));
                None
            }
        }
    }

    /// An inductor of a coupling.
    fn inductor(&self, name: &Name, faults: &mut Vec<Diagnostic>) -> Option<ElementId> {
        let Some(index) = self.elements.get(&name.text) else {
            let known = self.drafts.iter().filter(|draft| draft.class == Class::Inductor);
            let known = known.map(|draft| draft.name.text.as_str());
            let near = self.suggest(&name.text, known, faults.len());
            faults.push(ask::unknown_element(name, near, false));
            return None;
        };
        if self.drafts[*index].class != Class::Inductor {
            faults.push(
                Diagnostic::error(
                    "inductors",
                    name.span,
                    format!("`{}` is no inductor", name.text),
                )
                .help("a coupling takes the names of two inductors"),
            );
            return None;
        }
        u32::try_from(*index).ok().map(ElementId)
    }

    fn known_node(&self, name: &Name, faults: &mut Vec<Diagnostic>) -> Option<NodeId> {
        if let Some(node) = self.nodes.find(&name.text) {
            return Some(self.nodes.id(node));
        }
        let near = self.suggest(&name.text, self.nodes.names(), faults.len());
        faults.push(ask::unknown_node(name, near));
        None
    }

    /// Resolves the questions; returns the names of all, also of those that cannot be answered.
    fn resolve_queries(&mut self, circuit: &mut Circuit) -> FxHashMap<String, Span> {
        let resolver = Resolver::new(circuit);
        let mut asks = Vec::new();
        let mut names: FxHashMap<String, Span> = FxHashMap::default();
        for (query, span) in std::mem::take(&mut self.queries) {
            let name = &query.name;
            if self.refuse_name(name) {
                continue;
            }
            let taken = self.elements.contains_key(&name.text)
                || self.definitions.find(&name.text).is_some();
            if taken {
                self.faults.push(
                    Diagnostic::error(
                        "ask-name",
                        name.span,
                        format!("`{}` already names something of the circuit", name.text),
                    )
                    .help("give the result another name"),
                );
                continue;
            }
            if let Some(first) = names.insert(name.text.clone(), name.span) {
                self.faults.push(
                    Diagnostic::error(
                        "duplicate",
                        name.span,
                        format!("a second `ask {}`", name.text),
                    )
                    .label(first, "the first one"),
                );
                continue;
            }
            match resolver.resolve(&query) {
                Ok(mut found) => {
                    found.line = self.source.line(span.start);
                    asks.push(found);
                }
                Err(faults) => self.faults.extend(faults),
            }
        }
        circuit.asks = asks;
        names
    }
}

/// The messages for names that other notations give a meaning.
pub(crate) fn reserved_in_expression(name: &str, span: Span) -> Option<Diagnostic> {
    let fault = |what: &str, help: &str| {
        Some(Diagnostic::error("reserved", span, what.to_owned()).help(help))
    };
    match name {
        "j" | "jw" | "jomega" => fault(
            "the imaginary unit is no part of an expression",
            "write `s` for the complex frequency (s = jω on the axis)",
        ),
        "w" | "omega" => fault(
            "the angular frequency is no part of an expression",
            "write `s` for the complex frequency (s = jω on the axis), or `let` with another name",
        ),
        "V" | "I" => fault(
            "a voltage or a current needs its place in parentheses",
            "write `V(node)`, `V(a, b)` or `I(element)`",
        ),
        _ if is_ground(name) || names::is_reserved(name) => {
            fault(&format!("`{name}` is a word of the language"), "choose another name")
        }
        _ => None,
    }
}

/// A band from its ends.
///
/// # Errors
/// A diagnostic if a unit is not hertz, or the ends are not in order.
pub(crate) fn make_band(from: &Quantity, to: &Quantity) -> Result<Band, Diagnostic> {
    for end in [from, to] {
        if end.unit.is_some_and(|unit| unit != Unit::HERTZ) {
            return Err(Diagnostic::error("wrong-unit", end.span, "a band is given in hertz"));
        }
        if end.tolerance.is_some() {
            return Err(Diagnostic::error("band", end.span, "a band has no tolerance"));
        }
        if !end.value.is_positive() {
            return Err(Diagnostic::error("band", end.span, "a band begins above 0 Hz"));
        }
    }
    if from.value >= to.value {
        return Err(Diagnostic::error(
            "band",
            from.span.join(to.span),
            "a band goes from a lower to a higher frequency",
        ));
    }
    Ok(Band { from: from.value.clone(), to: to.value.clone() })
}

/// Whether `I(…)` of such an element means something.
pub(crate) fn has_one_current(class: Class) -> bool {
    !matches!(
        class,
        Class::Opamp | Class::Nullor | Class::Transformer | Class::Gyrator | Class::Mutual
    )
}

fn controlled(class: Class, controls: Vec<Control>) -> Law {
    if class == Class::Voltage {
        Law::ControlledVoltage(controls)
    } else {
        Law::ControlledCurrent(controls)
    }
}

/// `s` times a value, flat.
fn times_s(value: Value) -> Value {
    match value {
        Value::Product(mut factors) => {
            factors.insert(0, Value::S);
            Value::Product(factors)
        }
        other => Value::Product(vec![Value::S, other]),
    }
}
