//! `cofactor check`: claims against the exact results.

use std::collections::BTreeMap;
use std::path::PathBuf;

use anstyle::{AnsiColor, Style};
use clap::Args;
use cofactor::analysis::check::{self, Verdict};
use cofactor::analysis::{self, Entry, Notice, Options};
use cofactor::circuit::{Ask, Circuit, Claim, Question, SymbolId, Value};
use cofactor::language::{self, Diagnostic, Label, Severity, Span, UnitClash, line_and_column};
use cofactor::typeset::answer::check::{self as typeset, Checked, Look, Place, UnitError};
use cofactor::typeset::answer::{self, TextStyle};
use cofactor::typeset::json;
use cofactor::typeset::screen::{Characters, Screen};

use super::args::{Format, Input, Output};
use super::failure::Failure;
use super::input;
use super::messages::Messages;
use super::{width, write_results};

/// Arguments of the command.
#[derive(Debug, Args)]
pub(crate) struct Check {
    /// The circuit file; `-` reads standard input
    file: PathBuf,
    /// A claim besides those of the file: "H = 1/(1 + s R1 C1)", "p1 ~ -1/(R1*C1) within 5 %"; the
    /// formula may be LaTeX
    #[arg(long = "claim", value_name = "CLAIM")]
    claims: Vec<String>,
    /// A file with a claim on each line, or with displayed LaTeX formulas
    #[arg(long = "claims", value_name = "FILE")]
    claim_files: Vec<PathBuf>,
    /// Only these stay symbols, the rest take their numbers, exactly
    #[arg(long, value_name = "SYMBOLS", value_delimiter = ',')]
    keep: Option<Vec<String>>,
    /// A limit that is taken in every result, exactly, after those of the file: "A0 to infinity"
    #[arg(long = "limit", value_name = "LIMIT")]
    limits: Vec<String>,
    /// Where numbers are compared: "10 Hz to 1 MHz"
    #[arg(long, value_name = "BAND")]
    band: Option<String>,
    /// A claim that is right only in a limit counts as false
    #[arg(long)]
    strict: bool,
    /// Expand up to this many terms before a proof is given up
    #[arg(long, value_name = "N", default_value_t = 20_000)]
    max_terms: usize,
    #[command(flatten)]
    pub(crate) output: Output,
}

/// A claim and the text that it stands in.
struct Posed {
    claim: Claim,
    source: usize,
}

/// A text that holds claims.
struct Source {
    name: String,
    text: String,
}

/// Runs the command; the exit code is 0, or 1 when a claim is false or a witness disagrees.
pub(crate) fn run(arguments: &Check, messages: &Messages) -> Result<u8, Failure> {
    let input = Input {
        file: arguments.file.clone(),
        queries: Vec::new(),
        keep: None,
        limits: arguments.limits.clone(),
        band: arguments.band.clone(),
    };
    let loaded = input::load_file(&input.file, messages)?;
    let mut circuit = loaded.circuit;
    input::apply_band_and_limits(&mut circuit, &input)?;
    let mut sources = vec![Source { name: input.file.display().to_string(), text: loaded.text }];
    let claims = collect(arguments, &mut circuit, &mut sources)?;
    if claims.is_empty() {
        return Err(Failure::option(
            "there is no claim to judge".to_owned(),
            "add a line such as `claim H = 1/(1 + s R1 C1)`, or give `--claim \"H = …\"`",
        ));
    }
    let warnings = input::warnings_about(&sources[0].text, &loaded.remarks);
    let judged = match &arguments.keep {
        Some(keep) => Some(input::keep_symbols(&circuit, keep)?),
        None => None,
    };
    let mut printer = Printer {
        arguments,
        messages,
        written: &circuit,
        circuit: judged.as_ref().unwrap_or(&circuit),
        kept: arguments.keep.as_deref(),
        sources: &sources,
        answers: BTreeMap::new(),
        results: Vec::new(),
        warnings,
        verdicts: Vec::new(),
        passed: true,
    };
    let mut failure = None;
    for (index, posed) in claims.iter().enumerate() {
        // What can be judged is judged, whatever is wrong with another claim.
        if let Err(error) = printer.take(posed, index + 1) {
            failure.get_or_insert(error);
        }
    }
    printer.finish()?;
    match failure {
        Some(failure) => Err(failure),
        None => Ok(u8::from(!printer.holds())),
    }
}

/// The claims of the file, of claim files, and of the command line, in this order.
fn collect(
    arguments: &Check,
    circuit: &mut Circuit,
    sources: &mut Vec<Source>,
) -> Result<Vec<Posed>, Failure> {
    let of_file = std::mem::take(&mut circuit.claims);
    let mut claims: Vec<Posed> =
        of_file.into_iter().map(|claim| Posed { claim, source: 0 }).collect();
    for path in &arguments.claim_files {
        let name = path.display().to_string();
        let text = input::read_text(path).map_err(|error| Failure::input(&name, &error))?;
        let read = language::claims(circuit, &text).map_err(|diagnostics| Failure::Text {
            name: name.clone(),
            text: text.clone(),
            diagnostics,
        })?;
        sources.push(Source { name, text });
        let source = sources.len() - 1;
        claims.extend(read.into_iter().map(|claim| Posed { claim, source }));
    }
    for text in &arguments.claims {
        let claim = language::claim(circuit, text).map_err(|diagnostics| Failure::Text {
            name: "--claim".to_owned(),
            text: text.clone(),
            diagnostics,
        })?;
        sources.push(Source { name: "--claim".to_owned(), text: text.clone() });
        claims.push(Posed { claim, source: sources.len() - 1 });
    }
    Ok(claims)
}

struct Printer<'a> {
    arguments: &'a Check,
    messages: &'a Messages,
    /// As written, and with the numbers of what is not kept.
    written: &'a Circuit,
    circuit: &'a Circuit,
    kept: Option<&'a [String]>,
    sources: &'a [Source],
    /// The results of the questions that claims were about.
    answers: BTreeMap<String, Vec<Entry>>,
    /// Under JSON everything is printed at the end.
    results: Vec<typeset::ClaimResult>,
    warnings: Vec<json::Warning>,
    verdicts: Vec<Verdict>,
    passed: bool,
}

impl Printer<'_> {
    /// Whether every claim holds and every witness agrees.
    fn holds(&self) -> bool {
        let holds = |verdict: &Verdict| match verdict {
            Verdict::Equal => true,
            Verdict::EqualInLimit => !self.arguments.strict,
            Verdict::Different | Verdict::UnitError => false,
        };
        self.passed && self.verdicts.iter().all(holds)
    }

    /// Judges one claim and prints the verdict, or keeps it for the end.
    fn take(&mut self, posed: &Posed, index: usize) -> Result<(), Failure> {
        let claim = &posed.claim;
        let (unit, units) = match language::claim_units(self.written, claim) {
            Ok(unit) => (Some(unit), None),
            Err(clash) => (None, Some(unit_error(claim, &clash))),
        };
        let numbered = with_numbers(self.circuit, self.kept, claim);
        let circuit = self.circuit;
        let entry = self.entry(&numbered)?;
        let judgement = check::judge(circuit, &numbered, entry, unit)
            .map_err(|error| Failure::check(&claim.name, &error))?;
        for notice in &judgement.notices {
            self.say(&claim.name, notice);
        }
        let verdict = judgement.verdict;
        self.verdicts.push(verdict);
        if verdict == Verdict::EqualInLimit {
            self.in_limit(&claim.name, &judgement);
        }
        let checked = Checked { circuit, claim, index, judgement, units };
        self.print(&checked, &self.sources[posed.source])
    }

    /// A notice that a claim holds in a limit only.
    fn in_limit(&mut self, name: &str, judgement: &check::Judgement) {
        let steps = judgement.limits.first().into_iter().flatten();
        let steps: Vec<String> = steps.map(|step| typeset::step_text(self.circuit, step)).collect();
        let message = format!("the claim is right only in the limit {}", steps.join(", "));
        self.say(name, &Notice { code: "equal-in-limit", message, line: 0 });
    }

    fn print(&mut self, checked: &Checked<'_>, source: &Source) -> Result<(), Failure> {
        let output = &self.arguments.output;
        match output.format {
            Format::Json => {
                let place = |error| place(checked.claim, error, &source.text);
                let place = checked.units.as_ref().map(place);
                self.results.push(typeset::result(checked, place));
                Ok(())
            }
            Format::Latex => write_results(&typeset::latex(checked)),
            Format::Text => {
                let characters = if output.ascii { Characters::Ascii } else { Characters::Unicode };
                let screen = Screen { width: width(Format::Text), characters };
                let style = TextStyle { screen, quiet: output.quiet };
                let mut text = String::new();
                if self.verdicts.len() == 1 && !output.quiet {
                    if let Some(title) = &self.circuit.title {
                        text.push_str(&format!("{title}\n\n"));
                    }
                } else if !output.quiet {
                    text.push('\n');
                }
                text.push_str(&typeset::heading(checked));
                text.push('\n');
                text.push_str(&typeset::text(checked, style, &marked));
                if let Some(error) = checked.units.as_ref().filter(|_| !output.quiet) {
                    text.push_str(&shown(checked.claim, error, source));
                    text.push('\n');
                }
                write_results(&text)
            }
        }
    }

    /// The result that a claim is about; derived once.
    fn entry(&mut self, claim: &Claim) -> Result<&Entry, Failure> {
        let circuit = self.circuit;
        let ask = circuit
            .asks
            .iter()
            .find(|ask| ask.name == claim.answer)
            .or_else(|| circuit.asks.iter().find(|ask| is_part(ask, &claim.answer)))
            .ok_or_else(|| Failure::usage(&format!("nothing is called `{}`", claim.answer)))?;
        if !self.answers.contains_key(&ask.name) {
            let options = Options { max_terms: self.arguments.max_terms, ..Options::default() };
            let entries = analysis::answer(circuit, ask, &options)
                .map_err(|error| Failure::analysis(&ask.name, &error))?;
            for entry in &entries {
                self.passed &= entry.passed();
                for notice in &entry.notices {
                    self.say(&entry.name, notice);
                }
                if !entry.passed() {
                    let message =
                        "a witness disagrees with the derivation: no verdict on it counts";
                    let message = message.to_owned();
                    self.say(&entry.name, &Notice { code: "witness", message, line: 0 });
                }
            }
            self.answers.insert(ask.name.clone(), entries);
        }
        let entries = &self.answers[&ask.name];
        let several = entries.len() > 1;
        let named = |entry: &&Entry| is_about(claim, entry, several);
        entries
            .iter()
            .find(named)
            .ok_or_else(|| Failure::usage(&format!("nothing is called `{}`", claim.answer)))
    }

    fn say(&mut self, name: &str, notice: &Notice) {
        self.messages.notice(name, notice);
        let warning = answer::warning(notice);
        if !self.warnings.contains(&warning) {
            self.warnings.push(warning);
        }
    }

    fn finish(&mut self) -> Result<(), Failure> {
        match self.arguments.output.format {
            Format::Text if self.verdicts.len() > 1 => {
                let gap = if self.arguments.output.quiet { "" } else { "\n" };
                write_results(&format!("{gap}{}\n", typeset::summary(&self.verdicts)))
            }
            Format::Text | Format::Latex => Ok(()),
            Format::Json => {
                let whole = typeset::Check {
                    schema: typeset::CHECK_SCHEMA,
                    circuit: self.circuit.title.clone(),
                    claims: std::mem::take(&mut self.results),
                    warnings: std::mem::take(&mut self.warnings),
                };
                let mut text = serde_json::to_string_pretty(&whole)
                    .map_err(|error| Failure::output(&error.into()))?;
                text.push('\n');
                write_results(&text)
            }
        }
    }
}

/// The claim with the numbers of what is not kept.
pub(super) fn with_numbers(circuit: &Circuit, kept: Option<&[String]>, claim: &Claim) -> Claim {
    let Some(kept) = kept else { return claim.clone() };
    let limited: Vec<SymbolId> = circuit.limits.iter().filter_map(|limit| limit.symbol).collect();
    let replace = |symbol: SymbolId| -> Option<Value> {
        let known = circuit.symbols.get(symbol.0 as usize)?;
        let stays = kept.iter().any(|name| name.trim() == known.name);
        let number = known.nominal.clone().filter(|_| !stays && !limited.contains(&symbol))?;
        Some(Value::Number(number))
    };
    Claim {
        formula: claim.formula.replaced(&replace),
        under_root: claim.under_root.as_ref().map(|root| root.replaced(&replace)),
        ..claim.clone()
    }
}

/// Whether a claim is about a result, which may be one of several of its question.
pub(super) fn is_about(claim: &Claim, entry: &Entry, several: bool) -> bool {
    match &entry.source {
        Some(source) if several => claim.answer == format!("{}.{source}", entry.name),
        _ => claim.answer == entry.name,
    }
}

/// Whether a name is that of a part of a question's answer: `P.z21`, `Vbus.Vbat`.
fn is_part(ask: &Ask, name: &str) -> bool {
    let has_parts = matches!(ask.question, Question::TwoPort(_) | Question::Superposition(_));
    has_parts && name.strip_prefix(ask.name.as_str()).is_some_and(|rest| rest.starts_with('.'))
}

pub(super) fn unit_error(claim: &Claim, clash: &UnitClash) -> UnitError {
    let own = |span: Span| {
        (span.start.saturating_sub(claim.span.0), span.end.saturating_sub(claim.span.0))
    };
    UnitError {
        left: clash.left,
        right: clash.right,
        part: own(clash.span),
        before: clash.before.map(own),
    }
}

/// Where a part begins in the text that holds the claim.
fn place(claim: &Claim, error: &UnitError, text: &str) -> Place {
    let (line, column) = line_and_column(text, claim.span.0 + error.part.0);
    Place { line: (claim.line > 0).then_some(line), column }
}

/// The line of the claim with marks under what does not fit.
fn shown(claim: &Claim, error: &UnitError, source: &Source) -> String {
    let span = |(start, end): (usize, usize)| Span {
        start: claim.span.0 + start,
        end: claim.span.0 + end,
    };
    let in_unit = |unit: cofactor::circuit::Unit| match unit.to_string().as_str() {
        "1" => "this is a plain number".to_owned(),
        unit => format!("this is in {unit}"),
    };
    let mut labels = vec![Label { span: span(error.part), text: in_unit(error.right) }];
    let message = match error.before {
        Some(before) => {
            labels.push(Label { span: span(before), text: in_unit(error.left) });
            "quantities of different units are added"
        }
        None => "the formula is not in the unit of the answer",
    };
    let diagnostic = Diagnostic {
        severity: Severity::Error,
        code: "unit-error",
        message: message.to_owned(),
        span: span(error.part),
        labels,
        help: Vec::new(),
    };
    language::render(&diagnostic, &source.text, &source.name, true)
}

/// Colours for pieces of a verdict.
fn marked(look: Look, text: &str) -> String {
    let style: Style = match look {
        Look::Good => AnsiColor::Green.on_default().bold(),
        Look::Fair => AnsiColor::Yellow.on_default().bold(),
        Look::Bad => AnsiColor::Red.on_default().bold(),
        Look::Missing => AnsiColor::Green.on_default(),
        Look::Extra => AnsiColor::Red.on_default(),
    };
    format!("{style}{text}{style:#}")
}
