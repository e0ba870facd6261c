//! Answers as the JSON of `derive`.

use num_traits::Zero;

use super::{Answer, lettering_of, names, written};
use crate::algebra::{Fraction, Polynomial, Var};
use crate::analysis::{ClosedForm, Entry, Noise, Notice};
use crate::circuit::{Circuit, SymbolRole, Unit};
use crate::numeric::Origin;
use crate::typeset::json::{
    Answer as JsonAnswer, BandNoise, Check, Coefficient, Constant, Contributor, Crosscheck,
    Definition, DeriveResult, Noise as JsonNoise, Numeric, Ratio, SourceRatio, Symbol, TermCounts,
    TotalNoise, Values, Warning,
};
use crate::typeset::latex::Latex;
use crate::typeset::shape::{Layered, Shape, compact, signed};
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

/// The results of a question: one with all sources for a superposition, else one for each entry.
pub fn results(answer: &Answer<'_>) -> Vec<DeriveResult> {
    if answer.ask.is_superposition() {
        let by_source = answer
            .entries
            .iter()
            .map(|entry| SourceRatio {
                source: entry.source.clone().unwrap_or_default(),
                ratio: ratio(answer, entry),
            })
            .collect();
        let (name, query) = (answer.ask.name.clone(), answer.ask.text.clone());
        return vec![DeriveResult { name, query, answer: JsonAnswer::Superposition { by_source } }];
    }
    let single = |entry: &Entry| DeriveResult {
        name: entry.name.clone(),
        query: entry.query.clone(),
        answer: JsonAnswer::Single(Box::new(ratio(answer, entry))),
    };
    answer.entries.iter().map(single).collect()
}

fn ratio(answer: &Answer<'_>, entry: &Entry) -> Ratio {
    let names = &names(entry);
    let letters = lettering_of(&entry.symbols);
    let Layered { definitions, formula, .. } = written(entry, answer.shape);
    let compact = match answer.shape {
        Shape::Compact => formula.clone(),
        _ => written(entry, Shape::Compact).formula,
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
    let (numerator, denominator, term_counts) = match &entry.form {
        ClosedForm::Expanded(fraction) => {
            let (n, d) = signed(fraction);
            (Some(coefficients(&n)), Some(coefficients(&d)), None)
        }
        ClosedForm::Nested(_) => {
            let text = |counts: &[num_bigint::BigUint]| {
                counts.iter().map(ToString::to_string).collect::<Vec<_>>()
            };
            let counts = entry.terms_by_power().map(|counts| TermCounts {
                numerator: text(&counts.numerator),
                denominator: text(&counts.denominator),
            });
            (None, None, counts)
        }
    };
    let floating = &entry.evidence.floating;
    Ratio {
        unit: entry.unit.to_string(),
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
        numeric: entry.numeric.as_ref().map(|numeric| Numeric {
            numerator: numbers(&numeric.numerator),
            denominator: numbers(&numeric.denominator),
        }),
        crosscheck: Crosscheck {
            points: floating.points,
            from_hz: floating.from_hz,
            to_hz: floating.to_hz,
            values: match entry.evidence.origin {
                Origin::Nominal => Values::Nominal,
                Origin::Random => Values::Random,
            },
            worst_relative_error: floating.worst_relative_error,
            passed: entry.passed(),
        },
        limits: entry.limits.clone(),
        checks: entry
            .checks
            .iter()
            .map(|check| Check { statement: check.statement.clone(), passed: check.passed })
            .collect(),
        noise: entry.noise.as_ref().map(|noise| noise_of(entry, noise, names)),
    }
}

fn noise_of(entry: &Entry, noise: &Noise, names: &SymbolTable) -> JsonNoise {
    let letters = lettering_of(&entry.symbols);
    let text = |fraction: &Fraction| {
        let formula = compact(fraction, letters);
        plain::text(&formula, names, Dialect::Expression)
    };
    JsonNoise {
        contributors: noise
            .contributors
            .iter()
            .map(|share| Contributor {
                element: share.element.clone(),
                expression: text(&share.density),
            })
            .collect(),
        total: noise.total.as_ref().map(|total| TotalNoise {
            expression: text(&total.square),
            unit: Unit::VOLT.power(2).to_string(),
            rms: total.rms,
        }),
        in_band: noise.band.map(|band| BandNoise {
            from_hz: band.from_hz,
            to_hz: band.to_hz,
            rms: band.rms,
            relative_error: band.relative_error,
        }),
        constants: constants(entry, names),
    }
}

/// The symbols behind the circuit's own, π left out: it is a number.
fn constants(entry: &Entry, names: &SymbolTable) -> Vec<Constant> {
    let numbered = entry.symbols.iter().zip(0_u32..).skip(entry.own_symbols);
    numbered
        .filter(|(symbol, _)| symbol.role != SymbolRole::Pi)
        .map(|(symbol, index)| Constant {
            name: names.letter(Letter::Symbol(index), Style::Identifier).into_owned(),
            value: symbol.nominal.as_ref().map(number::shortest).unwrap_or_default(),
            unit: symbol.unit.to_string(),
        })
        .collect()
}

/// The widest sum in a row of LaTeX, in symbols.
pub(crate) const LATEX_WIDTH: usize = 40;

fn numbers(of: &[crate::circuit::Number]) -> Vec<String> {
    let last = of.iter().rposition(|number| !number.is_zero()).map_or(1, |at| at + 1);
    let texts: Vec<String> = of.iter().take(last).map(number::shortest).collect();
    if texts.is_empty() { vec!["0".to_owned()] } else { texts }
}
