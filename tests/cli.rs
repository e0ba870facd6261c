//! The program as a user meets it: streams, exit codes, refusals, bounds. Only what is public is used.

use std::io::Write;
use std::path::Path;
use std::process::{Command, Output, Stdio};

use pretty_assertions::assert_eq;
use serde_json::Value;

fn run(arguments: &[&str], input: &[u8]) -> Output {
    let mut child = Command::new(env!("CARGO_BIN_EXE_cofactor"))
        .args(arguments)
        .stdin(Stdio::piped())
        .stdout(Stdio::piped())
        .stderr(Stdio::piped())
        .spawn()
        .expect("the program starts");
    let mut stdin = child.stdin.take().expect("a pipe");
    // A program that refuses early closes the pipe: that is no fault of this test.
    let _ = stdin.write_all(input);
    drop(stdin);
    child.wait_with_output().expect("the program ends")
}

fn code(output: &Output) -> i32 {
    output.status.code().expect("no signal")
}

fn text(bytes: &[u8]) -> String {
    String::from_utf8(bytes.to_vec()).expect("UTF-8")
}

/// A circuit on standard input: exit code, and what must stand on standard error.
#[track_caller]
fn check(circuit: &str, expect: i32, fragments: &[&str]) {
    let output = run(&["derive", "-", "--color", "never"], circuit.as_bytes());
    let error = text(&output.stderr);
    assert_eq!(code(&output), expect, "{error}");
    for fragment in fragments {
        assert!(error.contains(fragment), "`{fragment}` is not in\n{error}");
    }
}

#[test]
fn every_example_is_derived_and_proved() {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("examples");
    let mut seen = 0;
    for entry in std::fs::read_dir(folder).expect("the examples") {
        let path = entry.expect("an entry").path();
        if path.extension().is_none_or(|ending| ending != "circuit") {
            continue;
        }
        seen += 1;
        let name = path.display().to_string();
        for format in ["text", "latex", "json"] {
            let output = run(&["derive", &name, "--format", format], b"");
            assert_eq!(code(&output), 0, "{name} as {format}: {}", text(&output.stderr));
            let results = text(&output.stdout);
            if format == "json" {
                let whole: Value = serde_json::from_str(&results).expect("JSON");
                for result in whole["results"].as_array().expect("a list") {
                    let parts = match result["by_source"].as_array() {
                        Some(parts) => parts.clone(),
                        None => vec![result.clone()],
                    };
                    for part in parts {
                        assert_eq!(part["crosscheck"]["passed"], true, "{name}: {part}");
                        assert_eq!(part["crosscheck"]["values"], "nominal", "{name}: {part}");
                    }
                }
            }
        }
    }
    assert!(10 <= seen, "only {seen} examples");
}

#[test]
fn the_same_circuit_in_another_order_prints_the_same() {
    let lines = [
        "in > voltage Vin > ground",
        "in > R1 > x > R2 > y > C2 > ground",
        "x > C1 > out",
        "opamp U1: plus y, minus out, output out",
        "out > RL || CL > ground",
    ];
    let ask = "ask H = V(x) / Vin\n";
    let print = |lines: &[&str]| {
        let circuit = format!("{}\n{ask}", lines.join("\n"));
        let output = run(&["derive", "-", "--quiet"], circuit.as_bytes());
        assert_eq!(code(&output), 0);
        text(&output.stdout)
    };
    let mut turned = lines;
    turned.reverse();
    assert_eq!(print(&lines), print(&turned));
    turned.swap(0, 2);
    assert_eq!(print(&lines), print(&turned));
}

#[test]
fn no_unique_solution_names_the_elements() {
    check(
        "in > voltage V1 > ground\nin > voltage V2 > ground\nin > R1 > ground\nask H = V(in) / V1\n",
        3,
        &["`V1` and `V2` form a loop"],
    );
    check(
        "ground > current I1 > a\na > R1 > ground\nb > C1 > c\nb > current X2 = gm*V(a) > ground\nask H = V(b) / I1\n",
        3,
        &["every current there is fixed"],
    );
    check(
        "in > voltage Vin > ground\nin > R1 > p\nopamp U1: plus p, minus ground, output out\nout > R2 > ground\nask H = V(out) / Vin\n",
        3,
        &["`U1`", "no feedback"],
    );
    check("a > R1 > b\nask Z = impedance(a, ground)\n", 3, &["nothing connects"]);
}

#[test]
fn facts_are_said_and_the_answer_given() {
    check(
        "in > voltage Vin > ground\nin > C1 > out > C2 > ground\nask H = V(out) / Vin\n",
        0,
        &["kept-charge", "`C1` and `C2`"],
    );
    check("a > R1 > b > R2 > c\nask Z = impedance(a, c)\n", 0, &["no connection to ground"]);
    check(
        "in > voltage Vin > ground\nin > R1 > ground\nout > R2 > ground\nask H = V(out) / Vin\n",
        0,
        &["zero-answer"],
    );
    check(
        "in > voltage Vin > ground\nin > R3 > ground\nin > R1 > out > R2 > ground\nask H = V(out) / Vin\n",
        0,
        &["`R3` has no influence"],
    );
}

#[test]
fn faults_of_a_file_have_a_place_and_a_remedy() {
    let circuit =
        "in > voltage Vin > ground\nin > R1 = 10 nF > out\nout > R2 > 0\nask H = V(ou) / Vin\n";
    check(circuit, 2, &["R1 = 10 nF", "write `ground`"]);
    let output = run(&["derive", "-", "--format", "json"], circuit.as_bytes());
    let whole: Value = serde_json::from_slice(&output.stderr).expect("JSON on standard error");
    assert_eq!(whole["error"]["line"], 2);
    assert!(whole["error"]["column"].as_u64().expect("a column") > 5);
    assert_eq!(output.stdout, b"");
}

#[test]
fn hostile_input_ends_in_a_clear_error() {
    check("", 2, &["asks nothing"]);
    let noise: Vec<u8> =
        (0..1_000_000_u32).map(|k| (k.wrapping_mul(2_654_435_761) >> 13) as u8).collect();
    let output = run(&["derive", "-"], &noise);
    assert_eq!(code(&output), 2);
    assert!(text(&output.stderr).contains("UTF-8"));
    let printable: Vec<u8> = noise.iter().map(|byte| b' ' + byte % 94).collect();
    assert_eq!(code(&run(&["derive", "-"], &printable)), 2);
    let nested = format!(
        "a > R1 > ground\na > R2 = {}R1{} > ground\nask Z = impedance(a, ground)\n",
        "(".repeat(100_000),
        ")".repeat(100_000)
    );
    check(&nested, 2, &["nest"]);
    check("a > R1 = 1e999999999 > ground\nask Z = impedance(a, ground)\n", 2, &["1e999999999"]);
    let output = run(&["derive", "no-such.circuit"], b"");
    assert_eq!(code(&output), 2);
    assert!(text(&output.stderr).contains("there is no file `no-such.circuit`"));
    assert_eq!(code(&run(&["derive", env!("CARGO_MANIFEST_DIR")], b"")), 2);
}

#[test]
fn a_long_ladder_is_nested_and_counted() {
    let mut circuit = String::from("n0 > voltage Vin > ground\n");
    for k in 1..=1000 {
        circuit.push_str(&format!("n{} > R{k} > n{k} > C{k} > ground\n", k - 1));
    }
    circuit.push_str("ask H = V(n1000) / Vin\n");
    let output = run(&["derive", "-", "--format", "json"], circuit.as_bytes());
    assert_eq!(code(&output), 0, "{}", text(&output.stderr));
    let whole: Value = serde_json::from_slice(&output.stdout).expect("JSON");
    let result = &whole["results"][0];
    assert_eq!(result["denominator"], Value::Null);
    assert!(result["definitions"].as_array().expect("definitions").len() > 500);
    assert_eq!(result["term_counts"]["denominator"][1], "500500");
    assert_eq!(result["crosscheck"]["passed"], true);
}

#[test]
fn bounds_end_in_exit_code_4_with_what_was_reached() {
    let mut circuit =
        String::from("in > voltage Vin > ground\nin > Ra > b > Rb > ground\nn0 > wire > in\n");
    for k in 1..=30 {
        circuit.push_str(&format!("n{} > R{k} > n{k} > C{k} > ground\n", k - 1));
    }
    circuit.push_str("ask easy = V(b) / Vin\nask hard = V(n30) / Vin\n");
    let output = run(&["derive", "-", "--shape", "powers", "--color", "never"], circuit.as_bytes());
    assert_eq!(code(&output), 4);
    assert!(text(&output.stdout).contains("easy"));
    // F(61) terms below (Morgan-Voyce; closed form), 1 above.
    assert!(text(&output.stderr).contains("2504730781962 terms"), "{}", text(&output.stderr));
    let output = run(&["derive", "-", "--shape", "powers", "--max-terms", "2"], circuit.as_bytes());
    assert_eq!(code(&output), 4);
    let output = run(&["derive", "-", "--stop-after", "0.000001"], circuit.as_bytes());
    assert_eq!(code(&output), 4);
    assert!(text(&output.stderr).contains("not finished after"));
}

#[test]
fn options_do_what_they_say() {
    let circuit = b"in > voltage Vin > ground\nin > R1 = 10 k > out > C1 = 100 nF > ground\nask H = V(out) / Vin\n";
    let quiet = |more: &[&str]| {
        let mut arguments = vec!["derive", "-", "--quiet", "--ascii"];
        arguments.extend_from_slice(more);
        let output = run(&arguments, circuit);
        assert_eq!(code(&output), 0, "{}", text(&output.stderr));
        text(&output.stdout)
    };
    assert!(quiet(&["--keep", "C1"]).contains("10000"));
    assert!(quiet(&["V(in, out) / Vin"]).contains("R1*C1"));
    let output = run(&["derive", "-", "--keep", "R9"], circuit);
    assert_eq!(code(&output), 2);
    assert!(text(&output.stderr).contains("`R9`"));
    let json = run(&["derive", "-", "--format", "json", "--band", "1 Hz to 1 kHz"], circuit);
    let whole: Value = serde_json::from_slice(&json.stdout).expect("JSON");
    assert_eq!(whole["results"][0]["crosscheck"]["to_hz"].as_f64(), Some(1000.0));
    assert_eq!(code(&run(&["derive"], b"")), 2);
    assert_eq!(code(&run(&["--help"], b"")), 0);
    let usage = run(&["derive", "-", "--format", "json", "--shape", "round"], circuit);
    let whole: Value = serde_json::from_slice(&usage.stderr).expect("JSON");
    assert_eq!(whole["error"]["code"], "usage");
}
