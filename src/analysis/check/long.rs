//! Results that are too long to expand: a claim can be refuted, but not proved.

use super::residues::Point;
use super::{CheckError, Judgement, Verdict};
use crate::analysis::{ClosedForm, Entry};
use crate::circuit::{Claim, Property, Symbol, Unit};

/// How many points are tried.
const POINTS: usize = 4;

/// A verdict for a claim that is different from the result at a random point modulo a prime.
///
/// # Errors
/// [`CheckError::TooLong`] where it is not.
pub(super) fn refute(
    claim: &Claim,
    entry: &Entry,
    symbols: Vec<Symbol>,
    unit: Option<Unit>,
) -> Result<Judgement, CheckError> {
    let too_long = CheckError::TooLong { points: POINTS };
    let (ClosedForm::Nested(_), Some(elimination)) = (&entry.form, &entry.elimination) else {
        return Err(too_long);
    };
    if claim.property != Property::Function {
        return Err(CheckError::TooLong { points: 0 });
    }
    for seed in 0..POINTS as u64 {
        let Some(point) = Point::random(symbols.len(), 0x0c1a_2000 + seed) else { break };
        let (above, below) = elimination.remainders(point.field, point.residues());
        let claimed = point.value(&claim.formula);
        if let (Some(claimed), Some(exact)) = (claimed, point.quotient(above, below))
            && claimed != exact
        {
            return Ok(Judgement {
                verdict: if unit.is_some() { Verdict::Different } else { Verdict::UnitError },
                limits: Vec::new(),
                claimed: None,
                exact: None,
                squared: false,
                differences: Vec::new(),
                repair: None,
                right: None,
                deviation: None,
                nearness: None,
                symbols,
                unit,
                notices: Vec::new(),
            });
        }
    }
    Err(too_long)
}
