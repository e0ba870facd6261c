//! Answers as text for a terminal.

use std::fmt::Write;

use num_rational::BigRational;
use num_traits::{One, Zero};

use super::{Answer, Asymptote, asymptotes, evidence, lettering_of, names, written};
use crate::algebra::{Fraction, Var};
use crate::analysis::{ClosedForm, Entry, Noise, NumericForm};
use crate::circuit::Unit;
use crate::typeset::number::{self, Medium};
use crate::typeset::screen::{Characters, Screen};
use crate::typeset::shape::{Shape, compact};
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

/// Digits of a number of terms that are printed.
const LONGEST_COUNT: usize = 60;

/// One answer: formulas, numbers, evidence.
pub fn text(answer: &Answer<'_>, style: TextStyle) -> String {
    let mut out = String::new();
    for entry in answer.entries {
        let names = names(entry);
        let name = label(entry);
        if !out.is_empty() {
            out.push('\n');
        }
        if !style.quiet {
            let _ = writeln!(out, "{}", heading(entry, &name, style));
        }
        formula(&mut out, entry, answer.shape, &name, &names, style);
        if !style.quiet {
            facts(&mut out, entry, &names, style);
        }
    }
    if answer.ask.is_superposition() && !style.quiet {
        let _ = writeln!(out, "\n{}", superposition(answer));
    }
    out
}

/// `H`, or `H[Vin]` for a source's share in a superposition.
fn label(entry: &Entry) -> String {
    match &entry.source {
        Some(source) => format!("{}[{source}]", entry.name),
        None => entry.name.clone(),
    }
}

fn heading(entry: &Entry, name: &str, style: TextStyle) -> String {
    let unit = if entry.unit == Unit::ONE {
        String::new()
    } else {
        format!("   in {}", unit_text(entry.unit, style))
    };
    let query = match &entry.source {
        Some(source) => format!("{} / {source}", entry.query),
        None => entry.query.clone(),
    };
    let limits = if entry.limits.is_empty() {
        String::new()
    } else {
        format!(", limit {}", entry.limits.join(", "))
    };
    format!("{name}: {query}{limits}{unit}\n")
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
    entry: &Entry,
    shape: Shape,
    name: &str,
    names: &SymbolTable,
    style: TextStyle,
) {
    let written = written(entry, shape);
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
fn facts(out: &mut String, entry: &Entry, names: &SymbolTable, style: TextStyle) {
    out.push('\n');
    let mut fact = |title: &str, text: String| {
        let _ = writeln!(out, "  {title:<18}{text}");
    };
    if let Some(noise) = &entry.noise {
        contributions(noise, entry, names, style, &mut fact);
    } else {
        if let Some(numeric) = &entry.numeric {
            fact("with numbers", numbers(numeric, style));
        }
        let letters = lettering_of(&entry.symbols);
        if let Some([low, high]) = asymptotes(&entry.form, letters).filter(|_| depends_on_s(entry))
        {
            fact("towards dc", asymptote(&low, entry, names, style, false));
            fact("towards infinity", asymptote(&high, entry, names, style, true));
        }
    }
    if let ClosedForm::Nested(_) = entry.form {
        let count = entry.length.terms.to_string();
        let about = if entry.length.exact { "" } else { "at most " };
        // Hundreds of digits help nobody; JSON has them all.
        let count = if count.len() <= LONGEST_COUNT {
            count
        } else {
            format!("about {}.{}e{}", &count[..1], &count[1..4], count.len() - 1)
        };
        fact("expanded", format!("{about}{count} terms"));
    }
    fact("checked", evidence(&entry.evidence));
    for check in &entry.checks {
        fact("", check.statement.clone());
    }
}

/// Whether there is anything to say about the ends of the frequency axis.
fn depends_on_s(entry: &Entry) -> bool {
    match &entry.form {
        ClosedForm::Expanded(fraction) => {
            fraction.numerator().degree(Var::S).max(fraction.denominator().degree(Var::S)) > 0
        }
        ClosedForm::Nested(_) => true,
    }
}

/// The shares of a noise density, and what it adds up to.
fn contributions(
    noise: &Noise,
    entry: &Entry,
    names: &SymbolTable,
    style: TextStyle,
    fact: &mut dyn FnMut(&str, String),
) {
    let letters = lettering_of(&entry.symbols);
    let line = |fraction: &Fraction| style.screen.one_line(&compact(fraction, letters), names);
    let medium = medium(style);
    let volts = |rms: f64| match BigRational::from_float(rms) {
        Some(exact) => number::quantity(&exact, "V", 4, medium),
        None => rms.to_string(),
    };
    for share in &noise.contributors {
        fact(&format!("from {}", share.element), line(&share.density));
    }
    if let Some(total) = &noise.total {
        let rms = total.rms.map_or(String::new(), |rms| format!(", rms {}", volts(rms)));
        fact("mean square", format!("{}{rms}", line(&total.square)));
    }
    if let Some(band) = &noise.band {
        let hertz = |value: f64| match BigRational::from_float(value) {
            Some(exact) => number::quantity(&exact, "Hz", 3, medium),
            None => value.to_string(),
        };
        fact(
            "in the band",
            format!(
                "rms {} from {} to {}, relative error below {:.0e}",
                volts(band.rms),
                hertz(band.from_hz),
                hertz(band.to_hz),
                band.relative_error.max(1e-15)
            ),
        );
    }
}

fn asymptote(
    asymptote: &Asymptote,
    entry: &Entry,
    names: &SymbolTable,
    style: TextStyle,
    high: bool,
) -> String {
    let whole = Formula::product([
        asymptote.factor.clone(),
        Formula::power(Formula::s(), asymptote.power.clamp(-1000, 1000) as i32),
    ]);
    let text = style.screen.one_line(&whole, names);
    match entry.numeric.as_ref().filter(|_| asymptote.power == 0) {
        Some(numeric) => {
            let ends = |of: &[BigRational]| {
                if high { of.last().cloned() } else { of.first().cloned() }
            };
            match (ends(&numeric.numerator), ends(&numeric.denominator)) {
                (Some(n), Some(d)) if !d.is_zero() => {
                    let medium = medium(style);
                    let value =
                        number::quantity(&(n / d), &plain_unit(entry.unit, style), 4, medium);
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
        .entries
        .iter()
        .filter_map(|entry| entry.source.as_ref())
        .map(|source| format!("{}[{source}]*{source}", answer.ask.name))
        .collect();
    format!("{} = {}", answer.ask.text, shares.join(" + "))
}
