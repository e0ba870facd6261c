//! `cofactor derive`: closed forms with their evidence.

use std::sync::mpsc;
use std::time::{Duration, Instant};

use cofactor::analysis::{self, ClosedForm, Entry, Options};
use cofactor::circuit::{Ask, Circuit, ElementId, Law};
use cofactor::typeset::answer::{self, Answer, TextStyle};
use cofactor::typeset::json;
use cofactor::typeset::screen::{Characters, Screen};
use cofactor::typeset::shape::Shape;

use super::args::{Derive, Format, ShapeName};
use super::failure::Failure;
use super::input::{self, Loaded};
use super::messages::Messages;
use super::{STACK, width, write_results};

/// Runs the command; the exit code is 0, or 1 when a witness disagrees.
pub(crate) fn run(arguments: &Derive, messages: &Messages) -> Result<u8, Failure> {
    let loaded = input::load(&arguments.input, messages)?;
    let shape = arguments.shape.map_or(Shape::Compact, ShapeName::shape);
    let feedback = match &arguments.feedback {
        Some(name) => Some(dependent_source(&loaded.circuit, name)?),
        None => None,
    };
    let options = Options { max_terms: arguments.max_terms, feedback, ..Options::default() };
    let mut printer = Printer {
        arguments,
        messages,
        loaded: &loaded,
        shape,
        results: Vec::new(),
        warnings: Vec::new(),
        passed: true,
        printed: 0,
    };
    let outcome = answers(&loaded, options, arguments.stop_after, &mut |ask, entries| {
        printer.take(ask, entries)
    });
    // What was reached is printed, whatever came afterwards.
    printer.finish()?;
    outcome?;
    Ok(u8::from(!printer.passed))
}

/// The dependent source of that name; a device is named for its transconductance.
fn dependent_source(circuit: &Circuit, name: &str) -> Result<ElementId, Failure> {
    let found = circuit.element(name).or_else(|| circuit.element(&format!("{name}.gm")));
    found
        .filter(|&id| {
            matches!(circuit[id].law, Law::ControlledVoltage(_) | Law::ControlledCurrent(_))
        })
        .ok_or_else(|| {
            Failure::option(
                format!("`--feedback` names `{name}`, which is no dependent source"),
                "name a dependent source, an op-amp with a finite `gain`, or a device",
            )
        })
}

/// What is done with the results of a question.
type Take<'a> = dyn FnMut(&Ask, &[Entry]) -> Result<(), Failure> + 'a;

/// Answers the questions one after the other; under a deadline in a thread that is left behind.
fn answers(
    loaded: &Loaded,
    options: Options,
    stop_after: Option<f64>,
    take: &mut Take<'_>,
) -> Result<(), Failure> {
    let Some(seconds) = stop_after else {
        for ask in &loaded.asks {
            take(ask, &derive(&loaded.circuit, ask, &options)?)?;
        }
        return Ok(());
    };
    let deadline = Instant::now() + Duration::from_secs_f64(seconds.min(1e9));
    let (sender, receiver) = mpsc::channel();
    let (circuit, asks) = (loaded.circuit.clone(), loaded.asks.clone());
    let worker = std::thread::Builder::new().stack_size(STACK).spawn(move || {
        for ask in &asks {
            if sender.send(derive(&circuit, ask, &options)).is_err() {
                return;
            }
        }
    });
    worker.map_err(|error| Failure::output(&error))?;
    for ask in &loaded.asks {
        let left = deadline.saturating_duration_since(Instant::now());
        match receiver.recv_timeout(left) {
            Ok(entries) => take(ask, &entries?)?,
            Err(_) => {
                return Err(Failure::bound(
                    "time",
                    format!("{}: not finished after {seconds} s", ask.name),
                    "give more time, or put numbers in with `--keep`",
                ));
            }
        }
    }
    Ok(())
}

fn derive(circuit: &Circuit, ask: &Ask, options: &Options) -> Result<Vec<Entry>, Failure> {
    analysis::answer(circuit, ask, options).map_err(|error| Failure::analysis(&ask.name, &error))
}

struct Printer<'a> {
    arguments: &'a Derive,
    messages: &'a Messages,
    loaded: &'a Loaded,
    shape: Shape,
    /// Under JSON everything is printed at the end.
    results: Vec<json::DeriveResult>,
    warnings: Vec<json::Warning>,
    passed: bool,
    printed: usize,
}

impl Printer<'_> {
    /// Prints one answer, or keeps it for the end.
    fn take(&mut self, ask: &Ask, entries: &[Entry]) -> Result<(), Failure> {
        self.check_shape(entries)?;
        let answer = Answer { circuit: &self.loaded.circuit, ask, entries, shape: self.shape };
        for entry in entries {
            self.passed &= entry.passed();
            for notice in &entry.notices {
                self.messages.notice(&entry.name, notice);
                self.warnings.push(answer::warning(notice));
            }
        }
        let output = &self.arguments.output;
        match output.format {
            Format::Json => self.results.extend(answer::results(&answer)),
            Format::Text => {
                let characters = if output.ascii { Characters::Ascii } else { Characters::Unicode };
                let screen = Screen { width: width(Format::Text), characters };
                let style = TextStyle { screen, quiet: output.quiet };
                let mut text = String::new();
                if self.printed == 0 && !output.quiet {
                    if let Some(title) = &self.loaded.circuit.title {
                        text.push_str(title);
                        text.push_str("\n\n");
                    }
                } else if self.printed > 0 {
                    text.push('\n');
                }
                text.push_str(&answer::text(&answer, style));
                if self.arguments.legend {
                    text.push_str(&answer::legend_text(&answer, style));
                }
                write_results(&text)?;
            }
            Format::Latex => {
                let mut text = answer::latex(&answer);
                if self.arguments.legend {
                    text.push_str(&answer::legend_latex(&answer));
                }
                write_results(&text)?;
            }
        }
        self.printed += 1;
        Ok(())
    }

    /// A shape that needs the expansion is refused where that is too long.
    fn check_shape(&self, entries: &[Entry]) -> Result<(), Failure> {
        if matches!(self.shape, Shape::Compact | Shape::Nested) {
            return Ok(());
        }
        for entry in entries {
            if let ClosedForm::Nested(_) = entry.form {
                let about = if entry.length.exact { "" } else { "up to " };
                return Err(Failure::bound(
                    "terms",
                    format!(
                        "{}: this shape needs the expansion, which has {about}{} terms, more than \
                         the {} that `--max-terms` allows",
                        entry.name, entry.length.terms, self.arguments.max_terms
                    ),
                    "use the nested shape, allow more terms, or put numbers in with `--keep`",
                ));
            }
        }
        Ok(())
    }

    fn finish(&mut self) -> Result<(), Failure> {
        if self.arguments.output.format != Format::Json {
            return Ok(());
        }
        let loaded = self.loaded;
        let mut warnings = input::warnings(loaded);
        for warning in std::mem::take(&mut self.warnings) {
            if !warnings.contains(&warning) {
                warnings.push(warning);
            }
        }
        let whole = json::Derive {
            schema: json::DERIVE_SCHEMA,
            circuit: loaded.circuit.title.clone(),
            symbols: answer::symbols(&loaded.circuit),
            results: std::mem::take(&mut self.results),
            warnings,
        };
        let mut text =
            serde_json::to_string_pretty(&whole).map_err(|error| Failure::output(&error.into()))?;
        text.push('\n');
        write_results(&text)
    }
}
