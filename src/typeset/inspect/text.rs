//! The listing as text: one table after the other, every cell aligned, long cells folded.

use std::fmt::Write;

use unicode_width::UnicodeWidthStr;

use super::json::{Graph, Inspect};
use super::words::kind;
use super::{Values, listing, nominal};
use crate::circuit::{Circuit, Element, Law, NodeId, Symbol, SymbolRole};
use crate::typeset::number::{Medium, quantity};
use crate::typeset::screen::{Characters, Screen};

/// The whole listing.
pub fn text(circuit: &Circuit, screen: Screen) -> String {
    let ascii = screen.characters == Characters::Ascii;
    let medium = if ascii { Medium::Ascii } else { Medium::Unicode };
    let listed = listing(circuit, Vec::new());
    let values = Values::new(circuit);
    let mut page = Page { out: String::new(), width: screen.width, ascii };
    if let Some(title) = &circuit.title {
        page.line(title);
    }
    let nodes = listed.nodes.iter().map(|node| {
        let aliases = if node.aliases.is_empty() {
            String::new()
        } else {
            format!("also {}", node.aliases.join(", "))
        };
        vec![node.name.clone(), aliases, node.elements.join(", ")]
    });
    page.table("nodes", nodes.collect());
    page.table("elements", elements(circuit, &values, medium));
    page.table("parameters", parameters(circuit, medium));
    let definitions = listed
        .definitions
        .iter()
        .map(|definition| vec![definition.name.clone(), format!("= {}", definition.expression)]);
    page.table("stands for", definitions.collect());
    let groups =
        listed.groups.iter().map(|group| vec![group.name.clone(), group.elements.join(", ")]);
    page.table("devices and blocks", groups.collect());
    let asks = listed
        .asks
        .iter()
        .map(|ask| vec![ask.name.clone(), ask.kind.to_owned(), ask.query.clone()]);
    page.table("asks", asks.collect());
    let claims = listed.claims.iter().map(|claim| vec![claim.name.clone(), claim.formula.clone()]);
    page.table("claims", claims.collect());
    page.table("limits", listed.limits.iter().map(|limit| vec![limit.clone()]).collect());
    if let Some(band) = &circuit.band {
        let hertz = |value| quantity(value, "Hz", 6, medium);
        page.table("band", vec![vec![format!("{} to {}", hertz(&band.from), hertz(&band.to))]]);
    }
    page.table("noise", noise(circuit, &listed, medium));
    page.table("graph", graph(&listed.graph));
    page.out
}

fn elements(circuit: &Circuit, values: &Values<'_>, medium: Medium) -> Vec<Vec<String>> {
    let row = |element: &Element| {
        let name = |node: NodeId| circuit[node].name.clone();
        let ends = match &element.law {
            Law::Mutual { first, second, .. } => {
                format!("{}, {}", circuit[*first].name, circuit[*second].name)
            }
            _ => format!("{} > {}", name(element.plus), name(element.minus)),
        };
        let mut value = values.own(element).map(|own| format!("= {own}"));
        if value.is_none() {
            value = values.symbol(element).and_then(|symbol| measured(symbol, medium));
        }
        let beside = match element.law {
            Law::Nullor(a, b) => Some(format!("senses V({}, {})", name(a), name(b))),
            Law::Transformer { secondary: (a, b), .. } => {
                Some(format!("secondary {} > {}", name(a), name(b)))
            }
            Law::Gyrator { second: (a, b), .. } => {
                Some(format!("port 2 {} > {}", name(a), name(b)))
            }
            _ => None,
        };
        let value = value.into_iter().chain(beside).collect::<Vec<_>>().join("; ");
        vec![element.name.clone(), kind(element), ends, value]
    };
    circuit.elements.iter().map(row).collect()
}

/// `10 kΩ ± 1 %`
fn measured(symbol: &Symbol, medium: Medium) -> Option<String> {
    let value = nominal(symbol, medium)?;
    Some(match &symbol.tolerance {
        Some(tolerance) if tolerance.text.starts_with(['-', '+', '−']) => {
            format!("{value} {}", tolerance.text)
        }
        Some(tolerance) => format!("{value} ± {}", tolerance.text),
        None => value,
    })
}

fn parameters(circuit: &Circuit, medium: Medium) -> Vec<Vec<String>> {
    let own = |symbol: &&Symbol| {
        matches!(symbol.role, SymbolRole::Parameter | SymbolRole::DeviceParameter)
            && circuit.element(&symbol.name).is_none_or(|id| {
                matches!(circuit[id].law, Law::ControlledVoltage(_) | Law::ControlledCurrent(_))
            })
    };
    let row = |symbol: &Symbol| {
        let value = measured(symbol, medium).unwrap_or_else(|| "no number".to_owned());
        vec![symbol.name.clone(), format!("[{}]", symbol.unit), value]
    };
    circuit.symbols.iter().filter(own).map(row).collect()
}

fn noise(circuit: &Circuit, listed: &Inspect, medium: Medium) -> Vec<Vec<String>> {
    let noise = &listed.noise;
    let mut rows = Vec::new();
    if !noise.thermal.is_empty() {
        let at = format!("thermal, {} K", noise.temperature);
        rows.push(vec![at, noise.thermal.join(", ")]);
    }
    for shot in &circuit.shots {
        let current = quantity(&shot.current, "A", 6, medium);
        rows.push(vec!["shot".to_owned(), format!("{}, {current}", shot.name)]);
    }
    rows
}

fn graph(graph: &Graph) -> Vec<Vec<String>> {
    let mut rows: Vec<Vec<String>> = Vec::new();
    let mut fact = |title: &str, text: String| rows.push(vec![title.to_owned(), text]);
    let yes = |is: bool| if is { "yes" } else { "no" }.to_owned();
    let sets =
        |all: &[Vec<String>]| all.iter().map(|set| set.join(" ")).collect::<Vec<_>>().join("; ");
    fact("branches", graph.branches.to_string());
    fact("loops", format!("{} independent", graph.loops));
    fact("cut-sets", format!("{} independent", graph.cutsets));
    if graph.parts.len() > 1 {
        let others = graph.parts[1..].iter().map(|part| part.join(" ")).collect::<Vec<_>>();
        fact("parts", format!("{}; without ground: {}", graph.parts.len(), others.join("; ")));
    } else {
        fact("parts", "1".to_owned());
    }
    fact("planar", yes(graph.planar));
    fact("series-parallel", yes(graph.series_parallel));
    let order = &graph.order;
    let mut sum = format!("{} capacitors and inductors", order.reactive);
    if order.from_expressions > 0 {
        let _ = write!(sum, ", {} from values in s", order.from_expressions);
    }
    for (lost, what) in [
        (order.capacitor_loops.len(), "loops"),
        (order.inductor_cutsets.len(), "inductor cut-sets"),
    ] {
        if lost > 0 {
            let _ = write!(sum, ", less {lost} for {what}");
        }
    }
    fact("order", format!("{}{} ({sum})", if order.exact { "" } else { "at most " }, order.order));
    let mut some = |title: &str, text: String| {
        if !text.is_empty() {
            fact(title, text);
        }
    };
    some("capacitor loops", sets(&order.capacitor_loops));
    some("inductor cut-sets", sets(&order.inductor_cutsets));
    some("capacitors only", sets(&graph.charge_groups));
    some("no current", graph.bridges.join(", "));
    some("cut nodes", graph.cut_nodes.join(", "));
    some(
        "voltage loop",
        graph.voltage_loop.iter().flatten().cloned().collect::<Vec<_>>().join(" "),
    );
    some(
        "current cut-set",
        graph.current_cutset.iter().flatten().cloned().collect::<Vec<_>>().join(" "),
    );
    rows
}

/// The page that is written.
struct Page {
    out: String,
    width: usize,
    ascii: bool,
}

impl Page {
    fn line(&mut self, text: &str) {
        let text = self.folded(text);
        let _ = writeln!(self.out, "{}", text.trim_end());
    }

    /// The text in the characters that are allowed.
    fn folded(&self, text: &str) -> String {
        if !self.ascii {
            return text.to_owned();
        }
        text.chars()
            .map(|letter| match letter {
                'Ω' => "ohm".to_owned(),
                'µ' => "u".to_owned(),
                '±' => "+/-".to_owned(),
                '−' => "-".to_owned(),
                '·' => "*".to_owned(),
                '²' => "^2".to_owned(),
                '⁻' => "^-".to_owned(),
                letter if letter.is_ascii() => letter.to_string(),
                _ => "?".to_owned(),
            })
            .collect()
    }

    /// A titled table; columns without a word are left out, an empty table altogether.
    fn table(&mut self, title: &str, rows: Vec<Vec<String>>) {
        if rows.is_empty() {
            return;
        }
        if !self.out.is_empty() {
            self.out.push('\n');
        }
        self.line(title);
        let rows: Vec<Vec<String>> =
            rows.iter().map(|row| row.iter().map(|cell| self.folded(cell)).collect()).collect();
        let last = rows[0].len() - 1;
        let widths: Vec<usize> = (0..last)
            .map(|column| rows.iter().map(|row| row[column].width()).max().unwrap_or(0))
            .collect();
        for row in &rows {
            let mut line = " ".to_owned();
            for (cell, width) in row.iter().zip(&widths).filter(|(_, width)| **width > 0) {
                let _ = write!(line, " {cell}{}", " ".repeat(width - cell.width() + 1));
            }
            let indent = line.width() + 1;
            let room = self.width.saturating_sub(indent).max(20);
            for (index, part) in wrapped(&row[last], room).iter().enumerate() {
                let start = if index == 0 { line.clone() } else { " ".repeat(indent - 1) };
                let _ = writeln!(self.out, "{}", format!("{start} {part}").trim_end());
            }
        }
    }
}

/// Lines of at most that width, broken at spaces.
fn wrapped(text: &str, width: usize) -> Vec<String> {
    let mut lines = vec![String::new()];
    let mut last = 0;
    for word in text.split(' ') {
        let line = &mut lines[last];
        if !line.is_empty() && line.width() + 1 + word.width() > width {
            lines.push(word.to_owned());
            last += 1;
        } else {
            if !line.is_empty() {
                line.push(' ');
            }
            line.push_str(word);
        }
    }
    lines
}
