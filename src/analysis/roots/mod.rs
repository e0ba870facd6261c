//! Poles and zeros: where they are, with certain bounds, and which elements set each.
//!
//! The roots are those of the exact numeric coefficients ([`find()`]); nothing is rounded before the
//! root finder, and every disc that it gives holds exactly one root. Sensitivities come from the diagram
//! of the elimination.
//!
//! May use: the rest of [`crate::analysis`], [`crate::circuit`], [`crate::algebra`],
//! [`crate::elimination`]. Prints nothing.

mod error;
mod find;
mod fixed;
mod isolate;
mod sensitivity;

pub use error::RootsError;
pub use find::{Root, find};
pub use sensitivity::{SET_BY_SHARE, Sensitivity};

use num_traits::ToPrimitive;

use super::{Derivation, Notice, NumericForm};
use crate::algebra::Univariate;
use crate::circuit::{Circuit, SymbolId, SymbolRole, Transfer};
use crate::numeric::{Assignment, Origin, used_symbols};
use sensitivity::Side;

/// Everything about the roots of one transfer function.
#[derive(Clone, Debug)]
pub struct RootReport {
    /// The poles by size.
    pub poles: Vec<RootFacts>,
    /// The zeros by size.
    pub zeros: Vec<RootFacts>,
    /// H = gain · Π(s − zero)/Π(s − pole).
    pub gain: f64,
    /// Remarks.
    pub notices: Vec<Notice>,
}

/// One root and what moves it.
#[derive(Clone, Debug)]
pub struct RootFacts {
    /// The root.
    pub root: Root,
    /// To every symbol of the function; none for a multiple root and for a root at 0.
    pub sensitivities: Option<Vec<Sensitivity>>,
    /// The symbols with at least [`SET_BY_SHARE`] of the largest sensitivity, the largest first.
    pub set_by: Vec<SymbolId>,
}

/// Finds and describes the roots of a derived transfer function.
///
/// # Errors
/// Missing values, and bounds of the work.
pub fn analyse(
    circuit: &Circuit,
    transfer: &Transfer,
    derivation: &Derivation,
) -> Result<RootReport, RootsError> {
    let assignment = Assignment::for_transfer(circuit, transfer, 0);
    let numeric = numeric_form(circuit, transfer, derivation, &assignment)?;
    let symbols = assignment.floats();
    let describe = |root: Root, side: Side| {
        let sensitivities = if root.multiplicity == 1 {
            sensitivity::of_root(&derivation.elimination, &symbols, root.value, side)
        } else {
            None
        };
        let sensitivities = sensitivities.map(|all| without_pi(circuit, all));
        let set_by = sensitivities.as_deref().map(sensitivity::set_by).unwrap_or_default();
        RootFacts { root, sensitivities, set_by }
    };
    let numerator = Univariate::from_rationals(&numeric.numerator);
    let denominator = Univariate::from_rationals(&numeric.denominator);
    let all = |polynomial: &Univariate, side: Side| -> Result<Vec<RootFacts>, RootsError> {
        Ok(find(polynomial)?.into_iter().map(|root| describe(root, side)).collect())
    };
    let poles = all(&denominator, Side::Poles)?;
    let zeros = all(&numerator, Side::Zeros)?;
    let gain = if numerator.is_zero() {
        0.0
    } else {
        let ratio = numerator.leading_coefficient() / denominator.leading_coefficient();
        ratio.to_f64().unwrap_or(f64::NAN)
    };
    Ok(RootReport { poles, zeros, gain, notices: Vec::new() })
}

fn without_pi(circuit: &Circuit, mut all: Vec<Sensitivity>) -> Vec<Sensitivity> {
    all.retain(|one| circuit[one.symbol].role != SymbolRole::Pi);
    all
}

/// The numeric form, or why there is none.
fn numeric_form<'a>(
    circuit: &Circuit,
    transfer: &Transfer,
    derivation: &'a Derivation,
    assignment: &Assignment,
) -> Result<&'a NumericForm, RootsError> {
    if let Some(numeric) = &derivation.numeric {
        return Ok(numeric);
    }
    if assignment.origin == Origin::Nominal {
        let finite = !derivation.notices.iter().any(|notice| notice.code == "no-nominal-value");
        return Err(if finite { RootsError::TooLarge } else { RootsError::NotFinite });
    }
    let missing: Vec<String> = used_symbols(circuit, transfer)
        .into_iter()
        .filter(|&id| circuit[id].nominal.is_none() && circuit[id].role != SymbolRole::Pi)
        .map(|id| format!("`{}`", circuit[id].name))
        .collect();
    let verb = if missing.len() == 1 { "has" } else { "have" };
    Err(RootsError::NoValues(super::notice::listed(missing.into_iter()), verb))
}
