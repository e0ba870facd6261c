//! Poles and zeros as text for a terminal.

use std::fmt::Write;

use num_rational::BigRational;
use num_traits::One;

use super::{Answer, Moved, Report, label, words};
use crate::algebra::Fraction;
use crate::analysis::roots::{
    Approximation, Chance, Conditions, Form, RootFacts, Sensitivity, Shift, Spread,
};
use crate::circuit::{SymbolId, Unit};
use crate::typeset::answer::table::{Side, Table};
use crate::typeset::answer::{TextStyle, lettering};
use crate::typeset::number::{self, Medium};
use crate::typeset::screen::Characters;
use crate::typeset::{Formula, SymbolTable, View};

/// One answer.
pub fn text(answer: &Answer<'_>, style: TextStyle) -> String {
    let mut out = String::new();
    for report in answer.reports {
        if !out.is_empty() {
            out.push('\n');
        }
        let entry = report.entry;
        let query = match &entry.source {
            Some(source) => format!("{} / {source}", entry.query),
            None => entry.query.clone(),
        };
        let limits = match entry.limits.as_slice() {
            [] => String::new(),
            limits => format!(", limit {}", limits.join(", ")),
        };
        let _ = writeln!(out, "{}: {query}{limits}\n", label(entry));
        let names = answer.names();
        let writer = Writer { answer, report, names: &names, style };
        out.push_str(&writer.roots("poles", 'p', &report.roots.poles));
        out.push_str(&writer.roots("zeros", 'z', &report.roots.zeros));
        if !style.quiet {
            for part in [writer.facts(), writer.sensitivities(), writer.approximations()] {
                if !part.is_empty() {
                    let _ = write!(out, "\n{part}");
                }
            }
        }
        if let Some(chance) = &report.chance {
            let _ = write!(out, "\n{}", writer.chance(chance));
        }
        if let Some(moved) = &report.moved {
            let _ = write!(out, "\n{}", writer.moved(moved));
        }
    }
    out
}

struct Writer<'a> {
    answer: &'a Answer<'a>,
    report: &'a Report<'a>,
    names: &'a SymbolTable,
    style: TextStyle,
}

/// Significant digits of a root.
const DIGITS: u32 = 5;

/// A line of the report: a single root, or a pair by its upper one.
struct Line<'a> {
    name: String,
    index: usize,
    facts: &'a RootFacts,
}

/// A quantity, its relative sensitivities, and its shift by the tolerances.
type Row = (String, Vec<(SymbolId, f64)>, Option<Shift>);

/// The lines of a list of roots.
fn lines(letter: char, roots: &[RootFacts]) -> Vec<Line<'_>> {
    let mut lines = Vec::new();
    let mut number = 1;
    for (index, facts) in roots.iter().enumerate() {
        let count = facts.root.multiplicity as usize;
        let last = if facts.root.is_real() { number + count - 1 } else { number + 2 * count - 1 };
        if facts.root.value.im >= 0.0 {
            let name = match last - number {
                0 => format!("{letter}{number}"),
                1 => format!("{letter}{number}, {letter}{last}"),
                _ => format!("{letter}{number} … {letter}{last}"),
            };
            lines.push(Line { name, index, facts });
            number = last + 1;
        }
    }
    lines
}

impl Writer<'_> {
    fn is_ascii(&self) -> bool {
        self.style.screen.characters == Characters::Ascii
    }

    fn medium(&self) -> Medium {
        if self.is_ascii() { Medium::Ascii } else { Medium::Unicode }
    }

    fn quantity(&self, value: f64, unit: &str, digits: u32) -> String {
        match BigRational::from_float(value) {
            Some(exact) => number::quantity(&exact, unit, digits, self.medium()),
            None => value.to_string(),
        }
    }

    fn rounded(&self, value: f64, digits: u32) -> String {
        match BigRational::from_float(value) {
            Some(exact) => number::rounded(&exact, digits, self.medium()),
            None => value.to_string(),
        }
    }

    fn percent(&self, part: f64) -> String {
        format!("{} %", self.rounded(100.0 * part, 2))
    }

    /// With a fixed number of decimals, for columns.
    fn decimals(&self, value: f64) -> String {
        let text = format!("{value:.3}");
        let text = if text == "-0.000" { "0.000".to_owned() } else { text };
        if self.is_ascii() { text } else { text.replace('-', "−") }
    }

    /// The name of a symbol as the screen shows it.
    fn symbol(&self, id: SymbolId) -> String {
        self.style.screen.one_line(&Formula::symbol(id.0), self.names)
    }

    fn symbols(&self, all: &[SymbolId]) -> String {
        all.iter().map(|&id| self.symbol(id)).collect::<Vec<_>>().join(", ")
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
            ("set by", Side::Left),
        ]);
        for Line { name, facts, .. } in lines(letter, roots) {
            let root = &facts.root;
            let name = if self.is_ascii() { name.replace('…', "...") } else { name };
            table.row(vec![
                name,
                self.quantity(root.value.norm() / std::f64::consts::TAU, "Hz", DIGITS),
                root.q().map(|q| self.rounded(q, DIGITS)).unwrap_or_default(),
                self.value(root.value.re, root.value.im),
                if root.value.re == 0.0 {
                    String::new()
                } else {
                    self.quantity(1.0 / root.value.re.abs(), "s", 4)
                },
                self.symbols(&facts.set_by),
            ]);
        }
        table.lines()
    }

    /// `−100`, `−100 ± j·2000`.
    fn value(&self, re: f64, im: f64) -> String {
        let (plus_minus, j) = if self.is_ascii() { ("+/-", "j*") } else { ("±", "j·") };
        let rounded = |value: f64| self.rounded(value, DIGITS);
        match (re == 0.0, im == 0.0) {
            (_, true) => rounded(re),
            (true, false) => format!("{plus_minus} {j}{}", rounded(im.abs())),
            (false, false) => format!("{} {plus_minus} {j}{}", rounded(re), rounded(im.abs())),
        }
    }

    /// Stability, gain, edge, what has cancelled.
    fn facts(&self) -> String {
        let roots = &self.report.roots;
        let mut out = String::new();
        let _ = write!(out, "  {}", words::verdict(roots.verdict, roots.poles.len()));
        match &roots.conditions {
            Some(conditions) if !roots.poles.is_empty() => {
                match (words::plain_conditions(conditions), conditions) {
                    (Some(words), _) => {
                        let _ = writeln!(out, "; {words}");
                    }
                    (None, Conditions::AllPositive(all)) => {
                        let letters = lettering(self.answer.circuit);
                        let _ = writeln!(out, "; all are there when");
                        for polynomial in all {
                            let [large, small] = words::inequality(polynomial, letters);
                            let _ =
                                writeln!(out, "    {} > {}", self.line(&large), self.line(&small));
                        }
                    }
                    (None, _) => out.push('\n'),
                }
            }
            _ => out.push('\n'),
        }
        let unit = self.unit();
        if let Some(gain) = &roots.dc_gain {
            let _ = writeln!(out, "  gain at dc {}", self.quantity(gain.value, &unit, DIGITS));
        }
        if let Some(edge) = &roots.band_edge {
            let against = if edge.from_dc { "dc" } else { "high frequencies" };
            let minus = if self.is_ascii() { '-' } else { '−' };
            let hz = self.quantity(edge.hz, "Hz", DIGITS);
            let _ = writeln!(out, "  {minus}3 dB against {against} at {hz}");
        }
        for cancelled in &roots.cancelled {
            let value = cancelled.root.value;
            let _ = writeln!(
                out,
                "  a pole and a zero at {} 1/s cancel at these values only{}",
                self.value(value.re, value.im),
                match cancelled.separating.as_slice() {
                    [] => String::new(),
                    all => format!("; a change of {} separates them", self.symbols(all)),
                }
            );
        }
        out
    }

    fn unit(&self) -> String {
        let unit = self.report.entry.unit;
        if unit == Unit::ONE { String::new() } else { unit.to_string() }
    }

    fn line(&self, formula: &Formula) -> String {
        self.style.screen.one_line(formula, self.names)
    }

    /// A table of relative sensitivities and what the tolerances do.
    fn sensitivities(&self) -> String {
        let roots = &self.report.roots;
        let mut rows: Vec<Row> = Vec::new();
        for (letter, list) in [('p', &roots.poles), ('z', &roots.zeros)] {
            for Line { name, facts, .. } in lines(letter, list) {
                let Some(all) = &facts.sensitivities else { continue };
                let of = |part: &dyn Fn(&Sensitivity) -> f64| {
                    all.iter().map(|one| (one.symbol, part(one))).collect::<Vec<_>>()
                };
                rows.push((name.clone(), of(&|one| one.value.re), facts.shift));
                if facts.root.q().is_some() {
                    let q = of(&|one| facts.q_sensitivity(one).unwrap_or(0.0));
                    rows.push((format!("  Q of {name}"), q, facts.q_shift));
                }
            }
        }
        let real = |all: &Option<Vec<Sensitivity>>| {
            let all = all.as_ref()?;
            Some(all.iter().map(|one| (one.symbol, one.value.re)).collect::<Vec<_>>())
        };
        if let Some(all) = roots.dc_gain.as_ref().and_then(|gain| real(&gain.sensitivities)) {
            rows.push(("gain at dc".to_owned(), all, None));
        }
        if let Some(all) = roots.band_edge.as_ref().and_then(|edge| real(&edge.sensitivities)) {
            rows.push((
                "-3 dB edge".replace('-', if self.is_ascii() { "-" } else { "−" }),
                all,
                None,
            ));
        }
        // A gain that is a plain number depends on nothing.
        rows.retain(|row| row.1.iter().any(|(_, value)| value.abs() >= 5e-4));
        let shown = self.shown(&rows);
        if rows.is_empty() || shown.is_empty() {
            return String::new();
        }
        let headings: Vec<String> = shown.iter().map(|&id| self.symbol(id)).collect();
        let mut columns = vec![("change in % for 1 % of", Side::Left)];
        columns.extend(headings.iter().map(|name| (name.as_str(), Side::Right)));
        columns.extend([("tolerances: expected", Side::Right), ("worst", Side::Right)]);
        let mut table = Table::new(columns);
        for (name, values, shift) in rows {
            let mut row = vec![name];
            row.extend(shown.iter().map(|&id| {
                let found = values.iter().find(|(symbol, _)| *symbol == id);
                self.decimals(found.map_or(0.0, |(_, value)| *value))
            }));
            match shift {
                Some(shift) => {
                    row.extend([self.percent(shift.expected), self.percent(shift.worst)])
                }
                None => row.extend([String::new(), String::new()]),
            }
            table.row(row);
        }
        table.lines()
    }

    /// The symbols that matter most, as many as there is room for, in the circuit's order.
    fn shown(&self, rows: &[Row]) -> Vec<SymbolId> {
        let mut largest: Vec<(SymbolId, f64)> = Vec::new();
        for &(id, value) in rows.iter().flat_map(|row| &row.1) {
            match largest.iter_mut().find(|(other, _)| *other == id) {
                Some((_, most)) => *most = most.max(value.abs()),
                None => largest.push((id, value.abs())),
            }
        }
        largest.retain(|one| one.1 >= 5e-4);
        largest.sort_by(|a, b| b.1.total_cmp(&a.1).then(a.0.cmp(&b.0)));
        let room = (self.style.screen.width.saturating_sub(24) / 9).max(3);
        let mut shown: Vec<SymbolId> = largest.into_iter().take(room).map(|one| one.0).collect();
        shown.sort_unstable();
        shown
    }

    fn approximations(&self) -> String {
        let mut out = String::new();
        let roots = &self.report.roots;
        for (letter, list) in [('p', &roots.poles), ('z', &roots.zeros)] {
            for Line { name, facts, .. } in lines(letter, list) {
                if facts.root.value.norm() == 0.0 {
                    continue;
                }
                let _ = match &facts.approximation {
                    Some(found) => writeln!(out, "  {}", self.approximation(&name, found)),
                    None => writeln!(out, "  {name}: no short formula comes within 10 %"),
                };
            }
        }
        out
    }

    fn approximation(&self, name: &str, found: &Approximation) -> String {
        let letters = lettering(self.answer.circuit);
        let about = if self.is_ascii() { "~" } else { "≈" };
        let mut out = match &found.form {
            Form::Real(value) => {
                format!("{name} {about} {}", self.line(&words::fraction(value, letters)))
            }
            Form::Pair(pair) => {
                let [b, c] = &pair.quadratic;
                let w0 = if self.is_ascii() { "w0" } else { "ω0" };
                let w0 = format!("{name}: {w0} {about} {}", self.root_of(&pair.w0_squared));
                if b.is_zero() { w0 } else { format!("{w0}, Q {about} {}", self.quality(b, c)) }
            }
        };
        if found.relative_error < 1e-9 {
            out.push_str("   exactly");
        } else {
            let _ = write!(out, "   within {}", self.percent(found.relative_error));
        }
        let much = if self.is_ascii() { ">>" } else { "≫" };
        let conditions: Vec<String> = found
            .conditions
            .iter()
            .map(|condition| {
                let [large, small] = words::sides(condition, letters).map(|side| self.line(&side));
                format!("{large} {much} {small} (here {})", self.rounded(condition.ratio, 2))
            })
            .collect();
        if !conditions.is_empty() {
            let _ = write!(out, ", while {}", conditions.join(", "));
        }
        out
    }

    /// √(…), 1/√(…), or without a root sign where the root is a term.
    fn root_of(&self, value: &Fraction) -> String {
        let letters = lettering(self.answer.circuit);
        let (above, below) = (value.numerator(), value.denominator());
        if above.is_one() {
            return match words::exact_root(below) {
                Some(root) => format!("1/{}", self.grouped(&letters.polynomial(&root), true)),
                None => format!("1/{}", self.square_root(&letters.polynomial(below))),
            };
        }
        match (words::exact_root(above), words::exact_root(below)) {
            (Some(n), Some(d)) => {
                let quotient = Formula::quotient(letters.polynomial(&n), letters.polynomial(&d));
                self.line(&quotient)
            }
            _ => self.square_root(&words::fraction(value, letters)),
        }
    }

    /// √c/b.
    fn quality(&self, b: &Fraction, c: &Fraction) -> String {
        let letters = lettering(self.answer.circuit);
        let mut out = self.root_of(c);
        if out == "1" {
            out.clear();
        }
        if !b.denominator().is_one() {
            let factor = letters.polynomial(b.denominator());
            if !out.is_empty() {
                out.push_str(if self.is_ascii() { "*" } else { "·" });
            }
            out.push_str(&self.grouped(&factor, false));
        }
        if out.is_empty() {
            out.push('1');
        }
        if !b.numerator().is_one() {
            let below = letters.polynomial(b.numerator());
            let _ = write!(out, "/{}", self.grouped(&below, true));
        }
        out
    }

    /// In parentheses where a factor, or a divisor, needs them.
    fn grouped(&self, formula: &Formula, divisor: bool) -> String {
        let text = self.line(formula);
        match formula.view() {
            View::Letter(_) | View::Number(_) | View::Power(..) => text,
            View::Product(_) if !divisor => text,
            _ => format!("({text})"),
        }
    }

    fn square_root(&self, formula: &Formula) -> String {
        let text = self.line(formula);
        match (self.is_ascii(), formula.view()) {
            (true, _) => format!("sqrt({text})"),
            (false, View::Letter(_)) => format!("√{text}"),
            (false, View::Number(value)) if value.is_one() => "1".to_owned(),
            (false, _) => format!("√({text})"),
        }
    }

    fn chance(&self, chance: &Chance) -> String {
        let mut out = format!(
            "  {} circuits with values evenly between their limits, seed {}: {} not stable\n",
            chance.trials, chance.seed, chance.not_stable
        );
        let mut table = Table::new([
            ("of these", Side::Left),
            ("5 % below", Side::Right),
            ("middle", Side::Right),
            ("5 % above", Side::Right),
        ]);
        let roots = &self.report.roots;
        let lists = [('p', &roots.poles, &chance.poles), ('z', &roots.zeros, &chance.zeros)];
        for (letter, list, spreads) in lists {
            for Line { name, index, facts } in lines(letter, list) {
                let Some(Spread { hz, q }) = spreads.get(index) else { continue };
                if facts.root.value.norm() == 0.0 {
                    continue;
                }
                let mut row = vec![format!("frequency of {name}")];
                row.extend(hz.iter().map(|&value| self.quantity(value, "Hz", 4)));
                table.row(row);
                if let Some(q) = q {
                    let mut row = vec![format!("Q of {name}")];
                    row.extend(q.iter().map(|&value| self.rounded(value, 4)));
                    table.row(row);
                }
            }
        }
        out.push_str(&table.lines());
        out
    }

    fn moved(&self, moved: &Moved) -> String {
        let symbol = &self.answer.circuit[moved.symbol];
        let symbol_unit =
            if symbol.unit == Unit::ONE { String::new() } else { symbol.unit.to_string() };
        let unit = words::unit(moved.quantity, &self.unit());
        let shown = |value: f64| self.quantity(value, &unit, 6);
        let mut out = format!(
            "  {} = {} with {} = {}{}\n",
            words::quantity(moved.quantity),
            shown(moved.target),
            self.symbol(moved.symbol),
            self.quantity(moved.solution.value, &symbol_unit, 7),
            if moved.solution.closed_form { "   in closed form" } else { "" }
        );
        for preferred in &moved.solution.preferred {
            let reached = preferred.reached.map_or_else(|| "nothing".to_owned(), shown);
            let _ = writeln!(
                out,
                "  nearest {}: {} gives {reached}",
                preferred.series.name(),
                self.quantity(preferred.value, &symbol_unit, 3),
            );
        }
        out
    }
}
