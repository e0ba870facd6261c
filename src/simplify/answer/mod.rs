//! A simplified result as text, LaTeX and JSON.
//!
//! May use: [`crate::typeset`] and the results of the search; decides nothing.

mod json;
mod latex;
mod text;

pub use json::{SIMPLIFY_SCHEMA, Simplify, SimplifyResult, result};
pub use latex::latex;
pub use text::text;

use num_rational::BigRational;

use super::{FigureKind, Left, Simplified};
use crate::analysis::Entry;
use crate::typeset::number::{self, Medium};
use crate::typeset::{Formula, SymbolTable};

/// A result and its shorter form.
#[derive(Clone, Copy, Debug)]
pub struct Answer<'a> {
    /// The exact result.
    pub entry: &'a Entry,
    /// The shorter form.
    pub simplified: &'a Simplified,
}

impl Answer<'_> {
    fn names(&self) -> SymbolTable {
        SymbolTable::new(self.entry.symbols.iter().map(|symbol| symbol.name.as_str()))
    }

    /// `H`, or `H[Vin]` for a source's share in a superposition.
    fn label(&self) -> String {
        match &self.entry.source {
            Some(source) => format!("{}[{source}]", self.entry.name),
            None => self.entry.name.clone(),
        }
    }

    fn symbol(&self, id: crate::circuit::SymbolId) -> &str {
        &self.entry.symbols[id.0 as usize].name
    }

    /// Where a symbol went: `0`, `infinity`, the name of another; none where its terms were small.
    fn went(&self, how: Left) -> Option<String> {
        match how {
            Left::Zero => Some("0".to_owned()),
            Left::Infinity => Some("infinity".to_owned()),
            Left::Equal(into) => Some(self.symbol(into).to_owned()),
            Left::Terms => None,
        }
    }
}

/// A name for a figure: `p1`, `z2`, `p2·p3`.
fn figure_name(kind: FigureKind) -> String {
    match kind {
        FigureKind::DcGain => "gain at dc".to_owned(),
        FigureKind::Pole(number) => format!("|p{number}|"),
        FigureKind::Zero(number, _) => format!("|z{number}|"),
        FigureKind::PolePair(number) => format!("|p{number}·p{}|", number + 1),
        FigureKind::ZeroPair(number) => format!("|z{number}·z{}|", number + 1),
        FigureKind::GainBandwidth => "gain·bandwidth".to_owned(),
    }
}

/// The value that is told of a root or a product: hertz. ω0² of a pair is told as its ω0.
fn figure_hertz(kind: FigureKind, value: f64) -> Option<f64> {
    match kind {
        FigureKind::DcGain => None,
        FigureKind::PolePair(_) | FigureKind::ZeroPair(_) => {
            Some(value.abs().sqrt() / std::f64::consts::TAU)
        }
        _ => Some(value.abs() / std::f64::consts::TAU),
    }
}

fn rounded(value: f64, digits: u32, medium: Medium) -> String {
    match BigRational::from_float(value) {
        Some(exact) => number::rounded(&exact, digits, medium),
        None => value.to_string(),
    }
}

fn quantity(value: f64, unit: &str, digits: u32, medium: Medium) -> String {
    match BigRational::from_float(value) {
        Some(exact) => number::quantity(&exact, unit, digits, medium),
        None => format!("{value} {unit}"),
    }
}

/// A bound of an error, rounded up to three digits, so that what is printed still holds.
fn bound(value: f64) -> f64 {
    if value <= 0.0 || !value.is_finite() {
        return value;
    }
    let unit = libm::pow(10.0, libm::log10(value).floor() - 2.0);
    (value / unit).ceil() * unit
}

fn length(formula: &Formula) -> u64 {
    formula.symbols()
}

#[cfg(test)]
mod tests {
    use super::bound;

    #[test]
    fn bounds_are_rounded_up() {
        for value in [0.123_400_1, 9.991, 1.0, 0.000_123_45] {
            let rounded = bound(value);
            assert!(rounded >= value && rounded <= value * 1.01, "{value}: {rounded}");
        }
        assert_eq!(bound(0.0), 0.0);
    }
}
