//! What is said of a finished circuit: hand-derived formulas, their units, and limits.
//!
//! Unlike in element values, an unknown name is an error here: a formula speaks of what there is. A
//! formula whose units do not fit is no error of the file: it is wrong, and that is a finding.

use super::build::{Builder, reserved_in_expression};
use super::claim_target::{self, Target};
use super::definitions::{find_call, to_value, visit_names};
use super::diagnostic::{Diagnostic, Span};
use super::latex;
use super::names::nearest;
use super::parse::{self, Reader, Rule};
use super::source::Source;
use super::sources;
use super::syntax::{ClaimDraft, Content, Expression, ExpressionKind, LimitPoint, Name};
use crate::circuit::{
    Circuit, Claim, Limit, LimitTo, Property, Relation, Symbol, SymbolId, SymbolRole, Unit, Value,
};
use num_traits::Zero;
use rustc_hash::FxHashMap;
use std::collections::BTreeMap;

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
    /// Symbols behind the circuit's own.
    extra: Vec<Symbol>,
    /// Names that a claim leaves to its own error.
    of_noise: bool,
}

impl<'c> Formulas<'c> {
    fn new(circuit: &'c Circuit) -> Self {
        Self { circuit, known: known_values(circuit), extra: Vec::new(), of_noise: false }
    }

    /// What a claim about an answer may hold besides: π, ω, and for a noise density the frequency and
    /// constants of nature, numbered as the density has them.
    fn of_claim(circuit: &'c Circuit, of_noise: bool) -> Self {
        let mut formulas = Self { of_noise, ..Self::new(circuit) };
        let mut add = |names: &[&str], role: SymbolRole, unit: Unit| {
            let index = formulas.circuit.symbols.len() + formulas.extra.len();
            let id = SymbolId(u32::try_from(index).unwrap_or(u32::MAX));
            formulas.extra.push(Symbol {
                name: names[0].to_owned(),
                role,
                unit,
                nominal: None,
                tolerance: None,
            });
            for name in names {
                formulas.known.entry((*name).to_owned()).or_insert(Value::Symbol(id));
            }
        };
        if !circuit.symbols.iter().any(|symbol| symbol.role == SymbolRole::Pi) {
            add(&["pi"], SymbolRole::Pi, Unit::ONE);
        }
        if of_noise {
            let kelvin = Unit { kelvin: 1, ..Unit::ONE };
            let joule = Unit::VOLT.times(Unit::AMPERE).times(Unit::SECOND);
            add(&["k_B"], SymbolRole::Parameter, joule.over(kelvin));
            add(&["T_0"], SymbolRole::Parameter, kelvin);
            add(&["q_e"], SymbolRole::Parameter, Unit::AMPERE.times(Unit::SECOND));
        }
        add(&["omega", "w"], SymbolRole::Parameter, Unit::HERTZ);
        if of_noise {
            formulas.known.entry("f".to_owned()).or_insert(Value::S);
        } else {
            for name in ["jw", "jomega"] {
                formulas.known.entry(name.to_owned()).or_insert(Value::S);
            }
        }
        formulas
    }

    /// Adds names that stand for values, where they are free.
    fn abbreviate(&mut self, abbreviations: &BTreeMap<String, Value>) {
        for (name, value) in abbreviations {
            self.known.entry(name.clone()).or_insert_with(|| value.clone());
        }
    }

    /// Reads a formula of a claim, LaTeX or not; spans are moved by `offset`.
    fn read(&self, text: &str, offset: usize) -> Result<Expression, Vec<Diagnostic>> {
        if latex::is_latex(text) {
            let names = self.latex_names();
            let unit = |expression: &Expression| self.unit(expression).map_err(|_| ());
            return latex::read(&latex::Context { names: &names, unit: &unit }, text, offset);
        }
        let source = Source::new(text);
        let range = 0..source.text.len();
        let mut faults = Vec::new();
        let read =
            parse::tokens(&source, &range, Rule::expression_text, &mut faults).and_then(|pair| {
                Reader { source: &source, offset: 0, faults: &mut faults }.whole_expression(pair)
            });
        match read {
            Some(mut expression) => {
                shift(&mut expression, offset);
                self.settle_subscripts(&mut expression).map_err(|fault| vec![fault])?;
                Ok(expression)
            }
            None => {
                for fault in &mut faults {
                    fault.span.start += offset;
                    fault.span.end += offset;
                    for label in &mut fault.labels {
                        label.span.start += offset;
                        label.span.end += offset;
                    }
                }
                Err(faults)
            }
        }
    }

    /// The names of the circuit as LaTeX may have them.
    fn latex_names(&self) -> latex::Names {
        let words = ["s", "j"].into_iter().filter(|&word| word != "s" || !self.of_noise);
        let mut names: Vec<&str> = self.known.keys().map(String::as_str).collect();
        // Of two ways to write one name, the one with a dot is the name.
        names.retain(|name| name.contains('.') || !self.is_identifier(name));
        names.retain(|name| !matches!(*name, "w" | "jw" | "jomega"));
        names.sort_unstable();
        latex::Names::new(names.into_iter().chain(words))
    }

    /// Replaces unknown names with subscripts in the manner of LaTeX (`R_1`) by the names that they are.
    fn settle_subscripts(&self, expression: &mut Expression) -> Result<(), Diagnostic> {
        let mut unknown = false;
        visit_names(expression, &mut |name, _| {
            unknown |= name.contains('_') && !self.known.contains_key(name);
        });
        if !unknown {
            return Ok(());
        }
        self.settle_with(&self.latex_names(), expression)
    }

    fn settle_with(
        &self,
        names: &latex::Names,
        expression: &mut Expression,
    ) -> Result<(), Diagnostic> {
        match &mut expression.kind {
            ExpressionKind::Name(name) if name.contains('_') && !self.known.contains_key(name) => {
                match names.meaning(&latex::Name::of(name)) {
                    latex::Meaning::One(meant) => *name = meant.to_owned(),
                    latex::Meaning::Several(several) => {
                        let message = format!("`{name}` has {} readings", several.len());
                        let list: Vec<String> =
                            several.iter().map(|name| format!("`{name}`")).collect();
                        return Err(Diagnostic::error("latex", expression.span, message)
                            .help(format!("write one of {}", list.join(", "))));
                    }
                    latex::Meaning::Nothing => {}
                }
                Ok(())
            }
            ExpressionKind::Number(_) | ExpressionKind::Name(_) | ExpressionKind::Call(..) => {
                Ok(())
            }
            ExpressionKind::Sum(parts)
            | ExpressionKind::Product(parts)
            | ExpressionKind::Parallel(parts) => {
                parts.iter_mut().try_for_each(|part| self.settle_with(names, part))
            }
            ExpressionKind::Power(inner, _) | ExpressionKind::Negative(inner) => {
                self.settle_with(names, inner)
            }
        }
    }

    /// Whether a name is only another way to write a dotted one.
    fn is_identifier(&self, name: &str) -> bool {
        names_of(self.circuit).all(|known| known != name)
            && names_of(self.circuit).any(|known| known.replace('.', "_") == name)
    }

    /// The unit of an expression that may hold roots as factors.
    fn unit_with_root(&self, expression: &Expression) -> Result<Option<Unit>, UnitClash> {
        let Ok((plain, roots)) = self.take_roots(expression, 1) else { return Ok(None) };
        if roots.is_empty() {
            return self.unit(expression);
        }
        let mut product = Unit::ONE;
        for factor in &plain {
            let Some(unit) = self.unit(factor)? else { return Ok(None) };
            product = product.times(unit);
        }
        let mut under = Unit::ONE;
        for root in &roots {
            let Some(unit) = self.unit(root)? else { return Ok(None) };
            under = under.times(unit);
        }
        let odd = [under.volt, under.ampere, under.second, under.kelvin];
        let span = expression.span;
        if odd.iter().any(|power| power % 2 != 0) {
            let (left, right) = (under, under);
            return Err(UnitClash { left, right, span, sum: None, before: None });
        }
        let half = Unit {
            volt: under.volt / 2,
            ampere: under.ampere / 2,
            second: under.second / 2,
            kelvin: under.kelvin / 2,
        };
        Ok(Some(product.times(half)))
    }

    /// The formula times the root of the second value.
    ///
    /// # Errors
    /// Unknown names, and roots that are no factors.
    fn resolve_with_root(
        &self,
        expression: &Expression,
    ) -> Result<(Value, Option<Value>), Vec<Diagnostic>> {
        let (plain, roots) = self.take_roots(expression, 1)?;
        let formula = match plain.len() {
            0 => Value::Number(num_traits::One::one()),
            1 => self.resolve(&plain[0])?,
            _ => Value::Product(
                plain.iter().map(|factor| self.resolve(factor)).collect::<Result<_, _>>()?,
            ),
        };
        if roots.is_empty() {
            return Ok((formula, None));
        }
        let roots: Vec<Value> =
            roots.iter().map(|root| self.resolve(root)).collect::<Result<_, _>>()?;
        let under =
            if roots.len() == 1 { roots.into_iter().next() } else { Some(Value::Product(roots)) };
        Ok((formula, under))
    }

    /// The factors of an expression to a power: those without a root, and what stands under roots.
    fn take_roots(
        &self,
        expression: &Expression,
        power: i32,
    ) -> Result<(Vec<Expression>, Vec<Expression>), Vec<Diagnostic>> {
        let span = expression.span;
        let to_power = |inner: &Expression| Expression {
            kind: match power {
                1 => inner.kind.clone(),
                _ => ExpressionKind::Power(Box::new(inner.clone()), power),
            },
            span,
        };
        match &expression.kind {
            ExpressionKind::Call(name, arguments) if name.text == "sqrt" => {
                let inner = match arguments.as_slice() {
                    [argument] => match argument.value.as_deref() {
                        Some(Content::Expression(inner)) => inner.clone(),
                        _ => self.read(&argument.text, argument.span.start)?,
                    },
                    _ => {
                        return Err(vec![Diagnostic::error(
                            "root",
                            span,
                            "`sqrt` takes one argument",
                        )]);
                    }
                };
                Ok((Vec::new(), vec![to_power(&inner)]))
            }
            ExpressionKind::Product(factors) => {
                let (mut plain, mut roots) = (Vec::new(), Vec::new());
                for factor in factors {
                    let (more, under) = self.take_roots(factor, power)?;
                    plain.extend(more);
                    roots.extend(under);
                }
                Ok((plain, roots))
            }
            ExpressionKind::Power(base, exponent) if holds_root(base) => {
                self.take_roots(base, power.saturating_mul(*exponent))
            }
            ExpressionKind::Negative(inner) if holds_root(inner) => {
                let (mut plain, roots) = self.take_roots(inner, power)?;
                if power % 2 != 0 {
                    let minus =
                        ExpressionKind::Number(-crate::circuit::Number::from_integer(1.into()));
                    plain.insert(0, Expression { kind: minus, span });
                }
                Ok((plain, roots))
            }
            _ if holds_root(expression) => Err(vec![
                Diagnostic::error("root", span, "a root inside a sum")
                    .help("a root stands as a factor: `1/(2*pi*sqrt(L1*C1))`"),
            ]),
            _ => Ok((vec![to_power(expression)], Vec::new())),
        }
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
                self.known.get(name).and_then(|value| self.value_unit(value))
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
                        (Some((left, before)), Some(right)) if left != right => {
                            let (sum, before) = (Some(expression.span), Some(before));
                            return Err(UnitClash { left, right, span: part.span, sum, before });
                        }
                        (None, Some(unit)) => first = Some((unit, part.span)),
                        _ => {}
                    }
                }
                first.map(|(unit, _)| unit)
            }
        })
    }

    fn symbol_unit(&self, symbol: SymbolId) -> Unit {
        let own = self.circuit.symbols.len();
        match (symbol.0 as usize).checked_sub(own) {
            Some(extra) => self.extra.get(extra).map_or(Unit::ONE, |symbol| symbol.unit),
            None => self.circuit[symbol].unit,
        }
    }

    /// The unit of a value whose sums are sound; `None` for 0, which fits every unit.
    fn value_unit(&self, value: &Value) -> Option<Unit> {
        match value {
            Value::Number(number) => (!number.is_zero()).then_some(Unit::ONE),
            Value::Symbol(symbol) => Some(self.symbol_unit(*symbol)),
            Value::S => Some(Unit::HERTZ),
            Value::Sum(parts) | Value::Parallel(parts) => {
                parts.iter().find_map(|part| self.value_unit(part))
            }
            Value::Product(factors) => factors
                .iter()
                .try_fold(Unit::ONE, |unit, factor| Some(unit.times(self.value_unit(factor)?))),
            Value::Power(base, exponent) => Some(self.value_unit(base)?.power(*exponent)),
            Value::Negative(inner) => self.value_unit(inner),
        }
    }
}

/// Whether a root stands in an expression.
fn holds_root(expression: &Expression) -> bool {
    match &expression.kind {
        ExpressionKind::Call(name, _) => name.text == "sqrt",
        ExpressionKind::Number(_) | ExpressionKind::Name(_) => false,
        ExpressionKind::Sum(parts)
        | ExpressionKind::Product(parts)
        | ExpressionKind::Parallel(parts) => parts.iter().any(holds_root),
        ExpressionKind::Power(inner, _) | ExpressionKind::Negative(inner) => holds_root(inner),
    }
}

/// Moves all places.
fn shift(expression: &mut Expression, offset: usize) {
    expression.span.start += offset;
    expression.span.end += offset;
    match &mut expression.kind {
        ExpressionKind::Number(_) | ExpressionKind::Name(_) => {}
        ExpressionKind::Call(_, arguments) => {
            for argument in arguments {
                argument.span.start += offset;
                argument.span.end += offset;
            }
        }
        ExpressionKind::Sum(parts)
        | ExpressionKind::Product(parts)
        | ExpressionKind::Parallel(parts) => parts.iter_mut().for_each(|part| shift(part, offset)),
        ExpressionKind::Power(inner, _) | ExpressionKind::Negative(inner) => shift(inner, offset),
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
        known.insert(symbol.name.clone(), Value::Symbol(SymbolId(id)));
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
        let mut claims = Vec::new();
        for draft in std::mem::take(&mut self.claims) {
            let name = draft.name.text.clone();
            let text = self.source.written(draft.span).to_owned();
            let line = self.source.line(draft.name.span.start);
            match complete(circuit, draft, text, line) {
                Ok(claim) => claims.push(claim),
                Err(faults) => {
                    // A question that could not be resolved has its own error.
                    let base = name.split(['.', '(', '^']).next().unwrap_or_default();
                    let is_broken = asked.contains_key(base)
                        && !circuit.asks.iter().any(|ask| ask.name == base);
                    if !is_broken {
                        self.faults.extend(faults);
                    }
                }
            }
        }
        circuit.claims = claims;
    }
}

/// Resolves a claim; `text` is what stands at the draft's span.
///
/// # Errors
/// What is wrong with the claim's name, and what its formula holds that is unknown.
pub(crate) fn complete(
    circuit: &Circuit,
    draft: ClaimDraft,
    text: String,
    line: u32,
) -> Result<Claim, Vec<Diagnostic>> {
    complete_with(circuit, draft, text, line, &BTreeMap::new())
}

/// As [`complete`], with names that stand for values.
pub(crate) fn complete_with(
    circuit: &Circuit,
    draft: ClaimDraft,
    text: String,
    line: u32,
    abbreviations: &BTreeMap<String, Value>,
) -> Result<Claim, Vec<Diagnostic>> {
    let target = claim_target::find(circuit, &draft.name).map_err(|fault| vec![fault])?;
    let mut formulas = Formulas::of_claim(circuit, target.of_noise);
    formulas.abbreviate(abbreviations);
    let expression = match draft.expression {
        Some(mut expression) => {
            formulas.settle_subscripts(&mut expression).map_err(|fault| vec![fault])?;
            expression
        }
        None => formulas.read(&text, draft.span.start)?,
    };
    let (formula, under_root) = formulas.resolve_with_root(&expression)?;
    let relation = draft.within.map_or(Relation::Equal, Relation::About);
    let algebraic = matches!(
        target.property,
        Property::Function | Property::DcGain | Property::HighFrequencyGain
    );
    if under_root.is_some() && algebraic && relation == Relation::Equal {
        let fault = Diagnostic::error("root", expression.span, "a root in a rational function");
        return Err(vec![fault.help("roots belong to claims about poles, zeros, w0, f0 and Q")]);
    }
    Ok(Claim {
        name: draft.name.text,
        answer: target.answer,
        property: target.property,
        relation,
        formula,
        under_root,
        extra: formulas.extra,
        text,
        line,
        span: (draft.span.start, draft.span.end),
    })
}

/// The value of an abbreviation in LaTeX; `span` is where the text stands.
///
/// # Errors
/// What cannot be read or is unknown.
pub(crate) fn abbreviation(
    circuit: &Circuit,
    text: &str,
    span: Span,
    abbreviations: &BTreeMap<String, Value>,
) -> Result<Value, Vec<Diagnostic>> {
    let mut formulas = Formulas::of_claim(circuit, false);
    formulas.abbreviate(abbreviations);
    let expression = formulas.read(text, span.start)?;
    formulas.resolve(&expression)
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
    /// The sum; none where the whole formula is not in the unit of the answer.
    pub sum: Option<Span>,
    /// The summand whose unit is `left`.
    pub before: Option<Span>,
}

/// The unit of a claim's formula, which is then also that of the answer.
///
/// A zero fits every unit, and so does a formula that is a plain number (in SI units) where something
/// about a function is claimed, or `~` is. Cost: linear in the text of the claim.
///
/// # Errors
/// The first place where quantities of different units are added or set in parallel, or the whole formula
/// where it is not in the unit of the answer.
pub fn claim_units(circuit: &Circuit, claim: &Claim) -> Result<Unit, UnitClash> {
    let whole = Span { start: claim.span.0, end: claim.span.1 };
    let name = Name { text: claim.name.clone(), span: whole };
    let target = claim_target::find(circuit, &name).ok();
    let formulas = Formulas::of_claim(circuit, target.as_ref().is_some_and(|t| t.of_noise));
    // The resolved formula knows no places, so the text is read again.
    let found = match formulas.read(&claim.text, whole.start) {
        Ok(expression) => formulas.unit_with_root(&expression)?,
        Err(_) => formulas.value_unit(&claim.formula),
    };
    let wanted = target.as_ref().map(|target: &Target| target.unit).or(found).unwrap_or(Unit::ONE);
    let is_number =
        found == Some(Unit::ONE) && !holds_symbols(&claim.formula) && claim.under_root.is_none();
    let lenient = claim.property != Property::Function || claim.relation != Relation::Equal;
    match found {
        Some(found) if found != wanted && !(is_number && lenient) => {
            Err(UnitClash { left: wanted, right: found, span: whole, sum: None, before: None })
        }
        _ => Ok(wanted),
    }
}

fn holds_symbols(value: &Value) -> bool {
    let mut found = value.holds_s();
    value.for_each_symbol(&mut |_| found = true);
    found
}
