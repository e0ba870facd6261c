//! Pictures: the few pieces of SVG 1.1 that plots need, written by hand.
//!
//! Coordinates have two decimals. Every text is escaped in one place. Colours stand in rules of a
//! style sheet, with overrides for dark surroundings by `prefers-color-scheme`, and every rule
//! begins with the identifier of its picture, so that several can share one page. A picture has a
//! title and a description for those who do not see it.

mod axis;

pub use axis::{Axis, label, ticks};

use std::fmt::Write;

/// A picture under construction.
#[derive(Clone, Debug)]
pub struct Picture {
    identifier: String,
    width: f64,
    height: f64,
    title: String,
    description: String,
    rules: String,
    dark_rules: String,
    body: String,
    clips: u32,
}

impl Picture {
    /// An empty picture of that size, in pixels; the identifier is what rules and labels refer to.
    #[must_use]
    pub fn new(
        identifier: &str,
        [width, height]: [f64; 2],
        title: &str,
        description: &str,
    ) -> Self {
        let mut picture = Self {
            identifier: plain(identifier),
            width,
            height,
            title: title.to_owned(),
            description: description.to_owned(),
            rules: String::new(),
            dark_rules: String::new(),
            body: String::new(),
            clips: 0,
        };
        picture.rule("text", "font:13px sans-serif;fill:#222", "fill:#ddd");
        picture.rule(".frame", "fill:none;stroke:#888;stroke-width:1", "stroke:#777");
        picture.rule(".grid", "fill:none;stroke:#ddd;stroke-width:1", "stroke:#3a3a3a");
        picture.rule(".axis", "fill:none;stroke:#555;stroke-width:1.2", "stroke:#aaa");
        picture.rule(".name", "font-style:italic", "");
        picture
    }

    /// A rule for what the selector finds in this picture, and what differs in dark surroundings.
    pub fn rule(&mut self, selector: &str, style: &str, dark: &str) {
        let id = &self.identifier;
        let _ = writeln!(self.rules, "#{id} {selector}{{{style}}}");
        if !dark.is_empty() {
            let _ = writeln!(self.dark_rules, "#{id} {selector}{{{dark}}}");
        }
    }

    /// A straight line.
    pub fn line(&mut self, class: &str, [x1, y1]: [f64; 2], [x2, y2]: [f64; 2]) {
        self.path(class, &[[x1, y1], [x2, y2]]);
    }

    /// A polyline.
    pub fn path(&mut self, class: &str, points: &[[f64; 2]]) {
        let mut data = String::new();
        for (index, &[x, y]) in points.iter().enumerate() {
            let command = if index == 0 { 'M' } else { 'L' };
            let _ = write!(data, "{command}{} {}", number(x), number(y));
        }
        let _ = writeln!(self.body, "<path class=\"{}\" d=\"{data}\"/>", escaped(class));
    }

    /// A circle.
    pub fn circle(&mut self, class: &str, [x, y]: [f64; 2], radius: f64) {
        let (x, y, r) = (number(x), number(y), number(radius));
        let class = escaped(class);
        let _ = writeln!(self.body, "<circle class=\"{class}\" cx=\"{x}\" cy=\"{y}\" r=\"{r}\"/>");
    }

    /// A rectangle from its upper left corner.
    pub fn rectangle(&mut self, class: &str, [x, y]: [f64; 2], [width, height]: [f64; 2]) {
        let (x, y, w, h) = (number(x), number(y), number(width), number(height));
        let class = escaped(class);
        let _ = writeln!(
            self.body,
            "<rect class=\"{class}\" x=\"{x}\" y=\"{y}\" width=\"{w}\" height=\"{h}\"/>"
        );
    }

    /// A text; `anchor` is `start`, `middle` or `end`.
    pub fn text(&mut self, class: &str, [x, y]: [f64; 2], anchor: &str, text: &str) {
        let (x, y, text) = (number(x), number(y), escaped(text));
        let (class, anchor) = (escaped(class), escaped(anchor));
        let _ = writeln!(
            self.body,
            "<text class=\"{class}\" x=\"{x}\" y=\"{y}\" text-anchor=\"{anchor}\">{text}</text>"
        );
    }

    /// Begins a group that is cut off at a rectangle; [`Self::end_clip`] ends it.
    pub fn begin_clip(&mut self, [x, y]: [f64; 2], [width, height]: [f64; 2]) {
        let (x, y, w, h) = (number(x), number(y), number(width), number(height));
        self.clips += 1;
        let id = format!("{}-clip-{}", self.identifier, self.clips);
        let _ = writeln!(
            self.body,
            "<clipPath id=\"{id}\"><rect x=\"{x}\" y=\"{y}\" width=\"{w}\" height=\"{h}\"/></clipPath>\n\
             <g clip-path=\"url(#{id})\">"
        );
    }

    /// Ends the group of [`Self::begin_clip`].
    pub fn end_clip(&mut self) {
        self.body.push_str("</g>\n");
    }

    /// The whole picture.
    #[must_use]
    pub fn finish(self) -> String {
        let Self { identifier: id, rules, dark_rules, body, .. } = &self;
        let (width, height) = (number(self.width), number(self.height));
        let (title, description) = (escaped(&self.title), escaped(&self.description));
        format!(
            "<svg xmlns=\"http://www.w3.org/2000/svg\" id=\"{id}\" role=\"img\" width=\"{width}\" \
             height=\"{height}\" viewBox=\"0 0 {width} {height}\" aria-labelledby=\"{id}-title \
             {id}-description\">\n<title id=\"{id}-title\">{title}</title>\n<desc \
             id=\"{id}-description\">{description}</desc>\n<style>\n{rules}@media \
             (prefers-color-scheme: dark){{\n{dark_rules}}}\n</style>\n{body}</svg>\n"
        )
    }
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

/// A text between tags or in quotes; characters that XML does not allow are left out.
#[must_use]
pub fn escaped(text: &str) -> String {
    let mut out = String::with_capacity(text.len());
    for c in text.chars() {
        match c {
            '&' => out.push_str("&amp;"),
            '<' => out.push_str("&lt;"),
            '>' => out.push_str("&gt;"),
            '"' => out.push_str("&quot;"),
            '\t' | '\n' | '\r' => out.push(' '),
            '\u{fffe}' | '\u{ffff}' => {}
            c if c.is_control() => {}
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
        assert_eq!(escaped("a<b & \"c\"\u{1}"), "a&lt;b &amp; &quot;c&quot;");
        assert_eq!(plain("2 β"), "p2--");
    }

    #[test]
    fn a_picture_is_well_formed() {
        let mut picture = Picture::new("try", [100.0, 50.0], "a < b", "with \"quotes\" & more");
        picture.rule(".line", "stroke:#000", "stroke:#fff");
        picture.begin_clip([0.0, 0.0], [100.0, 50.0]);
        picture.line("line", [0.0, 0.0], [1.0, 2.0]);
        picture.end_clip();
        picture.text("", [1.0, 2.0], "middle", "<>&\"");
        let text = picture.finish();
        let document = roxmltree::Document::parse(&text).expect("well formed");
        let title = document.descendants().find(|node| node.has_tag_name("title"));
        assert_eq!(title.and_then(|node| node.text()), Some("a < b"));
        assert!(!text.contains("var("));
    }
}
