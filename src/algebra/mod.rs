//! Exact algebra: integers, monomials, multivariate polynomials over **Z**, rational functions,
//! polynomials in `s` over **Q**, greatest common divisors, and arithmetic modulo word-sized primes.
//!
//! May use: nothing of this crate. Knows no circuits, no names and no units: variables are numbers.

mod factor;
mod fraction;
mod gcd;
mod integer;
pub mod modular;
mod monomial;
mod polynomial;
mod univariate;

pub use factor::{Factors, factor};
pub use fraction::Fraction;
pub use gcd::{gcd, gcd_all, gcd_cofactors, subresultant_gcd};
pub use monomial::Var;
pub use polynomial::Polynomial;
pub use univariate::Univariate;
