//! A whole answer: the formula in its shape, with units, numbers, behaviour at the ends of the
//! frequency axis and the evidence, as text or for JSON.

pub mod check;
mod evidence;
mod json;
mod latex;
mod legend;
pub mod response;
pub mod roots;
mod sections;
mod table;
mod text;

pub use evidence::evidence;
pub use json::{results, symbols, warning};
pub use latex::latex;
pub use legend::{legend_latex, legend_text};
pub use text::{TextStyle, text};

use super::shape::{Layered, Lettering, Shape, write};
use super::{Formula, SymbolTable};
use crate::algebra::Var;
use crate::analysis::{ClosedForm, Entry};
use crate::circuit::{Ask, Circuit, Symbol, SymbolRole};
use crate::elimination::variable_of;

/// One question with its results.
#[derive(Debug)]
pub struct Answer<'a> {
    /// The circuit.
    pub circuit: &'a Circuit,
    /// The question.
    pub ask: &'a Ask,
    /// The named results, in their order.
    pub entries: &'a [Entry],
    /// The shape that was asked for.
    pub shape: Shape,
}

/// The names of the symbols in a result.
pub(crate) fn names(entry: &Entry) -> SymbolTable {
    let names = SymbolTable::new(entry.symbols.iter().map(|symbol| symbol.name.as_str()));
    if entry.noise.is_some() { names.of_frequency() } else { names }
}

/// A result's formula in a shape.
pub(crate) fn written(entry: &Entry, shape: Shape) -> Layered {
    let letters = lettering_of(&entry.symbols);
    let written = |shape| write(&entry.form, entry.elimination.as_ref(), shape, letters);
    // A shape that needs an expansion is refused before this, with the number of its terms.
    written(shape)
        .or_else(|| written(Shape::Compact))
        .unwrap_or_else(|| Layered::plain(Formula::integer(0)))
}

/// Which letters the circuit's variables are.
pub fn lettering(circuit: &Circuit) -> Lettering<'_> {
    lettering_of(&circuit.symbols)
}

/// Which letters the variables of these symbols are.
pub fn lettering_of(symbols: &[Symbol]) -> Lettering<'_> {
    let pi = symbols.iter().zip(0_u32..).find(|(symbol, _)| symbol.role == SymbolRole::Pi);
    Lettering { pi: pi.map(|(_, index)| variable_of(crate::circuit::SymbolId(index))), symbols }
}

/// What a function does at one end of the frequency axis: factor · s^power.
pub(crate) struct Asymptote {
    pub(crate) factor: Formula,
    pub(crate) power: i64,
}

/// Behaviour towards s = 0 and towards s = ∞; `None` for a nested form or the function 0.
pub(crate) fn asymptotes(form: &ClosedForm, letters: Lettering<'_>) -> Option<[Asymptote; 2]> {
    let ClosedForm::Expanded(fraction) = form else { return None };
    if fraction.is_zero() {
        return None;
    }
    let (n, d) = super::shape::signed(fraction);
    let at = |n_power: u32, d_power: u32| {
        let (above, below) = (n.coefficient(Var::S, n_power), d.coefficient(Var::S, d_power));
        let factor = super::shape::ratio(&above, &below, letters);
        Asymptote { factor, power: i64::from(n_power) - i64::from(d_power) }
    };
    Some([
        at(n.trailing_degree(Var::S), d.trailing_degree(Var::S)),
        at(n.degree(Var::S), d.degree(Var::S)),
    ])
}
