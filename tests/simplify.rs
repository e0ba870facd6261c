//! Shorter formulas: the approximations of textbooks found by the program, large amplifiers, and
//! errors measured anew.
//!
//! The error is measured here on a grid of its own, against the floating-point solve of the nodal
//! equations, which shares no code with the elimination; the formula is read back from the text of the
//! JSON. `RANDOM_CIRCUITS=5000 cargo test --release --test simplify` runs a longer campaign.

#[path = "support/complex.rs"]
mod complex;

use std::f64::consts::TAU;
use std::fmt::Write;
use std::path::Path;

use cofactor::algebra::modular::Random;
use cofactor::analysis::{self, Entry, Options};
use cofactor::circuit::{Circuit, SymbolRole, Transfer};
use cofactor::simplify::answer::{Answer, SimplifyResult, result};
use cofactor::simplify::{Goal, Simplified, SimplifyError, Unwatched, simplify};
use cofactor::typeset::{Letter, Style, SymbolTable};
use cofactor::{language, numeric};
use num_complex::Complex;
use num_traits::ToPrimitive;

type C = Complex<f64>;

fn read(text: &str) -> Circuit {
    let reading = language::read(text);
    reading.circuit.unwrap_or_else(|| panic!("{:#?}", reading.diagnostics))
}

fn file(name: &str) -> Circuit {
    let path = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/simplify").join(name);
    read(&std::fs::read_to_string(path).expect("a circuit of the tests"))
}

fn exact(circuit: &Circuit) -> Entry {
    let answered = analysis::answer(circuit, &circuit.asks[0], &Options::default());
    answered.expect("an answer").swap_remove(0)
}

fn band(circuit: &Circuit) -> (f64, f64) {
    let band = circuit.band.as_ref().expect("a band");
    (band.from.to_f64().expect("a number"), band.to.to_f64().expect("a number"))
}

struct Case {
    circuit: Circuit,
    entry: Entry,
    band: (f64, f64),
}

impl Case {
    fn new(circuit: Circuit) -> Self {
        Self { entry: exact(&circuit), band: band(&circuit), circuit }
    }

    fn shortened(&self, goal: &Goal) -> (Simplified, SimplifyResult) {
        let simplified =
            simplify(&self.circuit, &self.entry, self.band, goal, false, &mut Unwatched)
                .expect("a formula");
        let told = result(&Answer { entry: &self.entry, simplified: &simplified });
        (simplified, told)
    }

    /// The largest error of a formula in dB and degrees, at `points` frequencies that no grid of the
    /// program has, with each symbol at nominal + its tolerance × `corner`.
    fn error(&self, formula: &str, points: usize, corner: &dyn Fn(usize) -> i8) -> (f64, f64) {
        let values: Vec<f64> = self
            .circuit
            .symbols
            .iter()
            .enumerate()
            .map(|(index, symbol)| {
                let nominal = match symbol.role {
                    SymbolRole::Pi => std::f64::consts::PI,
                    _ => symbol.nominal.as_ref().and_then(ToPrimitive::to_f64).unwrap_or(1.0),
                };
                let tolerance = symbol.tolerance.as_ref();
                let end = tolerance.and_then(|t| match corner(index) {
                    1 => t.high.to_f64(),
                    -1 => t.low.to_f64(),
                    _ => None,
                });
                nominal + end.unwrap_or(0.0)
            })
            .collect();
        let (low, high) = self.band;
        let hertz: Vec<f64> = (0..points)
            .map(|k| low * (high / low).powf((k as f64 + 0.37) / points as f64))
            .collect();
        let transfer: &Transfer = &self.circuit.asks[0].transfers()[0];
        let witness = numeric::response(&self.circuit, transfer, &hertz, &values).expect("a solve");
        let names = SymbolTable::new(self.circuit.symbols.iter().map(|s| s.name.as_str()));
        let identifiers: Vec<String> = (0..values.len() as u32)
            .map(|index| names.letter(Letter::Symbol(index), Style::Identifier).into_owned())
            .collect();
        let (mut db, mut deg) = (0.0_f64, 0.0_f64);
        for (hz, exact) in hertz.iter().zip(&witness) {
            let s = C::new(0.0, TAU * hz);
            let value = complex::evaluate(formula, &|name| match name {
                "s" => s,
                _ => {
                    let index = identifiers.iter().position(|id| id == name);
                    C::new(values[index.unwrap_or_else(|| panic!("`{name}`"))], 0.0)
                }
            });
            let ratio = value / exact;
            db = db.max((20.0 * ratio.norm().log10()).abs());
            deg = deg.max(ratio.arg().to_degrees().abs());
        }
        (db, deg)
    }

    /// What is told of the error holds on another grid, and is within the goal.
    #[track_caller]
    fn holds(&self, told: &SimplifyResult, goal: &Goal) {
        let (db, deg) = self.error(&told.expression, 997, &|_| 0);
        let slack = 1e-6;
        assert!(db <= told.worst_magnitude_db + slack, "{db} dB: {told:#?}");
        assert!(deg <= told.worst_phase_deg + slack, "{deg} deg: {told:#?}");
        assert!(told.worst_magnitude_db <= goal.magnitude_db * (1.0 + 1e-5), "{told:#?}");
        assert!(told.worst_phase_deg <= goal.phase_deg * (1.0 + 1e-5), "{told:#?}");
        let Some(over) = &told.over_tolerances else { return };
        for bits in 0..16_usize {
            let corner = |index: usize| if bits >> (index % 4) & 1 == 1 { 1 } else { -1 };
            let (db, deg) = self.error(&told.expression, 97, &corner);
            assert!(db <= over.worst_magnitude_db + slack, "corner: {db} dB: {told:#?}");
            assert!(deg <= over.worst_phase_deg + slack, "corner: {deg} deg: {told:#?}");
        }
    }
}

fn goal(magnitude_db: f64, phase_deg: f64) -> Goal {
    Goal { magnitude_db, phase_deg, ..Goal::default() }
}

/// The program finds the formula of the textbook, and its error is true.
#[track_caller]
fn check(name: &str, goal: Goal, formula: &str) {
    let case = Case::new(file(name));
    let (_, told) = case.shortened(&goal);
    assert_eq!(told.compact, formula, "{told:#?}");
    case.holds(&told, &goal);
}

struct Generator {
    random: Random,
    text: String,
    nodes: u64,
}

impl Generator {
    /// A circuit with a backbone of resistors, so that it has a solution, and anything across it.
    fn circuit(seed: u64) -> String {
        let mut random = Random::new(seed);
        let nodes = 2 + random.word() % 4;
        let mut this = Self { random, text: String::new(), nodes };
        this.line("in > voltage Vin > ground");
        let resistance = this.value(2.0, 6.0, "ohm");
        this.line(&format!("in > R0 = {resistance} > n1"));
        for k in 1..nodes {
            let resistance = this.value(2.0, 6.0, "ohm");
            this.line(&format!("n{k} > R{k} = {resistance} > n{}", k + 1));
        }
        let resistance = this.value(2.0, 6.0, "ohm");
        this.line(&format!("n{nodes} > Rx = {resistance} > ground"));
        for k in 0..2 + this.below(5) {
            this.element(k);
        }
        this.line("band 100 Hz to 10 MHz");
        let ask = match this.below(4) {
            0 => "impedance(n1, ground)".to_owned(),
            1 => "I(R0) / Vin".to_owned(),
            _ => format!("V(n{nodes}) / Vin"),
        };
        this.line(&format!("ask H = {ask}"));
        this.text
    }

    fn line(&mut self, line: &str) {
        let _ = writeln!(self.text, "{line}");
    }

    fn below(&mut self, bound: u64) -> u64 {
        self.random.word() % bound
    }

    /// Evenly by the logarithm between two powers of ten; with a tolerance now and then.
    fn value(&mut self, low: f64, high: f64, unit: &str) -> String {
        let part = self.below(10_000) as f64 / 10_000.0;
        let value = 10_f64.powf(low + (high - low) * part);
        let tolerance = ["", "", "", " +/- 1 %", " +/- 5 %", " +/- 20 %"][self.below(6) as usize];
        format!("{value:.3e} {unit}{tolerance}")
    }

    fn node(&mut self) -> String {
        match self.below(self.nodes + 2) {
            0 => "ground".to_owned(),
            1 => "in".to_owned(),
            index => format!("n{}", index - 1),
        }
    }

    fn element(&mut self, number: u64) {
        let (a, mut b) = (self.node(), self.node());
        while a == b {
            b = self.node();
        }
        let line = match self.below(8) {
            0 => format!("{a} > R9{number} = {} > {b}", self.value(2.0, 6.0, "ohm")),
            1 => format!("{a} > L{number} = {} > {b}", self.value(-7.0, -2.0, "H")),
            2 | 3 => {
                let (c, d) = (self.node(), self.node());
                let gm = self.value(-4.0, -1.0, "S");
                self.line(&format!("let gm{number} = {}", gm.split(" +/-").next().unwrap_or(&gm)));
                format!("{a} > current I{number} = gm{number}*V({c}, {d}) > {b}")
            }
            _ => format!("{a} > C{number} = {} > {b}", self.value(-12.0, -6.0, "F")),
        };
        self.line(&line);
    }
}

/// Circuits in a normal run; where the compiler has optimised, all that were asked for.
const CIRCUITS: u64 = if cfg!(debug_assertions) { 60 } else { 500 };

#[test]
fn the_error_of_random_circuits_is_never_exceeded() {
    let circuits =
        std::env::var("RANDOM_CIRCUITS").ok().and_then(|n| n.parse().ok()).unwrap_or(CIRCUITS);
    let (mut judged, mut shorter) = (0, 0);
    for seed in 0..circuits {
        let text = Generator::circuit(seed);
        let Some(circuit) = language::read(&text).circuit else { panic!("{text}") };
        let Ok(mut answers) = analysis::answer(&circuit, &circuit.asks[0], &Options::default())
        else {
            continue;
        };
        let case = Case { band: band(&circuit), entry: answers.swap_remove(0), circuit };
        let goal = [goal(0.5, 5.0), goal(1.0, 10.0), goal(3.0, 20.0)][seed as usize % 3];
        let simplified =
            match simplify(&case.circuit, &case.entry, case.band, &goal, false, &mut Unwatched) {
                Ok(simplified) => simplified,
                Err(SimplifyError::NotFinite) => continue,
                Err(error) => panic!("{error}: {text}"),
            };
        if case.entry.elimination.as_ref().is_none_or(|elimination| elimination.is_zero()) {
            continue;
        }
        let told = result(&Answer { entry: &case.entry, simplified: &simplified });
        case.holds(&told, &goal);
        judged += 1;
        shorter += u64::from(!simplified.is_exact);
    }
    assert!(judged * 10 >= circuits * 9, "only {judged} of {circuits} could be judged");
    assert!(shorter * 2 >= judged, "only {shorter} of {judged} became shorter");
}
