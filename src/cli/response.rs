//! `cofactor response`: curves over the frequency and over time.

use clap::{Args, ValueEnum};
use cofactor::analysis::response::{
    self, Curves, Excitation, InitialCondition, POINTS, Response as Function, ResponseError,
    TimeCurve,
};
use cofactor::analysis::{self, Entry, Notice, Options};
use cofactor::circuit::{Ask, Class, Unit};
use cofactor::language;
use cofactor::typeset::answer::response::{self as typeset, Kind, Report, View};
use cofactor::typeset::answer::{self, TextStyle};
use cofactor::typeset::json;
use cofactor::typeset::screen::{Characters, Screen};
use num_traits::ToPrimitive;

use super::args::{Colour, Format, Input, Output};
use super::failure::Failure;
use super::input::{self, Loaded};
use super::messages::Messages;
use super::{width, write_results};

#[derive(Debug, Args)]
pub(crate) struct Response {
    #[command(flatten)]
    pub(crate) input: Input,
    /// What is computed: over the frequency, or over time
    #[arg(long, value_enum, default_value_t = Plot::Bode)]
    pub(crate) plot: Plot,
    /// How results are printed
    #[arg(long, value_enum, default_value_t = ResponseFormat::Text)]
    pub(crate) format: ResponseFormat,
    /// So many points, evenly over the logarithm of the frequency or over time; by default round
    /// frequencies in a table for a terminal, else 301 and more where a pair is sharp
    #[arg(long, value_name = "N", value_parser = clap::value_parser!(u32).range(2..=1_000_000))]
    pub(crate) points: Option<u32>,
    /// The outermost of so many circuits with values evenly between the limits of their tolerances
    #[arg(long, value_name = "N", value_parser = clap::value_parser!(u32).range(1..=1_000_000))]
    pub(crate) tolerances: Option<u32>,
    /// What the draws begin with; the same seed gives the same circuits
    #[arg(long, value_name = "K", default_value_t = 1, requires = "tolerances")]
    pub(crate) seed: u64,
    /// The end of the time axis: "5 ms"
    #[arg(long, value_name = "TIME")]
    pub(crate) time: Option<String>,
    /// The height of the step, or the weight of the impulse; 0 leaves the initial values alone
    #[arg(long, value_name = "VALUE", default_value = "1", allow_hyphen_values = true)]
    pub(crate) height: String,
    /// The voltage of a capacitor or the current of an inductor before t = 0, along its walk:
    /// "C1 = 2 V"; may be repeated
    #[arg(long, value_name = "ELEMENT = VALUE", value_delimiter = ',')]
    pub(crate) initial: Vec<String>,
    /// Expand up to this many terms
    #[arg(long, value_name = "N", default_value_t = 20_000)]
    pub(crate) max_terms: usize,
    /// ASCII only
    #[arg(long)]
    pub(crate) ascii: bool,
    /// Colours in messages; NO_COLOR is respected
    #[arg(long, value_enum, default_value_t = Colour::Auto)]
    pub(crate) color: Colour,
    /// Results only: no notices
    #[arg(long)]
    pub(crate) quiet: bool,
}

#[derive(Clone, Copy, Debug, PartialEq, Eq, ValueEnum)]
pub(crate) enum Plot {
    /// Magnitude and phase
    Bode,
    /// Group delay
    Delay,
    /// The complex plane
    Nyquist,
    /// The answer to a step
    Step,
    /// The answer to an impulse
    Impulse,
}

#[derive(Clone, Copy, Debug, PartialEq, Eq, ValueEnum)]
pub(crate) enum ResponseFormat {
    /// For a terminal
    Text,
    /// For other programs
    Json,
    /// For spreadsheets (RFC 4180)
    Csv,
    /// A picture
    Svg,
}

impl Response {
    /// The same choices as for other commands; a picture has the messages of text.
    pub(crate) fn output(&self) -> Output {
        let format = match self.format {
            ResponseFormat::Json => Format::Json,
            _ => Format::Text,
        };
        Output { format, ascii: self.ascii, color: self.color, quiet: self.quiet }
    }
}

/// Points of a table over time for a terminal.
const TABLE: usize = 21;

/// Runs the command; the exit code is 0, or 1 when a witness disagrees.
pub(crate) fn run(arguments: &Response, messages: &Messages) -> Result<u8, Failure> {
    let loaded = input::load(&arguments.input, messages)?;
    if arguments.format == ResponseFormat::Svg && loaded.asks.len() != 1 {
        return Err(Failure::option(
            format!("a picture shows one function, and {} are asked for", loaded.asks.len()),
            "name one: `cofactor response FILE H --format svg`",
        ));
    }
    let mut work = Work::new(arguments, messages, &loaded)?;
    let mut answers = Vec::new();
    for ask in &loaded.asks {
        let options = Options { max_terms: arguments.max_terms, ..Options::default() };
        let entries = analysis::answer(&loaded.circuit, ask, &options)
            .map_err(|error| Failure::analysis(&ask.name, &error))?;
        for entry in entries {
            work.passed &= entry.passed();
            entry.notices.iter().for_each(|notice| work.say(&entry.name, notice));
            let function = Function::new(&loaded.circuit, &entry)
                .map_err(|error| Failure::response(&entry.name, &error))?;
            answers.push((ask, entry, function));
        }
    }
    let mut reports = Vec::new();
    for (ask, entry, function) in &answers {
        reports.push(work.report(ask, entry, function)?);
    }
    work.print(&reports)?;
    Ok(u8::from(!work.passed))
}

struct Work<'a> {
    arguments: &'a Response,
    messages: &'a Messages,
    loaded: &'a Loaded,
    end: Option<f64>,
    height: f64,
    initial: Vec<InitialCondition>,
    warnings: Vec<json::Warning>,
    passed: bool,
}

impl<'a> Work<'a> {
    fn new(
        arguments: &'a Response,
        messages: &'a Messages,
        loaded: &'a Loaded,
    ) -> Result<Self, Failure> {
        let end = match &arguments.time {
            None => None,
            Some(text) => Some(read("--time", text, &[Unit::SECOND])?),
        };
        if end.is_some_and(|end| end <= 0.0) {
            let message = "`--time` is not above 0".to_owned();
            return Err(Failure::option(message, "write it as \"5 ms\""));
        }
        let height = read("--height", &arguments.height, &[Unit::VOLT, Unit::AMPERE])?;
        let initial = arguments.initial.iter().map(|text| state(loaded, text));
        let initial = initial.collect::<Result<Vec<_>, _>>()?;
        let over_time = matches!(arguments.plot, Plot::Step | Plot::Impulse);
        if !over_time && (end.is_some() || !initial.is_empty()) {
            return Err(Failure::option(
                "`--time` and `--initial` are about time".to_owned(),
                "add `--plot step` or `--plot impulse`",
            ));
        }
        if over_time && arguments.tolerances.is_some() {
            return Err(Failure::option(
                "`--tolerances` is about the frequency".to_owned(),
                "leave it out with `--plot step` and `--plot impulse`",
            ));
        }
        let (warnings, passed) = (input::warnings(loaded), true);
        Ok(Self { arguments, messages, loaded, end, height, initial, warnings, passed })
    }

    fn say(&mut self, name: &str, notice: &Notice) {
        self.messages.notice(name, notice);
        let warning = answer::warning(notice);
        if !self.warnings.contains(&warning) {
            self.warnings.push(warning);
        }
    }

    fn report<'r>(
        &mut self,
        ask: &'r Ask,
        entry: &'r Entry,
        function: &'r Function,
    ) -> Result<Report<'r>, Failure>
    where
        'a: 'r,
    {
        let circuit = &self.loaded.circuit;
        let band = function.band(circuit);
        let failed = |error: ResponseError| Failure::response(&entry.name, &error);
        let points = self.arguments.points.map(|points| points as usize);
        let is_table = self.arguments.format == ResponseFormat::Text;
        let kind = match self.excitation() {
            None => {
                let grid = match points {
                    Some(points) => response::logarithmic(band, points),
                    None if is_table => response::preferred(band),
                    None => function.grid(band),
                };
                let trials = self.arguments.tolerances;
                let chance = trials.map(|trials| (trials as usize, self.arguments.seed));
                let curves =
                    Curves::new(circuit, entry, function, &grid, chance).map_err(failed)?;
                if chance.is_some() && curves.envelope.is_none() {
                    let message = "no value of this answer has a tolerance".to_owned();
                    self.say(&entry.name, &Notice { code: "no-tolerances", message, line: 0 });
                }
                Kind::Frequency(curves)
            }
            Some(excitation) => {
                let Some(transfer) = function.transfer() else {
                    return Err(Failure::option(
                        format!("{}: a noise density is no function of time", entry.name),
                        "leave out `--plot`",
                    ));
                };
                let answer = transfer.answer(excitation).map_err(failed)?;
                let mut sum = response::TimeFunction::default().plus(&answer, self.height);
                if !self.initial.is_empty() {
                    let to = ask.transfers().first().ok_or(ResponseError::NotToSource);
                    let options =
                        Options { max_terms: self.arguments.max_terms, ..Options::default() };
                    let stored = to
                        .and_then(|to| response::from_state(circuit, to, &self.initial, &options))
                        .map_err(failed)?;
                    sum = sum.plus(&stored, 1.0);
                }
                let points = points.unwrap_or(if is_table { TABLE } else { POINTS });
                let initial = self.initial.iter().map(|one| {
                    (circuit[one.element].name.clone(), one.value.to_f64().unwrap_or(f64::NAN))
                });
                Kind::Time {
                    excitation,
                    height: self.height,
                    initial: initial.collect(),
                    curve: TimeCurve::new(sum, self.end, points).map_err(failed)?,
                }
            }
        };
        Ok(Report { circuit, ask, entry, response: function, band, kind })
    }

    fn excitation(&self) -> Option<Excitation> {
        match self.arguments.plot {
            Plot::Step => Some(Excitation::Step),
            Plot::Impulse => Some(Excitation::Impulse),
            Plot::Bode | Plot::Delay | Plot::Nyquist => None,
        }
    }

    fn print(&mut self, reports: &[Report<'_>]) -> Result<(), Failure> {
        match self.arguments.format {
            ResponseFormat::Text => self.text(reports),
            ResponseFormat::Csv => write_results(&typeset::csv(reports)),
            ResponseFormat::Svg => self.picture(reports),
            ResponseFormat::Json => {
                let whole = typeset::Responses {
                    schema: typeset::RESPONSE_SCHEMA,
                    circuit: self.loaded.circuit.title.clone(),
                    symbols: answer::symbols(&self.loaded.circuit),
                    results: reports.iter().map(typeset::result).collect(),
                    warnings: std::mem::take(&mut self.warnings),
                };
                let mut text = serde_json::to_string_pretty(&whole)
                    .map_err(|error| Failure::output(&error.into()))?;
                text.push('\n');
                write_results(&text)
            }
        }
    }

    fn text(&self, reports: &[Report<'_>]) -> Result<(), Failure> {
        let Response { ascii, quiet, .. } = *self.arguments;
        let characters = if ascii { Characters::Ascii } else { Characters::Unicode };
        let screen = Screen { width: width(Format::Text), characters };
        let title = self.loaded.circuit.title.iter().filter(|_| !quiet).cloned();
        let tables =
            reports.iter().map(|report| typeset::text(report, TextStyle { screen, quiet }));
        let parts: Vec<String> = title.map(|title| format!("{title}\n")).chain(tables).collect();
        write_results(&parts.join("\n"))
    }

    fn picture(&self, reports: &[Report<'_>]) -> Result<(), Failure> {
        let [report] = reports else {
            return Err(Failure::option(
                format!("a picture shows one function, and this has {}", reports.len()),
                "ask for one of them by its name, or by its source with `from`",
            ));
        };
        let view = match self.arguments.plot {
            Plot::Delay => View::Delay,
            Plot::Nyquist => View::Nyquist,
            Plot::Bode | Plot::Step | Plot::Impulse => View::Bode,
        };
        if report.response.transfer().is_none() && view != View::Bode {
            return Err(Failure::option(
                format!("{}: a noise density has a magnitude alone", report.entry.name),
                "leave out `--plot`",
            ));
        }
        let picture = match &report.kind {
            Kind::Frequency(curves) => {
                typeset::plot(view, report.entry, report.response, report.band, curves)
            }
            Kind::Time { excitation, curve, .. } => {
                let unit = report.time_unit(*excitation);
                typeset::time_plot(report.entry, *excitation, unit, curve)
            }
        };
        write_results(&picture.svg())
    }
}

/// A quantity of the command line, in one of these units or none.
fn read(option: &str, text: &str, units: &[Unit]) -> Result<f64, Failure> {
    let (number, unit) = language::quantity(text).map_err(|diagnostics| Failure::Text {
        name: option.to_owned(),
        text: text.to_owned(),
        diagnostics,
    })?;
    if unit.is_some_and(|unit| !units.contains(&unit)) {
        let all: Vec<String> = units.iter().map(ToString::to_string).collect();
        return Err(Failure::option(
            format!("`{option} {text}`: the unit does not fit"),
            &format!("it is in {}", all.join(" or ")),
        ));
    }
    number.to_f64().filter(|value| value.is_finite()).ok_or_else(|| {
        Failure::option(format!("`{option} {text}` is too large"), "give a smaller number")
    })
}

/// `C1 = 2 V`.
fn state(loaded: &Loaded, text: &str) -> Result<InitialCondition, Failure> {
    const HELP: &str = "write \"C1 = 2 V\" or \"L1 = 10 mA\"";
    let wrong = || Failure::option(format!("`--initial` cannot be read: `{text}`"), HELP);
    let (name, value) = text.split_once('=').ok_or_else(wrong)?;
    let name = name.trim();
    let Some(element) = loaded.circuit.element(name) else {
        return Err(Failure::option(
            format!("`--initial` names `{name}`, which is no element of this circuit"),
            HELP,
        ));
    };
    let unit = match loaded.circuit[element].class {
        Class::Capacitor => Unit::VOLT,
        Class::Inductor => Unit::AMPERE,
        _ => {
            let error = ResponseError::NoState(name.to_owned());
            return Err(Failure::response("--initial", &error));
        }
    };
    read("--initial", value, &[unit])?;
    let (value, _) = language::quantity(value).map_err(|_| wrong())?;
    Ok(InitialCondition { element, value })
}
