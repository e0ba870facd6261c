//! Poles and zeros as text for a terminal.

use std::fmt::Write;

use num_rational::BigRational;

use super::Answer;
use super::table::{Side, Table};
use crate::analysis::roots::RootFacts;
use crate::typeset::answer::TextStyle;
use crate::typeset::number::{self, Medium};
use crate::typeset::screen::Characters;

/// One answer.
pub fn text(answer: &Answer<'_>, style: TextStyle) -> String {
    let mut out = String::new();
    for (transfer, report) in answer.parts() {
        if !out.is_empty() {
            out.push('\n');
        }
        let name = match answer.source(transfer) {
            Some(source) => {
                format!("{}[{source}]: {} / {source}", answer.ask.name, answer.ask.text)
            }
            None => format!("{}: {}", answer.ask.name, answer.ask.text),
        };
        let _ = writeln!(out, "{name}\n");
        let writer = Writer { answer, style };
        out.push_str(&writer.roots("poles", 'p', &report.poles));
        out.push_str(&writer.roots("zeros", 'z', &report.zeros));
    }
    out
}

struct Writer<'a> {
    answer: &'a Answer<'a>,
    style: TextStyle,
}

/// Significant digits of a root.
const DIGITS: u32 = 5;

impl Writer<'_> {
    fn medium(&self) -> Medium {
        match self.style.screen.characters {
            Characters::Ascii => Medium::Ascii,
            Characters::Unicode => Medium::Unicode,
        }
    }

    fn quantity(&self, value: f64, unit: &str) -> String {
        match BigRational::from_float(value) {
            Some(exact) => number::quantity(&exact, unit, DIGITS, self.medium()),
            None => value.to_string(),
        }
    }

    fn rounded(&self, value: f64) -> String {
        match BigRational::from_float(value) {
            Some(exact) => number::rounded(&exact, DIGITS, self.medium()),
            None => value.to_string(),
        }
    }

    fn roots(&self, title: &str, letter: char, roots: &[RootFacts]) -> String {
        if roots.is_empty() {
            return format!("  no {title}\n");
        }
        let mut table = Table::new([
            (title, Side::Left),
            ("frequency", Side::Right),
            ("Q", Side::Right),
            ("value in 1/s", Side::Left),
            ("time constant", Side::Right),
            ("times", Side::Right),
            ("set by", Side::Left),
        ]);
        let mut index = 0;
        while let Some(facts) = roots.get(index) {
            let root = &facts.root;
            let pair = !root.is_real();
            let name = if pair {
                format!("{letter}{}, {letter}{}", index + 1, index + 2)
            } else {
                format!("{letter}{}", index + 1)
            };
            let set_by: Vec<&str> =
                facts.set_by.iter().map(|&id| self.answer.circuit[id].name.as_str()).collect();
            table.row(vec![
                name,
                self.quantity(root.value.norm() / std::f64::consts::TAU, "Hz"),
                root.q().map(|q| self.rounded(q)).unwrap_or_default(),
                self.value(root.value.re, root.value.im),
                if root.value.re == 0.0 {
                    String::new()
                } else {
                    self.quantity(1.0 / root.value.re.abs(), "s")
                },
                if root.multiplicity > 1 { root.multiplicity.to_string() } else { String::new() },
                set_by.join(", "),
            ]);
            index += if pair { 2 } else { 1 };
        }
        table.lines()
    }

    /// `−100`, `−100 ± j·2000`.
    fn value(&self, re: f64, im: f64) -> String {
        let (plus_minus, j) = match self.medium() {
            Medium::Ascii => ("+/-", "j*"),
            _ => ("±", "j·"),
        };
        match (re == 0.0, im == 0.0) {
            (_, true) => self.rounded(re),
            (true, false) => format!("{plus_minus} {j}{}", self.rounded(im.abs())),
            (false, false) => {
                format!("{} {plus_minus} {j}{}", self.rounded(re), self.rounded(im.abs()))
            }
        }
    }
}
