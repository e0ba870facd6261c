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

/// How long a closed form is, written out.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Length {
    /// Terms of numerator and denominator together.
    pub terms: BigUint,
    /// False where terms can meet (shared symbols, numbers) and were not expanded: then the number is
    /// before that.
    pub exact: bool,
    /// By powers of `s`, where the fraction was made.
    by_power: Option<TermCounts>,
}

impl Length {
    pub(crate) fn of(fraction: &Fraction) -> Self {
        let terms = fraction.numerator().len() + fraction.denominator().len();
        Self { terms: BigUint::from(terms), exact: true, by_power: Some(counted(fraction)) }
    }
}

/// The closed form and its size.
#[derive(Clone, Debug)]
pub(crate) struct Closed {
    pub(crate) form: ClosedForm,
    /// Terms of the fraction, or what its expansion would have.
    pub(crate) length: Length,
}

impl Closed {
    fn expanded(fraction: Fraction) -> Self {
        Self { length: Length::of(&fraction), form: ClosedForm::Expanded(fraction) }
    }
}

/// The closed form of an elimination; expanded when it has at most `max_terms` terms.
///
/// Where terms can meet, the expansion is tried up to thirty times as many products, since
/// what is left after they met is what counts.
pub(crate) fn close(elimination: &Elimination, max_terms: usize) -> Closed {
    if elimination.is_zero() {
        return Closed::expanded(Fraction::zero());
    }
    let products = elimination.count_all_terms();
    let exact = elimination.is_distinct();
    let allowed = if exact { max_terms } else { max_terms.saturating_mul(30) };
    if products <= BigUint::from(allowed) {
        let (numerator, denominator) = elimination.expand();
        if let Some(fraction) = Fraction::new(&numerator, &denominator) {
            let closed = Closed::expanded(fraction);
            if closed.length.terms <= BigUint::from(max_terms) {
                return closed;
            }
            return Closed { form: ClosedForm::Nested(elimination.nested()), ..closed };
        }
    }
    let form = ClosedForm::Nested(elimination.nested());
    Closed { form, length: Length { terms: products, exact, by_power: None } }
}

/// Terms by powers of `s`; none where neither the fraction was made nor a diagram is at hand.
///
/// # Cost
/// For a nested form one pass over the diagram with a large integer for each power of `s`.
pub(crate) fn terms_by_power(
    length: &Length,
    elimination: Option<&Elimination>,
) -> Option<TermCounts> {
    let counted = length.by_power.clone();
    counted.or_else(|| elimination.map(|elimination| without_s(elimination.count_terms())))
}

/// Terms of a fraction by powers of its first variable.
fn counted(fraction: &Fraction) -> TermCounts {
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
