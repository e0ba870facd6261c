//! What is on the sheet: strokes, shapes and texts with the room they take.
//!
//! [`Picture`] escapes and prints. Lengths are user units (pixels at 100 %),
//! x to the right and y downwards. Texts are measured by a table of widths that is on the wide side
//! of common sans-serif faces, so that what has room here has room on the screen.

pub(super) use crate::typeset::svg::{Anchor, number};

use crate::typeset::svg::{Picture, polyline};

/// Height of a line of text above its base line, and below.
pub(super) const ASCENT: f64 = 9.5;
pub(super) const DESCENT: f64 = 3.0;

/// An upright rectangle.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Room {
    /// Left edge.
    pub left: f64,
    /// Upper edge.
    pub top: f64,
    /// Right edge.
    pub right: f64,
    /// Lower edge.
    pub bottom: f64,
}

impl Room {
    /// True where the insides meet.
    pub fn overlaps(&self, other: &Self) -> bool {
        self.left < other.right
            && other.left < self.right
            && self.top < other.bottom
            && other.top < self.bottom
    }
}

/// How a text looks.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Face {
    /// The name of an element.
    Name,
    /// A value.
    Value,
    /// The name of a node.
    Node,
    /// Small signs inside symbols.
    Sign,
}

impl Face {
    fn class(self) -> &'static str {
        match self {
            Self::Name => "name",
            Self::Value => "value",
            Self::Node => "node",
            Self::Sign => "sign",
        }
    }

    /// Size of the letters.
    fn size(self) -> f64 {
        match self {
            Self::Name | Self::Node => 12.0,
            Self::Value => 11.0,
            Self::Sign => 10.0,
        }
    }
}

/// The width of a text.
pub(super) fn width(text: &str, face: Face) -> f64 {
    let letters: f64 = text
        .chars()
        .map(|letter| match letter {
            'i' | 'j' | 'l' | '.' | ',' | ':' | ';' | '\'' | '|' | ' ' | 'I' => 0.34,
            'f' | 'r' | 't' | '(' | ')' | '[' | ']' | '/' | '-' | '·' => 0.42,
            'm' | 'w' | 'M' | 'W' | '%' => 0.98,
            '+' | '=' | '<' | '>' | '±' | '−' | '*' => 0.84,
            'A'..='Z' | 'Ω' | '∥' => 0.76,
            letter if letter.is_ascii() => 0.63,
            letter => 0.8 * unicode_width::UnicodeWidthChar::width(letter).unwrap_or(1) as f64,
        })
        .sum();
    letters * face.size()
}

/// A text on the sheet.
#[derive(Clone, Debug)]
pub(super) struct Text {
    pub(super) x: f64,
    pub(super) y: f64,
    pub(super) anchor: Anchor,
    pub(super) face: Face,
    pub(super) content: String,
}

impl Text {
    pub(super) fn room(&self) -> Room {
        let wide = width(&self.content, self.face);
        let left = match self.anchor {
            Anchor::Start => self.x,
            Anchor::Middle => self.x - wide / 2.0,
            Anchor::End => self.x - wide,
        };
        Room { left, top: self.y - ASCENT, right: left + wide, bottom: self.y + DESCENT }
    }
}

/// What a sign is made of.
#[derive(Clone, Debug)]
enum Shape {
    /// A class and path data.
    Path(&'static str, String),
    /// Middle and radius.
    Circle([f64; 2], f64),
}

/// The sheet.
#[derive(Clone, Debug, Default)]
pub(super) struct Canvas {
    pub(super) wires: Vec<[f64; 4]>,
    shapes: Vec<Shape>,
    dots: Vec<(f64, f64)>,
    pub(super) texts: Vec<Text>,
    /// Room of the symbols' bodies.
    pub(super) bodies: Vec<Room>,
}

impl Canvas {
    /// A straight wire.
    pub(super) fn wire(&mut self, x1: f64, y1: f64, x2: f64, y2: f64) {
        if (x1, y1) != (x2, y2) {
            self.wires.push([x1, y1, x2, y2]);
        }
    }

    /// A dot where wires are joined.
    pub(super) fn dot(&mut self, x: f64, y: f64) {
        self.dots.push((x, y));
    }

    /// A shape of the class `body`, by path data.
    pub(super) fn path(&mut self, data: &str) {
        self.shapes.push(Shape::Path("body", data.to_owned()));
    }

    /// A shape that is filled with the colour of the lines.
    pub(super) fn solid(&mut self, data: &str) {
        self.shapes.push(Shape::Path("solid", data.to_owned()));
    }

    /// A circle of the class `body`.
    pub(super) fn circle(&mut self, x: f64, y: f64, radius: f64) {
        self.shapes.push(Shape::Circle([x, y], radius));
    }

    /// A text; an empty one is left out.
    pub(super) fn text(&mut self, x: f64, y: f64, anchor: Anchor, face: Face, content: &str) {
        if !content.is_empty() {
            self.texts.push(Text { x, y, anchor, face, content: content.to_owned() });
        }
    }

    /// The whole picture.
    pub(super) fn picture(&self, size: (f64, f64), title: &str, description: &str) -> Picture {
        let size = [size.0.ceil(), size.1.ceil()];
        let mut picture = Picture::bare("circuit", size, title, description);
        for (selector, style, dark) in STYLE {
            picture.rule(selector, style, dark);
        }
        picture.rectangle("sheet", [0.0, 0.0], size);
        if !self.wires.is_empty() {
            let wires = self.wires.iter().map(|&[x1, y1, x2, y2]| polyline(&[[x1, y1], [x2, y2]]));
            picture.data("wire", wires.collect());
        }
        for shape in &self.shapes {
            match shape {
                Shape::Path(class, data) => picture.data(class, data.clone()),
                Shape::Circle(place, radius) => picture.circle("body", *place, *radius),
            }
        }
        for &(x, y) in &self.dots {
            picture.circle("dot", [x, y], 2.6);
        }
        for text in &self.texts {
            picture.text(text.face.class(), [text.x, text.y], text.anchor, &text.content);
        }
        picture
    }
}

/// Plain colours, and overrides where the reader wants a dark page.
const STYLE: [(&str, &str, &str); 9] = [
    (".sheet", "fill:#fdfdfb", "fill:#14191c"),
    (".wire", "fill:none;stroke:#2b3a42;stroke-width:1.4;stroke-linecap:square", "stroke:#b9c4ca"),
    (
        ".body",
        "fill:#fdfdfb;stroke:#0b5563;stroke-width:1.6;stroke-linejoin:round",
        "fill:#14191c;stroke:#6cc3d5",
    ),
    (".solid", "fill:#0b5563;stroke:none", "fill:#6cc3d5"),
    (".dot", "fill:#2b3a42", "fill:#b9c4ca"),
    ("text", "font-family:sans-serif;font-size:12px;fill:#1c262b", "fill:#e6ebee"),
    (".value", "font-size:11px;fill:#55636b", "fill:#9fadb5"),
    (".node", "fill:#a03c14", "fill:#f0a37f"),
    (".sign", "font-size:10px;fill:#0b5563", "fill:#6cc3d5"),
];
