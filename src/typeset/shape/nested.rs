//! Named sub-expressions, for what is too long to expand.

use super::{Lettering, Section};
use crate::elimination::{Nested, NestedFactor, NestedSum};
use crate::typeset::Formula;

/// A formula over definitions; each uses earlier ones only.
#[derive(Clone, Debug)]
pub struct Layered {
    /// What the definitions stand for, in order of use.
    pub definitions: Vec<Formula>,
    /// The whole.
    pub formula: Formula,
    /// What the sections are, in the shape `sections`.
    pub sections: Vec<Section>,
}

impl Layered {
    /// Without anything beside it.
    pub(crate) fn plain(formula: Formula) -> Self {
        Self { definitions: Vec::new(), formula, sections: Vec::new() }
    }
}

/// The shape `nested`.
pub fn nested(nested: &Nested, letters: Lettering<'_>) -> Layered {
    let definitions = nested.definitions.iter().map(|sum| written(sum, letters)).collect();
    let formula = Formula::quotient(
        written(&nested.numerator, letters),
        written(&nested.denominator, letters),
    );
    Layered { definitions, ..Layered::plain(formula) }
}

/// Sums nest only a few levels deep: the elimination names them beyond that.
fn written(sum: &NestedSum, letters: Lettering<'_>) -> Formula {
    Formula::sum(sum.terms.iter().map(|(weight, factor)| {
        let factor = match factor {
            NestedFactor::One => Formula::integer(1),
            NestedFactor::Definition(index) => Formula::definition(*index as u32),
            NestedFactor::Sum(inner) => written(inner, letters),
        };
        Formula::product([letters.polynomial(weight), factor])
    }))
}
