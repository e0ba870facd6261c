//! Questions beyond a single ratio, from the circuit's text to exact results: two-port sets, return
//! ratios, noise densities and limits, against the identities of network theory and published
//! figures. Random circuits are drawn from a fixed seed.

mod feedback;
mod golden;
mod limits;
mod noise;
mod two_port;

use cofactor::algebra::modular::Random;
use cofactor::algebra::{Fraction, Var};
use cofactor::analysis::{self, AnalysisError, ClosedForm, Entry, Options};
use cofactor::circuit::{Circuit, Number};
use cofactor::elimination::{fraction_of, symbol_of};
use cofactor::language;
use num_traits::ToPrimitive;

/// The circuit of a text without faults.
fn read(text: &str) -> Circuit {
    let reading = language::read(text);
    reading.circuit.unwrap_or_else(|| panic!("{:?}\n{text}", reading.diagnostics))
}

/// Answers a query, `NAME = …` or without a name, with every witness agreeing.
fn answer(circuit: &Circuit, query: &str) -> Result<Vec<Entry>, AnalysisError> {
    answer_with(circuit, query, &Options::default())
}

fn answer_with(
    circuit: &Circuit,
    query: &str,
    options: &Options,
) -> Result<Vec<Entry>, AnalysisError> {
    let (name, query) = query.split_once(" = ").unwrap_or(("H", query));
    let ask = language::query(circuit, query).unwrap_or_else(|faults| panic!("{faults:?}"));
    let ask = cofactor::circuit::Ask { name: name.to_owned(), ..ask };
    let entries = analysis::answer(circuit, &ask, options)?;
    for entry in &entries {
        assert!(entry.passed(), "{}: {:?} {:?}", entry.name, entry.evidence, entry.checks);
    }
    Ok(entries)
}

/// The only result of a query, as a fraction.
fn fraction(circuit: &Circuit, query: &str) -> Fraction {
    let entries = answer(circuit, query).unwrap_or_else(|error| panic!("{query}: {error}"));
    form(&entries[0])
}

fn form(entry: &Entry) -> Fraction {
    match &entry.form {
        ClosedForm::Expanded(fraction) => fraction.clone(),
        ClosedForm::Nested(_) => panic!("{} is nested", entry.name),
    }
}

/// A formula over the symbols of the circuit.
fn formula(circuit: &Circuit, text: &str) -> Fraction {
    let value = language::parse_expression(circuit, text);
    let value = value.unwrap_or_else(|faults| panic!("{text}: {faults:?}"));
    fraction_of(&value).expect("no division by 0")
}

/// The value at nominal values and a real s.
fn nominal(circuit: &Circuit, fraction: &Fraction, s: i64) -> f64 {
    let value = |variable: Var| match symbol_of(variable) {
        Some(symbol) => circuit[symbol].nominal.clone().expect("a nominal value"),
        None => Number::from_integer(s.into()),
    };
    fraction.evaluate(value).and_then(|value| value.to_f64()).expect("a finite value")
}

/// Draws circuits line by line.
struct Draw {
    random: Random,
    count: usize,
}

impl Draw {
    fn new(seed: u64) -> Self {
        Self { random: Random::new(seed), count: 0 }
    }

    fn below(&mut self, bound: u64) -> usize {
        (self.random.word() % bound) as usize
    }

    fn of<'a>(&mut self, list: &[&'a str]) -> &'a str {
        list[self.below(list.len() as u64)]
    }

    /// Two different nodes.
    fn pair<'a>(&mut self, nodes: &[&'a str]) -> (&'a str, &'a str) {
        loop {
            let (a, b) = (self.of(nodes), self.of(nodes));
            if a != b {
                return (a, b);
            }
        }
    }

    /// A passive element of a class in `letters` between two of the nodes, with a name of its own.
    fn passive(&mut self, letters: &[&str], nodes: &[&str]) -> String {
        self.count += 1;
        let (a, b) = self.pair(nodes);
        format!("{a} > {}{} > {b}\n", self.of(letters), self.count)
    }

    /// Passive elements on a tree that reaches every node, and some more.
    fn network(&mut self, letters: &[&str], nodes: &[&str], more: usize) -> String {
        let mut text = String::new();
        for index in 1..nodes.len() {
            self.count += 1;
            let other = nodes[self.below(index as u64)];
            let letter = self.of(letters);
            text.push_str(&format!("{} > {letter}{} > {other}\n", nodes[index], self.count));
        }
        for _ in 0..more {
            text.push_str(&self.passive(letters, nodes));
        }
        text
    }
}
