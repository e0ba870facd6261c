//! What `response` prints: values against a reader of its own, times against a numeric integration, tables,
//! CSV and pictures against each other, and its messages.

mod support;

use std::io::Write;
use std::process::{Command, Output, Stdio};

use num_complex::Complex64;
use pretty_assertions::assert_eq;
use serde_json::Value;
use support::rational::Rational;
use support::transient::{self, Part};

fn run(file: &str, options: &[&str]) -> Output {
    let path = support::beside_tests("../examples").join(file);
    let mut command = Command::new(env!("CARGO_BIN_EXE_cofactor"));
    command.arg("response").arg(path).args(options).output().expect("the program runs")
}

fn run_text(text: &str, options: &[&str]) -> Output {
    let mut child = Command::new(env!("CARGO_BIN_EXE_cofactor"))
        .args(["response", "-"])
        .args(options)
        .stdin(Stdio::piped())
        .stdout(Stdio::piped())
        .stderr(Stdio::piped())
        .spawn()
        .expect("the program runs");
    child.stdin.take().expect("a pipe").write_all(text.as_bytes()).expect("the text is read");
    child.wait_with_output().expect("the program ends")
}

fn text(output: &Output) -> String {
    assert!(output.status.success(), "{}", String::from_utf8_lossy(&output.stderr));
    String::from_utf8(output.stdout.clone()).expect("UTF-8")
}

fn json(output: &Output) -> Value {
    serde_json::from_str(&text(output)).expect("JSON")
}

fn number(value: &Value) -> f64 {
    value.as_f64().unwrap_or_else(|| panic!("no number: {value}"))
}

fn examples() -> Vec<String> {
    let folder = support::beside_tests("../examples");
    let names = std::fs::read_dir(folder).expect("the examples");
    let mut names: Vec<String> = names
        .map(|entry| entry.expect("an entry").file_name().into_string().expect("a name"))
        .filter(|name| name.ends_with(".circuit"))
        .collect();
    names.sort();
    names
}

/// Against the numeric coefficients that `derive` prints, evaluated by the tests' own reader.
#[test]
fn values_are_those_of_the_formula() {
    for name in examples() {
        let response = json(&run(&name, &["--format", "json"]));
        assert_eq!(response["schema"], "cofactor/response/1");
        let file = support::beside_tests("../examples").join(&name);
        let derived = support::program::derive(&file).expect("an answer");
        for result in response["results"].as_array().expect("results") {
            if !result["source"].is_null() {
                continue;
            }
            let wanted = result["name"].as_str().expect("a name");
            let formula = support::program::result(&derived, wanted).expect("the result");
            let formula = Rational::of(formula).expect("numbers");
            let mut last: Option<f64> = None;
            for point in result["frequency"]["points"].as_array().expect("points") {
                let omega = std::f64::consts::TAU * number(&point["hz"]);
                let expected = formula.at(omega);
                let found = Complex64::new(number(&point["re"]), number(&point["im"]));
                let size = number(&point["magnitude"]);
                // In a notch the formula's own terms cancel.
                let cancelled = 1e-9 * formula.at(omega * 1.1).norm();
                assert!(
                    (found - expected).norm() <= 1e-9 * size + cancelled * 1e-3,
                    "{name} {wanted} at {}: {found} {expected}",
                    point["hz"]
                );
                let phase = number(&point["phase_deg"]);
                let turned = Complex64::from_polar(size, phase.to_radians());
                assert!((turned - found).norm() <= 1e-9 * size, "{name} {wanted}");
                // A jump by half a turn belongs to a root on the imaginary axis; more is a lost turn.
                assert!(last.is_none_or(|last| (phase - last).abs() < 181.0), "{name} {wanted}");
                last = Some(phase);
            }
        }
    }
}

fn check_time(parts: &[Part], end: f64) {
    let file = transient::file(parts);
    let initial = transient::initial(parts);
    let end_text = format!("{end:e}");
    let mut options =
        vec!["--plot", "step", "--format", "json", "--points", "33", "--time", &end_text];
    if !initial.is_empty() {
        options.extend(["--initial", &initial]);
    }
    let answer = json(&run_text(&file, &options));
    let time = &answer["results"][0]["time"];
    let closed = |t: f64| -> f64 {
        let terms = time["terms"].as_array().expect("terms");
        let part = |value: &Value| Complex64::new(number(&value["re"]), number(&value["im"]));
        let sum: Complex64 = terms
            .iter()
            .map(|term| {
                let power = term["power"].as_u64().expect("a power");
                let factor = (1..power).fold(1.0, |product, k| product * t / k as f64);
                part(&term["coefficient"]) * (part(&term["pole"]) * t).exp() * factor
            })
            .sum();
        sum.re
    };
    let numeric = transient::integrate(parts, end, 33);
    let largest = numeric.iter().map(|(_, value)| value.abs()).fold(0.0, f64::max);
    assert!(largest > 1e-3, "{file}");
    for (t, expected) in numeric {
        let found = closed(t);
        assert!(
            (found - expected).abs() < 1e-6 * largest.max(1.0),
            "{file}{t}: {found} {expected}"
        );
    }
    for point in time["points"].as_array().expect("points") {
        let (t, value) = (number(&point["s"]), number(&point["value"]));
        assert!((value - closed(t)).abs() < 1e-12 * largest.max(1.0), "{file}{t}");
    }
}

#[test]
fn step_responses_are_those_of_a_numeric_integration() {
    use Part::{C, Follow, L, Opamp, R, Step};
    // One time constant.
    check_time(&[Step("in"), R("in", "out", 1e4), C("out", "ground", 1e-8, 0.0)], 1e-3);
    // A pair of poles around a follower.
    check_time(
        &[
            Step("in"),
            R("in", "x", 1e4),
            R("x", "y", 1e4),
            C("y", "ground", 4.7e-9, 0.0),
            C("x", "out", 1e-8, 0.0),
            Opamp("y", "out", "out"),
        ],
        1e-3,
    );
    // A triple pole: three equal sections between followers.
    check_time(
        &[
            Step("in"),
            R("in", "a", 1e3),
            C("a", "ground", 1e-6, 0.0),
            Follow("b", 1.0, "a", "ground"),
            R("b", "c", 1e3),
            C("c", "ground", 1e-6, 0.0),
            Follow("d", 1.0, "c", "ground"),
            R("d", "out", 1e3),
            C("out", "ground", 1e-6, 0.0),
        ],
        2e-2,
    );
    // A coil, a capacitor and a damping branch, as in the power input.
    check_time(
        &[
            Step("in"),
            R("in", "w", 0.08),
            L("w", "out", 22e-6, 0.0),
            C("out", "ground", 10e-6, 0.0),
            R("out", "d", 1.5),
            C("d", "ground", 47e-6, 0.0),
        ],
        5e-4,
    );
    // A high-pass beside a low-pass, inverted: the step begins with a jump.
    check_time(
        &[
            Step("in"),
            R("in", "m", 1e4),
            C("in", "m", 2e-9, 0.0),
            R("m", "out", 2e4),
            C("m", "out", 5e-9, 0.0),
            Opamp("ground", "m", "out"),
        ],
        1e-3,
    );
    // Unstable: a pole in the right half plane.
    check_time(
        &[
            Step("in"),
            R("in", "x", 1e3),
            C("x", "ground", 1e-6, 0.0),
            Follow("y", 3.0, "x", "ground"),
            R("y", "x", 1.5e3),
            R("y", "out", 1e3),
            R("out", "ground", 1e3),
        ],
        2e-3,
    );
}

#[test]
fn initial_values_enter_by_charge_and_flux() {
    use Part::{C, L, M, R, Step};
    // Charged before the step.
    check_time(&[Step("in"), R("in", "out", 1e4), C("out", "ground", 1e-8, 0.4)], 1e-3);
    // Capacitors in a loop with the source: charge is conserved, voltages jump.
    check_time(
        &[
            Step("in"),
            C("in", "out", 1e-8, -0.3),
            C("out", "ground", 3e-8, 0.8),
            R("out", "ground", 1e4),
        ],
        2e-3,
    );
    // A coil with a current, ringing.
    check_time(
        &[
            Step("in"),
            R("in", "a", 20.0),
            L("a", "out", 1e-3, 0.05),
            C("out", "ground", 1e-6, 2.0),
            R("out", "ground", 500.0),
        ],
        1e-3,
    );
    // Coils in series: currents jump together, flux is conserved.
    check_time(
        &[
            Step("in"),
            R("in", "a", 10.0),
            L("a", "b", 1e-3, 0.1),
            L("b", "out", 2e-3, -0.05),
            R("out", "ground", 30.0),
        ],
        5e-4,
    );
    // Coupled coils: the flux of each holds a share of the other's current.
    check_time(
        &[
            Step("in"),
            R("in", "a", 10.0),
            L("a", "ground", 1e-3, 0.1),
            L("out", "ground", 2e-3, 0.02),
            M(1, 2, 1.1e-3),
            R("out", "ground", 50.0),
        ],
        4e-4,
    );
}

/// Every value of the CSV is that of the JSON, and the picture's curve runs through the same points.
#[test]
fn tables_and_pictures_hold_the_same_values() {
    let options = |format| ["H", "--tolerances", "20", "--seed", "7", "--format", format];
    let frequency = &json(&run("anti-alias.circuit", &options("json")))["results"][0]["frequency"];
    let points = frequency["points"].as_array().expect("points");
    let csv = text(&run("anti-alias.circuit", &options("csv")));
    let lines: Vec<&str> = csv.split_terminator("\r\n").collect();
    assert_eq!(
        lines[0],
        "result,frequency_hz,real,imaginary,magnitude,magnitude_db,phase_deg,group_delay_s,\
         least_magnitude_db,largest_magnitude_db,least_phase_deg,largest_phase_deg"
    );
    assert_eq!(lines.len(), points.len() + 1);
    let fields = ["hz", "re", "im", "magnitude", "magnitude_db", "phase_deg", "group_delay_s"];
    let envelope = &frequency["envelope"];
    let bounds =
        ["least_magnitude_db", "largest_magnitude_db", "least_phase_deg", "largest_phase_deg"];
    for (index, (line, point)) in lines[1..].iter().zip(points).enumerate() {
        let columns: Vec<&str> = line.split(',').collect();
        assert_eq!(columns[0], "H");
        for (column, field) in columns[1..].iter().zip(fields) {
            same(column, &point[field]);
        }
        for (column, field) in columns[8..].iter().zip(bounds) {
            same(column, &envelope[field][index]);
        }
        let [least, largest] = [&envelope[bounds[0]][index], &envelope[bounds[1]][index]];
        let nominal = number(&point["magnitude_db"]);
        assert!(number(least) <= nominal && nominal <= number(largest));
    }
    let svg = text(&run("anti-alias.circuit", &options("svg")));
    let document = roxmltree::Document::parse(&svg).expect("XML");
    let curves = document.descendants().filter(|node| node.attribute("class") == Some("exact"));
    let curves: Vec<Vec<[f64; 2]>> =
        curves.filter_map(|node| node.attribute("d")).map(coordinates).collect();
    // The sample of the key, the magnitude, the phase.
    for (curve, field) in curves[1..].iter().zip(["magnitude_db", "phase_deg"]) {
        assert_eq!(curve.len(), points.len());
        let affine = |pairs: Vec<[f64; 2]>| {
            let (first, last) = (pairs[0], pairs[pairs.len() - 1]);
            let slope = (last[1] - first[1]) / (last[0] - first[0]);
            pairs
                .iter()
                .map(|[x, y]| (first[1] + slope * (x - first[0]) - y).abs())
                .fold(0.0, f64::max)
        };
        let across =
            points.iter().zip(curve).map(|(p, place)| [libm::log10(number(&p["hz"])), place[0]]);
        let up = points.iter().zip(curve).map(|(p, place)| [number(&p[field]), place[1]]);
        assert!(affine(across.collect()) < 0.011 && affine(up.collect()) < 0.03, "{field}");
    }
}

/// The reader of JSON may miss the last bit.
#[track_caller]
fn same(column: &str, value: &Value) {
    let (found, expected) = (column.parse::<f64>().expect("a number"), number(value));
    assert!((found - expected).abs() <= 4.0 * f64::EPSILON * expected.abs(), "{found} {expected}");
}

fn coordinates(data: &str) -> Vec<[f64; 2]> {
    let pairs = data.split(['M', 'L']).filter(|text| !text.is_empty());
    pairs
        .map(|pair| {
            let (x, y) = pair.split_once(' ').expect("two numbers");
            [x, y].map(|text| text.parse().expect("a number"))
        })
        .collect()
}

#[test]
fn chance_is_repeatable() {
    let options =
        |seed| ["H", "--tolerances", "5", "--seed", seed, "--format", "csv", "--points", "9"];
    let of = |seed| text(&run("anti-alias.circuit", &options(seed)));
    assert_eq!(of("3"), of("3"));
    assert!(of("3") != of("4"));
}

#[test]
fn every_picture_is_xml() {
    for name in examples() {
        let derived = json(&run(&name, &["--format", "json", "--points", "2"]));
        for result in derived["results"].as_array().expect("results") {
            if !result["source"].is_null() {
                continue;
            }
            let asked = result["name"].as_str().expect("a name");
            for plot in ["bode", "delay", "nyquist", "step", "impulse"] {
                let svg = text(&run(&name, &[asked, "--plot", plot, "--format", "svg"]));
                let document = roxmltree::Document::parse(&svg).expect("XML");
                let has = |tag: &str| {
                    document
                        .descendants()
                        .any(|node| node.has_tag_name(("http://www.w3.org/2000/svg", tag)))
                };
                assert!(has("title") && has("desc") && has("path"), "{name} {asked} {plot}");
            }
        }
    }
}

#[test]
fn tables_for_a_terminal() {
    let table = text(&run("anti-alias.circuit", &["H", "--ascii"]));
    assert!(table.is_ascii() && table.contains("-13.417 dB"), "{table}");
    assert!(table.contains("bends down at  2.3215 kHz (2)"), "{table}");
    let step = text(&run("anti-alias.circuit", &["H", "--plot", "step", "--time", "1 ms"]));
    assert!(step.contains("for t > 0: 1 + 1.3736·e^(−t/100 µs)·cos(2π·1.6901 kHz·t + 2.3862)"));
    // Nothing but capacitors: the impulse has a weight and no tail.
    let divider = text(&run("wave-gauge.circuit", &["H", "--plot", "impulse"]));
    assert!(divider.contains("an impulse of weight 0.209644"), "{divider}");
}

#[test]
fn a_long_formula_has_a_response_too() {
    // Twelve sections: nested at this bound, and 12 poles.
    let mut ladder = String::from("in > voltage Vin > ground\n");
    for k in 1..=12 {
        let from = if k == 1 { "in".to_owned() } else { format!("n{}", k - 1) };
        ladder.push_str(&format!("{from} > R{k} = 1 kΩ > n{k} > C{k} = 1 nF > ground\n"));
    }
    ladder.push_str("ask H = V(n12) / Vin\n");
    let options = ["--max-terms", "100", "--format", "json", "--points", "5"];
    let long = json(&run_text(&ladder, &options));
    let short = json(&run_text(&ladder, &["--format", "json", "--points", "5"]));
    assert_eq!(
        long["results"][0]["frequency"]["points"],
        short["results"][0]["frequency"]["points"]
    );
}

#[test]
fn faults_are_explained() {
    let check = |text: &str, options: &[&str], exit: i32, words: &str| {
        let output = run_text(text, options);
        let said = String::from_utf8_lossy(&output.stderr).into_owned();
        assert_eq!(output.status.code(), Some(exit), "{said}");
        assert!(said.contains(words), "{said}");
    };
    let bare =
        "in > voltage Vin > ground\nin > R1 > out > C1 = 1 nF > ground\nask H = V(out)/Vin\n";
    check(bare, &[], 2, "`R1` has none");
    let full = bare.replace("R1", "R1 = 1 kΩ");
    check(&full, &["--initial", "R1 = 1"], 2, "neither a capacitor nor an inductor");
    check(&full, &["--initial", "C9 = 1 V", "--plot", "step"], 2, "no element");
    check(&full, &["--initial", "C1 = 1 A", "--plot", "step"], 2, "the unit does not fit");
    check(&full, &["--time", "1 ms"], 2, "about time");
    check(&full, &["--plot", "step", "--time", "0 s"], 2, "not above 0");
    let divided = full.replace("V(out)/Vin", "V(out)/I(R1)");
    check(&divided, &["--initial", "C1 = 1 V", "--plot", "step"], 2, "a ratio to the source");
    let noisy = full.replace("V(out)/Vin", "noise_density(out)");
    check(&noisy, &["--plot", "step"], 2, "no function of time");
    check(
        &(full.clone() + "ask Z = impedance(in, ground)\n"),
        &["--format", "svg"],
        2,
        "one function",
    );
    check(&full, &["--tolerances", "3"], 0, "has a tolerance");
}
