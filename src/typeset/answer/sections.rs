//! The quantities of sections: lines of text, and LaTeX.

use std::f64::consts::TAU;
use std::fmt::Write;

use num_rational::BigRational;

use super::TextStyle;
use crate::typeset::latex::Latex;
use crate::typeset::number::{self, Medium};
use crate::typeset::shape::{NumericSection, Quantity, Section};
use crate::typeset::{Dialect, Formula, SymbolTable, View, plain};

/// One line for each section: `poles, order 2: w0 = sqrt(1/(L1*C1)) = 2 pi * 159 kHz, Q = …`.
pub(super) fn lines(sections: &[Section], names: &SymbolTable, style: TextStyle) -> Vec<String> {
    let medium = if style.is_ascii() { Medium::Ascii } else { Medium::Unicode };
    let text = |formula: &Formula| plain::text(formula, names, Dialect::Language);
    let root = |radicand: &Formula| format!("sqrt({})", text(radicand));
    let over = |above: String, below: &Formula| match below.view() {
        View::Letter(_) | View::Number(_) | View::Power(..) => format!("{above}/{}", text(below)),
        _ => format!("{above}/({})", text(below)),
    };
    let one = |section: &Section| {
        let mut line = title(section);
        for (index, quantity) in section.quantities.iter().enumerate() {
            let value = value(quantity, &text, &root, "*", &over);
            let between = if index == 0 { ": " } else { ", " };
            let _ = write!(line, "{between}{} = {value}", quantity.name);
            if let Some(nominal) = nominal(quantity, medium) {
                let _ = write!(line, " = {nominal}");
            }
        }
        match (section.order, section.quantities.len()) {
            (_, 0) => line.push_str(": no closed form, for it does not factor"),
            (2, 1) => line.push_str(", Q infinite"),
            _ => {}
        }
        if !section.parts.is_empty() {
            line.push_str("; at the nominal values");
        }
        let parts = section.parts.iter().map(|part| format!("  {}", by_numbers(part, medium)));
        std::iter::once(line).chain(parts).collect::<Vec<_>>()
    };
    sections.iter().flat_map(one).collect()
}

/// `w0 = 2π · 9.95 kHz, Q = 1.618, 2 times`.
fn by_numbers(part: &NumericSection, medium: Medium) -> String {
    let name = if part.q.is_some() { "w0" } else { "w" };
    let mut line = format!("{name} = {}", hertz(part.frequency, medium).unwrap_or_default());
    match part.q {
        Some(q) if q.is_finite() => {
            if let Some(q) = BigRational::from_float(q) {
                let _ = write!(line, ", Q = {}", number::rounded(&q, 4, medium));
            }
        }
        Some(_) => line.push_str(", Q infinite"),
        None => {}
    }
    if part.right {
        line.push_str(", in the right half-plane");
    }
    if part.multiplicity > 1 {
        let _ = write!(line, ", {} times", part.multiplicity);
    }
    line
}

/// The same as formulas of LaTeX, where there is a closed form.
pub(super) fn latex(sections: &[Section], writer: &Latex<'_>) -> Vec<String> {
    let text = |formula: &Formula| writer.text(formula);
    let root = |radicand: &Formula| format!("\\sqrt{{{}}}", text(radicand));
    let over = |above: String, below: &Formula| format!("\\frac{{{above}}}{{{}}}", text(below));
    let one = |quantity: &Quantity| {
        let name = match quantity.name {
            "gain" => "K",
            "w" => "\\omega",
            "w0" => "\\omega_0",
            name => name,
        };
        format!("{name} = {}", value(quantity, &text, &root, "\\,", &over))
    };
    let all = sections.iter().filter(|section| !section.quantities.is_empty());
    all.map(|section| {
        let quantities: Vec<String> = section.quantities.iter().map(one).collect();
        format!("\\text{{{}:}}\\quad {}", title(section), quantities.join(",\\quad "))
    })
    .collect()
}

fn title(section: &Section) -> String {
    let kind = if section.poles { "poles" } else { "zeros" };
    match (section.order, section.multiplicity) {
        (0, _) => "constant".to_owned(),
        (order, 1) => format!("{kind}, order {order}"),
        (order, times) => format!("{kind}, order {order}, {times} times"),
    }
}

/// factor · √radicand, the root above the bar of the factor.
fn value(
    quantity: &Quantity,
    text: &impl Fn(&Formula) -> String,
    root: &impl Fn(&Formula) -> String,
    times: &str,
    over: &impl Fn(String, &Formula) -> String,
) -> String {
    let Some(radicand) = &quantity.radicand else { return text(&quantity.factor) };
    let above = |factor: &Formula| match factor.view() {
        _ if factor.is_one() => root(radicand),
        View::Sum(_) | View::Negative(_) => format!("({}){times}{}", text(factor), root(radicand)),
        _ => format!("{}{times}{}", text(factor), root(radicand)),
    };
    match quantity.factor.view() {
        View::Quotient(a, b) => over(above(a), b),
        _ => above(&quantity.factor),
    }
}

/// The nominal value: a frequency as 2π times hertz.
fn nominal(quantity: &Quantity, medium: Medium) -> Option<String> {
    let value = quantity.nominal?;
    if quantity.name.starts_with('w') {
        return hertz(value, medium);
    }
    Some(number::rounded(&BigRational::from_float(value)?, 4, medium))
}

/// rad/s as 2π times hertz.
fn hertz(value: f64, medium: Medium) -> Option<String> {
    let hertz = BigRational::from_float(value / TAU)?;
    let pi = if medium == Medium::Ascii { "2*pi * " } else { "2π · " };
    Some(format!("{pi}{}", number::quantity(&hertz, "Hz", 4, medium)))
}
