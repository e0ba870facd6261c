//! Return ratios: Blackman's formula and the asymptotic gain formula on random circuits, and
//! published feedback amplifiers.

use super::{Draw, answer, answer_with, form, formula, fraction, nominal, read};
use cofactor::algebra::{Fraction, Polynomial};
use cofactor::analysis::{AnalysisError, Options};

const NODES: [&str; 4] = ["ground", "in", "out", "x"];

/// A random circuit with one dependent source X.
fn amplifier(seed: u64) -> String {
    let mut draw = Draw::new(seed);
    let mut text = draw.network(&["R", "C", "G"], &NODES, 2);
    let (a, b) = draw.pair(&NODES);
    let (c, d) = draw.pair(&NODES);
    let sum = if seed.is_multiple_of(3) { " + k2*V(in, x)" } else { "" };
    let class = ["current", "voltage"][(seed % 2) as usize];
    text.push_str(&format!("{a} > {class} X = k*V({c}, {d}){sum} > {b}\n"));
    text
}

fn plus_one(fraction: &Fraction) -> Fraction {
    fraction + &Polynomial::one().into()
}

#[test]
fn impedances_follow_from_two_return_ratios() {
    // Z·(1 + T with the port open) = Z without the source·(1 + T with the port shorted)
    // (R. B. Blackman, Bell Syst. Tech. J. 22, 1943)
    let mut compared = 0;
    for seed in 0..40 {
        let text = amplifier(seed);
        let open = read(&text);
        let shorted = read(&format!("{text}in > voltage Vs = 0 V > ground\n"));
        let silent = read(&text.replace("k*V", "0*k*V").replace("k2*V", "0*k2*V"));
        let one = |circuit, query: &str| -> Result<Fraction, AnalysisError> {
            answer(circuit, query).map(|entries| form(&entries[0]))
        };
        let impedance = "impedance(in, ground)";
        let (Ok(z), Ok(z0), Ok(t_open), Ok(t_short)) = (
            one(&open, impedance),
            one(&silent, impedance),
            one(&open, "return_ratio(X)"),
            one(&shorted, "return_ratio(X)"),
        ) else {
            continue;
        };
        assert_eq!(&z * &plus_one(&t_open), &z0 * &plus_one(&t_short), "{text}");
        compared += 1;
    }
    assert!(compared > 20, "only {compared} circuits had all four");
}

#[test]
fn the_parts_of_a_ratio_make_it_up() {
    // S. Rosenstark, IEEE Trans. Circuits Syst. 21, 1974
    let mut compared = 0;
    for seed in 0..30 {
        let circuit = read(&format!("in > voltage Vin > ground\n{}", amplifier(seed)));
        let options = Options { feedback: circuit.element("X"), ..Options::default() };
        let Ok(entries) = answer_with(&circuit, "G = V(out) / Vin", &options) else { continue };
        let [whole, ideal, t, feed] = [0, 1, 2, 3].map(|part| form(&entries[part]));
        assert_eq!(&whole * &plus_one(&t), &(&ideal * &t) + &feed, "{:?}", circuit.elements);
        let names: Vec<&str> = entries.iter().map(|entry| entry.name.as_str()).collect();
        assert_eq!(names, ["G", "G.ideal", "G.return_ratio", "G.feed_through"]);
        compared += 1;
    }
    assert!(compared > 8, "only {compared} circuits had all parts");
}

#[test]
fn long_parts_are_compared_modulo_primes() {
    let circuit = read(
        "in > voltage Vin > ground\nin > R1 > m > R2 || C2 > out\nm > C1 > ground\n\
         opamp U1: plus ground, minus m, output out, gain = A0, rin, rout\nout > RL > ground\n",
    );
    let options = Options { max_terms: 3, feedback: circuit.element("U1"), ..Options::default() };
    let entries = answer_with(&circuit, "G = V(out) / Vin", &options).expect("an answer");
    let statement = &entries[1].checks.last().expect("a check").statement;
    assert!(statement.ends_with("at 8 random points modulo 2 primes"), "{statement}");
}

#[test]
fn return_ratios_by_hand() {
    let check = |text: &str, query: &str, expected: &str| {
        let circuit = read(text);
        assert_eq!(fraction(&circuit, query), formula(&circuit, expected), "{text}");
    };
    // Positive for negative feedback.
    check(
        "in > voltage Vin > ground\nin > R1 > m > R2 > out\n\
         opamp U1: plus ground, minus m, output out, gain = A0\n",
        "return_ratio(U1)",
        "A0*R1/(R1 + R2)",
    );
    // Common emitter with emitter resistance, driven by a voltage: T = gm·(RE ∥ rpi).
    check(
        "in > voltage Vin > ground\nbjt Q1: base in, collector c, emitter e, gm, rpi\n\
         c > RC > ground\ne > RE > ground\n",
        "return_ratio(Q1)",
        "Q1.gm*RE*Q1.rpi/(RE + Q1.rpi)",
    );
    // Two controls: the returned quantities add up.
    check(
        "a > current X = g1*V(a) + g2*V(b) > ground\na > R1 > b > R2 > ground\n",
        "return_ratio(X)",
        "g1*(R1 + R2) + g2*R2",
    );
    // A current that controls a voltage.
    check("a > voltage X = rm*I(R1) > ground\na > R1 > ground\n", "return_ratio(X)", "-rm/R1");
}

#[test]
fn published_feedback_amplifiers() {
    let check = |text: &str, query: &str, expected: f64, tolerance: f64| {
        let circuit = read(text);
        let found = nominal(&circuit, &fraction(&circuit, query), 0);
        assert!((found - expected).abs() <= tolerance, "{query}: {found}, not {expected}");
    };
    // Franco, Design with Operational Amplifiers and Analog Integrated Circuits, example 2.1:
    // transresistance stage with T = 133 330, −0.9999925 V/µA, 5.0 Ω, 75/133 331 Ω.
    let stage = "m > Rf = 1 M > out\nm > rd = 2 M > ground\n\
                 opamp U1: plus ground, minus m, output out, gain = A0, rout = 75\nlet A0 = 200000\n\
                 ground > current Iin > m\n"
        .replace("rd =", "resistor rd =");
    check(&stage, "return_ratio(U1)", 133_330.0, 5.0);
    check(&stage, "V(out) / Iin", -0.999_992_5e6, 0.05);
    check(&stage, "impedance(m, ground)", 5.0, 0.01);
    check(&stage, "impedance(out, ground)", 75.0 / 133_331.0, 1e-7);
    // Gray, Hurst, Lewis & Meyer style series–shunt amplifier (check C40): closed-loop gain 857.92 by
    // the exact network, 857 by feedback analysis.
    let series_shunt = "in > voltage Vin > ground\nin > R = 10 k > p > resistor rd = 100 k > m\n\
                        opamp U1: plus p, minus m, output out, gain = A0, rout = 1 k\n\
                        let A0 = 10000\nout > RL = 2 k > ground\nm > R1 = 1 k > ground\n\
                        m > R2 = 1 M > out\n";
    check(series_shunt, "V(out) / Vin", 857.92, 0.01);
    let circuit = read(series_shunt);
    let options = Options { feedback: circuit.element("U1"), ..Options::default() };
    let entries = answer_with(&circuit, "G = V(out) / Vin", &options).expect("an answer");
    // The ideal gain is 1/β of that analysis, β = 1/1001.
    assert!((nominal(&circuit, &form(&entries[1]), 0) - 1001.0).abs() < 1e-6);
    // Franco, example with the output impedance 10 mΩ at DC, open-loop gain 10⁵ (check C24).
    let non_inverting = "m > R1 = 2 k > ground\nm > R2 = 18 k > out\n\
                         p > resistor rd = 1 M > m\np > Rc = 2 G > ground\n\
                         opamp U1: plus p, minus m, output out, gain = A0/(1 + s/wb), rout = 100\n\
                         let A0 = 100000\nlet wb = 62.83185\nground > current Ip > p\n";
    check(non_inverting, "impedance(p, ground)", 1.67e9, 5e6);
    let grounded = format!("{non_inverting}p > voltage Vp > ground\n");
    check(&grounded, "impedance(out, ground)", 10e-3, 0.05e-3);
}

#[test]
fn what_has_no_return_ratio_is_refused() {
    let circuit = read(
        "in > voltage Vin > ground\nin > R1 > out > R2 > ground\nx > current X = k*V(in) > ground\n\
         x > R3 > ground\n",
    );
    let options = Options { feedback: circuit.element("X"), ..Options::default() };
    let error = answer_with(&circuit, "V(out) / Vin", &options).expect_err("no loop");
    assert_eq!(error.to_string(), "`X` lies in no loop: its return ratio is 0");
    assert_eq!((error.exit_code(), error.code()), (3, "no-loop"));
}
