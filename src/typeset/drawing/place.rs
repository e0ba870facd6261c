//! From columns and rows to a sheet: positions that leave room for every sign and text.
//!
//! In each row the things that stand there keep their order and a distance; the positions that all
//! rows agree on are longest paths, from the left and from the right, and everything is put half-way
//! between the two (Lengauer 1990 on one-dimensional compaction). Where nothing is between two
//! columns they may share a position.

use std::collections::BTreeMap;

use super::canvas::{Anchor, Canvas, Face, width};
use super::columns::{Column, Columns};
use super::rows::{Lie, Pin, Rows};
use super::scheme::{Block, BlockKind, Part, Scheme, Single, Symbol};
use super::symbols;
use crate::circuit::Circuit;

/// Space between things in a row, and around the sheet.
const GAP: f64 = 12.0;
const MARGIN: f64 = 14.0;

/// Where pins go straight, turn, and go around, from the middle of a block.
const TURN: f64 = 36.0;
const AROUND: f64 = 44.0;

/// Depth of the middle of a dropped sign and of its ground below the row.
const DROP: f64 = 32.0;
const DROP_GROUND: f64 = 64.0;

/// How far the name of a node stands above the top of its line.
pub(super) const NAME_RISE: f64 = 8.0;

/// Directions in which wires leave a node's line at a row.
const LEFT: u8 = 1;
const RIGHT: u8 = 2;
const UP: u8 = 4;
const DOWN: u8 = 8;

/// A thing in a row: its reach to the left and to the right.
struct Standing {
    thing: usize,
    left: f64,
    right: f64,
}

pub(super) struct Sheet<'a> {
    circuit: &'a Circuit,
    scheme: &'a Scheme,
    columns: &'a Columns,
    rows: &'a Rows,
    /// Columns first, then the signs of spans by their part.
    x: Vec<f64>,
    y: Vec<f64>,
    /// The lower end of the last row.
    floor: f64,
    lines: Vec<Option<(i32, i32)>>,
    ways: BTreeMap<(usize, i32), u8>,
}

/// Draws everything and gives the size of the sheet.
pub(super) fn sheet(
    circuit: &Circuit,
    scheme: &Scheme,
    columns: &Columns,
    rows: &Rows,
) -> (Canvas, (f64, f64)) {
    let mut sheet = Sheet {
        circuit,
        scheme,
        columns,
        rows,
        x: Vec::new(),
        y: Vec::new(),
        floor: 0.0,
        lines: rows.lines(columns.order.len()),
        ways: BTreeMap::new(),
    };
    let wide = sheet.across();
    let high = sheet.down();
    let mut canvas = Canvas::default();
    sheet.draw(&mut canvas);
    (canvas, (wide, high))
}

impl Sheet<'_> {
    fn is_last(&self, column: usize, row: i32) -> bool {
        self.lines[column].is_some_and(|(_, bottom)| bottom == row)
    }

    fn name(&self, column: usize) -> &str {
        match self.columns.order[column] {
            Column::Node(node) => &self.circuit[node].name,
            Column::Block(_) => "",
        }
    }

    /// The gap in which a span's sign stands: after which column.
    fn gap(&self, left: usize, right: usize, row: i32) -> usize {
        let crossed: Vec<usize> = (left..right)
            .filter(|&column| {
                column == left
                    || self.lines[column].is_some_and(|(top, low)| (top..=low).contains(&row))
            })
            .collect();
        crossed[crossed.len() / 2]
    }

    /// Everything that stands in the rows, by row and order.
    fn standings(&self) -> BTreeMap<i32, BTreeMap<usize, Standing>> {
        let mut all: BTreeMap<i32, BTreeMap<usize, Standing>> = BTreeMap::new();
        let mut stand = |row: i32, key: usize, thing: usize, left: f64, right: f64| {
            let standing = all.entry(row).or_default().entry(key).or_insert(Standing {
                thing,
                left: 0.0,
                right: 0.0,
            });
            standing.left = standing.left.max(left);
            standing.right = standing.right.max(right);
        };
        let columns = self.columns.order.len();
        for column in 0..columns {
            let Some((top, bottom)) = self.lines[column] else { continue };
            for row in top..=bottom {
                let half =
                    if row == top { width(self.name(column), Face::Node) / 2.0 + 1.0 } else { 4.0 };
                stand(row, 2 * column, column, half, half);
            }
        }
        for (index, part) in self.scheme.parts.iter().enumerate() {
            let (place, lie) = (&self.rows.places[index], self.rows.lie(index));
            match part {
                Part::Span { single, .. } => {
                    let gap = self.gap(lie.touches[0].0, lie.touches[1].0, place.row);
                    let half = (single.label() / 2.0).max(reach(single.symbol));
                    stand(place.row, 2 * gap + 1, columns + index, half, half);
                }
                Part::Drop { singles, .. } => {
                    let column = lie.touches[0].0;
                    let offsets = self.offsets(singles, column, place.row);
                    let last = singles.last().map_or(0.0, Single::label);
                    let right = offsets.last().map_or(0.0, |at| at + LABEL + last);
                    let left = if offsets.first() == Some(&0.0) { 16.0 } else { 4.0 };
                    stand(place.row, 2 * column, column, left, right);
                }
                Part::Block(block) => {
                    let Some(column) = self.columns.of_part[index] else { continue };
                    let (left, right) = block_reach(block);
                    for row in place.row..place.row + lie.height {
                        stand(row, 2 * column, column, left, right);
                    }
                }
            }
        }
        all
    }

    /// Where the elements of a drop stand, from the node's line.
    fn offsets(&self, singles: &[Single], column: usize, row: i32) -> Vec<f64> {
        let mut at = if self.is_last(column, row) { 0.0 } else { 28.0 };
        singles
            .iter()
            .map(|single| {
                let here = at;
                at += LABEL + single.label() + GAP + 16.0;
                here
            })
            .collect()
    }

    /// Positions from left to right; gives the width of the sheet.
    fn across(&mut self) -> f64 {
        let things = self.columns.order.len() + self.scheme.parts.len();
        let standings = self.standings();
        let mut keys: BTreeMap<(usize, usize), ()> = BTreeMap::new();
        let mut after: Vec<Vec<(usize, f64)>> = vec![Vec::new(); things];
        let mut left = vec![0.0_f64; things];
        let mut right = vec![0.0_f64; things];
        for row in standings.values() {
            let mut before: Option<&Standing> = None;
            for (&key, standing) in row {
                keys.insert((key, standing.thing), ());
                left[standing.thing] = left[standing.thing].max(standing.left);
                right[standing.thing] = right[standing.thing].max(standing.right);
                if let Some(before) = before {
                    let distance = before.right + GAP + standing.left;
                    after[before.thing].push((standing.thing, distance));
                }
                before = Some(standing);
            }
        }
        let order: Vec<usize> = keys.into_keys().map(|(_, thing)| thing).collect();
        let mut earliest: Vec<f64> = left.iter().map(|left| left + MARGIN).collect();
        for &thing in &order {
            for &(next, distance) in &after[thing] {
                earliest[next] = earliest[next].max(earliest[thing] + distance);
            }
        }
        let mut wide =
            order.iter().map(|&thing| earliest[thing] + right[thing]).fold(100.0, f64::max);
        let mut latest: Vec<f64> = right.iter().map(|right| wide - right).collect();
        for &thing in order.iter().rev() {
            for &(next, distance) in &after[thing] {
                latest[thing] = latest[thing].min(latest[next] - distance);
            }
        }
        self.x = earliest.iter().zip(&latest).map(|(a, b)| f64::midpoint(*a, *b).round()).collect();
        wide += MARGIN;
        for remark in &self.scheme.remarks {
            wide = wide.max(width(remark, Face::Value) + 2.0 * MARGIN);
        }
        wide
    }

    /// Positions of the rows; gives the height of the sheet.
    fn down(&mut self) -> f64 {
        let count = self.rows.count as usize;
        let mut above = vec![4.0_f64; count];
        let mut below = vec![4.0_f64; count];
        let mut room = |row: i32, up: f64, low: f64| {
            let row = row as usize;
            above[row] = above[row].max(up);
            below[row] = below[row].max(low);
        };
        for (top, _) in self.lines.iter().flatten() {
            room(*top, 22.0, 6.0);
        }
        for (index, part) in self.scheme.parts.iter().enumerate() {
            let (row, lie) = (self.rows.places[index].row, self.rows.lie(index));
            match part {
                Part::Span { single, .. } => {
                    let across = thickness(single.symbol);
                    let low = if single.value.is_empty() { across + 6.0 } else { across + 18.0 };
                    room(row, across + 20.0, low);
                }
                Part::Drop { .. } => room(row, 12.0, DROP_GROUND + 20.0),
                Part::Block(block) => {
                    for offset in 0..lie.height {
                        room(row + offset, 12.0, 12.0);
                    }
                    if block.right.len() > 1 {
                        room(row + lie.body.0, 32.0, 16.0);
                        room(row + lie.body.1, 16.0, 32.0);
                    } else {
                        // The corners of the triangle.
                        room(row + lie.body.0, 20.0, 12.0);
                        room(row + lie.body.1, 12.0, 24.0);
                    }
                }
            }
        }
        let mut y = MARGIN;
        for (above, below) in above.iter().zip(&below) {
            y += above;
            self.y.push(y.round());
            y += below;
        }
        self.floor = y;
        y + MARGIN + 16.0 * self.scheme.remarks.len() as f64
    }

    fn way(&mut self, column: usize, row: i32, way: u8) {
        *self.ways.entry((column, row)).or_default() |= way;
    }

    fn row(&self, row: i32) -> f64 {
        self.y[row as usize]
    }

    fn draw(&mut self, canvas: &mut Canvas) {
        let scheme = self.scheme;
        for (index, part) in scheme.parts.iter().enumerate() {
            let (row, lie) = (self.rows.places[index].row, self.rows.lie(index));
            match part {
                Part::Span { single, from, .. } => {
                    let reversed = self.columns.of_node[from.0 as usize] == Some(lie.touches[1].0);
                    self.span(canvas, index, single, reversed, row);
                }
                Part::Drop { singles, .. } => self.drop(canvas, singles, lie.touches[0].0, row),
                Part::Block(block) => self.block(canvas, index, block, lie, row),
            }
        }
        self.nodes(canvas);
        let mut y = self.floor;
        for remark in &scheme.remarks {
            y += 16.0;
            canvas.text(MARGIN, y, Anchor::Start, Face::Value, remark);
        }
    }

    fn span(
        &mut self,
        canvas: &mut Canvas,
        part: usize,
        single: &Single,
        reversed: bool,
        row: i32,
    ) {
        let lie = self.rows.lie(part);
        let (left, right) = (lie.touches[0].0, lie.touches[1].0);
        let y = self.row(row);
        let x = self.x[self.columns.order.len() + part];
        canvas.wire(self.x[left], y, x - symbols::HALF, y);
        canvas.wire(x + symbols::HALF, y, self.x[right], y);
        symbols::single(canvas, single.symbol, (x, y), false, reversed);
        let across = thickness(single.symbol);
        canvas.text(x, y - across - 5.0, Anchor::Middle, Face::Name, &single.name);
        canvas.text(x, y + across + 13.0, Anchor::Middle, Face::Value, &single.value);
        self.way(left, row, RIGHT);
        self.way(right, row, LEFT);
    }

    fn drop(&mut self, canvas: &mut Canvas, singles: &[Single], column: usize, row: i32) {
        let offsets = self.offsets(singles, column, row);
        let (line, y) = (self.x[column], self.row(row));
        for (single, offset) in singles.iter().zip(&offsets) {
            let x = line + offset;
            let middle = y + DROP;
            canvas.wire(x, y, x, middle - symbols::HALF);
            canvas.wire(x, middle + symbols::HALF, x, y + DROP_GROUND);
            symbols::single(canvas, single.symbol, (x, middle), true, single.reversed);
            symbols::ground(canvas, x, y + DROP_GROUND);
            let (name, value) = if single.value.is_empty() { (4.0, 0.0) } else { (-3.0, 11.0) };
            canvas.text(x + LABEL, middle + name, Anchor::Start, Face::Name, &single.name);
            canvas.text(x + LABEL, middle + value, Anchor::Start, Face::Value, &single.value);
        }
        let last = offsets.last().copied().unwrap_or(0.0);
        canvas.wire(line, y, line + last, y);
        for offset in offsets.iter().take(offsets.len().saturating_sub(1)) {
            if *offset > 0.0 {
                canvas.dot(line + offset, y);
            }
        }
        let down = if offsets.first() == Some(&0.0) { DOWN } else { 0 };
        let right = if last > 0.0 { RIGHT } else { 0 };
        self.way(column, row, down | right);
    }

    fn block(&mut self, canvas: &mut Canvas, index: usize, block: &Block, lie: &Lie, row: i32) {
        let Some(own) = self.columns.of_part[index] else { return };
        let x = self.x[own];
        let (top, bottom) = (self.row(row + lie.body.0), self.row(row + lie.body.1));
        if block.kind == BlockKind::Amplifier {
            let middle = self.row(row + lie.body.0 + 1);
            let mut inputs = [0.0; 2];
            for pin in &lie.pins {
                let wanted = self.row(row + pin.row) - middle;
                let at = match (pin.is_right, wanted < 0.0) {
                    (true, _) => 0.0,
                    (false, true) => wanted.clamp(-24.0, -14.0),
                    (false, false) => wanted.clamp(14.0, 24.0),
                };
                if !pin.is_right {
                    inputs[pin.index] = at;
                }
                self.pin(canvas, pin, own, row, middle + at);
            }
            symbols::amplifier(canvas, (x, middle), inputs);
            canvas.text(x + 6.0, middle - 24.0, Anchor::Start, Face::Name, &block.name);
            canvas.text(x + 6.0, middle + 33.0, Anchor::Start, Face::Value, &block.note);
        } else {
            for pin in &lie.pins {
                self.pin(canvas, pin, own, row, self.row(row + pin.row));
            }
            symbols::two_port(canvas, block.kind, x, top, bottom);
            canvas.text(x, top - 17.0, Anchor::Middle, Face::Name, &block.name);
            canvas.text(x, bottom + 25.0, Anchor::Middle, Face::Value, &block.note);
        }
    }

    /// A pin's wire, from the body at height `y` to its node or to ground.
    fn pin(&mut self, canvas: &mut Canvas, pin: &Pin, own: usize, row: i32, y: f64) {
        let x = self.x[own];
        let out: f64 = if pin.is_right { 1.0 } else { -1.0 };
        let edge = out.mul_add(symbols::BODY, x);
        let Some(column) = pin.column else {
            let end = out.mul_add(TURN + 4.0, x);
            canvas.wire(edge, y, end, y);
            symbols::ground(canvas, end, y);
            return;
        };
        let (turn, level) = match pin.around {
            None => (out.mul_add(TURN, x), row + pin.row),
            Some(around) => (out.mul_add(AROUND, x), row + around),
        };
        let high = self.row(level);
        canvas.wire(edge, y, turn, y);
        canvas.wire(turn, y, turn, high);
        canvas.wire(turn, high, self.x[column], high);
        self.way(column, level, if column > own { LEFT } else { RIGHT });
    }

    /// The upright lines, dots where three wires meet, and names.
    fn nodes(&mut self, canvas: &mut Canvas) {
        for column in 0..self.columns.order.len() {
            let Some((top, bottom)) = self.lines[column] else { continue };
            let x = self.x[column];
            canvas.wire(x, self.row(top), x, self.row(bottom));
            for row in top..=bottom {
                let Some(&ways) = self.ways.get(&(column, row)) else { continue };
                let through = if row > top { UP } else { 0 } | if row < bottom { DOWN } else { 0 };
                let count = (ways | through).count_ones();
                if count != 2 {
                    canvas.dot(x, self.row(row));
                }
            }
            canvas.text(
                x,
                self.row(top) - NAME_RISE,
                Anchor::Middle,
                Face::Node,
                self.name(column),
            );
        }
    }
}

/// From a dropped sign to its label.
const LABEL: f64 = 17.0;

fn thickness(symbol: Symbol) -> f64 {
    match symbol {
        Symbol::Resistor | Symbol::General(_) | Symbol::Inductor => 8.0,
        Symbol::Capacitor => 11.0,
        Symbol::Voltage { .. } | Symbol::Current { .. } => 14.0,
    }
}

/// Half the length that a sign takes with its marks.
fn reach(symbol: Symbol) -> f64 {
    match symbol {
        Symbol::Voltage { .. } | Symbol::Current { .. } => 28.0,
        _ => symbols::HALF,
    }
}

fn block_reach(block: &Block) -> (f64, f64) {
    let (name, note) = (width(&block.name, Face::Name), width(&block.note, Face::Value));
    let label = name.max(note);
    if block.kind == BlockKind::Amplifier {
        (AROUND + 6.0, (AROUND + 2.0).max(6.0 + label))
    } else {
        let half = (AROUND + 6.0).max(label / 2.0);
        (half, half)
    }
}
