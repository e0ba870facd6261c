//! Questions: from a query to transfer functions of a finished circuit.
//!
//! A query is a ratio of two of `V(..)`, `I(..)` and an independent source's name, a bare `V(..)` or
//! `I(..)`, or an impedance or admittance of a port. What drives the circuit is found here, so that the
//! derivation need not know the language.

use super::build::has_one_current;
use super::diagnostic::{Diagnostic, Span};
use super::names::{self, is_ground, nearest};
use super::queries::empty_port;
use super::sources::{self, Access};
use super::syntax::{Argument, Expression, ExpressionKind, Name, Query};
use crate::circuit::{
    Ask, Circuit, Drive, ElementId, GROUND, Law, NodeId, Probe, Question, Transfer, Unit,
};
use rustc_hash::FxHashMap;

/// Resolves a query against a circuit; the line is left 0.
///
/// # Errors
/// What is unknown or cannot be asked.
pub(crate) fn resolve(circuit: &Circuit, query: &Query) -> Result<Ask, Vec<Diagnostic>> {
    Resolver::new(circuit).resolve(query)
}

/// The nodes that a question is about.
pub(crate) fn nodes(ask: &Ask) -> impl Iterator<Item = NodeId> {
    let of_question = match &ask.question {
        Question::TwoPort(ports) => {
            vec![ports.port1.0, ports.port1.1, ports.port2.0, ports.port2.1]
        }
        Question::NoiseDensity(plus, minus) => vec![*plus, *minus],
        Question::Ratio(_) | Question::Superposition(_) | Question::ReturnRatio(_) => Vec::new(),
    };
    let of_transfers = ask.transfers().iter().flat_map(|transfer| {
        let mut nodes = Vec::new();
        for probe in [transfer.numerator, transfer.denominator] {
            if let Probe::Voltage(a, b) = probe {
                nodes.extend([a, b]);
            }
        }
        if let Drive::Port(a, b) = transfer.drive {
            nodes.extend([a, b]);
        }
        nodes
    });
    of_transfers.chain(of_question)
}

/// The error for a node that does not exist.
pub(crate) fn unknown_node(name: &Name, near: Option<&str>) -> Diagnostic {
    let fault =
        Diagnostic::error("unknown-node", name.span, format!("there is no node `{}`", name.text));
    match near {
        _ if name.text == "0" => fault.help("write `ground`"),
        Some(near) => fault.help(format!("is it `{near}`?")),
        None => fault,
    }
}

/// The error for an element that does not exist.
pub(crate) fn unknown_element(name: &Name, near: Option<&str>, device: bool) -> Diagnostic {
    let fault = Diagnostic::error(
        "unknown-element",
        name.span,
        format!("there is no two-terminal element `{}`", name.text),
    );
    match near {
        _ if device => fault
            .help("a device has several currents: put a `voltage Vx = 0 V` in the one you mean"),
        Some(near) => fault.help(format!("is it `{near}`?")),
        None => fault,
    }
}

/// One side of a ratio.
#[derive(Clone, Copy)]
enum Side {
    Voltage(NodeId, NodeId),
    Current(ElementId),
    Source(ElementId),
}

/// Resolves queries against one circuit.
pub(crate) struct Resolver<'c> {
    circuit: &'c Circuit,
    nodes: FxHashMap<&'c str, NodeId>,
    elements: FxHashMap<&'c str, ElementId>,
    /// The independent sources, in the order of the file.
    sources: Vec<ElementId>,
}

impl<'c> Resolver<'c> {
    /// Indexes the names of a circuit.
    pub(crate) fn new(circuit: &'c Circuit) -> Self {
        let mut nodes = FxHashMap::default();
        for (node, id) in circuit.nodes.iter().zip(0_u32..) {
            nodes.insert(node.name.as_str(), NodeId(id));
            nodes.extend(node.aliases.iter().map(|alias| (alias.as_str(), NodeId(id))));
        }
        let numbered = || circuit.elements.iter().zip((0_u32..).map(ElementId));
        let elements = numbered().map(|(element, id)| (element.name.as_str(), id)).collect();
        let sources = numbered()
            .filter(|(element, _)| matches!(element.law, Law::VoltageSource | Law::CurrentSource))
            .map(|(_, id)| id)
            .collect();
        Self { circuit, nodes, elements, sources }
    }

    /// Resolves a query; the line is left 0.
    ///
    /// # Errors
    /// What is unknown or cannot be asked.
    pub(crate) fn resolve(&self, query: &Query) -> Result<Ask, Vec<Diagnostic>> {
        self.ask(query).map_err(|fault| vec![fault])
    }

    fn ask(&self, query: &Query) -> Result<Ask, Diagnostic> {
        let from = match &query.from {
            Some(name) => Some((self.independent_source(name)?, name.span)),
            None => None,
        };
        let question = self.question(&query.expression, from)?;
        let mut text = tidy(&query.expression);
        if let Some(from) = &query.from {
            text = format!("{text} from {}", from.text);
        }
        Ok(Ask { name: query.name.text.clone(), text, question, line: 0 })
    }

    fn question(
        &self,
        expression: &Expression,
        from: Option<(ElementId, Span)>,
    ) -> Result<Question, Diagnostic> {
        if let ExpressionKind::Call(name, arguments) = &expression.kind
            && names::QUERIES.contains(&name.text.as_str())
        {
            if let Some((_, span)) = from {
                return Err(Diagnostic::error(
                    "from",
                    span,
                    format!("`{}(…)` needs no driving source", name.text),
                )
                .help("leave `from` out"));
            }
            let span = expression.span;
            return match name.text.as_str() {
                "two_port" => self.two_port(arguments, span),
                "return_ratio" => self.return_ratio(arguments, span),
                "noise_density" => self.noise_density(arguments, span),
                _ => self.port_query(name, arguments, span).map(Question::Ratio),
            };
        }
        match &expression.kind {
            ExpressionKind::Product(factors) => {
                if let [upper, lower] = factors.as_slice()
                    && let ExpressionKind::Power(lower, -1) = &lower.kind
                {
                    return self.ratio(upper, lower, from).map(Question::Ratio);
                }
                Err(no_query(expression.span))
            }
            ExpressionKind::Call(..) => self.superposition(expression, from),
            ExpressionKind::Name(name) => Err(no_query(expression.span)
                .help(format!("a result is a ratio, as in `V(out) / {name}`"))),
            _ => Err(no_query(expression.span)),
        }
    }

    fn ratio(
        &self,
        upper: &Expression,
        lower: &Expression,
        from: Option<(ElementId, Span)>,
    ) -> Result<Transfer, Diagnostic> {
        let numerator = self.side(upper)?;
        let denominator = self.side(lower)?;
        let named = match (numerator, denominator) {
            (Side::Source(a), Side::Source(b)) if a != b => {
                return Err(Diagnostic::error(
                    "two-sources",
                    upper.span.join(lower.span),
                    "two independent sources have no ratio",
                )
                .help("write `V(…)` or `I(…)` for what one of them causes"));
            }
            (Side::Source(source), _) | (_, Side::Source(source)) => Some(source),
            _ => None,
        };
        if let (Some(named), Some((from, span))) = (named, from)
            && named != from
        {
            return Err(Diagnostic::error(
                "from",
                span,
                format!("the ratio names `{}` as its source", self.circuit[named].name),
            )
            .help("leave `from` out"));
        }
        let source = match named.or(from.map(|(source, _)| source)) {
            Some(source) => source,
            None => self.driving_source(denominator, upper.span.join(lower.span))?,
        };
        Ok(Transfer {
            drive: Drive::Source(source),
            numerator: probe(numerator),
            denominator: probe(denominator),
            removed: Vec::new(),
            unit: self.unit(numerator).over(self.unit(denominator)),
        })
    }

    /// The source that a ratio of two quantities is about.
    fn driving_source(&self, denominator: Side, span: Span) -> Result<ElementId, Diagnostic> {
        let sources = &self.sources;
        if let [only] = sources.as_slice() {
            return Ok(*only);
        }
        // With every other source zeroed, only the source that sets the denominator can drive.
        for id in sources {
            let element = &self.circuit[*id];
            let sets = match (denominator, &element.law) {
                (Side::Voltage(a, b), Law::VoltageSource) => {
                    (a, b) == (element.plus, element.minus)
                        || (b, a) == (element.plus, element.minus)
                }
                (Side::Current(current), Law::CurrentSource) => current == *id,
                _ => false,
            };
            if sets {
                return Ok(*id);
            }
        }
        if sources.is_empty() {
            return Err(Diagnostic::error("no-source", span, "nothing drives this circuit")
                .help("add an independent source, as in `in > voltage Vin > ground`"));
        }
        let list: Vec<&str> = sources.iter().map(|id| self.circuit[*id].name.as_str()).collect();
        Err(Diagnostic::error(
            "several-sources",
            span,
            format!("several sources could drive this: {}", list.join(", ")),
        )
        .help(format!("say which: `… from {}`", list[0])))
    }

    fn superposition(
        &self,
        expression: &Expression,
        from: Option<(ElementId, Span)>,
    ) -> Result<Question, Diagnostic> {
        let side = self.side(expression)?;
        let sources = match from {
            Some((source, _)) => vec![source],
            None => self.sources.clone(),
        };
        if sources.is_empty() {
            return Err(Diagnostic::error(
                "no-source",
                expression.span,
                "nothing drives this circuit",
            )
            .help("add an independent source, as in `in > voltage Vin > ground`"));
        }
        let transfer = |source: ElementId| Transfer {
            drive: Drive::Source(source),
            numerator: probe(side),
            denominator: Probe::Drive,
            removed: Vec::new(),
            unit: self.unit(side).over(self.unit(Side::Source(source))),
        };
        Ok(Question::Superposition(sources.into_iter().map(transfer).collect()))
    }

    fn port_query(
        &self,
        name: &Name,
        arguments: &[Argument],
        span: Span,
    ) -> Result<Transfer, Diagnostic> {
        let impedance = name.text == "impedance";
        let [first, second] = arguments else {
            return Err(wrong_port(name, span));
        };
        let ([a], [b]) = (first.names.as_slice(), second.names.as_slice()) else {
            return Err(wrong_port(name, span));
        };
        let (plus, minus) = (self.node(a)?, self.node(b)?);
        if plus == minus {
            return Err(empty_port(span));
        }
        let removed = self.across(&[(plus, minus)]);
        let voltage = Probe::Voltage(plus, minus);
        let (numerator, denominator, unit) = if impedance {
            (voltage, Probe::Drive, Unit::OHM)
        } else {
            (Probe::Drive, voltage, Unit::SIEMENS)
        };
        Ok(Transfer { drive: Drive::Port(plus, minus), numerator, denominator, removed, unit })
    }

    /// The independent sources that lie exactly across a port, either way round.
    pub(crate) fn across(&self, ports: &[(NodeId, NodeId)]) -> Vec<ElementId> {
        let lies_across = |id: &ElementId| {
            let (plus, minus) = (self.circuit[*id].plus, self.circuit[*id].minus);
            ports.contains(&(plus, minus)) || ports.contains(&(minus, plus))
        };
        self.sources.iter().copied().filter(lies_across).collect()
    }

    /// The circuit that questions are asked of.
    pub(crate) fn circuit(&self) -> &'c Circuit {
        self.circuit
    }

    /// The element of that name, of any kind.
    pub(crate) fn any_element(&self, name: &str) -> Option<ElementId> {
        self.elements.get(name).copied()
    }

    fn side(&self, expression: &Expression) -> Result<Side, Diagnostic> {
        match &expression.kind {
            ExpressionKind::Name(text) => {
                let name = Name { text: text.clone(), span: expression.span };
                self.independent_source(&name).map(Side::Source)
            }
            ExpressionKind::Call(..) => match sources::access(expression)? {
                Access::Voltage(a, b) => {
                    let plus = self.node(&a)?;
                    let minus = match &b {
                        Some(b) => self.node(b)?,
                        None => GROUND,
                    };
                    if plus == minus {
                        return Err(Diagnostic::error(
                            "empty-port",
                            expression.span,
                            "this voltage is between a node and itself",
                        ));
                    }
                    Ok(Side::Voltage(plus, minus))
                }
                Access::Current(name) => self.element(&name).map(Side::Current),
            },
            _ => Err(no_query(expression.span)),
        }
    }

    /// The node of that name.
    pub(crate) fn node(&self, name: &Name) -> Result<NodeId, Diagnostic> {
        if is_ground(&name.text) {
            return Ok(GROUND);
        }
        self.nodes.get(name.text.as_str()).copied().ok_or_else(|| {
            let known = self.circuit.nodes.iter().flat_map(|node| {
                std::iter::once(node.name.as_str()).chain(node.aliases.iter().map(String::as_str))
            });
            unknown_node(name, nearest(&name.text, known))
        })
    }

    fn element(&self, name: &Name) -> Result<ElementId, Diagnostic> {
        let known = || self.circuit.elements.iter().map(|element| element.name.as_str());
        match self.elements.get(name.text.as_str()).copied() {
            Some(id)
                if !has_one_current(self.circuit[id].class)
                    && !matches!(self.circuit[id].law, Law::ControlledVoltage(_)) =>
            {
                Err(unknown_element(name, None, true))
            }
            Some(id) => Ok(id),
            None => {
                let dotted = format!("{}.", name.text);
                let device = known().any(|known| known.starts_with(&dotted));
                Err(unknown_element(name, nearest(&name.text, known()), device))
            }
        }
    }

    fn independent_source(&self, name: &Name) -> Result<ElementId, Diagnostic> {
        let fault = Diagnostic::error(
            "unknown-source",
            name.span,
            format!("`{}` is no independent source", name.text),
        );
        match self.elements.get(name.text.as_str()).copied() {
            Some(id) if matches!(self.circuit[id].law, Law::VoltageSource | Law::CurrentSource) => {
                Ok(id)
            }
            Some(_) => Err(fault.help(format!("write `I({})` for its current", name.text))),
            None if self.nodes.contains_key(name.text.as_str()) => {
                Err(fault.help(format!("write `V({})` for the node's voltage", name.text)))
            }
            None => {
                let known = self.sources.iter().map(|id| self.circuit[*id].name.as_str());
                Err(match nearest(&name.text, known.clone()) {
                    Some(near) => fault.help(format!("is it `{near}`?")),
                    None => {
                        let list: Vec<&str> = known.take(8).collect();
                        if list.is_empty() {
                            fault.help("this circuit has none")
                        } else {
                            fault.help(format!("there are: {}", list.join(", ")))
                        }
                    }
                })
            }
        }
    }

    fn unit(&self, side: Side) -> Unit {
        match side {
            Side::Voltage(..) => Unit::VOLT,
            Side::Current(_) => Unit::AMPERE,
            Side::Source(id) if matches!(self.circuit[id].law, Law::VoltageSource) => Unit::VOLT,
            Side::Source(_) => Unit::AMPERE,
        }
    }
}

fn probe(side: Side) -> Probe {
    match side {
        Side::Voltage(a, b) => Probe::Voltage(a, b),
        Side::Current(id) => Probe::Current(id),
        Side::Source(_) => Probe::Drive,
    }
}

fn wrong_port(name: &Name, span: Span) -> Diagnostic {
    Diagnostic::error("arguments", span, format!("`{}(…)` takes two nodes", name.text))
        .help(format!("write `{}(in, ground)`", name.text))
}

fn no_query(span: Span) -> Diagnostic {
    Diagnostic::error("no-query", span, "this is no query")
        .help("a query is `V(out) / Vin`, `I(R1) / V(in)`, `V(out)`, `impedance(a, b)`, `admittance(a, b)`, `two_port(z, a b, c d)`, `return_ratio(X)` or `noise_density(out)`")
}

/// The query with even spaces.
fn tidy(expression: &Expression) -> String {
    match &expression.kind {
        ExpressionKind::Name(name) => name.clone(),
        ExpressionKind::Call(name, arguments) => {
            let list: Vec<&str> = arguments.iter().map(|argument| argument.text.as_str()).collect();
            format!("{}({})", name.text, list.join(", "))
        }
        ExpressionKind::Product(factors) => match factors.as_slice() {
            [upper, Expression { kind: ExpressionKind::Power(lower, -1), .. }] => {
                format!("{} / {}", tidy(upper), tidy(lower))
            }
            _ => String::new(),
        },
        _ => String::new(),
    }
}
