//! All roots of a polynomial with rational coefficients: multiplicities and symmetry exactly, places
//! with certain bounds.
//!
//! A power of `s` is split off, the rest is split into square-free factors (Yun 1976), and each of
//! these into the part whose roots lie symmetrically about the imaginary axis (the common divisor
//! of its even and its odd part, as a polynomial in s²) and the others. So a multiplicity is never
//! guessed, and a root on the imaginary axis has a real part of exactly 0.

use num_bigint::BigInt;
use num_complex::Complex;
use num_traits::Zero;

use super::RootsError;
use super::isolate::{self, Disc, Failure};
use crate::algebra::Univariate;

/// A root of a polynomial.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Root {
    /// Where it is. The imaginary part is 0 exactly when the root is real, the real part exactly when
    /// it lies on the imaginary axis; conjugates are exact.
    pub value: Complex<f64>,
    /// How often.
    pub multiplicity: u32,
    /// The exact root lies within this distance of `value`.
    pub error_bound: f64,
}

impl Root {
    /// Whether the root is real; certain.
    pub fn is_real(&self) -> bool {
        self.value.im == 0.0
    }

    /// |p|/(2·|Re p|); none for real roots and on the imaginary axis.
    pub fn q(&self) -> Option<f64> {
        let on_axis = self.value.re == 0.0 || self.is_real();
        (!on_axis).then(|| self.value.norm() / (2.0 * self.value.re.abs()))
    }
}

/// The different roots by size, conjugates together with the positive imaginary part first.
///
/// # Errors
/// Roots that are closer together than a part in 10^300, or beyond 10^±290.
pub fn find(polynomial: &Univariate) -> Result<Vec<Root>, RootsError> {
    let numerators = polynomial.numerators();
    let zeros = numerators.iter().take_while(|c| c.is_zero()).count();
    let mut roots = Vec::new();
    if zeros > 0 && zeros < numerators.len() {
        let multiplicity = u32::try_from(zeros).unwrap_or(u32::MAX);
        roots.push(Root { value: Complex::zero(), multiplicity, error_bound: 0.0 });
    }
    let rest = Univariate::from_integers(numerators[zeros.min(numerators.len())..].iter().cloned());
    for (factor, multiplicity) in rest.square_free() {
        let (symmetric, others) = split(&factor);
        let mut take = |value: Complex<f64>, error_bound: f64| {
            roots.push(Root { value, multiplicity, error_bound });
        };
        for disc in isolated(others.numerators())? {
            take(disc.middle, disc.radius);
        }
        for disc in isolated(symmetric.numerators())? {
            for (value, error_bound) in square_roots(&disc) {
                take(value, error_bound);
            }
        }
    }
    roots.sort_by(|a, b| {
        let key = |root: &Root| (root.value.norm(), root.value.re, -root.value.im);
        let (a, b) = (key(a), key(b));
        a.0.total_cmp(&b.0).then(a.1.total_cmp(&b.1)).then(a.2.total_cmp(&b.2))
    });
    Ok(roots)
}

fn isolated(coefficients: &[BigInt]) -> Result<Vec<Disc>, RootsError> {
    isolate::isolate(coefficients).map_err(|failure| match failure {
        Failure::TooClose => RootsError::TooClose,
        Failure::OutOfRange => RootsError::OutOfRange,
    })
}

/// The factor g(s²) of the roots that lie symmetrically about the imaginary axis, as g, and the rest.
pub(super) fn split(polynomial: &Univariate) -> (Univariate, Univariate) {
    let half = |parity: usize| {
        Univariate::from_integers(polynomial.numerators().iter().skip(parity).step_by(2).cloned())
    };
    let (even, odd) = (half(0), half(1));
    let common = even.gcd(&odd);
    if common.is_constant() {
        return (Univariate::one(), polynomial.clone());
    }
    let squared = common.numerators().iter().flat_map(|c| [c.clone(), BigInt::zero()]);
    let rest = polynomial.divide_exact(&Univariate::from_integers(squared));
    match rest {
        Some(rest) => (common, rest.primitive_part()),
        None => (Univariate::one(), polynomial.clone()),
    }
}

/// The roots of s² = x for x in the disc: both for a real x, the one of the two opposite ones with
/// the sign of the half plane of x first for a complex x (its conjugate gives the others).
fn square_roots(disc: &Disc) -> [(Complex<f64>, f64); 2] {
    let x = disc.middle;
    let root = if x.im == 0.0 {
        let size = x.re.abs().sqrt();
        if x.re < 0.0 { Complex::new(0.0, size) } else { Complex::new(size, 0.0) }
    } else if x.im > 0.0 {
        x.sqrt()
    } else {
        // From the conjugate, so that pairs are exact.
        x.conj().sqrt().conj()
    };
    // √(1 + e) is within 0.51·|e| of 1 for the small e there are here; the root itself rounds.
    let relative = 0.51 * disc.radius / x.norm() + 6.0 * f64::EPSILON;
    let bound = relative * root.norm();
    // Without the sign that a zero may have.
    let opposite = Complex::new(0.0 - root.re, 0.0 - root.im);
    [(root, bound), (opposite, bound)]
}

#[cfg(test)]
mod tests {
    use super::*;

    fn polynomial(coefficients: &[i64]) -> Univariate {
        Univariate::from_integers(coefficients.iter().copied())
    }

    fn check(coefficients: &[i64], expected: &[(f64, f64, u32)]) {
        let roots = find(&polynomial(coefficients)).expect("roots");
        let found: Vec<_> =
            roots.iter().map(|root| (root.value.re, root.value.im, root.multiplicity)).collect();
        assert_eq!(found.len(), expected.len(), "{found:?}");
        for (root, &(re, im, multiplicity)) in roots.iter().zip(expected) {
            let distance = (root.value - Complex::new(re, im)).norm();
            assert!(distance <= root.error_bound + 1e-15, "{root:?} {re} {im}");
            assert_eq!(root.multiplicity, multiplicity);
            assert_eq!((root.value.re == 0.0, root.value.im == 0.0), (re == 0.0, im == 0.0));
        }
    }

    #[test]
    fn multiplicities_and_axes_are_exact() {
        check(&[7], &[]);
        check(&[0, 0, 3], &[(0.0, 0.0, 2)]);
        check(&[1, 2, 1], &[(-1.0, 0.0, 2)]);
        check(&[1, 0, 2, 0, 1], &[(0.0, 1.0, 2), (0.0, -1.0, 2)]);
        // (s² + 1)(s + 2)
        check(&[2, 1, 2, 1], &[(0.0, 1.0, 1), (0.0, -1.0, 1), (-2.0, 0.0, 1)]);
        // s² − 4
        check(&[-4, 0, 1], &[(-2.0, 0.0, 1), (2.0, 0.0, 1)]);
        // s⁴ + 4 = (s² + 2s + 2)(s² − 2s + 2)
        let all = [(-1.0, 1.0, 1), (-1.0, -1.0, 1), (1.0, 1.0, 1), (1.0, -1.0, 1)];
        check(&[4, 0, 0, 0, 1], &all);
        // s·(s + 1)³
        check(&[0, 1, 3, 3, 1], &[(0.0, 0.0, 1), (-1.0, 0.0, 3)]);
    }

    #[test]
    fn quality_factors() {
        let of = |coefficients: &[i64]| find(&polynomial(coefficients)).expect("roots")[0].q();
        assert_eq!(of(&[1, 1]), None);
        assert_eq!(of(&[1, 0, 1]), None);
        let q = of(&[1, 1, 1]).expect("a pair");
        assert!((q - 1.0).abs() < 1e-15);
    }
}
