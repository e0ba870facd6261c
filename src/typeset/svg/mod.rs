//! Pictures: the few kinds of strokes and texts that plots and drawings need, printed as SVG 1.1 by hand,
//! or as TikZ for LaTeX.
//!
//! Lengths are pixels, x to the right and y downwards. Coordinates have two decimals. Every text is
//! escaped in one place per format. Colours stand in rules of a style sheet, with overrides for dark
//! screens by `prefers-color-scheme`, and every rule begins with the identifier of its picture, so that
//! several can share one page. A picture has a title and a description for those who do not see it.

mod axis;
mod style;
mod tikz;

pub use axis::{Axis, label, ticks};

use std::fmt::Write;

use super::visible;
use style::Rule;

/// A picture under construction.
#[derive(Clone, Debug)]
pub struct Picture {
    identifier: String,
    size: [f64; 2],
    title: String,
    description: String,
    rules: Vec<Rule>,
    items: Vec<Item>,
}

/// A stroke or a text, with its classes.
#[derive(Clone, Debug)]
enum Item {
    /// Data in the words of SVG's paths.
    Path {
        class: String,
        data: String,
    },
    Circle {
        class: String,
        place: [f64; 2],
        radius: f64,
    },
    Rectangle {
        class: String,
        corner: [f64; 2],
        size: [f64; 2],
    },
    Text {
        class: String,
        place: [f64; 2],
        anchor: Anchor,
        turned: bool,
        text: String,
    },
    BeginClip {
        corner: [f64; 2],
        size: [f64; 2],
    },
    EndClip,
}

/// Where a text stands about its point.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Anchor {
    /// The text begins there.
    Start,
    /// Its middle is there.
    Middle,
    /// It ends there.
    End,
}

impl Anchor {
    fn name(self) -> &'static str {
        match self {
            Self::Start => "start",
            Self::Middle => "middle",
            Self::End => "end",
        }
    }
}

impl Picture {
    /// An empty picture of that size, in pixels; the identifier is what rules and labels refer to.
    #[must_use]
    pub fn new(identifier: &str, size: [f64; 2], title: &str, description: &str) -> Self {
        let mut picture = Self::bare(identifier, size, title, description);
        picture.rule("text", "font:13px sans-serif;fill:#222", "fill:#ddd");
        picture.rule(".frame", "fill:none;stroke:#888;stroke-width:1", "stroke:#777");
        picture.rule(".grid", "fill:none;stroke:#ddd;stroke-width:1", "stroke:#3a3a3a");
        picture.rule(".axis", "fill:none;stroke:#555;stroke-width:1.2", "stroke:#aaa");
        picture.rule(".name", "font-style:italic", "");
        picture
    }

    /// The same without any rules.
    #[must_use]
    pub fn bare(identifier: &str, size: [f64; 2], title: &str, description: &str) -> Self {
        Self {
            identifier: plain(identifier),
            size,
            title: visible::line(title).into_owned(),
            description: visible::line(description).into_owned(),
            rules: Vec::new(),
            items: Vec::new(),
        }
    }

    /// What rules and labels refer to; unique on a page.
    #[must_use]
    pub fn named(mut self, identifier: &str) -> Self {
        self.identifier = plain(identifier);
        self
    }

    /// What the picture shows.
    #[must_use]
    pub fn title(&self) -> &str {
        &self.title
    }

    /// The same in words for those who do not see it.
    #[must_use]
    pub fn description(&self) -> &str {
        &self.description
    }

    /// A rule for what the selector (`text`, `.class`) finds in this picture, and what differs on dark
    /// screens. Of two rules for one thing the later one counts.
    pub fn rule(&mut self, selector: &str, style: &str, dark: &str) {
        self.rules.push(Rule {
            selector: selector.to_owned(),
            style: style.to_owned(),
            dark: dark.to_owned(),
        });
    }

    /// A straight line.
    pub fn line(&mut self, class: &str, from: [f64; 2], to: [f64; 2]) {
        self.path(class, &[from, to]);
    }

    /// A polyline.
    pub fn path(&mut self, class: &str, points: &[[f64; 2]]) {
        self.data(class, polyline(points));
    }

    /// A closed polygon.
    pub fn polygon(&mut self, class: &str, points: &[[f64; 2]]) {
        self.data(class, polyline(points) + "Z");
    }

    /// A path in the words of SVG: `M`, `L`, `A`, `Z` with numbers.
    pub fn data(&mut self, class: &str, data: String) {
        self.items.push(Item::Path { class: class.to_owned(), data });
    }

    /// A circle.
    pub fn circle(&mut self, class: &str, place: [f64; 2], radius: f64) {
        self.items.push(Item::Circle { class: class.to_owned(), place, radius });
    }

    /// A rectangle from its upper left corner.
    pub fn rectangle(&mut self, class: &str, corner: [f64; 2], size: [f64; 2]) {
        self.items.push(Item::Rectangle { class: class.to_owned(), corner, size });
    }

    /// A text.
    pub fn text(&mut self, class: &str, place: [f64; 2], anchor: Anchor, text: &str) {
        self.put_text(class, place, anchor, false, text);
    }

    /// A text that reads upwards.
    pub fn upright_text(&mut self, class: &str, place: [f64; 2], anchor: Anchor, text: &str) {
        self.put_text(class, place, anchor, true, text);
    }

    fn put_text(&mut self, class: &str, place: [f64; 2], anchor: Anchor, turned: bool, text: &str) {
        let (class, text) = (class.to_owned(), visible::line(text).into_owned());
        self.items.push(Item::Text { class, place, anchor, turned, text });
    }

    /// Begins a group that is cut off at a rectangle; [`Self::end_clip`] ends it.
    pub fn begin_clip(&mut self, corner: [f64; 2], size: [f64; 2]) {
        self.items.push(Item::BeginClip { corner, size });
    }

    /// Ends the group of [`Self::begin_clip`].
    pub fn end_clip(&mut self) {
        self.items.push(Item::EndClip);
    }

    /// The picture as an SVG element.
    #[must_use]
    pub fn svg(&self) -> String {
        let id = &self.identifier;
        let [width, height] = self.size.map(number);
        let (title, description) = (escaped(&self.title), escaped(&self.description));
        let mut out = format!(
            "<svg xmlns=\"http://www.w3.org/2000/svg\" id=\"{id}\" role=\"img\" width=\"{width}\" \
             height=\"{height}\" viewBox=\"0 0 {width} {height}\" aria-labelledby=\"{id}-title \
             {id}-description\">\n<title id=\"{id}-title\">{title}</title>\n<desc \
             id=\"{id}-description\">{description}</desc>\n<style>\n"
        );
        for Rule { selector, style, .. } in &self.rules {
            let _ = writeln!(out, "#{id} {selector}{{{style}}}");
        }
        out.push_str("@media screen and (prefers-color-scheme: dark){\n");
        for Rule { selector, dark, .. } in self.rules.iter().filter(|rule| !rule.dark.is_empty()) {
            let _ = writeln!(out, "#{id} {selector}{{{dark}}}");
        }
        out.push_str("}\n</style>\n");
        let mut clips = 0;
        for item in &self.items {
            self.item(&mut out, item, &mut clips);
        }
        out.push_str("</svg>\n");
        out
    }

    fn item(&self, out: &mut String, item: &Item, clips: &mut u32) {
        let class = |class: &String| match class.as_str() {
            "" => String::new(),
            class => format!(" class=\"{}\"", escaped(class)),
        };
        let _ = match item {
            Item::Path { class: c, data } => {
                writeln!(out, "<path{} d=\"{}\"/>", class(c), escaped(data))
            }
            Item::Circle { class: c, place, radius } => {
                let ([x, y], r) = (place.map(number), number(*radius));
                writeln!(out, "<circle{} cx=\"{x}\" cy=\"{y}\" r=\"{r}\"/>", class(c))
            }
            Item::Rectangle { class: c, corner, size } => {
                let ([x, y], [w, h]) = (corner.map(number), size.map(number));
                let class = class(c);
                writeln!(out, "<rect{class} x=\"{x}\" y=\"{y}\" width=\"{w}\" height=\"{h}\"/>")
            }
            Item::Text { class: c, place, anchor, turned, text } => {
                let [x, y] = place.map(number);
                let turn = if *turned {
                    format!(" transform=\"rotate(-90 {x} {y})\"")
                } else {
                    String::new()
                };
                let (class, anchor, text) = (class(c), anchor.name(), escaped(text));
                writeln!(
                    out,
                    "<text{class} x=\"{x}\" y=\"{y}\" text-anchor=\"{anchor}\"{turn}>{text}</text>"
                )
            }
            Item::BeginClip { corner, size } => {
                let ([x, y], [w, h]) = (corner.map(number), size.map(number));
                *clips += 1;
                let id = format!("{}-clip-{clips}", self.identifier);
                writeln!(
                    out,
                    "<clipPath id=\"{id}\"><rect x=\"{x}\" y=\"{y}\" width=\"{w}\" \
                     height=\"{h}\"/></clipPath>\n<g clip-path=\"url(#{id})\">"
                )
            }
            Item::EndClip => writeln!(out, "</g>"),
        };
    }
}

/// The path through these points.
#[must_use]
pub fn polyline(points: &[[f64; 2]]) -> String {
    let mut data = String::new();
    for (index, &[x, y]) in points.iter().enumerate() {
        let command = if index == 0 { 'M' } else { 'L' };
        let _ = write!(data, "{command}{} {}", number(x), number(y));
    }
    data
}

/// A coordinate with at most two decimals.
#[must_use]
pub fn number(value: f64) -> String {
    if !value.is_finite() {
        return "0".to_owned();
    }
    let text = format!("{value:.2}");
    let text = text.trim_end_matches('0').trim_end_matches('.');
    if text == "-0" { "0".to_owned() } else { text.to_owned() }
}

/// A text between tags or in quotes, for XML and HTML.
#[must_use]
pub fn escaped(text: &str) -> String {
    let mut out = String::with_capacity(text.len());
    for c in text.chars() {
        match c {
            '&' => out.push_str("&amp;"),
            '<' => out.push_str("&lt;"),
            '>' => out.push_str("&gt;"),
            '"' => out.push_str("&quot;"),
            '\'' => out.push_str("&#39;"),
            c => out.push(c),
        }
    }
    out
}

/// An identifier of letters, digits and hyphens that begins with a letter.
fn plain(text: &str) -> String {
    let rest: String =
        text.chars().map(|c| if c.is_ascii_alphanumeric() { c } else { '-' }).collect();
    if rest.starts_with(|c: char| c.is_ascii_alphabetic()) { rest } else { format!("p{rest}") }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn numbers_and_texts() {
        let check = |value: f64, expected: &str| assert_eq!(number(value), expected);
        check(1.0, "1");
        check(-0.001, "0");
        check(12.345, "12.35");
        check(f64::NAN, "0");
        assert_eq!(escaped("a<b & \"c\""), "a&lt;b &amp; &quot;c&quot;");
        assert_eq!(plain("2 β"), "p2--");
    }

    #[test]
    fn a_picture_is_well_formed() {
        let mut picture =
            Picture::new("try", [100.0, 50.0], "a < b\u{1}", "with \"quotes\" & more");
        picture.rule(".line", "stroke:#000", "stroke:#fff");
        picture.begin_clip([0.0, 0.0], [100.0, 50.0]);
        picture.line("line", [0.0, 0.0], [1.0, 2.0]);
        picture.end_clip();
        picture.text("", [1.0, 2.0], Anchor::Middle, "<>&\"");
        let text = picture.svg();
        let document = roxmltree::Document::parse(&text).expect("well formed");
        let title = document.descendants().find(|node| node.has_tag_name("title"));
        assert_eq!(title.and_then(|node| node.text()), Some("a < b⟨U+0001⟩"));
        assert!(!text.contains("var("));
    }
}
