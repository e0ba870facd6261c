//! Circuits of textbooks against the formulas that an analogue designer writes by hand.
//!
//! Each line of `textbook/forms.txt` names a circuit and its formula. The program's expression
//! and the formula are evaluated exactly at rational points for `s` and every symbol, and must
//! be equal. The formulas were proved against an exact solve of their networks. `waiting.txt`
//! and `longer.txt` are ratchets: they list what does not hold yet, and fail when it does.

mod support;

use num_rational::BigRational;
use pretty_assertions::assert_eq;
use serde_json::Value;
use std::collections::BTreeMap;
use support::{beside_tests, exact, program, table_lines};

const POINTS: u64 = 5;

struct Form {
    circuit: String,
    result: String,
    formula: String,
    symbols: usize,
}

fn read(name: &str) -> String {
    std::fs::read_to_string(beside_tests(&format!("textbook/{name}"))).expect(name)
}

fn forms() -> Vec<Form> {
    table_lines(&read("forms.txt"))
        .map(|(line, text)| {
            let fields: Vec<&str> = text.split(" | ").map(str::trim).collect();
            let [circuit, result, formula, symbols, _source] = fields[..] else {
                panic!("forms.txt, line {line}: five fields were expected");
            };
            Form {
                circuit: circuit.into(),
                result: result.into(),
                formula: formula.into(),
                symbols: symbols.parse().expect("a count of symbols"),
            }
        })
        .collect()
}

fn listed(name: &str) -> Vec<String> {
    table_lines(&read(name)).map(|(_, text)| text.to_owned()).collect()
}

fn derive(form: &Form) -> Result<Value, String> {
    program::derive(&beside_tests(&format!("textbook/{}.circuit", form.circuit)))
}

/// How often a symbol stands in an expression; numbers and `s` are not symbols.
fn symbols_in(expression: &str) -> Result<usize, String> {
    Ok(exact::names(expression)?.iter().filter(|name| *name != "s").count())
}

/// The expression, the polynomials and the hand formula at some points, all exactly equal.
fn compare(form: &Form, derived: &Value) -> Result<(), String> {
    let result = program::result(derived, &form.result)?;
    let expression = program::text(result, "expression")?;
    if result["crosscheck"]["passed"] != true {
        return Err(format!("the cross-check did not pass: {}", result["crosscheck"]));
    }
    if expression.contains(['|', '.']) {
        return Err(format!("`{expression}` is more than integers, names and + - * / ^ ( )"));
    }
    for point in 0..POINTS {
        let mut points = exact::Points::new(point);
        let mut by_name = BTreeMap::from([("s".to_owned(), points.draw())]);
        let mut by_identifier = by_name.clone();
        for symbol in derived["symbols"].as_array().ok_or("no list of symbols")? {
            let value = points.draw();
            by_name.insert(program::text(symbol, "name")?.to_owned(), value.clone());
            by_identifier.insert(program::text(symbol, "identifier")?.to_owned(), value);
        }
        let by_identifier = |name: &str| by_identifier.get(name).cloned();
        let expected = exact::evaluate(&form.formula, &|name| by_name.get(name).cloned())?;
        let found = exact::evaluate(expression, &by_identifier)?;
        if found != expected {
            return Err(format!("`{expression}` is not `{}`", form.formula));
        }
        let s = &by_name["s"];
        let side = |field| polynomial(&result[field], s, &by_identifier);
        if side("numerator")? != side("denominator")? * expected {
            return Err("numerator over denominator is not the expression".into());
        }
    }
    Ok(())
}

fn polynomial(
    terms: &Value,
    s: &BigRational,
    value: &dyn Fn(&str) -> Option<BigRational>,
) -> Result<BigRational, String> {
    let mut sum = exact::number("0")?;
    for term in terms.as_array().ok_or("no list of coefficients")? {
        let power = term["power"].as_u64().and_then(|power| usize::try_from(power).ok());
        let coefficient = exact::evaluate(program::text(term, "expression")?, value)?;
        sum += coefficient * exact::power(s, power.ok_or("a coefficient has no power of s")?);
    }
    Ok(sum)
}

#[test]
fn every_result_equals_the_formula_by_hand() {
    let waiting = listed("waiting.txt");
    let mut failures = Vec::new();
    for form in forms() {
        let outcome = derive(&form).and_then(|derived| compare(&form, &derived));
        match (outcome, waiting.contains(&form.circuit)) {
            (Err(why), false) => failures.push(format!("{}: {why}", form.circuit)),
            (Ok(()), true) => {
                failures.push(format!("{}: works now, so take it from waiting.txt", form.circuit));
            }
            (Ok(()), false) | (Err(_), true) => {}
        }
    }
    assert_eq!(failures, Vec::<String>::new());
}

#[test]
fn printed_forms_need_no_more_symbols_than_by_hand() {
    let (waiting, longer) = (listed("waiting.txt"), listed("longer.txt"));
    let mut found = Vec::new();
    for form in forms().iter().filter(|form| !waiting.contains(&form.circuit)) {
        let symbols = derive(form).and_then(|derived| {
            symbols_in(program::text(program::result(&derived, &form.result)?, "compact")?)
        });
        match symbols {
            Ok(symbols) if symbols <= form.symbols => {}
            Ok(_) => found.push(form.circuit.clone()),
            Err(why) => found.push(format!("{}: {why}", form.circuit)),
        }
    }
    assert_eq!(found, longer, "on the left what is longer now, on the right longer.txt");
}

/// `docs/textbook-table.md`; `UPDATE_EXPECT=1` writes it.
#[test]
fn the_table_of_forms_is_current() {
    let waiting = listed("waiting.txt");
    let mut table = String::from(
        "# Textbook circuits: symbols by hand and as printed\n\n\
         How often a symbol stands in the formula that a designer writes by hand, and in the shape \
         `compact`. Numbers\nand `s` do not count, a power counts once. Written by \
         `UPDATE_EXPECT=1 cargo test --test textbook`.\n\n\
         | circuit | by hand | printed | formula by hand | formula printed |\n\
         | --- | ---: | ---: | --- | --- |\n",
    );
    let (mut hand, mut printed) = (0, 0);
    for form in forms().iter().filter(|form| !waiting.contains(&form.circuit)) {
        let derived = derive(form).expect(&form.circuit);
        let result = program::result(&derived, &form.result).expect(&form.circuit);
        let compact = program::text(result, "compact").expect(&form.circuit);
        let symbols = symbols_in(compact).expect(compact);
        let cell = |text: &str| text.replace('|', "\\|");
        table.push_str(&format!(
            "| {} | {} | {symbols} | `{}` | `{}` |\n",
            form.circuit,
            form.symbols,
            cell(&form.formula),
            cell(compact)
        ));
        hand += form.symbols;
        printed += symbols;
    }
    table.push_str(&format!("| all | {hand} | {printed} | | |\n"));
    expect_test::expect_file!["../docs/textbook-table.md"].assert_eq(&table);
}

#[test]
fn counts_of_symbols_fit_their_formulas() {
    for form in forms() {
        assert_eq!(symbols_in(&form.formula), Ok(form.symbols), "{}", form.circuit);
    }
}

#[test]
fn every_circuit_has_a_formula() {
    let forms = forms();
    let folder = std::fs::read_dir(beside_tests("textbook")).expect("the folder");
    let mut files: Vec<String> = folder
        .filter_map(|entry| entry.ok()?.file_name().into_string().ok())
        .filter_map(|name| name.strip_suffix(".circuit").map(str::to_owned))
        .collect();
    files.sort();
    let mut named: Vec<String> = forms.iter().map(|form| form.circuit.clone()).collect();
    named.sort();
    assert_eq!(files, named);
    for waiting in listed("waiting.txt") {
        assert!(named.contains(&waiting), "`{waiting}` of waiting.txt has no formula");
    }
}

#[test]
fn the_reader_is_exact() {
    let check = |text: &str, expected: &str| {
        let value = |name: &str| match name {
            "a" => exact::number("2").ok(),
            "Q1.gm" => exact::number("1/3").ok(),
            _ => None,
        };
        let found = exact::evaluate(text, &value).map(|value| value.to_string());
        assert_eq!(found.unwrap_or_else(|why| why), expected, "for `{text}`");
    };
    check("1 - 2 - 3", "-4");
    check("2/3/4*6", "1");
    check("-a^2", "-4");
    check("a^-1 + a^(-2)", "3/4");
    check("2*a || a*3", "6");
    check("-a || 2", "-1");
    check("Q1.gm*(a + 1)", "1");
    check("0.125", "1/8");
    check("b", "`b` has no value");
    check("a/(a - 2)", "a division by zero");
    check("(a", "a parenthesis is not closed");
    check("a a", "`a` is left over in `a a`");
}
