//! The rows: every part gets one or more rows for itself between its columns.
//!
//! A node is an upright line over all rows that touch it. Two parts may not overlap in a row; a
//! part that passes a node's line crosses it. Short lines, few crossings and few rows are sought by
//! placing the parts one after the other where each costs least, and then moving each again.
//! (Upright lines for nodes and level ones for edges: a visibility representation, Tamassia & Tollis
//! 1986, with crossings allowed.)

use super::columns::Columns;
use super::scheme::{Block, Part, Scheme};
use crate::circuit::NodeId;

/// Steps of x between two columns; a drop and a block's body need one to their right.
const STEP: i32 = 4;

/// Cells looked at in all evaluations at most.
const WORK: usize = 150_000_000;

/// How a part lies relative to its first row.
#[derive(Clone, Debug)]
pub(super) struct Lie {
    pub(super) height: i32,
    /// Row, left and right end in steps.
    cells: Vec<(i32, i32, i32)>,
    /// Column of a node, and the row that touches it.
    pub(super) touches: Vec<(usize, i32)>,
    pub(super) pins: Vec<Pin>,
    /// First and last row of the body of a block.
    pub(super) body: (i32, i32),
    is_drop: bool,
    is_long: bool,
}

/// A pin of a block.
#[derive(Clone, Copy, Debug)]
pub(super) struct Pin {
    /// Index in the list of its side.
    pub(super) index: usize,
    pub(super) is_right: bool,
    /// Where it leaves the body.
    pub(super) row: i32,
    /// The row in which it goes around the body to the other side.
    pub(super) around: Option<i32>,
    /// The column of its node; `None` is ground.
    pub(super) column: Option<usize>,
}

/// A part with its choice of lie and its first row.
#[derive(Clone, Debug)]
pub(super) struct Place {
    pub(super) lie: usize,
    pub(super) row: i32,
}

/// All parts in their rows.
#[derive(Debug)]
pub(super) struct Rows {
    pub(super) lies: Vec<Vec<Lie>>,
    pub(super) places: Vec<Place>,
    pub(super) count: i32,
}

impl Rows {
    /// The lie that was chosen for a part.
    pub(super) fn lie(&self, part: usize) -> &Lie {
        &self.lies[part][self.places[part].lie]
    }

    /// First and last row of every column's line.
    pub(super) fn lines(&self, columns: usize) -> Vec<Option<(i32, i32)>> {
        let mut lines = vec![None; columns];
        for (part, place) in self.places.iter().enumerate() {
            extend(&mut lines, &self.lies[part][place.lie], place.row);
        }
        lines
    }
}

fn extend(lines: &mut [Option<(i32, i32)>], lie: &Lie, row: i32) {
    for &(column, offset) in &lie.touches {
        let at = row + offset;
        let line = lines[column].get_or_insert((at, at));
        *line = (line.0.min(at), line.1.max(at));
    }
}

/// Places all parts.
pub(super) fn arrange(scheme: &Scheme, columns: &Columns) -> Rows {
    let lies: Vec<Vec<Lie>> = scheme
        .parts
        .iter()
        .enumerate()
        .map(|(index, part)| lies(part, columns.of_part[index], columns))
        .collect();
    let mut search = Search {
        lies: &lies,
        columns: columns.order.len(),
        placed: vec![None; lies.len()],
        budget: WORK,
    };
    search.run();
    let places: Vec<Place> =
        search.placed.into_iter().map(|place| place.unwrap_or(Place { lie: 0, row: 0 })).collect();
    let count = places
        .iter()
        .zip(&lies)
        .map(|(place, lies)| place.row + lies[place.lie].height)
        .max()
        .unwrap_or(0);
    Rows { lies, places, count }
}

/// The ways in which a part may lie.
fn lies(part: &Part, own: Option<usize>, columns: &Columns) -> Vec<Lie> {
    let column = |node: NodeId| columns.of_node[node.0 as usize].unwrap_or(0);
    let simple = |cells, touches, is_drop, is_long| Lie {
        height: 1,
        cells,
        touches,
        pins: Vec::new(),
        body: (0, 0),
        is_drop,
        is_long,
    };
    match part {
        Part::Span { from, to, .. } => {
            let (a, b) = (column(*from), column(*to));
            let (left, right) = (a.min(b), a.max(b));
            let cells = vec![(0, left as i32 * STEP, right as i32 * STEP)];
            vec![simple(cells, vec![(left, 0), (right, 0)], false, right - left > 1)]
        }
        Part::Drop { node, .. } => {
            let at = column(*node);
            let cells = vec![(0, at as i32 * STEP, at as i32 * STEP + 1)];
            vec![simple(cells, vec![(at, 0)], true, false)]
        }
        Part::Block(block) => {
            let own = own.unwrap_or(0);
            let block = |flipped| block_lie(block, own, flipped, &column);
            vec![block(false), block(true)]
        }
    }
}

/// The rows of a block's pins; pins whose node is on the other side go around the body.
fn block_lie(block: &Block, own: usize, flipped: bool, column: &dyn Fn(NodeId) -> usize) -> Lie {
    // One pin on a side stands in the middle of three rows, two stand at the ends.
    let rows = if block.right.len() == 1 { 3 } else { 2 };
    let row_of = |index: usize, of: usize| match (of, index) {
        (1, _) => 1,
        (_, 0) => {
            if flipped {
                rows - 1
            } else {
                0
            }
        }
        _ => {
            if flipped {
                0
            } else {
                rows - 1
            }
        }
    };
    let sides = [(false, &block.left), (true, &block.right)];
    let (mut above, mut below) = (0, 0);
    let mut pins = Vec::new();
    for (is_right, nodes) in sides {
        for (index, node) in nodes.iter().enumerate() {
            let row = row_of(index, nodes.len());
            let column = node.map(column);
            let is_astray = column.is_some_and(|at| (at > own) != is_right);
            let around = is_astray.then(|| {
                if row == rows - 1 {
                    below += 1;
                    rows - 1 + below
                } else {
                    above += 1;
                    -above
                }
            });
            pins.push(Pin { index, is_right, row, around, column });
        }
    }
    let at = own as i32 * STEP;
    let mut cells: Vec<(i32, i32, i32)> = (0..rows).map(|row| (row, at - 1, at + 1)).collect();
    let mut touches = Vec::new();
    for pin in &pins {
        let Some(column) = pin.column else { continue };
        let end = column as i32 * STEP;
        match pin.around {
            None => {
                let cell = &mut cells[pin.row as usize];
                *cell = (cell.0, cell.1.min(end), cell.2.max(end));
                touches.push((column, pin.row));
            }
            Some(row) => {
                cells.push((row, end.min(at - 1), end.max(at + 1)));
                touches.push((column, row));
            }
        }
    }
    let down = above;
    cells.iter_mut().for_each(|cell| cell.0 += down);
    touches.iter_mut().for_each(|touch| touch.1 += down);
    for pin in &mut pins {
        pin.row += down;
        pin.around = pin.around.map(|row| row + down);
    }
    Lie {
        height: above + rows + below,
        cells,
        touches,
        pins,
        body: (down, down + rows - 1),
        is_drop: false,
        is_long: false,
    }
}

struct Search<'a> {
    lies: &'a [Vec<Lie>],
    columns: usize,
    placed: Vec<Option<Place>>,
    budget: usize,
}

impl Search<'_> {
    fn run(&mut self) {
        // Parts from left to right, short ones and blocks first.
        let mut order: Vec<usize> = (0..self.lies.len()).collect();
        order.sort_by_key(|&part| {
            let lie = &self.lies[part][0];
            let left = lie.touches.iter().map(|touch| touch.0).min().unwrap_or(0);
            (lie.is_long, lie.is_drop, left, part)
        });
        for &part in &order {
            self.place(part);
        }
        let mut least = self.cost();
        for _ in 0..12 {
            for &part in &order {
                if self.budget == 0 {
                    return;
                }
                let before = self.placed.clone();
                self.take_out(part);
                self.place(part);
                let cost = self.cost();
                if cost > least {
                    self.placed = before;
                } else {
                    least = cost;
                }
            }
        }
    }

    fn height(&self) -> i32 {
        let ends = self.placed.iter().zip(self.lies).filter_map(|(place, lies)| {
            place.as_ref().map(|place| place.row + lies[place.lie].height)
        });
        ends.max().unwrap_or(0)
    }

    /// Takes a part out and closes the rows that it leaves empty.
    fn take_out(&mut self, part: usize) {
        self.placed[part] = None;
        let mut used = vec![false; self.height() as usize];
        for (place, lies) in self.placed.iter().zip(self.lies) {
            if let Some(place) = place {
                let rows = place.row..place.row + lies[place.lie].height;
                rows.for_each(|row| used[row as usize] = true);
            }
        }
        let mut gone = 0;
        let shift: Vec<i32> = used
            .iter()
            .map(|used| {
                let now = gone;
                gone += i32::from(!used);
                now
            })
            .collect();
        for place in self.placed.iter_mut().flatten() {
            place.row -= shift[place.row as usize];
        }
    }

    /// Makes room for `height` rows before row `at`; false where a part stands across.
    fn open(&mut self, at: i32, height: i32) -> bool {
        let across = self.placed.iter().zip(self.lies).any(|(place, lies)| {
            place
                .as_ref()
                .is_some_and(|place| place.row < at && at < place.row + lies[place.lie].height)
        });
        if !across {
            for place in self.placed.iter_mut().flatten().filter(|place| place.row >= at) {
                place.row += height;
            }
        }
        !across
    }

    /// Puts a part where it costs least.
    fn place(&mut self, part: usize) {
        let before = self.placed.clone();
        let rows = self.height();
        let mut best: Option<(i64, Vec<Option<Place>>)> = None;
        for (lie, form) in self.lies[part].iter().enumerate() {
            let fresh = (0..=rows).flat_map(|at| (1..=form.height).map(move |opened| (at, opened)));
            let existing = (0..rows).map(|at| (at, 0));
            for (at, opened) in fresh.chain(existing) {
                self.placed.clone_from(&before);
                if opened > 0 && !self.open(at, opened) {
                    continue;
                }
                self.placed[part] = Some(Place { lie, row: at });
                let cost = self.cost();
                if best.as_ref().is_none_or(|(least, _)| cost < *least) {
                    best = Some((cost, self.placed.clone()));
                }
            }
        }
        self.placed = best.map_or(before, |(_, placed)| placed);
    }

    fn cost(&mut self) -> i64 {
        let mut lines = vec![None; self.columns];
        let mut cells: Vec<(i32, i32, i32)> = Vec::new();
        let mut drops = Vec::new();
        let mut cost = 0;
        let height = self.height();
        let mut rows_with_drops = vec![false; height as usize + 1];
        for (place, lies) in self.placed.iter().zip(self.lies) {
            let Some(place) = place else { continue };
            let lie = &lies[place.lie];
            extend(&mut lines, lie, place.row);
            cells.extend(lie.cells.iter().map(|&(row, a, b)| (row + place.row, a, b)));
            if lie.is_drop {
                drops.push((lie.touches[0].0, place.row));
                rows_with_drops[place.row as usize] = true;
            }
            if lie.is_long {
                // What leads back passes above.
                cost += i64::from(place.row);
            }
        }
        cells.sort_unstable();
        let mut furthest = (-1, 0);
        for &(row, left, right) in &cells {
            if row == furthest.0 {
                cost += if left < furthest.1 { 10_000 } else { 0 };
                furthest.1 = furthest.1.max(right);
            } else {
                furthest = (row, right);
            }
        }
        for &(row, left, right) in &cells {
            let inside = left.div_euclid(STEP) + 1..=(right - 1).div_euclid(STEP);
            for column in inside {
                if let Some(Some((top, bottom))) = lines.get(column as usize)
                    && (*top..=*bottom).contains(&row)
                {
                    cost += 14;
                }
            }
        }
        for (column, row) in drops {
            let (top, bottom) = lines[column].unwrap_or((row, row));
            cost +=
                if row < bottom { 5 } else { 0 } + if row == top && top < bottom { 4 } else { 0 };
        }
        // Rows with drops are deep.
        let mut depth = vec![0_i64];
        for tall in &rows_with_drops {
            depth.push(depth[depth.len() - 1] + if *tall { 5 } else { 2 });
        }
        let long = |&(top, bottom): &(i32, i32)| depth[bottom as usize] - depth[top as usize];
        let lines: i64 = lines.iter().flatten().map(long).sum();
        self.budget = self.budget.saturating_sub(cells.len() + self.columns);
        cost + lines + depth[height as usize] * 2
    }
}
