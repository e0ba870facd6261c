//! What is on the sheet: strokes, shapes and texts with the room they take, and their SVG.
//!
//! All escaping and all printing of numbers happens here. Lengths are user units (pixels at 100 %),
//! x to the right and y downwards. Texts are measured by a table of widths that is on the wide side
//! of common sans-serif faces, so that what has room here has room on the screen.

use std::fmt::Write;

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

/// Where a text stands about its point.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Anchor {
    Start,
    Middle,
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
        };
        Room { left, top: self.y - ASCENT, right: left + wide, bottom: self.y + DESCENT }
    }
}

/// The sheet.
#[derive(Clone, Debug, Default)]
pub(super) struct Canvas {
    pub(super) wires: Vec<[f64; 4]>,
    shapes: String,
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
        let _ = writeln!(self.shapes, "<path class=\"body\" d=\"{data}\"/>");
    }

    /// A shape that is filled with the colour of the lines.
    pub(super) fn solid(&mut self, data: &str) {
        let _ = writeln!(self.shapes, "<path class=\"solid\" d=\"{data}\"/>");
    }

    /// A circle of the class `body`.
    pub(super) fn circle(&mut self, x: f64, y: f64, radius: f64) {
        let (x, y, radius) = (number(x), number(y), number(radius));
        let _ =
            writeln!(self.shapes, "<circle class=\"body\" cx=\"{x}\" cy=\"{y}\" r=\"{radius}\"/>");
    }

    /// A text; an empty one is left out.
    pub(super) fn text(&mut self, x: f64, y: f64, anchor: Anchor, face: Face, content: &str) {
        if !content.is_empty() {
            self.texts.push(Text { x, y, anchor, face, content: content.to_owned() });
        }
    }

    /// The whole picture.
    pub(super) fn svg(&self, size: (f64, f64), title: &str, description: &str) -> String {
        let (width, height) = (number(size.0.ceil()), number(size.1.ceil()));
        let mut out = String::new();
        let _ = writeln!(
            out,
            "<svg xmlns=\"http://www.w3.org/2000/svg\" width=\"{width}\" height=\"{height}\" \
             viewBox=\"0 0 {width} {height}\" role=\"img\" aria-labelledby=\"circuit-title circuit-description\">\n\
             <title id=\"circuit-title\">{}</title>\n<desc id=\"circuit-description\">{}</desc>\n\
             <style>{STYLE}</style>\n<rect class=\"sheet\" width=\"{width}\" height=\"{height}\"/>",
            escaped(title),
            escaped(description)
        );
        if !self.wires.is_empty() {
            out.push_str("<path class=\"wire\" d=\"");
            for [x1, y1, x2, y2] in &self.wires {
                let [x1, y1, x2, y2] = [x1, y1, x2, y2].map(|value| number(*value));
                let _ = write!(out, "M{x1} {y1}L{x2} {y2}");
            }
            out.push_str("\"/>\n");
        }
        out.push_str(&self.shapes);
        for &(x, y) in &self.dots {
            let _ = writeln!(
                out,
                "<circle class=\"dot\" cx=\"{}\" cy=\"{}\" r=\"2.6\"/>",
                number(x),
                number(y)
            );
        }
        for text in &self.texts {
            let anchor = match text.anchor {
                Anchor::Start => "",
                Anchor::Middle => " text-anchor=\"middle\"",
            };
            let _ = writeln!(
                out,
                "<text class=\"{}\" x=\"{}\" y=\"{}\"{anchor}>{}</text>",
                text.face.class(),
                number(text.x),
                number(text.y),
                escaped(&text.content)
            );
        }
        out.push_str("</svg>\n");
        out
    }
}

/// Plain colours, and overrides where the reader wants a dark page.
const STYLE: &str = "
.sheet { fill: #fdfdfb }
.wire { fill: none; stroke: #2b3a42; stroke-width: 1.4; stroke-linecap: square }
.body { fill: #fdfdfb; stroke: #0b5563; stroke-width: 1.6; stroke-linejoin: round }
.solid { fill: #0b5563; stroke: none }
.dot { fill: #2b3a42 }
text { font-family: sans-serif; font-size: 12px; fill: #1c262b }
.value { font-size: 11px; fill: #55636b }
.node { fill: #a03c14 }
.sign { font-size: 10px; fill: #0b5563 }
@media (prefers-color-scheme: dark) {
.sheet { fill: #14191c }
.wire { stroke: #b9c4ca }
.body { fill: #14191c; stroke: #6cc3d5 }
.solid { fill: #6cc3d5 }
.dot { fill: #b9c4ca }
text { fill: #e6ebee }
.value { fill: #9fadb5 }
.node { fill: #f0a37f }
.sign { fill: #6cc3d5 }
}
";

/// A length with at most two decimals.
pub(super) fn number(value: f64) -> String {
    let text = format!("{value:.2}");
    let short = text.trim_end_matches('0').trim_end_matches('.');
    if short == "-0" { "0".to_owned() } else { short.to_owned() }
}

/// Text for XML.
fn escaped(text: &str) -> String {
    let mut out = String::with_capacity(text.len());
    for letter in text.chars() {
        match letter {
            '&' => out.push_str("&amp;"),
            '<' => out.push_str("&lt;"),
            '>' => out.push_str("&gt;"),
            '"' => out.push_str("&quot;"),
            // XML 1.0 has no place for other control characters.
            letter if letter.is_control() => out.push(' '),
            letter => out.push(letter),
        }
    }
    out
}
