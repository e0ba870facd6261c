//! Queries that are no single ratio: two-port sets, return ratios and noise densities.
//!
//! Each becomes a [`Question`] of its own; all independent sources are zeroed in them, and those that
//! lie exactly across a port are taken out.

use super::ask::Resolver;
use super::claim;
use super::diagnostic::{Diagnostic, Span};
use super::names::nearest;
use super::syntax::{Argument, Content, Expression, ExpressionKind, Name};
use crate::circuit::{
    ElementId, GROUND, Law, NodeId, ParameterSet, Question, TwoPort, Unit, Value,
};
use num_traits::Signed;

/// The words of the sets.
const SETS: [(&str, ParameterSet); 8] = [
    ("z", ParameterSet::Z),
    ("y", ParameterSet::Y),
    ("h", ParameterSet::H),
    ("g", ParameterSet::G),
    ("chain", ParameterSet::Chain),
    ("inverse_chain", ParameterSet::InverseChain),
    ("scattering", ParameterSet::Scattering),
    ("transfer_scattering", ParameterSet::TransferScattering),
];

/// The names of a set's entries, by row and column: `z11`, `z12`, `z21`, `z22`.
pub(crate) fn entries(set: ParameterSet) -> [String; 4] {
    ["11", "12", "21", "22"].map(|place| format!("{}{place}", set.letter()))
}

/// The units of a set's entries, in the order of [`entries`].
pub(crate) fn entry_units(set: ParameterSet) -> [Unit; 4] {
    let (ohm, siemens, one) = (Unit::OHM, Unit::SIEMENS, Unit::ONE);
    match set {
        ParameterSet::Z => [ohm; 4],
        ParameterSet::Y => [siemens; 4],
        ParameterSet::H => [ohm, one, one, siemens],
        ParameterSet::G => [siemens, one, one, ohm],
        ParameterSet::Chain | ParameterSet::InverseChain => [one, ohm, siemens, one],
        ParameterSet::Scattering | ParameterSet::TransferScattering => [one; 4],
    }
}

/// The expression of a query's reference resistance, if it has one.
pub(crate) fn reference_of(query: &Expression) -> Option<&Expression> {
    let ExpressionKind::Call(_, arguments) = &query.kind else { return None };
    arguments.iter().find_map(|argument| match argument.value.as_deref() {
        Some(Content::Expression(expression)) => Some(expression),
        _ => None,
    })
}

impl Resolver<'_> {
    /// `two_port(z, a b, c d)`, and with a reference resistance for the scattering sets.
    pub(crate) fn two_port(
        &self,
        arguments: &[Argument],
        span: Span,
    ) -> Result<Question, Diagnostic> {
        let [set, first, second, rest @ ..] = arguments else {
            return Err(wrong_two_port(span));
        };
        let [word] = set.names.as_slice() else { return Err(wrong_two_port(set.span)) };
        let Some((_, set)) = SETS.iter().find(|(name, _)| *name == word.text) else {
            let fault = Diagnostic::error(
                "parameter-set",
                word.span,
                format!("`{}` is no set of two-port parameters", word.text),
            );
            let words = SETS.iter().map(|(name, _)| *name);
            return Err(match nearest(&word.text, words.clone()) {
                Some(near) => fault.help(format!("is it `{near}`?")),
                None => fault.help(format!("sets are {}", words.collect::<Vec<_>>().join(", "))),
            });
        };
        let waves = matches!(set, ParameterSet::Scattering | ParameterSet::TransferScattering);
        let reference = match rest {
            [] if waves => {
                return Err(Diagnostic::error(
                    "reference",
                    span,
                    format!("`{}` needs a reference resistance", word.text),
                )
                .help(format!("write it last: `two_port({}, a b, c d, 50)`", word.text)));
            }
            [] => None,
            [reference] if waves => Some(self.reference(reference)?),
            [reference] => {
                return Err(Diagnostic::error(
                    "reference",
                    reference.span,
                    format!("the set `{}` has no reference resistance", word.text),
                )
                .help("only `scattering` and `transfer_scattering` have one"));
            }
            [_, more, ..] => return Err(wrong_two_port(more.span)),
        };
        let (port1, port2) = (self.port(first)?, self.port(second)?);
        let removed = self.across(&[port1, port2]);
        Ok(Question::TwoPort(TwoPort { set: *set, port1, port2, reference, removed }))
    }

    /// A port: two nodes that differ.
    fn port(&self, argument: &Argument) -> Result<(NodeId, NodeId), Diagnostic> {
        let [a, b] = argument.names.as_slice() else {
            return Err(wrong_two_port(argument.span));
        };
        let port = (self.node(a)?, self.node(b)?);
        if port.0 == port.1 {
            return Err(empty_port(argument.span));
        }
        Ok(port)
    }

    fn reference(&self, argument: &Argument) -> Result<Value, Diagnostic> {
        let fault = |code, message: String| Diagnostic::error(code, argument.span, message);
        match argument.value.as_deref() {
            Some(Content::Quantity(quantity)) => {
                if let Some(unit) = quantity.unit.filter(|unit| *unit != Unit::OHM) {
                    return Err(fault(
                        "wrong-unit",
                        format!("the reference resistance is in `{unit}` and must be in `Ω`"),
                    ));
                }
                if !quantity.value.is_positive() {
                    return Err(fault(
                        "reference",
                        "a reference resistance must be above 0 Ω".to_owned(),
                    ));
                }
                Ok(Value::Number(quantity.value.clone()))
            }
            Some(Content::Expression(expression)) => {
                let value = claim::resolve(self.circuit(), expression)
                    .map_err(|mut faults| faults.remove(0))?;
                if value.holds_s() {
                    return Err(fault(
                        "s-in-value",
                        "a reference resistance depends on `s`".to_owned(),
                    ));
                }
                Ok(value)
            }
            None => Err(wrong_two_port(argument.span)),
        }
    }

    /// `return_ratio(X)`: X is a dependent source, a finite op-amp, a device or its transconductance.
    pub(crate) fn return_ratio(
        &self,
        arguments: &[Argument],
        span: Span,
    ) -> Result<Question, Diagnostic> {
        let [argument] = arguments else { return Err(wrong_return_ratio(span)) };
        let [name] = argument.names.as_slice() else {
            return Err(wrong_return_ratio(argument.span));
        };
        let circuit = self.circuit();
        if let Some(id) = self.any_element(&name.text) {
            return match &circuit[id].law {
                Law::ControlledVoltage(controls) | Law::ControlledCurrent(controls)
                    if !controls.is_empty() =>
                {
                    Ok(Question::ReturnRatio(id))
                }
                Law::Nullor(..) => Err(Diagnostic::error(
                    "return-ratio",
                    name.span,
                    format!("`{}` is ideal: its return ratio is infinite", name.text),
                )
                .help("give it a finite gain: `gain = A0`")),
                _ => Err(no_dependent_source(name)
                    .help("write `return_ratio(X)` for a dependent source, a finite op-amp or a device's `gm`")),
            };
        }
        // A device by its own name: its transconductance, or the only source in it.
        let dotted = format!("{}.", name.text);
        let inside: Vec<ElementId> = (0_u32..)
            .map(ElementId)
            .zip(&circuit.elements)
            .filter(|(_, element)| {
                element.name.starts_with(&dotted)
                    && matches!(element.law, Law::ControlledVoltage(_) | Law::ControlledCurrent(_))
            })
            .map(|(id, _)| id)
            .collect();
        let by_gm = inside.iter().find(|id| circuit[**id].name == format!("{dotted}gm"));
        match (by_gm, inside.as_slice()) {
            (Some(id), _) => Ok(Question::ReturnRatio(*id)),
            (None, [id]) => Ok(Question::ReturnRatio(*id)),
            (None, [first, ..]) => Err(no_dependent_source(name)
                .help(format!("say which source in it, as in `{}`", circuit[*first].name))),
            (None, []) => {
                let known = circuit.elements.iter().map(|element| element.name.as_str());
                let fault = no_dependent_source(name);
                Err(match nearest(&name.text, known) {
                    Some(near) => fault.help(format!("is it `{near}`?")),
                    None => fault.help("write `return_ratio(X)` for a dependent source, a finite op-amp or a device's `gm`"),
                })
            }
        }
    }

    /// `noise_density(out)` or `noise_density(a, b)`.
    pub(crate) fn noise_density(
        &self,
        arguments: &[Argument],
        span: Span,
    ) -> Result<Question, Diagnostic> {
        let wrong = |span| {
            Diagnostic::error("arguments", span, "`noise_density(…)` takes one node or two")
                .help("write `noise_density(out)` or `noise_density(a, b)`")
        };
        let mut nodes = Vec::new();
        for argument in arguments {
            let [name] = argument.names.as_slice() else { return Err(wrong(argument.span)) };
            nodes.push(self.node(name)?);
        }
        let (plus, minus) = match nodes.as_slice() {
            [plus] => (*plus, GROUND),
            [plus, minus] => (*plus, *minus),
            _ => return Err(wrong(span)),
        };
        if plus == minus {
            return Err(empty_port(span));
        }
        Ok(Question::NoiseDensity(plus, minus))
    }
}

/// The error for a port or a voltage between a node and itself.
pub(crate) fn empty_port(span: Span) -> Diagnostic {
    Diagnostic::error("empty-port", span, "both ends of the port are one node")
}

fn wrong_two_port(span: Span) -> Diagnostic {
    Diagnostic::error(
        "arguments",
        span,
        "`two_port(…)` takes a set and two ports of two nodes each",
    )
    .help("write `two_port(z, in ground, out ground)`, or `two_port(scattering, a b, c d, 50)`")
}

fn wrong_return_ratio(span: Span) -> Diagnostic {
    Diagnostic::error("arguments", span, "`return_ratio(…)` takes one dependent source")
        .help("write `return_ratio(U1)` or `return_ratio(Q1.gm)`")
}

fn no_dependent_source(name: &Name) -> Diagnostic {
    Diagnostic::error("return-ratio", name.span, format!("`{}` is no dependent source", name.text))
}
