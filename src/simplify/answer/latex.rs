//! Simplified results as a LaTeX fragment that needs amsmath alone.

use std::fmt::Write;

use super::{Answer, bound, rounded};
use crate::simplify::{FigureKind, Worst};
use crate::typeset::latex::Latex;
use crate::typeset::number::Medium;
use crate::typeset::{Formula, Letter, Style, SymbolTable};

/// The widest sum in one row.
pub(super) const WIDTH: usize = 40;

/// The formula with its error, the roots, and the chain where it was asked for.
pub fn latex(answer: &Answer<'_>) -> String {
    let names = answer.names();
    let writer = Latex { names: &names, width: WIDTH };
    let name =
        |text: &str| SymbolTable::new([text]).letter(Letter::Symbol(0), Style::Latex).into_owned();
    let mut left = name(&answer.entry.name);
    if let Some(source) = &answer.entry.source {
        let _ = write!(left, "\\big|_{{{}}}", name(source));
    }
    let mut out = String::new();
    let mut display = |left: &str, formula: &Formula, remark: &str| {
        let equation = writer.equation(left, formula).replacen(" = ", " \\approx ", 1);
        let _ = writeln!(out, "\\[\n{equation}{remark}\n\\]");
    };
    let simplified = answer.simplified;
    display(&left, &simplified.formula, &error(&simplified.worst));
    for figure in &simplified.figures {
        let left = match figure.kind {
            FigureKind::DcGain => format!("{left}(0)"),
            FigureKind::Pole(number) => format!("\\lvert p_{{{number}}}\\rvert"),
            FigureKind::Zero(number, _) => format!("\\lvert z_{{{number}}}\\rvert"),
            FigureKind::PolePair(n) => format!("\\lvert p_{{{n}}}\\,p_{{{}}}\\rvert", n + 1),
            FigureKind::ZeroPair(n) => format!("\\lvert z_{{{n}}}\\,z_{{{}}}\\rvert", n + 1),
            FigureKind::GainBandwidth => "\\mathrm{GBW}".to_owned(),
        };
        display(&left, &figure.formula, "");
    }
    for step in &simplified.steps {
        display(&left, &step.formula, &error(&step.worst));
    }
    out
}

fn error(worst: &Worst) -> String {
    let number = |value: f64| rounded(bound(value), 3, Medium::Latex);
    format!(
        "\\qquad\\left(\\pm {}\\,\\mathrm{{dB}},\\ \\pm {}^\\circ\\right)",
        number(worst.db),
        number(worst.deg)
    )
}
