//! Poles and zeros: where they are, with certain bounds, and which elements set each.
//!
//! The roots are those of the exact numeric coefficients ([`find()`]); nothing is rounded before the
//! root finder, and every disc that it gives holds exactly one root. Sensitivities come from the diagram
//! of the elimination.
//!
//! May use: the rest of [`crate::analysis`], [`crate::circuit`], [`crate::algebra`],
//! [`crate::elimination`]. Prints nothing.

mod approximate;
mod cancelled;
mod error;
mod find;
mod fixed;
mod frequency;
mod isolate;
mod locus;
mod monte_carlo;
mod preferred;
mod sensitivity;
mod solve;
mod stability;
mod tolerance;
mod values;

pub use approximate::{Approximation, Condition, Form, GOOD, Pair, TOLERABLE, value_of};
pub use cancelled::Cancelled;
pub use error::RootsError;
pub use find::{Root, find};
pub use frequency::{BandEdge, DcGain};
pub use locus::{Locus, locus};
pub(crate) use monte_carlo::Toleranced;
pub use monte_carlo::{Chance, Spread, monte_carlo};
pub use preferred::Series;
pub use sensitivity::{SET_BY_SHARE, Sensitivity};
pub use solve::{Preferred, Quantity, Solution, Unreachable, solve};
pub use stability::{Conditions, Verdict, is_hurwitz, verdict};
pub use tolerance::Shift;
pub use values::Nominal;

use num_traits::{Signed, ToPrimitive};

use super::{Entry, Notice};
use crate::algebra::{Polynomial, Univariate};
use crate::circuit::{Circuit, SymbolId, SymbolRole};
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
    /// H(0), where it is finite and not 0.
    pub dc_gain: Option<DcGain>,
    /// Where the magnitude has fallen to 1/√2.
    pub band_edge: Option<BandEdge>,
    /// Where the poles lie, exactly.
    pub verdict: Verdict,
    /// What keeps them in the left half plane; none for orders above four and long formulas.
    pub conditions: Option<Conditions>,
    /// Poles and zeros that coincide at the nominal values only.
    pub cancelled: Vec<Cancelled>,
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
    /// A short formula.
    pub approximation: Option<Approximation>,
    /// What the tolerances do to the size of the root.
    pub shift: Option<Shift>,
    /// What they do to the Q of a pair.
    pub q_shift: Option<Shift>,
}

impl RootFacts {
    /// (x/Q)·∂Q/∂x for a pair off the imaginary axis: tan(arg p)·Im S, since Q = 1/(2·|cos arg p|).
    pub fn q_sensitivity(&self, one: &Sensitivity) -> Option<f64> {
        self.root.q()?;
        Some(self.root.value.im / self.root.value.re * one.value.im)
    }
}

/// Finds and describes the roots of a result, whose nominal values are given with it.
///
/// # Errors
/// A function that is not finite, and bounds of the work.
pub fn analyse(
    circuit: &Circuit,
    entry: &Entry,
    nominal: &Nominal<'_>,
) -> Result<RootReport, RootsError> {
    let (numerator, denominator) = match &entry.numeric {
        Some(numeric) => (
            Univariate::from_rationals(&numeric.numerator),
            Univariate::from_rationals(&numeric.denominator),
        ),
        None if nominal.parts().is_some() => nominal.with(&[]).ok_or(RootsError::NotFinite)?,
        None => {
            let finite = !entry.notices.iter().any(|notice| notice.code == "no-nominal-value");
            return Err(if finite { RootsError::TooLarge } else { RootsError::NotFinite });
        }
    };
    let parts = nominal.parts();
    let describer = Describer { circuit, nominal };
    let poles = describer.all(&denominator, parts.map(|parts| parts[1]), Side::Poles)?;
    let zeros = describer.all(&numerator, parts.map(|parts| parts[0]), Side::Zeros)?;
    let gain = if numerator.is_zero() {
        0.0
    } else {
        let ratio = numerator.leading_coefficient() / denominator.leading_coefficient();
        ratio.to_f64().unwrap_or(f64::NAN)
    };
    // The conditions take every symbol as positive.
    let all_positive = nominal.floats().iter().all(|value| *value > 0.0);
    let conditions = parts.filter(|_| all_positive).and_then(|parts| {
        stability::conditions(parts[1], |part| nominal.value(part).is_positive())
    });
    let cancelled = cancelled::find_cancelled(nominal, &entry.notices)?;
    let mut notices = Vec::new();
    if cancelled.iter().any(|pair| pair.root.value.re >= 0.0) {
        notices.push(Notice {
            code: "hidden-pole",
            message:
                "a pole that is not in the left half plane is cancelled by a zero: the function \
                      does not show it, the circuit still has it"
                    .to_owned(),
            line: 0,
        });
    }
    Ok(RootReport {
        dc_gain: frequency::dc_gain(&numerator, &denominator, nominal)
            .map(|gain| DcGain { sensitivities: describer.named(gain.sensitivities), ..gain }),
        band_edge: frequency::band_edge(&numerator, &denominator, nominal)
            .map(|edge| BandEdge { sensitivities: describer.named(edge.sensitivities), ..edge }),
        verdict: verdict(&denominator),
        conditions,
        poles,
        zeros,
        gain,
        cancelled,
        notices,
    })
}

struct Describer<'a> {
    circuit: &'a Circuit,
    nominal: &'a Nominal<'a>,
}

impl Describer<'_> {
    fn all(
        &self,
        polynomial: &Univariate,
        form: Option<&Polynomial>,
        side: Side,
    ) -> Result<Vec<RootFacts>, RootsError> {
        let roots = find(polynomial)?;
        let approximations = match form {
            Some(form) => approximate::all(form, self.nominal.floats(), &roots),
            None => vec![None; roots.len()],
        };
        let facts = roots.into_iter().zip(approximations);
        Ok(facts
            .map(|(root, approximation)| {
                let sensitivities = self.sensitivities(&root, side);
                self.describe(root, approximation, sensitivities)
            })
            .collect())
    }

    fn sensitivities(&self, root: &Root, side: Side) -> Option<Vec<Sensitivity>> {
        if root.multiplicity > 1 {
            return None;
        }
        self.named(sensitivity::of_root(self.nominal, root.value, side))
    }

    fn describe(
        &self,
        root: Root,
        approximation: Option<Approximation>,
        sensitivities: Option<Vec<Sensitivity>>,
    ) -> RootFacts {
        let set_by = sensitivities.as_deref().map(sensitivity::set_by).unwrap_or_default();
        let mut facts =
            RootFacts { root, sensitivities, set_by, approximation, shift: None, q_shift: None };
        if let Some(all) = &facts.sensitivities {
            facts.shift = tolerance::shift(self.circuit, all, |one| one.value.re);
            if facts.root.q().is_some() {
                let q = |one: &Sensitivity| facts.q_sensitivity(one).unwrap_or(0.0);
                facts.q_shift = tolerance::shift(self.circuit, all, q);
            }
        }
        facts
    }

    /// Without the number π, which nobody can change.
    fn named(&self, all: Option<Vec<Sensitivity>>) -> Option<Vec<Sensitivity>> {
        let mut all = all?;
        all.retain(|one| self.circuit[one.symbol].role != SymbolRole::Pi);
        Some(all)
    }
}
