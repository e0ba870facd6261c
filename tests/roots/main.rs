//! `cofactor roots` as a user runs it: published poles and zeros, sums of sensitivities, the program's
//! own approximations, options, pictures.

mod published;
mod short_formulas;

use serde_json::Value;
use std::io::Write;
use std::process::{Command, Stdio};

/// Runs `cofactor roots` on a circuit text with more arguments: exit code, output, messages.
fn run(circuit: &str, arguments: &[&str]) -> (i32, String, String) {
    let mut child = Command::new(env!("CARGO_BIN_EXE_cofactor"))
        .args(["roots", "-"])
        .args(arguments)
        .stdin(Stdio::piped())
        .stdout(Stdio::piped())
        .stderr(Stdio::piped())
        .spawn()
        .expect("the program starts");
    if let Some(mut input) = child.stdin.take() {
        // A program that refuses its arguments ends before it has read anything.
        let _ = input.write_all(circuit.as_bytes());
    }
    let output = child.wait_with_output().expect("the program ends");
    let text = |bytes: Vec<u8>| String::from_utf8(bytes).expect("UTF-8");
    (output.status.code().unwrap_or(-1), text(output.stdout), text(output.stderr))
}

/// The first result as JSON.
fn roots(circuit: &str, arguments: &[&str]) -> Value {
    let (code, out, err) = run(circuit, &[arguments, &["--format", "json"]].concat());
    assert_eq!(code, 0, "{err}");
    let whole: Value = serde_json::from_str(&out).expect("JSON");
    assert_eq!(whole["schema"], "cofactor/roots/1");
    whole["results"][0].clone()
}

fn number(value: &Value) -> f64 {
    value.as_f64().unwrap_or_else(|| panic!("no number: {value}"))
}

fn places(list: &Value) -> Vec<(f64, f64)> {
    let roots = list.as_array().expect("a list").iter();
    roots.map(|root| (number(&root["re"]), number(&root["im"]))).collect()
}

/// Every expected root is there within a relative distance, and no other.
fn check_places(list: &Value, expected: &[(f64, f64)], tolerance: f64) {
    let found = places(list);
    assert_eq!(found.len(), expected.len(), "{found:?}");
    for &(re, im) in expected {
        let near = found.iter().any(|&(a, b)| (a - re).hypot(b - im) <= tolerance * re.hypot(im));
        assert!(near, "{re} + j{im} in {found:?}");
    }
}

fn ladder(sections: u32) -> String {
    let mut text = "n0 > voltage Vin > ground\nlet R = 1 kΩ\nlet C = 1 nF\n".to_owned();
    for k in 1..=sections {
        let before = k - 1;
        text.push_str(&format!("n{before} > R{k} = R > n{k} > C{k} = C > ground\n"));
    }
    text.push_str(&format!("ask H = V(n{sections}) / Vin\n"));
    text
}

/// −(4/RC)·sin²((2k − 1)π/(4N + 2)) for N equal sections (Morgan-Voyce 1959; closed form).
#[test]
fn poles_of_uniform_ladders_are_within_their_bounds() {
    for sections in 5..=40 {
        let found = roots(&ladder(sections), &[]);
        let poles = found["poles"].as_array().expect("poles");
        assert_eq!(poles.len(), sections as usize);
        for (k, pole) in (1..).zip(poles) {
            let angle = f64::from(2 * k - 1) * std::f64::consts::PI / f64::from(4 * sections + 2);
            let exact = -4e6 * angle.sin().powi(2);
            assert_eq!(number(&pole["im"]), 0.0);
            let bound = number(&pole["error_bound"]);
            assert!(bound < 1e-15 * exact.abs());
            // The closed form rounds too, by some units of the last place.
            let off = (number(&pole["re"]) - exact).abs();
            assert!(off <= bound + 1.5e-15 * exact.abs(), "{sections} {k}: {off:e}");
            // One time constant: both symbols count once.
            assert!((number(&pole["sensitivity"]["R"]) + 1.0).abs() < 1e-6);
            assert!(pole["q"].is_null() && pole["sensitivity_angle"].is_null());
        }
        assert!(found["zeros"].as_array().expect("zeros").is_empty());
    }
}

fn reference(name: &str) -> String {
    let path = format!("{}/tests/reference/{name}.circuit", env!("CARGO_MANIFEST_DIR"));
    std::fs::read_to_string(&path).unwrap_or_else(|error| panic!("{path}: {error}"))
}

/// Butterworth ladders: −sin θ ± j·cos θ on the unit circle (element formula of the handbooks).
#[test]
fn butterworth_ladders() {
    for order in [2_u32, 3, 5, 7] {
        let found = roots(&reference(&format!("butterworth-{order}")), &[]);
        let expected: Vec<(f64, f64)> = (1..=order)
            .map(|k| f64::from(2 * k - 1) * std::f64::consts::PI / f64::from(2 * order))
            .map(|angle| (-angle.sin(), angle.cos()))
            .collect();
        check_places(&found["poles"], &expected, 1e-9);
        assert_eq!(found["stability"], "stable");
    }
}

/// Third-order elliptic, 1 dB, stop band from 2 rad/s: zeros ±j·2.270068, poles −0.2170489 ±
/// j·0.9815897 and −0.5400008 (S. Winder, Analog and Digital Filter Design, 2nd ed., Cauer tables).
#[test]
fn elliptic_filter_with_zeros_on_the_axis() {
    let found = roots(&reference("elliptic-3-1db"), &[]);
    check_places(&found["zeros"], &[(0.0, 2.270_068), (0.0, -2.270_068)], 1e-5);
    let poles = [(-0.217_048_9, 0.981_589_7), (-0.217_048_9, -0.981_589_7), (-0.540_000_8, 0.0)];
    check_places(&found["poles"], &poles, 1e-4);
    assert!(places(&found["zeros"]).iter().all(|zero| zero.0 == 0.0), "exactly on the axis");
    assert!(found["zeros"][0]["q"].is_null());
}

/// Franco, Design with Operational Amplifiers, 3rd ed., example 8.9: 100 Hz and 77 MHz by the
/// approximations, zero at g2/(2πCc) = 50 MHz in the right half plane, gain 1e5; exact 99.59 Hz, 77.24 MHz.
#[test]
fn pole_splitting_with_the_textbook_formulas() {
    let found = roots(&reference("two-stage"), &[]);
    let close = |value: &Value, expected: f64, tolerance: f64| {
        let value = number(value);
        assert!((value / expected - 1.0).abs() < tolerance, "{value} {expected}");
    };
    let (poles, zero) = (&found["poles"], &found["zeros"][0]);
    close(&poles[0]["hz"], 99.59, 1e-4);
    close(&poles[1]["hz"], 77.24e6, 5e-4);
    close(&zero["hz"], 50e6, 1e-3);
    assert!(number(&zero["re"]) > 0.0, "in the right half plane");
    close(&found["dc_gain"]["value"], 1e5, 1e-12);
    let formula =
        |root: &Value| root["approximation"]["expression"].as_str().unwrap_or_default().to_owned();
    assert_eq!(formula(&poles[0]), "-1/(R1*R2*Cc*g2)");
    assert_eq!(formula(&poles[1]), "-Cc*g2/(C1*C2 + C1*Cc + C2*Cc)");
    assert_eq!(formula(zero), "g2/Cc");
    close(&poles[0]["approximation"]["relative_error"], 0.0041, 0.02);
    assert_eq!(poles[0]["approximation"]["while_large"][0]["expression"], "R2*g2");
    assert_eq!(zero["set_by"], serde_json::json!(["Cc", "g2"]));
}

/// Exact denominator and zero at +gm/C2 (Gray and Meyer; the same form in many texts).
#[test]
fn inverting_stage() {
    let found = roots(&reference("inverting-stage"), &[]);
    let expected = 37e-3 / 1.3e-12;
    check_places(&found["zeros"], &[(expected, 0.0)], 1e-12);
    let (rs, r3, gm) = (1700.0, 4300.0, 37e-3);
    let (c1, c2, c3) = (11e-12, 1.3e-12, 2.9e-12);
    let b1 = rs * c1 + r3 * c3 + c2 * (rs + r3 + gm * rs * r3);
    let b2 = rs * r3 * (c1 * c2 + c1 * c3 + c2 * c3);
    let root = f64::sqrt(b1 * b1 - 4.0 * b2);
    let poles = [(-2.0 / (b1 + root), 0.0), (-(b1 + root) / (2.0 * b2), 0.0)];
    check_places(&found["poles"], &poles, 1e-12);
}

const FILTER: &str = "in > voltage Vin > ground
in > R1 = 10 kΩ ± 1 % > x > R2 = 10 kΩ ± 1 % > y > C2 = 4.7 nF ± 5 % > ground
x > C1 = 10 nF ± 5 % > out
opamp U1: plus y, minus out, output out
ask H = V(out) / Vin
";

#[test]
fn an_element_is_solved_for() {
    let found = roots(FILTER, &["--move", "w0 = 1 kHz", "--with", "C1"]);
    // ω0² = 1/(R1·R2·C1·C2)
    let w0 = std::f64::consts::TAU * 1000.0;
    let expected = 1.0 / (w0 * w0 * 1e8 * 4.7e-9);
    let moved = &found["moved"];
    assert!((number(&moved["value"]) / expected - 1.0).abs() < 1e-12, "{moved}");
    assert_eq!(moved["preferred"][0]["series"], "E12");
    assert!((number(&moved["preferred"][0]["value"]) / 56e-9 - 1.0).abs() < 1e-12);
    let reached = number(&moved["preferred"][0]["reached"]);
    assert!((reached - 1000.0 * (expected / 56e-9).sqrt()).abs() < 1e-6);

    // Q = √(R1·R2·C1/C2)/(R1 + R2), a quarter of C1/C2 under the root here.
    let found = roots(FILTER, &["--move", "Q = 1.5", "--with", "C1"]);
    assert!((number(&found["moved"]["value"]) / (9.0 * 4.7e-9) - 1.0).abs() < 1e-12);

    let divider = "in > voltage Vin > ground\nin > R1 = 1 kΩ > out > R2 = 3 kΩ > ground\nask H = V(out)/Vin\n";
    let found = roots(divider, &["--move", "gain = 0.1", "--with", "R2"]);
    assert_eq!(found["moved"]["closed_form"], true);
    assert!((number(&found["moved"]["value"]) * 9.0 / 1000.0 - 1.0).abs() < 1e-15);

    let (code, _, err) = run(divider, &["--move", "gain = 2", "--with", "R2"]);
    assert_eq!(code, 2, "{err}");
    assert!(err.contains("alone cannot"), "{err}");
}

/// A parallel resonant circuit behind a resistor: edges at ±1/(2RC) + √(1/(2RC)² + 1/LC) (textbook).
#[test]
fn a_band_pass_has_two_edges() {
    let circuit =
        "in > voltage Vin > ground\nin > R1 = 1 kΩ > out > L1 = 1 mH || C1 = 1 µF > ground
ask H = V(out)/Vin\nask G = V(in, out)/Vin\n";
    let found = roots(circuit, &["H"]);
    let half = 1.0 / (2.0 * 1e3 * 1e-6);
    let middle = f64::sqrt(half * half + 1e9);
    let edges = found["band_edges"].as_array().expect("edges");
    for (edge, sign) in edges.iter().zip([-1.0, 1.0]) {
        assert_eq!(edge["against"], "peak");
        let omega = number(&edge["hz"]) * std::f64::consts::TAU;
        let expected = middle + sign * half;
        assert!((omega / expected - 1.0).abs() < 1e-12, "{omega} {expected}");
        // ω∂: of the half width −1 for R, of the middle by its share.
        let by_r = (-sign * half - half * half / middle) / expected;
        assert!((number(&edge["sensitivity"]["R1"]) - by_r).abs() < 1e-9);
        let by_l = -0.5 * 1e9 / middle / expected;
        assert!((number(&edge["sensitivity"]["L1"]) - by_l).abs() < 1e-9);
    }
    assert_eq!(edges.len(), 2);
    // The notch: against dc below, against high frequencies above.
    let found = roots(circuit, &["G"]);
    let against: Vec<&str> = found["band_edges"]
        .as_array()
        .expect("edges")
        .iter()
        .map(|edge| edge["against"].as_str().unwrap_or_default())
        .collect();
    assert_eq!(against, ["dc", "infinity"]);
    for edge in found["band_edges"].as_array().expect("edges") {
        let sum: f64 = ["L1", "C1"].iter().map(|name| number(&edge["sensitivity"][*name])).sum();
        assert!((sum + 1.0).abs() < 1e-9, "{edge}");
    }
}

#[test]
fn chance_is_the_same_for_the_same_seed() {
    let draw = |seed: &str| {
        let arguments = ["--monte-carlo", "200", "--seed", seed];
        roots(FILTER, &arguments)["monte_carlo"].clone()
    };
    let (first, again, other) = (draw("3"), draw("3"), draw("4"));
    assert_eq!(first, again);
    assert_ne!(first, other);
    let hz = &first["poles"][0]["hz"];
    assert!(number(&hz[0]) < number(&hz[1]) && number(&hz[1]) < number(&hz[2]));
    assert!((number(&hz[1]) / 2321.5 - 1.0).abs() < 0.02);
    assert_eq!(first["not_stable"], 0);
}

#[test]
fn pictures_are_well_formed() {
    let check = |circuit: &str, arguments: &[&str]| {
        let (code, out, err) = run(circuit, &[arguments, &["--format", "svg"]].concat());
        assert_eq!(code, 0, "{err}");
        let document = roxmltree::Document::parse(&out).expect("XML");
        let named = |name: &str| document.descendants().filter(|n| n.has_tag_name(name)).count();
        assert_eq!((named("title"), named("desc"), named("style")), (1, 1, 1));
        assert!(out.contains("prefers-color-scheme: dark") && !out.contains("var("));
    };
    check(FILTER, &["H"]);
    check(FILTER, &["H", "--locus", "C1"]);
    check(&reference("two-stage"), &["--locus", "Cc"]);
    check(&reference("elliptic-3-1db"), &[]);
    check(
        "in > voltage Vin > ground\nin > R1 = 1 kΩ > out > R2 = 3 kΩ > ground\nask H = V(out)/Vin\n",
        &[],
    );
}

#[test]
fn refusals_say_what_to_do() {
    let check = |circuit: &str, arguments: &[&str], code: i32, words: &str| {
        let (found, out, err) = run(circuit, arguments);
        assert_eq!(found, code, "{out}{err}");
        assert!(err.contains(words), "{err}");
    };
    let bare =
        "in > voltage Vin > ground\nin > R1 > out > C1 = 1 nF > ground\nask H = V(out)/Vin\n";
    check(bare, &[], 2, "`R1` has none");
    check(bare, &["--format", "json"], 2, "\"no-nominal-values\"");
    check(FILTER, &["--move", "w0 = 1 kHz"], 2, "--with");
    check(FILTER, &["--move", "w9 = 1 kHz", "--with", "C1"], 2, "cannot be read");
    check(FILTER, &["--move", "w0 = 1 kΩ", "--with", "C1"], 2, "unit does not fit");
    check(FILTER, &["--move", "w0 = fast", "--with", "C1"], 2, "no quantity");
    check(FILTER, &["--move", "p7 = 1 Hz", "--with", "C1"], 2, "no such thing");
    check(FILTER, &["--move", "w0 = 1 kHz", "--with", "C9"], 2, "no symbol");
    check(FILTER, &["--locus", "C1"], 2, "--format svg");
}

/// A pole and a zero that coincide by their numbers: R1·C1 = R2·C2 in a compensated divider.
#[test]
fn what_cancels_at_these_values_is_named() {
    let probe = "in > voltage Vin > ground\nin > R1 = 9 MΩ || C1 = 2 pF > out > R2 = 1 MΩ || C2 = 18 pF > ground
ask H = V(out)/Vin\n";
    let found = roots(probe, &[]);
    assert_eq!(places(&found["poles"]).len(), 0);
    let cancelled = &found["cancelled"][0];
    assert!((number(&cancelled["re"]) * 18e-6 + 1.0).abs() < 1e-12);
    assert_eq!(cancelled["separated_by"], serde_json::json!(["R1", "R2", "C1", "C2"]));
}

#[test]
fn conditions_for_stability_are_formulas() {
    // A follower with gain k in a Wien network: unstable from k = 3 on (textbook).
    let loop_of = |k: &str| {
        format!(
        "in > voltage Vin > ground\nlet k = {k}\nin > R1 = 1 kΩ > x > R2 = 1 kΩ > y > C2 = 1 nF > ground
x > C1 = 1 nF > out\nout > voltage E = k*V(y) > ground\nask H = V(out)/Vin\n"
    )
    };
    assert_eq!(roots(&loop_of("2"), &[])["stability"], "stable");
    assert_eq!(roots(&loop_of("3"), &[])["stability"], "marginal");
    let found = roots(&loop_of("4"), &[]);
    assert_eq!(found["stability"], "unstable");
    let conditions = found["stable_when_positive"].as_array().expect("conditions");
    assert_eq!(conditions.len(), 1, "{conditions:?}");
}

mod sums {
    //! Sums of sensitivities and finite differences on random circuits.
    //!
    //! Network equations are homogeneous in each unit: measured in units that are k times smaller, every
    //! value is larger by k to the power of its exponent of that unit, and so is every root, a number in
    //! 1/s. Euler's theorem makes of that: Σ exponent of the second × S = −1, Σ exponent of the volt
    //! × S = 0, Σ exponent of the ampere × S = 0. For an RC network: Σ_R S = Σ_C S = −1; with inductors
    //! Σ_L S + Σ_C S = −1 (frequency) and Σ_R S + Σ_L S = Σ_C S + Σ_G S (impedance level).

    use cofactor::algebra::modular::Random;
    use cofactor::analysis::roots::{Nominal, RootFacts, RootReport, analyse};
    use cofactor::analysis::{Options, answer};
    use cofactor::circuit::{Circuit, Number, SymbolId};
    use cofactor::language::read;

    /// A ladder of random elements with a transconductance over two of its nodes.
    fn random_circuit(random: &mut Random) -> Circuit {
        let mut draw = |below: u64| random.word() % below;
        let nodes = 2 + draw(3);
        let mut text = "n0 > voltage Vin > ground\nband 1 Hz to 1 GHz\n".to_owned();
        for node in 1..=nodes {
            let before = node - 1;
            let value = 1 + draw(99);
            match draw(3) {
                0 => text.push_str(&format!("n{before} > La{node} = {value} uH > n{node}\n")),
                1 => text.push_str(&format!(
                    "n{before} > Ra{node} = {value} kohm || Ca{node} = {value} pF > n{node}\n"
                )),
                _ => text.push_str(&format!("n{before} > Ra{node} = {value} kohm > n{node}\n")),
            }
            let value = 1 + draw(99);
            text.push_str(&format!("n{node} > Cb{node} = {value} nF > ground\n"));
            text.push_str(&format!("n{node} > Rb{node} = {} kohm > ground\n", 1 + draw(50)));
        }
        let (from, to) = (1 + draw(nodes), 1 + draw(nodes));
        text.push_str(&format!(
            "n{to} > current J = gm*V(n{from}) > ground\nlet gm = {} uS\n",
            1 + draw(900)
        ));
        text.push_str(&format!("ask H = V(n{nodes}) / Vin\n"));
        read(&text).circuit.unwrap_or_else(|| panic!("{text}"))
    }

    fn report(circuit: &Circuit) -> RootReport {
        let entries = answer(circuit, &circuit.asks[0], &Options::default()).expect("an answer");
        let nominal = Nominal::new(circuit, &entries[0]).expect("values");
        analyse(circuit, &entries[0], &nominal).expect("roots")
    }

    fn all(report: &RootReport) -> impl Iterator<Item = &RootFacts> {
        report.poles.iter().chain(&report.zeros)
    }

    #[test]
    fn sensitivities_add_up_by_units() {
        let mut random = Random::new(11);
        let mut checked = 0;
        for _ in 0..60 {
            let circuit = random_circuit(&mut random);
            for facts in all(&report(&circuit)) {
                let Some(sensitivities) = &facts.sensitivities else { continue };
                let mut sums = [num_complex::Complex::new(0.0, 0.0); 3];
                for one in sensitivities {
                    let unit = circuit[one.symbol].unit;
                    for (sum, exponent) in
                        sums.iter_mut().zip([unit.second, unit.volt, unit.ampere])
                    {
                        *sum += one.value * f64::from(exponent);
                    }
                }
                for (sum, expected) in sums.iter().zip([-1.0, 0.0, 0.0]) {
                    assert!((sum - expected).norm() < 1e-7, "{sums:?} {facts:?}");
                }
                checked += 1;
            }
        }
        assert!(checked > 200, "{checked}");
    }

    #[test]
    fn finite_differences_agree() {
        let mut random = Random::new(5);
        for _ in 0..5 {
            let circuit = random_circuit(&mut random);
            let before = report(&circuit);
            for index in 0..circuit.symbols.len() {
                let symbol = SymbolId(u32::try_from(index).expect("few symbols"));
                let moved = |parts: i64| {
                    let mut changed = circuit.clone();
                    let factor = Number::new((1_000_000 + parts).into(), 1_000_000.into());
                    let nominal = &mut changed.symbols[index].nominal;
                    *nominal = nominal.as_ref().map(|value| value * factor);
                    report(&changed)
                };
                let (up, down) = (moved(1), moved(-1));
                // Close pairs of roots may change places.
                for (facts, (a, b)) in all(&before).zip(all(&up).zip(all(&down))) {
                    let Some(sensitivities) = &facts.sensitivities else { continue };
                    let found = sensitivities.iter().find(|one| one.symbol == symbol);
                    let found = found.map_or(num_complex::Complex::new(0.0, 0.0), |one| one.value);
                    let slope = (a.root.value - b.root.value) / (facts.root.value * 2e-6);
                    let bound = 1e-4 * (1.0 + found.norm());
                    assert!((slope - found).norm() < bound, "{symbol:?} {slope} {facts:?}");
                }
            }
        }
    }
}
