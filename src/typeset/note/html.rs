//! A note as one HTML page: MathML Core, inline SVG, styles for screens light and dark and for paper; no
//! script, nothing fetched. It is well-formed XML too. A content policy in the page forbids both, whatever the text holds.

use std::fmt::Write;

use super::document::{Block, Cell, Document, Figure, Inline, Table};
use crate::typeset::math::Math;
use crate::typeset::svg::escaped;
use crate::typeset::visible;

/// The whole page.
pub fn page(document: &Document) -> String {
    let mut out = String::new();
    let title = text(&document.title);
    let _ = write!(
        out,
        "<!DOCTYPE html>\n<html lang=\"en\">\n<head>\n<meta charset=\"utf-8\"/>\n<meta \
         http-equiv=\"Content-Security-Policy\" content=\"default-src 'none'; style-src \
         'unsafe-inline'\"/>\n<meta name=\"viewport\" content=\"width=device-width, \
         initial-scale=1\"/>\n<meta name=\"color-scheme\" content=\"light \
         dark\"/>\n<title>{title}</title>\n<style>{STYLE}</style>\n</head>\n<body>\n<main>\n<h1>{title}</h1>\n"
    );
    let mut blocks = document.blocks.iter();
    // The contents stand behind what opens the note.
    for block in blocks.by_ref().take(1) {
        write_block(&mut out, block, 0);
    }
    contents(&mut out, document);
    let mut section = 0;
    for block in blocks {
        if let Block::Heading(1, _) = block {
            section += 1;
        }
        write_block(&mut out, block, section);
    }
    out.push_str("</main>\n</body>\n</html>\n");
    out
}

/// Text between tags or in quotes: the one place where it is made safe.
fn text(plain: &str) -> String {
    escaped(&visible::line(plain))
}

fn contents(out: &mut String, document: &Document) {
    out.push_str("<nav aria-label=\"Contents\">\n<ul>\n");
    let headings = document.blocks.iter().filter_map(|block| match block {
        Block::Heading(1, content) => Some(content),
        _ => None,
    });
    for (content, number) in headings.zip(1_usize..) {
        let _ = writeln!(out, "<li><a href=\"#section-{number}\">{}</a></li>", inlines(content));
    }
    out.push_str("</ul>\n</nav>\n");
}

fn write_block(out: &mut String, block: &Block, section: usize) {
    let _ = match block {
        Block::Heading(1, content) => {
            writeln!(out, "<h2 id=\"section-{section}\">{}</h2>", inlines(content))
        }
        Block::Heading(_, content) => writeln!(out, "<h3>{}</h3>", inlines(content)),
        Block::Paragraph(content) => writeln!(out, "<p>{}</p>", inlines(content)),
        Block::List(items) => {
            out.push_str("<ul>\n");
            for item in items {
                let _ = writeln!(out, "<li>{}</li>", inlines(item));
            }
            writeln!(out, "</ul>")
        }
        Block::Equation(math) => writeln!(
            out,
            "<div class=\"wide formula\" role=\"group\" aria-label=\"formula\" tabindex=\"0\">{}</div>",
            mathematics(math, true)
        ),
        Block::Table(shown) => table(out, shown),
        Block::Figure(Figure { picture, caption, .. }) => writeln!(
            out,
            "<figure>\n<div class=\"wide\" role=\"group\" aria-label=\"{}\" \
             tabindex=\"0\">\n{}</div>\n<figcaption>{}</figcaption>\n</figure>",
            text(picture.title()),
            picture.svg(),
            inlines(caption)
        ),
        Block::Listing(listing) => writeln!(
            out,
            "<pre role=\"group\" aria-label=\"file\" tabindex=\"0\"><code>{}</code></pre>",
            escaped(&visible::lines(listing))
        ),
    };
}

fn table(out: &mut String, table: &Table) -> std::fmt::Result {
    let caption = inlines(&table.caption);
    let _ = write!(
        out,
        "<div class=\"wide\" role=\"group\" aria-label=\"table\" tabindex=\"0\">\n<table>\n\
         <caption>{caption}</caption>\n<thead>\n<tr>"
    );
    for head in &table.head {
        let _ = write!(out, "<th scope=\"col\">{}</th>", header(head));
    }
    out.push_str("</tr>\n</thead>\n<tbody>\n");
    for row in &table.rows {
        out.push_str("<tr>");
        for (index, cell) in row.iter().enumerate() {
            let _ = match index {
                0 => write!(out, "<th scope=\"row\">{}</th>", header(&cell.content)),
                _ => write!(out, "<td{}>{}</td>", classes(cell), inlines(&cell.content)),
            };
        }
        out.push_str("</tr>\n");
    }
    writeln!(out, "</tbody>\n</table>\n</div>")
}

fn classes(cell: &Cell) -> String {
    let mut classes = Vec::new();
    if cell.right {
        classes.push("right".to_owned());
    }
    match cell.heat {
        0 => {}
        heat if heat > 0 => classes.push(format!("up{heat}")),
        heat => classes.push(format!("down{}", -heat)),
    }
    if classes.is_empty() { String::new() } else { format!(" class=\"{}\"", classes.join(" ")) }
}

fn inlines(content: &[Inline]) -> String {
    let one = |inline: &Inline| match inline {
        Inline::Text(words) => text(words),
        Inline::Code(words) => format!("<code>{}</code>", text(words)),
        Inline::Strong(words) => format!("<strong>{}</strong>", text(words)),
        Inline::Math(math) => mathematics(math, false),
    };
    content.iter().map(one).collect()
}

/// The heading of a row or a column: formulas bear their name in words, by which cells are announced.
fn header(content: &[Inline]) -> String {
    let one = |inline: &Inline| match inline {
        Inline::Math(math) => {
            let words = text(&math.plain);
            format!("<math role=\"math\" aria-label=\"{words}\">{}</math>", math.mathml)
        }
        other => inlines(std::slice::from_ref(other)),
    };
    content.iter().map(one).collect()
}

fn mathematics(math: &Math, display: bool) -> String {
    let block = if display { " display=\"block\"" } else { "" };
    format!("<math{block} alttext=\"{}\">{}</math>", text(&math.plain), math.mathml)
}

/// Plain colours, and overrides for dark screens; on paper everything is light.
const STYLE: &str = "
:root{color-scheme:light dark}
body{margin:0;background:#fdfdfb;color:#1c262b;font:16px/1.5 'Source Serif 4',Georgia,'Liberation Serif',serif}
main{max-width:54rem;margin:0 auto;padding:1.5rem 1rem 4rem}
h1,h2,h3,caption,th,figcaption,nav{font-family:'Source Sans 3','Helvetica Neue',Arial,'Liberation Sans',sans-serif}
h1{font-size:1.9rem;line-height:1.2;margin:.5rem 0 1rem}
h2{font-size:1.35rem;margin:2.6rem 0 .8rem;padding-bottom:.25rem;border-bottom:2px solid #0b5563}
h3{font-size:1.08rem;margin:1.8rem 0 .5rem}
p,ul{margin:.6rem 0}
li{margin:.15rem 0}
a{color:#0b5563}
nav{font-size:.95rem;border-left:3px solid #0b5563;padding-left:.4rem}
code,pre{font-family:'Source Code Pro',Menlo,'Liberation Mono',monospace;font-size:.86em}
code{overflow-wrap:anywhere}
pre{overflow-x:auto;padding:.8rem;border:1px solid #cfd6da;background:#f4f6f6;line-height:1.4}
pre code{font-size:1em;overflow-wrap:normal}
math{font-family:'Latin Modern Math','STIX Two Math','Cambria Math',math;font-size:1.08em}
.wide{overflow-x:auto;overflow-y:hidden;max-width:100%}
.formula{margin:.7rem 0;padding:.3rem 0}
.formula math{margin:0;text-align:left}
.rows mtd{text-align:left;padding:.12em 0}
table{border-collapse:collapse;min-width:min(36rem,100%);font-size:.92rem;margin:.4rem 0}
caption{text-align:left;font-size:.92rem;color:#46535a;padding:.3rem 0}
th,td{border-bottom:1px solid #cfd6da;padding:.25rem .6rem;text-align:left;vertical-align:baseline}
thead th{border-bottom:2px solid #8a979e;white-space:nowrap}
tbody th{font-weight:normal}
td code{overflow-wrap:normal}
.right{text-align:right;white-space:nowrap;font-variant-numeric:tabular-nums}
.up1{background:#fdf0e1}.up2{background:#f9d5ae}.up3{background:#f3b273}
.down1{background:#e4eefb}.down2{background:#bcd7f5}.down3{background:#8bbcec}
.up3,.down3{font-weight:bold}
figure{margin:1.2rem 0}
figure svg{display:block;max-width:none}
figcaption{font-size:.92rem;color:#46535a;max-width:44rem}
:focus-visible{outline:2px solid #b45309;outline-offset:2px}
@media screen and (prefers-color-scheme:dark){
body{background:#14191c;color:#e6ebee}
a{color:#6cc3d5}
h2,nav{border-color:#6cc3d5}
caption,figcaption{color:#b3bfc5}
pre{background:#1b2226;border-color:#3b474d}
th,td{border-color:#3b474d}
thead th{border-color:#7d8a91}
.up1{background:#3a2a17}.up2{background:#5c3d17}.up3{background:#7a4a0f}
.down1{background:#17283a}.down2{background:#1b4068}.down3{background:#1f5a94}
:focus-visible{outline-color:#f2a65a}
}
@media print{
:root{color-scheme:light}
@page{margin:18mm 16mm}
body{background:#fff;color:#000;font-size:10.5pt}
main{max-width:none;padding:0}
nav{display:none}
a{color:inherit;text-decoration:none}
h2,h3,caption{break-after:avoid}
figure,tr,.formula{break-inside:avoid}
.wide{overflow:visible}
figure svg{max-width:100%;height:auto}
pre{white-space:pre-wrap;border:none;background:none;padding:0}
table{font-size:9pt}
th,td{padding:.15rem .4rem}
.up1,.up2,.up3,.down1,.down2,.down3{print-color-adjust:exact}
}
";
