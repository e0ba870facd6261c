//! A note as Markdown (CommonMark with pipe tables and `$…$`), its pictures as SVG files beside it.

use std::fmt::Write;

use super::document::{Block, Document, Figure, Inline, Table};
use crate::typeset::visible;

/// The text, and the pictures that belong beside it: file names and SVG.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Written {
    /// The text.
    pub text: String,
    /// Names of files and what they hold.
    pub pictures: Vec<(String, String)>,
}

/// The note. The names of the picture files begin with `stem`; without one there are no files, and
/// every picture is told in words.
pub fn write(document: &Document, stem: Option<&str>) -> Written {
    let mut written = Written { text: String::new(), pictures: Vec::new() };
    let _ = writeln!(written.text, "# {}\n", text(&document.title));
    for block in &document.blocks {
        write_block(&mut written, block, stem);
    }
    written
}

/// Text of a line: the one place where it is made safe. What could begin a construct is escaped; `<`,
/// `>` and `&` are written as HTML has them, for readers that let HTML through.
fn text(plain: &str) -> String {
    let mut out = String::with_capacity(plain.len());
    let mut at_start = true;
    let mut digits_only = true;
    for c in visible::line(plain).chars() {
        match c {
            '&' => out.push_str("&amp;"),
            '<' => out.push_str("&lt;"),
            '>' => out.push_str("&gt;"),
            '\\' | '`' | '*' | '_' | '{' | '}' | '[' | ']' | '#' | '|' | '$' | '~' | '!' => {
                out.push('\\');
                out.push(c);
            }
            // A list, a rule or a heading only where a line begins.
            '-' | '+' | '=' if at_start => {
                out.push('\\');
                out.push(c);
            }
            '.' | ')' if digits_only && !at_start => {
                out.push('\\');
                out.push(c);
            }
            c => out.push(c),
        }
        digits_only &= c.is_ascii_digit();
        at_start &= c == ' ';
    }
    out
}

/// A span of code: its fence is longer than any run of backticks inside.
fn code(plain: &str, in_table: bool) -> String {
    let line = visible::line(plain);
    let line = if in_table { line.replace('|', "\\|") } else { line.into_owned() };
    if line.trim().is_empty() {
        return String::new();
    }
    let fence = "`".repeat(longest_run(&line) + 1);
    let room = if line.starts_with('`') || line.ends_with('`') { " " } else { "" };
    format!("{fence}{room}{line}{room}{fence}")
}

fn longest_run(text: &str) -> usize {
    let mut longest = 0;
    let mut run = 0;
    for c in text.chars() {
        run = if c == '`' { run + 1 } else { 0 };
        longest = longest.max(run);
    }
    longest
}

fn write_block(written: &mut Written, block: &Block, stem: Option<&str>) {
    let out = &mut written.text;
    let _ = match block {
        Block::Heading(level, content) => {
            let marks = "#".repeat(usize::from(*level) + 1);
            writeln!(out, "{marks} {}\n", inlines(content, false))
        }
        Block::Paragraph(content) => writeln!(out, "{}\n", inlines(content, false)),
        Block::List(items) => {
            for item in items {
                let _ = writeln!(out, "- {}", inlines(item, false));
            }
            writeln!(out)
        }
        Block::Equation(math) => {
            // One line: an empty one inside would end the formula.
            let formula = math.latex.replace('\n', " ");
            writeln!(out, "$$ {formula} $$\n")
        }
        Block::Table(shown) => table(out, shown),
        Block::Figure(Figure { name, picture, caption }) => {
            match stem {
                Some(stem) => {
                    let file = format!("{stem}-{name}.svg");
                    let title = text(picture.title());
                    let _ = writeln!(out, "![{title}](<{}>)\n", target(&file));
                    written.pictures.push((file, picture.svg()));
                }
                None => {
                    let _ = writeln!(
                        out,
                        "Picture: {}. {}\n",
                        text(picture.title()),
                        text(picture.description())
                    );
                }
            }
            writeln!(out, "{}\n", inlines(caption, false))
        }
        Block::Listing(listing) => {
            let listing = visible::lines(listing);
            let fence = "`".repeat(longest_run(&listing).max(2) + 1);
            writeln!(out, "{fence}text\n{}\n{fence}\n", listing.trim_end_matches('\n'))
        }
    };
}

/// The name of a file as the target of a link.
fn target(file: &str) -> String {
    let mut out = String::new();
    for byte in file.bytes() {
        match byte {
            b'a'..=b'z' | b'A'..=b'Z' | b'0'..=b'9' | b'-' | b'.' | b'_' => out.push(byte as char),
            byte => out.push_str(&format!("%{byte:02X}")),
        }
    }
    out
}

fn table(out: &mut String, table: &Table) -> std::fmt::Result {
    writeln!(out, "{}\n", inlines(&table.caption, false))?;
    let line = |cells: Vec<String>| format!("| {} |", cells.join(" | "));
    writeln!(out, "{}", line(table.head.iter().map(|head| inlines(head, true)).collect()))?;
    let sides = (0..table.head.len()).map(|column| {
        let right = table.rows.iter().all(|row| row.get(column).is_some_and(|cell| cell.right));
        if right { "---:".to_owned() } else { "---".to_owned() }
    });
    writeln!(out, "{}", line(sides.collect()))?;
    for row in &table.rows {
        let cells = row.iter().map(|cell| match cell.heat.abs() {
            3 => format!("**{}**", inlines(&cell.content, true)),
            _ => inlines(&cell.content, true),
        });
        writeln!(out, "{}", line(cells.collect()))?;
    }
    writeln!(out)
}

fn inlines(content: &[Inline], in_table: bool) -> String {
    let one = |inline: &Inline| match inline {
        Inline::Text(words) => text(words),
        Inline::Code(words) => code(words, in_table),
        Inline::Strong(words) => format!("**{}**", text(words)),
        Inline::Math(math) => format!("${}$", math.latex.replace('\n', " ")),
    };
    content.iter().map(one).collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn text_begins_no_construct() {
        assert_eq!(
            text("a_b [x](javascript:alert(1)) <b>"),
            "a\\_b \\[x\\](javascript:alert(1)) &lt;b&gt;"
        );
        assert_eq!(text("- 1"), "\\- 1");
        assert_eq!(text("12. x"), "12\\. x");
        assert_eq!(code("a`b|c", true), "``a`b\\|c``");
    }
}
