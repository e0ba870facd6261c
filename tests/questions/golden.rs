//! What the program prints for each kind of question, as text, LaTeX and JSON: files under
//! `tests/golden`. `UPDATE_EXPECT=1` writes them anew. Figures that hang on rounding are masked.

use std::path::PathBuf;
use std::process::Command;

use expect_test::expect_file;

fn golden(name: &str) -> PathBuf {
    PathBuf::from(env!("CARGO_MANIFEST_DIR")).join("tests/golden").join(name)
}

/// Standard output of `derive`, with the figures of the floating-point comparison masked.
fn printed(circuit: &str, format: &str, more: &[&str]) -> String {
    let output = Command::new(env!("CARGO_BIN_EXE_cofactor"))
        .arg("derive")
        .arg(golden(circuit))
        .args(["--format", format])
        .args(more)
        .output()
        .expect("the program starts");
    assert!(output.status.success(), "{}", String::from_utf8_lossy(&output.stderr));
    let text = String::from_utf8(output.stdout).expect("UTF-8");
    text.lines().map(|line| masked(line) + "\n").collect()
}

fn masked(line: &str) -> String {
    for (before, after) in [
        ("worst difference ", "; "),
        ("\"worst_relative_error\": ", ","),
        ("\"relative_error\": ", ""),
        ("relative error below ", ""),
    ] {
        if let Some((head, tail)) = line.split_once(before) {
            let comma = if !after.is_empty() && tail.ends_with(after) { after } else { "" };
            return format!("{head}{before}…{comma}");
        }
    }
    line.to_owned()
}

fn check(stem: &str, circuit: &str, more: &[&str]) {
    for (format, ending) in [("text", "txt"), ("latex", "tex"), ("json", "json")] {
        let expected = expect_file![golden(&format!("{stem}.{ending}"))];
        expected.assert_eq(&printed(circuit, format, more));
    }
}

#[test]
fn two_port_sets() {
    check("attenuator", "attenuator.circuit", &[]);
    check("line-section", "line-section.circuit", &[]);
}

#[test]
fn ratios_impedance_and_admittance() {
    check("depth-cell", "depth-cell.circuit", &[]);
}

#[test]
fn return_ratio_and_parts() {
    check("float-switch", "float-switch.circuit", &["--feedback", "U1"]);
    check("float-switch-loop", "float-switch.circuit", &["return_ratio(U1)"]);
}

#[test]
fn noise_density() {
    check("thermistor-noise", "thermistor-noise.circuit", &[]);
}

#[test]
fn limits() {
    check("float-switch-ideal", "float-switch.circuit", &["--limit", "A0 to infinity"]);
}

#[test]
fn superposition() {
    check("level-adder", "level-adder.circuit", &[]);
}

#[test]
fn faults_of_the_options() {
    let told = |more: &[&str]| {
        let output = Command::new(env!("CARGO_BIN_EXE_cofactor"))
            .arg("derive")
            .arg(golden("float-switch.circuit"))
            .args(["--format", "json"])
            .args(more)
            .output()
            .expect("the program starts");
        let error: serde_json::Value = serde_json::from_slice(&output.stderr).expect("JSON");
        let code = error["error"]["code"].as_str().unwrap_or_default().to_owned();
        (output.status.code(), code)
    };
    let check = |more: &[&str], exit: i32, code: &str| {
        assert_eq!(told(more), (Some(exit), code.to_owned()), "{more:?}");
    };
    check(&["admittance(out, ground)", "--limit", "U1.rout to 0"], 3, "infinite-limit");
    check(&["--limit", "A0 to the moon"], 2, "syntax");
    check(&["--feedback", "R1"], 2, "option");
    check(&["noise_density(out)", "--max-terms", "2"], 4, "terms");
}

#[test]
fn kept_symbols_and_limits_go_together() {
    // A0 has no number to put in before it has gone to its limit.
    let more = ["--limit", "A0 to infinity", "--keep", "R2"];
    let text = printed("float-switch-number-free.circuit", "json", &more);
    assert!(text.contains("\"expression\": \"-1/10000*R2\""), "{text}");
}
