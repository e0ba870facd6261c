//! Published figures against the program: standards, handbooks, textbooks, mathematics.
//!
//! The tables in `reference/*.txt` name a source, a circuit beside them, and rows
//! `result | quantity | published value | tolerance`. The program derives each circuit once;
//! everything here is computed from its exact `numeric` coefficients. All rows that fail are
//! reported together. Every row was computed from its circuit by an independent exact solve.
//!
//! Quantities: `modulus`, `level` (dB), `phase` (degrees), `real`, `imaginary`, each `at F` and
//! optionally `re F` (divided by the response there); `dc`, `high` (at infinite frequency),
//! `order`, `delay` (seconds, at 0 Hz), `terms` (of the denominator, symbolic);
//! `numerator`, `denominator` (coefficients, by powers of s or, `in hertz`, of 2πs), `ratio` (both);
//! `poles`, `zeros` (rad/s, or `in hertz`); `slowest pole`, `fastest pole`, and of the least
//! damped pair `pole frequency`, `zero frequency`, `pole q`, `pole damping`;
//! `open-circuit corner` (from the sum of time constants); `lower edge from F`, `upper edge from F`
//! (−3.01 dB); `peak frequency` and `peak modulus from F to F`. A factor may stand before (`12 * dc`).

mod support;

#[path = "reference/counts.rs"]
mod counts;
#[path = "reference/quantity.rs"]
mod quantity;

use pretty_assertions::assert_eq;
use serde_json::Value;
use std::collections::BTreeMap;
use support::{beside_tests, program, table_lines};

const TABLES: [&str; 5] = ["a-standards", "b-filters", "c-amplifiers", "d-mathematics", "e-common"];

/// One line of a table.
struct Row {
    /// Label and file, for the report.
    place: String,
    file: String,
    result: String,
    quantity: String,
    published: String,
    tolerance: String,
}

/// All rows of a table, and how many checks (sections with a source) it has.
fn rows(table: &str) -> (Vec<Row>, usize) {
    let text = std::fs::read_to_string(beside_tests(&format!("reference/{table}.txt")))
        .unwrap_or_else(|error| panic!("{table}: {error}"));
    let (mut rows, mut sections, mut sources, mut known) = (Vec::new(), 0, 0, 0);
    let (mut label, mut file) = ("", "");
    for (line, text) in table_lines(&text) {
        if let Some((inside, _title)) = text.strip_prefix('[').and_then(|rest| rest.split_once(']'))
        {
            (label, file) = (inside, "");
            sections += 1;
        } else if text.starts_with("source:") {
            sources += 1;
        } else if text.starts_with("known:") {
            known += 1;
        } else if let Some(name) = text.strip_prefix("file:") {
            file = name.trim();
        } else {
            let fields: Vec<&str> = text.split(" | ").map(str::trim).collect();
            let [result, quantity, published, tolerance] = fields[..] else {
                panic!("{table}.txt, line {line}: four fields were expected");
            };
            assert!(!file.is_empty(), "{table}.txt, line {line}: no file was named");
            rows.push(Row {
                place: format!("{label} {file}, line {line}"),
                file: file.into(),
                result: result.into(),
                quantity: quantity.into(),
                published: published.into(),
                tolerance: tolerance.into(),
            });
        }
    }
    assert_eq!((sources, known), (sections, sections), "{table}: each section says where from");
    (rows, sections)
}

fn judge(row: &Row, derived: &Result<Value, String>) -> Result<(), String> {
    let derived = derived.as_ref().map_err(Clone::clone)?;
    let result = program::result(derived, &row.result)?;
    if result["crosscheck"]["passed"] != true {
        return Err(format!("the cross-check did not pass: {}", result["crosscheck"]));
    }
    quantity::judge(result, &row.quantity, &row.published, &row.tolerance)
}

#[track_caller]
fn check(table: &str) {
    let mut derived = BTreeMap::new();
    let mut failures = Vec::new();
    for row in rows(table).0 {
        let derived = derived
            .entry(row.file.clone())
            .or_insert_with(|| program::derive(&beside_tests(&format!("reference/{}", row.file))));
        if let Err(why) = judge(&row, derived) {
            failures.push(format!("{}: {} | {}: {why}", row.place, row.result, row.quantity));
        }
    }
    assert_eq!(failures, Vec::<String>::new());
}

#[test]
fn networks_of_standards() {
    check("a-standards");
}

#[test]
fn filters_pads_and_bridges() {
    check("b-filters");
}

#[test]
fn amplifiers_and_oscillators() {
    check("c-amplifiers");
}

#[test]
fn exact_mathematics() {
    check("d-mathematics");
}

#[test]
fn what_every_engineer_knows() {
    check("e-common");
}

#[test]
fn every_circuit_is_asked() {
    let mut asked: Vec<String> = Vec::new();
    let mut sections = 0;
    for table in TABLES {
        let (rows, count) = rows(table);
        asked.extend(rows.into_iter().map(|row| row.file));
        sections += count;
    }
    asked.sort();
    asked.dedup();
    let folder = std::fs::read_dir(beside_tests("reference")).expect("the folder");
    let mut files: Vec<String> = folder
        .filter_map(|entry| entry.ok()?.file_name().into_string().ok())
        .filter(|name| name.ends_with(".circuit"))
        .collect();
    files.sort();
    assert_eq!(files, asked);
    assert!(sections >= 40, "{sections} checks");
}

#[test]
fn values_that_are_off_are_refused() {
    // 1/(1 + s)^2 with a root finder, a response and exact coefficients to get wrong.
    let result = serde_json::json!({
        "numeric": {"numerator": ["1"], "denominator": ["1", "2", "1"]},
        "denominator": null,
        "term_counts": {"numerator": ["1"], "denominator": ["2", "3", "4"]},
    });
    let check = |quantity: &str, published: &str, tolerance: &str, fits: bool| {
        let outcome = quantity::judge(&result, quantity, published, tolerance);
        assert_eq!(outcome.is_ok(), fits, "{quantity} | {published} | {tolerance}: {outcome:?}");
    };
    check("dc", "1", "exact", true);
    check("2 * dc", "1", "exact", false);
    check("high", "0", "exact", true);
    check("delay", "2", "1e-12", true);
    check("terms", "9", "exact", true);
    check("terms", "10", "exact", false);
    check("denominator", "1, 2, 1", "exact", true);
    check("denominator", "1, 2", "exact", false);
    check("denominator", "1, 2.001, 1", "1e-4 relative", false);
    check("ratio", "3 over 3, 6, 3", "exact", true);
    check("ratio", "3 over 3, 6, 4", "exact", false);
    check("poles", "-1, -1", "1e-6", true);
    check("poles", "-1, -1.1", "1e-6", false);
    check("poles", "-1", "1e-6", false);
    check("modulus at 1 rad/s", "0.5", "1e-12", true);
    check("level at 1 rad/s re 0 Hz", "-6.02", "0.01", true);
    check("level at 1 rad/s re 0 Hz", "-6.05", "0.01", false);
    check("phase at 1 rad/s", "-90", "1e-9", true);
    check("modulus at 1 rad/s", "0.51", "1 %", false);
    check("attenuation at 1 rad/s", "0.5", "1", false);
}
