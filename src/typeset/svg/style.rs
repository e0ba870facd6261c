//! Rules of a picture's style sheet, and what they come to for a printer that has no style sheets.

/// A rule, and what differs on dark screens.
#[derive(Clone, Debug)]
pub(super) struct Rule {
    /// The name of a kind (`text`) or a class (`.grid`).
    pub(super) selector: String,
    /// `property:value;property:value`
    pub(super) style: String,
    pub(super) dark: String,
}

/// How something looks on paper.
#[derive(Clone, Debug, Default, PartialEq)]
pub(super) struct Look<'a> {
    /// `#rgb`, `#rrggbb`; none is transparent.
    pub(super) fill: Option<&'a str>,
    pub(super) stroke: Option<&'a str>,
    /// In pixels.
    pub(super) width: f64,
    /// Lengths of strokes and gaps.
    pub(super) dashes: Vec<f64>,
    pub(super) opacity: Option<f64>,
    pub(super) round: bool,
    /// Of text, in pixels.
    pub(super) size: f64,
    pub(super) italic: bool,
    pub(super) bold: bool,
}

/// What the rules give for a kind of item with these classes.
pub(super) fn look<'a>(rules: &'a [Rule], kind: &str, classes: &str) -> Look<'a> {
    let mut look = Look { fill: Some("#000"), width: 1.0, size: 13.0, ..Look::default() };
    // A class counts more than a kind, as in a style sheet.
    for by_class in [false, true] {
        for rule in rules {
            let applies = match rule.selector.strip_prefix('.') {
                Some(class) => by_class && classes.split(' ').any(|one| one == class),
                None => !by_class && rule.selector == kind,
            };
            if applies {
                rule.style.split(';').for_each(|one| look.take(one));
            }
        }
    }
    look
}

impl<'a> Look<'a> {
    fn take(&mut self, declaration: &'a str) {
        let Some((property, value)) = declaration.split_once(':') else { return };
        let value = value.trim();
        let colour = (value != "none").then_some(value);
        let number = |text: &str| text.trim_end_matches("px").parse::<f64>().ok();
        match property.trim() {
            "fill" => self.fill = colour,
            "stroke" => self.stroke = colour,
            "stroke-width" => self.width = number(value).unwrap_or(self.width),
            "stroke-dasharray" => self.dashes = value.split(' ').filter_map(number).collect(),
            "stroke-linejoin" | "stroke-linecap" => self.round |= value == "round",
            "opacity" | "fill-opacity" => self.opacity = number(value),
            "font-size" => self.size = number(value).unwrap_or(self.size),
            "font" => {
                self.size = value.split(' ').find_map(number).unwrap_or(self.size);
            }
            "font-style" => self.italic = value == "italic",
            "font-weight" => self.bold = value == "bold",
            _ => {}
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn later_rules_and_classes_count() {
        let rule = |selector: &str, style: &str| Rule {
            selector: selector.to_owned(),
            style: style.to_owned(),
            dark: String::new(),
        };
        let rules = [
            rule(".node", "fill:#a03c14"),
            rule("text", "font:13px sans-serif;fill:#222"),
            rule(".curve", "fill:none;stroke:#05a;stroke-width:2;stroke-dasharray:5 4"),
        ];
        let text = look(&rules, "text", "node small");
        assert_eq!((text.fill, text.size), (Some("#a03c14"), 13.0));
        let curve = look(&rules, "path", "curve");
        assert_eq!((curve.fill, curve.stroke, curve.width), (None, Some("#05a"), 2.0));
        assert_eq!(curve.dashes, [5.0, 4.0]);
    }
}
