//! `cofactor simplify`: shorter formulas with a stated error.

use std::io::{IsTerminal, Write};
use std::time::{Duration, Instant};

use clap::Args;

use cofactor::analysis::{self, Entry, Options};
use cofactor::circuit::{Ask, Circuit};
use cofactor::numeric::{Assignment, Origin, frequencies};
use cofactor::simplify::answer::{self, Answer, SIMPLIFY_SCHEMA, Simplify, SimplifyResult};
use cofactor::simplify::{Goal, GoalError, SimplifyError, Watch, percentage, simplify};
use cofactor::typeset::answer::{TextStyle, symbols, warning};
use cofactor::typeset::json;
use cofactor::typeset::screen::{Characters, Screen};

use super::args::{Format, Input, Output, seconds};
use super::failure::Failure;
use super::input::{self, Loaded};
use super::messages::Messages;
use super::{width, write_results};

/// The arguments of `simplify`.
#[derive(Debug, Args)]
pub(crate) struct Arguments {
    #[command(flatten)]
    pub(crate) input: Input,
    #[command(flatten)]
    pub(crate) output: Output,
    /// The largest error of magnitude and phase over the band: "0.5 dB, 5 deg"; by default 1 dB and
    /// 10 deg, and what a given bound does not name is free
    #[arg(long, value_name = "BOUNDS", value_parser = within)]
    pub(crate) within: Option<Goal>,
    /// Besides, the largest error of each pole and zero in the band, relative to its size: "5 %"
    #[arg(long, value_name = "PERCENT", value_parser = percentage)]
    pub(crate) poles_within: Option<f64>,
    /// Besides, the largest error of each coefficient that is left: "10 %"
    #[arg(long, value_name = "PERCENT", value_parser = percentage)]
    pub(crate) coefficients_within: Option<f64>,
    /// Print the chain of formulas from coarse to fine as well
    #[arg(long)]
    pub(crate) steps: bool,
    /// End after this many seconds with the best that was found
    #[arg(long, value_name = "SECONDS", value_parser = seconds)]
    pub(crate) stop_after: Option<f64>,
}

fn within(text: &str) -> Result<Goal, GoalError> {
    Goal::default().within(text)
}

/// Runs the command; the exit code is 0, 1 when a witness disagrees, 4 when the time was over.
pub(crate) fn run(arguments: &Arguments, messages: &Messages) -> Result<u8, Failure> {
    let loaded = input::load(&arguments.input, messages)?;
    let goal = Goal {
        roots: arguments.poles_within,
        coefficients: arguments.coefficients_within,
        ..arguments.within.unwrap_or_default()
    };
    let mut printer = Printer {
        arguments,
        messages,
        loaded: &loaded,
        results: Vec::new(),
        warnings: Vec::new(),
        printed: 0,
    };
    let mut clock = Clock::new(arguments);
    let (mut passed, mut stopped) = (true, false);
    let outcome = loaded.asks.iter().try_for_each(|ask| {
        for entry in &entries(&loaded.circuit, ask)? {
            passed &= entry.passed();
            let band = band(&loaded.circuit, ask);
            let simplified =
                simplify(&loaded.circuit, entry, band, &goal, arguments.steps, &mut clock)
                    .map_err(|error| failure(&entry.name, &error));
            clock.clear();
            let simplified = simplified?;
            stopped |= simplified.stopped;
            printer.take(&Answer { entry, simplified: &simplified })?;
        }
        Ok(())
    });
    printer.finish()?;
    outcome?;
    if stopped {
        return Err(Failure::bound(
            "time",
            "the time was over: what is printed is the best that was found, and its error holds"
                .to_owned(),
            "give more time with `--stop-after`",
        ));
    }
    Ok(u8::from(!passed))
}

fn entries(circuit: &Circuit, ask: &Ask) -> Result<Vec<Entry>, Failure> {
    analysis::answer(circuit, ask, &Options::default())
        .map_err(|error| Failure::analysis(&ask.name, &error))
}

fn failure(name: &str, error: &SimplifyError) -> Failure {
    Failure::Plain {
        code: error.code(),
        message: format!("{name}: {error}"),
        help: Some(error.help().to_owned()),
        exit: error.exit_code(),
    }
}

/// The band in Hz; where the file has none, that of the cross-check.
fn band(circuit: &Circuit, ask: &Ask) -> (f64, f64) {
    let assignment = match ask.transfers().first() {
        Some(transfer) => Assignment::for_transfer(circuit, transfer, 0),
        None => Assignment { origin: Origin::Nominal, ..Assignment::random(circuit, 0) },
    };
    let ends = frequencies(circuit, &assignment, 2);
    (ends.first().copied().unwrap_or(1.0), ends.last().copied().unwrap_or(1e6))
}

/// Keeps the time and tells how far the work is.
struct Clock {
    deadline: Option<Instant>,
    /// When something was told last; none where nobody watches.
    told: Option<Instant>,
    shown: bool,
}

impl Clock {
    fn new(arguments: &Arguments) -> Self {
        let now = Instant::now();
        let after = |seconds: f64| now + Duration::from_secs_f64(seconds.min(1e9));
        let watched = std::io::stderr().is_terminal() && !arguments.output.quiet;
        Self {
            deadline: arguments.stop_after.map(after),
            told: watched.then_some(now),
            shown: false,
        }
    }

    /// Takes the line of the progress away.
    fn clear(&mut self) {
        if std::mem::take(&mut self.shown) {
            let _ = write!(std::io::stderr(), "\r\x1b[K");
        }
    }
}

impl Watch for Clock {
    fn progress(&mut self, stage: &str, done: usize, of: usize) {
        const EVERY: Duration = Duration::from_millis(200);
        const CELLS: usize = 24;
        let Some(told) = self.told.filter(|told| told.elapsed() >= EVERY) else { return };
        let _ = told;
        let filled = (CELLS * done.min(of)).checked_div(of).unwrap_or(0);
        let bar = format!("{}{}", "#".repeat(filled), ".".repeat(CELLS - filled));
        let _ = write!(std::io::stderr(), "\r\x1b[K[{bar}] {stage} {done}/{of}");
        let _ = std::io::stderr().flush();
        self.told = Some(Instant::now());
        self.shown = true;
    }

    fn expired(&self) -> bool {
        self.deadline.is_some_and(|deadline| Instant::now() >= deadline)
    }
}

struct Printer<'a> {
    arguments: &'a Arguments,
    messages: &'a Messages,
    loaded: &'a Loaded,
    /// Under JSON everything is printed at the end.
    results: Vec<SimplifyResult>,
    warnings: Vec<json::Warning>,
    printed: usize,
}

impl Printer<'_> {
    fn take(&mut self, answer: &Answer<'_>) -> Result<(), Failure> {
        for notice in answer.entry.notices.iter().chain(&answer.simplified.notices) {
            self.messages.notice(&answer.entry.name, notice);
            self.warnings.push(warning(notice));
        }
        let output = &self.arguments.output;
        match output.format {
            Format::Json => self.results.push(answer::result(answer)),
            Format::Latex => write_results(&answer::latex(answer))?,
            Format::Text => {
                let characters = if output.ascii { Characters::Ascii } else { Characters::Unicode };
                let screen = Screen { width: width(Format::Text), characters };
                let mut text = String::new();
                match &self.loaded.circuit.title {
                    Some(title) if self.printed == 0 && !output.quiet => {
                        text.push_str(title);
                        text.push_str("\n\n");
                    }
                    _ if self.printed > 0 => text.push('\n'),
                    _ => {}
                }
                text.push_str(&answer::text(answer, TextStyle { screen, quiet: output.quiet }));
                write_results(&text)?;
            }
        }
        self.printed += 1;
        Ok(())
    }

    fn finish(&mut self) -> Result<(), Failure> {
        if self.arguments.output.format != Format::Json {
            return Ok(());
        }
        let loaded = self.loaded;
        let mut warnings = input::warnings(loaded);
        warnings.append(&mut self.warnings);
        let whole = Simplify {
            schema: SIMPLIFY_SCHEMA,
            circuit: loaded.circuit.title.clone(),
            symbols: symbols(&loaded.circuit),
            results: std::mem::take(&mut self.results),
            warnings,
        };
        let mut text =
            serde_json::to_string_pretty(&whole).map_err(|error| Failure::output(&error.into()))?;
        text.push('\n');
        write_results(&text)
    }
}
