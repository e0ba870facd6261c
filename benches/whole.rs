//! The program as its users run it, and the engine's rate of expansion: a table in Markdown.
//!
//! ```text
//! cargo bench --bench whole > docs/benchmarks.md
//! ```
//!
//! Times are the least of many runs of the whole process, its start included; memory is the highest
//! resident set that was seen (Linux). Both are of this machine alone: what lasts is how they grow.

#![forbid(unsafe_code)]
#![expect(clippy::print_stdout, reason = "the table is the result")]

use std::fmt::Write as _;
use std::path::{Path, PathBuf};
use std::process::{Command, Stdio};
use std::time::{Duration, Instant};

use cofactor::analysis::{Options, answer};
use cofactor::circuit::{Circuit, Question};
use cofactor::elimination::{Elimination, Limits};
use cofactor::language;
use cofactor::typeset::answer::lettering;
use cofactor::typeset::shape::{Shape, write};

/// The least time of so many runs counts.
const RUNS: usize = 15;

fn main() {
    let scratch = tempfile::tempdir().expect("a scratch directory");
    println!("# What it costs\n");
    println!("Made by `cargo bench --bench whole > docs/benchmarks.md` on one core.\n");
    println!("## `cofactor derive`, whole process\n");
    println!("| circuit | elements | text | JSON | memory |");
    println!("| --- | --- | --- | --- | --- |");
    let root = Path::new(env!("CARGO_MANIFEST_DIR"));
    for name in ["anti-alias", "light-sensor", "preamplifier"] {
        let path = root.join("examples").join(name).with_extension("circuit");
        whole(&format!("example {name}"), &path);
    }
    whole("op-amp of 21 transistors", &root.join("benches/circuits/opamp-21.circuit"));
    for sections in [10, 100, 300, 1000, 3000] {
        let path = scratch.path().join(format!("ladder-{sections}.circuit"));
        std::fs::write(&path, ladder(sections)).expect("a scratch file");
        whole(&format!("RC ladder of {sections} sections"), &path);
    }
    println!("\n## From a circuit to the written formula\n");
    println!("| circuits | shape | slowest result |");
    println!("| --- | --- | --- |");
    forms("textbook circuits", &textbook(root));
    forms("RC ladder of 10 sections", &[language::read(&ladder(10)).circuit.expect("a circuit")]);
    println!("\n## Full expansion inside the engine\n");
    println!("| RC ladder | terms | time | million terms a second |");
    println!("| --- | --- | --- | --- |");
    for sections in [10, 12, 14, 16] {
        expansion(sections);
    }
}

/// Sections of series R and grounded C, every symbol with a value of its own.
fn ladder(sections: usize) -> String {
    let mut text = "n0 > voltage Vin > ground\n".to_owned();
    for k in 1..=sections {
        let (kiloohms, nanofarads) = (1 + k % 9, 1 + k % 7);
        let _ = writeln!(
            text,
            "n{} > R{k} = {kiloohms} kΩ > n{k} > C{k} = {nanofarads} nF > ground",
            k - 1
        );
    }
    let _ = writeln!(text, "ask H = V(n{sections}) / Vin");
    text
}

fn whole(title: &str, path: &PathBuf) {
    let source = std::fs::read_to_string(path).expect("a circuit file");
    let elements = language::read(&source).circuit.map_or(0, |circuit| circuit.elements.len());
    let run = |format: &str| (0..RUNS).map(|_| time(path, format)).min().unwrap_or_default();
    let (text, json) = (run("text"), run("json"));
    let memory = memory(path)
        .map_or("–".to_owned(), |kilobytes| format!("{:.0} MB", f64::from(kilobytes) / 1024.0));
    println!(
        "| {title} | {elements} | {} | {} | {memory} |",
        milliseconds(text),
        milliseconds(json)
    );
}

fn command(path: &Path, format: &str) -> Command {
    let mut command = Command::new(env!("CARGO_BIN_EXE_cofactor"));
    command.arg("derive").arg(path).args(["--format", format]).stdout(Stdio::null());
    command.stderr(Stdio::null());
    command
}

fn time(path: &Path, format: &str) -> Duration {
    let start = Instant::now();
    let status = command(path, format).status().expect("the program runs");
    assert!(status.success(), "{}", path.display());
    start.elapsed()
}

/// The highest resident set in kilobytes, read while the process lives.
fn memory(path: &Path) -> Option<u32> {
    let mut child = command(path, "text").spawn().ok()?;
    let status = format!("/proc/{}/status", child.id());
    let mut highest = None;
    while child.try_wait().ok()?.is_none() {
        let text = std::fs::read_to_string(&status).unwrap_or_default();
        let line = text.lines().find_map(|line| line.strip_prefix("VmHWM:"));
        let found = line.and_then(|line| line.trim().trim_end_matches(" kB").parse().ok());
        highest = found.or(highest);
    }
    highest
}

/// The circuits of the table of hand formulas.
fn textbook(root: &Path) -> Vec<Circuit> {
    let files = std::fs::read_dir(root.join("tests/textbook")).expect("the circuits");
    let mut paths: Vec<PathBuf> = files.filter_map(|file| Some(file.ok()?.path())).collect();
    paths.sort();
    let circuits = paths.iter().filter(|path| path.extension().is_some_and(|e| e == "circuit"));
    circuits
        .filter_map(|path| language::read(&std::fs::read_to_string(path).ok()?).circuit)
        .collect()
}

/// From the circuit to the written formula, with the witnesses.
fn forms(title: &str, circuits: &[Circuit]) {
    let shapes = [Shape::Compact, Shape::Product, Shape::Sections, Shape::ByElement];
    for (shape, name) in shapes.into_iter().zip(["compact", "product", "sections", "by-element"]) {
        let mut slowest = Duration::ZERO;
        for circuit in circuits {
            for ask in &circuit.asks {
                let best = (0..RUNS).map(|_| {
                    let start = Instant::now();
                    let entries = answer(circuit, ask, &Options::default()).unwrap_or_default();
                    let letters = lettering(circuit);
                    for entry in &entries {
                        write(&entry.form, entry.elimination.as_ref(), shape, letters);
                    }
                    start.elapsed()
                });
                slowest = slowest.max(best.min().unwrap_or_default());
            }
        }
        println!("| {title} | {name} | {} |", milliseconds(slowest));
    }
}

fn expansion(sections: usize) {
    let circuit = language::read(&ladder(sections)).circuit.expect("a circuit");
    let Question::Ratio(transfer) = &circuit.asks[0].question else { return };
    let elimination = Elimination::new(&circuit, transfer, &Limits::default()).expect("a solution");
    let mut best = Duration::MAX;
    let mut terms = 0;
    for _ in 0..RUNS {
        let start = Instant::now();
        terms = elimination.list_terms().expect("symbols that fit a word");
        best = best.min(start.elapsed());
    }
    let rate = terms as f64 / best.as_secs_f64() / 1e6;
    println!("| {sections} sections | {terms} | {} | {rate:.0} |", milliseconds(best));
}

fn milliseconds(time: Duration) -> String {
    format!("{:.1} ms", time.as_secs_f64() * 1e3)
}
