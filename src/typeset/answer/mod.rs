//! A whole answer: the formula in its shape, with units, numbers, behaviour at the ends of the
//! frequency axis and the evidence, as text or for JSON.

mod evidence;
mod json;
mod latex;
mod sections;
mod text;

pub use evidence::evidence;
pub use json::{result, symbols, warning};
pub use latex::latex;
pub use text::{TextStyle, text};

use super::shape::{Layered, Lettering, Shape, write};
use super::{Formula, SymbolTable};
use crate::algebra::Var;
use crate::analysis::{ClosedForm, Derivation};
use crate::circuit::{Ask, Circuit, Drive, SymbolRole, Transfer};
use crate::elimination::variable_of;

/// One question with the answers to its transfer functions.
#[derive(Debug)]
pub struct Answer<'a> {
    /// The circuit.
    pub circuit: &'a Circuit,
    /// The question.
    pub ask: &'a Ask,
    /// One for each of the question's transfer functions, in their order.
    pub derivations: &'a [Derivation],
    /// The shape that was asked for.
    pub shape: Shape,
}

impl<'a> Answer<'a> {
    /// The names of the circuit's symbols.
    pub fn names(&self) -> SymbolTable {
        SymbolTable::new(self.circuit.symbols.iter().map(|symbol| symbol.name.as_str()))
    }

    /// Transfer functions and their derivations.
    fn parts(&self) -> impl Iterator<Item = (&'a Transfer, &'a Derivation)> {
        self.ask.transfers.iter().zip(self.derivations)
    }

    /// The name of the source that drives a transfer function.
    fn source(&self, transfer: &Transfer) -> Option<&'a str> {
        match transfer.drive {
            Drive::Source(id) => Some(&self.circuit[id].name),
            Drive::Port(..) => None,
        }
    }

    fn written(&self, derivation: &Derivation) -> Layered {
        let letters = lettering(self.circuit);
        let written = |shape| write(&derivation.form, &derivation.elimination, shape, letters);
        // A shape that needs an expansion is refused before this, with the number of its terms.
        written(self.shape)
            .or_else(|| written(Shape::Compact))
            .unwrap_or_else(|| Layered::plain(Formula::integer(0)))
    }
}

/// Which letters the circuit's variables are.
pub fn lettering(circuit: &Circuit) -> Lettering<'_> {
    let pi = circuit.symbols.iter().zip(0_u32..).find(|(symbol, _)| symbol.role == SymbolRole::Pi);
    Lettering {
        pi: pi.map(|(_, index)| variable_of(crate::circuit::SymbolId(index))),
        symbols: &circuit.symbols,
    }
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
