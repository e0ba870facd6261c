//! Answers as the JSON of `derive`.

use num_traits::Zero;

use super::{Answer, lettering};
use crate::algebra::{Polynomial, Var};
use crate::analysis::{ClosedForm, Derivation, Notice};
use crate::circuit::{Circuit, Transfer};
use crate::numeric::Origin;
use crate::typeset::json::{
    Answer as JsonAnswer, Coefficient, Crosscheck, Definition, DeriveResult, Numeric, Ratio,
    SourceRatio, Symbol, TermCounts, Values, Warning,
};
use crate::typeset::latex::Latex;
use crate::typeset::shape::{Layered, Shape, signed};
use crate::typeset::{Dialect, Letter, Style, SymbolTable, number, plain};

/// The symbols of a circuit.
pub fn symbols(circuit: &Circuit) -> Vec<Symbol> {
    let names = SymbolTable::new(circuit.symbols.iter().map(|symbol| symbol.name.as_str()));
    circuit
        .symbols
        .iter()
        .zip(0_u32..)
        .map(|(symbol, index)| Symbol {
            name: symbol.name.clone(),
            identifier: names.letter(Letter::Symbol(index), Style::Identifier).into_owned(),
            unit: symbol.unit.to_string(),
            nominal: symbol.nominal.as_ref().map(number::shortest),
            tolerance: symbol.tolerance.as_ref().map(|tolerance| tolerance.text.clone()),
        })
        .collect()
}

/// A notice as a warning.
pub fn warning(notice: &Notice) -> Warning {
    Warning {
        code: notice.code.to_owned(),
        message: notice.message.clone(),
        line: (notice.line > 0).then_some(notice.line),
        column: None,
    }
}

/// One result.
pub fn result(answer: &Answer<'_>) -> DeriveResult {
    let names = answer.names();
    let mut ratios = answer.parts().map(|(transfer, derivation)| {
        (answer.source(transfer), ratio(answer, transfer, derivation, &names))
    });
    let body = if answer.ask.superposition {
        JsonAnswer::Superposition {
            by_source: ratios
                .map(|(source, ratio)| SourceRatio {
                    source: source.unwrap_or_default().to_owned(),
                    ratio,
                })
                .collect(),
        }
    } else {
        match ratios.next() {
            Some((_, ratio)) => JsonAnswer::Single(Box::new(ratio)),
            None => JsonAnswer::Superposition { by_source: Vec::new() },
        }
    };
    DeriveResult { name: answer.ask.name.clone(), query: answer.ask.text.clone(), answer: body }
}

fn ratio(
    answer: &Answer<'_>,
    transfer: &Transfer,
    derivation: &Derivation,
    names: &SymbolTable,
) -> Ratio {
    let letters = lettering(answer.circuit);
    let Layered { definitions, formula, .. } = answer.written(derivation);
    let compact = match answer.shape {
        Shape::Compact => formula.clone(),
        _ => Answer { shape: Shape::Compact, ..*answer }.written(derivation).formula,
    };
    let coefficients = |polynomial: &Polynomial| -> Vec<Coefficient> {
        polynomial
            .coefficients(Var::S)
            .iter()
            .zip(0_u32..)
            .filter(|(part, _)| !part.is_zero())
            .map(|(part, power)| Coefficient {
                power,
                expression: plain::text(&letters.polynomial(part), names, Dialect::Expression),
                terms: part.len().to_string(),
            })
            .collect()
    };
    let (numerator, denominator, term_counts) = match &derivation.form {
        ClosedForm::Expanded(fraction) => {
            let (n, d) = signed(fraction);
            (Some(coefficients(&n)), Some(coefficients(&d)), None)
        }
        ClosedForm::Nested(_) => {
            let text = |counts: &[num_bigint::BigUint]| {
                counts.iter().map(ToString::to_string).collect::<Vec<_>>()
            };
            let counts = TermCounts {
                numerator: text(&derivation.counts.numerator),
                denominator: text(&derivation.counts.denominator),
            };
            (None, None, Some(counts))
        }
    };
    let floating = &derivation.evidence.floating;
    Ratio {
        unit: transfer.unit.to_string(),
        expression: plain::text(&formula, names, Dialect::Expression),
        compact: plain::text(&compact, names, Dialect::Language),
        definitions: definitions
            .iter()
            .zip(0_u32..)
            .map(|(definition, index)| Definition {
                name: names.letter(Letter::Definition(index), Style::Identifier).into_owned(),
                expression: plain::text(definition, names, Dialect::Expression),
            })
            .collect(),
        numerator,
        denominator,
        term_counts,
        latex: Latex { names, width: LATEX_WIDTH }.text(&formula),
        numeric: derivation.numeric.as_ref().map(|numeric| Numeric {
            numerator: numbers(&numeric.numerator),
            denominator: numbers(&numeric.denominator),
        }),
        crosscheck: Crosscheck {
            points: floating.points,
            from_hz: floating.from_hz,
            to_hz: floating.to_hz,
            values: match derivation.evidence.origin {
                Origin::Nominal => Values::Nominal,
                Origin::Random => Values::Random,
            },
            worst_relative_error: floating.worst_relative_error,
            passed: derivation.evidence.passed(),
        },
    }
}

/// The widest sum in a row of LaTeX, in symbols.
pub(crate) const LATEX_WIDTH: usize = 40;

fn numbers(of: &[crate::circuit::Number]) -> Vec<String> {
    let last = of.iter().rposition(|number| !number.is_zero()).map_or(1, |at| at + 1);
    let texts: Vec<String> = of.iter().take(last).map(number::shortest).collect();
    if texts.is_empty() { vec!["0".to_owned()] } else { texts }
}
