//! How the time and the memory of `simplify` grow with the number of transistors.
//!
//! `cargo run --release --example simplify_growth > docs/simplify-growth.md` renews the table. Each row is
//! measured in a process of its own, so that the peaks of memory do not add up.
#![expect(clippy::print_stdout, reason = "the table is the result")]

use std::error::Error;
use std::fmt::Write;
use std::process::Command;
use std::time::Instant;

use cofactor::analysis::{self, Options};
use cofactor::language;
use cofactor::simplify::{Goal, Unwatched, simplify};

const BAND: (f64, f64) = (1.0, 1e6);
const CELLS: [usize; 8] = [1, 2, 3, 4, 6, 8, 10, 12];

fn main() -> Result<(), Box<dyn Error>> {
    match std::env::args().nth(1) {
        Some(cells) => row(cells.parse()?),
        None => table(),
    }
}

fn table() -> Result<(), Box<dyn Error>> {
    println!("# Growth of `simplify`\n");
    println!(
        "A chain of cells of four transistors each (a common emitter with a degenerated emitter, its \
         active load, the diode that biases it, a follower), every transistor with its base resistance; \
         within 1 dB and 10° from 1 Hz to 1 MHz. Made by `cargo run --release --example \
         simplify_growth`.\n"
    );
    println!(
        "| transistors | symbols | terms | nodes of the diagram | symbols written | error | seconds | peak memory |"
    );
    println!("| ---: | ---: | ---: | ---: | ---: | ---: | ---: | ---: |");
    let program = std::env::current_exe()?;
    for cells in CELLS {
        let output = Command::new(&program).arg(cells.to_string()).output()?;
        print!("{}", String::from_utf8(output.stdout)?);
    }
    Ok(())
}

fn row(cells: usize) -> Result<(), Box<dyn Error>> {
    let circuit = language::read(&amplifier(cells)).circuit.ok_or("the circuit is wrong")?;
    let start = Instant::now();
    let entry = analysis::answer(&circuit, &circuit.asks[0], &Options::default())?.swap_remove(0);
    let found = simplify(&circuit, &entry, BAND, &Goal::default(), false, &mut Unwatched)?;
    let seconds = start.elapsed().as_secs_f64();
    let diagram = entry.elimination.as_ref().map_or(0, |elimination| elimination.diagram_size());
    println!(
        "| {} | {} | {:.1e} | {diagram} | {} | {:.2} dB, {:.1}° | {seconds:.2} | {} |",
        4 * cells,
        found.symbols_before,
        found.terms_before.to_string().parse::<f64>()?,
        found.formula.symbols(),
        found.worst.db,
        found.worst.deg,
        peak_memory(),
    );
    Ok(())
}

/// The largest resident size of this process so far, where the system tells it.
fn peak_memory() -> String {
    let status = std::fs::read_to_string("/proc/self/status").unwrap_or_default();
    let line = status.lines().find_map(|line| line.strip_prefix("VmHWM:"));
    let kilobytes =
        line.and_then(|line| line.trim().strip_suffix("kB")?.trim().parse::<u64>().ok());
    kilobytes.map_or_else(|| "unknown".to_owned(), |size| format!("{} MB", size / 1024))
}

/// The chain of cells.
fn amplifier(cells: usize) -> String {
    let mut text = String::from("in0 > voltage Vin > ground\n");
    for k in 0..cells {
        let next = k + 1;
        let current = 1e-4 * (1.0 + 0.1 * k as f64);
        let mut line = |text_line: String| {
            let _ = writeln!(text, "{text_line}");
        };
        let mut transistor = |name: &str, nodes: String, factor: f64, lateral: bool| {
            let gm = factor * current / 0.02585;
            let (beta, early, transit) =
                if lateral { (50.0, 50.0, 5e-9) } else { (200.0, 100.0, 0.4e-9) };
            line(format!(
                "bjt {name}{k}: {nodes}, gm = {gm:e} S, rpi = {:e} ohm, ro = {:e} ohm, rb = 250 ohm, \
                 Cpi = {:e} F, Cmu = 0.4 pF",
                beta / gm,
                early / (factor * current),
                gm * transit + 0.3e-12
            ));
        };
        transistor("Qa", format!("base in{k}, collector c{k}, emitter e{k}"), 1.0, false);
        transistor("Qb", format!("base b{k}, collector c{k}, emitter d{k}"), 1.0, true);
        transistor("Qc", format!("base b{k}, collector b{k}, emitter ground"), 0.5, true);
        transistor("Qd", format!("base c{k}, collector ground, emitter in{next}"), 3.0, false);
        line(format!("e{k} > Re{k} = 1 kohm > ground"));
        line(format!("d{k} > Rd{k} = 1.2 kohm > ground"));
        line(format!("b{k} > Rb{k} = 100 kohm > ground"));
        line(format!("c{k} > Rc{k} = 10 kohm > ground"));
        line(format!("in{next} > Rf{k} = 20 kohm > ground"));
    }
    let _ = writeln!(text, "in{cells} > RL = 5 kohm > ground");
    let _ = writeln!(text, "ask A = V(in{cells}) / Vin");
    text
}
