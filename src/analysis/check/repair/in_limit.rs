//! Single changes after which a claim is right in a limit: what goes wrong in an idealised formula.

use super::needed::Parts;
use super::{Change, Repair};
use crate::algebra::Fraction;
use crate::analysis::check::limits;
use crate::circuit::{Circuit, Claim, Number, SymbolId, Value};
use crate::elimination::fraction_of;

/// The first of the likely changes that makes the claim right in a limit of what it leaves out.
pub(super) fn first(circuit: &Circuit, claim: &Claim, exact: &Fraction) -> Option<Repair> {
    let claimed = fraction_of(&claim.formula).ok()?;
    let changes = changes(circuit, &claim.formula);
    let (change, formula, limits) =
        limits::first_in_limit(circuit, claim, exact, &claimed, changes.into_iter())?;
    Some(Repair { change, formula, limits })
}

/// Signs, ratios upside down, factors of 2, elements for each other.
fn changes(circuit: &Circuit, formula: &Value) -> Vec<(Change, Value)> {
    let parts = Parts::new(formula);
    let mut changes = Vec::new();
    for (index, part) in parts.list.iter().enumerate() {
        let parent = part.parent.map(|parent| parts.list[parent].value);
        if matches!(parent, None | Some(Value::Sum(_))) {
            let by = match part.value {
                Value::Negative(inner) => (**inner).clone(),
                other => Value::Negative(Box::new(other.clone())),
            };
            let change = Change::Sign { part: part.value.clone() };
            changes.push((change, parts.replaced(index, by)));
        }
    }
    let part = formula.clone();
    let inverse = Value::Power(Box::new(part.clone()), -1);
    changes.push((Change::Inverted { part: part.clone() }, inverse));
    changes.extend(swaps(circuit, formula));
    for power in [1, -1] {
        let factor = Value::Number(Number::from_integer(2.into()).pow(power));
        let by = Value::Product(vec![factor.clone(), part.clone()]);
        changes.push((Change::Factor { part: part.clone(), factor }, by));
    }
    for (index, part) in parts.list.iter().enumerate() {
        let parent = part.parent.map(|parent| parts.list[parent].value);
        if matches!(parent, Some(Value::Sum(_))) {
            let zero = Value::Number(Number::default());
            let change = Change::ExtraTerm { term: part.value.clone() };
            changes.push((change, parts.replaced(index, zero)));
        }
    }
    changes
}

/// Two elements of one unit for each other, everywhere.
fn swaps(circuit: &Circuit, formula: &Value) -> Vec<(Change, Value)> {
    let mut symbols: Vec<SymbolId> = Vec::new();
    formula.for_each_symbol(&mut |symbol| symbols.push(symbol));
    symbols.sort_unstable();
    symbols.dedup();
    let unit = |symbol: SymbolId| circuit.symbols.get(symbol.0 as usize).map(|known| known.unit);
    let mut changes = Vec::new();
    for (index, &a) in symbols.iter().enumerate() {
        for &b in symbols[index + 1..].iter().filter(|&&b| unit(a) == unit(b)) {
            let swap = |symbol: SymbolId| match symbol {
                _ if symbol == a => Some(Value::Symbol(b)),
                _ if symbol == b => Some(Value::Symbol(a)),
                _ => None,
            };
            changes.push((Change::Swapped(a, b), formula.replaced(&swap)));
        }
    }
    changes
}
