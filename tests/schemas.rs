//! What the program prints as JSON, against the schemas that it prints: all examples and stored circuits.
//!
//! Readers are told to pass over fields that they do not know. Here every field must be described.

use std::path::PathBuf;
use std::process::{Command, Stdio};

use jsonschema::Validator;
use serde_json::{Value, json};

fn run(arguments: &[&str]) -> std::process::Output {
    Command::new(env!("CARGO_BIN_EXE_cofactor"))
        .args(arguments)
        .stdin(Stdio::null())
        .output()
        .expect("the program runs")
}

/// The schema of that name, with unknown fields forbidden in every object.
fn schema(name: &str) -> Validator {
    let printed = run(&["schema", name]);
    assert!(printed.status.success(), "{name}");
    let mut schema: Value = serde_json::from_slice(&printed.stdout).expect("JSON");
    assert_eq!(schema["$schema"], "https://json-schema.org/draft/2020-12/schema");
    jsonschema::meta::validate(&schema).unwrap_or_else(|error| panic!("{name}: {error}"));
    forbid_unknown(&mut schema);
    jsonschema::validator_for(&schema).expect("a schema")
}

fn forbid_unknown(schema: &mut Value) {
    match schema {
        Value::Object(fields) => {
            fields.values_mut().for_each(forbid_unknown);
            // Parts without a type stand beside the fields of another object.
            if fields.contains_key("properties") && fields.get("type") == Some(&json!("object")) {
                fields.insert("unevaluatedProperties".to_owned(), json!(false));
            }
        }
        Value::Array(items) => items.iter_mut().for_each(forbid_unknown),
        _ => {}
    }
}

fn circuits() -> Vec<PathBuf> {
    let root = PathBuf::from(env!("CARGO_MANIFEST_DIR"));
    let mut files: Vec<PathBuf> = ["examples", "tests/golden"]
        .iter()
        .flat_map(|folder| std::fs::read_dir(root.join(folder)).expect("a folder"))
        .map(|entry| entry.expect("an entry").path())
        .filter(|file| file.extension().is_some_and(|ending| ending == "circuit"))
        .collect();
    files.sort();
    files
}

#[track_caller]
fn check(schema: &Validator, text: &[u8], what: &str) {
    let value: Value = serde_json::from_slice(text)
        .unwrap_or_else(|error| panic!("{what}: {error}: {}", String::from_utf8_lossy(text)));
    let faults: Vec<String> = schema
        .iter_errors(&value)
        .map(|fault| format!("{}: {fault}", fault.instance_path()))
        .collect();
    assert!(faults.is_empty(), "{what}\n{}", faults.join("\n"));
}

#[test]
fn outputs_are_as_their_schemas_say() {
    let cases: [(&str, &str, &[&str]); 6] = [
        ("derive", "derive", &[]),
        ("derive", "derive", &["--shape", "nested"]),
        ("derive", "derive", &["--max-terms", "1"]),
        ("inspect", "inspect", &[]),
        ("roots", "roots", &[]),
        ("roots", "roots", &["--monte-carlo", "20"]),
    ];
    let errors = schema("error");
    for (name, command, options) in cases {
        let schema = schema(name);
        let mut good = 0;
        for file in circuits() {
            let file = file.to_str().expect("UTF-8");
            let arguments = [&[command, file, "--format", "json"], options].concat();
            let output = run(&arguments);
            let what = arguments.join(" ");
            // What was reached before a bound is printed, too.
            if output.status.success() || !output.stdout.is_empty() {
                check(&schema, &output.stdout, &what);
                good += 1;
            } else {
                check(&errors, &output.stderr, &what);
            }
        }
        assert!(good > 5, "{command} {options:?}: {good} outputs");
    }
}

#[test]
fn targets_and_faults_are_as_their_schemas_say() {
    let file = "examples/anti-alias.circuit";
    let moved =
        run(&["roots", file, "H", "--move", "w0 = 1 kHz", "--with", "C1", "--format", "json"]);
    check(&schema("roots"), &moved.stdout, "--move");
    let errors = schema("error");
    for arguments in [
        ["derive", "no-such-file"],
        ["derive", "Cargo.toml"],
        ["inspect", "--no-such-option"],
        ["roots", "--format=json"],
    ] {
        let output = run(&[&arguments[..], &["--format", "json"]].concat());
        assert_eq!(output.status.code(), Some(2), "{arguments:?}");
        check(&errors, &output.stderr, &arguments.join(" "));
    }
}

#[test]
fn verdicts_are_as_their_schema_says() {
    let claims = [
        ("examples/anti-alias.circuit", "H = 1/(1 + s C2 R1 + s^2 R1 R2 C1 C2)"),
        ("examples/anti-alias.circuit", "H = 1/(1 + s C2)"),
        ("examples/anti-alias.circuit", "H ~ 1 within 5 %"),
        ("examples/hydrophone.circuit", "H = Ch/Cf"),
        ("examples/preamplifier.circuit", "H.p1 ~ -1/(Rs*Q1.Cmu*(1 + Rc/Re))"),
        ("examples/light-sensor.circuit", "Zt = -Rf"),
    ];
    let schema = schema("check");
    for (file, claim) in claims {
        let output = run(&["check", file, "--claim", claim, "--format", "json"]);
        check(&schema, &output.stdout, claim);
    }
}

#[test]
fn a_schema_refuses_what_it_does_not_describe() {
    let errors = schema("error");
    let error = |line: Value| json!({"error": {"code": "syntax", "message": "m", "line": line, "column": 1, "help": null}});
    assert!(errors.is_valid(&error(json!(1))));
    assert!(!errors.is_valid(&error(json!(0))));
    assert!(!errors.is_valid(&json!({"error": {"code": "syntax"}})));
    let mut more = error(json!(1));
    more["error"]["more"] = json!(true);
    assert!(!errors.is_valid(&more));
    assert_eq!(run(&["schema", "no-such-schema"]).status.code(), Some(2));
}
