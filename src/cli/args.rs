//! What was typed. Holds text and choices; opens nothing.

use std::path::PathBuf;

use clap::{Args, Parser, Subcommand, ValueEnum};
use cofactor::typeset::shape::Shape;

/// Exact, closed-form answers about linear circuits.
#[derive(Debug, Parser)]
#[command(name = "cofactor", version, about, disable_help_subcommand = true)]
pub(crate) struct Arguments {
    #[command(subcommand)]
    pub(crate) command: Command,
}

#[derive(Debug, Subcommand)]
pub(crate) enum Command {
    /// Closed forms, each cross-checked against a floating-point solve
    Derive(Derive),
    /// Poles and zeros, and which elements set each
    Roots(Roots),
    /// Every claim against the exact result: equal, equal in a limit, or where it is wrong
    Check(super::check::Check),
    /// The JSON Schema of what a command prints under `--format json`
    Schema(super::schema::Schema),
    /// Magnitude, phase and delay over the band, and answers over time: table, CSV or picture
    Response(super::response::Response),
    /// A design note: drawing, formulas, tables, plots and evidence in one document
    Note(super::note::Note),
    /// The circuit as understood: nodes, elements, values, what the graph says, and a picture
    Inspect(Inspect),
    /// What a shell needs to complete command lines
    Completions(super::paper::Completions),
    /// A page for `man`
    Manual(super::paper::Manual),
}

#[derive(Debug, Args)]
pub(crate) struct Derive {
    #[command(flatten)]
    pub(crate) input: Input,
    #[command(flatten)]
    pub(crate) output: Output,
    /// How formulas are written; by default the shortest that one would write by hand
    #[arg(long, value_enum)]
    pub(crate) shape: Option<ShapeName>,
    /// Say below each answer what its symbols are: unit, value, tolerance
    #[arg(long = "where")]
    pub(crate) legend: bool,
    /// Split every ratio around this dependent source: ideal gain, return ratio, feed-through
    #[arg(long, value_name = "SOURCE")]
    pub(crate) feedback: Option<String>,
    /// Expand up to this many terms; longer formulas are nested
    #[arg(long, value_name = "N", default_value_t = 20_000)]
    pub(crate) max_terms: usize,
    /// End after this many seconds with what was reached
    #[arg(long, value_name = "SECONDS", value_parser = seconds)]
    pub(crate) stop_after: Option<f64>,
}

#[derive(Debug, Args)]
pub(crate) struct Inspect {
    /// The circuit file; `-` reads standard input
    pub(crate) file: PathBuf,
    /// How the listing is printed
    #[arg(long, value_enum, default_value_t = ListingFormat::Text)]
    pub(crate) format: ListingFormat,
    /// ASCII only
    #[arg(long)]
    pub(crate) ascii: bool,
    /// Colours in messages; NO_COLOR is respected
    #[arg(long, value_enum, default_value_t = Colour::Auto)]
    pub(crate) color: Colour,
    /// The listing only: no warnings, no notices
    #[arg(long)]
    pub(crate) quiet: bool,
}

impl Inspect {
    /// The same choices as for other commands; a picture has the messages of text.
    pub(crate) fn output(&self) -> Output {
        let format = match self.format {
            ListingFormat::Json => Format::Json,
            ListingFormat::Text | ListingFormat::Svg => Format::Text,
        };
        Output { format, ascii: self.ascii, color: self.color, quiet: self.quiet }
    }
}

#[derive(Clone, Copy, Debug, PartialEq, Eq, ValueEnum)]
pub(crate) enum ListingFormat {
    /// For a terminal
    Text,
    /// For other programs
    Json,
    /// A picture of the graph
    Svg,
}

#[derive(Debug, Args)]
pub(crate) struct Roots {
    #[command(flatten)]
    pub(crate) input: Input,
    #[command(flatten)]
    pub(crate) output: RootsOutput,
    /// Find the value of an element that moves something: "w0 = 1 kHz", "Q = 0.7", "p2 = 1 MHz",
    /// "z1 = 50 Hz", "gain = 10"; "w0 of p3 = …" where there are several pairs
    #[arg(long = "move", value_name = "WHAT = VALUE", requires = "with")]
    pub(crate) target: Option<String>,
    /// The element that `--move` may change
    #[arg(long, value_name = "SYMBOL", requires = "target")]
    pub(crate) with: Option<String>,
    /// Draw this many circuits with values evenly between the limits of their tolerances
    #[arg(long, value_name = "N", value_parser = clap::value_parser!(u32).range(1..=1_000_000))]
    pub(crate) monte_carlo: Option<u32>,
    /// What the draws begin with; the same seed gives the same circuits
    #[arg(long, value_name = "K", default_value_t = 1, requires = "monte_carlo")]
    pub(crate) seed: u64,
    /// Draw the paths of the poles while this element goes from a tenth to ten times its value
    #[arg(long, value_name = "SYMBOL")]
    pub(crate) locus: Option<String>,
    /// Expand up to this many terms; the roots of longer formulas come without approximations
    #[arg(long, value_name = "N", default_value_t = 20_000)]
    pub(crate) max_terms: usize,
}

#[derive(Debug, Args)]
pub(crate) struct RootsOutput {
    /// How results are printed
    #[arg(long, value_enum, default_value_t = RootsFormat::Text)]
    pub(crate) format: RootsFormat,
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

impl RootsOutput {
    /// The same choices as for other commands; a picture has the messages of text.
    pub(crate) fn output(&self) -> Output {
        let format = match self.format {
            RootsFormat::Json => Format::Json,
            RootsFormat::Text | RootsFormat::Latex | RootsFormat::Svg => Format::Text,
        };
        Output { format, ascii: self.ascii, color: self.color, quiet: self.quiet }
    }
}

#[derive(Clone, Copy, Debug, PartialEq, Eq, ValueEnum)]
pub(crate) enum RootsFormat {
    /// For a terminal
    Text,
    /// A fragment for a document that uses amsmath
    Latex,
    /// For other programs
    Json,
    /// A picture of the complex plane
    Svg,
}

#[derive(Debug, Args)]
pub(crate) struct Input {
    /// The circuit file; `-` reads standard input
    pub(crate) file: PathBuf,
    /// What to derive: `V(out) / Vin`, or the name of one of the file's questions; all of them by default
    #[arg(value_name = "QUERY")]
    pub(crate) queries: Vec<String>,
    /// Only these stay symbols, the rest take their numbers, exactly
    #[arg(long, value_name = "SYMBOLS", value_delimiter = ',')]
    pub(crate) keep: Option<Vec<String>>,
    /// A limit that is taken in every result, exactly, after those of the file: "A0 to infinity"
    #[arg(long = "limit", value_name = "LIMIT")]
    pub(crate) limits: Vec<String>,
    /// Where numbers are compared: "10 Hz to 1 MHz"
    #[arg(long, value_name = "BAND")]
    pub(crate) band: Option<String>,
}

#[derive(Debug, Args)]
pub(crate) struct Output {
    /// How results are printed
    #[arg(long, value_enum, default_value_t = Format::Text)]
    pub(crate) format: Format,
    /// ASCII only
    #[arg(long)]
    pub(crate) ascii: bool,
    /// Colours in messages; NO_COLOR is respected
    #[arg(long, value_enum, default_value_t = Colour::Auto)]
    pub(crate) color: Colour,
    /// Results only: no numbers, no evidence, no notices
    #[arg(long)]
    pub(crate) quiet: bool,
}

impl Default for Output {
    /// Where nothing is to be chosen.
    fn default() -> Self {
        Self { format: Format::Text, ascii: false, color: Colour::Auto, quiet: false }
    }
}

#[derive(Clone, Copy, Debug, PartialEq, Eq, ValueEnum)]
pub(crate) enum Format {
    /// For a terminal
    Text,
    /// A fragment for a document that uses amsmath
    Latex,
    /// For other programs
    Json,
}

#[derive(Clone, Copy, Debug, PartialEq, Eq, ValueEnum)]
pub(crate) enum Colour {
    /// When a terminal reads it
    Auto,
    /// Always
    Always,
    /// Never
    Never,
}

#[derive(Clone, Copy, Debug, PartialEq, Eq, ValueEnum)]
pub(crate) enum ShapeName {
    /// Numerator over denominator by powers of s
    Powers,
    /// Gain, power of s, and polynomials that begin with 1
    Bode,
    /// Irreducible factors
    Product,
    /// Coefficients as sums of reactive elements times what they see
    ByElement,
    /// Gain, and corner or ω0 and Q of each section
    Sections,
    /// Named sub-expressions
    Nested,
}

impl ShapeName {
    /// The shape of that name.
    pub(crate) fn shape(self) -> Shape {
        match self {
            Self::Powers => Shape::Powers,
            Self::Bode => Shape::Bode,
            Self::Product => Shape::Product,
            Self::ByElement => Shape::ByElement,
            Self::Sections => Shape::Sections,
            Self::Nested => Shape::Nested,
        }
    }
}

fn seconds(text: &str) -> Result<f64, String> {
    match text.parse::<f64>() {
        Ok(value) if value.is_finite() && value > 0.0 => Ok(value),
        _ => Err("a number of seconds above 0 is needed".to_owned()),
    }
}
