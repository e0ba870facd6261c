//! What the symbols of an answer are: a `where` list with unit and value.

use std::collections::BTreeSet;
use std::fmt::Write;

use super::{Answer, TextStyle};
use crate::algebra::Var;
use crate::analysis::{ClosedForm, Entry};
use crate::circuit::{Symbol, SymbolRole, Unit};
use crate::elimination::symbol_of;
use crate::typeset::number::{self, Medium};
use crate::typeset::{Letter, Style, SymbolTable};

/// Digits of a nominal value.
const DIGITS: u32 = 6;

/// The list as text: one line for each symbol of the formulas, in their order.
pub fn legend_text(answer: &Answer<'_>, style: TextStyle) -> String {
    let medium = if style.is_ascii() { Medium::Ascii } else { Medium::Unicode };
    let rows: Vec<[String; 3]> = symbols(answer)
        .iter()
        .map(|(symbol, names, index)| {
            let spelling = if style.is_ascii() { Style::Ascii } else { Style::Unicode };
            let name = names.letter(Letter::Symbol(*index), spelling).into_owned();
            let value = value(symbol, medium).unwrap_or_default();
            [name, unit(symbol, medium), value]
        })
        .collect();
    if rows.is_empty() {
        return String::new();
    }
    let width = |column: usize| rows.iter().map(|row| row[column].chars().count()).max();
    let (first, second) = (width(0).unwrap_or(0), width(1).unwrap_or(0));
    let mut out = "\nwhere\n".to_owned();
    for [name, unit, value] in &rows {
        let line = format!("  {name:<first$}  in {unit:<second$}  {value}");
        let _ = writeln!(out, "{}", line.trim_end());
    }
    out
}

/// The list as LaTeX: three columns in a displayed array.
pub fn legend_latex(answer: &Answer<'_>) -> String {
    let rows: Vec<String> = symbols(answer)
        .iter()
        .map(|(symbol, names, index)| {
            let name = names.letter(Letter::Symbol(*index), Style::Latex);
            let unit = unit(symbol, Medium::Latex);
            let value = value(symbol, Medium::Latex).unwrap_or_default();
            format!("{name} & {unit} & {value} \\\\\n")
        })
        .collect();
    if rows.is_empty() {
        return String::new();
    }
    format!(
        "\\[\n\\text{{where}}\\quad\\begin{{array}}{{lll}}\n{}\\end{{array}}\n\\]\n",
        rows.concat()
    )
}

/// The symbols of all formulas of an answer, each with the names and its index in them.
fn symbols<'a>(answer: &Answer<'a>) -> Vec<(&'a Symbol, SymbolTable, u32)> {
    let mut seen = BTreeSet::new();
    let mut list = Vec::new();
    for entry in answer.entries {
        let names = super::names(entry);
        for variable in variables(entry) {
            let Some(id) = symbol_of(variable) else { continue };
            let Some(symbol) = entry.symbols.get(id.0 as usize) else { continue };
            if symbol.role != SymbolRole::Pi && seen.insert(id) {
                list.push((symbol, names.clone(), id.0));
            }
        }
    }
    list
}

/// The variables of a formula, ascending: in reference order.
fn variables(entry: &Entry) -> Vec<Var> {
    let mut all: Vec<Var> = match (&entry.form, &entry.elimination) {
        (ClosedForm::Expanded(fraction), _) => {
            fraction.numerator().variables().chain(fraction.denominator().variables()).collect()
        }
        (ClosedForm::Nested(_), Some(elimination)) => elimination.variables().to_vec(),
        (ClosedForm::Nested(_), None) => Vec::new(),
    };
    all.sort_unstable();
    all.dedup();
    all
}

fn unit(symbol: &Symbol, medium: Medium) -> String {
    if symbol.unit == Unit::ONE {
        return "1".to_owned();
    }
    let text = symbol.unit.to_string();
    match medium {
        Medium::Unicode => text,
        Medium::Ascii => number::ascii_unit(&text),
        Medium::Latex => number::latex_unit(&text),
    }
}

/// `10 kΩ ± 1 %`; none without a nominal value.
fn value(symbol: &Symbol, medium: Medium) -> Option<String> {
    let nominal = symbol.nominal.as_ref()?;
    let quantity = number::quantity(nominal, &symbol.unit.to_string(), DIGITS, medium);
    Some(match &symbol.tolerance {
        None => quantity,
        Some(tolerance) => {
            // `0.5 pF` stands for both signs, `-20 % +80 %` brings its own.
            let text = tolerance.text.as_str();
            let (sign, text) = match (text.starts_with(['+', '-', '−']), medium) {
                (true, _) => ("", text.to_owned()),
                (false, Medium::Unicode) => ("± ", text.to_owned()),
                (false, Medium::Ascii) => ("+/- ", number::ascii_unit(text)),
                (false, Medium::Latex) => ("\\pm ", text.to_owned()),
            };
            let text = match medium {
                Medium::Latex => format!("\\text{{{}}}", plain_latex(&text)),
                _ => text,
            };
            format!("{quantity} {sign}{text}")
        }
    })
}

/// A tolerance as written, inside `\text`.
fn plain_latex(text: &str) -> String {
    text.chars()
        .map(|c| match c {
            '%' => "\\%".to_owned(),
            'Ω' => "$\\Omega$".to_owned(),
            'µ' => "$\\mu$".to_owned(),
            '−' => "$-$".to_owned(),
            c => c.to_string(),
        })
        .collect()
}
