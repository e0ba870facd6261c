//! `cofactor note`: a design note as HTML, LaTeX or Markdown.

use std::ffi::OsString;
use std::fs;
use std::io::{self, Write};
use std::path::{Path, PathBuf};
use std::time::{Duration, SystemTime};

use clap::{Args, ValueEnum};
use cofactor::analysis::{self, Entry, Notice, Options, Survey, check};
use cofactor::circuit::{Ask, Claim};
use cofactor::language;
use cofactor::typeset::answer::check::Checked;
use cofactor::typeset::note::{self, Document, Material, Origin, Posed, html, markdown, tex};
use cofactor::typeset::shape::Shape;
use sha2::{Digest, Sha256};

use super::args::{Colour, Format, Input, Output, ShapeName};
use super::check::{is_about, unit_error, with_numbers};
use super::failure::Failure;
use super::input::{self, Loaded};
use super::messages::Messages;
use super::write_results;

#[derive(Debug, Args)]
pub(crate) struct Note {
    #[command(flatten)]
    pub(crate) input: Input,
    /// Where the note goes: note.html, note.tex, or note.md with its pictures beside it
    #[arg(long, short, value_name = "FILE")]
    pub(crate) output: Option<PathBuf>,
    /// The format, where the ending of the file does not say it
    #[arg(long, value_enum)]
    pub(crate) format: Option<NoteFormat>,
    /// Make the note again whenever the file changes, until interrupted
    #[arg(long, requires = "output")]
    pub(crate) watch: bool,
    /// How formulas are written; by default the shortest that one would write by hand
    #[arg(long, value_enum)]
    pub(crate) shape: Option<ShapeName>,
    /// Circuits drawn within the tolerances for the envelope of each plot; 0 for none
    #[arg(long, value_name = "N", default_value_t = 100, value_parser = clap::value_parser!(u32).range(0..=1_000_000))]
    pub(crate) tolerances: u32,
    /// What the draws begin with; the same seed gives the same circuits
    #[arg(long, value_name = "K", default_value_t = 1)]
    pub(crate) seed: u64,
    /// Expand up to this many terms; longer formulas are nested
    #[arg(long, value_name = "N", default_value_t = 20_000)]
    pub(crate) max_terms: usize,
    /// Colours in messages; NO_COLOR is respected
    #[arg(long, value_enum, default_value_t = Colour::Auto)]
    pub(crate) color: Colour,
    /// No warnings, no notices
    #[arg(long)]
    pub(crate) quiet: bool,
}

#[derive(Clone, Copy, Debug, PartialEq, Eq, ValueEnum)]
pub(crate) enum NoteFormat {
    /// One page, with everything in it
    Html,
    /// A document for LaTeX
    Tex,
    /// Markdown; its pictures stand beside it
    Md,
}

/// How often a watched file is looked at.
const LOOK: Duration = Duration::from_millis(300);

impl Note {
    /// The messages are those of text.
    pub(crate) fn output(&self) -> Output {
        Output { format: Format::Text, ascii: false, color: self.color, quiet: self.quiet }
    }

    fn format(&self) -> Result<NoteFormat, Failure> {
        const HELP: &str = "end the file in .html, .tex or .md, or say `--format html`";
        let ending = self.output.as_deref().and_then(Path::extension).and_then(|e| e.to_str());
        match (self.format, ending) {
            (Some(format), _) => Ok(format),
            (None, Some("html" | "htm")) => Ok(NoteFormat::Html),
            (None, Some("tex")) => Ok(NoteFormat::Tex),
            (None, Some("md")) => Ok(NoteFormat::Md),
            (None, _) => Err(Failure::option("in which format is not clear".to_owned(), HELP)),
        }
    }

    /// The options that change what the note says, as they are typed.
    fn options(&self) -> Vec<String> {
        let quoted = |text: &str| {
            let plain = |c: char| c.is_alphanumeric() || "._-,/".contains(c);
            if !text.is_empty() && text.chars().all(plain) {
                text.to_owned()
            } else {
                format!("'{}'", text.replace('\'', "'\\''"))
            }
        };
        let mut all: Vec<String> = self.input.queries.iter().map(|query| quoted(query)).collect();
        let mut option = |name: &str, value: &str| all.push(format!("--{name} {}", quoted(value)));
        if let Some(keep) = &self.input.keep {
            option("keep", &keep.join(","));
        }
        self.input.limits.iter().for_each(|limit| option("limit", limit));
        if let Some(band) = &self.input.band {
            option("band", band);
        }
        if let Some(name) = self.shape.and_then(|shape| shape.to_possible_value()) {
            option("shape", name.get_name());
        }
        option("tolerances", &self.tolerances.to_string());
        option("seed", &self.seed.to_string());
        option("max-terms", &self.max_terms.to_string());
        all
    }
}

/// Runs the command; the exit code is 0, or 1 when a witness disagrees.
pub(crate) fn run(arguments: &Note, messages: &Messages) -> Result<u8, Failure> {
    let format = arguments.format()?;
    if !arguments.watch {
        return make(arguments, format, messages);
    }
    if arguments.input.file == Path::new("-") {
        let message = "standard input cannot be watched".to_owned();
        return Err(Failure::option(message, "give the path of a circuit file"));
    }
    loop {
        let seen = stamp(&arguments.input.file);
        match make(arguments, format, messages) {
            Ok(_) => messages.progress(&format!("made {}", shown(arguments.output.as_deref()))),
            Err(failure) => messages.failure(&failure),
        }
        // A file that is being written anew may be missing for a moment.
        while stamp(&arguments.input.file).is_none_or(|now| Some(now) == seen) {
            std::thread::sleep(LOOK);
        }
    }
}

fn shown(path: Option<&Path>) -> String {
    path.map(|path| path.display().to_string()).unwrap_or_default()
}

/// What changes when a file does.
fn stamp(file: &Path) -> Option<(SystemTime, u64)> {
    let facts = fs::metadata(file).ok()?;
    Some((facts.modified().ok()?, facts.len()))
}

/// Makes the note once.
fn make(arguments: &Note, format: NoteFormat, messages: &Messages) -> Result<u8, Failure> {
    let loaded = input::load(&arguments.input, messages)?;
    let options = Options { max_terms: arguments.max_terms, ..Options::default() };
    let chance =
        (arguments.tolerances > 0).then_some((arguments.tolerances as usize, arguments.seed));
    let mut answers = Vec::new();
    for ask in &loaded.asks {
        let surveys = analysis::survey(&loaded.circuit, ask, &options, chance)
            .map_err(|error| Failure::analysis(&ask.name, &error))?;
        answers.push((ask.clone(), surveys));
    }
    let file = match arguments.input.file.file_name() {
        Some(name) if arguments.input.file != Path::new("-") => name.to_string_lossy().into_owned(),
        _ => "-".to_owned(),
    };
    let hash: String =
        Sha256::digest(loaded.text.as_bytes()).iter().map(|byte| format!("{byte:02x}")).collect();
    let document = note::document(&Material {
        circuit: &loaded.circuit,
        answers: &answers,
        claims: &claims(&loaded, arguments.input.keep.as_deref(), &answers),
        shape: arguments.shape.map_or(Shape::Compact, ShapeName::shape),
        remarks: &remarks(&loaded),
        origin: Origin {
            version: env!("CARGO_PKG_VERSION"),
            file: &file,
            text: &loaded.text,
            hash: &hash,
            options: &arguments.options(),
        },
    });
    write(arguments.output.as_deref(), format, &document)?;
    let passed = answers.iter().flat_map(|(_, surveys)| surveys).all(|one| one.entry.passed());
    Ok(u8::from(!passed))
}

/// The claims of the file about these answers, judged.
fn claims<'a>(
    loaded: &'a Loaded,
    kept: Option<&[String]>,
    answers: &[(Ask, Vec<Survey>)],
) -> Vec<Posed<'a>> {
    let judged = |(claim, index): (&'a Claim, usize)| {
        let entry = answers.iter().find_map(|(_, surveys)| {
            let several = surveys.len() > 1;
            surveys.iter().map(|one| &one.entry).find(|entry| is_about(claim, entry, several))
        })?;
        Some(Posed {
            name: entry.name.clone(),
            source: entry.source.clone(),
            text: format!("{} = {}", claim.name, claim.text),
            outcome: judge(loaded, kept, claim, index, entry),
        })
    };
    loaded.circuit.claims.iter().zip(1..).filter_map(judged).collect()
}

fn judge<'a>(
    loaded: &'a Loaded,
    kept: Option<&[String]>,
    claim: &'a Claim,
    index: usize,
    entry: &Entry,
) -> Result<Checked<'a>, String> {
    let circuit = &loaded.circuit;
    let (unit, units) = match language::claim_units(circuit, claim) {
        Ok(unit) => (Some(unit), None),
        Err(clash) => (None, Some(unit_error(claim, &clash))),
    };
    let numbered = with_numbers(circuit, kept, claim);
    let judgement =
        check::judge(circuit, &numbered, entry, unit).map_err(|error| error.to_string())?;
    Ok(Checked { circuit, claim, index, judgement, units })
}

/// What was said about the text of the file.
fn remarks(loaded: &Loaded) -> Vec<Notice> {
    let warnings = input::warnings(loaded).into_iter();
    let notice = |warning: cofactor::typeset::json::Warning| Notice {
        code: "text",
        message: warning.message,
        line: warning.line.unwrap_or(0),
    };
    warnings.map(notice).collect()
}

fn write(output: Option<&Path>, format: NoteFormat, document: &Document) -> Result<(), Failure> {
    let stem = output.and_then(Path::file_stem).map(|stem| stem.to_string_lossy().into_owned());
    let (text, pictures) = match format {
        NoteFormat::Html => (html::page(document), Vec::new()),
        NoteFormat::Tex => (tex::source(document), Vec::new()),
        NoteFormat::Md => {
            let written = markdown::write(document, stem.as_deref());
            (written.text, written.pictures)
        }
    };
    let Some(output) = output else { return write_results(&text) };
    for (name, picture) in pictures {
        replace(&output.with_file_name(name), &picture)?;
    }
    replace(output, &text)
}

/// Writes a file beside its place and moves it there, so that nobody reads half of it.
fn replace(path: &Path, text: &str) -> Result<(), Failure> {
    let mut name = OsString::from(".");
    name.push(path.file_name().unwrap_or_default());
    name.push(format!(".{}.part", std::process::id()));
    let part = path.with_file_name(name);
    let write = || -> io::Result<()> {
        let mut file = fs::File::create(&part)?;
        file.write_all(text.as_bytes())?;
        file.sync_all()?;
        fs::rename(&part, path)
    };
    write().map_err(|error| {
        // The error that is told is the first one.
        let _ = fs::remove_file(&part);
        Failure::file(&path.display().to_string(), &error)
    })
}
