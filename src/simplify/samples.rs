//! The values at which a formula is held against the exact function: the nominal ones, and the
//! corners of the tolerances.

use num_traits::ToPrimitive;

use crate::algebra::modular::Random;
use crate::circuit::{Symbol, SymbolId, SymbolRole};

/// Corners that are tried; where there are more, this many are drawn.
pub(crate) const MOST_CORNERS: usize = 256;

/// The nominal values; those that are not needed and not known are 1.
pub(crate) fn nominal(symbols: &[Symbol]) -> Vec<f64> {
    symbols
        .iter()
        .map(|symbol| match (&symbol.nominal, symbol.role) {
            (_, SymbolRole::Pi) => std::f64::consts::PI,
            (Some(number), _) => number.to_f64().unwrap_or(f64::NAN),
            (None, _) => 1.0,
        })
        .collect()
}

/// Corners of the tolerances.
#[derive(Clone, Debug, Default)]
pub(crate) struct Corners {
    pub(crate) samples: Vec<Vec<f64>>,
    /// Whether these are all.
    pub(crate) all: bool,
}

/// The corners of the symbols that are used, at most `most` of them.
pub(crate) fn corners(symbols: &[Symbol], used: &[SymbolId], most: usize) -> Corners {
    let centre = nominal(symbols);
    let ends: Vec<(usize, [f64; 2])> = used
        .iter()
        .filter_map(|id| {
            let index = id.0 as usize;
            let tolerance = symbols[index].tolerance.as_ref()?;
            let ends = [&tolerance.low, &tolerance.high]
                .map(|end| centre[index] + end.to_f64().unwrap_or(0.0));
            (ends[0] != ends[1]).then_some((index, ends))
        })
        .collect();
    if ends.is_empty() {
        return Corners { samples: Vec::new(), all: true };
    }
    let corner = |choice: &dyn Fn(usize) -> bool| {
        let mut values = centre.clone();
        for (place, (index, ends)) in ends.iter().enumerate() {
            values[*index] = ends[usize::from(choice(place))];
        }
        values
    };
    let all = ends.len() < usize::BITS as usize && 1_usize << ends.len() <= most;
    let samples = if all {
        (0..1_usize << ends.len()).map(|bits| corner(&|place| bits >> place & 1 == 1)).collect()
    } else {
        let mut random = Random::new(0x5eed_0007);
        (0..most)
            .map(|_| {
                let words: Vec<u64> = ends.iter().map(|_| random.word()).collect();
                corner(&|place| words[place] >> 40 & 1 == 1)
            })
            .collect()
    };
    Corners { samples, all }
}
