//! Arithmetic modulo 61-bit primes: where identities are tested and greatest common divisors found.
//!
//! Results modulo a prime are hints; whoever uses them verifies exactly. Sample points come from a
//! seeded generator, so that every run takes the same path.

mod dense;
mod field;
mod random;
mod splitting;

pub use dense::Dense;
pub use field::{Field, primes};
pub use random::Random;
