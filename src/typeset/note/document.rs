//! What a note consists of, before any format: headings, paragraphs, formulas, tables, figures, listings.
//!
//! Texts are as they came; each writer makes them safe for its format in one place.

use crate::typeset::math::Math;
use crate::typeset::svg::Picture;

/// A whole note.
#[derive(Clone, Debug)]
pub struct Document {
    /// Its title.
    pub(super) title: String,
    /// What it holds, in order.
    pub(super) blocks: Vec<Block>,
}

/// A block.
#[derive(Clone, Debug)]
pub(super) enum Block {
    /// A section (1) or a part of one (2).
    Heading(u8, Vec<Inline>),
    Paragraph(Vec<Inline>),
    List(Vec<Vec<Inline>>),
    Equation(Math),
    Table(Table),
    Figure(Figure),
    /// Text that keeps its lines.
    Listing(String),
}

/// A piece of a line.
#[derive(Clone, Debug)]
pub(super) enum Inline {
    Text(String),
    /// What is typed or was read: names of nodes, queries, hashes.
    Code(String),
    Math(Math),
    Strong(String),
}

/// Rows under a heading; the first cell of a row says what the row is about.
#[derive(Clone, Debug)]
pub(super) struct Table {
    pub(super) caption: Vec<Inline>,
    pub(super) head: Vec<Vec<Inline>>,
    pub(super) rows: Vec<Vec<Cell>>,
}

/// A cell of a table.
#[derive(Clone, Debug, Default)]
pub(super) struct Cell {
    pub(super) content: Vec<Inline>,
    /// Numbers stand on the right.
    pub(super) right: bool,
    /// From −3 to 3: how much a value strikes the eye, and on which side of 0.
    pub(super) heat: i8,
}

/// A picture with words below it.
#[derive(Clone, Debug)]
pub(super) struct Figure {
    /// Unique in the document; letters, digits and hyphens.
    pub(super) name: String,
    pub(super) picture: Picture,
    pub(super) caption: Vec<Inline>,
}

/// A text.
pub(super) fn text(text: impl Into<String>) -> Inline {
    Inline::Text(text.into())
}

/// Something typed.
pub(super) fn code(text: impl Into<String>) -> Inline {
    Inline::Code(text.into())
}

impl Cell {
    /// A cell of text.
    pub(super) fn text(content: impl Into<String>) -> Self {
        Self::of(vec![text(content)])
    }

    /// A number.
    pub(super) fn number(content: impl Into<String>) -> Self {
        Self { right: true, ..Self::text(content) }
    }

    /// Anything.
    pub(super) fn of(content: Vec<Inline>) -> Self {
        Self { content, right: false, heat: 0 }
    }
}

/// Blocks under construction.
#[derive(Debug, Default)]
pub(super) struct Blocks {
    pub(super) all: Vec<Block>,
    figures: usize,
}

impl Blocks {
    pub(super) fn heading(&mut self, level: u8, content: Vec<Inline>) {
        self.all.push(Block::Heading(level, content));
    }

    pub(super) fn paragraph(&mut self, content: Vec<Inline>) {
        self.all.push(Block::Paragraph(content));
    }

    pub(super) fn list(&mut self, items: Vec<Vec<Inline>>) {
        if !items.is_empty() {
            self.all.push(Block::List(items));
        }
    }

    pub(super) fn equation(&mut self, math: Math) {
        self.all.push(Block::Equation(math));
    }

    /// A table without its empty columns; none without rows.
    pub(super) fn table(&mut self, mut table: Table) {
        if table.rows.is_empty() {
            return;
        }
        let is_empty = |cell: &Cell| match cell.content.as_slice() {
            [] => true,
            [Inline::Text(words)] => words.is_empty(),
            _ => false,
        };
        let columns = 0..table.head.len();
        let kept: Vec<bool> = columns
            .map(|column| {
                table.rows.iter().any(|row| row.get(column).is_some_and(|c| !is_empty(c)))
            })
            .collect();
        let keep = |column: usize| kept.get(column).copied().unwrap_or(true);
        retain(&mut table.head, keep);
        table.rows.iter_mut().for_each(|row| retain(row, keep));
        self.all.push(Block::Table(table));
    }

    pub(super) fn listing(&mut self, text: &str) {
        self.all.push(Block::Listing(text.to_owned()));
    }

    /// A figure; its name gets the number that makes it unique.
    pub(super) fn figure(&mut self, name: &str, picture: Picture, caption: Vec<Inline>) {
        self.figures += 1;
        let plain = |c: char| if c.is_ascii_alphanumeric() { c } else { '-' };
        let name: String = name.chars().map(plain).collect();
        let name = format!("{}-{name}", self.figures);
        let picture = picture.named(&format!("figure-{name}"));
        self.all.push(Block::Figure(Figure { name, picture, caption }));
    }
}

/// Keeps the items whose place is kept.
fn retain<T>(items: &mut Vec<T>, keep: impl Fn(usize) -> bool) {
    let mut place = 0;
    items.retain(|_| {
        place += 1;
        keep(place - 1)
    });
}
