//! Hand-derived formulas: expressions over the symbols of a finished circuit.
//!
//! Unlike in element values, an unknown name is an error here: a formula speaks of what there is.

use super::build::reserved_in_expression;
use super::definitions::{find_call, to_value, visit_names};
use super::diagnostic::Diagnostic;
use super::names::nearest;
use super::sources;
use super::syntax::Expression;
use crate::circuit::{Circuit, Value};
use rustc_hash::FxHashMap;

/// Resolves the names of an expression.
///
/// # Errors
/// One diagnostic for each name that is unknown.
pub(crate) fn resolve(
    circuit: &Circuit,
    expression: &Expression,
) -> Result<Value, Vec<Diagnostic>> {
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
    let known = known_values(circuit);
    let mut faults = Vec::new();
    visit_names(expression, &mut |name, span| {
        if known.contains_key(name) {
            return;
        }
        if name == "pi" {
            faults.push(Diagnostic::error(
                "unknown-name",
                span,
                "no value of this circuit holds `pi`",
            ));
            return;
        }
        if let Some(fault) = reserved_in_expression(name, span) {
            faults.push(fault);
            return;
        }
        let fault =
            Diagnostic::error("unknown-name", span, format!("no symbol `{name}` in this circuit"));
        faults.push(if let Some(product) = as_product(name, circuit) {
            fault.help(format!("put spaces between factors: `{product}`"))
        } else if let Some(near) = nearest(name, names_of(circuit)) {
            fault.help(format!("is it `{near}`?"))
        } else {
            fault
        });
    });
    if !faults.is_empty() {
        return Err(faults);
    }
    to_value(expression, &mut |name| known.get(name).cloned()).ok_or_else(|| {
        vec![Diagnostic::error(
            "unknown-name",
            expression.span,
            "this formula holds an unknown name",
        )]
    })
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
