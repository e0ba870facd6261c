//! Answers as text for a terminal.

use std::fmt::Write;

use num_rational::BigRational;
use num_traits::{One, Zero};

use super::{Answer, Asymptote, asymptotes, evidence, lettering};
use crate::analysis::{ClosedForm, Derivation, NumericForm, total};
use crate::circuit::{Transfer, Unit};
use crate::typeset::number::{self, Medium};
use crate::typeset::screen::{Characters, Screen};
use crate::typeset::{Dialect, Formula, Letter, Style, SymbolTable, plain};

/// How text is set.
#[derive(Clone, Copy, Debug)]
pub struct TextStyle {
    /// Width, and whether only ASCII may be used.
    pub screen: Screen,
    /// Only the formulas, nothing around them.
    pub quiet: bool,
}

impl TextStyle {
    pub(super) fn is_ascii(self) -> bool {
        self.screen.characters == Characters::Ascii
    }
}

/// One answer: formulas, numbers, evidence.
pub fn text(answer: &Answer<'_>, style: TextStyle) -> String {
    let names = answer.names();
    let mut out = String::new();
    for (transfer, derivation) in answer.parts() {
        let name = label(answer, transfer);
        if !out.is_empty() {
            out.push('\n');
        }
        if !style.quiet {
            let _ = writeln!(out, "{}", heading(answer, transfer, &name, style));
        }
        formula(&mut out, answer, derivation, &name, &names, style);
        if !style.quiet {
            facts(&mut out, answer, transfer, derivation, &names, style);
        }
    }
    if answer.ask.superposition && !style.quiet {
        let _ = writeln!(out, "\n{}", superposition(answer));
    }
    out
}

/// `H`, or `H[Vin]` for a source's share in a superposition.
fn label(answer: &Answer<'_>, transfer: &Transfer) -> String {
    match answer.source(transfer) {
        Some(source) if answer.ask.superposition => format!("{}[{source}]", answer.ask.name),
        _ => answer.ask.name.clone(),
    }
}

fn heading(answer: &Answer<'_>, transfer: &Transfer, name: &str, style: TextStyle) -> String {
    let unit = if transfer.unit == Unit::ONE {
        String::new()
    } else {
        format!("   in {}", unit_text(transfer.unit, style))
    };
    let query = match answer.source(transfer) {
        Some(source) if answer.ask.superposition => format!("{} / {source}", answer.ask.text),
        _ => answer.ask.text.clone(),
    };
    format!("{name}: {query}{unit}\n")
}

fn unit_text(unit: Unit, style: TextStyle) -> String {
    let text = unit.to_string();
    if style.is_ascii() {
        text.replace('Ω', "Ohm").replace('²', "^2").replace('·', "*").replace('µ', "u")
    } else {
        text
    }
}

fn formula(
    out: &mut String,
    answer: &Answer<'_>,
    derivation: &Derivation,
    name: &str,
    names: &SymbolTable,
    style: TextStyle,
) {
    let written = answer.written(derivation);
    let _ = writeln!(out, "{}", style.screen.equation(name, &written.formula, names));
    if !written.sections.is_empty() {
        out.push('\n');
        for line in super::sections::lines(&written.sections, names, style) {
            let _ = writeln!(out, "  {line}");
        }
    }
    if written.definitions.is_empty() {
        return;
    }
    let _ = writeln!(out, "\nwhere");
    for (definition, index) in written.definitions.iter().zip(0_u32..) {
        let left = names.letter(Letter::Definition(index), Style::Identifier);
        let line = plain::text(definition, names, Dialect::Language);
        let _ = writeln!(out, "  {left} = {line}");
    }
}

/// Everything below the formula.
fn facts(
    out: &mut String,
    answer: &Answer<'_>,
    transfer: &Transfer,
    derivation: &Derivation,
    names: &SymbolTable,
    style: TextStyle,
) {
    out.push('\n');
    let mut fact = |title: &str, text: String| {
        let _ = writeln!(out, "  {title:<16}{text}");
    };
    if let Some(numeric) = &derivation.numeric {
        fact("with numbers", numbers(numeric, style));
    }
    let letters = lettering(answer.circuit);
    if let Some([low, high]) = asymptotes(&derivation.form, letters) {
        fact("towards dc", asymptote(&low, transfer.unit, names, style, derivation, false));
        fact("towards infinity", asymptote(&high, transfer.unit, names, style, derivation, true));
    }
    if let ClosedForm::Nested(_) = derivation.form {
        let count = total(&derivation.counts);
        let about = if derivation.counts.exact { "" } else { "at most " };
        fact("expanded", format!("{about}{count} terms"));
    }
    fact("checked", evidence(&derivation.evidence));
}

fn asymptote(
    asymptote: &Asymptote,
    unit: Unit,
    names: &SymbolTable,
    style: TextStyle,
    derivation: &Derivation,
    high: bool,
) -> String {
    let whole = Formula::product([
        asymptote.factor.clone(),
        Formula::power(Formula::s(), asymptote.power.clamp(-1000, 1000) as i32),
    ]);
    let text = style.screen.one_line(&whole, names);
    match derivation.numeric.as_ref().filter(|_| asymptote.power == 0) {
        Some(numeric) => {
            let ends = |of: &[BigRational]| {
                if high { of.last().cloned() } else { of.first().cloned() }
            };
            match (ends(&numeric.numerator), ends(&numeric.denominator)) {
                (Some(n), Some(d)) if !d.is_zero() => {
                    let medium = medium(style);
                    let value = number::quantity(&(n / d), &plain_unit(unit, style), 4, medium);
                    if value == text { text } else { format!("{text} = {value}") }
                }
                _ => text,
            }
        }
        None => text,
    }
}

fn plain_unit(unit: Unit, style: TextStyle) -> String {
    if unit == Unit::ONE { String::new() } else { unit_text(unit, style) }
}

fn medium(style: TextStyle) -> Medium {
    if style.is_ascii() { Medium::Ascii } else { Medium::Unicode }
}

/// Numerator over denominator in one line, five digits a coefficient.
fn numbers(numeric: &NumericForm, style: TextStyle) -> String {
    let medium = medium(style);
    let polynomial = |coefficients: &[BigRational]| {
        let mut text = String::new();
        for (power, coefficient) in coefficients.iter().enumerate() {
            if coefficient.is_zero() {
                continue;
            }
            let digits = number::rounded(coefficient, 5, medium);
            let minus = if style.is_ascii() { '-' } else { '−' };
            let (negative, size) = match digits.strip_prefix(minus) {
                Some(rest) => (true, rest.to_owned()),
                None => (false, digits),
            };
            match (text.is_empty(), negative) {
                (true, true) => text.push(minus),
                (true, false) => {}
                (false, true) => {
                    let _ = write!(text, " {minus} ");
                }
                (false, false) => text.push_str(" + "),
            }
            let (dot, s) = if style.is_ascii() { ("*", "s^") } else { ("·", "s") };
            let factor = match power {
                0 => String::new(),
                1 => "s".to_owned(),
                _ if style.is_ascii() => format!("{s}{power}"),
                _ => format!("{s}{}", superscript(power)),
            };
            if factor.is_empty() {
                text.push_str(&size);
            } else if coefficient.is_one() {
                text.push_str(&factor);
            } else {
                let _ = write!(text, "{size}{dot}{factor}");
            }
        }
        if text.is_empty() { "0".to_owned() } else { text }
    };
    let count = |of: &[BigRational]| of.iter().filter(|c| !c.is_zero()).count();
    let (n, d) = (polynomial(&numeric.numerator), polynomial(&numeric.denominator));
    if d == "1" {
        return n;
    }
    let wrap = |text: String, terms: usize| if terms > 1 { format!("({text})") } else { text };
    format!(
        "{} / {}",
        wrap(n, count(&numeric.numerator)),
        wrap(d, count(&numeric.denominator).max(2))
    )
}

fn superscript(power: usize) -> String {
    const DIGITS: [char; 10] = ['⁰', '¹', '²', '³', '⁴', '⁵', '⁶', '⁷', '⁸', '⁹'];
    power.to_string().bytes().map(|digit| DIGITS[usize::from(digit - b'0')]).collect()
}

/// `V(out) = Vout[V1]·V1 + Vout[I2]·I2`
fn superposition(answer: &Answer<'_>) -> String {
    let shares: Vec<String> = answer
        .ask
        .transfers
        .iter()
        .filter_map(|transfer| answer.source(transfer))
        .map(|source| format!("{}[{source}]*{source}", answer.ask.name))
        .collect();
    format!("{} = {}", answer.ask.text, shares.join(" + "))
}
