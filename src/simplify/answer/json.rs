//! What `simplify --format json` prints.

use serde::Serialize;

use super::{Answer, figure_hertz, latex::WIDTH, length};
use crate::simplify::{FigureKind, Left, Worst};
use crate::typeset::json::{Symbol, Warning};
use crate::typeset::latex::Latex;
use crate::typeset::{Dialect, Formula, SymbolTable, plain};

/// The value of [`Simplify::schema`].
pub const SIMPLIFY_SCHEMA: &str = "cofactor/simplify/1";

/// The whole output of `simplify`.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Simplify {
    /// Name and version of this format: [`SIMPLIFY_SCHEMA`].
    pub schema: &'static str,
    /// The circuit's title; null when it has none.
    pub circuit: Option<String>,
    /// The symbols of the circuit.
    pub symbols: Vec<Symbol>,
    /// One entry for each result.
    pub results: Vec<SimplifyResult>,
    /// What the reader should know besides.
    pub warnings: Vec<Warning>,
}

/// A shorter formula.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct SimplifyResult {
    /// The name of the result.
    pub name: String,
    /// The question.
    pub query: String,
    /// The source whose share it is in a superposition; null otherwise.
    pub source: Option<String>,
    /// The SI unit's symbol.
    pub unit: String,
    /// The formula in plain ASCII, for programs.
    pub expression: String,
    /// The formula as it is printed; may use `||`.
    pub compact: String,
    /// The formula for amsmath.
    pub latex: String,
    /// Symbol occurrences in it.
    pub length: u64,
    /// Terms of the exact function, before any met.
    pub terms_before: String,
    /// Terms of this formula, expanded.
    pub terms_after: String,
    /// Different symbols of the exact function.
    pub symbols_before: usize,
    /// Symbols that are gone.
    pub dropped: Vec<DroppedSymbol>,
    /// The largest error of magnitude at the nominal values.
    pub worst_magnitude_db: f64,
    /// Where it is.
    pub worst_magnitude_hz: f64,
    /// The largest error of phase.
    pub worst_phase_deg: f64,
    /// Where it is.
    pub worst_phase_hz: f64,
    /// The same over the tolerances; null where there are none.
    pub over_tolerances: Option<OverTolerances>,
    /// The band.
    pub from_hz: f64,
    /// Its upper end.
    pub to_hz: f64,
    /// What was asked for.
    pub goal: JsonGoal,
    /// Whether the formula is the exact one, as nothing shorter was found within the goal.
    pub exact: bool,
    /// Whether the time was over before the search was.
    pub stopped: bool,
    /// Gain, poles, zeros, gain–bandwidth product.
    pub figures: Vec<JsonFigure>,
    /// The chain of formulas from coarse to fine; empty unless asked for.
    pub steps: Vec<JsonStep>,
}

/// A symbol that is gone.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct DroppedSymbol {
    /// The symbol.
    pub symbol: String,
    /// `0`, `infinity`, or the symbol that it is taken to be equal to; null where its terms are small.
    pub to: Option<String>,
    /// What that alone changes; null where it went with others.
    pub magnitude_db: Option<f64>,
    /// Where that is.
    pub magnitude_hz: Option<f64>,
    /// What it changes in phase.
    pub phase_deg: Option<f64>,
    /// Where that is.
    pub phase_hz: Option<f64>,
}

/// The error at corners of the tolerances.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct OverTolerances {
    /// How many corners were measured.
    pub corners: usize,
    /// Whether these are all.
    pub all_corners: bool,
    /// The largest error of magnitude.
    pub worst_magnitude_db: f64,
    /// Where it is.
    pub worst_magnitude_hz: f64,
    /// The largest error of phase.
    pub worst_phase_deg: f64,
    /// Where it is.
    pub worst_phase_hz: f64,
}

/// The bounds; null where there is none.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct JsonGoal {
    /// Of magnitude.
    pub magnitude_db: Option<f64>,
    /// Of phase.
    pub phase_deg: Option<f64>,
    /// Of poles and zeros in the band, relative.
    pub roots: Option<f64>,
    /// Of coefficients, relative.
    pub coefficients: Option<f64>,
}

/// A number that a designer looks for.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct JsonFigure {
    /// `dc_gain`, `pole`, `zero`, `pole_pair`, `zero_pair`, `gain_bandwidth`.
    pub kind: &'static str,
    /// The number of the root by its size, from 1; null for others.
    pub number: Option<usize>,
    /// A short formula: the size of a root in rad/s, ω0² of a pair.
    pub expression: String,
    /// Its value.
    pub value: f64,
    /// The same of the exact function; null where it is not known.
    pub exact: Option<f64>,
    /// The value as a frequency; null for a gain.
    pub hz: Option<f64>,
    /// Whether a zero lies in the right half plane.
    pub right_half_plane: bool,
}

/// A formula of the chain.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct JsonStep {
    /// The formula.
    pub expression: String,
    /// Symbol occurrences.
    pub length: u64,
    /// The largest error of magnitude at the nominal values.
    pub worst_magnitude_db: f64,
    /// The largest error of phase.
    pub worst_phase_deg: f64,
    /// Whether that is within the goal.
    pub within: bool,
}

/// One result for JSON.
pub fn result(answer: &Answer<'_>) -> SimplifyResult {
    let Answer { entry, simplified } = *answer;
    let names = answer.names();
    let expression = |formula: &Formula| expression(formula, &names);
    let worst = above(&simplified.worst);
    SimplifyResult {
        name: entry.name.clone(),
        query: entry.query.clone(),
        source: entry.source.clone(),
        unit: entry.unit.to_string(),
        expression: expression(&simplified.formula),
        compact: plain::text(&simplified.formula, &names, Dialect::Language),
        latex: Latex { names: &names, width: WIDTH }.text(&simplified.formula),
        length: length(&simplified.formula),
        terms_before: simplified.terms_before.to_string(),
        terms_after: simplified.terms_after.to_string(),
        symbols_before: simplified.symbols_before,
        dropped: dropped(answer),
        worst_magnitude_db: worst.db,
        worst_magnitude_hz: worst.db_hz,
        worst_phase_deg: worst.deg,
        worst_phase_hz: worst.deg_hz,
        over_tolerances: simplified.corners.map(|corners| {
            let worst = above(&corners.worst);
            OverTolerances {
                corners: corners.count,
                all_corners: corners.all,
                worst_magnitude_db: worst.db,
                worst_magnitude_hz: worst.db_hz,
                worst_phase_deg: worst.deg,
                worst_phase_hz: worst.deg_hz,
            }
        }),
        from_hz: simplified.band.0,
        to_hz: simplified.band.1,
        goal: JsonGoal {
            magnitude_db: finite(simplified.goal.magnitude_db),
            phase_deg: finite(simplified.goal.phase_deg),
            roots: simplified.goal.roots,
            coefficients: simplified.goal.coefficients,
        },
        exact: simplified.is_exact,
        stopped: simplified.stopped,
        figures: figures(answer, &names),
        steps: simplified
            .steps
            .iter()
            .map(|step| JsonStep {
                expression: expression(&step.formula),
                length: step.length,
                worst_magnitude_db: above(&step.worst).db,
                worst_phase_deg: above(&step.worst).deg,
                within: step.within,
            })
            .collect(),
    }
}

fn expression(formula: &Formula, names: &SymbolTable) -> String {
    plain::text(formula, names, Dialect::Expression)
}

fn dropped(answer: &Answer<'_>) -> Vec<DroppedSymbol> {
    let one = |left: &crate::simplify::LeftOut| DroppedSymbol {
        symbol: answer.symbol(left.symbol).to_owned(),
        to: match left.how {
            Left::Terms => None,
            how => answer.went(how),
        },
        magnitude_db: left.change.map(|change| change.db),
        magnitude_hz: left.change.map(|change| change.db_hz),
        phase_deg: left.change.map(|change| change.deg),
        phase_hz: left.change.map(|change| change.deg_hz),
    };
    answer.simplified.left_out.iter().map(one).collect()
}

fn figures(answer: &Answer<'_>, names: &SymbolTable) -> Vec<JsonFigure> {
    let one = |figure: &crate::simplify::Figure| {
        let (kind, number, right_half_plane) = match figure.kind {
            FigureKind::DcGain => ("dc_gain", None, false),
            FigureKind::Pole(number) => ("pole", Some(number), false),
            FigureKind::Zero(number, right) => ("zero", Some(number), right),
            FigureKind::PolePair(number) => ("pole_pair", Some(number), false),
            FigureKind::ZeroPair(number) => ("zero_pair", Some(number), false),
            FigureKind::GainBandwidth => ("gain_bandwidth", None, false),
        };
        JsonFigure {
            kind,
            number,
            expression: expression(&figure.formula, names),
            value: figure.value,
            exact: figure.exact,
            hz: figure_hertz(figure.kind, figure.value),
            right_half_plane,
        }
    };
    answer.simplified.figures.iter().map(one).collect()
}

/// A little above, so that what is told is never below what another grid finds by rounding.
fn above(worst: &Worst) -> Worst {
    const MARGIN: f64 = 1.0 + 1e-6;
    const LEAST: f64 = 1e-9;
    let up = |value: f64| if value > 0.0 { value * MARGIN + LEAST } else { 0.0 };
    Worst { db: up(worst.db), deg: up(worst.deg), ..*worst }
}

fn finite(value: f64) -> Option<f64> {
    value.is_finite().then_some(value)
}
