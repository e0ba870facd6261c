//! The network that a text means: nodes, elements, symbols, units, values and questions.
//!
//! May use: nothing of this crate. This is what both the derivation and its witnesses read, so
//! it holds facts and no methods of solution.

pub mod graph;
mod model;
mod name;
mod question;
mod substitute;
mod unit;
mod value;

pub use model::{
    Band, Circuit, Class, Control, Definition, Element, ElementId, GROUND, Law, Node, NodeId,
    Quantity, Shot, Symbol, SymbolId, SymbolRole, Tolerance,
};
pub use name::compare_names;
pub use question::{
    Ask, Claim, Drive, Limit, LimitTo, ParameterSet, Probe, Property, Question, Relation, Transfer,
    TwoPort,
};
pub use unit::Unit;
pub use value::{Number, Value};
