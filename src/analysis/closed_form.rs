//! From the eliminated network to the closed form: expanded in lowest terms where it is short enough,
//! else nested.

use num_bigint::BigUint;
use num_traits::Zero;

use crate::algebra::{Fraction, Polynomial, Var};
use crate::elimination::{Elimination, Nested, TermCounts};

/// An exact transfer function.
#[derive(Clone, Debug)]
pub enum ClosedForm {
    /// One fraction in lowest terms.
    Expanded(Fraction),
    /// Named sub-expressions, where the expansion would be too long.
    Nested(Nested),
}

/// The closed form and its size.
#[derive(Clone, Debug)]
pub struct Closed {
    /// The form.
    pub form: ClosedForm,
    /// Terms by powers of `s`: of the fraction, or what its expansion would have.
    pub counts: TermCounts,
}

/// Terms of a count, altogether.
pub fn total(counts: &TermCounts) -> BigUint {
    counts
        .numerator
        .iter()
        .chain(&counts.denominator)
        .fold(BigUint::zero(), |sum, count| sum + count)
}

/// The closed form of an elimination; expanded when it has at most `max_terms` terms.
///
/// Where terms can meet, the expansion is tried up to thirty times as many products, since
/// what is left after they met is what counts.
pub(crate) fn close(elimination: &Elimination, max_terms: usize) -> Closed {
    let counts = elimination.count_terms();
    if elimination.is_zero() {
        return Closed { form: ClosedForm::Expanded(Fraction::zero()), counts };
    }
    let products = total(&counts);
    let allowed = if counts.exact { max_terms } else { max_terms.saturating_mul(30) };
    if products <= BigUint::from(allowed) {
        let (numerator, denominator) = elimination.expand();
        if let Some(fraction) = Fraction::new(&numerator, &denominator) {
            let counts = counted(&fraction);
            if fraction.numerator().len() + fraction.denominator().len() <= max_terms {
                return Closed { form: ClosedForm::Expanded(fraction), counts };
            }
            return Closed { form: ClosedForm::Nested(elimination.nested()), counts };
        }
    }
    Closed { form: ClosedForm::Nested(elimination.nested()), counts: without_s(counts) }
}

/// Terms of a fraction by powers of its first variable.
pub(crate) fn counted(fraction: &Fraction) -> TermCounts {
    let by_power = |polynomial: &Polynomial| {
        polynomial.coefficients(Var::S).iter().map(|part| BigUint::from(part.len())).collect()
    };
    TermCounts {
        numerator: by_power(fraction.numerator()),
        denominator: by_power(fraction.denominator()),
        exact: true,
    }
}

/// A power of `s` that numerator and denominator share cancels.
fn without_s(mut counts: TermCounts) -> TermCounts {
    let lowest = |of: &[BigUint]| of.iter().take_while(|count| count.is_zero()).count();
    let common = lowest(&counts.numerator).min(lowest(&counts.denominator));
    counts.numerator.drain(..common);
    counts.denominator.drain(..common);
    counts
}
