//! Formulas and sentences about claims that text, LaTeX and JSON share.

use crate::algebra::Fraction;
use crate::analysis::check::{Change, Step};
use crate::analysis::limit_text;
use crate::circuit::{Circuit, Claim, SymbolId, Value};
use crate::elimination::variable_of;
use crate::typeset::shape::{Lettering, compact, signed};
use crate::typeset::{Dialect, Formula, SymbolTable, plain};

/// A condition as it is written: `A0 to infinity`, `R3 = R1`, `R4/R3 = R2/R1`.
pub fn step_text(circuit: &Circuit, step: &Step) -> String {
    let name = |symbol: SymbolId| circuit[symbol].name.as_str();
    match step {
        Step::Limit(limit) => limit_text(circuit, limit),
        Step::Matched(a, b) => format!("{} = {}", name(*a), name(*b)),
        Step::Proportional([a, b, c, d]) => {
            format!("{}/{} = {}/{}", name(*a), name(*b), name(*c), name(*d))
        }
    }
}

/// A value in the form in which it was written.
pub(super) fn formula(value: &Value, letters: Lettering<'_>) -> Formula {
    let all = |values: &[Value]| -> Vec<Formula> {
        values.iter().map(|value| formula(value, letters)).collect()
    };
    match value {
        Value::Number(number) => Formula::number(number.clone()),
        Value::Symbol(symbol) => Formula::letter(letters.letter(variable_of(*symbol))),
        Value::S => Formula::s(),
        Value::Sum(terms) => Formula::sum(all(terms)),
        Value::Product(factors) => {
            let (mut above, mut below) = (Vec::new(), Vec::new());
            for factor in factors {
                match factor {
                    Value::Power(base, exponent) if *exponent < 0 => {
                        below.push(Formula::power(formula(base, letters), -exponent));
                    }
                    _ => above.push(formula(factor, letters)),
                }
            }
            match below.is_empty() {
                true => Formula::product(above),
                false => Formula::quotient(Formula::product(above), Formula::product(below)),
            }
        }
        Value::Power(base, exponent) => Formula::power(formula(base, letters), *exponent),
        Value::Negative(inner) => formula(inner, letters).negative(),
        Value::Parallel(parts) => Formula::parallel(all(parts)),
    }
}

/// Terms up to which the shortest form is looked for: beyond, that takes longer than the verdict.
const LONGEST: usize = 30;

/// A fraction as one would write it by hand; a long one as a plain quotient.
pub(super) fn fraction(value: &Fraction, letters: Lettering<'_>) -> Formula {
    if value.is_zero() {
        return Formula::integer(0);
    }
    if value.numerator().len() + value.denominator().len() <= LONGEST {
        return compact(value, letters);
    }
    let (above, below) = signed(value);
    Formula::quotient(letters.polynomial(&above), letters.polynomial(&below))
}

/// A repair in a sentence; `text` writes formulas.
pub(super) fn change(
    change: &Change,
    circuit: &Circuit,
    text: &dyn Fn(&Value) -> String,
) -> String {
    let name = |symbol: SymbolId| {
        circuit.symbols.get(symbol.0 as usize).map_or_else(String::new, |s| s.name.clone())
    };
    match change {
        Change::Sign { part } => format!("the sign of {} is wrong", text(part)),
        Change::Factor { part, factor } => {
            format!("{} lacks the factor {}", text(part), text(factor))
        }
        Change::Power { part, meant } => {
            format!("{} belongs where {} stands", text(meant), text(part))
        }
        Change::Turns { part, factor } => format!(
            "hertz and radians per second are mixed: {} lacks the factor {}",
            text(part),
            text(factor)
        ),
        Change::Inverted { part } => format!("{} is upside down", text(part)),
        Change::Swapped(a, b) => format!("{} and {} are swapped", name(*a), name(*b)),
        Change::Element { written, meant, everywhere } => format!(
            "{} belongs where {} stands{}",
            name(*meant),
            name(*written),
            if *everywhere { ", everywhere" } else { "" }
        ),
        Change::MissingTerm { term, part } => match term {
            Value::Negative(inner) => {
                format!("the term −{} is missing in {}", text(inner), text(part))
            }
            _ => format!("the term {} is missing in {}", text(term), text(part)),
        },
        Change::MissingParallel { operand, part } => {
            format!("{} is missing in parallel to {}", text(operand), text(part))
        }
        Change::ExtraTerm { term } => format!("the term {} is too much", text(term)),
        Change::Omega => "ω stands for s".to_owned(),
    }
}

/// A formula in the language, for programs and for pasting.
pub(super) fn language(formula: &Formula, names: &SymbolTable) -> String {
    plain::text(formula, names, Dialect::Language)
}

/// A part of a claim as written: the whole has its root behind it.
pub(super) fn with_root(text: String, value: &Value, claim: &Claim, root: Option<&str>) -> String {
    if *value == claim.formula { times_root(text, root) } else { text }
}

/// A formula with the root that the claim has.
pub(super) fn times_root(text: String, root: Option<&str>) -> String {
    match root {
        Some(root) if text == "1" => format!("sqrt({root})"),
        Some(root) => format!("{text}*sqrt({root})"),
        None => text,
    }
}
