//! Short formulas for roots: which few terms set each.
//!
//! With the roots in ascending order, the k-th is near −a_(k−1)/a_k when it stands alone, and a pair is
//! near the roots of a_(k−1) + a_k·s + a_(k+1)·s² (the dominant-pole approximation of the textbooks).
//! Each coefficient is cut to its largest terms at the nominal values. Among such forms the shortest
//! within [`GOOD`] of the exact root is taken, else the best one within [`TOLERABLE`], else none.

use num_complex::Complex;
use num_traits::ToPrimitive;

use super::find::Root;
use crate::algebra::{Fraction, Polynomial, Var};
use crate::elimination::symbol_of;

/// The error with which the shortest form is taken.
pub const GOOD: f64 = 0.05;

/// The largest error that is shown.
pub const TOLERABLE: f64 = 0.10;

/// A short formula for a root or a pair.
#[derive(Clone, Debug, PartialEq)]
pub struct Approximation {
    /// The formula.
    pub form: Form,
    /// Of the root; for a pair the larger one of those of ω0 and Q.
    pub relative_error: f64,
    /// What makes the dropped terms small, the most critical first; at most three.
    pub conditions: Vec<Condition>,
}

/// The shape of an approximation.
#[derive(Clone, Debug, PartialEq)]
pub enum Form {
    /// The root itself.
    Real(Fraction),
    /// A pair.
    Pair(Box<Pair>),
}

/// What is known of a pair.
#[derive(Clone, Debug, PartialEq)]
pub struct Pair {
    /// The square of ω0.
    pub w0_squared: Fraction,
    /// The square of Q; none on the imaginary axis.
    pub q_squared: Option<Fraction>,
    /// 1/(ω0·Q) and 1/ω0²: the pair are the roots of 1 + s·(first) + s²·(second).
    pub quadratic: [Fraction; 2],
}

/// `large` is much larger than `small`.
#[derive(Clone, Debug, PartialEq)]
pub struct Condition {
    /// What was kept.
    pub large: Polynomial,
    /// What was dropped against it; nothing in common with `large`.
    pub small: Polynomial,
    /// large/small at the nominal values.
    pub ratio: f64,
}

/// Parts of the largest term of a coefficient below which terms are dropped; 0 keeps all.
const CUTS: [f64; 6] = [0.999_999, 0.3, 0.1, 0.03, 0.01, 0.0];

/// A coefficient of a power of `s`, and its terms with their values, the largest first.
struct Coefficient {
    terms: Vec<(Polynomial, f64)>,
}

impl Coefficient {
    fn new(polynomial: &Polynomial, symbols: &[f64]) -> Self {
        let mut terms: Vec<(Polynomial, f64)> = polynomial
            .terms()
            .map(|(powers, coefficient)| {
                let value =
                    powers.clone().fold(coefficient.to_f64().unwrap_or(f64::NAN), |v, p| {
                        v * symbol_of(p.0).map_or(1.0, |id| symbols[id.0 as usize]).powi(p.1 as i32)
                    });
                (Polynomial::monomial(powers, coefficient), value)
            })
            .collect();
        terms.sort_by(|a, b| b.1.abs().total_cmp(&a.1.abs()));
        Self { terms }
    }

    /// How many terms a cut keeps.
    fn kept(&self, cut: f64) -> usize {
        let largest = self.terms.first().map_or(0.0, |term| term.1.abs());
        self.terms.iter().take_while(|term| term.1.abs() >= cut * largest).count()
    }

    fn sum(&self, count: usize) -> (Polynomial, f64) {
        let mut sum = (Polynomial::zero(), 0.0);
        for (term, value) in &self.terms[..count] {
            sum.0 += term;
            sum.1 += value;
        }
        sum
    }

    /// The largest kept term against the largest dropped one.
    fn condition(&self, kept: usize) -> Option<Condition> {
        let (large, small) = (self.terms.first()?, self.terms.get(kept)?);
        let ratio = Fraction::new(&large.0, &small.0)?;
        Some(Condition {
            large: positive(ratio.numerator()),
            small: positive(ratio.denominator()),
            ratio: (large.1 / small.1).abs(),
        })
    }
}

fn positive(polynomial: &Polynomial) -> Polynomial {
    if polynomial.is_negative() { -polynomial } else { polynomial.clone() }
}

/// For each root its approximation; the roots are those of the polynomial in `s` at these values of
/// the symbols, ascending.
pub(super) fn all(
    polynomial: &Polynomial,
    symbols: &[f64],
    roots: &[Root],
) -> Vec<Option<Approximation>> {
    let parts = polynomial.coefficients(Var::S);
    let degree: usize = roots.iter().map(|root| root.multiplicity as usize).sum();
    // Not where roots have cancelled at the nominal values: the coefficients belong to others then.
    if parts.len() != degree + 1 {
        return vec![None; roots.len()];
    }
    let coefficients: Vec<Coefficient> =
        parts.iter().map(|part| Coefficient::new(part, symbols)).collect();
    let mut found: Vec<Option<Approximation>> = Vec::with_capacity(roots.len());
    let mut below = 0;
    for (index, root) in roots.iter().enumerate() {
        let simple = root.multiplicity == 1 && root.value.norm() > 0.0;
        let approximation = if !simple {
            None
        } else if root.is_real() {
            real(&coefficients[below..below + 2], root)
        } else if root.value.im > 0.0 {
            coefficients.get(below..below + 3).and_then(|three| pair(three, root))
        } else {
            // The conjugate stands before it.
            index.checked_sub(1).and_then(|before| found[before].clone())
        };
        found.push(approximation);
        below += root.multiplicity as usize;
    }
    found
}

/// The first good one of the forms for growing numbers of terms, else the best tolerable one.
fn best(
    coefficients: &[Coefficient],
    form: impl Fn(&[(Polynomial, f64)]) -> Option<(Form, f64)>,
) -> Option<Approximation> {
    let mut best: Option<Approximation> = None;
    for cut in CUTS {
        let kept: Vec<usize> = coefficients.iter().map(|c| c.kept(cut)).collect();
        let sums: Vec<(Polynomial, f64)> =
            coefficients.iter().zip(&kept).map(|(c, &count)| c.sum(count)).collect();
        let Some((form, relative_error)) = form(&sums) else { continue };
        let better = best.as_ref().is_none_or(|best| relative_error < best.relative_error);
        if relative_error <= TOLERABLE && better {
            let mut conditions: Vec<Condition> = Vec::new();
            for (coefficient, &count) in coefficients.iter().zip(&kept) {
                let condition = coefficient.condition(count);
                conditions.extend(condition.filter(|c| !conditions.contains(c)));
            }
            conditions.sort_by(|a, b| a.ratio.total_cmp(&b.ratio));
            conditions.truncate(3);
            best = Some(Approximation { form, relative_error, conditions });
            if relative_error <= GOOD {
                break;
            }
        }
    }
    best
}

fn real(coefficients: &[Coefficient], root: &Root) -> Option<Approximation> {
    best(coefficients, |sums| {
        let [(below, low), (above, high)] = sums else { return None };
        let value = -low / high;
        let form = Form::Real(Fraction::new(&-below, above)?);
        Some((form, (value / root.value.re - 1.0).abs()))
    })
}

fn pair(coefficients: &[Coefficient], root: &Root) -> Option<Approximation> {
    let w0 = root.value.norm();
    // The sign of the middle coefficient tells the half plane, which must be the right one.
    let sign = -root.value.re.signum();
    best(coefficients, |sums| {
        let [(low, a), (middle, b), (high, c)] = sums else { return None };
        let w0_squared = a / c;
        if w0_squared.is_nan() || w0_squared <= 0.0 {
            return None;
        }
        let mut error = (w0_squared.sqrt() / w0 - 1.0).abs();
        let q_squared = match root.q() {
            None if middle.is_zero() => None,
            None => return None,
            Some(_) if middle.is_zero() || (b / a).signum() != sign => return None,
            Some(q) => {
                error = error.max(((a * c).sqrt() / b.abs() / q - 1.0).abs());
                Some(Fraction::new(&(low * high), &(middle * middle))?)
            }
        };
        let pair = Pair {
            w0_squared: Fraction::new(low, high)?,
            q_squared,
            quadratic: [Fraction::new(middle, low)?, Fraction::new(high, low)?],
        };
        Some((Form::Pair(Box::new(pair)), error))
    })
}

/// The root that a form stands for at these values, the upper one of a pair; for tests and plots.
pub fn value_of(form: &Form, symbols: &[f64]) -> Complex<f64> {
    let value = |fraction: &Fraction| {
        let of = |part: &Polynomial| {
            let terms = Coefficient::new(part, symbols).terms;
            terms.iter().map(|term| term.1).sum::<f64>()
        };
        of(fraction.numerator()) / of(fraction.denominator())
    };
    match form {
        Form::Real(fraction) => Complex::new(value(fraction), 0.0),
        Form::Pair(pair) => {
            let [b, c] = &pair.quadratic;
            let (b, c) = (Complex::new(value(b), 0.0), Complex::new(value(c), 0.0));
            let discriminant = (b * b - c * 4.0).sqrt();
            (discriminant - b) / (c * 2.0)
        }
    }
}
