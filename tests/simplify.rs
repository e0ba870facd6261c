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
use cofactor::simplify::{Goal, Simplified, SimplifyError, Unwatched, Watch, simplify};
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
            .map(|k| low * libm::pow(high / low, (k as f64 + 0.37) / points as f64))
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
            db = db.max((20.0 * libm::log10(ratio.norm())).abs());
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

/// The value of an expression at random values of its names; `Q1.gm` and `Q1_gm` are one.
fn at_random(expression: &str, seed: u64) -> C {
    complex::evaluate(expression, &|name| {
        let key = name.replace('.', "_");
        let hash = key
            .bytes()
            .fold(seed, |hash, byte| (hash ^ u64::from(byte)).wrapping_mul(0x0100_0000_01b3));
        C::new(1.0 + Random::new(hash).word() as f64 / u64::MAX as f64, 0.0)
    })
}

/// Whether two expressions are one function.
fn are_equal(a: &str, b: &str) -> bool {
    (1..5).all(|seed| {
        let (a, b) = (at_random(a, seed), at_random(b, seed));
        (a - b).norm() <= 1e-9 * b.norm()
    })
}

/// Symbols in an expression, a power counted once.
fn length(expression: &str) -> usize {
    let word = |c: char| !(c.is_ascii_alphanumeric() || c == '_' || c == '.');
    expression
        .split(word)
        .filter(|token| token.starts_with(|c: char| c.is_ascii_alphabetic()) && *token != "s")
        .count()
}

/// The program finds the formula of the textbook, in no more symbols, and its error is true.
#[track_caller]
fn check(name: &str, goal: Goal, textbook: &str) -> SimplifyResult {
    let case = Case::new(file(name));
    let (_, told) = case.shortened(&goal);
    assert!(are_equal(&told.expression, textbook), "{} is not {textbook}", told.compact);
    assert!(told.length as usize <= length(textbook), "{} for {textbook}", told.compact);
    case.holds(&told, &goal);
    told
}

/// A figure by its kind and number: its formula is this one, and its value near the exact one.
#[track_caller]
fn has(told: &SimplifyResult, kind: &str, number: Option<usize>, formula: &str) {
    let found = told.figures.iter().find(|one| one.kind == kind && one.number == number);
    let found = found.unwrap_or_else(|| panic!("no {kind} {number:?}: {:#?}", told.figures));
    assert!(are_equal(&found.expression, formula), "{} is not {formula}", found.expression);
    let exact = found.exact.expect("an exact value");
    assert!((found.value / exact - 1.0).abs() <= 0.3, "{found:?}");
}

// The approximations on the right are those of the textbooks that are named, from memory.

#[test]
fn common_emitter() {
    // Gray, Hurst, Lewis & Meyer: the gain at mid-band with ro and the bias network left out.
    check("common-emitter.circuit", goal(1.0, 10.0), "-Q1.gm*RC*Q1.rpi/(Rs + Q1.rpi)");
}

#[test]
fn cascode() {
    // Razavi: the output resistance is gm2·ro2·ro1.
    check("cascode.circuit", goal(1.0, 10.0), "M2.gm*M2.ro*M1.ro");
    // The gain is that of the lower transistor into the load.
    check("cascode-gain.circuit", goal(1.0, 10.0), "-M1.gm*RD/(1 + s*RD*CL)");
}

#[test]
fn two_stages_with_a_miller_capacitor() {
    // Gray, Hurst, Lewis & Meyer: p1 = −1/(gm2·R1·R2·Cc), p2 = −gm2/C2 for a large Cc, the zero gm2/Cc on the
    // right, and gm1/Cc as the product of gain and bandwidth.
    let told = check(
        "miller.circuit",
        goal(1.0, 10.0),
        "gm1*(gm2 - s*Cc)/(1/(R1*R2) + s*gm2*Cc + s^2*C2*Cc)",
    );
    has(&told, "dc_gain", None, "gm1*gm2*R1*R2");
    has(&told, "pole", Some(1), "1/(gm2*R1*R2*Cc)");
    has(&told, "pole", Some(2), "gm2/C2");
    has(&told, "zero", Some(1), "gm2/Cc");
    has(&told, "gain_bandwidth", None, "gm1/Cc");
    assert!(told.figures.iter().any(|one| one.kind == "zero" && one.right_half_plane));
}

#[test]
fn sallen_key_with_a_finite_amplifier() {
    // Sallen & Key, 1955: with an ideal amplifier.
    check("sallen-key.circuit", goal(0.5, 5.0), "1/(1 + s*C2*(R1 + R2) + s^2*R1*R2*C1*C2)");
}

#[test]
fn followers() {
    // Horowitz & Hill: what is in parallel, times the current gain.
    check(
        "bootstrapped-follower.circuit",
        goal(1.0, 10.0),
        "Q1.gm/((1/RB + 1/Q1.rpi)*(1/RD + 1/RE))",
    );
    // Gray, Hurst, Lewis & Meyer: 1/gm + Rs/β.
    check("emitter-follower.circuit", goal(0.5, 5.0), "1/Q1.gm + Rs/(Q1.gm*Q1.rpi)");
}

#[test]
fn degenerated_and_differential_stages() {
    check("common-source.circuit", goal(1.0, 10.0), "-RD/RS");
    // Razavi: gm·(ro2 ∥ ro4) with a mirror as the load.
    check("differential-pair.circuit", goal(0.5, 5.0), "M1.gm/(1/M2.ro + 1/M4.ro)");
}

/// Open-loop gain from 1 Hz to 1 MHz within 1 dB and 10° in at most 40 symbols.
#[track_caller]
fn check_amplifier(name: &str) -> SimplifyResult {
    let mut circuit = file(name);
    circuit.band = Some(language::band("1 Hz to 1 MHz").expect("a band"));
    let case = Case::new(circuit);
    let goal = goal(1.0, 10.0);
    let (_, told) = case.shortened(&goal);
    assert!(told.length <= 40, "{}", told.compact);
    let (db, deg) = case.error(&told.expression, 199, &|_| 0);
    assert!(db <= told.worst_magnitude_db + 1e-6 && db <= 1.0, "{db} dB: {}", told.compact);
    assert!(deg <= told.worst_phase_deg + 1e-6 && deg <= 10.0, "{deg} deg: {}", told.compact);
    told
}

#[test]
fn an_amplifier_of_21_transistors() {
    let told = check_amplifier("opamp-21.circuit");
    // Half of the input transistors' gm, as two of them are in series, over the Miller capacitor.
    let product = told.figures.iter().find(|one| one.kind == "gain_bandwidth").expect("a product");
    assert!(product.expression.contains("gm/(2*Cc)"), "{product:?}");
    assert!(told.figures.iter().any(|one| one.kind == "pole" && one.number == Some(1)));
}

#[test]
#[cfg_attr(debug_assertions, ignore = "slow where nothing is optimised: cargo test --release")]
fn an_amplifier_of_25_transistors_with_base_resistances() {
    let told = check_amplifier("opamp-25.circuit");
    let product = told.figures.iter().find(|one| one.kind == "gain_bandwidth").expect("a product");
    assert!(product.expression.contains("Cc"), "{product:?}");
    assert!(product.expression.contains("gm"), "{product:?}");
}

#[test]
fn missing_values_are_named() {
    let circuit =
        read("in > voltage Vin > ground\nin > R1 > out > C1 > ground\nask H = V(out) / Vin\n");
    let entry = exact(&circuit);
    let answer = simplify(&circuit, &entry, (1.0, 1e6), &Goal::default(), false, &mut Unwatched);
    let error = answer.expect_err("no values");
    assert_eq!(error, SimplifyError::NoValues(vec!["R1".to_owned(), "C1".to_owned()]));
    assert!(error.to_string().contains("`R1` and `C1` have no nominal value"), "{error}");
}

/// Ends the search at once.
struct Over;

impl Watch for Over {
    fn progress(&mut self, _: &str, _: usize, _: usize) {}

    fn expired(&self) -> bool {
        true
    }
}

#[test]
fn what_is_stopped_is_marked_and_still_true() {
    let case = Case::new(file("miller.circuit"));
    let goal = goal(1.0, 10.0);
    let stopped = simplify(&case.circuit, &case.entry, case.band, &goal, false, &mut Over)
        .expect("a formula");
    assert!(stopped.stopped);
    case.holds(&result(&Answer { entry: &case.entry, simplified: &stopped }), &goal);
}

#[test]
fn tight_goals_are_kept_and_the_chain_leads_to_the_exact_function() {
    let case = Case::new(file("common-emitter-high.circuit"));
    let mut last = u64::MAX;
    for goal in [goal(0.02, 0.2), goal(0.2, 2.0), goal(1.0, 10.0)] {
        let (_, told) = case.shortened(&goal);
        case.holds(&told, &goal);
        assert!(told.length <= last, "{told:#?}");
        last = told.length;
    }
    let goal = goal(0.5, 5.0);
    let found = simplify(&case.circuit, &case.entry, case.band, &goal, true, &mut Unwatched);
    let steps = found.expect("a formula").steps;
    assert!(steps.len() >= 3, "{steps:?}");
    assert!(steps.windows(2).all(|two| two[0].length < two[1].length), "{steps:?}");
    let db: Vec<f64> = steps.iter().map(|step| step.worst.db).collect();
    assert!(db.windows(2).all(|two| two[1] < two[0]), "{db:?}");
    assert!(steps.iter().any(|step| step.within) && db[db.len() - 1] < 1e-9, "{db:?}");
}

#[test]
fn roots_and_coefficients_are_held_too() {
    let case = Case::new(file("miller.circuit"));
    let goal = Goal { roots: Some(0.01), ..goal(3.0, 30.0) };
    let (found, _) = case.shortened(&goal);
    let free = case.shortened(&Goal { roots: None, ..goal }).1;
    assert!(free.length < found.formula.symbols(), "the roots cost nothing");
    let goal = Goal { coefficients: Some(0.001), roots: None, ..goal };
    let (found, _) = case.shortened(&goal);
    assert!(free.length < found.formula.symbols(), "the coefficients cost nothing");
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
        let value = libm::pow(10.0, low + (high - low) * part);
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
const CIRCUITS: u64 = if cfg!(debug_assertions) { 40 } else { 500 };

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
