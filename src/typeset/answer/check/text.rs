//! Verdicts as text for a terminal; colours are left to whoever prints it.

use std::fmt::Write;

use num_rational::BigRational;

use super::{Checked, names, of_frequency, words};
use crate::algebra::Fraction;
use crate::analysis::check::{Deviation, Difference, Judgement, Nearness, Right, Side, Verdict};
use crate::circuit::{Relation, Value};
use crate::typeset::SymbolTable;
use crate::typeset::answer::TextStyle;
use crate::typeset::number::{self, Medium};
use crate::typeset::shape::Lettering;

/// How a piece of text is to be marked.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Look {
    /// Right.
    Good,
    /// Right under a condition.
    Fair,
    /// Wrong.
    Bad,
    /// What belongs there.
    Missing,
    /// What does not belong there.
    Extra,
}

/// `claim 2, line 14: H = 1/(1 + s R1 C1)`
pub fn heading(checked: &Checked<'_>) -> String {
    let claim = checked.claim;
    let line = if claim.line > 0 { format!(", line {}", claim.line) } else { String::new() };
    let relation = if claim.relation == Relation::Equal { "=" } else { "~" };
    let text = claim.text.split_whitespace().collect::<Vec<_>>().join(" ");
    // A property of the first question shows which one that is.
    let owner = match claim.name.starts_with(claim.answer.as_str()) {
        true => String::new(),
        false => format!(" of {}", claim.answer),
    };
    let within = match &claim.relation {
        Relation::Equal => String::new(),
        Relation::About(within) => {
            let percent = within * BigRational::from_integer(100.into());
            format!(" within {} %", number::shortest(&percent))
        }
    };
    format!("claim {}{line}: {}{owner} {relation} {text}{within}", checked.index, claim.name)
}

/// The verdict and the reasons; `look` marks pieces of it.
pub fn text(
    checked: &Checked<'_>,
    style: TextStyle,
    look: &dyn Fn(Look, &str) -> String,
) -> String {
    let mut writer = Writer { out: String::new(), style, look };
    if let Some(error) = &checked.units {
        let [left, right] = [error.left, error.right].map(|unit| writer.unit(&unit.to_string()));
        let what = match error.before {
            Some(_) => format!("{right} is added to {left}"),
            None => format!("the whole is in {right}, the answer in {left}"),
        };
        writer.verdict(Look::Bad, "unit error", &what);
    }
    writer.judged(checked, &checked.judgement);
    writer.out
}

/// `4 claims: 2 equal, 1 equal in a limit, 1 different`
pub fn summary(verdicts: &[Verdict]) -> String {
    let count = |wanted: Verdict| verdicts.iter().filter(|&&verdict| verdict == wanted).count();
    let parts: Vec<String> = [
        (Verdict::Equal, "equal"),
        (Verdict::EqualInLimit, "equal in a limit"),
        (Verdict::Different, "different"),
        (Verdict::UnitError, "with a unit error"),
    ]
    .into_iter()
    .map(|(verdict, word)| (count(verdict), word))
    .filter(|(count, _)| *count > 0)
    .map(|(count, word)| format!("{count} {word}"))
    .collect();
    let noun = if verdicts.len() == 1 { "claim" } else { "claims" };
    format!("{} {noun}: {}", verdicts.len(), parts.join(", "))
}

/// Coefficients of a wrong claim that are shown; JSON has all.
const MOST_SHOWN: usize = 3;

/// Columns before the reasons.
const INDENT: usize = 20;

struct Writer<'a> {
    out: String,
    style: TextStyle,
    look: &'a dyn Fn(Look, &str) -> String,
}

impl Writer<'_> {
    fn verdict(&mut self, look: Look, word: &str, reason: &str) {
        let padding = " ".repeat(INDENT.saturating_sub(2 + word.len()));
        let _ = writeln!(self.out, "  {}{padding}{reason}", (self.look)(look, word));
    }

    fn fact(&mut self, title: &str, text: &str) {
        let width = INDENT - 2;
        let _ = writeln!(self.out, "  {title:<width$}{text}");
    }

    fn judged(&mut self, checked: &Checked<'_>, judgement: &Judgement) {
        let (names, letters) = names(judgement, of_frequency(checked.claim));
        match judgement.verdict {
            Verdict::Equal => {
                let reason = match &judgement.nearness {
                    Some(near) => self.near(near),
                    None if judgement.squared => {
                        "proved: the squares are the same fraction".to_owned()
                    }
                    None => "proved: the same fraction in lowest terms".to_owned(),
                };
                self.verdict(Look::Good, "equal", &reason);
            }
            Verdict::EqualInLimit => {
                let sets: Vec<String> = judgement
                    .limits
                    .iter()
                    .map(|set| {
                        let steps = set.iter().map(|step| words::step_text(checked.circuit, step));
                        steps.collect::<Vec<_>>().join(", ")
                    })
                    .collect();
                self.verdict(Look::Fair, "equal in a limit", &sets[0]);
                for set in &sets[1..] {
                    self.fact("", &format!("or {set}"));
                }
            }
            Verdict::Different => self.different(judgement, &names, letters),
            Verdict::UnitError => {}
        }
        if self.style.quiet {
            return;
        }
        if let Some(repair) = &judgement.repair {
            let text = |value: &Value| self.line(&words::formula(value, letters), &names);
            let root = checked.claim.under_root.as_ref().map(text);
            let text = |value: &Value| {
                words::with_root(text(value), value, checked.claim, root.as_deref())
            };
            let sentence = words::change(&repair.change, checked.circuit, &text);
            let formula = words::times_root(text(&repair.formula), root.as_deref());
            let steps = repair.limits.iter().map(|step| words::step_text(checked.circuit, step));
            let steps: Vec<String> = steps.collect();
            let when = match steps.is_empty() {
                true => String::new(),
                false => format!("; then it is right in the limit {}", steps.join(", ")),
            };
            self.fact("repair", &format!("{sentence}{when}"));
            self.fact("", &format!("{} = {formula}", checked.claim.name));
        }
        if let Some(right) = judgement.right.as_ref().filter(|_| checked.units.is_none()) {
            let right = self.right(right);
            self.fact("right", &right);
        }
        if let Some(deviation) =
            judgement.deviation.as_ref().filter(|_| judgement.nearness.is_none())
        {
            let worst = self.worst(deviation);
            self.fact("worst", &worst);
        }
    }

    fn different(&mut self, judgement: &Judgement, names: &SymbolTable, letters: Lettering<'_>) {
        let exact = |writer: &Self| {
            judgement.exact.as_ref().map(|exact| {
                let text = writer.fraction(exact, letters, names);
                if judgement.squared {
                    format!("exact squared: {text}")
                } else {
                    format!("exact: {text}")
                }
            })
        };
        let reason = match (&judgement.nearness, judgement.differences.first()) {
            (Some(near), _) => self.near(near),
            (None, Some(_)) => exact(self).unwrap_or_default(),
            (None, None) => "no rational function of the symbols is right".to_owned(),
        };
        self.verdict(Look::Bad, "different", &reason);
        if judgement.nearness.is_some() {
            if let Some(exact) = exact(self) {
                self.fact("", &exact);
            }
            return;
        }
        if self.style.quiet || !judgement.has_powers() {
            return;
        }
        for difference in judgement.differences.iter().take(MOST_SHOWN) {
            self.difference(difference, names, letters);
        }
        if let Some(more) = judgement.differences.len().checked_sub(MOST_SHOWN).filter(|&n| n > 0) {
            self.fact("", &format!("and {more} other coefficients"));
        }
    }

    /// One coefficient: as claimed, as it is, and the terms between them.
    fn difference(&mut self, of: &Difference, names: &SymbolTable, letters: Lettering<'_>) {
        let side = match of.side {
            Side::Numerator => "numerator",
            Side::Denominator => "denominator",
        };
        let power = match of.power {
            0 => "1".to_owned(),
            1 => "s".to_owned(),
            power => format!("s^{power}"),
        };
        let claimed = self.fraction(&of.claimed, letters, names);
        let exact = self.fraction(&of.exact, letters, names);
        self.fact(side, &format!("coefficient of {power}"));
        self.fact("  claimed", &claimed);
        self.fact("  exact", &exact);
        if let Some(factor) = of.factor() {
            let text = match factor == -BigRational::from_integer(1.into()) {
                true => "wrong sign".to_owned(),
                false => format!(
                    "too large by the factor {}",
                    number::rounded(&factor, 6, self.medium())
                ),
            };
            let marked = (self.look)(Look::Extra, &text);
            self.fact("", &marked);
            return;
        }
        for (fraction, look, sign, word) in [
            (&of.missing, Look::Missing, '+', "  missing"),
            (&of.extra, Look::Extra, '-', "  extra"),
        ] {
            if !fraction.is_zero() {
                let text = format!("{sign} {}", self.fraction(fraction, letters, names));
                let marked = (self.look)(look, &text);
                self.fact(word, &marked);
            }
        }
    }

    fn right(&self, right: &Right) -> String {
        let mut facts = Vec::new();
        if right.dc {
            facts.push("the value at dc".to_owned());
        }
        if right.high_frequency {
            facts.push("the high-frequency behaviour".to_owned());
        }
        if right.poles.0 == right.poles.1 {
            facts.push(format!("the number of poles ({})", right.poles.1));
        }
        if right.zeros.0 == right.zeros.1 {
            facts.push(format!("the number of zeros ({})", right.zeros.1));
        }
        let mut text = if facts.is_empty() { "nothing".to_owned() } else { facts.join(", ") };
        if right.poles.0 != right.poles.1 {
            let noun = if right.poles.0 == 1 { "pole" } else { "poles" };
            let verb = if right.poles.1 == 1 { "is" } else { "are" };
            let (claimed, exact) = right.poles;
            let _ = write!(text, "; the claim has {claimed} {noun}, there {verb} {exact}");
        }
        text
    }

    fn worst(&self, deviation: &Deviation) -> String {
        if let Some([claimed, exact]) = deviation.values {
            let (claimed, exact) = (self.number(claimed, 4), self.number(exact, 4));
            return format!("claimed {claimed}, exact {exact}");
        }
        let at = |hertz: Option<f64>| {
            hertz.map_or(String::new(), |hertz| format!(" at {}", self.quantity(hertz, "Hz")))
        };
        let degree = if self.style.is_ascii() { " deg" } else { "°" };
        format!(
            "{} dB{}, {}{degree}{}",
            self.number(deviation.magnitude_db, 3),
            at(deviation.magnitude_at_hz),
            self.number(deviation.phase_deg, 3),
            at(deviation.phase_at_hz)
        )
    }

    fn near(&self, near: &Nearness) -> String {
        let percent = |value: f64| format!("{} %", self.number(value * 100.0, 3));
        let at =
            near.at_hz.map_or(String::new(), |hertz| format!(" at {}", self.quantity(hertz, "Hz")));
        let sets = match near.corners {
            1 => "the nominal values".to_owned(),
            count => format!("{count} sets of values within the tolerances"),
        };
        format!(
            "off by {} at the nominal values, at most {}{at} over {sets}; {} allowed",
            percent(near.nominal),
            percent(near.worst),
            percent(near.within)
        )
    }

    fn fraction(&self, value: &Fraction, letters: Lettering<'_>, names: &SymbolTable) -> String {
        self.line(&words::fraction(value, letters), names)
    }

    fn line(&self, formula: &crate::typeset::Formula, names: &SymbolTable) -> String {
        self.style.screen.one_line(formula, names)
    }

    fn medium(&self) -> Medium {
        if self.style.is_ascii() { Medium::Ascii } else { Medium::Unicode }
    }

    fn number(&self, value: f64, digits: u32) -> String {
        match BigRational::from_float(value) {
            Some(exact) => number::rounded(&exact, digits, self.medium()),
            None if value.is_nan() => "undefined".to_owned(),
            None => "infinite".to_owned(),
        }
    }

    fn quantity(&self, value: f64, unit: &str) -> String {
        match BigRational::from_float(value) {
            Some(exact) => number::quantity(&exact, unit, 3, self.medium()),
            None => value.to_string(),
        }
    }

    fn unit(&self, unit: &str) -> String {
        match unit {
            "1" => "a plain number".to_owned(),
            _ if self.style.is_ascii() => {
                let unit = unit.replace('Ω', "Ohm").replace('·', "*");
                unit.chars().map(ascii_exponent).collect()
            }
            _ => unit.to_owned(),
        }
    }
}

/// A raised figure as a plain one.
fn ascii_exponent(character: char) -> char {
    const RAISED: [char; 10] = ['⁰', '¹', '²', '³', '⁴', '⁵', '⁶', '⁷', '⁸', '⁹'];
    match RAISED.iter().position(|&raised| raised == character) {
        Some(figure) => char::from(b'0' + figure as u8),
        None if character == '⁻' => '-',
        None => character,
    }
}
