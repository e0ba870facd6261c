//! Random circuits: the printed formula, read back and evaluated at random rationals, against an
//! exact solve of the network that shares no code with the derivation.
//!
//! Each circuit is written in the language (2 to 8 nodes, every kind of element, matched elements
//! and shared parameters among them), read, derived and printed. The witness is the fraction-free
//! elimination over Q[s] of `numeric`. Circuits without a unique solution must be refused as such by
//! both. The seed is fixed; `RANDOM_CIRCUITS=100000 cargo test --release --test random_circuits`
//! runs a longer campaign.

use std::fmt::Write;

use cofactor::algebra::modular::Random;
use cofactor::analysis::{self, ClosedForm, Options};
use cofactor::circuit::{Circuit, Number};
use cofactor::language;
use cofactor::numeric::{self, NumericError, Rationals};
use cofactor::typeset::answer::lettering;
use cofactor::typeset::shape::{Shape, write as shaped};
use cofactor::typeset::{Dialect, SymbolTable, plain};
use num_traits::Zero;

/// Circuits in a normal run; ten thousand where the compiler has optimised.
const CIRCUITS: usize = if cfg!(debug_assertions) { 500 } else { 10_000 };

struct Generator {
    random: Random,
    text: String,
    nodes: u64,
    count: usize,
    /// Names of elements whose current can be sensed.
    sensed: Vec<String>,
    parameters: Vec<String>,
}

impl Generator {
    fn circuit(seed: u64) -> String {
        let mut random = Random::new(seed);
        let nodes = 2 + random.word() % 7;
        let mut generator = Self {
            random,
            text: String::new(),
            nodes,
            count: 0,
            sensed: Vec::new(),
            parameters: Vec::new(),
        };
        generator.write();
        generator.text
    }

    fn below(&mut self, bound: u64) -> u64 {
        self.random.word() % bound
    }

    fn node(&mut self) -> String {
        match self.below(self.nodes) {
            0 => "ground".to_owned(),
            index => format!("n{index}"),
        }
    }

    fn two_nodes(&mut self) -> (String, String) {
        loop {
            let (a, b) = (self.node(), self.node());
            if a != b || self.below(40) == 0 {
                return (a, b);
            }
        }
    }

    fn name(&mut self, letter: &str) -> String {
        self.count += 1;
        format!("{letter}{}", self.count)
    }

    /// A value now and then: matched to an earlier element, a shared parameter, a number.
    fn value(&mut self, letter: &str) -> String {
        match self.below(8) {
            0 => {
                let parameter = format!("{letter}m");
                self.parameters.push(parameter.clone());
                let factor = 1 + self.below(3);
                if factor == 1 {
                    format!(" = {parameter}")
                } else {
                    format!(" = {factor}*{parameter}")
                }
            }
            _ => String::new(),
        }
    }

    fn walk(&mut self, element: &str) {
        let (a, b) = self.two_nodes();
        if a == b {
            return;
        }
        let _ = writeln!(self.text, "{a} > {element} > {b}");
    }

    fn passive(&mut self) {
        let letter = ["R", "R", "R", "C", "C", "L", "G"][self.below(7) as usize];
        let (name, value) = (self.name(letter), self.value(letter));
        self.walk(&format!("{name}{value}"));
        if self.text.contains(&format!("> {name}{value} >")) {
            self.sensed.push(name);
        }
    }

    fn control(&mut self) -> String {
        if !self.sensed.is_empty() && self.below(3) == 0 {
            let index = self.below(self.sensed.len() as u64) as usize;
            return format!("I({})", self.sensed[index]);
        }
        let (a, b) = self.two_nodes();
        format!("V({a}, {b})")
    }

    fn dependent(&mut self) {
        let class = ["voltage", "current"][self.below(2) as usize];
        let name = self.name("X");
        let mut terms = Vec::new();
        for _ in 0..=self.below(3) / 2 {
            let gain = match self.below(6) {
                0 => format!("{}/(1 + s/{})", self.name("a"), self.name("w")),
                1 => "2".to_owned(),
                _ => self.name("k"),
            };
            terms.push(format!("{gain}*{}", self.control()));
        }
        self.walk(&format!("{class} {name} = {}", terms.join(" + ")));
    }

    fn write(&mut self) {
        let (a, b) = self.two_nodes();
        let class = ["voltage", "current"][self.below(2) as usize];
        let _ = writeln!(self.text, "{a} > {class} Vin > {b}");
        let elements = self.nodes + 1 + self.below(5);
        for _ in 0..elements {
            match self.below(12) {
                0..=7 => self.passive(),
                8..=9 => self.dependent(),
                10 => {
                    let (plus, minus) = self.two_nodes();
                    let output = self.node();
                    let name = self.name("U");
                    let gain = match self.below(3) {
                        0 => String::new(),
                        1 => ", gain = A0".to_owned(),
                        _ => {
                            format!(", gain = A0/(1 + s/wp), rin = {}, rout", 1000 + self.below(5))
                        }
                    };
                    let _ = writeln!(
                        self.text,
                        "opamp {name}: plus {plus}, minus {minus}, output {output}{gain}"
                    );
                }
                _ => {
                    let (base, collector, emitter) = (self.node(), self.node(), self.node());
                    let name = self.name("Q");
                    let extra = ["", ", ro", ", Cpi, Cmu", ", ro, rb, Cmu"][self.below(4) as usize];
                    let _ = writeln!(
                        self.text,
                        "bjt {name}: base {base}, collector {collector}, emitter {emitter}, gm, rpi{extra}"
                    );
                }
            }
        }
        if self.below(6) == 0 && self.nodes > 3 {
            let name = self.name("Z");
            self.walk(&format!("{name} = (Ra + s*La) || (1/(s*Ca))"));
        }
        let (a, b) = self.two_nodes();
        let query = match self.below(5) {
            0 => format!("impedance({a}, {b})"),
            1 if !self.sensed.is_empty() => {
                let index = self.below(self.sensed.len() as u64) as usize;
                format!("I({}) / Vin", self.sensed[index])
            }
            2 => format!("V({a}, {b}) / V({})", self.node()),
            _ => format!("V({a}, {b}) / Vin"),
        };
        let _ = writeln!(self.text, "ask H = {query}");
    }
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
    let text = Generator::circuit(seed);
    let Some(circuit) = language::read(&text).circuit else {
        return Ok(Outcome::Refused);
    };
    let transfer = &circuit.asks[0].transfers()[0];
    let mut random = Random::new(seed ^ 0xabcd);
    let mut draw = || circuit.symbols.iter().map(|_| rational(&mut random)).collect();
    let mut numbers: Vec<Number> = draw();
    let mut witness = numeric::exact(&circuit, transfer, &numbers);
    if witness.is_err() {
        // Numbers can be singular by chance (a gain of exactly 1): only twice is a verdict.
        numbers = draw();
        witness = numeric::exact(&circuit, transfer, &numbers);
    }
    let derived = analysis::derive(&circuit, transfer, &Options::default());
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

fn compare(
    circuit: &Circuit,
    derivation: &analysis::Derivation,
    witness: &numeric::Fraction,
    numbers: &[Number],
    s: Number,
) -> Result<Outcome, String> {
    let at = |coefficients: &[Number]| {
        coefficients.iter().rev().fold(Number::zero(), |sum, c| sum * &s + c)
    };
    let below = at(&witness.denominator);
    let expect = if below.is_zero() { None } else { Some(at(&witness.numerator) / below) };
    let names = SymbolTable::new(circuit.symbols.iter().map(|symbol| symbol.name.as_str()));
    let expanded = matches!(derivation.form, ClosedForm::Expanded(_));
    let shapes: &[Shape] =
        if expanded { &[Shape::Compact, Shape::Powers, Shape::Bode] } else { &[] };
    for &shape in shapes {
        let letters = lettering(circuit);
        let written = shaped(&derivation.form, Some(&derivation.elimination), shape, letters)
            .ok_or("no form")?;
        for dialect in [Dialect::Expression, Dialect::Language] {
            let printed = plain::text(&written.formula, &names, dialect);
            let value = language::parse_expression(circuit, &printed)
                .map_err(|faults| format!("`{printed}` does not read back: {faults:?}"))?;
            let found = numeric::evaluate(&Rationals, &value, numbers, &s);
            if found != expect && expect.is_some() {
                return Err(format!("{shape:?}: {printed} = {found:?}, witness {expect:?}"));
            }
        }
    }
    Ok(Outcome::Equal)
}

#[test]
fn printed_formulas_equal_an_independent_exact_solve() {
    let circuits = std::env::var("RANDOM_CIRCUITS")
        .ok()
        .and_then(|text| text.parse().ok())
        .unwrap_or(CIRCUITS);
    let workers = 2;
    let outcomes: Vec<(u64, Result<Outcome, String>)> = std::thread::scope(|scope| {
        let handles: Vec<_> = (0..workers)
            .map(|worker| {
                scope.spawn(move || {
                    (worker as u64..circuits as u64)
                        .step_by(workers)
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
            Some(format!("seed {seed}: {fault}\n{}", Generator::circuit(*seed)))
        })
        .collect();
    assert!(
        failures.is_empty(),
        "{} failures\n{}",
        failures.len(),
        failures[..failures.len().min(5)].join("\n")
    );
    let count = |wanted: &Outcome| {
        outcomes.iter().filter(|(_, outcome)| outcome.as_ref() == Ok(wanted)).count()
    };
    let (equal, singular) = (count(&Outcome::Equal), count(&Outcome::Singular));
    // The generator must keep making circuits worth judging.
    assert!(3 * equal > circuits, "only {equal} of {circuits} were judged");
    assert!(100 * singular > circuits, "only {singular} of {circuits} had no unique solution");
}
