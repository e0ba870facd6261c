//! Nodes, elements and symbols.
//!
//! Signs follow the passive sign convention (IEC 60375): an element's voltage is counted from its
//! first node (+) to its second (−), and its current flows through it from the first to the second.

use super::{Ask, Claim, Limit, Number, Unit, Value};

/// A node of the circuit; 0 is the reference node.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct NodeId(pub u32);

/// The reference node.
pub const GROUND: NodeId = NodeId(0);

/// Index into [`Circuit::elements`].
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct ElementId(pub u32);

/// Index into [`Circuit::symbols`].
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct SymbolId(pub u32);

/// A linear circuit and what is asked of it.
///
/// Wires are already merged, devices already expanded into elements.
#[derive(Clone, Debug, Default)]
pub struct Circuit {
    /// The title, without quotes.
    pub title: Option<String>,
    /// Names of the nodes; index 0 is `ground`. A node made of several wired names lists all.
    pub nodes: Vec<Node>,
    /// All elements, in the order of the file; an expanded device's elements stand at its place.
    pub elements: Vec<Element>,
    /// Every symbol that the algebra sees, in reference order: R, C, L, G, Z, Y of elements, then
    /// devices' parameters, then bare parameters; by name (digits compared as numbers) within each.
    pub symbols: Vec<Symbol>,
    /// The questions of the file, in its order.
    pub asks: Vec<Ask>,
    /// Where numbers are compared, in hertz.
    pub band: Option<Band>,
    /// Names that stand for an expression and are no symbols: matched elements, abbreviations
    /// made by `let`, device parameters that are tied to something. Hand-derived formulas may use them.
    pub definitions: Vec<Definition>,
    /// Hand-derived formulas, in the order of the file.
    pub claims: Vec<Claim>,
    /// Limits that are taken in every result, in the order of the file.
    pub limits: Vec<Limit>,
    /// Bias currents of the devices whose bias is given: they add shot noise.
    pub shots: Vec<Shot>,
    /// Resistances of devices that stand for the slope of a characteristic (`Q1.rpi`, `U1.rout`),
    /// ascending: they make no thermal noise.
    pub noiseless: Vec<ElementId>,
    /// The temperature in kelvin, for noise; 300 K where the file says nothing.
    pub temperature: Option<Number>,
}

/// A junction whose bias current is known: shot noise of 2·q·I in parallel with it.
#[derive(Clone, Debug)]
pub struct Shot {
    /// The device and terminal it belongs to (`Q1.collector`).
    pub name: String,
    /// The current flows from here.
    pub plus: NodeId,
    /// To here.
    pub minus: NodeId,
    /// The bias current in ampere.
    pub current: Number,
}

/// A name that stands for an expression.
#[derive(Clone, Debug)]
pub struct Definition {
    /// As written: `R2`, `tau`, `Q2.gm`.
    pub name: String,
    /// What it stands for.
    pub value: Value,
}

/// A node and its names.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Node {
    /// The name that is printed: the first one in the file.
    pub name: String,
    /// Other names that wires made equal to it.
    pub aliases: Vec<String>,
}

/// What kind of part an element is; for listings, not for the algebra.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Class {
    /// R, ohm.
    Resistor,
    /// C, farad.
    Capacitor,
    /// L, henry.
    Inductor,
    /// G, siemens.
    Conductance,
    /// Z, any one-port in ohm.
    Impedance,
    /// Y, any one-port in siemens.
    Admittance,
    /// An independent or dependent voltage source.
    Voltage,
    /// An independent or dependent current source.
    Current,
    /// An operational amplifier: ideal (nullator at the input, norator at the output), or of finite
    /// gain, a controlled voltage.
    Opamp,
    /// A nullator and a norator.
    Nullor,
    /// An ideal transformer.
    Transformer,
    /// A gyrator.
    Gyrator,
    /// Magnetic coupling of two inductors.
    Mutual,
}

/// A part between two nodes, and its law.
#[derive(Clone, Debug)]
pub struct Element {
    /// The name, unique among elements (`R1`, `Q1.gm`, `S1.R`).
    pub name: String,
    /// What kind of part it is.
    pub class: Class,
    /// The first node of the walk (+).
    pub plus: NodeId,
    /// The second node of the walk (−).
    pub minus: NodeId,
    /// How voltage and current go together.
    pub law: Law,
    /// The line of the file that made it, from 1; 0 when it came from elsewhere.
    pub line: u32,
}

/// How an element's voltage `v` (plus to minus) and current `i` (plus to minus through it) go together.
#[derive(Clone, Debug)]
pub enum Law {
    /// v = Z·i; a resistor's Z is its value, an inductor's is `s·L`.
    Impedance(Value),
    /// i = Y·v; a conductance's Y is its value, a capacitor's is `s·C`.
    Admittance(Value),
    /// An independent voltage source: v is given.
    VoltageSource,
    /// An independent current source: i is given.
    CurrentSource,
    /// A dependent voltage source: v is the sum of gain × quantity. An empty sum is 0 V: an ammeter.
    ControlledVoltage(Vec<Control>),
    /// A dependent current source: i is the sum of gain × quantity.
    ControlledCurrent(Vec<Control>),
    /// Norator between the element's own nodes, nullator between these two: an ideal
    /// op-amp has plus = its output, minus = ground, and its inputs here.
    Nullor(NodeId, NodeId),
    /// An ideal transformer: the element's own nodes are the primary, these the secondary;
    /// v = ratio·v₂ and i₂ = −ratio·i, each current into its first node.
    Transformer {
        /// Primary over secondary voltage.
        ratio: Value,
        /// The secondary.
        secondary: (NodeId, NodeId),
    },
    /// A gyrator: the element's own nodes are port 1, these port 2; i = g·v₂ and i₂ = −g·v.
    Gyrator {
        /// The gyration conductance.
        conductance: Value,
        /// Port 2.
        second: (NodeId, NodeId),
    },
    /// Coupling of two inductors (elements with [`Class::Inductor`]): s·M·i of each is added to the
    /// voltage of the other. The element's own nodes mean nothing and are ground.
    Mutual {
        /// The one inductor.
        first: ElementId,
        /// The other.
        second: ElementId,
        /// The mutual inductance M.
        inductance: Value,
    },
}

/// One term of a dependent source.
#[derive(Clone, Debug)]
pub struct Control {
    /// The factor; a rational function of `s` and the symbols.
    pub gain: Value,
    /// What it multiplies.
    pub quantity: Quantity,
}

/// A voltage or a current of the circuit.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Quantity {
    /// The voltage from the first node to the second.
    Voltage(NodeId, NodeId),
    /// The current through an element, along its walk.
    Current(ElementId),
}

/// A letter of the formulas.
#[derive(Clone, Debug)]
pub struct Symbol {
    /// As written: `R1`, `Q1.gm`, `beta`.
    pub name: String,
    /// What it stands for.
    pub role: SymbolRole,
    /// Its unit; inferred for bare parameters, dimensionless where nothing tells.
    pub unit: Unit,
    /// The exact nominal value in SI units.
    pub nominal: Option<Number>,
    /// The tolerance about the nominal value.
    pub tolerance: Option<Tolerance>,
}

/// What a symbol stands for; its order is the reference order of printing.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum SymbolRole {
    /// A two-terminal element of this class.
    Element(Class),
    /// A device's or a block's parameter (`Q1.gm`, `U1.gain`).
    DeviceParameter,
    /// A bare parameter (`beta`, `tau`).
    Parameter,
    /// The number π.
    Pi,
}

/// Deviations from the nominal value, absolute and in SI units; `low` ≤ 0 ≤ `high`.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Tolerance {
    /// Largest deviation downwards (not positive).
    pub low: Number,
    /// Largest deviation upwards (not negative).
    pub high: Number,
    /// As written, for printing: `1 %`, `0.5 pF`, `-20 % +80 %`.
    pub text: String,
}

/// A frequency band in hertz, `from` < `to`, both above 0.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Band {
    /// Lower end.
    pub from: Number,
    /// Upper end.
    pub to: Number,
}

impl Circuit {
    /// The element of that name.
    pub fn element(&self, name: &str) -> Option<ElementId> {
        let index = self.elements.iter().position(|element| element.name == name)?;
        u32::try_from(index).ok().map(ElementId)
    }

    /// Whether the element makes thermal noise: resistors, conductances and the physical resistances of
    /// devices do, slopes of characteristics do not.
    pub fn is_noisy(&self, id: ElementId) -> bool {
        matches!(self[id].class, Class::Resistor | Class::Conductance)
            && !self.noiseless.contains(&id)
    }

    /// The node of that name or alias.
    pub fn node(&self, name: &str) -> Option<NodeId> {
        let index = self
            .nodes
            .iter()
            .position(|node| node.name == name || node.aliases.iter().any(|alias| alias == name))?;
        u32::try_from(index).ok().map(NodeId)
    }

    /// The symbol of that name.
    pub fn symbol(&self, name: &str) -> Option<SymbolId> {
        let index = self.symbols.iter().position(|symbol| symbol.name == name)?;
        u32::try_from(index).ok().map(SymbolId)
    }
}

macro_rules! index_by {
    ($id:ty, $field:ident, $item:ty) => {
        impl std::ops::Index<$id> for Circuit {
            type Output = $item;
            fn index(&self, id: $id) -> &$item {
                &self.$field[id.0 as usize]
            }
        }
    };
}
index_by!(NodeId, nodes, Node);
index_by!(ElementId, elements, Element);
index_by!(SymbolId, symbols, Symbol);
