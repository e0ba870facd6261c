//! Poles and zeros as a LaTeX fragment that needs amsmath alone.

use std::fmt::Write;

use num_rational::BigRational;

use super::{Answer, label, words};
use crate::algebra::Fraction;
use crate::analysis::roots::{Approximation, Form, RootFacts};
use crate::typeset::answer::lettering;
use crate::typeset::latex::Latex;
use crate::typeset::number::{self, Medium};
use crate::typeset::{Formula, Letter, Style, SymbolTable};

/// One table of poles and one of zeros for each transfer function, and the approximations below them.
pub fn latex(answer: &Answer<'_>) -> String {
    let names = answer.names();
    let mut out = String::new();
    for report in answer.reports {
        let name = SymbolTable::new([label(report.entry).as_str()])
            .letter(Letter::Symbol(0), Style::Latex)
            .into_owned();
        let writer = Writer { answer, names: &names };
        let lists = [("poles", 'p', &report.roots.poles), ("zeros", 'z', &report.roots.zeros)];
        for (title, letter, roots) in lists {
            if roots.is_empty() {
                let _ = writeln!(out, "\\[\n\\text{{no {title} of }} {name}\n\\]");
                continue;
            }
            writer.table(&mut out, title, letter, &name, roots);
        }
        let lists = [('p', &report.roots.poles), ('z', &report.roots.zeros)];
        for (letter, roots) in lists {
            for (number, facts) in numbered(roots) {
                if let Some(found) = &facts.approximation {
                    writer.approximation(&mut out, letter, number, found);
                }
            }
        }
    }
    out
}

/// Single roots and the upper ones of pairs, with their numbers.
fn numbered(roots: &[RootFacts]) -> Vec<(u32, &RootFacts)> {
    let mut number = 1;
    let mut all = Vec::new();
    for facts in roots {
        if facts.root.value.im >= 0.0 {
            all.push((number, facts));
        }
        number += facts.root.multiplicity;
    }
    all
}

struct Writer<'a> {
    answer: &'a Answer<'a>,
    names: &'a SymbolTable,
}

impl Writer<'_> {
    fn table(&self, out: &mut String, title: &str, letter: char, name: &str, roots: &[RootFacts]) {
        let _ = writeln!(out, "\\[\n\\begin{{array}}{{lrrll}}");
        let _ = writeln!(
            out,
            "\\text{{{title} of }} {name} & |{letter}|/2\\pi & Q & \\text{{value in }}\\mathrm{{1/s}} \
             & \\text{{set by}} \\\\\n\\hline"
        );
        for (number, facts) in numbered(roots) {
            let root = &facts.root;
            let (re, im) = (root.value.re, root.value.im);
            let index = if root.is_real() {
                format!("{letter}_{{{number}}}")
            } else {
                let other = number + root.multiplicity;
                format!("{letter}_{{{number}}},\\,{letter}_{{{other}}}")
            };
            let times = match root.multiplicity {
                1 => String::new(),
                count => format!("\\ ({count}\\times)"),
            };
            let value = match (re == 0.0, im == 0.0) {
                (_, true) => rounded(re),
                (true, false) => format!("\\pm \\mathrm{{j}}\\,{}", rounded(im.abs())),
                (false, false) => {
                    format!("{} \\pm \\mathrm{{j}}\\,{}", rounded(re), rounded(im.abs()))
                }
            };
            let hz = BigRational::from_float(root.value.norm() / std::f64::consts::TAU)
                .map(|exact| number::quantity(&exact, "Hz", 5, Medium::Latex))
                .unwrap_or_default();
            let set_by: Vec<String> = facts
                .set_by
                .iter()
                .map(|id| self.names.letter(Letter::Symbol(id.0), Style::Latex).into_owned())
                .collect();
            let _ = writeln!(
                out,
                "{index}{times} & {hz} & {} & {value} & {} \\\\",
                root.q().map(rounded).unwrap_or_default(),
                set_by.join(",\\,"),
            );
        }
        let _ = writeln!(out, "\\end{{array}}\n\\]");
    }

    fn approximation(&self, out: &mut String, letter: char, number: u32, found: &Approximation) {
        let letters = lettering(self.answer.circuit);
        let writer = Latex { names: self.names, width: 40 };
        let text = |formula: &Formula| writer.text(formula);
        let formula = match &found.form {
            Form::Real(value) => {
                format!("{letter}_{{{number}}} \\approx {}", text(&words::fraction(value, letters)))
            }
            Form::Pair(pair) => {
                let [b, c] = &pair.quadratic;
                let print = |part: &crate::algebra::Polynomial| text(&letters.polynomial(part));
                let mut line = format!(
                    "{letter}_{{{number}}}:\\quad \\omega_0 \\approx {}",
                    root(&pair.w0_squared, &print)
                );
                if !b.is_zero() {
                    let _ = write!(line, ",\\quad Q \\approx {}", quality(b, c, &print));
                }
                line
            }
        };
        let conditions: Vec<String> = found
            .conditions
            .iter()
            .map(|condition| {
                let [large, small] = words::sides(condition, letters);
                format!("{} \\gg {}", text(&large), text(&small))
            })
            .collect();
        let conditions = if conditions.is_empty() {
            String::new()
        } else {
            format!("\\qquad ({})", conditions.join(",\\; "))
        };
        let _ = writeln!(out, "\\[\n{formula}{conditions}\n\\]");
    }
}

type Print<'a> = dyn Fn(&crate::algebra::Polynomial) -> String + 'a;

fn root(value: &Fraction, print: &Print<'_>) -> String {
    let (above, below) = (print(value.numerator()), print(value.denominator()));
    match (value.numerator().is_one(), value.denominator().is_one()) {
        (_, true) => format!("\\sqrt{{{above}}}"),
        (true, false) => format!("\\frac{{1}}{{\\sqrt{{{below}}}}}"),
        (false, false) => format!("\\sqrt{{\\frac{{{above}}}{{{below}}}}}"),
    }
}

/// √c/b.
fn quality(b: &Fraction, c: &Fraction, print: &Print<'_>) -> String {
    let factor = if b.denominator().is_one() {
        String::new()
    } else if b.denominator().len() == 1 {
        format!("\\,{}", print(b.denominator()))
    } else {
        format!("\\,\\left({}\\right)", print(b.denominator()))
    };
    format!("\\frac{{{}{factor}}}{{{}}}", root(c, print), print(b.numerator()))
}

fn rounded(value: f64) -> String {
    BigRational::from_float(value)
        .map(|exact| number::rounded(&exact, 5, Medium::Latex))
        .unwrap_or_default()
}
