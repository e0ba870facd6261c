//! `cofactor roots`: poles and zeros, and which elements set each.

use cofactor::analysis::roots::{self, Nominal, Quantity, RootReport, RootsError, Unreachable};
use cofactor::analysis::{self, Entry, Notice, Options};
use cofactor::circuit::{Ask, Number, Question, SymbolId, Unit};
use cofactor::language;
use cofactor::typeset::answer::roots::{self as typeset, Answer, Moved, Report};
use cofactor::typeset::answer::{self, TextStyle};
use cofactor::typeset::json;
use cofactor::typeset::number;
use cofactor::typeset::screen::{Characters, Screen};

use super::args::{Format, Roots, RootsFormat};
use super::failure::Failure;
use super::input::{self, Loaded};
use super::messages::Messages;
use super::{width, write_results};

/// Runs the command; the exit code is 0, or 1 when a witness disagrees.
pub(crate) fn run(arguments: &Roots, messages: &Messages) -> Result<u8, Failure> {
    let loaded = input::load(&arguments.input, messages)?;
    let wishes = Wishes::new(arguments, &loaded)?;
    let mut printer = Printer {
        arguments,
        messages,
        loaded: &loaded,
        wishes,
        results: Vec::new(),
        warnings: input::warnings(&loaded),
        passed: true,
    };
    for (index, ask) in loaded.asks.iter().enumerate() {
        printer.take(ask, index == 0)?;
    }
    printer.finish()?;
    Ok(u8::from(!printer.passed))
}

/// What the options ask for, with names resolved.
struct Wishes {
    target: Option<(Target, SymbolId)>,
    locus: Option<SymbolId>,
}

impl Wishes {
    fn new(arguments: &Roots, loaded: &Loaded) -> Result<Self, Failure> {
        let symbol = |option: &str, name: &str| {
            loaded.circuit.symbol(name.trim()).ok_or_else(|| {
                Failure::option(
                    format!("`{option}` names `{name}`, which is no symbol of this circuit"),
                    "symbols are elements with a value of their own, and parameters",
                )
            })
        };
        let target = match (&arguments.target, &arguments.with) {
            (Some(target), Some(with)) => Some((Target::read(target)?, symbol("--with", with)?)),
            _ => None,
        };
        let locus = arguments.locus.as_deref().map(|name| symbol("--locus", name)).transpose()?;
        if locus.is_some() && arguments.output.format != RootsFormat::Svg {
            return Err(Failure::option("`--locus` is a picture".to_owned(), "add `--format svg`"));
        }
        let pictures = loaded.asks.len();
        if arguments.output.format == RootsFormat::Svg && pictures != 1 {
            return Err(Failure::option(
                format!("a picture shows one function, and {pictures} are asked for"),
                "name one: `cofactor roots FILE H --format svg`",
            ));
        }
        Ok(Self { target, locus })
    }
}

/// What is to be moved, and to where.
#[derive(Clone)]
struct Target {
    text: String,
    kind: Kind,
    /// The root, from 1; the first pair where none is named.
    root: Option<usize>,
    value: Number,
}

#[derive(Clone, Copy, PartialEq, Eq)]
enum Kind {
    Pole,
    Zero,
    NaturalFrequency,
    Quality,
    Gain,
}

const MOVE_HELP: &str = "write \"w0 = 1 kHz\", \"Q = 0.7\", \"w0 of p3 = 1 kHz\", \"p2 = 1 MHz\", \
                         \"z1 = 50 Hz\" or \"gain = 10\"; roots are numbered as in the table";

impl Target {
    fn read(text: &str) -> Result<Self, Failure> {
        let wrong = || Failure::option(format!("`--move` cannot be read: `{text}`"), MOVE_HELP);
        let (what, value) = text.split_once('=').ok_or_else(wrong)?;
        let (number, unit) = language::quantity(value).map_err(|diagnostics| Failure::Text {
            name: "--move".to_owned(),
            text: value.to_owned(),
            diagnostics,
        })?;
        let words: Vec<&str> = what.split_whitespace().collect();
        let numbered = |word: &str, letter: char| {
            word.strip_prefix(letter).and_then(|digits| digits.parse::<usize>().ok())
        };
        let (kind, root) = match words.as_slice() {
            ["w0" | "ω0"] => (Kind::NaturalFrequency, None),
            ["Q" | "q"] => (Kind::Quality, None),
            ["w0" | "ω0", "of", pole] => {
                (Kind::NaturalFrequency, Some(numbered(pole, 'p').ok_or_else(wrong)?))
            }
            ["Q" | "q", "of", pole] => {
                (Kind::Quality, Some(numbered(pole, 'p').ok_or_else(wrong)?))
            }
            ["gain"] => (Kind::Gain, None),
            [word] if numbered(word, 'p').is_some() => (Kind::Pole, numbered(word, 'p')),
            [word] if numbered(word, 'z').is_some() => (Kind::Zero, numbered(word, 'z')),
            _ => return Err(wrong()),
        };
        let frequency = matches!(kind, Kind::Pole | Kind::Zero | Kind::NaturalFrequency);
        // The gain is in the function's unit, which is not known here.
        let fits = match unit {
            None => true,
            Some(Unit::HERTZ) => frequency,
            Some(_) => kind == Kind::Gain,
        };
        if !fits {
            return Err(Failure::option(
                format!("`--move {text}`: the unit does not fit"),
                "frequencies are in Hz, Q has no unit, a gain is in the function's own unit",
            ));
        }
        if kind != Kind::Gain && number <= Number::from_integer(0.into()) {
            return Err(Failure::option(
                format!("`--move {text}`: the value must be above 0"),
                MOVE_HELP,
            ));
        }
        Ok(Self { text: text.trim().to_owned(), kind, root, value: number })
    }

    fn quantity(&self, report: &RootReport) -> Quantity {
        let mut number = 1;
        let mut first_pair = 1;
        for facts in &report.poles {
            if !facts.root.is_real() {
                first_pair = number;
                break;
            }
            number += facts.root.multiplicity as usize;
        }
        let root = self.root.unwrap_or(first_pair);
        match self.kind {
            Kind::Pole => Quantity::Pole(root),
            Kind::Zero => Quantity::Zero(root),
            Kind::NaturalFrequency => Quantity::NaturalFrequency(root),
            Kind::Quality => Quantity::Quality(root),
            Kind::Gain => Quantity::DcGain,
        }
    }
}

struct Printer<'a> {
    arguments: &'a Roots,
    messages: &'a Messages,
    loaded: &'a Loaded,
    wishes: Wishes,
    /// Under JSON everything is printed at the end.
    results: Vec<typeset::RootsResult>,
    warnings: Vec<json::Warning>,
    passed: bool,
}

impl Printer<'_> {
    fn take(&mut self, ask: &Ask, first: bool) -> Result<(), Failure> {
        let circuit = &self.loaded.circuit;
        if matches!(ask.question, Question::NoiseDensity(..)) {
            let notice = Notice {
                code: "no-roots",
                message:
                    "a noise density has no poles and zeros of its own: it is a square of sizes"
                        .to_owned(),
                line: ask.line,
            };
            self.say(&ask.name, &notice);
            return Ok(());
        }
        let options = Options { max_terms: self.arguments.max_terms, ..Options::default() };
        let entries = analysis::answer(circuit, ask, &options)
            .map_err(|error| Failure::analysis(&ask.name, &error))?;
        if self.arguments.output.format == RootsFormat::Svg && entries.len() != 1 {
            return Err(Failure::option(
                format!(
                    "{}: a picture shows one function, and this has {}",
                    ask.name,
                    entries.len()
                ),
                "ask for one of them by its name",
            ));
        }
        let mut reports = Vec::new();
        for entry in &entries {
            let failed = |error: RootsError| Failure::roots(&entry.name, &error);
            let nominal = Nominal::new(circuit, entry).map_err(failed)?;
            let roots = roots::analyse(circuit, entry, &nominal).map_err(failed)?;
            self.passed &= entry.passed();
            for notice in entry.notices.iter().chain(&roots.notices) {
                self.say(&entry.name, notice);
            }
            if self.arguments.output.format == RootsFormat::Svg {
                return self.picture(entry, &nominal, &roots);
            }
            reports.push(self.report(entry, &nominal, roots)?);
        }
        let answer = Answer { circuit, ask, reports: &reports };
        match self.arguments.output.format {
            RootsFormat::Json => {
                self.results.extend(typeset::results(&answer));
                Ok(())
            }
            RootsFormat::Latex => write_results(&typeset::latex(&answer)),
            RootsFormat::Text | RootsFormat::Svg => self.text(&answer, first),
        }
    }

    fn say(&mut self, name: &str, notice: &Notice) {
        self.messages.notice(name, notice);
        let warning = answer::warning(notice);
        if !self.warnings.contains(&warning) {
            self.warnings.push(warning);
        }
    }

    /// The roots, and what the options ask for besides.
    fn report<'e>(
        &self,
        entry: &'e Entry,
        nominal: &Nominal<'_>,
        roots: RootReport,
    ) -> Result<Report<'e>, Failure> {
        let moved = match &self.wishes.target {
            None => None,
            Some((target, symbol)) => {
                let quantity = target.quantity(&roots);
                let solution = roots::solve(nominal, quantity, *symbol, &target.value)
                    .map_err(|error| self.unreachable(entry, target, *symbol, &error))?;
                let value = num_traits::ToPrimitive::to_f64(&target.value).unwrap_or(f64::NAN);
                Some(Moved { quantity, target: value, symbol: *symbol, solution })
            }
        };
        let chance = self.arguments.monte_carlo.map(|trials| {
            let places =
                |list: &[roots::RootFacts]| list.iter().map(|facts| facts.root).collect::<Vec<_>>();
            let (poles, zeros) = (places(&roots.poles), places(&roots.zeros));
            let draws = (trials as usize, self.arguments.seed);
            roots::monte_carlo(&self.loaded.circuit, nominal, &poles, &zeros, draws)
        });
        Ok(Report { entry, roots, chance, moved })
    }

    fn unreachable(
        &self,
        entry: &Entry,
        target: &Target,
        symbol: SymbolId,
        error: &Unreachable,
    ) -> Failure {
        let name = &self.loaded.circuit[symbol].name;
        let number = |value: f64| match Number::from_float(value) {
            Some(exact) => number::rounded(&exact, 4, number::Medium::Unicode),
            None => value.to_string(),
        };
        match error {
            Unreachable::NoSuchQuantity => Failure::option(
                format!("{}: there is no such thing to move: `{}`", entry.name, target.text),
                MOVE_HELP,
            ),
            Unreachable::NoSuchSymbol => Failure::option(
                format!("`--with {name}`: it has no positive value to start from"),
                "give it a value in the file",
            ),
            Unreachable::OutOfReach { least, largest } => Failure::option(
                format!(
                    "{}: `{name}` alone cannot do `{}`: within a factor of a million it reaches {} \
                     to {}",
                    entry.name,
                    target.text,
                    number(*least),
                    number(*largest)
                ),
                "choose one of the elements that the table names under `set by`",
            ),
        }
    }

    fn picture(
        &self,
        entry: &Entry,
        nominal: &Nominal<'_>,
        roots: &RootReport,
    ) -> Result<(), Failure> {
        let circuit = &self.loaded.circuit;
        let locus = match self.wishes.locus {
            None => None,
            Some(symbol) => Some(roots::locus(nominal, symbol).ok_or_else(|| {
                Failure::option(
                    format!("`--locus {}`: it has no positive value", circuit[symbol].name),
                    "give it a value in the file",
                )
            })?),
        };
        write_results(&typeset::map(circuit, entry, roots, locus.as_ref()).svg())
    }

    fn text(&self, answer: &Answer<'_>, first: bool) -> Result<(), Failure> {
        let output = &self.arguments.output;
        let characters = if output.ascii { Characters::Ascii } else { Characters::Unicode };
        let screen = Screen { width: width(Format::Text), characters };
        let mut text = String::new();
        match &self.loaded.circuit.title {
            Some(title) if first && !output.quiet => text.push_str(&format!("{title}\n\n")),
            _ if !first => text.push('\n'),
            _ => {}
        }
        text.push_str(&typeset::text(answer, TextStyle { screen, quiet: output.quiet }));
        write_results(&text)
    }

    fn finish(&mut self) -> Result<(), Failure> {
        if self.arguments.output.format != RootsFormat::Json {
            return Ok(());
        }
        let whole = typeset::Roots {
            schema: typeset::ROOTS_SCHEMA,
            circuit: self.loaded.circuit.title.clone(),
            symbols: answer::symbols(&self.loaded.circuit),
            results: std::mem::take(&mut self.results),
            warnings: std::mem::take(&mut self.warnings),
        };
        let mut text =
            serde_json::to_string_pretty(&whole).map_err(|error| Failure::output(&error.into()))?;
        text.push('\n');
        write_results(&text)
    }
}
