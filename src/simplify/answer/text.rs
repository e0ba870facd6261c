//! Simplified results for a terminal.

use std::fmt::Write;

use super::{Answer, bound, figure_hertz, figure_name, length, quantity, rounded};
use crate::circuit::Unit;
use crate::simplify::{Figure, FigureKind, Goal, Left, LeftOut, Worst};
use crate::typeset::answer::{TextStyle, evidence};
use crate::typeset::number::Medium;
use crate::typeset::screen::Characters;

/// Longer formulas of figures are left to JSON and LaTeX.
const LONGEST: u64 = 12;
/// Symbols that are named one by one.
const NAMED: usize = 12;

/// The formula, its error, what was left out and why, and the chain where it was asked for.
pub fn text(answer: &Answer<'_>, style: TextStyle) -> String {
    let simplified = answer.simplified;
    let names = answer.names();
    let mut out = String::new();
    let writer = Writer { answer, style };
    if !style.quiet {
        let _ = writeln!(out, "{}\n", writer.heading());
    }
    let equation = style.screen.equation(&answer.label(), &simplified.formula, &names);
    let _ = writeln!(out, "{equation}");
    if !style.quiet {
        out.push('\n');
        writer.facts(&mut out);
    }
    if !simplified.steps.is_empty() {
        let _ = writeln!(out, "\nFrom coarse to fine, at the nominal values:");
        for step in &simplified.steps {
            let mark = if step.within { "" } else { ", beyond the goal" };
            let symbols = if step.length == 1 { "symbol" } else { "symbols" };
            let worst = writer.worst(&step.worst);
            let _ = writeln!(out, "\n  {} {symbols}: {worst}{mark}", step.length);
            let equation = style.screen.equation(&answer.label(), &step.formula, &names);
            for line in equation.lines() {
                let _ = writeln!(out, "    {line}");
            }
        }
    }
    if style.screen.characters == Characters::Ascii { ascii(&out) } else { out }
}

/// The few signs beyond ASCII that stand in words here.
fn ascii(text: &str) -> String {
    text.replace('°', " deg")
        .replace('·', "*")
        .replace('Ω', "ohm")
        .replace('→', "->")
        .replace('−', "-")
}

struct Writer<'a> {
    answer: &'a Answer<'a>,
    style: TextStyle,
}

impl Writer<'_> {
    fn medium(&self) -> Medium {
        match self.style.screen.characters {
            Characters::Ascii => Medium::Ascii,
            Characters::Unicode => Medium::Unicode,
        }
    }

    fn hertz(&self, value: f64) -> String {
        quantity(value, "Hz", 3, self.medium())
    }

    fn heading(&self) -> String {
        let Answer { entry, simplified } = self.answer;
        let query = match &entry.source {
            Some(source) => format!("{} / {source}", entry.query),
            None => entry.query.clone(),
        };
        let unit = match entry.unit {
            Unit::ONE => String::new(),
            unit => format!("   in {unit}"),
        };
        let (from, to) = simplified.band;
        format!(
            "{}: {query}, within {} from {} to {}{unit}",
            self.answer.label(),
            goal(&simplified.goal),
            self.hertz(from),
            self.hertz(to)
        )
    }

    fn worst(&self, worst: &Worst) -> String {
        let part = |value: f64, least: f64, unit: &str, hz: f64| {
            if value < least {
                return format!("below {least}{unit}");
            }
            format!("{}{unit} at {}", rounded(bound(value), 3, self.medium()), self.hertz(hz))
        };
        format!(
            "{}, {}",
            part(worst.db, 0.001, " dB", worst.db_hz),
            part(worst.deg, 0.01, "°", worst.deg_hz)
        )
    }

    fn facts(&self, out: &mut String) {
        let Answer { entry, simplified } = *self.answer;
        let mut fact = |title: &str, text: String| {
            let _ = writeln!(out, "  {title:<18}{text}");
        };
        fact("length", self.length());
        fact("error", self.worst(&simplified.worst));
        if let Some(corners) = &simplified.corners {
            let which = if corners.all {
                format!("all {} corners", corners.count)
            } else {
                format!("{} corners drawn from all", corners.count)
            };
            fact("over tolerances", format!("{}; {which}", self.worst(&corners.worst)));
        }
        for figure in &simplified.figures {
            fact(&figure_name(figure.kind), self.figure(figure));
        }
        let mut title = "left out";
        for left in simplified.left_out.iter().take(NAMED) {
            fact(title, self.left(left));
            title = "";
        }
        if let Some(first) = simplified.left_out.get(NAMED) {
            let more = simplified.left_out.len() - NAMED;
            let each = first.change.map_or_else(String::new, |change| {
                format!(
                    ", each at most {} dB, {}°",
                    rounded(bound(change.db), 2, self.medium()),
                    rounded(bound(change.deg), 2, self.medium())
                )
            });
            fact("", format!("and {more} more{each}"));
        }
        fact("exact form", evidence(&entry.evidence));
    }

    fn length(&self) -> String {
        let simplified = self.answer.simplified;
        let symbols = if length(&simplified.formula) == 1 { "symbol" } else { "symbols" };
        let terms = if simplified.terms_after == 1 { "term" } else { "terms" };
        if simplified.is_exact {
            return format!(
                "{} {symbols}: nothing shorter was found within the goal, this is the exact formula",
                length(&simplified.formula)
            );
        }
        format!(
            "{} {symbols}, {} {terms}; the exact function has {} different symbols and {} terms",
            length(&simplified.formula),
            simplified.terms_after,
            simplified.symbols_before,
            simplified.terms_before
        )
    }

    fn figure(&self, figure: &Figure) -> String {
        let names = self.answer.names();
        let formula = self.style.screen.one_line(&figure.formula, &names);
        let medium = self.medium();
        let show = |value: f64| match figure_hertz(figure.kind, value) {
            Some(hertz) => self.hertz(hertz),
            None => quantity(value, &self.answer.entry.unit.to_string(), 4, medium),
        };
        let what = match figure.kind {
            FigureKind::DcGain => "",
            FigureKind::Zero(_, true) => " rad/s, right half plane",
            FigureKind::PolePair(_) | FigureKind::ZeroPair(_) => " (rad/s)², the pair lies",
            _ => " rad/s",
        };
        let what = if medium == Medium::Ascii { what.replace('²', "^2") } else { what.to_owned() };
        let joint = if what.ends_with("lies") { " at " } else { " = " };
        let exact = match figure.exact {
            Some(exact) => format!("; exactly {}", show(exact)),
            None => String::new(),
        };
        let value = show(figure.value);
        if figure.formula.symbols() > LONGEST {
            return format!("{value}{exact}");
        }
        let value = if value == formula { String::new() } else { format!("{joint}{value}") };
        format!("{formula}{what}{value}{exact}")
    }

    fn left(&self, left: &LeftOut) -> String {
        let name = self.answer.symbol(left.symbol);
        let went = match (left.how, self.answer.went(left.how)) {
            (Left::Equal(_), Some(other)) => format!("{name} taken as {other}"),
            (_, Some(limit)) => format!("{name} → {limit}"),
            (_, None) => return format!("{name}: only in terms that are small or cancel together"),
        };
        match &left.change {
            Some(change) => format!("{went}: {}", self.worst(change)),
            None => went,
        }
    }
}

fn goal(goal: &Goal) -> String {
    let mut parts = Vec::new();
    if goal.magnitude_db.is_finite() {
        parts.push(format!("{} dB", goal.magnitude_db));
    }
    if goal.phase_deg.is_finite() {
        parts.push(format!("{}°", goal.phase_deg));
    }
    if let Some(part) = goal.roots {
        parts.push(format!("{} % of poles and zeros", percent(part)));
    }
    if let Some(part) = goal.coefficients {
        parts.push(format!("{} % of coefficients", percent(part)));
    }
    parts.join(", ")
}

fn percent(part: f64) -> String {
    rounded(part * 100.0, 4, Medium::Ascii)
}
