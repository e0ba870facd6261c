//! What is asked of a circuit, resolved: nodes and elements are known, the driving source is chosen.

use super::{Circuit, ElementId, NodeId, Number, Symbol, SymbolId, Unit, Value};

/// A question of the file or of the command line.
#[derive(Clone, Debug)]
pub struct Ask {
    /// The name of the result (`H`).
    pub name: String,
    /// The query as written, tidied (`V(out) / Vin`).
    pub text: String,
    /// What is asked.
    pub question: Question,
    /// The line of the file, from 1; 0 for the command line.
    pub line: u32,
}

/// What is asked.
#[derive(Clone, Debug)]
pub enum Question {
    /// One ratio: a transfer function, an impedance, an admittance.
    Ratio(Transfer),
    /// A bare `V(..)` or `I(..)`: the sum over the independent sources of transfer × source, one
    /// transfer function for each.
    Superposition(Vec<Transfer>),
    /// A set of two-port parameters; all independent sources are zeroed.
    TwoPort(TwoPort),
    /// The return ratio of a dependent source (Bode 1945), positive for negative feedback; all
    /// independent sources are zeroed.
    ReturnRatio(ElementId),
    /// The one-sided noise density of the voltage from the first node to the second, in V²/Hz.
    NoiseDensity(NodeId, NodeId),
}

impl Ask {
    /// The transfer functions that answer a ratio or a superposition; empty for other questions.
    pub fn transfers(&self) -> &[Transfer] {
        match &self.question {
            Question::Ratio(transfer) => std::slice::from_ref(transfer),
            Question::Superposition(transfers) => transfers,
            Question::TwoPort(_) | Question::ReturnRatio(_) | Question::NoiseDensity(..) => &[],
        }
    }

    /// Whether the answer is a sum over the independent sources.
    pub fn is_superposition(&self) -> bool {
        matches!(self.question, Question::Superposition(_))
    }
}

/// A set of two-port parameters between two ports; currents are counted into the first node of each.
#[derive(Clone, Debug, PartialEq)]
pub struct TwoPort {
    /// Which set.
    pub set: ParameterSet,
    /// The first port.
    pub port1: (NodeId, NodeId),
    /// The second port.
    pub port2: (NodeId, NodeId),
    /// The reference resistance of the scattering sets, in ohm.
    pub reference: Option<Value>,
    /// Independent sources that are taken out because they lie exactly across a port.
    pub removed: Vec<ElementId>,
}

/// The sets of two-port parameters.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum ParameterSet {
    /// V = z·I.
    Z,
    /// I = y·V.
    Y,
    /// (V1, I2) = h·(I1, V2).
    H,
    /// (I1, V2) = g·(V1, I2).
    G,
    /// (V1, I1) = a·(V2, −I2).
    Chain,
    /// (V2, I2) = b·(V1, −I1).
    InverseChain,
    /// Outgoing waves for incoming ones.
    Scattering,
    /// Waves at port 1 for waves at port 2.
    TransferScattering,
}

impl ParameterSet {
    /// The letter of the entries: `z`, `y`, `h`, `g`, `a`, `b`, `s`, `t`.
    pub fn letter(self) -> char {
        match self {
            Self::Z => 'z',
            Self::Y => 'y',
            Self::H => 'h',
            Self::G => 'g',
            Self::Chain => 'a',
            Self::InverseChain => 'b',
            Self::Scattering => 's',
            Self::TransferScattering => 't',
        }
    }
}

/// A hand-derived formula for an answer, or for something about it.
#[derive(Clone, Debug)]
pub struct Claim {
    /// As written: `H`, `P.z21`, `H.p1`, `H(0)`.
    pub name: String,
    /// The result it is about: a question's name, a two-port's entry (`P.z21`), or a source's share
    /// of a superposition (`Vbus.Vbat`).
    pub answer: String,
    /// What of that result is claimed.
    pub property: Property,
    /// Whether it is said to be equal or about equal.
    pub relation: Relation,
    /// The formula, resolved.
    pub formula: Value,
    /// The claim is the formula times the square root of this.
    pub under_root: Option<Value>,
    /// Symbols of the formula that the circuit does not have, numbered behind the circuit's: π,
    /// constants of nature, ω.
    pub extra: Vec<Symbol>,
    /// The formula as written.
    pub text: String,
    /// The line of the file, from 1; 0 for the command line.
    pub line: u32,
    /// The first byte of the formula and one past its last, in the file.
    pub span: (usize, usize),
}

/// What of a result a claim is about. Poles and zeros are numbered from 1 by their size.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Property {
    /// The function itself.
    Function,
    /// A pole, in 1/s.
    Pole(u32),
    /// A zero, in 1/s.
    Zero(u32),
    /// |p|, in 1/s; of the first pair of poles where none is named.
    NaturalFrequency(Option<u32>),
    /// The square of that.
    NaturalFrequencySquared(Option<u32>),
    /// |p|/2π, in hertz.
    NaturalHertz(Option<u32>),
    /// |p|/(2·|Re p|) of a pair of poles.
    Quality(Option<u32>),
    /// The value at s = 0.
    DcGain,
    /// The value at s = ∞.
    HighFrequencyGain,
}

/// How a claim relates to what is exact.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Relation {
    /// `=`: identical for all values.
    Equal,
    /// `~` or `≈`: at the nominal values, at the ends of the tolerances and over the band the relative
    /// deviation is at most this.
    About(Number),
}

impl Claim {
    /// The symbols that the formula's numbers stand for: the circuit's and those behind them.
    pub fn symbols(&self, circuit: &Circuit) -> Vec<Symbol> {
        circuit.symbols.iter().chain(&self.extra).cloned().collect()
    }
}

/// A limit that is taken in every result, exactly.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Limit {
    /// The symbol; `None` for `s`.
    pub symbol: Option<SymbolId>,
    /// Where it goes.
    pub to: LimitTo,
}

/// Where a limit goes.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum LimitTo {
    /// To 0.
    Zero,
    /// To infinity.
    Infinity,
}

/// One exact ratio: `numerator / denominator` while `drive` is the only excitation.
#[derive(Clone, Debug)]
pub struct Transfer {
    /// What excites the circuit. Every other independent source is zeroed: a voltage source is a
    /// short, a current source an open.
    pub drive: Drive,
    /// The upper quantity.
    pub numerator: Probe,
    /// The lower quantity.
    pub denominator: Probe,
    /// Independent sources that are taken out altogether because they lie exactly across the port.
    pub removed: Vec<ElementId>,
    /// The unit of the ratio.
    pub unit: Unit,
}

/// The only excitation of a transfer function.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Drive {
    /// An independent source of the circuit, with its own sign convention, set to 1.
    Source(ElementId),
    /// A test current of 1 A that enters the circuit at the first node and leaves it at the second.
    Port(NodeId, NodeId),
}

/// A quantity of the circuit under the drive.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Probe {
    /// The voltage from the first node to the second.
    Voltage(NodeId, NodeId),
    /// The current through an element, along its walk.
    Current(ElementId),
    /// The drive itself: 1.
    Drive,
}
