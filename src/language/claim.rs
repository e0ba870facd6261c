//! What is said of a finished circuit: hand-derived formulas, their units, and limits.
//!
//! Unlike in element values, an unknown name is an error here: a formula speaks of what there is. A
//! formula whose units do not fit is no error of the file: it is wrong, and that is a finding.

use super::build::{Builder, reserved_in_expression};
use super::definitions::{find_call, to_value, visit_names};
use super::diagnostic::{Diagnostic, Span};
use super::names::nearest;
use super::parse::{self, Reader, Rule};
use super::queries::{entries, entry_units};
use super::source::Source;
use super::sources;
use super::syntax::{Expression, ExpressionKind, LimitPoint, Name};
use crate::circuit::{
    Ask, Circuit, Claim, Limit, LimitTo, Question, Symbol, SymbolRole, Unit, Value,
};
use num_traits::Zero;
use rustc_hash::FxHashMap;

/// Resolves the names of an expression.
///
/// # Errors
/// One diagnostic for each name that is unknown.
pub(crate) fn resolve(
    circuit: &Circuit,
    expression: &Expression,
) -> Result<Value, Vec<Diagnostic>> {
    Formulas::new(circuit).resolve(expression)
}

/// The names that formulas of a circuit may hold.
struct Formulas<'c> {
    circuit: &'c Circuit,
    known: FxHashMap<String, Value>,
}

impl<'c> Formulas<'c> {
    fn new(circuit: &'c Circuit) -> Self {
        Self { circuit, known: known_values(circuit) }
    }

    fn resolve(&self, expression: &Expression) -> Result<Value, Vec<Diagnostic>> {
        if let Some(call) = find_call(expression) {
            return Err(vec![match sources::access(call) {
                Err(fault) => fault,
                Ok(_) => Diagnostic::error(
                    "access",
                    call.span,
                    "a formula holds symbols, no voltages or currents",
                ),
            }]);
        }
        let mut faults = Vec::new();
        visit_names(expression, &mut |name, span| faults.extend(self.name_fault(name, span)));
        if !faults.is_empty() {
            return Err(faults);
        }
        to_value(expression, &mut |name| self.known.get(name).cloned()).ok_or_else(|| {
            vec![Diagnostic::error(
                "unknown-name",
                expression.span,
                "this formula holds an unknown name",
            )]
        })
    }

    /// What is wrong with a name in a formula.
    fn name_fault(&self, name: &str, span: Span) -> Option<Diagnostic> {
        if self.known.contains_key(name) {
            return None;
        }
        if name == "pi" {
            return Some(Diagnostic::error(
                "unknown-name",
                span,
                "no value of this circuit holds `pi`",
            ));
        }
        if let Some(fault) = reserved_in_expression(name, span) {
            return Some(fault);
        }
        let fault = unknown_symbol(name, span);
        Some(if let Some(product) = as_product(name, self.circuit) {
            fault.help(format!("put spaces between factors: `{product}`"))
        } else if let Some(near) = nearest(name, names_of(self.circuit)) {
            fault.help(format!("is it `{near}`?"))
        } else {
            fault
        })
    }

    /// The unit of an expression; `None` for 0, which fits every unit.
    fn unit(&self, expression: &Expression) -> Result<Option<Unit>, UnitClash> {
        Ok(match &expression.kind {
            ExpressionKind::Number(number) => (!number.is_zero()).then_some(Unit::ONE),
            ExpressionKind::Name(name) if name == "s" => Some(Unit::HERTZ),
            ExpressionKind::Name(name) => {
                self.known.get(name).and_then(|value| value_unit(self.circuit, value))
            }
            ExpressionKind::Call(..) => None,
            ExpressionKind::Negative(inner) => self.unit(inner)?,
            ExpressionKind::Power(base, exponent) => {
                self.unit(base)?.map(|unit| unit.power(*exponent))
            }
            ExpressionKind::Product(factors) => {
                // Every factor is visited, for the sums inside.
                let mut product = Some(Unit::ONE);
                for factor in factors {
                    let unit = self.unit(factor)?;
                    product = product.zip(unit).map(|(product, unit)| product.times(unit));
                }
                product
            }
            ExpressionKind::Sum(parts) | ExpressionKind::Parallel(parts) => {
                let mut first = None;
                for part in parts {
                    match (first, self.unit(part)?) {
                        (Some(left), Some(right)) if left != right => {
                            return Err(UnitClash { left, right, span: part.span });
                        }
                        (None, unit) => first = unit,
                        _ => {}
                    }
                }
                first
            }
        })
    }
}

fn names_of(circuit: &Circuit) -> impl Iterator<Item = &str> {
    let symbols = circuit.symbols.iter().map(|symbol| symbol.name.as_str());
    symbols.chain(circuit.definitions.iter().map(|definition| definition.name.as_str()))
}

/// All names that a formula may use. A dotted name may also be written with `_`, if that is free.
fn known_values(circuit: &Circuit) -> FxHashMap<String, Value> {
    let mut known: FxHashMap<String, Value> = FxHashMap::default();
    for (symbol, id) in circuit.symbols.iter().zip(0_u32..) {
        known.insert(symbol.name.clone(), Value::Symbol(crate::circuit::SymbolId(id)));
    }
    for definition in &circuit.definitions {
        known.insert(definition.name.clone(), definition.value.clone());
    }
    for name in names_of(circuit).filter(|name| name.contains('.')) {
        let identifier = name.replace('.', "_");
        if !known.contains_key(&identifier)
            && let Some(value) = known.get(name).cloned()
        {
            known.insert(identifier, value);
        }
    }
    known
}

/// `sR1C1` as `s R1 C1`, if it falls into known names.
fn as_product(text: &str, circuit: &Circuit) -> Option<String> {
    // Longest first, so that `R12` is not read as `R1` and a rest.
    let mut names: Vec<&str> = names_of(circuit).chain(["s"]).collect();
    names.sort_unstable_by_key(|name| std::cmp::Reverse(name.len()));
    if text.len() > 200 {
        return None;
    }
    // ends[i]: the name that the text up to byte i ends with, if all of it falls into names.
    let mut ends: Vec<Option<&str>> = vec![None; text.len() + 1];
    for end in 1..=text.len() {
        ends[end] = names.iter().copied().find(|name| {
            text.get(..end).is_some_and(|head| head.ends_with(name))
                && (end == name.len() || ends[end - name.len()].is_some())
        });
    }
    let mut factors = Vec::new();
    let mut end = text.len();
    while end > 0 {
        let name = ends[end]?;
        factors.push(name);
        end -= name.len();
    }
    factors.reverse();
    (factors.len() > 1).then(|| factors.join(" "))
}

/// Resolves a limit.
///
/// # Errors
/// A name that is no symbol of the circuit.
pub(crate) fn limit(
    circuit: &Circuit,
    name: &Name,
    point: LimitPoint,
) -> Result<Limit, Diagnostic> {
    let to = match point {
        LimitPoint::Zero => LimitTo::Zero,
        LimitPoint::Infinity => LimitTo::Infinity,
    };
    if name.text == "s" {
        return Ok(Limit { symbol: None, to });
    }
    let by_identifier = || {
        let written = |symbol: &&Symbol| symbol.name.replace('.', "_") == name.text;
        circuit.symbols.iter().find(written).and_then(|symbol| circuit.symbol(&symbol.name))
    };
    if let Some(symbol) = circuit.symbol(&name.text).or_else(by_identifier) {
        if circuit[symbol].role == SymbolRole::Pi {
            return Err(Diagnostic::error("limit", name.span, "`pi` is a number"));
        }
        return Ok(Limit { symbol: Some(symbol), to });
    }
    if circuit.definitions.iter().any(|definition| definition.name == name.text) {
        return Err(Diagnostic::error(
            "limit",
            name.span,
            format!("`{}` stands for an expression and has no limit of its own", name.text),
        )
        .help("name a symbol that the expression holds"));
    }
    let fault = unknown_symbol(name.text.as_str(), name.span);
    Err(match nearest(&name.text, circuit.symbols.iter().map(|symbol| symbol.name.as_str())) {
        Some(near) => fault.help(format!("is it `{near}`?")),
        None => fault,
    })
}

fn unknown_symbol(name: &str, span: Span) -> Diagnostic {
    Diagnostic::error("unknown-name", span, format!("no symbol `{name}` in this circuit"))
}

impl Builder<'_> {
    /// Resolves the limits of the file.
    pub(crate) fn resolve_limits(&mut self, circuit: &mut Circuit) {
        let mut places: Vec<(Limit, Span)> = Vec::new();
        for (name, point) in std::mem::take(&mut self.limits) {
            match limit(circuit, &name, point) {
                Ok(found) => {
                    if let Some((_, first)) =
                        places.iter().find(|(known, _)| known.symbol == found.symbol)
                    {
                        self.faults.push(
                            Diagnostic::error(
                                "duplicate",
                                name.span,
                                format!("a second limit of `{}`", name.text),
                            )
                            .label(*first, "the first one"),
                        );
                        continue;
                    }
                    places.push((found, name.span));
                }
                Err(fault) => self.faults.push(fault),
            }
        }
        circuit.limits = places.into_iter().map(|(limit, _)| limit).collect();
    }

    /// Resolves the claims of the file; `asked` holds the names of all questions.
    pub(crate) fn resolve_claims(
        &mut self,
        circuit: &mut Circuit,
        asked: &FxHashMap<String, Span>,
    ) {
        let formulas = Formulas::new(circuit);
        let mut claims = Vec::new();
        for draft in std::mem::take(&mut self.claims) {
            if let Some(fault) = name_fault(circuit, &draft.name) {
                // A question that could not be resolved has its own error.
                let base = draft.name.text.split('.').next().unwrap_or_default();
                if !asked.contains_key(base) || circuit.asks.iter().any(|ask| ask.name == base) {
                    self.faults.push(fault);
                }
                continue;
            }
            match formulas.resolve(&draft.expression) {
                Ok(formula) => claims.push(Claim {
                    name: draft.name.text,
                    formula,
                    text: self.source.written(draft.span).to_owned(),
                    line: self.source.line(draft.name.span.start),
                    span: (draft.span.start, draft.span.end),
                }),
                Err(faults) => self.faults.extend(faults),
            }
        }
        circuit.claims = claims;
    }
}

/// What is wrong with the name of a claim.
fn name_fault(circuit: &Circuit, name: &Name) -> Option<Diagnostic> {
    match answer_unit(circuit, &name.text) {
        Some(_) => None,
        None => {
            let fault = |message: String| Diagnostic::error("claim-name", name.span, message);
            let ask = circuit.asks.iter().find(|ask| ask.name == name.text);
            if let Some(Question::TwoPort(ports)) = ask.map(|ask| &ask.question) {
                let entries = entries(ports.set).map(|entry| format!("`{}.{entry}`", name.text));
                return Some(
                    fault(format!("`{}` is a set of four results", name.text))
                        .help(format!("claim one of them: {}", entries.join(", "))),
                );
            }
            if ask.is_some() {
                return Some(
                    fault(format!("`{}` is a sum over several sources", name.text))
                        .help("ask for the ratio to one source, as in `ask H = V(out) / Vin`"),
                );
            }
            let known: Vec<String> = circuit.asks.iter().flat_map(names_of_answer).collect();
            let fault = fault(format!("no `ask` is named `{}`", name.text));
            Some(match nearest(&name.text, known.iter().map(String::as_str)) {
                Some(near) => fault.help(format!("is it `{near}`?")),
                None if known.is_empty() => {
                    fault.help(format!("ask for it first: `ask {} = V(out) / Vin`", name.text))
                }
                None => {
                    fault.help(format!("there are: {}", known[..known.len().min(8)].join(", ")))
                }
            })
        }
    }
}

/// The names under which an answer's parts can be claimed.
fn names_of_answer(ask: &Ask) -> Vec<String> {
    match &ask.question {
        Question::TwoPort(ports) => {
            entries(ports.set).iter().map(|entry| format!("{}.{entry}", ask.name)).collect()
        }
        _ => vec![ask.name.clone()],
    }
}

/// The unit of the answer that a claim names; `None` where there is no such single answer.
fn answer_unit(circuit: &Circuit, name: &str) -> Option<Unit> {
    circuit.asks.iter().find_map(|ask| {
        if let Question::TwoPort(ports) = &ask.question {
            let entry = name.strip_prefix(&ask.name)?.strip_prefix('.')?;
            let index = entries(ports.set).iter().position(|own| own == entry)?;
            return Some(entry_units(ports.set)[index]);
        }
        if ask.name != name {
            return None;
        }
        match &ask.question {
            Question::Ratio(transfer) => Some(transfer.unit),
            Question::Superposition(transfers) => match transfers.as_slice() {
                [transfer] => Some(transfer.unit),
                _ => None,
            },
            Question::ReturnRatio(_) => Some(Unit::ONE),
            Question::NoiseDensity(..) => Some(Unit::VOLT.power(2).over(Unit::HERTZ)),
            Question::TwoPort(_) => None,
        }
    })
}

/// Two units that would have to be one.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct UnitClash {
    /// The unit of the first summand, or of the answer that is claimed.
    pub left: Unit,
    /// The unit of the other summand, or of the whole formula.
    pub right: Unit,
    /// The other summand, or the whole formula, in the file.
    pub span: Span,
}

/// The unit of a claim's formula, which is then also that of the answer.
///
/// A zero fits every unit. Cost: linear in the text of the claim.
///
/// # Errors
/// The first place where quantities of different units are added or set in parallel, or the whole formula
/// where it is not in the unit of the answer.
pub fn claim_units(circuit: &Circuit, claim: &Claim) -> Result<Unit, UnitClash> {
    let whole = Span { start: claim.span.0, end: claim.span.1 };
    // The resolved formula knows no places, so the text is read again.
    let source = Source::new(&claim.text);
    let range = 0..source.text.len();
    let mut faults = Vec::new();
    let expression =
        parse::tokens(&source, &range, Rule::expression_text, &mut faults).and_then(|pair| {
            Reader { source: &source, offset: 0, faults: &mut faults }.whole_expression(pair)
        });
    let formulas = Formulas::new(circuit);
    let found = match expression {
        Some(expression) => formulas.unit(&expression).map_err(|clash| UnitClash {
            span: Span { start: clash.span.start + whole.start, end: clash.span.end + whole.start },
            ..clash
        })?,
        None => value_unit(circuit, &claim.formula),
    };
    let wanted = answer_unit(circuit, &claim.name).or(found).unwrap_or(Unit::ONE);
    match found {
        Some(found) if found != wanted => {
            Err(UnitClash { left: wanted, right: found, span: whole })
        }
        _ => Ok(wanted),
    }
}

/// The unit of a value whose sums are sound; `None` for 0, which fits every unit.
fn value_unit(circuit: &Circuit, value: &Value) -> Option<Unit> {
    match value {
        Value::Number(number) => (!number.is_zero()).then_some(Unit::ONE),
        Value::Symbol(symbol) => Some(circuit[*symbol].unit),
        Value::S => Some(Unit::HERTZ),
        Value::Sum(parts) | Value::Parallel(parts) => {
            parts.iter().find_map(|part| value_unit(circuit, part))
        }
        Value::Product(factors) => factors
            .iter()
            .try_fold(Unit::ONE, |unit, factor| Some(unit.times(value_unit(circuit, factor)?))),
        Value::Power(base, exponent) => Some(value_unit(circuit, base)?.power(*exponent)),
        Value::Negative(inner) => value_unit(circuit, inner),
    }
}
