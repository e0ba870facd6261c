//! One answer: formula, symbols, numbers, roots, curves, evidence.

use std::collections::BTreeSet;

use num_rational::BigRational;
use num_traits::{One, Zero};

use super::document::{Block, Blocks, Inline, code, text};
use super::{Material, claims, roots, words};
use crate::algebra::Var;
use crate::analysis::response::{Corner, Curves, Excitation, TimeCurve};
use crate::analysis::{ClosedForm, Entry, Numbers, NumericForm, Survey};
use crate::circuit::{Ask, Question, Symbol, Unit};
use crate::elimination::symbol_of;
use crate::typeset::answer::response::{View, closed_form, label, plot, time_plot, time_unit};
use crate::typeset::answer::{asymptotes, evidence, lettering_of, names, written};
use crate::typeset::inspect::nominal;
use crate::typeset::math::{Math, Setter, Sign};
use crate::typeset::number::{self, Medium};
use crate::typeset::shape::compact;
use crate::typeset::{Formula, Letter, SymbolTable};

/// Symbols side by side on a page.
const WIDTH: usize = 30;
/// Symbols that a `where` lists; more are left to the tables of the circuit.
const MOST_LISTED: usize = 24;
/// Digits of coefficients.
const DIGITS: u32 = 5;

/// A result with everything around it.
pub(super) fn write(blocks: &mut Blocks, material: &Material<'_>, ask: &Ask, survey: &Survey) {
    let entry = &survey.entry;
    let names = names(entry);
    let setter = Setter { names: &names, width: WIDTH };
    let left = Math::result(&entry.name, entry.source.as_deref(), entry.noise.is_some());
    let query = match &entry.source {
        Some(source) => format!("{} / {source}", entry.query),
        None => entry.query.clone(),
    };
    blocks.heading(1, vec![Inline::Math(left.clone()), text(", "), code(query)]);
    formula(blocks, material, entry, setter, &left);
    where_list(blocks, material, entry, &names);
    numeric(blocks, entry, setter, &left);
    ends(blocks, entry, setter, &left);
    noise(blocks, entry, setter, &left);
    claims::write(blocks, material, entry);
    match &survey.numbers {
        Err(error) => blocks.paragraph(vec![
            text("No roots and no curves: "),
            text(error.to_string()),
            text("."),
        ]),
        Ok(numbers) => {
            if let Some(report) = &numbers.roots {
                roots::write(blocks, material.circuit, entry, report);
            }
            curves(blocks, ask, entry, numbers);
        }
    }
    checked(blocks, entry);
}

/// The sum over the sources.
pub(super) fn superposition(blocks: &mut Blocks, ask: &Ask, surveys: &[Survey]) {
    if !ask.is_superposition() {
        return;
    }
    let mut parts = vec![Math::text(&ask.text), Math::sign(Sign::Equal)];
    for (index, survey) in surveys.iter().enumerate() {
        let entry = &survey.entry;
        let Some(source) = &entry.source else { continue };
        if index > 0 {
            parts.push(Math {
                latex: " + ".to_owned(),
                mathml: "<mo>+</mo>".to_owned(),
                plain: " + ".to_owned(),
            });
        }
        let share = Math::result(&entry.name, Some(source), false);
        let times = Math {
            latex: " \\cdot ".to_owned(),
            mathml: "<mo>·</mo>".to_owned(),
            plain: "*".to_owned(),
        };
        parts.extend([share, times, Math::name(source)]);
    }
    blocks.paragraph(vec![text("All sources together:")]);
    blocks.equation(Math::row(parts));
}

fn formula(
    blocks: &mut Blocks,
    material: &Material<'_>,
    entry: &Entry,
    setter: Setter<'_>,
    left: &Math,
) {
    let written = written(entry, material.shape);
    blocks.equation(setter.equation(left, &written.formula));
    let mut said = match words::unit(entry.unit).as_str() {
        "" => vec![text("The value is a plain number.")],
        unit => vec![text(format!("The value is in {unit}."))],
    };
    if !entry.limits.is_empty() {
        said.push(text(format!(" Limits taken: {}.", entry.limits.join(", "))));
    }
    if let ClosedForm::Nested(_) = entry.form {
        let count = entry.length.terms.to_string();
        let about = if entry.length.exact { "" } else { "at most " };
        let size = match count.len() {
            ..=12 => count,
            length => {
                format!("{}.{}·10{}", &count[..1], &count[1..3], number::superscript(length - 1))
            }
        };
        said.push(text(format!(
            " Expanded it would have {about}{size} terms; it is written with named sub-expressions instead."
        )));
    }
    blocks.paragraph(said);
    if !written.definitions.is_empty() {
        blocks.heading(2, vec![text("Sub-expressions of "), Inline::Math(left.clone())]);
        for (definition, index) in written.definitions.iter().zip(0_u32..) {
            let name = setter.letter(Letter::Definition(index));
            blocks.equation(setter.equation(&name, definition));
        }
    }
    let lines = roots::section_lines(&written.sections, setter);
    blocks.list(lines.into_iter().map(|line| vec![line]).collect());
}

/// Every symbol of the formula with what it is.
fn where_list(blocks: &mut Blocks, material: &Material<'_>, entry: &Entry, names: &SymbolTable) {
    let used: BTreeSet<Var> = match (&entry.form, &entry.elimination) {
        (ClosedForm::Expanded(fraction), _) => {
            fraction.numerator().variables().chain(fraction.denominator().variables()).collect()
        }
        (ClosedForm::Nested(_), Some(elimination)) => {
            elimination.variables().iter().copied().collect()
        }
        (ClosedForm::Nested(_), None) => BTreeSet::new(),
    };
    let holds_variable = used.contains(&Var::S);
    let symbols: Vec<(u32, &Symbol)> = used
        .into_iter()
        .filter_map(symbol_of)
        .filter_map(|id| Some((id.0, entry.symbols.get(id.0 as usize)?)))
        .collect();
    if symbols.len() > MOST_LISTED {
        let count = symbols.len();
        blocks.paragraph(vec![text(format!(
            "The {count} symbols are those of the tables of the circuit; s is the complex frequency, jω on \
             the frequency axis."
        ))]);
        return;
    }
    let setter = Setter { names, width: 1 };
    let mut items: Vec<Vec<Inline>> = Vec::new();
    for (index, symbol) in symbols {
        let mut item = vec![Inline::Math(setter.letter(Letter::Symbol(index)))];
        let what = material.circuit.element(&symbol.name).map(|id| {
            let element = &material.circuit[id];
            let [from, to] = [element.plus, element.minus].map(|id| &material.circuit[id].name);
            let class = crate::typeset::inspect::class_word(element.class);
            format!(": {class} from {from} to {to}")
        });
        item.push(text(what.unwrap_or_else(|| ": parameter".to_owned())));
        match nominal(symbol, Medium::Unicode) {
            Some(quantity) => item.push(text(format!(", {quantity}"))),
            None if symbol.unit == Unit::ONE => item.push(text(", without a number")),
            None => item.push(text(format!(", in {}, without a number", symbol.unit))),
        }
        if let Some(tolerance) = &symbol.tolerance {
            item.push(text(format!(" {}", words::tolerance(tolerance))));
        }
        items.push(item);
    }
    if holds_variable {
        let (letter, what) = match entry.noise {
            Some(_) => (Letter::Frequency, ": frequency in hertz"),
            None => (Letter::S, ": complex frequency, jω on the frequency axis"),
        };
        items.push(vec![Inline::Math(setter.letter(letter)), text(what)]);
    }
    if !items.is_empty() {
        blocks.paragraph(vec![text("where")]);
        blocks.list(items);
    }
}

/// The formula with numbers put in.
fn numeric(blocks: &mut Blocks, entry: &Entry, setter: Setter<'_>, left: &Math) {
    let Some(NumericForm { numerator, denominator }) = &entry.numeric else { return };
    let polynomial = |coefficients: &[BigRational]| {
        let terms = coefficients.iter().zip(0_i32..).filter(|(c, _)| !c.is_zero());
        Formula::sum(terms.map(|(coefficient, power)| {
            let rounded = Formula::number(number::round(coefficient, DIGITS));
            Formula::product([rounded, Formula::power(Formula::s(), power)])
        }))
    };
    let below = polynomial(denominator);
    let whole = if denominator.len() == 1 && denominator[0].is_one() {
        polynomial(numerator)
    } else {
        Formula::quotient(polynomial(numerator), below)
    };
    let unit = if entry.noise.is_some() { "with f in hertz" } else { "with s in 1/s" };
    let tail = match words::unit(entry.unit).as_str() {
        "" => format!("With numbers, {unit}, to {DIGITS} digits:"),
        value => format!("With numbers, in {value}, {unit}, to {DIGITS} digits:"),
    };
    blocks.paragraph(vec![text(tail)]);
    blocks.equation(setter.equation(left, &whole));
}

/// Behaviour at the ends of the frequency axis.
fn ends(blocks: &mut Blocks, entry: &Entry, setter: Setter<'_>, left: &Math) {
    let ClosedForm::Expanded(fraction) = &entry.form else { return };
    let degree = fraction.numerator().degree(Var::S).max(fraction.denominator().degree(Var::S));
    if degree == 0 || entry.noise.is_some() {
        return;
    }
    let Some(ends) = asymptotes(&entry.form, lettering_of(&entry.symbols)) else { return };
    let said = ["Towards dc:", "Towards infinite frequency:"];
    for (words, end) in said.into_iter().zip(ends) {
        let power = Formula::power(Formula::s(), end.power.clamp(-1000, 1000) as i32);
        let whole = Formula::product([end.factor, power]);
        let formula = setter.formula(&whole);
        blocks.paragraph(vec![text(words)]);
        blocks.equation(Math::row([left.clone(), Math::sign(Sign::Approximately), formula]));
    }
}

/// Shares and totals of a noise density.
fn noise(blocks: &mut Blocks, entry: &Entry, setter: Setter<'_>, left: &Math) {
    let Some(noise) = &entry.noise else { return };
    let letters = lettering_of(&entry.symbols);
    blocks.paragraph(vec![text("Shares of the noisy elements:")]);
    for share in &noise.contributors {
        let name = Math::result(&entry.name, Some(&share.element), true);
        blocks.equation(setter.equation(&name, &compact(&share.density, letters)));
    }
    if let Some(total) = &noise.total {
        let integral = Math {
            latex: format!("\\int_0^\\infty {}\\,\\mathrm{{d}}f", left.latex),
            mathml: format!(
                "<mrow><msubsup><mo>∫</mo><mn>0</mn><mo>∞</mo></msubsup>{}<mspace \
                 width=\"0.17em\"></mspace><mi mathvariant=\"normal\">d</mi><mi>f</mi></mrow>",
                left.mathml
            ),
            plain: format!("integral of {} over all frequencies", left.plain),
        };
        blocks.equation(setter.equation(&integral, &compact(&total.square, letters)));
        if let Some(rms) = total.rms {
            let rms = words::quantity(rms, "V", 4);
            blocks.paragraph(vec![text(format!("Over all frequencies that is {rms} rms."))]);
        }
    }
    if let Some(band) = &noise.band {
        blocks.paragraph(vec![text(format!(
            "From {} to {} it is {} rms.",
            words::quantity(band.from_hz, "Hz", 4),
            words::quantity(band.to_hz, "Hz", 4),
            words::quantity(band.rms, "V", 4)
        ))]);
    }
}

/// The plots.
fn curves(blocks: &mut Blocks, ask: &Ask, entry: &Entry, numbers: &Numbers) {
    let Numbers { response, band, curves, step, .. } = numbers;
    if response.is_constant() {
        blocks.paragraph(vec![text(
            "It is the same at every frequency, so there is nothing to plot.",
        )]);
        return;
    }
    let name = label(entry);
    blocks.heading(2, vec![text(format!("Curves of {name}"))]);
    let draw = |view| plot(view, entry, response, *band, curves);
    blocks.figure(
        &format!("{name}-frequency"),
        draw(View::Bode),
        vec![text(over_frequency(entry, numbers))],
    );
    if matches!(ask.question, Question::ReturnRatio(_)) {
        let caption = format!("Nyquist plot of {name}, with the point −1.");
        blocks.figure(&format!("{name}-nyquist"), draw(View::Nyquist), vec![text(caption)]);
    }
    match step {
        None => {}
        Some(Err(error)) => {
            blocks.paragraph(vec![text(format!("No closed form over time: {error}."))]);
        }
        Some(Ok(curve)) => over_time(blocks, ask, entry, curve),
    }
}

fn over_frequency(entry: &Entry, numbers: &Numbers) -> String {
    let mut said = format!("{} over the frequency at the nominal values", label(entry));
    if let Curves { envelope: Some(envelope), .. } = &numbers.curves {
        said.push_str(&format!(
            ", and the outermost of {} circuits with values drawn evenly within their tolerances (seed {})",
            envelope.trials, envelope.seed
        ));
    }
    said.push('.');
    let corners = numbers.response.transfer().map(|function| function.corners());
    let corners = corners.unwrap_or_default();
    for (words, poles) in [("down", true), ("up", false)] {
        let inside = |corner: &&Corner| {
            corner.is_pole == poles && (numbers.band[0]..=numbers.band[1]).contains(&corner.hz)
        };
        let one = |corner: &Corner| {
            let hz = words::quantity(corner.hz, "Hz", 4);
            if corner.order == 1 { hz } else { format!("{hz} ({} roots)", corner.order) }
        };
        let listed: Vec<String> = corners.iter().filter(inside).map(one).collect();
        if !listed.is_empty() {
            said.push_str(&format!(" The asymptote bends {words} at {}.", listed.join(", ")));
        }
    }
    said
}

fn over_time(blocks: &mut Blocks, ask: &Ask, entry: &Entry, curve: &TimeCurve) {
    let name = label(entry);
    let unit = time_unit(ask, entry);
    let picture = time_plot(entry, Excitation::Step, unit, curve);
    let caption = format!("Answer of {name} to a step of 1 at t = 0, everything at rest before.");
    blocks.figure(&format!("{name}-step"), picture, vec![text(caption)]);
    let form = closed_form(&curve.function, Medium::Unicode);
    blocks.paragraph(vec![text("In closed form, for t > 0: "), code(form)]);
    let weights = curve.function.impulses.iter().filter(|weight| **weight != 0.0);
    if weights.count() > 0 {
        blocks.paragraph(vec![text(
            "At t = 0 stands an impulse besides, since the function grows with the frequency.",
        )]);
    }
}

/// What the witnesses say.
fn checked(blocks: &mut Blocks, entry: &Entry) {
    blocks.heading(2, vec![text(format!("Evidence for {}", label(entry)))]);
    let mut items = vec![vec![text(evidence(&entry.evidence))]];
    items.extend(entry.checks.iter().map(|check| {
        let failed = if check.passed { "" } else { "NOT " };
        vec![text(format!("{failed}{}", check.statement))]
    }));
    if !entry.passed() {
        let words = "A witness disagrees: do not use this formula.".to_owned();
        blocks.all.push(Block::Paragraph(vec![Inline::Strong(words)]));
    }
    blocks.list(items);
}
