//! Dependent sources: a value as a sum of factor × V(..) or factor × I(..).

use super::definitions::{find_call, one};
use super::diagnostic::{Diagnostic, Span};
use super::names::QUERIES;
use super::syntax::{Expression, ExpressionKind, Name};
use crate::circuit::Unit;

/// A voltage or a current by names.
#[derive(Clone, Debug)]
pub(crate) enum Access {
    /// V(a, b); V(a) is against ground.
    Voltage(Name, Option<Name>),
    /// I(X).
    Current(Name),
}

impl Access {
    /// Volt or ampere.
    pub(crate) fn unit(&self) -> Unit {
        match self {
            Self::Voltage(..) => Unit::VOLT,
            Self::Current(_) => Unit::AMPERE,
        }
    }
}

/// One term of a dependent source's value.
#[derive(Clone, Debug)]
pub(crate) struct Term {
    pub(crate) gain: Expression,
    pub(crate) access: Access,
}

/// What a call names, if it is V(..) or I(..).
///
/// # Errors
/// A diagnostic for any other call, and for wrong arguments.
pub(crate) fn access(call: &Expression) -> Result<Access, Diagnostic> {
    let ExpressionKind::Call(name, arguments) = &call.kind else {
        return Err(Diagnostic::error("access", call.span, "this is no voltage and no current"));
    };
    let mut single = Vec::new();
    for argument in arguments {
        match argument.names.as_slice() {
            [one] => single.push(one.clone()),
            _ if matches!(name.text.as_str(), "V" | "I") => {
                return Err(Diagnostic::error(
                    "arguments",
                    argument.span,
                    format!("`{}(…)` takes names", name.text),
                )
                .help("write `V(a)`, `V(a, b)` or `I(X)`"));
            }
            _ => {}
        }
    }
    match (name.text.as_str(), single.as_slice()) {
        ("V", [a]) => Ok(Access::Voltage(a.clone(), None)),
        ("V", [a, b]) => Ok(Access::Voltage(a.clone(), Some(b.clone()))),
        ("I", [x]) => Ok(Access::Current(x.clone())),
        ("V", _) => Err(Diagnostic::error("arguments", call.span, "`V(…)` takes one node or two")
            .help("write `V(a)` or `V(a, b)`")),
        ("I", _) => Err(Diagnostic::error("arguments", call.span, "`I(…)` takes one element")
            .help("write `I(R1)`: the current along its walk")),
        _ => Err(no_function(name)),
    }
}

/// The error for `NAME(` where NAME is no query that may stand here.
pub(crate) fn no_function(name: &Name) -> Diagnostic {
    let text = name.text.as_str();
    if QUERIES.contains(&text) {
        return Diagnostic::error(
            "query-in-value",
            name.span,
            format!("`{text}(…)` is a query and no part of an expression"),
        )
        .help(format!("ask for it by itself: `ask X = {text}(…)`"));
    }
    let fault =
        Diagnostic::error("no-function", name.span, format!("there is no function `{text}`"));
    match text {
        "sqrt" => fault.help("values are rational: name the root with `let` and give it a number"),
        "v" | "i" => fault.help(format!("write `{}(…)`", text.to_uppercase())),
        "par" | "parallel" => fault.help("write `(a || b)`"),
        _ => fault.help(format!("write a product with `*`: `{text}*(…)`")),
    }
}

/// Writes a value as a sum of factor × access.
///
/// # Errors
/// The first term that is not of that form.
pub(crate) fn terms(expression: &Expression) -> Result<Vec<Term>, Diagnostic> {
    let mut found = Vec::new();
    collect(expression, &[], false, &mut found)?;
    Ok(found)
}

fn collect(
    expression: &Expression,
    outer: &[&Expression],
    negative: bool,
    found: &mut Vec<Term>,
) -> Result<(), Diagnostic> {
    if find_call(expression).is_none() {
        return Err(no_access(expression.span));
    }
    match &expression.kind {
        ExpressionKind::Sum(terms) => {
            terms.iter().try_for_each(|term| collect(term, outer, negative, found))
        }
        ExpressionKind::Negative(inner) => collect(inner, outer, !negative, found),
        ExpressionKind::Product(factors) => {
            let mut with_call = factors.iter().filter(|factor| find_call(factor).is_some());
            let (Some(inner), None) = (with_call.next(), with_call.next()) else {
                return Err(not_linear(expression.span));
            };
            let mut all = outer.to_vec();
            all.extend(factors.iter().filter(|factor| !std::ptr::eq(*factor, inner)));
            collect(inner, &all, negative, found)
        }
        ExpressionKind::Call(..) => {
            let access = access(expression)?;
            let span = outer.iter().map(|factor| factor.span).reduce(Span::join);
            let span = span.unwrap_or(expression.span);
            let mut gain = match outer {
                [] => one(span),
                [single] => (*single).clone(),
                several => Expression {
                    kind: ExpressionKind::Product(several.iter().copied().cloned().collect()),
                    span,
                },
            };
            if negative {
                gain = Expression { kind: ExpressionKind::Negative(Box::new(gain)), span };
            }
            found.push(Term { gain, access });
            Ok(())
        }
        _ => Err(not_linear(expression.span)),
    }
}

fn no_access(span: Span) -> Diagnostic {
    Diagnostic::error(
        "source-value",
        span,
        "a source's value needs a `V(…)` or an `I(…)` in every term",
    )
    .help(
        "an independent source has no value: `voltage Vin`; a dependent one is like `gm * V(b, e)`",
    )
}

fn not_linear(span: Span) -> Diagnostic {
    Diagnostic::error("not-linear", span, "this is not linear in the voltages and currents")
        .help("each term is a factor times one `V(…)` or `I(…)`")
}
