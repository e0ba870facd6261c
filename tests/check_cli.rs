//! `cofactor check` as a user and a program see it: exit codes, text, LaTeX, JSON, claim files.

use std::process::{Command, Output};

use serde_json::Value;

const FILTER: &str = "circuit \"Anti-alias filter\"\n\
in > voltage Vin > ground\n\
in > R1 = 10 k ± 1 % > x > R2 = 10 k ± 1 % > y > C2 = 4.7 n ± 5 % > ground\n\
x > C1 = 10 n ± 5 % > out\n\
opamp U1: plus y, minus out, output out, gain = A0\n\
let A0 = 100k\n\
band 10 Hz to 100 kHz\n\
ask H = V(out) / Vin\n";

const RIGHT: &str = "claim H = 1/(1 + s C2 (R1 + R2) + s^2 R1 R2 C1 C2)\n";

fn run(file: &str, arguments: &[&str]) -> Output {
    let folder = tempfile::tempdir().expect("a folder");
    let path = folder.path().join("filter.circuit");
    std::fs::write(&path, file).expect("a file");
    let mut command = Command::new(env!("CARGO_BIN_EXE_cofactor"));
    command.arg("check").arg(&path).args(arguments).env("NO_COLOR", "1");
    command.output().expect("the program")
}

fn json(file: &str, arguments: &[&str]) -> Value {
    let output = run(file, &[arguments, &["--format", "json"]].concat());
    serde_json::from_slice(&output.stdout).expect("JSON")
}

#[track_caller]
fn exits(file: &str, arguments: &[&str], code: i32) -> String {
    let output = run(file, arguments);
    let text = String::from_utf8_lossy(&output.stdout).into_owned();
    let errors = String::from_utf8_lossy(&output.stderr);
    assert_eq!(output.status.code(), Some(code), "{text}\n{errors}");
    format!("{text}\n{errors}")
}

#[test]
fn exit_codes_follow_the_verdicts() {
    let with = |claims: &str| format!("{FILTER}{claims}");
    exits(&with(RIGHT), &["--limit", "A0 to infinity"], 0);
    exits(&with(RIGHT), &[], 0);
    exits(&with(RIGHT), &["--strict"], 1);
    exits(&with("claim H = 1/(1 + s C2 R1 + s^2 R1 R2 C1 C2)\n"), &[], 1);
    exits(&with("claim H = 1/(1 + s C2 + s^2 R1 R2 C1 C2)\n"), &[], 1);
    exits(&with("claim H = 1/(1 + s C9)\n"), &[], 2);
    exits(&with("claim G = 1\n"), &[], 2);
    exits(&with("claim H ~ 1 within 0 %\n"), &[], 2);
    exits(&with("claim H = 1 within 5 %\n"), &[], 2);
    exits(FILTER, &[], 2);
    exits(
        "a > R1 > b > R2 > a\na > voltage V1 > b\na > voltage V2 > b\nask H = V(a, b)/V1\nclaim H = 1\n",
        &[],
        3,
    );
}

#[test]
fn a_limit_is_a_notice() {
    let said = exits(&format!("{FILTER}{RIGHT}"), &[], 0);
    assert!(said.contains("equal in a limit  A0 to infinity"), "{said}");
    assert!(said.contains("notice[equal-in-limit]"), "{said}");
}

#[test]
fn json_has_the_fields_of_the_language() {
    let claims = "claim H = 1/(1 + s C2 R1 + s^2 R1 R2 C1 C2 + (R1/R2)/A0)\n\
                  claim H = 1/(1 + s C2 + s^2 R1 R2 C1 C2)\n";
    let found = json(&format!("{FILTER}{RIGHT}{claims}"), &[]);
    assert_eq!(found["schema"], "cofactor/check/1");
    assert_eq!(found["circuit"], "Anti-alias filter");
    let claims = found["claims"].as_array().expect("claims");
    assert_eq!(claims.len(), 3);
    let right = &claims[0];
    assert_eq!(
        (&right["index"], &right["name"], &right["line"]),
        (&1.into(), &"H".into(), &9.into())
    );
    assert_eq!(right["verdict"], "equal_in_limit");
    assert_eq!(right["limits"], serde_json::json!(["A0 to infinity"]));
    assert_eq!(right["alternatives"], serde_json::json!([["A0 to infinity"]]));
    assert!(right["worst_magnitude_db"].as_f64().expect("dB").abs() < 1e-2);
    assert!(right["at_hz"].is_number() && right["worst_phase_deg"].is_number());
    assert_eq!(claims[1]["verdict"], "different");
    for field in ["side", "power", "claimed", "exact", "missing", "extra"] {
        assert!(claims[1]["differences"][0].get(field).is_some(), "{field}");
    }
    let units = &claims[2];
    assert_eq!(units["verdict"], "unit_error");
    assert_eq!(units["unit_error"]["right"], "S");
    assert_eq!(units["unit_error"]["part"], "s C2");
    assert_eq!(
        (&units["unit_error"]["line"], &units["unit_error"]["column"]),
        (&11.into(), &18.into())
    );
    let codes: Vec<&Value> =
        found["warnings"].as_array().expect("warnings").iter().map(|one| &one["code"]).collect();
    assert!(codes.contains(&&"equal-in-limit".into()), "{codes:?}");
}

#[test]
fn a_wrong_claim_shows_its_repair() {
    let said = exits(
        &format!("{FILTER}claim H = 1/(1 - s C2 (R1 + R2) + s^2 R1 R2 C1 C2)\n"),
        &["--limit", "A0 to infinity"],
        1,
    );
    assert!(said.contains("different"), "{said}");
    assert!(said.contains("the sign of −s·C2·(R1 + R2) is wrong"), "{said}");
    assert!(said.contains("wrong sign"), "{said}");
    let ascii = exits(
        &format!("{FILTER}claim H = 1/(1 - s C2 (R1 + R2) + s^2 R1 R2 C1 C2)\n"),
        &["--limit", "A0 to infinity", "--ascii"],
        1,
    );
    assert!(
        ascii.lines().take_while(|line| !line.contains("notice")).all(str::is_ascii),
        "{ascii}"
    );
}

#[test]
fn the_place_of_a_unit_error_is_marked() {
    let said = exits(&format!("{FILTER}claim H = 1/(1 + s C2 + s^2 R1 R2 C1 C2)\n"), &[], 1);
    assert!(said.contains("unit error        S is added to a plain number"), "{said}");
    assert!(said.contains("^^^^") && said.contains(":9:18"), "{said}");
}

#[test]
fn claims_come_from_the_command_line_and_from_files() {
    let folder = tempfile::tempdir().expect("a folder");
    let path = folder.path().join("note.claims");
    let claims = "# by hand\nclaim H = 1/(1 + s C2 (R1 + R2) + s^2 R1 R2 C1 C2)\n\
                  H(0) = 1\nf_0 = 1/(2 pi sqrt(R1 R2 C1 C2))\n";
    std::fs::write(&path, claims).expect("a file");
    let file = path.to_str().expect("a path");
    let arguments = [
        "--limit",
        "A0 to infinity",
        "--claims",
        file,
        "--claim",
        r"H = \frac{1}{1 + s C_2 (R_1 + R_2) + s^2 R_1 R_2 C_1 C_2}",
        "--claim",
        "Q ~ 0.73",
        "--claim",
        "V(x)/Vin = (1 + s R2 C2)/(1 + s C2 (R1 + R2) + s^2 R1 R2 C1 C2)",
    ];
    let said = exits(FILTER, &arguments, 0);
    assert!(said.contains("6 claims: 6 equal"), "{said}");
    let found = json(FILTER, &arguments);
    let lines: Vec<&Value> =
        found["claims"].as_array().expect("claims").iter().map(|claim| &claim["line"]).collect();
    assert_eq!(lines[0], &Value::from(2));
    assert_eq!(lines[3], &Value::Null);
}

#[test]
fn numbers_are_put_in_as_asked() {
    let claim = format!("{FILTER}claim H = 1/(1 + 9.4e-5*s + 0.47*s^2*C1)\n");
    exits(&claim, &["--limit", "A0 to infinity", "--keep", "C1"], 1);
    let claim = format!("{FILTER}claim H = 1/(1 + s*C2*(R1 + R2) + s^2*R1*R2*C1*C2)\n");
    let said = exits(&claim, &["--limit", "A0 to infinity", "--keep", "C1", "--strict"], 0);
    assert!(said.contains("equal"), "{said}");
}

#[test]
fn latex_is_a_fragment() {
    let claims = "claim H = 1/(1 + s C2 R1 + s^2 R1 R2 C1 C2)\n";
    let said = exits(
        &format!("{FILTER}{RIGHT}{claims}"),
        &["--limit", "A0 to infinity", "--format", "latex"],
        1,
    );
    assert!(said.contains("\\quad\\text{(proved)}"), "{said}");
    assert!(said.contains("H \\neq \\frac{1}"), "{said}");
    assert!(said.contains("R_{2}\\,C_{2}") || said.contains("the term"), "{said}");
}

#[test]
fn what_can_be_judged_is_judged() {
    let claims = "claim p9 = -1/(R1*C1)\nclaim H(0) = A0/(1 + A0)\n";
    let output = run(&format!("{FILTER}{claims}"), &["--quiet"]);
    assert_eq!(output.status.code(), Some(2));
    assert!(String::from_utf8_lossy(&output.stdout).contains("equal"));
    assert!(String::from_utf8_lossy(&output.stderr).contains("no-such-root"));
}
