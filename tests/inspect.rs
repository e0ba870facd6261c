//! What `inspect` prints: the listing as text and JSON, and a picture that is well-formed XML.

use expect_test::expect_file;
use pretty_assertions::assert_eq;
use std::io::Write;
use std::path::{Path, PathBuf};
use std::process::{Command, Output, Stdio};

fn inspect(file: &str, options: &[&str]) -> String {
    let output = Command::new(env!("CARGO_BIN_EXE_cofactor"))
        .arg("inspect")
        .arg(Path::new(env!("CARGO_MANIFEST_DIR")).join(file))
        .args(options)
        .output()
        .expect("the program runs");
    assert!(output.status.success(), "{file}: {}", String::from_utf8_lossy(&output.stderr));
    String::from_utf8(output.stdout).expect("UTF-8")
}

fn inspect_text(text: &str, options: &[&str]) -> Output {
    let mut child = Command::new(env!("CARGO_BIN_EXE_cofactor"))
        .args(["inspect", "-"])
        .args(options)
        .stdin(Stdio::piped())
        .stdout(Stdio::piped())
        .stderr(Stdio::piped())
        .spawn()
        .expect("the program runs");
    child.stdin.take().expect("a pipe").write_all(text.as_bytes()).expect("the text is read");
    child.wait_with_output().expect("the program ends")
}

fn examples() -> Vec<PathBuf> {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("examples");
    let entries = std::fs::read_dir(folder).expect("the examples");
    let mut files: Vec<PathBuf> = entries.filter_map(|entry| Some(entry.ok()?.path())).collect();
    files.retain(|file| file.extension().is_some_and(|ending| ending == "circuit"));
    files.sort();
    files
}

#[test]
fn listings_as_text_and_json() {
    for name in ["anti-alias", "lamp-sink"] {
        let file = format!("examples/{name}.circuit");
        let golden = |ending: &str| {
            Path::new(env!("CARGO_MANIFEST_DIR")).join(format!("tests/inspect/{name}.{ending}"))
        };
        expect_file![golden("txt")].assert_eq(&inspect(&file, &[]));
        expect_file![golden("json")].assert_eq(&inspect(&file, &["--format", "json"]));
        expect_file![golden("svg")].assert_eq(&inspect(&file, &["--format", "svg"]));
    }
}

#[test]
fn every_picture_is_xml_with_a_title() {
    for file in examples() {
        let name = format!("examples/{}", file.file_name().expect("a name").display());
        let svg = inspect(&name, &["--format", "svg"]);
        let document = roxmltree::Document::parse(&svg).expect("well-formed XML");
        let root = document.root_element();
        assert_eq!(root.tag_name().name(), "svg");
        for wanted in ["title", "desc"] {
            let found = root
                .children()
                .find(|child| child.has_tag_name(("http://www.w3.org/2000/svg", wanted)));
            assert!(found.and_then(|child| child.text()).is_some_and(|text| !text.is_empty()));
        }
        assert!(!svg.contains("var("), "{name}");
    }
}

#[test]
fn ascii_is_ascii_and_lines_fit() {
    for file in examples() {
        let name = format!("examples/{}", file.file_name().expect("a name").display());
        let text = inspect(&name, &["--ascii"]);
        assert!(text.is_ascii(), "{name}");
        assert!(text.lines().all(|line| line.len() <= 80), "{name}\n{text}");
        let json: serde_json::Value =
            serde_json::from_str(&inspect(&name, &["--format", "json"])).expect("JSON");
        assert_eq!(json["schema"], "cofactor/inspect/1");
    }
}

#[test]
fn circuits_without_questions_or_without_a_solution_have_a_listing() {
    let loop_of_sources = "a > voltage V1 > ground\na > voltage V2 > ground\na > R1 > ground\n";
    for options in [&[][..], &["--format", "json"], &["--format", "svg"]] {
        let output = inspect_text(loop_of_sources, options);
        assert!(output.status.success());
        assert!(String::from_utf8_lossy(&output.stdout).contains("V2"));
    }
    let text = inspect_text(loop_of_sources, &[]).stdout;
    assert!(String::from_utf8_lossy(&text).contains("voltage loop     V1 V2"));
    let wrong = inspect_text("a > R1\n", &["--format", "json"]);
    assert_eq!(wrong.status.code(), Some(2));
}
