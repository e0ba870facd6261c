//! The JSON of `inspect`: wire types and nothing else.
//!
//! Numbers of circuits are exact and therefore strings; fields that do not apply are null.

use serde::Serialize;

use crate::typeset::json::{Symbol, Warning};

/// The value of [`Inspect::schema`].
pub const INSPECT_SCHEMA: &str = "cofactor/inspect/1";

/// Everything that `inspect` prints.
#[derive(Debug, Serialize)]
pub struct Inspect {
    /// [`INSPECT_SCHEMA`].
    pub schema: &'static str,
    /// The title of the circuit.
    pub circuit: Option<String>,
    /// The nodes; the first is ground.
    pub nodes: Vec<Node>,
    /// The elements, in the order of the file.
    pub elements: Vec<Element>,
    /// Every symbol of the formulas.
    pub symbols: Vec<Symbol>,
    /// Names that stand for an expression.
    pub definitions: Vec<Definition>,
    /// Devices and blocks, and what they consist of.
    pub groups: Vec<Group>,
    /// Names of the independent sources.
    pub sources: Vec<String>,
    /// The questions of the file.
    pub asks: Vec<Ask>,
    /// The hand-derived formulas.
    pub claims: Vec<Claim>,
    /// Limits that are taken in every result.
    pub limits: Vec<String>,
    /// The band.
    pub band: Option<Band>,
    /// What is noisy.
    pub noise: Noise,
    /// What the graph says.
    pub graph: Graph,
    /// What there is to say about the text.
    pub warnings: Vec<Warning>,
}

/// A node.
#[derive(Debug, Serialize)]
pub struct Node {
    /// The name that results use.
    pub name: String,
    /// Other names of it.
    pub aliases: Vec<String>,
    /// Elements that a current can flow through at this node.
    pub elements: Vec<String>,
}

/// An element.
#[derive(Debug, Serialize)]
pub struct Element {
    /// Its name.
    pub name: String,
    /// Its class, by the word of the language.
    pub class: &'static str,
    /// Its first (+) and second node.
    pub nodes: Vec<String>,
    /// The nodes of a second port, or of the input of an op-amp or a nullor.
    pub other_nodes: Vec<String>,
    /// Its value as an expression; null for independent sources and ideal op-amps.
    pub value: Option<String>,
    /// The exact nominal value in SI units, of an element that is a symbol.
    pub nominal: Option<String>,
    /// The tolerance as written.
    pub tolerance: Option<String>,
    /// Whether its value depends on another voltage or current.
    pub dependent: bool,
    /// Whether it has thermal noise.
    pub noisy: bool,
    /// The line of the file.
    pub line: u32,
}

/// A name for an expression.
#[derive(Debug, Serialize)]
pub struct Definition {
    /// As written.
    pub name: String,
    /// What it stands for.
    pub expression: String,
}

/// A device or a block.
#[derive(Debug, Serialize)]
pub struct Group {
    /// Its name.
    pub name: String,
    /// The elements that it was expanded into.
    pub elements: Vec<String>,
}

/// A question.
#[derive(Debug, Serialize)]
pub struct Ask {
    /// The name of the result.
    pub name: String,
    /// The query.
    pub query: String,
    /// `ratio`, `superposition`, `two-port parameters`, `scattering parameters`, `return ratio` or
    /// `noise density`.
    pub kind: &'static str,
    /// The line of the file.
    pub line: u32,
}

/// A claim.
#[derive(Debug, Serialize)]
pub struct Claim {
    /// The result that it is about.
    pub name: String,
    /// As written.
    pub formula: String,
    /// The line of the file.
    pub line: u32,
}

/// A band in hertz.
#[derive(Debug, Serialize)]
pub struct Band {
    /// Lower end.
    pub from_hz: String,
    /// Upper end.
    pub to_hz: String,
}

/// What is noisy.
#[derive(Debug, Serialize)]
pub struct Noise {
    /// Elements with thermal noise.
    pub thermal: Vec<String>,
    /// Junctions with shot noise.
    pub shot: Vec<Shot>,
    /// The temperature in kelvin.
    pub temperature: String,
}

/// A junction whose bias current is known.
#[derive(Debug, Serialize)]
pub struct Shot {
    /// The device and terminal.
    pub name: String,
    /// The nodes that the current flows between.
    pub nodes: [String; 2],
    /// The bias current in ampere.
    pub current: String,
}

/// What the graph says.
#[derive(Debug, Serialize)]
pub struct Graph {
    /// Branches: ports of elements that carry a current.
    pub branches: usize,
    /// The nodes of each connected part.
    pub parts: Vec<Vec<String>>,
    /// Independent loops.
    pub loops: usize,
    /// Independent cut-sets.
    pub cutsets: usize,
    /// A loop of elements that all fix a voltage.
    pub voltage_loop: Option<Vec<String>>,
    /// A cut-set of elements that all fix a current.
    pub current_cutset: Option<Vec<String>>,
    /// Groups of nodes that only capacitors touch.
    pub charge_groups: Vec<Vec<String>>,
    /// Whether it can be drawn without crossings.
    pub planar: bool,
    /// Whether series and parallel steps take it away.
    pub series_parallel: bool,
    /// Elements that no loop goes through.
    pub bridges: Vec<String>,
    /// Nodes whose loss takes their part apart.
    pub cut_nodes: Vec<String>,
    /// The order of complexity.
    pub order: Order,
}

/// The order of complexity.
#[derive(Debug, Serialize)]
pub struct Order {
    /// The order.
    pub order: usize,
    /// False where it is an upper bound.
    pub exact: bool,
    /// Capacitors and inductors.
    pub reactive: usize,
    /// Degrees in `s` of other values.
    pub from_expressions: usize,
    /// Loops of capacitors and elements that fix a voltage; each takes one.
    pub capacitor_loops: Vec<Vec<String>>,
    /// Cut-sets of inductors and current sources, by their inductors; each takes one.
    pub inductor_cutsets: Vec<Vec<String>>,
}
