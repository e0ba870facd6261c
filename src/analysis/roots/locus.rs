//! The root locus against one symbol (Evans 1948): where the roots go while its value grows.

use num_complex::Complex;
use num_traits::ToPrimitive;

use super::values::{Nominal, follow, places};
use crate::circuit::SymbolId;

/// The paths of the poles, and the places of the zeros, for values from a tenth to ten times the nominal one.
#[derive(Clone, Debug, PartialEq)]
pub struct Locus {
    /// The symbol.
    pub symbol: SymbolId,
    /// The values, ascending; the nominal one is in the middle.
    pub values: Vec<f64>,
    /// One path for each pole, with one place for each value; empty places where the pole does not exist.
    pub paths: Vec<Vec<Option<Complex<f64>>>>,
}

/// Values in each direction.
const STEPS: i32 = 60;

/// Follows the poles; none where the symbol has no positive value.
pub fn locus(values: &Nominal<'_>, symbol: SymbolId) -> Option<Locus> {
    let nominal = values.number(symbol)?.to_f64().filter(|x| *x > 0.0)?;
    let start = places(&values.with(&[])?.1)?;
    let count = start.len();
    let at = |step: i32| nominal * libm::pow(10.0, f64::from(step) / f64::from(STEPS));
    let walk = |direction: i32| {
        let mut last: Vec<Complex<f64>> = start.clone();
        let mut rows: Vec<Vec<Option<Complex<f64>>>> = Vec::new();
        for step in 1..=STEPS {
            let found = values.with_one(symbol, at(direction * step));
            let roots = found.and_then(|(_, below)| places(&below)).unwrap_or_default();
            let row: Vec<Option<Complex<f64>>> = follow(&last, &roots)
                .into_iter()
                .map(|place| place.map(|place| roots[place]))
                .collect();
            for (last, now) in last.iter_mut().zip(&row) {
                *last = now.unwrap_or(*last);
            }
            rows.push(row);
        }
        rows
    };
    let mut rows = walk(-1);
    rows.reverse();
    rows.push(start.iter().map(|&root| Some(root)).collect());
    rows.extend(walk(1));
    let paths = (0..count).map(|pole| rows.iter().map(|row| row[pole]).collect()).collect();
    Some(Locus { symbol, values: (-STEPS..=STEPS).map(at).collect(), paths })
}
