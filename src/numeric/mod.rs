//! The witnesses: solves that share no code with the derivation that they judge.
//!
//! May use: [`crate::circuit`] only. In particular it may use neither [`crate::algebra`] nor
//! [`crate::elimination`]: a witness must not share code with what it judges.
//!
//! All of them solve the modified nodal equations (Ho, Ruehli & Brennan 1975) of one transfer:
//! node voltages and the currents that are needed. [`exact()`] does it over Q\[s\] without
//! fractions, [`modular_value`] in a prime field, [`response`] in complex floating point with an
//! error bound for each answer. [`crosscheck()`] holds a derived result against them.

mod crosscheck;
mod exact;
mod field;
mod floating;
mod limit;
mod lower;
mod modular;
mod network;
mod polynomial;
mod sparse;
mod values;

#[cfg(test)]
mod testing;
#[cfg(test)]
mod tests;

pub use crosscheck::{Candidate, ExactEvidence, ExactKind, FloatingEvidence, Report, crosscheck};
pub use exact::{Fraction, exact, exact_is_affordable};
pub use field::{Additive, Complexes, Field, PrimeField, Rationals};
pub use floating::{PointAnswer, Sweep, frequencies, response};
pub use limit::{LimitValue, limit_value};
pub use lower::lowered;
pub use modular::{PRIMES, modular_value};
pub use network::grounded_nodes;
pub(crate) use values::pi as exact_pi;
pub use values::{Assignment, Origin, evaluate, used_symbols};

/// Why a witness has no answer.
#[derive(Clone, Debug, PartialEq, Eq, thiserror::Error)]
#[non_exhaustive]
pub enum NumericError {
    /// A value has a denominator that is zero at the numbers put in.
    #[error("the value of `{element}` divides by zero at these numbers")]
    DivisionByZero {
        /// The element whose value it is.
        element: String,
    },
    /// The network equations have no solution, or more than one.
    #[error("the network equations have no unique solution")]
    Singular,
    /// A voltage between two parts that no current joins.
    #[error(
        "the voltage from `{plus}` to `{minus}` is not determined: nothing joins the two parts; \
         connect them, or ask for a voltage inside one of them"
    )]
    Undetermined {
        /// Name of the first node.
        plus: String,
        /// Name of the second node.
        minus: String,
    },
    /// The lower quantity of the ratio is zero.
    #[error("the lower quantity of the ratio is zero")]
    ZeroDenominator,
    /// A node, element or symbol that the circuit does not have, or a drive that is no source.
    #[error("the question does not fit the circuit: {0}")]
    Malformed(&'static str),
    /// The exact solve would take too long; see [`exact_is_affordable`].
    #[error("the circuit has too many unknowns for the exact solve over Q[s]")]
    TooLarge,
}

impl NumericError {
    /// A short name for programs.
    pub fn code(&self) -> &'static str {
        match self {
            Self::DivisionByZero { .. } => "division_by_zero",
            Self::Singular => "singular",
            Self::Undetermined { .. } => "undetermined",
            Self::ZeroDenominator => "zero_denominator",
            Self::Malformed(_) => "malformed",
            Self::TooLarge => "too_large",
        }
    }
}
