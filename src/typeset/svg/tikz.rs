//! The same picture in TikZ, for LaTeX with the packages `tikz` (library `svg.path`) and `xcolor`.
//!
//! A pixel is a point; y turns downwards by the scale of the picture. Colours are those of paper.

use std::fmt::Write;

use super::style::{Look, look};
use super::{Anchor, Item, Picture, number};

impl Picture {
    /// The picture as a `tikzpicture`. `text` makes plain text safe for LaTeX.
    #[must_use]
    pub fn tikz(&self, text: impl Fn(&str) -> String) -> String {
        let [width, height] = self.size.map(number);
        let mut out = format!(
            "\\begin{{tikzpicture}}[yscale=-1,inner sep=0pt]\n\\useasboundingbox (0pt,0pt) rectangle \
             ({width}pt,{height}pt);\n"
        );
        for item in &self.items {
            self.tikz_item(&mut out, item, &text);
        }
        out.push_str("\\end{tikzpicture}\n");
        out
    }

    /// Width in pixels.
    #[must_use]
    pub fn width(&self) -> f64 {
        self.size[0]
    }

    fn tikz_item(&self, out: &mut String, item: &Item, safe: &impl Fn(&str) -> String) {
        let look = |kind, class| look(&self.rules, kind, class);
        let point = |[x, y]: [f64; 2]| format!("({}pt,{}pt)", number(x), number(y));
        let end = |[x, y]: [f64; 2], [w, h]: [f64; 2]| point([x + w, y + h]);
        let _ = match item {
            Item::Path { class, data } => {
                writeln!(out, "\\path[{}] svg {{{data}}};", stroke(&look("path", class)))
            }
            Item::Circle { class, place, radius } => {
                let options = stroke(&look("circle", class));
                let radius = number(*radius);
                writeln!(out, "\\path[{options}] {} circle ({radius}pt);", point(*place))
            }
            Item::Rectangle { class, corner, size } => {
                let options = stroke(&look("rect", class));
                let (from, to) = (point(*corner), end(*corner, *size));
                writeln!(out, "\\path[{options}] {from} rectangle {to};")
            }
            Item::Text { class, place, anchor, turned, text } => {
                let look = look("text", class);
                let anchor = match anchor {
                    Anchor::Start => "base west",
                    Anchor::Middle => "base",
                    Anchor::End => "base east",
                };
                let turn = if *turned { ",rotate=90" } else { "" };
                let (size, line) = (number(look.size), number(1.2 * look.size));
                let colour = look.fill.map(colour).unwrap_or_else(|| "black".to_owned());
                let face = match (look.italic, look.bold) {
                    (true, _) => "\\itshape",
                    (false, true) => "\\bfseries",
                    (false, false) => "",
                };
                writeln!(
                    out,
                    "\\node[anchor={anchor},text={colour}{turn}] at {} \
                     {{\\fontsize{{{size}}}{{{line}}}\\selectfont\\sffamily{face} {}}};",
                    point(*place),
                    safe(text)
                )
            }
            Item::BeginClip { corner, size } => {
                let (from, to) = (point(*corner), end(*corner, *size));
                writeln!(out, "\\begin{{scope}}\\clip {from} rectangle {to};")
            }
            Item::EndClip => writeln!(out, "\\end{{scope}}"),
        };
    }
}

/// The options of a path.
fn stroke(look: &Look<'_>) -> String {
    let mut options = vec![format!("line width={}pt", number(look.width))];
    options.extend(look.fill.map(|fill| format!("fill={}", colour(fill))));
    options.extend(look.stroke.map(|stroke| format!("draw={}", colour(stroke))));
    options.extend(look.opacity.map(|opacity| format!("opacity={}", number(opacity))));
    if look.round {
        options.push("line join=round,line cap=round".to_owned());
    }
    if !look.dashes.is_empty() {
        let mut pattern = String::from("dash pattern=");
        for (index, &length) in look.dashes.iter().enumerate() {
            let word = if index % 2 == 0 { "on" } else { "off" };
            let _ = write!(pattern, "{word} {}pt ", number(length));
        }
        options.push(pattern.trim_end().to_owned());
    }
    options.join(",")
}

/// `#1a2b3c` in the words of `xcolor`.
fn colour(hexadecimal: &str) -> String {
    let digits = hexadecimal.trim_start_matches('#');
    let channel = |index: usize| match digits.len() {
        3 => u32::from_str_radix(&digits[index..=index], 16).map(|value| 17 * value),
        6 => u32::from_str_radix(&digits[2 * index..2 * index + 2], 16),
        _ => Ok(0),
    };
    let [r, g, b] = [0, 1, 2].map(|index| channel(index).unwrap_or(0));
    format!("{{rgb,255:red,{r};green,{g};blue,{b}}}")
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn strokes_and_texts() {
        let mut picture = Picture::new("try", [100.0, 50.0], "a", "b");
        picture.rule(".curve", "fill:none;stroke:#05a;stroke-width:2;stroke-dasharray:5 4", "");
        picture.path("curve", &[[0.0, 0.0], [1.0, 2.5]]);
        picture.text("", [1.0, 2.0], Anchor::End, "50 %");
        let text = picture.tikz(|text| text.replace('%', "\\%"));
        let path = "\\path[line width=2pt,draw={rgb,255:red,0;green,85;blue,170},dash pattern=on 5pt off \
                    4pt] svg {M0 0L1 2.5};\n";
        assert!(text.contains(path), "{text}");
        assert!(text.contains("base east") && text.contains("50 \\%"), "{text}");
    }
}
