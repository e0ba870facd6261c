//! Random circuits: the printed formula, read back and evaluated at random rationals, against an
//! exact solve of the network that shares no code with the derivation.
//!
//! Each circuit is written in the language (2 to 8 nodes, every kind of element, device and block, matched
//! elements and shared parameters among them), read, derived and printed in every shape. The witness is the
//! fraction-free elimination over Q[s] of `numeric`. Circuits without a unique solution must be refused as
//! such by both. The order of a file's lines must not show in what is printed. Seeds are fixed;
//! `RANDOM_CIRCUITS=100000 cargo test --release --test random_circuits` runs a longer campaign, and
//! `RANDOM_CIRCUITS_FROM=1000000` begins it at another seed.

mod generator;
#[path = "../support/mod.rs"]
mod support;

use cofactor::algebra::modular::Random;
use cofactor::analysis::{self, ClosedForm, Derivation, Options};
use cofactor::circuit::{Circuit, Class, Drive, Element, ElementId, Law, Number, Probe, Transfer};
use cofactor::language;
use cofactor::numeric::{self, NumericError, Rationals};
use cofactor::typeset::answer::lettering;
use cofactor::typeset::shape::{Shape, write};
use cofactor::typeset::{Dialect, Formula, Letter, Style, SymbolTable, plain};
use num_traits::Zero;

/// Circuits in a normal run; ten thousand where the compiler has optimised.
const CIRCUITS: u64 = if cfg!(debug_assertions) { 300 } else { 10_000 };
/// Longer formulas stay nested.
const MAX_TERMS: usize = if cfg!(debug_assertions) { 120 } else { 1_000 };
/// Of these many one is also written in another order.
const REORDERED: u64 = 4;

const SHAPES: [Shape; 7] = [
    Shape::Compact,
    Shape::Powers,
    Shape::Bode,
    Shape::Product,
    Shape::Sections,
    Shape::ByElement,
    Shape::Nested,
];

fn options() -> Options {
    Options { max_terms: MAX_TERMS, ..Options::default() }
}

fn rational(random: &mut Random) -> Number {
    let whole = |word: u64| num_bigint::BigInt::from(2 + word % 997);
    Number::new(whole(random.word()), whole(random.word()))
}

/// What became of a circuit.
#[derive(Debug, PartialEq)]
enum Outcome {
    /// Not a circuit of the language (an op-amp between one node, say).
    Refused,
    /// No unique solution, and both say so.
    Singular,
    /// The formula equals the witness.
    Equal,
}

fn judge(seed: u64) -> Result<Outcome, String> {
    let text = generator::circuit(seed).text();
    let Some(circuit) = language::read(&text).circuit else {
        return Ok(Outcome::Refused);
    };
    let transfer = &circuit.asks[0].transfers()[0];
    let mut random = Random::new(seed ^ 0xabcd);
    let mut draw = || circuit.symbols.iter().map(|_| rational(&mut random)).collect();
    let mut numbers: Vec<Number> = draw();
    let (posed, asked) = voltage_driven(&circuit, transfer);
    let mut witness = numeric::exact(&posed, &asked, &numbers);
    if witness.is_err() {
        // Numbers can be singular by chance (a gain of exactly 1): only twice is a verdict.
        numbers = draw();
        witness = numeric::exact(&posed, &asked, &numbers);
    }
    let derived = analysis::derive(&circuit, transfer, &options());
    match (derived, witness) {
        (Ok(derivation), Ok(witness)) => {
            if !derivation.evidence.passed() {
                return Err(format!("a witness disagrees: {:?}", derivation.evidence));
            }
            compare(&circuit, &derivation, &witness, &numbers, rational(&mut random))
        }
        (Err(error), Err(witness)) if error.exit_code() == 3 => {
            let agreed = matches!(
                witness,
                NumericError::Singular
                    | NumericError::Undetermined { .. }
                    | NumericError::ZeroDenominator
            );
            if agreed { Ok(Outcome::Singular) } else { Err(format!("{error} but {witness}")) }
        }
        (Ok(_), Err(witness)) => Err(format!("derived, but the witness says {witness}")),
        (Err(error), Ok(witness)) => Err(format!("{error}, but the witness says {witness}")),
        (Err(error), Err(witness)) => Err(format!("{error}; {witness}")),
    }
}

/// An admittance as the current that 1 V drives (no current need flow: 0 S is an answer); what else is
/// asked as it is.
fn voltage_driven(circuit: &Circuit, transfer: &Transfer) -> (Circuit, Transfer) {
    let (mut circuit, mut transfer) = (circuit.clone(), transfer.clone());
    if let (Drive::Port(plus, minus), Probe::Drive) = (transfer.drive, transfer.numerator) {
        let source = ElementId(circuit.elements.len() as u32);
        circuit.elements.push(Element {
            name: "Vport".to_owned(),
            class: Class::Voltage,
            plus,
            minus,
            law: Law::VoltageSource,
            line: 0,
        });
        transfer.drive = Drive::Source(source);
        transfer.numerator = Probe::Current(source);
        // The source's own current leaves the circuit at its first node.
        transfer.denominator = Probe::Voltage(minus, plus);
    }
    (circuit, transfer)
}

fn compare(
    circuit: &Circuit,
    derivation: &Derivation,
    witness: &numeric::Fraction,
    numbers: &[Number],
    s: Number,
) -> Result<Outcome, String> {
    let at = |coefficients: &[Number]| {
        coefficients.iter().rev().fold(Number::zero(), |sum, c| sum * &s + c)
    };
    let below = at(&witness.denominator);
    if below.is_zero() {
        return Ok(Outcome::Equal);
    }
    let expect = at(&witness.numerator) / below;
    for shape in SHAPES {
        let Some(written) = Written::new(circuit, derivation, shape) else {
            if matches!(derivation.form, ClosedForm::Expanded(_)) {
                return Err(format!("{shape:?}: not written"));
            }
            continue;
        };
        let found = written.value(numbers, &s)?;
        let wrong = |found: &dyn std::fmt::Debug| {
            format!("{shape:?}: {written:?} = {found:?}, witness {expect:?}")
        };
        if found != expect {
            return Err(wrong(&found));
        }
        // The language reads what it prints; it has no names for sub-expressions.
        if written.definitions.is_empty() {
            let value = language::parse_expression(circuit, &written.source)
                .map_err(|faults| format!("`{}` does not read back: {faults:?}", written.source))?;
            let found = numeric::evaluate(&Rationals, &value, numbers, &s);
            if found.as_ref() != Some(&expect) {
                return Err(wrong(&found));
            }
        }
    }
    Ok(Outcome::Equal)
}

/// What is printed of a derivation in one shape.
#[derive(Debug, PartialEq)]
struct Written {
    /// Identifiers of the symbols.
    symbols: Vec<String>,
    /// Names and expressions for other programs, in order of use.
    definitions: Vec<(String, String)>,
    /// The formula for other programs.
    expression: String,
    /// The formula in the circuit's language.
    source: String,
}

impl Written {
    fn new(circuit: &Circuit, derivation: &Derivation, shape: Shape) -> Option<Self> {
        let names = SymbolTable::new(circuit.symbols.iter().map(|symbol| symbol.name.as_str()));
        let layered =
            write(&derivation.form, Some(&derivation.elimination), shape, lettering(circuit))?;
        let expression = |formula: &Formula| plain::text(formula, &names, Dialect::Expression);
        let name = |letter| names.letter(letter, Style::Identifier).into_owned();
        let definitions = layered.definitions.iter().zip(0..);
        Some(Self {
            symbols: (0..circuit.symbols.len() as u32).map(|i| name(Letter::Symbol(i))).collect(),
            definitions: definitions
                .map(|(formula, index)| (name(Letter::Definition(index)), expression(formula)))
                .collect(),
            expression: expression(&layered.formula),
            source: plain::text(&layered.formula, &names, Dialect::Language),
        })
    }

    /// By a reader that knows nothing of the library.
    fn value(&self, numbers: &[Number], s: &Number) -> Result<Number, String> {
        let symbols = self.symbols.iter().zip(numbers);
        let mut values: std::collections::BTreeMap<&str, Number> =
            symbols.map(|(name, number)| (name.as_str(), number.clone())).collect();
        values.insert("s", s.clone());
        for (name, expression) in &self.definitions {
            let value = support::exact::evaluate(expression, &|name| values.get(name).cloned())?;
            values.insert(name, value);
        }
        support::exact::evaluate(&self.expression, &|name| values.get(name).cloned())
    }
}

/// The same circuit with its lines in another order prints the same, in every shape.
fn reordered(seed: u64) -> Result<Outcome, String> {
    let drawn = generator::circuit(seed);
    let texts = [drawn.text(), drawn.shuffled(seed)];
    let circuits = texts.each_ref().map(|text| language::read(text).circuit);
    let [Some(first), Some(second)] = circuits else {
        let refused = texts.each_ref().map(|text| language::read(text).circuit.is_none());
        return if refused[0] == refused[1] { Ok(Outcome::Refused) } else { Err(texts[1].clone()) };
    };
    let written = [first, second].map(|circuit| {
        let transfer = &circuit.asks[0].transfers()[0];
        let derivation = analysis::derive(&circuit, transfer, &options());
        derivation.map(|derivation| SHAPES.map(|shape| Written::new(&circuit, &derivation, shape)))
    });
    match written {
        [Ok(first), Ok(second)] if first == second => Ok(Outcome::Equal),
        [Ok(first), Ok(second)] => {
            let differ = (0..SHAPES.len()).find(|&at| first[at] != second[at]).unwrap_or(0);
            Err(format!("{:?}\nbut {:?}\n{}", first[differ], second[differ], texts[1]))
        }
        [Err(_), Err(_)] => Ok(Outcome::Singular),
        [first, second] => Err(format!("{:?} but {:?}\n{}", first.err(), second.err(), texts[1])),
    }
}

fn from_environment(name: &str, otherwise: u64) -> u64 {
    std::env::var(name).ok().and_then(|text| text.parse().ok()).unwrap_or(otherwise)
}

/// What becomes of every seed, `step` apart; failures are shown with their circuits.
fn outcomes(step: u64, judge: fn(u64) -> Result<Outcome, String>) -> Vec<Outcome> {
    let first = from_environment("RANDOM_CIRCUITS_FROM", 0);
    let last = first + from_environment("RANDOM_CIRCUITS", CIRCUITS);
    let workers = 2;
    let outcomes: Vec<(u64, Result<Outcome, String>)> = std::thread::scope(|scope| {
        let handles: Vec<_> = (0..workers)
            .map(|worker| {
                scope.spawn(move || {
                    (first + worker * step..last)
                        .step_by((workers * step) as usize)
                        .map(|seed| (seed, judge(seed)))
                        .collect::<Vec<_>>()
                })
            })
            .collect();
        handles.into_iter().flat_map(|handle| handle.join().expect("no panic")).collect()
    });
    let failures: Vec<String> = outcomes
        .iter()
        .filter_map(|(seed, outcome)| {
            let fault = outcome.as_ref().err()?;
            Some(format!("seed {seed}: {fault}\n{}", generator::circuit(*seed).text()))
        })
        .collect();
    assert!(
        failures.is_empty(),
        "{} failures\n{}",
        failures.len(),
        failures[..failures.len().min(5)].join("\n")
    );
    outcomes.into_iter().filter_map(|(_, outcome)| outcome.ok()).collect()
}

fn share(outcomes: &[Outcome], wanted: &Outcome) -> f64 {
    outcomes.iter().filter(|outcome| *outcome == wanted).count() as f64 / outcomes.len() as f64
}

#[test]
fn printed_formulas_equal_an_independent_exact_solve() {
    let outcomes = outcomes(1, judge);
    let (equal, singular) =
        (share(&outcomes, &Outcome::Equal), share(&outcomes, &Outcome::Singular));
    // The generator must keep making circuits worth judging.
    assert!(equal > 0.5, "only {equal} were judged");
    assert!(singular > 0.03, "only {singular} had no unique solution");
}

#[test]
fn the_order_of_lines_does_not_show() {
    let outcomes = outcomes(REORDERED, reordered);
    assert!(share(&outcomes, &Outcome::Equal) > 0.5);
}
