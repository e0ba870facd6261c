//! A picture of a circuit's graph as SVG.
//!
//! Nodes are upright lines with their names, two-terminal elements are level signs between them, and
//! what leads to ground hangs down to a ground sign of its own, so that ground does not tangle the
//! picture. Op-amps, transformers and gyrators are blocks with pins; a controlled source bears its control
//! in words. `columns` orders nodes and blocks from source to output, `rows` stacks the elements
//! with few crossings, `place` gives everything its room, and `canvas` writes. The same circuit gives the same bytes.

mod canvas;
mod columns;
mod place;
mod rows;
mod scheme;
mod symbols;
#[cfg(test)]
mod tests;

pub use canvas::Room;

use crate::circuit::Circuit;
use crate::typeset::svg::Picture;
use canvas::{Anchor, Canvas, Face};
use scheme::Scheme;

/// A circuit with more elements is too much for a readable picture.
pub const MOST_ELEMENTS: usize = 300;

/// A drawn circuit.
#[derive(Debug)]
pub struct Drawing {
    canvas: Canvas,
    size: (f64, f64),
    title: String,
    description: String,
}

/// Draws a circuit. Above [`MOST_ELEMENTS`] elements the sheet says so and holds no lines.
pub fn draw(circuit: &Circuit) -> Drawing {
    let title = circuit.title.clone().unwrap_or_else(|| "Circuit".to_owned());
    let (nodes, elements) = (circuit.nodes.len(), circuit.elements.len());
    if elements > MOST_ELEMENTS {
        let mut canvas = Canvas::default();
        let description = format!(
            "{nodes} nodes and {elements} elements: too many for a readable picture (the most is {MOST_ELEMENTS} elements)."
        );
        canvas.text(16.0, 30.0, Anchor::Start, Face::Name, &title);
        canvas.text(16.0, 52.0, Anchor::Start, Face::Value, &description);
        let wide = canvas.texts.iter().map(|text| text.room().right).fold(0.0, f64::max);
        return Drawing { canvas, size: (wide + 16.0, 70.0), title, description };
    }
    let scheme = Scheme::new(circuit);
    let columns = columns::arrange(&scheme, nodes);
    let rows = rows::arrange(&scheme, &columns);
    let (canvas, size) = place::sheet(circuit, &scheme, &columns, &rows);
    Drawing { canvas, size, title, description: description(circuit) }
}

impl Drawing {
    /// The picture, with a title and a description for those who cannot see it.
    pub fn svg(&self) -> String {
        self.picture().svg()
    }

    /// The picture, for any printer.
    pub fn picture(&self) -> Picture {
        self.canvas.picture(self.size, &self.title, &self.description)
    }

    /// The room of every text, and its words.
    pub fn texts(&self) -> Vec<(Room, &str)> {
        self.canvas.texts.iter().map(|text| (text.room(), text.content.as_str())).collect()
    }

    /// The room of every sign's body.
    pub fn bodies(&self) -> &[Room] {
        &self.canvas.bodies
    }

    /// Width and height of the sheet.
    pub fn size(&self) -> (f64, f64) {
        self.size
    }
}

/// Every element between its nodes, in words.
fn description(circuit: &Circuit) -> String {
    let listed: Vec<String> = circuit
        .elements
        .iter()
        .map(|element| {
            let (plus, minus) = (&circuit[element.plus].name, &circuit[element.minus].name);
            match element.law {
                crate::circuit::Law::Mutual { .. } => element.name.clone(),
                _ => format!("{} from {plus} to {minus}", element.name),
            }
        })
        .collect();
    format!(
        "Schematic with {} nodes and {} elements: {}.",
        circuit.nodes.len(),
        circuit.elements.len(),
        listed.join(", ")
    )
}
