//! A frame with two scales, a grid, and curves cut off at its edges.

use super::scale::Scale;
use super::{LEFT, RIGHT};
use crate::typeset::svg::{Anchor, Axis, Picture};

/// A frame on the sheet.
pub(super) struct Panel {
    pub(super) x: Axis,
    pub(super) y: Axis,
    top: f64,
    bottom: f64,
}

impl Panel {
    /// A frame between two heights, over the whole width.
    pub(super) fn new([top, bottom]: [f64; 2], across: &Scale, up: &Scale) -> Self {
        Self {
            x: Axis { values: across.range, places: [LEFT, RIGHT] },
            y: Axis { values: up.range, places: [bottom, top] },
            top,
            bottom,
        }
    }

    /// The place of a point; what is not a number, or far away, stays near the frame.
    pub(super) fn place(&self, [x, y]: [f64; 2]) -> [f64; 2] {
        let height = self.bottom - self.top;
        let up = self.y.place(y);
        let up = if up.is_nan() { self.bottom + height } else { up };
        [self.x.place(x), up.clamp(self.top - height, self.bottom + height)]
    }

    /// Grid, frame and the words at the left; those below where asked for.
    pub(super) fn ground(
        &self,
        picture: &mut Picture,
        (across, up): (&Scale, &Scale),
        title: &str,
        below: Option<&str>,
    ) {
        let (top, bottom) = (self.top, self.bottom);
        for &value in &across.fine {
            let x = self.x.place(value);
            picture.line("fine", [x, top], [x, bottom]);
        }
        for &value in &up.fine {
            let y = self.y.place(value);
            picture.line("fine", [LEFT, y], [RIGHT, y]);
        }
        for (value, words) in &across.marks {
            let x = self.x.place(*value);
            picture.line("grid", [x, top], [x, bottom]);
            if below.is_some() {
                picture.text("", [x, bottom + 18.0], Anchor::Middle, words);
            }
        }
        for (value, words) in &up.marks {
            let y = self.y.place(*value);
            picture.line("grid", [LEFT, y], [RIGHT, y]);
            picture.text("", [LEFT - 7.0, y + 4.5], Anchor::End, words);
        }
        picture.rectangle("frame", [LEFT, top], [RIGHT - LEFT, bottom - top]);
        let middle = (top + bottom) / 2.0;
        picture.upright_text("", [14.0, middle], Anchor::Middle, title);
        if let Some(words) = below {
            let centre = (LEFT + RIGHT) / 2.0;
            picture.text("", [centre, bottom + 37.0], Anchor::Middle, words);
        }
    }

    /// What is drawn inside is cut off at the frame.
    pub(super) fn inside(&self, picture: &mut Picture, draw: impl FnOnce(&mut Picture)) {
        picture.begin_clip([LEFT, self.top], [RIGHT - LEFT, self.bottom - self.top]);
        draw(picture);
        picture.end_clip();
    }

    /// A curve through these points.
    pub(super) fn curve(
        &self,
        picture: &mut Picture,
        class: &str,
        points: impl IntoIterator<Item = [f64; 2]>,
    ) {
        let places: Vec<[f64; 2]> = points.into_iter().map(|point| self.place(point)).collect();
        picture.path(class, &places);
    }

    /// The area between two curves: x, and the lower and the upper y.
    pub(super) fn area(
        &self,
        picture: &mut Picture,
        class: &str,
        points: impl IntoIterator<Item = (f64, [f64; 2])>,
    ) {
        let points: Vec<(f64, [f64; 2])> = points.into_iter().collect();
        let upper = points.iter().map(|&(x, [_, high])| self.place([x, high]));
        let lower = points.iter().rev().map(|&(x, [low, _])| self.place([x, low]));
        let corners: Vec<[f64; 2]> = upper.chain(lower).collect();
        picture.polygon(class, &corners);
    }
}
