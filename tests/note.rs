//! The design note: what it holds, that hostile text stays text in every format, and how it is written.

mod support;

use std::fs;
use std::path::{Path, PathBuf};
use std::process::{Command, Output, Stdio};
use std::time::Duration;

use pretty_assertions::assert_eq;
use roxmltree::{Document, Node, ParsingOptions};
use sha2::{Digest, Sha256};

const SVG: &str = "http://www.w3.org/2000/svg";

fn program(arguments: &[&str]) -> Output {
    Command::new(env!("CARGO_BIN_EXE_cofactor"))
        .args(arguments)
        .stdin(Stdio::null())
        .output()
        .expect("the program runs")
}

fn text(output: &Output) -> String {
    assert!(output.status.success(), "{}", String::from_utf8_lossy(&output.stderr));
    String::from_utf8(output.stdout.clone()).expect("UTF-8")
}

fn note(file: &Path, format: &str) -> String {
    let file = file.display().to_string();
    // A small envelope: the larger one only takes longer.
    text(&program(&["note", &file, "--format", format, "--quiet", "--tolerances", "5"]))
}

fn examples() -> Vec<PathBuf> {
    let folder = support::beside_tests("../examples");
    let entries = fs::read_dir(folder).expect("the examples");
    let mut files: Vec<PathBuf> = entries.map(|entry| entry.expect("an entry").path()).collect();
    files.retain(|file| file.extension().is_some_and(|ending| ending == "circuit"));
    files.sort();
    files
}

fn hostile() -> PathBuf {
    support::beside_tests("browser/hostile.circuit")
}

fn parse(page: &str) -> Document<'_> {
    let options = ParsingOptions { allow_dtd: true, ..ParsingOptions::default() };
    Document::parse_with_options(page, options).expect("well-formed")
}

fn inner_text(node: Node<'_, '_>) -> String {
    node.descendants().filter_map(|inner| inner.text().filter(|_| inner.is_text())).collect()
}

fn elements<'a, 'd>(document: &'a Document<'d>, tag: &str) -> Vec<Node<'a, 'd>> {
    document.descendants().filter(|node| node.tag_name().name() == tag).collect()
}

/// Nothing in the page is active, everything has its name, and ids are unique.
fn check_page(page: &str) {
    let document = parse(page);
    for tag in ["script", "iframe", "object", "embed", "img", "link", "form", "base"] {
        assert!(elements(&document, tag).is_empty(), "{tag}");
    }
    let mut ids = Vec::new();
    for node in document.descendants().filter(Node::is_element) {
        for attribute in node.attributes() {
            assert!(!attribute.name().starts_with("on"), "{}", attribute.name());
            if matches!(attribute.name(), "href" | "src") {
                assert!(attribute.value().starts_with('#'), "{}", attribute.value());
            }
        }
        ids.extend(node.attribute("id"));
    }
    let count = ids.len();
    ids.sort_unstable();
    ids.dedup();
    assert_eq!(ids.len(), count, "ids are unique");
    assert_eq!(document.root_element().attribute("lang"), Some("en"));
    for table in elements(&document, "table") {
        assert!(table.children().any(|child| child.has_tag_name("caption")));
        let heads = table.descendants().filter(|node| node.has_tag_name("th"));
        assert!(heads.clone().count() > 1);
        for head in heads {
            assert!(matches!(head.attribute("scope"), Some("row" | "col")));
        }
    }
    for picture in elements(&document, "svg") {
        let named = |tag| picture.children().any(|child| child.has_tag_name((SVG, tag)));
        assert!(named("title") && named("desc"));
        assert_eq!(picture.attribute("role"), Some("img"));
    }
    assert!(!elements(&document, "math").is_empty());
}

#[test]
fn every_example_has_a_note() {
    for file in examples() {
        let page = note(&file, "html");
        check_page(&page);
        let document = parse(&page);
        let headings: Vec<String> = elements(&document, "h2").into_iter().map(inner_text).collect();
        let source = fs::read_to_string(&file).expect("the file");
        let asked = source.lines().filter(|line| line.starts_with("ask ")).count();
        assert!(headings.len() >= asked + 3, "{headings:?}");
        for wanted in ["Circuit", "Cautions", "To make this note again"] {
            assert!(headings.iter().any(|heading| heading == wanted), "{wanted}");
        }
        let listing = inner_text(elements(&document, "pre")[0]);
        assert_eq!(listing, source, "the whole file stands in the note");
        let hash: String =
            Sha256::digest(source.as_bytes()).iter().map(|byte| format!("{byte:02x}")).collect();
        assert!(page.contains(&hash));
        assert!(page.contains("local") || page.contains("codes in force"));
    }
}

#[test]
fn a_note_tells_everything_of_an_answer() {
    let page = note(&support::beside_tests("../examples/anti-alias.circuit"), "html");
    let document = parse(&page);
    let all = inner_text(document.root_element());
    for words in [
        "Anti-alias filter, second order",
        "10 kΩ",
        "± 5 %",
        "where",
        "With numbers",
        "Poles and zeros of H",
        "stable: every pole is in the left half plane",
        "What moves the roots of H",
        "Curves of H",
        "5 circuits with values drawn evenly within their tolerances (seed 1)",
        "In closed form, for t > 0: ",
        "Evidence for H",
        "identical over Q[s]",
        "small-signal",
        "licensed practitioners",
        "cofactor note anti-alias.circuit --tolerances 5 --seed 1 --max-terms 20000",
    ] {
        assert!(all.contains(words), "{words}");
    }
    // Drawing; roots, frequency and time for two functions.
    assert_eq!(elements(&document, "svg").len(), 7);
}

/// The title of the hostile file with its hidden characters shown.
const TITLE: &str = "<script>alert(1)</script> </svg> \\input{/etc/passwd} \\write18{ls} \
                     ](javascript:alert(1)) $x^2$ & % # ~ ⟨U+202E⟩ '`";

#[test]
fn hostile_text_is_text_in_html() {
    let page = note(&hostile(), "html");
    check_page(&page);
    let document = parse(&page);
    assert_eq!(inner_text(elements(&document, "h1")[0]), TITLE);
    assert_eq!(inner_text(elements(&document, "title")[0]), TITLE);
    let listing = inner_text(elements(&document, "pre")[0]);
    assert!(listing.contains("</script> --> ]]> \\end{document} ``` </pre> $x$"));
    assert!(listing.contains("⟨U+200B⟩") && listing.contains("⟨U+0007⟩"));
    for hidden in ['\u{202e}', '\u{202c}', '\u{200b}', '\u{7}'] {
        assert!(!page.contains(hidden));
    }
}

#[test]
fn hostile_text_is_text_in_latex() {
    let source = note(&hostile(), "tex");
    for (number, line) in source.lines().enumerate() {
        // The preamble is the program's own.
        let ours = number < 25;
        for command in
            ["\\input", "\\include", "\\write", "\\openin", "\\catcode", "\\csname", "^^"]
        {
            assert!(ours || !line.contains(command), "{command}: {line}");
        }
    }
    assert_eq!(source.matches("\\end{document}").count(), 1);
    assert!(source.ends_with("\\end{document}\n"));
    assert!(source.contains("\\textbackslash{}input\\{/etc/passwd\\}"));
    assert!(source.contains("\\textbackslash{}write18\\{ls\\}"));
    assert!(source.contains("\\$x\\textasciicircum{}2\\$ \\& \\% \\# \\textasciitilde{}"));
    // pdfTeX reads every character.
    let unusual = source.chars().find(|c| !c.is_ascii() && !('À'..='ÿ').contains(c));
    assert_eq!(unusual, None);
}

#[test]
fn hostile_text_is_text_in_markdown() {
    let source = note(&hostile(), "md");
    let (prose, listing) =
        source.split_once("\n````text\n").expect("a longer fence than the text's");
    assert_eq!(listing.matches("\n````\n").count(), 1);
    assert!(listing.contains("``` </pre>"));
    for construct in ["<script", "</svg", "](javascript", "\u{202e}", "\u{200b}"] {
        assert!(!prose.replace("\\]", "").contains(construct), "{construct}");
    }
    let title = prose.lines().next().expect("a title");
    assert!(title.contains("\\](javascript:alert(1)) \\$x^2\\$"), "{title}");
    // Outside formulas and code every dollar is escaped, so they pair.
    let bare = |text: &str| text.replace("\\$", "").matches('$').count();
    assert!(prose.lines().all(|line| bare(line) % 2 == 0));
}

#[test]
fn hostile_text_is_text_in_pictures() {
    let folder = tempfile::tempdir().expect("a folder");
    let target = folder.path().join("n ote's).md");
    let file = hostile().display().to_string();
    let output = program(&["note", &file, "--quiet", "-o", &target.display().to_string()]);
    text(&output);
    let source = fs::read_to_string(&target).expect("the note");
    let mut pictures = 0;
    for entry in fs::read_dir(folder.path()).expect("the folder") {
        let path = entry.expect("an entry").path();
        let name = path.file_name().expect("a name").to_string_lossy().into_owned();
        if path == target {
            continue;
        }
        assert!(name.ends_with(".svg"), "{name} was left behind");
        pictures += 1;
        let link = name.replace(' ', "%20").replace('\'', "%27").replace(')', "%29");
        assert!(source.contains(&format!("](<{link}>)")), "{link}");
        let svg = fs::read_to_string(&path).expect("a picture");
        let document = Document::parse(&svg).expect("XML");
        assert!(document.descendants().all(|node| node.tag_name().name() != "script"));
    }
    assert!(pictures > 4);
}

#[test]
fn claims_stand_in_the_note_with_their_verdicts() {
    let folder = tempfile::tempdir().expect("a folder");
    let file = folder.path().join("claims.circuit");
    let circuit = "circuit \"<script>alert(1)</script>\"\n\
                   in > voltage Vin > ground\nin > R1 = 1 kΩ > out > C1 = 1 nF > ground\n\
                   ask H = V(out) / Vin\n\
                   claim H = 1/(1 + s R1 C1) # <script>alert(2)</script>\n\
                   claim H = \\frac{1}{1 - s R_1 C_1}\n";
    fs::write(&file, circuit).expect("a file");
    for format in ["html", "tex", "md"] {
        let page = note(&file, format);
        for words in ["Claims about H", "proved", "This claim is wrong.", "different", "repair"] {
            assert!(page.contains(words), "{format}: {words}");
        }
        assert_eq!(page.matches("This claim is wrong.").count(), 1);
        if format != "tex" {
            let prose = page.split("\n```text\n").next().expect("what is before the listing");
            assert!(!prose.contains("<script"), "{format}");
        }
    }
    // A claim in LaTeX is shown as text, and runs nothing.
    assert!(note(&file, "tex").contains("\\textbackslash{}frac\\{1\\}"));
    check_page(&note(&file, "html"));
    // In the formula itself there is no place for a tag.
    let hostile = circuit.replace("1/(1 + s R1 C1) #", "");
    fs::write(&file, hostile).expect("a file");
    let output = program(&["note", &file.display().to_string(), "--format", "html"]);
    assert_eq!((output.status.code(), output.stdout.len()), (Some(2), 0));
}

#[test]
fn a_note_without_numbers_says_so() {
    let folder = tempfile::tempdir().expect("a folder");
    let file = folder.path().join("bare.circuit");
    let circuit = "in > voltage Vin > ground\nin > R1 > out > C1 > ground\nask H = V(out) / Vin\n";
    fs::write(&file, circuit).expect("a file");
    let page = note(&file, "html");
    check_page(&page);
    assert!(page.contains("<h1>Design note</h1>"));
    assert!(page.contains("a response needs numbers, and `R1` and `C1` have none"));
}

#[test]
fn the_same_file_gives_the_same_note() {
    let file = support::beside_tests("../examples/pump-notch.circuit");
    for format in ["html", "tex", "md"] {
        assert_eq!(note(&file, format), note(&file, format));
    }
}

#[test]
fn endings_and_places() {
    let file = support::beside_tests("../examples/wave-gauge.circuit").display().to_string();
    let check = |options: &[&str], words: &str| {
        let mut arguments = vec!["note", &file];
        arguments.extend(options);
        let output = program(&arguments);
        let said = String::from_utf8_lossy(&output.stderr).into_owned();
        assert_eq!(output.status.code(), Some(2), "{said}");
        assert!(said.contains(words), "{said}");
    };
    check(&[], "in which format is not clear");
    check(&["-o", "note.pdf"], "in which format is not clear");
    check(&["-o", "/no/such/folder/note.html"], "cannot be written");
    check(&["--format", "html", "--watch"], "--output");
    let folder = tempfile::tempdir().expect("a folder");
    for (name, begin) in
        [("a.html", "<!DOCTYPE html>"), ("a.tex", "\\documentclass"), ("a.md", "# ")]
    {
        let target = folder.path().join(name).display().to_string();
        let output = program(&["note", &file, "--quiet", "-o", &target]);
        assert_eq!(text(&output), "");
        assert!(fs::read_to_string(&target).expect("a note").starts_with(begin));
    }
}

#[test]
fn a_watched_file_is_followed() {
    let folder = tempfile::tempdir().expect("a folder");
    let [file, target] = ["w.circuit", "w.md"].map(|name| folder.path().join(name));
    let circuit = |title: &str| {
        format!(
            "circuit \"{title}\"\nin > voltage Vin > ground\nin > R1 = 1 kΩ > out > C1 = 1 nF > ground\nask H = V(out) / Vin\n"
        )
    };
    fs::write(&file, circuit("first")).expect("a file");
    let mut watcher = Command::new(env!("CARGO_BIN_EXE_cofactor"))
        .arg("note")
        .arg(&file)
        .arg("-o")
        .arg(&target)
        .args(["--watch", "--quiet"])
        .stderr(Stdio::null())
        .spawn()
        .expect("the program runs");
    let holds = |words: &str| {
        (0..600).any(|_| {
            std::thread::sleep(Duration::from_millis(50));
            fs::read_to_string(&target).is_ok_and(|text| text.contains(words))
        })
    };
    let first = holds("# first");
    // A fault in the file does not end it.
    fs::write(&file, "in > R1\n").expect("a file");
    std::thread::sleep(Duration::from_millis(700));
    fs::write(&file, circuit("the second title")).expect("a file");
    let second = holds("# the second title");
    watcher.kill().expect("it still runs");
    watcher.wait().expect("it ends");
    assert!(first && second);
}

#[test]
fn completions_and_pages_for_man() {
    for shell in ["bash", "zsh", "fish", "elvish", "powershell"] {
        let script = text(&program(&["completions", shell]));
        assert!(script.contains("cofactor") && script.contains("tolerances"), "{shell}");
    }
    let page = text(&program(&["manual"]));
    assert!(page.contains(".TH cofactor 1") && page.contains("response"));
    let page = text(&program(&["manual", "note"]));
    assert!(page.contains("watch") && page.contains(".SH"), "{page}");
    let output = program(&["manual", "nothing"]);
    assert_eq!(output.status.code(), Some(2));
}
