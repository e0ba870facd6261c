//! Verdicts as a LaTeX fragment that needs amsmath alone.

use std::fmt::Write;

use super::{Checked, names, of_frequency, words};
use crate::analysis::check::{Difference, Judgement, Side, Verdict};
use crate::circuit::Value;
use crate::typeset::answer::json::LATEX_WIDTH;
use crate::typeset::latex::Latex;
use crate::typeset::shape::Lettering;
use crate::typeset::{Letter, Style, SymbolTable};

/// One displayed formula for each claim, and one for each coefficient that differs.
pub fn latex(checked: &Checked<'_>) -> String {
    let mut out = String::new();
    let left = name(&checked.claim.name);
    let judgement = &checked.judgement;
    let (names, letters) = names(judgement, of_frequency(checked.claim));
    let writer = Latex { names: &names, width: LATEX_WIDTH };
    let formula = writer.text(&words::formula(&checked.claim.formula, letters));
    let root = checked.claim.under_root.as_ref().map_or(String::new(), |root| {
        format!("\\,\\sqrt{{{}}}", writer.text(&words::formula(root, letters)))
    });
    let (relation, remark) = remark(checked, judgement);
    let _ = writeln!(out, "\\[\n{left} {relation} {formula}{root}\\quad\\text{{({remark})}}\n\\]");
    if judgement.verdict == Verdict::Different {
        for difference in &judgement.differences {
            coefficient(&mut out, difference, &writer, letters);
        }
    }
    if let Some(repair) = &judgement.repair {
        let text = |value: &Value| format!("${}$", writer.text(&words::formula(value, letters)));
        let sentence = words::change(&repair.change, checked.circuit, &text);
        let right = writer.text(&words::formula(&repair.formula, letters));
        let _ = writeln!(out, "\\[\n{left} = {right}{root}\\quad\\text{{({sentence})}}\n\\]");
    }
    out
}

fn remark(checked: &Checked<'_>, judgement: &Judgement) -> (&'static str, String) {
    match judgement.verdict {
        Verdict::Equal if judgement.nearness.is_some() => ("\\approx", "near enough".to_owned()),
        Verdict::Equal => ("=", "proved".to_owned()),
        Verdict::EqualInLimit => {
            let steps = judgement.limits.first().into_iter().flatten();
            let steps: Vec<String> =
                steps.map(|step| escaped(&words::step_text(checked.circuit, step))).collect();
            ("\\to", format!("in the limit {}", steps.join(", ")))
        }
        Verdict::Different => ("\\neq", "wrong".to_owned()),
        Verdict::UnitError => ("\\neq", "the units do not fit".to_owned()),
    }
}

fn coefficient(out: &mut String, of: &Difference, writer: &Latex<'_>, letters: Lettering<'_>) {
    let side = match of.side {
        Side::Numerator => "numerator",
        Side::Denominator => "denominator",
    };
    let text = |fraction: &_| writer.text(&words::fraction(fraction, letters));
    let _ = writeln!(
        out,
        "\\[\n\\text{{{side}, }} s^{{{}}}\\text{{: claimed }} {},\\quad\\text{{exact }} {}\n\\]",
        of.power,
        text(&of.claimed),
        text(&of.exact)
    );
}

/// The name of a result, set like a symbol.
fn name(text: &str) -> String {
    SymbolTable::new([text]).letter(Letter::Symbol(0), Style::Latex).into_owned()
}

/// Words that may hold characters of LaTeX.
fn escaped(text: &str) -> String {
    let mut out = String::new();
    for character in text.chars() {
        match character {
            '\\' => out.push_str("\\textbackslash{}"),
            '^' => out.push_str("\\textasciicircum{}"),
            '_' | '{' | '}' | '$' | '%' | '&' | '#' => {
                out.push('\\');
                out.push(character);
            }
            other => out.push(other),
        }
    }
    out
}
