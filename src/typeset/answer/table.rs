//! Columns of text, set by their widest cell.

use unicode_width::UnicodeWidthStr;

/// On which side of a column the cells stand.
#[derive(Clone, Copy, PartialEq, Eq)]
pub(super) enum Side {
    Left,
    Right,
}

/// Rows under a heading.
pub(super) struct Table {
    sides: Vec<Side>,
    rows: Vec<Vec<String>>,
}

impl Table {
    /// A table with these headings.
    pub(super) fn new<'a>(columns: impl IntoIterator<Item = (&'a str, Side)>) -> Self {
        let (headings, sides): (Vec<String>, Vec<Side>) =
            columns.into_iter().map(|(heading, side)| (heading.to_owned(), side)).unzip();
        Self { sides, rows: vec![headings] }
    }

    pub(super) fn row(&mut self, cells: Vec<String>) {
        self.rows.push(cells);
    }

    /// The lines, indented by two; columns that are empty in every row are left out.
    pub(super) fn lines(&self) -> String {
        let columns: Vec<usize> = (0..self.sides.len())
            .filter(|&column| {
                self.rows.iter().skip(1).any(|row| row.get(column).is_some_and(|c| !c.is_empty()))
            })
            .collect();
        let cell = |row: &'_ [String], column: usize| row.get(column).cloned().unwrap_or_default();
        let widths: Vec<usize> = columns
            .iter()
            .map(|&column| self.rows.iter().map(|row| cell(row, column).width()).max().unwrap_or(0))
            .collect();
        let mut out = String::new();
        for row in &self.rows {
            let mut line = String::new();
            for (&column, &width) in columns.iter().zip(&widths) {
                let text = cell(row, column);
                let room = " ".repeat(width - text.width());
                line.push_str("  ");
                match self.sides[column] {
                    Side::Left => line.extend([text, room]),
                    Side::Right => line.extend([room, text]),
                }
            }
            out.push_str(line.trim_end());
            out.push('\n');
        }
        out
    }
}
