//! Responses as tables for a terminal.

use std::fmt::Write;

use num_rational::BigRational;

use super::{Kind, Report, closed_form, excitation_word};
use crate::analysis::response::{Corner, Curves, Excitation, Point, TimeCurve};
use crate::circuit::Unit;
use crate::typeset::answer::TextStyle;
use crate::typeset::answer::table::{Side, Table};
use crate::typeset::number::{self, Medium};

/// One result.
pub fn text(report: &Report<'_>, style: TextStyle) -> String {
    let writer = Writer { report, style };
    match &report.kind {
        Kind::Frequency(curves) => writer.frequency(curves),
        Kind::Time { excitation, height, initial, curve } => {
            writer.time(*excitation, *height, initial, curve)
        }
    }
}

struct Writer<'a> {
    report: &'a Report<'a>,
    style: TextStyle,
}

impl Writer<'_> {
    fn medium(&self) -> Medium {
        if self.style.is_ascii() { Medium::Ascii } else { Medium::Unicode }
    }

    fn quantity(&self, value: f64, unit: &str, digits: u32) -> String {
        match BigRational::from_float(value) {
            Some(exact) => number::quantity(&exact, unit, digits, self.medium()),
            None if value < 0.0 => self.signed("-inf"),
            None => "inf".to_owned(),
        }
    }

    fn signed(&self, text: &str) -> String {
        if self.style.is_ascii() { text.to_owned() } else { text.replace('-', "−") }
    }

    fn decimals(&self, value: f64, places: usize) -> String {
        let text = format!("{value:.places$}");
        let is_zero = text.trim_start_matches('-').chars().all(|c| matches!(c, '0' | '.'));
        self.signed(if is_zero { text.trim_start_matches('-') } else { &text })
    }

    fn heading(&self) -> String {
        let entry = self.report.entry;
        let limits = match entry.limits.as_slice() {
            [] => String::new(),
            limits => format!(", limit {}", limits.join(", ")),
        };
        format!("{}: {}{limits}\n\n", self.report.label(), self.report.query())
    }

    fn magnitude(&self, decades: f64) -> String {
        let unit = self.report.entry.unit;
        if unit != Unit::ONE {
            return self.quantity(libm::exp10(decades), &unit.to_string(), 5);
        }
        format!("{} dB", self.decimals(20.0 * decades, 3))
    }

    fn frequency(&self, curves: &Curves) -> String {
        let is_density = self.report.response.transfer().is_none();
        let degrees = if self.style.is_ascii() { "deg" } else { "°" };
        let mut table = Table::new([
            ("frequency", Side::Right),
            (if is_density { "density" } else { "magnitude" }, Side::Right),
            (if is_density { "root, per √Hz" } else { "phase" }, Side::Right),
            ("group delay", Side::Right),
            ("magnitude within tolerances", Side::Left),
            ("phase within tolerances", Side::Left),
        ]);
        let angle = |radian: f64| format!("{}{degrees}", self.decimals(radian.to_degrees(), 2));
        let ranges = curves.envelope.as_ref().map(|all| all.ranges.as_slice()).unwrap_or_default();
        for (index, point) in curves.points.iter().enumerate() {
            let mut row = vec![
                self.quantity(point.hz, "Hz", 5),
                self.magnitude(point.decades),
                if is_density { self.root(point) } else { angle(point.phase) },
                if is_density { String::new() } else { self.quantity(point.delay, "s", 4) },
            ];
            if let Some(range) = ranges.get(index) {
                let to = |ends: [String; 2]| ends.join(" to ");
                row.push(to(range.decades.map(|decades| self.magnitude(decades))));
                row.push(to(range.phase.map(angle)));
            }
            table.row(row);
        }
        let mut out = if self.style.quiet { String::new() } else { self.heading() };
        out.push_str(&table.lines());
        if !self.style.quiet {
            out.push_str(&self.corners());
            if let Some(envelope) = &curves.envelope {
                let _ = writeln!(
                    out,
                    "\n  tolerances: {} circuits, values evenly within their limits, seed {}",
                    envelope.trials, envelope.seed
                );
            }
        }
        out
    }

    fn root(&self, point: &Point) -> String {
        self.quantity(libm::exp10(point.decades / 2.0), "V", 5)
    }

    fn corners(&self) -> String {
        let corners = self.report.response.transfer().map(|function| function.corners());
        let corners = corners.unwrap_or_default();
        let of = |poles: bool| -> Vec<String> {
            let kept = corners.iter().filter(|corner| corner.is_pole == poles);
            let one = |corner: &Corner| {
                let hz = self.quantity(corner.hz, "Hz", 5);
                match corner.order {
                    1 => hz,
                    order => format!("{hz} ({order})"),
                }
            };
            kept.map(one).collect()
        };
        let mut out = String::new();
        for (words, list) in [("bends down at", of(true)), ("bends up at", of(false))] {
            if !list.is_empty() {
                let _ = writeln!(out, "  {words:<15}{}", list.join(", "));
            }
        }
        if out.is_empty() { out } else { format!("\n{out}") }
    }

    fn time(
        &self,
        excitation: Excitation,
        height: f64,
        initial: &[(String, f64)],
        curve: &TimeCurve,
    ) -> String {
        let unit = self.report.time_unit(excitation);
        let unit = if unit == Unit::ONE { String::new() } else { unit.to_string() };
        let mut table = Table::new([("time", Side::Right), ("value", Side::Right)]);
        for &[t, value] in &curve.points {
            table.row(vec![self.quantity(t, "s", 5), self.quantity(value, &unit, 6)]);
        }
        if self.style.quiet {
            return table.lines();
        }
        let mut out = self.heading();
        let word = excitation_word(excitation);
        let _ = write!(out, "  {word} of {} at t = 0", self.quantity(height, "", 6));
        for (element, value) in initial {
            let _ = write!(out, ", {element} = {} before it", self.quantity(*value, "", 6));
        }
        let form = closed_form(&curve.function, self.medium());
        let _ = writeln!(out, "\n  for t > 0: {form}");
        for (order, weight) in curve.function.impulses.iter().enumerate() {
            if *weight != 0.0 {
                let what = match order {
                    0 => "an impulse".to_owned(),
                    1 => "the derivative of an impulse".to_owned(),
                    order => format!("derivative {order} of an impulse"),
                };
                let weight = self.quantity(*weight, "", 6);
                let _ = writeln!(out, "  at t = 0: {what} of weight {weight}");
            }
        }
        out.push('\n');
        out.push_str(&table.lines());
        out
    }
}
