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

use cofactor::circuit::Question;
use cofactor::elimination::{Elimination, Limits};
use cofactor::language;

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
