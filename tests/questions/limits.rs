//! Limits: textbook idealisations, ideal elements as limits of real ones, and limits that do not exist.

use super::{Draw, answer, answer_with, form, formula, fraction, read};
use cofactor::analysis::Options;

/// Circuit, question, limits, the textbook's result (closed forms, from memory).
const IDEALISATIONS: [(&str, &str, &str, &str); 24] = [
    (
        "in > R1 > m > R2 > out\nopamp U1: plus ground, minus m, output out, gain = A0\n",
        "V(out) / Vin",
        "A0 to infinity",
        "-R2/R1",
    ),
    (
        "m > R1 > ground\nm > R2 > out\nopamp U1: plus in, minus m, output out, gain = A0\n",
        "V(out) / Vin",
        "A0 to infinity",
        "1 + R2/R1",
    ),
    (
        "opamp U1: plus in, minus out, output out, gain = A0\n",
        "V(out) / Vin",
        "A0 to infinity",
        "1",
    ),
    (
        "in > R1 > m > R2 > out\nopamp U1: plus ground, minus m, output out, gain = A0, rin, rout\nout > RL > ground\n",
        "V(out) / Vin",
        "A0 to infinity",
        "-R2/R1",
    ),
    (
        "in > R1 > m > C1 > out\nopamp U1: plus ground, minus m, output out, gain = A0\n",
        "V(out) / Vin",
        "A0 to infinity",
        "-1/(s*R1*C1)",
    ),
    (
        "in > R1 > m > C1 > out\nopamp U1: plus ground, minus m, output out, gain = A0\n",
        "V(out) / Vin",
        "s to 0",
        "-A0",
    ),
    (
        "in > R1 > m > R2 > out\nopamp U1: plus ground, minus m, output out, gain = wt/s\n",
        "V(out) / Vin",
        "wt to infinity",
        "-R2/R1",
    ),
    (
        "in > R1 > x > R2 > y > C2 > ground\nx > C1 > out\nopamp U1: plus y, minus out, output out, gain = A0\n",
        "V(out) / Vin",
        "A0 to infinity",
        "1/(1 + s*C2*(R1 + R2) + s^2*R1*R2*C1*C2)",
    ),
    ("in > R1 > out > C1 > ground\n", "V(out) / Vin", "s to 0", "1"),
    ("in > C1 > out > R1 > ground\n", "V(out) / Vin", "s to 0", "0"),
    ("in > R1 > out > R2 > ground\nout > C1 > ground\n", "V(out) / Vin", "s to 0", "R2/(R1 + R2)"),
    ("in > R1 > out > R2 > ground\nout > C1 > ground\n", "V(out) / Vin", "C1 to 0", "R2/(R1 + R2)"),
    (
        "in > R1 > out > R2 > ground\nout > C1 > ground\n",
        "V(out) / Vin",
        "R2 to infinity",
        "1/(1 + s*R1*C1)",
    ),
    (
        "bjt Q1: base in, collector out, emitter e, gm, rpi, ro\nout > RC > ground\ne > RE > ground\n",
        "V(out) / Vin",
        "Q1.ro to infinity, Q1.rpi to infinity",
        "-Q1.gm*RC/(1 + Q1.gm*RE)",
    ),
    (
        "bjt Q1: base in, collector out, emitter e, gm, rpi, ro\nout > RC > ground\ne > RE > ground\n",
        "V(out) / Vin",
        "Q1.ro to infinity, Q1.gm to infinity",
        "-RC/RE",
    ),
    (
        "bjt Q1: base in, collector ground, emitter out, gm, rpi\nout > RE > ground\n",
        "V(out) / Vin",
        "Q1.gm to infinity",
        "1",
    ),
    (
        "bjt Q1: base in, collector ground, emitter out, gm, rpi\nout > RE > ground\n",
        "V(out) / Vin",
        "RE to infinity",
        "1",
    ),
    (
        "bjt Q1: base in, collector out, emitter ground, gm, rpi, ro, rb, Cmu\nout > RC > ground\n",
        "V(out) / Vin",
        "Q1.rb to 0, s to 0, Q1.ro to infinity",
        "-Q1.gm*RC",
    ),
    (
        "in > current X = k*I(Ra) > out\nin > Ra > ground\nout > RL > ground\n",
        "V(out) / Vin",
        "RL to 0",
        "0",
    ),
    (
        "in > R1 > m > R2 > out\nopamp U1: plus ground, minus m, output out, gain = A0\n",
        "impedance(m, ground)",
        "A0 to infinity",
        "0",
    ),
    (
        "in > R1 > m > R2 > out\nopamp U1: plus ground, minus m, output out, gain = A0\n",
        "I(R1) / V(m)",
        "A0 to 0",
        "(R1 + R2)/(R1*R2)*R1*R2/(R1 + R2)*(1/R2)",
    ),
    (
        "in > R1 > x > R2 > out > R3 > ground\nx > L1 > ground\n",
        "V(out) / Vin",
        "L1 to infinity",
        "R3/(R1 + R2 + R3)",
    ),
    (
        "in > Ra > out > Rb > ground\nout > Rc > ground\n",
        "impedance(out, ground)",
        "Ra to infinity, Rb to infinity",
        "Rc",
    ),
    ("in > R1 > out\nout > L1 > x > C1 > ground\n", "V(out) / Vin", "L1 to 0, R1 to 0", "1"),
];

fn driven(text: &str, limits: &str) -> String {
    let limits: String = limits.split(", ").map(|limit| format!("limit {limit}\n")).collect();
    format!("in > voltage Vin > ground\n{text}{limits}")
}

#[test]
fn textbook_idealisations() {
    for (text, query, limits, expected) in IDEALISATIONS {
        let circuit = read(&driven(text, limits));
        assert_eq!(fraction(&circuit, query), formula(&circuit, expected), "{limits} of\n{text}");
    }
}

#[test]
fn limits_are_taken_of_nested_forms() {
    for (text, query, limits, expected) in IDEALISATIONS {
        let circuit = read(&driven(text, limits));
        // The witness judges the nested limit; the expansion is compared besides.
        let options = Options { max_terms: 1, ..Options::default() };
        let entries = answer_with(&circuit, query, &options).expect("an answer");
        let elimination = entries[0].elimination.as_ref().expect("a diagram");
        let (n, d) = elimination.expand();
        let found = cofactor::algebra::Fraction::new(&n, &d);
        assert_eq!(found, Some(formula(&circuit, expected)), "{limits} of\n{text}");
    }
}

#[test]
fn nested_limits_have_the_same_numbers() {
    let text = "in > voltage Vin > ground\nin > R1 = 4.7 k > x > R2 = 3.3 k > y > C2 = 4.7 n > ground\n\
                x > C1 = 10 n > out\nopamp U1: plus y, minus out, output out, gain = A0/(1 + s/wp), rin, rout\n\
                let wp = 62.8\nlimit U1.rin to infinity\nlimit A0 to infinity\nlimit U1.rout to 0\n";
    let circuit = read(text);
    let numeric = |max_terms| {
        let options = Options { max_terms, ..Options::default() };
        let mut entries = answer_with(&circuit, "V(out) / Vin", &options).expect("an answer");
        entries.remove(0).numeric
    };
    assert!(numeric(1).is_some());
    assert_eq!(numeric(1), numeric(1000));
}

#[test]
fn an_ideal_amplifier_is_the_limit_of_a_finite_one() {
    let nodes = ["ground", "in", "out", "m", "x"];
    let mut compared = 0;
    for seed in 0..60 {
        let mut draw = Draw::new(seed);
        let network = draw.network(&["R", "R", "C", "G", "L"], &nodes, 3);
        let text = |gain: &str, limit: &str| {
            format!(
                "in > voltage Vin > ground\n{network}\
                 opamp U1: plus {}, minus m, output out{gain}\n{limit}",
                ["ground", "x"][seed as usize % 2]
            )
        };
        let ideal = read(&text("", ""));
        let finite = read(&text(", gain = A0", "limit A0 to infinity\n"));
        for query in ["V(x) / Vin", "V(out) / Vin", "impedance(x, out)"] {
            let one = |circuit| answer(circuit, query).map(|entries| form(&entries[0]));
            if let (Ok(ideal), Ok(finite)) = (one(&ideal), one(&finite)) {
                // A0 is the last symbol, so that the others are the same variables.
                assert_eq!(ideal, finite, "{query} of\n{}", text("", ""));
                compared += 1;
            }
        }
    }
    assert!(compared > 60, "only {compared} had both answers");
}

#[test]
fn matched_elements_and_shared_symbols() {
    // In a balanced bridge of equal resistors the leading terms cancel.
    let text = "in > voltage Vin > ground\nin > R1 = R > a > R2 = R > ground\n\
                in > R3 = R > b > R4 = R + dR > ground\nlet R\nlet dR\n";
    let circuit = read(&format!("{text}limit R to infinity\n"));
    assert!(fraction(&circuit, "V(a, b) / Vin").is_zero());
    let circuit = read(&format!("{text}limit dR to infinity\n"));
    let half = formula(&circuit, "-1/2");
    assert_eq!(fraction(&circuit, "V(a, b) / Vin"), half);
    let circuit = read(&format!("{text}limit dR to 0\n"));
    assert!(fraction(&circuit, "V(a, b) / Vin").is_zero());
}

#[test]
fn the_order_of_limits_counts() {
    let text = "in > voltage Vin > ground\nin > R1 > out > C1 > ground\nout > R2 > ground\n";
    let one = |limits: &str| {
        let circuit = read(&format!("{text}{limits}"));
        fraction(&circuit, "V(out) / Vin")
    };
    assert!(one("limit R1 to infinity\nlimit R2 to infinity\n").is_zero());
    assert!(one("limit R2 to infinity\nlimit s to 0\nlimit R1 to infinity\n").is_one());
}

#[test]
fn infinite_limits_are_refused() {
    let check = |text: &str, query: &str, expected: &str| {
        let circuit = read(text);
        let error = answer(&circuit, query).expect_err("no finite limit");
        assert_eq!(error.to_string(), expected);
        assert_eq!((error.exit_code(), error.code()), (3, "infinite-limit"));
    };
    check(
        "a > C1 > ground\nlimit s to 0\n",
        "impedance(a, ground)",
        "the limit `s to 0` is infinite",
    );
    check(
        "a > R1 > ground\na > R2 > ground\nlimit R1 to infinity\nlimit R2 to infinity\n",
        "impedance(a, ground)",
        "the limit `R2 to infinity` is infinite",
    );
}
