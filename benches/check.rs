//! Verdicts on a circuit with five poles, the result being derived already: each has to come in well
//! under 100 ms.

use cofactor::analysis::check::{self, Judgement};
use cofactor::analysis::{self, Entry, Options};
use cofactor::circuit::{Circuit, Claim};
use cofactor::language;

fn main() {
    divan::main();
}

/// A claim of each kind: (what it is, the formula of `H`).
const CLAIMS: [(&str, &str); 9] = [
    (
        "equal",
        "1/((1 + s R1 C1)*(1 + s C3 (R2 + R3) + s^2 R2 R3 C2 C3)*(1 + s C5 (R4 + R5) + s^2 R4 R5 C4 C5))",
    ),
    (
        "expanded",
        "1/(1 + s (R1 C1 + C3 (R2 + R3) + C5 (R4 + R5)) + s^2 (R2 R3 C2 C3 + R4 R5 C4 C5 + R1 C1 (C3 (R2 + R3) + C5 (R4 + R5)) + C3 C5 (R2 + R3)*(R4 + R5)) + s^3 (R1 C1 (R2 R3 C2 C3 + R4 R5 C4 C5 + C3 C5 (R2 + R3)*(R4 + R5)) + C3 (R2 + R3) R4 R5 C4 C5 + C5 (R4 + R5) R2 R3 C2 C3) + s^4 (R1 C1 C3 (R2 + R3) R4 R5 C4 C5 + R1 C1 C5 (R4 + R5) R2 R3 C2 C3 + R2 R3 C2 C3 R4 R5 C4 C5) + s^5 R1 C1 R2 R3 C2 C3 R4 R5 C4 C5)",
    ),
    ("in a limit", "1/((1 + s C3 (R2 + R3) + s^2 R2 R3 C2 C3)*(1 + s C5 (R4 + R5)))"),
    ("at dc", "1"),
    (
        "a sign",
        "1/((1 + s R1 C1)*(1 + s C3 (R2 + R3) - s^2 R2 R3 C2 C3)*(1 + s C5 (R4 + R5) + s^2 R4 R5 C4 C5))",
    ),
    (
        "a missing term",
        "1/((1 + s R1 C1)*(1 + s C3 R2 + s^2 R2 R3 C2 C3)*(1 + s C5 (R4 + R5) + s^2 R4 R5 C4 C5))",
    ),
    (
        "two mistakes",
        "1/((1 + s R1 C2)*(1 + s C3 (R2 + R3) - s^2 R2 R3 C2 C3)*(1 + s C5 (R4 - R5) + s^2 R4 R5 C4 C5))",
    ),
    ("nothing right", "(R1 C1 + R2 C2)/(R3 C3 + R4 C4 + s R5^2 C5^2)"),
    ("two elements only", "R1/R2"),
];

fn circuit() -> Circuit {
    let text = include_str!("../examples/anti-alias-fifth.circuit");
    let circuit = language::read(text).circuit;
    circuit.expect("a circuit without faults")
}

fn entry(circuit: &Circuit, name: &str) -> Entry {
    let ask = circuit.asks.iter().find(|ask| ask.name == name).expect("a question");
    let mut entries = analysis::answer(circuit, ask, &Options::default()).expect("an answer");
    entries.remove(0)
}

fn judge(circuit: &Circuit, claim: &Claim, entry: &Entry) -> Judgement {
    let unit = language::claim_units(circuit, claim).ok();
    check::judge(circuit, claim, entry, unit).expect("a verdict")
}

#[divan::bench(args = CLAIMS.map(|(what, _)| what))]
fn five_poles(bencher: divan::Bencher<'_, '_>, what: &str) {
    let mut circuit = circuit();
    let formula = CLAIMS.iter().find(|(name, _)| *name == what).expect("a claim").1;
    let claim = language::claim(&mut circuit, &format!("H = {formula}")).expect("a claim");
    let entry = entry(&circuit, "H");
    bencher.bench(|| judge(&circuit, &claim, &entry));
}

/// The same ladder without followers: five poles that depend on everything.
const LADDER: &str = "in > voltage Vin > ground\n\
    in > R1 = 1 k > a > C1 = 1 n > ground\na > R2 = 1 k > b > C2 = 2 n > ground\n\
    b > R3 = 1 k > c > C3 = 3 n > ground\nc > R4 = 1 k > d > C4 = 4 n > ground\n\
    d > R5 = 1 k > out > C5 = 5 n > ground\nband 1 kHz to 1 MHz\nask H = V(out)/Vin\n";

/// Claims about the ladder.
const OF_LADDER: [&str; 6] = [
    "H = 1",
    "H = 1/(1 + s C5 (R1 + R2 + R3 + R4 + R5))",
    "H = 1/(1 + s R1 C1)^5",
    "H = 1/((1 + s R1 C1)*(1 + s R2 C2)*(1 + s R3 C3)*(1 + s R4 C4)*(1 + s R5 C5))",
    "H = R5/(R1 + R5 + s R1 C1 R5)",
    "p1 = -1/((R1 + R2 + R3 + R4 + R5)*C5)",
];

#[divan::bench(args = OF_LADDER)]
fn ladder(bencher: divan::Bencher<'_, '_>, formula: &str) {
    let mut circuit = language::read(LADDER).circuit.expect("a circuit");
    let claim = language::claim(&mut circuit, formula).expect("a claim");
    let entry = entry(&circuit, "H");
    bencher.bench(|| judge(&circuit, &claim, &entry));
}
