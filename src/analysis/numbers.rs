//! The formula with numbers put in.

use num_traits::{One, Zero};

use super::judged::Judged;
use super::notice::Notice;
use crate::algebra::Univariate;
use crate::circuit::{Circuit, Number, Transfer};
use crate::numeric::{Assignment, Candidate, Origin};

/// Numerator and denominator as polynomials in `s` with exact coefficients, lowest power first, in
/// lowest terms; the lowest coefficient of the denominator that is not 0 is 1.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct NumericForm {
    /// Coefficients above.
    pub numerator: Vec<Number>,
    /// Coefficients below.
    pub denominator: Vec<Number>,
}

/// The form at nominal values; `None` where a value is missing, the work is too much, or the answer
/// is not finite there (which is said).
pub(crate) fn nominal(
    circuit: &Circuit,
    transfer: &Transfer,
    judged: &Judged<'_>,
    notices: &mut Vec<Notice>,
) -> Option<NumericForm> {
    let assignment = Assignment::for_transfer(circuit, transfer, 0);
    if assignment.origin != Origin::Nominal {
        return None;
    }
    let (numerator, denominator) = judged.coefficients(&assignment.numbers)?;
    let mut say = |code, message: &str| {
        notices.push(Notice { code, message: message.to_owned(), line: 0 });
    };
    if denominator.iter().all(Zero::is_zero) {
        say(
            "no-nominal-value",
            "the answer has no finite value at the nominal values; it was checked at random values",
        );
        return None;
    }
    let (n, d) = (Univariate::from_rationals(&numerator), Univariate::from_rationals(&denominator));
    let before = d.degree();
    let (n, d) = Univariate::lowest_terms(&n, &d)?;
    if d.degree() < before {
        say(
            "cancelled-at-nominal",
            "at the nominal values a pole and a zero coincide; they are cancelled in the numeric form",
        );
    }
    let coefficients = |of: &Univariate| -> Vec<Number> {
        (0..of.numerators().len()).map(|power| of.coefficient(power)).collect()
    };
    let (numerator, denominator) = (coefficients(&n), coefficients(&d));
    let scale = denominator.iter().find(|c| !c.is_zero()).cloned().unwrap_or_else(Number::one);
    let scaled = |of: Vec<Number>| of.into_iter().map(|c| c / &scale).collect();
    Some(NumericForm { numerator: scaled(numerator), denominator: scaled(denominator) })
}
