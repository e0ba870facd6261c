//! Poles and zeros: a table, what sets each as a table of sensitivities, short formulas, the plane.

use super::document::{Blocks, Cell, Inline, Table, text};
use super::words;
use crate::algebra::{Fraction, Polynomial};
use crate::analysis::Entry;
use crate::analysis::roots::{Against, Approximation, Conditions, Form, RootFacts, RootReport};
use crate::circuit::{Circuit, SymbolId};
use crate::typeset::answer::lettering;
use crate::typeset::answer::response::label;
use crate::typeset::answer::roots::{map, words as phrases};
use crate::typeset::math::{Math, Setter, Sign};
use crate::typeset::shape::{Lettering, Section};
use crate::typeset::{Formula, Letter, SymbolTable};

/// Columns of the table of sensitivities.
const MOST_COLUMNS: usize = 10;
/// Sensitivities from which a cell is tinted, light to strong.
const HEAT: [f64; 3] = [0.05, 0.25, 0.6];

pub(super) fn write(blocks: &mut Blocks, circuit: &Circuit, entry: &Entry, report: &RootReport) {
    let name = label(entry);
    if report.poles.is_empty() && report.zeros.is_empty() {
        return;
    }
    blocks.heading(2, vec![text(format!("Poles and zeros of {name}"))]);
    let names = SymbolTable::new(circuit.symbols.iter().map(|symbol| symbol.name.as_str()));
    let setter = Setter { names: &names, width: 30 };
    let lines = [lines('p', &report.poles), lines('z', &report.zeros)].concat();
    table(blocks, &name, &lines, setter);
    facts(blocks, circuit, entry, report, setter);
    heat(blocks, &name, report, &lines, setter);
    approximations(blocks, circuit, &lines, setter);
    let caption = format!(
        "Poles (crosses) and zeros (circles) of {name} in the complex plane; a dashed circle is ω0 of a pair."
    );
    blocks.figure(&format!("{name}-roots"), map(circuit, entry, report, None), vec![text(caption)]);
}

/// A single root, or a pair by its upper one.
#[derive(Clone)]
struct Line<'a> {
    /// `p1`, or both of a pair.
    names: Vec<String>,
    facts: &'a RootFacts,
}

impl Line<'_> {
    fn cell(&self) -> Vec<Inline> {
        let mut content = Vec::new();
        for (index, name) in self.names.iter().enumerate() {
            if index > 0 {
                content.push(text(", "));
            }
            content.push(Inline::Math(Math::name(name)));
        }
        content
    }
}

fn lines(letter: char, roots: &[RootFacts]) -> Vec<Line<'_>> {
    let mut lines = Vec::new();
    let mut number = 1;
    for facts in roots.iter().filter(|facts| facts.root.value.im >= 0.0) {
        let count = facts.root.multiplicity * if facts.root.is_real() { 1 } else { 2 };
        let names = (number..number + count).map(|number| format!("{letter}{number}")).collect();
        lines.push(Line { names, facts });
        number += count;
    }
    lines
}

fn symbols(ids: &[SymbolId], setter: Setter<'_>) -> Vec<Inline> {
    const SHOWN: usize = 8;
    let mut content = Vec::new();
    for (index, id) in ids.iter().take(SHOWN).enumerate() {
        if index > 0 {
            content.push(text(", "));
        }
        content.push(Inline::Math(setter.letter(Letter::Symbol(id.0))));
    }
    if ids.len() > SHOWN {
        content.push(text(format!(" and {} more", ids.len() - SHOWN)));
    }
    content
}

fn table(blocks: &mut Blocks, name: &str, lines: &[Line<'_>], setter: Setter<'_>) {
    let rows = lines.iter().map(|line| {
        let root = &line.facts.root;
        let (re, im) = (root.value.re, root.value.im);
        let value = match (re == 0.0, im == 0.0) {
            (_, true) => words::rounded(re, 5),
            (true, false) => format!("± j·{}", words::rounded(im, 5)),
            (false, false) => format!("{} ± j·{}", words::rounded(re, 5), words::rounded(im, 5)),
        };
        let constant =
            if re == 0.0 { String::new() } else { words::quantity(1.0 / re.abs(), "s", 4) };
        vec![
            Cell::of(line.cell()),
            Cell::number(words::quantity(root.value.norm() / std::f64::consts::TAU, "Hz", 5)),
            Cell::number(root.q().map(|q| words::rounded(q, 4)).unwrap_or_default()),
            Cell::number(value),
            Cell::number(constant),
            Cell::of(symbols(&line.facts.set_by, setter)),
        ]
    });
    let head = ["root", "frequency", "Q", "value in 1/s", "time constant", "set by"];
    blocks.table(Table {
        caption: vec![text(format!("Poles (p) and zeros (z) of {name}"))],
        head: head.map(|words| vec![text(words)]).into(),
        rows: rows.collect(),
    });
}

/// Stability, gain, band edge.
fn facts(
    blocks: &mut Blocks,
    circuit: &Circuit,
    entry: &Entry,
    report: &RootReport,
    setter: Setter<'_>,
) {
    let mut items = Vec::new();
    let verdict = phrases::verdict(report.verdict, report.poles.len());
    let mut stability = vec![text(verdict)];
    match &report.conditions {
        Some(conditions) if !report.poles.is_empty() => {
            match (phrases::plain_conditions(conditions), conditions) {
                (Some(words), _) => stability.push(text(format!("; {words}"))),
                (None, Conditions::AllPositive(all)) => {
                    stability.push(text("; all are there when "));
                    for (index, polynomial) in all.iter().enumerate() {
                        if index > 0 {
                            stability.push(text(" and "));
                        }
                        let [large, small] = phrases::inequality(polynomial, lettering(circuit));
                        stability.push(Inline::Math(setter.formula(&large)));
                        stability.push(text(" > "));
                        stability.push(Inline::Math(setter.formula(&small)));
                    }
                }
                _ => {}
            }
        }
        _ => {}
    }
    items.push(stability);
    let unit = words::unit(entry.unit);
    if let Some(gain) = &report.dc_gain {
        items.push(vec![text(format!("at dc: {}", words::quantity(gain.value, &unit, 5)))]);
    }
    for edge in &report.band_edges {
        let against = match edge.against {
            Against::Dc => "dc",
            Against::Infinity => "the value at high frequency",
            Against::Peak => "the peak",
        };
        let hz = words::quantity(edge.hz, "Hz", 5);
        items.push(vec![text(format!("−3 dB against {against} at {hz}"))]);
    }
    blocks.list(items);
}

/// How a quantity moves with each symbol.
struct Row {
    name: Vec<Inline>,
    each: Vec<(SymbolId, f64)>,
}

/// The table of sensitivities: % of change for 1 % of change.
fn heat(
    blocks: &mut Blocks,
    name: &str,
    report: &RootReport,
    lines: &[Line<'_>],
    setter: Setter<'_>,
) {
    let mut rows: Vec<Row> = Vec::new();
    for line in lines {
        let Some(each) = &line.facts.sensitivities else { continue };
        let sizes = each.iter().map(|one| (one.symbol, one.value.re)).collect();
        rows.push(Row { name: line.cell(), each: sizes });
        let of_q: Vec<(SymbolId, f64)> = each
            .iter()
            .filter_map(|one| Some((one.symbol, line.facts.q_sensitivity(one)?)))
            .collect();
        if !of_q.is_empty() {
            let mut name = vec![text("Q of ")];
            name.extend(line.cell());
            rows.push(Row { name, each: of_q });
        }
    }
    let gain = report.dc_gain.as_ref().and_then(|gain| gain.sensitivities.as_ref());
    let edges = report.band_edges.iter().map(|edge| {
        let words = match (report.band_edges.len(), edge.against) {
            (1, _) => "−3 dB edge".to_owned(),
            _ => format!("−3 dB edge at {}", words::quantity(edge.hz, "Hz", 3)),
        };
        (words, edge.sensitivities.as_ref())
    });
    for (words, list) in std::iter::once(("value at dc".to_owned(), gain)).chain(edges) {
        if let Some(list) = list {
            let each: Vec<(SymbolId, f64)> =
                list.iter().map(|one| (one.symbol, one.value.re)).collect();
            rows.push(Row { name: vec![text(words)], each });
        }
    }
    let (columns, left_out) = columns(&rows);
    if columns.is_empty() {
        return;
    }
    let cells = rows.into_iter().map(|row| {
        let mut cells = vec![Cell::of(row.name)];
        cells.extend(columns.iter().map(|column| {
            let found = row.each.iter().find(|(symbol, _)| symbol == column);
            let value = found.map_or(0.0, |(_, value)| *value);
            let level = HEAT.iter().filter(|least| value.abs() >= **least).count() as i8;
            Cell {
                heat: if value < 0.0 { -level } else { level },
                ..Cell::number(words::decimals(value, 3))
            }
        }));
        cells
    });
    let mut head = vec![vec![text("change in % for 1 % of")]];
    head.extend(columns.iter().map(|id| vec![Inline::Math(setter.letter(Letter::Symbol(id.0)))]));
    let mut caption = format!(
        "What moves the roots of {name}: the stronger the tint, the stronger the effect; blue is \
         downwards (−), orange upwards."
    );
    if left_out > 0 {
        caption.push_str(&format!(" {left_out} symbols with less effect are left out."));
    }
    blocks.table(Table { caption: vec![text(caption)], head, rows: cells.collect() });
}

/// The symbols with the largest sensitivities in the order of the circuit, and how many are left out.
fn columns(rows: &[Row]) -> (Vec<SymbolId>, usize) {
    let mut largest: Vec<(SymbolId, f64)> = Vec::new();
    for &(symbol, value) in rows.iter().flat_map(|row| &row.each) {
        match largest.iter_mut().find(|(other, _)| *other == symbol) {
            Some((_, size)) => *size = size.max(value.abs()),
            None => largest.push((symbol, value.abs())),
        }
    }
    largest.retain(|(_, size)| *size > 1e-12);
    let all = largest.len();
    largest.sort_by(|a, b| b.1.total_cmp(&a.1).then(a.0.cmp(&b.0)));
    largest.truncate(MOST_COLUMNS);
    let mut columns: Vec<SymbolId> = largest.into_iter().map(|(symbol, _)| symbol).collect();
    columns.sort_unstable();
    let left_out = all - columns.len();
    (columns, left_out)
}

fn approximations(blocks: &mut Blocks, circuit: &Circuit, lines: &[Line<'_>], setter: Setter<'_>) {
    let found = |line: &Line<'_>| line.facts.approximation.is_some();
    if !lines.iter().any(found) {
        return;
    }
    blocks.paragraph(vec![text("Short formulas:")]);
    for line in lines {
        if let Some(approximation) = &line.facts.approximation {
            approximated(blocks, lettering(circuit), &line.names[0], approximation, setter);
        }
    }
}

fn approximated(
    blocks: &mut Blocks,
    letters: Lettering<'_>,
    name: &str,
    found: &Approximation,
    setter: Setter<'_>,
) {
    let exact = found.relative_error < 1e-12;
    let relation = Math::sign(if exact { Sign::Equal } else { Sign::Approximately });
    let polynomial = |polynomial: &Polynomial| setter.formula(&letters.polynomial(polynomial));
    let math = match &found.form {
        Form::Real(value) => Math::row([
            Math::name(name),
            relation,
            setter.formula(&phrases::fraction(value, letters)),
        ]),
        Form::Pair(pair) => {
            let mut parts = vec![
                Math::name("omega0"),
                relation.clone(),
                square_root(&pair.w0_squared, &polynomial),
            ];
            if let Some(q_squared) = &pair.q_squared {
                parts.extend([
                    Math::sign(Sign::Comma),
                    Math::name("Q"),
                    relation,
                    square_root(q_squared, &polynomial),
                ]);
            }
            Math::row([vec![Math::name(name), Math::sign(Sign::Colon)], parts].concat())
        }
    };
    blocks.equation(math);
    if exact && found.conditions.is_empty() {
        return;
    }
    let error = words::rounded(100.0 * found.relative_error, 2);
    let mut said = vec![text(format!("within {error} % at the nominal values"))];
    for (index, condition) in found.conditions.iter().enumerate() {
        said.push(text(if index == 0 { ", while " } else { ", " }));
        let [large, small] = phrases::sides(condition, letters);
        said.push(Inline::Math(Math::row([
            setter.formula(&large),
            Math::sign(Sign::MuchGreater),
            setter.formula(&small),
        ])));
    }
    said.push(text("."));
    blocks.paragraph(said);
}

/// √(above/below), without a root sign where both are squares.
fn square_root(value: &Fraction, print: &impl Fn(&Polynomial) -> Math) -> Math {
    let roots = (phrases::exact_root(value.numerator()), phrases::exact_root(value.denominator()));
    match roots {
        (Some(above), Some(below)) if below.is_one() => print(&above),
        (Some(above), Some(below)) => print(&above).over(print(&below)),
        _ if value.denominator().is_one() => print(value.numerator()).root(),
        _ => print(value.numerator()).over(print(value.denominator())).root(),
    }
}

/// The quantities of the shape `sections`, one line each.
pub(super) fn section_lines(sections: &[Section], setter: Setter<'_>) -> Vec<Inline> {
    let one = |section: &Section| {
        let kind = if section.poles { "poles" } else { "zeros" };
        let title = match section.order {
            0 => "constant: ".to_owned(),
            order => format!("{kind}, order {order}: "),
        };
        let mut parts = vec![Math::text(title.trim_end_matches(": ")), Math::sign(Sign::Colon)];
        for (index, quantity) in section.quantities.iter().enumerate() {
            if index > 0 {
                parts.push(Math::sign(Sign::Comma));
            }
            let name = match quantity.name {
                "gain" => "K",
                "w" => "omega",
                "w0" => "omega0",
                name => name,
            };
            let factor = |formula: &Formula| setter.formula(formula);
            let value = match &quantity.radicand {
                None => factor(&quantity.factor),
                Some(radicand) if quantity.factor.is_one() => factor(radicand).root(),
                Some(radicand) => Math::row([factor(&quantity.factor), factor(radicand).root()]),
            };
            parts.extend([Math::name(name), Math::sign(Sign::Equal), value]);
        }
        if section.quantities.is_empty() {
            parts.push(Math::text("no closed form, for it does not factor"));
        }
        Inline::Math(Math::row(parts))
    };
    sections.iter().map(one).collect()
}
