//! A note as a LaTeX document for pdfTeX (or any later engine) with packages of the usual collections:
//! amsmath, geometry, longtable, xcolor, tikz with the library svg.path. Plots are drawn paths inside.

use std::fmt::Write;

use super::document::{Block, Cell, Document, Figure, Inline, Table};
use crate::typeset::latex_text::{listing, text, within_formula};
use crate::typeset::math::Math;

const PREAMBLE: &str = "\\documentclass[11pt,a4paper]{article}
\\usepackage[T1]{fontenc}
\\usepackage[utf8]{inputenc}
\\usepackage{textcomp}
\\IfFileExists{lmodern.sty}{\\usepackage{lmodern}}{}
\\usepackage[margin=22mm]{geometry}
\\usepackage{amsmath}
\\usepackage{array}
\\usepackage{longtable}
\\usepackage[table]{xcolor}
\\usepackage{tikz}
\\usetikzlibrary{svg.path}
\\setlength{\\parindent}{0pt}
\\setlength{\\parskip}{5pt plus 2pt}
\\setlength{\\emergencystretch}{3em}
\\renewcommand{\\arraystretch}{1.18}
\\allowdisplaybreaks
\\pagestyle{plain}
\\definecolor{up1}{HTML}{FDF0E1}\\definecolor{up2}{HTML}{F9D5AE}\\definecolor{up3}{HTML}{F3B273}
\\definecolor{down1}{HTML}{E4EEFB}\\definecolor{down2}{HTML}{BCD7F5}\\definecolor{down3}{HTML}{8BBCEC}
% What is wider than the line is set smaller.
\\newsavebox{\\wide}
\\newcommand{\\fit}[1]{\\sbox{\\wide}{#1}\\ifdim\\wd\\wide>\\linewidth\\resizebox{\\linewidth}{!}{\\usebox{\\wide}}%
\\else\\usebox{\\wide}\\fi}
";

/// The whole document.
pub fn source(document: &Document) -> String {
    let mut out = PREAMBLE.to_owned();
    let title = text(&document.title);
    let _ = writeln!(
        out,
        "\\begin{{document}}\n{{\\LARGE\\sffamily\\bfseries {title}\\par}}\\bigskip\n\\raggedright\n"
    );
    for block in &document.blocks {
        write_block(&mut out, block);
    }
    out.push_str("\\end{document}\n");
    out
}

fn write_block(out: &mut String, block: &Block) {
    let _ = match block {
        Block::Heading(1, content) => writeln!(out, "\n\\section*{{{}}}", inlines(content)),
        Block::Heading(_, content) => writeln!(out, "\n\\subsection*{{{}}}", inlines(content)),
        Block::Paragraph(content) => writeln!(out, "\n{}", inlines(content)),
        Block::List(items) => {
            out.push_str(
                "\\begin{itemize}\\setlength{\\itemsep}{0pt}\\setlength{\\parskip}{1pt}\n",
            );
            for item in items {
                // A bracket behind \item would be its label.
                let _ = writeln!(out, "\\item{{}} {}", inlines(item));
            }
            writeln!(out, "\\end{{itemize}}")
        }
        Block::Equation(math) => {
            let formula = within_formula(&math.latex);
            writeln!(out, "\n\\fit{{$\\displaystyle {formula}$}}\n")
        }
        Block::Table(shown) => table(out, shown),
        Block::Figure(Figure { picture, caption, .. }) => {
            // Three quarters of a point a pixel, as on a screen of 96 pixels an inch.
            let width = (0.72 * picture.width()).round();
            writeln!(
                out,
                "\\begin{{center}}\n\\fit{{\\resizebox{{{width}pt}}{{!}}{{%\n{}}}}}\\\\[4pt]\n\
                 \\begin{{minipage}}{{0.9\\linewidth}}\\small\\sffamily {}\\end{{minipage}}\n\\end{{center}}",
                picture.tikz(text),
                inlines(caption)
            )
        }
        Block::Listing(lines) => {
            out.push_str("{\\footnotesize\\ttfamily\\raggedright\\parskip=0pt\n");
            for line in lines.lines() {
                let line = listing(line);
                let _ = writeln!(out, "\\mbox{{}}{line}\\par");
            }
            writeln!(out, "}}")
        }
    };
}

/// Characters beside each other on a line, at the size of tables.
const LINE: usize = 80;

fn table(out: &mut String, table: &Table) -> std::fmt::Result {
    let lengths = lengths(table);
    let whole: usize = lengths.iter().map(|length| length + 3).sum();
    let is_right =
        |column: usize| table.rows.iter().all(|row| row.get(column).is_some_and(|c| c.right));
    let size = if whole > LINE { "\\footnotesize" } else { "\\small" };
    let mut format = String::new();
    for (column, &length) in lengths.iter().enumerate() {
        // Long columns share what is left of the line.
        if whole > LINE && length > 15 {
            let part = (length as f64 / whole as f64).clamp(0.14, 0.5);
            let _ = write!(format, ">{{\\raggedright\\arraybackslash}}p{{{part:.2}\\linewidth}}");
        } else {
            format.push(if is_right(column) { 'r' } else { 'l' });
        }
    }
    let _ = write!(
        out,
        "\n{{\\small\\sffamily {}}}\\nopagebreak\n{{{size}\\setlength{{\\tabcolsep}}{{3pt}}\\setlength{{\\LTleft}}{{0pt}}\
         \\setlength{{\\LTpre}}{{3pt}}\n\\begin{{longtable}}{{{format}}}\n",
        inlines(&table.caption)
    );
    let heads: Vec<String> = table.head.iter().map(|head| inlines(head)).collect();
    let heads =
        heads.iter().map(|head| format!("\\textbf{{{head}}}")).collect::<Vec<_>>().join(" & ");
    let _ = writeln!(out, "{heads} \\\\ \\hline \\endfirsthead\n{heads} \\\\ \\hline \\endhead");
    for row in &table.rows {
        let cells: Vec<String> = row.iter().map(cell).collect();
        let _ = writeln!(out, "{} \\\\", cells.join(" & "));
    }
    writeln!(out, "\\hline\n\\end{{longtable}}}}")
}

fn cell(cell: &Cell) -> String {
    let content = inlines(&cell.content);
    match cell.heat {
        // A bracket or a star behind the end of a row would be read as its argument.
        0 => format!("{{}}{content}"),
        heat if heat > 0 => format!("\\cellcolor{{up{heat}}}{content}"),
        heat => format!("\\cellcolor{{down{}}}{content}", -heat),
    }
}

/// The longest text of each column, in characters.
fn lengths(table: &Table) -> Vec<usize> {
    let length = |content: &[Inline]| -> usize {
        let one = |inline: &Inline| match inline {
            Inline::Text(words) | Inline::Code(words) | Inline::Strong(words) => {
                words.chars().count()
            }
            Inline::Math(math) => math.plain.chars().count(),
        };
        content.iter().map(one).sum()
    };
    let mut lengths: Vec<usize> = table.head.iter().map(|head| length(head)).collect();
    for row in &table.rows {
        for (longest, cell) in lengths.iter_mut().zip(row) {
            *longest = (*longest).max(length(&cell.content));
        }
    }
    lengths
}

fn inlines(content: &[Inline]) -> String {
    let one = |inline: &Inline| match inline {
        Inline::Text(words) => text(words),
        Inline::Code(words) => format!("\\texttt{{{}}}", breakable(&text(words))),
        Inline::Strong(words) => format!("\\textbf{{{}}}", text(words)),
        Inline::Math(math) => mathematics(math),
    };
    content.iter().map(one).collect()
}

fn mathematics(math: &Math) -> String {
    format!("${}$", within_formula(&math.latex))
}

/// Long hashes and words of code may break anywhere.
fn breakable(code: &str) -> String {
    let run = |c: &char| c.is_ascii_alphanumeric();
    if code.chars().filter(run).count() < 40 || code.contains(['\\', ' ', '{']) {
        return code.to_owned();
    }
    let mut out = String::new();
    for (index, c) in code.chars().enumerate() {
        if index > 0 && index % 8 == 0 {
            out.push_str("\\allowbreak{}");
        }
        out.push(c);
    }
    out
}
